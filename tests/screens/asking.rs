//! What can be asked for on the season screen beside plan and case: a gate schedule, how often is decided, the cold water
//! needed on a date.

use gatemix::tui::model::SeasonPage;
use gatemix::tui::{Event, Lane, Sent, Symbols, Work};

use crate::ahead::{answer, answer_left};
use crate::driver::Driver;
use crate::screens::{NORMAL, WIDE};
use crate::sites::{beside, usual};

const SCHEDULE: &str = "date,Upper,Lower,Sluice\n2026-07-14,20,10,0\n2026-08-14,,30,0\n";

/// The season screen with an invented answer.
fn opened(name: &str) -> Driver {
    let named = usual(name);
    beside(&named, &[("schedules/two-steps.csv", SCHEDULE)]);
    let mut driver = Driver::open(Some(&named), NORMAL);
    driver.held = true;
    driver.symbols(Symbols::Ascii).keys("5");
    answer(&mut driver);
    driver
}

/// Strategy shown, and whether it is the one chosen.
fn shown(driver: &Driver) -> (String, bool) {
    let shown = driver.session().season_shown().unwrap();
    (shown.run.run.strategy.clone(), shown.old)
}

#[test]
fn scenario_a_gate_schedule_of_the_folder_is_one_of_the_strategies() {
    let mut driver = opened("asking-schedule");
    driver.keys("s");
    answer(&mut driver);
    assert_eq!(shown(&driver), ("thrift".into(), false));
    driver.keys("s");
    let asked = driver.session().season_question().asked;
    assert_eq!((asked.strategy, asked.schedule.as_deref()), (None, Some("two-steps.csv")));
    answer(&mut driver);
    assert_eq!(shown(&driver), ("schedule two-steps".into(), false));
    assert!(driver.text().contains("| schedule two-steps, every 7 d"), "{}", driver.text());
    // what prices are asked with leaves the gates to the ranking
    assert_eq!(driver.session().price_asked().schedule, None);
    driver.keys("s");
    let asked = driver.session().season_question().asked;
    assert_eq!((asked.strategy.as_deref(), asked.schedule), (Some("hold"), None));
    // what is known is there at once
    driver.keys("s s s");
    assert_eq!(shown(&driver), ("schedule two-steps".into(), false));
    let text = driver.keys("t").resize(WIDE).text();
    assert!(text.contains("early, cool, schedule two-steps"), "{text}");
}

#[test]
fn scenario_how_often_is_decided_is_a_change_that_can_be_taken_back() {
    let mut driver = opened("asking-every");
    assert!(driver.text().contains("best, every 7 d"), "{}", driver.text());
    for (days, shown) in [("14", true), ("1", false), ("3", false)] {
        driver.keys("e");
        let old = driver.text();
        assert!(old.contains("FROM BEFORE"), "{old}");
        if shown {
            answer(&mut driver);
            assert!(driver.text().contains(&format!("best, every {days} d")), "{}", driver.text());
        }
        assert_eq!(driver.session().season_question().asked.every.as_deref(), Some(days));
    }
    // the site's own is told by no number
    driver.keys("e");
    assert_eq!(driver.session().season_question().asked.every, None);
    assert!(driver.text().contains("best, every 7 d"), "{}", driver.text());
    driver.keys("u u u");
    let text = driver.text();
    assert!(
        text.contains("best, every 14 d") && !text.contains("FROM BEFORE"),
        "what was computed is kept:\n{text}"
    );
    // seasons decided otherwise do not stand beside these
    let table = driver.keys("t").text();
    assert_eq!(table.matches("early, middling, best").count(), 1, "{table}");
    driver.keys("u u");
    assert!(driver.text().contains("nothing to take back"), "{}", driver.text());
}

#[test]
fn scenario_another_order_of_the_criteria_is_another_season() {
    let mut driver = opened("asking-order");
    driver.keys("3 c Down + Enter 5");
    let asked = driver.session().season_question().asked;
    assert_eq!(asked.order.as_deref(), Some("range,oxygen,preferred,cold_water,moves"));
    assert!(driver.text().contains("FROM BEFORE"), "{}", driver.text());
}

#[test]
fn scenario_the_cold_water_needed_on_a_date_is_told_case_by_case() {
    let mut driver = opened("asking-left");
    driver.keys("] ] l");
    let (generation, work) = driver.question(Lane::Needed).unwrap();
    let Work::Needed(question, date) = work else { panic!("it is asked in its own lane") };
    assert_eq!((date.to_string(), question.asked.every), ("2026-07-28".to_owned(), None));
    driver.send(Event::Sent(Sent::Progress(Lane::Needed, generation, 0.25)));
    assert!(driver.text().contains("needed on 07-28: sought, 25 %,"), "{}", driver.text());
    driver.keys("Esc");
    assert!(driver.question(Lane::Needed).is_none() && driver.text().contains("stopped; l on the season"));
    driver.keys("l l");
    answer_left(&mut driver);
    let text = driver.text();
    assert!(text.contains("needed on 07-28 for later days:") && text.contains("SHORT 12.00 hm3"), "{text}");
    let text = driver.resize(WIDE).text();
    let right: Vec<String> = text.lines().skip(4).map(|l| l.chars().skip(79).collect()).collect();
    let told = right.join(" ").split_whitespace().collect::<Vec<_>>().join(" ");
    for piece in [
        "- middling: 62.00 hm3, SHORT 12.00 hm3, 3 days outside remain",
        "- warm: 41.00 hm3, spare 9.00 hm3, then no day outside",
        "- cool: not known, no outlet is usable",
    ] {
        assert!(told.contains(piece), "{piece}:\n{text}");
    }
    // in full beside the other dates; of another date nothing is told; it is kept for this one
    assert!(driver.keys("g").text().contains("Cold water needed on 2026-07-28"), "{}", driver.text());
    assert!(!driver.keys("g Right").text().contains("needed on"), "{}", driver.text());
    assert!(driver.keys("Left").text().contains("needed on 07-28"), "{}", driver.text());
    // every case is told, so another case needs no other search; another plan does
    assert!(driver.keys("c l").text().contains("needed on 07-28"), "{}", driver.text());
    assert!(driver.question(Lane::Needed).is_none(), "it is known");
    assert!(!driver.keys("c c p").text().contains("needed on"), "{}", driver.text());
    driver.keys("t l");
    assert_eq!(driver.session().season.page, SeasonPage::Pictures, "where it is told");
    assert!(driver.waits(Lane::Needed));
}

#[test]
fn scenario_why_nothing_is_needed_on_a_date_is_told() {
    let mut driver = Driver::open(Some(&usual("asking-none")), NORMAL);
    assert!(driver.keys("5 l").text().contains("no season to read a date of"), "{}", driver.text());
    let mut driver = opened("asking-refused");
    driver.keys("l");
    let question = driver.question(Lane::Needed).unwrap();
    driver.answer(question);
    assert!(driver.text().contains("the site has no plan of a season"), "{}", driver.text());
}

#[test]
fn scenario_the_days_outside_say_by_what() {
    let mut driver = opened("asking-outside");
    let text = driver.text();
    assert!(text.contains("outside C ") && !text.contains("outside O2"), "{text}");
    assert!(driver.keys("x").text().contains("outside O2"), "{}", driver.text());
    let text = driver.resize(WIDE).text();
    assert!(text.contains("outside C ") && text.contains("outside O2"), "{text}");
    assert!(text.contains("holding at dam: 64 days, 64 by") && text.contains("34 by oxygen"), "{text}");
}

#[test]
fn scenario_the_signs_of_the_pictures_are_told_at_every_size() {
    let mut driver = opened("asking-signs");
    for (size, signs) in [
        (
            WIDE,
            &["= open", "- zone limit", "x lost", "~ thermocline", "* release", "- asked", ": attainable"][..],
        ),
        (NORMAL, &["* release", "- asked", ": attainable"]),
    ] {
        let text = driver.resize(size).keys("]").text();
        for sign in signs {
            assert!(text.contains(sign), "{sign}:\n{text}");
        }
    }
    let text = driver.keys("PgDn PgDn PgDn PgDn").text();
    assert!(text.contains("in the pool: = open"), "{text}");
}

#[test]
fn scenario_the_key_of_the_prices_is_shown_on_the_usual_terminal() {
    let mut driver = opened("asking-hints");
    let text = driver.keys("3").text();
    assert!(text.contains("p price"), "{text}");
    let text = driver.keys("5").text();
    for hint in ["s strategy", "e every", "l left", "t table"] {
        assert!(text.contains(hint), "{hint}:\n{text}");
    }
}
