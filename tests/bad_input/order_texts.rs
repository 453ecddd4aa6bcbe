//! Texts of a change order in a site file: one change and the one thing said of it, and what a sound one becomes.

use gatemix::files::site::site;
use gatemix::problem::Weight;
use gatemix::site::{HoldPoint, OrderTexts};

use super::said;
use super::site::{Case, SOUND};

const ORDER: &str = r#"order:
  to: " shift crew "
  shut_first: true
  through_bands: true
  hold_points: [ { after: Cone, text: wait ten minutes }, { text: call the control room } ]
  stop_when: [ a gate sticks, "<script>alert(1)</script>" ]
  may_cancel: the control room
  warning: sirens
  sign: [ Ordered by, Dam safety ]
"#;

/// Tried by the ratchet of all kinds of a site's problems.
pub(super) const REFUSED: &[Case] = &[
    ("shift crew", "", "order-text", "order.to", "this text is empty"),
    ("shut_first: true", "shut_first: maybe", "wrong-type", "order.shut_first", "true or false"),
    ("through_bands: true", "throughbands: true", "unknown-key", "order.throughbands", "unknown key"),
    ("after: Cone", "after: Con", "unknown-outlet", "order.hold_points[0].after", "no outlet is named `Con`"),
    (", text: wait ten minutes", "", "missing-key", "order.hold_points[0].text", "text is missing"),
    ("call the control room", "' '", "order-text", "order.hold_points[1].text", "this text is empty"),
    ("a gate sticks", "''", "order-text", "order.stop_when[0]", "this text is empty"),
    ("[ Ordered by, Dam safety ]", "Ordered by", "wrong-type", "order.sign", "list"),
    (
        "[ Ordered by, Dam safety ]",
        "[a, b, c, d, e, f, g, h, i, j, k, l, m]",
        "order-text",
        "order.sign",
        "13 texts, 12 at most",
    ),
];

#[test]
fn scenario_what_is_wrong_with_the_texts_of_an_order_is_said_at_its_key() {
    let sound = format!("{SOUND}{ORDER}");
    let long = "x".repeat(401);
    let too_long = ("sirens", long.as_str(), "order-text", "order.warning", "401 characters, 400 at most");
    for (from, to, kind, path, words) in REFUSED.iter().chain([&too_long]) {
        assert_eq!(sound.matches(from).count(), 1, "{from}");
        let read = site(&sound.replacen(from, to, 1), "site.yaml");
        let refused: Vec<_> = read.problems.iter().filter(|p| p.weight == Weight::Refused).collect();
        let [found] = &refused[..] else { panic!("{to}: {:#?}", said(&read.problems)) };
        assert_eq!((found.kind, found.place.path.as_deref()), (*kind, Some(*path)), "{found}");
        assert!(found.words.contains(words) && found.place.line.is_some(), "{found}");
        assert!(read.site.is_none(), "{found}");
    }
}

#[test]
fn scenario_the_texts_of_an_order_are_kept_as_written_and_none_is_made_up() {
    let order = site(&format!("{SOUND}{ORDER}"), "site.yaml").site.unwrap().order;
    let text = str::to_owned;
    assert_eq!(
        order,
        OrderTexts {
            to: Some(text("shift crew")),
            shut_first: true,
            through_bands: true,
            hold_points: vec![
                HoldPoint { after: Some(2), text: text("wait ten minutes") },
                HoldPoint { after: None, text: text("call the control room") },
            ],
            stop_when: vec![text("a gate sticks"), text("<script>alert(1)</script>")],
            may_cancel: Some(text("the control room")),
            warning: Some(text("sirens")),
            sign: vec![text("Ordered by"), text("Dam safety")],
        }
    );
    assert_eq!(site(SOUND, "site.yaml").site.unwrap().order, OrderTexts::default());
}
