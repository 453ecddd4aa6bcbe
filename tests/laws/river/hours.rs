//! When water and its rise come to a point.

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
