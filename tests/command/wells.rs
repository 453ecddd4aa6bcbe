//! Gates that share a well: openings and totals on the command line, and what is said of the wells.

use serde_json::Value;

use crate::{CAST, Folder, run, with};

/// Two wells whose gates stand side by side, with stacked leaves and a sluice. The head that the wells may bear is
/// that of about 30 m3/s through one gate.
pub(crate) const SITE: &str = r#"name: Twin Dam (invented)
demonstration: true
units: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }
utc_offset: "-07:00"
place: { altitude: 410, latitude: 44.1 }
pool:
  bed: 0
  full: 62
  table: [[0, 0, 0], [20, 2.0e6, 2.0e7], [40, 5.0e6, 9.0e7], [62, 9.0e6, 2.44e8]]
wells:
  - { name: North, conduit: 2, max_open: 2, max_head_loss: 0.5, max_flow: 90 }
  - { name: South, conduit: 2, max_open: 2, max_head_loss: 0.5, max_flow: 90 }
outlets:
  - { name: N1, well: North, centre: 45, height: 3, width: 4, loss: 1.5, positions: [0, 50, 100], min_submergence: 4, flow: { min: 2, max: 80 } }
  - { name: N3, well: North, centre: 30, height: 3, width: 4, loss: 1.5, positions: [0, 50, 100], min_submergence: 4, flow: { max: 80 } }
  - { name: S1, well: South, centre: 45, height: 3, width: 4, loss: 1.5, min_submergence: 4, flow: { max: 80 } }
  - { name: S2, well: South, centre: 30, height: 3, width: 4, loss: 1.5, min_submergence: 4, flow: { max: 80 } }
  - { name: Leaves, kind: crest, gated: true, centre: 52, width: 6, positions: [ { name: two leaves, crest: 56 }, { name: no leaves, crest: 52 } ] }
  - { name: Sluice, centre: 8, height: 2, width: 2, discharge: 0.7, flow: { max: 400 } }
now: { N1: 10 }
targets:
  - { name: holding, low: 9, high: 14, source: "example only" }
"#;

pub(crate) fn folder(site: &str) -> Folder {
    Folder::new(site, &[("a.csv", CAST.as_bytes())])
}

/// JSON of `mix` on a site, its words split at blanks.
pub(crate) fn mix(site: &str, words: &str) -> Value {
    let folder = folder(site);
    let words: Vec<&str> = words.split(' ').collect();
    run(&[&["mix", folder.named(), "--json"], &words[..]].concat()).json()
}

fn said<'a>(answer: &'a Value, kind: &str) -> Option<&'a str> {
    answer["warnings"].as_array().unwrap().iter().find(|w| w["kind"] == kind)?["text"].as_str()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

#[test]
fn scenario_the_well_decides_what_its_openings_pass() {
    let one = mix(SITE, "--open N1=50% --release 40cfs");
    assert_eq!(one["open"], serde_json::json!({ "N1": 50.0 }));
    // all of the release, to the last digit
    let release = number(&one["release"]["flow_m3s"]);
    assert!((release - 40.0 * 0.028_316_846_592).abs() < 1e-12, "{release}");
    assert_eq!(one["set"]["N1"], one["release"]["flow_m3s"]);
    assert_eq!(one["wells"].as_array().unwrap().len(), 1);

    let two = mix(SITE, "--set North=25 --open N1=100% --open N3=50%");
    let [upper, lower] = ["N1", "N3"].map(|gate| number(&two["set"][gate]));
    assert!((upper + lower - 25.0).abs() < 1e-9);
    // twice the area, against denser water in the shaft than its own
    assert!(upper > lower && upper < 2.0 * lower, "{upper} and {lower}");
    assert_eq!(two["wells"][0]["split"], two["set"]);
    assert_eq!(two["wells"][0]["settled"], true);

    let both = mix(SITE, "--set North=25 --set South=10 --open N1=100% --open S2=50% --set Sluice=5");
    assert_eq!(both["set"], serde_json::json!({ "N1": 25.0, "S2": 10.0, "Sluice": 5.0 }));
    let names: Vec<&Value> = both["wells"].as_array().unwrap().iter().map(|w| &w["name"]).collect();
    assert_eq!(names, ["North", "South"]);
    assert!(said(&both, "opening-assumed").unwrap().ends_with(": Sluice"));
    // K Q^2/(2 g A^2) at the only gates, and more at a shut one below
    for (well, flow, area) in [(0, 25.0, 12.0_f64), (1, 10.0, 6.0)] {
        let head = number(&both["wells"][well]["head_m"]);
        let least = 1.5 * flow * flow / (2.0 * 9.80665 * area * area);
        assert!(head >= least * (1.0 - 1e-9) && head < least + 0.05, "{head} against {least}");
    }
}

#[test]
fn scenario_an_opening_on_no_well_passes_what_the_pool_drives_through_it() {
    // it opens from its sill at 7 m: half open its centre stands at 7.5 m
    let sluice = mix(SITE, "--open Sluice=50%");
    let flow = 0.7 * 2.0 * (2.0 * 9.80665 * 52.5_f64).sqrt();
    assert!((number(&sluice["set"]["Sluice"]) - flow).abs() < 1e-9);
    assert!(said(&sluice, "flow-computed").unwrap().ends_with("at this pool: Sluice"));
    assert_eq!(said(&sluice, "opening-assumed"), None);
    // 1.84 L h^1.5 over the crest of the position that is named
    let leaves = folder(SITE);
    let arguments = ["mix", leaves.named(), "--json", "--open", "Leaves=two leaves"];
    let leaves = run(&arguments).json();
    assert!((number(&leaves["set"]["Leaves"]) - 1.84 * 6.0 * 8.0).abs() < 1e-9, "{}", leaves["set"]);
    assert_eq!(leaves["levels"][0]["elevation_m"], 56.0);
    assert_eq!(leaves["open"]["Leaves"], 50.0);
    // its greatest flow still stands
    let capped = with(SITE, "flow: { max: 400 }", "flow: { max: 40 }");
    let run = run(&["mix", folder(&capped).named(), "--open", "Sluice=50%"]);
    assert!(run.failed_with(3).contains("above its capacity of 40.00 m3/s"), "{}", run.err);
}

#[test]
fn scenario_openings_that_cannot_be_understood_exit_2() {
    let folder = folder(SITE);
    for (words, phrase) in [
        ("--set N1=5 --open N1=50%", "`N1` is given a flow and an opening"),
        ("--set Sluice=5 --open Sluice=50%", "`Sluice` is given a flow and an opening"),
        ("--set Leaves=5 --open Leaves=50%", "`Leaves` is given a flow and an opening"),
        ("--open N1=50%", "`North` has an open gate and no total; give what it is to carry (--set North=30"),
        ("--open N1=50% --set South=5", "`North` has an open gate and no total"),
        ("--set North=25", "`North` is given a total and none of its gates is open"),
        ("--set North=25 --open N1=0%", "none of its gates is open"),
        ("--set North=25 --set N1=5", "`North` is given a total and N1 a flow"),
        ("--set N1=5 --open N3=50%", "N1 is given a flow and another gate an opening"),
        ("--release 40", "--release stands for the total of a well only where one well"),
        (
            "--open N1=50% --open S1=50% --release 40",
            "give gates with --open, and each well's total with --set",
        ),
        ("--open N1=50% --set Sluice=5 --release 40", "each well's total with --set"),
        ("--open N1=50% --open Sluice=5% --release 40", "each well's total with --set"),
        ("--open N1=50% --set North=5 --release 40", "each well's total with --set"),
        ("--open Sluice=50% --release 40", "each well's total with --set"),
        ("--open N1=50% --release=-4", "cannot be negative"),
        ("--open N1=50% --release 40ft", "unit of length, not of flow"),
        ("--open N1=101% --release 4", "between 0 and 100 %"),
        ("--open N1=-1% --release 4", "between 0 and 100 %"),
        ("--open N1 --release 4", "give an opening, such as N1=50%"),
        ("--open N1=half --release 4", "not a number"),
        ("--open Leaves=three", "or two leaves, no leaves"),
        ("--open N1=50% --open N1=50% --release 4", "opened twice"),
        ("--open North=50%", "`North` is a well; open its gates"),
        ("--open N9=50%", "there are N1, N3, S1, S2, Leaves, Sluice, and the wells North, South"),
        ("--set North", "give its total, such as North=30"),
        ("--set North=5 --set North=6", "set twice"),
    ] {
        let arguments: Vec<&str> = ["mix", folder.named()].into_iter().chain(words.split(' ')).collect();
        let run = run(&arguments);
        assert!(run.failed_with(2).contains(phrase), "{words}: {}", run.err);
    }
    let twice = ["mix", folder.named(), "--open", "N1=50%", "--release", "4", "--release", "5"];
    assert_eq!(run(&twice).code, Some(2));
}

#[test]
fn scenario_openings_that_give_no_answer_exit_3() {
    let folder = folder(SITE);
    for (words, phrase) in [
        ("--open N1=100% --release 4 --pool 44", "`N1` at 45.00 m is dry"),
        ("--open N1=100% --release 81", "above its capacity of 80.00 m3/s"),
        ("--open N1=100% --release 1e30", "no well passes"),
        ("--open N1=100% --release 0", "nothing flows"),
        ("--open Sluice=0%", "nothing flows"),
    ] {
        let arguments: Vec<&str> = ["mix", folder.named()].into_iter().chain(words.split(' ')).collect();
        let run = run(&arguments);
        assert!(run.failed_with(3).contains(phrase), "{words}: {}", run.err);
    }
    let crest = with(
        SITE,
        "kind: crest, gated: true, centre: 52, width: 6, positions: [ { name: two leaves, crest: 56 }, { name: no leaves, crest: 52 } ]",
        "kind: crest, centre: 52, width: 6",
    );
    let ungated = Folder::new(&crest, &[("a.csv", CAST.as_bytes())]);
    let run_at = |site: &Folder, opening: &str| run(&["mix", site.named(), "--open", opening]);
    assert!(run_at(&ungated, "Leaves=40%").failed_with(3).contains("has no gates: it cannot stand at 40 %"));
    assert_eq!(run_at(&ungated, "Leaves=100%").code, Some(0));
    let gated = with(&crest, "kind: crest,", "kind: crest, gated: true,");
    let gated = Folder::new(&gated, &[("a.csv", CAST.as_bytes())]);
    assert!(run_at(&gated, "Leaves=40%").failed_with(3).contains("at 40 % is not computed"));
}

#[test]
fn scenario_an_opening_beside_the_positions_is_answered_with_a_flag() {
    let odd = mix(SITE, "--open N1=30% --release 10");
    assert!(
        said(&odd, "not-a-position").unwrap().starts_with("N1: 30 % is none of its positions (0 %, 50 %")
    );
    assert_eq!(odd["open"]["N1"], 30.0);
    // a position, and a gate without any
    for words in ["--open N1=50% --release 10", "--open S1=30% --release 10"] {
        assert_eq!(said(&mix(SITE, words), "not-a-position"), None, "{words}");
    }
}

#[test]
fn scenario_flows_that_their_well_would_not_share_so_are_told() {
    let split = mix(SITE, "--set North=40 --open N1=100% --open N3=100%");
    let [upper, lower] = ["N1", "N3"].map(|gate| number(&split["set"][gate]));
    let given = mix(SITE, "--set N1=30 --set N3=10");
    assert_eq!(given["set"], serde_json::json!({ "N1": 30.0, "N3": 10.0 }));
    let words = format!("well North at 40.0 m3/s would pass N1 {upper:.1} m3/s, N3 {lower:.1} m3/s");
    assert!(said(&given, "split-differs").unwrap().starts_with(&words), "{words}: {given}");
    assert!(said(&given, "opening-assumed").unwrap().ends_with("N1, N3"));
    // the state of the well is that of its own split
    assert_eq!(given["wells"][0]["split"], split["set"]);
    assert_eq!(given["wells"][0]["head_m"], split["wells"][0]["head_m"]);
    for near in [0.0, 0.019 * 40.0, -0.019 * 40.0, 0.021 * 40.0] {
        let words = format!("--set N1={} --set N3={}", upper + near, lower - near);
        assert_eq!(said(&mix(SITE, &words), "split-differs").is_some(), near > 0.02 * 40.0, "{near}");
    }
    // what one gate passes is not for the well to decide
    for words in ["--set N1=30", "--set N1=3", "--set N1=30 --set S2=10", "--set N1=30 --set N3=0"] {
        assert_eq!(said(&mix(SITE, words), "split-differs"), None, "{words}");
    }
}

#[test]
fn scenario_head_over_a_well_is_judged_where_its_losses_are_known() {
    let limits = |answer: &Value| -> Vec<String> {
        let list = answer["warnings"].as_array().unwrap();
        list.iter().filter(|w| w["kind"] == "limit").map(|w| w["text"].to_string()).collect()
    };
    let unchecked = |answer: &Value| {
        answer["not_checked"].as_array().unwrap().contains(&Value::from("max_head_loss of North"))
    };
    // 0.49 m over N1 at 30.4 m3/s in its own water, a little more at the shut gate below it
    let kept = mix(SITE, "--open N1=100% --release 20");
    assert!(limits(&kept).is_empty() && !unchecked(&kept), "{:?}", limits(&kept));
    for missed in [mix(SITE, "--open N1=100% --release 32"), mix(SITE, "--set N1=32")] {
        let head = number(&missed["wells"][0]["head_m"]);
        let words = format!("max_head_loss of well `North`: {head:.2} m of head, 0.50 m allowed");
        assert!(head > 0.5 && limits(&missed)[0].contains(&words), "{:?}", limits(&missed));
        assert!(!unchecked(&missed));
    }
    let text = run(&["mix", folder(SITE).named(), "--open", "N1=100%", "--release", "20"]).out;
    let head = number(&kept["wells"][0]["head_m"]);
    assert!(text.contains(&format!("Well     North 20.0 m3/s, head over it {head:.2} of 0.50 m")), "{text}");
    assert!(text.contains("Set      N1 100 % 20.0 m3/s = 20.0 m3/s in total"), "{text}");
    assert!(text.lines().all(|l| l.chars().count() <= 80), "{text}");

    let unlimited = mix(&with(SITE, "max_head_loss: 0.5, ", ""), "--open N1=100% --release 32");
    assert!(limits(&unlimited).is_empty() && unchecked(&unlimited));
    assert_eq!(unlimited["wells"][0]["max_head_loss_m"], Value::Null);
    assert!(number(&unlimited["wells"][0]["head_m"]) > 0.5);
    let lossless = SITE.replace("loss: 1.5, ", "");
    let lossless = mix(&lossless, "--open N1=100% --release 32");
    assert!(limits(&lossless).is_empty() && unchecked(&lossless));
    assert_eq!(lossless["wells"][0]["head_m"], Value::Null);
}

#[test]
fn scenario_a_loss_that_is_assumed_widens_the_band_and_is_told() {
    let words = "--set North=6 --open N1=100% --open N3=100%";
    let (known, assumed) = (mix(SITE, words), mix(&SITE.replace("loss: 1.5, ", ""), words));
    assert_eq!((said(&known, "assumed-loss"), &known["wells"][0]["assumed_loss"]), (None, &false.into()));
    assert!(said(&assumed, "assumed-loss").unwrap().contains("1.5 is assumed, 0.5 to 3 in the band"));
    assert_eq!(assumed["wells"][0]["assumed_loss"], true);
    // the same middle, as 1.5 is what the site gives
    assert_eq!(known["set"], assumed["set"]);
    let width = |a: &Value| number(&a["release"]["band_c"][1]) - number(&a["release"]["band_c"][0]);
    assert!(width(&assumed) > width(&known) + 0.05, "{} and {}", width(&assumed), width(&known));
    // flows that are given stand, whatever the loss
    let given = mix(&SITE.replace("loss: 1.5, ", ""), "--set N1=3");
    assert_eq!(said(&given, "assumed-loss"), None);
}

#[test]
fn scenario_a_gate_that_density_holds_shut_is_listed_with_nothing() {
    let still = mix(SITE, "--set North=2 --open N1=100% --open N3=100%");
    assert!(said(&still, "blocked").unwrap().starts_with("N1 is open and gives nothing: at 2.0 m3/s"));
    assert_eq!(still["set"]["N1"], 0.0);
    assert_eq!(still["set"]["N3"], 2.0);
    let level = &still["levels"][1];
    assert_eq!((&level["outlets"][0], &level["flow_m3s"]), (&"N1".into(), &0.0.into()));
    assert_eq!((&level["zone"], &level["temperature_c"]), (&Value::Null, &Value::Null));
    // it stands open all the same
    let one = mix(
        &with(SITE, "conduit: 2, max_open: 2", "conduit: 2, max_open: 1"),
        "--set North=2 --open N1=100% --open N3=100%",
    );
    assert!(one.to_string().contains("max_open of well `North`: 2 gates open, 1 allowed"));
    assert_eq!(said(&mix(SITE, "--set North=20 --open N1=100% --open N3=100%"), "blocked"), None);
}

#[test]
fn scenario_a_shallow_opening_in_fast_water_may_draw_air() {
    // 25 m3/s through 12 m2 is 2.08 m/s, times sqrt(3) 3.61: Gordon asks for 1.98 to 2.63 m
    let told = mix(SITE, "--set S1=25 --pool 49");
    assert!(said(&told, "vortex").unwrap().contains("2.5 m of water above it"), "{told}");
    assert!(said(&told, "vortex").unwrap().contains("asks for 2.0 m to 2.6 m"), "{told}");
    for deep in ["--set S1=25 --pool 49.2", "--set S1=23 --pool 49", "--set S1=25"] {
        assert_eq!(said(&mix(SITE, deep), "vortex"), None, "{deep}");
    }
}

#[test]
fn scenario_the_leak_of_a_shut_gate_is_part_of_what_its_well_carries() {
    let leaky = with(
        SITE,
        "name: S2, well: South,",
        "name: S2, well: South, leakage: { flow: 2, head: 0.1, range: [1, 3] },",
    );
    let answer = mix(&leaky, "--open S1=100% --release 20");
    let split = &answer["wells"][0]["split"];
    let [gate, leak] = ["S1", "S2"].map(|name| number(&split[name]));
    assert!(leak > 1.0 && (gate + leak - 20.0).abs() < 1e-9, "{split}");
    assert!((number(&answer["release"]["flow_m3s"]) - 20.0).abs() < 1e-9);
    assert_eq!(answer["set"], serde_json::json!({ "S1": gate }));
    assert!(said(&answer, "leak").unwrap().ends_with("S2"));
}

#[test]
fn scenario_the_setting_now_may_stand_in_openings() {
    let now = with(SITE, "now: { N1: 10 }", "now: { Sluice: 50% }");
    let (shown, told) = (mix(&now, "--set N1=10"), mix(&now, "--open Sluice=50%"));
    assert_eq!(shown["now"]["set"], told["set"]);
    assert_eq!(shown["now"]["open"], serde_json::json!({ "Sluice": 50.0 }));
    assert_eq!(shown["now"]["release"], told["release"]);
    // the setting now is the one tried
    assert_eq!(told["now"], Value::Null);
    assert_eq!(said(&told, "now-not-shown"), None);
    let alone = run(&["mix", folder(&now).named(), "--json"]).json();
    assert_eq!(alone["set"], told["set"]);
    let wells = "now: { North: 25, N1: 100%, N3: 50%, Leaves: two leaves }";
    let shown = mix(&with(SITE, "now: { N1: 10 }", wells), "--set N1=10");
    let told = mix(SITE, "--set North=25 --open N1=100% --open N3=50% --open Leaves=50%");
    assert_eq!((&shown["now"]["set"], &shown["now"]["open"]), (&told["set"], &told["open"]));
    assert_eq!(shown["now"]["release"], told["release"]);
    let unknown = mix(&with(SITE, "now: { N1: 10 }", "now: { N1: 50% }"), "--set N1=10");
    assert!(said(&unknown, "now-not-shown").unwrap().ends_with("(--set North=30; under `now`, North: 30)"));
}

#[test]
fn scenario_openings_alone_are_held_through_the_blocks_of_the_day() {
    let blocks = "blocks: [ { name: peak, hours: 6, flow: 30 }, { name: rest, hours: 18, flow: 8 } ]\n";
    let folder = Folder::new(&format!("{SITE}{blocks}"), &[("a.csv", CAST.as_bytes())]);
    let open = ["--open", "N1=100%"];
    let json = |more: &[&str]| -> serde_json::Value {
        let run = run(&[&["mix", folder.named(), "--json"][..], &open, more].concat());
        serde_json::from_str(&run.out).unwrap_or_else(|e| panic!("{e}: {} {}", run.out, run.err))
    };
    let day = json(&[]);
    let [peak, rest] = ["30", "8"].map(|flow| json(&["--release", flow]));
    let t = |of: &serde_json::Value| of["release"]["temperature_c"].as_f64().unwrap();
    let (warm, cold) = (t(&peak), t(&rest));
    assert!((warm - cold).abs() > 1e-3);
    let near = |found: &serde_json::Value, wanted: f64| {
        assert!((found.as_f64().unwrap() - wanted).abs() < 1e-9, "{found} {wanted}");
    };
    // a gauge sees 6 and 18 hours; heat balances see 6 x 30 and 18 x 8
    near(&day["day"]["time_mean_c"], (6.0 * warm + 18.0 * cold) / 24.0);
    near(&day["day"]["by_flow_c"], (180.0 * warm + 144.0 * cold) / 324.0);
    near(&day["day"]["least_c"], warm.min(cold));
    near(&day["day"]["greatest_c"], warm.max(cold));
    assert_eq!(day["targets"][0]["basis"], "blocks");
    assert!(peak["day"].is_null());
}

#[test]
fn scenario_flows_that_the_well_does_not_make_of_its_gates_are_told_with_the_setting_now() {
    let folder = folder(SITE);
    let rank = |now: &[&str]| -> Value {
        let asked = ["rank", folder.named(), "--release", "25", "--step", "20%", "--top", "1", "--json"];
        run(&[&asked[..], now].concat()).json()
    };
    let told = rank(&["--now", "N1=20", "--now", "N3=5"]);
    let made = mix(SITE, "--set North=25 --open N1=100% --open N3=100%");
    let [n1, n3] = ["N1", "N3"].map(|gate| number(&made["set"][gate]));
    assert!((n1 - 20.0).abs() > 2.0, "the well shares out otherwise: {n1}");
    let split = |answer: &Value| {
        let notes = answer["notes"].as_array().unwrap();
        notes.iter().find(|n| n["kind"] == "now-split").map(|n| n["text"].as_str().unwrap().to_owned())
    };
    let words = split(&told).unwrap();
    let gates = format!("N1 passes {n1:.2} m3/s, not 20.00 m3/s, N3 passes {n3:.2} m3/s, not 5.00 m3/s.");
    assert!(words.contains(&gates), "{gates} {words}");
    // what the well makes is not told of, nor is a gate alone
    for now in [[format!("N1={n1:.3}"), format!("N3={n3:.3}")], ["N1=25".into(), "Sluice=4".into()]] {
        let told = rank(&["--now", &now[0], "--now", &now[1]]);
        assert_eq!(split(&told), None);
    }
}
