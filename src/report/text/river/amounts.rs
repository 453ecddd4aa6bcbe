//! The values of a rule's statistic in its own unit.

use crate::target::{Statistic, Target};
use crate::units::{Dimension, System, figure, show};

/// A value of the rule's statistic, such as `29.0 C`, `3 days`, `12 %`, `145 F days`.
pub(super) fn value(rule: &Target, value: f64, system: System) -> String {
    match rule.statistic {
        Statistic::DaysAbove(_) | Statistic::ShareOfDays(_) | Statistic::DegreeDays { .. } => {
            by(rule, value, system)
        }
        _ => show(value, rule.dimension(), system, 1),
    }
}

/// How far outside, in the same unit; temperatures as a difference.
pub(in crate::report) fn by(rule: &Target, by: f64, system: System) -> String {
    match rule.statistic {
        Statistic::DaysAbove(_) => super::record::days_of(by),
        Statistic::ShareOfDays(_) => format!("{:.0} %", 100.0 * by),
        Statistic::DegreeDays { .. } => degree_days(by, system),
        _ => show(by, Dimension::TemperatureDifference, system, 1),
    }
}

/// A sum of degrees over days.
pub(in crate::report) fn degree_days(c_days: f64, system: System) -> String {
    let unit = system.unit(Dimension::TemperatureDifference);
    let value = unit.from_si(c_days);
    // what is outside is not told as nothing
    let decimals = u8::from(value > 0.0 && value < 9.95);
    format!("{} {} days", figure(c_days, unit, decimals), unit.symbol())
}

/// The unit of its values in SI, for programs.
pub fn unit_si(rule: &Target) -> &'static str {
    match rule.statistic {
        Statistic::DaysAbove(_) => "days",
        Statistic::ShareOfDays(_) => "share",
        Statistic::DegreeDays { .. } => "C days",
        _ => "C",
    }
}
