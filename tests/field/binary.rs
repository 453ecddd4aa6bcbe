//! The same fifteen pairs through the built binary: a site folder and casts written as a user would write them.
#![expect(clippy::unwrap_used, reason = "helpers of tests, outside a test function")]

use std::fmt::Write;
use std::path::Path;

use assert_cmd::Command;
use gatemix::units::Unit;
use serde_json::Value;

use crate::folder::{folder, rows};
use crate::pairs::{
    BED_M, CastRow, FULL_M, INTAKE_M, OPENING_M, Pair, PairRow, Place, TableRow, pairs, print, temperature,
};

/// Every tenth row of the table, both ends among them: without widths it weighs nothing in a release.
const THINNED: usize = 10;

fn site_text(field: &Path) -> String {
    let mut text = format!(
        "name: the dam of the release pairs
units: {{ length: m, area: m2, volume: m3, flow: cfs, temperature: C }}
utc_offset: \"-07:00\"
outlets:
  - {{ name: Penstocks, centre: {INTAKE_M}, height: {}, width: {}, angle: 180 }}
pool:
  bed: {BED_M}
  full: {FULL_M}
  table:
",
        OPENING_M.0, OPENING_M.1
    );
    let table: Vec<TableRow> = rows(field, "area_capacity_2017.csv", 581);
    for row in table.iter().step_by(THINNED) {
        let (elevation_m, area_m2, volume_m3) = (
            Unit::Foot.to_si(row.elev_ft),
            Unit::Acre.to_si(row.area_ac),
            Unit::AcreFoot.to_si(row.capacity_af),
        );
        writeln!(text, "    - [{elevation_m}, {area_m2}, {volume_m3}]").unwrap();
    }
    text
}

/// The hour of a cast is not recorded: it takes that of the release, so that ages are whole days.
fn cast_text(pair: &PairRow, casts: &[CastRow]) -> String {
    let (_, hour) = pair.release_datetime.split_once(' ').unwrap();
    let mut text = format!(
        "# taken: {}T{hour}\n# pool: {}\ndepth_m,temperature_C,oxygen_mg_l\n",
        pair.profile_date, pair.lake_elev_m
    );
    let cell = |value: Option<f64>| value.map_or_else(String::new, |v| v.to_string());
    for c in casts.iter().filter(|c| c.trip_id == pair.trip_id) {
        writeln!(text, "{},{},{}", c.depth_m, cell(c.temp_c), cell(c.do_mgl)).unwrap();
    }
    text
}

/// `gatemix mix` on one pair, as the JSON it prints.
fn answer(site: &Path, pair: &PairRow) -> Value {
    let out = Command::cargo_bin("gatemix")
        .unwrap()
        .arg("mix")
        .arg(site)
        .arg("--profile")
        .arg(site.join("profiles").join(&pair.trip_id).with_extension("csv"))
        .arg("--set")
        .arg(format!("Penstocks={}cfs", pair.power_cfs))
        .args(["--on", &pair.release_datetime.replace(' ', "T"), "--json"])
        .assert()
        .success();
    serde_json::from_slice(&out.get_output().stdout).unwrap()
}

fn ends(value: &Value) -> (f64, f64) {
    (value[0].as_f64().unwrap(), value[1].as_f64().unwrap())
}

#[test]
fn field_release_pairs_through_the_built_binary() {
    let Some(field) = folder("field_release_pairs_through_the_built_binary") else { return };
    let site = tempfile::tempdir().unwrap();
    std::fs::create_dir(site.path().join("profiles")).unwrap();
    std::fs::write(site.path().join("site.yaml"), site_text(&field)).unwrap();
    let casts: Vec<CastRow> = rows(&field, "forebay_casts.csv", 661);
    let told: Vec<PairRow> = rows(&field, "release_pairs.csv", 15);
    let library = pairs(&field, Place::Depth, false);
    let mut apart = 0.0_f64;
    let mut answered = Vec::new();
    for (told, library) in told.iter().zip(library) {
        let file = site.path().join("profiles").join(&told.trip_id).with_extension("csv");
        std::fs::write(file, cast_text(told, &casts)).unwrap();
        let json = answer(site.path(), told);
        let release = &json["release"];
        let here = Pair {
            computed_c: release["temperature_c"].as_f64().unwrap(),
            band_c: ends(&release["band_c"]),
            computed_mg_l: release["oxygen_mg_l"].as_f64().unwrap(),
            band_mg_l: ends(&release["band_oxygen_mg_l"]),
            trip: told.trip_id.clone(),
            ..library
        };
        assert_eq!(library.trip, here.trip);
        for (a, b) in [
            (here.computed_c, library.computed_c),
            (here.band_c.0, library.band_c.0),
            (here.band_c.1, library.band_c.1),
            (here.computed_mg_l, library.computed_mg_l),
            (here.band_mg_l.0, library.band_mg_l.0),
            (here.band_mg_l.1, library.band_mg_l.1),
        ] {
            apart = apart.max((a - b).abs());
        }
        answered.push(here);
    }
    assert_eq!(answered.len(), 15);
    print(&answered);
    let computed = temperature(&answered);
    let inside = answered.iter().filter(|p| p.inside()).count();
    let width = answered.iter().map(|p| p.band_c.1 - p.band_c.0).sum::<f64>() / 15.0;
    println!("through the binary {computed:.5?}");
    println!("band holds {inside} of 15, {width:.3} C wide on average");
    println!("at most {apart:.1e} from the library's figures");
    assert!(computed.bias.abs() <= 0.10 && computed.rmse <= 0.37, "{computed:?}");
    assert!((10..=14).contains(&inside) && width <= 1.6, "{inside} of 15 inside, {width} C wide");
    assert!(apart <= 1e-9, "{apart} from the library's figures");
}
