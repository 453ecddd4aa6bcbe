//! The season screen: asked when it is looked at, stopped, asked again; plans, cases and strategies; a date read.

use crossterm::event::{KeyModifiers, MouseButton, MouseEvent, MouseEventKind};
use gatemix::mix::limits::{Check, Of, Rule};
use gatemix::problem::Problem;
use gatemix::tasks::Failure;
use gatemix::tui::model::{Cell, SeasonPage, Session};
use gatemix::tui::{Done, Event, Lane, Sent, Symbols};

use crate::ahead::{answer, answer_with};
use crate::driver::Driver;
use crate::screens::{NORMAL, SMALL, WIDE};
use crate::sites::{CAST, SITE, site, usual, with};

/// The season screen with an invented answer.
fn opened(name: &str) -> Driver {
    let mut driver = Driver::open(Some(&usual(name)), NORMAL);
    driver.held = true;
    driver.symbols(Symbols::Ascii).keys("5");
    answer(&mut driver);
    driver
}

/// Plan, case and strategy shown, and whether they are what is chosen.
fn shown(session: &Session) -> (String, bool) {
    let shown = session.season_shown().unwrap();
    let run = &shown.run.run;
    (format!("{} {} {}", run.plan, run.case, run.strategy), shown.old)
}

#[test]
fn scenario_a_season_is_asked_when_looked_at_stopped_and_asked_again() {
    let mut driver = Driver::open(Some(&usual("season-asked")), NORMAL);
    driver.held = true;
    assert!(driver.question(Lane::Ahead).is_none(), "nobody looks at it yet");
    driver.keys("5");
    assert!(driver.text().contains("computing the season"), "{}", driver.text());
    driver.keys("Esc");
    assert!(
        driver.question(Lane::Ahead).is_none() && driver.text().contains("Stopped; r"),
        "{}",
        driver.text()
    );
    driver.keys("r");
    answer(&mut driver);
    assert_eq!(shown(driver.session()), ("early middling best".into(), false));
    // back again nothing needs to be asked; another pool makes it one of before
    driver.keys("1 5");
    assert!(driver.question(Lane::Ahead).is_none());
    driver.model.session_mut().unwrap().mix.cell = Cell::Pool;
    driver.keys("2 Enter").typed("58.5m").keys("Enter 5");
    assert_eq!(shown(driver.session()), ("early middling best".into(), true));
    assert!(driver.text().contains("FROM BEFORE"), "{}", driver.text());
    answer(&mut driver);
    assert_eq!(shown(driver.session()), ("early middling best".into(), false));
}

#[test]
fn scenario_cases_and_plans_are_there_at_once_and_a_strategy_is_asked_for() {
    let mut driver = opened("season-chosen");
    for (key, now) in [
        ("c", "early cool best"),
        ("c", "early warm best"),
        ("c", "early middling best"),
        ("p", "late middling best"),
    ] {
        driver.keys(key);
        assert_eq!(shown(driver.session()), (now.into(), false), "{}", driver.text());
        assert!(driver.question(Lane::Ahead).is_none(), "{now} is known");
    }
    // of the other plan no other case is known
    driver.keys("c");
    assert_eq!(shown(driver.session()), ("late middling best".into(), true));
    answer(&mut driver);
    assert_eq!(shown(driver.session()), ("late cool best".into(), false));
    driver.keys("s");
    answer(&mut driver);
    let text = driver.text();
    assert_eq!(shown(driver.session()), ("late cool thrift".into(), false), "{text}");
    assert!(text.contains("SOLVED ON THIS CASE"), "{text}");
    driver.keys("p");
    assert!(driver.text().contains("solved in this weather"), "{}", driver.text());
    driver.keys("p c");
    assert!(driver.text().contains("this case was not seen"), "{}", driver.text());
    // r solves on this one
    driver.keys("r");
    answer(&mut driver);
    assert!(driver.text().contains("SOLVED ON THIS CASE"), "{}", driver.text());
    // what is computed once is kept
    driver.keys("s");
    assert_eq!(shown(driver.session()), ("late warm thrift".into(), true), "hold is on its way");
    driver.keys("s");
    assert_eq!(shown(driver.session()), ("late warm best".into(), false));
}

#[test]
fn scenario_a_date_is_read_by_days_weeks_and_moves() {
    let mut driver = opened("season-read");
    let at = |driver: &mut Driver, keys: &str| {
        let text = driver.keys(keys).text();
        let told = text.lines().find_map(|l| l.strip_suffix(" of 120")?.rsplit_once(" day "));
        told.unwrap_or_else(|| panic!("no date is read:\n{text}")).1.parse::<u64>().unwrap()
    };
    assert_eq!(at(&mut driver, "Right Right"), 3);
    assert_eq!(at(&mut driver, "]"), 10);
    assert_eq!(at(&mut driver, "[ Left"), 2);
    assert_eq!(at(&mut driver, "End"), 120);
    assert_eq!(at(&mut driver, "Right"), 120);
    let moved = at(&mut driver, "<");
    assert!((2..120).contains(&moved), "{moved}");
    assert!(driver.text().contains("set: Lower"), "{}", driver.text());
    assert_eq!(at(&mut driver, "Left"), moved - 1);
    assert!(driver.text().contains("set: Upper"), "{}", driver.text());
    assert_eq!(at(&mut driver, "Home"), 1);
}

#[test]
fn scenario_pages_of_the_season() {
    let mut driver = opened("season-pages");
    driver.keys("t");
    assert_eq!(driver.session().season.page, SeasonPage::Beside);
    let text = driver.text();
    for piece in ["> early, middling, best", "early, warm, best", "late, middling, best", "runs out"] {
        assert!(text.contains(piece), "{piece}:\n{text}");
    }
    driver.keys("g");
    assert!(driver.text().contains("Gates and moves by date"), "{}", driver.text());
    driver.keys("Esc x");
    assert!(driver.text().contains("mg/L") && driver.session().season.oxygen, "{}", driver.text());
    for size in [NORMAL, WIDE, SMALL, (72, 20)] {
        let text = driver.resize(size).text();
        assert!(text.contains("asked 6.0 mg/L"), "{text}");
    }
}

#[test]
fn law_a_season_of_any_size_is_drawn_within_itself() {
    let mut driver = opened("season-sizes");
    for keys in ["5", "x", "t", "g"] {
        driver.resize(NORMAL).keys(keys);
        for width in (0..=130).step_by(7) {
            for height in (0..=40).step_by(3) {
                let (buffer, cursor) = driver.resize((width, height)).drawn();
                assert!(cursor.is_none_or(|c| buffer.area.contains(c)), "{width}x{height} {keys}");
            }
        }
    }
}

#[test]
fn scenario_the_mouse_reads_a_date() {
    let mut driver = opened("season-mouse");
    let press = |column, row| {
        let kind = MouseEventKind::Down(MouseButton::Left);
        Event::Mouse(MouseEvent { kind, column, row, modifiers: KeyModifiers::NONE })
    };
    driver.send(press(30, 10));
    let early = driver.session().season.day.unwrap();
    driver.send(press(40, 10));
    assert!(driver.session().season.day.unwrap() > early);
    // beside the pictures there is no date
    driver.send(press(2, 10));
    assert!(driver.session().season.day.unwrap() > early);
}

#[test]
fn scenario_without_a_plan_the_screen_says_what_to_do() {
    let mut driver = Driver::open(Some(&usual("season-none")), NORMAL);
    let text = driver.keys("5").text();
    assert!(text.contains("No season") && text.contains("plan"), "{text}");
    for keys in ["c", "p", "s", "Right", "t", "g", "x", ">", "End", "PgDn", "r", "Esc"] {
        driver.keys(keys);
    }
    assert!(driver.text().contains("No season"), "{}", driver.text());
}

/// Says that the season asked for is refused.
fn refuse(driver: &mut Driver) {
    let (generation, _) = driver.question(Lane::Ahead).unwrap();
    let problem = Problem::refused("plan-over", "the plan is over", "add rows for the days ahead");
    let refused = Err(Failure::Refused(vec![problem], driver.model.system()));
    driver.send(Event::Sent(Sent::Done(Lane::Ahead, generation, Done::Ahead(refused))));
}

#[test]
fn scenario_why_there_is_no_newer_season_is_told_beside_the_old_until_files_change() {
    let mut driver = opened("season-refused");
    driver.model.session_mut().unwrap().mix.cell = Cell::Pool;
    driver.keys("2 Enter").typed("58.5m").keys("Enter 5");
    refuse(&mut driver);
    let text = driver.text();
    assert!(text.contains("no newer") && text.contains("the plan is over"), "{text}");
    assert!(driver.question(Lane::Ahead).is_none(), "it is not asked over and over");
    driver.send(Event::FilesChanged);
    let opening = driver.question(Lane::Quick).unwrap();
    driver.answer(opening);
    answer(&mut driver);
    assert!(driver.session().seasons_now() && !driver.text().contains("the plan is over"));
}

#[test]
fn scenario_two_plans_of_one_name_are_two_plans() {
    let mut driver = Driver::open(Some(&usual("season-names")), NORMAL);
    driver.held = true;
    driver.keys("5");
    answer_with(&mut driver, |ahead| {
        ahead.answer.others.iter_mut().for_each(|run| run.run.plan = "early".to_owned());
    });
    let file = |driver: &Driver| driver.session().season_shown().unwrap().run.plan.file.clone();
    assert_eq!(file(&driver), "plans/early.csv");
    driver.keys("p");
    assert_eq!(file(&driver), "plans/late.csv", "{}", driver.text());
    driver.keys("p");
    assert_eq!(file(&driver), "plans/early.csv");
    let text = driver.keys("t").text();
    assert_eq!(text.matches("early, middling, best").count(), 2, "{text}");
}

#[test]
fn scenario_a_limit_of_the_change_that_no_mix_keeps_is_told_with_the_date() {
    let mut driver = Driver::open(Some(&usual("season-past")), NORMAL);
    driver.held = true;
    driver.symbols(Symbols::Ascii).keys("5");
    let check = Check { rule: Rule::MaxMoves, of: Of::Whole, item: 0, found: 3.0, bound: 1.0, room: -2.0 };
    answer_with(&mut driver, |ahead| {
        let decisions = &mut ahead.answer.main.run.decisions;
        // the invented decisions break nothing
        decisions[1].past = vec![check];
    });
    assert!(!driver.text().contains("NO MIX KEEPS"), "{}", driver.text());
    driver.keys("]");
    assert!(driver.text().contains("NO MIX KEEPS"), "{}", driver.text());
    driver.keys("]");
    assert!(!driver.text().contains("NO MIX KEEPS"), "{}", driver.text());
}

#[test]
fn scenario_the_buffer_is_told_beside_what_is_asked() {
    let text = with(SITE, "high: 14,", "high: 14, buffer: 0.5,");
    let mut driver = Driver::open(Some(&site("season-buffer", &text, &[("a.csv", CAST)])), NORMAL);
    driver.held = true;
    driver.keys("5");
    answer(&mut driver);
    assert!(driver.text().contains("asked 9.0 to 14.0 C,"), "{}", driver.text());
    assert!(driver.text().contains("planned 9.5 to 13.5 C"), "{}", driver.text());
}

#[test]
fn scenario_what_is_not_judged_is_not_told_as_kept() {
    let mut driver = Driver::open(Some(&usual("season-unjudged")), WIDE);
    driver.held = true;
    driver.keys("5");
    answer_with(&mut driver, |ahead| {
        let told = &mut ahead.answer.main.outcome.targets[0];
        let oxygen = told.oxygen.as_mut().unwrap();
        (oxygen.unknown, oxygen.judged) = (oxygen.unknown + oxygen.judged, 0);
    });
    let text = driver.text();
    assert!(text.contains("holding at dam: 64 days") && text.contains("oxygen not"), "{text}");
}
