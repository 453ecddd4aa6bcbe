//! Inside the pool through a season: formulas of one value, and the diffusion of a known mode.
#![expect(clippy::unwrap_used, reason = "helpers of tests, outside a test function")]

use std::f64::consts::PI;

use approx::assert_abs_diff_eq;
use gatemix::season::{
    Layer, Neutral, demand_at, diffuse, diffusivity_m2_s, friction_velocity_m_s, left_mg_l, neutral,
    wind_work_j_m2,
};
use gatemix::water::{self, G_M_S2, SEDIMENT_DENSITY_KG_M3, pure_water_kg_m3};

use crate::table::{Row, hold};

fn water_of(temperature_c: f64, suspended_mg_l: f64) -> Layer {
    Layer { volume_m3: 1.0, temperature_c, oxygen_mg_l: 0.0, salt_g_per_kg: 0.0, suspended_mg_l }
}

fn density(layer: &Layer) -> f64 {
    layer.density_kg_m3(SEDIMENT_DENSITY_KG_M3)
}

/// Depth of a water of a temperature and solids among layers 5 m apart.
fn neutral_depth_m(inflow_c: f64, suspended_mg_l: f64, downward_c: &[f64]) -> f64 {
    let layers: Vec<f64> = downward_c.iter().rev().map(|c| density(&water_of(*c, 0.0))).collect();
    match neutral(&layers, density(&water_of(inflow_c, suspended_mg_l))) {
        Neutral::Above(below, share) => 5.0 * ((layers.len() - 1 - below) as f64 - share),
        other => panic!("{other:?}"),
    }
}

fn computed(row: &Row) -> f64 {
    let given: Vec<f64> = row.text("inputs").split_whitespace().map(|n| n.parse().unwrap()).collect();
    match (row.text("formula"), given.as_slice()) {
        ("diffusivity", [area, buoyancy]) => diffusivity_m2_s(*area, *buoyancy),
        ("friction_velocity", [wind, water]) => friction_velocity_m_s(*wind, *water),
        ("extinction", [secchi]) => water::extinction_per_m(*secchi),
        ("light_left", [kd, z]) => water::light_left(*kd, *z),
        ("light_kept", [kd, from, to]) => water::light_left(*kd, *from) - water::light_left(*kd, *to),
        ("wind_work", [velocity, seconds]) => wind_work_j_m2(*velocity, *seconds),
        ("days_to_none", [oxygen, demand]) => {
            // the first day without any, to a thousandth
            let mut days = (0..).map(|k| f64::from(k) * 1e-3);
            days.find(|days| left_mg_l(*oxygen, *demand, *days) <= 0.0).unwrap()
        }
        ("demand", [at_20, c]) => demand_at(*at_20, *c),
        ("reduced_gravity", [inflow, lake]) => {
            G_M_S2 * (pure_water_kg_m3(*inflow) / pure_water_kg_m3(*lake) - 1.0)
        }
        ("neutral_depth", [inflow, suspended, downward @ ..]) => {
            neutral_depth_m(*inflow, *suspended, downward)
        }
        ("cabbeling", [a, b]) => {
            let (a, b) = (water_of(*a, 0.0), water_of(*b, 0.0));
            density(&a.joined(&b)) - 0.5 * (density(&a) + density(&b))
        }
        (other, given) => panic!("no formula {other} of {given:?}"),
    }
}

#[test]
fn published_single_values_of_the_season() {
    hold("checks_season.csv", 14, computed);
}

/// Share of its amplitude that the mode cos(pi z/H) keeps in 10 days at 1e-5 m2/s in a box of 20 m.
fn mode_left(layers: u32, steps: u32) -> f64 {
    let (height_m, area_m2, k_m2_s, days) = (20.0, 1e6, 1e-5, 10.0);
    let h = height_m / f64::from(layers);
    let mode: Vec<f64> = (0..layers).map(|i| (PI * (f64::from(i) + 0.5) / f64::from(layers)).cos()).collect();
    let layer = |m: &f64| Layer { volume_m3: area_m2 * h, ..water_of(12.0 + 3.0 * m, 0.0) };
    let mut water: Vec<Layer> = mode.iter().map(layer).collect();
    let heat = |water: &[Layer]| water.iter().map(Layer::heat_j).sum::<f64>();
    let before = heat(&water);
    let traded = vec![k_m2_s * area_m2 * days * 86_400.0 / f64::from(steps) / h; mode.len() - 1];
    for _ in 0..steps {
        diffuse(&mut water, &traded);
    }
    assert!((heat(&water) / before - 1.0).abs() < 1e-12);
    let left: f64 = water.iter().zip(&mode).map(|(l, m)| (l.temperature_c - 12.0) / 3.0 * m).sum();
    left / mode.iter().map(|m| m * m).sum::<f64>()
}

/// The mode decays as exp(-K pi^2 t/H^2) (I30), and half the step leaves half the error: the scheme is of first order in
/// time.
#[test]
fn published_diffusion_of_a_mode() {
    let exact = (-1e-5 * PI * PI * 864_000.0 / 400.0_f64).exp();
    assert_abs_diff_eq!(exact, 0.808008, epsilon = 5e-7);
    assert_abs_diff_eq!(mode_left(80, 160), exact, epsilon = 1e-3);
    // at daily steps and 1 m layers, as the season goes
    assert_abs_diff_eq!(mode_left(20, 10), exact, epsilon = 3e-3);
    let error = |steps| mode_left(400, steps) - exact;
    let halved = error(20) / error(10);
    assert!((0.49..0.52).contains(&halved), "{halved}");
    println!("error {:.2e} in 10 steps, {:.2e} in 20", error(10), error(20));
}
