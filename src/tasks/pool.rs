//! Is this profile sound, how is the water layered, which outlets have water.
//!
//! Methods: `docs/methods.md`, section 2.

use crate::files::text::Source;
use crate::mix::{OutletState, outlet_states, reach_m};
use crate::problem::Problem;
use crate::profile::{Layering, Profile, colder_m3};
use crate::site::Site;

use super::Context;
use super::since::{Since, heat_change, previous, since};

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
    /// What the water did since the sound cast before; `None` where there is none.
    pub since: Option<Since>,
    /// Flags against the cast before this one.
    pub against_previous: Vec<Problem>,
    /// Fingerprint of the inputs, the cast before this one included.
    pub fingerprint: String,
}

/// Is this profile sound, how is the water layered.
pub fn pool(context: &Context) -> PoolAnswer {
    let earlier = previous(context);
    after(context, earlier.as_ref().map(|(profile, source)| (profile, source)))
}

/// The answer of `pool` held against the sound cast before, where there is one.
pub(super) fn after(context: &Context, earlier: Option<(&Profile, &Source)>) -> PoolAnswer {
    let site = context.site();
    let layering = Layering::of(&context.profile, &site.pool);
    let water = Water::of(site, &context.profile);
    let cold: Vec<ColdWater> = site.cold_water_c.iter().map(|&c| water.colder(c)).collect();
    let since = earlier.and_then(|e| since(context, e.0, (&layering, &cold)));
    let against_previous = since.as_ref().and_then(|s| heat_change(context, s)).into_iter().collect();
    let sources: Vec<&Source> = [&context.source].into_iter().chain(earlier.map(|e| e.1)).collect();
    let fingerprint = context.folder.fingerprint(&sources);
    let Water { reach_m, outlets, .. } = water;
    PoolAnswer { layering, cold, reach_m, outlets, since, against_previous, fingerprint }
}

/// The water of an answer that is colder than a threshold, C, whether the site names it or not.
pub fn cold_water(context: &Context, answer: &PoolAnswer, threshold_c: f64) -> ColdWater {
    colder(context.site(), &context.profile, answer.reach_m, threshold_c)
}

/// A profile with the outlets under its pool.
pub(super) struct Water<'a> {
    site: &'a Site,
    profile: &'a Profile,
    outlets: Vec<OutletState>,
    reach_m: Option<f64>,
}

impl<'a> Water<'a> {
    pub(super) fn of(site: &'a Site, profile: &'a Profile) -> Self {
        let outlets = outlet_states(site, profile.pool_m);
        let reach_m = deepest_m(site, profile, &outlets);
        Self { site, profile, outlets, reach_m }
    }

    pub(super) fn colder(&self, threshold_c: f64) -> ColdWater {
        colder(self.site, self.profile, self.reach_m, threshold_c)
    }
}

fn colder(site: &Site, profile: &Profile, reach_m: Option<f64>, threshold_c: f64) -> ColdWater {
    let above = |from: f64| colder_m3(&profile.column, &site.pool, threshold_c, from, profile.pool_m);
    ColdWater { threshold_c, total_m3: above(site.pool.bed_m), usable_m3: reach_m.map(above) }
}

/// Lowest limit of the deepest usable outlet at the least release of the site, m; its centre-line where the site
/// asks for none.
fn deepest_m(site: &Site, profile: &Profile, outlets: &[OutletState]) -> Option<f64> {
    let deepest = outlets.iter().rev().find(|s| s.has_water())?;
    reach_m(site, &profile.column, deepest.outlet, site.release.min_m3s.unwrap_or(0.0))
}
