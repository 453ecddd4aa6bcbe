//! A planted cause of a spell comes first, with its evidence.

use gatemix::record::{Cause, Clue, Clues, Step, causes};

/// Four days on which the gauge lies 2 C above what was expected, and nothing tells why.
fn silent() -> Clues {
    let day = |i: u32| Clue {
        date: chrono::NaiveDate::from_ymd_opt(2025, 7, 10 + i).unwrap(),
        expected_c: 10.0,
        band_c: (9.3, 10.7),
        measured_c: 12.0,
        flow_m3s: 20.0,
        age_days: 3 + i64::from(i),
        cast: "cast.csv".into(),
        cast_range_c: 14.0,
        readings: readings(0.3),
        otherwise_c: vec![("N1 shut".into(), 7.0), ("N3 open as well".into(), 14.5)],
        shut_c: vec![("low".into(), 6.0), ("high".into(), 14.5)],
        heave_c: Some((9.6, 10.4)),
        ..Clue::default()
    };
    Clues {
        days: (0..4).map(day).collect(),
        usual_range_c: Some(0.6),
        usual_step_c: Some(0.1),
        ..Clues::default()
    }
}

/// A day of readings that swings by so much either way.
fn readings(by_c: f64) -> Vec<(f64, f64)> {
    (0..24)
        .map(f64::from)
        .map(|hour| (hour, 12.0 + by_c * (hour / 12.0 * std::f64::consts::PI).sin()))
        .collect()
}

fn first(clues: &Clues) -> Cause {
    let all = causes(clues);
    assert_eq!(all.len(), 6);
    let first = all.into_iter().next().unwrap();
    assert!(!first.speaks_for.is_empty() && !first.to_tell.is_empty());
    first
}

#[test]
fn law_a_gate_elsewhere_comes_first() {
    let mut clues = silent();
    for day in &mut clues.days {
        day.otherwise_c.push(("N3 in the place of N2".into(), 12.2));
    }
    clues.step = Some(Step { at: "2025-07-10 09:00".into(), by_c: 1.9, decided: false });
    let found = first(&clues);
    assert_eq!(found.name, "gate not where the log says");
    assert!(found.speaks_for[0].contains("N3 in the place of N2"), "{found:?}");
    assert!(found.speaks_for[1].contains("2025-07-10 09:00"), "{found:?}");
    // a step on a day with a logged change is none, nor is one away from the spell
    for (by_c, decided) in [(1.9, true), (-1.9, false)] {
        clues.step = Some(Step { at: "2025-07-10 09:00".into(), by_c, decided });
        assert_eq!(first(&clues).speaks_for.len(), 1);
    }
}

#[test]
fn law_pulses_of_flow_come_first() {
    let mut clues = silent();
    for day in &mut clues.days {
        day.readings = readings(1.2);
        day.gauge_flow_m3s = Some((20.0, 4.0, 40.0));
    }
    assert_eq!(first(&clues).name, "peaking");
}

#[test]
fn law_a_steady_leak_comes_first() {
    let mut clues = silent();
    for day in &mut clues.days {
        // 1.6 m3/s of 20 from before the upper gate, on every day
        (day.shut_c[1].1, day.measured_c, day.band_c) = (20.0, 10.8, (9.3, 10.7));
    }
    let found = first(&clues);
    assert_eq!(found.name, "leakage");
    assert!(found.speaks_for[0].contains("through high, 8% of the release"), "{found:?}");
    // where the same gates gave what was expected just before, it is no leak
    clues.same_inside = 5;
    assert!(causes(&clues).iter().any(|cause| cause.name == "leakage" && !cause.against.is_empty()));
}

#[test]
fn law_layers_that_swing_to_both_sides_come_first() {
    let mut clues = silent();
    for (i, day) in clues.days.iter_mut().enumerate() {
        day.measured_c = if i % 2 == 0 { 12.0 } else { 8.0 };
        day.heave_c = Some((7.5, 12.5));
    }
    assert_eq!(first(&clues).name, "layers swinging (seiche)");
}

#[test]
fn law_a_gauge_that_stands_still_comes_first() {
    let mut clues = silent();
    for day in &mut clues.days {
        day.readings = (0..24).map(|hour| (f64::from(hour), 12.0)).collect();
    }
    let found = first(&clues);
    assert_eq!(found.name, "sensor");
    assert!(found.speaks_for[0].contains("23 hours on end"), "{found:?}");
}

#[test]
fn law_a_cast_that_was_overtaken_comes_first() {
    let mut clues = silent();
    for (i, day) in clues.days.iter_mut().enumerate() {
        (day.age_days, day.measured_c) = (8 + i64::try_from(i).unwrap(), 11.0 + 0.4 * i as f64);
        day.next_c = Some((5 - i64::try_from(i).unwrap(), 11.5));
    }
    let found = first(&clues);
    assert_eq!(found.name, "stale cast");
    assert_eq!(found.speaks_for.len(), 3, "{found:?}");
    // and is none where the next cast shows the same water
    for day in &mut clues.days {
        day.next_c = Some((5, 10.0));
    }
    let all = causes(&clues);
    let stale = all.iter().find(|cause| cause.name == "stale cast").unwrap();
    assert!(stale.against.iter().any(|words| words.contains("on the water of the next cast")), "{stale:?}");
}

#[test]
fn law_nothing_known_speaks_for_nothing() {
    let mut clues = silent();
    for day in &mut clues.days {
        (day.readings, day.otherwise_c, day.shut_c) = (Vec::new(), Vec::new(), Vec::new());
        (day.heave_c, day.cast_range_c) = (None, 14.0);
    }
    clues.usual_range_c = None;
    assert!(causes(&clues).iter().all(|cause| cause.speaks_for.is_empty()));
    assert!(causes(&Clues::default()).is_empty());
}
