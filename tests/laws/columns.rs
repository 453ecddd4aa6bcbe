//! Columns and sinks to try laws on. All water here is invented.

use std::f64::consts::PI;

use gatemix::profile::{Column, OxygenSample, Sample, Source};
use gatemix::water::SEDIMENT_DENSITY_KG_M3;
use gatemix::withdrawal::{Opening, Sink};
use proptest::prelude::*;
use proptest::test_runner::FileFailurePersistence;

/// Cases that failed once are kept beside the tests and tried first.
pub(crate) fn config(cases: u32) -> ProptestConfig {
    let kept = FileFailurePersistence::Direct("tests/laws/regressions.txt");
    ProptestConfig { cases, failure_persistence: Some(Box::new(kept)), ..ProptestConfig::default() }
}

/// A pool before its column is made ready.
#[derive(Debug, Clone)]
pub(crate) struct Pool {
    pub(crate) bed_m: f64,
    pub(crate) surface_m: f64,
    pub(crate) samples: Vec<Sample>,
    pub(crate) oxygen: Vec<OxygenSample>,
}

impl Pool {
    pub(crate) fn source(&self) -> Source<'_> {
        Source {
            bed_m: self.bed_m,
            surface_m: self.surface_m,
            samples: &self.samples,
            oxygen: &self.oxygen,
            solids_kg_m3: SEDIMENT_DENSITY_KG_M3,
            widths: None,
        }
    }

    pub(crate) fn column(&self) -> Column {
        Column::new(&self.source()).unwrap()
    }

    /// Elevation at a share of the depth, from the bed.
    pub(crate) fn at(&self, share: f64) -> f64 {
        (self.bed_m + share * (self.surface_m - self.bed_m)).clamp(self.bed_m, self.surface_m)
    }

    /// A fresh pool from rows of elevation, temperature and oxygen; bed and surface at the ends.
    pub(crate) fn from_rows(rows: &[[f64; 3]]) -> Self {
        Self {
            bed_m: rows[0][0],
            surface_m: rows[rows.len() - 1][0],
            samples: rows.iter().map(|row| fresh(row[0], row[1])).collect(),
            oxygen: rows
                .iter()
                .map(|row| OxygenSample { elevation_m: row[0], oxygen_mg_l: row[2] })
                .collect(),
        }
    }
}

pub(crate) fn fresh(elevation_m: f64, temperature_c: f64) -> Sample {
    Sample { elevation_m, temperature_c, salt_g_per_kg: 0.0, suspended_mg_l: 0.0 }
}

pub(crate) fn port(centre_m: f64, flow_m3s: f64, angle_rad: f64) -> Sink {
    Sink { centre_m, flow_m3s, opening: Opening::Port { angle_rad } }
}

/// The pool of the worked cases: uniform width, mixed from 54 m to the surface at 60 m.
pub(crate) fn worked() -> Pool {
    Pool::from_rows(&[
        [0.0, 6.0, 1.0],
        [20.0, 6.5, 3.0],
        [30.0, 8.0, 5.0],
        [40.0, 11.0, 6.0],
        [45.0, 15.0, 7.0],
        [50.0, 20.0, 8.0],
        [54.0, 24.0, 8.4],
        [60.0, 24.0, 8.4],
    ])
}

/// Flow, from a trickle to a flood, evenly by its logarithm, m3/s.
pub(crate) fn flow() -> impl Strategy<Value = f64> {
    (-1.0..2.6).prop_map(|power: f64| 10.0_f64.powf(power))
}

/// Withdrawal angle: in a corner, in a face, free-standing.
pub(crate) fn angle() -> impl Strategy<Value = f64> {
    prop::sample::select(vec![0.5 * PI, PI, 2.0 * PI])
}

/// Share of the depth at which a port stands; the ends are favoured.
pub(crate) fn share() -> impl Strategy<Value = f64> {
    prop_oneof![6 => 0.0..=1.0, 1 => 0.0..0.02, 1 => 0.98..=1.0, 1 => Just(0.0), 1 => Just(1.0)]
}

/// A pool built from `(thickness, warming, salt, suspended, oxygen)` of its intervals, from the bed up.
fn built(depth_m: f64, bed_m: f64, coldest_c: f64, intervals: &[[f64; 5]]) -> Pool {
    let whole: f64 = intervals.iter().map(|i| i[0]).sum();
    let mut pool = Pool { bed_m, surface_m: bed_m + depth_m, samples: Vec::new(), oxygen: Vec::new() };
    let (mut share, mut temperature_c) = (0.0, coldest_c);
    for &[thickness, warming, salt_g_per_kg, suspended_mg_l, oxygen_mg_l] in intervals {
        // the lowest sample stands half an interval above the bed, so that something is held
        share += 0.5 * thickness / whole;
        let elevation_m = bed_m + depth_m * share;
        pool.samples.push(Sample { elevation_m, temperature_c, salt_g_per_kg, suspended_mg_l });
        pool.oxygen.push(OxygenSample { elevation_m, oxygen_mg_l });
        share += 0.5 * thickness / whole;
        temperature_c = (temperature_c + warming).clamp(0.1, 35.0);
    }
    pool
}

fn intervals(
    warming: impl Strategy<Value = f64> + Clone,
    salt: impl Strategy<Value = f64> + Clone,
    suspended: impl Strategy<Value = f64> + Clone,
) -> impl Strategy<Value = Vec<[f64; 5]>> {
    let one = (0.1..1.0, warming, salt, suspended, 0.0..14.0).prop_map(|(a, b, c, d, e)| [a, b, c, d, e]);
    prop::collection::vec(one, 2..30)
}

/// Fresh water above 4 C, never warmer with depth; mixed stretches among it.
pub(crate) fn stable() -> impl Strategy<Value = Pool> {
    let warming = prop_oneof![1 => Just(0.0), 1 => 0.0..0.01, 4 => 0.0..3.0];
    let layers = intervals(warming, Just(0.0), Just(0.0));
    (10.0..120.0, -50.0..500.0, 4.2..9.0, layers)
        .prop_map(|(depth, bed, coldest, layers)| built(depth, bed, coldest, &layers))
}

/// Any water: inversions, salt, silt, and temperatures on both sides of that of greatest density.
pub(crate) fn any_water() -> impl Strategy<Value = Pool> {
    let warming = prop_oneof![1 => Just(0.0), 4 => -0.7..2.5];
    let salt = prop_oneof![1 => Just(0.0), 1 => 0.0..0.3];
    let suspended = prop_oneof![3 => Just(0.0), 1 => 0.0..40.0];
    (10.0..120.0, -50.0..500.0, 1.0..9.0, intervals(warming, salt, suspended))
        .prop_map(|(depth, bed, coldest, layers)| built(depth, bed, coldest, &layers))
}

/// Density given at samples of a pool, falling upward (kg/m3), with tracers of their own.
pub(crate) fn given() -> impl Strategy<Value = (Pool, Vec<f64>)> {
    let fall = prop_oneof![1 => Just(0.0), 1 => 0.0..1e-3, 4 => 0.0..0.5];
    let layers = intervals(-3.0..3.0, 0.0..0.3, 0.0..40.0);
    (10.0..120.0, -50.0..500.0, 5.0..20.0, layers, prop::collection::vec(fall, 30)).prop_map(
        |(depth, bed, coldest, layers, falls)| {
            let pool = built(depth, bed, coldest, &layers);
            let mut density = 1000.0;
            let densities = falls
                .iter()
                .take(pool.samples.len())
                .map(|fall| {
                    density -= fall;
                    density
                })
                .collect();
            (pool, densities)
        },
    )
}

/// How nearly a flow relation can be met, as a share of the flow: a millionth; some round-off of a density of
/// 1000 kg/m3 beside the difference across the zone; and what a hundred-millionth of a metre changes.
pub(crate) fn slack(difference_kg_m3: f64, change_m3s: f64, flow_m3s: f64) -> f64 {
    1e-6 + 3e-12 / difference_kg_m3 + (change_m3s / flow_m3s).abs()
}
