//! The river cut where something joins, where a point lies, and where a picture wants to see it.

use crate::site::River;

/// What happens at the end of a leg.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Then {
    /// Nothing but a look, where a picture is wanted.
    Look,
    /// A stream joins: its place in its reach.
    Join(usize),
    /// A point: its place in the river.
    Point(usize),
}

/// A stretch of one reach and what stands at its end.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Leg {
    pub(super) reach: usize,
    pub(super) length_m: f64,
    /// Where it ends, from the dam, m.
    pub(super) to_m: f64,
    pub(super) then: Then,
}

/// The legs from the dam down, with about so many looks; with none only what is needed. Where a stream joins at a
/// point, the point sees the mixed water (choice).
pub(super) fn legs(river: &River, looks: usize) -> Vec<Leg> {
    let every_m = river.length_m() / looks.max(1) as f64;
    let mut out = Vec::new();
    let mut seen = vec![false; river.points.len()];
    for (r, reach) in river.reaches.iter().enumerate() {
        let (from_m, to_m) = (reach.from_m, reach.to_m());
        let mut stops: Vec<(f64, Then)> = vec![(to_m, Then::Look)];
        stops.extend(reach.inflows.iter().enumerate().map(|(i, w)| (w.at_m, Then::Join(i))));
        for (i, point) in river.points.iter().enumerate() {
            // a point at a border belongs to the reach above, unless a stream joins just there below
            let joined_below = river
                .reaches
                .get(r + 1)
                .is_some_and(|next| next.inflows.iter().any(|w| w.at_m <= point.at_m));
            if !seen[i] && point.at_m <= to_m && !(point.at_m >= to_m && joined_below) {
                seen[i] = true;
                stops.push((point.at_m, Then::Point(i)));
            }
        }
        if looks > 0 {
            let own = (1..).map(|k| f64::from(k) * every_m).skip_while(|at| *at <= from_m);
            stops.extend(own.take_while(|at| *at < to_m).map(|at| (at, Then::Look)));
        }
        let rank = |then: Then| match then {
            Then::Join(_) => 0,
            Then::Point(_) => 1,
            Then::Look => 2,
        };
        stops.sort_by(|a, b| a.0.total_cmp(&b.0).then(rank(a.1).cmp(&rank(b.1))));
        let mut at_m = from_m;
        for (stop_m, then) in stops {
            let stop_m = stop_m.max(at_m);
            out.push(Leg { reach: r, length_m: stop_m - at_m, to_m: stop_m, then });
            at_m = stop_m;
        }
    }
    out
}
