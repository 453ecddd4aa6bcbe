//! Rates of change: what a stretch of the way comes to within an hour and within a day, and when each piece can begin.
//!
//! Methods: `docs/methods.md`, section 11.

use crate::mix::limits::{Check, Of, Rule};
use crate::site::Limits;

use super::works::Value;

/// An hour, min.
const HOUR_MIN: f64 = 60.0;
/// A day, min.
const DAY_MIN: f64 = 24.0 * HOUR_MIN;
/// A change greater than its limit by no more than this share keeps it (choice: round-off of sums).
const SAME: f64 = 1e-9;

/// A limit on how far the release may move within a window.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Rate {
    rule: Rule,
    most: f64,
    window_min: f64,
}

impl Rate {
    fn read(self, value: Value) -> Option<f64> {
        match self.rule {
            Rule::FlowChangePerHour | Rule::FlowChangePerDay => Some(value.flow_m3s),
            _ => value.temperature_c,
        }
    }
}

/// Least and greatest of a figure so far.
#[derive(Debug, Clone, Copy)]
struct Span(f64, f64);

impl Span {
    const NONE: Self = Self(f64::INFINITY, f64::NEG_INFINITY);

    fn with(self, value: Option<f64>) -> Self {
        value.map_or(self, |v| Self(self.0.min(v), self.1.max(v)))
    }

    fn width(self) -> f64 {
        (self.1 - self.0).max(0.0)
    }
}

/// The rates of change a site limits.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Rates(Vec<Rate>);

impl Rates {
    pub(super) fn of(limits: &Limits) -> Self {
        let of = [
            (Rule::FlowChangePerHour, limits.flow_change_m3s_per_hour, HOUR_MIN),
            (Rule::FlowChangePerDay, limits.flow_change_m3s_per_day, DAY_MIN),
            (Rule::TemperatureChangePerHour, limits.temperature_change_c_per_hour, HOUR_MIN),
            (Rule::TemperatureChangePerDay, limits.temperature_change_c_per_day, DAY_MIN),
        ];
        let rate = |(rule, most, window_min): (Rule, Option<f64>, f64)| {
            most.map(|most| Rate { rule, most, window_min })
        };
        Self(of.into_iter().filter_map(rate).collect())
    }

    /// The first rate that values break when they follow one another without a halt.
    pub(super) fn broken(&self, values: &[Value]) -> Option<Check> {
        self.0.iter().find_map(|rate| {
            let span = values.iter().fold(Span::NONE, |span, v| span.with(rate.read(*v)));
            let found = span.width();
            let check = Check {
                rule: rate.rule,
                of: Of::Whole,
                item: 0,
                found,
                bound: rate.most,
                room: rate.most - found,
            };
            (found > rate.most * (1.0 + SAME)).then_some(check)
        })
    }

    /// Least time that a change between two values needs by itself, min.
    pub(super) fn minutes(&self, from: Value, to: Value) -> f64 {
        let of = |rate: &Rate| match (rate.read(from), rate.read(to)) {
            (Some(a), Some(b)) if rate.most > 0.0 => (b - a).abs() / rate.most * rate.window_min,
            _ => 0.0,
        };
        self.0.iter().map(of).fold(0.0, f64::max)
    }

    /// When each piece of the way can begin at the earliest, min after the first, so that within no hour and no day the
    /// release moves by more than it may. A piece is done at once; two pieces an hour apart do not lie within one hour.
    ///
    /// `pieces` are the values each goes through, the last the one it leaves behind; `before` is what left the dam
    /// before the first.
    pub(super) fn earliest_min(&self, before: Value, pieces: &[Vec<Value>]) -> Vec<f64> {
        let mut out: Vec<f64> = Vec::with_capacity(pieces.len());
        for last in 0..pieces.len() {
            let mut at = out.last().copied().unwrap_or(0.0);
            for rate in &self.0 {
                let mut span = Span::NONE;
                for first in (0..=last).rev() {
                    let start = match first.checked_sub(1) {
                        Some(earlier) => pieces[earlier].last().copied().unwrap_or(before),
                        None => before,
                    };
                    span = pieces[first].iter().fold(span, |span, v| span.with(rate.read(*v)));
                    span = span.with(rate.read(start));
                    if span.width() > rate.most * (1.0 + SAME) {
                        // pieces before this one began no later
                        at = out.get(first).map_or(at, |begun| at.max(begun + rate.window_min));
                        break;
                    }
                }
            }
            out.push(at);
        }
        out
    }
}
