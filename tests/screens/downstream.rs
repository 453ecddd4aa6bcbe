//! The river screen as text: both demonstrations, small rivers with what can be odd about one; a rule changed by keys
//! and by the mouse.

use crossterm::event::{KeyModifiers, MouseButton, MouseEvent, MouseEventKind};
use gatemix::tui::model::{Cell, Likes, Over, RiverPage, Typed};
use gatemix::tui::{Event, Lane};
use gatemix::units::System;

use crate::driver::Driver;
use crate::screens::{EVERY, NORMAL, SMALL, Scene, WIDE};
use crate::sites::{CAST, SITE, site, usual, with};

/// A river of twenty kilometres with a creek and two points, an invented one.
const RIVER: &str = "\
river:
  name: Test River
  equilibrium: 22
  exchange_w_m2_c: 30
  reaches:
    - { name: Upper reach, length_km: 20, width: 40, depth: 1.5, travel_hours: [[20, 9], [60, 5]], inflows: [ { name: Tansy Creek, at_km: 12, flow: 3, temperature: 14, oxygen: 9 } ] }
  points:
    - { name: Mill Bridge, at_km: 8 }
    - { name: Long Ford, at_km: 18, rating: [[10, 0.4], [40, 0.9], [120, 1.6]] }
pool:";
/// Rules at its points.
const RULES: &str = "targets:
  - { name: bridge, point: Mill Bridge, low: 8, high: 15, oxygen_min: 6, source: \"example only\" }
  - { name: ford maxima, point: Long Ford, statistic: 7dadm, high: 18, source: \"example only\" }
  - { name: ford, point: Long Ford, high: 17, oxygen_min_percent: 80, source: \"example only\" }\n";

/// The usual site with a river, some of it said otherwise.
pub(crate) fn river(name: &str, changes: &[(&str, &str)]) -> String {
    let text = with(&with(SITE, "pool:", RIVER), "targets:\n", RULES);
    let text = changes.iter().fold(text, |text, (from, to)| with(&text, from, to));
    site(name, &text, &[("2026-07-13.csv", CAST)])
}

const LONG: &str = "Long Ford, at_km: 18, rating: [[10, 0.4], [40, 0.9], [120, 1.6]]";

/// The scenes.
pub(crate) fn scenes() -> Vec<Scene> {
    let demo = |name, site: &'static str, steps| Scene {
        name,
        driver: Box::new(move || Driver::open(Some(site), NORMAL)),
        steps,
        sizes: &EVERY,
    };
    let on = |name, steps, open: fn() -> Driver| Scene {
        name,
        driver: Box::new(open),
        steps,
        sizes: &[NORMAL, WIDE, SMALL],
    };
    vec![
        demo(
            "river",
            "ashlar",
            &[
                ("4", "the river"),
                ("2 Down Down Down Down Right > > 4 Down", "a setting tried, the second rule chosen"),
                ("d", "day by day"),
                ("v", "what was recorded"),
                ("PgDn PgDn", "further down"),
            ],
        ),
        demo(
            "river-oxygen",
            "sorrel",
            &[
                ("4", "the river"),
                ("2 Down Right > 4 Down Down Down Down", "a setting tried, the fifth rule chosen"),
                ("PgDn PgDn", "the rules, further down"),
                ("d", "day by day"),
                ("v", "what was recorded"),
            ],
        ),
        on(
            "river-rule-changed",
            &[
                ("4 Down Right Right Enter 1 1 x", "a rule typed, with an error"),
                ("Backspace Enter", "set"),
                ("+ +", "turned"),
                ("u u u", "taken back"),
            ],
            || Driver::open(Some(&river("river-rule-changed", &[])), NORMAL),
        ),
        on("river-out-of-reach", &[("4 Down", "no release reaches the point")], || {
            let named = river("river-out-of-reach", &[("low: 8, high: 15", "low: 21.9, high: 22.0")]);
            Driver::open(Some(&named), NORMAL)
        }),
        on("river-conflict", &[("4", "rules that leave nothing in common")], || {
            let named =
                river("river-conflict", &[("low: 8, high: 15", "low: 18"), ("high: 17, ", "high: 12, ")]);
            Driver::open(Some(&named), NORMAL)
        }),
        on("no-river", &[("4", "no river"), ("d", "day by day"), ("v", "what was recorded")], || {
            Driver::open(Some(&usual("no-river")), NORMAL)
        }),
        on("river-no-weather", &[("4", "no weather"), ("d", "day by day")], || {
            let named = river("river-no-weather", &[("  equilibrium: 22\n  exchange_w_m2_c: 30\n", "")]);
            Driver::open(Some(&named), NORMAL)
        }),
        on("river-long-names", &[("4", "long names of points and rules")], || {
            let long = "the old mill bridge above the second bend";
            let named = river(
                "river-long-names",
                &[
                    ("name: Mill Bridge", &format!("name: {long}")),
                    ("point: Mill Bridge", &format!("point: {long}")),
                    ("name: ford maxima", &format!("name: \"{}\"", "holding and rearing ".repeat(4))),
                    (LONG, &format!("\"下游渡口下游渡口\", at_km: 18.5")),
                    ("point: Long Ford", "point: \"下游渡口下游渡口\""),
                    ("Tansy Creek", "the creek that joins on the left below the mill"),
                ],
            );
            Driver::open(Some(&named), NORMAL)
        }),
        on("river-stale", &[("Down", "an answer of before")], || {
            let mut driver = Driver::open(Some(&river("river-stale", &[])), NORMAL);
            driver.keys("4");
            driver.held = true;
            driver.keys("Down Right Right - -");
            for lane in [Lane::Quick, Lane::Long] {
                let question = driver.question(lane).unwrap();
                driver.answer(question);
            }
            driver
        }),
    ]
}

fn pressed(driver: &mut Driver, column: u16, row: u16) {
    let kind = MouseEventKind::Down(MouseButton::Left);
    driver.send(Event::Mouse(MouseEvent { kind, column, row, modifiers: KeyModifiers::NONE }));
    driver.settle();
}

/// Column and row of the last line that holds a text.
fn place(driver: &Driver, piece: &str) -> (u16, u16) {
    let text = driver.text();
    let found = text.lines().zip(0..).filter_map(|(line, row)| Some((line.find(piece)?, line, row))).last();
    let (at, line, row) = found.unwrap_or_else(|| panic!("`{piece}` is not in\n{text}"));
    (u16::try_from(line[..at].chars().count()).unwrap(), row)
}

#[test]
fn scenario_the_mouse_chooses_a_rule_and_the_first_rule_of_a_point() {
    let mut driver = Driver::open(Some(&river("river-mouse", &[])), WIDE);
    driver.keys("4");
    let (column, row) = place(&driver, "2 Long Ford");
    pressed(&mut driver, column + 3, row);
    assert_eq!(driver.session().river.rule, 1, "{}", driver.text());
    let (column, row) = place(&driver, "bridge at Mill Bridge:");
    pressed(&mut driver, column, row);
    assert_eq!((driver.session().river.rule, driver.model.over.is_none()), (0, true), "{}", driver.text());
    // pressed again it is typed into
    pressed(&mut driver, column, row);
    let Some(Over::Field(field)) = &driver.model.over else { panic!("{}", driver.text()) };
    assert_eq!(field.typed, Typed::Cell(Cell::Low(0)));
}

#[test]
fn scenario_a_rule_of_a_difference_is_typed_and_turned_as_one() {
    let changes = [("high: 17, ", "reference: Tansy Creek, high: 2, ")];
    let named = river("river-difference", &changes);
    let likes = Likes { units: Some(System::Us), ..Likes::default() };
    let asked = gatemix::tasks::Asked { site: Some(named), ..Default::default() };
    let mut driver = Driver::asked(asked, likes, WIDE);
    driver.keys("4 Down Down Right Right Enter");
    let Some(Over::Field(field)) = &driver.model.over else { panic!("{}", driver.text()) };
    // 2 C more are 3.6 F more, not 35.6 F
    assert_eq!(field.input.value(), "3.6", "{}", driver.text());
    driver.keys("Esc +");
    let high_c = |d: &Driver| d.session().context().site().targets[2].high_c.unwrap();
    assert!((high_c(&driver) - 4.0 / 1.8).abs() < 1e-9, "{}", high_c(&driver));
}

#[test]
fn scenario_what_is_typed_on_the_river_screen_is_on_the_mix_screen_too_and_taken_back() {
    let mut driver = Driver::open(Some(&river("river-typed", &[])), WIDE);
    driver.keys("4 Right Right Enter");
    driver.typed("11.5").keys("Enter");
    let high = |d: &Driver| d.session().context().site().targets[0].high_c;
    assert_eq!(high(&driver), Some(11.5));
    assert!(driver.text().contains("[high 11.5 C]"), "{}", driver.text());
    assert!(driver.keys("2").text().contains("high 11.5"), "{}", driver.text());
    driver.keys("4 u");
    assert_eq!(high(&driver), Some(15.0));
    assert!(driver.text().contains("[high 15.0 C]"), "{}", driver.text());
    driver.keys("r");
    assert_eq!(high(&driver), Some(11.5));
}

#[test]
fn scenario_pages_of_the_river_screen_lead_there_and_back() {
    let mut driver = Driver::open(Some("sorrel"), NORMAL);
    let page = |d: &Driver| d.session().river.page;
    for (keys, expected) in [
        ("4", RiverPage::Rules),
        ("d", RiverPage::Days),
        ("v", RiverPage::Record),
        ("v", RiverPage::Rules),
        ("d d", RiverPage::Rules),
        ("v Esc", RiverPage::Rules),
    ] {
        driver.keys(keys);
        assert_eq!(page(&driver), expected, "{keys}");
    }
    // scrolling ends at the last line, and every line can be reached
    driver.keys("v");
    let mut seen = driver.text();
    for _ in 0..60 {
        seen.push_str(&driver.keys("PgDn").text());
    }
    let last = driver.session().river.scroll;
    driver.keys("PgDn Down");
    assert_eq!(driver.session().river.scroll, last);
    assert!(seen.contains("mean of minima (from memory)"), "{seen}");
    assert!(driver.text().contains("the end, PgUp"), "{}", driver.text());
    // the rules scroll away from the one chosen, and back to it with it
    driver.keys("v PgDn PgDn PgDn PgDn PgDn PgDn PgDn PgDn PgDn PgDn");
    assert!(
        driver.text().contains("the end, PgUp") && !driver.text().contains("> summer"),
        "{}",
        driver.text()
    );
    driver.keys("Down Up");
    assert!(driver.text().contains("> summer"), "{}", driver.text());
}

#[test]
fn scenario_an_answer_of_before_says_so_and_is_not_copied() {
    let mut driver = Driver::open(Some(&river("river-before", &[])), WIDE);
    driver.keys("4").keys("y");
    assert_eq!(driver.copied.len(), 1);
    assert!(driver.copied[0].contains("Release needed today"), "{}", driver.copied[0]);
    assert!(!driver.text().contains("FROM BEFORE"), "{}", driver.text());
    driver.held = true;
    driver.keys("Right Right - y");
    assert!(driver.text().contains("FROM BEFORE"), "{}", driver.text());
    assert_eq!(driver.copied.len(), 1);
    driver.held = false;
    driver.settle();
    assert!(!driver.text().contains("FROM BEFORE"), "{}", driver.text());
}
