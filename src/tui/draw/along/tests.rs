use super::*;
use crate::tui::{Symbols, Theme};

fn picture() -> AlongPicture {
    let way = |letter, name: &str, role, stroke, from: f64| AlongWay {
        letter,
        name: name.into(),
        role,
        stroke,
        places: (0..=30).map(|i| (1000.0 * f64::from(i), from + 0.25 * f64::from(i))).collect(),
        bands: vec![(18_000.0, [from + 4.0, from + 5.0])],
    };
    let point = |name: &str, at_m, range, window| AlongPoint { name: name.into(), at_m, range, window };
    AlongPicture {
        title: "Temperature".into(),
        dimension: Dimension::Temperature,
        system: System::Si,
        length_m: 30_000.0,
        ways: vec![
            way('N', "now", Role::Now, Stroke::Dotted, 8.0),
            way('T', "tried", Role::Tried, Stroke::Heavy, 12.0),
        ],
        points: vec![
            point("Mill Bridge", 18_000.0, (Some(12.0), Some(16.0)), Some((Some(9.0), Some(13.0)))),
            point("Lower Ford", 30_000.0, (None, Some(18.0)), None),
        ],
        dam: (Some(9.0), None),
        joins: vec![(8_000.0, "Tansy Creek".into())],
        chosen: Some(0),
        foot: true,
    }
}

fn drawn(picture: &AlongPicture, width: u16, height: u16) -> Vec<String> {
    let area = Rect::new(0, 0, width, height);
    let mut buf = Buffer::empty(area);
    along(picture, area, &mut buf, Look { symbols: Symbols::Ascii, theme: Theme::Mono });
    let line = |y| (0..width).map(|x| buf[(x, y)].symbol().to_owned()).collect::<String>();
    (0..height).map(|y| line(y).trim_end().to_owned()).collect()
}

#[test]
fn scenario_two_releases_on_their_way_past_two_points() {
    let lines = drawn(&picture(), 60, 14);
    assert!(lines[0].starts_with("Temperature, C") && lines[0].contains("N now  T tried"), "{}", lines[0]);
    assert!(lines[13].contains("1 Mill Bridge") && lines[13].contains("2 Lower Ford"), "{}", lines[13]);
    assert!(lines[13].contains("Tansy Creek") && lines[12].trim_start().starts_with("dam"), "{}", lines[13]);
    // the window stands at the dam under the number of its point, and so does the range at the point
    let axis = lines[11].rfind('^').unwrap();
    assert!(lines[1..11].iter().any(|l| l.chars().nth(axis) == Some('+')), "{lines:?}");
    assert!(lines[1..11].iter().any(|l| l.chars().nth(axes::SIDE + 2) == Some('(')), "{lines:?}");
    assert!(lines[1..11].iter().any(|l| l.chars().nth(axes::SIDE) == Some('[')), "{lines:?}");
    // each line ends in its letter, the warmer one above
    let row = |c: char| lines[1..11].iter().position(|l| l.ends_with(c)).unwrap();
    assert!(row('T') < row('N'), "{lines:?}");
}

#[test]
fn law_any_size_and_any_values_are_drawn() {
    let mut wild = picture();
    wild.ways[0].places = vec![(0.0, f64::MAX), (1e9, -1e300)];
    wild.points[0].range = (Some(1e300), None);
    for picture in [&wild, &AlongPicture { ways: Vec::new(), ..picture() }, &picture()] {
        for (width, height) in [(0, 0), (1, 1), (10, 3), (24, 6), (80, 24), (200, 60)] {
            drawn(picture, width, height);
        }
    }
}

#[test]
fn scenario_the_point_under_the_mouse() {
    let (picture, area) = (picture(), Rect::new(2, 1, 60, 14));
    let frame = axes::Frame::of(&picture, area).unwrap();
    let at = |m: f64| point_at(&picture, area, 2 + u16::try_from(frame.col(m)).unwrap(), 5);
    assert_eq!((at(17_000.0), at(29_000.0)), (Some(0), Some(1)));
    assert_eq!(point_at(&picture, area, 0, 5), None);
}
