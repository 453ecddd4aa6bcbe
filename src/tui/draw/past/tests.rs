use super::*;
use crate::plot::Stroke;
use crate::tui::draw::through::LineThrough;
use crate::tui::{Symbols, Theme};
use crate::units::Dimension;

/// A record that rises by a degree, with a gap and three decisions, of which two are close.
fn picture(days: usize) -> PastPicture {
    let warm = |day: usize| 10.0 + day as f64 / days.max(2) as f64;
    let line = |name: &str, stroke, mark, values| LineThrough {
        name: name.into(),
        role: Role::Temperature,
        stroke,
        mark,
        values,
    };
    let gauge = (0..days).map(|day| (day != days / 2).then(|| warm(day) + 0.2)).collect();
    let mut marks = vec![DayMark::None; days];
    if let [first, second, third, ..] = &mut marks[..] {
        (*first, *second, *third) = (DayMark::Outside, DayMark::LeftOut, DayMark::Event);
    }
    PastPicture {
        system: System::Si,
        first: NaiveDate::from_ymd_opt(2026, 4, 14).unwrap(),
        days,
        cursor: Some(days * 3 / 4),
        curves: CurvesThrough {
            name: "release".into(),
            dimension: Dimension::Temperature,
            span: (9.5, 11.5),
            shaded: ("band".into(), (0..days).map(|d| Some([warm(d) - 0.4, warm(d) + 0.4])).collect()),
            lines: vec![
                line("expected", Stroke::Thin, "-", (0..days).map(|d| Some(warm(d))).collect()),
                line("gauge", Stroke::Broad, "*", gauge),
            ],
        },
        decided: vec![(0, 1, false), (days / 2, 12, true), (days / 2 + 1, 13, false)],
        marks,
    }
}

fn drawn(picture: &PastPicture, size: (u16, u16), symbols: Symbols) -> String {
    let area = Rect::new(0, 0, size.0, size.1);
    let mut buf = Buffer::empty(area);
    past(picture, area, &mut buf, Look { symbols, theme: Theme::Mono });
    let row = |y: u16| (0..area.width).map(|x| buf[(x, y)].symbol()).collect::<String>();
    (0..area.height).map(|y| row(y).trim_end().to_owned() + "\n").collect()
}

#[test]
fn unchanged_the_record_at_sixty_by_ten() {
    let text = drawn(&picture(40), (60, 10), Symbols::Ascii);
    assert_eq!(text, include_str!("at_60x10.txt"), "\n{text}");
}

#[test]
fn law_any_area_and_any_record_is_drawn_within_it() {
    for days in [0, 1, 2, 3, 40, 400, 1200] {
        for size in [(0, 0), (1, 1), (30, 6), (30, 5), (29, 6), (48, 8), (200, 60)] {
            for symbols in [Symbols::Braille, Symbols::Block, Symbols::Ascii] {
                let text = drawn(&picture(days), size, symbols);
                assert_eq!(text.lines().count(), usize::from(size.1));
            }
        }
    }
}

#[test]
fn law_a_press_on_a_day_finds_it() {
    let (picture, area) = (picture(40), Rect::new(3, 2, 60, 10));
    for day in 0..40 {
        let time = Frame::of(&picture, area).unwrap().time;
        let col = u16::try_from(3 + time.side + time.col_of(day)).unwrap();
        assert_eq!(day_at(&picture, area, col, 5), Some(day));
    }
    assert_eq!(day_at(&picture, area, 4, 5), None);
}
