//! Gauges as a person reads them, at every size.

use chrono::DateTime;

use super::*;
use crate::tasks::{self, Context, MixAnswer, Word};
use crate::tui::{Role, Symbols, Theme};

const SYMBOLS: [Symbols; 3] = [Symbols::Braille, Symbols::Block, Symbols::Ascii];

fn look(symbols: Symbols) -> Look {
    Look { symbols, theme: Theme::Palette }
}

fn drawn(g: &Gauge, width: u16, height: u16, symbols: Symbols) -> Vec<String> {
    let area = Rect::new(0, 0, width, height);
    let mut buf = Buffer::empty(area);
    gauge(g, area, &mut buf, look(symbols));
    lines(&buf)
}

fn lines(buf: &Buffer) -> Vec<String> {
    let line = |y| (0..buf.area.width).map(|x| buf[(x, y)].symbol()).collect::<String>();
    (0..buf.area.height).map(|y| line(y).trim_end().to_owned()).collect()
}

/// 48 to 56 F, preferred 52 F; tried 54.5 F, now 54.9 F.
fn warm() -> Gauge {
    let held = Held {
        name: "summer".into(),
        point: None,
        low: Some(80.0 / 9.0),
        high: Some(120.0 / 9.0),
        preferred: Some(100.0 / 9.0),
        buffer: 0.0,
        value: Some(12.5),
        statistic: "daily mean".into(),
        standing: Standing::Inside,
        by: Some(0.0),
        share: Some(0.92),
        share_both: Some(0.55),
        governs: false,
        example: false,
    };
    Gauge {
        title: "Temperature",
        dimension: Dimension::Temperature,
        system: System::Us,
        note: Some("at 600 cfs".into()),
        targets: vec![held],
        no_target: "no target on this date",
        tried: Reading { value: Some(12.5), band: Some([11.9, 13.2]) },
        now: Some(Reading { value: Some(12.7), band: Some([12.1, 13.4]) }),
        attainable: Attainable::Known([10.4, 14.6]),
    }
}

/// Two rules, the second with a range open below and a buffer, missed by a hair.
fn two_rules() -> Gauge {
    let mut g = warm();
    let mut strict = g.targets[0].clone();
    strict.name = "lower river".into();
    (strict.low, strict.high, strict.preferred, strict.buffer) = (None, Some(13.0), None, 1.0);
    (strict.value, strict.statistic) = (Some(12.01), "daily max".into());
    (strict.standing, strict.by, strict.governs) = (Standing::Above, Some(0.01), true);
    (strict.share, strict.share_both) = (Some(0.4), None);
    g.targets.insert(0, strict);
    g
}

fn aired() -> Gauge {
    let mut g = warm();
    let held = &mut g.targets[0];
    (held.low, held.high, held.preferred, held.share_both) = (Some(7.0), None, None, None);
    (held.value, held.standing, held.share) = (None, Standing::Unknown, None);
    g.targets[0].by = None;
    (g.title, g.dimension, g.note) = ("Oxygen", Dimension::Concentration, None);
    (g.tried, g.now, g.attainable) = (Reading::default(), None, Attainable::Computing);
    g
}

#[test]
fn scenario_a_gauge_as_it_is_read() {
    assert_eq!(
        drawn(&warm(), 58, 8, Symbols::Ascii),
        [
            "Temperature F                                   at 600 cfs",
            "summer, 92 % of cases inside, 55 % in oxygen too",
            "48.0 to 56.0 F, P preferred 52.0 F",
            "range      [=======P=======]         inside",
            "tried      :          |-o--|         54.5 F (53.4 to 55.8)",
            "now        :           |-o-|         54.9 F (53.8 to 56.1)",
            "attainable :    <--------------->    50.7 to 58.3 F",
            "           48 50  52  54  56  58  60",
        ]
    );
}

#[test]
fn scenario_a_narrow_gauge_sets_words_over_bars_where_there_are_rows() {
    assert_eq!(
        drawn(&warm(), 36, 13, Symbols::Braille),
        [
            "Temperature F             at 600 cfs",
            "summer, 92 % of cases inside",
            "55 % in oxygen too, 48.0 to 56.0 F",
            "P preferred 52.0 F",
            "range inside",
            "[═══════════P═══════════]",
            "tried 54.5 F (53.4 to 55.8)",
            "┊               ├──o───┤┊",
            "now 54.9 F (53.8 to 56.1)",
            "┊                ├──o───┤",
            "attainable 50.7 to 58.3 F",
            "┊       <─────────────────────>",
            "48   50    52    54    56    58   60",
        ]
    );
    assert_eq!(
        drawn(&warm(), 36, 4, Symbols::Ascii),
        [
            "Temperature F             at 600 cfs",
            "summer, 92 % of cases inside",
            "range    [==P==]    inside",
            "tried    :   |o|    54.5 (53.4-55.8)",
        ]
    );
}

#[test]
fn scenario_several_rules_the_governing_first_and_a_hair_is_no_nothing() {
    assert_eq!(
        drawn(&two_rules(), 64, 12, Symbols::Ascii),
        [
            "Temperature F                                         at 600 cfs",
            "lower river, governs, daily max 53.6 F, 40 % of cases inside",
            "at most 55.4 F, buffer 1.8 F",
            "range      <=============---]           ABOVE by less than 0.1 F",
            "summer, 92 % of cases inside, 55 % in oxygen too, 48.0 to 56.0 F",
            "P preferred 52.0 F",
            "range      [========P========]          inside",
            "tried                  |--o--|          54.5 F (53.4 to 55.8)",
            "now                     |--o-|          54.9 F (53.8 to 56.1)",
            "attainable       <---------------->     50.7 to 58.3 F",
            "           +---+----+----+---+----+---+",
            "           48 50   52   54  56   58  60",
        ]
    );
    // a target that finds no row is counted
    let low = drawn(&two_rules(), 64, 4, Symbols::Ascii);
    assert!(low[0].ends_with("and 1 more target"), "{low:?}");
    assert!(low.iter().any(|l| l.ends_with("ABOVE by less than 0.1 F")), "{low:?}");
}

#[test]
fn scenario_unknown_oxygen_and_no_target_are_said() {
    assert_eq!(
        drawn(&aired(), 50, 6, Symbols::Ascii),
        [
            "Oxygen mg/L",
            "summer, at least 7.0 mg/L",
            "at least               [==========> UNKNOWN",
            "tried                  :            not measured",
            "attainable             :            being computed",
            "           6.0  6.5   7.0   7.5 8.0",
        ]
    );
    let mut g = aired();
    g.targets.clear();
    let lines = drawn(&g, 50, 6, Symbols::Ascii);
    assert_eq!(lines[1], "no target on this date");
    assert!(lines[2].starts_with("tried") && lines[2].ends_with("not measured"), "{lines:?}");
}

#[test]
fn scenario_what_lies_beyond_the_axis_stands_at_its_edge() {
    let mut g = warm();
    g.attainable = Attainable::Before([4.0, 30.0]);
    let lines = drawn(&g, 64, 8, Symbols::Ascii);
    assert_eq!(lines[6], "attainable <39.2----------------86.0> 39.2 to 86.0 (from before)");
}

#[test]
fn law_no_size_panics_and_nothing_leaves_the_area() {
    for g in [warm(), two_rules(), aired()] {
        for symbols in SYMBOLS {
            for (width, height) in (0..=40).flat_map(|w| (0..=20).map(move |h| (w, h))) {
                let mut buf = Buffer::empty(Rect::new(0, 0, 44, 24));
                let area = Rect::new(2, 2, width, height);
                gauge(&g, area, &mut buf, look(symbols));
                gauges([&g, &warm()], area, &mut buf, look(symbols));
                for (x, y) in (0..44).flat_map(|x| (0..24).map(move |y| (x, y))) {
                    let outside = !area.contains((x, y).into());
                    assert!(!outside || buf[(x, y)].symbol() == " ", "{width}x{height}: {x},{y}");
                }
                // an area that the buffer does not hold
                gauges([&g, &g], Rect::new(30, 20, width, height), &mut buf, look(symbols));
            }
        }
    }
}

#[test]
fn law_standing_and_value_are_never_left_out() {
    for width in 24..=120 {
        for height in 2..=14 {
            let lines = drawn(&warm(), width, height, Symbols::Ascii);
            assert!(lines.iter().any(|l| l.ends_with("inside")), "{width}x{height} {lines:?}");
            assert!(lines.iter().any(|l| l.starts_with("tried") && l.contains(" 54.5")), "{lines:?}");
        }
    }
}

#[test]
fn law_plain_characters_where_asked() {
    for width in 20..=120 {
        for g in [warm(), two_rules(), aired()] {
            let lines = drawn(&g, width, 20, Symbols::Ascii);
            assert!(lines.iter().all(|l| l.is_ascii()), "{lines:?}");
        }
    }
}

#[test]
fn scenario_a_miss_is_told_by_word_and_style() {
    let area = Rect::new(0, 0, 64, 12);
    let mut buf = Buffer::empty(area);
    gauge(&two_rules(), area, &mut buf, look(Symbols::Ascii));
    let style = look(Symbols::Ascii).style(Role::Outside);
    assert_eq!((buf[(40, 3)].symbol(), buf[(40, 3)].style().fg), ("A", style.fg));
}

fn ashlar() -> Context {
    tasks::open(&tasks::Asked::default(), DateTime::UNIX_EPOCH).unwrap()
}

fn tried(context: &Context, gate: &str) -> MixAnswer {
    tasks::mix(context, &[Word::Set(gate)]).unwrap()
}

#[test]
fn law_words_and_digits_are_those_of_the_text_report() {
    let context = ashlar();
    let mut missed = 0;
    for gate in ["N2=600cfs", "N3=600cfs", "N4=300cfs", "Sluice=500cfs"] {
        let answer = tried(&context, gate);
        let told = crate::report::text::mix(&context, &answer);
        let now = answer.now.as_ref().map(|n| Release::from(&n.1));
        let make = [Gauge::temperature, Gauge::oxygen];
        for (make, kind) in make.into_iter().zip(["temperature", "oxygen"]) {
            let mix = (&answer.mix).into();
            let g = make(context.site(), context.system, mix, now, Attainable::NotAsked);
            let lines = drawn(&g, 110, 14, Symbols::Ascii);
            let after = |label: &str| {
                let line = lines.iter().find(|l| l.starts_with(label)).unwrap();
                line.rsplit("  ").next().unwrap().rsplit(['>', ']']).next().unwrap().trim().to_owned()
            };
            let standing = after(if kind == "oxygen" { "at least" } else { "range" });
            missed += usize::from(standing.starts_with("ABOVE") || standing.starts_with("BELOW"));
            assert!(told.contains(&format!("{kind} {standing}")), "{kind} {standing} is not in\n{told}");
            for value in [after("tried"), after("now")] {
                assert!(told.contains(&value), "{value} is not in\n{told}");
            }
        }
    }
    assert!(missed >= 2, "no setting misses: {missed}");
}

#[test]
fn scenario_two_gauges_beside_and_above_one_another() {
    let (first, second) = (warm(), aired());
    for (width, side_by_side) in [(118, true), (60, false)] {
        let height = gauges_rows([&first, &second], width);
        let area = Rect::new(0, 0, width, height);
        let mut buf = Buffer::empty(area);
        gauges([&first, &second], area, &mut buf, look(Symbols::Ascii));
        let lines = lines(&buf);
        assert_eq!(lines[0].contains("Temperature F") && lines[0].contains("Oxygen mg/L"), side_by_side);
        assert!(lines.iter().any(|l| l.contains("not measured")), "{lines:?}");
        assert!(lines.iter().any(|l| l.contains("54.5 F (53.4 to 55.8)")), "{lines:?}");
        assert!(!lines[usize::from(height) - 1].is_empty(), "{lines:?}");
    }
}

#[test]
fn scenario_a_rule_down_the_river_is_held_against_what_arrives_there() {
    let mut g = warm();
    let mut there = g.targets[0].clone();
    (there.name, there.point) = ("rearing at Mill Bridge".into(), Some("Mill Bridge".into()));
    (there.low, there.high, there.preferred, there.value) = (None, Some(17.0), None, Some(15.0));
    (there.share, there.share_both, there.governs) = (None, None, true);
    g.targets.insert(0, there);
    let shown = drawn(&g, 58, 11, Symbols::Ascii);
    assert_eq!(shown[1], "rearing at Mill Bridge, governs, daily mean there 59.0 F");
    assert_eq!(shown[2], "at most 62.6 F");
    let range = &shown[3];
    assert!(
        range.starts_with("there      <===") && range.contains('o') && range.ends_with("inside"),
        "{range}"
    );
    // the bounds that run down past the releases are those of the rule at the dam
    let at = |line: &str, c: char| line.find(c).unwrap();
    let tried = shown.iter().find(|l| l.starts_with("tried")).unwrap();
    let at_dam = shown.iter().find(|l| l.starts_with("range")).unwrap();
    assert_eq!(at(tried, ':'), at(at_dam, '['), "{shown:?}");
    assert!(at(range, 'o') > at(tried, 'o') && !tried[at(range, ']')..].starts_with(':'), "{shown:?}");
    // where no line is left for its name, its point heads it
    let low = drawn(&g, 40, 2, Symbols::Ascii);
    assert!(low.iter().any(|l| l.starts_with("Mill")), "{low:?}");
}
