//! What the water did since the cast before.
//!
//! Methods: `docs/methods.md`, section 2.

use chrono::{DateTime, FixedOffset};

use crate::files::folder::Listed;
use crate::files::text::Source;
use crate::problem::Problem;
use crate::profile::{Layering, Profile};
use crate::water::{CP_REF_J_KG_K, RHO_REF_KG_M3};

use super::Context;
use super::pool::{ColdWater, Water};

/// Casts closer in time give no heat flux: a sensor's error would be most of it, days (choice).
const LEAST_DAYS: f64 = 0.5;

/// The water now against the sound cast before, each under its own pool.
#[derive(Debug, Clone, PartialEq)]
pub struct Since {
    /// File of the cast before.
    pub file: String,
    /// When it was taken.
    pub taken: DateTime<FixedOffset>,
    /// Days between the two.
    pub days: f64,
    /// Change of the temperature at the surface, C; above zero is warmer now, as in what follows.
    pub surface_c: f64,
    /// At the bed, C.
    pub bed_c: f64,
    /// Of the volume mean, C.
    pub mean_c: f64,
    /// Change of the water surface, m.
    pub pool_m: f64,
    /// Elevation of the thermocline then and now, m; `None` where there is none.
    pub thermocline_m: [Option<f64>; 2],
    /// Lowest oxygen then and now, mg/L; `None` where it was not measured.
    pub oxygen_min_mg_l: [Option<f64>; 2],
    /// Heat gained per area of the surface, whatever brought it, W/m2; `None` for casts within half a day.
    pub heat_w_m2: Option<f64>,
    /// Change of each volume of cold water, in the order of the site.
    pub cold: Vec<ColdChange>,
}

/// Change of a volume of cold water.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ColdChange {
    /// Threshold, C.
    pub threshold_c: f64,
    /// In the whole pool, m3.
    pub total_m3: f64,
    /// What the outlets usable then and now can draw, m3; `None` where none was or is usable.
    pub usable_m3: Option<f64>,
}

/// The last sound cast before the one in hand, and its bytes.
pub(super) fn previous(context: &Context) -> Option<(Profile, Source)> {
    let taken = context.profile.taken?;
    let before = |l: &&Listed| l.raw.as_ref().and_then(|r| r.taken).is_some_and(|t| t < taken);
    let casts = context.folder.casts();
    let mut earlier = casts.iter().rev().filter(before);
    earlier.find_map(|listed| Some((context.folder.profile_of(listed).0?, listed.source.clone()?)))
}

/// The comparison of an earlier cast with what is known of the one in hand.
pub(super) fn since(
    context: &Context,
    earlier: &Profile,
    (now, cold): (&Layering, &[ColdWater]),
) -> Option<Since> {
    let site = context.site();
    let (taken, days) = (earlier.taken?, earlier.age_days(context.profile.taken?)?);
    let then = Layering::of(earlier, &site.pool);
    let water = Water::of(site, earlier);
    let change = |now: &ColdWater| {
        let then = water.colder(now.threshold_c);
        ColdChange {
            threshold_c: now.threshold_c,
            total_m3: now.total_m3 - then.total_m3,
            usable_m3: now.usable_m3.zip(then.usable_m3).map(|(now, then)| now - then),
        }
    };
    let mean_c = now.mean_c - then.mean_c;
    // the common volume gains this much per area: volumes themselves come and go with the river
    let depth_m = now.volume_m3 / site.pool.area_m2(context.profile.pool_m);
    let flux = RHO_REF_KG_M3 * CP_REF_J_KG_K * depth_m * mean_c / (days * 86_400.0);
    Some(Since {
        file: earlier.file.clone(),
        taken,
        days,
        surface_c: now.surface_c - then.surface_c,
        bed_c: now.bed_c - then.bed_c,
        mean_c,
        pool_m: context.profile.pool_m - earlier.pool_m,
        thermocline_m: [&then, now].map(|l| l.thermocline.map(|t| t.elevation_m)),
        oxygen_min_mg_l: [&then, now].map(|l| l.oxygen_min.map(|o| o.oxygen_mg_l)),
        heat_w_m2: (days > LEAST_DAYS).then_some(flux),
        cold: cold.iter().map(change).collect(),
    })
}

/// Heat gained or lost since an earlier cast, where it is more than weather brings.
pub(super) fn heat_change(context: &Context, since: &Since) -> Option<Problem> {
    let most = context.site().checks.heat_w_m2;
    let flux = since.heat_w_m2.filter(|flux| flux.abs() > most)?;
    let words = format!(
        "the water changed by {flux:+.0} W/m2 over {:.0} days since {}: more than weather brings ({most:.0})",
        since.days, since.file
    );
    let cure = "one of the two casts may be wrong, or the river exchanged the pool";
    Some(Problem::flag("heat-change", words, cure).in_file(&context.profile.file))
}
