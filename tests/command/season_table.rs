//! The season as a table for a spreadsheet: names with units, what is asked and how far outside it is.

use std::fs;

use approx::assert_abs_diff_eq;

use crate::river::{list, named, number};
use crate::season::{season, usual};
use crate::{run, with};

#[test]
fn scenario_a_table_has_a_row_a_day_with_names_and_units() {
    let folder = usual();
    let arguments = ["season", folder.named(), "--on", "2025-07-14T10:30", "--csv"];
    let table = run(&arguments);
    assert_eq!(table.code, Some(0), "{}", table.err);
    let answer = season(&folder, &[]);
    let mut rows = csv::Reader::from_reader(table.out.as_bytes());
    let head: Vec<String> = rows.headers().unwrap().iter().map(str::to_owned).collect();
    assert_eq!(head[..5], ["date", "pool_m", "inflow_m3s", "release_m3s", "release_temperature_C"]);
    assert!(head.iter().all(|name| name == "date" || name.contains('_')), "a unit each: {head:?}");
    let column =
        |name: &str| head.iter().position(|h| h == name).unwrap_or_else(|| panic!("{name} in {head:?}"));
    let rows: Vec<csv::StringRecord> = rows.records().map(Result::unwrap).collect();
    assert_eq!(rows.len(), 44);
    let figure = |row: usize, name: &str| rows[row][column(name)].parse::<f64>().unwrap();
    for row in [0, 20, 43] {
        let day = &answer["days"][row];
        assert_abs_diff_eq!(
            figure(row, "release_temperature_C"),
            number(&day["release"]["temperature_c"]),
            epsilon = 1e-3
        );
        assert_abs_diff_eq!(figure(row, "pool_m"), number(&day["pool_m"]), epsilon = 1e-3);
        assert_abs_diff_eq!(
            figure(row, "below_12.0C_usable_hm3"),
            number(&day["cold_water_m3"]) / 1e6,
            epsilon = 1e-4
        );
        assert_abs_diff_eq!(
            figure(row, "Ford_temperature_C"),
            number(&day["points"][0]["temperature_c"]),
            epsilon = 1e-3
        );
    }
    assert_eq!(&rows[3][column("attainable_low_C")], "", "what is missing is empty");
    // what is asked and how far outside it is, at the dam and at a point
    let mut outside = 0;
    for (row, day) in list(&answer["days"]).iter().enumerate() {
        let [low, high, floor] = ["asked_low_C", "asked_high_C", "asked_oxygen_mg_l"].map(|c| figure(row, c));
        assert_eq!((low, high, floor), (9.0, 14.0, 7.0), "{day}");
        let c = figure(row, "release_temperature_C");
        let off = (c - high).max(0.0) + (c - low).min(0.0);
        assert_abs_diff_eq!(figure(row, "outside_C"), off, epsilon = 2e-4);
        let short = (floor - figure(row, "oxygen_below_dam_mg_l")).max(0.0);
        assert_abs_diff_eq!(figure(row, "oxygen_short_mg_l"), short, epsilon = 2e-4);
        assert!((figure(row, "Ford_asked_high_C") - 15.0).abs() < 1e-9);
        let ford = (figure(row, "Ford_temperature_C") - 15.0).max(0.0);
        assert_abs_diff_eq!(figure(row, "Ford_outside_C"), ford, epsilon = 2e-4);
        let missed = day["outside"].as_array().unwrap();
        assert_eq!(missed.contains(&"holding".into()), off.abs() > 1e-3 || short > 1e-3, "{day}");
        assert_eq!(missed.contains(&"ford".into()), ford > 1e-3, "{day}");
        outside += missed.len();
    }
    assert_eq!(answer["score"]["days_outside"], outside);
    assert!(outside > 0);
    assert_eq!(answer["cold_water_below_c"], 12.0);
    let holding = named(&answer["targets"], "name", "holding");
    assert_eq!((number(&holding["low"]), number(&holding["high"])), (9.0, 14.0));
    let customary = run(&[&arguments[..], &["--units", "us"]].concat()).out;
    assert!(
        customary.starts_with("date,pool_ft,inflow_cfs,release_cfs,release_temperature_F,"),
        "{customary}"
    );
    run(&[&arguments[..], &["--json"]].concat()).failed_with(2);
}

#[test]
fn scenario_a_name_in_a_table_is_no_formula() {
    let folder = usual();
    let text = fs::read_to_string(folder.site_file()).unwrap();
    let text = with(&text, "name: Ford", "name: \"=1+1, \\\"x\\\"\"");
    fs::write(folder.site_file(), with(&text, "point: Ford", "point: \"=1+1, \\\"x\\\"\"")).unwrap();
    let table = run(&["season", folder.named(), "--on", "2025-07-14T10:30", "--csv"]);
    assert!(
        table.out.lines().next().unwrap().contains(",\"'=1+1, \"\"x\"\"_temperature_C\","),
        "{}",
        table.out
    );
}
