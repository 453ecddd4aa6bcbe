//! Checks of what the site file says was learned.

use std::ops::RangeInclusive;

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::site::{Learned, Outlet, Raw, RawLearned, level_groups};
use crate::units::say;

/// Biases that a gauge can show, C (choice: beyond them something else is wrong).
const BIAS_C: RangeInclusive<f64> = -10.0..=10.0;
/// Zone factors (choice, wide: the literature spreads from 0.7 to 1.15).
const ZONE_FACTOR: RangeInclusive<f64> = 0.5..=1.5;
/// Ends of its interval (choice).
const ZONE_RANGE: RangeInclusive<f64> = 0.2..=3.0;
/// Oxygen gained or lost on the way to the gauge, mg/L (choice).
const GAIN_MG_L: RangeInclusive<f64> = -10.0..=10.0;
/// What the method may miss, C (choice).
const RELEASE_C: RangeInclusive<f64> = 0.0..=5.0;
/// The same, mg/L (choice).
const RELEASE_MG_L: RangeInclusive<f64> = 0.0..=5.0;
/// Days learning looks back (choice).
const WINDOW_DAYS: RangeInclusive<u64> = 14..=36_500;

const CURE: &str = "paste the lines that `gatemix log` gives";

/// What was learned; `None` where nothing is given, or it is refused.
pub(super) fn learned(raw: &Raw, outlets: &[Option<Outlet>], problems: &mut Vec<Problem>) -> Option<Learned> {
    window_days(raw, problems);
    let given = &raw.learned;
    if *given == RawLearned::default() {
        return None;
    }
    let before = problems.len();
    figures(given, problems);
    let window = window(given, problems);
    let by_level_c = by_level(given, outlets, problems);
    if given.n.is_none_or(|n| n == 0) {
        let words = match given.n {
            Some(_) => "nothing is learned from 0 days",
            None => "how many days it was learned from is not given",
        };
        problems.push(
            Problem::refused("learned", words, "give `n`, the days it was learned from").at("learned.n"),
        );
    }
    (problems.len() == before).then(|| Learned {
        bias_c: given.bias_c,
        by_level_c,
        zone_factor: given.zone_factor,
        zone_range: given.zone_range,
        oxygen_gain_mg_l: given.oxygen_gain_mg_l,
        window,
        n: given.n.unwrap_or(0),
        release_c: given.release_c,
        release_mg_l: given.release_mg_l,
    })
}

fn window_days(raw: &Raw, problems: &mut Vec<Problem>) {
    if raw.learning_days.is_some_and(|days| !WINDOW_DAYS.contains(&days)) {
        let [low, high] = [WINDOW_DAYS.start(), WINDOW_DAYS.end()];
        let words = format!("window_days must be {low} to {high}");
        problems.push(Problem::refused("learning", words, "730 are two seasons").at("learning.window_days"));
    }
}

/// Every figure within what is plausible; the zone factor with its range about it.
fn figures(given: &RawLearned, problems: &mut Vec<Problem>) {
    let mut refuse = |key: &str, words: String, cure: &str| {
        problems.push(Problem::refused("learned", words, cure).at(format!("learned.{key}")));
    };
    let warmth = |key: &str, value: Option<f64>, range: &RangeInclusive<f64>| {
        let off = value.filter(|v| !range.contains(v))?;
        let [low, high] = [say::dc(*range.start(), 0), say::dc(*range.end(), 0)];
        Some((key.to_owned(), format!("{key} {} lies outside {low} to {high}", say::dc(off, 2))))
    };
    let number = |key: &str, value: Option<f64>, range: &RangeInclusive<f64>, unit: &str| {
        let off = value.filter(|v| !range.contains(v))?;
        let (low, high) = (range.start(), range.end());
        Some((key.to_owned(), format!("{key} {off:.2}{unit} lies outside {low} to {high}{unit}")))
    };
    let levels = given.by_level_c.iter().map(|(name, bias_c)| {
        let off = warmth("bias", Some(*bias_c), &BIAS_C)?;
        Some((format!("by_level.{name}"), off.1))
    });
    let range = given.zone_range;
    let found = [
        warmth("bias", given.bias_c, &BIAS_C),
        warmth("release", given.release_c, &RELEASE_C),
        number("zone_factor", given.zone_factor, &ZONE_FACTOR, ""),
        number("zone_range", range.map(|r| r.0), &ZONE_RANGE, ""),
        number("zone_range", range.map(|r| r.1), &ZONE_RANGE, ""),
        number("oxygen_gain", given.oxygen_gain_mg_l, &GAIN_MG_L, " mg/L"),
        number("release_oxygen", given.release_mg_l, &RELEASE_MG_L, " mg/L"),
    ];
    for (key, words) in found.into_iter().chain(levels).flatten() {
        refuse(&key, words, CURE);
    }
    match (given.zone_factor, range) {
        (Some(factor), Some((low, high)))
            if ZONE_FACTOR.contains(&factor) && !(low..=high).contains(&factor) =>
        {
            let words = format!("zone_range {low:.2} to {high:.2} does not hold the zone factor {factor:.2}");
            refuse("zone_range", words, CURE);
        }
        (Some(_), None) => {
            refuse("zone_factor", "the zone factor has no zone_range".into(), "give its 80 % interval");
        }
        (None, Some(_)) => {
            refuse("zone_range", "the zone_range has no zone_factor".into(), "give both, or neither");
        }
        _ => {}
    }
}

fn window(given: &RawLearned, problems: &mut Vec<Problem>) -> Option<(NaiveDate, NaiveDate)> {
    let mut refuse = |words: String| {
        let cure = "write window: [first day, last day], as YYYY-MM-DD";
        problems.push(Problem::refused("learned", words, cure).at("learned.window"));
    };
    let Some([from, to]) = &given.window else {
        refuse("of which days it was learned is not given".into());
        return None;
    };
    let mut day = |text: &String| {
        let day = text.parse().ok();
        if day.is_none() {
            refuse(format!("`{text}` is not a date"));
        }
        day
    };
    let (from, to): (NaiveDate, NaiveDate) = day(from).zip(day(to))?;
    if from > to {
        refuse(format!("the window ends on {to}, before it begins on {from}"));
    }
    Some((from, to))
}

/// The bias of each level named by one of its outlets.
fn by_level(
    given: &RawLearned,
    outlets: &[Option<Outlet>],
    problems: &mut Vec<Problem>,
) -> Vec<(usize, f64)> {
    // an outlet that is refused leaves no levels to speak of
    let Some(outlets) = outlets.iter().cloned().collect::<Option<Vec<Outlet>>>() else { return Vec::new() };
    let groups = level_groups(&outlets);
    let mut out: Vec<(usize, f64)> = Vec::new();
    for (name, bias_c) in &given.by_level_c {
        let level = groups.iter().position(|group| group.iter().any(|&o| outlets[o].name == *name));
        let problem = match level {
            None => Some((format!("`{name}` is not an outlet"), "name one outlet of each level")),
            Some(level) if out.iter().any(|l| l.0 == level) => {
                Some((format!("the level of `{name}` is named twice"), "name one outlet of each level"))
            }
            Some(level) => {
                out.push((level, *bias_c));
                None
            }
        };
        if let Some((words, cure)) = problem {
            problems.push(Problem::refused("learned", words, cure).at(format!("learned.by_level.{name}")));
        }
    }
    out.sort_unstable_by_key(|l| l.0);
    out
}
