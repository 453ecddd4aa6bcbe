//! How a pool is layered, its heat and cold water: single values, closed forms and laws.
#![expect(clippy::unwrap_used, reason = "helpers of tests, outside a test function")]

use approx::{assert_abs_diff_eq, assert_relative_eq};
use gatemix::profile::{
    Column, Layering, Profile, Raw, RawRow, Sample, Source, buoyancy_s2, colder_m3, greatest_buoyancy,
    mixed_base_m, schmidt_stability_j_m2, thermocline,
};
use gatemix::site::{self, Pool, RawOutlet, RawPool, Site};
use gatemix::water;
use proptest::prelude::*;

use crate::pool::{pool, tables};
use crate::table::{Row, hold};

/// Height given to a step of density or area, m; it moves a stability by about its share of the depth.
const STEP_M: f64 = 1e-7;

fn sample(elevation_m: f64, temperature_c: f64) -> Sample {
    Sample { elevation_m, temperature_c, salt_g_per_kg: 0.0, suspended_mg_l: 0.0 }
}

fn source(bed_m: f64, surface_m: f64, samples: &[Sample]) -> Source<'_> {
    Source {
        bed_m,
        surface_m,
        samples,
        oxygen: &[],
        solids_kg_m3: water::SEDIMENT_DENSITY_KG_M3,
        widths: None,
    }
}

fn column(bed_m: f64, surface_m: f64, samples: &[Sample]) -> Column {
    Column::new(&source(bed_m, surface_m, samples)).unwrap()
}

/// The numbers of a list.
fn list(row: &Row, name: &str) -> Vec<f64> {
    row.text(name).split_whitespace().map(|n| n.parse().unwrap()).collect()
}

/// Elevations of the row's depths, rising, and the order that puts its lists so: depth 0 stands at 100 m, and of
/// a depth given twice the deeper one a step lower.
fn elevations(row: &Row) -> Vec<f64> {
    let depths = list(row, "depth_m");
    let step = |i: usize| if i > 0 && depths[i] - depths[i - 1] < 1e-9 { STEP_M } else { 0.0 };
    (0..depths.len()).rev().map(|i| 100.0 - depths[i] - step(i)).collect()
}

fn rising(row: &Row, name: &str) -> Vec<f64> {
    list(row, name).into_iter().rev().collect()
}

fn samples(row: &Row) -> Vec<Sample> {
    elevations(row).into_iter().zip(rising(row, "temperature_c")).map(|(z, t)| sample(z, t)).collect()
}

fn buoyancy(row: &Row) -> f64 {
    let points: Vec<(f64, f64)> =
        samples(row).iter().map(|s| (s.elevation_m, water::pure_water_kg_m3(s.temperature_c))).collect();
    buoyancy_s2(points[0], points[1])
}

fn schmidt(row: &Row) -> f64 {
    let z = elevations(row);
    let tracer: Vec<Sample> = z.iter().map(|&z| sample(z, 10.0)).collect();
    let column =
        Column::given(&source(z[0], z[z.len() - 1], &tracer), &rising(row, "density_kg_m3")).unwrap();
    let table: Vec<site::RawRow> = z
        .iter()
        .zip(rising(row, "area_m2"))
        .map(|(&elevation_m, area_m2)| site::RawRow { elevation_m, area_m2, ..site::RawRow::default() })
        .collect();
    schmidt_stability_j_m2(&column, &pool(&table))
}

fn computed(row: &Row) -> f64 {
    let line = || thermocline(&samples(row)).unwrap();
    match row.text("formula") {
        "buoyancy" => buoyancy(row),
        "schmidt" => schmidt(row),
        "thermocline_depth" => 100.0 - line().elevation_m,
        "thermocline_gradient" => line().gradient_c_m,
        "band_upper_depth" => 100.0 - line().band_m.unwrap().1,
        "band_lower_depth" => 100.0 - line().band_m.unwrap().0,
        other => panic!("no formula {other}"),
    }
}

#[test]
fn published_single_values_of_layering() {
    hold("checks_layering.csv", 10, computed);
}

/// The steepest stretch of a column is the two-point value where the water outside it is uniform (I06).
#[test]
fn published_greatest_buoyancy_of_a_column() {
    let samples = [sample(91.0, 10.0), sample(92.0, 20.0)];
    let (value, at) = greatest_buoyancy(&column(80.0, 100.0, &samples)).unwrap();
    assert_relative_eq!(value, 1.468567e-2, max_relative = 1e-3);
    assert_abs_diff_eq!(at, 91.5, epsilon = 1e-9);
}

/// Linear density in a box: g G H^3/12.
#[test]
fn published_stability_of_a_linear_box() {
    let (height, slope) = (30.0, 0.05);
    let tracer = [sample(0.0, 10.0), sample(height, 10.0)];
    let column = Column::given(&source(0.0, height, &tracer), &[1000.0, 1000.0 - slope * height]).unwrap();
    let side = |elevation_m| site::RawRow { elevation_m, area_m2: 2e6, ..site::RawRow::default() };
    let expected = water::G_M_S2 * slope * height.powi(3) / 12.0;
    let got = schmidt_stability_j_m2(&column, &pool(&[side(0.0), side(height)]));
    assert_relative_eq!(got, expected, max_relative = 1e-9);
}

/// No thermocline in water of one temperature, nor where top and bottom differ by less than 1 C.
#[test]
fn scenario_weakly_layered_water_has_no_thermocline() {
    assert_eq!(thermocline(&[sample(0.0, 8.0), sample(10.0, 8.0), sample(20.0, 8.9)]), None);
    let line = thermocline(&[sample(0.0, 8.0), sample(10.0, 8.0), sample(20.0, 9.1)]).unwrap();
    assert_eq!((line.elevation_m, line.band_m), (15.0, None));
}

/// A sonde's slip over centimetres is no thermocline: gradients are taken over a metre.
#[test]
fn scenario_thermocline_ignores_noise_of_close_samples() {
    let mut samples: Vec<Sample> = (0..=200)
        .map(|i| {
            let z = 0.1 * f64::from(i);
            sample(z, if z < 10.0 { 8.0 } else { 8.0 + 1.2 * (z - 10.0).min(5.0) })
        })
        .collect();
    samples[30].temperature_c += 0.4;
    let line = thermocline(&samples).unwrap();
    assert!((10.0..=15.0).contains(&line.elevation_m), "{line:?}");
    assert_abs_diff_eq!(line.gradient_c_m, 1.2, epsilon = 1e-9);
}

/// Temperatures at rising shares of the depth; in any order, since what is blended or counted is as measured.
fn temperatures() -> impl Strategy<Value = Vec<f64>> {
    prop::collection::vec(0.5..28.0_f64, 2..9)
}

/// A column over the whole height of a pool with a sample at each of equal steps.
fn water_of(pool: &Pool, temperatures: &[f64]) -> Column {
    let (bed, top) = (pool.bed_m, pool.top_m());
    let last = temperatures.len() - 1;
    let samples: Vec<Sample> = temperatures
        .iter()
        .enumerate()
        .map(|(i, &t)| sample(bed + (top - bed) * i as f64 / last as f64, t))
        .collect();
    column(bed, top, &samples)
}

fn profile(table: Vec<site::RawRow>, temperature_c: f64) -> (Profile, Site) {
    let (bed, top) = (table[0].elevation_m, table[table.len() - 1].elevation_m);
    let raw = site::Raw {
        name: Some("a pool".into()),
        pool: RawPool { bed_m: Some(bed), full_m: Some(top), table, ..RawPool::default() },
        outlets: vec![RawOutlet {
            name: Some("port".into()),
            centre_m: Some(0.5 * (bed + top)),
            height_m: Some(0.1),
            width_m: Some(0.1),
            ..RawOutlet::default()
        }],
        ..site::Raw::default()
    };
    let site = Site::check(&raw).0.unwrap();
    let row = |line, elevation_m| RawRow {
        line,
        elevation_m: Some(elevation_m),
        temperature_c: Some(temperature_c),
        ..RawRow::default()
    };
    let cast = Raw { pool_m: Some(top), rows: vec![row(1, top), row(2, bed)], ..Raw::default() };
    (Profile::build(&cast, &site, None).0.unwrap(), site)
}

proptest! {

    #![proptest_config(crate::law_config())]
/// A uniform pool holds rho cp V T, is nowhere layered and needs no work to mix.
#[test]
fn law_heat_of_a_uniform_pool(table in tables(), t in 0.5..28.0_f64) {
    let (profile, site) = profile(table, t);
    let layering = Layering::of(&profile, &site.pool);
    let volume = site.pool.volume_m3(profile.pool_m);
    prop_assert!((layering.volume_m3 / volume - 1.0).abs() < 1e-12);
    let heat = water::RHO_REF_KG_M3 * water::CP_REF_J_KG_K * volume * t;
    prop_assert!((layering.heat_j / heat - 1.0).abs() < 1e-12, "{} {heat}", layering.heat_j);
    prop_assert!((layering.mean_c / t - 1.0).abs() < 1e-12);
    prop_assert_eq!(layering.thermocline, None);
    prop_assert!(layering.schmidt_j_m2.abs() < 1e-6, "{}", layering.schmidt_j_m2);
}

/// Layered water always needs work to mix.
#[test]
fn law_stability_is_never_negative(table in tables(), t in temperatures()) {
    let pool = pool(&table);
    let stability = schmidt_stability_j_m2(&water_of(&pool, &t), &pool);
    prop_assert!(stability > -1e-6, "{stability}");
}

/// At the base of the mixed layer water is 0.1 kg/m3 denser than at the surface, and above it less so.
#[test]
fn law_mixed_layer_ends_where_density_has_risen(t in temperatures(), share in 0.0..1.0_f64) {
    let side = |elevation_m| site::RawRow { elevation_m, area_m2: 1e6, ..site::RawRow::default() };
    let column = water_of(&pool(&[side(0.0), side(60.0)]), &t);
    let base = mixed_base_m(&column);
    let denser = |z: f64| column.density_kg_m3(z) - column.density_kg_m3(60.0);
    if denser(0.0) > 0.1 {
        prop_assert!((denser(base) - 0.1).abs() < 1e-5, "{}", denser(base));
    } else {
        prop_assert!(base < 1e-9);
    }
    prop_assert!(denser(base + share * (60.0 - base)) < 0.1 + 1e-5);
}

/// Colder and warmer than X make the whole (warmer: colder in the profile mirrored about X); stretches add up;
/// more is colder than a higher X.
#[test]
fn law_cold_water_is_complementary(
    table in tables(), t in temperatures(), x in 0.5..28.0_f64, cut in 0.0..1.0_f64,
) {
    let pool = pool(&table);
    let (bed, top) = (pool.bed_m, pool.top_m());
    let column = water_of(&pool, &t);
    let mirrored: Vec<f64> = t.iter().map(|t| 2.0 * x - t).collect();
    let mirrored = water_of(&pool, &mirrored);
    let middle = bed + cut * (top - bed);
    let cold = |from, to| colder_m3(&column, &pool, x, from, to);
    let near = |a: f64, b: f64| (a - b).abs() < 1e-9 * pool.volume_m3(top);
    prop_assert!(near(cold(bed, top) + colder_m3(&mirrored, &pool, x, bed, top), pool.volume_m3(top)));
    prop_assert!(near(cold(bed, middle) + cold(middle, top), cold(bed, top)));
    prop_assert!(near(cold(bed - 10.0, top + 10.0), cold(bed, top)));
    prop_assert!(colder_m3(&column, &pool, x + 1.0, bed, top) >= cold(bed, top) - 1e-9 * pool.volume_m3(top));
    prop_assert!(near(colder_m3(&column, &pool, 30.0, bed, middle), pool.volume_m3(middle)));
}}
