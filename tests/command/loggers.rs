//! Casts as loggers and spreadsheets write them, through the built program: the right numbers.

use std::fs;

use serde_json::Value;

use crate::{CAST, Folder, SITE, line_of, run, with};

fn pool_of(site: &str, cast: &[u8]) -> Value {
    let folder = Folder::new(site, &[("a.csv", cast)]);
    run(&["pool", folder.named(), "--json"]).json()
}

fn kinds(answer: &Value, of: &str) -> Vec<String> {
    answer["profile"][of].as_array().unwrap().iter().map(|f| f["kind"].as_str().unwrap().to_owned()).collect()
}

/// The same water, whatever wrote it down.
fn is_usual(answer: &Value, what: &str) {
    let usual = pool_of(SITE, CAST.as_bytes());
    for key in ["layering", "cold_water"] {
        close(&usual[key], &answer[key], what);
    }
    for key in ["taken", "pool_m", "samples"] {
        assert_eq!(usual["profile"][key], answer["profile"][key], "{what}: {key}");
    }
}

fn close(a: &Value, b: &Value, what: &str) {
    match (a, b) {
        (Value::Object(a), Value::Object(b)) => {
            assert!(a.keys().eq(b.keys()), "{what}");
            for (key, value) in a {
                close(value, &b[key], &format!("{what}: {key}"));
            }
        }
        (Value::Array(a), Value::Array(b)) => {
            assert_eq!(a.len(), b.len(), "{what}");
            a.iter().zip(b).for_each(|(a, b)| close(a, b, what));
        }
        _ => match (a.as_f64(), b.as_f64()) {
            (Some(a), Some(b)) => assert!((a - b).abs() <= 1e-9 * a.abs().max(1.0), "{what}: {a} and {b}"),
            _ => assert_eq!(a, b, "{what}"),
        },
    }
}

fn utf16(text: &str, little: bool) -> Vec<u8> {
    let unit = |u: u16| if little { u.to_le_bytes() } else { u.to_be_bytes() };
    std::iter::once(0xfeff).chain(text.encode_utf16()).flat_map(unit).collect()
}

#[test]
fn scenario_every_encoding_and_line_end_holds_the_same_water() {
    let crlf = CAST.replace('\n', "\r\n");
    for (what, bytes) in [
        ("BOM and CRLF", format!("\u{feff}{crlf}").into_bytes()),
        ("CR alone", CAST.replace('\n', "\r").into_bytes()),
        ("UTF-16, low byte first", utf16(&crlf, true)),
        ("UTF-16, high byte first", utf16(CAST, false)),
        ("no last line end", CAST.trim_end().as_bytes().to_vec()),
        ("capitals", CAST.replace("depth_m,temperature_C", "DEPTH_M,Temperature_c").into_bytes()),
        ("tabs", CAST.replace(',', "\t").into_bytes()),
        ("bars", CAST.replace(',', " | ").into_bytes()),
        ("quotes", CAST.replace("depth_m", "\"depth_m\"").replace("5,21.8", "\"5\",\"21.8\"").into_bytes()),
        ("blank cells at the end", CAST.replace("5,21.8,8.4", "5,21.8,8.4,,").into_bytes()),
        ("filled comments", CAST.replace("# pool: 60", "# pool: 60,,").into_bytes()),
    ] {
        is_usual(&pool_of(SITE, &bytes), what);
    }
}

#[test]
fn scenario_semicolons_with_decimal_commas_hold_the_same_water() {
    let rows = CAST.lines().skip(3).map(|l| l.replace(',', ";").replace('.', ",") + "\n").collect::<String>();
    let cast = format!("# taken: 2025-07-14T10:30\n# pool: 60\ndepth_m;temperature_C;oxygen_mg_l\n{rows}");
    let answer = pool_of(SITE, cast.as_bytes());
    is_usual(&answer, "decimal commas");
    assert!(kinds(&answer, "notes").contains(&"decimal-comma".to_owned()));
}

/// A preamble, the logger's own words in Windows-1252, a degree sign among them, time and pool from the site file.
#[test]
fn scenario_a_mapped_and_listed_export_holds_the_same_water() {
    let site = format!(
        "{SITE}columns: {{ \"Tiefe [m]\": depth_m, \"Temp [°C]\": temperature_C, \"O2 [mg/l]\": oxygen_mg_l }}\n\
         casts: [ {{ file: EXPORT.CSV, taken: 2025-07-14T10:30, pool: 60 }} ]\n"
    );
    let mut cast = b"Sonde 12, Ger\xe4t 3\nBatterie 11.9 V\nZeit,Tiefe [m],Temp [\xb0C],O2 [mg/l]\n".to_vec();
    for line in CAST.lines().skip(3) {
        cast.extend(format!("10:30,{line}\n").into_bytes());
    }
    let folder = Folder::new(&site, &[("EXPORT.CSV", &cast)]);
    let answer = run(&["pool", folder.named(), "--json"]).json();
    is_usual(&answer, "mapped and listed");
    for kind in ["encoding", "preamble", "column-unused"] {
        assert!(kinds(&answer, "notes").contains(&kind.to_owned()), "{kind}");
    }
}

#[test]
fn scenario_elevations_and_feet_hold_the_same_water() {
    let rows = |f: &dyn Fn(f64, f64, f64) -> String| -> String {
        let cells = |l: &str| l.split(',').map(|c| c.parse().unwrap()).collect::<Vec<f64>>();
        CAST.lines().skip(3).map(cells).map(|c| f(c[0], c[1], c[2])).collect()
    };
    let head = "# taken: 2025-07-14T10:30\n# pool: 60\n";
    for (columns, rows) in [
        ("elevation_m,temperature_C", rows(&|d, t, o| format!("{},{t},{o}\n", 60.0 - d))),
        ("depth_ft,temperature_F", rows(&|d, t, o| format!("{},{},{o}\n", d / 0.3048, 32.0 + 1.8 * t))),
        ("elevation_ft,temperature_C", rows(&|d, t, o| format!("{},{t},{o}\n", (60.0 - d) / 0.3048))),
    ] {
        is_usual(&pool_of(SITE, format!("{head}{columns},oxygen_mg_l\n{rows}").as_bytes()), columns);
    }
}

/// Saturation of fresh water at 20 C and one atmosphere is 9.09 mg/L (Benson & Krause 1984 as tabulated). The
/// pool's surface stands at sea level here, so half of it is 4.55.
#[test]
fn published_percent_of_saturation_becomes_milligrams() {
    let site = with(SITE, "altitude: 410", "altitude: -60");
    let cast = "# taken: 2025-07-14T10:30\n# pool: 60\ndepth_m,temperature_C,oxygen_percent\n0.5,20.2,100\n10,20,50\n58,19,90\n";
    let answer = pool_of(&site, cast.as_bytes());
    let least = answer["layering"]["oxygen_min_mg_l"].as_f64().unwrap();
    assert!((least - 4.546).abs() < 0.003, "{least}");
    assert!(kinds(&answer, "notes").contains(&"oxygen-converted".to_owned()));
}

/// Raw conductivity, converted to 25 C by hand, must weigh as much as specific conductance does.
#[test]
fn scenario_raw_conductivity_is_taken_to_25_c() {
    let rows = [(0.5, 20.0, 300.0), (20.0, 12.0, 500.0), (58.0, 6.0, 900.0)];
    let cast = |column: &str, value: &dyn Fn(f64, f64) -> f64| {
        let lines: String = rows.map(|(d, t, c)| format!("{d},{t},{}\n", value(t, c))).concat();
        format!("# taken: 2025-07-14T10:30\n# pool: 60\ndepth_m,temperature_C,{column}\n{lines}")
    };
    let raw = pool_of(SITE, cast("conductivity_us_cm", &|_, c| c).as_bytes());
    let specific = cast("specific_conductance_us_cm", &|t, c| c / (1.0 + 0.0191 * (t - 25.0)));
    let specific = pool_of(SITE, specific.as_bytes());
    let none = pool_of(SITE, cast("turbidity", &|_, c| c).as_bytes());
    close(&specific["layering"], &raw["layering"], "raw conductivity");
    assert!(kinds(&raw, "notes").contains(&"conductance-converted".to_owned()));
    assert!(!kinds(&specific, "notes").contains(&"conductance-converted".to_owned()));
    let stability = |answer: &Value| answer["layering"]["schmidt_stability_j_m2"].as_f64().unwrap();
    assert!(stability(&raw) > stability(&none) + 100.0, "salt below makes the layers more stable");
}

/// Down and up again, as a probe does: both ways are used, and the mean where they meet.
#[test]
fn scenario_a_down_and_an_up_cast_in_one_file_are_both_used() {
    let back = "45,6.7,4.5\n30,7.7,5.5\n14,12.7,7.0\n0.5,22.2,8.5\n";
    let both = format!("{CAST}{back}");
    let answer = pool_of(SITE, both.as_bytes());
    assert_eq!(answer["profile"]["samples"], 8);
    assert_eq!(answer["layering"]["surface_c"], 22.1);
    let flags = answer["profile"]["flags"].as_array().unwrap();
    let turn = flags.iter().find(|f| f["kind"] == "order").unwrap();
    assert_eq!(turn["row"], line_of(&both, "45,6.7"));
    let doubled: Vec<&Value> = flags.iter().filter(|f| f["kind"] == "duplicate").collect();
    assert_eq!(doubled.len(), 1, "several are told together");
    assert!(doubled[0]["text"].as_str().unwrap().starts_with("4 depths"));
}

#[test]
fn scenario_blank_cells_and_999_are_no_readings() {
    let cast = with(CAST, "9,18.0,8.0", "9,18.0,-999");
    let cast = with(&cast, "20,9.5,6.5", "20,-99.99,6.5");
    let cast = with(&cast, "30,7.5,5.5", "30,,5.5");
    let cast = with(&cast, "45,6.5,4.5", ",6.5,4.5");
    let answer = pool_of(SITE, cast.as_bytes());
    assert_eq!(answer["profile"]["samples"], 5);
    assert_eq!(answer["layering"]["oxygen_min_mg_l"], 3.5);
    let (notes, flags) = (&answer["profile"]["notes"], &answer["profile"]["flags"]);
    let row = |list: &Value, kind: &str| {
        list.as_array().unwrap().iter().find(|f| f["kind"] == kind).map(|f| f["row"].clone()).unwrap()
    };
    assert_eq!(row(notes, "no-reading"), line_of(&cast, "9,18.0,-999"));
    assert_eq!(row(flags, "no-place"), line_of(&cast, ",6.5,4.5"));
    assert!(kinds(&answer, "notes").contains(&"no-temperature".to_owned()));
}

#[test]
fn scenario_a_site_file_from_windows_reads_like_any_other() {
    let folder = Folder::usual();
    let usual = run(&["mix", folder.named(), "--json"]).json();
    let crlf = SITE.replace('\n', "\r\n");
    for bytes in [format!("\u{feff}{crlf}").into_bytes(), utf16(&crlf, true)] {
        fs::write(folder.site_file(), bytes).unwrap();
        let mut other = run(&["mix", folder.named(), "--json"]).json();
        other["fingerprint"] = usual["fingerprint"].clone();
        assert_eq!(usual, other);
    }
}
