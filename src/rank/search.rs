//! Every mix judged: the parts of the dam taken together within the release, each mix held against the rules of
//! the whole and put into its place in the order.
//!
//! Parts that share a level come first, one inside the other; the parts that stand alone are taken together
//! beforehand, so that the innermost loop only adds two rows of numbers and judges the sum. What a part may not do
//! on its own never enters: it is skipped with that as the proof.
//!
//! Methods: `docs/methods.md`, section 10.

use std::ops::ControlFlow;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};

use rayon::prelude::*;

use super::choices::{Choice, Choices, Lanes, Levels, MOST_BLOCKS, Part, settled, together};
use super::goal::{Day, Goal, TRADE_STEP_C};

/// Parts that stand alone are taken together while they make no more rows than this (choice: they stay in the
/// nearest cache).
const MOST_ROWS: usize = 60_000;
/// Bins of the trade curve.
const TRADE_BINS: usize = 400;
/// A rule is kept when it is missed by less than this share of its bound: round-off.
const ROUND_OFF: f64 = 1e-9;

/// Told how much is done, 0 to 1, and asked whether to go on.
pub type Progress<'a> = &'a (dyn Fn(f64) -> ControlFlow<()> + Sync);

/// A rule of the whole mix.
#[derive(Debug, Clone, Copy)]
pub(super) enum WholeRule {
    /// No more solids in any block, mg/L.
    Solids(f64),
    /// A share of the release, at least.
    ShareMin(usize, f64),
    /// A share of the release, at most.
    ShareMax(usize, f64),
    /// A change of temperature from what is released now (C), at most.
    TemperatureChange {
        /// Temperature now, C.
        from_c: f64,
        /// Greatest change, C.
        most_c: f64,
    },
    /// No more moves.
    Moves(f64),
    /// No more crew hours.
    CrewHours(f64),
    /// A layer not to be drawn through a shared level; its index among such layers.
    Undrawn(usize),
}

/// What the search needs.
pub(super) struct Task<'a> {
    pub(super) units: Vec<Choices>,
    pub(super) levels: Levels<'a>,
    pub(super) goal: &'a Goal,
    pub(super) rules: &'a [WholeRule],
    /// What leaves the dam whatever is set: sums as [`Lanes`] places them, and whether its oxygen is unknown.
    pub(super) always: (Vec<f64>, bool),
    /// Number of ideas.
    pub(super) ideas: usize,
    pub(super) progress: Progress<'a>,
}

/// A value with the mix that has it.
pub(super) type At = (f64, u64);

/// Misses of one rule of the whole.
#[derive(Debug, Clone, Copy)]
pub(super) struct Missed {
    /// Number of mixes.
    pub(super) count: u64,
    /// Smallest miss, in the rule's own unit, and the mix.
    pub(super) nearest: At,
}

/// What the search found. Every field is the same whatever the number of threads.
#[derive(Debug, Clone)]
pub(super) struct Found {
    /// Mixes held against every rule.
    pub(super) judged: u64,
    /// Mixes passed over because a level they share draws what is not to be drawn.
    pub(super) skipped: u64,
    /// Mixes allowed.
    pub(super) allowed: u64,
    /// Best key and number of each idea; greatest values where none is allowed.
    pub(super) best: Vec<(u64, u64)>,
    /// Coldest, warmest, least and most oxygen of allowed mixes.
    pub(super) coldest: At,
    pub(super) warmest: At,
    pub(super) least_oxygen: At,
    pub(super) most_oxygen: At,
    /// Most oxygen in each bin of distance from the preferred temperature.
    pub(super) trade: Vec<At>,
    /// Misses of each rule of the whole.
    pub(super) missed: Vec<Missed>,
}

impl Found {
    fn nothing(ideas: usize, rules: usize) -> Self {
        let none = (f64::INFINITY, u64::MAX);
        Self {
            judged: 0,
            skipped: 0,
            allowed: 0,
            best: vec![(u64::MAX, u64::MAX); ideas],
            coldest: none,
            warmest: (f64::NEG_INFINITY, u64::MAX),
            least_oxygen: none,
            most_oxygen: (f64::NEG_INFINITY, u64::MAX),
            trade: vec![(f64::NEG_INFINITY, u64::MAX); TRADE_BINS],
            missed: vec![Missed { count: 0, nearest: none }; rules],
        }
    }

    fn merge(mut self, other: &Self) -> Self {
        self.judged += other.judged;
        self.skipped += other.skipped;
        self.allowed += other.allowed;
        for (a, b) in self.best.iter_mut().zip(&other.best) {
            *a = (*a).min(*b);
        }
        lower(&mut self.coldest, other.coldest);
        higher(&mut self.warmest, other.warmest);
        lower(&mut self.least_oxygen, other.least_oxygen);
        higher(&mut self.most_oxygen, other.most_oxygen);
        for (a, b) in self.trade.iter_mut().zip(&other.trade) {
            higher(a, *b);
        }
        for (a, b) in self.missed.iter_mut().zip(&other.missed) {
            a.count += b.count;
            lower(&mut a.nearest, b.nearest);
        }
        self
    }
}

/// Keeps the lower value; of equal ones the mix that comes first.
#[inline]
fn lower(kept: &mut At, new: At) {
    if new.0 < kept.0 || (new.0 <= kept.0 && new.1 < kept.1) {
        *kept = new;
    }
}

/// Keeps the higher value; of equal ones the mix that comes first.
#[inline]
fn higher(kept: &mut At, new: At) {
    if new.0 > kept.0 || (new.0 >= kept.0 && new.1 < kept.1) {
        *kept = new;
    }
}

/// The parts that stand alone, taken together: rows by the share they take, each lane a column of numbers.
struct Tail {
    /// First row of each share, and one past the last.
    starts: Vec<usize>,
    lanes: Vec<Vec<f64>>,
    unknown: Vec<bool>,
    idea: Vec<usize>,
    number: Vec<u64>,
}

impl Tail {
    fn new(choices: &Choices, lanes: Lanes) -> Self {
        let rows = || choices.by_share.iter().flatten();
        let mut starts = vec![0];
        for at in &choices.by_share {
            starts.push(starts.last().copied().unwrap_or(0) + at.len());
        }
        Self {
            starts,
            lanes: (0..lanes.count()).map(|l| rows().map(|c| c.lanes[l]).collect()).collect(),
            unknown: rows().map(|c| c.unknown).collect(),
            idea: rows().map(|c| c.idea).collect(),
            number: rows().map(|c| c.number).collect(),
        }
    }
}

/// Number of ways lists fill up exactly `k` steps, for each `k`; it stops at the greatest number there is.
pub(super) fn ways(counts: &[Vec<u64>], steps: usize) -> Vec<u64> {
    let mut out = vec![0_u64; steps + 1];
    out[0] = 1;
    for list in counts {
        let mut next = vec![0_u64; steps + 1];
        for (k, &have) in out.iter().enumerate() {
            for (j, &more) in list.iter().take(steps + 1 - k).enumerate() {
                next[k + j] = next[k + j].saturating_add(have.saturating_mul(more));
            }
        }
        out = next;
    }
    out
}

/// Judges every mix of a task. `None` when the caller stopped it.
pub(super) fn search(task: Task) -> Option<Found> {
    let (head, tail) = arranged(&task);
    let steps = task.units.first().map_or(0, |u| u.by_share.len().saturating_sub(1));
    // how many mixes the rest of the head and the tail make of what is left
    let counts: Vec<Vec<u64>> = head.iter().map(Choices::counts).collect();
    let completions: Vec<Vec<u64>> = (0..=head.len())
        .map(|depth| {
            let rest: Vec<Vec<u64>> = counts[depth..].iter().cloned().chain([tail.counts()]).collect();
            ways(&rest, steps)
        })
        .collect();
    let lanes = task.levels.lanes;
    let walk = Walk {
        task: &task,
        head: &head,
        tail: Tail::new(&tail, lanes),
        completions,
        checks_undrawn: task.rules.iter().any(|r| matches!(r, WholeRule::Undrawn(_))),
    };
    let (done, stopped) = (AtomicUsize::new(0), AtomicBool::new(false));
    let first: Vec<(usize, &Choice)> =
        head[0].by_share.iter().enumerate().flat_map(|(k, at)| at.iter().map(move |c| (k, c))).collect();
    let found = first
        .par_iter()
        .fold(
            || Found::nothing(task.ideas, task.rules.len()),
            |mut found, &(k, choice)| {
                if stopped.load(Ordering::Relaxed) {
                    return found;
                }
                walk.begin(k, choice, steps, &mut found);
                let part = (done.fetch_add(1, Ordering::Relaxed) + 1) as f64 / first.len() as f64;
                if (task.progress)(part).is_break() {
                    stopped.store(true, Ordering::Relaxed);
                }
                found
            },
        )
        .reduce(|| Found::nothing(task.ideas, task.rules.len()), |a, b| a.merge(&b));
    (!stopped.load(Ordering::Relaxed)).then_some(found)
}

/// Which parts are taken one inside the other, and the rest taken together. Parts that share a level stand beside
/// each other; where they make few pairs they too are taken together. The head is never empty.
fn arranged(task: &Task) -> (Vec<Choices>, Choices) {
    let steps = task.units.first().map_or(1, |u| u.by_share.len());
    let mut nothing = Choices { by_share: vec![Vec::new(); steps], units: 0 };
    nothing.by_share[0].push(Choice {
        lanes: vec![0.0; task.levels.lanes.count()],
        unknown: false,
        idea: 0,
        number: 0,
        parts: Vec::new(),
    });
    let undrawn = task.rules.iter().any(|r| matches!(r, WholeRule::Undrawn(_)));
    let mut head = Vec::new();
    let mut alone = Vec::new();
    for island in islands(&task.units) {
        let shares = island.len() > 1;
        let joined = island.iter().try_fold(nothing.clone(), |so_far, &unit| {
            let fits = so_far.pairs(&task.units[unit]) <= MOST_ROWS;
            (fits && !(shares && undrawn)).then(|| together(&so_far, &task.units[unit]))
        });
        match joined {
            Some(joined) => alone.push(settled(joined, &task.levels)),
            None => head.extend(island.into_iter().map(|unit| task.units[unit].clone())),
        }
    }
    // the smallest first, so that as many as can be fit
    alone.sort_by_key(|c| (c.len(), c.units));
    let mut tail = nothing.clone();
    for choices in alone {
        if tail.pairs(&choices) <= MOST_ROWS {
            tail = together(&tail, &choices);
        } else {
            head.push(choices);
        }
    }
    if head.is_empty() {
        head.push(nothing);
    }
    (head, tail)
}

/// Units that share levels, directly or through others, in the order of the units.
fn islands(units: &[Choices]) -> Vec<Vec<usize>> {
    let slots: Vec<Vec<usize>> = units
        .iter()
        .map(|u| {
            let mut slots: Vec<usize> =
                u.by_share.iter().flatten().flat_map(|c| c.parts.iter().map(|p| p.slot)).collect();
            slots.sort_unstable();
            slots.dedup();
            slots
        })
        .collect();
    let mut islands: Vec<Vec<usize>> = Vec::new();
    for unit in 0..units.len() {
        let touches = |other: &usize| slots[*other].iter().any(|s| slots[unit].contains(s));
        let (linked, apart): (Vec<_>, Vec<_>) = islands.into_iter().partition(|i| i.iter().any(touches));
        islands = apart;
        let mut joined: Vec<usize> = linked.into_iter().flatten().chain([unit]).collect();
        joined.sort_unstable();
        islands.push(joined);
    }
    islands.sort();
    islands
}

/// Sums of the head of a mix.
struct Sums<'a> {
    lanes: Vec<f64>,
    unknown: bool,
    idea: usize,
    number: u64,
    parts: Vec<&'a Part>,
}

/// A walk through the head.
struct Walk<'a> {
    task: &'a Task<'a>,
    head: &'a [Choices],
    tail: Tail,
    completions: Vec<Vec<u64>>,
    checks_undrawn: bool,
}

impl<'a> Walk<'a> {
    fn begin(&self, share: usize, choice: &'a Choice, steps: usize, found: &mut Found) {
        let (always, unknown) = &self.task.always;
        let lanes = always.len();
        // one set of sums for each depth, made once
        let mut stack: Vec<Sums<'a>> = (0..=self.head.len() + 1)
            .map(|_| Sums { lanes: vec![0.0; lanes], unknown: *unknown, idea: 0, number: 0, parts: Vec::new() })
            .collect();
        stack[0].lanes.copy_from_slice(always);
        put(&mut stack, 0, choice);
        self.deeper(1, steps - share, &mut stack, found);
    }

    /// Goes through the choices of the head from `depth` on, `left` steps of the release still to be given.
    fn deeper(&self, depth: usize, left: usize, stack: &mut [Sums<'a>], found: &mut Found) {
        if self.completions[depth][left] == 0 {
            return;
        }
        let Some(choices) = self.head.get(depth) else {
            return self.complete(depth, left, stack, found);
        };
        for (share, at) in choices.by_share.iter().take(left + 1).enumerate() {
            for choice in at {
                put(stack, depth, choice);
                self.deeper(depth + 1, left - share, stack, found);
            }
        }
    }

    /// The head is complete: what its parts share is made good, and every row of the tail judged.
    fn complete(&self, depth: usize, left: usize, stack: &mut [Sums<'a>], found: &mut Found) {
        let (below, above) = stack.split_at_mut(depth + 1);
        let (head, sums) = (&below[depth], &mut above[0]);
        if self.checks_undrawn && self.draws_undrawn(head, self.completions[depth][left], found) {
            return;
        }
        sums.lanes.copy_from_slice(&head.lanes);
        sums.unknown = head.unknown | self.task.levels.join(&head.parts, &mut sums.lanes);
        (sums.idea, sums.number) = (head.idea, head.number);
        match self.task.levels.lanes.blocks {
            1 => self.judge::<1>(left, sums, found),
            2 => self.judge::<2>(left, sums, found),
            3 => self.judge::<3>(left, sums, found),
            _ => self.judge::<MOST_BLOCKS>(left, sums, found),
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
            found.skipped += completions;
        }
        draws
    }

    /// Judges the head with every row of the tail that takes what is left.
    fn judge<const B: usize>(&self, left: usize, head: &Sums, found: &mut Found) {
        let Task { levels, goal, rules, .. } = self.task;
        let lanes = levels.lanes;
        let (from, to) = (self.tail.starts[left], self.tail.starts[left + 1]);
        let column = |lane: usize| &self.tail.lanes[lane][from..to];
        let flow: [&[f64]; B] = std::array::from_fn(|b| column(3 * b));
        let heat: [&[f64]; B] = std::array::from_fn(|b| column(3 * b + 1));
        let oxygen: [&[f64]; B] = std::array::from_fn(|b| column(3 * b + 2));
        let [cold, cost, hours] = [lanes.cold(), lanes.cost(), lanes.hours()].map(column);
        let (idea, number) = (&self.tail.idea[from..to], &self.tail.number[from..to]);
        let unknown = &self.tail.unknown[from..to];
        let statistics = if B == 1 { 1 } else { 3 };
        let h = &head.lanes;
        found.judged += (to - from) as u64;
        for i in 0..to - from {
            let mut day = Day {
                temperature_c: [0.0, f64::NEG_INFINITY, f64::INFINITY],
                oxygen_mg_l: [0.0, f64::INFINITY],
                oxygen_known: !(head.unknown || unknown[i]),
                cold_share: 0.0,
                cost: h[lanes.cost()] + cost[i],
                hours: h[lanes.hours()] + hours[i],
            };
            let mut mean_flow = 0.0;
            for b in 0..B {
                let flow = h[3 * b] + flow[b][i];
                let per = 1.0 / flow;
                let t = (h[3 * b + 1] + heat[b][i]) * per;
                let o = (h[3 * b + 2] + oxygen[b][i]) * per;
                let weight = if B == 1 { 1.0 } else { levels.weights[b] };
                mean_flow += weight * flow;
                day.temperature_c[0] += weight * t;
                day.oxygen_mg_l[0] += weight * o;
                if B > 1 {
                    day.temperature_c[1] = day.temperature_c[1].max(t);
                    day.temperature_c[2] = day.temperature_c[2].min(t);
                }
                day.oxygen_mg_l[1] = day.oxygen_mg_l[1].min(o);
            }
            day.cold_share = (h[lanes.cold()] + cold[i]) / mean_flow;
            let number = head.number + number[i];
            if !rules.is_empty() && !self.keeps(head, from + i, number, &day, found) {
                continue;
            }
            found.allowed += 1;
            let distance = goal.distance_c(&day, statistics);
            let key = goal.key(&day, statistics, distance);
            let best = &mut found.best[head.idea + idea[i]];
            if (key, number) < *best {
                *best = (key, number);
            }
            lower(&mut found.coldest, (day.temperature_c[0], number));
            higher(&mut found.warmest, (day.temperature_c[0], number));
            if day.oxygen_known {
                lower(&mut found.least_oxygen, (day.oxygen_mg_l[0], number));
                higher(&mut found.most_oxygen, (day.oxygen_mg_l[0], number));
                higher(&mut found.trade[trade_bin(distance)], (day.oxygen_mg_l[0], number));
            }
        }
    }

    /// Whether a mix keeps the rules of the whole; each one it misses is counted.
    fn keeps(&self, head: &Sums, row: usize, number: u64, day: &Day, found: &mut Found) -> bool {
        let lanes = self.task.levels.lanes;
        let sum = |lane: usize| head.lanes[lane] + self.tail.lanes[lane][row];
        let blocks = 0..lanes.blocks;
        let share = |rule: usize, b: usize| sum(lanes.share(rule, b)) / sum(3 * b);
        let mut keeps = true;
        for (rule, missed) in self.task.rules.iter().zip(&mut found.missed) {
            let (miss, bound) = match *rule {
                WholeRule::Solids(most) => {
                    let worst =
                        blocks.clone().map(|b| sum(lanes.solids(b)) / sum(3 * b)).fold(0.0, f64::max);
                    (worst - most, most)
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
                    ((day.temperature_c[0] - from_c).abs() - most_c, most_c)
                }
                WholeRule::Moves(most) => (sum(lanes.moves()) - most, most),
                WholeRule::CrewHours(most) => (day.hours - most, most),
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

/// Bin of the trade curve that holds a distance from the preferred temperature, C; the last holds all beyond.
#[inline]
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "the cast saturates and drops the part below one"
)]
fn trade_bin(distance_c: f64) -> usize {
    ((distance_c * (1.0 / TRADE_STEP_C)) as usize).min(TRADE_BINS - 1)
}

/// Sums at `depth + 1` are those at `depth` with a choice put on.
fn put<'a>(stack: &mut [Sums<'a>], depth: usize, choice: &'a Choice) {
    let (below, above) = stack.split_at_mut(depth + 1);
    let (before, after) = (&below[depth], &mut above[0]);
    for (lane, (a, b)) in after.lanes.iter_mut().zip(before.lanes.iter().zip(&choice.lanes)) {
        *lane = a + b;
    }
    after.unknown = before.unknown || choice.unknown;
    after.idea = before.idea + choice.idea;
    after.number = before.number + choice.number;
    after.parts.clear();
    after.parts.extend_from_slice(&before.parts);
    after.parts.extend(&choice.parts);
}
