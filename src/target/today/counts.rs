//! Rules that count days above their range: today is bound only where one more would be too many.
//!
//! The days before are counted above the rule itself, as a record is; the buffer is kept from today alone. A day that is
//! not recorded may have lain above: today is free only where even that leaves room.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::NaiveDate;

use crate::series::{Days, exceeds};
use crate::target::Target;

use super::{Figure, Known, Today, before};

/// Days above the range, before today.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Count {
    /// Days above: those in a row up to yesterday, or those of the span so far.
    pub above: u32,
    /// Days of which they are.
    pub of: u32,
    /// The rule speaks of their share.
    pub share: bool,
}

/// How many days may lie above.
#[derive(Debug, Clone, Copy)]
pub(super) enum Most {
    /// So many of the span.
    Days(u32),
    /// This share (0 to 1) of its days so far.
    Share(f64),
}

impl Count {
    /// The count with today: days, or percent of days.
    pub fn with_today(&self, above: bool) -> f64 {
        let count = f64::from(self.above) + f64::from(u8::from(above));
        if self.share { 100.0 * count / (f64::from(self.of) + 1.0) } else { count }
    }
}

/// So many days in a row above are outside; fewer are not.
pub(super) fn in_a_row(rule: &Target, date: NaiveDate, days: u32, known: Known) -> Today {
    let today = Today::of(rule, Figure::Max);
    let (Some(record), Some(high), Some(yesterday)) = (known.days, rule.high_c, before(date, 1)) else {
        return today;
    };
    let record = &record.temperature_c;
    let above = record.run_above(yesterday, high);
    if above.saturating_add(1) >= days {
        let count = Some(Count { above, of: days, share: false });
        return Today { count, observed: true, ..today };
    }
    // a day that ends the row because it is not recorded may belong to it, and so may those before it
    let most = (1..days).take_while(|back| may_be_above(record, date, *back, high)).count();
    let is_free = most as u64 + 1 < u64::from(days);
    let count = record.on(yesterday).map(|_| Count { above, of: days, share: false });
    let earlier = days.saturating_sub(1);
    let recorded = before(date, earlier).map_or(0, |first| record.between(first, yesterday, |_| 0.0).valid);
    let words = (!is_free).then(|| unrecorded(earlier.saturating_sub(recorded), earlier));
    Today {
        high_c: today.high_c.filter(|_| !is_free),
        observed: is_free || count.is_some(),
        count,
        words,
        ..today
    }
}

/// Whether the day so long before may have lain above: it did, or it is not recorded.
fn may_be_above(record: &Days, date: NaiveDate, back: u32, high: f64) -> bool {
    let day = before(date, back).and_then(|day| record.on(day));
    day.is_none_or(|day| exceeds(day.max, high))
}

/// So many days of the span, or such a share of them, may lie above.
pub(super) fn of_days(rule: &Target, date: NaiveDate, most: Most, known: Known) -> Today {
    let today = Today::of(rule, Figure::Max);
    let (Some(record), Some(high), Some(first)) = (known.days, rule.high_c, rule.span.began(date)) else {
        return today;
    };
    let record = &record.temperature_c;
    let (Some(yesterday), Some(began)) = (before(date, 1), record.days.keys().next().copied()) else {
        return today;
    };
    // what came before the record is not held against the rule, as it is not where the record itself is judged
    let counted = record.count_above(first.max(began), yesterday, high);
    if counted.valid == 0 {
        return today;
    }
    let count = Count { above: counted.above, of: counted.valid, share: matches!(most, Most::Share(_)) };
    let (is_free, is_used_up, is_known) = match most {
        Most::Days(most) => {
            let could_be = counted.above.saturating_add(counted.unknown());
            (could_be < most, counted.above > most, could_be < most || counted.above >= most)
        }
        Most::Share(most) => {
            let is_known = counted.valid + 1 >= known.enough(counted.days + 1);
            let is_used_up = f64::from(counted.above) > most * (f64::from(counted.valid) + 1.0) + 1e-9;
            let has_room = count.with_today(true) <= 100.0 * most + 1e-9;
            (is_known && has_room, is_known && is_used_up, is_known)
        }
    };
    let words = if is_used_up {
        Some("more days lie above than the rule allows, whatever today brings".to_owned())
    } else if !is_known {
        Some(unrecorded(counted.unknown(), counted.days))
    } else {
        (first < began).then(|| format!("days before {began} are not recorded and not counted"))
    };
    Today { high_c: today.high_c.filter(|_| !is_free), count: Some(count), observed: true, words, ..today }
}

/// Why a day is held to the range that the rule might have left free.
fn unrecorded(missing: u32, of: u32) -> String {
    let are = if missing == 1 { "is" } else { "are" };
    format!(
        "{missing} of the {of} days before {are} not recorded and may lie above: today is held to the range"
    )
}
