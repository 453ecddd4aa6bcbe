//! Down the river: what is conserved, what is unchanged, where it tends to.

use approx::assert_abs_diff_eq;
use gatemix::river::{By, Conditions, Course, course};
use gatemix::site::Site;
use gatemix::water::saturation_mg_l;
use proptest::prelude::*;

use crate::columns::config;

use super::{GIVEN, WEATHER, daily, dam, day, hourly, long, part};

fn steady(site: &Site, flow: f64, temperature_c: f64, oxygen: f64) -> Course {
    course(site, &Conditions::default(), day(), &[part(24.0, flow, temperature_c, oxygen)]).unwrap()
}

/// Reaches of given lengths through which water takes 9 h at 20 m3/s and 5 h at 60, shared out by length.
fn cut(lengths_km: &[f64], air: &str, seepage: bool) -> Site {
    let whole: f64 = lengths_km.iter().sum();
    let reach = |(i, km): (usize, &f64)| {
        let share = km / whole;
        let seeps = if seepage {
            format!(", seepage: {{ flow: {}, temperature: 11, oxygen: 6 }}", 4.0 * share)
        } else {
            String::new()
        };
        format!(
            "{{ name: r{i}, length_km: {km}, width: 40, depth: 1.5, travel_hours: [[20, {}], [60, {}]]{seeps} }}",
            9.0 * share,
            5.0 * share
        )
    };
    let reaches: Vec<String> = lengths_km.iter().enumerate().map(reach).collect();
    dam(&format!(
        "{{ {air}, reaches: [ {} ], points: [ {{ name: end, at_km: {whole} }} ], decay: {{ demand: 3, per_day: 0.3 }} }}",
        reaches.join(", ")
    ))
}

proptest! {
    #![proptest_config(config(40))]

    #[test]
    fn law_a_reach_cut_in_two_is_one(
        first in 1.0..19.0_f64, flow in 15.0..70.0_f64, t0 in 4.0..28.0_f64, oxygen in 2.0..12.0_f64, seepage: bool
    ) {
        let [one, two] = [cut(&[20.0], GIVEN, seepage), cut(&[first, 20.0 - first], GIVEN, seepage)]
            .map(|site| steady(&site, flow, t0, oxygen).points[0].clone());
        // with seepage the width that goes with hours and flow is that of the middle of each piece
        let near = if seepage { 2e-4 } else { 1e-9 };
        prop_assert!((one.figures.mean_c - two.figures.mean_c).abs() < near);
        let near = if seepage { 0.05 } else { 1e-9 };
        prop_assert!((one.travel_h - two.travel_h).abs() < near);
        let air = one.figures.oxygen_mean_mg_l.unwrap() - two.figures.oxygen_mean_mg_l.unwrap();
        prop_assert!(air.abs() < 3e-3, "{air}");
    }

    #[test]
    fn law_water_at_a_junction_keeps_its_heat_and_oxygen(
        flow in 5.0..70.0_f64, t0 in 4.0..28.0_f64, stream in 0.1..30.0_f64, t1 in 4.0..28.0_f64, oxygen in 2.0..12.0_f64
    ) {
        let site = dam(&format!(
            "{{ {GIVEN}, reaches: [ {{ name: a, length_km: 10, width: 40, depth: 1, travel_hours: [[20, 4]],
               inflows: [ {{ name: s, at_km: 6.123, flow: {stream}, temperature: {t1}, oxygen: 7 }} ] }} ] }}"
        ));
        let course = steady(&site, flow, t0, oxygen);
        let at = |q: f64| course.along.iter().find(|p| (p.at_m - 6123.0).abs() < 1e-6 && (p.figures.flow_m3s - q).abs() < 1e-9);
        let (before, after) = (at(flow).unwrap().figures, at(flow + stream).unwrap().figures);
        let heat = flow * before.mean_c + stream * t1 - (flow + stream) * after.mean_c;
        prop_assert!(heat.abs() < 1e-9, "{heat}");
        let gas = flow * before.oxygen_mean_mg_l.unwrap() + stream * 7.0
            - (flow + stream) * after.oxygen_mean_mg_l.unwrap();
        prop_assert!(gas.abs() < 1e-9, "{gas}");
    }

    #[test]
    fn law_a_warmer_release_is_warmer_everywhere(t0 in 4.0..28.0_f64, more in 0.1..5.0_f64, flow in 8.0..80.0_f64) {
        for (site, conditions) in [(long(GIVEN), Conditions::default()), (long(WEATHER), hourly(0.8))] {
            let at = |c: f64| course(&site, &conditions, day(), &[part(24.0, flow, c, 8.0)]).unwrap().along;
            for (cold, warm) in at(t0).iter().zip(at(t0 + more)) {
                prop_assert!(cold.figures.mean_c < warm.figures.mean_c);
                prop_assert!(warm.figures.mean_c - cold.figures.mean_c < more + 1e-9);
            }
        }
    }

    #[test]
    fn law_oxygen_goes_towards_saturation_and_never_across(
        oxygen in 0.0..16.0_f64, t in 5.0..25.0_f64, hours in 0.1..60.0_f64
    ) {
        // at its equilibrium the water keeps its temperature
        let site = dam(&format!(
            "{{ equilibrium: {t}, exchange_w_m2_c: 30, reaches: [ {{ name: a, length_km: 20, width: 40, depth: 1,
               travel_hours: [[20, {hours}]] }} ], points: [ {{ name: end, at_km: 20 }} ] }}"
        ));
        let figures = steady(&site, 20.0, t, oxygen).points[0].figures;
        let (full, end) = (saturation_mg_l(t, 0.0, 1.0), figures.oxygen_mean_mg_l.unwrap());
        prop_assert!((end - full).abs() <= (oxygen - full).abs() + 1e-12);
        prop_assert!((end - full) * (oxygen - full) >= -1e-12);
        prop_assert!((figures.mean_c - t).abs() < 1e-9);
        let share = figures.oxygen_share.unwrap();
        prop_assert!((share.0 - end / full).abs() < 1e-9 && (share.1 - share.0).abs() < 1e-12);
    }
}

#[test]
fn law_no_time_changes_nothing_and_all_time_reaches_equilibrium() {
    let after = |hours: f64| {
        let site = dam(&format!(
            "{{ {GIVEN}, reaches: [ {{ name: a, length_km: 20, width: 40, depth: 1, travel_hours: [[20, {hours}]],
               reaeration_per_day: 2 }} ], points: [ {{ name: end, at_km: 20 }} ], decay: {{ demand: 3, per_day: 0.2 }} }}"
        ));
        steady(&site, 20.0, 8.0, 5.0).points[0].figures
    };
    let none = after(1e-12);
    assert_abs_diff_eq!(none.mean_c, 8.0, epsilon = 1e-9);
    assert_abs_diff_eq!(none.oxygen_mean_mg_l.unwrap(), 5.0, epsilon = 1e-9);
    let all = after(20_000.0);
    assert_abs_diff_eq!(all.mean_c, 22.0, epsilon = 1e-9);
    assert_abs_diff_eq!(all.oxygen_mean_mg_l.unwrap(), saturation_mg_l(22.0, 0.0, 1.0), epsilon = 1e-6);
}

#[test]
fn law_a_stream_like_the_river_leaves_it_unchanged() {
    let site = dam("{ equilibrium: 13, exchange_w_m2_c: 30, reaches: [ { name: a, length_km: 10, width: 40, depth: 1,
        travel_hours: [[20, 4]], inflows: [ { name: s, at_km: 6, flow: 9, temperature: 13, oxygen: 8 } ] } ] }");
    for place in steady(&site, 20.0, 13.0, 8.0).along {
        assert_abs_diff_eq!(place.figures.mean_c, 13.0, epsilon = 1e-12);
    }
}

/// Heat that goes into the pool below the dam in a day that repeats itself comes out of it, and the surface's share is
/// small where its exchange is.
#[test]
fn law_an_afterbay_keeps_the_heat_of_a_day() {
    let site = dam(
        "{ equilibrium: 15, exchange_w_m2_c: 1.0e-9, afterbay: { volume: 900000, area: 300000, mixed: 70 },
        reaches: [ { name: a, length_km: 1, width: 40, depth: 1, travel_hours: [[20, 1]] } ],
        points: [ { name: below, at_km: 0 } ] }",
    );
    let parts = [part(6.5, 60.0, 12.0, 8.0), part(17.5, 20.0, 9.0, 6.0)];
    let course = course(&site, &Conditions::default(), day(), &parts).unwrap();
    let at_the_dam = course.along.first().unwrap().figures;
    assert_eq!(at_the_dam.range_c, Some((12.0, 9.0)));
    let below = &course.points[0];
    let (warmest, coldest) = below.figures.range_c.unwrap();
    assert!(9.0 < coldest && coldest < warmest && warmest < 12.0 && below.hourly_c.len() == 24);
    let entered = 6.5 * 60.0 * 12.0 + 17.5 * 20.0 * 9.0;
    // the seventh hour holds half an hour of each part
    let flow = |hour: usize| [60.0, 20.0, 40.0][usize::from(hour > 6) + 2 * usize::from(hour == 6)];
    let left: f64 = below.hourly_c.iter().enumerate().map(|(hour, c)| flow(hour) * c).sum();
    assert!((left / entered - 1.0).abs() < 0.002, "{left} of {entered}");
}

#[test]
fn law_hours_tend_to_the_day_as_it_flattens() {
    let mean = |site: &Site, conditions: &Conditions| {
        let course = course(site, conditions, day(), &[part(24.0, 20.0, 9.0, 8.0)]).unwrap();
        course.points[1].figures
    };
    let site = long(WEATHER);
    let mut last = f64::INFINITY;
    for swing in [0.8, 0.2, 0.05, 0.0] {
        let (hours, days) = (mean(&site, &hourly(swing)), mean(&site, &daily(swing)));
        assert_eq!(days.range_c, None);
        let (greatest, least) = hours.range_c.unwrap();
        assert!(least <= hours.mean_c && hours.mean_c <= greatest);
        let off = (hours.mean_c - days.mean_c).abs();
        assert!(off < last, "{swing}: {off} after {last}");
        assert!(off < 0.5 * swing.max(2e-6), "{swing}: {off}");
        last = off;
    }
    // parts that are alike are one
    let alike = [part(6.0, 20.0, 9.0, 8.0), part(18.0, 20.0, 9.0, 8.0)];
    let site = long(GIVEN);
    let (one, two) =
        (steady(&site, 20.0, 9.0, 8.0), course(&site, &Conditions::default(), day(), &alike).unwrap());
    for (one, two) in one.points.iter().zip(&two.points) {
        assert_abs_diff_eq!(one.figures.mean_c, two.figures.mean_c, epsilon = 1e-9);
        assert_abs_diff_eq!(two.figures.hourly_change_c.unwrap(), 0.0, epsilon = 1e-9);
    }
}

/// Blocks under air that is not known by the hour lack the day's cycle, and that is told.
#[test]
fn scenario_blocks_without_hours_of_the_air_are_told_apart() {
    let (flat, blocks) =
        ([part(24.0, 20.0, 9.0, 8.0)], [part(12.0, 20.0, 9.0, 8.0), part(12.0, 22.0, 9.0, 8.0)]);
    let (given, file) = (long(GIVEN), long(WEATHER));
    let (none, by_day, by_hour) = (Conditions::default(), daily(0.8), hourly(0.8));
    let swing = |c: &Course| c.points[1].figures.range_c.map(|(greatest, least)| greatest - least);
    for (site, conditions, parts, by) in [
        (&given, &none, &flat[..], By::Day),
        (&given, &none, &blocks[..], By::Blocks),
        (&file, &by_day, &flat[..], By::Day),
        (&file, &by_day, &blocks[..], By::Blocks),
        (&file, &by_hour, &flat[..], By::Hours),
        (&file, &by_hour, &blocks[..], By::Hours),
    ] {
        let course = course(site, conditions, day(), parts).unwrap();
        assert_eq!(course.by, by);
        assert_eq!(course.flags.iter().any(|f| f.kind == "no-daily-cycle"), by == By::Blocks);
        assert_eq!(swing(&course).is_none(), by == By::Day);
    }
    let of = |conditions: &Conditions| swing(&course(&file, conditions, day(), &blocks).unwrap()).unwrap();
    assert!(of(&by_hour) > of(&by_day) + 1.0, "{} {}", of(&by_hour), of(&by_day));
}

/// What is not known is told: weather that ends, streams whose oxygen nobody gave.
#[test]
fn scenario_what_is_not_known_on_the_way_is_told() {
    let site = long(WEATHER);
    let parts = [part(24.0, 20.0, 9.0, 8.0)];
    let mut short = hourly(0.8);
    let kinds = |c: &Course| c.flags.iter().map(|f| f.kind).collect::<Vec<_>>();
    assert!(!kinds(&course(&site, &short, day(), &parts).unwrap()).contains(&"weather-repeated"));
    let end = *short.weather.hours.keys().nth(30).unwrap();
    short.weather.hours.retain(|time, _| *time < end);
    short.weather.days.clear();
    assert!(kinds(&course(&site, &short, day(), &parts).unwrap()).contains(&"weather-repeated"));
    assert_eq!(course(&site, &Conditions::default(), day(), &parts), None);
    let no_oxygen = dam(
        "{ equilibrium: 13, exchange_w_m2_c: 30, reaches: [ { name: a, length_km: 10, width: 40, depth: 1,
        travel_hours: [[20, 4]], inflows: [ { name: s, at_km: 6, flow: 9, temperature: 13 } ] } ] }",
    );
    let course = steady(&no_oxygen, 20.0, 9.0, 8.0);
    assert!(kinds(&course).contains(&"stream-oxygen"));
    assert_eq!(course.along.last().unwrap().figures.oxygen_mean_mg_l, None);
    assert!(course.along.len() > 60);
}

/// Stepped with its whole budget of heat, water that is long on its way comes to the equilibrium of the same budget.
#[test]
fn law_under_one_weather_all_time_reaches_the_root_of_the_budget() {
    for (air_c, sun, depth) in [(24.0, 260.0, 1.0), (5.0, 120.0, 0.4), (30.0, 330.0, 3.0)] {
        let site = dam(&format!(
            "{{ monthly: {{ air: {air_c}, humidity: 55, wind: 3, cloud: 30, radiation_w_m2: {sun} }},
               reaches: [ {{ name: a, length_km: 20, width: 40, depth: {depth}, travel_hours: [[20, 5000]], shade: 20 }} ],
               points: [ {{ name: end, at_km: 20 }} ] }}"
        ));
        let Some(gatemix::site::Surface::Monthly(airs)) = &site.river.as_ref().unwrap().surface else {
            panic!()
        };
        let balance = gatemix::weather::equilibrium_c(&airs[6], 0.2).unwrap();
        let end = steady(&site, 20.0, 8.0, 8.0).points[0].figures.mean_c;
        assert_abs_diff_eq!(end, balance, epsilon = 1e-6);
    }
}
