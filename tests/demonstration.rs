//! The demonstration sites: their casts come from a generator, stay what it makes, and are believable.
#![expect(clippy::unwrap_used, reason = "the makers of the casts serve tests only")]

mod demo;
#[path = "demo/learned.rs"]
mod learned;

use std::collections::BTreeMap;
use std::path::PathBuf;
use std::sync::LazyLock;

use approx::assert_abs_diff_eq;
use demo::ashlar::{self, Cast, FAULTY, FOOT_M, Site};
use demo::sorrel::{self, believable::SORREL};
use demo::water::{density_kg_m3, oxygen_saturation_mg_l};
use gatemix::files::folder::{Folder, demonstrations};
use gatemix::files::log::LOG_FILE;
use gatemix::problem::Weight;
use serde_json::Value;

fn folder(site: &str) -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("sites").join(site)
}

fn site_text() -> String {
    std::fs::read_to_string(folder("ashlar").join("site.yaml")).unwrap()
}

/// The first site and all that happened there; made once.
static ASHLAR: LazyLock<(Site, ashlar::Years)> = LazyLock::new(|| {
    let site = Site::read(&site_text());
    let years = ashlar::years(&site);
    (site, years)
});

fn ashlar() -> (&'static Site, &'static [Cast]) {
    (&ASHLAR.0, &ASHLAR.1.casts)
}

/// With `GATEMIX_WRITE_SITES=1` the files are written first.
#[test]
fn unchanged_ashlar_casts_match_their_generator() {
    let years = &ASHLAR.1;
    let mut made: BTreeMap<String, String> = years.casts.iter().map(ashlar::file).collect();
    made.extend([ashlar::tailwater(years)]);
    held("ashlar", &made);
}

/// Every file of a site but `site.yaml` is one that was made, and holds what was made.
fn held(site: &str, made: &BTreeMap<String, String>) {
    let folder = folder(site);
    if std::env::var_os("GATEMIX_WRITE_SITES").is_some() {
        for (name, text) in made {
            std::fs::create_dir_all(folder.join(name).parent().unwrap()).unwrap();
            std::fs::write(folder.join(name), text).unwrap();
        }
    }
    let names = |below: &str| {
        let entries = std::fs::read_dir(folder.join(below)).into_iter().flatten().map(Result::unwrap);
        let files = entries.filter(|entry| entry.file_type().unwrap().is_file());
        files.map(|entry| format!("{below}{}", entry.file_name().into_string().unwrap())).collect::<Vec<_>>()
    };
    let mut stored = [names(""), names("profiles/"), names("schedules/")].concat();
    // plans of what is to come are written by hand, those of what has been are made
    stored.extend(names("plans/").into_iter().filter(|name| name.starts_with("plans/past")));
    stored.retain(|name| name != "site.yaml");
    stored.sort();
    assert_eq!(stored, made.keys().cloned().collect::<Vec<_>>());
    for (name, text) in made {
        let stored = std::fs::read_to_string(folder.join(name)).unwrap();
        if name == LOG_FILE { same_log(&stored, text) } else { assert!(&stored == text, "{name}") }
    }
}

/// Logs of the same lines: the last digits of what is computed are the machine's, and an older version may have written it.
fn same_log(stored: &str, made: &str) {
    fn same(stored: &Value, made: &Value, at: &str) {
        match (stored, made) {
            (Value::Object(a), Value::Object(b)) => {
                assert!(a.keys().eq(b.keys()), "{at}");
                // the fingerprint of inputs hangs on the last digit of every figure logged before
                let told = a.iter().filter(|(key, _)| !["version", "inputs"].contains(&key.as_str()));
                told.for_each(|(key, value)| same(value, &b[key], &format!("{at}.{key}")));
            }
            (Value::Array(a), Value::Array(b)) => {
                assert_eq!(a.len(), b.len(), "{at}");
                a.iter().zip(b).for_each(|(a, b)| same(a, b, at));
            }
            (Value::Number(a), Value::Number(b)) => {
                let [a, b] = [a, b].map(|n| n.as_f64().unwrap());
                assert!((a - b).abs() <= 1e-6 * a.abs().max(1.0), "{at}: {a} {b}");
            }
            _ => assert_eq!(stored, made, "{at}"),
        }
    }
    assert_eq!(stored.lines().count(), made.lines().count());
    for (line, (stored, made)) in stored.lines().zip(made.lines()).enumerate() {
        let [stored, made] = [stored, made].map(|line| serde_json::from_str::<Value>(line).unwrap());
        same(&stored, &made, &format!("line {}", line + 1));
    }
}

/// The same of the second site, its weather and its stations.
#[test]
fn unchanged_sorrel_files_match_their_generator() {
    let (site, years) = &*SORREL;
    let made: BTreeMap<String, String> = sorrel::files(site, years).into_iter().collect();
    held("sorrel", &made);
}

/// The same of the third site.
#[test]
fn unchanged_tessel_files_match_their_generator() {
    let text = std::fs::read_to_string(folder("tessel").join("site.yaml")).unwrap();
    let (mut made, pools_m) = demo::tessel::files(&text);
    let log = demo::tessel::log::file(&text, &made, &pools_m, "{ T2: 9 }");
    made.extend([log]);
    held("tessel", &made);
}

/// The kinds of fault a careful reader would find in a cast, each once.
fn faults(cast: &Cast) -> Vec<&'static str> {
    let mut found = Vec::new();
    let density =
        |w: &demo::column::Water, more_c: f64| density_kg_m3(w.temperature_c + more_c, w.conductance_us_cm);
    for pair in cast.rows.windows(2) {
        let ((up_ft, up), (down_ft, down)) = (&pair[0], &pair[1]);
        let apart_ft = down_ft - up_ft;
        if apart_ft <= 0.0 {
            found.push("duplicate");
        }
        if apart_ft > 10.05 {
            found.push("gap");
        }
        // 0.25 C is about six standard deviations of a difference of two readings
        let noise = (density(up, 0.25) - density(up, 0.0)).abs().max(0.01);
        if density(up, 0.0) - density(down, 0.0) > noise {
            found.push("inversion");
        }
    }
    for three in cast.rows.windows(3) {
        let [a, b, c] = [&three[0].1, &three[1].1, &three[2].1].map(|w| w.temperature_c);
        if b > a.max(c) + 1.0 || b < a.min(c) - 1.0 {
            found.push("spike");
        }
    }
    found.sort_unstable();
    found.dedup();
    found
}

#[test]
fn scenario_only_the_spoilt_cast_has_faults_and_all_four_kinds() {
    for cast in ashlar().1 {
        let spoilt = cast.taken.format("%Y-%m-%dT%H:%M").to_string() == FAULTY;
        let expected: &[&str] = if spoilt { &["duplicate", "gap", "inversion", "spike"] } else { &[] };
        assert_eq!(faults(cast), expected, "{}", cast.taken);
    }
}

#[test]
fn law_casts_stay_inside_the_pool_and_what_water_can_hold() {
    let (site, casts) = ashlar();
    for cast in casts {
        let pool_m = FOOT_M * cast.pool_ft;
        assert!(pool_m > site.basin.bed_m() && pool_m < site.full_m, "{}", cast.taken);
        assert!((30..=60).contains(&cast.rows.len()), "{}", cast.taken);
        for (depth_ft, water) in &cast.rows {
            assert!(pool_m - FOOT_M * depth_ft > site.basin.bed_m(), "{} at {depth_ft}", cast.taken);
            let saturation = oxygen_saturation_mg_l(water.temperature_c, site.altitude_m + pool_m);
            let share = water.oxygen_mg_l / saturation;
            assert!((0.0..1.1).contains(&share), "{} at {depth_ft}: {share}", cast.taken);
            assert!((3.5..25.0).contains(&water.temperature_c), "{} at {depth_ft}", cast.taken);
        }
        let skin = &cast.rows[0].1;
        let saturation = oxygen_saturation_mg_l(skin.temperature_c, site.altitude_m + pool_m);
        assert_abs_diff_eq!(skin.oxygen_mg_l / saturation, 1.0, epsilon = 0.13);
    }
}

/// Reading nearest to a depth in metres.
fn near(cast: &Cast, depth_m: f64) -> demo::column::Water {
    let off = |row: &&(f64, demo::column::Water)| (FOOT_M * row.0 - depth_m).abs();
    cast.rows.iter().min_by(|a, b| off(a).total_cmp(&off(b))).unwrap().1
}

fn cast<'a>(casts: &'a [Cast], date: &str) -> &'a Cast {
    casts.iter().find(|cast| cast.taken.date().to_string() == date).unwrap()
}

#[test]
fn scenario_newest_cast_is_mid_july_with_a_strong_summer_layer_near_full_pool() {
    let (site, casts) = ashlar();
    let newest = casts.iter().max_by_key(|cast| cast.taken).unwrap();
    assert_eq!(newest.taken.format("%Y-%m-%dT%H:%M").to_string(), "2026-07-14T10:30");
    assert!(site.full_m - FOOT_M * newest.pool_ft < 1.5);
    assert!((20.0..24.0).contains(&near(newest, 0.0).temperature_c));
    assert!((5.0..7.0).contains(&near(newest, 60.0).temperature_c));
    let steepest = newest.rows.windows(2).max_by(|a, b| {
        let slope = |w: &[(f64, demo::column::Water)]| {
            (w[0].1.temperature_c - w[1].1.temperature_c) / (w[1].0 - w[0].0)
        };
        slope(a).total_cmp(&slope(b))
    });
    assert!((8.0..20.0).contains(&(FOOT_M * steepest.unwrap()[0].0)));
}

#[test]
fn scenario_the_year_turns_over_layers_and_loses_deep_oxygen() {
    let (_, casts) = ashlar();
    for date in ["2025-03-18", "2026-01-20"] {
        let winter = cast(casts, date);
        assert_abs_diff_eq!(near(winter, 1.0).temperature_c, near(winter, 45.0).temperature_c, epsilon = 0.3);
    }
    let september = cast(casts, "2025-09-23");
    let least = |from: f64, to: f64| {
        let inside = september.rows.iter().filter(|row| (from..to).contains(&(FOOT_M * row.0)));
        inside.map(|row| row.1.oxygen_mg_l).min_by(f64::total_cmp).unwrap()
    };
    assert!(least(15.0, 35.0) + 2.0 < least(0.0, 12.0).min(least(42.0, 52.0)), "oxygen minimum between");
    let autumn = ["2025-07-08", "2025-08-12", "2025-09-23", "2025-11-12"].map(|date| cast(casts, date));
    for pair in autumn.windows(2) {
        assert!(
            pair[1].rows.last().unwrap().1.oxygen_mg_l < pair[0].rows.last().unwrap().1.oxygen_mg_l - 0.5
        );
        assert!(pair[1].pool_ft < pair[0].pool_ft);
    }
}

#[test]
fn law_volumes_of_the_site_file_follow_from_its_areas() {
    const ACRE_FOOT_M3: f64 = 1233.48183754752;
    let site = Site::read(&site_text());
    let written: serde_yaml::Value = serde_yaml::from_str(&site_text()).unwrap();
    let rows = written["pool"]["table"].as_sequence().unwrap();
    assert_eq!(rows.len(), site.basin.volumes_m3().count());
    for (row, volume_m3) in rows.iter().zip(site.basin.volumes_m3()) {
        let stored_m3 = ACRE_FOOT_M3 * row[2].as_f64().unwrap();
        assert!((stored_m3 - volume_m3).abs() <= 0.002 * volume_m3, "{row:?} against {volume_m3}");
    }
}

/// Density of pure water as printed by Tanaka et al. 2001; oxygen saturation of the Benson & Krause
/// equation at sea level and, from its full correction for pressure, at 500 and 1000 m.
#[test]
fn published_density_and_oxygen_saturation_of_the_generator() {
    for (t, rho) in [(0.0, 999.8428), (10.0, 999.7027), (15.0, 999.1026), (20.0, 998.2067)] {
        assert_abs_diff_eq!(density_kg_m3(t, 0.0), rho, epsilon = 6e-5);
    }
    for (t, z, cs) in [(8.0, 0.0, 11.843), (24.0, 0.0, 8.418), (20.0, 500.0, 8.5541), (10.0, 1000.0, 9.9976)]
    {
        assert_abs_diff_eq!(oxygen_saturation_mg_l(t, z), cs, epsilon = 3e-3);
    }
}

/// Plans are written by hand.
#[test]
fn scenario_plans_are_sound_and_go_from_the_newest_cast_to_the_end_of_november() {
    for name in demonstrations() {
        let folder = Folder::demonstration(name).unwrap();
        let mut named: Vec<&str> = Vec::new();
        for listed in folder.plans() {
            let text = &listed.source.as_ref().unwrap().text;
            let head = text.lines().next().unwrap();
            assert!(head.contains("invented") && head.ends_with(" of an invented place."), "{}", listed.file);
            let plan = listed.plan.as_deref().unwrap_or_else(|| panic!("{:#?}", listed.problems));
            assert!(plan.notes.iter().all(|p| p.weight == Weight::Note), "{:#?}", plan.notes);
            let (first, last) = plan.span().unwrap();
            let newest = folder.newest_time().unwrap().date_naive();
            // what has been is there to be learned from
            assert!(
                first <= newest && (last <= newest || last.to_string() == "2026-11-30"),
                "{}",
                listed.file
            );
            assert!(!named.contains(&plan.name.as_str()), "{}", plan.name);
            named.push(&plan.name);
        }
        assert!(named.len() >= 3, "{name}: {named:?}");
    }
}
