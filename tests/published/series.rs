//! Days and figures over days, on series worked by hand: the arithmetic stands beside each.

use approx::assert_abs_diff_eq;
use chrono::{DateTime, FixedOffset, NaiveDate, TimeDelta, TimeZone};
use gatemix::series::{Count, Coverage, Day, Days, Series};

pub(super) fn date(text: &str) -> NaiveDate {
    text.parse().unwrap()
}

fn pacific() -> FixedOffset {
    FixedOffset::west_opt(8 * 3600).unwrap()
}

fn at(text: &str) -> DateTime<FixedOffset> {
    let local = chrono::NaiveDateTime::parse_from_str(text, "%Y-%m-%dT%H:%M").unwrap();
    pacific().from_local_datetime(&local).unwrap()
}

/// One reading an hour from a moment on; `None` is an hour without one.
fn hourly(from: &str, values: impl IntoIterator<Item = Option<f64>>) -> Series {
    let hour = |(i, value): (usize, Option<f64>)| {
        Some((at(from) + TimeDelta::hours(i64::try_from(i).unwrap()), value?))
    };
    Series::new(values.into_iter().enumerate().filter_map(hour).collect())
}

/// Days with these maxima from a date on, mean 2 and minimum 4 below; `None` is a day that is not valid.
pub(super) fn days(from: &str, maxima: &[Option<f64>]) -> Days {
    let day = |(date, max): (NaiveDate, &Option<f64>)| {
        let max = (*max)?;
        Some((date, Day { mean: max - 2.0, max, min: max - 4.0, hourly_change: None }))
    };
    Days { days: date(from).iter_days().zip(maxima).filter_map(day).collect() }
}

fn of(series: &Series) -> Days {
    series.days(pacific(), Coverage::default())
}

#[test]
fn published_the_mean_of_a_day_is_over_time_not_over_flow() {
    // 18 h at 10 C and 6 h at 13 C: (180 + 78) / 24 = 10.75, whatever flowed
    let values = (0..24).map(|h| Some(if h < 18 { 10.0 } else { 13.0 }));
    let days = of(&hourly("2026-07-01T00:00", values));
    let day = days.on(date("2026-07-01")).unwrap();
    assert_abs_diff_eq!(day.mean, 10.75, epsilon = 1e-12);
    assert_eq!((day.max.to_bits(), day.min.to_bits()), (13.0_f64.to_bits(), 10.0_f64.to_bits()));
    assert_abs_diff_eq!(day.hourly_change.unwrap(), 3.0, epsilon = 1e-12);
}

#[test]
fn published_a_burst_of_readings_weighs_no_more_than_its_hour() {
    // 23 hours of one reading at 10, one hour of sixty at 34: 10 + 24/24 = 11; by readings it would be 27.3
    let mut readings: Vec<_> =
        (0..23).map(|h| (at("2026-07-01T00:00") + TimeDelta::hours(h), 10.0)).collect();
    readings.extend((0..60).map(|m| (at("2026-07-01T23:00") + TimeDelta::minutes(m), 34.0)));
    let days = of(&Series::new(readings));
    assert_abs_diff_eq!(days.on(date("2026-07-01")).unwrap().mean, 11.0, epsilon = 1e-12);
}

#[test]
fn published_a_day_needs_its_hours() {
    let with = |hours: usize| of(&hourly("2026-07-01T00:00", (0..hours).map(|_| Some(10.0))));
    assert!(with(21).days.is_empty());
    assert_eq!(with(22).days.len(), 1);
    // many readings in few hours do not make up for the hours
    let crowded = (0..1200).map(|m| (at("2026-07-01T00:00") + TimeDelta::minutes(m), 10.0)).collect();
    assert!(of(&Series::new(crowded)).days.is_empty());
}

#[test]
fn published_hourly_change_is_between_hours_next_to_each_other_and_over_midnight() {
    // 12 at 23:00, then 9 from midnight on: a change of 3 on the second day; hours 5 and 6 lack, so the step from
    // 9 to 20 over the gap is none of an hour; at 23:00 it falls from 20 to 15
    let first = (0..24).map(|h| Some(if h < 23 { 10.0 } else { 12.0 }));
    let second = (0..24).map(|h| match h {
        0..=4 => Some(9.0),
        5 | 6 => None,
        7..=22 => Some(20.0),
        _ => Some(15.0),
    });
    let days = of(&hourly("2026-07-01T00:00", first.chain(second)));
    let change = |day| days.on(date(day)).unwrap().hourly_change.unwrap();
    assert_abs_diff_eq!(change("2026-07-01"), 2.0, epsilon = 1e-12);
    assert_abs_diff_eq!(change("2026-07-02"), 5.0, epsilon = 1e-12);
}

#[test]
fn published_days_are_of_standard_time() {
    // midnight by UTC is four in the afternoon of the day before: 24 readings from there fall on two days
    let readings = |from: &str| {
        let from: DateTime<FixedOffset> = from.parse().unwrap();
        Series::new((0..24).map(|h| (from + TimeDelta::hours(h), 10.0)).collect())
    };
    assert!(of(&readings("2026-07-01T00:00:00+00:00")).days.is_empty());
    assert_eq!(of(&readings("2026-07-01T08:00:00+00:00")).days.into_keys().next(), Some(date("2026-07-01")));
}

#[test]
fn published_a_value_between_readings_and_none_over_a_gap() {
    let series = Series::new(vec![
        (at("2026-07-01T00:00"), 10.0),
        (at("2026-07-01T03:00"), 13.0),
        (at("2026-07-01T06:01"), 16.0),
    ]);
    assert_abs_diff_eq!(series.at(at("2026-07-01T01:00")).unwrap(), 11.0, epsilon = 1e-12);
    assert_abs_diff_eq!(series.at(at("2026-07-01T03:00")).unwrap(), 13.0);
    assert_abs_diff_eq!(series.at(at("2026-07-01T06:01")).unwrap(), 16.0);
    for outside in ["2026-07-01T04:00", "2026-06-30T23:59", "2026-07-01T06:02"] {
        assert_eq!(series.at(at(outside)), None, "{outside}");
    }
}

#[test]
fn published_seven_day_means_across_gaps() {
    let coverage = Coverage::default();
    let maximum = |days: &Days, last: &str| days.mean_over(date(last), 7, coverage, |d| d.max);
    let v = Some;
    // 14 15 16 17 18 19 20: 119 / 7 = 17; the day after drops 14 and takes 13: 118 / 7
    let whole = days("2026-07-01", &[v(14.0), v(15.0), v(16.0), v(17.0), v(18.0), v(19.0), v(20.0), v(13.0)]);
    assert_abs_diff_eq!(maximum(&whole, "2026-07-07").unwrap(), 17.0, epsilon = 1e-12);
    assert_abs_diff_eq!(maximum(&whole, "2026-07-08").unwrap(), 118.0 / 7.0, epsilon = 1e-12);
    // six days suffice, at the beginning too; five do not
    assert_abs_diff_eq!(maximum(&whole, "2026-07-06").unwrap(), 99.0 / 6.0, epsilon = 1e-12);
    assert_eq!(maximum(&whole, "2026-07-05"), None);
    // 17 lacks: (119 - 17) / 6 = 17; 18 lacks as well: none, until the window has passed both
    let one = days("2026-07-01", &[v(14.0), v(15.0), v(16.0), None, v(18.0), v(19.0), v(20.0)]);
    assert_abs_diff_eq!(maximum(&one, "2026-07-07").unwrap(), 17.0, epsilon = 1e-12);
    let two = days("2026-07-01", &[v(14.0), v(15.0), v(16.0), None, None, v(19.0), v(20.0), v(13.0)]);
    assert_eq!((maximum(&two, "2026-07-07"), maximum(&two, "2026-07-08")), (None, None));
    // minima lie 4 below the maxima, means 2
    assert_abs_diff_eq!(
        one.mean_over(date("2026-07-07"), 7, coverage, |d| d.min).unwrap(),
        13.0,
        epsilon = 1e-12
    );
    // of 3 days all 3 are needed (3 x 6/7 = 2.6), of 14 days 12
    assert_eq!(one.mean_over(date("2026-07-05"), 3, coverage, |d| d.mean), None);
    assert_abs_diff_eq!(
        one.mean_over(date("2026-07-07"), 3, coverage, |d| d.mean).unwrap(),
        17.0,
        epsilon = 1e-12
    );
    assert_eq!([1, 3, 7, 14, 30].map(|n| coverage.of_days(n)), [1, 3, 6, 12, 26]);
}

#[test]
fn published_three_hot_days_and_a_cool_one() {
    let v = Some;
    let days = days("2026-07-01", &[v(19.0), v(20.5), v(19.0), v(17.0), v(19.0), v(19.0), None, v(19.0)]);
    let runs: Vec<u32> =
        (1..=8).map(|d| days.run_above(NaiveDate::from_ymd_opt(2026, 7, d).unwrap(), 18.0)).collect();
    assert_eq!(runs, [1, 2, 3, 0, 1, 2, 0, 1]);
    let least = |day: &str, high| days.least_max(date(day), 3, high);
    // three in a row: by the least of them, 19
    assert_eq!(least("2026-07-03", 18.0), Some(19.0));
    assert_eq!(least("2026-07-04", 18.0), Some(17.0));
    // a day lacks: the cool one answers for the three all the same, hot ones do not
    assert_eq!(least("2026-07-02", 18.0), None);
    assert_eq!(least("2026-07-07", 18.0), None);
    assert_eq!(least("2026-07-07", 19.5), Some(19.0));
    let count = days.count_above(date("2026-07-01"), date("2026-07-08"), 18.0);
    assert_eq!(count, Count { above: 6, valid: 7, days: 8 });
    assert_eq!(count.unknown(), 1);
    // 7 of 8 are enough (8 x 6/7 = 6.9)
    assert_abs_diff_eq!(count.share(Coverage::default()).unwrap(), 6.0 / 7.0, epsilon = 1e-12);
}

#[test]
fn published_degree_days_over_a_gap_new_year_and_29_february() {
    let coverage = Coverage::default();
    // means 5 above the base of 2 on each of 10 days over New Year: 50; one day lacks: its share is that of the others
    let means = [Some(9.0); 10];
    let from = date("2026-12-27");
    let to = date("2027-01-05");
    assert_abs_diff_eq!(
        days("2026-12-27", &means).degree_days(from, to, 2.0, coverage).unwrap(),
        50.0,
        epsilon = 1e-12
    );
    let mut gap = means;
    gap[4] = None;
    assert_abs_diff_eq!(
        days("2026-12-27", &gap).degree_days(from, to, 2.0, coverage).unwrap(),
        50.0,
        epsilon = 1e-12
    );
    gap[5] = None;
    assert_eq!(days("2026-12-27", &gap).degree_days(from, to, 2.0, coverage), None);
    // 27 February to 2 March: 5 days in a leap year, 4 in others
    for (year, count) in [(2028, 5), (2027, 4)] {
        let [from, to] = [(2, 27), (3, 2)].map(|(m, d)| NaiveDate::from_ymd_opt(year, m, d).unwrap());
        let days = days(&from.to_string(), &[Some(5.0); 5]);
        assert_abs_diff_eq!(
            days.degree_days(from, to, 0.0, coverage).unwrap(),
            3.0 * f64::from(count),
            epsilon = 1e-12
        );
    }
    // water below the base takes nothing away
    let mixed = days("2026-07-01", &[Some(9.0), Some(1.0)]);
    assert_abs_diff_eq!(
        mixed.degree_days(date("2026-07-01"), date("2026-07-02"), 2.0, coverage).unwrap(),
        5.0,
        epsilon = 1e-12
    );
}

#[test]
fn published_change_from_yesterday_and_difference_from_another_series() {
    let here = days("2026-07-01", &[Some(14.0), Some(11.5), None, Some(12.0)]);
    assert_abs_diff_eq!(here.daily_change(date("2026-07-02")).unwrap(), 2.5, epsilon = 1e-12);
    assert_eq!(here.daily_change(date("2026-07-01")), None);
    assert_eq!(here.daily_change(date("2026-07-04")), None);
    let differ = here.minus(&days("2026-07-02", &[Some(10.0), Some(10.0), Some(15.0)]));
    let maxima: Vec<_> = differ.days.iter().map(|(d, day)| (d.to_string(), day.max)).collect();
    assert_eq!(maxima, [("2026-07-02".into(), 1.5), ("2026-07-04".into(), -3.0)]);
}
