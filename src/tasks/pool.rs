//! Is this profile sound, how is the water layered, which outlets have water.
//!
//! Methods: `docs/methods.md`, section 2.

use crate::files::folder::Listed;
use crate::files::text::Source;
use crate::intake;
use crate::problem::Problem;
use crate::profile::{Layering, Profile, colder_m3};
use crate::site::{Kind, Site};
use crate::water::{CP_REF_J_KG_K, RHO_REF_KG_M3};
use crate::withdrawal::{CrestForm, Opening, Sink, zone};

use super::Context;

/// Volume colder than a threshold.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ColdWater {
    /// Threshold, C.
    pub threshold_c: f64,
    /// In the whole pool, m3.
    pub total_m3: f64,
    /// What the usable outlets can draw, m3; `None` when no outlet is usable.
    pub usable_m3: Option<f64>,
}

/// An outlet under the pool.
#[derive(Debug, Clone, PartialEq)]
pub struct OutletState {
    /// Index of the outlet.
    pub outlet: usize,
    /// Water above the top of the fully open outlet, m.
    pub submergence_m: f64,
    /// Whether it has water.
    pub wet: bool,
    /// Whether it keeps the submergence asked for; `None` where none is.
    pub kept: Option<bool>,
}

/// The answer of `pool`.
#[derive(Debug, Clone)]
pub struct PoolAnswer {
    /// How the water is layered.
    pub layering: Layering,
    /// Cold water below each threshold of the site.
    pub cold: Vec<ColdWater>,
    /// Lowest elevation the usable outlets draw from, m.
    pub reach_m: Option<f64>,
    /// Outlets from the highest down.
    pub outlets: Vec<OutletState>,
    /// Flags against the cast before this one.
    pub against_previous: Vec<Problem>,
    /// Fingerprint of the inputs, the cast before this one included.
    pub fingerprint: String,
}

/// Is this profile sound, how is the water layered.
pub fn pool(context: &Context) -> PoolAnswer {
    let site = context.site();
    let profile = &context.profile;
    let layering = Layering::of(profile, &site.pool);
    let mut outlets: Vec<OutletState> = site
        .outlets
        .iter()
        .enumerate()
        .map(|(outlet, o)| {
            let submergence_m = intake::submergence_m(o, 1.0, profile.pool_m);
            OutletState {
                outlet,
                submergence_m,
                wet: intake::is_wet(o, 1.0, profile.pool_m),
                kept: o.min_submergence_m.map(|least| submergence_m >= least),
            }
        })
        .collect();
    let place = |s: &OutletState| (site.outlets[s.outlet].centre_m, &site.outlets[s.outlet].name);
    outlets.sort_by(|a, b| {
        let (a, b) = (place(a), place(b));
        b.0.total_cmp(&a.0).then_with(|| a.1.cmp(b.1))
    });
    let reach_m = reach_m(site, profile, &outlets);
    let cold = site
        .cold_water_c
        .iter()
        .map(|&threshold_c| {
            let colder =
                |from: f64| colder_m3(&profile.column, &site.pool, threshold_c, from, profile.pool_m);
            ColdWater { threshold_c, total_m3: colder(site.pool.bed_m), usable_m3: reach_m.map(colder) }
        })
        .collect();
    let earlier = previous(context);
    let against_previous =
        earlier.as_ref().and_then(|e| heat_change(context, &layering, &e.0)).into_iter().collect();
    let sources: Vec<&Source> = [&context.source].into_iter().chain(earlier.as_ref().map(|e| &e.1)).collect();
    let fingerprint = context.folder.fingerprint(&sources);
    PoolAnswer { layering, cold, reach_m, outlets, against_previous, fingerprint }
}

/// Lowest limit of the deepest usable outlet at the least release of the site, m; its centre-line where the site
/// asks for none.
fn reach_m(site: &Site, profile: &Profile, outlets: &[OutletState]) -> Option<f64> {
    let deepest = outlets.iter().rev().find(|s| s.wet && s.kept != Some(false))?;
    let outlet = &site.outlets[deepest.outlet];
    let most = intake::capacity_m3s(site, outlet, 1.0, profile.pool_m).unwrap_or(f64::INFINITY);
    let flow_m3s = site.release.min_m3s.unwrap_or(0.0).min(most);
    let sink = Sink {
        centre_m: outlet.open_part(1.0).centre_m,
        flow_m3s,
        opening: match outlet.kind {
            Kind::Crest { length_m, .. } => Opening::Crest { length_m, form: CrestForm::Overflow },
            Kind::Orifice(_) => Opening::Port { angle_rad: outlet.angle_rad },
        },
    };
    Some(zone(&profile.column, &sink, 1.0).map_or(sink.centre_m, |z| z.lower.limit_m))
}

/// The last sound cast before the one in hand, and its bytes.
fn previous(context: &Context) -> Option<(Profile, Source)> {
    let taken = context.profile.taken?;
    let casts = context.folder.casts();
    let before = |l: &&Listed| l.raw.as_ref().and_then(|r| r.taken).is_some_and(|t| t < taken);
    let last = casts.iter().rev().find(before)?;
    Some((context.folder.profile_of(last).0?, last.source.clone()?))
}

/// Heat gained or lost since an earlier cast, where it is more than weather brings.
fn heat_change(context: &Context, layering: &Layering, earlier: &Profile) -> Option<Problem> {
    let site = context.site();
    let days = earlier.age_days(context.profile.taken?).filter(|d| *d > 0.5)?;
    let old = Layering::of(earlier, &site.pool);
    // the common volume gains this much per area: volumes themselves come and go with the river
    let depth_m = layering.volume_m3 / site.pool.area_m2(context.profile.pool_m);
    let flux = RHO_REF_KG_M3 * CP_REF_J_KG_K * depth_m * (layering.mean_c - old.mean_c) / (days * 86_400.0);
    (flux.abs() > site.checks.heat_w_m2).then(|| {
        let words = format!(
            "the water changed by {flux:+.0} W/m2 over {days:.0} days since {}: more than weather brings ({:.0})",
            earlier.file, site.checks.heat_w_m2
        );
        let cure = "one of the two casts may be wrong, or the river exchanged the pool";
        Problem::flag("heat-change", words, cure).in_file(&context.profile.file)
    })
}
