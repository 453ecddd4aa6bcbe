//! The way from one setting to another: what is moved first, how far, and when, so that everything on the way, gates
//! half moved included, keeps every hard limit; or the step that stands in the way.
//!
//! Methods: `docs/methods.md`, section 11.

mod axes;
mod bands;
mod rates;
mod search;
mod standing;
mod step;
mod told;
mod words;
mod works;

use chrono::NaiveDate;

use crate::mix::limits::Check;
use crate::mix::{Blend, Setting};
use crate::profile::Profile;
use crate::site::Site;

use axes::{Axis, Change, Stoppable};
use rates::Rates;
use search::{Block, Cost, Leg, Search, Searched};
use standing::Standing;
use step::Judge;
use works::{Works, is_hard};

/// Parts into which free movements are cut, one after the other until a way is found (choice).
const PARTS: [usize; 5] = [1, 2, 4, 8, 16];
/// Most standings looked at (choice): a few seconds of one core.
pub const MOST_STATES: usize = 20_000;

/// What an order is asked.
#[derive(Debug, Clone, Copy)]
pub struct Question<'a> {
    /// The site.
    pub site: &'a Site,
    /// The water before it.
    pub profile: &'a Profile,
    /// The day of the change.
    pub date: NaiveDate,
    /// What is set now.
    pub now: &'a Setting,
    /// What is to be set.
    pub wanted: &'a Setting,
    /// How it is to be done.
    pub manner: Manner,
}

/// How a change is to be made.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Manner {
    /// What shuts goes before what opens; else the other way round, as far as limits let it.
    pub shut_first: bool,
    /// Openings and flows to avoid may be run through without a halt; else nothing passes them while water flows.
    pub through_bands: bool,
    /// Most standings looked at.
    pub most_states: usize,
}

impl Default for Manner {
    fn default() -> Self {
        Self { shut_first: false, through_bands: false, most_states: MOST_STATES }
    }
}

/// What is moved.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Moved {
    /// A gate on a well, by its outlet.
    Gate(usize),
    /// An outlet on no well.
    Outlet(usize),
    /// What the conduit of a well carries.
    Well(usize),
}

/// How what is moved stands before or after a step.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stand {
    /// Opening, 0 to 1; a well has none.
    pub opening: Option<f64>,
    /// Flow, m3/s.
    pub flow_m3s: f64,
}

/// One step of an order.
#[derive(Debug, Clone, PartialEq)]
pub struct Step {
    /// What is moved.
    pub moved: Moved,
    /// How it stands before.
    pub from: Stand,
    /// How it stands after.
    pub to: Stand,
    /// When it can begin at the earliest, min after the first.
    pub at_min: f64,
    /// Whether it stops water only so that something can be moved.
    pub stop: bool,
    /// What is set after it.
    pub setting: Setting,
    /// Expected head on each well that carries water after it, m; those with every loss known.
    pub heads_m: Vec<(usize, f64)>,
    /// What leaves the dam before it; `None` where nothing does.
    pub before: Option<Blend>,
    /// What leaves the dam after it.
    pub after: Option<Blend>,
    /// Hard limits that come nearest in it, the nearest first, each where it has least room.
    pub nearest: Vec<Check>,
    /// Limits of what stands still that it passes without a halt, each at its worst.
    pub passes: Vec<Check>,
}

/// The steps from one setting to another.
#[derive(Debug, Clone, PartialEq)]
pub struct Order {
    /// The steps; none where nothing moves.
    pub steps: Vec<Step>,
    /// How often water that passes before and after is stopped in between.
    pub stops: usize,
    /// What leaves the dam now.
    pub before: Option<Blend>,
    /// What leaves it in the end.
    pub after: Option<Blend>,
    /// Farthest that the release after a step lies outside the temperatures of now and the end, C.
    pub astray_c: f64,
    /// Hard limits that the setting now misses; on the way none of them is missed by more.
    pub missed_now: Vec<Check>,
    /// Hours by which it takes longer than the site says that a change does; `None` where it does not.
    pub over_hours: Option<f64>,
}

/// A step that cannot be taken.
#[derive(Debug, Clone, PartialEq)]
pub struct Stuck {
    /// The steps before it.
    pub steps: Vec<Step>,
    /// What it moves.
    pub moved: Moved,
    /// How that stands before.
    pub from: Stand,
    /// Where it was to go.
    pub to: Stand,
    /// The limit it would miss, or the rate of change that it breaks by itself, per hour or per day.
    pub check: Check,
}

/// Why there is no order.
#[derive(Debug, Clone, PartialEq)]
pub enum NoOrder {
    /// The setting wanted itself misses hard limits.
    Wanted(Vec<Check>),
    /// No way of moving only what differs keeps every limit; of those that get farthest, the step that misses one.
    Missing(Box<Stuck>),
    /// There would be a way but for a step that breaks a rate of change however it is split.
    Impossible(Box<Stuck>),
    /// Not settled: more standings than may be looked at.
    Unsettled {
        /// How many were.
        states: usize,
    },
}

/// The order of steps from the setting now to that wanted.
///
/// Moved is what differs: openings of gates through their positions, flows of outlets and totals of wells in parts,
/// each only onward; beside that, wells and outlets may be stopped while their gates move. Of all ways that keep the
/// limits the best is taken: fewest stops, least out of turn, fewest steps, least time, least astray.
///
/// # Errors
/// Where there is none, and where that could not be told.
pub fn order(question: &Question) -> Result<Order, NoOrder> {
    let site = question.site;
    let mut works = Works::new(question);
    let to = Standing::of(site, question.wanted);
    let from = Standing::of(site, question.now).spilling_as(site, &to);
    let now = works.full(&from);
    let wanted = works.full(&to);
    let missed: Vec<Check> = wanted.checks.iter().filter(|c| is_hard(c) && c.broken()).copied().collect();
    if !missed.is_empty() {
        return Err(NoOrder::Wanted(missed));
    }
    works.begin(&now);
    let rates = Rates::of(&site.limits);
    let change = Change { site, pool_m: question.profile.pool_m, from: &from, to: &to };
    let ends_c = now.release.zip(wanted.release).map(|(a, b)| (a.temperature_c, b.temperature_c));
    let ways = Ways { change, manner: question.manner, ends_c };
    let mut stuck = match ways.best(&mut works, Some(&rates)) {
        Ok(found) => {
            let steps = told::steps(&mut works, &rates, &from, &found.axes, &found.legs);
            let missed_now = now.checks.iter().filter(|c| is_hard(c) && c.broken()).copied().collect();
            let astray = |(a, b): (f64, f64), t: f64| (t - a.max(b)).max(a.min(b) - t).max(0.0);
            let after = steps.iter().filter_map(|s| Some(astray(ends_c?, s.after?.temperature_c)));
            let hours = steps.last().map_or(0.0, |s| s.at_min / 60.0);
            return Ok(Order {
                stops: found.stops,
                before: now.release,
                after: wanted.release,
                astray_c: after.fold(0.0, f64::max),
                missed_now,
                over_hours: site.limits.change_hours.map(|most| hours - most).filter(|over| *over > 0.0),
                steps,
            });
        }
        Err(stuck) => stuck,
    };
    // a way that only the rates forbid
    if let Some(by_rate) = stuck.by_rate.take() {
        match ways.best(&mut works, None) {
            Ok(_) => return Err(NoOrder::Impossible(Box::new(by_rate.told(&mut works, &rates, &from)))),
            Err(unpaced) => {
                stuck.unsettled |= unpaced.unsettled;
                stuck.by_limit = unpaced.by_limit.or(stuck.by_limit);
            }
        }
    }
    match stuck.by_limit {
        Some(block) if !stuck.unsettled => {
            Err(NoOrder::Missing(Box::new(block.told(&mut works, &rates, &from))))
        }
        _ => Err(NoOrder::Unsettled { states: works.count() }),
    }
}

/// A way found.
struct Found {
    cost: Cost,
    axes: Vec<Axis>,
    legs: Vec<Leg>,
    stops: usize,
}

/// A step in the way, with the axes it is one of.
struct Blocked {
    axes: Vec<Axis>,
    block: Block,
}

impl Blocked {
    fn told(&self, works: &mut Works, rates: &Rates, from: &Standing) -> Stuck {
        told::stuck(works, rates, from, &self.axes, &self.block)
    }
}

/// What stands in the way of all of them.
#[derive(Default)]
struct AllStuck {
    by_limit: Option<Blocked>,
    by_rate: Option<Blocked>,
    unsettled: bool,
}

/// The ways there are, by what is stopped on them.
struct Ways<'a> {
    change: Change<'a>,
    manner: Manner,
    ends_c: Option<(f64, f64)>,
}

impl Ways<'_> {
    /// The best way with the fewest stops.
    fn best(&self, works: &mut Works, rates: Option<&Rates>) -> Result<Found, Box<AllStuck>> {
        let stoppable = self.change.stoppable();
        let mut stuck = AllStuck::default();
        for wanted in 0..=stoppable.len() {
            let mut best: Option<Found> = None;
            for stopped in chosen(&stoppable, wanted) {
                let found = self.with(works, rates, &stopped, &mut stuck);
                let better = |f: &Found| best.as_ref().is_none_or(|b| f.cost < b.cost);
                if let Some(found) = found.filter(better) {
                    best = Some(found);
                }
            }
            if let Some(best) = best {
                return Ok(best);
            }
        }
        Err(Box::new(stuck))
    }

    /// The best way with these stopped.
    fn with(
        &self,
        works: &mut Works,
        rates: Option<&Rates>,
        stopped: &[Stoppable],
        stuck: &mut AllStuck,
    ) -> Option<Found> {
        let moved: Vec<Moved> = stopped.iter().map(|s| s.moved).collect();
        let judge = Judge { manner: self.manner, rates };
        for parts in PARTS {
            let axes = self.change.axes(&moved, parts);
            let search = Search {
                axes: &axes,
                from: self.change.from,
                judge: &judge,
                ends_c: self.ends_c,
                most_states: self.manner.most_states,
            };
            match search.run(works) {
                Searched::Found(cost, legs) => {
                    let stops = stopped.iter().filter(|s| s.interrupts).count();
                    return Some(Found { cost, axes, legs, stops });
                }
                Searched::TooMany => {
                    stuck.unsettled = true;
                    return None;
                }
                Searched::None(blocks) => {
                    let keep = |best: &mut Option<Blocked>, block: Option<Block>| {
                        let nearer = |b: &Block| best.as_ref().is_none_or(|best| b.is_nearer(&best.block));
                        if let Some(block) = block.filter(nearer) {
                            *best = Some(Blocked { axes: axes.clone(), block });
                        }
                    };
                    keep(&mut stuck.by_limit, blocks.by_limit);
                    keep(&mut stuck.by_rate, blocks.by_rate);
                    if !blocks.finer_may_help {
                        return None;
                    }
                }
            }
        }
        None
    }
}

/// Every choice of what is stopped with so many interruptions, what must be always among it; in the order of the site.
fn chosen(stoppable: &[Stoppable], interruptions: usize) -> Vec<Vec<Stoppable>> {
    let mut out = vec![Vec::new()];
    for one in stoppable {
        let mut next: Vec<Vec<Stoppable>> = Vec::new();
        for so_far in out {
            if !one.must {
                next.push(so_far.clone());
            }
            next.push(so_far.into_iter().chain([*one]).collect());
        }
        out = next;
    }
    out.retain(|c| c.iter().filter(|s| s.interrupts).count() == interruptions);
    out
}
