//! Random keys and mouse events on the model: nothing panics, and what must hold holds.

use crossterm::event::{
    Event as TermEvent, KeyCode, KeyEvent, KeyEventKind, KeyModifiers, MouseButton, MouseEvent,
    MouseEventKind,
};
use gatemix::tui::model::{Choice, Over, Screen, Stage};
use gatemix::tui::{Event, Lane, Sent, Symbols, TABLE, Theme};
use rand_pcg::Pcg64Mcg;
use rand_pcg::rand_core::{Rng, SeedableRng};
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::driver::{Driver, key};
use crate::sites::{CAST, SITE, ground, site, usual, with};
use crate::{ahead, record};

/// Events of the whole storm.
const EVENTS: usize = 100_000;
/// One question in so many is answered: several keys may come before an answer, as they do to the loop.
const ANSWERED: u64 = 12;
/// The same of the ranking.
const RANKED: u64 = 60;

struct Dice(Pcg64Mcg);

impl Dice {
    fn below(&mut self, count: u64) -> u64 {
        self.0.next_u64() % count.max(1)
    }

    fn small(&mut self, count: u16) -> u16 {
        u16::try_from(self.below(u64::from(count))).unwrap()
    }

    fn of<'a, T>(&mut self, list: &'a [T]) -> &'a T {
        &list[usize::try_from(self.below(list.len() as u64)).unwrap()]
    }
}

/// Keys that no table needs to know.
const OTHERS: &[KeyCode] = &[
    KeyCode::Backspace,
    KeyCode::Delete,
    KeyCode::Insert,
    KeyCode::F(1),
    KeyCode::F(12),
    KeyCode::Null,
    KeyCode::CapsLock,
    KeyCode::Char('\u{7}'),
    KeyCode::Char('底'),
    KeyCode::Char('\u{301}'),
    KeyCode::Char('\u{202e}'),
];
const TYPED: &[char] = &['0', '1', '2', '5', '9', '.', ',', '-', ' ', 'c', 'f', 's', 'F', 'm', '%', 'e'];
const PASTED: &[&str] =
    &["12", "650 cfs", "1e400", "-3", "\u{1b}[2J\u{7}x", "底\n底", "", "2026-07-15 12:00", "nan"];

fn random_key(dice: &mut Dice) -> KeyEvent {
    let modifiers = match dice.below(20) {
        0 => KeyModifiers::CONTROL,
        1 => KeyModifiers::ALT,
        2 => KeyModifiers::SHIFT,
        _ => KeyModifiers::NONE,
    };
    let code = match dice.below(10) {
        0 => *dice.of(OTHERS),
        1 | 2 => KeyCode::Char(*dice.of(TYPED)),
        3 => KeyCode::Char(char::from(32 + u8::try_from(dice.below(95)).unwrap())),
        _ => dice.of(TABLE).key,
    };
    let kind = if dice.below(30) == 0 { KeyEventKind::Release } else { KeyEventKind::Press };
    KeyEvent { kind, ..KeyEvent::new(code, modifiers) }
}

fn random_mouse(dice: &mut Dice) -> MouseEvent {
    let button = *dice.of(&[MouseButton::Left, MouseButton::Left, MouseButton::Right, MouseButton::Middle]);
    let kind = match dice.below(8) {
        0 => MouseEventKind::ScrollUp,
        1 => MouseEventKind::ScrollDown,
        2 => MouseEventKind::Moved,
        3 => MouseEventKind::Up(button),
        4 => MouseEventKind::Drag(button),
        _ => MouseEventKind::Down(button),
    };
    MouseEvent { kind, column: dice.small(210), row: dice.small(70), modifiers: KeyModifiers::NONE }
}

fn random_event(dice: &mut Dice) -> TermEvent {
    match dice.below(20) {
        0 => TermEvent::Resize(dice.small(201), dice.small(61)),
        1 => TermEvent::Paste((*dice.of(PASTED)).to_owned()),
        2..=4 => TermEvent::Mouse(random_mouse(dice)),
        _ => TermEvent::Key(random_key(dice)),
    }
}

/// What must hold after any event.
fn holds(driver: &Driver) {
    match &driver.model.stage {
        Stage::Opening { .. } => {}
        Stage::Sites { list, at, .. } => assert!(*at < list.len().max(1)),
        Stage::Broken { problems, scroll, .. } => assert!(*scroll < problems.len().max(1)),
        Stage::Site(session) => {
            let (draft, site) = (session.draft(), session.base.site());
            assert!(draft.at < draft.tries.len(), "the board shows a try");
            assert!(draft.beside.is_none_or(|b| b < draft.tries.len() && b != draft.at), "{draft:?}");
            assert!(draft.without.iter().all(|o| *o < site.outlets.len()));
            assert!(Screen::ALL.iter().any(|s| s.1 == session.screen));
            let cells = session.mix.cell.row().cells(site);
            assert!(cells.contains(&session.mix.cell), "{:?}", session.mix.cell);
            let days = session.season_shown().map_or(&[][..], |s| &s.run.run.days);
            let read = session.season.day;
            assert!(read.is_none_or(|day| days.is_empty() || days.iter().any(|d| d.date == day)), "{read:?}");
            let (past, span) = (session.past_days(), session.past_span());
            assert!(
                span.end <= past.len() && session.past_read().is_none_or(|at| span.contains(&at)),
                "{span:?}"
            );
            let decisions = session.decisions().len();
            assert!(session.decision_at().is_none_or(|at| at < decisions), "of {decisions}");
            let sheets = session.noted.as_ref().map_or(0, |noted| noted.sheets.len());
            assert!(session.note.sheet < sheets.max(1), "{} of {sheets}", session.note.sheet);
            let mixes = session.ranked.as_ref().map_or(0, |r| r.answer.mixes.len());
            assert!(session.rank.at < mixes.max(1), "{} of {mixes}", session.rank.at);
        }
    }
    if let Some(Over::Form(form)) = &driver.model.over {
        assert!(form.at < form.fields.len());
    }
    if let Some(Over::Order(at) | Over::Drill(at) | Over::Settings(at)) = driver.model.over {
        assert!(at < 100);
    }
}

/// No cell holds what steers a terminal.
fn harmless(buffer: &Buffer) {
    for cell in &buffer.content {
        let bad = |c: char| c.is_control() || ('\u{202a}'..='\u{202e}').contains(&c);
        assert!(!cell.symbol().chars().any(bad), "{:?}", cell.symbol());
    }
}

/// Undo and redo, by the keys, lead back to the same draft.
fn there_and_back(driver: &mut Driver) {
    let Some(session) = driver.model.session() else { return };
    let on_mix = session.screen == Screen::Mix && driver.model.over.is_none();
    if !on_mix || !session.history.clone().undo() {
        return;
    }
    let before = session.draft().clone();
    driver.send(Event::Key(key("u")));
    assert_ne!(driver.session().draft(), &before);
    driver.send(Event::Key(key("r")));
    assert_eq!(driver.session().draft(), &before);
}

/// A storm on a site, from a seed.
fn storm(seed: u64, events: usize) {
    ground();
    let odd = with(SITE, "name: Upper", "name: \"上\\u0007\\u202E門\"");
    let odd = with(&odd, "Upper: 20", "\"上\\u0007\\u202E門\": 20");
    let names = [
        usual("storm"),
        site("storm-odd", &odd, &[("a.csv", CAST)]),
        site("storm-broken", &with(SITE, "bed: 0", "bed: 70"), &[("a.csv", CAST)]),
    ];
    let choice = |name: &String| Choice { name: name.clone(), named: name.clone(), demonstration: false };
    let list: Vec<Choice> = names.iter().map(choice).collect();
    let mut dice = Dice(Pcg64Mcg::seed_from_u64(seed));
    let mut driver = Driver::open(Some(&names[0]), (120, 40));
    driver.held = true;
    driver.listed = Some(list);
    let mut late = Vec::new();
    let mut drawn = 0;
    for number in 0..events {
        match random_event(&mut dice) {
            TermEvent::Key(key) => driver.send(Event::Key(key)),
            TermEvent::Mouse(mouse) => driver.send(Event::Mouse(mouse)),
            TermEvent::Paste(text) => driver.send(Event::Paste(text)),
            TermEvent::Resize(width, height) => driver.send(Event::Resize(width, height)),
            _ => {}
        }
        // seasons are invented: what is tried is what the screen does with them
        if dice.below(ANSWERED) == 0 && driver.waits(Lane::Ahead) {
            ahead::answer(&mut driver);
        }
        if dice.below(ANSWERED) == 0 && driver.waits(Lane::Needed) {
            ahead::answer_left(&mut driver);
        }
        if dice.below(ANSWERED) == 0 && driver.waits(Lane::Past) {
            record::answer(&mut driver);
        }
        let lanes = [
            (Lane::Note, RANKED),
            (Lane::Quick, ANSWERED),
            (Lane::Aside, ANSWERED),
            (Lane::Down, ANSWERED),
            (Lane::Long, RANKED),
        ];
        for (lane, one_in) in lanes {
            if dice.below(one_in) != 0 {
                continue;
            }
            let Some((generation, work)) = driver.question(lane) else { continue };
            match dice.below(10) {
                // lost
                0 => {}
                // late
                1 => late.push((generation, work)),
                2 => {
                    driver.send(Event::Sent(Sent::Progress(lane, generation, 0.5)));
                    driver.answer((generation, work));
                }
                _ => driver.answer((generation, work)),
            }
        }
        match dice.below(400) {
            0 => driver.send(Event::FilesChanged),
            1 | 2 => {
                if let Some(question) = late.pop() {
                    driver.answer(question);
                }
            }
            3 => there_and_back(&mut driver),
            // out of where nothing but a choice leads on
            4 if driver.model.session().is_none() => {
                driver.send(Event::FilesChanged);
                driver.settle();
                driver.keys("Esc o Up Up Enter");
                driver.settle();
            }
            _ => {}
        }
        holds(&driver);
        if number % 20 == 0 {
            let symbols = *dice.of(&[Symbols::Braille, Symbols::Block, Symbols::Ascii]);
            let theme = *dice.of(&[Theme::Palette, Theme::Ansi, Theme::Mono]);
            let size = (dice.small(201), dice.small(61));
            driver.resize(size).theme(theme).symbols(symbols);
            let (buffer, cursor) = driver.drawn();
            assert!(cursor.is_none_or(|c| Rect::new(0, 0, size.0, size.1).contains(c)));
            harmless(&buffer);
            drawn += 1;
        }
    }
    assert_eq!(drawn, events.div_ceil(20));
    // the storm must have been somewhere
    driver.settle();
    assert!(driver.quit, "a storm holds the key that quits");
    assert!(driver.model.generation > 1000, "{}", driver.model.generation);
}

/// In two halves, so that both processors of a small machine are used.
#[test]
fn law_a_storm_of_keys_and_mouse_events_never_panics() {
    storm(1, EVENTS / 2);
}

#[test]
fn law_another_storm_never_panics() {
    storm(2, EVENTS / 2);
}
