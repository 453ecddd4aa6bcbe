//! What a change does to the stage at the points of the river.

use crate::order::Order;
use crate::river::AtPoint;
use crate::tasks::Context;
use crate::tasks::river::{RiverAnswer, Which};

/// The stage at a point of the river before and after a change.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StageChange {
    /// Index in the points of the river.
    pub point: usize,
    /// Whether the site rates the point.
    pub rated: bool,
    /// Stage before and after, m; `None` where a flow lies outside the rating or is not known.
    pub stage_m: Option<(f64, f64)>,
    /// Most that it falls within an hour if every step were seen there at once, m; the river spreads it out.
    pub fall_m: Option<f64>,
    /// Most that it may fall in an hour, m.
    pub most_fall_m: Option<f64>,
}

impl StageChange {
    /// Whether it falls faster than it may.
    pub fn falls_too_fast(&self) -> bool {
        self.fall_m.zip(self.most_fall_m).is_some_and(|(fall, most)| fall > most)
    }
}

/// Minutes of an hour (standard).
const HOUR_MIN: f64 = 60.0;

/// Every point of the river.
pub(super) fn stages(context: &Context, river: &RiverAnswer, order: Option<&Order>) -> Vec<StageChange> {
    let points = context.site().river.as_ref().map_or(&[][..], |river| &river.points);
    let there = |which: Which, point: usize| -> Option<&AtPoint> {
        let way = river.ways.iter().find(|way| way.which == which)?;
        way.course.as_ref()?.points.iter().find(|at| at.point == point)
    };
    let of = |(index, point): (usize, &crate::site::Point)| {
        let flow = |which| there(which, index).map(|at| at.flow_range_m3s.1);
        let stage = |flow: Option<f64>| flow.and_then(|flow| point.stage_m(flow));
        let stage_m = stage(flow(Which::Now)).zip(stage(flow(Which::Tried)));
        let fall_m = order.and_then(|order| {
            // what joins on the way stays as it is
            let beside = flow(Which::Now)? - order.before?.flow_m3s;
            let stages: Option<Vec<(f64, f64)>> =
                std::iter::once((f64::NEG_INFINITY, order.before?.flow_m3s))
                    .chain(order.steps.iter().filter_map(|step| Some((step.at_min, step.after?.flow_m3s))))
                    .map(|(at, flow)| Some((at, point.stage_m(beside + flow)?)))
                    .collect();
            Some(fastest_fall(&stages?))
        });
        StageChange {
            point: index,
            rated: !point.rating.is_empty(),
            stage_m,
            fall_m,
            most_fall_m: point.stage_fall_m_per_hour,
        }
    };
    points.iter().enumerate().map(of).collect()
}

/// The most that stages fall within an hour, m: each holds from its minute on until the next.
fn fastest_fall(stages: &[(f64, f64)]) -> f64 {
    let mut most = 0.0_f64;
    for (last, &(at, low)) in stages.iter().enumerate() {
        // the one that stood an hour before counts, and all since
        let since = stages.iter().take(last + 1).rposition(|(begun, _)| *begun <= at - HOUR_MIN).unwrap_or(0);
        let highest = stages.iter().take(last).skip(since).map(|s| s.1).fold(low, f64::max);
        most = most.max(highest - low);
    }
    most
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    #[test]
    fn scenario_the_fall_of_any_hour_counts() {
        let before = f64::NEG_INFINITY;
        assert_relative_eq!(fastest_fall(&[(before, 3.0)]), 0.0);
        assert_relative_eq!(fastest_fall(&[(before, 3.0), (0.0, 4.0)]), 0.0);
        assert_relative_eq!(fastest_fall(&[(before, 3.0), (0.0, 2.5), (30.0, 2.0)]), 1.0);
        // two an hour apart do not lie in one hour
        assert_relative_eq!(fastest_fall(&[(before, 3.0), (0.0, 2.5), (60.0, 2.0), (120.0, 1.25)]), 0.75);
    }
}
