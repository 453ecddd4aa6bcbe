//! The ranking as a user meets it: the answer as data, held against what `mix` says of the same settings.

use serde_json::Value;

use crate::{CAST, Folder, SITE, program, run, with};

/// The small site, its one target within reach.
fn easy() -> String {
    with(SITE, "oxygen_min: 7", "oxygen_min: 5")
}

fn folder(site: &str) -> Folder {
    Folder::new(site, &[("a.csv", CAST.as_bytes())])
}

fn rank(folder: &Folder, more: &[&str]) -> Value {
    run(&[&["rank", folder.named(), "--json"], more].concat()).json()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

fn list(value: &Value) -> &Vec<Value> {
    value.as_array().unwrap_or_else(|| panic!("{value} is no list"))
}

fn keys(value: &Value) -> Vec<&str> {
    value.as_object().unwrap().keys().map(String::as_str).collect()
}

/// What `mix` makes of a setting given by flows.
fn mixed(folder: &Folder, set: &Value) -> Value {
    let words: Vec<String> =
        set.as_object().unwrap().iter().map(|(gate, flow)| format!("--set={gate}={flow}m3/s")).collect();
    let words: Vec<&str> = words.iter().map(String::as_str).collect();
    run(&[&["mix", folder.named(), "--json"], &words[..]].concat()).json()
}

fn near(a: &Value, b: &Value, within: f64) {
    assert!((number(a) - number(b)).abs() < within, "{a} and {b}");
}

#[test]
fn scenario_the_demonstration_answers_with_every_key() {
    let answer = run(&["rank", "ashlar", "--json"]);
    assert_eq!(answer.err, "", "nothing of its progress enters a pipe");
    let answer = answer.json();
    for key in [
        "site release_asked step order bins without mixes now rejected examined judged skipped allowed",
        "attainable_c attainable_oxygen_mg_l largest_difference_c largest_difference_mg_l trade lost",
        "preferred_split least_release pocket nothing_fits notes caution fingerprint profile on",
    ]
    .iter()
    .flat_map(|line| line.split(' '))
    {
        assert!(keys(&answer).contains(&key), "{key}");
    }
    let of_mix: Vec<&str> =
        "set open release targets conflicts points cold_water_m3_per_day moves moved crew_hours move_cost \
         lead_days earliest generation_lost_mw share_inside_both governs limits warnings not_checked unsure \
         reasons alike wells"
            .split_whitespace()
            .collect();
    assert_eq!(list(&answer["mixes"]).len(), 10);
    for mix in list(&answer["mixes"]).iter().chain([&answer["now"]]) {
        assert_eq!(keys(mix).iter().filter(|k| of_mix.contains(k)).count(), of_mix.len(), "{:?}", keys(mix));
        assert_eq!(keys(mix).len(), of_mix.len(), "a steady day has no blocks");
        for key in ["flow_m3s", "temperature_c", "time_mean_c", "by_flow_c", "band_c", "oxygen_mg_l"] {
            assert!(!mix["release"][key].is_null(), "{key}");
        }
        assert_eq!(mix["targets"][0]["basis"], "steady");
        assert!(list(&mix["limits"]).iter().all(|l| keys(l).len() == 7 && l["room"] != 0.1));
    }
    let count = |key: &str| answer[key].as_u64().unwrap();
    assert_eq!(count("examined"), count("judged") + count("skipped"));
    assert!(count("allowed") > 10 && count("allowed") <= count("examined"));
    assert_eq!(answer["release_asked"]["from"], "release.wanted in the site file");
    let outage = list(&answer["rejected"]).iter().find(|r| r["rule"] == "outage").unwrap();
    assert_eq!((&outage["outlet"], &outage["possible_from"]), (&"S5".into(), &"2026-10-01".into()));
    assert_eq!((&outage["margin"], &outage["unit"]), (&(-79.0).into(), &"days".into()));
    let three = rank_of_demonstration(&["--top", "3"]);
    assert_eq!(list(&three["mixes"])[..], list(&answer["mixes"])[..3]);
}

fn rank_of_demonstration(more: &[&str]) -> Value {
    run(&[&["rank", "ashlar", "--json"], more].concat()).json()
}

/// On however many threads.
#[test]
fn unchanged_the_same_inputs_give_the_same_bytes() {
    let on = |threads: &str| {
        let output = program().args(["rank", "ashlar", "--json"]).env("RAYON_NUM_THREADS", threads).output();
        output.unwrap().stdout
    };
    let one = on("1");
    assert!(one.len() > 10_000);
    assert!(one == on("2") && one == on("2"), "the answer depends on the threads");
}

#[test]
fn law_mix_says_the_same_of_every_mix_ranked() {
    let folder = folder(&easy());
    let answer = rank(&folder, &[]);
    assert!(list(&answer["mixes"]).len() >= 2);
    for ranked in list(&answer["mixes"]).iter().chain([&answer["now"]]) {
        let alone = mixed(&folder, &ranked["set"]);
        for key in ["temperature_c", "oxygen_mg_l", "flow_m3s"] {
            near(&alone["release"][key], &ranked["release"][key], 1e-9);
        }
        for (key, end) in [("band_c", 0), ("band_c", 1), ("band_oxygen_mg_l", 0)] {
            near(&alone["release"][key][end], &ranked["release"][key][end], 1e-9);
        }
        for key in ["standing", "by_c", "share_inside_both", "governs"] {
            assert_eq!(alone["targets"][0][key], ranked["targets"][0][key], "{key}");
        }
        let moves = |v: &Value| v["moves"].as_u64().unwrap_or(0);
        assert_eq!(moves(&alone), moves(ranked));
    }
}

#[test]
fn scenario_the_setting_now_stands_in_the_list_with_what_a_change_takes() {
    let crew = with(&easy(), "flow: { max: 40 }", "flow: { max: 40 }, crew: { hours: 2, lead_days: 3 }");
    let answer = rank(&folder(&crew), &[]);
    assert_eq!(answer["now"]["set"], serde_json::json!({ "N1": 30.0, "Sluice": 5.0 }));
    assert_eq!((&answer["now"]["moves"], &answer["now"]["earliest"]), (&0.into(), &Value::Null));
    let shut = list(&answer["mixes"]).iter().find(|m| m["set"].get("Sluice").is_none()).unwrap();
    assert_eq!((&shut["moves"], &shut["crew_hours"]), (&2.into(), &2.0.into()));
    assert_eq!((&shut["lead_days"], &shut["earliest"]), (&3.0.into(), &"2025-07-17".into()));
    let sluice = list(&shut["moved"]).iter().find(|m| m["outlet"] == "Sluice").unwrap();
    assert_eq!((&sluice["from_m3s"], &sluice["to_open"]), (&5.0.into(), &0.0.into()));
    let typed = rank(&folder(&crew), &["--now", "N1=20", "--now", "Sluice=15"]);
    assert_eq!(typed["now"]["set"], serde_json::json!({ "N1": 20.0, "Sluice": 15.0 }));
}

#[test]
fn scenario_without_a_setting_now_moves_are_null_and_it_is_said() {
    let rates = "limits: { max_flow_change_per_hour: 1 }\ncold_water:";
    let bare = with(&with(&easy(), "now: { N1: 30, Sluice: 5 }\n", ""), "cold_water:", rates);
    let folder = folder(&bare);
    let answer = rank(&folder, &["--release", "35"]);
    assert!(answer["now"].is_null());
    let best = &answer["mixes"][0];
    for key in ["moves", "moved", "crew_hours", "move_cost", "lead_days", "earliest"] {
        assert!(best[key].is_null(), "{key}");
    }
    assert!(list(&best["not_checked"]).contains(&"max_flow_change_per_hour".into()));
    assert!(list(&answer["notes"]).iter().any(|n| n["kind"] == "now-unknown"));
    let text = run(&["rank", folder.named(), "--release", "35"]).out;
    assert!(text.contains("the setting now is not known") && text.contains("% ?\n"), "{text}");
    // nothing says how much is wanted
    assert!(run(&["rank", folder.named()]).failed_with(2).contains("give --release FLOW"));
}

#[test]
fn scenario_another_order_puts_another_mix_first() {
    let site = with(&easy(), "now: { N1: 30, Sluice: 5 }", "now: { N1: 14, Sluice: 21 }");
    let folder = folder(&site);
    let usual = rank(&folder, &[]);
    let still = rank(&folder, &["--order", "moves"]);
    assert_eq!(still["order"], serde_json::json!(["moves", "oxygen", "range", "preferred", "cold_water"]));
    // the setting now is one of the splits at 5 %, and the only mix without a move
    assert_eq!((&still["mixes"][0]["moves"], &usual["mixes"][0]["moves"]), (&0.into(), &2.into()));
    assert!(number(&still["mixes"][0]["targets"][0]["by_c"]) > 0.0, "it pays with the range");
    // some mix keeps every target all the same
    assert!(still["nothing_fits"].is_null() && usual["nothing_fits"].is_null());
    let text = run(&["rank", folder.named(), "--order", "moves"]).out;
    assert!(text.contains("; ordered by moves,\n         oxygen, range"), "{text}");
}

#[test]
fn scenario_a_gate_left_out_is_in_no_mix_and_is_what_is_told_of_its_loss() {
    let folder = folder(&easy());
    let (all, without) = (rank(&folder, &[]), rank(&folder, &["--without", "Sluice"]));
    assert_eq!(without["without"], serde_json::json!(["Sluice"]));
    assert!(list(&without["mixes"]).iter().all(|m| m["set"].get("Sluice").is_none()));
    let lost = list(&all["lost"]).iter().find(|l| l["outlet"] == "Sluice").unwrap();
    assert_eq!(lost["fallback"]["set"], without["mixes"][0]["set"]);
    near(&lost["fallback"]["temperature_c"], &without["mixes"][0]["release"]["temperature_c"], 1e-9);
    assert!(number(&without["examined"]) < number(&all["examined"]));
}

/// A gauge sees time means; heat follows the flow.
#[test]
fn scenario_blocks_of_the_day_share_one_setting() {
    let blocks = "blocks: [ { name: peak, hours: 6, flow: 60 }, { name: off-peak, hours: 18, flow: 20 } ]\ncold_water:";
    let folder = folder(&with(&easy(), "cold_water:", blocks));
    let answer = rank(&folder, &[]);
    let asked = &answer["release_asked"];
    assert_eq!(asked["blocks"][1], serde_json::json!({ "share": 0.75, "flow_m3s": 20.0 }));
    assert!(asked.get("flow_m3s").is_none());
    let both = list(&answer["mixes"]).iter().find(|m| m["set"].as_object().unwrap().len() == 2).unwrap();
    let parts = list(&both["blocks"]);
    let (mut time, mut heat, mut flow) = (0.0, 0.0, 0.0);
    for (part, asked) in parts.iter().zip(list(&asked["blocks"])) {
        let sum: f64 = part["set"].as_object().unwrap().values().map(number).sum();
        assert!((sum - number(&asked["flow_m3s"])).abs() < 1e-9);
        let alone = mixed(&folder, &part["set"]);
        near(&alone["release"]["temperature_c"], &part["release"]["temperature_c"], 1e-9);
        let (share, t) = (number(&part["share"]), number(&part["release"]["temperature_c"]));
        time += share * t;
        heat += share * sum * t;
        flow += share * sum;
    }
    near(&both["release"]["time_mean_c"], &time.into(), 1e-9);
    near(&both["release"]["by_flow_c"], &(heat / flow).into(), 1e-9);
    assert!((time - heat / flow).abs() > 0.01, "the two means would not differ: {time}");
    near(&both["targets"][0]["value_c"], &time.into(), 1e-9);
    assert_eq!(both["targets"][0]["basis"], "blocks");
    let text = run(&["rank", folder.named()]).out;
    assert!(text.contains("peak 60.0 m3/s for 6 h, off-peak 20.0 m3/s for 18 h"), "{text}");
    let steady = rank(&folder, &["--release", "35"]);
    assert_eq!(steady["release_asked"]["flow_m3s"], 35.0);
    assert!(steady["mixes"][0].get("blocks").is_none());
}

/// One outlet cannot pass what is asked of it.
#[test]
fn scenario_a_site_whose_only_mix_breaks_a_limit() {
    let sluice = "  - { name: Sluice, centre: 8, height: 2, width: 2, flow: { max: 40 } }\n";
    let alone = with(&with(&easy(), sluice, ""), "now: { N1: 30, Sluice: 5 }", "now: { N1: 30 }");
    let folder = folder(&alone);
    let answer = rank(&folder, &["--release", "100"]);
    assert_eq!(
        (&answer["examined"], &answer["judged"], &answer["skipped"]),
        (&1.into(), &0.into(), &1.into())
    );
    assert_eq!((&answer["mixes"], &answer["allowed"]), (&serde_json::json!([]), &0.into()));
    let [only] = &list(&answer["rejected"])[..] else { panic!("{}", answer["rejected"]) };
    assert_eq!(
        (&only["rule"], &only["outlet"], &only["margin"]),
        (&"flow.max".into(), &"N1".into(), &(-20.0).into())
    );
    assert_eq!((&only["unit"], &only["count"]), (&"m3/s".into(), &1.into()));
    let why = &answer["nothing_fits"];
    assert_eq!(why["why"], "every mix examined breaks a limit");
    assert_eq!(list(&why["limits"]["structure"])[0], *only);
    assert!(list(&why["limits"]["water control plan"]).is_empty() && why["nearest"].is_null());
    for key in ["attainable_c", "largest_difference_c", "preferred_split", "pocket"] {
        assert!(answer[key].is_null(), "{key}");
    }
    let text = run(&["rank", folder.named(), "--release", "100", "--units", "us"]);
    assert_eq!(text.code, Some(0), "a plain no is an answer");
    for words in [
        "No mix is allowed: every one examined breaks a limit",
        "Rejected by structure limits",
        "every mix flow.max of `N1`: 3,531 cfs set, 2,825 cfs allowed",
    ] {
        assert!(text.out.contains(words), "{words}: {}", text.out);
    }
    assert_eq!(run(&["rank", folder.named(), "--release", "100", "--strict"]).code, Some(4));
}

#[test]
fn scenario_no_mix_reaches_the_target_and_the_nearest_is_told() {
    let site = with(SITE, "oxygen_min: 7", "oxygen_min: 8");
    let folder = folder(&site);
    let answer = rank(&folder, &[]);
    let fits = &answer["nothing_fits"];
    assert_eq!(fits["why"], "no mix examined is known to reach every target");
    let best = &answer["mixes"][0];
    assert_eq!(fits["nearest"]["set"], best["set"]);
    let short = 8.0 - number(&best["release"]["oxygen_mg_l"]);
    near(&fits["nearest"]["by_mg_l"], &short.into(), 1e-9);
    // another order lists another first, the nearest stays
    let moved = rank(&folder, &["--order", "cold_water"]);
    assert_eq!(moved["nothing_fits"]["nearest"], fits["nearest"]);
    assert!(moved["least_release"]["flow_m3s"].is_null() && moved["least_release"].get("set").is_none());
    let text = run(&["rank", folder.named()]).out.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(
        text.contains("No mix examined is known to reach every target. Nearest: N1 35.0, 12.8 C"),
        "{text}"
    );
    let words = text.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(words.contains("O2 BELOW 1.0") && words.contains("known to keep every target"), "{text}");
}

#[test]
fn scenario_strict_exits_4_where_the_best_mix_misses() {
    for (site, code) in [(&easy(), 0), (&with(SITE, "oxygen_min: 7", "oxygen_min: 8"), 4)] {
        let folder = folder(site);
        let (plain, strict) = (run(&["rank", folder.named()]), run(&["rank", folder.named(), "--strict"]));
        assert_eq!((plain.code, strict.code), (Some(0), Some(code)));
        assert_eq!(plain.out, strict.out);
    }
}

#[test]
fn scenario_a_gate_of_unconfirmed_position_has_its_line() {
    let site = with(&easy(), "flow: { max: 40 } }", "flow: { max: 40 }, uncertain: true }");
    let folder = folder(&site);
    let answer = rank(&folder, &[]);
    let open = list(&answer["mixes"]).iter().find(|m| m["set"].as_object().unwrap().len() == 2).unwrap();
    let unsure = &open["unsure"][0];
    assert_eq!((&unsure["outlet"], &unsure["taken"]), (&"Sluice".into(), &"open".into()));
    let shut = mixed(&folder, &serde_json::json!({ "N1": open["set"]["N1"] }));
    near(&unsure["temperature_c"], &shut["release"]["temperature_c"], 1e-9);
    near(&unsure["oxygen_mg_l"], &shut["release"]["oxygen_mg_l"], 1e-9);
    assert!(unsure["text"].as_str().unwrap().contains("not confirmed open; if it is shut"));
    // nobody knows how much would pass an outlet that is taken as shut
    let closed = list(&answer["mixes"]).iter().find(|m| m["set"].get("Sluice").is_none()).unwrap();
    assert_eq!(closed["unsure"], serde_json::json!([]));
    let text = run(&["rank", "ashlar"]).out;
    assert!(text.contains("Unsure   S1 is not confirmed shut; if it is fully open"), "{text}");
}

#[test]
fn scenario_a_long_gate_name_leaves_its_flow_whole() {
    let name = "Right bank low-level bypass valve chamber";
    let folder = folder(&easy().replace("Sluice", name));
    let text = run(&["rank", folder.named()]).out;
    let list =
        text.lines().skip_while(|l| !l.contains("gates (flows")).take_while(|l| !l.starts_with("10-90%"));
    let list: Vec<&str> = list.collect();
    assert!(list.iter().all(|l| l.chars().count() <= 80), "{text}");
    let words: Vec<&str> = list.iter().flat_map(|l| l.split_whitespace()).collect();
    let ends: Vec<usize> = (0..words.len()).filter(|at| words[*at] == "chamber").collect();
    assert!(!ends.is_empty(), "{text}");
    assert_eq!(ends.len(), words.iter().filter(|w| **w == "Right").count(), "{text}");
    // a flow below 100 m3/s is told with its tenths
    assert!(ends.iter().all(|at| words[at + 1].contains('.')), "{text}");
}
