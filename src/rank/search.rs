//! Every mix judged: the parts of the dam taken together within the release, each mix held against the rules of
//! the whole and put into its place in the order.
//!
//! Parts that share a level come first, one inside the other; the parts that stand alone are taken together
//! beforehand, so that the innermost loop only adds two rows of numbers and judges the sum. Two things are passed
//! over, each with its proof: what a part may not do on its own never enters, and a block of mixes none of which
//! can be the best of anything, because what they all together span is beaten by what a coarser search has found.
//!
//! Methods: `docs/methods.md`, section 10.

use std::ops::ControlFlow;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};

use rayon::prelude::*;

use super::arrange::{arranged, ways};
use super::choices::{Choice, Choices, Levels, MOST_BLOCKS};
use super::found::{At, Found, lower};
use super::goal::{Days, Goal};
use super::sums::{Sums, put};
use super::tail::{Block, Head, ROWS, Tail, fill, greatest, least, waters};
use super::whole::WholeRule;

/// A rule is kept when it is missed by less than this share of its bound (choice: round-off).
const ROUND_OFF: f64 = 1e-9;
/// What spans are eased by, C, mg/L and shares (choice: far above round-off, far below any bin).
const SAFE: f64 = 1e-9;
/// Coarser searches take at most these many steps, one after the other (choice).
const COARSE_STEPS: [usize; 1] = [10];
/// Coarser searches are made when there are more mixes than this (choice).
const WORTH_IT: u64 = 200_000;
/// The choices of the first part are gone through in this many lots (choice): enough for many cores, few enough that
/// each can keep its own findings.
pub(super) const LOTS: usize = 128;

/// Told how much is done, 0 to 1, and asked whether to go on.
pub type Progress<'a> = &'a (dyn Fn(f64) -> ControlFlow<()> + Sync);

/// What the search needs.
pub(super) struct Task<'a> {
    pub(super) units: &'a [Choices],
    pub(super) levels: &'a Levels<'a>,
    pub(super) goal: &'a Goal,
    pub(super) rules: &'a [WholeRule],
    /// Steps of the release.
    pub(super) steps: usize,
    /// Number of ideas.
    pub(super) ideas: usize,
    /// Lots that the choices of the first part are gone through in, side by side.
    pub(super) lots: usize,
    pub(super) progress: Progress<'a>,
}

/// Judges every mix of a task. `None` when the caller stopped it.
pub(super) fn search(task: &Task) -> Option<Found> {
    let mut to_beat = Found::nothing(task.ideas, task.rules.len());
    let counts: Vec<Vec<u64>> = task.units.iter().map(Choices::counts).collect();
    let mixes = ways(&counts, task.steps)[task.steps];
    if mixes > WORTH_IT && task.rules.is_empty() {
        for most in COARSE_STEPS {
            let every = (2..task.steps).find(|e| task.steps.is_multiple_of(*e) && task.steps / e <= most);
            let Some(every) = every else { continue };
            let thinned: Vec<Choices> = task.units.iter().map(|u| u.every(every)).collect();
            // told nothing of how far it is: it is short
            let quiet = |_: f64| (task.progress)(0.0);
            to_beat = walked(&Task { units: &thinned, progress: &quiet, ..*task }, &to_beat)?.to_beat();
        }
    }
    walked(task, &to_beat)
}

/// Goes through every mix of a task, some already found to beat.
fn walked(task: &Task, to_beat: &Found) -> Option<Found> {
    let steps = task.steps;
    let undrawn = task.rules.iter().any(|r| matches!(r, WholeRule::Undrawn(_)));
    let (head, tail) = arranged(task.units, steps, task.levels, undrawn);
    // how many mixes the rest of the head and the tail make of what is left
    let counts: Vec<Vec<u64>> = head.iter().map(Choices::counts).collect();
    let completions: Vec<Vec<u64>> = (0..=head.len())
        .map(|depth| {
            let rest: Vec<Vec<u64>> = counts[depth..].iter().cloned().chain([tail.counts()]).collect();
            ways(&rest, steps)
        })
        .collect();
    let walk = Walk { task, head: &head, tail: Tail::new(&tail, task.levels.lanes), completions, undrawn };
    let first: Vec<(usize, &Choice)> =
        head[0].by_share.iter().enumerate().flat_map(|(k, at)| at.iter().map(move |c| (k, c))).collect();
    let (done, stopped) = (AtomicUsize::new(0), AtomicBool::new(false));
    let lot = |lot: usize| {
        let mut found = to_beat.clone();
        // in turn, so that lots are alike
        for &(k, choice) in first.iter().skip(lot).step_by(task.lots) {
            if stopped.load(Ordering::Relaxed) {
                break;
            }
            walk.begin(k, choice, &mut found);
            let part = (done.fetch_add(1, Ordering::Relaxed) + 1) as f64 / first.len() as f64;
            if (task.progress)(part).is_break() {
                stopped.store(true, Ordering::Relaxed);
            }
        }
        found
    };
    let found = (0..task.lots.min(first.len()))
        .into_par_iter()
        .map(lot)
        .reduce(|| to_beat.clone(), |a, b| a.merge(&b));
    (!stopped.load(Ordering::Relaxed)).then_some(found)
}

/// A walk through the head.
struct Walk<'a> {
    task: &'a Task<'a>,
    head: &'a [Choices],
    tail: Tail,
    completions: Vec<Vec<u64>>,
    undrawn: bool,
}

impl<'a> Walk<'a> {
    fn begin(&self, share: usize, choice: &'a Choice, found: &mut Found) {
        let lanes = self.task.levels.lanes.count();
        // one set of sums for each depth, made once
        let mut stack: Vec<Sums<'a>> = (0..=self.head.len() + 1).map(|_| Sums::nothing(lanes)).collect();
        put(&mut stack, 0, choice);
        self.deeper(1, self.task.steps - share, &mut stack, &mut Days::default(), found);
    }

    /// Goes through the choices of the head from `depth` on, `left` steps of the release still to be given.
    fn deeper(
        &self,
        depth: usize,
        left: usize,
        stack: &mut [Sums<'a>],
        days: &mut Days<ROWS>,
        found: &mut Found,
    ) {
        if self.completions[depth][left] == 0 {
            return;
        }
        let Some(choices) = self.head.get(depth) else {
            return self.complete(left, &mut stack[depth], days, found);
        };
        for (share, at) in choices.by_share.iter().take(left + 1).enumerate() {
            for choice in at {
                put(stack, depth, choice);
                self.deeper(depth + 1, left - share, stack, days, found);
            }
        }
    }

    /// The head is complete: what its parts share is made good, and every row of the tail judged.
    fn complete(&self, left: usize, head: &mut Sums<'a>, days: &mut Days<ROWS>, found: &mut Found) {
        if self.undrawn {
            let completions = self.completions[self.head.len()][left];
            if self.draws_undrawn(head, completions, found) {
                return;
            }
        }
        head.unknown |= self.task.levels.join(&head.parts, head.shared, &mut head.lanes);
        match self.task.levels.lanes.blocks {
            1 => self.judge_all::<1, 1>(left, head, days, found),
            2 => self.judge_all::<2, 3>(left, head, days, found),
            3 => self.judge_all::<3, 3>(left, head, days, found),
            _ => self.judge_all::<MOST_BLOCKS, 3>(left, head, days, found),
        }
    }

    /// Judges the head with every block that takes what is left; `B` parts of the day, `S` statistics.
    fn judge_all<const B: usize, const S: usize>(
        &self,
        left: usize,
        sums: &Sums,
        days: &mut Days<ROWS>,
        found: &mut Found,
    ) {
        let head = Head::<B>::of(&sums.lanes, self.task.levels);
        for block in &self.tail.by_share[left] {
            self.judge::<B, S>(block, sums, &head, days, found);
        }
    }

    /// Whether a shared level draws what is not to be drawn; then all its completions are passed over.
    fn draws_undrawn(&self, head: &Sums, completions: u64, found: &mut Found) -> bool {
        let levels = &self.task.levels;
        let mut draws = false;
        for (rule, missed) in self.task.rules.iter().zip(&mut found.missed) {
            let WholeRule::Undrawn(layer) = *rule else { continue };
            let mut worst = 0.0_f64;
            for (i, part) in head.parts.iter().enumerate() {
                if head.parts[..i].iter().any(|p| p.slot == part.slot) {
                    continue;
                }
                let same = || head.parts[i..].iter().filter(|p| p.slot == part.slot);
                if !same().any(|p| p.set) {
                    continue;
                }
                let code: usize = same().map(|p| p.code).sum();
                let kept = levels.slots[part.slot].kept_m3s[layer][code];
                for block in 0..levels.lanes.blocks {
                    worst = worst.max(same().map(|p| p.flows_m3s[block]).sum::<f64>() - kept);
                }
            }
            if worst > 0.0 {
                draws = true;
                missed.count += completions;
                lower(&mut missed.nearest, (worst, head.number));
            }
        }
        if draws {
            found.undrawn += completions;
        }
        draws
    }

    /// Judges the head with every row of a block: first, whether any of them can be the best of anything; then what
    /// can be computed side by side; then what each mix is the best of.
    #[inline]
    fn judge<const B: usize, const S: usize>(
        &self,
        block: &Block,
        head: &Sums,
        at_hand: &Head<B>,
        days: &mut Days<ROWS>,
        found: &mut Found,
    ) {
        let Task { levels, goal, rules, .. } = self.task;
        let unknown = head.unknown || block.any_unknown();
        let may_skip = rules.is_empty() && !unknown;
        if may_skip
            && let Some((far, most_mg_l)) =
                self.behind::<B, S>(block, at_hand, &found.best[head.idea..], found)
        {
            // first all rows as one, then one by one
            let beaten = found.beaten_in_both(far, most_mg_l) || {
                waters(days, block, at_hand);
                let (far, o) = (goal.distances_c::<ROWS, S>(days), &days.oxygen_mg_l[0]);
                (0..block.rows).all(|i| found.beaten_in_both(far[i], o[i]))
            };
            if beaten {
                found.beaten += block.rows as u64;
                return;
            }
        }
        found.judged += block.rows as u64;
        fill(days, block, at_hand, levels.lanes);
        let far = goal.distances_c::<ROWS, S>(days);
        let mut key = goal.keys::<ROWS, S>(days, &far);
        if unknown {
            let without = goal.keys_unknown::<ROWS, S>(days, &far);
            for i in (0..ROWS).filter(|&i| head.unknown || block.unknown[i]) {
                key[i] = without[i];
            }
        }
        let (t, o) = (&days.low_c[0], &days.oxygen_mg_l[0]);
        let number = |i: usize| head.number + block.number[i];
        if rules.is_empty() && !unknown {
            // rows that are not there repeat the last, so they decide nothing
            let best = &mut found.best[head.idea..];
            let first = least(&key);
            if block.ideas.iter().any(|&idea| first <= best[idea].0) {
                for i in 0..block.rows {
                    lower(&mut best[block.idea[i]], (key[i], number(i)));
                }
            }
            let inside = least(t) > found.coldest.0
                && greatest(t) < found.warmest.0
                && least(o) > found.least_oxygen.0
                && greatest(o) < found.most_oxygen.0;
            if !inside {
                (0..block.rows).for_each(|i| found.ends(t[i], Some(o[i]), number(i)));
            }
            if !found.beaten_in_both(least(&far), greatest(o)) {
                (0..block.rows).for_each(|i| found.trade(far[i], (o[i], number(i))));
            }
            return;
        }
        for i in 0..block.rows {
            if !rules.is_empty() && !self.keeps(head, block, i, number(i), t[i], found) {
                found.refused += 1;
                continue;
            }
            let known = !(head.unknown || block.unknown[i]);
            lower(&mut found.best[head.idea + block.idea[i]], (key[i], number(i)));
            let oxygen = known.then_some(o[i]);
            found.ends(t[i], oxygen, number(i));
            if let Some(oxygen) = oxygen {
                found.trade(far[i], (oxygen, number(i)));
            }
        }
    }

    /// Whether no row of a block, with this head, can be the best of its idea or an end of what is attainable: what the
    /// rows span together is behind what is already found, by more than a tie. Gives then their least distance from the
    /// preferred temperature, C, and their most oxygen, mg/L.
    #[inline]
    fn behind<const B: usize, const S: usize>(
        &self,
        block: &Block,
        head: &Head<B>,
        best: &[At],
        found: &Found,
    ) -> Option<(f64, f64)> {
        let goal = self.task.goal;
        let (span, least_mg_l) = block.span(head);
        let inside = span.low_c[0][0] > found.coldest.0 + SAFE
            && span.high_c[0][0] < found.warmest.0 - SAFE
            && least_mg_l > found.least_oxygen.0 + SAFE
            && span.oxygen_mg_l[0][0] < found.most_oxygen.0 - SAFE;
        if !inside {
            return None;
        }
        let eased = Self::eased(span);
        let far = goal.distances_c::<1, S>(&eased);
        let [key] = goal.keys::<1, S>(&eased, &far);
        let behind = block.ideas.iter().all(|&idea| key > best[idea].0);
        behind.then_some((far[0], eased.oxygen_mg_l[0][0]))
    }

    /// A span made a hair better than it is, so that no round-off can make a row better than its span.
    #[inline]
    fn eased(mut span: Days<1>) -> Days<1> {
        for statistic in 0..3 {
            span.low_c[statistic][0] -= SAFE;
            span.high_c[statistic][0] += SAFE;
        }
        span.oxygen_mg_l.iter_mut().for_each(|o| o[0] += SAFE);
        span.cold_share[0] -= SAFE;
        span
    }

    /// Whether a mix keeps the rules of the whole; each one it misses is counted.
    fn keeps(
        &self,
        head: &Sums,
        block: &Block,
        row: usize,
        number: u64,
        temperature_c: f64,
        found: &mut Found,
    ) -> bool {
        let lanes = self.task.levels.lanes;
        let sum = |lane: usize| head.lanes[lane] + block.lane(lane, row);
        let blocks = 0..lanes.blocks;
        let share = |rule: usize, b: usize| sum(lanes.share(rule, b)) / sum(3 * b);
        let mut keeps = true;
        for (rule, missed) in self.task.rules.iter().zip(&mut found.missed) {
            let (miss, bound) = match *rule {
                WholeRule::Solids(most) => {
                    let worst = blocks.clone().map(|b| sum(lanes.solids(b)) / sum(3 * b)).fold(0.0, f64::max);
                    (worst - most, most)
                }
                WholeRule::ReleaseMin(least) => {
                    let worst = blocks.clone().map(|b| sum(3 * b)).fold(f64::INFINITY, f64::min);
                    (least - worst, least)
                }
                WholeRule::ReleaseMax(most) => {
                    (blocks.clone().map(|b| sum(3 * b)).fold(0.0, f64::max) - most, most)
                }
                WholeRule::ShareMin(rule, least) => {
                    let worst = blocks.clone().map(|b| share(rule, b)).fold(f64::INFINITY, f64::min);
                    (least - worst, least)
                }
                WholeRule::ShareMax(rule, most) => {
                    let worst = blocks.clone().map(|b| share(rule, b)).fold(0.0, f64::max);
                    (worst - most, most)
                }
                WholeRule::TemperatureChange { from_c, most_c } => {
                    ((temperature_c - from_c).abs() - most_c, most_c)
                }
                WholeRule::Moves(most) => (sum(lanes.moves()) - most, most),
                WholeRule::CrewHours(most) => (sum(lanes.hours()) - most, most),
                WholeRule::Undrawn(_) => continue,
            };
            if miss > ROUND_OFF * (1.0 + bound) {
                keeps = false;
                missed.count += 1;
                lower(&mut missed.nearest, (miss, number));
            }
        }
        keeps
    }
}
