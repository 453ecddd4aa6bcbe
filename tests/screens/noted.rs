//! The note screen: what it previews, the words of the user in it, and saving it.

use std::fs;
use std::ops::ControlFlow;

use gatemix::report::note::page;
use gatemix::report::page::{Format, written};
use gatemix::tasks::note::{NoteAsked, note};
use gatemix::tui::Lane;
use gatemix::tui::model::Over;

use crate::driver::Driver;
use crate::record::logged;
use crate::screens::{EVERY, NORMAL, Scene, WIDE};
use crate::sites::{ground, usual};

/// The note screen of a site.
fn opened(named: &str) -> Driver {
    let mut driver = Driver::open(Some(named), NORMAL);
    driver.keys("7");
    driver
}

/// The scenes.
pub(crate) fn scenes() -> Vec<Scene> {
    vec![Scene {
        name: "note",
        driver: Box::new(|| opened(&logged("note"))),
        steps: &[
            ("7", "the change order of the last decision"),
            ("PgDn", "further down"),
            ("Right", "the agency note"),
            ("s", "saving it"),
        ],
        sizes: &EVERY,
    }]
}

/// Every line of the sheets of the note.
fn sheets(driver: &Driver) -> Vec<String> {
    driver.session().noted.as_ref().unwrap().sheets.concat()
}

#[test]
fn law_the_note_previewed_is_the_note_that_is_written() {
    for named in [logged("noted-decision"), usual("noted-first")] {
        let driver = opened(&named);
        let context = driver.session().base.clone();
        let asked = NoteAsked { ranked: driver.session().rank_asked(), ..NoteAsked::default() };
        let answer = note(&context, &asked, &|_| ControlFlow::Continue(())).unwrap();
        let text = written(&page(&context, &answer), Format::Text);
        let shown = sheets(&driver);
        // the sheets are parted on the screen, by a line on paper
        let kept = |line: &&str| !line.is_empty() && line.chars().any(char::is_alphanumeric);
        let there: Vec<&str> = shown.iter().map(String::as_str).filter(kept).collect();
        assert_eq!(there, text.lines().filter(kept).collect::<Vec<_>>());
        assert_eq!(driver.session().noted.as_ref().unwrap().sheets.len(), 2);
    }
}

#[test]
fn scenario_the_note_says_what_it_is_of_and_what_keeps_it_from_being_signed() {
    let mut driver = opened(&usual("noted-of"));
    let text = driver.text();
    assert!(text.contains("of the first ranked mix, no decision holds | sheet 1/2"), "{text}");
    assert!(text.contains("NOT READY FOR SIGNATURE"), "{text}");
    driver.keys("t");
    assert!(driver.text().contains("of the try of the mix screen"), "{}", driver.text());
    let text = driver.keys("Right").text();
    assert!(text.contains("sheet 2/2, agency note"), "{text}");
    let text = opened(&logged("noted-of-decision")).text();
    assert!(text.contains("of decision 4 of the log"), "{text}");
}

#[test]
fn scenario_words_of_the_user_are_in_the_note_without_asking_again() {
    let mut driver = opened(&logged("noted-words"));
    let own = sheets(&driver).join(" ");
    assert!(own.contains("keep the cold water for September"), "{own}");
    driver.held = true;
    driver.keys("w").typed(" <b>and more</b>").keys("Enter m").typed("call before noon").keys("Enter");
    assert!(!driver.waits(Lane::Note));
    let words = sheets(&driver).join(" ");
    assert!(words.contains("September <b>and more</b>") && words.contains("call before noon"), "{words}");
    // emptied, the reason is the one that was logged
    driver.keys("w Ctrl-u Enter m Ctrl-u Enter");
    assert_eq!(sheets(&driver).join(" "), own);
    // another beginning is another question
    driver.keys("b").typed("2026-07-15 06:30").keys("Enter");
    assert!(driver.waits(Lane::Note) && driver.text().contains("FROM BEFORE"), "{}", driver.text());
    driver.keys("s");
    assert!(driver.text().contains("nothing is saved"), "{}", driver.text());
    driver.settle();
    assert!(!driver.text().contains("FROM BEFORE"), "{}", driver.text());
    driver.keys("b").typed("noon").keys("Enter");
    let Some(Over::Field(field)) = &driver.model.over else { panic!("{}", driver.text()) };
    assert!(field.wrong.is_some());
}

#[test]
fn scenario_a_note_is_saved_where_it_says_and_writes_over_nothing_unasked() {
    let named = usual("noted-saved");
    let folder = ground().join(&named).join("notes");
    _ = fs::remove_dir_all(&folder);
    let mut driver = opened(&named);
    driver.keys("s");
    let Some(Over::Field(field)) = &driver.model.over else { panic!("{}", driver.text()) };
    let name = field.input.value().to_owned();
    assert!(name.starts_with("notes/2026-07-14-") && name.rsplit('.').next() == Some("html"), "{name}");
    driver.keys("Enter");
    let text = driver.text();
    assert!(text.contains("saved in noted-saved/notes/2026-07-14-"), "{text}");
    let html = fs::read_to_string(ground().join(&named).join(&name)).unwrap();
    assert!(html.starts_with("<!") && html.contains("change order"), "{html}");
    // the same name again: a second word is needed
    fs::write(ground().join(&named).join(&name), "mine").unwrap();
    driver.keys("s Enter");
    assert!(driver.text().contains("a file of this name is there"), "{}", driver.text());
    driver.keys("Esc");
    assert_eq!(fs::read_to_string(ground().join(&named).join(&name)).unwrap(), "mine");
    driver.keys("s Enter Enter");
    assert_eq!(fs::read_to_string(ground().join(&named).join(&name)).unwrap(), html);
    // other formats, by f and by the name
    driver.keys("f s Enter");
    let markdown = name.replace(".html", ".md");
    assert!(fs::read_to_string(ground().join(&named).join(&markdown)).unwrap().starts_with("# "));
    driver.keys("s").typed("notes/a.txt").keys("Enter");
    let text = fs::read_to_string(folder.join("a.txt")).unwrap();
    assert!(text.contains("NOT READY FOR SIGNATURE"), "{text}");
    driver.keys("s").typed("notes/a.pdf").keys("Enter");
    assert!(driver.text().contains("end its name in .html, .md or .txt"), "{}", driver.text());
    // after a name that is there another is typed: that one is written over nothing either
    driver.keys("Esc s").typed("notes/a.txt").keys("Enter").typed("notes/b.txt").keys("Enter");
    assert!(folder.join("b.txt").exists(), "{}", driver.text());
    driver.keys("s").typed("site.yaml/a.txt").keys("Enter");
    assert!(driver.text().contains("! "), "{}", driver.text());
}

#[test]
fn scenario_a_note_is_stopped_and_made_again() {
    let mut driver = Driver::open(Some(&usual("noted-stopped")), WIDE);
    driver.held = true;
    let text = driver.keys("7").text();
    assert!(text.contains("the note is being made") && driver.waits(Lane::Note), "{text}");
    driver.keys("Esc");
    assert!(!driver.waits(Lane::Note) && driver.text().contains("r makes the note"), "{}", driver.text());
    driver.keys("s");
    assert!(driver.text().contains("there is no note to save yet"), "{}", driver.text());
    driver.keys("r");
    driver.settle();
    assert!(driver.text().contains("sheet 1/2"), "{}", driver.text());
}
