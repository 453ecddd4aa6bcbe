//! What stations recorded, against the rules.

use chrono::NaiveDate;

use crate::mix::reference_days;
use crate::series::Daily;
use crate::target::{self, observed as held};
use crate::tasks::Context;

/// A rule with what was recorded at its point.
#[derive(Debug, Clone, PartialEq)]
pub struct Observed {
    /// Its index in the targets.
    pub target: usize,
    /// The record held against it.
    pub record: target::Observed,
}

/// Every rule with a record at its point, in the order of the site; also those not valid today.
pub(super) fn observed(context: &Context) -> Vec<Observed> {
    observed_on(context, &|_| true)
}

/// The same over the days that are wanted; what a statistic takes from days before them is not cut off.
pub(in crate::tasks) fn observed_on(
    context: &Context,
    is_wanted: &dyn Fn(NaiveDate) -> bool,
) -> Vec<Observed> {
    let (site, conditions) = (context.site(), &context.conditions);
    let daily = |point: &str| -> Option<Daily> {
        Some(conditions.observed.get(point)?.daily(site.offset, site.coverage))
    };
    let one = |(target, rule): (usize, &target::Target)| {
        let station = daily(&rule.point)?;
        let dates = station.temperature_c.days.keys().copied();
        let reference = rule.reference.as_ref().map(|r| reference_days(site, r, conditions, dates));
        let valid = |date| is_wanted(date) && rule.valid_on(date, site.year_type.as_deref());
        let record = held(rule, &station, reference.as_ref(), site.coverage, valid);
        let bounds = [&record.temperature, &record.oxygen, &record.oxygen_share];
        let told = bounds.into_iter().flatten().any(|held| !held.days.is_empty());
        told.then_some(Observed { target, record })
    };
    site.targets.iter().enumerate().filter_map(one).collect()
}
