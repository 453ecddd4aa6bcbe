//! Targets: spans of dates, statistics and standings, by examples worked by hand.
#![expect(clippy::unwrap_used, reason = "helpers of tests, outside a test function")]

use approx::assert_abs_diff_eq;
use chrono::{Datelike, NaiveDate};
use gatemix::mix::{Gate, Mix, Perturbed, Setting, judge};
use gatemix::profile::{Profile, Raw, RawRow};
use gatemix::site::{self, RawOutlet, RawPool, RawTarget, Site};
use gatemix::target::{Known, OxygenStatistic, Span, Standing, Statistic, Target, YearDay, today};
use proptest::prelude::*;

fn date(text: &str) -> NaiveDate {
    text.parse().unwrap()
}

fn span(from: &str, to: &str) -> Span {
    Span { from: YearDay::parse(from).unwrap(), to: YearDay::parse(to).unwrap() }
}

#[test]
fn scenario_a_span_wraps_new_year() {
    let winter = span("11-15", "02-28");
    for inside in ["2025-11-15", "2025-12-31", "2026-01-01", "2026-02-28", "2028-02-28"] {
        assert!(winter.contains(date(inside)), "{inside}");
    }
    for outside in ["2025-11-14", "2026-03-01", "2028-02-29", "2026-07-01"] {
        assert!(!winter.contains(date(outside)), "{outside}");
    }
    let summer = span("05-01", "09-15");
    assert!(summer.contains(date("2026-05-01")) && summer.contains(date("2026-09-15")));
    assert!(!summer.contains(date("2026-04-30")) && !summer.contains(date("2026-09-16")));
    let one_day = span("01-01", "01-01");
    assert!(one_day.contains(date("2026-01-01")) && !one_day.contains(date("2026-01-02")));
}

/// A span to or from 29 February ends or begins beside it in a year that has none.
#[test]
fn scenario_a_span_bounded_by_29_february() {
    let to = span("12-01", "02-29");
    assert!(to.contains(date("2028-02-29")) && !to.contains(date("2028-03-01")));
    assert!(to.contains(date("2027-02-28")) && !to.contains(date("2027-03-01")));
    let from = span("02-29", "04-30");
    assert!(from.contains(date("2028-02-29")) && !from.contains(date("2028-02-28")));
    assert!(from.contains(date("2027-03-01")) && !from.contains(date("2027-02-28")));
    assert!(span("02-29", "02-29").contains(date("2028-02-29")));
    assert!(Span::YEAR.contains(date("2028-02-29")));
}

#[test]
fn scenario_days_that_are_no_days_are_not_read() {
    for wrong in
        ["02-30", "04-31", "13-01", "00-10", "5", "05-", "+5-01", "2025-05-01", "05-1x", "may-01", ""]
    {
        assert_eq!(YearDay::parse(wrong), None, "{wrong}");
    }
    assert_eq!(YearDay::parse(" 5-1 "), Some(YearDay { month: 5, day: 1 }));
    assert_eq!(YearDay::parse("02-29"), Some(YearDay { month: 2, day: 29 }));
}

proptest! {

    #![proptest_config(crate::law_config())]
    /// A span and the days it leaves out part every year, leap years too.
    #[test]
    fn law_a_span_and_its_rest_part_the_year(from in 1..=366_u32, length in 1..=365_u32, year in 2024..=2031) {
        let day = |ordinal: u32| {
            // days of a leap year, so that 29 February is among the bounds
            let d = NaiveDate::from_yo_opt(2024, (ordinal - 1) % 366 + 1).unwrap();
            YearDay { month: d.month(), day: d.day() }
        };
        let whole = Span { from: day(from), to: day(from + length - 1) };
        let rest = Span { from: day(from + length), to: day(from + 365) };
        for d in NaiveDate::from_ymd_opt(year, 1, 1).unwrap().iter_days().take_while(|d| d.year() == year) {
            prop_assert!(whole.contains(d) != rest.contains(d), "{d}");
        }
    }
}

#[test]
fn scenario_statistics_go_by_their_names() {
    for (name, statistic) in Statistic::NAMES {
        assert_eq!((statistic.name(), Statistic::parse(name)), (name, Some(statistic)));
        assert!(!statistic.words().is_empty());
    }
    assert_eq!(Statistic::parse("weekly"), None);
    for (name, statistic) in OxygenStatistic::NAMES {
        assert_eq!((statistic.name(), OxygenStatistic::parse(name)), (name, Some(statistic)));
    }
    assert_eq!(OxygenStatistic::parse("7dadm"), None);
}

fn target(low_c: Option<f64>, high_c: Option<f64>, buffer_c: f64, oxygen_min_mg_l: Option<f64>) -> Target {
    Target {
        name: "holding".into(),
        span: Span::YEAR,
        statistic: Statistic::DailyMean,
        low_c,
        preferred_c: None,
        high_c,
        buffer_c,
        oxygen_min_mg_l,
        ..Target::default()
    }
}

fn assert_stands(got: (Standing, Option<f64>), standing: Standing, by: Option<f64>) {
    assert_eq!((got.0, got.1.is_some()), (standing, by.is_some()), "{got:?}");
    assert_abs_diff_eq!(got.1.unwrap_or(0.0), by.unwrap_or(0.0), epsilon = 1e-12);
}

/// 9 to 14 C kept by 0.5 C on both sides is 9.5 to 13.5 C, both ends inside; the room is that to the nearer end.
#[test]
fn scenario_the_range_left_to_a_steady_day_worked_by_hand() {
    let steady = |rule: &Target| today(rule, date("2026-07-01"), Known::NOTHING).unwrap();
    let both = steady(&target(Some(9.0), Some(14.0), 0.5, Some(7.0)));
    for (figure, outside, room) in [
        (9.0, -0.5, -0.5),
        (9.25, -0.25, -0.25),
        (9.5, 0.0, 0.0),
        (12.0, 0.0, 1.5),
        (13.5, 0.0, 0.0),
        (14.0, 0.5, -0.5),
    ] {
        assert_eq!(
            (both.outside_c(figure), both.room_c(figure), both.value(figure)),
            (outside, Some(room), figure)
        );
    }
    assert_eq!(steady(&target(None, Some(14.0), 0.0, None)).outside_c(-0.5), 0.0);
    assert_eq!(steady(&target(Some(9.0), None, 0.0, None)).outside_c(30.0), 0.0);
    assert_eq!(steady(&target(None, None, 0.0, Some(7.0))).room_c(12.0), None);
}

const POOL_C: f64 = 13.0;
const POOL_MG_L: f64 = 6.0;

/// Water of 13 C and 6 mg/L everywhere, released through one port, judged against rules on a date.
fn judged(targets: Vec<RawTarget>, on: &str) -> (Mix, Site) {
    let row = |elevation_m| site::RawRow { elevation_m, area_m2: 1e6, ..site::RawRow::default() };
    let raw = site::Raw {
        name: Some("uniform".into()),
        pool: RawPool {
            bed_m: Some(0.0),
            full_m: Some(40.0),
            table: vec![row(0.0), row(40.0)],
            ..RawPool::default()
        },
        outlets: vec![RawOutlet {
            name: Some("port".into()),
            centre_m: Some(20.0),
            height_m: Some(2.0),
            width_m: Some(2.0),
            ..RawOutlet::default()
        }],
        targets,
        ..site::Raw::default()
    };
    let site = Site::check(&raw).0.unwrap();
    let sample = |line, elevation_m| RawRow {
        line,
        elevation_m: Some(elevation_m),
        temperature_c: Some(POOL_C),
        oxygen_mg_l: Some(POOL_MG_L),
        ..RawRow::default()
    };
    let rows = vec![sample(1, 40.0), sample(2, 0.0)];
    let cast = Raw { pool_m: Some(40.0), rows, ..Raw::default() };
    let profile = Profile::build(&cast, &site, None).0.unwrap();
    let setting = Setting::of(vec![Gate { outlet: 0, opening: 1.0, flow_m3s: 20.0 }]);
    let mix =
        judge(&site, &profile, &Perturbed::new(&site, &profile, Some(0.0)), &setting, date(on)).unwrap();
    (mix, site)
}

fn rule(name: &str, from: &str, to: &str, high_c: Option<f64>, oxygen_min_mg_l: Option<f64>) -> RawTarget {
    RawTarget {
        name: Some(name.into()),
        from: Some(from.into()),
        to: Some(to.into()),
        high_c,
        oxygen_min_mg_l,
        ..RawTarget::default()
    }
}

/// Names of the rules listed, the one that governs first.
fn governing((mix, site): &(Mix, Site)) -> (Vec<&str>, Vec<&str>) {
    let name = |governs: bool| {
        let of = mix.targets.iter().filter(|t| t.governs == governs);
        of.map(|t| site.targets[t.target].name.as_str()).collect()
    };
    (name(true), name(false))
}

#[test]
fn scenario_the_strictest_rule_of_the_day_governs() {
    let year = |name, high, oxygen| rule(name, "01-01", "12-31", high, oxygen);
    let wide = || year("wide", Some(14.0), None);
    let tight = || year("tight", Some(13.25), None);
    let aired = || year("aired", None, Some(7.0));
    let winter = || rule("winter", "11-01", "02-29", Some(5.0), None);
    // 13 C leaves 1.0 C of room under 14 and 0.25 under 13.25
    assert_eq!(governing(&judged(vec![wide(), tight()], "2026-07-01")), (vec!["tight"], vec!["wide"]));
    // 6 mg/L is 1 short of 7
    let with_oxygen = judged(vec![tight(), aired(), wide()], "2026-07-01");
    assert_eq!(governing(&with_oxygen), (vec!["aired"], vec!["tight", "wide"]));
    // out of its span a rule is not even listed; in it, 13 C is 8 above 5
    let all = || vec![wide(), winter(), aired()];
    assert_eq!(governing(&judged(all(), "2026-07-01")), (vec!["aired"], vec!["wide"]));
    assert_eq!(governing(&judged(all(), "2028-02-29")), (vec!["winter"], vec!["wide", "aired"]));
    assert_eq!(governing(&judged(all(), "2026-03-01")), (vec!["aired"], vec!["wide"]));
    let (mix, site) = judged(all(), "2026-12-31");
    let winter = mix.targets.iter().find(|t| site.targets[t.target].name == "winter").unwrap();
    assert_stands(winter.temperature, Standing::Above, Some(8.0));
    assert_eq!(winter.oxygen.0, Standing::Unknown);
    assert!(winter.missed());
}

/// In uniform water only the cast's offset (0.2 C, 0.3 mg/L) and what the method misses (0.4 C, 0.5 mg/L) count,
/// so shares are those of a normal spread of sqrt(0.2^2 + 0.4^2) C; 200 cases leave three standard errors of 0.1.
#[test]
fn law_shares_inside_uniform_water_are_those_of_the_normal_spread() {
    let year = |name, high, oxygen| rule(name, "01-01", "12-31", high, oxygen);
    let targets = vec![
        year("one spread above", Some(POOL_C + 0.2_f64.hypot(0.4)), None),
        year("one spread below", Some(POOL_C - 0.2_f64.hypot(0.4)), None),
        year("oxygen", None, Some(POOL_MG_L - 0.3_f64.hypot(0.5))),
    ];
    let (mix, _) = judged(targets, "2026-07-01");
    let error = 3.0 * (0.841_f64 * 0.159 / 200.0).sqrt();
    assert_abs_diff_eq!(mix.release.temperature_c, POOL_C, epsilon = 1e-9);
    assert_abs_diff_eq!(mix.targets[0].share_inside.unwrap(), 0.841, epsilon = error);
    assert_abs_diff_eq!(mix.targets[1].share_inside.unwrap(), 0.159, epsilon = error);
    assert_abs_diff_eq!(mix.targets[2].oxygen_share_inside.unwrap(), 0.841, epsilon = error);
    assert_eq!((mix.targets[0].oxygen_share_inside, mix.targets[2].share_inside), (None, None));
    let (low, high) = mix.spread.band_c().unwrap();
    // 10 and 90 % of a normal spread lie 1.2816 of it from the middle
    assert_abs_diff_eq!(high - low, 2.0 * 1.2816 * 0.2_f64.hypot(0.4), epsilon = 0.2);
}
