//! What was learned and is applied, and the release without it.

use std::collections::BTreeMap;

use serde::Serialize;

use crate::mix::{Blend, Spread, groups};
use crate::site::Site;
use crate::tasks::learned::Without;

use super::ends;

/// Applied values; null where there is none.
#[derive(Serialize)]
pub(super) struct LearnedJson {
    bias_c: Option<f64>,
    /// By the name of the first outlet of each level.
    by_level_c: BTreeMap<String, f64>,
    zone_factor: Option<f64>,
    zone_range: Option<[f64; 2]>,
    oxygen_gain_mg_l: Option<f64>,
    release_c: Option<f64>,
    release_mg_l: Option<f64>,
    window: Option<[String; 2]>,
    n: usize,
}

/// The release with nothing learned.
#[derive(Serialize)]
pub(super) struct PlainJson {
    temperature_c: f64,
    oxygen_mg_l: Option<f64>,
    band_c: Option<[f64; 2]>,
    band_oxygen_mg_l: Option<[f64; 2]>,
}

/// What is applied.
pub(super) fn applied(site: &Site) -> Option<LearnedJson> {
    let learned = site.learned()?;
    let groups = groups(site);
    let by_level_c = learned.by_level_c.iter().filter_map(|(level, bias_c)| {
        Some((site.outlets.get(*groups.get(*level)?.first()?)?.name.clone(), *bias_c))
    });
    Some(LearnedJson {
        bias_c: learned.bias_c,
        by_level_c: by_level_c.collect(),
        zone_factor: learned.zone_factor,
        zone_range: ends(learned.zone_range),
        oxygen_gain_mg_l: learned.oxygen_gain_mg_l,
        release_c: learned.release_c,
        release_mg_l: learned.release_mg_l,
        window: learned.window.map(|(from, to)| [from.to_string(), to.to_string()]),
        n: learned.n,
    })
}

/// A release with nothing learned.
pub(super) fn plain(release: &Blend, spread: &Spread) -> PlainJson {
    PlainJson {
        temperature_c: release.temperature_c,
        oxygen_mg_l: release.oxygen_below_mg_l,
        band_c: ends(spread.band_c()),
        band_oxygen_mg_l: ends(spread.band_oxygen_mg_l()),
    }
}

/// The same of a day.
pub(super) fn without(without: &Without) -> PlainJson {
    PlainJson {
        temperature_c: without.temperature_c,
        oxygen_mg_l: without.oxygen_mg_l,
        band_c: ends(without.spread.band_c()),
        band_oxygen_mg_l: ends(without.spread.band_oxygen_mg_l()),
    }
}
