//! What was learned, in a site file: one change and the one thing said of it, and what a sound one becomes.

use gatemix::files::site::site;
use gatemix::problem::Weight;
use gatemix::site::{Learned, Site};

use super::said;
use super::site::Case;

const DAM: &str = r#"name: Test Dam (invented)
units: { temperature: F }
utc_offset: "-07:00"
pool: { bed: 0, full: 62, table: [[0, 0], [62, 9.0e6]] }
outlets: [ { name: A, centre: 3, height: 1, width: 1 }, { name: A2, centre: 3, height: 1, width: 1 }, { name: B, centre: 30, height: 1, width: 1 } ]
learned:
  bias: 0.9
  by_level: { B: -0.36, A2: 0.5 C }
  zone_factor: 0.9
  zone_range: [0.82, 0.97]
  oxygen_gain: 0.43
  window: [2025-05-01, 2025-10-31]
  n: 41
  release: 0.54
  release_oxygen: 0.4
learning: { window_days: 400 }
"#;

/// Tried by the ratchet of all kinds of a site's problems.
pub(super) const REFUSED: &[Case] = &[
    ("bias: 0.9", "bias: 20", "learned", "learned.bias", "lies outside"),
    ("bias: 0.9", "bias: 1 m", "quantity", "learned.bias", "unit of length"),
    ("B: -0.36", "B: 30", "learned", "learned.by_level.B", "lies outside"),
    ("B: -0.36", "C: 0.3", "learned", "learned.by_level.C", "`C` is not an outlet"),
    ("B: -0.36", "A: 0.3", "learned", "learned.by_level.A2", "the level of `A2` is named twice"),
    ("zone_factor: 0.9", "zone_factor: 1.7", "learned", "learned.zone_factor", "lies outside 0.5 to 1.5"),
    (
        "zone_factor: 0.9",
        "zone_factor: 0.8",
        "learned",
        "learned.zone_range",
        "does not hold the zone factor",
    ),
    ("  zone_factor: 0.9\n", "", "learned", "learned.zone_range", "has no zone_factor"),
    ("  zone_range: [0.82, 0.97]\n", "", "learned", "learned.zone_factor", "has no zone_range"),
    ("[0.82, 0.97]", "[0.1, 0.97]", "learned", "learned.zone_range", "lies outside 0.2 to 3"),
    ("[0.82, 0.97]", "[0.82]", "pair", "learned.zone_range", "two belong here"),
    ("oxygen_gain: 0.43", "oxygen_gain: 12", "learned", "learned.oxygen_gain", "lies outside -10 to 10 mg/L"),
    ("  window: [2025-05-01, 2025-10-31]\n", "", "learned", "learned.window", "is not given"),
    ("2025-10-31]", "2025-04-31]", "learned", "learned.window", "`2025-04-31` is not a date"),
    ("2025-10-31]", "2025-04-30]", "learned", "learned.window", "before it begins"),
    ("  n: 41\n", "", "learned", "learned.n", "is not given"),
    ("n: 41", "n: 0", "learned", "learned.n", "nothing is learned from 0 days"),
    ("n: 41", "n: 4.1", "whole-number", "learned.n", "not a whole number"),
    ("release: 0.54", "release: -1", "learned", "learned.release", "lies outside"),
    ("release_oxygen: 0.4", "release_oxygen: 9", "learned", "learned.release_oxygen", "outside 0 to 5 mg/L"),
    ("bias: 0.9", "offset: 0.9", "unknown-key", "learned.offset", "unknown key"),
    ("window_days: 400", "window_days: 3", "learning", "learning.window_days", "must be 14 to 36500"),
];

fn dam(text: &str) -> Site {
    let read = site(text, "site.yaml");
    read.site.unwrap_or_else(|| panic!("{:#?}", said(&read.problems)))
}

#[test]
fn scenario_what_is_wrong_with_what_was_learned_is_said_at_its_key_and_nothing_else_is() {
    for (from, to, kind, path, words) in REFUSED {
        let text = DAM.replacen(from, to, 1);
        assert_ne!(text, DAM, "{from}");
        let read = site(&text, "site.yaml");
        let refused: Vec<_> = read.problems.iter().filter(|p| p.weight == Weight::Refused).collect();
        // a key that is gone is missed by another too where it is required
        let found = refused.iter().find(|p| p.kind == *kind && p.place.path.as_deref() == Some(*path));
        let found = found.unwrap_or_else(|| panic!("{to}: {:#?}", said(&read.problems)));
        assert!(found.words.contains(words) && found.place.line.is_some(), "{found}");
        assert!(
            refused.len() == 1 || *kind == "whole-number" || *kind == "pair",
            "{:#?}",
            said(&read.problems)
        );
        assert!(read.site.is_none(), "{found}");
    }
}

#[test]
fn scenario_what_was_learned_reaches_the_site_its_steps_without_the_offset_of_the_scale() {
    let read = dam(DAM);
    let learned = read.learned().unwrap();
    let near = |a: f64, b: f64| assert!((a - b).abs() < 1e-12, "{a} {b}");
    near(learned.bias_c.unwrap(), 0.5);
    assert_eq!(learned.by_level_c.iter().map(|l| l.0).collect::<Vec<_>>(), [0, 1]);
    near(learned.by_level_c[0].1, 0.5);
    near(learned.by_level_c[1].1, -0.2);
    near(learned.release_c.unwrap(), 0.3);
    assert_eq!((learned.zone_factor, learned.zone_range), (Some(0.9), Some((0.82, 0.97))));
    assert_eq!((learned.oxygen_gain_mg_l, learned.release_mg_l, learned.n), (Some(0.43), Some(0.4), 41));
    assert_eq!(
        learned.window.map(|w| (w.0.to_string(), w.1.to_string())),
        Some(("2025-05-01".into(), "2025-10-31".into()))
    );
    // each outlet takes on the bias of its level
    for (outlet, bias_c) in [1.0, 1.0, 0.3].into_iter().enumerate() {
        near(read.bias_c(outlet).unwrap(), bias_c);
    }
    assert_eq!(read.learning_days, 400);
    let bare = dam(&DAM[..DAM.find("learned:").unwrap()]);
    assert_eq!((bare.learned(), bare.learning_days, bare.zone_factor()), (None::<&Learned>, 730, 1.0));
    assert_eq!(bare.spreading(), bare.band);
}
