//! What the spring of the third site has to show: its record teaches what was planted in it and nothing else, and the
//! days on which a gate was not where the log says are found.

use std::ops::ControlFlow;

use chrono::{DateTime, NaiveDate, Utc};
use gatemix::record::{Effect, Verdict};
use gatemix::site::SetNow;
use gatemix::tasks::log::{DecisionAsked, decide, past, skill};
use gatemix::tasks::{Asked, Context, open};

use super::demo::tessel::{MADE_LATE, TOO_WARM_C};

fn tessel() -> Context {
    let asked = Asked { site: Some("tessel".into()), ..Asked::default() };
    open(&asked, DateTime::<Utc>::UNIX_EPOCH).unwrap_or_else(|failure| panic!("{failure:?}"))
}

#[test]
fn scenario_the_record_of_the_third_site_teaches_what_was_planted_in_it() {
    let context = tessel();
    assert!(context.log.problems.is_empty(), "{:?}", context.log.problems);
    assert_eq!(context.log.log.decisions().len(), 10);
    let past = past(&context, &|_| ControlFlow::Continue(())).unwrap();
    let learning = &past.learning;
    // the short way, for a note, finds the same
    let skill = skill(&context, &|_| ControlFlow::Continue(())).unwrap();
    assert_eq!((skill.temperature, skill.oxygen), (past.temperature.all, past.oxygen.all));
    assert_eq!(format!("{:?}", skill.learning), format!("{learning:?}"));
    let of = |effect: Effect| learning.candidates.iter().find(|c| c.effect == effect).unwrap();
    let bias = of(Effect::Bias);
    assert_eq!(bias.verdict, Verdict::Kept);
    assert!(bias.n > 60 && bias.stretches == 6, "{bias:?}");
    let (low_c, high_c) = bias.figures[0].interval.unwrap();
    assert!(low_c < TOO_WARM_C && TOO_WARM_C < high_c && high_c - low_c < 0.5, "{low_c} {high_c}");
    let [without_c, with_c] = bias.held_out.unwrap();
    assert!(with_c < 0.8 * without_c, "{without_c} {with_c}");
    // what the river takes up on the apron and what the deep water loses between casts outweigh each other
    for effect in [Effect::ZoneFactor, Effect::OxygenGain] {
        assert!(matches!(of(effect).verdict, Verdict::Refused(_)), "{:?}", of(effect));
    }
    // the days of the fault and those of changes are left out, with the reason
    let left = |date: &str| {
        let date: NaiveDate = date.parse().unwrap();
        past.left_out.iter().find(|left| left.date == date).map(|left| left.why.words())
    };
    for day in ["2026-05-14", "2026-05-15", "2026-05-16", "2026-05-17"] {
        assert!(left(day).is_some_and(|why| why.contains("meter fault")), "{day}");
    }
    assert_eq!(left("2026-05-19").as_deref(), Some("the setting was changed that day"));
    assert!(left("2026-06-06").is_some_and(|why| why.contains("no valid mean")));
    // the gate that was shut late
    let (from, to) = MADE_LATE;
    let found = past.spells.iter().find(|spell| spell.days.0.to_string() == from).unwrap();
    assert_eq!((found.days.1.to_string().as_str(), found.outside), (to, 3));
    assert_eq!(found.causes[0].name, "gate not where the log says", "{found:#?}");
    assert!(found.causes[0].speaks_for[0].contains("T3"), "{found:#?}");
    let hindcast = past.hindcast.unwrap();
    assert!(hindcast.observed.is_some() && hindcast.plan == "past spring");
}

#[test]
fn scenario_what_is_set_now_is_the_last_decision_and_the_same_by_the_site_file() {
    let context = tessel();
    let decided = context.standing().unwrap();
    assert!(decided.ends.is_none());
    let set = &decided.decision.chosen.set;
    let site = context.site();
    assert_eq!(site.now.len(), set.len());
    for (outlet, now) in &site.now {
        let logged_m3s = set[&site.outlets[*outlet].name];
        assert!(matches!(now, SetNow::Flow(m3s) if (m3s - logged_m3s).abs() < 0.01), "{now:?} {logged_m3s}");
    }
    // read, and not written
    let refused = decide(&context, &DecisionAsked::default(), DateTime::<Utc>::UNIX_EPOCH, &|_| {
        ControlFlow::Continue(())
    });
    assert!(format!("{refused:?}").contains("it has no log to write"), "{refused:?}");
}
