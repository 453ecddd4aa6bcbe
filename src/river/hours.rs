//! When water, and a rise of the water, come to the points.
//!
//! Methods: `docs/methods.md`, section 6.

use chrono::{DateTime, Datelike, FixedOffset};

use crate::site::River;

use super::Conditions;
use super::afterbay::stay_h;
use super::legs::{Leg, Then};
use super::stream::{brought, seeping_into};

/// Hours from the dam to a point.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub(super) struct Hours {
    /// Of the water, its stay in the afterbay counted in.
    pub(super) water: f64,
    /// Before which no rise can come.
    pub(super) first: f64,
    /// Of the bulk of a rise, which passes the afterbay (choice: its level is held by its own gates).
    pub(super) bulk: f64,
}

/// Hours to each point by a flow at the dam, side streams and seepage of a moment making it larger on its way.
pub(super) fn hours(
    river: &River,
    conditions: &Conditions,
    at: DateTime<FixedOffset>,
    legs: &[Leg],
    flow_m3s: f64,
) -> Vec<Hours> {
    let mut out = vec![Hours::default(); river.points.len()];
    let stay = river.afterbay.as_ref().map_or(0.0, |bay| stay_h(bay, flow_m3s));
    let mut sum = Hours { water: stay, ..Hours::default() };
    let mut flow = flow_m3s;
    for leg in legs {
        let Some(reach) = river.reaches.get(leg.reach) else { continue };
        let share = leg.length_m / reach.length_m;
        let seeped = seeping_into(reach, at.month()).map_or(0.0, |s| s.per_m_m3s * leg.length_m);
        // Simpson's rule over the flow that seepage makes larger; without any, all three are one
        for (weight, part) in [(1.0 / 6.0, 0.0), (4.0 / 6.0, 0.5), (1.0 / 6.0, 1.0)] {
            let here = flow + part * seeped;
            let bulk = reach.bulk_h(here);
            sum.water += weight * share * reach.water_h(here).0;
            sum.first += weight * share * reach.front_h(here).min(bulk);
            sum.bulk += weight * share * bulk;
        }
        flow += seeped;
        match leg.then {
            Then::Join(i) => {
                let stream = reach.inflows.get(i);
                let record = stream.and_then(|s| conditions.streams.get(&s.name));
                let water = stream.and_then(|s| brought(s, record, at, false));
                flow += water.map_or(0.0, |b| b.water.flow_m3s);
            }
            Then::Point(point) => {
                if let Some(hours) = out.get_mut(point) {
                    *hours = sum;
                }
            }
            Then::Look => {}
        }
    }
    out
}
