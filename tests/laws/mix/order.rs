//! The order of gates, of outlets in the file and of `--set` changes nothing.

use chrono::{DateTime, Utc};
use gatemix::mix::{Blend, Drawn, Gate, Mix, Spread, TargetStanding, refusals};
use gatemix::problem::Problem;
use gatemix::report::{json, text};
use gatemix::site::Site;
use gatemix::tasks::{self, Asked, Failure};
use proptest::prelude::*;

use super::sites::{Case, Kinds, cases};
use crate::columns::config;

/// A mix with the names of its outlets in place of their indices.
#[derive(Debug, PartialEq)]
struct Named {
    levels: Vec<(Vec<String>, Drawn)>,
    release: Blend,
    spread: Spread,
    targets: Vec<TargetStanding>,
    not_checked: Vec<String>,
    warnings: Vec<Problem>,
}

fn named(site: &Site, mix: Mix) -> Named {
    let level = |mut drawn: Drawn| {
        let indices = std::mem::take(&mut drawn.level.outlets);
        (indices.iter().map(|&i| site.outlets[i].name.clone()).collect(), drawn)
    };
    Named {
        levels: mix.levels.into_iter().map(level).collect(),
        release: mix.release,
        spread: mix.spread,
        targets: mix.targets,
        not_checked: mix.not_checked,
        warnings: mix.warnings,
    }
}

fn anything() -> impl Strategy<Value = (Case, Vec<usize>, Vec<Gate>)> {
    cases(Kinds { leaks: true, crests: true }).prop_flat_map(|case| {
        let order: Vec<usize> = (0..case.raw.outlets.len()).collect();
        let gates = case.gates.clone();
        (Just(case), Just(order).prop_shuffle(), Just(gates).prop_shuffle())
    })
}

proptest! {
    #![proptest_config(config(150))]

    /// Bit for bit: release, levels, band, standings, what is not checked, warnings in their order, refusals.
    #[test]
    fn law_order_of_gates_and_outlets_changes_nothing((case, order, gates) in anything()) {
        let mut other = case.clone();
        other.raw.outlets = order.iter().map(|&i| case.raw.outlets[i].clone()).collect();
        let place = |outlet: usize| order.iter().position(|&i| i == outlet).unwrap();
        other.gates = gates.iter().map(|g| Gate { outlet: place(g.outlet), ..*g }).collect();
        let (Some(a), Some(b)) = (case.ready(), other.ready()) else { return Ok(()) };
        prop_assert_eq!(named(&a.site, a.judged()), named(&b.site, b.judged()));
        let refused = |r: &super::sites::Ready, pool_m: f64| refusals(&r.site, &r.setting, pool_m);
        for share in [0.2, 0.5, 1.0] {
            let pool_m = case.water.at(share);
            prop_assert_eq!(refused(&a, pool_m), refused(&b, pool_m));
        }
    }
}

fn moment() -> DateTime<Utc> {
    "2026-07-14T18:30:00Z".parse().unwrap()
}

/// Every order of a few words.
fn orders(words: &[&str]) -> Vec<Vec<String>> {
    let Some((first, rest)) = words.split_first() else { return vec![Vec::new()] };
    let mut out = Vec::new();
    for shorter in orders(rest) {
        for at in 0..=shorter.len() {
            let mut longer = shorter.clone();
            longer.insert(at, (*first).to_owned());
            out.push(longer);
        }
    }
    out
}

/// Through the task, on a demonstration site, with several limits of several gates broken at once.
#[test]
fn scenario_the_order_of_set_changes_no_byte() {
    let context = tasks::open(&Asked { site: Some("ashlar".into()), ..Asked::default() }, moment()).unwrap();
    let words = ["W1=90cfs", "E2=80cfs", "W4=70.1cfs", "W5=333.3cfs"];
    let shown: Vec<[String; 2]> = orders(&words)
        .iter()
        .map(|sets| {
            let answer = tasks::mix(&context, sets).unwrap();
            [json::mix(&context, &answer), text::mix(&context, &answer)]
        })
        .collect();
    assert_eq!(shown.len(), 24);
    for what in ["flow.min of `W1`", "flow.min of `E2`", "flow.min of `W4`", "max_open of well `West`"] {
        assert!(shown[0][0].contains(what), "{what} is broken");
    }
    assert!(shown.iter().all(|s| *s == shown[0]));
}

#[test]
fn scenario_the_order_of_set_changes_no_refusal() {
    let asked = Asked { site: Some("ashlar".into()), pool: Some("1440ft".into()), ..Asked::default() };
    let context = tasks::open(&asked, moment()).unwrap();
    let words = ["W1=90cfs", "E1=80cfs", "W4=7000cfs", "E5=333.3cfs"];
    let refused = |sets: &Vec<String>| match tasks::mix(&context, sets) {
        Err(Failure::Refused(problems, _)) => problems,
        other => panic!("{other:?}"),
    };
    let all: Vec<Vec<Problem>> = orders(&words).iter().map(refused).collect();
    assert_eq!(all[0].iter().map(|p| p.kind).collect::<Vec<_>>(), ["dry", "dry", "capacity"]);
    assert!(all.iter().all(|problems| *problems == all[0]));
}
