//! Where every way to set the gates can be tried, thrift finds the best.

use std::collections::BTreeSet;
use std::sync::Arc;

use chrono::Days;
use gatemix::mix::Gate;
use gatemix::season::{Choosing, Schedule, Score};
use gatemix::site::Strategy;

use super::tiny::{Of, Tiny, begins};

/// The best score over every sequence of gates, by schedules that say them one after the other.
fn brute(tiny: &Tiny) -> Score {
    let of = tiny.of;
    let skies = tiny.skies(0.0);
    // decided in its turn, and on the day the rule changes
    let on: BTreeSet<u32> = (0..of.days).step_by(of.every as usize).chain([of.days / 2]).collect();
    let ways = on.iter().fold(1, |ways, _| ways * of.gates);
    let mut best: Option<Score> = None;
    for way in 0..ways {
        let gate = |k: u32| way / of.gates.pow(k) % of.gates;
        let change = |(k, day): (u32, &u32)| {
            let gate = Gate { outlet: gate(k), opening: 1.0, flow_m3s: of.release_m3s };
            (begins() + Days::new(u64::from(*day)), vec![gate])
        };
        let schedule = Schedule { file: "way".into(), changes: (0..).zip(&on).map(change).collect() };
        let choosing = Choosing::Schedule(Arc::new(schedule));
        let run = tiny.run(&skies, choosing.clone());
        let score = Score::of(&tiny.setup(&skies, choosing), &run);
        if best.is_none_or(|best| score.order(&best).is_lt()) {
            best = Some(score);
        }
    }
    best.unwrap()
}

#[test]
fn law_thrift_equals_every_way_tried() {
    let base = Of {
        gates: 3,
        on_a_well: true,
        days: 12,
        every: 4,
        thermocline_m: 12.0,
        warm_c: 21.0,
        cold_c: 7.0,
        release_m3s: 1.2,
        early_high_c: 19.0,
        late_high_c: 11.0,
        equilibrium_c: 22.0,
    };
    let cases = [
        base,
        Of { thermocline_m: 9.0, every: 3, ..base },
        Of { gates: 4, release_m3s: 2.0, ..base },
        Of { gates: 2, days: 10, every: 2, thermocline_m: 7.0, ..base },
        Of { late_high_c: 16.0, early_high_c: 9.0, ..base },
    ];
    let mut daily_is_worse = 0;
    for of in cases {
        let tiny = Tiny::new(of);
        let skies = tiny.skies(0.0);
        let score = |strategy| {
            let run = tiny.by(&skies, strategy);
            assert!(run.ended.is_none(), "{:?}", run.ended);
            Score::of(&tiny.setup(&skies, Choosing::By(strategy)), &run)
        };
        let (thrift, daily, brute) = (score(Strategy::Thrift), score(Strategy::Best), brute(&tiny));
        assert!(thrift.order(&brute).is_eq(), "{of:?}: thrift {thrift:?}, every way {brute:?}");
        daily_is_worse += usize::from(daily.order(&brute).is_gt());
    }
    assert!(daily_is_worse > 0, "the best of each day is never worse: these seasons prove nothing");
}
