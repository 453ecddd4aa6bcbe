//! Answers beyond the list: the trade between temperature and oxygen, lost gates, the exact split, the least release,
//! and what more of it does.

use crate::mix::Gate;
use crate::mix::limits::Check;
use crate::mix::split::Part;
use crate::rank::{Criterion, Progress, Question, Ranked, Ranking, Seen, rank as search};
use crate::tasks::solve::{preferred_c, roots};

use super::kitchen::Kitchen;
use super::reasons::{behind, reasons};
use super::shown::Shown;

/// Ideas computed in full for each that is shown (choice).
const SPARE_IDEAS: usize = 2;
/// Steps of the search for the least release (choice: splits of 10 %).
const LEAST_STEPS: usize = 10;
/// Releases tried before the least is drawn in, and halvings after (choice).
const LEAST_TRIES: u32 = 12;
const LEAST_HALVINGS: usize = 5;
/// The release is varied by this share for the pocket rule, and the rule is held against shares up to its range
/// (choice).
const POCKET_STEP: f64 = 0.05;
const POCKET_RANGE: [f64; 2] = [0.5, 1.6];
/// Places the rule is tried at.
const POCKET_PLACES: u32 = 22;
/// The rule holds while it is this near, C (choice: a tenth is what is shown).
const POCKET_NEAR_C: f64 = 0.1;

/// A mix that no other beats in both temperature and oxygen.
#[derive(Debug, Clone)]
pub struct Trade {
    /// The mix.
    pub mix: Ranked,
    /// Time means, computed in full: C and mg/L.
    pub temperature_c: f64,
    /// See `temperature_c`.
    pub oxygen_mg_l: Option<f64>,
    /// What is set, flows as their time means.
    pub gates: Vec<Gate>,
}

/// The best mix without a gate.
#[derive(Debug, Clone)]
pub struct Lost {
    /// Index of the outlet.
    pub outlet: usize,
    /// The best mix that leaves it shut, computed in full; `None` where no allowed mix does.
    pub fallback: Option<Box<Shown>>,
}

/// One split that gives the preferred temperature.
#[derive(Debug, Clone, PartialEq)]
pub struct Root {
    /// Share of both that the first takes, 0 to 1.
    pub share: f64,
    /// Flow of both, m3/s.
    pub flows_m3s: [f64; 2],
    /// Temperature it gives, C.
    pub temperature_c: f64,
    /// Oxygen, mg/L.
    pub oxygen_mg_l: Option<f64>,
    /// Limits that it breaks, where it was held against any.
    pub breaks: Vec<Check>,
}

/// The splits of two parts of a mix that give the preferred temperature.
#[derive(Debug, Clone, PartialEq)]
pub struct PreferredSplit {
    /// What is open; everything but the split stays.
    pub gates: Vec<Gate>,
    /// The two parts that are varied.
    pub between: [Part; 2],
    /// The temperature wanted, C.
    pub preferred_c: f64,
    /// Every split found, from the least share of the first.
    pub roots: Vec<Root>,
    /// Coldest and warmest release over all splits, C: what there is where no root is.
    pub bracket_c: [f64; 2],
}

/// The least total release with which some mix keeps every target.
#[derive(Debug, Clone)]
pub struct Least {
    /// Flow, m3/s; `None` where none of those tried does.
    pub flow_m3s: Option<f64>,
    /// Least and greatest flow tried, m3/s.
    pub tried_m3s: [f64; 2],
    /// The mix, at splits of a tenth.
    pub gates: Vec<Gate>,
}

/// What more release does to the best mix, its openings and shares kept.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pocket {
    /// Change of temperature for a change of the release, C per m3/s.
    pub c_per_m3s: f64,
    /// Releases between which the rule is near, m3/s.
    pub from_m3s: f64,
    /// See `from_m3s`.
    pub to_m3s: f64,
}

/// What the answers are made from.
pub(super) struct Answers<'a> {
    pub(super) kitchen: &'a Kitchen<'a>,
    pub(super) question: &'a Question<'a>,
    pub(super) ranking: &'a Ranking,
}

impl Answers<'_> {
    /// The best of each idea, in full, on all cores. What the full computation shows to break a limit by a hair the
    /// search could not see is left out.
    pub(super) fn mixes(&self, top: usize) -> Vec<(&Ranked, Shown)> {
        use rayon::prelude::*;
        let ideas = self.ranking.ideas(top.saturating_mul(SPARE_IDEAS));
        let kept = |shown: &Shown| !shown.limits.iter().any(Check::broken);
        let mut mixes: Vec<(&Ranked, f64, Shown)> = ideas
            .par_iter()
            .filter_map(|idea| Some((idea.best, idea.key, self.kitchen.ranked(idea.best, idea.alike)?)))
            .filter(|(_, _, shown)| kept(shown))
            .collect();
        mixes.truncate(top);
        let mut before: Option<f64> = None;
        for (_, key, shown) in &mut mixes {
            shown.reasons = reasons(self.question.site, shown);
            shown
                .reasons
                .extend(before.map(|b| behind(Criterion::first_apart(self.question.order, b, *key))));
            before = Some(*key);
        }
        mixes.into_iter().map(|(ranked, _, shown)| (ranked, shown)).collect()
    }

    /// Where no mix keeps every target, the one that comes nearest. In the usual order the first mix keeps every
    /// target if any does; where another order hides that, it is asked for again.
    pub(super) fn nearest(&self, mixes: &[Shown], progress: Progress) -> Option<Shown> {
        let site = self.question.site;
        if mixes.iter().any(|shown| shown.keeps_all(site)) {
            return None;
        }
        let targets_first = |c: &Criterion| matches!(c, Criterion::Oxygen | Criterion::Range);
        let nearest = if self.question.order.iter().take(2).all(targets_first) {
            mixes.first()?.clone()
        } else {
            let order = Criterion::USUAL;
            let question = Question { order: &order, ..*self.question };
            let ranking = search(&question, progress).ok()?;
            self.kitchen.ranked(ranking.mixes.first()?, 0)?
        };
        (!nearest.keeps_all(site)).then_some(nearest)
    }

    /// The trade curve, in full. Mixes that the full computation shows to be beaten by a hair stay.
    pub(super) fn trade(&self) -> Vec<Trade> {
        let of = |mix: &Ranked| {
            let (temperature_c, oxygen_mg_l) = self.kitchen.release(mix)?;
            Some(Trade { mix: mix.clone(), temperature_c, oxygen_mg_l, gates: self.kitchen.gates(mix) })
        };
        self.ranking.trade.iter().filter_map(|e| of(&e.mix)).collect()
    }

    /// The best fallback for each gate that the best mix or the setting now uses.
    pub(super) fn lost(&self) -> Vec<Lost> {
        let site = self.question.site;
        let best = self.ranking.mixes.first().map_or_else(Vec::new, |m| m.open.clone());
        let now = self.question.now.map_or_else(Vec::new, |s| s.gates.iter().map(|g| g.outlet).collect());
        let mut used: Vec<usize> = best.into_iter().chain(now).collect();
        used.sort_by(|&a, &b| site.outlets[a].name.cmp(&site.outlets[b].name));
        used.dedup();
        let fallback = |outlet: usize| {
            let mix = self.ranking.without(outlet)?;
            self.kitchen.ranked(mix, 0).map(Box::new)
        };
        used.into_iter()
            .filter(|&o| !crate::intake::spills_by_itself(&site.outlets[o]))
            .map(|outlet| Lost { outlet, fallback: fallback(outlet) })
            .collect()
    }

    /// Largest differences between what the search took a mix for and what it is, C and mg/L: of the release, and of
    /// what rules speak of at the points.
    pub(super) fn apart(&self, mixes: &[(&Ranked, Shown)], trade: &[Trade]) -> (f64, Option<f64>) {
        let shown = mixes.iter().map(|(quick, full)| (*quick, full.temperature_c, full.oxygen_mg_l));
        let traded = trade.iter().map(|t| (&t.mix, t.temperature_c, t.oxygen_mg_l));
        let ends = [&self.ranking.attainable_c, &self.ranking.attainable_oxygen_mg_l];
        let ends = ends.into_iter().flatten().flatten().filter_map(|e| {
            let (t, o) = self.kitchen.release(&e.mix)?;
            Some((&e.mix, t, o))
        });
        let (mut apart_c, mut apart_mg_l) = (0.0_f64, None::<f64>);
        for (quick, t, o) in shown.chain(traded).chain(ends) {
            apart_c = apart_c.max((t - quick.temperature_c).abs());
            if let Some((full, quick)) = o.zip(quick.oxygen_mg_l) {
                apart_mg_l = Some(apart_mg_l.unwrap_or(0.0).max((full - quick).abs()));
            }
        }
        let rules = self.question.day.rules(self.question.site);
        if rules.iter().any(|rule| rule.point.is_some()) {
            let seen = Seen::of(self.question);
            for (rule, (quick, full)) in rules.iter().flat_map(|rule| mixes.iter().map(move |m| (rule, m))) {
                let there = full.points.iter().find(|at| Some(at.point) == rule.point);
                let release = (quick.temperature_c, quick.oxygen_mg_l);
                let (c, mg_l) = there.map_or((None, None), |at| seen.apart(rule, release, &at.figures));
                apart_c = apart_c.max(c.unwrap_or(0.0));
                apart_mg_l = mg_l.map(|far| apart_mg_l.unwrap_or(0.0).max(far)).or(apart_mg_l);
            }
        }
        (apart_c, apart_mg_l)
    }

    /// The exact split of two parts that gives the preferred temperature, every other part kept: of the first mix in
    /// the order that has two, its two largest. Only for a steady day.
    pub(super) fn preferred_split(&self) -> Option<PreferredSplit> {
        let preferred_c = preferred_c(self.kitchen.context)?;
        if self.question.blocks.len() > 1 {
            return None;
        }
        let (mix, between, flows) = self.ranking.mixes.iter().find_map(|mix| {
            let mut parts = mix.asked.first()?.parts();
            parts.sort_by(|a, b| b.1.total_cmp(&a.1));
            let [a, b] = parts.get(..2)?.first_chunk::<2>()?;
            Some((mix, [a.0, b.0], [a.1, b.1]))
        })?;
        let asked = mix.asked.first()?;
        let both: f64 = flows.iter().sum();
        let water = |share: f64| {
            let asked = asked.with(between, [both * share, both * (1.0 - share)]);
            self.kitchen.water(&self.kitchen.resolved(&asked))
        };
        let (mut roots, bracket_c) = roots(&water, both, preferred_c);
        for root in &mut roots {
            let setting = self.kitchen.resolved(&asked.with(between, root.flows_m3s));
            let broken = self.kitchen.now(&setting).map(|shown| shown.limits);
            root.breaks = broken.into_iter().flatten().filter(Check::broken).collect();
        }
        Some(PreferredSplit { gates: self.kitchen.gates(mix), between, preferred_c, roots, bracket_c })
    }

    /// The least steady release with which some mix keeps every target, at splits of a tenth: of rising releases the
    /// first, drawn in by halving. `None` without a target or with blocks of the day.
    pub(super) fn least(&self, progress: Progress) -> Option<Least> {
        let q = self.question;
        let valid = q.site.targets_on(q.day.date).next().is_some();
        let &[(_, asked_m3s)] = q.blocks else { return None };
        if !valid {
            return None;
        }
        let low = q.site.release.min_m3s.unwrap_or(asked_m3s / 10.0);
        let high = q.site.release.max_m3s.unwrap_or(2.0 * asked_m3s).max(low);
        let order = Criterion::USUAL;
        let quiet = |_: f64| progress(0.0);
        let meeting = |flow_m3s: f64| {
            let blocks = [(1.0, flow_m3s)];
            let question = Question { blocks: &blocks, steps: LEAST_STEPS, order: &order, ..*q };
            let ranking = search(&question, &quiet).ok()?;
            // in the usual order the first mix keeps every target if any does
            let first = ranking.mixes.first()?;
            let shown = self.kitchen.ranked(first, 0)?;
            shown.keeps_all(q.site).then_some(shown)
        };
        let flow = |i: u32| low * (high / low).powf(f64::from(i) / f64::from(LEAST_TRIES));
        let mut below = low;
        for i in 0..=LEAST_TRIES {
            let Some(mut found) = meeting(flow(i)) else {
                below = flow(i);
                continue;
            };
            let mut least = flow(i);
            for _ in 0..LEAST_HALVINGS {
                let middle = 0.5 * (below + least);
                if i == 0 {
                    break;
                }
                match meeting(middle) {
                    Some(shown) => (least, found) = (middle, shown),
                    None => below = middle,
                }
            }
            let gates = found.day.gates;
            return Some(Least { flow_m3s: Some(least), tried_m3s: [low, high], gates });
        }
        Some(Least { flow_m3s: None, tried_m3s: [low, high], gates: Vec::new() })
    }

    /// What more release does to the best mix, everything in proportion. Only for a steady day.
    pub(super) fn pocket(&self) -> Option<Pocket> {
        let &[(_, release_m3s)] = self.question.blocks else { return None };
        let asked = self.ranking.mixes.first()?.asked.first()?;
        let at = |times: f64| self.kitchen.water(&self.kitchen.resolved(&asked.scaled(times))).map(|w| w.0);
        let here = at(1.0)?;
        let slope = (at(1.0 + POCKET_STEP)? - at(1.0 - POCKET_STEP)?) / (2.0 * POCKET_STEP);
        let near =
            |times: f64| at(times).is_some_and(|t| (t - here - slope * (times - 1.0)).abs() <= POCKET_NEAR_C);
        let [low, high] = POCKET_RANGE;
        let step = (high - low) / f64::from(POCKET_PLACES);
        let reach = |way: f64, end: f64| {
            let mut times = 1.0;
            while (end - times) * way > 1e-9 && near(times + way * step) {
                times += way * step;
            }
            times * release_m3s
        };
        Some(Pocket { c_per_m3s: slope / release_m3s, from_m3s: reach(-1.0, low), to_m3s: reach(1.0, high) })
    }
}
