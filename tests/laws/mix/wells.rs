//! Wells that share out their totals, over random sites: two wells, some of whose gates draw from one level.

use approx::assert_relative_eq;
use gatemix::mix::{Asked, Gate, Setting, groups, resolve};
use gatemix::problem::Problem;
use gatemix::site::{RawWell, SetNow, Site};
use gatemix::tasks::{self, Failure, Word};
use proptest::prelude::*;

use super::order::opened;
use super::sites::{Case, Kinds, Ready, basin, cases, gate, port};
use crate::columns::{config, worked};

const TIGHT: Kinds = Kinds { leaks: false, crests: false };
const LEAKY: Kinds = Kinds { leaks: true, crests: true };

/// The setting of a case with each well's flows as its total; gates out of the water left out.
fn asked(ready: &Ready) -> Asked {
    let mut out = Asked::default();
    let mut totals = vec![0.0; ready.site.wells.len()];
    for gate in &ready.setting.gates {
        let outlet = &ready.site.outlets[gate.outlet];
        if outlet.open_part(gate.opening).centre_m >= ready.profile.pool_m {
            continue;
        }
        match outlet.well {
            None => out.direct.push(*gate),
            Some(well) => {
                out.open.push((gate.outlet, gate.opening));
                totals[well] += gate.flow_m3s.max(0.1);
            }
        }
    }
    out.totals = totals.into_iter().enumerate().filter(|t| t.1 > 0.0).collect();
    out
}

fn resolved(ready: &Ready, asked: &Asked) -> Setting {
    resolve(&ready.site, &ready.profile.column, &groups(&ready.site), asked, ready.profile.pool_m)
}

fn warnings(ready: Ready, setting: Setting) -> Vec<Problem> {
    let ready = Ready { setting, ..ready };
    if ready.set_m3s() > 0.0 { ready.judged().warnings } else { Vec::new() }
}

/// Gates and leaks by the names of their outlets.
fn named(site: &Site, setting: &Setting) -> Vec<(String, u64, u64)> {
    let mut out: Vec<_> = setting
        .gates
        .iter()
        .chain(&setting.leaks)
        .map(|g| (site.outlets[g.outlet].name.clone(), g.opening.to_bits(), g.flow_m3s.to_bits()))
        .collect();
    out.sort_unstable();
    out
}

fn shuffled(kinds: Kinds) -> impl Strategy<Value = (Case, Vec<usize>, Vec<Gate>)> {
    cases(kinds).prop_flat_map(|case| {
        let order: Vec<usize> = (0..case.raw.outlets.len()).collect();
        let gates = case.gates.clone();
        (Just(case), Just(order).prop_shuffle(), Just(gates).prop_shuffle())
    })
}

proptest! {
    #![proptest_config(config(150))]

    /// Leaks included, nothing gained or lost, and no gate flows backwards.
    #[test]
    fn law_the_flows_of_a_well_sum_to_its_total(case in cases(LEAKY)) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let asked = asked(&ready);
        let setting = resolved(&ready, &asked);
        prop_assert_eq!(setting.wells.len(), asked.totals.len());
        for &(well, total) in &asked.totals {
            let on = |g: &&Gate| ready.site.outlets[g.outlet].well == Some(well);
            let flows = setting.gates.iter().chain(&setting.leaks).filter(on).map(|g| g.flow_m3s);
            assert_relative_eq!(flows.sum::<f64>(), total, max_relative = 1e-9);
            let state = setting.wells.iter().find(|w| w.well == well).unwrap();
            assert_relative_eq!(state.flow_m3s, total);
            prop_assert!(state.split.iter().all(|g| g.flow_m3s >= 0.0) && state.head_m > 0.0);
        }
        let direct = setting.gates.iter().filter(|g| ready.site.outlets[g.outlet].well.is_none());
        prop_assert_eq!(direct.count(), asked.direct.len());
    }

    #[test]
    fn law_wells_that_share_levels_settle(case in cases(LEAKY)) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let setting = resolved(&ready, &asked(&ready));
        prop_assert!(setting.wells.iter().all(|w| w.settled), "{:?}", setting.wells);
    }

    /// Bit for bit: order of outlets in the file, of gates, of totals.
    #[test]
    fn law_order_changes_nothing_in_a_well((case, order, gates) in shuffled(LEAKY)) {
        let mut other = case.clone();
        other.raw.outlets = order.iter().map(|&i| case.raw.outlets[i].clone()).collect();
        let place = |outlet: usize| order.iter().position(|&i| i == outlet).unwrap();
        other.gates = gates.iter().map(|g| Gate { outlet: place(g.outlet), ..*g }).collect();
        let (Some(a), Some(b)) = (case.ready(), other.ready()) else { return Ok(()) };
        let mut first = asked(&a);
        let mut second = asked(&b);
        // the sums of flows are those of the case, in one order
        second.totals = first.totals.iter().rev().copied().collect();
        first.open.reverse();
        let (first, second) = (resolved(&a, &first), resolved(&b, &second));
        prop_assert_eq!(named(&a.site, &first), named(&b.site, &second));
        for (one, other) in first.wells.iter().zip(&second.wells) {
            prop_assert_eq!((one.well, one.head_m.to_bits()), (other.well, other.head_m.to_bits()));
        }
        prop_assert_eq!(warnings(a, first), warnings(b, second));
    }

    #[test]
    fn law_one_open_gate_takes_all(case in cases(TIGHT), outlet in 0..7_usize, opening in 0.1..=1.0_f64) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let outlet = outlet % ready.site.outlets.len();
        let Some(well) = ready.site.outlets[outlet].well else { return Ok(()) };
        let direct = asked(&ready).direct;
        let asked = Asked { direct, open: vec![(outlet, opening)], totals: vec![(well, 7.3)] };
        let setting = resolved(&ready, &asked);
        let gate = setting.gates.iter().find(|g| g.outlet == outlet).unwrap();
        prop_assert_eq!((gate.opening, gate.flow_m3s), (opening, 7.3));
        prop_assert_eq!(setting.gates.len(), asked.direct.len() + 1);
    }

    /// A leak takes from the gates what it passes, never from beyond the total.
    #[test]
    fn law_leaks_are_part_of_the_conduits_flow(case in cases(LEAKY)) {
        let mut tight = case.clone();
        tight.raw.outlets.iter_mut().for_each(|o| o.leakage = None);
        let (Some(leaky), Some(tight)) = (case.ready(), tight.ready()) else { return Ok(()) };
        let asked = asked(&leaky);
        let (leaky, tight) = (resolved(&leaky, &asked), resolved(&tight, &asked));
        prop_assert!(tight.leaks.is_empty());
        for (with, without) in leaky.wells.iter().zip(&tight.wells) {
            let sum = |gates: &[Gate]| gates.iter().filter(|g| g.opening > 0.0).map(|g| g.flow_m3s).sum::<f64>();
            let leaks: f64 = with.split.iter().filter(|g| g.opening <= 0.0).map(|g| g.flow_m3s).sum();
            assert_relative_eq!(sum(&with.split) + leaks, sum(&without.split), max_relative = 1e-9);
        }
    }

    /// What a well passes fully open, given back as flows, is what it would pass.
    #[test]
    fn law_flows_of_a_split_do_not_differ_from_it(case in cases(TIGHT), by in 0.05..0.5_f64) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let mut asked = asked(&ready);
        asked.open.iter_mut().for_each(|g| g.1 = 1.0);
        let pool_m = ready.profile.pool_m;
        asked.open.retain(|g| ready.site.outlets[g.0].centre_m < pool_m);
        let open = |w: usize| asked.open.iter().any(|g| ready.site.outlets[g.0].well == Some(w));
        let totals: Vec<(usize, f64)> = asked.totals.iter().copied().filter(|t| open(t.0)).collect();
        let setting = resolved(&ready, &Asked { totals, ..asked });
        let flows = |gates: Vec<Gate>| Asked { direct: gates, ..Asked::default() };
        let given = resolved(&ready, &flows(setting.gates.clone()));
        prop_assert!(given.wells.iter().all(|w| w.given));
        prop_assert_eq!(given.wells.len(), setting.wells.len());
        // one gate with a share of the others' beside its own does
        let mut moved = setting.gates.clone();
        let well = |g: &Gate| ready.site.outlets[g.outlet].well;
        let pair = moved.iter().enumerate().find_map(|(i, a)| {
            let j = moved.iter().skip(i + 1).position(|b| well(a).is_some() && well(a) == well(b))?;
            Some((i, i + 1 + j))
        });
        if let Some((i, j)) = pair {
            let step = by * (moved[i].flow_m3s + moved[j].flow_m3s);
            let (from, to) = if moved[i].flow_m3s > moved[j].flow_m3s { (i, j) } else { (j, i) };
            moved[from].flow_m3s -= step;
            moved[to].flow_m3s += step;
            let total: f64 = moved.iter().filter(|g| well(g) == well(&moved[i])).map(|g| g.flow_m3s).sum();
            let differs = |setting: Setting| {
                let ready = case.ready().unwrap();
                warnings(ready, setting).iter().any(|w| w.kind == "split-differs")
            };
            prop_assert_eq!(differs(resolved(&ready, &flows(moved))), step > 0.02 * total);
        }
        prop_assert!(!warnings(ready, given).iter().any(|w| w.kind == "split-differs"));
    }
}

/// Two ports of 6 m2 at 30 and 45 m, the conduit low, 10 m3/s between them: 48 % above (the worked chain).
fn shaft() -> (Ready, Asked) {
    let mut raw = basin(&worked());
    raw.wells = vec![RawWell { name: Some("Shaft".into()), conduit_m: Some(2.0), ..RawWell::default() }];
    raw.outlets = vec![port("low", 30.0, 2.0, 3.0), port("high", 45.0, 2.0, 3.0)];
    for outlet in &mut raw.outlets {
        (outlet.well, outlet.loss) = (Some("Shaft".into()), Some(1.5));
    }
    let ready = Case { raw, water: worked(), gates: vec![gate(0, 10.0)] }.ready().unwrap();
    (ready, Asked { open: vec![(0, 1.0), (1, 1.0)], totals: vec![(0, 10.0)], ..Asked::default() })
}

/// 4.809 m3/s through 6 m2 is 0.8015 m/s, 49.13 mm of loss; a tenth of that is the head of 0.3104 m/s, in a shaft of
/// 32.22 m2.
#[test]
fn scenario_a_narrow_shaft_is_told() {
    for (plan_area_m2, told) in [(Some(32.0), true), (Some(32.4), false), (None, false)] {
        let (mut ready, asked) = shaft();
        ready.site.wells[0].plan_area_m2 = plan_area_m2;
        let setting = resolved(&ready, &asked);
        let warnings = warnings(ready, setting);
        assert_eq!(warnings.iter().any(|w| w.kind == "shaft-velocity"), told, "{plan_area_m2:?}");
    }
}

#[test]
fn scenario_a_split_that_did_not_settle_is_told() {
    for settled in [true, false] {
        let (ready, asked) = shaft();
        let mut setting = resolved(&ready, &asked);
        assert!(setting.wells[0].settled);
        setting.wells[0].settled = settled;
        assert_eq!(warnings(ready, setting).iter().any(|w| w.kind == "unsettled"), !settled);
    }
}

/// Openings with the well's total now are what the same words give; without the total it is asked for.
#[test]
fn scenario_the_setting_now_in_openings_with_the_wells_total() {
    let mut context = opened(None);
    let [b, c] = ["B", "C"].map(|name| context.site().outlet(name).unwrap());
    context.folder.site.now = vec![(c, SetNow::Opening(0.5)), (b, SetNow::Opening(1.0))];
    let Err(Failure::Usage(why)) = tasks::now_setting(&context) else { panic!("a total is missing") };
    assert!(why.starts_with("well `Shaft` has an open gate and no total"), "{why}");
    let told = |context: &_| {
        let answer = tasks::mix(context, &[Word::Set("Sluice=5")]).unwrap();
        let why = answer.mix.warnings.iter().find(|w| w.kind == "now-not-shown").map(|w| w.words.clone());
        (answer.now, why)
    };
    assert!(told(&context).1.unwrap().ends_with(&why));

    context.folder.site.now_wells = vec![(0, 12.0)];
    let (now, why) = told(&context);
    assert_eq!(why, None);
    let words = [Word::Open("B=100%"), Word::Open("C=50%"), Word::Set("Shaft=12")];
    let answer = tasks::mix(&context, &words).unwrap();
    let (setting, mix) = now.unwrap();
    assert_eq!((&setting, &mix.release), (&answer.setting, &answer.mix.release));
    // it is the setting tried, so there is no other
    assert_eq!(answer.now, None);
    let released = [Word::Release("12"), Word::Open("C=50%"), Word::Open("B=100%")];
    assert_eq!(tasks::setting(&context, &released).unwrap().setting, setting);
    assert_eq!(tasks::mix(&context, &[]).unwrap().setting, setting);
}
