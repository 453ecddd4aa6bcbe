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

/// Times nearer than this tell no two ways apart, min (choice).
const TIME_MIN: f64 = 10.0;
/// Temperatures nearer than this tell no two ways apart, C (choice).
const ASTRAY_C: f64 = 0.1;

/// What one way has over another, the first first. Whole numbers, so that sums have no round-off.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct Cost {
    /// Places that should have been reached before a movement, by the wish to open before shutting or to shut before
    /// opening, summed over movements.
    out_of_turn: u64,
    /// Movements.
    steps: u64,
    /// Time that the changes would need, each by itself.
    time: u64,
    /// How far each place lies outside the temperatures now and wanted, summed.
    astray: u64,
}

impl Cost {
    fn plus(self, other: Self) -> Self {
        Self {
            out_of_turn: self.out_of_turn + other.out_of_turn,
            steps: self.steps + other.steps,
            time: self.time + other.time,
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

/// A step that cannot be taken from a node.
struct Miss {
    node: Node,
    axis: usize,
    to: usize,
    check: Check,
    by_rate: bool,
}

/// What a node or a step costs with all that is left, what is left of it, and which it is.
type Queued = (Cost, Cost, Reverse<Vec<usize>>, usize, Option<usize>);

/// Nodes to be done and steps to be looked at, the cheapest first; of what is level the one with least left, then that
/// which moves the first of the site first.
#[derive(Default)]
struct Queue(BinaryHeap<Reverse<Queued>>);

impl Queue {
    fn push(&mut self, cost: Cost, left: Cost, node: Node, axis: Option<usize>) {
        self.0.push(Reverse((cost, left, Reverse(node.0), node.1, axis)));
    }

    fn pop(&mut self) -> Option<(Node, Option<usize>)> {
        self.0.pop().map(|Reverse((_, _, Reverse(places), last, axis))| ((places, last), axis))
    }
}

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
        let (first, last) = (works.state(self.from).value, works.state(&self.standing(&goal)).value);
        let mut queue = Queue::default();
        queue.push(self.left(&begin).plus(self.needed(first, last)), self.left(&begin), begin, None);
        let mut nodes = 0_usize;
        let mut misses: Vec<Miss> = Vec::new();
        while let Some((node, axis)) = queue.pop() {
            let Some(at) = reached.get_mut(&node) else { continue };
            let cost = at.cost;
            let Some(axis) = axis else {
                if std::mem::replace(&mut at.done, true) {
                    continue;
                }
                if node.0 == goal {
                    return Searched::Found(cost, way(&reached, &node));
                }
                nodes += 1;
                if works.count() > self.most_states || nodes > NODES_PER_STATE * self.most_states {
                    return Searched::TooMany;
                }
                // what a step costs at least is known before it is looked at
                let so_far = cost.plus(self.needed(works.state(&self.standing(&node.0)).value, last));
                for axis in (0..self.axes.len()).filter(|&a| node.0[a] < goal[a]) {
                    let mut next = node.clone();
                    (next.0[axis], next.1) = (node.0[axis] + 1, axis);
                    let left = self.left(&next);
                    queue.push(
                        so_far.plus(self.turn(&node, axis)).plus(left),
                        left,
                        node.clone(),
                        Some(axis),
                    );
                }
                continue;
            };
            let (from, standing) = (node.0[axis], self.standing(&node.0));
            let known = tried.get(&(node.0.clone(), axis)).cloned();
            let step = known.unwrap_or_else(|| {
                let step = Rc::new(self.judge.tried(works, &standing, &self.axes[axis], from));
                if let Tried::Blocked(check, to) | Tried::TooFast(check, to) = *step {
                    let by_rate = matches!(*step, Tried::TooFast(..));
                    misses.push(Miss { node: node.clone(), axis, to, check, by_rate });
                }
                tried.insert((node.0.clone(), axis), Rc::clone(&step));
                step
            });
            let Tried::Taken(taken) = &*step else { continue };
            let before = works.state(&standing).value;
            let next_cost = cost.plus(self.turn(&node, axis)).plus(self.change(taken, before));
            let mut next = node.clone();
            (next.0[axis], next.1) = (taken.to, axis);
            if reached.get(&next).is_none_or(|r| next_cost < r.cost) {
                let by = Some((node.clone(), Leg { axis, from, taken: taken.clone() }));
                reached.insert(next.clone(), Reached { cost: next_cost, by, done: false });
                let after = works.state(&self.standing(&next.0)).value;
                let left = self.left(&next);
                queue.push(next_cost.plus(left).plus(self.needed(after, last)), left, next, None);
            }
        }
        Searched::None(self.blocks(&reached, &goal, &misses))
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

    /// What the next step of an axis costs by its turn alone.
    fn turn(&self, node: &Node, axis: usize) -> Cost {
        let this = &self.axes[axis];
        let to = node.0[axis] + 1;
        let goes_on = node.1 == axis && this.goes_on(to);
        let first = !self.judge.manner.shut_first;
        let against = !goes_on && this.opens(to) == Some(!first);
        let others = self.axes.iter().enumerate().filter(|(other, _)| against && *other != axis);
        let out_of_turn: usize = others.map(|(other, a)| a.still(node.0[other], first)).sum();
        Cost { out_of_turn: out_of_turn as u64, steps: u64::from(!goes_on), ..Cost::default() }
    }

    /// What a step costs by what it does to the release.
    fn change(&self, taken: &Taken, before: Value) -> Cost {
        let (mut value, mut spent, mut astray) = (before, Cost::default(), 0.0);
        for after in taken.pieces.iter().filter_map(|piece| piece.values.last()) {
            spent = spent.plus(self.needed(value, *after));
            value = *after;
        }
        if let (Some((a, b)), Some(t)) = (self.ends_c, value.temperature_c) {
            astray = (t - a.max(b)).max(a.min(b) - t).max(0.0);
        }
        Cost { astray: whole(astray / ASTRAY_C), ..spent }
    }

    /// The time that a change of the release needs by itself, at least.
    fn needed(&self, from: Value, to: Value) -> Cost {
        let minutes = self.judge.rates.map_or(0.0, |rates| rates.minutes(from, to));
        Cost { time: whole(minutes / TIME_MIN), ..Cost::default() }
    }

    /// What is left to do from a node, at least.
    fn left(&self, node: &Node) -> Cost {
        let of = |(axis, this): (usize, &Axis)| {
            let at = node.0[axis];
            let left = (at + 1..this.stops.len()).filter(|&to| to == at + 1 || !this.goes_on(to)).count();
            left - usize::from(left > 0 && node.1 == axis && this.goes_on(at + 1))
        };
        let steps: usize = self.axes.iter().enumerate().map(of).sum();
        Cost { steps: steps as u64, ..Cost::default() }
    }

    /// The misses that tell most.
    fn blocks(&self, reached: &HashMap<Node, Reached>, goal: &[usize], misses: &[Miss]) -> Blocks {
        let mut out = Blocks::default();
        for miss in misses {
            let places = &miss.node.0;
            let share = |(at, goal): (&usize, &usize)| *at as f64 / *goal as f64;
            let done = places.iter().zip(goal).map(share).sum::<f64>() / goal.len() as f64;
            let Miss { axis, to, check, by_rate, .. } = *miss;
            let mut block = Block { way: Vec::new(), axis, from: places[axis], to, check, done };
            out.finer_may_help |= finer_may_help(check.rule);
            let best = if by_rate { &mut out.by_rate } else { &mut out.by_limit };
            if best.as_ref().is_none_or(|b| block.is_nearer(b)) {
                block.way = way(reached, &miss.node);
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
