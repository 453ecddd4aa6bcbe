//! A flow with its opening, and rows of the ranking typed back.

use serde_json::Value;

use crate::run;
use crate::wells::{SITE, folder, mix};

/// A gate on no well has a flow that is regulated elsewhere and an opening of its own: both can be typed, and a row of
/// the ranking typed back gives the water the row tells.
#[test]
fn scenario_a_row_of_the_ranking_typed_back_gives_its_water() {
    let wells = SITE
        .lines()
        .filter(|l| !l.contains("well") && !l.contains("- { name: North") && !l.contains("- { name: South"));
    let site = wells
        .map(|l| {
            l.replace("now: { N1: 10 }", "now: { Sluice: 10 }")
                .replace("discharge: 0.7", "positions: [0, 40]")
        })
        .collect::<Vec<_>>()
        .join("\n");
    let folder = folder(&site);
    let ranked = run(&["rank", folder.named(), "--release", "30", "--json", "--top", "50"]).json();
    let rows = ranked["mixes"].as_array().unwrap();
    let both = rows.iter().filter(|row| row["open"]["Sluice"].as_f64().is_some_and(|open| open < 100.0));
    let mut seen = 0;
    for row in both {
        let set = row["set"].as_object().unwrap();
        let words: Vec<String> = set
            .iter()
            .flat_map(|(gate, flow)| {
                let at = row["open"][gate].as_f64().map_or_else(String::new, |open| format!("@{open}%"));
                ["--set".to_owned(), format!("{gate}={flow} m3/s{at}")]
            })
            .collect();
        let mut line = vec!["mix", folder.named(), "--json"];
        line.extend(words.iter().map(String::as_str));
        let typed = run(&line).json();
        let water = |v: &Value| v["release"]["temperature_c"].as_f64().unwrap();
        assert!((water(&typed) - water(row)).abs() < 1e-9, "{words:?}: {} {}", water(&typed), water(row));
        seen += 1;
    }
    assert!(seen > 0, "{rows:#?}");
}

#[test]
fn scenario_an_opening_beside_a_flow_is_understood_or_refused() {
    let typed = mix(SITE, "--set N1=10@50% --set S1=10");
    let notes = typed["warnings"].to_string();
    assert!(notes.contains("taken fully open: S1"), "{notes}");
    assert!(!notes.contains("N1, S1"), "{notes}");
    for (words, code, told) in [
        ("--set N1=10@two", 2, "two"),
        ("--set N1=10@0%", 3, "shut and given a flow"),
        ("--set N1=10@50% --set N1=10", 2, "set twice"),
        ("--set N1=10@50% --open N1=50%", 2, "a flow and an opening"),
    ] {
        let folder = folder(SITE);
        let mut line = vec!["mix", folder.named()];
        line.extend(words.split(' '));
        let said = run(&line);
        assert!(said.failed_with(code).contains(told), "{words}");
    }
}

/// A setting solved for a temperature gives it, with the total it had; where there is no split for it, it lies outside
/// what the splits give.
#[test]
fn law_a_solution_gives_the_temperature_wanted_and_keeps_the_total() {
    use gatemix::tasks::{self, Asked, Given, Word};
    let context = tasks::open(&Asked::default(), chrono::Utc::now()).unwrap();
    let words = [Word::Set("N3=600cfs"), Word::Set("Sluice=300cfs")];
    let given = Given::typed(context.site(), &words, context.profile.pool_m).unwrap();
    let released = |given: &Given| tasks::mix_given(&context, given).unwrap().mix.release;
    let total = released(&given).flow_m3s;
    let (mut solved, mut without) = (0, 0);
    for step in 0..40 {
        let wanted = 4.0 + 0.4 * f64::from(step);
        let found = tasks::solve(&context, &given, wanted).unwrap();
        let [low, high] = found.bracket_c;
        assert_eq!(found.roots.is_empty(), !(low..=high).contains(&wanted), "{wanted}: {low} to {high}");
        for (root, setting) in &found.roots {
            let release = released(setting);
            assert!((release.temperature_c - wanted).abs() < 1e-6, "{wanted}: {}", release.temperature_c);
            assert!((release.temperature_c - root.temperature_c).abs() < 1e-9);
            assert!((release.flow_m3s - total).abs() < 1e-9, "{total}: {}", release.flow_m3s);
            solved += 1;
        }
        without += usize::from(found.roots.is_empty());
    }
    assert!(solved > 5 && without > 5, "{solved} solved, {without} without");
}
