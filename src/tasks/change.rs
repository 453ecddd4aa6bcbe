//! What a change from the setting now takes.

use chrono::NaiveDate;

use crate::mix::limits::{self, Before, Check, Move, Moves};
use crate::mix::{Blend, Setting};
use crate::site::Site;

/// A change from the setting now.
#[derive(Debug, Clone, PartialEq)]
pub struct Change {
    /// Number of moves and what they take.
    pub moves: Moves,
    /// Which gates move, in the order of the file.
    pub moved: Vec<Move>,
    /// First day on which the crew can make it, by the notice it needs; `None` where it needs none.
    pub earliest: Option<NaiveDate>,
}

/// The change from the setting now to another, decided on a date; `out` gets the limits held against it: rates of
/// change of each release, moves and crew hours.
pub(super) fn change(
    site: &Site,
    (now, before): (&Setting, Before),
    to: &Setting,
    releases: &[Blend],
    date: NaiveDate,
    out: &mut Vec<Check>,
) -> Change {
    let mut moves = Moves::default();
    for release in releases {
        moves = limits::change(site, now, before, to, release, out);
    }
    let earliest = limits::notice(moves.lead_days).and_then(|days| date.checked_add_days(days));
    Change { moves, moved: limits::moved(site, now, to), earliest }
}
