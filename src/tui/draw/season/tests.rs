use super::*;
use crate::plot::Stroke;
use crate::tui::draw::through;
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

fn cells(picture: &SeasonPicture, (width, height): (u16, u16), look: Look) -> Buffer {
    let area = Rect::new(0, 0, width, height);
    let mut buf = Buffer::empty(area);
    season(picture, area, &mut buf, look);
    buf
}

fn drawn(picture: &SeasonPicture, width: u16, height: u16) -> Vec<String> {
    let look = Look { symbols: Symbols::Ascii, theme: Theme::Mono };
    let buf = cells(picture, (width, height), look);
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
        assert!(strip("outside C").ends_with('!'), "{all}");
        assert_eq!(all.contains("outside O2"), height > 20, "{all}");
        let axis = lines.last().unwrap();
        assert!(axis.contains("|Jul 14") && axis.contains("|Sep") && axis.contains('^'), "{all}");
        assert!(all.contains("cold, hm3") || height < 20, "{all}");
    }
}

/// Rows of a column of the release that carry the colour of the range, from the top.
fn reached(buf: &Buffer, look: Look, col: u16, (top, rows): (usize, usize)) -> Vec<usize> {
    let colour = look.style(Role::Reach).bg.unwrap();
    let row = |row: &usize| buf[(col, u16::try_from(top + row).unwrap())].bg == colour;
    (0..rows).filter(row).collect()
}

#[test]
fn scenario_the_range_within_reach_is_one_band_under_the_curves() {
    for (size, symbols) in
        [((54, 17), Symbols::Braille), ((80, 34), Symbols::Braille), ((80, 34), Symbols::Ascii)]
    {
        let (picture, look) = (picture(120), Look { symbols, theme: Theme::Palette });
        let (buf, area) = (cells(&picture, size, look), Rect::new(0, 0, size.0, size.1));
        let frame = axes::Frame::of(&picture, area).unwrap();
        let (top, rows) = frame.release;
        let scale = through::scale(6.0, 20.0).unwrap();
        for col in 0..frame.time.cols {
            let col = u16::try_from(frame.time.side + col).unwrap();
            let held = |row: &usize| (7.0..=19.0).contains(&through::middle(&scale, *row, rows));
            let want: Vec<usize> = (0..rows).filter(held).collect();
            assert!(want.len() > 2 && reached(&buf, look, col, frame.release) == want, "{col} {size:?}");
        }
        // what comes and what is asked are unbroken above it
        let role = |role: Role| look.style(role).fg;
        for col in 0..frame.time.cols {
            let x = u16::try_from(frame.time.side + col).unwrap();
            let fg = |role_of: Role| {
                (top..top + rows).any(|y| buf[(x, u16::try_from(y).unwrap())].fg == role(role_of).unwrap())
            };
            assert!(fg(Role::Temperature), "{col} {size:?}");
        }
    }
}

#[test]
fn scenario_a_mark_leaves_the_water_to_be_seen() {
    let (picture, look) = (picture(120), Look { symbols: Symbols::Braille, theme: Theme::Palette });
    let buf = cells(&picture, (80, 34), look);
    let marks = |sign: &str| buf.content.iter().filter(|c| c.symbol() == sign).cloned().collect::<Vec<_>>();
    let bands: Vec<_> = (0..6).map(|band| look.style(Role::Band(band)).bg).collect();
    for sign in ["━", "╌", "~"] {
        let over = marks(sign).into_iter().filter(|c| bands.contains(&Some(c.bg))).count();
        assert!(over > 5, "{sign}: {over} of {}", marks(sign).len());
    }
    // four columns from one mark of a limit to the next
    let limits = marks("╌").len();
    assert!(limits < 40, "{limits}");
}

#[test]
fn law_zones_that_overlap_have_one_lower_and_one_upper_limit() {
    let joined = |zones: &[[f64; 2]]| water::joined(zones.to_vec());
    assert_eq!(joined(&[[20.0, 30.0], [5.0, 12.0], [25.0, 40.0]]), [[5.0, 12.0], [20.0, 40.0]]);
    assert_eq!(joined(&[[0.0, 40.0], [10.0, 20.0]]), [[0.0, 40.0]]);
    assert_eq!(joined(&[]), Vec::<[f64; 2]>::new());
}

#[test]
fn scenario_gates_that_share_a_row_are_all_named() {
    let mut picture = picture(120);
    for (name, elevation_m) in [("Spillway", 31.0), ("N1 S1", 30.5)] {
        let days = vec![GateDay::Shut; 120];
        picture.gates.push(GateThrough { name: name.into(), elevation_m, days });
    }
    let all = drawn(&picture, 80, 34).join("\n");
    assert!(!all.contains("+1"), "{all}");
    for name in ["Spillway", "N1 S1", "Upper"] {
        assert!(all.lines().take(16).any(|l| l.contains(name)), "{name}:\n{all}");
    }
}

#[test]
fn scenario_the_day_under_the_mouse() {
    let (picture, area) = (picture(120), Rect::new(2, 1, 60, 20));
    let frame = axes::Frame::of(&picture, area).unwrap();
    let at = |day| {
        day_at(&picture, area, 2 + u16::try_from(frame.time.side + frame.time.col_of(day)).unwrap(), 9)
            .unwrap()
    };
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
