//! The pieces of the way are short enough.

use crate::site::{Decay, ROUGHNESS, Reach};
use crate::weather::Air;

use super::sky::Sky;
use super::water::{Seeping, Stretch, Told, Water};

fn reach(depth_m: f64, hours: f64) -> Reach {
    Reach {
        name: "invented".into(),
        from_m: 0.0,
        length_m: 30_000.0,
        width_m: 40.0,
        depth_m,
        slope: None,
        roughness: ROUGHNESS,
        travel_h: vec![(10.0, 1.5 * hours), (20.0, hours), (60.0, 0.6 * hours)],
        rise_h: Vec::new(),
        shade: 0.1,
        inflows: Vec::new(),
        seepage: None,
        reaeration_per_day: None,
    }
}

/// Hours of clear and windy summer days: hot noon, cool night.
fn summer() -> Sky {
    let air = |hour: f64| {
        let wave = ((hour - 9.0) / 24.0 * std::f64::consts::TAU).sin();
        Air {
            temperature_c: 24.0 + 10.0 * wave,
            dew_point_c: 10.0,
            wind_m_s: 3.0 + 2.0 * wave,
            cloud: 0.1,
            solar_w_m2: (1000.0 * wave).max(0.0),
        }
    };
    Sky::Hours((0..120).map(|h| air(f64::from(h % 24) + 0.5)).collect())
}

/// Temperature and oxygen at the end with pieces of a part of their usual length.
fn end(depth_m: f64, hours: f64, seeping: Option<Seeping>, stride: f64) -> (f64, f64) {
    let (reach, sky) = (reach(depth_m, hours), summer());
    let decay = Decay { demand_mg_l: 4.0, per_day: 0.3 };
    let stretch = Stretch {
        reach: &reach,
        length_m: reach.length_m,
        sky: &sky,
        seeping,
        decay,
        pressure_atm: 1.0,
        stride,
    };
    let mut water = Water { flow_m3s: 20.0, temperature_c: 9.0, oxygen_mg_l: Some(5.0), demand_mg_l: 4.0 };
    stretch.go(&mut water, &mut 7.5, &mut Told::default());
    (water.temperature_c, water.oxygen_mg_l.unwrap())
}

#[test]
fn law_halving_the_pieces_moves_less_than_a_thousandth_of_a_degree() {
    let water = Water { flow_m3s: 6.0, temperature_c: 12.0, oxygen_mg_l: Some(6.0), demand_mg_l: 0.0 };
    let seeping = Seeping { per_m_m3s: 6.0 / 30_000.0, water };
    for depth_m in [0.3, 0.8, 1.5, 4.0] {
        for hours in [0.5, 6.0, 20.0, 48.0] {
            for seeping in [None, Some(seeping)] {
                let (whole, half) = (end(depth_m, hours, seeping, 1.0), end(depth_m, hours, seeping, 0.5));
                let fine = end(depth_m, hours, seeping, 0.05);
                let case = format!("depth {depth_m}, {hours} h, seeping {}", seeping.is_some());
                assert!((whole.0 - half.0).abs() < 1e-3, "{case}: {whole:?} {half:?}");
                assert!((whole.0 - fine.0).abs() < 2e-3, "{case}: {whole:?} {fine:?}");
                assert!((whole.1 - fine.1).abs() < 1e-2, "{case}: {whole:?} {fine:?}");
            }
        }
    }
}
