//! The water's way down the river: closed forms, worked cases, oxygen sags that textbooks work out.
#![expect(clippy::unwrap_used, reason = "helpers of tests, outside a test function")]

use approx::assert_abs_diff_eq;
use chrono::NaiveDate;
use gatemix::files::site::site;
use gatemix::river::{Conditions, Course, Part, course};
use gatemix::site::Site;
use gatemix::water::saturation_mg_l;

use crate::table::rows;

/// A dam at sea level, invented, with a river.
pub(crate) fn dam(river: &str) -> Site {
    let text = format!(
        "
name: Invented
utc_offset: \"+00:00\"
units: {{}}
pool: {{ bed: 0, full: 10, table: [[0, 0], [10, 1000]] }}
outlets: [ {{ name: A, centre: 3, height: 1, width: 1 }} ]
river: {river}
"
    );
    let read = site(&text, "site.yaml");
    read.site.unwrap_or_else(|| panic!("{:#?}", read.problems))
}

pub(crate) fn steady(site: &Site, flow_m3s: f64, temperature_c: f64, oxygen_mg_l: Option<f64>) -> Course {
    let parts = [Part { hours: 24.0, flow_m3s, temperature_c, oxygen_mg_l }];
    course(site, &Conditions::default(), NaiveDate::from_ymd_opt(2026, 7, 15).unwrap(), &parts).unwrap()
}

/// A concentration, or what is missing to saturation at 20 C.
fn oxygen(text: &str) -> Option<f64> {
    match text.strip_prefix('D') {
        Some(missing) => Some(saturation_mg_l(20.0, 0.0, 1.0) - missing.parse::<f64>().unwrap()),
        None => text.parse().ok(),
    }
}

#[test]
fn published_water_on_its_way() {
    for row in rows("checks_river.csv", 7) {
        let site = dam(row.text("river"));
        let course =
            steady(&site, row.number("flow_m3s"), row.number("temperature_c"), oxygen(row.text("oxygen")));
        let figures = course.points[0].figures;
        let computed = match row.text("figure") {
            "temperature" => figures.mean_c,
            _ => figures.oxygen_mean_mg_l.unwrap(),
        };
        let expected = oxygen(row.text("value")).unwrap();
        let off = (computed - expected).abs();
        assert!(off <= row.number("tolerance"), "{}: {computed} for {expected}", row.text("id"));
    }
}

/// Worked by hand: 20 km in 9 h is 0.617 m/s; the bulk of a rise at 5/3 of it 5.4 h; a front on 1.5 m of water runs at
/// 0.617 + sqrt(9.80665 x 1.5) = 4.453 m/s, 1.248 h.
#[test]
fn published_water_bulk_and_front_of_a_rise() {
    let river = "{ equilibrium: 22, exchange_w_m2_c: 30, reaches: [ { name: Upper, length_km: 20, width: 40, depth: 1.5,
        travel_hours: [[20, 9], [60, 5]] } ], points: [ { name: Mill Bridge, at_km: 20 } ] }";
    let point = &steady(&dam(river), 20.0, 10.0, None).points[0];
    assert_abs_diff_eq!(point.travel_h, 9.0, epsilon = 1e-12);
    assert_abs_diff_eq!(point.rise_h, 5.4, epsilon = 1e-12);
    assert_abs_diff_eq!(point.rise_first_h, 1.248, epsilon = 5e-4);
    assert!(point.rise_first_h < point.rise_h && point.rise_h < point.travel_h);
}

/// Between two rows hours are a power of the flow: 20 to 60 m3/s takes them from 9 to 5, so at their geometric middle,
/// 34.641, they are sqrt(45). Outside, the nearest row holds and is told.
#[test]
fn scenario_hours_between_and_beyond_the_rows() {
    let river = "{ equilibrium: 22, exchange_w_m2_c: 30, reaches: [ { name: Upper, length_km: 20, width: 40, depth: 1.5,
        travel_hours: [[20, 9], [60, 5]], rise_hours: [[20, 4], [60, 2]] } ], points: [ { name: Mill Bridge, at_km: 10 } ] }";
    let site = dam(river);
    let middle = &steady(&site, 1200_f64.sqrt(), 10.0, None);
    assert_abs_diff_eq!(middle.points[0].travel_h, 0.5 * 45_f64.sqrt(), epsilon = 1e-9);
    assert_abs_diff_eq!(middle.points[0].rise_h, 0.5 * 8_f64.sqrt(), epsilon = 1e-9);
    assert!(middle.flags.is_empty(), "{:?}", middle.flags);
    let beyond = &steady(&site, 100.0, 10.0, None);
    assert_abs_diff_eq!(beyond.points[0].travel_h, 2.5, epsilon = 1e-12);
    assert!(beyond.flags.iter().any(|f| f.kind == "travel-held"));
}

/// Manning for a wide channel by hand: 40 m3/s in 40 m is 1 m2/s; slope 0.001, n 0.035: (0.031623/0.035)^0.6 = 0.94092
/// m/s, so 20 km take 5.9044 h; and flow to the 2/5 makes 4 times the flow 4^0.4 as fast.
#[test]
fn scenario_hours_from_width_and_slope() {
    let river = "{ equilibrium: 22, exchange_w_m2_c: 30, reaches: [ { name: Upper, length_km: 20, width: 40, depth: 1,
        slope: 0.001 } ], points: [ { name: Mill Bridge, at_km: 20 } ] }";
    let site = dam(river);
    let hours = steady(&site, 40.0, 10.0, None).points[0].travel_h;
    assert_abs_diff_eq!(hours, 5.9044, epsilon = 2e-3);
    let fast = steady(&site, 160.0, 10.0, None).points[0].travel_h;
    assert_abs_diff_eq!(fast, hours / 4_f64.powf(0.4), epsilon = 1e-9);
}

/// A steady afterbay by hand: 1e6 m3 over 5e5 m2, 20 m3/s of 10 C, Te 22, K 30: the pull of the air is
/// 30 x 5e5/(998.2 x 4182) = 3.5932 m3/s of water at 22 C, so (200 + 79.051)/23.5932 = 11.8276 C.
#[test]
fn scenario_a_steady_afterbay_is_in_balance() {
    let river = "{ equilibrium: 22, exchange_w_m2_c: 30, afterbay: { volume: 1000000, area: 500000 },
        reaches: [ { name: a, length_km: 1, width: 40, depth: 1, travel_hours: [[20, 1]] } ],
        points: [ { name: below, at_km: 0 } ] }";
    let course = steady(&dam(river), 20.0, 10.0, Some(8.0));
    assert_abs_diff_eq!(course.points[0].figures.mean_c, 11.8276, epsilon = 1e-3);
    // the water stays 1e6/20 s
    assert_abs_diff_eq!(course.points[0].travel_h, 1e6 / 20.0 / 3600.0, epsilon = 1e-9);
    assert!(course.points[0].rise_h < 1e-9);
}
