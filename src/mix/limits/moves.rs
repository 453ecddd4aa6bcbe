//! What has to be moved from the setting now to another, and what that takes.

use chrono::Days;

use crate::intake;
use crate::mix::Setting;
use crate::site::{Outlet, SAME_OPENING, Site};

use super::{Check, Of, Rule};

/// A flow that can be set freely is moved when it changes by more than this share of the larger one (choice).
const SAME_FLOW: f64 = 0.005;

/// What a change takes.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Moves {
    /// Gates moved.
    pub count: usize,
    /// Weights of the moves, summed.
    pub cost: f64,
    /// Crew hours, summed.
    pub crew_hours: f64,
    /// Longest notice that a move needs, days.
    pub lead_days: f64,
}

/// Days of notice that a crew needs, a part of one counted as one; `None` where it needs none.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a whole number of days, capped")]
pub fn notice(lead_days: f64) -> Option<Days> {
    (lead_days > 0.0).then(|| Days::new(lead_days.ceil().clamp(0.0, 36_500.0) as u64))
}

/// One gate that is to be moved.
#[derive(Debug, Clone, PartialEq)]
pub struct Move {
    /// Index of the outlet.
    pub outlet: usize,
    /// Opening now, 0 to 1.
    pub from: f64,
    /// Opening then.
    pub to: f64,
    /// Flow now, m3/s.
    pub from_m3s: f64,
    /// Flow then.
    pub to_m3s: f64,
}

/// The gates that move from one setting to another, in the order of the site.
pub fn moved(site: &Site, now: &Setting, to: &Setting) -> Vec<Move> {
    let one = |(outlet, o): (usize, &Outlet)| {
        let ((from, from_m3s), (to, to_m3s)) = (set(site, now, outlet), set(site, to, outlet));
        is_moved(o, (from, from_m3s), (to, to_m3s)).then_some(Move { outlet, from, to, from_m3s, to_m3s })
    };
    site.outlets.iter().enumerate().filter_map(one).collect()
}

/// Moves between two settings, each gate in them open where it gives water.
///
/// An outlet with positions moves when its opening changes, shut counting as 0; one of any flow when its flow changes.
/// What spills by itself is not moved. `out` gets a check for each gate not to be moved under flow: found is the
/// smaller flow before and after of its well, or of itself where it has none, m3/s; 0 where it stays.
pub fn moves(site: &Site, now: &Setting, to: &Setting, out: &mut Vec<Check>) -> Moves {
    let mut moves = Moves::default();
    for (index, outlet) in site.outlets.iter().enumerate() {
        let moved = is_moved(outlet, set(site, now, index), set(site, to, index));
        if moved {
            moves.count += 1;
            moves.cost += outlet.crew.cost;
            moves.crew_hours += outlet.crew.hours;
            moves.lead_days = moves.lead_days.max(outlet.crew.lead_days);
        }
        if outlet.moves_under_flow == Some(false) {
            let both = through(site, now, index).min(through(site, to, index));
            let found = if moved { both } else { 0.0 };
            out.push(Check::most(Rule::MovesUnderFlow, Of::Outlet(index), found, 0.0));
        }
    }
    moves
}

/// Whether an outlet moves from one opening (0 to 1) and flow (m3/s) to another.
pub fn is_moved(outlet: &Outlet, now: (f64, f64), to: (f64, f64)) -> bool {
    if intake::spills_by_itself(outlet) {
        return false;
    }
    if outlet.positions.is_empty() {
        (now.1 - to.1).abs() > SAME_FLOW * now.1.max(to.1)
    } else {
        (now.0 - to.0).abs() > SAME_OPENING
    }
}

/// Opening and flow of an outlet; shut where it is given nothing.
fn set(site: &Site, setting: &Setting, outlet: usize) -> (f64, f64) {
    let gate = setting.gates.iter().find(|g| g.outlet == outlet && setting.stands_open(site, g));
    gate.map_or((0.0, 0.0), |g| (g.opening, g.flow_m3s))
}

/// Flow through an outlet's well, or through itself, m3/s.
fn through(site: &Site, setting: &Setting, outlet: usize) -> f64 {
    match site.outlets[outlet].well {
        None => set(site, setting, outlet).1,
        well => {
            let same = |index: usize| site.outlets.get(index).is_some_and(|o| o.well == well);
            setting.gates.iter().filter(|g| same(g.outlet)).map(|g| g.flow_m3s).sum()
        }
    }
}
