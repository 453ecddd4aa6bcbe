//! One site in metres and in feet: the same river.

use std::fmt::Write;

use serde_json::Value;

use crate::{CAST, Folder, SITE, run, with};

const FOOT_M: f64 = 0.3048;

fn feet(m: f64) -> f64 {
    m / FOOT_M
}

fn acres(m2: f64) -> f64 {
    m2 / (43_560.0 * FOOT_M * FOOT_M)
}

fn acre_feet(m3: f64) -> f64 {
    acres(m3) / FOOT_M
}

fn cfs(m3s: f64) -> f64 {
    m3s / FOOT_M.powi(3)
}

fn fahrenheit(c: f64) -> f64 {
    32.0 + 1.8 * c
}

/// At this depth no stretch between samples is a whole number of slices of the column, so that the last digit
/// of a converted figure does not decide how many there are.
const POOL_M: f64 = 60.3;

/// The site of the other tests under that pool.
fn metric() -> Folder {
    let cast = with(CAST, "# pool: 60", &format!("# pool: {POOL_M}"));
    Folder::new(SITE, &[("2025-07-14.csv", cast.as_bytes())])
}

/// The same, written in customary units by hand.
fn customary() -> Folder {
    let row = |z: f64, a: f64, v: f64| format!("    - [{}, {}, {}]\n", feet(z), acres(a), acre_feet(v));
    let table = [(0.0, 0.0, 0.0), (20.0, 2.0e6, 2.0e7), (40.0, 5.0e6, 9.0e7), (62.0, 9.0e6, 2.44e8)];
    let table: String = table.map(|(z, a, v)| row(z, a, v)).concat();
    let site = format!(
        r#"name: Test Dam (invented)
demonstration: true
units: {{ length: ft, area: acre, volume: acre-ft, flow: cfs, temperature: F }}
datum: local
utc_offset: "-07:00"
place: {{ altitude: {altitude}, latitude: 44.1 }}
pool:
  bed: 0
  full: {full}
  table:
{table}outlets:
  - {{ name: N1, centre: {n1}, height: {h3}, width: {w4}, min_submergence: {w4}, flow: {{ min: {q2}, max: {q80} }} }}
  - {{ name: Sluice, centre: {sluice}, height: {h2}, width: {h2}, flow: {{ max: {q40} }} }}
now: {{ N1: {q30}, Sluice: {q5} }}
targets:
  - {{ name: holding, from: 05-01, to: 09-15, low: {low}, preferred: {preferred}, high: {high}, oxygen_min: 7, source: "example only" }}
cold_water: [{preferred}]
"#,
        altitude = feet(410.0),
        full = feet(62.0),
        n1 = feet(45.0),
        h3 = feet(3.0),
        w4 = feet(4.0),
        sluice = feet(8.0),
        h2 = feet(2.0),
        q2 = cfs(2.0),
        q80 = cfs(80.0),
        q40 = cfs(40.0),
        q30 = cfs(30.0),
        q5 = cfs(5.0),
        low = fahrenheit(9.0),
        preferred = fahrenheit(12.0),
        high = fahrenheit(14.0),
    );
    let mut cast =
        format!("# taken: 2025-07-14T10:30\n# pool: {}\ndepth_ft,temperature_F,oxygen_mg_l\n", feet(POOL_M));
    for line in CAST.lines().skip(3) {
        let cells: Vec<f64> = line.split(',').map(|cell| cell.parse().unwrap()).collect();
        writeln!(cast, "{},{},{}", feet(cells[0]), fahrenheit(cells[1]), cells[2]).unwrap();
    }
    Folder::new(&site, &[("2025-07-14.csv", cast.as_bytes())])
}

/// Every number of the one within 1e-9 of the other's, and everything else equal, but for what names the files.
fn same(a: &Value, b: &Value, path: &str) {
    match (a, b) {
        (Value::Number(a), Value::Number(b)) => {
            let (a, b) = (a.as_f64().unwrap(), b.as_f64().unwrap());
            assert!((a - b).abs() <= 1e-9 * a.abs().max(1.0), "{path}: {a} and {b}");
        }
        (Value::Array(a), Value::Array(b)) => {
            assert_eq!(a.len(), b.len(), "{path}");
            for (i, (a, b)) in a.iter().zip(b).enumerate() {
                same(a, b, &format!("{path}[{i}]"));
            }
        }
        (Value::Object(a), Value::Object(b)) => {
            assert!(a.keys().eq(b.keys()), "{path}");
            for (key, value) in a.iter().filter(|(key, _)| !["fingerprint", "file"].contains(&key.as_str())) {
                same(value, &b[key], &format!("{path}.{key}"));
            }
        }
        _ => assert_eq!(a, b, "{path}"),
    }
}

#[test]
fn law_a_site_in_feet_and_one_in_metres_give_the_same_answer() {
    let (metric, customary) = (metric(), customary());
    for rest in [
        &["pool"][..],
        &["pool", "--pool", "57.5 m"],
        &["mix"],
        &["mix", "--set", "N1=12m3/s"],
        &["mix", "--set", "N1=55 m3/s", "--set", "Sluice=300cfs"],
        &["mix", "--set", "Sluice=2500 ML/d", "--pool", "190 ft"],
        &["mix", "--set", "N1=2.5 m3/s", "--on", "2025-07-20T06:00"],
    ] {
        let answers = [&metric, &customary].map(|folder| {
            let arguments = [&rest[..1], &[folder.named(), "--json"], &rest[1..]].concat();
            run(&arguments).json()
        });
        same(&answers[0], &answers[1], rest[0]);
    }
}

/// The same words with figures apart, whatever the units shown.
#[test]
fn scenario_units_shown_change_the_figures_and_not_the_water() {
    let folder = Folder::usual();
    let shown = |units: &str| run(&["mix", folder.named(), "--set", "N1=30", "--units", units]);
    let (si, us) = (shown("si"), shown("us"));
    assert_eq!(si, run(&["mix", folder.named(), "--set", "N1=30"]), "metres are this site's own");
    assert!(si.out.contains("30.0 m3/s") && us.out.contains("1,059 cfs"), "{}", us.out);
    let json = run(&["mix", folder.named(), "--set", "N1=30", "--json"]).json();
    let release_c = json["release"]["temperature_c"].as_f64().unwrap();
    let line = |out: &str| out.lines().find(|l| l.starts_with("Release")).unwrap().to_owned();
    assert!(line(&si.out).contains(&format!(" {release_c:.1} C ")), "{}", line(&si.out));
    assert!(line(&us.out).contains(&format!(" {:.1} F ", fahrenheit(release_c))), "{}", line(&us.out));
    let in_us = run(&["mix", folder.named(), "--set", "N1=30", "--json", "--units", "us"]).json();
    assert_eq!(json, in_us, "JSON is SI whatever is shown");
    assert!(SITE.contains("length: m,"));
}
