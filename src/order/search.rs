//! Every way from the places now to the places wanted, one step at a time, the best first.
//!
//! Methods: `docs/methods.md`, section 11.

use std::cmp::Reverse;
use std::collections::{BinaryHeap, HashMap};
use std::rc::Rc;

use crate::mix::limits::{Check, Rule};

use super::axes::Axis;
use super::standing::Standing;
use super::step::{Judge, Taken, Tried};
use super::works::{Value, Works, room_share};

/// Nodes looked at for each standing that may be (choice): one standing is reached after any of its axes.
const NODES_PER_STATE: usize = 4;

/// What one way has over another, the first first. Whole numbers, so that sums have no round-off.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct Cost {
    /// Places that should have been reached before a movement, by the wish to open before shutting or to shut before
    /// opening, summed over movements.
    out_of_turn: u64,
    /// Movements.
    steps: u64,
    /// Time that the changes would need, each by itself, s.
    seconds: u64,
    /// How far each place lies outside the temperatures now and wanted, summed, millionths of a degree.
    astray: u64,
}

impl Cost {
    fn plus(self, other: Self) -> Self {
        Self {
            out_of_turn: self.out_of_turn + other.out_of_turn,
            steps: self.steps + other.steps,
            seconds: self.seconds + other.seconds,
            astray: self.astray + other.astray,
        }
    }
}

/// A step of a way found.
#[derive(Debug, Clone)]
pub(super) struct Leg {
    /// Which axis moves.
    pub(super) axis: usize,
    /// From which of its places.
    pub(super) from: usize,
    pub(super) taken: Taken,
}

/// A step that cannot be taken, after the way that leads there.
#[derive(Debug, Clone)]
pub(super) struct Block {
    pub(super) way: Vec<Leg>,
    pub(super) axis: usize,
    pub(super) from: usize,
    /// The place it does not get to.
    pub(super) to: usize,
    pub(super) check: Check,
    /// How much of the whole change is done before it, 0 to 1.
    pub(super) done: f64,
}

impl Block {
    /// Whether it tells more than another: it gets farther, or misses by less.
    pub(super) fn is_nearer(&self, other: &Self) -> bool {
        let order = self
            .done
            .total_cmp(&other.done)
            .then(room_share(&self.check).total_cmp(&room_share(&other.check)));
        order.is_gt()
    }
}

/// What a search comes to.
pub(super) enum Searched {
    Found(Cost, Vec<Leg>),
    /// No way leads there.
    None(Blocks),
    /// More places than may be looked at.
    TooMany,
}

/// The steps that come nearest, and whether finer parts could change anything.
#[derive(Debug, Clone, Default)]
pub(super) struct Blocks {
    pub(super) by_limit: Option<Block>,
    pub(super) by_rate: Option<Block>,
    pub(super) finer_may_help: bool,
}

/// A search.
pub(super) struct Search<'a> {
    pub(super) axes: &'a [Axis],
    pub(super) from: &'a Standing,
    pub(super) judge: &'a Judge<'a>,
    /// Temperatures of the release now and wanted, C.
    pub(super) ends_c: Option<(f64, f64)>,
    pub(super) most_states: usize,
}

/// Places of all axes, and the axis moved last (their number where none was).
type Node = (Vec<usize>, usize);

/// How a node was reached.
struct Reached {
    cost: Cost,
    by: Option<(Node, Leg)>,
    done: bool,
}

impl Search<'_> {
    pub(super) fn run(&self, works: &mut Works) -> Searched {
        let goal: Vec<usize> = self.axes.iter().map(|a| a.stops.len() - 1).collect();
        let begin: Node = (vec![0; self.axes.len()], self.axes.len());
        let mut tried: HashMap<(Vec<usize>, usize), Rc<Tried>> = HashMap::new();
        let mut reached: HashMap<Node, Reached> = HashMap::new();
        reached.insert(begin.clone(), Reached { cost: Cost::default(), by: None, done: false });
        let mut heap = BinaryHeap::from([Reverse((Cost::default(), begin))]);
        let mut nodes = 0_usize;
        let mut blocked: Vec<(Node, usize, Check, usize, bool)> = Vec::new();
        while let Some(Reverse((cost, node))) = heap.pop() {
            match reached.get_mut(&node) {
                Some(at) if !at.done => at.done = true,
                _ => continue,
            }
            if node.0 == goal {
                return Searched::Found(cost, way(&reached, &node));
            }
            nodes += 1;
            if works.count() > self.most_states || nodes > NODES_PER_STATE * self.most_states {
                return Searched::TooMany;
            }
            let standing = self.standing(&node.0);
            for (axis, moved) in self.axes.iter().enumerate() {
                let from = node.0[axis];
                if from == goal[axis] {
                    continue;
                }
                let known = tried.get(&(node.0.clone(), axis)).cloned();
                let step = known.unwrap_or_else(|| {
                    let step = Rc::new(self.judge.tried(works, &standing, moved, from));
                    match *step {
                        Tried::Blocked(check, to) => blocked.push((node.clone(), axis, check, to, false)),
                        Tried::TooFast(check, to) => blocked.push((node.clone(), axis, check, to, true)),
                        _ => {}
                    }
                    tried.insert((node.0.clone(), axis), Rc::clone(&step));
                    step
                });
                let Tried::Taken(taken) = &*step else { continue };
                let mut places = node.0.clone();
                places[axis] = taken.to;
                let before = works.state(&standing).value;
                let next_cost = cost.plus(self.cost(&node, axis, taken, before));
                let next: Node = (places, axis);
                if reached.get(&next).is_none_or(|r| next_cost < r.cost) {
                    let leg = Leg { axis, from, taken: taken.clone() };
                    let by = Some((node.clone(), leg));
                    reached.insert(next.clone(), Reached { cost: next_cost, by, done: false });
                    heap.push(Reverse((next_cost, next)));
                }
            }
        }
        Searched::None(self.blocks(&reached, &goal, &blocked))
    }

    /// How everything stands at places of the axes.
    pub(super) fn standing(&self, places: &[usize]) -> Standing {
        let mut out = self.from.clone();
        for (axis, &at) in self.axes.iter().zip(places) {
            if let Some(stop) = axis.stops.get(at) {
                out.put(axis.moved, stop.put);
            }
        }
        out
    }

    /// What a step from a node costs.
    fn cost(&self, node: &Node, axis: usize, taken: &Taken, before: Value) -> Cost {
        let this = &self.axes[axis];
        let from = node.0[axis];
        let (to, begun) = (&this.stops[taken.to], &this.stops[from]);
        let goes_on = node.1 == axis && to.free && begun.leg == to.leg;
        let first = !self.judge.manner.shut_first;
        let against = !goes_on && this.opens(taken.to) == Some(!first);
        let others = self.axes.iter().enumerate().filter(|(other, _)| against && *other != axis);
        let out_of_turn: usize = others.map(|(other, a)| a.still(node.0[other], first)).sum();
        let (mut value, mut seconds) = (before, 0.0);
        let mut astray = 0.0;
        for after in taken.pieces.iter().filter_map(|piece| piece.values.last()) {
            seconds += self.judge.rates.map_or(0.0, |rates| rates.seconds(value, *after));
            value = *after;
        }
        if let (Some((a, b)), Some(t)) = (self.ends_c, value.temperature_c) {
            astray = (t - a.max(b)).max(a.min(b) - t).max(0.0);
        }
        Cost {
            out_of_turn: out_of_turn as u64,
            steps: u64::from(!goes_on),
            seconds: whole(seconds),
            astray: whole(1e6 * astray),
        }
    }

    /// The blocked steps that tell most.
    fn blocks(
        &self,
        reached: &HashMap<Node, Reached>,
        goal: &[usize],
        blocked: &[(Node, usize, Check, usize, bool)],
    ) -> Blocks {
        let mut out = Blocks::default();
        for (node, axis, check, to, by_rate) in blocked {
            let share = |(at, goal): (&usize, &usize)| *at as f64 / *goal as f64;
            let done = node.0.iter().zip(goal).map(share).sum::<f64>() / goal.len() as f64;
            let mut block =
                Block { way: Vec::new(), axis: *axis, from: node.0[*axis], to: *to, check: *check, done };
            out.finer_may_help |= finer_may_help(check.rule);
            let best = if *by_rate { &mut out.by_rate } else { &mut out.by_limit };
            if best.as_ref().is_none_or(|b| block.is_nearer(b)) {
                block.way = way(reached, node);
                *best = Some(block);
            }
        }
        // of things that can halt anywhere; positions stay what they are
        out.finer_may_help &= self.axes.iter().any(|a| a.stops.iter().any(|s| s.free));
        out
    }
}

/// The steps that lead to a node.
fn way(reached: &HashMap<Node, Reached>, node: &Node) -> Vec<Leg> {
    let mut out = Vec::new();
    let mut at = node;
    while let Some((before, leg)) = reached.get(at).and_then(|r| r.by.as_ref()) {
        out.push(leg.clone());
        at = before;
    }
    out.reverse();
    out
}

/// Whether a limit could be kept by finer parts of flow: not one of where a gate stands.
fn finer_may_help(rule: Rule) -> bool {
    !matches!(
        rule,
        Rule::Outage
            | Rule::Dry
            | Rule::PoolWindow
            | Rule::MinSubmergence
            | Rule::AvoidOpening
            | Rule::MaxOpen
    )
}

/// A whole number from 0.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a whole number from 0, held in bounds"
)]
fn whole(value: f64) -> u64 {
    value.round().clamp(0.0, 1e15) as u64
}
