//! Checks of a target's statistic and of the figures that belong to it.

use crate::target::{Span, Statistic, YearDay};

use super::rules::Checking;

/// Days a mean or a row can speak of (choice: from two days to a year).
const DAYS: std::ops::RangeInclusive<usize> = 2..=366;

/// The statistic of a target with its figures; `from` is the first day of its span.
pub(super) fn statistic(of: &mut Checking, from: Option<YearDay>) -> Option<Statistic> {
    let t = of.rule;
    let named = match t.statistic.as_deref() {
        None => Statistic::DailyMean,
        Some(name) => {
            let Some(found) = Statistic::parse(name) else {
                let known: Vec<&str> = Statistic::NAMES.iter().map(|(n, _)| *n).collect();
                let words = format!("`{name}` is not a statistic");
                of.refuse("statistic", "statistic", words, format!("use one of {}", known.join(", ")));
                return None;
            };
            found
        }
    };
    let takes_days =
        matches!(named, Statistic::MeanOfDays(_) | Statistic::DaysInARow(_) | Statistic::DaysAbove(_));
    let takes_share = matches!(named, Statistic::ShareOfDays(_));
    for (given, takes, key) in [
        (t.days.is_some(), takes_days, "days"),
        (t.days_share.is_some(), takes_share, "percent"),
        (t.base_c.is_some(), named.is_sum(), "base"),
        (t.since.is_some(), named.is_sum(), "since"),
    ] {
        if given && !takes {
            let words = format!("the statistic {} takes no {key}", named.name());
            of.refuse("statistic-figure", key, words, "drop it, or take another statistic");
        }
    }
    figures(of, named);
    bounds(of, named);
    match named {
        Statistic::MeanOfDays(_) => days(of, DAYS).map(Statistic::MeanOfDays),
        Statistic::DaysInARow(_) => days(of, DAYS).map(Statistic::DaysInARow),
        Statistic::DaysAbove(_) => days(of, 0..=366).map(Statistic::DaysAbove),
        Statistic::ShareOfDays(_) => t.days_share.map(Statistic::ShareOfDays),
        Statistic::DegreeDays { .. } => {
            let since = of.day(t.since.as_deref(), "since", from.unwrap_or(Span::YEAR.from))?;
            Some(Statistic::DegreeDays { base_c: t.base_c.unwrap_or(0.0), since })
        }
        other => Some(other),
    }
}

/// The share of days and what a reference goes with.
fn figures(of: &mut Checking, named: Statistic) {
    let t = of.rule;
    if matches!(named, Statistic::ShareOfDays(_)) && t.days_share.is_none_or(|s| !(0.0..1.0).contains(&s)) {
        let words = "share_of_days needs its percent of days, 0 or more and below 100".to_owned();
        of.refuse("statistic-figure", "percent", words, "give percent: 10");
    }
    if t.reference.is_some() && (named.is_difference() || named.is_sum() || named.counts_days()) {
        let words = format!("the statistic {} is not held against a reference", named.name());
        of.refuse("reference", "reference", words, "drop it, or take a statistic of one day or a mean");
    }
    let range = t.low_c.is_some() || t.high_c.is_some();
    if t.reference.is_some() && !range {
        let words = "the difference from the reference has no bound".to_owned();
        of.refuse("reference", "reference", words, "give low or high, as differences");
    }
}

/// A rule that counts days or speaks of a change knows only an upper bound.
fn bounds(of: &mut Checking, named: Statistic) {
    let t = of.rule;
    let upper_only = named.counts_days() || named.is_difference();
    if upper_only && t.low_c.is_some() {
        let words = format!("the statistic {} takes only high", named.name());
        of.refuse("statistic-bound", "low", words, "give low in a target of its own");
    }
    let floor = t.oxygen_min_mg_l.is_some() || t.oxygen_min_share.is_some();
    if upper_only && t.high_c.is_none() {
        let words = format!("the statistic {} needs high", named.name());
        let cure = if floor { "give high, or take daily_mean for oxygen alone" } else { "give high" };
        of.refuse("statistic-bound", "statistic", words, cure);
    }
    if (named.is_difference() || named.is_sum()) && t.preferred_c.is_some() {
        let words = format!("the statistic {} prefers no temperature", named.name());
        of.refuse("statistic-bound", "preferred", words, "give preferred in a target of its own");
    }
    if named.is_difference() && t.high_c.is_some_and(|high| high < 0.0) {
        let words = "a change counts up and down alike and has no high below zero".to_owned();
        of.refuse("statistic-bound", "high", words, "give the greatest change, 0 or more");
    }
}

/// The days of a statistic that takes some.
fn days(of: &mut Checking, allowed: std::ops::RangeInclusive<usize>) -> Option<u32> {
    let days = of.rule.days.filter(|days| allowed.contains(days));
    if days.is_none() {
        let words = format!("the statistic needs its days, {} to {}", allowed.start(), allowed.end());
        of.refuse("statistic-figure", "days", words, "give days: 7");
    }
    days.and_then(|days| u32::try_from(days).ok())
}
