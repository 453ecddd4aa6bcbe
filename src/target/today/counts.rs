//! Rules that count days above their range: today is bound only where one more would be too many.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::NaiveDate;

use crate::series::Day;
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
    let (Some(record), Some(high)) = (known.days, rule.high_kept_c()) else { return today };
    let record = &record.temperature_c.days;
    let is_above =
        |back: &u32| before(date, *back).and_then(|day| record.get(&day)).is_some_and(|d| d.max > high);
    if before(date, 1).is_none_or(|yesterday| !record.contains_key(&yesterday)) {
        return today;
    }
    let above = (1..=date_span(record, date)).take_while(is_above).count();
    let above = u32::try_from(above).unwrap_or(u32::MAX);
    // where the row ends at a day without a record it may be longer
    let count = Some(Count { above, of: days, share: false });
    let free = above.saturating_add(1) < days;
    Today { high_c: today.high_c.filter(|_| !free), count, observed: true, ..today }
}

/// Days from the first of a record to a date.
fn date_span(record: &std::collections::BTreeMap<NaiveDate, Day>, date: NaiveDate) -> u32 {
    let first = record.keys().next().copied().unwrap_or(date);
    u32::try_from((date - first).num_days()).unwrap_or(0)
}

/// So many days of the span, or such a share of them, may lie above.
pub(super) fn of_days(rule: &Target, date: NaiveDate, most: Most, known: Known) -> Today {
    let today = Today::of(rule, Figure::Max);
    let (Some(record), Some(high), Some(first)) = (known.days, rule.high_kept_c(), rule.span.began(date))
    else {
        return today;
    };
    let days: Vec<bool> =
        record.temperature_c.days.range(first..date).map(|(_, day)| day.max > high).collect();
    let number = |count: usize| u32::try_from(count).unwrap_or(u32::MAX);
    let (above, of) = (number(days.iter().filter(|above| **above).count()), number(days.len()));
    if of == 0 {
        return today;
    }
    let count = Count { above, of, share: matches!(most, Most::Share(_)) };
    let with_one_more = count.with_today(true);
    let free = match most {
        Most::Days(most) => with_one_more <= f64::from(most),
        Most::Share(most) => with_one_more <= 100.0 * most + 1e-9,
    };
    let used_up = match most {
        Most::Days(most) => above > most,
        Most::Share(most) => f64::from(above) > most * f64::from(of) + 1e-9,
    };
    let words = used_up.then(|| "more days lie above than the rule allows, whatever today brings".to_owned());
    Today { high_c: today.high_c.filter(|_| !free), count: Some(count), observed: true, words, ..today }
}
