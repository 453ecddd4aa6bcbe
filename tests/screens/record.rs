//! An invented past for the log screen, and the screen over it: the time line, its days and decisions, its pages.

use std::fs;
use std::sync::Arc;

use chrono::{Days, NaiveDate};
use gatemix::problem::Problem;
use gatemix::record::Sensor;
use gatemix::record::{
    Candidate, Class, Effect, Figure, Learned, Learning, Left, Misfit, Score, Scores, Suspect, Verdict, Why,
};
use gatemix::tasks::log::{Cause, Hindcast, Past, PastDay, Scored, Spell, Turned};
use gatemix::tui::model::{LogPage, Passed};
use gatemix::tui::{Done, Event, Lane, Sent, Symbols, Work};

use crate::driver::Driver;
use crate::screens::{EVERY, NORMAL, Scene, WIDE};
use crate::sites::{ground, usual};

/// First day, and how many there are.
const FIRST: &str = "2026-05-01";
const DAYS: u64 = 70;

/// A decision as it stands in the log: number, from, until, why, flows.
const DECISIONS: [(u64, &str, &str, &str, f64, f64); 3] = [
    (1, "2026-05-04T10:00:00-07:00", "2026-05-18", "hold the river while the pool fills", 25.0, 5.0),
    (2, "2026-05-18T10:00:00-07:00", "2026-06-08", "warmer water for the fry", 32.0, 0.0),
    (4, "2026-06-08T10:00:00-07:00", "2026-07-20", "keep the cold water for September", 20.0, 12.0),
];

/// A site with a log of three decisions and an event.
pub(crate) fn logged(name: &str) -> String {
    let named = usual(name);
    let log = ground().join(&named).join("log.jsonl");
    let text = log_lines();
    if fs::read_to_string(&log).ok().as_ref() != Some(&text) {
        fs::write(log, text).unwrap();
    }
    named
}

/// The lines of that log.
pub(crate) fn log_lines() -> String {
    let gates = |upper: f64, lower: f64| {
        let lower = if lower > 0.0 { format!(r#","Lower":{lower}"#) } else { String::new() };
        format!(r#"{{"set":{{"Upper":{upper}{lower},"Sluice":10.0}},"open":{{"Upper":100.0}}}}"#)
    };
    let line = |(id, from, until, why, upper, lower): (u64, &str, &str, &str, f64, f64)| {
        let chosen = gates(upper, lower);
        format!(
            r#"{{"line":"decision","id":{id},"at":"{from}","by":"weekly meeting","from":"{from}","until":"{until}","trigger":"the river rises above 14 C","why":"{why}","amends":null,"known":{{"inputs":"0123456789ab","site":"0123456789ab","profile":"ba9876543210","taken":null,"plan":null,"pool_m":60.0,"release_m3s":40.0,"before":null,"targets":[{{"name":"holding","point":"dam","low_c":9.0,"preferred_c":12.0,"high_c":14.0,"oxygen_min_mg_l":6.0,"standing":"inside","oxygen_standing":"inside"}}]}},"considered":[],"chosen":{chosen},"expected":[{{"point":"dam","temperature_c":12.0,"band_c":[11.5,12.5],"plain_temperature_c":null,"oxygen_mg_l":7.0,"band_oxygen_mg_l":[6.5,7.5]}}],"version":"0.1.0","method":"as told"}}"#
        )
    };
    let event = r#"{"line":"event","id":3,"at":"2026-05-28T10:00:00-07:00","by":"night crew","text":"meter at fault","from":"2026-05-27T00:00:00-07:00","until":"2026-05-28","amends":null}"#;
    let mut lines: Vec<String> = DECISIONS.into_iter().map(line).collect();
    lines.insert(2, event.to_owned());
    lines.join("\n") + "\n"
}

/// Answers the question about the past that waits.
pub(crate) fn answer(driver: &mut Driver) {
    let (generation, work) = driver.question(Lane::Past).unwrap();
    let Work::Past(base, changed) = work else { panic!("the lane is that of the past") };
    let context = Arc::new(base.changed(&changed).unwrap_or_else(|_| (*base).clone()));
    let passed = Box::new(Passed { base, changed, context, past: invented() });
    driver.send(Event::Sent(Sent::Done(Lane::Past, generation, Done::Passed(Ok(passed)))));
}

fn date(day: u64) -> NaiveDate {
    FIRST.parse::<NaiveDate>().unwrap().checked_add_days(Days::new(day)).unwrap()
}

fn score(n: usize, bias: f64, inside: usize) -> Score {
    let misfit = Misfit { bias, rmse: bias.abs() + 0.1, percentiles: [0.3, 0.8], greatest: 0.9 };
    Score { n, not_computed: 2, not_measured: 3, misfit: Some(misfit), with_band: n, inside }
}

/// Seventy days: the gauge is a little warm, leaves the band for four days in June, and fails for two in May.
pub(crate) fn invented() -> Past {
    let day = |i: u64| {
        let on = date(i);
        let decision =
            DECISIONS.iter().rev().find(|d| d.1[..10].parse::<NaiveDate>().unwrap() <= on).map(|d| d.0);
        let expected = 10.5 + 0.03 * i as f64;
        let event = (26..28).contains(&i);
        let off = if (40..44).contains(&i) { 1.2 } else { 0.2 };
        let left_out = match i {
            _ if event => Some("unplanned event: meter at fault".to_owned()),
            3 | 17 | 38 => Some("the setting was changed that day".to_owned()),
            _ => None,
        };
        PastDay {
            date: on,
            decision,
            expected_c: Some(expected),
            plain_c: Some(expected - 0.3),
            band_c: Some((expected - 0.5, expected + 0.5)),
            measured_c: (!event).then_some(expected + off),
            expected_mg_l: Some(7.0),
            plain_mg_l: Some(6.8),
            band_mg_l: Some((6.4, 7.6)),
            measured_mg_l: (!event).then_some(7.1),
            left_out,
        }
    };
    let turned = |(id, from, to): (u64, u64, u64)| Turned {
        id,
        days: (date(from), date(to)),
        places: vec![(
            "dam".to_owned(),
            score(usize::try_from(to - from).unwrap(), 0.2, 12),
            score(12, 0.1, 12),
        )],
    };
    let scores = |bias: f64| Scores {
        all: score(63, bias, 59),
        by_level: vec![(0, score(9, bias, 9)), (2, score(54, bias, 50))],
        by_flow: vec![Class { flow_m3s: (30.0, 42.0), score: score(63, bias, 59) }],
        by_month: vec![(5, score(27, bias, 27)), (6, score(28, bias, 24)), (7, score(8, bias, 8))],
    };
    let causes = vec![
        Cause {
            name: "gate not where the log says",
            speaks_for: vec!["Lower shut would give what the gauge read".to_owned()],
            against: vec!["no step in the gauge".to_owned()],
            to_tell: "look at the gate",
        },
        Cause {
            name: "leakage",
            speaks_for: Vec::new(),
            against: Vec::new(),
            to_tell: "shut the gate and measure",
        },
    ];
    let scored = |name: &str, days_outside| Scored {
        name: name.to_owned(),
        days_outside,
        degree_days_c: 0.8 * days_outside as f64,
        judged: 66,
        lost: 0,
    };
    Past {
        days: (0..DAYS).map(day).collect(),
        decisions: [(1, 3, 16), (2, 17, 37), (4, 38, 69)].map(turned).to_vec(),
        temperature: scores(0.26),
        oxygen: scores(0.1),
        with_applied: None,
        with_learned: Some((score(63, 0.0, 60), score(63, 0.0, 63))),
        left_out: [26, 27]
            .map(|i| Left { date: date(i), why: Why::Event("meter at fault".to_owned()) })
            .into_iter()
            .chain([3, 17, 38].map(|i| Left { date: date(i), why: Why::Changed }))
            .collect(),
        learning: learning(),
        spells: vec![Spell { days: (date(40), date(43)), outside: 4, off_c: 1.2, causes }],
        hindcast: Ok(Hindcast {
            days: (date(0), date(69)),
            plan: "plans/past-2026.csv".to_owned(),
            as_set: scored("as it was set", 9),
            observed: Some(scored("as the gauge read", 11)),
            nothing: scored("doing nothing", 31),
            hindsight: scored("perfect hindsight", 2),
        }),
        notes: vec![Problem::note("assumed", "the pool is that of the plan")],
    }
}

fn learning() -> Learning {
    let candidate = |effect, value, verdict| Candidate {
        effect,
        figures: vec![Figure { level: None, value, interval: Some((value - 0.1, value + 0.1)), n: 63 }],
        n: 63,
        stretches: 5,
        rmse: Some([0.36, 0.21]),
        held_out: Some([0.38, 0.24]),
        verdict,
    };
    let refused = "its 80 % interval, 0.88 to 1.08, holds 1.00".to_owned();
    Learning {
        learned: Learned {
            bias_c: Some(0.26),
            window: Some((date(0), date(69))),
            n: 63,
            ..Learned::default()
        },
        candidates: vec![
            candidate(Effect::Bias, 0.26, Verdict::Kept),
            candidate(Effect::ZoneFactor, 0.98, Verdict::Refused(refused)),
            candidate(Effect::OxygenGain, 0.1, Verdict::Passed("the days do not tell it apart".to_owned())),
        ],
        alike: Vec::new(),
        suspect: Some(Suspect {
            sensor: Sensor::Either,
            n: 5,
            casts: vec![("2026-05-01.csv".to_owned(), 0.4)],
        }),
    }
}

/// The log screen over the invented past.
pub(crate) fn opened(name: &str) -> Driver {
    let mut driver = Driver::open(Some(&logged(name)), NORMAL);
    driver.held = true;
    driver.keys("6");
    answer(&mut driver);
    driver
}

/// The scenes.
pub(crate) fn scenes() -> Vec<Scene> {
    vec![Scene {
        name: "log",
        driver: Box::new(|| opened("log")),
        steps: &[
            ("6", "the record"),
            ("Down Down Right", "an earlier decision, a day on"),
            ("x z", "its oxygen, the season"),
            ("x Enter", "a decision in full"),
            ("s", "scores"),
            ("c", "what may be why"),
            ("l", "what is learned"),
            ("h", "the season gone through again"),
        ],
        sizes: &EVERY,
    }]
}

#[test]
fn scenario_the_day_read_and_the_decision_chosen_go_together() {
    let mut driver = opened("record-days");
    let text = driver.symbols(Symbols::Ascii).text();
    assert!(text.contains("Thu 2026-07-09, day 70 of 70") && text.contains(">  4  06-08"), "{text}");
    assert!(text.contains("3 decisions, 1 event | release: 63 days, bias +0.3 C"), "{text}");
    // the last decision's first day, then the one before, then a day earlier: the one before that stood
    driver.keys("Down");
    driver.keys("Down");
    assert_eq!(driver.session().log.decision, Some(2));
    assert_eq!(driver.session().log.day.unwrap().to_string(), "2026-05-18");
    driver.keys("Left");
    assert_eq!(driver.session().log.decision, Some(1));
    let text = driver.resize(WIDE).text();
    assert!(text.contains("2026-05-17") && text.contains("hold the river"), "{text}");
    driver.keys("Home [");
    assert_eq!(driver.session().log.day.unwrap().to_string(), FIRST);
    assert!(driver.text().contains("no decision stood"), "{}", driver.text());
    driver.keys("End ]");
    assert_eq!(driver.session().past_read(), Some(69));
}

#[test]
fn scenario_a_day_tells_expected_gauge_and_difference_with_and_without_what_is_learned() {
    let mut driver = opened("record-figures");
    driver.keys("Home ] ] ] ] ] Right Right Right Right Right Right Left");
    let joined = driver.resize(WIDE).text().split_whitespace().collect::<Vec<_>>().join(" ");
    // day 40 from 0: 11.7 expected, 12.9 read
    for piece in [
        "2026-06-10, day 41 of 70",
        "expected 11.7 C [11.2 to 12.2 C]",
        "gauge 12.9 C",
        "difference +1.2 C, OUTSIDE the day's band",
        "nothing learned 11.4 C, +1.5 C",
        "decision 4 since 06-08",
    ] {
        assert!(joined.contains(piece), "{piece}:\n{}", driver.text());
    }
    driver.keys("x");
    assert!(driver.text().contains("expected 7.0 mg/L"), "{}", driver.text());
    driver.keys("x Home ] ] ] Right Right Right Right Right");
    let text = driver.text();
    assert!(text.contains("E left out: unplanned event: meter at fault"), "{text}");
}

#[test]
fn scenario_zooming_shows_fewer_days_and_all_again() {
    let mut driver = opened("record-zoom");
    assert_eq!(driver.session().past_span(), 0..70);
    // all of it is one season: the next look is the narrower one
    driver.keys("z");
    assert_eq!(driver.session().past_span(), 28..70);
    driver.keys("Home");
    assert_eq!(driver.session().past_span(), 0..42);
    driver.keys("z");
    assert_eq!(driver.session().past_span(), 0..70);
}

#[test]
fn scenario_each_page_is_opened_and_left_by_its_key() {
    let mut driver = opened("record-pages");
    driver.resize(WIDE);
    for (key, page, pieces) in [
        (
            "Enter",
            LogPage::Decision,
            &["Decision  4, set now", "keep the cold water", "or when the river rises"][..],
        ),
        (
            "s",
            LogPage::Scores,
            &["0.26   0.36    94%", "30.0 to 42.0 m3/s", "June", "2 days: unplanned event"],
        ),
        ("c", LogPage::Spells, &["outside on 4 days", "for: Lower shut", "would tell: look at the gate"]),
        ("l", LogPage::Learned, &["constant bias: +0.26 C", "with it; kept", "refused: its 80 %"]),
        ("h", LogPage::Hindcast, &["perfect hindsight", "doing nothing: outside on 31"]),
    ] {
        driver.keys(key);
        assert_eq!(driver.session().log.page, page);
        let text = driver.text();
        for piece in pieces {
            assert!(text.contains(piece), "{piece}:\n{text}");
        }
        driver.keys("PgDn PgUp");
        driver.keys(key);
        assert_eq!(driver.session().log.page, LogPage::Line);
    }
}

#[test]
fn scenario_a_past_is_asked_once_stopped_and_asked_again() {
    let mut driver = Driver::open(Some(&logged("record-stopped")), NORMAL);
    driver.held = true;
    driver.keys("6 1 6");
    assert!(
        driver.waits(Lane::Past) && driver.text().contains("the past is being computed"),
        "{}",
        driver.text()
    );
    // the decisions are there before it
    assert!(driver.text().contains("  4  06-08"), "{}", driver.text());
    driver.keys("Esc");
    assert!(!driver.waits(Lane::Past) && driver.text().contains("r computes the past"), "{}", driver.text());
    driver.keys("r");
    answer(&mut driver);
    assert!(driver.session().past_now());
    // another date is another past
    driver.keys("2 End");
    driver.send(Event::FilesChanged);
    driver.settle();
    assert!(!driver.session().past_now() && !driver.waits(Lane::Past), "it is not looked at");
    driver.keys("6");
    assert!(driver.text().contains("FROM BEFORE"), "{}", driver.text());
}

#[test]
fn scenario_a_site_without_a_past_says_what_is_missing() {
    let mut driver = Driver::open(Some(&usual("record-none")), NORMAL);
    let text = driver.keys("6").text();
    assert!(text.contains("No decision is logged yet"), "{text}");
}
