//! Records: the order of rows is nothing, more coverage asked gives no more days, what is constant stays so.

use chrono::{DateTime, FixedOffset, TimeDelta};
use gatemix::series::{Coverage, Daily, Days, Series};
use gatemix::target::{Statistic, Target, observed};
use proptest::collection::vec;
use proptest::prelude::*;

use crate::columns::config;

fn offset() -> FixedOffset {
    FixedOffset::east_opt(-7 * 3600).unwrap()
}

fn start() -> DateTime<FixedOffset> {
    "2026-07-01T00:00:00-07:00".parse().unwrap()
}

/// Readings in quarters of an hour over some twelve days, with many gaps.
fn readings() -> impl Strategy<Value = Vec<(DateTime<FixedOffset>, f64)>> {
    let hour = (0..4_i64, 5.0..25.0_f64, prop::bool::weighted(0.95));
    vec(hour, 24..300).prop_map(|hours| {
        let reading = |(i, (quarter, value, there)): (usize, (i64, f64, bool))| {
            let time = start() + TimeDelta::minutes(60 * i64::try_from(i).unwrap() + 15 * quarter);
            there.then_some((time, value))
        };
        hours.into_iter().enumerate().filter_map(reading).collect()
    })
}

fn days(readings: &[(DateTime<FixedOffset>, f64)], coverage: Coverage) -> Days {
    Series::new(readings.to_vec()).days(offset(), coverage)
}

fn station(temperature_c: Days) -> Daily {
    let ends = temperature_c.days.keys().next().copied().zip(temperature_c.days.keys().last().copied());
    Daily { temperature_c, recorded: ends, ..Daily::default() }
}

proptest! {
    #![proptest_config(config(200))]

    #[test]
    fn law_the_order_of_rows_is_nothing(of in readings(), turn in 0..300_usize) {
        let mut turned = of.clone();
        turned.rotate_left(turn % of.len().max(1));
        turned.reverse();
        let coverage = Coverage { hours: 20, days: 6 };
        prop_assert_eq!(days(&of, coverage), days(&turned, coverage));
    }

    #[test]
    fn law_asking_for_more_hours_or_days_never_gives_more_answers(
        of in readings(), hours in 1..24_usize, week in 1..7_usize, n in 1..20_u32
    ) {
        let loose = days(&of, Coverage { hours, days: 6 });
        let strict = days(&of, Coverage { hours: hours + 1, days: 6 });
        prop_assert!(strict.days.iter().all(|(date, day)| loose.on(*date) == Some(day)));
        let mean = |days: &Days, week, date| days.mean_over(date, n, Coverage { hours, days: week }, |d| d.mean);
        for date in start().date_naive().iter_days().take(15) {
            let more = mean(&loose, week, date);
            prop_assert!(more.is_some() || mean(&loose, week + 1, date).is_none());
            if let Some(mean) = more {
                let (least, most) = loose.days.values().fold((f64::MAX, f64::MIN), |(a, b), d| {
                    (a.min(d.mean), b.max(d.mean))
                });
                prop_assert!(least - 1e-9 <= mean && mean <= most + 1e-9);
            }
        }
    }

    #[test]
    fn law_a_constant_record_is_itself_by_every_figure(of in readings(), value in 0.0..30.0_f64) {
        let constant: Vec<_> = of.iter().map(|r| (r.0, value)).collect();
        let coverage = Coverage::default();
        let days = days(&constant, coverage);
        for (date, day) in &days.days {
            prop_assert!((day.mean - value).abs() < 1e-9 && day.max == value && day.min == value);
            prop_assert!(day.hourly_change.is_none_or(|c| c < 1e-9));
            prop_assert_eq!(days.run_above(*date, value), 0);
            for statistic in [Statistic::DailyMean, Statistic::SevenDayMeanOfMaxima, Statistic::MeanOfDays(3)] {
                let rule = Target { statistic, high_c: Some(value), low_c: Some(value), ..Target::default() };
                prop_assert!(!rule.observed_on(&days, *date, coverage).outside());
            }
        }
    }

    #[test]
    fn law_the_tallies_of_months_and_seasons_add_up(of in readings(), high in 10.0..25.0_f64) {
        let rule = Target { statistic: Statistic::DailyMax, high_c: Some(high), ..Target::default() };
        let coverage = Coverage { hours: 20, days: 6 };
        let held = observed(&rule, &station(days(&of, coverage)), None, coverage, |_| true).temperature;
        if let Some(held) = held {
            let all = held.all;
            prop_assert_eq!(all.judged + all.unknown, u32::try_from(held.days.len()).unwrap());
            prop_assert!(all.longest_run <= all.over + all.under && all.over + all.under <= all.judged);
            prop_assert_eq!(all.worst.is_some(), all.over + all.under > 0);
            for parts in [held.months.values().collect::<Vec<_>>(), held.seasons.values().collect()] {
                prop_assert_eq!(parts.iter().map(|t| t.judged).sum::<u32>(), all.judged);
                prop_assert_eq!(parts.iter().map(|t| t.over).sum::<u32>(), all.over);
                prop_assert!((parts.iter().map(|t| t.sum_outside).sum::<f64>() - all.sum_outside).abs() < 1e-9);
                prop_assert!(parts.iter().all(|t| t.longest_run <= all.longest_run));
            }
        }
    }

    /// A warmer river is over at least as often, and no day is less far out.
    #[test]
    fn law_a_warmer_record_is_over_no_less(of in readings(), by in 0.0..3.0_f64) {
        let warmer: Vec<_> = of.iter().map(|r| (r.0, r.1 + by)).collect();
        let coverage = Coverage { hours: 20, days: 5 };
        let [cool, warm] = [days(&of, coverage), days(&warmer, coverage)];
        for statistic in Statistic::NAMES.map(|n| n.1) {
            if matches!(statistic, Statistic::HourlyChange | Statistic::DailyChange) {
                continue;
            }
            let rule = Target { statistic, high_c: Some(16.0), ..Target::default() };
            for date in cool.days.keys() {
                let out = |days: &Days| rule.observed_on(days, *date, coverage).by;
                if let (Some(cool), Some(warm)) = (out(&cool), out(&warm)) {
                    prop_assert!(warm >= cool - 1e-9, "{:?} on {}", statistic, date);
                }
            }
        }
    }
}
