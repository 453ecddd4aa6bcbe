//! Shape and draw: shares, mixing, missing oxygen, widths.

use std::f64::consts::PI;

use approx::assert_relative_eq;
use gatemix::profile::{Column, OXYGEN_CARRY_M, OxygenSample, Source, Widths};
use gatemix::withdrawal::{Draw, End, Zone, zone};
use proptest::prelude::*;

use crate::columns::{Pool, any_water, config, flow, given, port, share, stable};

/// Slices of the sum that stands for the integral here.
const SLICES: u32 = 20_000;

fn zone_of(pool: &Pool, column: &Column, at: f64, flow: f64) -> Zone {
    zone(column, &port(pool.at(at), flow, PI), 1.0).unwrap()
}

/// Mean of a quantity over a zone, weighted by its velocity, by midpoints.
fn mean(zone: &Zone, column: &Column, quantity: &dyn Fn(f64) -> f64) -> f64 {
    let (mut flow, mut sum) = (0.0, 0.0);
    for i in 0..SLICES {
        let z = zone.lower.limit_m + zone.thickness_m() * (f64::from(i) + 0.5) / f64::from(SLICES);
        let velocity = zone.velocity(column, z);
        flow += velocity;
        sum += velocity * quantity(z);
    }
    sum / flow
}

fn with_widths(pool: &Pool, nodes_m: Vec<f64>, at: &dyn Fn(f64) -> f64) -> Column {
    Column::new(&Source { widths: Some(Widths { nodes_m, at }), ..pool.source() }).unwrap()
}

fn close(a: &Draw, b: &Draw) -> bool {
    (a.temperature_c - b.temperature_c).abs() < 1e-10
        && (a.oxygen_mg_l.unwrap() - b.oxygen_mg_l.unwrap()).abs() < 1e-10
}

proptest! {
    #![proptest_config(config(150))]

    #[test]
    fn law_shares_sum_to_one_and_none_is_negative(pool in any_water(), at in share(), flow in flow()) {
        let column = pool.column();
        let zone = zone_of(&pool, &column, at, flow);
        let shares = zone.shares(&column);
        assert_relative_eq!(shares.iter().map(|s| s.2).sum::<f64>(), 1.0, max_relative = 1e-12);
        prop_assert!(shares.iter().all(|s| s.2 >= 0.0));
        // they fill the zone without gap
        prop_assert_eq!(shares[0].0, zone.lower.limit_m);
        prop_assert_eq!(shares[shares.len() - 1].1, zone.upper.limit_m);
        prop_assert!(shares.windows(2).all(|w| w[0].1 == w[1].0));
    }

    #[test]
    fn law_velocity_is_greatest_at_the_peak_and_nothing_at_a_free_limit(
        pool in any_water(), at in share(), flow in flow(), inside in 0.0..1.0_f64
    ) {
        let column = pool.column();
        let zone = zone_of(&pool, &column, at, flow);
        let velocity = |z: f64| zone.velocity(&column, z);
        assert_relative_eq!(velocity(zone.peak_m), 1.0, max_relative = 1e-12);
        let anywhere = velocity(zone.lower.limit_m + inside * zone.thickness_m());
        // to the round-off of a density of 1000 kg/m3 beside a difference of 0.001
        prop_assert!((-1e-9..=1.0 + 1e-9).contains(&anywhere));
        for side in [&zone.lower, &zone.upper] {
            let span = side.limit_m - zone.peak_m;
            if side.end == End::Free {
                prop_assert!(velocity(side.limit_m).abs() < 1e-9);
            }
            // continuous across the peak: next to it still the greatest
            prop_assert!(velocity(zone.peak_m + 1e-7 * span) > 1.0 - 1e-6);
        }
        prop_assert_eq!(velocity(zone.lower.limit_m - 1.0), 0.0);
        prop_assert_eq!(velocity(zone.upper.limit_m + 1.0), 0.0);
    }

    /// The draw is the mean of what was measured, weighted by the velocity.
    #[test]
    fn law_draw_is_the_mean_over_the_velocity(pool in any_water(), at in share(), flow in flow()) {
        let column = pool.column();
        let zone = zone_of(&pool, &column, at, flow);
        let drawn = zone.draw(&column).unwrap();
        let of = |quantity: &dyn Fn(f64) -> f64| mean(&zone, &column, quantity);
        let temperature = of(&|z| column.reading(z).temperature_c);
        let salt = of(&|z| column.reading(z).salt_g_per_kg);
        let suspended = of(&|z| column.reading(z).suspended_mg_l);
        prop_assert!((drawn.temperature_c - temperature).abs() < 3e-3, "{} {}", drawn.temperature_c, temperature);
        prop_assert!((drawn.salt_g_per_kg - salt).abs() < 1e-3);
        prop_assert!((drawn.suspended_mg_l - suspended).abs() < 5e-2);
    }

    #[test]
    fn law_a_constant_tracer_returns_itself(
        (mut pool, density) in given(), at in share(), flow in flow(),
        temperature in 0.0..30.0_f64, oxygen in 0.1..14.0_f64
    ) {
        pool.samples.iter_mut().for_each(|s| {
            s.temperature_c = temperature;
            s.salt_g_per_kg = 0.2;
            s.suspended_mg_l = 7.0;
        });
        pool.oxygen.iter_mut().for_each(|o| o.oxygen_mg_l = oxygen);
        let column = Column::given(&pool.source(), &density).unwrap();
        let drawn = zone_of(&pool, &column, at, flow).draw(&column).unwrap();
        assert_relative_eq!(drawn.temperature_c, temperature, max_relative = 1e-12);
        assert_relative_eq!(drawn.salt_g_per_kg, 0.2, max_relative = 1e-12);
        assert_relative_eq!(drawn.suspended_mg_l, 7.0, max_relative = 1e-12);
        if let Some(drawn) = drawn.oxygen_mg_l {
            assert_relative_eq!(drawn, oxygen, max_relative = 1e-12);
        }
    }

    #[test]
    fn law_release_lies_within_the_water_between_the_limits(
        pool in any_water(), at in share(), flow in flow()
    ) {
        let column = pool.column();
        let zone = zone_of(&pool, &column, at, flow);
        let drawn = zone.draw(&column).unwrap();
        let (low, high) = (zone.lower.limit_m, zone.upper.limit_m);
        let mut places = vec![low, high];
        places.extend(column.nodes_m().iter().filter(|z| (low..=high).contains(*z)));
        let within = |got: f64, of: &dyn Fn(f64) -> f64| {
            let values = places.iter().map(|&z| of(z));
            let (least, most) = values.fold((f64::MAX, f64::MIN), |(a, b), v| (a.min(v), b.max(v)));
            (least - 1e-9..=most + 1e-9).contains(&got)
        };
        prop_assert!(within(drawn.temperature_c, &|z| column.reading(z).temperature_c));
        prop_assert!(within(drawn.salt_g_per_kg, &|z| column.reading(z).salt_g_per_kg));
        prop_assert!(within(drawn.suspended_mg_l, &|z| column.reading(z).suspended_mg_l));
        let known = places.iter().all(|&z| column.reading(z).oxygen_mg_l.is_some());
        if known {
            prop_assert!(within(drawn.oxygen_mg_l.unwrap(), &|z| column.reading(z).oxygen_mg_l.unwrap()));
        }
    }

    /// Over 5 % from where no reading reaches: missing. Less: the mean over what is known.
    #[test]
    fn law_oxygen_from_unread_water(
        pool in stable(), at in share(), flow in flow(), first in any::<prop::sample::Index>()
    ) {
        let mut pool = pool;
        let lowest = first.index(pool.oxygen.len());
        pool.oxygen.drain(..lowest);
        let spacing = pool.oxygen.windows(2).next().map_or(0.0, |w| w[1].elevation_m - w[0].elevation_m);
        let carried_to = pool.oxygen[0].elevation_m - spacing.max(OXYGEN_CARRY_M);
        let last = pool.oxygen.windows(2).last().map_or(0.0, |w| w[1].elevation_m - w[0].elevation_m);
        let carried_up = pool.oxygen[pool.oxygen.len() - 1].elevation_m + last.max(OXYGEN_CARRY_M);
        let column = pool.column();
        let zone = zone_of(&pool, &column, at, flow);
        let drawn = zone.draw(&column).unwrap();
        let known = |z: f64| (carried_to..=carried_up).contains(&z);
        let missing = mean(&zone, &column, &|z| f64::from(u8::from(!known(z))));
        prop_assert!((drawn.oxygen_missing_share - missing).abs() < 1e-3);
        if missing > 0.052 {
            prop_assert_eq!(drawn.oxygen_mg_l, None);
        }
        if missing < 0.048 {
            let sum = mean(&zone, &column, &|z| column.reading(z).oxygen_mg_l.unwrap_or(0.0));
            prop_assert!((drawn.oxygen_mg_l.unwrap() - sum / (1.0 - missing)).abs() < 0.03);
        }
        let low = mean(&zone, &column, &|z| {
            f64::from(u8::from(column.reading(z).oxygen_mg_l.is_some_and(|oxygen| oxygen < 1.0)))
        });
        prop_assert!((drawn.oxygen_low_share - low).abs() < 1e-3);
    }

    #[test]
    fn law_no_oxygen_measured_none_told(pool in stable(), at in share(), flow in flow()) {
        let pool = Pool { oxygen: Vec::new(), ..pool };
        let column = pool.column();
        let drawn = zone_of(&pool, &column, at, flow).draw(&column).unwrap();
        prop_assert!(!column.has_oxygen());
        prop_assert_eq!(drawn.oxygen_mg_l, None);
        assert_relative_eq!(drawn.oxygen_missing_share, 1.0, max_relative = 1e-12);
        prop_assert_eq!(drawn.oxygen_low_share, 0.0);
    }

    #[test]
    fn law_only_the_form_of_the_width_counts(
        pool in stable(), at in share(), flow in flow(), width in 1.0..500.0_f64, opens in 0.0..20.0_f64
    ) {
        // every sample carries oxygen, and the ends are read so that it is never missing
        let pool = read_to_the_ends(pool);
        let draw = |column: &Column| zone_of(&pool, column, at, flow).draw(column).unwrap();
        let plain = draw(&pool.column());
        let constant = draw(&with_widths(&pool, Vec::new(), &|_| width));
        prop_assert!(close(&plain, &constant));
        let bends = vec![pool.bed_m, pool.at(0.5), pool.surface_m];
        let widening = |z: f64| 1.0 + opens * (z - pool.bed_m).max(0.0).min(pool.at(0.5) - pool.bed_m);
        let once = draw(&with_widths(&pool, bends.clone(), &widening));
        let twice = draw(&with_widths(&pool, bends, &|z| 2.0 * widening(z)));
        prop_assert!(close(&once, &twice));
    }

    /// Temperature never falls upward here, so water from higher up is no colder.
    #[test]
    fn law_a_pool_wider_above_gives_upper_water(
        pool in stable(), at in share(), flow in flow(), opens in 0.01..20.0_f64
    ) {
        let pool = read_to_the_ends(pool);
        let plain = pool.column();
        let bends = vec![pool.bed_m, pool.surface_m];
        let wide = with_widths(&pool, bends, &|z| 1.0 + opens * (z - pool.bed_m));
        let [plain, wide] =
            [&plain, &wide].map(|c| zone_of(&pool, c, at, flow).draw(c).unwrap().temperature_c);
        prop_assert!(wide >= plain - 1e-9, "{} then {}", plain, wide);
    }
}

fn read_to_the_ends(mut pool: Pool) -> Pool {
    let [first, last] = [pool.oxygen[0], pool.oxygen[pool.oxygen.len() - 1]];
    if first.elevation_m > pool.bed_m {
        pool.oxygen.insert(0, OxygenSample { elevation_m: pool.bed_m, ..first });
    }
    if last.elevation_m < pool.surface_m {
        pool.oxygen.push(OxygenSample { elevation_m: pool.surface_m, ..last });
    }
    pool
}
