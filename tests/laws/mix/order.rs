//! The order of gates, of outlets in the file and of `--set` changes nothing.

use gatemix::mix::{Blend, Drawn, Gate, Mix, Spread, TargetStanding, refusals};
use gatemix::problem::Problem;
use gatemix::report::{json, text};
use gatemix::site::Site;
use gatemix::tasks::{self, Asked, Context, Failure, MixAnswer, Word};
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

const SITE: &str = "
name: Invented
units: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }
pool:
  bed: 0
  full: 60
  table: [[0, 1e5, 0], [62, 2e6, 6.51e7]]
wells:
  - { name: Shaft, conduit: 2, max_open: 2, max_flow: 15 }
outlets:
  - { name: B, well: Shaft, centre: 50, height: 2, width: 3, min_submergence: 12, flow: { min: 4, max: 30 } }
  - { name: C, well: Shaft, centre: 40, height: 2, width: 3, flow: { min: 4, max: 30 } }
  - { name: A, well: Shaft, centre: 39.5, height: 2, width: 3, flow: { min: 4, max: 30 } }
  - { name: Sluice, centre: 8, height: 2, width: 2, flow: { min: 4, max: 30 } }
release: { min: 50, max: 60 }
";
const CAST: &str = "# taken: 2026-07-14T10:30
# pool: 60
elevation_m,temperature_C,oxygen_mg_l
0,6,1
30,8,5
45,15,7
60,24,8
";

/// Each order of the words, through the task, on a site written to disk.
fn asked<T>(
    pool: Option<&str>,
    words: &[&str],
    told: impl Fn(&Context, Result<MixAnswer, Failure>) -> T,
) -> Vec<T> {
    let context = opened(pool);
    let mix = |sets: &Vec<String>| {
        let words: Vec<Word> = sets.iter().map(|set| Word::Now(set)).collect();
        tasks::mix(&context, &words)
    };
    orders(words).iter().map(|sets| told(&context, mix(sets))).collect()
}

/// The site written to disk and opened, its cast read.
pub(super) fn opened(pool: Option<&str>) -> Context {
    let folder = tempfile::tempdir().unwrap();
    std::fs::write(folder.path().join("site.yaml"), SITE).unwrap();
    std::fs::write(folder.path().join("cast.csv"), CAST).unwrap();
    let path = |file: &str| Some(folder.path().join(file).display().to_string());
    let pool = pool.map(str::to_owned);
    let asked = Asked { site: path(""), profile: path("cast.csv"), pool, ..Asked::default() };
    tasks::open(&asked, "2026-07-14T18:30:00Z".parse().unwrap()).unwrap()
}

/// Several limits of several gates are broken at once.
#[test]
fn scenario_the_order_of_set_changes_no_byte() {
    let shown = asked(None, &["A=3.1", "C=3.3", "B=10.7", "Sluice=2"], |context, answer| {
        let answer = answer.unwrap();
        [json::mix(context, &answer), text::mix(context, &answer)]
    });
    assert_eq!(shown.len(), 24);
    for what in [
        "flow.min of `A`",
        "flow.min of `C`",
        "flow.min of `Sluice`",
        "min_submergence of `B`",
        "max_open of well `Shaft`",
        "max_flow of well `Shaft`",
        "release.min",
    ] {
        assert!(shown[0][0].contains(what), "{what} is broken");
    }
    assert!(shown.iter().all(|s| *s == shown[0]));
}

/// A well's total among gates that are opened, beside a flow.
#[test]
fn scenario_the_order_of_openings_and_totals_changes_no_byte() {
    let words = ["Shaft=12", "B=100%", "A=33%", "C=50%", "Sluice=2"];
    let shown = asked(None, &words, |context, answer| {
        let answer = answer.unwrap();
        [json::mix(context, &answer), text::mix(context, &answer)]
    });
    assert_eq!(shown.len(), 120);
    assert!(shown.iter().all(|s| *s == shown[0]));
}

#[test]
fn scenario_the_order_of_set_changes_no_refusal() {
    let all = asked(Some("39.8"), &["Sluice=31", "C=5", "A=31", "B=5"], |_, answer| match answer {
        Err(Failure::Refused(problems, _)) => problems,
        other => panic!("{other:?}"),
    });
    assert_eq!(all.len(), 24);
    assert_eq!(all[0].iter().map(|p| p.kind).collect::<Vec<_>>(), ["capacity", "dry", "dry", "capacity"]);
    assert!(all.iter().all(|problems| *problems == all[0]));
}
