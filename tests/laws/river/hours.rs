//! When water and its rise come to a point.

use approx::assert_abs_diff_eq;
use chrono::{DateTime, FixedOffset};
use gatemix::river::{Conditions, course, latest};
use proptest::prelude::*;

use crate::columns::config;

use super::{GIVEN, day, long, part};

proptest! {
    #![proptest_config(config(60))]

    #[test]
    fn law_a_front_comes_before_the_bulk_before_the_water(flow in 0.5..400.0_f64) {
        let course = course(&long(GIVEN), &Conditions::default(), day(), &[part(24.0, flow, 9.0, 8.0)]).unwrap();
        let mut last = 0.0;
        for point in &course.points {
            prop_assert!(0.0 < point.rise_first_h && point.rise_first_h <= point.rise_h);
            prop_assert!(point.rise_h <= point.travel_h && point.travel_h > last);
            last = point.travel_h;
        }
    }

    /// With blocks a rise is that of the greatest flow, the water that of the mean; flows are those of each block.
    #[test]
    fn law_a_rise_comes_by_the_greatest_flow_of_the_day(low in 5.0..30.0_f64, more in 1.0..80.0_f64) {
        let (site, high) = (long(GIVEN), low + more);
        let of = |parts: &[_]| course(&site, &Conditions::default(), day(), parts).unwrap().points;
        let blocks = of(&[part(18.0, low, 9.0, 8.0), part(6.0, high, 9.0, 8.0)]);
        let steady = |flow: f64| of(&[part(24.0, flow, 9.0, 8.0)]);
        let (least, mean, most) = (steady(low), steady(0.75 * low + 0.25 * high), steady(high));
        for (i, point) in blocks.iter().enumerate() {
            assert_abs_diff_eq!(point.rise_first_h, most[i].rise_first_h, epsilon = 1e-12);
            assert_abs_diff_eq!(point.rise_h, most[i].rise_h, epsilon = 1e-12);
            assert_abs_diff_eq!(point.travel_h, mean[i].travel_h, epsilon = 1e-9);
            prop_assert!(point.rise_first_h <= mean[i].rise_first_h && point.rise_h < mean[i].rise_h);
            let (from, to) = point.flow_range_m3s;
            assert_abs_diff_eq!(from, least[i].figures.flow_m3s, epsilon = 1e-9);
            assert_abs_diff_eq!(to, most[i].figures.flow_m3s, epsilon = 1e-9);
        }
    }

    #[test]
    fn law_water_that_leaves_at_the_latest_moment_comes_in_time(flow in 5.0..80.0_f64, point in 0..2_usize) {
        let site = long(GIVEN);
        let by: DateTime<FixedOffset> = "2026-07-16T15:00:00+00:00".parse().unwrap();
        let leaves = latest(&site, &Conditions::default(), flow, point, by).unwrap();
        let course = course(&site, &Conditions::default(), day(), &[part(24.0, flow, 9.0, 8.0)]).unwrap();
        let hours = (by - leaves).num_milliseconds() as f64 / 3.6e6;
        prop_assert!((hours - course.points[point].travel_h).abs() < 1e-5);
    }
}
