use super::*;
use crate::tui::{Symbols, Theme};

/// A pool of 40 m that falls to 25 m, cold below 12 m over the bed, with two gates of which the upper is lost.
pub(crate) fn picture(days: usize) -> SeasonPicture {
    let share = |day: usize| day as f64 / days.max(2) as f64;
    let surface = |day: usize| 40.0 - 15.0 * share(day);
    let line = |name: &str, role, stroke, mark, value: &dyn Fn(usize) -> Option<f64>| LineThrough {
        name: name.into(),
        role,
        stroke,
        mark,
        values: (0..days).map(value).collect(),
    };
    let water = |day: usize| WaterDay {
        layers: vec![(12.0, Some(6.0)), (20.0, Some(14.0)), (surface(day), Some(22.0))],
        thermocline_m: Some(12.0),
    };
    let upper =
        |day: usize| if surface(day) < 32.0 { GateDay::Lost } else { GateDay::Open(Some([26.0, 34.0])) };
    SeasonPicture {
        system: System::Si,
        first: NaiveDate::from_ymd_opt(2026, 7, 14).unwrap(),
        days,
        cursor: Some(days / 3),
        water: WaterThrough {
            dimension: Dimension::Temperature,
            span: (6.0, 22.0),
            threshold: Some(12.0),
            elevations_m: (0.0, 40.0),
            days: (0..days).map(water).collect(),
        },
        release: CurvesThrough {
            name: "release".into(),
            dimension: Dimension::Temperature,
            span: (6.0, 20.0),
            shaded: ("attainable".into(), (0..days).map(|_| Some([7.0, 19.0])).collect()),
            lines: vec![
                line("asked", Role::Range, Stroke::Thin, "-", &|_| Some(13.0)),
                line("release", Role::Temperature, Stroke::Broad, "*", &|d| Some(9.0 + 8.0 * share(d))),
            ],
        },
        cold: Some(CurvesThrough {
            name: "cold".into(),
            dimension: Dimension::Volume,
            span: (0.0, 5e7),
            shaded: (String::new(), Vec::new()),
            lines: vec![line("usable", Role::Cold, Stroke::Broad, "*", &|d| Some(5e7 * (1.0 - share(d))))],
        }),
        gates: vec![
            GateThrough { name: "Upper".into(), elevation_m: 30.0, days: (0..days).map(upper).collect() },
            GateThrough { name: "Sluice".into(), elevation_m: 4.0, days: vec![GateDay::Shut; days] },
        ],
        moves: vec![(0, 2, false), (days / 2, 1, true)],
        outside: vec![
            ("outside C".into(), (days * 2 / 3..days).collect()),
            ("outside O2".into(), (0..days / 5).collect()),
        ],
    }
}

fn drawn(picture: &SeasonPicture, width: u16, height: u16) -> Vec<String> {
    let area = Rect::new(0, 0, width, height);
    let mut buf = Buffer::empty(area);
    season(picture, area, &mut buf, Look { symbols: Symbols::Ascii, theme: Theme::Mono });
    let line = |y| (0..width).map(|x| buf[(x, y)].symbol().to_owned()).collect::<String>();
    (0..height).map(|y| line(y).trim_end().to_owned()).collect()
}

#[test]
fn scenario_a_pool_that_falls_and_loses_its_upper_gate() {
    for (width, height) in [(54, 17), (80, 34)] {
        let lines = drawn(&picture(120), width, height);
        let all = lines.join("\n");
        println!("{all}\n");
        let legend = &lines[usize::from(height > 20)];
        assert!(
            legend.starts_with('@') && ["<10", "10-12", "12-15"].iter().all(|b| legend.contains(b)),
            "{all}"
        );
        let upper = lines.iter().find(|l| l.contains("Upper>")).unwrap();
        // open at first, then lost, then in the air
        assert!(upper.contains("===") && upper.contains('x'), "{all}");
        assert!(upper.find('=').unwrap() < upper.find('x').unwrap(), "{all}");
        let deep = lines.iter().find(|l| l.contains("Sluice>")).unwrap();
        assert!(deep.contains("@@@"), "{all}");
        let strip = |word: &str| lines.iter().find(|l| l.starts_with(word)).unwrap();
        assert!(strip("moves").contains('2') && strip("moves").contains('!'), "{all}");
        assert!(strip("outside").ends_with('!'), "{all}");
        let axis = lines.last().unwrap();
        assert!(axis.contains("|Jul 14") && axis.contains("|Sep") && axis.contains('^'), "{all}");
        assert!(all.contains("cold, hm3") || height < 20, "{all}");
    }
}

#[test]
fn scenario_the_day_under_the_mouse() {
    let (picture, area) = (picture(120), Rect::new(2, 1, 60, 20));
    let frame = axes::Frame::of(&picture, area).unwrap();
    let at =
        |day| day_at(&picture, area, 2 + u16::try_from(frame.side + frame.col_of(day)).unwrap(), 9).unwrap();
    assert!(at(0) <= 2 && at(60).abs_diff(60) <= 2 && at(119) >= 117);
    assert_eq!(day_at(&picture, area, 3, 9), None);
}

#[test]
fn law_any_size_and_any_values_are_drawn() {
    let mut wild = picture(5);
    wild.water.span = (f64::MIN, f64::MAX);
    wild.release.span = (-1e300, 1e300);
    wild.release.lines[0].values = vec![Some(f64::MAX), None, Some(-1e300)];
    wild.water.days.truncate(1);
    wild.gates[0].days.clear();
    wild.cold = None;
    for picture in [&wild, &picture(0), &picture(1), &picture(30), &picture(500)] {
        for (width, height) in [(0, 0), (1, 1), (10, 3), (36, 10), (54, 17), (80, 24), (200, 60)] {
            drawn(picture, width, height);
        }
    }
}
