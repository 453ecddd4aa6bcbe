//! Whole screens as text, held under `docs/screens`; and what their styles tell.

use std::collections::BTreeSet;
use std::fs;

use gatemix::tui::model::Likes;
use gatemix::tui::{Look, Role, Symbols, Theme};
use gatemix::units::System;
use ratatui::buffer::Buffer;
use ratatui::style::{Color, Modifier};

use crate::downstream::{self, river};
use crate::driver::{Driver, text};
use crate::held::{doc, hold, stop_at, writing};
use crate::sites::{CAST, SITE, ground, site, usual, with, without_oxygen};
use crate::{coming, noted, record};

pub(crate) type Size = (u16, u16);
pub(crate) const NORMAL: Size = (80, 24);
pub(crate) const WIDE: Size = (120, 40);
pub(crate) const SMALL: Size = (40, 10);
pub(crate) const EVERY: [Size; 4] = [NORMAL, WIDE, SMALL, (1, 1)];

/// A name, what it is opened on, and keys with the heading of each screen they lead to.
pub(crate) struct Scene {
    pub(crate) name: &'static str,
    pub(crate) driver: Box<dyn Fn() -> Driver>,
    pub(crate) steps: &'static [(&'static str, &'static str)],
    pub(crate) sizes: &'static [Size],
}

const THREE: &[(&str, &str)] = &[("1", "pool"), ("2", "mix"), ("3", "rank")];
const FOUR: &[(&str, &str)] = &[("1", "pool"), ("2", "mix"), ("3", "rank"), ("4", "river")];

fn on(name: &'static str, site: impl Fn() -> String + 'static) -> Scene {
    let driver = Box::new(move || Driver::open(Some(&site()), NORMAL));
    Scene { name, driver, steps: THREE, sizes: &EVERY }
}

fn usual_with(name: &'static str, steps: &'static [(&'static str, &'static str)]) -> Scene {
    Scene { steps, sizes: &[NORMAL, SMALL], ..on(name, move || usual("test-dam")) }
}

fn changed(name: &'static str, from: &'static str, to: &'static str) -> Scene {
    on(name, move || site(name, &with(SITE, from, to), &[("2026-07-13.csv", CAST)]))
}

/// Wide characters, combining ones and such as steer a terminal.
const ODD_NAME: &str = "name: \"大坝 Überlauf e\u{301}tat \\u0007\\u202Etest\"";

fn scenes() -> Vec<Scene> {
    let demo = || Driver::open(None, NORMAL);
    let screen = |name, steps| Scene { name, driver: Box::new(demo), steps, sizes: &EVERY };
    let outages = "now: { Upper: 20, Lower: 10, Sluice: 10 }";
    vec![
        screen("pool", &[("1", "pool")]),
        screen("mix", &[("2 Down Down Down Down Right > >", "mix")]),
        screen("rank", &[("3 Down", "rank")]),
        on("no-oxygen", || site("no-oxygen", SITE, &[("2026-07-13.csv", &without_oxygen())])),
        on("stale", || site("stale", SITE, &[("2026-03-13.csv", &with(CAST, "2026-07-13", "2026-03-13"))])),
        changed(
            "every-gate-out",
            outages,
            "limits:\n  outages:\n    - { outlet: Upper, from: 2026-07-01, to: 2026-08-01, reason: inspection }\n    - { outlet: Lower, from: 2026-07-01, to: 2026-08-01, reason: inspection }\n    - { outlet: Sluice, from: 2026-07-01, to: 2026-08-01, reason: inspection }\nnow: { Upper: 20, Lower: 10, Sluice: 10 }",
        ),
        changed(
            "target-out-of-reach",
            "low: 9, preferred: 12, high: 14, oxygen_min: 6",
            "low: 24, preferred: 26, high: 28, oxygen_min: 9",
        ),
        on("long-names", || {
            let long = "the-gate-with-the-longest-name-that-anybody-ever-gave-to-one";
            let text = with(SITE, "Upper", &format!("{long}-upper"));
            let text = with(&text, "Test Dam (invented)", &format!("{} (invented)", "Long Dam ".repeat(20)));
            let text =
                with(&text, "name: holding", &format!("name: \"{}\"", "holding and rearing ".repeat(8)));
            site("long-names", &text, &[("2026-07-13.csv", CAST)])
        }),
        on("wide-characters", || {
            let text = with(SITE, "Upper", "上門");
            let text = with(&text, "Sluice", "底孔水門底孔水門");
            let text = with(&text, "name: Test Dam (invented)", ODD_NAME);
            site("wide-characters", &text, &[("2026-07-13.csv", CAST)])
        }),
        Scene {
            steps: &[("Down", "problems of the files")],
            ..on("problems", || {
                let text = with(SITE, "centre: 50", "centre: 500");
                let text = with(&text, "max: 40 }", "max: forty }");
                site("problems", &text, &[("2026-07-13.csv", &with(CAST, "9,18.0", "9,warm"))])
            })
        },
        Scene {
            name: "chooser",
            driver: Box::new(|| {
                ground();
                for name in ["two-dams/lower", "two-dams/upper"] {
                    usual(name);
                }
                Driver::open(Some("two-dams"), NORMAL)
            }),
            steps: &[("Down", "list of sites")],
            sizes: &[NORMAL, SMALL],
        },
        usual_with("help", &[("2 ?", "help"), ("PgDn PgDn PgDn", "help, further down")]),
        usual_with("settings", &[(", Down", "settings")]),
        usual_with("field", &[("2 Enter 1 2 x", "a field with an error"), ("Esc", "left as it was")]),
        usual_with(
            "two-tries",
            &[("2 n Down Down Enter 1 5 Enter", "two tries side by side"), ("[", "the first on the board")],
        ),
        usual_with("rejected", &[("3 x", "what is rejected")]),
        usual_with("drill", &[("3 l Down Space", "a gate is lost"), ("Enter", "ranked without it")]),
        usual_with("order", &[("3 c Down +", "order of the criteria")]),
        Scene {
            name: "ascii",
            driver: Box::new(|| Driver::open(Some(&river("ascii", &[])), NORMAL)),
            steps: FOUR,
            sizes: &[WIDE],
        },
    ]
}

fn headed(heading: &str, size: Size, text: &str) -> String {
    let (width, height) = size;
    format!("== {heading} at {width}x{height}\n{text}")
}

/// No cell has a colour.
fn colourless(buffer: &Buffer) -> bool {
    buffer.content.iter().all(|cell| cell.fg == Color::Reset && cell.bg == Color::Reset)
}

#[test]
fn unchanged_every_screen_is_the_one_in_the_docs() {
    ground();
    if writing() {
        fs::create_dir_all(doc("screens")).unwrap();
    }
    let mut differing = Vec::new();
    let mut names = BTreeSet::from(["README.md".to_owned()]);
    for scene in scenes()
        .into_iter()
        .chain(downstream::scenes())
        .chain(coming::scenes())
        .chain(record::scenes())
        .chain(noted::scenes())
    {
        let mut driver = (scene.driver)();
        if scene.name == "ascii" {
            driver.symbols(Symbols::Ascii);
        }
        let mut out = String::new();
        for (keys, heading) in scene.steps {
            driver.resize(NORMAL).keys(keys);
            for &size in scene.sizes {
                let coloured = driver.resize(size).theme(Theme::Palette).buffer();
                let plain = driver.theme(Theme::Mono).buffer();
                let shown = text(&coloured);
                assert_eq!(shown, text(&plain), "{}: colour changes the text", scene.name);
                assert!(colourless(&plain), "{}: colour under mono", scene.name);
                assert!(size.0 < 24 || !colourless(&coloured), "{}: no colour", scene.name);
                if scene.name == "ascii" {
                    assert!(shown.chars().all(|c| c == '\n' || (' '..='~').contains(&c)), "{shown}");
                }
                out.push_str(&headed(heading, size, &shown));
            }
        }
        let file = format!("{}.txt", scene.name);
        differing.extend(hold(&format!("screens/{file}"), &out));
        names.insert(file);
    }
    for entry in fs::read_dir(doc("screens")).unwrap() {
        let name = entry.unwrap().file_name().to_string_lossy().into_owned();
        if !names.contains(&name) {
            differing.push(format!("docs/screens/{name} is no screen any more"));
        }
    }
    stop_at(&differing);
}

#[test]
fn law_no_screen_holds_a_path_or_a_control_character() {
    for entry in fs::read_dir(doc("screens")).unwrap() {
        let path = entry.unwrap().path();
        let text = fs::read_to_string(&path).unwrap();
        for line in text.lines() {
            assert!(!line.contains("/tmp") && !line.contains(env!("CARGO_MANIFEST_DIR")), "{line}");
            assert!(!line.chars().any(char::is_control), "{}: {line:?}", path.display());
            assert!(!line.contains('\u{202e}'), "{}: {line:?}", path.display());
        }
    }
}

/// Rows of a buffer with a text in them.
fn rows_with(buffer: &Buffer, piece: &str) -> Vec<u16> {
    let lines = text(buffer);
    lines.lines().zip(0..).filter(|(line, _)| line.contains(piece)).map(|(_, row)| row).collect()
}

#[test]
fn scenario_what_is_chosen_is_reversed_and_marked_with_and_without_colour() {
    let mut driver = Driver::open(Some(&usual("styles")), NORMAL);
    driver.keys("2 Down");
    for theme in [Theme::Palette, Theme::Ansi, Theme::Mono] {
        let buffer = driver.theme(theme).buffer();
        let reversed = |y: u16| {
            let cells = (0..buffer.area.width).map(|x| &buffer[(x, y)]);
            cells
                .filter(|c| c.modifier.contains(Modifier::REVERSED))
                .map(ratatui::buffer::Cell::symbol)
                .collect::<String>()
        };
        assert!(reversed(2).contains("[2 mix]"), "{:?}", reversed(2));
        // the cell chosen is reversed on the board, its gate in the picture
        let picked: String = (3..18).map(|y| reversed(y) + " ").collect();
        let picked: Vec<&str> = picked.split_whitespace().collect();
        assert_eq!(picked, ["10.0", ">Lower"], "{}", text(&buffer));
    }
}

#[test]
fn scenario_a_missed_target_is_told_by_a_word_and_by_the_style_of_what_is_outside() {
    let far = with(SITE, "low: 9, preferred: 12, high: 14", "low: 24, preferred: 26, high: 28");
    let named = site("styles-missed", &far, &[("2026-07-13.csv", CAST)]);
    let mut driver = Driver::open(Some(&named), WIDE);
    driver.keys("2");
    let buffer = driver.theme(Theme::Palette).buffer();
    let outside = driver.model.look.style(Role::Outside).fg.unwrap();
    let rows = rows_with(&buffer, "BELOW");
    assert!(!rows.is_empty(), "{}", text(&buffer));
    let told = |y: &u16| (0..buffer.area.width).any(|x| buffer[(x, *y)].fg == outside);
    assert!(rows.iter().any(told), "{}", text(&buffer));
}

#[test]
fn scenario_a_stale_cast_is_told_by_its_word() {
    let old = with(CAST, "2026-07-13", "2026-03-13");
    let mut driver = Driver::open(Some(&site("styles-stale", SITE, &[("a.csv", &old)])), NORMAL);
    for theme in [Theme::Palette, Theme::Mono] {
        let buffer = driver.theme(theme).buffer();
        assert_eq!(rows_with(&buffer, "[! STALE]"), [1]);
    }
}

#[test]
fn scenario_the_caution_is_on_every_screen_of_every_size() {
    let mut driver = Driver::open(Some(&usual("caution")), NORMAL);
    for keys in ["1", "2", "3", "4", "4 v", "5", "?", "Esc", ",", "Esc", "2 Enter"] {
        driver.resize(NORMAL).keys(keys);
        for size in [NORMAL, WIDE, SMALL, (72, 20), (72, 14), (24, 6)] {
            let shown = driver.resize(size).text();
            let last = shown.lines().last().unwrap_or_default();
            assert!(last.to_lowercase().contains("advisory"), "{size:?} {keys}: {last}");
        }
    }
}

#[test]
fn law_any_size_is_drawn_within_itself() {
    let mut driver = Driver::open(Some(&river("sizes", &[])), NORMAL);
    for keys in ["1", "2", "3", "3 x", "4", "4 d", "4 v", "?", "Esc Esc 2 n", "Enter"] {
        driver.resize(NORMAL).keys(keys);
        for width in (0..=130).step_by(3) {
            for height in 0..=40 {
                let (buffer, cursor) = driver.resize((width, height)).drawn();
                assert!(cursor.is_none_or(|c| buffer.area.contains(c)), "{width}x{height} {keys}");
            }
        }
    }
}

#[test]
fn scenario_what_the_user_likes_is_kept() {
    let mut driver = Driver::open(Some(&usual("likes")), NORMAL);
    driver.keys(", Space Down Space Down Space Space Space Down Space");
    let look = Look { symbols: Symbols::Block, theme: Theme::Mono };
    let likes = Likes { units: Some(System::Us), look, no_mouse: true };
    assert_eq!(driver.kept.last(), Some(&likes));
    driver.keys("Esc 2");
    let (shown, buffer) = (driver.text(), driver.buffer());
    assert!(shown.contains("units: US") && shown.contains("cfs") && colourless(&buffer), "{shown}");
}
