//! Random rivers below a random dam, with rules in every statistic at the dam and at a point, and a record of the days
//! before. All of them are invented.

use std::sync::Arc;

use chrono::{Days, TimeDelta};
use gatemix::mix::Day;
use gatemix::river::Conditions;
use gatemix::series::{Record, Series};
use gatemix::site::{Raw, RawInflow, RawPoint, RawReach, RawRiver, RawTarget, Site, Yearly};
use gatemix::target::Statistic;

use super::dice::Dice;
use crate::columns::Pool;
use crate::mix::sites::day;

pub(super) const POINT: &str = "Mill Bridge";
const STREAM: &str = "Tansy Creek";

/// A river of one reach with a side stream and a point, and rules of many kinds beside those there are.
pub(super) fn add(raw: &mut Raw, water: &Pool, dice: &mut Dice) {
    let length_m = dice.between(2e3..4e4);
    let hours = dice.between(0.5..20.0);
    let inflow = RawInflow {
        name: Some(STREAM.into()),
        at_m: Some(dice.between(0.0..1.0) * length_m),
        flow_m3s: Some(Yearly::Constant(dice.between(0.1..20.0))),
        temperature_c: Some(Yearly::Constant(dice.between(4.0..24.0))),
        oxygen_mg_l: Some(Yearly::Constant(dice.between(5.0..11.0))),
        ..RawInflow::default()
    };
    raw.river = Some(RawRiver {
        equilibrium_c: Some(Yearly::Constant(dice.between(5.0..28.0))),
        exchange_w_m2_c: Some(Yearly::Constant(dice.between(5.0..60.0))),
        reaches: vec![RawReach {
            name: Some("Upper".into()),
            length_m: Some(length_m),
            width_m: Some(dice.between(15.0..80.0)),
            depth_m: Some(dice.between(0.4..3.0)),
            travel_h: vec![(2.0, hours), (80.0, 0.5 * hours)],
            inflows: if dice.once_in(2) { vec![inflow] } else { Vec::new() },
            ..RawReach::default()
        }],
        points: vec![RawPoint {
            name: Some(POINT.into()),
            at_m: Some(dice.between(0.1..1.0) * length_m),
            ..RawPoint::default()
        }],
        ..RawRiver::default()
    });
    let with_stream = raw.river.as_ref().is_some_and(|r| !r.reaches[0].inflows.is_empty());
    raw.targets.extend((0..=dice.below(4)).map(|i| target(i, water, with_stream, dice)));
}

fn target(i: usize, water: &Pool, with_stream: bool, dice: &mut Dice) -> RawTarget {
    let names = Statistic::NAMES.map(|(name, _)| name);
    let statistic = dice.one_of(&names);
    let kind = Statistic::parse(statistic).unwrap();
    let single = !kind.is_difference() && !kind.is_sum() && !kind.counts_days();
    let middle_c = water.samples[dice.below(water.samples.len())].temperature_c;
    let reference = single && dice.once_in(4);
    let (low_c, high_c) = match kind {
        _ if reference => (dice.maybe(2, -6.0..0.0), Some(dice.between(0.0..4.0))),
        _ if kind.is_difference() => (None, Some(dice.between(0.0..3.0))),
        _ if kind.is_sum() => (dice.maybe(2, 0.0..60.0), Some(dice.between(60.0..140.0))),
        _ if kind.counts_days() => (None, Some(middle_c + dice.between(-2.0..3.0))),
        _ => (dice.maybe(2, middle_c - 4.0..middle_c), Some(middle_c + dice.between(0.0..3.0))),
    };
    let preferred = single && !reference && dice.once_in(2);
    let floor = dice.below(4);
    RawTarget {
        name: Some(format!("river rule {i}")),
        statistic: Some(statistic.into()),
        days: match kind {
            Statistic::MeanOfDays(_) | Statistic::DaysInARow(_) => Some(2 + dice.below(5)),
            Statistic::DaysAbove(_) => Some(dice.below(6)),
            _ => None,
        },
        days_share: matches!(kind, Statistic::ShareOfDays(_)).then(|| dice.between(0.0..0.9)),
        base_c: kind.is_sum().then(|| dice.between(0.0..8.0)),
        since: kind.is_sum().then(|| (day() - Days::new(8)).format("%m-%d").to_string()),
        from: Some((day() - Days::new(8)).format("%m-%d").to_string()),
        to: Some((day() + Days::new(8)).format("%m-%d").to_string()),
        low_c,
        high_c,
        preferred_c: preferred.then_some(middle_c),
        reference: reference.then(|| if with_stream { STREAM.into() } else { "natural".into() }),
        oxygen_min_mg_l: (floor == 0).then(|| dice.between(2.0..10.0)),
        oxygen_min_share: (floor == 1).then(|| dice.between(0.2..1.1)),
        oxygen_statistic: (floor < 2).then(|| dice.one_of(&["daily_min", "daily_mean", "7dmin"]).into()),
        point: dice.once_in(2).then(|| POINT.into()),
        soft: dice.once_in(6),
        priority: Some(1 + dice.below(2)),
        ..RawTarget::default()
    }
}

/// The day with a record of the dam and of the point: some of the ten days before, each with one temperature.
pub(super) fn recorded(site: &Site, water: &Pool, seed: u64) -> Day {
    let dice = &mut Dice::new(seed ^ 0x0005_7A71_0000);
    let mut conditions = Conditions::default();
    for place in ["dam", POINT] {
        let (mut warm, mut air) = (Vec::new(), Vec::new());
        for back in (1..=10).filter(|_| !dice.once_in(8)).collect::<Vec<u64>>() {
            let midnight = (day() - Days::new(back)).and_hms_opt(0, 0, 0).unwrap();
            let midnight = midnight.and_local_timezone(site.offset).unwrap();
            let (t, o) =
                (water.samples[dice.below(water.samples.len())].temperature_c, dice.between(3.0..11.0));
            for hour in 0..24 {
                warm.push((midnight + TimeDelta::hours(hour), t));
                air.push((midnight + TimeDelta::hours(hour), o));
            }
        }
        let share = Series::new(air.iter().map(|(time, o)| (*time, o / 10.0)).collect());
        let record = Record {
            temperature_c: Series::new(warm),
            oxygen_mg_l: Series::new(air),
            oxygen_share: share,
            ..Record::default()
        };
        if !dice.once_in(3) {
            conditions.observed.insert(place.into(), record);
        }
    }
    Day::new(site, day(), Arc::new(conditions))
}
