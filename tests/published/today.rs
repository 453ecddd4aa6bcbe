//! What a rule asks of today's water, by records worked by hand.
#![expect(clippy::unwrap_used, reason = "helpers of tests, outside a test function")]

use approx::assert_abs_diff_eq;
use chrono::NaiveDate;
use gatemix::series::{Coverage, Daily, Day, Days};
use gatemix::target::{
    Air, Figure, Known, OxygenStatistic, Reference, Span, Statistic, Target, Today, YearDay, today,
};

const TODAY: &str = "2026-07-15";

fn date(text: &str) -> NaiveDate {
    text.parse().unwrap()
}

/// A record whose days before today have these daily maxima, the last yesterday; means a degree, minima two below.
/// `None` is a day without a valid record.
fn record(maxima: &[Option<f64>]) -> Daily {
    let first = date(TODAY) - chrono::Days::new(maxima.len() as u64);
    let days = first.iter_days().zip(maxima).filter_map(|(day, max)| {
        let max = (*max)?;
        Some((day, Day { mean: max - 1.0, max, min: max - 2.0, hourly_change: Some(0.5) }))
    });
    Daily { temperature_c: Days { days: days.collect() }, ..Daily::default() }
}

fn all(maxima: &[f64]) -> Daily {
    record(&maxima.iter().map(|m| Some(*m)).collect::<Vec<_>>())
}

fn rule(statistic: Statistic, low_c: Option<f64>, high_c: Option<f64>) -> Target {
    Target { statistic, low_c, high_c, ..Target::default() }
}

fn known(days: &Daily) -> Known<'_> {
    Known { days: Some(days), ..Known::NOTHING }
}

fn asks(rule: &Target, days: &Daily) -> Today {
    today(rule, date(TODAY), known(days)).unwrap()
}

fn ends(of: &Today, low: Option<f64>, high: Option<f64>) {
    assert_eq!((of.low_c.is_some(), of.high_c.is_some()), (low.is_some(), high.is_some()), "{of:?}");
    assert_abs_diff_eq!(of.low_c.unwrap_or(0.0), low.unwrap_or(0.0), epsilon = 1e-9);
    assert_abs_diff_eq!(of.high_c.unwrap_or(0.0), high.unwrap_or(0.0), epsilon = 1e-9);
}

#[test]
fn scenario_without_a_record_every_day_is_like_today() {
    let unknown = |statistic, low, high| today(&rule(statistic, low, high), date(TODAY), Known::NOTHING);
    for (name, statistic) in Statistic::NAMES {
        let low = Some(9.0).filter(|_| !statistic.counts_days() && !statistic.is_difference());
        let Ok(of) = unknown(statistic, low, Some(14.0)) else {
            // a change needs the day before, a sum all of them
            assert!(statistic == Statistic::DailyChange || statistic.is_sum(), "{name}");
            continue;
        };
        assert!(!of.observed, "{name}");
        ends(&of, low, Some(14.0));
        assert_abs_diff_eq!(of.value(11.25), 11.25, epsilon = 0.0);
    }
}

/// Six maxima of 17 to 19.5 sum to 109.5; a mean of 18 over seven days leaves the seventh 126 - 109.5 = 16.5.
#[test]
fn scenario_a_seven_day_mean_leaves_today_its_seventh() {
    let maxima = [30.0, 17.0, 17.5, 18.0, 18.5, 19.0, 19.5];
    let of = asks(&rule(Statistic::SevenDayMeanOfMaxima, None, Some(18.0)), &all(&maxima));
    assert_eq!((of.figure, of.observed), (Figure::Max, true));
    ends(&of, None, Some(16.5));
    assert_abs_diff_eq!(of.value(16.5), 18.0, epsilon = 1e-12);
    assert_abs_diff_eq!(of.value(20.0), 129.5 / 7.0, epsilon = 1e-12);
    assert_abs_diff_eq!(of.outside_c(17.0), 0.5, epsilon = 1e-9);
    // the buffer is kept of the mean: 17.8 over seven days leaves 15.1
    let buffered = Target { buffer_c: 0.2, ..rule(Statistic::SevenDayMeanOfMaxima, None, Some(18.0)) };
    ends(&asks(&buffered, &all(&maxima)), None, Some(15.1));
    // one day missing: a sixth of what is left, 6 x 18 - (109.5 - 18) = 16.5
    let mut gap = maxima.map(Some);
    gap[3] = None;
    let of = asks(&rule(Statistic::SevenDayMeanOfMaxima, None, Some(18.0)), &record(&gap));
    assert_abs_diff_eq!(of.times, 1.0 / 6.0, epsilon = 1e-12);
    ends(&of, None, Some(16.5));
    // two days missing are one too many: as without a record, and it says so
    gap[5] = None;
    let of = asks(&rule(Statistic::SevenDayMeanOfMaxima, None, Some(18.0)), &record(&gap));
    ends(&of, None, Some(18.0));
    assert!(!of.observed && of.words.unwrap().contains("4 of the 6 days before"));
}

/// Means 10, 11, 12 before today: four days of at most 12 leave today 48 - 33 = 15.
#[test]
fn scenario_a_mean_of_days_leaves_today_the_rest() {
    let of = asks(&rule(Statistic::MeanOfDays(4), Some(11.0), Some(12.0)), &all(&[40.0, 11.0, 12.0, 13.0]));
    assert_eq!(of.figure, Figure::Mean);
    ends(&of, Some(11.0), Some(15.0));
}

#[test]
fn scenario_days_in_a_row_bind_today_only_when_those_before_were_above() {
    let three = rule(Statistic::DaysInARow(3), None, Some(20.0));
    for (before, high, count) in [
        (&[21.0, 21.0][..], Some(20.0), 3.0),
        (&[19.0, 21.0][..], None, 2.0),
        (&[21.0, 20.0][..], None, 1.0),
        (&[21.0, 21.0, 21.0, 21.0][..], Some(20.0), 5.0),
    ] {
        let of = asks(&three, &all(before));
        ends(&of, None, high);
        assert_abs_diff_eq!(of.count.unwrap().with_today(true), count, epsilon = 1e-9);
    }
    // yesterday without a record: nothing is known of a row
    let of = asks(&three, &record(&[Some(21.0), None]));
    assert!(!of.observed);
    ends(&of, None, Some(20.0));
}

/// Of two days before today above 20 and one between them not recorded, today may be the fourth in a row.
#[test]
fn scenario_a_day_not_recorded_may_belong_to_a_row() {
    let gap = record(&[Some(21.0), None, Some(21.0)]);
    let of = asks(&rule(Statistic::DaysInARow(3), None, Some(20.0)), &gap);
    ends(&of, None, Some(20.0));
    assert!(of.words.unwrap().contains("1 of the 2 days before is not recorded"));
    let of = asks(&rule(Statistic::DaysInARow(4), None, Some(20.0)), &gap);
    ends(&of, None, Some(20.0));
    assert!(of.words.unwrap().contains("1 of the 3 days before is not recorded"));
    // five it cannot be where the day before those three lay below
    let below = record(&[Some(19.0), Some(21.0), None, Some(21.0)]);
    let of = asks(&rule(Statistic::DaysInARow(5), None, Some(20.0)), &below);
    ends(&of, None, None);
    assert_eq!((of.observed, of.words), (true, None));
    // yesterday missing after a day below: today is the second at most
    let of = asks(&rule(Statistic::DaysInARow(3), None, Some(20.0)), &record(&[Some(19.0), None]));
    ends(&of, None, None);
}

/// Nine days of a span before today, the first and the last recorded and above: with today three are certain, and ten
/// are possible.
#[test]
fn scenario_days_not_recorded_may_use_up_what_is_allowed() {
    let span = Span { from: YearDay::parse("07-06").unwrap(), to: YearDay::parse("09-30").unwrap() };
    let days = |most| Target { span, ..rule(Statistic::DaysAbove(most), None, Some(20.0)) };
    let mut maxima = [None; 9];
    (maxima[0], maxima[8]) = (Some(21.0), Some(21.0));
    let ends_only = record(&maxima);
    for (most, high, words) in [
        (1, Some(20.0), Some("whatever today brings")),
        (2, Some(20.0), None),
        (3, Some(20.0), Some("7 of the 9 days before are not recorded")),
        (9, Some(20.0), Some("7 of the 9 days before are not recorded")),
        (10, None, None),
    ] {
        let of = asks(&days(most), &ends_only);
        ends(&of, None, high);
        let told = of.words.unwrap_or_default();
        assert!(words.map_or(told.is_empty(), |words| told.contains(words)), "{most}: {told}");
    }
    // two of nine days are too few for a share of them
    let half = Target { span, ..rule(Statistic::ShareOfDays(1.0), None, Some(20.0)) };
    let of = asks(&half, &ends_only);
    ends(&of, None, Some(20.0));
    assert!(of.words.unwrap().contains("not recorded"));
    // what lies before the record is not counted, and that is said
    let of = asks(&days(3), &all(&[21.0, 19.0]));
    ends(&of, None, None);
    assert!(of.words.unwrap().contains("days before 2026-07-13 are not recorded"));
}

/// A buffer of a degree keeps today at 19; the days before count as the rule has it, so 19.5 is none above 20.
#[test]
fn scenario_a_buffer_does_not_count_against_the_days_before() {
    let buffered = |statistic| Target { buffer_c: 1.0, ..rule(statistic, None, Some(20.0)) };
    let of = asks(&buffered(Statistic::DaysInARow(2)), &all(&[19.5]));
    ends(&of, None, None);
    let of = asks(&buffered(Statistic::DaysInARow(2)), &all(&[20.5]));
    ends(&of, None, Some(19.0));
    let of = asks(&buffered(Statistic::DaysAbove(1)), &all(&[19.5, 19.5]));
    assert_eq!(of.count.unwrap().above, 0);
    ends(&of, None, None);
}

/// A span from 6 July has nine days before 15 July. One of them above is a tenth with today below; one more is a fifth.
#[test]
fn scenario_a_share_of_days_binds_today_when_it_is_used_up() {
    let span = Span { from: YearDay::parse("07-06").unwrap(), to: YearDay::parse("09-30").unwrap() };
    let tenth = Target { span, ..rule(Statistic::ShareOfDays(0.1), None, Some(20.0)) };
    // a day before the span counts for nothing
    let mut maxima = [25.0, 18.0, 18.0, 18.0, 18.0, 18.0, 18.0, 18.0, 18.0, 18.0];
    let of = asks(&tenth, &all(&maxima));
    ends(&of, None, None);
    assert_abs_diff_eq!(of.count.unwrap().with_today(true), 10.0, epsilon = 1e-9);
    maxima[4] = 22.0;
    let of = asks(&tenth, &all(&maxima));
    ends(&of, None, Some(20.0));
    assert_eq!((of.count.unwrap().with_today(true), of.count.unwrap().with_today(false)), (20.0, 10.0));
    assert_eq!(of.words, None);
    maxima[5] = 22.0;
    assert!(asks(&tenth, &all(&maxima)).words.unwrap().contains("whatever today brings"));

    let days = |most| Target { span, ..rule(Statistic::DaysAbove(most), None, Some(20.0)) };
    ends(&asks(&days(3), &all(&maxima)), None, None);
    ends(&asks(&days(2), &all(&maxima)), None, Some(20.0));
    assert_eq!(asks(&days(2), &all(&maxima)).words, None);
    assert!(asks(&days(1), &all(&maxima)).words.is_some());
}

/// Yesterday's mean was 12: a change of at most 1.5 up or down leaves 10.5 to 13.5.
#[test]
fn scenario_a_change_is_held_against_yesterday() {
    let of = asks(&rule(Statistic::DailyChange, None, Some(1.5)), &all(&[13.0]));
    ends(&of, Some(10.5), Some(13.5));
    assert_abs_diff_eq!(of.value(11.0), -1.0, epsilon = 1e-12);
    let missing = record(&[Some(13.0), None]);
    let why = today(&rule(Statistic::DailyChange, None, Some(1.5)), date(TODAY), known(&missing));
    assert!(why.unwrap_err().contains("yesterday"));
}

/// Since 10 July means of 6, 3, 8, 9, 10 are 2 + 0 + 4 + 5 + 6 = 17 degree days above 4; 20 leave today 7 C.
#[test]
fn scenario_degree_days_leave_today_the_rest() {
    let since = YearDay::parse("07-10").unwrap();
    let above_4 = rule(Statistic::DegreeDays { base_c: 4.0, since }, Some(18.0), Some(20.0));
    let maxima = [30.0, 7.0, 4.0, 9.0, 10.0, 11.0];
    let of = asks(&above_4, &all(&maxima));
    ends(&of, Some(5.0), Some(7.0));
    assert_abs_diff_eq!(of.value(6.0), 19.0, epsilon = 1e-12);
    // a colder day adds nothing, and takes nothing away
    assert_abs_diff_eq!(of.value(1.0), 17.0, epsilon = 1e-12);
    // a day without a record counts like the mean of the others: (17 - 4) / 4 x 5
    let mut gap = maxima.map(Some);
    gap[3] = None;
    let gap = record(&gap);
    let four_of_five = Known { coverage: Coverage { hours: 22, days: 5 }, ..known(&gap) };
    let of = today(&above_4, date(TODAY), four_of_five).unwrap();
    assert_abs_diff_eq!(of.value(4.0), 16.25, epsilon = 1e-12);
    // with too few it cannot be said
    let why = today(&above_4, date(TODAY), known(&gap)).unwrap_err();
    assert!(why.contains("4 of the 5 days before"), "{why}");
    // on the first day nothing has come before
    let first =
        rule(Statistic::DegreeDays { base_c: 4.0, since: YearDay::parse("07-15").unwrap() }, None, Some(3.0));
    ends(&asks(&first, &all(&maxima)), None, Some(7.0));
}

/// At most 2 C above a stream of 15 C is at most 17 C; of a mean, the differences of the days before count.
#[test]
fn scenario_a_reference_makes_bounds_of_differences() {
    let stream = |day: NaiveDate| {
        let value = if day == date(TODAY) { 15.0 } else { 14.0 };
        Some(Day { mean: value, max: value + 1.0, min: value, hourly_change: None })
    };
    let above = |statistic| Target {
        reference: Some(Reference::Stream("Tansy Creek".into())),
        preferred_c: Some(1.0),
        ..rule(statistic, Some(-1.0), Some(2.0))
    };
    let with = |days| Known { days, reference: &stream, ..Known::NOTHING };
    let of = today(&above(Statistic::DailyMean), date(TODAY), with(None)).unwrap();
    ends(&of, Some(14.0), Some(17.0));
    assert_eq!((of.preferred_c, of.value(16.0)), (Some(16.0), 1.0));
    let of = today(&above(Statistic::DailyMax), date(TODAY), with(None)).unwrap();
    ends(&of, Some(15.0), Some(18.0));
    // means 17 and 18 the days before are 3 and 4 above 14; three days of at most 2 leave -1 over 15
    let record = all(&[18.0, 19.0]);
    let of = today(&above(Statistic::MeanOfDays(3)), date(TODAY), with(Some(&record))).unwrap();
    ends(&of, Some(5.0), Some(14.0));
    assert_eq!(of.preferred_c, Some(16.0));
    let why = today(&above(Statistic::DailyMean), date(TODAY), Known::NOTHING).unwrap_err();
    assert!(why.contains("Tansy Creek"), "{why}");
}

/// Minima of 6, 7, 8, 9, 8, 7 sum to 45; a mean of 7 over seven days leaves today 49 - 45 = 4 mg/L.
#[test]
fn scenario_a_floor_of_seven_minima_leaves_today_the_rest() {
    let week = |statistic| Target {
        oxygen_min_mg_l: Some(7.0),
        oxygen_statistic: Some(statistic),
        ..Target::default()
    };
    let minima = all(&[8.0, 9.0, 10.0, 11.0, 10.0, 9.0]).temperature_c;
    let record = Daily { oxygen_mg_l: minima, ..Daily::default() };
    let air = |statistic| Air::of(&week(statistic), date(TODAY), known(&record)).unwrap();
    let of = air(OxygenStatistic::SevenDayMeanOfMinima);
    assert_abs_diff_eq!(of.floor, 4.0, epsilon = 1e-9);
    assert_abs_diff_eq!(of.value(4.0), 7.0, epsilon = 1e-12);
    assert_abs_diff_eq!(air(OxygenStatistic::DailyMin).floor, 7.0, epsilon = 0.0);
    let share = Target { oxygen_min_share: Some(0.8), ..Target::default() };
    let of = Air::of(&share, date(TODAY), Known::NOTHING).unwrap();
    assert_abs_diff_eq!(of.floor_mg_l(10.0), 8.0, epsilon = 1e-12);
}

#[test]
fn scenario_coverage_of_the_site_says_how_many_days_are_enough() {
    let two_missing = record(&[Some(17.0), None, None, Some(17.0), Some(17.0), Some(17.0)]);
    let five = Known { coverage: Coverage { hours: 22, days: 5 }, ..known(&two_missing) };
    let of = today(&rule(Statistic::SevenDayMeanOfMaxima, None, Some(18.0)), date(TODAY), five).unwrap();
    // five days of 18 less four of 17
    ends(&of, None, Some(22.0));
}

/// An event ends the span it falls in; the next begins anew. Types of water year hold a rule in or out.
#[test]
fn scenario_rules_end_with_events_and_hold_in_their_years() {
    let span = Span { from: YearDay::parse("10-15").unwrap(), to: YearDay::parse("06-30").unwrap() };
    let eggs = Target { span, until: Some(date("2026-06-10")), ..Target::default() };
    for (day, valid) in [
        ("2025-10-14", false),
        ("2025-12-31", true),
        ("2026-06-10", true),
        ("2026-06-11", false),
        ("2026-06-30", false),
        ("2026-10-15", true),
        ("2027-06-20", true),
    ] {
        assert_eq!(eggs.valid_on(date(day), None), valid, "{day}");
    }
    let dry = Target { years: vec!["dry".into(), "critical".into()], ..Target::default() };
    assert!(dry.valid_on(date(TODAY), Some("critical")));
    assert!(!dry.valid_on(date(TODAY), Some("wet")) && !dry.valid_on(date(TODAY), None));
    let leap = YearDay::parse("02-29").unwrap();
    assert_eq!(leap.last_on(date("2028-02-29")), Some(date("2028-02-29")));
    assert_eq!(leap.last_on(date("2028-02-28")), Some(date("2027-03-01")));
}
