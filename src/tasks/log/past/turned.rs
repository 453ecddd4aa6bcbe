//! What became of each decision: what it expected when it was written, against the gauges while it stood.

use std::collections::BTreeMap;

use chrono::NaiveDate;

use crate::record::line::Expected;
use crate::record::{Decided, Row, Score};
use crate::series::{Daily, Days};

use super::Turned;
use super::days::Known;
use super::stood::Tellers;

/// Every decision that stood on one of the days. Days on which the gates were changed, and those of an event, are not
/// held against it.
pub(super) fn turned(tellers: &Tellers, days: &[Known], gauges: &BTreeMap<String, Daily>) -> Vec<Turned> {
    tellers.decisions().filter_map(|decided| one(decided, days, gauges)).collect()
}

fn one(decided: &Decided, days: &[Known], gauges: &BTreeMap<String, Daily>) -> Option<Turned> {
    let is_its = |day: &&Known| day.stood.as_ref().is_some_and(|stood| stood.decision == Some(decided.id));
    let stood: Vec<&Known> = days.iter().filter(is_its).collect();
    let span = (stood.first()?.date, stood.last()?.date);
    let held: Vec<NaiveDate> =
        stood.iter().filter(|day| day.event.is_none() && !day.changed).map(|day| day.date).collect();
    let place = |expected: &Expected| {
        let gauge = gauges.get(&expected.point)?;
        let score = |value: Option<f64>, band: Option<[f64; 2]>, of: &Days| {
            let row = |date: &NaiveDate| Row {
                date: *date,
                expected: value,
                band: band.map(|[low, high]| (low, high)),
                measured: of.on(*date).map(|day| day.mean),
                level: None,
                flow_m3s: None,
            };
            Score::of(&held.iter().map(row).collect::<Vec<_>>())
        };
        Some((
            expected.point.clone(),
            score(expected.temperature_c, expected.band_c, &gauge.temperature_c),
            score(expected.oxygen_mg_l, expected.band_oxygen_mg_l, &gauge.oxygen_mg_l),
        ))
    };
    let places = decided.decision.expected.iter().filter_map(place).collect();
    Some(Turned { id: decided.id, days: span, places })
}
