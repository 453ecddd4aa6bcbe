//! Answers beyond the list, each tried by asking `mix` or `rank` again; and the screen.

use serde_json::Value;

use crate::{CAST, Folder, SITE, run, with};

fn easy() -> Folder {
    Folder::new(&with(SITE, "oxygen_min: 7", "oxygen_min: 5"), &[("a.csv", CAST.as_bytes())])
}

fn rank(folder: &Folder, more: &[&str]) -> Value {
    run(&[&["rank", folder.named(), "--json"], more].concat()).json()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

/// Temperature (C) and oxygen (mg/L) that `mix` gives two flows, m3/s.
fn mixed(folder: &Folder, n1: f64, sluice: f64) -> (f64, f64) {
    let words = [format!("--set=N1={n1}"), format!("--set=Sluice={sluice}")];
    let words: Vec<&str> =
        words.iter().zip([n1, sluice]).filter(|w| w.1 > 0.0).map(|w| w.0.as_str()).collect();
    let answer = run(&[&["mix", folder.named(), "--json"], &words[..]].concat()).json();
    (number(&answer["release"]["temperature_c"]), number(&answer["release"]["oxygen_mg_l"]))
}

#[test]
fn law_the_exact_split_gives_the_preferred_temperature() {
    let folder = easy();
    let split = rank(&folder, &[])["preferred_split"].clone();
    let roots = split["roots"].as_array().unwrap();
    assert!(!roots.is_empty());
    for root in roots {
        let flow = |name: &str| {
            let at = split["between"].as_array().unwrap().iter().position(|b| b == name).unwrap();
            number(&root["flows_m3s"][at])
        };
        assert!((mixed(&folder, flow("N1"), flow("Sluice")).0 - 12.0).abs() < 1e-6, "{root}");
    }
    // far above what two outlets can give there is no root, but the ends are told
    let warm = with(SITE, "preferred: 12, high: 14, oxygen_min: 7", "preferred: 20, high: 21");
    let warm = Folder::new(&warm, &[("a.csv", CAST.as_bytes())]);
    let split = rank(&warm, &[])["preferred_split"].clone();
    assert_eq!(split["roots"], serde_json::json!([]));
    let (all, none) = (mixed(&warm, 35.0, 0.0).0, mixed(&warm, 0.0, 35.0).0);
    assert!((number(&split["bracket_c"][1]) - all).abs() < 1e-9, "{split}");
    assert!((number(&split["bracket_c"][0]) - none).abs() < 1e-9, "{split}");
    assert!(run(&["rank", warm.named()]).out.contains("Split    no split of"));
}

#[test]
fn law_the_ends_of_what_is_attainable_are_met_and_not_passed() {
    let folder = easy();
    let answer = rank(&folder, &[]);
    let (mut low, mut high) = (f64::INFINITY, f64::NEG_INFINITY);
    for step in 0..=20 {
        // N1 opens from 2 m3/s
        let n1 = 35.0 * f64::from(step) / 20.0;
        if n1 > 0.0 && n1 < 2.0 {
            continue;
        }
        let t = mixed(&folder, n1, 35.0 - n1).0;
        (low, high) = (low.min(t), high.max(t));
    }
    for (end, value) in [(0, low), (1, high)] {
        assert!((number(&answer["attainable_c"][end]) - value).abs() < 1e-9, "{}", answer["attainable_c"]);
    }
}

#[test]
fn law_no_mix_listed_beats_the_trade_curve_in_both() {
    let answer = rank(&easy(), &[]);
    let trade = answer["trade"].as_array().unwrap();
    assert!(trade.len() > 1);
    let of = |t: &Value, o: &Value| ((number(t) - 12.0).abs(), number(o));
    let curve: Vec<(f64, f64)> = trade.iter().map(|t| of(&t["temperature_c"], &t["oxygen_mg_l"])).collect();
    assert!(curve.windows(2).all(|w| w[1].1 > w[0].1), "{curve:?}");
    for mix in answer["mixes"].as_array().unwrap() {
        let (far, oxygen) = of(&mix["release"]["temperature_c"], &mix["release"]["oxygen_mg_l"]);
        // nobody is nearer by more than a step of the curve and better aired at once
        assert!(curve.iter().any(|c| c.0 <= far + 0.1 && c.1 >= oxygen - 1e-6), "{far} {oxygen}");
    }
}

#[test]
fn law_the_least_release_keeps_every_target_and_a_little_less_does_not() {
    let folder = Folder::new(SITE, &[("a.csv", CAST.as_bytes())]);
    let least = number(&rank(&folder, &[])["least_release"]["flow_m3s"]);
    let at =
        |flow: f64| rank(&folder, &["--step", "10%", "--release", &flow.to_string()])["nothing_fits"].clone();
    assert!(at(least).is_null());
    assert!(!at(0.97 * least).is_null(), "{least}");
}

#[test]
fn law_the_pocket_rule_holds_over_its_range() {
    let folder = easy();
    let answer = rank(&folder, &[]);
    let pocket = &answer["pocket"];
    let set = |gate: &str| answer["mixes"][0]["set"].get(gate).map_or(0.0, number);
    let (n1, sluice) = (set("N1"), set("Sluice"));
    let here = mixed(&folder, n1, sluice).0;
    let [from, to] = ["from_m3s", "to_m3s"].map(|k| number(&pocket[k]));
    assert!(from < 35.0 && to > 35.0, "{pocket}");
    for release in [from, 34.0, 36.0, to] {
        let times = release / 35.0;
        let told = here + number(&pocket["c_per_m3s"]) * (release - 35.0);
        let gives = mixed(&folder, times * n1, times * sluice).0;
        assert!((gives - told).abs() < 0.1 + 1e-6, "at {release}: {gives}, told {told}");
    }
}

/// What a change may not do is held against the setting that is tried too.
#[test]
fn scenario_mix_counts_moves_and_rates_from_the_setting_now() {
    let limits = "limits: { max_flow_change_per_hour: 4, max_moves: 1 }\ncold_water:";
    let folder = Folder::new(&with(SITE, "cold_water:", limits), &[("a.csv", CAST.as_bytes())]);
    let answer = run(&["mix", folder.named(), "--set", "N1=42", "--json"]).json();
    assert_eq!(answer["moves"], 2);
    let room = |rule: &str| {
        let all = answer["limits"].as_array().unwrap();
        number(&all.iter().find(|l| l["rule"] == rule).unwrap()["room"])
    };
    assert!((room("max_flow_change_per_hour") + 3.0).abs() < 1e-9, "7 m3/s more, 4 allowed");
    assert!((room("max_moves") + 1.0).abs() < 1e-9);
    assert!((room("flow.max") - 38.0).abs() < 1e-9);
    let told = answer["warnings"].as_array().unwrap().iter().filter(|w| w["kind"] == "limit");
    assert_eq!(told.count(), 2, "{}", answer["warnings"]);
    let text = run(&["mix", folder.named(), "--set", "N1=42"]).out;
    assert!(text.contains("Change   move N1 30.0 m3/s to 42.0 m3/s, Sluice 5.0 m3/s to shut"), "{text}");
    // the setting now changes nothing
    let now = run(&["mix", folder.named(), "--json"]).json();
    assert!(now["moves"].is_null() && now["now"].is_null());
}

#[test]
fn scenario_the_ranking_is_one_screen_to_read_aloud() {
    let folder = easy();
    let long = with(SITE, "name: N1,", "name: A gate whose name is rather longer than a name should be,");
    let long = with(&long, "{ N1: 30,", "{ A gate whose name is rather longer than a name should be: 30,");
    let long = Folder::new(&long, &[("a.csv", CAST.as_bytes())]);
    for arguments in [
        &["rank", "ashlar"][..],
        &["rank", "ashlar", "--units", "si", "--order", "moves,oxygen"],
        &["rank", "ashlar", "--release", "300cfs"],
        &["rank", folder.named(), "--units", "us"],
        &["rank", long.named()],
    ] {
        let text = run(arguments).out;
        let lines: Vec<&str> = text.lines().collect();
        let wide: Vec<&&str> = lines.iter().filter(|l| l.chars().count() > 80).collect();
        assert!(wide.is_empty(), "{arguments:?}: {wide:?}");
        // ten mixes, four rules and every answer
        assert!(lines.len() <= 64, "{} lines: {text}", lines.len());
        let words = text.replace("the approved\nwater control plan", "").to_lowercase();
        for word in ["compliant", "safe ", "acceptable", "legal", "approved", "probability", "chance"] {
            assert!(!words.contains(word), "{word}: {text}");
        }
    }
    let text = run(&["rank", "ashlar"]).out;
    for words in [
        "Release  1,200 cfs (release.wanted in the site file), split in steps of 5 %\n",
        "now N3 100%, S3 100%  ",
        "\n 10 ",
        "\nNo. 1    North 120 cfs (N3 100%), South 900 cfs (S3 100%), Sluice 180 cfs; move\n         Sluice shut to 180 cfs.",
        "\nRange    allowed mixes give 50.6 to 58.6 F",
        "\nTrade    ",
        "\nSplit    52.0 F with South",
        "\nLeast    ",
        "\nMore     each 100 cfs more",
        "\nIf lost  N3: ",
        "possible from\n               2026-10-01",
        "Examined 77,991,781 mixes: ",
        "\nNot checked of no. 1: pool_window; min_submergence of Sluice;",
    ] {
        assert!(text.contains(words), "{words}: {text}");
    }
    assert!(run(&["rank", folder.named(), "--units", "us"]).out.contains("gates (flows in cfs)"));
}

#[test]
fn scenario_words_that_cannot_be_understood_exit_2() {
    let folder = easy();
    let site = folder.named();
    for (arguments, phrase) in [
        (["--release", "much"], "--release much"),
        (["--release", "0"], "above zero"),
        (["--release", "30ft"], "unit of length"),
        (["--now", "N9=3"], "no gate is named `N9`"),
        (["--step", "0.5%"], "outside 1 to 100 %"),
        (["--order", "cheapest"], "no criterion; there are oxygen, range"),
        (["--order", "moves,moves"], "stands twice"),
        (["--without", "N9"], "there are N1, Sluice"),
        (["--top", "0"], "--top"),
    ] {
        let run = run(&[&["rank", site][..], &arguments].concat());
        assert!(run.failed_with(2).contains(phrase), "{arguments:?}: {}", run.err);
    }
}

#[test]
fn scenario_what_spills_by_itself_may_be_more_than_is_asked() {
    let spill = "  - { name: Weir, kind: crest, centre: 58, width: 20 }\nnow:";
    let folder = Folder::new(&with(SITE, "now:", spill), &[("a.csv", CAST.as_bytes())]);
    let run = run(&["rank", folder.named(), "--release", "10"]);
    assert_eq!(run.code, Some(0), "{}", run.err);
    let words = run.out.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(words.contains("Weir spills") && words.contains("nothing is left to share out"), "{}", run.out);
}

#[test]
fn scenario_the_range_says_where_some_oxygen_is_unknown() {
    let range = |cast: &str| {
        let folder = Folder::new(SITE, &[("a.csv", cast.as_bytes())]);
        let out = run(&["rank", folder.named()]).out;
        let from = out.find("\nRange ").unwrap_or_else(|| panic!("{out}"));
        out[from..].split_whitespace().take(17).collect::<Vec<_>>().join(" ")
    };
    assert!(!range(CAST).contains("unknown"));
    let shallow = CAST.replace("6.5,4.5", "6.5,").replace("6.2,3.5", "6.2,");
    let words = range(&shallow);
    assert!(words.contains("mg/L oxygen, unknown for some"), "{words}");
}

/// The search knows the blocks of a day to some thousandths of a degree; what only the full computation shows to break
/// a limit is not listed, and a split that breaks one says so.
#[test]
fn law_what_is_listed_breaks_no_limit_and_a_split_that_does_says_so() {
    let home = tempfile::tempdir().unwrap();
    let site = home.path().join("new");
    let named = site.to_str().unwrap();
    assert_eq!(run(&["new", named]).code, Some(0));
    let file = site.join("site.yaml");
    let steady = std::fs::read_to_string(&file).unwrap();
    let limit = "max_temperature_change_per_day: 2";
    assert!(steady.contains(limit), "{steady}");
    let blocks = "blocks: [ { name: peak, hours: 6, flow: 32 }, { name: off-peak, hours: 18, flow: 16 } ]\n";
    std::fs::write(&file, format!("{steady}\n{blocks}")).unwrap();
    let day = run(&["rank", named, "--json", "--top", "40"]).json();
    let mixes = day["mixes"].as_array().unwrap();
    assert!(mixes.len() > 4);
    for mix in mixes {
        let kinds = mix["warnings"].as_array().unwrap().iter().map(|w| w["kind"].as_str().unwrap());
        assert!(kinds.into_iter().all(|kind| kind != "limit"), "{mix}");
    }
    // the demonstration may change by 4 F a day, which its splits for 50 F do not keep
    let demo = home.path().join("demo");
    assert_eq!(run(&["demo", demo.to_str().unwrap()]).code, Some(0));
    let ashlar = demo.join("ashlar");
    let file = ashlar.join("site.yaml");
    let text = std::fs::read_to_string(&file).unwrap();
    std::fs::write(&file, with(&text, "preferred: 52", "preferred: 50")).unwrap();
    let named = ashlar.to_str().unwrap();
    let tight = run(&["rank", named, "--json"]).json();
    let roots = tight["preferred_split"]["roots"].as_array().unwrap();
    assert!(!roots.is_empty(), "{}", tight["preferred_split"]);
    let breaks = |root: &Value| {
        root["breaks"].as_array().unwrap().iter().any(|b| b == "max_temperature_change_per_day")
    };
    assert!(roots.iter().all(breaks), "{roots:?}");
    let text = run(&["rank", named]).out.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(text.contains("BREAKS max_temperature_change_per_day"), "{text}");
}
