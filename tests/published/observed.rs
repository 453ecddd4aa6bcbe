//! Records held against rules, worked by hand.

use approx::assert_abs_diff_eq;
use chrono::NaiveDate;
use gatemix::series::{Coverage, Daily, Days};
use gatemix::target::{
    DAM, Held, Observed, OxygenStatistic, Reference, Span, Standing, Statistic, Target, YearDay, observed,
};

use Standing::{Above, Inside, Unknown};

use super::series::{date, days};

fn rule(statistic: Statistic, low_c: Option<f64>, high_c: Option<f64>) -> Target {
    // the buffer is for planning: it must not show in any of these
    Target { name: "rule".into(), statistic, low_c, high_c, buffer_c: 0.5, ..Target::default() }
}

fn station(temperature_c: Days) -> Daily {
    let ends = temperature_c.days.keys().next().copied().zip(temperature_c.days.keys().last().copied());
    Daily { temperature_c, recorded: ends, provisional: true, ..Daily::default() }
}

fn held(rule: &Target, days: Days) -> Held {
    let all = observed(rule, &station(days), None, Coverage::default(), |_| true);
    assert!(all.provisional && all.oxygen.is_none() && all.oxygen_share.is_none());
    all.temperature.unwrap()
}

/// Over, under, unknown, longest run and farthest outside.
fn figures(held: &Held) -> (u32, u32, u32, u32, Option<(f64, String)>) {
    let all = held.all;
    let worst = all.worst.map(|(by, day)| ((by * 1e6).round() / 1e6, day.to_string()));
    (all.over, all.under, all.unknown, all.longest_run, worst)
}

fn worst(by: f64, day: &str) -> (f64, String) {
    (by, day.to_owned())
}

const V: fn(f64) -> Option<f64> = Some;

#[test]
fn published_days_over_by_how_much_and_the_longest_run() {
    // maxima against 18: +1, +2.5, +1, inside, +1, no day, +1, on the bound
    let maxima = [V(19.0), V(20.5), V(19.0), V(17.0), V(19.0), None, V(19.0), V(18.0)];
    let of = held(&rule(Statistic::DailyMax, None, Some(18.0)), days("2026-07-01", &maxima));
    assert_eq!(figures(&of), (5, 0, 1, 3, Some(worst(2.5, "2026-07-02"))));
    assert_eq!((of.all.judged, of.days.len()), (7, 8));
    assert_abs_diff_eq!(of.all.sum_outside, 6.5, epsilon = 1e-12);
    let marks: Vec<Standing> = of.days.iter().map(|d| d.1.standing).collect();
    assert_eq!(marks, [Above, Above, Above, Inside, Above, Unknown, Above, Inside]);
    // means lie 2 below the maxima, minima 4: 17 18.5 17 15 17 - 17 16 and 15 16.5 15 13 15 - 15 14
    let of = held(&rule(Statistic::DailyMean, Some(15.5), Some(18.0)), days("2026-07-01", &maxima));
    assert_eq!(figures(&of), (1, 1, 1, 1, Some(worst(0.5, "2026-07-02"))));
    let of = held(&rule(Statistic::DailyMin, Some(14.5), None), days("2026-07-01", &maxima));
    assert_eq!(figures(&of), (0, 2, 1, 1, Some(worst(1.5, "2026-07-04"))));
    // every reading between 14 and 18: the one farthest outside counts, on 4 July the minimum of 13
    let of = held(&rule(Statistic::Instantaneous, Some(14.0), Some(18.0)), days("2026-07-01", &maxima));
    assert_eq!(figures(&of), (5, 1, 1, 5, Some(worst(2.5, "2026-07-02"))));
}

#[test]
fn published_a_bound_that_is_met_is_kept_whatever_the_rounding() {
    // 10.2 summed seven times and divided by seven is not 10.2 to the last bit
    let of =
        held(&rule(Statistic::SevenDayMeanOfMaxima, None, Some(10.2)), days("2026-07-01", &[V(10.2); 9]));
    assert_eq!(figures(&of), (0, 0, 5, 0, None));
}

#[test]
fn published_three_days_in_a_row_are_over_and_two_are_not() {
    let hot = [V(19.0), V(20.5), V(19.5), V(17.0), V(19.0), V(19.0), None, V(19.0), V(19.0), V(20.0)];
    let of = held(&rule(Statistic::DaysInARow(3), None, Some(18.0)), days("2026-07-01", &hot));
    // on 3 July three are above, by the least of them 1 C; so on 10 July. 1, 2, 7, 8 and 9 July cannot be told: a day
    // of the three lacks and those there are above. 4, 5 and 6 July hold the cool day
    assert_eq!(figures(&of), (2, 0, 5, 1, Some(worst(1.0, "2026-07-03"))));
}

#[test]
fn published_rules_that_allow_some_days() {
    let hot = [V(19.0), V(20.0), V(17.0), None, V(21.0), V(17.0), V(19.0)];
    // two days allowed: 5 July is the third, 7 July the fourth; on 5 July the day that lacks could only make it more
    let of = held(&rule(Statistic::DaysAbove(2), None, Some(18.0)), days("2026-07-01", &hot));
    assert_eq!(figures(&of), (2, 0, 1, 1, Some(worst(2.0, "2026-07-07"))));
    // three allowed: 5 July is the third with one day unknown, so it cannot be told; 7 July is the fourth
    let of = held(&rule(Statistic::DaysAbove(3), None, Some(18.0)), days("2026-07-01", &hot));
    assert_eq!(figures(&of), (1, 0, 2, 1, Some(worst(1.0, "2026-07-07"))));
    // a share of 60 %: 1 of 1, 2 of 2; 3 July is cool; no day; 5 July has 4 valid days of 5, one too few; 6 July is
    // cool; 7 July 4 of 6
    let of = held(&rule(Statistic::ShareOfDays(0.6), None, Some(18.0)), days("2026-07-01", &hot));
    assert_eq!((of.all.over, of.all.unknown, of.all.longest_run), (3, 2, 2));
    assert_abs_diff_eq!(of.days.last().unwrap().1.value.unwrap(), 4.0 / 6.0, epsilon = 1e-12);
    assert_abs_diff_eq!(of.days.last().unwrap().1.by.unwrap(), 4.0 / 6.0 - 0.6, epsilon = 1e-12);
}

fn span(from: &str, to: &str) -> Span {
    Span { from: YearDay::parse(from).unwrap(), to: YearDay::parse(to).unwrap() }
}

#[test]
fn published_a_span_over_new_year_counts_by_the_season_in_which_it_began() {
    // every day from 1 January 2027 to 31 December 2028 is 1 C over; the span is 15 December to 29 February
    let two_years = days("2027-01-01", &[V(15.0); 731]);
    let winter = Target { span: span("12-15", "02-29"), ..rule(Statistic::DailyMax, None, Some(14.0)) };
    let of = held(&winter, two_years);
    // January and February of 2027 belong to the season of 2026: 59 days; 17 + 31 + 29 in that of 2027; 17 in 2028
    let seasons: Vec<_> = of.seasons.iter().map(|(year, t)| (*year, t.over, t.longest_run)).collect();
    assert_eq!(seasons, [(2026, 59, 59), (2027, 77, 77), (2028, 17, 17)]);
    let months: Vec<_> = of.months.iter().map(|(month, t)| (*month, t.over, t.longest_run)).collect();
    let expected =
        [(2027, 1, 31), (2027, 2, 28), (2027, 12, 17), (2028, 1, 31), (2028, 2, 29), (2028, 12, 17)];
    assert_eq!(months, expected.map(|(y, m, n)| ((y, m), n, n)));
    assert_eq!((of.all.over, of.all.longest_run), (153, 77));
    assert!(of.days.iter().any(|d| d.0 == date("2028-02-29")));
    // and what the caller does not count as valid is not there
    let of = observed(&winter, &station(days("2027-01-01", &[V(15.0); 3])), None, Coverage::default(), |d| {
        d != date("2027-01-02")
    });
    assert_eq!(of.temperature.unwrap().days.len(), 2);
}

#[test]
fn published_the_first_day_of_a_span() {
    let began = |span: Span, day: &str| span.began(date(day)).unwrap().to_string();
    let winter = span("11-01", "03-31");
    assert_eq!(began(winter, "2026-12-31"), "2026-11-01");
    assert_eq!(began(winter, "2027-01-01"), "2026-11-01");
    assert_eq!(began(winter, "2027-11-01"), "2027-11-01");
    // 29 February is 1 March where there is none
    assert_eq!(began(span("02-29", "06-30"), "2028-03-05"), "2028-02-29");
    assert_eq!(began(span("02-29", "06-30"), "2027-03-05"), "2027-03-01");
    assert_eq!(began(Span::YEAR, "2027-12-31"), "2027-01-01");
}

#[test]
fn published_degree_days_and_changes_of_a_record() {
    // means of 5 over a base of 2: 3 a day from 1 October; a ceiling of 30 C days is passed on the 11th, by 3 a day
    let degrees = Statistic::DegreeDays { base_c: 2.0, since: YearDay { month: 10, day: 1 } };
    let of = held(&rule(degrees, None, Some(30.0)), days("2026-10-01", &[V(7.0); 12]));
    assert_eq!(figures(&of), (2, 0, 0, 2, Some(worst(6.0, "2026-10-12"))));
    // means 12 15 13.5: changes -, 3, 1.5, up or down
    let of = held(
        &rule(Statistic::DailyChange, None, Some(2.0)),
        days("2026-07-01", &[V(14.0), V(17.0), V(15.5)]),
    );
    assert_eq!(figures(&of), (1, 0, 1, 1, Some(worst(1.0, "2026-07-02"))));
}

#[test]
fn published_a_difference_from_a_reference() {
    let above =
        Target { reference: Some(Reference::Natural), ..rule(Statistic::DailyMax, Some(-1.0), Some(1.0)) };
    let here = station(days("2026-07-01", &[V(14.0), V(17.0), V(12.0), V(15.0)]));
    let natural = days("2026-07-01", &[V(13.5), V(15.0), None, V(17.0)]);
    let coverage = Coverage::default();
    let of = observed(&above, &here, Some(&natural), coverage, |_| true).temperature.unwrap();
    assert_eq!(figures(&of), (1, 1, 1, 1, Some(worst(1.0, "2026-07-02"))));
    // without its reference nothing can be told
    let of = observed(&above, &here, None, coverage, |_| true).temperature.unwrap();
    assert_eq!((of.all.judged, of.all.unknown), (0, 4));
}

#[test]
fn published_oxygen_is_counted_apart_from_temperature() {
    let oxygen = days("2026-07-01", &[V(9.0), V(8.0), V(10.0), V(10.0), V(10.0), V(10.0)]);
    let daily = Daily {
        temperature_c: days("2026-07-01", &[V(15.0); 7]),
        oxygen_share: days("2026-07-03", &[V(4.9), V(5.1)]),
        recorded: Some((date("2026-07-01"), date("2026-07-07"))),
        oxygen_mg_l: oxygen,
        provisional: false,
    };
    let of = |rule: &Target| observed(rule, &daily, None, Coverage::default(), |_| true);
    let floor = Target {
        oxygen_min_mg_l: Some(6.5),
        oxygen_min_share: Some(1.0),
        ..rule(Statistic::DailyMean, None, Some(14.0))
    };
    let Observed { temperature, oxygen, oxygen_share, provisional } = of(&floor);
    // temperatures: means of 13. Oxygen: means 7 6 8 8 8 8 and no 7 July; shares: means 2.9 and 3.1
    assert_eq!((figures(&temperature.unwrap()), provisional), ((0, 0, 0, 0, None), false));
    assert_eq!(figures(&oxygen.unwrap()), (0, 1, 1, 1, Some(worst(0.5, "2026-07-02"))));
    assert_eq!(figures(&oxygen_share.unwrap()), (0, 0, 5, 0, None));
    // where the temperature's rule speaks of maxima the floor is held against the least: 5 4 6 6 6 6
    let least = Target { statistic: Statistic::DailyMax, oxygen_min_mg_l: Some(5.5), ..floor.clone() };
    assert_eq!(figures(&of(&least).oxygen.unwrap()), (0, 2, 1, 2, Some(worst(1.5, "2026-07-02"))));
    // seven-day mean of minima: six of seven on 6 and 7 July, 33 / 6 = 5.5; too few before
    let seven = Target {
        oxygen_statistic: Some(OxygenStatistic::SevenDayMeanOfMinima),
        oxygen_min_mg_l: Some(5.7),
        ..floor
    };
    assert_eq!(figures(&of(&seven).oxygen.unwrap()), (0, 2, 5, 2, Some(worst(0.2, "2026-07-06"))));
    assert_eq!(seven.point, DAM);
}

#[test]
fn published_an_empty_record_says_nothing() {
    let of = observed(
        &rule(Statistic::DailyMax, None, Some(18.0)),
        &Daily::default(),
        None,
        Coverage::default(),
        |_: NaiveDate| true,
    );
    assert_eq!(of, Observed::default());
}
