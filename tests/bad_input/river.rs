//! The river of a site file: one change and the one thing said of it, and what a sound river becomes.

use approx::assert_abs_diff_eq;
use gatemix::files::site::site;
use gatemix::problem::Weight;
use gatemix::site::{Surface, Yearly};

use super::said;
use super::site::Case;

const DAM: &str = r#"name: Test Dam (invented)
units: {}
utc_offset: "-07:00"
place: { altitude: 410, latitude: 44.1 }
pool: { bed: 0, full: 62, table: [[0, 0], [62, 9.0e6]] }
outlets: [ { name: A, centre: 3, height: 1, width: 1 } ]
targets: [ { name: t, high: 14, point: Mill Bridge } ]
river:
  name: Quillon
  equilibrium: 22
  exchange_w_m2_c: 30
  afterbay: { volume: 400000, area: 120000, mixed: 80 }
  reaches:
    - { name: Upper, length_km: 20, width: 40, depth: 1.5, travel_hours: [[20, 9], [60, 5]], rise_hours: [[20, 4], [60, 2.5]], shade: 15, reaeration_per_day: 2.1, inflows: [ { name: Tansy Creek, at_km: 12, flow: 3, temperature: 14, oxygen: 9 }, { name: Clover Creek, at_km: 4, series: clover.csv } ] }
    - { name: Lower, length_km: 14, width: 45, depth: 1.2, slope: 0.0012, roughness: 0.04, seepage: { flow: 1.5, temperature: 11, oxygen: 6 } }
  points:
    - { name: Mill Bridge, at_km: 18, observed: mill.csv, rating: [[5, 0.4], [20, 0.9]], warning_hours: 1.5 }
    - { name: Weir, at_km: 7 }
  decay: { demand: 3, per_day: 0.2 }
"#;

/// Monthly weather in place of the given equilibrium.
const MONTHLY: &str = "  monthly: { air: 12, humidity: 70, wind: 2.5, wind_height: 9, cloud: 50 }\n";

fn monthly() -> String {
    DAM.replacen("  equilibrium: 22\n  exchange_w_m2_c: 30\n", MONTHLY, 1)
}

/// Tried by the ratchet of all kinds of a site's problems.
pub(super) const REFUSED: &[Case] = &[
    ("length_km: 20", "length_km: 0", "not-positive", "river.reaches[0].length_km", "above zero"),
    ("length_km: 20", "length_km: 20, length: 3 km", "distance", "river.reaches[0]", "both is given"),
    ("length_km: 20, ", "", "distance", "river.reaches[0]", "none is given"),
    ("length_km: 14", "length: 14 m", "quantity", "river.reaches[1].length", "unit of length"),
    ("width: 40", "width: -40", "not-positive", "river.reaches[0].width", "above zero"),
    ("depth: 1.5", "depth: 0", "not-positive", "river.reaches[0].depth", "above zero"),
    ("depth: 1.5, ", "", "missing-key", "river.reaches[0].depth", "depth is missing"),
    ("slope: 0.0012", "slope: 0", "not-positive", "river.reaches[1].slope", "above zero"),
    ("slope: 0.0012, ", "", "travel", "river.reaches[1]", "how long the water takes"),
    ("roughness: 0.04", "roughness: 0", "not-positive", "river.reaches[1].roughness", "above zero"),
    ("per_day: 2.1", "per_day: 0", "not-positive", "river.reaches[0].reaeration_per_day", "above zero"),
    ("shade: 15", "shade: 150", "share", "river.reaches[0].shade", "outside 0 to 100 %"),
    ("[[20, 9], [60, 5]]", "[[60, 5], [20, 9]]", "hours-table", "river.reaches[0].travel_hours", "must rise"),
    ("[[20, 9], [60, 5]]", "[[20, 9], [60, 9.1]]", "hours-table", "river.reaches[0].travel_hours", "slower"),
    ("[[20, 9], [60, 5]]", "[[0, 9], [60, 5]]", "hours-table", "river.reaches[0].travel_hours", "above zero"),
    (
        "[[20, 9], [60, 5]]",
        "[[20, 1e300], [60, 5]]",
        "hours-table",
        "river.reaches[0].travel_hours",
        "100000",
    ),
    ("[[20, 9], [60, 5]]", "[[20, 9, 1]]", "pair", "river.reaches[0].travel_hours[0]", "two numbers"),
    ("[[20, 4], [60, 2.5]]", "[[20, 2], [60, 2.5]]", "hours-table", "river.reaches[0].rise_hours", "slower"),
    (
        "[[20, 4], [60, 2.5]]",
        "[[20, 9.5], [60, 4]]",
        "rise-late",
        "river.reaches[0].rise_hours",
        "later than",
    ),
    // at both of its own rows sooner than the water, and later at the water's row beyond them
    ("[[20, 4], [60, 2.5]]", "[[10, 8.5], [20, 6]]", "rise-late", "river.reaches[0].rise_hours", "60.0 m3/s"),
    ("at_km: 12", "at_km: 21", "outside-river", "river.reaches[0].inflows[0]", "outside its reach"),
    ("at_km: 12", "at_km: -1", "outside-river", "river.reaches[0].inflows[0]", "outside its reach"),
    ("flow: 3, ", "", "stream-figures", "river.reaches[0].inflows[0]", "neither its figures nor a series"),
    ("flow: 3", "flow: -3", "negative", "river.reaches[0].inflows[0].flow", "cannot be negative"),
    ("oxygen: 9", "oxygen: -9", "negative", "river.reaches[0].inflows[0].oxygen", "cannot be negative"),
    (
        "temperature: 14",
        "temperature: 57",
        "stream-temperature",
        "river.reaches[0].inflows[0].temperature",
        "no water",
    ),
    ("flow: 3", "flow: [1, 2, 3]", "months", "river.reaches[0].inflows[0].flow", "a year has 12"),
    ("flow: 1.5", "flow: -1.5", "negative", "river.reaches[1].seepage.flow", "cannot be negative"),
    ("{ flow: 1.5,", "{ flow: ~,", "missing-key", "river.reaches[1].seepage.flow", "left blank"),
    ("name: Lower", "name: Upper", "name-twice", "river.reaches[1].name", "used by river.reaches[0]"),
    ("name: Weir", "name: Mill Bridge", "name-twice", "river.points[1].name", "used by river.points[0]"),
    ("name: Weir", "name: Tansy Creek", "name-twice", "river.reaches[0].inflows[0].name", "river.points[1]"),
    ("name: Weir", "name: dam", "river-name", "river.points[1].name", "the dam itself"),
    ("at_km: 18", "at_km: 34.2", "outside-river", "river.points[0]", "ends at 34.00 km"),
    ("at_km: 7", "at_km: -7", "outside-river", "river.points[1]", "from the dam"),
    ("[[5, 0.4], [20, 0.9]]", "[[5, 0.4], [20, 0.4]]", "stage-rating", "river.points[0].rating", "rising"),
    ("[[5, 0.4], [20, 0.9]]", "[[5, 0.4]]", "stage-rating", "river.points[0].rating", "two rows"),
    (
        "warning_hours: 1.5",
        "max_stage_fall_per_hour: 0",
        "not-positive",
        "river.points[0].max_stage_fall_per_hour",
        "above zero",
    ),
    (
        "rating: [[5, 0.4], [20, 0.9]]",
        "max_stage_fall_per_hour: 0.1",
        "stage-fall",
        "river.points[0].max_stage_fall_per_hour",
        "no rating",
    ),
    ("hours: 1.5", "hours: -1", "negative", "river.points[0].warning_hours", "cannot be negative"),
    ("  exchange_w_m2_c: 30\n", "", "equilibrium", "river.equilibrium", "without its exchange"),
    ("  equilibrium: 22\n", "", "equilibrium", "river.exchange_w_m2_c", "without an equilibrium"),
    ("equilibrium: 22", "equilibrium: 71", "equilibrium", "river.equilibrium", "no equilibrium above"),
    ("equilibrium: 22", "equilibrium: -3", "equilibrium", "river.equilibrium", "below freezing"),
    ("exchange_w_m2_c: 30", "exchange_w_m2_c: 0", "not-positive", "river.exchange_w_m2_c", "above zero"),
    ("volume: 400000", "volume: 0", "not-positive", "river.afterbay.volume", "above zero"),
    ("area: 120000", "area: -1", "not-positive", "river.afterbay.area", "above zero"),
    ("mixed: 80", "mixed: 0", "share", "river.afterbay.mixed", "outside 0 to 100 %"),
    ("demand: 3", "demand: -3", "negative", "river.decay.demand", "cannot be negative"),
    ("per_day: 0.2", "per_day: -1", "negative", "river.decay.per_day", "cannot be negative"),
    ("point: Mill Bridge", "point: Mill", "unknown-point", "targets[0].point", "no point is named `Mill`"),
    ("  name: Quillon\n", "  nmae: Quillon\n", "unknown-key", "river.nmae", "unknown key"),
];

pub(super) const REFUSED_MONTHLY: &[Case] = &[
    ("humidity: 70", "humidity: 70, dew_point: 6", "damp", "river.monthly", "both humidity and dew_point"),
    ("humidity: 70, ", "", "damp", "river.monthly", "neither humidity nor dew_point"),
    ("humidity: 70", "humidity: 170", "share", "river.monthly.humidity", "outside 0 to 100 %"),
    ("cloud: 50", "cloud: 500", "share", "river.monthly.cloud", "outside 0 to 100 %"),
    ("wind: 2.5", "wind: -2.5", "negative", "river.monthly.wind", "cannot be negative"),
    ("wind_height: 9", "wind_height: 0", "not-positive", "river.monthly.wind_height", "above zero"),
    (", cloud: 50", "", "no-sky", "river.monthly", "neither cloud nor sunshine nor radiation"),
    ("air: 12", "air: 80", "weather-range", "river.monthly.air", "outside -60"),
    ("wind: 2.5", "wind: 250", "weather-range", "river.monthly.wind", "above 75"),
    ("cloud: 50", "sunshine_h: 25", "weather-range", "river.monthly.sunshine_h", "above 24 h"),
    ("cloud: 50", "radiation_w_m2: 2000", "weather-range", "river.monthly.radiation_w_m2", "above 1500 W/m2"),
    ("humidity: 70", "dew_point: -300", "weather-range", "river.monthly.dew_point", "outside -60"),
    (", latitude: 44.1", "", "no-latitude", "river.monthly", "latitude is needed"),
    ("air: 12, ", "", "missing-key", "river.monthly.air", "air is missing"),
];

pub(super) const FLAGGED: &[Case] = &[
    ("width: 40", "width: 400", "reach-geometry", "river.reaches[0]", "36.0 m wide at the nearest"),
    ("[[20, 4], [60, 2.5]]", "[[20, 1], [60, 0.9]]", "rise-early", "river.reaches[0].rise_hours", "sooner"),
    ("  equilibrium: 22\n  exchange_w_m2_c: 30\n", "", "no-weather", "river", "trades with the air"),
    ("equilibrium: 22", "equilibrium: 22\n  weather: weather.csv", "weather-twice", "river", "weather file"),
];

/// Of a river under the weather of the months, with radiation, without cloud.
pub(super) const FLAGGED_MONTHLY: &[Case] = &[
    (", latitude: 44.1", "", "cloud-assumed", "river.monthly", "0.5 is assumed"),
    ("humidity: 70", "dew_point: 13.1", "dew-above-air", "river.monthly.dew_point", "over 1 C above its air"),
];

fn changed(sound: &str, from: &str, to: &str) -> String {
    assert_eq!(sound.matches(from).count(), 1, "{from}");
    sound.replacen(from, to, 1)
}

#[test]
fn scenario_each_error_of_a_river_is_told_at_its_place_and_alone() {
    let mut wrong = Vec::new();
    let monthly = monthly();
    for (sound, cases) in [(DAM, REFUSED), (&monthly, REFUSED_MONTHLY)] {
        let read = site(sound, "site.yaml");
        assert!(read.site.is_some() && read.problems.is_empty(), "{:#?}", said(&read.problems));
        for (from, to, kind, path, words) in cases {
            let read = site(&changed(sound, from, to), "site.yaml");
            let refused: Vec<_> = read.problems.iter().filter(|p| p.weight == Weight::Refused).collect();
            let told = refused.iter().any(|p| {
                p.kind == *kind
                    && p.place.path.as_deref() == Some(*path)
                    && p.to_string().contains(words)
                    && p.place.line.is_some()
                    && (!p.cure.is_empty() || p.kind == "quantity")
            });
            if !told || refused.len() > 2 || read.site.is_some() {
                wrong.push(format!("{to} -> {kind} at {path}: {:#?}", said(&read.problems)));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn scenario_what_is_odd_about_a_river_is_flagged_or_noted() {
    let months = changed(&monthly(), "cloud: 50", "radiation_w_m2: 180");
    assert_eq!(said(&site(&months, "site.yaml").problems), Vec::<String>::new());
    let given = FLAGGED.iter().map(|case| (DAM, case));
    for (sound, (from, to, kind, path, words)) in
        given.chain(FLAGGED_MONTHLY.iter().map(|case| (months.as_str(), case)))
    {
        let read = site(&changed(sound, from, to), "site.yaml");
        let told = |p: &gatemix::problem::Problem| {
            p.kind == *kind && p.place.path.as_deref() == Some(*path) && p.to_string().contains(words)
        };
        assert!(read.site.is_some() && read.problems.iter().any(told), "{to}: {:#?}", said(&read.problems));
    }
}

#[test]
fn scenario_a_river_without_a_reach_is_no_river() {
    let reaches = DAM.split_once("  reaches:\n").unwrap().1.split_once("  points:").unwrap().0;
    let problems = site(&changed(DAM, reaches, "    []\n"), "site.yaml").problems;
    assert!(problems.iter().any(|p| p.kind == "no-reach"), "{:#?}", said(&problems));
    // its name alone, either way, is enough
    let (before, _) = DAM.split_once("targets:").unwrap();
    for river in ["river: Quillon\n", "river: { name: Quillon }\n"] {
        let read = site(&format!("{before}{river}"), "site.yaml");
        let site = read.site.unwrap_or_else(|| panic!("{:#?}", said(&read.problems)));
        assert_eq!((site.river_name.as_deref(), site.river), (Some("Quillon"), None));
    }
}

#[test]
fn scenario_a_sound_river_reaches_the_site() {
    let read = site(DAM, "site.yaml").site.unwrap();
    assert_eq!(read.river_name.as_deref(), Some("Quillon"));
    let river = read.river.unwrap();
    let given =
        Surface::Given { equilibrium_c: Yearly::Constant(22.0), exchange_w_m2_c: Yearly::Constant(30.0) };
    assert_eq!(river.surface, Some(given));
    assert_eq!(river.reaches.iter().map(|r| r.from_m).collect::<Vec<_>>(), [0.0, 20_000.0]);
    assert_abs_diff_eq!(river.length_m(), 34_000.0);
    // streams and points stand in the order of the water
    let inflows = river.reaches.iter().flat_map(|r| &r.inflows);
    assert_eq!(inflows.map(|w| w.name.as_str()).collect::<Vec<_>>(), ["Clover Creek", "Tansy Creek"]);
    assert_eq!(river.points.iter().map(|p| p.name.as_str()).collect::<Vec<_>>(), ["Weir", "Mill Bridge"]);
    let bridge = river.points.iter().find(|p| p.name == "Mill Bridge").unwrap();
    assert_eq!((bridge.observed.as_deref(), bridge.warning_h), (Some("mill.csv"), Some(1.5)));
    assert_abs_diff_eq!(bridge.stage_m(12.5).unwrap(), 0.65, epsilon = 1e-12);
    assert_eq!((bridge.stage_m(4.9), bridge.stage_m(20.1)), (None, None));
    assert_eq!((river.reaches[0].shade, river.reaches[1].roughness), (0.15, 0.04));
    assert_eq!(river.afterbay.map(|a| (a.volume_m3, a.area_m2, a.mixed)), Some((4e5, 1.2e5, 0.8)));
    assert_eq!((river.decay.demand_mg_l, river.decay.per_day), (3.0, 0.2));
    // miles and feet in a customary folder
    let feet = DAM
        .replacen("units: {}", "units: { length: ft }", 1)
        .replacen("length_km: 14", "length: 5", 1)
        .replacen("at_km: 7", "at: 2mi", 1);
    let river = site(&feet, "site.yaml").site.unwrap().river.unwrap();
    assert_abs_diff_eq!(river.reaches[1].length_m, 5.0 * 1609.344, epsilon = 1e-9);
    assert_abs_diff_eq!(river.points[0].at_m, 2.0 * 1609.344, epsilon = 1e-9);
    assert_abs_diff_eq!(river.reaches[0].depth_m, 1.5 * 0.3048, epsilon = 1e-12);
}

#[test]
fn scenario_months_become_the_air_over_the_river() {
    let by_month = monthly().replacen("air: 12", "air: [1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12]", 1);
    let river = site(&by_month, "site.yaml").site.unwrap().river.unwrap();
    let Some(Surface::Monthly(airs)) = river.surface else { panic!("{:?}", river.surface) };
    for (i, air) in airs.iter().enumerate() {
        assert_abs_diff_eq!(air.temperature_c, i as f64 + 1.0);
        assert!(air.dew_point_c < air.temperature_c && air.wind_m_s < 2.5, "{air:?}");
    }
    // the sun of a northern site
    assert!(airs[6].solar_w_m2 > 2.0 * airs[0].solar_w_m2);
}
