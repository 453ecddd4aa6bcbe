//! The trade picture as a person reads it, at every size.

use std::ops::ControlFlow;

use chrono::DateTime;
use ratatui::style::Modifier;

use super::*;
use crate::tasks;
use crate::tui::{Symbols, Theme};

const SYMBOLS: [Symbols; 3] = [Symbols::Braille, Symbols::Block, Symbols::Ascii];

fn look(symbols: Symbols) -> Look {
    Look { symbols, theme: Theme::Mono }
}

fn buffer(picture: &TradePicture, width: u16, height: u16, symbols: Symbols) -> Buffer {
    let area = Rect::new(0, 0, width, height);
    let mut buf = Buffer::empty(area);
    trade(picture, area, &mut buf, look(symbols));
    buf
}

fn drawn(picture: &TradePicture, width: u16, height: u16, symbols: Symbols) -> Vec<String> {
    let buf = buffer(picture, width, height, symbols);
    let line = |y| (0..width).map(|x| buf[(x, y)].symbol()).collect::<String>();
    (0..height).map(|y| line(y).trim_end().to_owned()).collect()
}

fn points(of: &[(f64, f64)]) -> Vec<TradePoint> {
    of.iter().map(|&(temperature_c, o)| TradePoint { temperature_c, oxygen_mg_l: Some(o) }).collect()
}

/// Three mixes in one cell, one apart.
fn picture() -> TradePicture {
    TradePicture {
        system: System::Si,
        mixes: points(&[(11.6, 7.02), (11.61, 7.03), (11.62, 7.01), (11.2, 7.5)]),
        unbeaten: points(&[(10.6, 8.4), (11.1, 8.1), (11.9, 7.6)]),
        now: points(&[(12.6, 7.1)]).pop(),
        selected: Some(1),
        low_c: Some(8.9),
        high_c: Some(12.9),
        preferred_c: Some(11.1),
        floor_mg_l: Some(7.0),
        of_day: false,
    }
}

fn airless() -> TradePicture {
    let mut p = picture();
    let mixes = p.mixes.iter_mut().chain(&mut p.unbeaten);
    mixes.chain(&mut p.now).for_each(|point| point.oxygen_mg_l = None);
    p
}

#[test]
fn scenario_the_trade_as_it_is_read() {
    assert_eq!(
        drawn(&picture(), 50, 13, Symbols::Ascii),
        [
            "[2] 11.6 C, 7.0 mg/L             N now, o unbeaten",
            " mg/L <from 8.9 P 11.1                     to 12.9",
            " 8.5 + o**      :                               |",
            "     |    ****  :                               |",
            " 8.0 +        **o**                             |",
            "     |          :  ****                         |",
            "     |          :      *****                    |",
            " 7.5 +          : 4         **o                 |",
            "     |          :                               |",
            "     |          :                               |",
            " 7.0 >- floor 7.0 ----1,[2],3-------------N-------",
            "     ++-------+--------+-^------+--------+-------+",
            "C   10.5    11.0       11.6   12.0     12.5   13.0",
        ]
    );
}

#[test]
fn law_the_selected_mix_is_never_hidden() {
    for selected in 0..4 {
        let p = TradePicture { selected: Some(selected), ..picture() };
        for (width, height) in [(30, 9), (38, 12), (60, 16), (100, 30)] {
            for symbols in SYMBOLS {
                let buf = buffer(&p, width, height, symbols);
                let lines = drawn(&p, width, height, symbols);
                let mark = format!("[{}]", selected + 1);
                let (y, x) = lines
                    .iter()
                    .enumerate()
                    .skip(2)
                    .find_map(|(y, l)| Some((y, l[..l.find(&mark)?].chars().count())))
                    .unwrap();
                let (x, y) = (u16::try_from(x).unwrap(), u16::try_from(y).unwrap());
                assert!(buf[(x + 1, y)].modifier.contains(Modifier::REVERSED));
                // its values stand on both axes
                let oxygen = format!("{:.1}", p.mixes[selected].oxygen_mg_l.unwrap());
                assert!(lines[usize::from(y)].trim_start().starts_with(&oxygen), "{lines:?}");
                assert_eq!(buf[(5, y)].symbol(), ">");
                assert_eq!(buf[(x + 1, height - 2)].symbol(), "^");
                let temperature = p.temperature(p.mixes[selected].temperature_c);
                assert!(lines[usize::from(height) - 1].contains(&temperature), "{lines:?}");
                assert_eq!(mix_at(&p, buf.area, x + 1, y), Some(selected));
            }
        }
    }
}

#[test]
fn law_the_mouse_finds_the_mix_that_is_drawn() {
    let mut found = [false; 4];
    let area = Rect::new(3, 2, 60, 16);
    let mut buf = Buffer::empty(Rect::new(0, 0, 70, 20));
    trade(&picture(), area, &mut buf, look(Symbols::Ascii));
    for (x, y) in (0..70).flat_map(|x| (0..20).map(move |y| (x, y))) {
        if let Some(i) = mix_at(&picture(), area, x, y) {
            let symbol = buf[(x, y)].symbol();
            assert!(symbol == (i + 1).to_string() || i == 1 && ["[", "]"].contains(&symbol), "{symbol}");
            found[i] = true;
        }
    }
    assert_eq!(found, [true; 4]);
}

#[test]
fn scenario_without_oxygen_each_mix_has_its_row() {
    let lines = drawn(&airless(), 60, 12, Symbols::Ascii);
    assert_eq!(lines[0], "[2] 11.6 C     oxygen not measured: temperature alone, N now");
    let rows: Vec<usize> =
        ["N", "1", "[2]", "3", "4"].map(|m| lines.iter().skip(2).position(|l| l.contains(m)).unwrap()).into();
    assert!(rows.is_sorted(), "{lines:?}");
    let mut mixed = picture();
    mixed.mixes[3].oxygen_mg_l = None;
    let lines = drawn(&mixed, 60, 14, Symbols::Ascii);
    assert!(lines[11].trim_start().starts_with("O2?") && lines[11].contains('4'), "{lines:?}");
}

#[test]
fn scenario_crowded_marks_are_counted_and_now_is_kept() {
    let mut p = picture();
    p.mixes = points(&[(12.6, 7.1); 12]);
    p.selected = Some(11);
    let lines = drawn(&p, 60, 14, Symbols::Ascii);
    assert!(lines.iter().any(|l| l.contains("N,1,[12],+10")), "{lines:?}");
}

#[test]
fn law_no_size_panics_and_nothing_leaves_the_area() {
    let empty = TradePicture { mixes: Vec::new(), unbeaten: Vec::new(), now: None, ..picture() };
    for p in [picture(), airless(), empty] {
        for symbols in SYMBOLS {
            for (width, height) in (0..=40).flat_map(|w| (0..=20).map(move |h| (w, h))) {
                let mut buf = Buffer::empty(Rect::new(0, 0, 44, 24));
                let area = Rect::new(2, 2, width, height);
                trade(&p, area, &mut buf, look(symbols));
                for (x, y) in (0..44).flat_map(|x| (0..24).map(move |y| (x, y))) {
                    let inside = area.contains((x, y).into());
                    assert!(inside || buf[(x, y)].symbol() == " ", "{width}x{height}: {x},{y}");
                    let ascii = symbols != Symbols::Ascii || buf[(x, y)].symbol().is_ascii();
                    assert!(ascii);
                }
                for (x, y) in [(0, 0), (1, 5), (9, 1), (43, 5), (9, 23), (u16::MAX, u16::MAX)] {
                    assert_eq!(mix_at(&p, area, x, y), None);
                }
                // an area that the buffer does not hold
                trade(&p, Rect::new(30, 20, width, height), &mut buf, look(symbols));
            }
        }
    }
}

#[test]
fn scenario_the_picture_of_a_ranking() {
    let context = tasks::open(&tasks::Asked::default(), DateTime::UNIX_EPOCH).unwrap();
    let asked = tasks::rank::RankAsked { step: Some("20%".into()), top: 4, ..Default::default() };
    let answer = tasks::rank::rank(&context, &asked, &|_| ControlFlow::Continue(())).unwrap();
    let p = TradePicture::of(context.site(), context.system, &answer, Some(0));
    assert_eq!(p.mixes.len(), answer.mixes.len());
    let lines = drawn(&p, 60, 16, Symbols::Braille);
    // the words of the list: the same digits
    let first = &answer.mixes[0];
    let unit = context.system.unit(Dimension::Temperature);
    let oxygen = first.oxygen_mg_l.unwrap();
    let said = format!("[1] {} {}, {oxygen:.1} mg/L", figure(first.temperature_c, unit, 1), unit.symbol());
    assert!(lines[0].starts_with(&said), "{lines:?}");
    // the demonstration site keeps 48 to 56 F and 7 mg/L in July
    let text = lines.join("\n");
    assert!(text.contains("from 48.0") && text.contains("to 56.0") && text.contains("floor 7.0"), "{text}");
}
