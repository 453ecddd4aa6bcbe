//! Limits: the relations they satisfy, what they do when flow or stratification changes, and symmetry.

use std::f64::consts::PI;

use approx::assert_relative_eq;
use gatemix::profile::{Column, OxygenSample, Sample};
use gatemix::withdrawal::{End, Sink, Zone, boundary_factor, zone};
use proptest::prelude::*;

use crate::columns::{
    Pool, angle, any_water, config, flow, fresh, given, port, share, slack, stable, worked,
};

const GRAVITY_M_S2: f64 = 9.80665;

/// F(Z) of (3.1), written anew.
fn free_flow(column: &Column, centre: f64, angle: f64, z: f64) -> f64 {
    let home = column.density_kg_m3(centre);
    let difference = (column.density_kg_m3(z) - home).abs();
    angle / PI * (z - centre).abs().powf(2.5) * (GRAVITY_M_S2 * difference / home).sqrt()
}

/// phi F of (3.2), written anew; `wall` is the boundary that the other side has reached.
fn bounded_flow(column: &Column, sink: [f64; 3], z: f64, wall: f64) -> f64 {
    let [centre, flow, angle] = sink;
    let touch = (free_flow(column, centre, angle, wall) / flow).cbrt();
    let r = ((wall - centre).abs() / (z - centre).abs()).max(touch);
    let share = if r < 1.0 { 0.5 * (1.0 + r + (PI * r).sin() / PI) } else { 1.0 };
    share * free_flow(column, centre, angle, z)
}

/// Limits of a zone, lower first: elevation, boundary or not, and the boundary of the other side.
fn ends(zone: &Zone, column: &Column) -> [(f64, bool, f64); 2] {
    let bounded = |end: End| end == End::Boundary;
    [
        (zone.lower.limit_m, bounded(zone.lower.end), column.surface_m()),
        (zone.upper.limit_m, bounded(zone.upper.end), column.bed_m()),
    ]
}

/// Not further in than before, within what limits are found to.
fn not_inward(before: &Zone, after: &Zone) -> bool {
    after.lower.limit_m <= before.lower.limit_m + 1e-6 && after.upper.limit_m >= before.upper.limit_m - 1e-6
}

/// The same pool upside down.
fn mirrored(pool: &Pool) -> Pool {
    let turn = |z: f64| pool.bed_m + (pool.surface_m - z);
    let samples: Vec<Sample> =
        pool.samples.iter().rev().map(|s| Sample { elevation_m: turn(s.elevation_m), ..*s }).collect();
    let oxygen = pool.oxygen.iter().rev();
    let oxygen = oxygen.map(|o| OxygenSample { elevation_m: turn(o.elevation_m), ..*o }).collect();
    Pool { samples, oxygen, ..*pool }
}

proptest! {
    #![proptest_config(config(400))]

    #[test]
    fn law_limits_satisfy_their_relations(
        pool in any_water(), at in share(), flow in flow(), angle in angle()
    ) {
        let column = pool.column();
        let centre = pool.at(at);
        let zone = zone(&column, &port(centre, flow, angle), 1.0).unwrap();
        let sides = ends(&zone, &column);
        for (this, other) in [(0, 1), (1, 0)] {
            let (limit, bounded, wall) = sides[this];
            let relation = |z: f64| {
                if sides[other].1 {
                    bounded_flow(&column, [centre, flow, angle], z, wall)
                } else {
                    free_flow(&column, centre, angle, z)
                }
            };
            let over = relation(limit) / flow - 1.0;
            let difference = (column.density_kg_m3(limit) - column.density_kg_m3(centre)).abs();
            let further = relation(limit + 1e-8 * (limit - centre).signum());
            let slack = slack(difference, further - relation(limit), flow);
            if bounded {
                prop_assert!(limit == column.bed_m() || limit == column.surface_m());
                prop_assert!(over < slack, "{} over", over);
            } else {
                prop_assert!(difference > 0.0 && over.abs() < slack, "{} over", over);
            }
        }
    }

    #[test]
    fn law_boundary_flow_is_the_flow_that_just_meets_it(pool in stable(), at in 0.1..0.9_f64) {
        let column = pool.column();
        let centre = pool.at(at);
        let found = zone(&column, &port(centre, 1.0, PI), 1.0).unwrap();
        for (told, end) in [
            (found.lower.boundary_flow_m3s.unwrap(), pool.bed_m),
            (found.upper.boundary_flow_m3s.unwrap(), pool.surface_m),
        ] {
            assert_relative_eq!(told, free_flow(&column, centre, PI, end), max_relative = 1e-9);
        }
    }

    #[test]
    fn law_limits_never_move_inward_when_flow_rises(
        pool in any_water(), at in share(), flow in flow(), more in 1.0..3.0_f64, angle in angle()
    ) {
        let column = pool.column();
        let centre = pool.at(at);
        let [less, more] = [flow, flow * more].map(|q| zone(&column, &port(centre, q, angle), 1.0).unwrap());
        prop_assert!(not_inward(&less, &more), "{:?} then {:?}", less, more);
    }

    #[test]
    fn law_limits_never_move_inward_when_stratification_weakens(
        (pool, density) in given(), at in share(), flow in flow(), weaker in 0.0..1.0_f64
    ) {
        let column = Column::given(&pool.source(), &density).unwrap();
        let centre = pool.at(at);
        let home = column.density_kg_m3(centre);
        let scaled: Vec<f64> = density.iter().map(|rho| home + weaker * (rho - home)).collect();
        let weak = Column::given(&pool.source(), &scaled).unwrap();
        let sink = port(centre, flow, PI);
        let [before, after] = [&column, &weak].map(|c| zone(c, &sink, 1.0).unwrap());
        prop_assert!(not_inward(&before, &after), "{:?} then {:?}", before, after);
    }

    /// Upside down about its middle, density differences from the centre-line negated: the same zone mirrored.
    #[test]
    fn law_a_column_upside_down_gives_the_zone_upside_down(
        (pool, density) in given(), at in share(), flow in flow(), angle in angle()
    ) {
        let column = Column::given(&pool.source(), &density).unwrap();
        let centre = pool.at(at);
        let home = column.density_kg_m3(centre);
        let turned: Vec<f64> = density.iter().rev().map(|rho| 2.0 * home - rho).collect();
        let pool_turned = mirrored(&pool);
        let column_turned = Column::given(&pool_turned.source(), &turned).unwrap();
        let turn = |z: f64| pool.bed_m + (pool.surface_m - z);
        let this = zone(&column, &port(centre, flow, angle), 1.0).unwrap();
        let other = zone(&column_turned, &port(turn(centre), flow, angle), 1.0).unwrap();
        prop_assert_eq!(this.lower.end, other.upper.end);
        prop_assert_eq!(this.upper.end, other.lower.end);
        for (a, b) in [
            (this.lower.limit_m, other.upper.limit_m),
            (this.upper.limit_m, other.lower.limit_m),
            (this.peak_m, other.peak_m),
        ] {
            prop_assert!((a - turn(b)).abs() < 1e-6, "{} against {}", a, turn(b));
        }
        let [a, b] = [this.draw(&column).unwrap(), other.draw(&column_turned).unwrap()];
        prop_assert!((a.temperature_c - b.temperature_c).abs() < 1e-6, "{:?} against {:?}", a, b);
    }

    #[test]
    fn law_zone_factor_is_flow_times_its_cube(
        pool in stable(), at in share(), flow in flow(), factor in 0.7..1.15_f64
    ) {
        let column = pool.column();
        let centre = pool.at(at);
        let by_factor = zone(&column, &port(centre, flow, PI), factor).unwrap();
        let by_flow = zone(&column, &port(centre, flow * factor.powi(3), PI), 1.0).unwrap();
        prop_assert_eq!(by_factor, by_flow);
        prop_assert_eq!(by_factor.draw(&column), by_flow.draw(&column));
    }

    #[test]
    fn law_uniform_water_is_drawn_whole(
        depth in 5.0..120.0_f64, temperature in 4.0..30.0_f64, at in share(), flow in flow()
    ) {
        let samples = vec![fresh(0.2 * depth, temperature), fresh(0.7 * depth, temperature)];
        let pool = Pool { bed_m: 0.0, surface_m: depth, samples, oxygen: Vec::new() };
        let column = pool.column();
        let zone = zone(&column, &port(pool.at(at), flow, PI), 1.0).unwrap();
        prop_assert_eq!([zone.lower.limit_m, zone.upper.limit_m], [0.0, depth]);
        prop_assert_eq!([zone.lower.end, zone.upper.end], [End::Boundary; 2]);
        assert_relative_eq!(zone.draw(&column).unwrap().temperature_c, temperature, max_relative = 1e-12);
    }

    #[test]
    fn law_boundary_factor_rises_from_half_to_one(r in 0.0..1.0_f64, more in 0.0..1.0_f64) {
        let [low, high] = [boundary_factor(r), boundary_factor(r + more)];
        prop_assert!(0.5 <= low && low <= high && high <= 1.0);
    }
}

#[test]
fn law_no_zone_outside_the_water_or_without_flow() {
    let column = crate::columns::worked().column();
    let none = |centre: f64, flow: f64| {
        let sink: Sink = port(centre, flow, PI);
        zone(&column, &sink, 1.0).is_none()
    };
    assert!(none(-0.1, 10.0) && none(60.1, 10.0) && none(30.0, 0.0) && none(30.0, -1.0));
    assert!(!none(0.0, 10.0) && !none(60.0, 10.0));
}

#[test]
fn scenario_a_flow_too_small_for_a_figure_has_no_zone() {
    let column = worked().column();
    for flow_m3s in [0.0, 1e-304, 5e-324] {
        assert!(zone(&column, &port(30.0, flow_m3s, PI), 1.0).is_none());
    }
    assert!(zone(&column, &port(30.0, 1e-30, PI), 1.0).is_some());
}
