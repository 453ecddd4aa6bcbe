//! A piece with every kind of block and picture, and one with the same text everywhere.

use chrono::{Days, NaiveDate};
use gatemix::report::page::{Block, DaysPicture, Page, Picture, PoolPicture, RangesPicture, Shows, Table};

/// Everything a piece may hold, made of ordinary words.
pub(super) fn ordinary() -> Page {
    let table = Table {
        caption: "Moves, in order".into(),
        head: ["No.", "Time", "Gate", "From", "To", "Head"].map(String::from).into(),
        rows: (1..=6)
            .map(|k| {
                let time = format!("2026-07-{k:02} 08:30 -08:00");
                vec![
                    k.to_string(),
                    time,
                    format!("North {k}"),
                    "shut".into(),
                    "0.50 open".into(),
                    "12.4 ft".into(),
                ]
            })
            .collect(),
        right: vec![0, 5],
    };
    let small = Table {
        caption: "Cases".into(),
        head: vec!["Case".into(), "Cold water runs out".into()],
        rows: vec![vec!["dry".into(), "2026-10-20".into()]],
        right: vec![],
    };
    Page {
        title: "Change order: invented dam".into(),
        blocks: vec![
            Block::Warning("Two casts are older than two weeks.".into()),
            Block::Heading(1, "What is done".into()),
            Block::Words("The release is to become cooler by the first of July. ".repeat(4)),
            Block::List(vec![
                "Open before shut.".into(),
                "Every state on the way keeps every limit. ".repeat(3),
            ]),
            Block::Facts(vec![
                ("Asset".into(), "Intake tower, west".into()),
                ("A label that is rather longer than usual".into(), "Its value".into()),
            ]),
            Block::Table(table),
            Block::Blanks(vec!["Ordered by".into(), "Date and time".into(), "Carried out by".into()]),
            Block::Sheet,
            Block::Heading(1, "Agency note".into()),
            picture("The pool and what draws from it", pool()),
            picture("The release against its target", ranges()),
            picture("The season in its cases", days()),
            Block::Heading(2, "Alone".into()),
            picture("What was expected and what came", days()),
            beside(small, "The season, told twice", days()),
        ],
    }
}

fn picture(title: &str, shows: Shows) -> Block {
    Block::Picture(Box::new(titled(title, shows)))
}

fn beside(table: Table, title: &str, shows: Shows) -> Block {
    Block::Beside(table, Box::new(titled(title, shows)))
}

fn titled(title: &str, shows: Shows) -> Picture {
    let words = "Bed at 1,180 ft, surface at 1,468 ft; surface water 71 F, deepest water 42 F. ".repeat(2);
    Picture { title: title.into(), words, shows }
}

fn pool() -> Shows {
    let heights = (0..=60).map(|k| 1180.0 + 4.8 * f64::from(k));
    Shows::Pool(PoolPicture {
        elevation_unit: "ft".into(),
        ends: (1180.0, 1468.0),
        temperature_unit: "F".into(),
        temperature: heights
            .clone()
            .map(|z| (z, 42.0 + 29.0 / (1.0 + ((1430.0 - z) / 12.0).exp())))
            .collect(),
        oxygen: heights.map(|z| (z, 4.0 + 4.5 / (1.0 + ((1400.0 - z) / 20.0).exp()))).collect(),
        outlets: [1450.0, 1400.0, 1350.0, 1300.0]
            .iter()
            .zip(1..)
            .flat_map(|(z, k)| {
                ["N", "S"]
                    .map(|side| (format!("{side}{k}"), z - 4.0, z + 4.0, k > 1 && side == "N" || k == 3))
            })
            .collect(),
        zones: vec![
            ("N3 S3 now".into(), 1320.0, 1395.0),
            ("N2 then".into(), 1380.0, 1420.0),
            ("N3 S3 then".into(), 1330.0, 1375.0),
        ],
    })
}

fn ranges() -> Shows {
    let rows = [("now", 54.8), ("to be set", 51.2), ("no. 1", 51.2), ("no. 2", 52.0), ("no. 3", 53.9)];
    Shows::Ranges(RangesPicture {
        unit: "F".into(),
        asked: (Some(50.0), Some(52.0), Some(54.0)),
        rows: rows
            .iter()
            .map(|(label, f)| ((*label).to_owned(), Some(*f), Some((f - 0.8, f + 1.1))))
            .chain([("no. 4".to_owned(), None, None)])
            .collect(),
    })
}

fn days() -> Shows {
    let first = NaiveDate::from_ymd_opt(2026, 6, 20).unwrap();
    let date = |k: u64| first + Days::new(k);
    let value = |k: u64, warm: f64| 48.0 + warm * (k as f64 / 30.0).sin() + k as f64 / 40.0;
    let line = |warm: f64, gap: bool| {
        (0..140).filter(|k| !gap || !(50..60).contains(k)).map(|k| (date(k), value(k, warm))).collect()
    };
    Shows::Days(DaysPicture {
        axis: "release, F".into(),
        bands: vec![(
            "expected, 80 %".into(),
            (0..140).map(|k| (date(k), value(k, 2.5) - 1.0, value(k, 2.5) + 1.0)).collect(),
        )],
        lines: vec![
            ("dry".into(), line(4.0, false)),
            ("ordinary".into(), line(3.0, false)),
            ("wet".into(), line(2.8, true)),
        ],
        limits: vec![
            ("greatest asked".into(), date(0), date(70), 54.0),
            ("greatest asked".into(), date(70), date(139), 55.0),
            ("least asked".into(), date(0), date(139), 46.5),
        ],
        marks: vec![(date(10), "change".into()), (date(60), "change".into())],
    })
}

/// A piece with one text in every place that holds text.
pub(super) fn with(text: &str) -> Page {
    let t = || text.to_owned();
    let table = || Table {
        caption: t(),
        head: vec![t(), t()],
        rows: vec![vec![t(), t()], vec![t()]],
        right: vec![1],
    };
    let mut blocks = vec![
        Block::Heading(1, t()),
        Block::Heading(9, t()),
        Block::Words(t()),
        Block::Warning(t()),
        Block::List(vec![t(), t()]),
        Block::Facts(vec![(t(), t())]),
        Block::Table(table()),
        Block::Blanks(vec![t()]),
        Block::Sheet,
    ];
    for shows in [named(pool(), text), named(ranges(), text)] {
        blocks.push(Block::Picture(Box::new(Picture { title: t(), words: t(), shows })));
        blocks.push(Block::Words(t()));
    }
    let picture = Picture { title: t(), words: t(), shows: named(days(), text) };
    blocks.push(Block::Beside(table(), Box::new(picture)));
    Page { title: t(), blocks }
}

/// A picture with every name in it replaced.
fn named(shows: Shows, text: &str) -> Shows {
    let t = || text.to_owned();
    match shows {
        Shows::Pool(mut p) => {
            p.elevation_unit = t();
            p.temperature_unit = t();
            p.outlets.iter_mut().for_each(|o| o.0 = t());
            p.zones.iter_mut().for_each(|z| z.0 = t());
            Shows::Pool(p)
        }
        Shows::Ranges(mut r) => {
            r.unit = t();
            r.rows.iter_mut().for_each(|row| row.0 = t());
            Shows::Ranges(r)
        }
        Shows::Days(mut d) => {
            d.axis = t();
            d.bands.iter_mut().for_each(|b| b.0 = t());
            d.lines.iter_mut().for_each(|l| l.0 = t());
            d.limits.iter_mut().for_each(|l| l.0 = t());
            d.marks.iter_mut().for_each(|m| m.1 = t());
            Shows::Days(d)
        }
    }
}
