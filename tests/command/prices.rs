//! The price of today's choice, against seasons run by hand.

use serde_json::Value;

use crate::river::{list, told};
use crate::season::{PLAN, season, site};
use crate::{Folder, run, with};

/// The sluice alone is far colder than the target allows.
const NOW: [&str; 2] = ["--now", "Sluice=30"];

/// The two best mixes priced against the sluice alone.
fn priced(folder: &Folder) -> Value {
    let arguments = [
        "rank",
        folder.named(),
        "--on",
        "2025-07-14T10:30",
        "--release",
        "30",
        "--season",
        "--top",
        "2",
        "--json",
    ];
    run(&[&arguments[..], &NOW].concat()).json()
}

/// The gates of a mix as `--now` takes them.
fn gates(mix: &Value) -> Vec<String> {
    let set = mix["set"].as_object().unwrap();
    set.iter().flat_map(|(name, flow)| ["--now".to_owned(), format!("{name}={flow}")]).collect()
}

fn outside(answer: &Value) -> i64 {
    answer["score"]["days_outside"].as_i64().unwrap()
}

/// Every price against the difference of two seasons.
fn by_hand(answer: &Value, days_outside: impl Fn(&[&str]) -> i64) {
    let base = days_outside(&NOW);
    let prices = list(&answer["season"]["mixes"]);
    assert_eq!(prices.len(), 2);
    for (mix, price) in list(&answer["mixes"]).iter().zip(prices) {
        let gates = gates(mix);
        let more = days_outside(&gates.iter().map(String::as_str).collect::<Vec<_>>()) - base;
        assert_ne!(more, 0, "a price that can be told wrong");
        assert_eq!(price["days_outside_more"]["days"], more, "{mix}");
    }
}

#[test]
fn scenario_a_price_is_the_difference_of_two_seasons() {
    let plan = with(&with(PLAN, "2025-08-01,58", "2025-08-01,59"), "2025-08-26,55.5", "2025-08-10,58.5");
    let folder = site(&[("a.csv", &plan)]);
    let answer = priced(&folder);
    // what is set now stays until the day decided for: a mix that is held to the next decision
    by_hand(&answer, |now| {
        let held = ["season", folder.named(), "--on", "2025-07-28T10:30", "--json"];
        outside(&run(&[&held[..], now].concat()).json())
    });
}

#[test]
fn scenario_a_mix_is_held_no_longer_than_its_gates_are_there() {
    let plan =
        with(PLAN, "# name: steady\n", "# name: steady\n# outage: N1, 2025-07-20, 2025-07-24, hoist\n");
    let plan = with(&with(&plan, "2025-08-01,58", "2025-07-27,59.3"), "2025-08-26,55.5,20,15\n", "");
    let folder = site(&[("a.csv", &plan)]);
    let answer = priced(&folder);
    // the plan ends before the next decision, so that holding is all there is
    let held = |now: &[&str]| season(&folder, &[&["--strategy", "hold"], now].concat());
    by_hand(&answer, |now| outside(&held(now)));
    let best = gates(&answer["mixes"][0]);
    let best = held(&best.iter().map(String::as_str).collect::<Vec<_>>());
    let lost = list(&best["decisions"]).iter().find(|d| d["why"] == "forced").unwrap();
    assert_eq!(lost["date"], "2025-07-20", "its gate is out in the days in which it is held");
}

#[test]
fn scenario_a_mix_that_spares_the_cold_water_is_said_to_and_what_was_assumed_with_it() {
    let folder = site(&[("a.csv", PLAN)]);
    let text = told(&[
        "rank",
        folder.named(),
        "--on",
        "2025-07-20T10:30",
        "--release",
        "30",
        "--season",
        "--top",
        "1",
    ]);
    assert!(text.contains("each mix held from 2025-07-20 to 2025-08-03 as long as no limit"), "{text}");
    assert!(text.contains("seen on days of decision, 14 days apart"), "{text}");
    assert!(text.contains("does not run out, no more than without it"), "{text}");
    // oxygen of the inflow is assumed, and said here as in the season
    let note = season(&folder, &[])["warnings"][0]["text"].as_str().unwrap().to_owned();
    assert!(text.contains(&note), "{note}: {text}");
}
