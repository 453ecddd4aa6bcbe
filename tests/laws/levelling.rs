//! Levelled density falls upward, keeps its weight, and leaves what is measured alone.

use approx::assert_relative_eq;
use gatemix::profile::levelled;
use proptest::prelude::*;

use crate::columns::{any_water, config, stable};

/// Nodes (rising) and a density at each.
fn nodes() -> impl Strategy<Value = (Vec<f64>, Vec<f64>)> {
    prop::collection::vec((0.01..5.0_f64, 995.0..1001.0_f64), 1..60).prop_map(|steps| {
        let mut z = 0.0;
        let place = |step: &(f64, f64)| {
            z += step.0;
            z
        };
        (steps.iter().map(place).collect(), steps.iter().map(|step| step.1).collect())
    })
}

/// Half of each neighbouring interval.
fn thickness(z: &[f64], i: usize) -> f64 {
    let [low, high] = [z[i.saturating_sub(1)], z[(i + 1).min(z.len() - 1)]];
    0.5 * (high - low)
}

proptest! {
    #![proptest_config(config(300))]

    #[test]
    fn law_levelled_never_rises_and_keeps_its_sum((z, density) in nodes()) {
        let level = levelled(&z, &density);
        prop_assert_eq!(level.len(), density.len());
        prop_assert!(level.windows(2).all(|w| w[1] <= w[0]), "{:?}", level);
        let whole = |rho: &[f64]| (0..z.len()).map(|i| thickness(&z, i) * (rho[i] - 1000.0)).sum::<f64>();
        assert_relative_eq!(whole(&level), whole(&density), epsilon = 1e-9, max_relative = 1e-9);
    }

    #[test]
    fn law_levelling_twice_is_levelling_once((z, density) in nodes()) {
        let once = levelled(&z, &density);
        prop_assert_eq!(levelled(&z, &once), once);
    }

    #[test]
    fn law_stable_density_is_left_bit_for_bit((z, mut density) in nodes()) {
        density.sort_by(|a, b| b.total_cmp(a));
        prop_assert_eq!(levelled(&z, &density), density);
    }

    /// Nearest: no other density that falls upward lies closer, tried with one moved towards the measured.
    #[test]
    fn law_levelled_is_nearest((z, density) in nodes(), towards in 0.0..1.0_f64) {
        let level = levelled(&z, &density);
        let far = |rho: &[f64]| {
            (0..z.len()).map(|i| thickness(&z, i) * (rho[i] - density[i]).powi(2)).sum::<f64>()
        };
        let moved: Vec<f64> = (0..z.len()).map(|i| level[i] + towards * (density[i] - level[i])).collect();
        let other = levelled(&z, &moved);
        prop_assert!(far(&level) <= far(&other) + 1e-9);
    }

    /// Everywhere between the samples too, not only at them.
    #[test]
    fn law_density_of_a_column_never_rises_upward(pool in any_water()) {
        let column = pool.column();
        let at = |i: u32| column.density_kg_m3(pool.at(f64::from(i) / 4000.0));
        for i in 0..4000 {
            prop_assert!(at(i + 1) <= at(i) + 1e-8, "{} kg/m3 up at {}", at(i + 1) - at(i), pool.at(f64::from(i) / 4000.0));
        }
    }

    #[test]
    fn law_readings_are_the_samples_whatever_is_levelled(pool in any_water()) {
        let column = pool.column();
        for (sample, oxygen) in pool.samples.iter().zip(&pool.oxygen) {
            let reading = column.reading(sample.elevation_m);
            assert_relative_eq!(reading.temperature_c, sample.temperature_c, epsilon = 1e-9);
            assert_relative_eq!(reading.salt_g_per_kg, sample.salt_g_per_kg, epsilon = 1e-9);
            assert_relative_eq!(reading.suspended_mg_l, sample.suspended_mg_l, epsilon = 1e-9);
            assert_relative_eq!(reading.oxygen_mg_l.unwrap(), oxygen.oxygen_mg_l, epsilon = 1e-9);
        }
    }

    #[test]
    fn law_stable_columns_keep_the_density_of_their_water(pool in stable()) {
        let column = pool.column();
        for (z, density) in column.nodes_m().iter().zip(column.node_density_kg_m3()) {
            let water = gatemix::water::pure_water_kg_m3(column.reading(*z).temperature_c);
            assert_relative_eq!(*density, water, max_relative = 1e-14);
        }
    }
}
