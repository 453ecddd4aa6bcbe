//! The split of a well against two-port cases in closed form and a worked chain, on the pool of the worked zones. The
//! figures come from an independent calculation of the same relations (they hold the arithmetic, not the
//! physics).

use std::f64::consts::PI;

use approx::{assert_abs_diff_eq, assert_relative_eq};
use gatemix::intake::{
    Entering, Port, Shaft, Split, entrance_velocity_m_s, gordon_submergence_m, shaft_velocity_head_m,
};
use gatemix::profile::Column;
use gatemix::water::{self, G_M_S2, SEDIMENT_DENSITY_KG_M3};
use gatemix::withdrawal::zone;

use crate::withdrawal::{port as sink, worked};

/// Conduit below both ports, above both, and between.
const LOW_M: f64 = 2.0;
const HIGH_M: f64 = 58.0;
const BETWEEN_M: f64 = 37.5;
const PORTS: [Port; 2] =
    [Port { centre_m: 30.0, area_m2: 6.0, loss: 1.5 }, Port { centre_m: 45.0, area_m2: 6.0, loss: 1.5 }];

fn at_centre(column: &Column, z_m: f64) -> Entering {
    let read = column.reading(z_m);
    Entering {
        temperature_c: read.temperature_c,
        salt_g_per_kg: read.salt_g_per_kg,
        suspended_mg_l: read.suspended_mg_l,
    }
}

fn shaft(column: &Column, conduit_m: f64) -> Shaft<'_> {
    Shaft { column, conduit_m, solids_kg_m3: SEDIMENT_DENSITY_KG_M3 }
}

/// Water at the centre-line enters.
fn held(column: &Column, conduit_m: f64, flow_m3s: f64) -> Split {
    let split = shaft(column, conduit_m).split(&PORTS, flow_m3s, |k, _| at_centre(column, PORTS[k].centre_m));
    split.unwrap()
}

/// The water of each port's own zone enters.
fn chained(column: &Column, conduit_m: f64, flow_m3s: f64) -> Split {
    let supply = |k: usize, flow: f64| {
        let drawn = zone(column, &sink(PORTS[k].centre_m, flow, PI), 1.0).and_then(|z| z.draw(column));
        drawn.map_or(at_centre(column, PORTS[k].centre_m), |d| Entering {
            temperature_c: d.temperature_c,
            salt_g_per_kg: d.salt_g_per_kg,
            suspended_mg_l: d.suspended_mg_l,
        })
    };
    shaft(column, conduit_m).split(&PORTS, flow_m3s, supply).unwrap()
}

/// int g (rho_pool - rho)/1000 dz between two elevations, rho that of the water at a third.
fn drive(column: &Column, from_m: f64, to_m: f64, at_m: f64) -> f64 {
    G_M_S2 * column.density_head_m(from_m, to_m, column.density_kg_m3(at_m))
}

#[test]
fn published_two_ports_with_the_conduit_below() {
    let column = worked();
    assert_relative_eq!(drive(&column, 30.0, 45.0, 45.0), 0.0757048, max_relative = 1e-6);
    assert!(held(&column, LOW_M, 1.906260).flows_m3s[1] == 0.0);
    assert!(held(&column, LOW_M, 1.906262).flows_m3s[1] > 0.0);
    for (flow, percent) in [(2.0, 4.577), (5.0, 42.732), (10.0, 48.183), (20.0, 49.546)] {
        let split = held(&column, LOW_M, flow);
        assert!(split.settled);
        assert_relative_eq!(100.0 * split.flows_m3s[1] / flow, percent, max_relative = 1e-4);
    }
}

#[test]
fn published_two_ports_with_the_conduit_above() {
    let column = worked();
    assert_relative_eq!(-drive(&column, 30.0, 45.0, 30.0), 0.0344286, max_relative = 1e-6);
    assert!(held(&column, HIGH_M, 1.285523).flows_m3s[0] == 0.0);
    assert!(held(&column, HIGH_M, 1.285525).flows_m3s[0] > 0.0);
    for (flow, percent) in [(2.0, 29.343), (5.0, 46.695)] {
        let split = held(&column, HIGH_M, flow);
        assert!(split.settled);
        assert_relative_eq!(100.0 * split.flows_m3s[0] / flow, percent, max_relative = 1e-4);
    }
}

/// K1 q1^2/(2 A1^2) - K2 q2^2/(2 A2^2) is the sum of what both branches drive.
#[test]
fn published_two_ports_with_the_conduit_between() {
    let column = worked();
    let driven = drive(&column, 30.0, BETWEEN_M, 30.0) + drive(&column, BETWEEN_M, 45.0, 45.0);
    assert_relative_eq!(driven, 0.0206381, max_relative = 3e-6);
    for flow in [1.1, 2.0, 5.0, 20.0] {
        let split = held(&column, BETWEEN_M, flow);
        let [lower, upper] = [0, 1].map(|k| 1.5 * split.flows_m3s[k].powi(2) / 72.0);
        assert_relative_eq!(lower - upper, driven, max_relative = 1e-9);
    }
    let blocked = held(&column, BETWEEN_M, 0.99 * 6.0 * (2.0 * driven / 1.5_f64).sqrt());
    assert!(blocked.flows_m3s[1] == 0.0 && blocked.settled);
}

#[test]
fn published_chain_of_zones_and_split() {
    let column = worked();
    assert!(chained(&column, LOW_M, 1.9).flows_m3s[1] == 0.0);
    for (flow, percent) in [(2.0, 4.12), (5.0, 42.50), (10.0, 48.09), (20.0, 49.50)] {
        let split = chained(&column, LOW_M, flow);
        assert!(split.settled);
        assert_abs_diff_eq!(100.0 * split.flows_m3s[1] / flow, percent, epsilon = 0.05);
    }
}

/// Worked by hand: one port open at 45 m gives K Q^2/(2 g A^2); shut ports nearer the conduit, beyond it and on the
/// other side of the conduit see that with what still or moving water of that port's density adds.
#[test]
fn published_head_counts_ports_that_are_shut() {
    let column = worked();
    let shut = |centre_m: f64| Port { centre_m, area_m2: 0.0, loss: 1.5 };
    let head = |conduit_m: f64, shut_m: f64| {
        let ports = [shut(shut_m), PORTS[1]];
        let supply = |_: usize, _: f64| at_centre(&column, 45.0);
        let split = shaft(&column, conduit_m).split(&ports, 3.0, supply).unwrap();
        assert!(split.flows_m3s[0] == 0.0);
        split.head_m
    };
    let at_port = 1.5 * 9.0 / (72.0 * G_M_S2);
    for (conduit_m, shut_m) in [(2.0, 30.0), (2.0, 55.0), (37.5, 20.0)] {
        let own = column.density_kg_m3(45.0);
        let at_shut = at_port + column.density_head_m(shut_m, 45.0, own);
        assert!(at_shut > at_port);
        assert_relative_eq!(head(conduit_m, shut_m), at_shut, max_relative = 1e-9);
    }
}

/// A third port mixes: temperatures first, then the density of the mixture, which is more than the mean of the
/// densities.
#[test]
fn published_water_mixes_before_it_weighs() {
    let column = worked();
    let ports = [20.0, 40.0, 50.0].map(|centre_m| Port { centre_m, area_m2: 4.0, loss: 2.0 });
    let supply = |k: usize, _: f64| at_centre(&column, ports[k].centre_m);
    let flows = shaft(&column, 5.0).split(&ports, 9.0, supply).unwrap().flows_m3s;
    let upper = flows[1] + flows[2];
    let mixed_c = (flows[1] * 11.0 + flows[2] * 20.0) / upper;
    let mixture = water::pure_water_kg_m3(mixed_c);
    let mean = (flows[1] * water::pure_water_kg_m3(11.0) + flows[2] * water::pure_water_kg_m3(20.0)) / upper;
    assert!(mixture > mean + 0.1);
    let loss = |q: f64| 2.0 * q * q / (2.0 * 16.0);
    assert_relative_eq!(
        loss(flows[0]) - loss(flows[1]),
        G_M_S2 * column.density_head_m(20.0, 40.0, mixture),
        max_relative = 1e-9
    );
}

/// 4 m3/s through 2 m2 is 2 m/s; 2^2/2g = 0.203943 m; 2 sqrt(4) = 4, times 0.55 and 0.73. 1 m/s is 51 mm.
#[test]
fn published_velocities_and_submergence() {
    assert_relative_eq!(entrance_velocity_m_s(4.0, 2.0).unwrap(), 2.0, max_relative = 1e-15);
    assert_eq!(entrance_velocity_m_s(4.0, 0.0), None);
    assert_relative_eq!(shaft_velocity_head_m(4.0, 2.0).unwrap(), 0.203943, max_relative = 1e-5);
    assert_relative_eq!(shaft_velocity_head_m(30.0, 30.0).unwrap(), 0.051, max_relative = 1e-3);
    let (low, high) = gordon_submergence_m(2.0, 4.0);
    assert_relative_eq!(low, 2.2, max_relative = 1e-12);
    assert_relative_eq!(high, 2.92, max_relative = 1e-12);
}
