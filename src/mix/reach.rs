//! Which outlets have water under a pool, and how deep the usable ones reach: what of the cold water can be drawn.
//!
//! Methods: `docs/methods.md`, sections 2 and 8.

use crate::intake;
use crate::profile::Column;
use crate::site::{Kind, Outlet, Site};
use crate::withdrawal::{CrestForm, Opening, Sink, zone};

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

impl OutletState {
    /// Whether it has the water it needs.
    pub fn has_water(&self) -> bool {
        self.wet && self.kept != Some(false)
    }
}

/// The outlets under a pool (m), from the highest down.
pub fn outlet_states(site: &Site, pool_m: f64) -> Vec<OutletState> {
    let state = |(outlet, o): (usize, &Outlet)| {
        let submergence_m = intake::submergence_m(o, 1.0, pool_m);
        OutletState {
            outlet,
            submergence_m,
            wet: intake::is_wet(o, 1.0, pool_m),
            kept: o.min_submergence_m.map(|least| submergence_m >= least),
        }
    };
    let mut outlets: Vec<OutletState> = site.outlets.iter().enumerate().map(state).collect();
    let place = |s: &OutletState| (site.outlets[s.outlet].centre_m, &site.outlets[s.outlet].name);
    outlets.sort_by(|a, b| {
        let (a, b) = (place(a), place(b));
        b.0.total_cmp(&a.0).then_with(|| a.1.cmp(b.1))
    });
    outlets
}

/// Lowest limit of an outlet that draws a flow (m3/s) from a column, fully open, m: no more than it can pass; its
/// centre-line where nothing flows.
pub fn reach_m(site: &Site, column: &Column, outlet: usize, flow_m3s: f64) -> Option<f64> {
    let o = site.outlets.get(outlet)?;
    let most = intake::capacity_m3s(site, o, 1.0, column.surface_m()).unwrap_or(f64::INFINITY);
    let sink = Sink {
        centre_m: o.open_part(1.0).centre_m,
        flow_m3s: flow_m3s.min(most),
        opening: match o.kind {
            Kind::Crest { length_m, .. } => Opening::Crest { length_m, form: CrestForm::Overflow },
            Kind::Orifice(_) => Opening::Port { angle_rad: o.angle_rad },
        },
    };
    Some(zone(column, &sink, site.zone_factor()).map_or(sink.centre_m, |z| z.lower.limit_m))
}
