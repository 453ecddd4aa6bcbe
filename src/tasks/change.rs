//! What a change from the setting now takes.

use chrono::{Days, NaiveDate};

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
    Change { moves, moved: limits::moved(site, now, to), earliest: after(date, moves.lead_days) }
}

/// The day so many days after another, a part of one counted as one.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a whole number of days, capped")]
fn after(date: NaiveDate, days: f64) -> Option<NaiveDate> {
    (days > 0.0).then(|| date.checked_add_days(Days::new(days.ceil().clamp(0.0, 36_500.0) as u64)))?
}
