//! The days of the past with what the site file applies of the learned.

use std::collections::BTreeMap;

use chrono::NaiveDate;
use rayon::prelude::*;

use crate::mix::{Perturbed, draw_levels, groups, levels, release};
use crate::record::{Pair, Row, Score};
use crate::site::Site;
use crate::withdrawal::CrestForm;

use super::days::Known;

/// A day as it is computed with what is applied.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Applied {
    pub(super) expected_c: f64,
    pub(super) band_c: Option<(f64, f64)>,
    pub(super) expected_mg_l: Option<f64>,
    pub(super) band_mg_l: Option<(f64, f64)>,
}

/// Every day that could be computed, by date; none where nothing is applied.
pub(super) fn applied(
    site: &Site,
    days: &[Known],
    pairs: &BTreeMap<NaiveDate, &Pair>,
) -> BTreeMap<NaiveDate, Applied> {
    if site.learned().is_none() {
        return BTreeMap::new();
    }
    let groups = groups(site);
    let one = |known: &Known| {
        let age_days = pairs.get(&known.date)?.age_days as f64;
        let (setting, profile) = (known.setting.as_ref()?, known.profile.as_deref()?);
        let levels = levels(site, &groups, setting, profile.pool_m, 0.5, CrestForm::Overflow);
        let drawn = draw_levels(&profile.column, &levels, site.zone_factor());
        let release = release(&drawn)?.aerated(site, &drawn, 0.5);
        let spread = Perturbed::new(site, profile, Some(age_days)).spread(site, &groups, setting, &release);
        let applied = Applied {
            expected_c: release.temperature_c,
            band_c: spread.band_c(),
            expected_mg_l: release.oxygen_below_mg_l,
            band_mg_l: spread.band_oxygen_mg_l(),
        };
        Some((known.date, applied))
    };
    days.par_iter().filter_map(one).collect()
}

/// The scores of pairs with what is applied; `None` where nothing is.
pub(super) fn scored(pairs: &[Pair], applied: &BTreeMap<NaiveDate, Applied>) -> Option<(Score, Score)> {
    let rows = pairs.iter().filter_map(|pair| {
        let of = applied.get(&pair.date)?;
        Some((
            Row { expected: Some(of.expected_c), band: of.band_c, ..pair.temperature_row() },
            Row { expected: of.expected_mg_l, band: of.band_mg_l, ..pair.oxygen_row() },
        ))
    });
    let (warmth, breath): (Vec<Row>, Vec<Row>) = rows.unzip();
    (!applied.is_empty()).then(|| (Score::of(&warmth), Score::of(&breath)))
}
