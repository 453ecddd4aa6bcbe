//! The price of today's choice, against seasons run by hand.

use gatemix::report::text::season::{priced as asked, prices as lines};
use gatemix::season::{Change, Difference, Price};
use gatemix::tasks::season::Prices;
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
    let mut told = 0;
    for (mix, price) in list(&answer["mixes"]).iter().zip(prices) {
        let gates = gates(mix);
        let more = days_outside(&gates.iter().map(String::as_str).collect::<Vec<_>>()) - base;
        assert_eq!(price["days_outside_more"]["days"], more, "{mix}");
        told += usize::from(more != 0);
    }
    assert!(told > 0, "a price that can be told wrong");
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
    // cast by cast against no. 1, which differs from itself by nothing
    let [first, second] = [0, 1].map(|i| &answer["season"]["mixes"][i]);
    let none = serde_json::json!({ "days": 0, "range": [0, 0], "told": false });
    assert_eq!(first["than_first"]["days_outside_more"], none);
    let days = |change: &Value| change["days_outside_more"]["days"].as_i64().unwrap();
    assert_eq!(days(&second["than_first"]), days(second) - days(first));
    assert_eq!(second["casts"], 6);
    // the plan ends before the next decision, so that holding is all there is
    let held = |now: &[&str]| season(&folder, &[&["--strategy", "hold"], now].concat());
    by_hand(&answer, |now| outside(&held(now)));
    let best = gates(&answer["mixes"][0]);
    let best = held(&best.iter().map(String::as_str).collect::<Vec<_>>());
    let lost = list(&best["decisions"]).iter().find(|d| d["why"] == "forced").unwrap();
    assert_eq!(lost["date"], "2025-07-19", "its gate must stand as it should when its outage begins");
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
    assert!(text.contains("does not run out, no more than with what is set now"), "{text}");
    assert!(!text.contains("against no. 1"), "one mix has nothing to be held against: {text}");
    // oxygen of the inflow is assumed, and said here as in the season
    let note = season(&folder, &[])["warnings"][0]["text"].as_str().unwrap().to_owned();
    assert!(text.contains(&note), "{note}: {text}");
}

/// Prices of two mixes, the second of which differs from the first as told.
fn two(against: Difference, than_first: Difference) -> Prices {
    let none = Change { days: 0, range: (0, 0) };
    let same = Difference { exhausted: Some(none), lasts: [false; 2], runs_out: [6, 6], outside: Some(none) };
    let date = |text: &str| text.parse().unwrap();
    Prices {
        plan: "steady".into(),
        case: "warm".into(),
        from: date("2025-07-14"),
        until: date("2025-07-28"),
        against_now: true,
        members: 5,
        mixes: vec![Price { against, than_first: same, casts: 6 }, Price { against, than_first, casts: 6 }],
        notes: Vec::new(),
        fingerprint: String::new(),
    }
}

#[test]
fn scenario_mixes_that_differ_by_less_than_can_be_told_are_said_to_in_one_sentence() {
    let of = |days, range, outside, lasts, runs_out| Difference {
        exhausted: Some(Change { days, range }),
        lasts,
        runs_out,
        outside: Some(outside),
    };
    let fewer = Change { days: -2, range: (-21, 0) };
    let told = Change { days: -4, range: (-6, -1) };
    let level = two(of(0, (-7, 7), told, [false; 2], [6, 6]), of(56, (-7, 56), fewer, [false, true], [6, 5]));
    assert!(
        asked(&level).contains("BETWEEN THE MIXES OF THIS LIST NOTHING CAN BE TOLD"),
        "{}",
        asked(&level)
    );
    let now =
        "runs out: less than we can tell (+0; -7 to +7 days); days outside: 4 days fewer (-6 to -1 days)";
    assert_eq!(
        lines(&level),
        [
            format!(" 1  {now}"),
            format!(
                " 2  {now}; against no. 1: runs out in 5 of 6 casts, in 6 with no. 1: less than we can tell; days \
                 outside: less than we can tell (-2; -21 to +0 days)"
            ),
        ]
    );
    let apart = two(of(0, (0, 0), fewer, [true; 2], [0, 0]), of(56, (7, 56), told, [false, true], [6, 2]));
    assert!(!asked(&apart).contains("NOTHING CAN BE TOLD"), "{}", asked(&apart));
    let lines = lines(&apart);
    assert!(lines[0].starts_with(" 1  does not run out, no more than with what is set now; "), "{lines:?}");
    assert!(
        lines[1].ends_with(
            "; against no. 1: runs out in 2 of 6 casts, in 6 with no. 1: no longer; days outside: 4 days fewer (-6 to \
             -1 days)"
        ),
        "{lines:?}"
    );
}
