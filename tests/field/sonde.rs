//! Eight raw sonde casts, a reading every 0.1 to 0.3 m with real noise: what the cast checks make of them.
#![expect(clippy::unwrap_used, reason = "helpers of tests, outside a test function")]

use std::collections::BTreeMap;
use std::path::Path;

use gatemix::problem::{Problem, Weight};
use gatemix::profile::{Profile, Raw, RawRow};
use gatemix::site::{self, CastChecks, RawOutlet, RawPool, Site};
use serde::Deserialize;

use crate::folder::{folder, rows, sound};

/// Invented: no pool elevation was recorded.
const POOL_M: f64 = 100.0;
/// Invented: water below the deepest reading.
const BELOW_DEEPEST_M: f64 = 0.5;
/// More flags than this on one cast and nobody reads them.
const READABLE: usize = 10;

#[derive(Deserialize)]
struct SondeRow {
    #[serde(rename = "waterBody")]
    lake: String,
    date: String,
    depth_m: f64,
    #[serde(rename = "temp_degC")]
    temp_c: Option<f64>,
    #[serde(rename = "doConcentration_mgpL")]
    oxygen_mg_l: Option<f64>,
    #[serde(rename = "doSaturation_percent")]
    oxygen_percent: Option<f64>,
    #[serde(rename = "specificConductivity_uSpcm")]
    specific_us_cm: Option<f64>,
}

/// One cast as the sonde gave it.
struct Cast {
    name: String,
    rows: Vec<SondeRow>,
}

impl Cast {
    fn greatest(&self, read: impl Fn(&SondeRow) -> Option<f64>) -> f64 {
        self.rows.iter().filter_map(read).reduce(f64::max).unwrap()
    }

    /// The profile in a box of water as deep as the cast, with `warmed(depth)` added to every temperature,
    /// oxygen being flagged above `oxygen_share` of saturation.
    fn profile(&self, oxygen_share: f64, warmed: impl Fn(f64) -> f64) -> (Profile, Vec<Problem>) {
        let rows = self.rows.iter().enumerate().map(|(i, r)| RawRow {
            line: i + 2,
            depth_m: Some(r.depth_m),
            temperature_c: r.temp_c.map(|t| t + warmed(r.depth_m)),
            oxygen_mg_l: r.oxygen_mg_l,
            specific_us_cm: r.specific_us_cm,
            ..RawRow::default()
        });
        let raw = Raw {
            file: self.name.clone(), // invented: the hour
            taken: Some(format!("{}T12:00:00Z", self.rows[0].date).parse().unwrap()),
            pool_m: Some(POOL_M),
            rows: rows.collect(),
        };
        let site = box_site(self.greatest(|r| Some(r.depth_m)), oxygen_share);
        let (profile, problems) = Profile::build(&raw, &site, None);
        (sound(profile, &problems), problems)
    }
}

/// A box of water about one cast, invented but for its depth.
fn box_site(deepest_m: f64, oxygen_share: f64) -> Site {
    let bed = POOL_M - deepest_m - BELOW_DEEPEST_M;
    let row = |elevation_m: f64| site::RawRow { elevation_m, area_m2: 1e6, ..site::RawRow::default() };
    let raw = site::Raw {
        name: Some("a box about a cast".into()),
        pool: RawPool {
            bed_m: Some(bed),
            full_m: Some(POOL_M),
            table: vec![row(bed), row(POOL_M)],
            ..RawPool::default()
        },
        outlets: vec![RawOutlet {
            name: Some("port".into()),
            centre_m: Some(bed + 2.0),
            height_m: Some(1.0),
            width_m: Some(1.0),
            ..RawOutlet::default()
        }],
        checks: CastChecks { oxygen_share, ..CastChecks::default() },
        ..site::Raw::default()
    };
    let (checked, problems) = Site::check(&raw);
    sound(checked, &problems)
}

fn casts(folder: &Path) -> Vec<Cast> {
    let mut by_cast: BTreeMap<String, Vec<SondeRow>> = BTreeMap::new();
    for row in rows::<SondeRow>(folder, "sonde_casts.csv", 958) {
        by_cast.entry(format!("{} {}", row.lake, row.date)).or_default().push(row);
    }
    let casts: Vec<Cast> = by_cast.into_iter().map(|(name, rows)| Cast { name, rows }).collect();
    assert_eq!(casts.len(), 8, "casts");
    casts
}

fn flagged(problems: &[Problem], kind: &str) -> bool {
    problems.iter().any(|p| p.kind == kind)
}

/// Noise of a tenth of a degree is no fault: every cast loads with few flags, and none calls it upside down.
#[test]
fn field_sonde_casts_load_with_few_flags() {
    let Some(folder) = folder("field_sonde_casts_load_with_few_flags") else { return };
    for cast in casts(&folder) {
        let (profile, problems) = cast.profile(CastChecks::default().oxygen_share, |_| 0.0);
        println!("{}: {} samples", cast.name, profile.samples.len());
        for problem in &problems {
            println!("  {problem} [{}]", problem.kind);
        }
        assert_eq!(profile.samples.len(), cast.rows.len(), "{}", cast.name);
        let flags = problems.iter().filter(|p| p.weight == Weight::Flag).count();
        assert!(flags <= READABLE, "{}: {flags} flags", cast.name);
        assert!(!flagged(&problems, "inversion-large") && !profile.large_inversion, "{}", cast.name);
        for kind in ["spike", "gap", "order", "exposed", "below-bed"] {
            assert!(!flagged(&problems, kind), "{}: {kind}", cast.name);
        }
    }
}

/// The same noise hides no fault: the lowest metre read half a degree too warm is called a large inversion.
#[test]
fn field_sonde_casts_show_a_sensor_that_slipped() {
    let Some(folder) = folder("field_sonde_casts_show_a_sensor_that_slipped") else { return };
    for cast in casts(&folder) {
        let from = cast.greatest(|r| Some(r.depth_m)) - 1.0;
        let (profile, problems) = cast.profile(1.1, |depth| if depth > from { 0.5 } else { 0.0 });
        assert!(flagged(&problems, "inversion-large") && profile.large_inversion, "{}", cast.name);
    }
}

/// Oxygen is flagged above a share of saturation exactly where the sonde's own percent is above it. The shares
/// stand between the casts' highest percents, so each of them parts the casts.
#[test]
fn field_sonde_casts_show_oxygen_above_saturation() {
    let Some(folder) = folder("field_sonde_casts_show_oxygen_above_saturation") else { return };
    let casts = casts(&folder);
    for (share, count) in [(1.1, 8), (1.2, 7), (1.4, 3), (1.8, 1), (2.3, 0)] {
        let mut above = 0;
        for cast in &casts {
            let (_, problems) = cast.profile(share, |_| 0.0);
            let expected = cast.greatest(|r| r.oxygen_percent) > 100.0 * share;
            assert_eq!(flagged(&problems, "oxygen-above-saturation"), expected, "{} {share}", cast.name);
            above += u8::from(expected);
        }
        assert_eq!(above, count, "casts above {share}");
    }
}
