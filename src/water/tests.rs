//! Laws that density, oxygen and heat keep everywhere a reservoir goes.

use super::*;
use approx::assert_relative_eq;
use proptest::prelude::*;

const RHO_S: f64 = SEDIMENT_DENSITY_KG_M3;

proptest! {

    #![proptest_config(crate::units::law_config())]
    #[test]
    fn law_density_falls_away_from_its_greatest(
        salt in 0.0..2.0_f64, suspended in 0.0..3000.0_f64, near in 0.05..10.0_f64, further in 0.05..10.0_f64,
    ) {
        let peak = temperature_of_greatest_density_c(salt);
        let at = |t: f64| density_kg_m3(t, salt, suspended, RHO_S);
        // on the cold side water freezes long before the fit fails
        let cold = (near.min(3.5), (near + further).min(4.5));
        prop_assert!(at(peak) > at(peak + near) && at(peak + near) > at(peak + near + further));
        prop_assert!(at(peak) > at(peak - cold.0) && at(peak - cold.0) > at(peak - cold.1));
    }

    #[test]
    fn law_density_rises_with_salt_and_solids(
        t in -1.0..40.0_f64, salt in 0.0..2.0_f64, suspended in 0.0..3000.0_f64, more in 1e-3..1.0_f64,
    ) {
        let plain = density_kg_m3(t, salt, suspended, RHO_S);
        prop_assert!(density_kg_m3(t, salt + more, suspended, RHO_S) > plain);
        prop_assert!(density_kg_m3(t, salt, suspended + 1e3 * more, RHO_S) > plain);
        let neutral = pure_water_kg_m3(t);
        prop_assert!(suspended_gain_kg_m3(neutral, suspended, neutral).abs() < 1e-12);
    }

    #[test]
    fn law_density_is_the_sum_of_its_parts(
        t in -1.0..40.0_f64, salt in 0.0..2.0_f64, suspended in 0.0..3000.0_f64,
    ) {
        let pure = pure_water_kg_m3(t);
        let sum = pure + salt_slope(t) * salt + suspended_gain_kg_m3(pure, suspended, RHO_S);
        prop_assert!((density_kg_m3(t, salt, suspended, RHO_S) - sum).abs() < 1e-12 * sum);
    }

    #[test]
    fn law_salt_lowers_the_temperature_of_greatest_density(salt in 0.0..30.0_f64, more in 1e-3..5.0_f64) {
        prop_assert!(temperature_of_greatest_density_c(salt + more) < temperature_of_greatest_density_c(salt));
    }

    #[test]
    fn law_slope_is_zero_at_the_greatest_density(salt in 0.0..35.0_f64) {
        let peak = temperature_of_greatest_density_c(salt);
        let at = |t: f64| density_kg_m3(t, salt, 0.0, RHO_S);
        // a quarter of the curvature over the step would be 0.004 kg/m3 per C
        let slope = (at(peak + 0.01) - at(peak - 0.01)) / 0.02;
        prop_assert!(slope.abs() < 1e-5, "{slope}");
    }

    #[test]
    fn law_saturation_falls_with_warmth_height_and_salt(
        t in 0.0..39.0_f64, salt in 0.0..5.0_f64, altitude in -100.0..4000.0_f64,
        warmer in 1e-3..1.0_f64, higher in 0.1..1000.0_f64,
    ) {
        let at = |t, salt, altitude| saturation_mg_l(t, salt, pressure_atm(altitude));
        let plain = at(t, salt, altitude);
        prop_assert!(at(t + warmer, salt, altitude) < plain);
        prop_assert!(at(t, salt + warmer, altitude) < plain);
        prop_assert!(at(t, salt, altitude + higher) < plain);
    }

    #[test]
    fn law_percent_of_saturation_round_trip(oxygen in 0.0..20.0_f64, t in 0.0..40.0_f64, altitude in 0.0..3000.0_f64) {
        let saturation = saturation_mg_l(t, 0.0, pressure_atm(altitude));
        let back = oxygen_from_percent_mg_l(oxygen_percent(oxygen, saturation), saturation);
        prop_assert!((back - oxygen).abs() <= 1e-14 * oxygen);
    }

    #[test]
    fn law_conductance_at_25_c_needs_no_correction(raw in 1.0..5000.0_f64, t in -1.0..45.0_f64) {
        let same = specific_conductance_us_cm(raw, 25.0, CONDUCTIVITY_PER_C);
        prop_assert!((same - raw).abs() <= 1e-15 * raw);
        let specific = specific_conductance_us_cm(raw, t, CONDUCTIVITY_PER_C);
        prop_assert!((specific > raw) == (t < 25.0));
        // what the meter would read there, by the same rule forwards
        let read = specific * (1.0 + CONDUCTIVITY_PER_C * (t - 25.0));
        prop_assert!((read - raw).abs() <= 1e-12 * raw);
    }
}

#[test]
fn law_saturation_is_full_only_at_its_own_pressure() {
    assert_relative_eq!(pressure_factor(20.0, 1.0), 1.0);
    assert_relative_eq!(pressure_atm(0.0), 1.0);
    assert_relative_eq!(oxygen_percent(9.0, 9.0), 100.0);
    // water boils where air pressure is that of its vapour, and nothing is negative beyond
    assert_relative_eq!(pressure_factor(20.0, vapour_pressure_atm(20.0)), 0.0);
    assert_relative_eq!(saturation_mg_l(20.0, 0.0, 0.0), 0.0);
    assert_relative_eq!(pressure_atm(60_000.0), 0.0);
}

#[test]
fn scenario_salt_from_a_conductance_meter() {
    // 300 uS/cm at 25 C, read by a meter without compensation in water of 10 C
    let raw = 300.0 * (1.0 - 0.0191 * 15.0);
    let specific = specific_conductance_us_cm(raw, 10.0, CONDUCTIVITY_PER_C);
    let dissolved = dissolved_from_conductance_mg_l(specific, SOLIDS_PER_CONDUCTANCE);
    assert_relative_eq!(dissolved, 195.0, max_relative = 1e-12);
    assert_relative_eq!(dissolved_g_per_kg(dissolved, 10.0), 195.0 / 999.7027, max_relative = 1e-7);
}
