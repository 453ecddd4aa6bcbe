//! Rules of a day, of a mean over days, of the change from yesterday, of a sum of degrees.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::NaiveDate;

use crate::series::Day;
use crate::target::{Target, YearDay};

use super::{Figure, Known, Today, before, of_day};

/// A rule held against today alone, or its difference from the reference.
pub(super) fn of_today(
    rule: &Target,
    date: NaiveDate,
    figure: Figure,
    known: Known,
) -> Result<Today, String> {
    let today = Today::of(rule, figure);
    if rule.reference.is_none() {
        return Ok(today);
    }
    let reference = reference(rule, date, known)?;
    if figure == Figure::Both && reference.max > reference.min {
        // each reading is to be held against the reading of the reference at that time
        return Err("readings are not held against a reference that changes over the day".into());
    }
    let from = of_day(figure, &reference);
    let mut today = today.with(rule, -from, 1.0);
    today.preferred_c = rule.preferred_c.map(|preferred| preferred + from);
    Ok(today)
}

/// A mean over so many days, today the last.
pub(super) fn of_days(
    rule: &Target,
    date: NaiveDate,
    days: u32,
    figure: Figure,
    known: Known,
) -> Result<Today, String> {
    let steady = of_today(rule, date, figure, known)?;
    let earlier = days.saturating_sub(1);
    let (Some(record), Some(first)) = (known.days, before(date, earlier)) else { return Ok(steady) };
    let differs = |(day, of): (&NaiveDate, &Day)| {
        let from = if rule.reference.is_some() { of_day(figure, &(known.reference)(*day)?) } else { 0.0 };
        Some(of_day(figure, of) - from)
    };
    let observed: Vec<f64> = record.temperature_c.days.range(first..date).filter_map(differs).collect();
    let count = u32::try_from(observed.len()).unwrap_or(u32::MAX);
    if count == 0 {
        return Ok(steady);
    }
    if count + 1 < known.enough(days) {
        let words =
            format!("{count} of the {earlier} days before are recorded: every day is taken like today");
        return Ok(Today { words: Some(words), ..steady });
    }
    let times = 1.0 / f64::from(count + 1);
    let sum: f64 = observed.iter().sum();
    let mut today = Today { observed: true, ..steady.clone() }.with(rule, times * (sum + steady.add), times);
    today.preferred_c = steady.preferred_c;
    Ok(today)
}

/// The change of the daily mean from yesterday, up or down.
pub(super) fn change(rule: &Target, date: NaiveDate, known: Known) -> Result<Today, String> {
    let record = known.days.ok_or("no record tells yesterday's mean")?;
    let yesterday = before(date, 1).and_then(|day| record.temperature_c.days.get(&day));
    let from = yesterday.ok_or("yesterday is no valid day of the record")?.mean;
    let mut today = Today::of(rule, Figure::Mean);
    let most = rule.high_kept_c();
    (today.add, today.observed) = (-from, true);
    (today.low_c, today.high_c) = (most.map(|most| from - most), most.map(|most| from + most));
    Ok(today)
}

/// Degrees above a base, summed over the days since one of the year.
pub(super) fn degree_days(
    rule: &Target,
    date: NaiveDate,
    base_c: f64,
    since: YearDay,
    known: Known,
) -> Result<Today, String> {
    let first = since.last_on(date).ok_or("the first day that counts is not known")?;
    let earlier = u32::try_from((date - first).num_days()).unwrap_or(0);
    let mut today = Today::of(rule, Figure::Mean);
    (today.base_c, today.preferred_c) = (Some(base_c), None);
    let excess = |day: &Day| (day.mean - base_c).max(0.0);
    let days = known.days.map(|record| record.temperature_c.days.range(first..date));
    let observed: Vec<f64> = days.into_iter().flatten().map(|(_, day)| excess(day)).collect();
    let count = u32::try_from(observed.len()).unwrap_or(u32::MAX);
    if earlier == 0 || (count > 0 && count >= known.enough(earlier)) {
        // days that are missing count like the mean of the others
        let sum = if earlier == 0 {
            0.0
        } else {
            observed.iter().sum::<f64>() * f64::from(earlier) / f64::from(count)
        };
        today.observed = earlier > 0;
        return Ok(today.with(rule, sum - base_c, 1.0));
    }
    // a sum over many days like today would say nothing of the rule
    Err(format!("the record tells {count} of the {earlier} days before that count"))
}

/// The reference on the date.
fn reference(rule: &Target, date: NaiveDate, known: Known) -> Result<Day, String> {
    (known.reference)(date).ok_or_else(|| {
        let name = match &rule.reference {
            Some(crate::target::Reference::Stream(name)) => format!("the temperature of {name}"),
            _ => "the natural temperature".to_owned(),
        };
        format!("{name} on this date is not known")
    })
}
