//! The reader of stations: what it reads, what it says of odd files, and that nothing makes it panic.

use std::fmt::Write as _;

use chrono::{DateTime, FixedOffset};
use gatemix::files::site::site;
use gatemix::files::station::station;
use gatemix::files::text::{Format, read_from};
use gatemix::problem::{Problem, Weight, any_refused};
use gatemix::series::Record;
use gatemix::site::Site;
use proptest::prelude::*;

use super::said;

fn a_site() -> Site {
    let text = "
name: Bare
units: {}
utc_offset: \"-08:00\"
place: { altitude: 0 }
pool: { bed: 0, full: 10, table: [[0, 0], [10, 1000]] }
outlets: [ { name: A, centre: 3, height: 1, width: 1 } ]
columns: { When: time, Temp: temperature_C }
";
    site(text, "site.yaml").site.unwrap()
}

fn read(text: &str) -> (Option<Record>, Vec<Problem>) {
    let source = read_from("mill.csv", text.as_bytes(), Format::Csv).unwrap();
    station(&source, &a_site())
}

/// A sound record, whatever is flagged.
fn kept(text: &str) -> (Record, Vec<String>) {
    let (record, problems) = read(text);
    let problems = said(&problems);
    (record.unwrap_or_else(|| panic!("{problems:#?}")), problems)
}

fn times(record: &Record) -> Vec<String> {
    record.temperature_c.readings().iter().map(|r| r.0.format("%m-%d %H:%M").to_string()).collect()
}

fn values(record: &Record) -> Vec<f64> {
    record.temperature_c.readings().iter().map(|r| r.1).collect()
}

/// Rows of `days` days from 1 July, one in `minutes`, a temperature by day and hour.
fn rows(days: u32, minutes: u32, of: impl Fn(u32, f64) -> f64) -> String {
    let mut out = String::from("time,temperature_C,oxygen_mg_l\n");
    for day in 0..days {
        for step in 0..24 * 60 / minutes {
            let (hour, minute) = (step * minutes / 60, step * minutes % 60);
            let value = of(day, f64::from(step * minutes) / 60.0);
            let day = day + 1;
            _ = writeln!(out, "2026-07-{day:02}T{hour:02}:{minute:02},{value:.2},9.0{}", step % 2);
        }
    }
    out
}

fn daily_wave(hour: f64, half_range: f64) -> f64 {
    12.0 + half_range * (std::f64::consts::TAU * (hour - 9.0) / 24.0).sin()
}

#[test]
fn scenario_columns_units_and_ways_of_writing_a_time() {
    let (record, problems) = kept(
        "# data: reviewed\nTIME;temperature_f;Oxygen_mg_L;oxygen_percent;flow_cfs;mark;note\n\
         2026-07-01T10:00;50;8;70;35.3146667;;x\n2026-07-01 10:15:30;59;;100;;A;\n\
         2026-07-01T19:30:00Z;-999;;;10;Reviewed;\n2026-07-01T12:00-07:00;;;;20;;\n",
    );
    assert_eq!(times(&record), ["07-01 10:00", "07-01 10:15"]);
    assert!((values(&record)[0] - 10.0).abs() < 1e-12 && (values(&record)[1] - 15.0).abs() < 1e-12);
    let flows: Vec<_> = record.flow_m3s.readings().iter().map(|r| r.0.to_rfc3339()).collect();
    let expected = ["2026-07-01T10:00:00-08:00", "2026-07-01T11:00:00-08:00", "2026-07-01T11:30:00-08:00"];
    assert_eq!(flows, expected);
    assert!((record.flow_m3s.readings()[0].1 - 1.0).abs() < 1e-7);
    // mg/L rules over percent; 10.084 mg/L at 15 C and 1 atm is the printed value of Benson & Krause in Standard Methods
    let oxygen: Vec<f64> = record.oxygen_mg_l.readings().iter().map(|r| r.1).collect();
    assert!(oxygen[0].to_bits() == 8.0_f64.to_bits() && (oxygen[1] - 10.084).abs() < 2e-3, "{oxygen:?}");
    let share: Vec<f64> = record.oxygen_share.readings().iter().map(|r| r.1).collect();
    assert!((share[0] - 0.7).abs() < 1e-12 && (share[1] - 1.0).abs() < 1e-12);
    assert!(!record.provisional);
    assert_eq!(
        problems,
        [
            "mill.csv:2: note: columns not used: note",
            "mill.csv:4: note: oxygen in percent was converted at the pressure of the bed at the dam",
            "mill.csv:5: note: a cell such as -999 is read as no reading",
            "mill.csv:6: flag: the time goes back here, to 2026-07-01 11:00; check the order of the rows",
        ]
    );
}

#[test]
fn scenario_the_site_maps_the_names_of_a_logger() {
    let (record, problems) = kept("Logger 7\n\nWhen,Temp\n2026-07-01T10:00,10\n");
    assert_eq!(values(&record), [10.0]);
    assert_eq!(problems, ["mill.csv:1: note: what stands above the header on line 3 was passed over"]);
}

#[test]
fn scenario_what_nobody_says_to_be_reviewed_is_provisional() {
    let with = |head: &str, mark: &str| {
        kept(&format!("{head}time,temperature_C,mark\n2026-07-01T10:00,10,{mark}\n"))
    };
    for (head, mark, provisional) in [
        ("", "", true),
        ("# data: provisional\n", "", true),
        ("# data: reviewed\n", "", false),
        ("# data: reviewed\n", "p", true),
        ("# data: provisional\n", "approved", false),
    ] {
        let (record, problems) = with(head, mark);
        assert_eq!((record.provisional, problems.len()), (provisional, 0), "{head}{mark}");
    }
    let (record, problems) = with("# data: golden\n", "fishy");
    assert!(record.provisional);
    assert_eq!(
        problems,
        [
            "mill.csv:1: flag: `# data: golden` is not a word known here; the data count as provisional; \
             write provisional, estimated or reviewed, or leave it blank",
            "mill.csv:3: flag: `fishy` is not a mark known here; the reading counts as provisional; \
             write provisional, estimated or reviewed, or leave it blank",
        ]
    );
}

#[test]
fn scenario_the_same_moment_twice_keeps_the_first_and_is_told() {
    let (record, problems) = kept(
        "time,temperature_C\n2026-07-01T10:00,10\n2026-07-01T10:00,10\n2026-07-01T11:00,11\n2026-07-01T11:00,15\n\
         2026-07-01T12:00,12\n2026-07-01T12:00,15\n",
    );
    assert_eq!(values(&record), [10.0, 11.0, 12.0]);
    assert_eq!(
        problems,
        [
            "mill.csv:3: flag: 2026-07-01 10:00 stands here again with the same readings (first on line 2); \
             the first is kept; take one of them out",
            "mill.csv:5: flag: 2026-07-01 11:00 stands here again with other readings (first on line 4); \
             the first is kept; the same on line 7; take one of them out",
        ]
    );
}

#[test]
fn scenario_a_file_from_newest_to_oldest_is_turned_round() {
    let (record, problems) = kept("time,temperature_C\n2026-07-01T11:00,11\n2026-07-01T10:00,10\n");
    assert_eq!(values(&record), [10.0, 11.0]);
    assert_eq!(
        problems,
        ["mill.csv:2: note: the file goes from the newest reading to the oldest; it was turned round"]
    );
}

/// The clock goes back from 02:00 to 01:00 on 1 November and forward from 02:00 to 03:00 on 8 March.
const AUTUMN: &str = "time,temperature_C\n2026-11-01T00:30,1\n2026-11-01T01:00,2\n2026-11-01T01:30,3\n\
                      2026-11-01T01:00,4\n2026-11-01T01:30,5\n2026-11-01T02:00,6\n";

#[test]
fn scenario_a_clock_change_that_is_told_keeps_every_reading() {
    let (record, problems) = kept(&format!("# daylight: 2026-03-08 2026-11-01\n{AUTUMN}"));
    assert_eq!(values(&record), [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]);
    let expected = ["10-31 23:30", "11-01 00:00", "11-01 00:30", "11-01 01:00", "11-01 01:30", "11-01 02:00"];
    assert_eq!((times(&record), problems), (expected.map(String::from).to_vec(), vec![]));
    let spring = "# daylight: 2026-03-08 2026-11-01\ntime,temperature_C\n2026-03-08T01:00,1\n2026-03-08T03:00,2\n\
                  2026-03-08T04:00,3\n";
    let (record, problems) = kept(spring);
    assert_eq!(times(&record), ["03-08 01:00", "03-08 02:00", "03-08 03:00"]);
    assert_eq!(problems, [""; 0]);
    // hour by hour, the newest first, with the hours of another country
    let (record, problems) = kept(
        "# daylight: 2026-03-29T02:00 2026-10-25T03:00\ntime,temperature_C\n2026-10-25T04:00,5\n2026-10-25T03:00,4\n\
         2026-10-25T02:00,3\n2026-10-25T02:00,2\n2026-10-25T01:00,1\n",
    );
    assert_eq!(values(&record), [1.0, 2.0, 3.0, 4.0, 5.0]);
    let expected = ["10-25 00:00", "10-25 01:00", "10-25 02:00", "10-25 03:00", "10-25 04:00"];
    assert_eq!(times(&record), expected);
    assert_eq!(problems.len(), 1, "{problems:?}");
}

#[test]
fn scenario_a_clock_change_that_is_not_told_leaves_the_second_pass_out() {
    let (record, problems) = kept(AUTUMN);
    assert_eq!(values(&record), [1.0, 2.0, 3.0, 6.0]);
    let words = "mill.csv:5: flag: the hour from 01:00 comes twice, as if the clock had been set back; its second \
                 pass is left out; the same on line 6; write `# daylight: 2026-03-08 2026-11-01` above the header: \
                 the days on which the clock was changed";
    assert_eq!(problems, [words]);
    let hourly = "time,temperature_C\n2026-11-01T00:00,1\n2026-11-01T01:00,2\n2026-11-01T01:00,3\n2026-11-01T02:00,4\n";
    let (record, problems) = kept(hourly);
    assert_eq!(values(&record), [1.0, 2.0, 4.0]);
    assert!(problems[0].contains("the hour from 01:00 comes twice"), "{problems:?}");
}

#[test]
fn scenario_a_time_that_the_told_change_skips_is_flagged() {
    let (record, problems) =
        kept("# daylight: 2026-03-08 2026-11-01\ntime,temperature_C\n2026-03-08T02:30,1\n");
    assert_eq!(times(&record), ["03-08 02:30"]);
    assert_eq!(
        problems,
        [
            "mill.csv:3: flag: 2026-03-08 02:30 does not exist by `# daylight`; correct the days of `# daylight`; \
          the time was read as standard time"
        ]
    );
    let (none, problems) =
        read("# daylight: 2026-11-01 2026-03-08\ntime,temperature_C\n2026-03-08T02:30,1\n");
    assert!(none.is_none());
    assert!(
        said(&problems)[0]
            .starts_with("mill.csv:1: refused: `# daylight: 2026-11-01 2026-03-08` does not tell")
    );
}

#[test]
fn scenario_a_day_out_of_the_water_is_left_out_with_its_dates() {
    let text = rows(15, 60, |day, hour| daily_wave(hour, if (7..9).contains(&day) { 6.0 } else { 1.0 }));
    let (record, problems) = kept(&text);
    assert_eq!(
        problems,
        [
            "mill.csv:170: flag: the sensor seems out of the water on 2026-07-08 to 2026-07-09: its temperature swings \
          by 12.0 C in a day where 2.0 C is usual, warmest in the sun; its temperature and oxygen of these days are \
          left out; blank the cells of the days it was dry, or see to the station"
        ]
    );
    assert_eq!(
        (record.temperature_c.readings().len(), record.oxygen_mg_l.readings().len()),
        (13 * 24, 13 * 24)
    );
    let gone = |r: &&(DateTime<FixedOffset>, f64)| {
        ["07-08", "07-09"].contains(&r.0.format("%m-%d").to_string().as_str())
    };
    assert_eq!(record.temperature_c.readings().iter().filter(gone).count(), 0);
    // as wide a swing that peaks at night is water from another gate, and one that is usual is the river's own
    let at_night = rows(15, 60, |day, hour| daily_wave(hour - 12.0, if day == 7 { 6.0 } else { 1.0 }));
    let always = rows(15, 60, |_, hour| daily_wave(hour, 6.0));
    for text in [at_night, always] {
        assert_eq!(kept(&text).1, [""; 0]);
    }
}

#[test]
fn scenario_spikes_and_stuck_values_are_flagged_and_kept() {
    let spiked = rows(1, 30, |_, hour| if (hour - 5.0).abs() < 0.1 { 16.0 } else { daily_wave(hour, 1.0) });
    let (record, problems) = kept(&spiked);
    assert_eq!(
        problems,
        [
            "mill.csv:12: flag: 16.0 C at 2026-07-01 05:00 stands off the readings before and after by more than 3 C; \
          it is kept; blank the cell if it is a slip"
        ]
    );
    assert_eq!(record.temperature_c.readings().len(), 48);
    let stuck = rows(1, 60, |_, hour| if hour < 13.5 { 12.0 } else { daily_wave(hour, 1.0) });
    assert_eq!(
        kept(&stuck).1,
        [
            "mill.csv:2: flag: the temperature does not move by its last digit from 2026-07-01 00:00 for 13 hours; \
          it is kept; look whether the sensor is stuck"
        ]
    );
    let twelve = rows(1, 60, |_, hour| if hour < 12.5 { 12.0 } else { daily_wave(hour, 1.0) });
    assert_eq!(kept(&twelve).1, [""; 0]);
}

#[test]
fn scenario_readings_no_river_has_are_left_out_and_told() {
    let (record, problems) = kept(
        "time,temperature_C,oxygen_mg_l,oxygen_percent,flow_m3s\n2026-07-01T10:00,10,22,90,5\n\
         2026-07-01T11:00,46,41,501,-1\n2026-07-01T12:00,10,9,90,5\n2026-07-01T13:00,-1.1,9,90,5\n",
    );
    assert_eq!(values(&record), [10.0, 10.0]);
    assert_eq!((record.oxygen_mg_l.readings().len(), record.flow_m3s.readings().len()), (3, 3));
    assert_eq!(
        problems,
        [
            "mill.csv:2: flag: oxygen is above 20 mg/L or 200 %; it is kept; check the sensor and the unit",
            "mill.csv:3: flag: the temperature 46.0 C is outside -1 C to 45 C; it is left out; the same on line 5; \
             blank the cell, or correct it",
            "mill.csv:3: flag: oxygen of 41 mg/L is outside 0 to 40; it is left out; blank the cell, or correct it",
            "mill.csv:3: flag: oxygen of 501 % is outside 0 to 500; it is left out; blank the cell, or correct it",
            "mill.csv:3: flag: a flow of -1.0 m3/s is none of a river; it is left out; blank the cell, or correct it",
        ]
    );
    let (none, problems) = read("time,temperature_C\n2026-07-01T10:00,61\n2026-07-01T11:00,62\n");
    assert!(none.is_none());
    assert_eq!(
        said(&problems)[0],
        "mill.csv:2: refused: the temperature 61.0 C is outside -1 C to 45 C, and so are most others; the same on \
         line 3; check the unit in the header"
    );
}

#[test]
fn scenario_cells_that_cannot_be_read_are_all_told_with_their_lines() {
    let mut text = String::from("time,temperature_C,oxygen_mg_l\n2026-07-01,10,8\nyesterday,10,8\n");
    for minute in 10..20 {
        _ = writeln!(text, "2026-07-01T10:{minute},ice,{minute}");
    }
    let (none, problems) = read(&text);
    assert!(none.is_none());
    assert_eq!(
        said(&problems),
        [
            "mill.csv:2: refused: `2026-07-01` is a date without a time of day; the same on line 3; \
             write 2026-07-01T10:00 (standard time of the site) or 2026-07-01T10:00:00-07:00, and a time on every row",
            "mill.csv:4: refused: temperature_C: \"ice\" is not a number; the same on line 5, 6, 7 and 6 more; \
             leave the cell blank where nothing was measured",
        ]
    );
}

#[test]
fn scenario_files_that_are_no_record_are_refused_with_what_to_do() {
    for (text, begins) in [
        (
            "depth_m,temperature_C\n1,10\n",
            "no line names a time and a reading with its unit; name them (time,",
        ),
        ("time,mark\n2026-07-01T10:00,p\n", "no line names a time and a reading"),
        (
            "time,temperature_C,temperature_F\n2026-07-01T10:00,10,50\n",
            "two columns are read as temperature_C or temperature_F; keep one of them",
        ),
        ("time,When,temperature_C\n2026-07-01T10:00,2026-07-01T10:00,1\n", "two columns are read as time"),
        ("time,temperature_C\n2026-07-01T10:00,\n", "the file holds no reading that can be used"),
        ("time,temperature_C\n", "the file holds no reading that can be used"),
    ] {
        let (record, problems) = read(text);
        assert!(record.is_none(), "{text}");
        assert!(said(&problems).iter().any(|p| p.contains(begins)), "{text}: {:?}", said(&problems));
    }
}

fn piece() -> impl Strategy<Value = String> {
    prop_oneof![
        4 => (0..400_i32, 0..48_u32, -20..60_i32).prop_map(|(day, half, t)| {
            let date = chrono::NaiveDate::from_ymd_opt(2026, 1, 1).unwrap() + chrono::Days::new(day.unsigned_abs().into());
            format!("{date}T{:02}:{:02},{}.{},{}\n", half / 2, half % 2 * 30, t, t.abs() % 10, t)
        }),
        1 => proptest::sample::select(
            &["# daylight: 2026-03-08 2026-11-01\n", "# data: x\n", "9999-12-31T23:59:59-23:59,1,1\n", ",,\n",
              "2026-02-30T10:00,1,1\n", "+262142-01-01T00:00,1,1\n", "2026-07-01T24:00,1,1\n", "\"\u{1b}[2J\",9,9\n",
              "# daylight: 0000-01-01 +262142-12-31\n", "2026-07-01T10:00Z,1e308,-1e308\n", "é026-07-01T10:00,1,1\n"][..]
        ).prop_map(String::from),
        1 => "\\PC{0,20}\n",
    ]
}

proptest! {
    #![proptest_config(super::mutated::config(200))]

    #[test]
    fn law_no_bytes_make_the_reader_of_stations_panic(bytes in proptest::collection::vec(any::<u8>(), 0..300)) {
        if let Ok(source) = read_from("x.csv", bytes.as_slice(), Format::Csv) {
            let (record, problems) = station(&source, &a_site());
            prop_assert_eq!(record.is_none(), any_refused(&problems));
        }
    }

    #[test]
    fn law_damaged_records_are_told_and_what_is_kept_is_water(pieces in proptest::collection::vec(piece(), 0..60)) {
        let text = format!("time,temperature_C,oxygen_mg_l\n{}", pieces.concat());
        let source = read_from("x.csv", text.as_bytes(), Format::Csv).unwrap();
        let (record, problems) = station(&source, &a_site());
        prop_assert_eq!(record.is_none(), problems.iter().any(|p| p.weight == Weight::Refused));
        for problem in &problems {
            prop_assert!(!problem.to_string().chars().any(char::is_control));
        }
        if let Some(record) = record {
            let readings = record.temperature_c.readings();
            prop_assert!(readings.iter().all(|r| (-1.0..=45.0).contains(&r.1)));
            prop_assert!(readings.windows(2).all(|w| w[0].0 < w[1].0));
            prop_assert!(record.oxygen_mg_l.readings().iter().all(|r| (0.0..=40.0).contains(&r.1)));
        }
    }
}
