//! Weather files: what is read of sound ones, and the one thing said of each that is not.

use approx::assert_abs_diff_eq;
use chrono::{DateTime, NaiveDate};
use gatemix::files::site::site;
use gatemix::files::text::{Format, Source, read_from};
use gatemix::files::weather::weather;
use gatemix::problem::{Problem, any_refused};
use gatemix::site::Site;
use gatemix::weather::{Weather, humidity, wind_at_7_m};
use proptest::prelude::*;

use super::said;
use super::site::SOUND;

const DAYS: &str = "# wind height: 10 m
date,air_C,dew_point_C,wind_m_s,cloud_percent,radiation_w_m2
2026-07-01,20,11,3,20,300
2026-07-02,21,12,2,,310
2026-07-03,22,13,1,100,90
";

const HOURS: &str = "# wind height: 33 ft
# forecast from: 2026-07-02T00:00
time;air_F;humidity_percent;wind_mph;cloud_tenths
2026-07-01T00:00;68;60;5;2
2026-07-01T01:00;66;65;4;2
2026-07-01T02:30;64;70;3;10
";

fn sound() -> Site {
    site(SOUND, "site.yaml").site.unwrap()
}

fn source(text: &str) -> Source {
    read_from("weather.csv", text.as_bytes(), Format::Csv).unwrap()
}

fn read(text: &str) -> (Option<Weather>, Vec<Problem>) {
    weather(&source(text), &sound())
}

#[test]
fn scenario_weather_by_the_day() {
    let (weather, problems) = read(DAYS);
    assert_eq!(said(&problems), Vec::<String>::new());
    let weather = weather.unwrap();
    assert!(!weather.is_hourly());
    assert_eq!(weather.days.len(), 3);
    let day = |d| weather.day(NaiveDate::from_ymd_opt(2026, 7, d).unwrap()).unwrap();
    let first = day(1);
    assert_eq!((first.temperature_c, first.dew_point_c, first.solar_w_m2), (20.0, 11.0, 300.0));
    assert_abs_diff_eq!(first.cloud, 0.2, epsilon = 1e-12);
    assert_abs_diff_eq!(first.wind_m_s, wind_at_7_m(3.0, 10.0), epsilon = 1e-12);
    // cloud that nobody saw comes from radiation: little at 310 W/m2 in July
    assert!((0.01..0.6).contains(&day(2).cloud), "{}", day(2).cloud);
    assert_eq!(weather.day(NaiveDate::from_ymd_opt(2026, 7, 4).unwrap()), None);
    let moment = DateTime::parse_from_rfc3339("2026-07-03T05:10:00-07:00").unwrap();
    assert_eq!(weather.at(moment), Some(day(3)));
}

#[test]
fn scenario_weather_by_the_hour_in_customary_units() {
    let (weather, problems) = read(HOURS);
    assert!(!any_refused(&problems), "{:#?}", said(&problems));
    let weather = weather.unwrap();
    assert!(weather.is_hourly() && weather.days.is_empty());
    let at = |text: &str| weather.at(DateTime::parse_from_rfc3339(text).unwrap());
    let air = at("2026-07-01T00:59:00-07:00").unwrap();
    assert_abs_diff_eq!(air.temperature_c, 20.0, epsilon = 1e-9);
    assert_abs_diff_eq!(air.dew_point_c, humidity::dew_point_of_humidity_c(20.0, 0.6), epsilon = 1e-9);
    assert_abs_diff_eq!(air.wind_m_s, wind_at_7_m(5.0 * 0.44704, 33.0 * 0.3048), epsilon = 1e-9);
    // it is night
    assert!(air.solar_w_m2 <= 0.0);
    // a row within an hour tells that hour
    assert!(at("2026-07-01T02:00:00-07:00").is_some() && at("2026-07-01T03:00:00-07:00").is_none());
    let from = DateTime::parse_from_rfc3339("2026-07-02T00:00:00-07:00").unwrap();
    assert_eq!(weather.forecast_from, Some(from));
}

#[test]
fn scenario_weather_by_three_hours_is_weather_by_the_hour_and_noted() {
    let row = |h: u32| format!("2026-07-{:02}T{:02}:00,{h},-5,3,20\n", 1 + h / 24, h % 24);
    let file = |hours: &[u32]| {
        let rows: String = hours.iter().map(|h| row(*h)).collect();
        read(&format!("# wind height: 10 m\ntime,air_C,dew_point_C,wind_m_s,cloud_percent\n{rows}"))
    };
    let (weather, problems) = file(&[0, 3, 6, 9, 12, 15, 18, 21, 24, 27]);
    let noted = "weather.csv: note: 18 hour(s) are put in, straight between rows no more than 3 h apart";
    assert_eq!(said(&problems), [noted]);
    let weather = weather.unwrap();
    assert_eq!((weather.hours.len(), weather.days.len()), (28, 1));
    let at = weather.at(DateTime::parse_from_rfc3339("2026-07-01T04:00:00-07:00").unwrap()).unwrap();
    assert_abs_diff_eq!(at.temperature_c, 4.0, epsilon = 1e-12);
    // a longer gap stays
    let (weather, problems) = file(&[0, 1, 5, 6]);
    assert_eq!(weather.unwrap().hours.len(), 4);
    let gap = problems.iter().find(|p| p.kind == "weather-gap").unwrap().to_string();
    assert!(gap.contains("3 hour(s) between the first and the last") && gap.contains("the day before again"));
}

#[test]
fn scenario_the_radiation_of_a_day_tells_the_cloud_of_its_hours() {
    let file = |share: f64| {
        let stand = |hour: u32| gatemix::weather::Stand {
            latitude_deg: Some(44.1),
            altitude_m: Some(410.0),
            day: 182,
            hours: Some((f64::from(hour), f64::from(hour + 1))),
        };
        let row = |hour: u32| {
            let solar = share * stand(hour).clear_w_m2().unwrap();
            format!("2026-07-01T{hour:02}:00,20,11,3,{solar:.9}\n")
        };
        let rows: String = (0..24).map(row).collect();
        read(&format!("# wind height: 2 m\ntime,air_C,dew_point_C,wind_m_s,radiation_w_m2\n{rows}"))
    };
    let (weather, problems) = file(0.6);
    assert_eq!(said(&problems), Vec::<String>::new());
    let weather = weather.unwrap();
    let cloud = (0.4_f64 / 0.65).sqrt();
    assert!(weather.hours.values().all(|air| (air.cloud - cloud).abs() < 1e-6));
    let day = weather.day(NaiveDate::from_ymd_opt(2026, 7, 1).unwrap()).unwrap();
    assert_abs_diff_eq!(day.dew_point_c, 11.0, epsilon = 1e-9);
    assert_abs_diff_eq!(day.cloud, cloud, epsilon = 1e-6);
}

/// What is changed in the daily file, into what, and what is then said: kind, line, words.
type Case = (&'static str, &'static str, &'static str, Option<usize>, &'static str);

const REFUSED: &[Case] = &[
    ("# wind height: 10 m", "# wind height: 10 C", "wind-height", Some(1), "the wind height: "),
    ("# wind height: 10 m", "# wind height: 1000 m", "wind-height", Some(1), "not measured 1,000.0 m above"),
    ("# wind", "# wind height: 9 m\n# wind", "said-twice", Some(2), "says another thing than on line 1"),
    ("# wind", "# forecast from: soon\n# wind", "time", Some(1), "`soon` is not a date and time"),
    ("date,", "day,", "no-header", None, "no line names a time or a date and the air temperature"),
    ("air_C,", "air,", "no-header", None, "no line names a time or a date and the air temperature"),
    ("dew_point_C", "dew", "no-column", Some(2), "no column tells the water in the air"),
    ("wind_m_s", "wind", "no-column", Some(2), "no column tells the wind"),
    ("cloud_percent,radiation_w_m2", "cloud,sun", "no-column", Some(2), "no column tells the sky"),
    ("cloud_percent", "air_F", "column-twice", Some(2), "both air_C and air_F are given"),
    ("dew_point_C", "dew_point_C,dew_point_F", "no-header", Some(2), "this line names 7 columns"),
    ("2026-07-02,", "2026-07-32,", "time", Some(4), "`2026-07-32` is not a date of our days"),
    ("2026-07-02,", ",", "time", Some(4), "`` is not a date of our days"),
    (
        "2026-07-02,21",
        "2026-07-02,210",
        "weather-range",
        Some(4),
        "210 is not the air temperature; -60 to 60 C",
    ),
    ("2026-07-02,21,12", "2026-07-02,21,x", "not-a-number", Some(4), "\"x\" is not a number"),
    ("2026-07-02,21,12,2", "2026-07-02,21,12,NaN", "not-a-number", Some(4), "not a finite number"),
    (
        "2026-07-02,21,12,2",
        "2026-07-02,21,12,-2",
        "weather-range",
        Some(4),
        "-2 is not the wind; 0 to 75 m/s",
    ),
    (",100,90", ",110,90", "weather-range", Some(5), "110 is not the cloud; 0 to 100 %"),
    (",100,90", ",100,9000", "weather-range", Some(5), "9000 is not the radiation; -20 to 1500 W/m2"),
    ("dew_point_C", "wet_bulb_C", "", None, ""),
    ("20,11,3", "20,-20,3", "", None, ""),
];

#[test]
fn scenario_one_fault_in_a_weather_file_and_what_is_said_of_it() {
    for (from, to, kind, line, words) in REFUSED {
        assert!(DAYS.contains(from), "{from}");
        let (weather, problems) = read(&DAYS.replacen(from, to, 1));
        if kind.is_empty() {
            assert!(weather.is_some(), "{to}: {:#?}", said(&problems));
            continue;
        }
        let refused: Vec<&Problem> =
            problems.iter().filter(|p| p.weight == gatemix::problem::Weight::Refused).collect();
        assert!(weather.is_none() && !refused.is_empty(), "{to}");
        assert!(line.is_none() || refused[0].place.line == *line, "{to}: {}", refused[0]);
        for p in refused {
            assert_eq!((p.kind, p.place.file.as_deref()), (*kind, Some("weather.csv")), "{to}: {p}");
            assert!(p.to_string().contains(words) && !p.cure.is_empty(), "{to}: {p}");
        }
    }
}

#[test]
fn scenario_what_a_weather_file_is_told_and_answered_all_the_same() {
    let cases: &[Case] = &[
        ("# wind height: 10 m\n", "", "wind-height", None, "the wind is taken as measured at 10 m"),
        ("20,11,3", "20,-999,3", "no-reading", Some(3), "1 cell(s) such as -999"),
        ("20,11,3", "20,-999,3", "weather-lacking", Some(3), "1 row(s) lack the air"),
        ("20,11,3", "20,22,3", "dew-above-air", Some(3), "a dew point over 1 C above the air"),
        ("2026-07-02", "2026-07-01", "weather-twice", Some(4), "repeat a moment; the last of each"),
        ("2026-07-02", "2026-07-01", "weather-gap", None, "1 day(s) between the first and the last"),
        ("cloud_percent", "wind_gust", "column-unused", Some(2), "columns not used: wind_gust"),
        (
            "cloud_percent",
            "humidity_percent",
            "damp-twice",
            Some(2),
            "the dew point is taken, not the humidity",
        ),
    ];
    for (from, to, kind, line, words) in cases {
        let (weather, problems) = read(&DAYS.replacen(from, to, 1));
        assert!(weather.is_some(), "{to}: {:#?}", said(&problems));
        let found =
            problems.iter().find(|p| p.kind == *kind).unwrap_or_else(|| panic!("{kind}: {problems:#?}"));
        assert!(line.is_none() || found.place.line == *line, "{found}");
        assert!(found.to_string().contains(words), "{found}");
    }
}

#[test]
fn scenario_weather_without_a_latitude() {
    let nowhere = site(&SOUND.replace(", latitude: 44.1", ""), "site.yaml").site.unwrap();
    let (weather, problems) = gatemix::files::weather::weather(&source(HOURS), &nowhere);
    assert!(weather.is_none());
    let refused = said(&problems);
    let cure = "give `place: { latitude: 44.1 }`, or radiation";
    assert!(refused.iter().any(|s| s.starts_with("weather.csv:4: refused: the sun") && s.ends_with(cure)));
    assert_eq!(problems.iter().filter(|p| p.kind == "no-latitude").count(), 1);
    // with radiation it can be answered, and cloud that nothing tells is assumed
    let (weather, problems) = gatemix::files::weather::weather(&source(DAYS), &nowhere);
    assert!(weather.is_some());
    assert!(problems.iter().any(|p| p.kind == "cloud-assumed" && p.place.line == Some(4)));
}

#[test]
fn scenario_daily_columns_by_the_hour_and_rows_without_end() {
    let sunny = HOURS.replace("cloud_tenths", "sunshine_h");
    let (_, problems) = read(&sunny);
    assert!(problems.iter().any(|p| p.kind == "daily-column" && p.place.line == Some(3)), "{problems:#?}");
    // humidity that no sensor of sound mind gives
    let (_, problems) = read(&HOURS.replace(";60;", ";0;"));
    assert!(problems.iter().any(|p| p.kind == "humidity" && p.place.line == Some(4)), "{problems:#?}");
    let blank = "# wind height: 2 m\ndate,air_C,dew_point_C,wind_m_s,cloud_percent\n2026-07-01,20,,,\n";
    let (weather, problems) = read(blank);
    assert!(weather.is_none() && problems.iter().any(|p| p.kind == "no-weather"), "{problems:#?}");
    let many: String = (0..500).map(|_| "2026-07-01,900,1,1,1\n").collect();
    let (_, problems) = read(&format!("date,air_C,dew_point_C,wind_m_s,cloud_percent\n{many}"));
    assert!(problems.len() < 110, "{}", problems.len());
    assert!(problems.iter().any(|p| p.to_string().contains("not shown: 400")), "{problems:#?}");
}

proptest! {
    #![proptest_config(super::laws::config())]

    #[test]
    fn law_a_damaged_weather_file_never_gives_a_figure_that_is_not_finite(
        daily in any::<bool>(), at in 0_usize..400, with in "[-0-9.,;:#\u{0}\u{1b}éNaN\n TZ]{0,6}", gone in 0_usize..12,
    ) {
        let text = if daily { DAYS } else { HOURS };
        let at = at % text.len();
        let end = (at + gone).min(text.len());
        let damaged = format!("{}{with}{}", &text[..at], &text[end..]);
        let Ok(source) = read_from("weather.csv", damaged.as_bytes(), Format::Csv) else { return Ok(()) };
        let (weather, problems) = weather(&source, &sound());
        prop_assert_eq!(weather.is_none(), any_refused(&problems));
        let lines = damaged.split(['\n', '\r']).count();
        for problem in &problems {
            prop_assert!(problem.place.line.is_none_or(|line| (1..=lines).contains(&line)), "{problem}");
            prop_assert!(problem.to_string().chars().all(|c| !c.is_control()));
        }
        for air in weather.iter().flat_map(|w| w.hours.values().chain(w.days.values())) {
            let figures = [air.temperature_c, air.dew_point_c, air.wind_m_s, air.cloud, air.solar_w_m2];
            prop_assert!(figures.iter().all(|f| f.is_finite()), "{air:?}");
            prop_assert!((0.0..=1.0).contains(&air.cloud) && air.solar_w_m2 >= 0.0 && air.wind_m_s >= 0.0);
        }
    }
}
