//! Oxygen below the dam: what each conduit gives its water, and the blend of them.
//!
//! Methods: `docs/methods.md`, section 5.

use std::collections::BTreeMap;

use crate::profile::Column;
use crate::site::Site;
use crate::withdrawal::{Draw, zone};

use super::blend::{Blend, Drawn, blend};
use super::levels::{Level, as_one};

impl Blend {
    /// The same release with its oxygen below the dam: the water of each conduit (a well's, or a direct outlet's own)
    /// is blended, gains on its way, and then joins the others. `place` is that within the range of each gain, 0 to 1.
    /// Without a gain at the site nothing changes.
    #[must_use]
    pub fn aerated(self, site: &Site, drawn: &[Drawn], place: f64) -> Self {
        if !site.aerates() {
            return self;
        }
        Self { oxygen_below_mg_l: below_mg_l(site, drawn, place), ..self }
    }
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
        let gained = aeration.map_or(oxygen, |aeration| {
            let saturation = site.saturation_below_mg_l(water.temperature_c, water.salt_g_per_kg);
            aeration.at(place).below_mg_l(oxygen, saturation, water.temperature_c)
        });
        flow_m3s += water.flow_m3s;
        carried += water.flow_m3s * gained;
    }
    (flow_m3s > 0.0).then(|| carried / flow_m3s)
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
