//! What must not be lost, nor shown for what it is not: tries, totals, answers of before.

use std::fs;

use gatemix::tui::model::Stage;
use gatemix::tui::{Event, Lane};

use crate::driver::Driver;
use crate::sites::{CAST, SITE, ground, site, usual};

const SIZE: (u16, u16) = (100, 30);

fn rewritten(name: &str, from: &str, to: &str) {
    let file = ground().join(name).join("site.yaml");
    let text = fs::read_to_string(&file).unwrap();
    assert!(text.contains(from), "{from} is not in {text}");
    fs::write(&file, text.replace(from, to)).unwrap();
}

fn reread(driver: &mut Driver) {
    driver.send(Event::FilesChanged);
    driver.settle();
}

/// The file is put back, so that another run finds the site as it was.
fn after(name: &str, from: &str, to: &str, test: impl FnOnce(&mut Driver)) {
    let named = site(name, SITE, &[("a.csv", CAST)]);
    let mut driver = Driver::open(Some(&named), SIZE);
    driver.keys("2");
    rewritten(name, from, to);
    test(&mut driver);
    rewritten(name, to, from);
}

#[test]
fn scenario_a_field_over_a_gate_that_is_gone_is_taken_off() {
    let gate = "  - { name: Sluice, centre: 8, height: 2, width: 2, flow: { max: 40 } }\n";
    let named = site("gone", &SITE.replace(", Sluice: 10", ""), &[("a.csv", CAST)]);
    let mut driver = Driver::open(Some(&named), SIZE);
    driver.keys("2 Down Down Down Up Enter");
    assert!(driver.text().contains("flow of Sluice"), "{}", driver.text());
    rewritten("gone", gate, "");
    reread(&mut driver);
    let text = driver.text();
    rewritten("gone", "release: {", &format!("{gate}release: {{"));
    assert!(driver.model.over.is_none());
    assert!(text.contains("tries begin anew") && !text.contains("Sluice"), "{text}");
}

#[test]
fn scenario_tries_outlive_the_list_of_sites_and_a_broken_file() {
    let mut driver = Driver::open(Some(&usual("outlive")), SIZE);
    driver.keys("2 n + o");
    assert!(matches!(driver.model.stage, Stage::Sites { .. }));
    driver.keys("Esc");
    assert_eq!(driver.session().draft().tries.len(), 2);
    after("broken-kept", "flow: { max: 40 }", "flow: { max: forty }", |driver| {
        driver.keys("n +");
        reread(driver);
        assert!(matches!(driver.model.stage, Stage::Broken { .. }));
        rewritten("broken-kept", "flow: { max: forty }", "flow: { max: 40 }");
        reread(driver);
        assert_eq!(driver.session().draft().tries.len(), 2);
        rewritten("broken-kept", "flow: { max: 40 }", "flow: { max: forty }");
    });
}

#[test]
fn scenario_a_target_corrected_in_the_file_is_not_hidden_by_one_tried() {
    after("corrected", "high: 14", "high: 15", |driver| {
        // the last row but none is the target: its preferred temperature is turned
        driver.keys("Down Down Down Down Down Down Down Down Right +");
        assert!(driver.session().draft().changed.targets.is_some(), "{}", driver.text());
        reread(driver);
        assert!(driver.session().draft().changed.targets.is_none());
        let high = driver.session().context().site().targets[0].high_c.unwrap();
        assert!((high - 15.0).abs() < 1e-12, "{high}");
        assert!(driver.text().contains("are dropped"), "{}", driver.text());
    });
}

#[test]
fn scenario_what_is_not_touched_stays_to_the_last_digit() {
    let mut driver = Driver::open(Some(&usual("untouched")), SIZE);
    driver.keys("2");
    let before = driver.session().draft().clone();
    for _ in 0..9 {
        driver.keys("Enter Enter Down");
        assert_eq!(*driver.session().draft(), before);
    }
    driver.keys("3 t Enter");
    assert_eq!(*driver.session().draft(), before);
}

#[test]
fn scenario_a_field_keeps_its_text_under_a_control_key() {
    let mut driver = Driver::open(Some(&usual("control")), SIZE);
    driver.keys("2 Enter Ctrl-e 5 Enter");
    let text = driver.text();
    assert!(text.contains("20.1*"), "{text}");
}

#[test]
fn scenario_looking_at_another_try_leaves_redo_alone() {
    let mut driver = Driver::open(Some(&usual("redo")), SIZE);
    driver.keys("2 n + +");
    let turned = driver.session().draft().tries.clone();
    driver.keys("u u [ ] r r");
    assert_eq!(driver.session().draft().tries, turned);
}

#[test]
fn scenario_an_answer_of_before_is_not_copied_and_is_headed_so() {
    let mut driver = Driver::open(Some(&usual("copied")), SIZE);
    driver.keys("2 y");
    assert_eq!(driver.copied.len(), 1);
    // the low end turned above the high one: there is no answer to that
    driver.keys("Down Down Down Down Down Down Down Down Left Left Left > > > > > > y");
    let text = driver.text();
    assert_eq!(driver.copied.len(), 1, "{text}");
    assert!(text.contains("FROM BEFORE") && text.contains("no answer to the last change"), "{text}");
}

#[test]
fn scenario_who_went_on_to_another_try_has_it_left_alone_by_a_solution() {
    let mut driver = Driver::open(Some(&usual("solved")), SIZE);
    driver.keys("2 n +");
    driver.held = true;
    driver.keys("p");
    let question = driver.question(Lane::Quick).unwrap();
    driver.keys("[");
    let before = driver.session().draft().clone();
    driver.answer(question);
    assert_eq!(*driver.session().draft(), before);
}

#[test]
fn scenario_a_total_counts_what_passes_beside_it() {
    let open = SITE
        .replace("now: { Upper: 20, Lower: 10, Sluice: 10 }", "now: { Upper: 20, Lower: 10, Sluice: 100% }");
    let open = open.replace("flow: { max: 40 }", "flow: { max: 400 }");
    let mut driver = Driver::open(Some(&site("beside", &open, &[("a.csv", CAST)])), SIZE);
    driver.keys("2 Down Down Down Down Enter");
    assert!(driver.text().contains("total release"), "{}", driver.text());
    driver.typed("120").keys("Enter");
    let answer = driver.session().tried_now().unwrap();
    let total = answer.mix.release.flow_m3s;
    assert!((total - 120.0).abs() < 1e-6, "{total}\n{}", driver.text());
    // less than the sluice passes anyway cannot be
    driver.keys("Enter").typed("1").keys("Enter");
    assert!(driver.text().contains("the total cannot be"), "{}", driver.text());
}

#[test]
fn scenario_a_well_set_by_flows_comes_back_from_nothing() {
    let mut driver = Driver::open(Some(&usual("nothing")), SIZE);
    driver.keys("2 Down Down Down Enter");
    assert!(driver.text().contains("total of Tower"), "{}", driver.text());
    driver.typed("0").keys("Enter Enter").typed("30").keys("Enter");
    let answer = driver.session().tried_now().unwrap();
    assert!((answer.mix.release.flow_m3s - 40.0).abs() < 1e-6, "{}", driver.text());
}

/// What the log says is set now is tried first, and comes anew when another program logs.
#[test]
fn scenario_the_last_decision_of_the_log_is_what_is_tried_first() {
    let named = site("decided", SITE, &[("a.csv", CAST)]);
    let log = ground().join("decided/log.jsonl");
    let decide = |flow: &str| {
        let folder = ground().join("decided");
        let decide = ["--decide", "--by", "crew", "--why", "a test"];
        let words = [&decide[..], &["--set", flow, "--on", "2026-07-14T10:00"]].concat();
        let program = env!("CARGO_BIN_EXE_gatemix");
        let out = std::process::Command::new(program).arg("log").arg(&folder).args(words).output().unwrap();
        assert!(out.status.success(), "{}", String::from_utf8_lossy(&out.stderr));
    };
    // another run may have left it
    _ = fs::remove_file(&log);
    decide("Upper=33");
    let mut driver = Driver::open(Some(&named), SIZE);
    driver.keys("2");
    let text = driver.text();
    assert!(text.contains("33.0") && !text.contains("20.0 m3/s"), "{text}");
    let before = gatemix::files::folder::stamps(&ground().join("decided").display().to_string());
    decide("Upper=34");
    let after = gatemix::files::folder::stamps(&ground().join("decided").display().to_string());
    assert_ne!(before, after, "a decision of another program is seen");
    fs::remove_file(&log).unwrap();
}
