use crossterm::event::KeyCode::Char;

use super::*;

#[test]
fn law_no_key_stands_twice_in_a_place() {
    for (i, a) in TABLE.iter().enumerate() {
        for b in &TABLE[i + 1..] {
            let same = a.place == b.place && a.key == b.key && a.ctrl == b.ctrl;
            assert!(!same, "{:?} {:?} stands twice", a.place, a.key);
        }
    }
}

#[test]
fn law_every_action_of_a_place_is_told() {
    // a key without words shares the line of another that has them, just before it
    for pair in TABLE.windows(2) {
        assert!(!pair[1].words.is_empty() || pair[0].place == pair[1].place, "{:?}", pair[1].key);
    }
    assert!(Place::HEADINGS.iter().all(|(p, _)| TABLE.iter().any(|b| b.place == *p)));
}

#[test]
fn scenario_a_key_let_go_asks_for_nothing() {
    let mut event = KeyEvent::new(Char('q'), KeyModifiers::NONE);
    assert_eq!(action(&event, &[Place::Pool, Place::Everywhere]), Some(Action::Quit));
    event.kind = KeyEventKind::Release;
    assert_eq!(action(&event, &[Place::Pool, Place::Everywhere]), None);
}
