//! Laws of a ranking on its own: what changes nothing, and what can only make it better or worse.

use std::collections::BTreeMap;

use chrono::Days;
use gatemix::mix::limits::Of;
use gatemix::mix::{Gate, Setting};
use gatemix::rank::{Extreme, Ranked, Ranking};
use gatemix::site::RawOutage;

use super::brute::ranked;
use super::dice::Dice;
use super::limits::limit;
use super::sites::{Case, case};
use crate::mix::sites::day;

const CASES: u64 = 50;

fn ranking(case: &Case) -> Option<Ranking> {
    let dam = case.dam()?;
    ranked(&case.question(&dam)).ok()
}

/// Another index for each outlet and well.
struct Places {
    outlets: Vec<usize>,
    wells: Vec<usize>,
}

/// The case with outlets and wells of the file in another order, and where each stands in it.
fn shuffled(case: &Case, dice: &mut Dice) -> (Case, Places) {
    let mut order = |count: usize| -> Vec<usize> {
        let mut order: Vec<usize> = (0..count).collect();
        (1..count).for_each(|i| order.swap(i, dice.below(i + 1)));
        order
    };
    let (outlets, wells) = (order(case.raw.outlets.len()), order(case.raw.wells.len()));
    let mut other = case.clone();
    other.raw.outlets = outlets.iter().map(|&i| case.raw.outlets[i].clone()).collect();
    other.raw.wells = wells.iter().map(|&i| case.raw.wells[i].clone()).collect();
    let places =
        |order: &[usize]| (0..order.len()).map(|i| order.iter().position(|&o| o == i).unwrap()).collect();
    let places = Places { outlets: places(&outlets), wells: places(&wells) };
    other.without = case.without.iter().map(|&o| places.outlets[o]).collect();
    let gate = |g: &Gate| Gate { outlet: places.outlets[g.outlet], ..*g };
    other.now = case.now.as_ref().map(|now| Setting::of(now.gates.iter().map(gate).collect()));
    (other, places)
}

fn moved_mix(mix: &mut Ranked, places: &Places) {
    for asked in &mut mix.asked {
        asked.direct.iter_mut().for_each(|g| g.outlet = places.outlets[g.outlet]);
        asked.open.iter_mut().for_each(|o| o.0 = places.outlets[o.0]);
        asked.totals.iter_mut().for_each(|t| t.0 = places.wells[t.0]);
    }
    mix.open.iter_mut().for_each(|o| *o = places.outlets[*o]);
    mix.open.sort_unstable();
}

/// The ranking as it would be told with other indices.
fn moved(mut ranking: Ranking, places: &Places) -> Ranking {
    let extremes = ranking.attainable_c.iter_mut().chain(&mut ranking.attainable_oxygen_mg_l).flatten();
    let told = extremes.chain(&mut ranking.trade).map(|e: &mut Extreme| &mut e.mix);
    told.chain(&mut ranking.mixes).for_each(|mix| moved_mix(mix, places));
    for rejected in &mut ranking.rejected {
        rejected.check.of = match rejected.check.of {
            Of::Outlet(o) => Of::Outlet(places.outlets[o]),
            Of::Well(w) => Of::Well(places.wells[w]),
            of => of,
        };
        rejected.open.iter_mut().for_each(|o| o.0 = places.outlets[o.0]);
    }
    ranking.rejected.sort_by_key(|r| (r.check.rule, r.check.of, r.check.item));
    ranking
}

/// Best key of each set of open outlets.
fn best(ranking: &Ranking) -> BTreeMap<&[usize], f64> {
    ranking.mixes.iter().map(|m| m.open.as_slice()).zip(ranking.keys.iter().copied()).collect()
}

#[test]
fn law_the_order_of_outlets_and_wells_changes_only_indices() {
    let mut compared = 0;
    for seed in 2000..2000 + CASES {
        let case = case(seed, seed % 2 == 0);
        let (other, places) = shuffled(&case, &mut Dice::new(seed));
        let (Some(one), Some(two)) = (ranking(&case), ranking(&other)) else { continue };
        assert_eq!(moved(one, &places), two, "case {seed}");
        compared += 1;
    }
    assert!(compared > CASES / 2, "{compared}");
}

#[test]
fn law_the_number_of_threads_changes_no_byte() {
    let threads = |count| rayon::ThreadPoolBuilder::new().num_threads(count).build().unwrap();
    let pools = [threads(1), threads(2), threads(5)];
    for seed in 3000..3000 + CASES {
        let case = case(seed, seed % 2 == 0);
        let told: Vec<String> =
            pools.iter().map(|pool| format!("{:?}", pool.install(|| ranking(&case)))).collect();
        assert!(told.iter().all(|t| *t == told[0]), "case {seed}");
    }
}

/// Mixes are judged or passed over; with the parts of limits apart, none twice.
#[test]
fn law_every_mix_examined_is_judged_or_skipped() {
    for seed in 4000..4000 + CASES {
        let Some(ranking) = ranking(&case(seed, seed % 3 > 0)) else { continue };
        assert_eq!(ranking.examined, ranking.judged + ranking.skipped, "case {seed}");
        assert!(ranking.allowed <= ranking.examined && ranking.mixes.len() as u64 <= ranking.allowed);
        assert!(
            ranking.rejected.iter().all(|r| r.count > 0 && r.count <= ranking.examined && r.check.broken())
        );
        assert_eq!(ranking.keys.len(), ranking.mixes.len());
    }
}

/// Where a ranking allows no more than another: fewer mixes, of no other outlets, none of them better, and nothing
/// attainable that was not.
fn allows_no_more(less: &Ranking, more: &Ranking, told: &str) {
    assert!(less.allowed <= more.allowed, "{told}");
    let all = best(more);
    for (open, key) in best(less) {
        assert!(all.get(open).is_some_and(|first| *first <= key), "{told}: {open:?}");
    }
    for (inner, outer) in [
        (&less.attainable_c, &more.attainable_c),
        (&less.attainable_oxygen_mg_l, &more.attainable_oxygen_mg_l),
    ] {
        let Some([low, high]) = inner else { continue };
        let [least, most] = outer.as_ref().unwrap();
        assert!(least.value <= low.value && high.value <= most.value, "{told}");
    }
}

#[test]
fn law_another_limit_never_allows_more() {
    let mut narrowed = 0;
    for seed in 5000..5000 + CASES {
        let mut limited = case(seed, false);
        let Some(free) = ranking(&limited) else { continue };
        let flow_m3s = limited.blocks[0].1;
        limit(&mut limited.raw, &limited.water.clone(), flow_m3s, &mut Dice::new(seed));
        let Some(under) = ranking(&limited) else { continue };
        allows_no_more(&under, &free, &format!("case {seed}"));
        narrowed += u64::from(under.allowed < free.allowed);
    }
    assert!(narrowed > CASES / 2, "{narrowed}");
}

/// An outlet left out and one out of use leave the same mixes; only those that are refused differ.
#[test]
fn law_an_outlet_left_out_is_one_out_of_use() {
    let mut alike = 0;
    for seed in 6000..6000 + CASES {
        let mut out = case(seed, seed % 2 == 0);
        out.without.clear();
        let outlet = Dice::new(seed).below(out.raw.outlets.len());
        // what spills by itself cannot be left out
        if out.raw.outlets[outlet].kind.is_some() && out.raw.outlets[outlet].gated.is_none() {
            continue;
        }
        let mut left_out = out.clone();
        left_out.without = vec![outlet];
        out.raw.limits.outages.push(RawOutage {
            outlet: out.raw.outlets[outlet].name.clone(),
            from: Some((day() - Days::new(3)).to_string()),
            to: None,
            reason: String::new(),
        });
        let (Some(out), Some(left_out)) = (ranking(&out), ranking(&left_out)) else { continue };
        assert!(left_out.examined < out.examined);
        let common =
            |r: Ranking| (r.mixes, r.keys, r.allowed, r.attainable_c, r.attainable_oxygen_mg_l, r.trade);
        assert_eq!(common(left_out), common(out), "case {seed}");
        alike += 1;
    }
    assert!(alike > CASES / 2, "{alike}");
}

/// Steps of 10 % are among those of 5 %.
#[test]
fn law_a_finer_step_is_never_worse() {
    let mut better = 0;
    for seed in 7000..7000 + CASES {
        let mut fine = case(seed, seed % 2 == 0);
        fine.steps = 5;
        let Some(coarse) = ranking(&fine) else { continue };
        fine.steps = 10;
        let Some(fine) = ranking(&fine) else { continue };
        allows_no_more(&coarse, &fine, &format!("case {seed}"));
        better += u64::from(fine.keys.first() < coarse.keys.first());
    }
    assert!(better > 0);
}
