//! The ranking of a small dam against every mix tried one by one.

use std::any::Any;
use std::collections::{BTreeMap, BTreeSet};
use std::ops::{ControlFlow, Range};
use std::panic::{AssertUnwindSafe, catch_unwind};

use gatemix::mix::limits::{Check, Of, Rule};
use gatemix::rank::{Question, Ranked, Ranking, Stopped, rank};

use super::mixes::{Number, Water};
use super::parts::Works;
use super::sites::{Case, case};

/// Round-off of sums taken in another order.
const SAME: f64 = 1e-9;
/// Cases of more mixes are left out: they take too long one by one.
const MOST_MIXES: usize = 6_000;
/// Width of a bin of the trade curve, C.
const TRADE_BIN_C: f64 = 0.1;

/// What every mix, one by one, comes to.
#[derive(Default)]
pub(super) struct Sum {
    pub(super) examined: u64,
    pub(super) allowed: Vec<(Number, Water)>,
    /// Best mix of each set of open outlets.
    pub(super) best: BTreeMap<Vec<usize>, (f64, Number)>,
    /// Mixes that break each limit, and the least miss.
    pub(super) broken: BTreeMap<(Rule, Of, usize), (u64, f64)>,
    /// Mixes whose shared levels draw a layer: the nearest is told by its flow too much.
    pub(super) drawn: BTreeMap<usize, Vec<(f64, f64)>>,
    pub(super) at_edge: bool,
}

/// Number of mixes there are.
pub(super) fn count(works: &Works, steps: usize) -> usize {
    let mut ways = vec![0_usize; steps + 1];
    ways[0] = 1;
    for part in &works.parts {
        let mut next = ways.clone();
        for (k, have) in ways.iter().enumerate() {
            for more in next.iter_mut().skip(k + 1) {
                *more += have * (part.states.len() - 1);
            }
        }
        ways = next;
    }
    ways[steps]
}

/// Goes through every state of every part and every way to share out the steps, in the fixed order.
fn every_mix(works: &Works, left: usize, so_far: &mut Number, visit: &mut dyn FnMut(&Number)) {
    let Some(part) = works.parts.get(so_far.len()) else {
        if left == 0 {
            visit(so_far);
        }
        return;
    };
    for share in 0..=left {
        let states = if share == 0 { 0..1 } else { 1..part.states.len() };
        for state in states {
            so_far.push((share, state));
            every_mix(works, left - share, so_far, visit);
            so_far.pop();
        }
    }
}

pub(super) fn summed(works: &Works) -> Sum {
    let mut sum = Sum::default();
    let hopeless = works.hopeless();
    let note = |broken: &mut BTreeMap<_, (u64, f64)>, check: &Check| {
        let of = (check.rule, check.of, check.item);
        let missed = broken.entry(of).or_insert((0, f64::NEG_INFINITY));
        missed.0 += 1;
        missed.1 = missed.1.max(check.room);
    };
    every_mix(works, works.steps, &mut Vec::new(), &mut |number| {
        sum.examined += 1;
        let judged = works.judge(number);
        for check in &hopeless {
            note(&mut sum.broken, check);
        }
        let of_the_whole = |c: &Check| matches!(c.of, Of::Whole | Of::Share(_));
        // where nothing can help, no mix is taken together any more
        let kept = hopeless.is_empty();
        judged.broken.iter().filter(|c| kept || !of_the_whole(c)).for_each(|c| note(&mut sum.broken, c));
        for &(item, excess, room) in judged.drawn.iter().filter(|_| kept) {
            sum.drawn.entry(item).or_default().push((excess, room));
        }
        let Some(water) = judged.water.filter(|_| kept) else {
            sum.at_edge |= judged.at_edge;
            return;
        };
        sum.at_edge |= judged.at_edge || water.at_edge;
        let best = sum.best.entry(judged.open).or_insert((f64::INFINITY, Vec::new()));
        if water.key < best.0 {
            *best = (water.key, number.clone());
        }
        sum.allowed.push((number.clone(), water));
    });
    sum
}

fn near(a: f64, b: f64) -> bool {
    (a - b).abs() <= SAME * (1.0 + a.abs().max(b.abs()))
}

/// Whether a mix of the ranking is this one.
fn same_mix(works: &Works, ranked: &Ranked, number: &Number) -> bool {
    let asked = works.asked(number);
    ranked.asked.len() == asked.len()
        && ranked.asked.iter().zip(&asked).all(|(a, b)| {
            let gates = a.direct.len() == b.direct.len()
                && a.direct.iter().zip(&b.direct).all(|(a, b)| {
                    (a.outlet, a.opening) == (b.outlet, b.opening) && near(a.flow_m3s, b.flow_m3s)
                });
            let totals = a.totals.len() == b.totals.len()
                && a.totals.iter().zip(&b.totals).all(|(a, b)| a.0 == b.0 && near(a.1, b.1));
            gates && totals && a.open == b.open
        })
}

/// Water of a mix of the ranking, as tried one by one.
fn water_of<'s>(works: &Works, sum: &'s Sum, ranked: &Ranked) -> &'s Water {
    let mut found = sum.allowed.iter().filter(|(number, _)| same_mix(works, ranked, number));
    // a ranked mix is one of the allowed
    let water = &found.next().unwrap().1;
    assert!(found.next().is_none(), "a mix is one mix");
    assert!(near(ranked.temperature_c, water.temperature_c), "{} {water:?}", ranked.temperature_c);
    assert_eq!(ranked.oxygen_mg_l.is_some(), water.oxygen_mg_l.is_some());
    assert!(ranked.oxygen_mg_l.zip(water.oxygen_mg_l).is_none_or(|(a, b)| near(a, b)));
    water
}

/// Least and greatest of the values there are.
fn ends(values: impl Iterator<Item = f64>) -> Option<[f64; 2]> {
    values.fold(None, |ends, v| {
        let [low, high] = ends.unwrap_or([v, v]);
        Some([low.min(v), high.max(v)])
    })
}

/// Holds a ranking against every mix.
pub(super) fn compare(works: &Works, sum: &Sum, ranking: &Ranking) {
    assert_eq!(ranking.examined, sum.examined);
    assert_eq!(ranking.examined, ranking.judged + ranking.skipped);
    let told: BTreeMap<_, _> = ranking
        .rejected
        .iter()
        .map(|r| ((r.check.rule, r.check.of, r.check.item), (r.count, r.check.room)))
        .collect();
    assert_eq!(told.len(), ranking.rejected.len(), "each limit once");
    let counts =
        |of: &BTreeMap<(Rule, Of, usize), (u64, f64)>| of.iter().map(|(k, v)| (*k, v.0)).collect::<Vec<_>>();
    assert_eq!(counts(&told), counts(&sum.broken));
    for (of, (_, room)) in &told {
        // endless outages miss by endless days
        if *of == (Rule::Undrawn, Of::Whole, of.2) {
            let mixes = &sum.drawn[&of.2];
            let least = mixes.iter().map(|m| m.0).fold(f64::INFINITY, f64::min);
            let found = mixes.iter().any(|m| m.0 < least + 1e-6 * (1.0 + least) && near(m.1, *room));
            assert!(found, "{of:?}: {room} told, {mixes:?} found");
            continue;
        }
        let least = sum.broken[of].1;
        assert!(*room == least || near(*room, least), "{of:?}: {room} told, {least} found");
    }
    assert_eq!(ranking.allowed, sum.allowed.len() as u64);
    let mut best: Vec<_> = sum.best.iter().collect();
    best.sort_by(|a, b| a.1.0.total_cmp(&b.1.0).then(a.1.1.cmp(&b.1.1)));
    assert_eq!(ranking.keys, best.iter().map(|b| b.1.0).collect::<Vec<_>>());
    for (ranked, (open, (_, number))) in ranking.mixes.iter().zip(best) {
        assert_eq!(&ranked.open, open);
        assert!(same_mix(works, ranked, number), "{ranked:?} is not {:?}", works.asked(number));
        water_of(works, sum, ranked);
    }
    compare_ends(works, sum, ranking);
    compare_trade(works, sum, ranking);
}

fn compare_ends(works: &Works, sum: &Sum, ranking: &Ranking) {
    let temperatures = ends(sum.allowed.iter().map(|a| a.1.temperature_c));
    let oxygens = ends(sum.allowed.iter().filter_map(|a| a.1.oxygen_mg_l));
    assert_eq!(ranking.attainable_c.is_some(), temperatures.is_some());
    assert_eq!(ranking.attainable_oxygen_mg_l.is_some(), oxygens.is_some());
    for (extreme, value) in ranking.attainable_c.iter().flatten().zip(temperatures.iter().flatten()) {
        assert!(near(extreme.value, *value), "{} told, {value} found", extreme.value);
        assert!(near(water_of(works, sum, &extreme.mix).temperature_c, *value));
    }
    for (extreme, value) in ranking.attainable_oxygen_mg_l.iter().flatten().zip(oxygens.iter().flatten()) {
        assert!(near(extreme.value, *value), "{} told, {value} found", extreme.value);
        assert!(near(water_of(works, sum, &extreme.mix).oxygen_mg_l.unwrap(), *value));
    }
}

/// Bin of the trade curve; the last holds 39.9 C and beyond.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a whole number from 0")]
pub(super) fn trade_bin(distance_c: f64) -> usize {
    ((distance_c / TRADE_BIN_C + 1e-12).floor() as usize).min(399)
}

/// No mix of a bin as near or nearer has more oxygen, and each bin that brings more is told.
fn compare_trade(works: &Works, sum: &Sum, ranking: &Ranking) {
    let known = || sum.allowed.iter().filter_map(|a| Some((trade_bin(a.1.distance_c), a.1.oxygen_mg_l?)));
    let mut most: BTreeMap<usize, f64> = BTreeMap::new();
    for (bin, oxygen) in known() {
        let so_far = most.entry(bin).or_insert(oxygen);
        *so_far = so_far.max(oxygen);
    }
    let mut told = Vec::new();
    for at in &ranking.trade {
        let water = water_of(works, sum, &at.mix);
        assert!(near(at.value, water.oxygen_mg_l.unwrap()));
        told.push((trade_bin(water.distance_c), at.value));
    }
    assert!(told.windows(2).all(|w| w[0].0 < w[1].0 && w[0].1 < w[1].1), "{told:?}");
    let mut highest = f64::NEG_INFINITY;
    for (&bin, &oxygen) in &most {
        let at = told.iter().find(|t| t.0 == bin);
        if let Some(at) = at {
            assert!(near(at.1, oxygen) && oxygen > highest - SAME, "{at:?}, {oxygen} in {most:?}");
        } else {
            assert!(oxygen < highest + SAME, "{oxygen} in bin {bin} is left out");
        }
        highest = highest.max(oxygen);
    }
    assert!(told.iter().all(|t| most.contains_key(&t.0)));
}

pub(super) fn ranked(question: &Question) -> Result<Ranking, Stopped> {
    rank(question, &|_| ControlFlow::Continue(()))
}

/// How many cases were compared, how many were skipped and why.
#[derive(Debug, Default)]
struct Tally {
    compared: usize,
    with_none_allowed: usize,
    mixes: u64,
    refused_casts: usize,
    too_many: usize,
    at_edge: usize,
    rules: BTreeSet<Rule>,
    kinds: BTreeMap<&'static str, usize>,
}

fn try_case(case: &Case, tally: &mut Tally) {
    let Some(dam) = case.dam() else {
        tally.refused_casts += 1;
        return;
    };
    let question = case.question(&dam);
    let works = Works::new(&question);
    if count(&works, works.steps) > MOST_MIXES {
        tally.too_many += 1;
        return;
    }
    let sum = summed(&works);
    if sum.at_edge {
        tally.at_edge += 1;
        return;
    }
    compare(&works, &sum, &ranked(&question).unwrap());
    tally.compared += 1;
    tally.mixes += sum.examined;
    tally.with_none_allowed += usize::from(sum.allowed.is_empty());
    tally.rules.extend(sum.broken.keys().map(|k| k.0));
    let levels = works.groups.iter().any(|g| works.is_shared(g));
    let allowed = |of: &dyn Fn(&Water) -> bool| sum.allowed.iter().any(|a| of(&a.1));
    for (kind, holds) in [
        ("one well", dam.site.wells.len() == 1),
        ("two wells", dam.site.wells.len() == 2),
        ("shared levels", levels),
        ("shared levels that draw a layer", !sum.drawn.is_empty()),
        ("spilling all or more", works.shared_out_m3s.contains(&0.0)),
        ("spilling", works.parts.iter().any(|p| p.spills_m3s.is_some())),
        ("unknown oxygen", allowed(&|w| w.oxygen_mg_l.is_none())),
        (
            "known oxygen beside it",
            allowed(&|w| w.oxygen_mg_l.is_some()) && allowed(&|w| w.oxygen_mg_l.is_none()),
        ),
        ("set now", question.now.is_some()),
        ("parts of the day", question.blocks.len() > 1),
        ("conduits that add oxygen", dam.site.aerates()),
        ("such conduits that share levels", dam.site.aerates() && levels),
        ("something learned", dam.site.learned().is_some()),
        ("learned, of shared levels", dam.site.learned().is_some() && levels),
        ("left out", !question.without.is_empty()),
        ("hopeless", !works.hopeless().is_empty()),
    ] {
        *tally.kinds.entry(kind).or_default() += usize::from(holds);
    }
}

fn words(panic: &(dyn Any + Send)) -> String {
    panic
        .downcast_ref::<String>()
        .cloned()
        .unwrap_or_else(|| panic.downcast_ref::<&str>().unwrap().to_string())
}

/// Tries the cases of these numbers; all that fail are told together.
fn try_cases(seeds: Range<u64>, limits: bool) -> Tally {
    let mut tally = Tally::default();
    let mut failed = Vec::new();
    for seed in seeds {
        let case = case(seed, limits);
        let tried = catch_unwind(AssertUnwindSafe(|| try_case(&case, &mut tally)));
        failed.extend(tried.err().map(|panic| format!("case {seed}: {}", words(&*panic))));
    }
    assert!(failed.is_empty(), "{tally:?}\n{}", failed.join("\n"));
    tally
}

#[test]
fn law_the_ranking_is_that_of_every_mix_tried_one_by_one() {
    let tally = try_cases(0..150, false);
    assert!(tally.compared >= 100, "{tally:?}");
    assert!(tally.with_none_allowed < tally.compared / 2, "{tally:?}");
}

#[test]
fn law_the_ranking_under_limits_is_that_of_every_mix_tried_one_by_one() {
    let tally = try_cases(1000..1400, true);
    assert!(tally.compared >= 300, "{tally:?}");
    assert!(tally.with_none_allowed < tally.compared / 2, "{tally:?}");
    let silent: Vec<&Rule> = Rule::ALL.iter().filter(|r| !tally.rules.contains(r)).collect();
    assert!(silent.is_empty(), "{silent:?} of no effect");
    assert!(tally.kinds.values().all(|count| *count >= 10), "{tally:?}");
}
