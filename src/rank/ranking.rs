//! The ranking: what was found, as mixes with names.
//!
//! Methods: `docs/methods.md`, section 10.

use crate::mix::limits::{self, Check};
use crate::mix::{Asked, Gate};

use super::Question;
use super::choices::{Levels, MOST_BLOCKS, Part, shared};
use super::offers::{Code, Offers};
use super::units::Unit;
use crate::withdrawal::{Sink, zone};

/// One mix of a ranking, as the search knows it.
#[derive(Debug, Clone, PartialEq)]
pub struct Ranked {
    /// What is set in each part of the day.
    pub asked: Vec<Asked>,
    /// Its number in the fixed order.
    pub number: u64,
    /// Outlets open, in the order of the file.
    pub open: Vec<usize>,
    /// Levels drawn through, as indices of the groups of outlets, rising.
    pub levels: Vec<usize>,
    /// Time mean of its temperature as the search knows it, each gate of a well taking in what it would draw alone, C.
    pub temperature_c: f64,
    /// The same of its oxygen, mg/L; `None` where it is not known.
    pub oxygen_mg_l: Option<f64>,
}

/// A limit that rejects mixes.
#[derive(Debug, Clone, PartialEq)]
pub struct Rejected {
    /// The limit at its smallest miss.
    pub check: Check,
    /// Number of mixes examined that break it; a limit of the whole mix is tried only on mixes whose parts keep
    /// their own.
    pub count: u64,
    /// What is open in the mix that comes nearest, as far as the limit speaks of it.
    pub open: Vec<(usize, f64)>,
}

/// A value of an allowed mix.
#[derive(Debug, Clone, PartialEq)]
pub struct Extreme {
    /// The value as the search knows it: a time mean.
    pub value: f64,
    /// The mix.
    pub mix: Ranked,
}

/// Mixes that draw through the same levels: near-duplicates of one idea.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Idea<'a> {
    /// The best of them.
    pub best: &'a Ranked,
    /// Its key.
    pub key: f64,
    /// How many other sets of outlets draw through the same levels.
    pub alike: usize,
}

/// A ranking.
#[derive(Debug, Clone, PartialEq)]
pub struct Ranking {
    /// The best mix of each set of open outlets, best first.
    pub mixes: Vec<Ranked>,
    /// Their keys: the smaller the better.
    pub keys: Vec<f64>,
    /// Limits that reject, by group, rule and what they are of.
    pub rejected: Vec<Rejected>,
    /// Mixes there are: every state of every unit, every split of the release at the step.
    pub examined: u64,
    /// Mixes held against every rule.
    pub judged: u64,
    /// Mixes passed over because a part of them alone breaks a limit.
    pub skipped: u64,
    /// Mixes allowed.
    pub allowed: u64,
    /// Coldest and warmest allowed mix, C.
    pub attainable_c: Option<[Extreme; 2]>,
    /// Allowed mixes of least and most oxygen, mg/L.
    pub attainable_oxygen_mg_l: Option<[Extreme; 2]>,
    /// Mixes that no other beats in both distance from the preferred temperature and oxygen, nearest first; the
    /// values are oxygen, mg/L.
    pub trade: Vec<Extreme>,
}

impl Ranking {
    /// The first mixes that differ in the levels they draw through.
    pub fn ideas(&self, top: usize) -> Vec<Idea<'_>> {
        let mut ideas: Vec<Idea> = Vec::new();
        for (mix, &key) in self.mixes.iter().zip(&self.keys) {
            match ideas.iter_mut().find(|idea| idea.best.levels == mix.levels) {
                Some(idea) => idea.alike += 1,
                None => ideas.push(Idea { best: mix, key, alike: 0 }),
            }
        }
        ideas.truncate(top);
        ideas
    }

    /// The best mix that leaves an outlet shut.
    pub fn without(&self, outlet: usize) -> Option<&Ranked> {
        self.mixes.iter().find(|m| !m.open.contains(&outlet))
    }
}

/// Turns numbers of mixes into what is set.
pub(super) struct Decoder<'a> {
    pub(super) question: &'a Question<'a>,
    pub(super) units: &'a [Unit],
    pub(super) offers: &'a Offers,
    pub(super) levels: &'a Levels<'a>,
    /// Level of each outlet.
    pub(super) level_of: &'a [usize],
    /// Release shared out in each block, m3/s.
    pub(super) flows_m3s: [f64; MOST_BLOCKS],
}

impl Decoder<'_> {
    /// The choice of each unit.
    fn codes(&self, number: u64) -> Vec<Code> {
        let mut left = number;
        self.offers
            .codes
            .iter()
            .zip(&self.offers.places)
            .map(|(codes, place)| {
                let code = usize::try_from(left / place).unwrap_or(0);
                left %= place;
                codes.get(code).copied().unwrap_or(Code { share: 0, state: None, at: 0 })
            })
            .collect()
    }

    pub(super) fn mix(&self, number: u64) -> Ranked {
        let codes = self.codes(number);
        let steps = self.question.steps as f64;
        let asked: Vec<Asked> = (0..self.question.blocks.len())
            .map(|block| {
                let mut asked = Asked::default();
                for (unit, &Code { share, state, .. }) in self.units.iter().zip(&codes) {
                    if let Some(flow_m3s) = unit.spills_m3s {
                        let outlet = unit.outlets[0];
                        asked.direct.push(Gate { outlet, opening: 1.0, flow_m3s });
                    }
                    let Some(state) = state else { continue };
                    let flow_m3s = share as f64 / steps * self.flows_m3s[block];
                    for (outlet, opening) in unit.states[state].open(unit) {
                        match unit.well {
                            None => asked.direct.push(Gate { outlet, opening, flow_m3s }),
                            Some(_) => asked.open.push((outlet, opening)),
                        }
                    }
                    if let Some(well) = unit.well {
                        asked.totals.push((well, flow_m3s));
                    }
                }
                asked
            })
            .collect();
        let first = asked.first();
        let mut open: Vec<usize> = first.map_or_else(Vec::new, |a| {
            a.direct.iter().map(|g| g.outlet).chain(a.open.iter().map(|o| o.0)).collect()
        });
        open.sort_unstable();
        let mut levels: Vec<usize> = open.iter().map(|&o| self.level_of[o]).collect();
        levels.sort_unstable();
        levels.dedup();
        let (temperature_c, oxygen_mg_l) = self.water(&codes);
        Ranked { asked, number, open, levels, temperature_c, oxygen_mg_l }
    }

    /// How far the levels that parts share reach into a layer not to be drawn, in a mix that nearly keeps out of it
    /// by its flows.
    pub(super) fn reach(&self, number: u64, check: Check) -> Check {
        let Question { site, profile, .. } = *self.question;
        let codes = self.codes(number);
        let chosen = self.offers.choices.iter().zip(&codes);
        let parts: Vec<&Part> = chosen
            .filter_map(|(choices, c)| choices.by_share[c.share].get(c.at))
            .flat_map(|c| &c.parts)
            .collect();
        let mut checks = Vec::new();
        for (index, slot) in self.levels.slots.iter().enumerate() {
            let same = || parts.iter().filter(|p| p.slot == index);
            let curve = slot.curves[same().map(|p| p.code).sum::<usize>()];
            let Some((centre_m, opening)) = curve.and_then(|c| self.levels.curves.sink(c)) else { continue };
            for block in 0..self.levels.lanes.blocks {
                let flow_m3s = same().map(|p| p.flows_m3s[block]).sum();
                if let Some(zone) =
                    zone(&profile.column, &Sink { centre_m, flow_m3s, opening }, site.zone_factor())
                    && same().any(|p| p.set)
                {
                    limits::level(site, &profile.column, &zone, check.of, &mut checks);
                }
            }
        }
        let mine = checks.into_iter().filter(|c| c.item == check.item);
        mine.min_by(|a, b| a.room.total_cmp(&b.room)).unwrap_or(check)
    }

    /// Time mean of temperature (C) and oxygen (mg/L) of a choice for each unit.
    fn water(&self, codes: &[Code]) -> (f64, Option<f64>) {
        let lanes = self.levels.lanes;
        let mut sums = vec![0.0; lanes.count()];
        let mut unknown = false;
        let mut parts = Vec::new();
        for (choices, code) in self.offers.choices.iter().zip(codes) {
            let Some(choice) = choices.by_share[code.share].get(code.at) else { continue };
            for (sum, lane) in sums.iter_mut().zip(&choice.lanes) {
                *sum += lane;
            }
            unknown |= choice.unknown;
            parts.extend(&choice.parts);
        }
        unknown |= self.levels.join(&parts, shared(&parts), &mut sums);
        let mean = |lane: usize| -> f64 {
            let weights = self.levels.weights.iter().enumerate();
            weights.map(|(b, w)| w * sums[3 * b + lane] / sums[3 * b]).sum()
        };
        (mean(1), (!unknown).then(|| mean(2)))
    }
}
