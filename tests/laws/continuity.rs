//! A little more flow never brings other water at once.

use std::f64::consts::PI;

use gatemix::profile::Column;
use gatemix::withdrawal::{Sink, zone};
use proptest::prelude::*;

use crate::columns::{any_water, config, flow, port, share, worked};

fn release(column: &Column, sink: &Sink) -> [f64; 2] {
    let drawn = zone(column, sink, 1.0).unwrap().draw(column).unwrap();
    [drawn.temperature_c, drawn.oxygen_mg_l.unwrap()]
}

/// Ports every 0.25 m, and closer to bed, surface and the foot of the mixed layer.
fn ports() -> Vec<f64> {
    let mut ports: Vec<f64> = (0..=240).map(|i| 0.25 * f64::from(i)).collect();
    for near in [0.001, 0.01, 0.03, 0.1, 0.6, 1.1] {
        ports.extend([near, 60.0 - near, 54.0 - near, 54.0 + near]);
    }
    ports
}

#[test]
fn law_release_is_continuous_in_flow() {
    let column = worked().column();
    // largest step of temperature and of oxygen: size, port, flow
    let mut largest = [[0.0_f64; 3]; 2];
    for centre in ports() {
        let mut flow = 0.5;
        let mut before = release(&column, &port(centre, flow, PI));
        while flow < 400.0 {
            flow *= 1.01;
            let now = release(&column, &port(centre, flow, PI));
            for i in 0..2 {
                let step = (now[i] - before[i]).abs();
                if step > largest[i][0] {
                    largest[i] = [step, centre, flow];
                }
            }
            before = now;
        }
    }
    let [temperature, oxygen] = largest;
    println!(
        "largest step for 1 % of flow: {:.4} C at {} m and {:.2} m3/s; {:.4} mg/L at {} m and {:.2} m3/s",
        temperature[0], temperature[1], temperature[2], oxygen[0], oxygen[1], oxygen[2]
    );
    assert!(temperature[0] < 0.02, "{temperature:?}");
    assert!(oxygen[0] < 0.02, "{oxygen:?}");
}

proptest! {
    #![proptest_config(config(400))]

    /// No step hides between two flows: a millionth more moves the release by no more than what a sum over
    /// slices loses when a limit passes from one to the next.
    #[test]
    fn law_no_jump_in_any_water(pool in any_water(), at in share(), flow in flow()) {
        let column = pool.column();
        let centre = pool.at(at);
        // bisect towards the larger step: a jump would survive, a slope shrinks with the interval
        let (mut low, mut high) = (flow, flow * 1.1);
        let [mut at_low, mut at_high] = [low, high].map(|q| release(&column, &port(centre, q, PI))[0]);
        while high / low > 1.0 + 1e-6 {
            let middle = 0.5 * (low + high);
            let between = release(&column, &port(centre, middle, PI))[0];
            if (between - at_low).abs() > (at_high - between).abs() {
                (high, at_high) = (middle, between);
            } else {
                (low, at_low) = (middle, between);
            }
        }
        prop_assert!((at_high - at_low).abs() < 5e-3, "{} C at {} m3/s", at_high - at_low, low);
    }
}
