//! The price of the mixes of a ranking: asked on its screen, stopped, asked again, and never that of another ranking.

use gatemix::tui::model::Page;
use gatemix::tui::{Event, Lane, Sent, Work};

use crate::ahead::answer;
use crate::driver::Driver;
use crate::screens::NORMAL;
use crate::sites::usual;

/// The rank screen of a site, its prices asked for.
fn asked(name: &str) -> Driver {
    let mut driver = Driver::open(Some(&usual(name)), NORMAL);
    driver.held = true;
    driver.keys("3 p");
    driver
}

#[test]
fn scenario_prices_are_asked_told_stopped_and_asked_again() {
    let mut driver = asked("price-asked");
    assert!(driver.text().contains("computing the prices"), "{}", driver.text());
    let (generation, work) = driver.question(Lane::Ahead).unwrap();
    assert!(matches!(work, Work::Prices { .. }));
    driver.send(Event::Sent(Sent::Progress(Lane::Ahead, generation, 0.25)));
    assert!(driver.text().contains("25 %"), "{}", driver.text());
    driver.keys("Esc");
    assert!(driver.text().contains("Stopped; r computes the prices"), "{}", driver.text());
    driver.keys("r");
    answer(&mut driver);
    let text = driver.text();
    for piece in [">  1  runs out no sooner or later", "   2  runs out 1 day later", "less than we can tell"]
    {
        assert!(text.contains(piece), "{piece}:\n{text}");
    }
    driver.keys("p");
    assert_eq!(driver.session().rank.page, Page::List);
    driver.keys("p");
    assert!(driver.question(Lane::Ahead).is_none(), "they are known");
    driver.keys("Esc");
    assert_eq!(driver.session().rank.page, Page::List);
}

#[test]
fn scenario_another_ranking_has_no_prices_yet() {
    let mut driver = asked("price-old");
    answer(&mut driver);
    assert!(driver.session().prices_now().is_some());
    driver.keys("t").typed("45m3/s").keys("Enter");
    // the ranking shown is still the one that was priced
    assert!(driver.session().prices_now().is_some());
    let ranking = driver.question(Lane::Long).unwrap();
    driver.answer(ranking);
    assert!(driver.session().prices_now().is_none());
    assert!(driver.text().contains("Not computed for this ranking"), "{}", driver.text());
}

#[test]
fn scenario_the_season_and_the_prices_give_way_to_one_another() {
    let mut driver = asked("price-way");
    driver.keys("5");
    assert!(matches!(driver.question(Lane::Ahead), Some((_, Work::Season(_)))));
    driver.keys("3 r");
    assert!(matches!(driver.question(Lane::Ahead), Some((_, Work::Prices { .. }))));
    driver.keys("5");
    answer(&mut driver);
    assert!(driver.session().seasons_now());
}

#[test]
fn scenario_without_a_plan_there_are_no_prices() {
    let mut driver = Driver::open(Some(&usual("price-none")), NORMAL);
    let text = driver.keys("3 p").text();
    assert!(text.contains("No prices") && text.contains("plan"), "{text}");
}
