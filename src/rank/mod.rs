//! Every feasible mix judged, rejected with reasons, ordered.
//!
//! Methods: `docs/methods.md`, section 10.

mod afar;
mod arrange;
mod choices;
mod curve;
mod found;
mod gain;
mod goal;
mod offers;
mod order;
mod ranking;
mod search;
mod seats;
mod sums;
mod tail;
mod tries;
mod units;
mod whole;

use crate::intake;
use crate::mix::limits::{self, Before, Of, Rule};
use crate::mix::{Day, Setting, groups};
use crate::problem::Problem;
use crate::profile::Profile;
use crate::site::Site;
use crate::withdrawal::{Opening, Sink, zone};

use arrange::ways;
use choices::{Lanes, Levels, MOST_BLOCKS, Slot};
use curve::Cut;
use found::Found;
use goal::{Efforts, Goal};
use offers::Offers;
use ranking::Decoder;
use search::Task;
use seats::Level;
use tries::Kitchen;
use whole::{Told, hopeless, whole_rules};

pub use afar::Seen;
pub use curve::{Curve, Curves, Water};
pub use goal::Criterion;
pub use order::{Full, Order};
pub use ranking::{Extreme, Idea, Ranked, Ranking, Rejected};
pub use search::Progress;

/// Most mixes judged in one ranking (choice): about ten seconds of one core.
const MOST_JUDGED: u64 = 2_000_000_000;
/// Most ideas, as sets of open outlets (choice).
const MOST_IDEAS: usize = 2_000_000;
/// Halvings that find the flow up to which a level keeps out of a layer.
const HALVINGS: usize = 50;

/// What a ranking is asked.
pub struct Question<'a> {
    /// The site.
    pub site: &'a Site,
    /// The water before it.
    pub profile: &'a Profile,
    /// The day, with what is known around the river.
    pub day: &'a Day,
    /// Parts of the day: share of it, and total release, m3/s. One part for a steady day.
    pub blocks: &'a [(f64, f64)],
    /// What is set now, where it is known.
    pub now: Option<&'a Setting>,
    /// What is released now, where changes from it are to be judged.
    pub before: Before,
    /// Steps the release is cut into.
    pub steps: usize,
    /// Criteria, the first first.
    pub order: &'a [Criterion],
    /// Outlets left out.
    pub without: &'a [usize],
}

/// Why there is no ranking.
#[derive(Debug, Clone, PartialEq)]
pub enum Stopped {
    /// The caller stopped it.
    Cancelled,
    /// It cannot be made.
    Refused(Problem),
}

/// Ranks every mix.
///
/// # Errors
/// A site with more mixes than can be judged; a caller who stops it.
pub fn rank(question: &Question, progress: Progress) -> Result<Ranking, Stopped> {
    ranked(question, &Cut::FINE, search::LOTS, progress)
}

/// The same for a caller who computes in full what is found and asks often: the water of a level is read from curves
/// near to a hundredth of a degree, and one core does it.
///
/// # Errors
/// As [`rank`].
pub fn rank_roughly(question: &Question, progress: Progress) -> Result<Ranking, Stopped> {
    ranked(question, &Cut::ROUGH, 1, progress)
}

fn ranked(question: &Question, cut: &Cut, lots: usize, progress: Progress) -> Result<Ranking, Stopped> {
    let Question { site, profile, .. } = *question;
    let groups = groups(site);
    let units = units::units(site, &groups, profile.pool_m, question.without).map_err(Stopped::Refused)?;
    let mut curves = Curves::default();
    let seats =
        seats::levels(site, &groups, &units, profile.pool_m, &mut curves).map_err(Stopped::Refused)?;
    let alone = tries::alone(site, &units, &mut curves);
    let spilt: f64 = units.iter().filter_map(|u| u.spills_m3s).sum();
    let mut flows_m3s = [0.0; MOST_BLOCKS];
    for (flow, block) in flows_m3s.iter_mut().zip(question.blocks) {
        *flow = (block.1 - spilt).max(0.0);
    }
    // where what spills by itself is all that is wanted, nothing is left to share out
    let nothing_left = flows_m3s.iter().all(|flow| *flow <= 0.0);
    let question = &Question { steps: if nothing_left { 0 } else { question.steps }, ..*question };
    // leaks leave the dam beside the release
    let direct = site.outlets.iter().filter(|o| o.well.is_none());
    let leaks: f64 = direct.map(|o| intake::leak_m3s(o, profile.pool_m - o.centre_m, 0.5)).sum();
    let most_m3s = question.blocks.iter().map(|b| b.1).fold(spilt, f64::max) + leaks;
    curves.solve((&profile.column, site.zone_factor()), most_m3s, site.cold_water_c.first().copied(), cut);
    let slots = slots(question, &seats, &curves, most_m3s);
    let weights: Vec<f64> = question.blocks.iter().map(|b| b.0).collect();
    let lanes = Lanes {
        blocks: question.blocks.len(),
        solids: site.limits.solids_max_mg_l.is_some(),
        shares: site.limits.shares.len(),
    };
    let levels = Levels { site, slots: &slots, curves: &curves, lanes, weights: &weights };
    let mut level_of = vec![0; site.outlets.len()];
    for (level, group) in groups.iter().enumerate() {
        for &outlet in group {
            level_of[outlet] = level;
        }
    }
    let nearest = |outlet: usize, opening: f64| {
        let off = |o: &&(f64, usize)| (o.0 - opening).abs();
        alone[outlet].iter().min_by(|a, b| off(a).total_cmp(&off(b))).map(|o| o.1)
    };
    let kitchen = Kitchen {
        question,
        units: &units,
        seats: &seats,
        level_of: &level_of,
        levels: &levels,
        alone: &nearest,
        flows_m3s,
        efforts: Efforts::of(site),
    };
    let offers = kitchen.offers();
    let (rules, told) = whole_rules(question, !slots.is_empty(), leaks > 0.0 || nothing_left);
    let counts: Vec<Vec<u64>> = offers.choices.iter().map(choices::Choices::counts).collect();
    let to_judge = ways(&counts, question.steps)[question.steps];
    let ideas = offers.masks.iter().fold(1_usize, |n, (masks, _)| n.saturating_mul(masks.len().max(1)));
    if to_judge > MOST_JUDGED || ideas > MOST_IDEAS || offers.examined == u64::MAX || !offers.numbered {
        return Err(Stopped::Refused(Problem::refused(
            "too-many",
            format!("{to_judge} mixes of {ideas} sets of open outlets are more than can be judged"),
            "take a coarser --step, give max_open of the wells, or leave gates out with --without",
        )));
    }
    let goal = Goal::new(question);
    let task = Task {
        units: &offers.choices,
        levels: &levels,
        goal: &goal,
        rules: &rules,
        steps: question.steps,
        ideas,
        lots,
        progress,
    };
    let hopeless = hopeless(question);
    let found = if hopeless.is_empty() {
        search::search(&task).ok_or(Stopped::Cancelled)?
    } else {
        Found { undrawn: to_judge, ..Found::nothing(ideas, rules.len()) }
    };
    let decoder =
        Decoder { question, units: &units, offers: &offers, levels: &levels, level_of: &level_of, flows_m3s };
    let mut ranking = assembled(&decoder, &found, &told, &offers, to_judge);
    let all = |check| Rejected { check, count: ranking.examined, open: Vec::new() };
    let hopeless: Vec<Rejected> = hopeless.into_iter().map(all).collect();
    ranking.rejected.extend(hopeless);
    ranking.rejected.sort_by_key(|r| (r.check.rule, r.check.of, r.check.item));
    Ok(ranking)
}

/// What was found, as mixes with names.
fn assembled(decoder: &Decoder, found: &Found, told: &[Told], offers: &Offers, to_judge: u64) -> Ranking {
    let mut best: Vec<(f64, u64)> = found.best.iter().copied().filter(|b| b.1 != u64::MAX).collect();
    best.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
    let extreme =
        |at: (f64, u64)| (at.1 != u64::MAX).then(|| Extreme { value: at.0, mix: decoder.mix(at.1) });
    let both = |low, high| Some([extreme(low)?, extreme(high)?]);
    let mut rejected: Vec<Rejected> = offers
        .misses
        .iter()
        .map(|m| Rejected { check: m.check, count: m.count, open: m.open.clone() })
        .collect();
    for (told, missed) in told.iter().zip(&found.missed) {
        if missed.count > 0 {
            let mix = decoder.mix(missed.nearest.1);
            let open = mix.asked.first().map_or_else(Vec::new, |a| {
                a.direct.iter().map(|g| (g.outlet, g.opening)).chain(a.open.iter().copied()).collect()
            });
            let check = told.check(missed.nearest.0);
            // found as a flow, told as a reach
            let check =
                if told.rule == Rule::Undrawn { decoder.reach(missed.nearest.1, check) } else { check };
            rejected.push(Rejected { check, count: missed.count, open });
        }
    }
    rejected.sort_by_key(|r| (r.check.rule, r.check.of, r.check.item));
    let mut trade: Vec<Extreme> = Vec::new();
    for at in &found.trade {
        if at.1 != u64::MAX && trade.last().is_none_or(|last| at.0 > last.value) {
            trade.extend(extreme(*at));
        }
    }
    Ranking {
        mixes: best.iter().map(|b| decoder.mix(b.1)).collect(),
        keys: best.iter().map(|b| b.0).collect(),
        rejected,
        examined: offers.examined,
        judged: found.judged,
        skipped: offers.examined - to_judge + found.undrawn + found.beaten,
        allowed: to_judge - found.undrawn - found.refused,
        attainable_c: both(found.coldest, found.warmest),
        attainable_oxygen_mg_l: both(found.least_oxygen, found.most_oxygen),
        trade,
    }
}

/// Levels that several units draw through, with the flow up to which each keeps out of layers not to be drawn.
fn slots(question: &Question, seats: &[Level], curves: &Curves, most_m3s: f64) -> Vec<Slot> {
    let undrawn = question.site.limits.undrawn.len();
    seats
        .iter()
        .filter(|s| s.slot.is_some())
        .map(|seat| Slot {
            curves: seat.curves.clone(),
            kept_m3s: (0..undrawn)
                .map(|layer| {
                    let kept = |curve: &Option<usize>| {
                        let sink = curve.and_then(|c| curves.sink(c));
                        sink.map_or(f64::INFINITY, |sink| kept_m3s(question, layer, sink, most_m3s))
                    };
                    seat.curves.iter().map(kept).collect()
                })
                .collect(),
        })
        .collect()
}

/// Greatest flow at which a level keeps out of a layer, m3/s: a zone only grows with its flow.
fn kept_m3s(question: &Question, layer: usize, (centre_m, opening): (f64, Opening), most_m3s: f64) -> f64 {
    let column = &question.profile.column;
    let draws = |flow_m3s: f64| {
        zone(column, &Sink { centre_m, flow_m3s, opening }, question.site.zone_factor()).is_some_and(|zone| {
            let mut checks = Vec::new();
            limits::level(question.site, column, &zone, Of::Whole, &mut checks);
            checks.iter().any(|c| c.item == layer && c.broken())
        })
    };
    if !draws(most_m3s) {
        return f64::INFINITY;
    }
    let (mut low, mut high) = (0.0, most_m3s);
    for _ in 0..HALVINGS {
        let middle = 0.5 * (low + high);
        if draws(middle) {
            high = middle;
        } else {
            low = middle;
        }
    }
    low
}
