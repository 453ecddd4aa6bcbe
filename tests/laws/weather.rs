//! The heat through a water surface, and the oxygen of a river and below an outlet.

use chrono::{DateTime, FixedOffset, TimeDelta};
use gatemix::water::{self, Aeration, Sag};
use gatemix::weather::{Air, Weather, budget, equilibrium_c, exchange_w_m2_c, humidity};
use proptest::prelude::*;

use crate::columns::config;

/// Air such as stands over rivers, from frost to desert.
fn airs() -> impl Strategy<Value = Air> {
    (-15.0..45.0_f64, 0.0..30.0_f64, 0.0..15.0_f64, 0.0..=1.0_f64, 0.0..400.0_f64).prop_map(
        |(temperature_c, below, wind_m_s, cloud, solar_w_m2)| Air {
            temperature_c,
            dew_point_c: temperature_c - below,
            wind_m_s,
            cloud,
            solar_w_m2,
        },
    )
}

fn aerations() -> impl Strategy<Value = Aeration> {
    prop_oneof![
        (0.0..20.0_f64, 0.1..2.0_f64, 0.0..2.0_f64).prop_map(|(height_m, quality, weir)| Aeration::Fall {
            height_m,
            quality,
            weir
        }),
        (0.0..=1.0_f64).prop_map(Aeration::Efficiency),
        (0.0..10.0_f64).prop_map(Aeration::Gain),
    ]
}

proptest! {
    #![proptest_config(config(200))]

    #[test]
    fn law_net_heat_falls_as_water_warms(
        air in airs(), water_c in 0.0..40.0_f64, warmer in 0.01..10.0_f64, shade in 0.0..=1.0_f64,
    ) {
        let net = |t: f64| budget(&air, t, shade).net_w_m2();
        prop_assert!(net(water_c + warmer) < net(water_c));
        prop_assert!(exchange_w_m2_c(&air, water_c) > 0.0);
    }

    #[test]
    fn law_no_heat_passes_at_equilibrium(air in airs(), shade in 0.0..=1.0_f64) {
        match equilibrium_c(&air, shade) {
            Some(t) => {
                prop_assert!(budget(&air, t, shade).net_w_m2().abs() < 1e-8);
                // more sun never makes it colder
                let sunnier = Air { solar_w_m2: air.solar_w_m2 + 50.0, ..air };
                prop_assert!(equilibrium_c(&sunnier, shade).is_some_and(|warmer| warmer >= t));
            }
            None => prop_assert!(budget(&air, 0.0, shade).net_w_m2() < 0.0),
        }
    }

    #[test]
    fn law_aeration_moves_towards_saturation_and_never_across(
        aeration in aerations(), oxygen in 0.0..20.0_f64, t in 0.0..35.0_f64,
    ) {
        let saturation = water::saturation_1atm_mg_l(t, 0.0);
        let below = aeration.below_mg_l(oxygen, saturation, t);
        let (least, most) = if oxygen <= saturation { (oxygen, saturation) } else { (saturation, oxygen) };
        prop_assert!((least - 1e-12..=most + 1e-12).contains(&below), "{oxygen} -> {below} of {saturation}");
        // what had more before has no less after
        prop_assert!(aeration.below_mg_l(oxygen + 0.5, saturation, t) >= below - 1e-12);
    }

    #[test]
    fn law_a_higher_fall_gains_no_less(
        height in 0.0..20.0_f64, more in 0.0..5.0_f64, quality in 0.1..2.0_f64, t in 0.0..35.0_f64,
    ) {
        let ratio = |h: f64| water::deficit_ratio_of_fall(h, quality, 1.0, t);
        prop_assert!(ratio(height) >= 1.0 && ratio(height + more) >= ratio(height));
    }

    #[test]
    fn law_the_sag_is_one_curve_however_its_way_is_cut(
        deficit in -3.0..8.0_f64, demand in 0.0..20.0_f64, kd in 0.0..1.5_f64, ka in 0.0..3.0_f64,
        first in 0.0..3.0_f64, second in 0.0..3.0_f64,
    ) {
        let sag = Sag { deficit_mg_l: deficit, demand_mg_l: demand, decay_per_day: kd, reaeration_per_day: ka };
        let half = Sag {
            deficit_mg_l: water::deficit_mg_l(&sag, first),
            demand_mg_l: demand * (-kd * first).exp(),
            ..sag
        };
        let (whole, cut) = (water::deficit_mg_l(&sag, first + second), water::deficit_mg_l(&half, second));
        prop_assert!((whole - cut).abs() < 1e-10 * (1.0 + demand), "{whole} {cut}");
        prop_assert!((water::deficit_mg_l(&sag, 0.0) - deficit).abs() < 1e-12);
        if let Some((days, lowest)) = water::critical_sag(&sag) {
            for near in [0.99 * days, 1.01 * days, 0.0, 2.0 * days] {
                prop_assert!(water::deficit_mg_l(&sag, near) <= lowest + 1e-9);
            }
        }
    }

    #[test]
    fn law_equal_rates_are_no_special_case(
        deficit in 0.0..8.0_f64, demand in 0.1..20.0_f64, k in 0.05..2.0_f64, days in 0.0..5.0_f64,
    ) {
        let at = |ka: f64| {
            let sag =
                Sag { deficit_mg_l: deficit, demand_mg_l: demand, decay_per_day: k, reaeration_per_day: ka };
            (water::deficit_mg_l(&sag, days), water::critical_sag(&sag))
        };
        let (equal, near) = (at(k), at(k * (1.0 + 1e-9)));
        prop_assert!((equal.0 - near.0).abs() < 1e-6 * (1.0 + demand));
        prop_assert_eq!(equal.1.is_some(), deficit < demand);
        if let (Some(equal), Some(near)) = (equal.1, near.1) {
            prop_assert!((equal.0 - near.0).abs() < 1e-6 * (1.0 + equal.0));
        }
    }
}

/// Weather of every third hour is weather by the hour: near what was thinned, with days, and longer gaps stay.
#[test]
fn law_weather_by_three_hours_goes_by_the_hour() {
    let midnight: DateTime<FixedOffset> = "2026-07-15T00:00:00+00:00".parse().unwrap();
    let air = |h: i64| {
        let wave = ((h - 9) as f64 / 24.0 * std::f64::consts::TAU).sin();
        Air {
            temperature_c: 20.0 + 8.0 * wave,
            dew_point_c: 11.0 + 2.0 * wave,
            wind_m_s: 2.0 + wave,
            cloud: 0.3,
            solar_w_m2: (800.0 * wave).max(0.0),
        }
    };
    let every = |step: usize| {
        let hours = (0..=72).step_by(step).map(|h| (midnight + TimeDelta::hours(h), air(h)));
        Weather::of_hours(hours.collect())
    };
    let (whole, thin, gaps) = (every(1), every(3), every(4));
    assert_eq!((whole.hours.len(), thin.hours.len(), gaps.hours.len()), (73, 73, 19));
    assert_eq!((whole.days.len(), thin.days.len(), gaps.days.len()), (3, 3, 0));
    for h in 0..=72 {
        let at = |w: &Weather| w.at(midnight + TimeDelta::hours(h)).unwrap();
        let (whole, thin) = (at(&whole), at(&thin));
        if h % 3 == 0 {
            assert_eq!(whole, thin);
        }
        // a sine over three of its 24 hours leaves its chord by no more than 1 - cos(22.5 degrees)
        assert!((whole.temperature_c - thin.temperature_c).abs() <= 8.0 * 0.0762, "{h}");
        assert!((whole.dew_point_c - thin.dew_point_c).abs() < 0.25, "{h}");
        assert!((whole.cloud - thin.cloud).abs() < 1e-12 && thin.solar_w_m2 >= 0.0, "{h}");
    }
    // vapour pressure goes straight, so the dew point bows upward
    let two = [(0, 0.0), (2, 20.0)]
        .map(|(h, dew_point_c)| (midnight + TimeDelta::hours(h), Air { dew_point_c, ..air(0) }));
    let middle = Weather::of_hours(two.into_iter().collect()).at(midnight + TimeDelta::hours(1)).unwrap();
    let vapour = 0.5 * (humidity::saturation_kpa(0.0) + humidity::saturation_kpa(20.0));
    assert!(
        (humidity::saturation_kpa(middle.dew_point_c) - vapour).abs() < 1e-9 && middle.dew_point_c > 11.0
    );
}
