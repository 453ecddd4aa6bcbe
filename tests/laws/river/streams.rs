//! Side streams by their records: which moment of a record the river takes, and what is told where it has none.

use approx::assert_abs_diff_eq;
use chrono::{DateTime, FixedOffset, TimeDelta};
use gatemix::river::{Conditions, Course, course};
use gatemix::series::{Record, Series};
use gatemix::site::Site;

use super::{DAY, dam, day, part};

/// A stream that joins after four hours on the way, in water that trades nothing with the air.
fn site(figures: &str) -> Site {
    dam(&format!(
        "{{ equilibrium: 10, exchange_w_m2_c: 1.0e-9, reaches: [ {{ name: a, length_km: 10, width: 40, depth: 1,
           travel_hours: [[20, 8]], inflows: [ {{ name: Creek, at_km: 5, {figures} series: creek.csv }} ] }} ],
           points: [ {{ name: end, at_km: 10 }} ] }}"
    ))
}

/// A record of the first so many hours of the day, each hour as warm as its number, 20 m3/s.
fn record(hours: i64) -> Conditions {
    record_before(0, hours)
}

/// The same of a day so many days before.
fn record_before(days: i64, hours: i64) -> Conditions {
    let midnight: DateTime<FixedOffset> = format!("{DAY}T00:00:00+00:00").parse().unwrap();
    let series = |of: &dyn Fn(f64) -> f64| {
        Series::new((0..hours).map(|h| (midnight + TimeDelta::hours(h - 24 * days), of(h as f64))).collect())
    };
    let record = Record { temperature_c: series(&|h| h), flow_m3s: series(&|_| 20.0), ..Record::default() };
    let mut conditions = Conditions::default();
    conditions.streams.insert("Creek".into(), record);
    conditions
}

fn blocks(site: &Site, conditions: &Conditions) -> Course {
    course(site, conditions, day(), &[part(6.0, 20.0, 10.0, 8.0), part(18.0, 20.0, 10.0, 8.0)]).unwrap()
}

fn kinds(course: &Course) -> Vec<&'static str> {
    course.flags.iter().map(|f| f.kind).collect()
}

#[test]
fn scenario_a_stream_brings_what_its_record_tells_of_the_hour() {
    let course = blocks(&site(""), &record(24));
    let hourly = &course.points[0].hourly_c;
    // what leaves in the third hour, at 2:30, meets the stream at 6:30, when it has 6.5 C
    assert_abs_diff_eq!(hourly[2], 0.5 * (10.0 + 6.5), epsilon = 1e-9);
    assert_abs_diff_eq!(hourly[18], 0.5 * (10.0 + 22.5), epsilon = 1e-9);
    // what passes after the record's end meets its last reading, and that is told
    assert_abs_diff_eq!(hourly[23], 0.5 * (10.0 + 23.0), epsilon = 1e-9);
    assert!(kinds(&course).contains(&"stream-held"));
    assert_abs_diff_eq!(course.points[0].figures.flow_m3s, 40.0, epsilon = 1e-12);
}

/// A last reading serves for two weeks and no longer, and its day is named.
#[test]
fn scenario_an_old_reading_of_a_stream_is_not_held() {
    for (days, kind, words) in [
        (
            3,
            "stream-held",
            "side stream `Creek` end before this water passes: what was read on 2026-07-12 is held",
        ),
        (13, "stream-held", "what was read on 2026-07-02 is held"),
        (15, "stream-unknown", "neither figures nor a reading of the 14 days before"),
        (2700, "stream-unknown", "it is left out"),
    ] {
        let course = blocks(&site(""), &record_before(days, 24));
        let told =
            course.flags.iter().find(|f| f.kind == kind).unwrap_or_else(|| panic!("{:?}", course.flags));
        assert!(told.to_string().contains(words), "{days}: {told}");
        let flow = if kind == "stream-held" { 40.0 } else { 20.0 };
        assert_abs_diff_eq!(course.points[0].figures.flow_m3s, flow, epsilon = 1e-12);
        // its figures, where it has them, serve instead
        let course = blocks(&site("flow: 20, temperature: 4,"), &record_before(days, 24));
        assert_abs_diff_eq!(course.points[0].hourly_c[23], 0.5 * (10.0 + 4.0), epsilon = 1e-9);
    }
    let release = blocks(&site("release: true,"), &Conditions::default());
    assert!(release.flags.iter().any(|f| f.to_string().contains("what the second release `Creek` brings")));
}

#[test]
fn scenario_by_the_day_a_stream_brings_the_mean_of_its_day() {
    let steady = [part(24.0, 20.0, 10.0, 8.0)];
    let course = course(&site(""), &record(24), day(), &steady).unwrap();
    assert_abs_diff_eq!(course.points[0].figures.mean_c, 0.5 * (10.0 + 11.5), epsilon = 1e-9);
    assert!(!kinds(&course).contains(&"stream-held"));
}

#[test]
fn scenario_figures_serve_where_a_record_has_nothing_and_no_stream_is_made_up() {
    // after its record a stream goes by its figures
    let course = blocks(&site("flow: 20, temperature: 4,"), &record(24));
    assert_abs_diff_eq!(course.points[0].hourly_c[23], 0.5 * (10.0 + 4.0), epsilon = 1e-9);
    assert!(!kinds(&course).contains(&"stream-held"));
    // with neither it is left out, and told
    let course = blocks(&site(""), &Conditions::default());
    assert_abs_diff_eq!(course.points[0].figures.mean_c, 10.0, epsilon = 1e-6);
    assert_abs_diff_eq!(course.points[0].figures.flow_m3s, 20.0, epsilon = 1e-12);
    assert!(kinds(&course).contains(&"stream-unknown"));
}

#[test]
fn scenario_ice_and_reaeration_beyond_its_range_are_told() {
    let site = dam(
        "{ equilibrium: 0, exchange_w_m2_c: 30, reaches: [ { name: a, length_km: 20, width: 40, depth: 12,
        travel_hours: [[20, 60]] } ], points: [ { name: end, at_km: 20 } ] }",
    );
    let still = course(&site, &Conditions::default(), day(), &[part(24.0, 20.0, 5.0, 8.0)]).unwrap();
    assert!(kinds(&still).contains(&"reaeration-range") && !kinds(&still).contains(&"ice"));
    let winter = dam("{ monthly: { air: -20, dew_point: -24, wind: 3, radiation_w_m2: 20 }, reaches: [ { name: a,
        length_km: 20, width: 40, depth: 0.7, travel_hours: [[20, 40]] } ], points: [ { name: end, at_km: 20 } ] }");
    let frozen = course(&winter, &Conditions::default(), day(), &[part(24.0, 20.0, 2.0, 8.0)]).unwrap();
    assert!(kinds(&frozen).contains(&"ice"));
    assert_abs_diff_eq!(frozen.points[0].figures.mean_c, 0.0, epsilon = 1e-12);
}

/// Rivers no one has still answer with numbers, and soon.
#[test]
fn scenario_odd_rivers_give_figures() {
    for (depth, slope, exchange, seepage) in
        [(0.001, 0.5, 3000.0, 0.0), (900.0, 1e-9, 1e-6, 0.0), (1.0, 0.001, 30.0, 5000.0)]
    {
        let site = dam(&format!(
            "{{ equilibrium: 44, exchange_w_m2_c: {exchange}, afterbay: {{ volume: 1.0e12, area: 1 }},
               reaches: [ {{ name: a, length_km: 9000, width: 4, depth: {depth}, slope: {slope},
               seepage: {{ flow: {seepage}, temperature: 11, oxygen: 6 }} }} ],
               points: [ {{ name: end, at_km: 9000 }} ], decay: {{ demand: 5000, per_day: 50 }} }}"
        ));
        for flow in [0.0, 1e-9, 1e6] {
            let parts = [part(12.0, flow, 5.0, 8.0), part(12.0, 0.0, 9.0, 0.0)];
            let figures = course(&site, &Conditions::default(), day(), &parts).unwrap().points[0].figures;
            let (greatest, least) = figures.range_c.unwrap();
            assert!(0.0 <= least && least <= figures.mean_c + 1e-9 && greatest <= 44.1, "{figures:?}");
            let oxygen = figures.oxygen_mean_mg_l.unwrap();
            assert!(oxygen.is_finite() && figures.oxygen_min_mg_l.unwrap() >= 0.0, "{figures:?}");
        }
    }
}

/// A point where two reaches meet sees the stream that joins just there, in whichever of both it is listed.
#[test]
fn scenario_a_point_at_a_junction_sees_the_mixed_water() {
    let creek = "inflows: [ { name: s, at_km: 10, flow: 20, temperature: 20, oxygen: 8 } ],";
    for (upper, lower) in [(creek, ""), ("", creek)] {
        let site = dam(&format!(
            "{{ equilibrium: 10, exchange_w_m2_c: 1.0e-9, reaches: [
               {{ name: a, length_km: 10, width: 40, depth: 1, {upper} travel_hours: [[20, 8]] }},
               {{ name: b, length_km: 10, width: 40, depth: 1, {lower} travel_hours: [[40, 8]] }} ],
               points: [ {{ name: above, at_km: 9.999 }}, {{ name: at, at_km: 10 }}, {{ name: end, at_km: 20 }} ] }}"
        ));
        let course = course(&site, &Conditions::default(), day(), &[part(24.0, 20.0, 10.0, 8.0)]).unwrap();
        let seen: Vec<f64> = course.points.iter().map(|p| p.figures.mean_c).collect();
        assert_abs_diff_eq!(seen[..], [10.0, 15.0, 15.0][..], epsilon = 1e-6);
        let hours: Vec<f64> = course.points.iter().map(|p| p.travel_h).collect();
        assert_abs_diff_eq!(hours[..], [7.9992, 8.0, 16.0][..], epsilon = 1e-9);
    }
}
