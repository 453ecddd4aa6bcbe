//! The season of a site file: one change and the one thing said of it, and what a sound one becomes.

use gatemix::files::site::site;
use gatemix::problem::Weight;
use gatemix::site::{SeasonInputs, Site, Strategy};
use gatemix::target::YearDay;
use gatemix::water::extinction_per_m;

use super::said;
use super::site::Case;

const DAM: &str = r#"name: Test Dam (invented)
units: { temperature: C }
utc_offset: "-07:00"
place: { altitude: 410, latitude: 44.1 }
pool: { bed: 0, full: 62, table: [[0, 0], [62, 9.0e6]] }
outlets: [ { name: A, centre: 3, height: 1, width: 1 } ]
river:
  weather: weather.csv
  reaches: [ { name: Upper, length_km: 20, width: 40, depth: 1.5, slope: 0.001 } ]
  points: [ { name: Mill Bridge, at_km: 18 } ]
season:
  strategy: thrift
  decide_days: 5
  layer: 1.5
  secchi: 3.4
  wind_share: 15
  diffusion: 2
  oxygen_demand: { water: 0.1, bed: 0.8 }
  transfer_m_per_day: 0.6
  inflow_takes_in: 30
  evaporation: false
  weather: weather.csv
  monthly: { air: 12, humidity: 70, wind: 2.5, cloud: 50 }
  years: years.csv
  cases: [ { name: hot, air: +3, wind: 110%, inflow: 80%, inflow_temperature: 1.5 }, { name: plain } ]
  reserves: [ { from: 08-01, colder_than: 12, volume: 2.0e6 } ]
  stages: [ { name: eggs, point: Mill Bridge, from: 10-15, base: 1, at: { hatch: 450, emergence: 900 } } ]
"#;

/// Tried by the ratchet of all kinds of a site's problems.
pub(super) const REFUSED: &[Case] = &[
    ("strategy: thrift", "strategy: greedy", "strategy", "season.strategy", "`greedy` is not a strategy"),
    ("decide_days: 5", "decide_days: 0", "season", "season.decide_days", "must be 1 to 366"),
    ("decide_days: 5", "decide_days: 2.5", "whole-number", "season.decide_days", "not a whole number"),
    ("layer: 1.5", "layer: 40", "season", "season.layer", "lies outside"),
    ("secchi: 3.4", "secchi: 0", "season", "season.secchi", "lies outside"),
    ("secchi: 3.4", "secchi: 3.4\n  light_per_m: 0.5", "season", "season.secchi", "both tell the light"),
    ("secchi: 3.4", "light_per_m: 90", "season", "season.light_per_m", "lies outside 0.02 to 20 per m"),
    ("wind_share: 15", "wind_share: 250", "season", "season.wind_share", "lies outside 0 to 200 %"),
    ("diffusion: 2", "diffusion: -1", "season", "season.diffusion", "lies outside 0 to 100"),
    (
        "water: 0.1",
        "water: -0.1",
        "season",
        "season.oxygen_demand.water",
        "lies outside 0 to 10 mg/L per day",
    ),
    ("bed: 0.8", "bed: 80", "season", "season.oxygen_demand.bed", "lies outside 0 to 20 g/m2 per day"),
    ("day: 0.6", "day: -1", "season", "season.transfer_m_per_day", "lies outside 0 to 20 m per day"),
    ("takes_in: 30", "takes_in: 900", "season", "season.inflow_takes_in", "lies outside 0 to 500 %"),
    (
        "evaporation: false",
        "evaporation: no way",
        "wrong-type",
        "season.evaporation",
        "must be true or false",
    ),
    (
        "  weather: weather.csv\n  monthly",
        "  weather: other.csv\n  monthly",
        "season",
        "season.weather",
        "one weather",
    ),
    ("humidity: 70", "humidity: 170", "share", "season.monthly.humidity", "outside 0 to 100 %"),
    ("humidity: 70, ", "", "damp", "season.monthly", "neither humidity nor dew_point"),
    ("air: +3", "air: +30", "season", "season.cases[0].air", "no case shifts air by more than"),
    ("temperature: 1.5", "temperature: 40", "season", "season.cases[0].inflow_temperature", "no case shifts"),
    ("wind: 110%", "wind: -5%", "season", "season.cases[0].wind", "lies outside 0 to 1000 %"),
    ("inflow: 80%", "inflow: 80 C", "quantity", "season.cases[0].inflow", "unit of temperature"),
    ("name: plain", "name: hot", "name-twice", "season.cases[1].name", "already used by another case"),
    ("name: plain", "name: \" \"", "name", "season.cases[1].name", "names no case"),
    ("from: 08-01", "from: 31-08", "date", "season.reserves[0].from", "`31-08` is not a day of the year"),
    ("volume: 2.0e6", "volume: 0", "not-positive", "season.reserves[0].volume", "above zero"),
    ("point: Mill Bridge, from", "point: Weir, from", "unknown-point", "season.stages[0].point", "`Weir`"),
    ("from: 10-15", "from: autumn", "date", "season.stages[0].from", "`autumn` is not a day"),
    ("emergence: 900", "emergence: 400", "season", "season.stages[0].at", "rise from one to the next"),
    ("{ hatch: 450, emergence: 900 }", "{}", "season", "season.stages[0].at", "need degree-days above zero"),
    ("strategy: thrift", "strategie: thrift", "unknown-key", "season.strategie", "unknown key"),
];

fn dam(text: &str) -> Site {
    let read = site(text, "site.yaml");
    read.site.unwrap_or_else(|| panic!("{:#?}", said(&read.problems)))
}

#[test]
fn scenario_what_is_wrong_with_a_season_is_said_at_its_key_and_nothing_else_is() {
    for (from, to, kind, path, words) in REFUSED {
        let text = DAM.replacen(from, to, 1);
        assert_ne!(text, DAM, "{from}");
        let read = site(&text, "site.yaml");
        let refused: Vec<_> = read.problems.iter().filter(|p| p.weight == Weight::Refused).collect();
        let [found] = &refused[..] else { panic!("{to}: {:#?}", said(&read.problems)) };
        assert_eq!((found.kind, found.place.path.as_deref()), (*kind, Some(*path)), "{found}");
        assert!(found.words.contains(words) && found.place.line.is_some(), "{found}");
        assert!(read.site.is_none() && (!found.cure.is_empty() || *kind == "quantity"), "{found}");
    }
    let none = "cases: []\n  reserves";
    let start = DAM.find("cases:").unwrap();
    let end = DAM.find("reserves").unwrap() + "reserves".len();
    let read = site(&format!("{}{none}{}", &DAM[..start], &DAM[end..]), "site.yaml");
    assert!(read.problems.iter().any(|p| p.words == "there is no case"), "{:#?}", said(&read.problems));
}

#[test]
fn scenario_a_sound_season_is_kept_and_what_is_left_out_is_as_usual() {
    let season = dam(DAM).season;
    assert_eq!((season.strategy, season.decide_days, season.layer_m), (Strategy::Thrift, 5, 1.5));
    assert!((season.knobs.light_per_m - extinction_per_m(3.4)).abs() < 1e-12);
    assert!((season.knobs.light_per_m - 0.5).abs() < 1e-12);
    assert_eq!((season.knobs.wind, season.knobs.diffusion, season.inflow_takes_in), (0.15, 2.0, 0.3));
    assert_eq!((season.knobs.water_demand_mg_l_day, season.knobs.bed_demand_g_m2_day), (0.1, 0.8));
    assert_eq!((season.evaporates, season.transfer_m_day), (false, 0.6));
    assert_eq!(
        (season.weather.as_deref(), season.years.as_deref()),
        (Some("weather.csv"), Some("years.csv"))
    );
    assert!((season.monthly.unwrap()[6].temperature_c - 12.0).abs() < 1e-12);
    let [hot, plain] = &season.cases[..] else { panic!("{:?}", season.cases) };
    assert_eq!((hot.air_c, hot.wind, hot.inflow, hot.inflow_c), (3.0, 1.1, 0.8, 1.5));
    assert_eq!((plain.air_c, plain.wind, plain.inflow, plain.inflow_c), (0.0, 1.0, 1.0, 0.0));
    assert_eq!(season.reserves[0].from, YearDay { month: 8, day: 1 });
    assert_eq!((season.reserves[0].colder_c, season.reserves[0].volume_m3), (12.0, 2.0e6));
    assert_eq!((season.stages[0].point.as_str(), season.stages[0].base_c), ("Mill Bridge", 1.0));
    assert_eq!(season.stages[0].at, [("hatch".to_owned(), 450.0), ("emergence".to_owned(), 900.0)]);
    let bare = &DAM[..DAM.find("season:").unwrap()];
    assert_eq!(dam(bare).season, SeasonInputs::default());
}

#[test]
fn scenario_steps_and_degree_days_follow_the_degrees_of_the_folder() {
    let season = dam(&DAM.replacen("temperature: C", "temperature: F", 1)).season;
    assert!((season.cases[0].air_c - 3.0 / 1.8).abs() < 1e-12);
    assert!((season.stages[0].at[0].1 - 450.0 / 1.8).abs() < 1e-9);
    assert!((season.reserves[0].colder_c - (12.0 - 32.0) / 1.8).abs() < 1e-9);
}

#[test]
fn scenario_the_months_of_the_river_stand_for_those_of_the_season() {
    let own = DAM.find("  monthly:").unwrap();
    let own = &DAM[own..DAM.find("  years:").unwrap()];
    let text =
        DAM.replacen(own, "", 1).replacen("river:\n", &format!("river:\n{}", own.replace("12", "9")), 1);
    assert!((dam(&text).season.monthly.unwrap()[0].temperature_c - 9.0).abs() < 1e-12);
    // a mistake in them is told once, at the river
    let read = site(&text.replacen("humidity: 70", "humidity: 170", 1), "site.yaml");
    let refused: Vec<_> = read.problems.iter().filter(|p| p.weight == Weight::Refused).collect();
    assert_eq!(refused.len(), 1, "{:#?}", said(&read.problems));
}

/// Flagged, and answered all the same.
pub(super) const FLAGGED: &[Case] = &[
    ("share: 15", "share: 0.2", "share-small", "season.wind_share", "where 0.2 of one is meant write 20 %"),
    (
        "takes_in: 30",
        "takes_in: 0.3",
        "share-small",
        "season.inflow_takes_in",
        "0.3 % is hardly any; it is read in",
    ),
    (
        "wind: 110%",
        "wind: 1.1",
        "share-small",
        "season.cases[0].wind",
        "where 1.1 of one is meant write 110 %",
    ),
    (
        "inflow: 80%",
        "inflow: 0.8",
        "share-small",
        "season.cases[0].inflow",
        "where 0.8 of one is meant write 80 %",
    ),
];

#[test]
fn scenario_a_share_that_reads_like_a_part_of_one_is_flagged_in_percent() {
    for (from, to, kind, path, words) in FLAGGED {
        let read = site(&DAM.replacen(from, to, 1), "site.yaml");
        let [found] = &read.problems[..] else { panic!("{to}: {:#?}", said(&read.problems)) };
        assert_eq!(
            (found.weight, found.kind, found.place.path.as_deref()),
            (Weight::Flag, *kind, Some(*path))
        );
        assert!(found.to_string().contains(words), "{found}");
        assert!(found.place.line.is_some() && read.site.is_some(), "{found}");
    }
    for to in ["share: 0", "share: 1", "share: 5"] {
        let read = site(&DAM.replacen("share: 15", to, 1), "site.yaml");
        assert!(read.problems.is_empty(), "{to}: {:#?}", said(&read.problems));
    }
}
