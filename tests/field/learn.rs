//! What the gauge teaches on the measured releases: the intake gains oxygen, and its temperature needs no mending.
#![expect(clippy::unwrap_used, reason = "helpers of tests, outside a test function")]

use std::ops::ControlFlow;

use gatemix::record::{Candidate, Day, Effect, Learning, Row, Verdict, learn, pairs, scores};
use gatemix::series::{self, Daily, Days};
use gatemix::units::{System, say::in_system};

use crate::folder::{folder, rows};
use crate::pairs::{CastRow, PairRow, Place, profile, site};

/// Longer than the six years of the record: there are only fifteen days.
const WINDOW_DAYS: u64 = 4000;

fn gauge(rows: &[PairRow]) -> Daily {
    let days = |read: &dyn Fn(&PairRow) -> f64| {
        let day = |row: &PairRow| {
            let mean = read(row);
            (row.released(), series::Day { mean, max: mean, min: mean, hourly_change: None })
        };
        Days { days: rows.iter().map(day).collect() }
    };
    Daily {
        temperature_c: days(&|row| row.release_temp_c),
        oxygen_mg_l: days(&|row| row.release_do_mgl),
        ..Daily::default()
    }
}

fn of(learning: &Learning, effect: Effect) -> &Candidate {
    learning.candidates.iter().find(|c| c.effect == effect).unwrap()
}

#[test]
fn field_learning_keeps_the_oxygen_gain_and_refuses_the_temperature() {
    let Some(folder) = folder("field_learning_keeps_the_oxygen_gain_and_refuses_the_temperature") else {
        return;
    };
    let site = site(&folder);
    let casts: Vec<CastRow> = rows(&folder, "forebay_casts.csv", 661);
    let releases: Vec<PairRow> = rows(&folder, "release_pairs.csv", 15);
    let profiles: Vec<_> =
        releases.iter().map(|row| profile(&site, row, &casts, Place::Depth, false)).collect();
    let settings: Vec<_> = releases.iter().map(PairRow::setting).collect();
    let days: Vec<Day> = releases
        .iter()
        .zip(&profiles)
        .zip(&settings)
        .map(|((row, profile), setting)| Day {
            date: row.released(),
            setting: Some(setting),
            profile: Some(profile),
            changed: false,
            event: None,
        })
        .collect();
    let paired = pairs(&site, &days, &gauge(&releases), &|_| ControlFlow::Continue(())).unwrap();
    assert_eq!((paired.pairs.len(), paired.left_out.len()), (15, 0));
    let rows = |row: fn(&gatemix::record::Pair) -> Row| paired.pairs.iter().map(row).collect::<Vec<_>>();
    println!("temperature {:?}", scores(&rows(gatemix::record::Pair::temperature_row)).all);
    println!("oxygen {:?}", scores(&rows(gatemix::record::Pair::oxygen_row)).all);
    let learning = learn(&site, &paired.pairs, WINDOW_DAYS);
    for c in &learning.candidates {
        println!(
            "{}: {:?}; rmse {:.3?}, left out {:.3?}, {} days in {} stretches",
            c.effect.name(),
            c.figures,
            c.rmse,
            c.held_out,
            c.n,
            c.stretches
        );
        match &c.verdict {
            Verdict::Kept => println!("  kept"),
            Verdict::Passed(words) | Verdict::Refused(words) => {
                println!("  {}", in_system(words, System::Si));
            }
        }
    }
    println!("{:?}", learning.learned);
    for effect in [Effect::Bias, Effect::ZoneFactor, Effect::ByLevel] {
        let Verdict::Refused(words) = &of(&learning, effect).verdict else { panic!("{effect:?} is kept") };
        assert!(!words.is_empty());
    }
    let gain = of(&learning, Effect::OxygenGain);
    assert_eq!(gain.verdict, Verdict::Kept);
    let [before, after] = gain.held_out.unwrap();
    assert!((0.5..0.65).contains(&before) && (0.35..0.47).contains(&after), "{before} to {after} mg/L");
    let gained = learning.learned.oxygen_gain_mg_l.unwrap();
    assert!((0.3..0.5).contains(&gained), "{gained}");
    assert!(learning.learned.release_mg_l.unwrap() < site.band.release_mg_l);
}
