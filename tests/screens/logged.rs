//! Logging from the screens: the form, what is written, what follows.

use std::fs;

use gatemix::tui::model::Over;

use crate::driver::Driver;
use crate::screens::{NORMAL, SMALL};
use crate::sites::{ground, usual};

/// A site without a log, and where that will be.
fn fresh(name: &str) -> (Driver, std::path::PathBuf) {
    let named = usual(name);
    let log = ground().join(&named).join("log.jsonl");
    // another run may have left it
    _ = fs::remove_file(&log);
    (Driver::open(Some(&named), NORMAL), log)
}

fn lines(log: &std::path::Path) -> Vec<serde_json::Value> {
    let text = fs::read_to_string(log).unwrap_or_default();
    text.lines().map(|line| serde_json::from_str(line).unwrap()).collect()
}

#[test]
fn scenario_the_try_is_logged_and_is_then_what_is_set_now() {
    let (mut driver, log) = fresh("logged-try");
    driver.keys("2 Right Enter").typed("25").keys("Enter g");
    let text = driver.text();
    assert!(
        text.contains("log a decision") && text.contains("the try: ") && text.contains("25.0 m3/s"),
        "{text}"
    );
    // nothing is logged without a name and a reason
    driver.keys("Enter");
    assert!(driver.text().contains("type a name") && lines(&log).is_empty(), "{}", driver.text());
    driver.typed("night crew").keys("Down Enter");
    assert!(driver.text().contains("type why"), "{}", driver.text());
    driver.typed("a test").keys("Down").typed("2026-07-01");
    assert!(driver.text().contains("it lies before the day"), "{}", driver.text());
    driver.keys("Backspace Backspace Backspace Backspace Backspace").typed("07-21");
    driver.keys("Tab").typed("14 C at the gauge").keys("Enter");
    let written = lines(&log);
    assert_eq!(written.len(), 1, "{}", driver.text());
    let decision = &written[0];
    assert_eq!((decision["by"].as_str(), decision["why"].as_str()), (Some("night crew"), Some("a test")));
    assert_eq!(decision["until"], "2026-07-21");
    assert_eq!(decision["trigger"], "14 C at the gauge");
    assert_eq!(decision["chosen"]["set"]["Upper"], 25.0);
    assert!(driver.text().contains("decision 1 is logged, on the disk in"), "{}", driver.text());
    // what is set now follows
    let now = driver.session().tried().unwrap();
    assert!(driver.session().context().standing().is_some_and(|d| d.id == 1), "{:?}", now.setting);
    // the name is remembered, the reason is not
    let text = driver.keys("g").text();
    assert!(text.contains("night crew") && !text.contains("a test"), "{text}");
    driver.keys("Esc");
    assert!(driver.model.over.is_none() && lines(&log).len() == 1);
}

#[test]
fn scenario_the_mix_chosen_of_the_ranking_is_logged_as_it_is_ranked() {
    let (mut driver, log) = fresh("logged-rank");
    let best = driver.session().ranked.as_ref().unwrap().answer.mixes[0].day.clone();
    driver.keys("3 g").typed("crew").keys("Down").typed("first").keys("Enter").keys("3 Down g");
    let second = driver.session().ranked.as_ref().unwrap().answer.mixes[1].day.clone();
    driver.typed("second").keys("Enter");
    let written = lines(&log);
    assert_eq!(written.len(), 2, "{}", driver.text());
    for (line, setting) in written.iter().zip([best, second]) {
        let set = line["chosen"]["set"].as_object().unwrap();
        let site = driver.session().base.site();
        let flowing = setting.gates.iter().filter(|gate| gate.flow_m3s > 0.0);
        for gate in flowing {
            let flow = set[&site.outlets[gate.outlet].name].as_f64().unwrap();
            assert!((flow - gate.flow_m3s).abs() < 1e-9, "{set:?} and {setting:?}");
        }
    }
}

#[test]
fn scenario_an_event_is_logged_and_a_decision_amended_and_taken_back() {
    let (mut driver, log) = fresh("logged-more");
    driver.keys("2 g").typed("crew").keys("Down").typed("first words").keys("Enter").keys("6 e");
    driver.typed("meter at fault").keys("Down Down").typed("open").keys("Enter");
    driver.keys("a");
    let text = driver.text();
    assert!(text.contains("other words for decision 1") && text.contains("first words"), "{text}");
    driver.typed(", and more").keys("Enter");
    driver.keys("w").typed("a slip").keys("Enter");
    let written = lines(&log);
    assert_eq!(written.len(), 4, "{}", driver.text());
    assert_eq!((&written[1]["line"], &written[1]["until"]), (&"event".into(), &serde_json::Value::Null));
    assert_eq!((&written[2]["amends"], &written[2]["why"]), (&1.into(), &"first words, and more".into()));
    assert_eq!((&written[3]["amends"], &written[3]["withdrawn"]), (&1.into(), &true.into()));
    let text = driver.text();
    assert!(text.contains("0 decisions, 1 event") && text.contains("decision 1 is taken back"), "{text}");
}

#[test]
fn scenario_what_cannot_be_written_comes_back_as_it_was_typed() {
    let (mut driver, log) = fresh("logged-back");
    driver.keys("2 g").typed("crew").keys("Down").typed("a reason");
    fs::create_dir(&log).unwrap();
    driver.keys("Enter");
    let text = driver.text();
    fs::remove_dir(&log).unwrap();
    let Some(Over::Form(form)) = &driver.model.over else { panic!("{text}") };
    assert!(form.wrong.is_some() && text.contains("a reason") && text.contains("! "), "{text}");
    driver.keys("Enter");
    assert_eq!(lines(&log).len(), 1, "{}", driver.text());
}

#[test]
fn scenario_a_demonstration_in_memory_says_that_it_has_no_log() {
    let mut driver = Driver::open(Some("ashlar"), NORMAL);
    for keys in ["2 g", "3 g", "6 g", "6 e"] {
        let text = driver.keys(keys).text();
        assert!(text.contains("it has no log") && driver.model.over.is_none(), "{keys}: {text}");
        driver.keys("Esc");
    }
}

#[test]
fn scenario_the_form_fits_a_small_window_with_its_cursor() {
    let (mut driver, _) = fresh("logged-small");
    driver.keys("2 g Down Down Down");
    for size in [SMALL, (24, 6), (1, 1), (0, 0)] {
        let (buffer, cursor) = driver.resize(size).drawn();
        assert!(cursor.is_none_or(|at| buffer.area.contains(at)), "{size:?}");
    }
    assert!(driver.resize(SMALL).text().contains("ends if"), "{}", driver.text());
}
