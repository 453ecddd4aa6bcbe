//! Below the dam: what each conduit gives its water of oxygen, the blend of them, and what was learned of both.
//!
//! Methods: `docs/methods.md`, sections 5 and 9.

use std::collections::BTreeMap;

use crate::profile::Column;
use crate::site::Site;
use crate::water::Aeration;
use crate::withdrawal::{Draw, zone};

use super::blend::{Blend, Drawn, blend};
use super::levels::{Level, as_one};

impl Blend {
    /// The same release below the dam: the water of each conduit (a well's, or a direct outlet's own) is blended, gains
    /// oxygen on its way, then what was learned, and joins the others; the temperature takes on the bias that was
    /// learned. `place` is that within the range of each gain, 0 to 1. Without a gain at the site and with nothing
    /// learned nothing changes.
    #[must_use]
    pub fn aerated(self, site: &Site, drawn: &[Drawn], place: f64) -> Self {
        let warmed = match bias_c(site, drawn) {
            Some(bias_c) => Self { temperature_c: self.temperature_c + bias_c, bias_c, ..self },
            None => self,
        };
        if !gains(site) {
            return warmed;
        }
        Self { oxygen_below_mg_l: below_mg_l(site, drawn, place), ..warmed }
    }
}

/// Whether oxygen below the dam is another than that leaving the pool.
pub(super) fn gains(site: &Site) -> bool {
    site.aerates() || site.learned_gain_mg_l().is_some()
}

/// The bias that was learned of each level, by the flow of each, C.
fn bias_c(site: &Site, drawn: &[Drawn]) -> Option<f64> {
    site.learned()?;
    let (mut flow_m3s, mut carried) = (0.0, 0.0);
    for level in drawn.iter().filter(|d| d.draw.is_some()).map(|d| &d.level) {
        let bias_c = level.outlets.first().and_then(|&outlet| site.bias_c(outlet));
        flow_m3s += level.sink.flow_m3s;
        carried += level.sink.flow_m3s * bias_c?;
    }
    (flow_m3s > 0.0).then(|| carried / flow_m3s)
}

/// Oxygen below the dam, mg/L; `None` where that of any conduit is unknown.
fn below_mg_l(site: &Site, drawn: &[Drawn], place: f64) -> Option<f64> {
    // by well, then by outlet: an order that no file can change
    let mut conduits: BTreeMap<(usize, usize), Vec<(f64, Draw)>> = BTreeMap::new();
    for (level, draw) in drawn.iter().filter_map(|d| Some((&d.level, d.draw?))) {
        for (&outlet, &flow) in level.outlets.iter().zip(&level.flows_m3s) {
            let conduit = match site.outlets.get(outlet)?.well {
                Some(well) => (well, usize::MAX),
                None => (usize::MAX, outlet),
            };
            conduits.entry(conduit).or_default().push((flow, draw));
        }
    }
    let (mut flow_m3s, mut carried) = (0.0, 0.0);
    for ((well, outlet), streams) in &conduits {
        let Some(water) = blend(streams) else { continue };
        let aeration = match site.wells.get(*well) {
            Some(well) => well.aeration,
            None => site.outlets.get(*outlet).and_then(|o| o.aeration),
        };
        let oxygen = water.oxygen_mg_l?;
        let saturation = || site.saturation_below_mg_l(water.temperature_c, water.salt_g_per_kg);
        let mut gained = aeration.map_or(oxygen, |aeration| {
            aeration.at(place).below_mg_l(oxygen, saturation(), water.temperature_c)
        });
        if let Some(gain_mg_l) = site.learned_gain_mg_l() {
            gained = learned_mg_l(gained, gain_mg_l, saturation());
        }
        flow_m3s += water.flow_m3s;
        carried += water.flow_m3s * gained;
    }
    (flow_m3s > 0.0).then(|| carried / flow_m3s)
}

/// Oxygen of water with a gain that was learned, mg/L: it ends at saturation as the gain of a conduit does, and a loss
/// at none.
pub fn learned_mg_l(oxygen_mg_l: f64, gain_mg_l: f64, saturation_mg_l: f64) -> f64 {
    if gain_mg_l < 0.0 {
        return (oxygen_mg_l + gain_mg_l).max(0.0);
    }
    Aeration::Gain(gain_mg_l).below_mg_l(oxygen_mg_l, saturation_mg_l, 0.0)
}

/// Drawn levels, each of an overlapping group with the water that the group draws as one sink.
pub(super) fn joined(
    column: &Column,
    drawn: &[Drawn],
    groups: &[Vec<usize>],
    zone_factor: f64,
) -> Option<Vec<Drawn>> {
    let mut out = drawn.to_vec();
    for group in groups {
        let members: Vec<&Level> = group.iter().filter_map(|&i| Some(&drawn.get(i)?.level)).collect();
        let draw = zone(column, &as_one(&members)?, zone_factor)?.draw(column)?;
        for &i in group {
            if let Some(d) = out.get_mut(i) {
                d.draw = Some(draw);
            }
        }
    }
    Some(out)
}
