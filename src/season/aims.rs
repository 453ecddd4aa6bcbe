//! What thrift asks of a day: warmer water than is preferred, by a share of the way to the top of the range.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::Day;
use crate::site::Site;
use crate::target::Today;

/// Below the top of a range without a bottom, the middle is taken to lie so far, C (choice).
const BELOW_HIGH_C: f64 = 2.0;

/// The aim of a date, of aims that each hold so many days from the first decision on; the last holds on.
pub(super) fn aim_on(aims: &[f64], decides: NaiveDate, every: u32, date: NaiveDate) -> f64 {
    let passed = (date - decides).num_days().max(0) / i64::from(every.max(1));
    let at = usize::try_from(passed).unwrap_or(usize::MAX).min(aims.len().saturating_sub(1));
    aims.get(at).copied().unwrap_or(0.0)
}

/// A day whose hard rules prefer water warmer by an aim: 0 leaves what they prefer, 1 prefers the top of their range.
pub(super) fn asking(day: Day, site: &Site, aim: f64) -> Day {
    if aim <= 0.0 {
        return day;
    }
    day.asking(site, |rule| {
        let is_hard = site.targets.get(rule.target).is_some_and(|target| !target.soft);
        if let (true, Ok(today)) = (is_hard, &mut rule.today) {
            today.preferred_c = aimed_c(today, aim).or(today.preferred_c);
        }
    })
}

/// What is preferred with an aim, C; `None` for a rule without a top.
fn aimed_c(today: &Today, aim: f64) -> Option<f64> {
    let high = today.high_c?;
    let middle = today.low_c.map_or(high - BELOW_HIGH_C, |low| 0.5 * (low + high));
    let preferred = today.preferred_c.unwrap_or(middle);
    Some(preferred + aim * (high - preferred))
}
