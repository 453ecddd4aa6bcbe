//! One mix judged from scratch: what it gives, which limits it breaks, where it stands in the order.

use std::collections::BTreeMap;
use std::rc::Rc;

use gatemix::mix::limits::{self, Before, Check, Rule, Whole};
use gatemix::mix::{Asked, is_wish};
use gatemix::mix::{Gate, Level};
use gatemix::rank::{Criterion, Question};
use gatemix::site::Aeration;
use gatemix::target::{Figure, OxygenFigure};
use gatemix::withdrawal::Sink;

use super::afar::Afar;
use super::parts::{Part, Trial, Works, setting, worst};

/// Round-off that the order allows for, in steps of a bin and in C or mg/L.
const ROUND_OFF: f64 = 1e-9;
/// A figure this near to the end of a bin could fall on either side.
const EDGE: f64 = 5e-10;

/// A mix: state and share of each part.
pub(super) type Number = Vec<(usize, usize)>;

/// What a mix without a broken limit gives.
#[derive(Debug, Clone)]
pub(super) struct Water {
    /// Time means.
    pub(super) temperature_c: f64,
    pub(super) oxygen_mg_l: Option<f64>,
    pub(super) distance_c: f64,
    pub(super) key: f64,
    /// Some criterion stands at the end of a bin.
    pub(super) at_edge: bool,
}

/// A mix judged.
#[derive(Debug)]
pub(super) struct Judged {
    /// Outlets open or spilling.
    pub(super) open: Vec<usize>,
    /// Limits broken, each at its worst; `water` where there is none.
    pub(super) broken: Vec<Check>,
    pub(super) water: Option<Water>,
    /// Layers that shared levels draw: which, by how much flow too much (m3/s), and how far (m, below zero).
    pub(super) drawn: Vec<(usize, f64, f64)>,
    /// A level shared by parts that comes this near to a layer not to be drawn could be told either way.
    pub(super) at_edge: bool,
}

impl Works<'_> {
    fn trials(&self, number: &Number) -> Vec<Rc<Trial>> {
        number.iter().enumerate().map(|(part, &(share, state))| self.trial(part, state, share)).collect()
    }

    /// What the mix is, as it would be asked for.
    pub(super) fn asked(&self, number: &Number) -> Vec<Asked> {
        let trials = self.trials(number);
        let one = |block: usize| {
            let mut asked = Asked::default();
            for (part, trial) in self.parts.iter().zip(&trials) {
                if let Some(flow_m3s) = part.spills_m3s {
                    asked.direct.push(Gate { outlet: part.outlets[0], opening: 1.0, flow_m3s });
                }
                let flow_m3s = trial.totals_m3s[block];
                match part.well.filter(|_| !trial.open.is_empty()) {
                    Some(well) => {
                        asked.open.extend(&trial.open);
                        asked.totals.push((well, flow_m3s));
                    }
                    None => asked.direct.extend(trial.open.iter().map(|&(outlet, opening)| Gate {
                        outlet,
                        opening,
                        flow_m3s,
                    })),
                }
            }
            asked
        };
        (0..self.question.blocks.len()).map(one).collect()
    }

    pub(super) fn judge(&self, number: &Number) -> Judged {
        let trials = self.trials(number);
        let trials: Vec<&Trial> = trials.iter().map(Rc::as_ref).collect();
        let spills = self.parts.iter().filter(|p| p.spills_m3s.is_some()).map(|p| p.outlets[0]);
        let mut open: Vec<usize> = trials.iter().flat_map(|t| &t.open).map(|o| o.0).chain(spills).collect();
        open.sort_unstable();
        let own: Vec<Check> = trials.iter().flat_map(|t| t.broken.clone()).collect();
        if !own.is_empty() {
            return Judged { open, broken: worst(own), water: None, drawn: Vec::new(), at_edge: false };
        }
        let blocks: Vec<Vec<Level>> =
            (0..self.question.blocks.len()).map(|b| self.levels(&setting(&trials, b))).collect();
        let (mut checks, mut excess) = (Vec::new(), Vec::new());
        let mut at_edge = false;
        for level in blocks.iter().flatten() {
            at_edge |= self.undrawn_together(level, &trials, &mut checks);
            let over = |c: &Check| level.sink.flow_m3s - self.kept_m3s(&level.sink, c.item);
            let first = excess.len();
            excess.extend(checks[first..].iter().map(|c| (c.item, over(c))));
        }
        if !checks.is_empty() {
            let broken = worst(checks);
            let most = |item: usize| excess.iter().filter(|e| e.0 == item).map(|e| e.1).fold(0.0, f64::max);
            let drawn = broken.iter().map(|c| (c.item, most(c.item), c.room)).collect();
            return Judged { open, broken, water: None, drawn, at_edge };
        }
        let (water, broken) = self.whole(&blocks, &trials);
        let water = broken.is_empty().then_some(water);
        Judged { open, broken, water, drawn: Vec::new(), at_edge }
    }

    /// Layers that a shared level draws; whether it is too near to tell.
    fn undrawn_together(&self, level: &Level, trials: &[&Trial], out: &mut Vec<Check>) -> bool {
        let group = self.groups.iter().find(|g| g.contains(&level.outlets[0])).unwrap();
        let set = trials.iter().flat_map(|t| &t.open).any(|o| level.outlets.contains(&o.0));
        if !set || !self.is_shared(group) || self.site().limits.undrawn.is_empty() {
            return false;
        }
        let reached = |share: f64| {
            let flow_m3s = level.sink.flow_m3s * share;
            self.reached(&Sink { flow_m3s, ..level.sink })
        };
        out.extend(reached(1.0).iter());
        let layers = |share: f64| reached(share).iter().map(|c| c.item).collect::<Vec<_>>();
        layers(1.0 - ROUND_OFF) != layers(1.0 + ROUND_OFF)
    }

    /// What a mix gives, and the limits of the whole that it breaks.
    fn whole(&self, blocks: &[Vec<Level>], trials: &[&Trial]) -> (Water, Vec<Check>) {
        let Question { site, profile, now, before, .. } = *self.question;
        let weights: Vec<f64> = self.question.blocks.iter().map(|b| b.0).collect();
        let (mut temperatures, mut oxygens) = (Vec::new(), Vec::new());
        let (mut cold_m3s, mut mean_m3s) = (0.0, 0.0);
        let mut wholes: Vec<Whole> = Vec::new();
        for (block, levels) in blocks.iter().enumerate() {
            let mut solids: Vec<(f64, f64)> = Vec::new();
            let streams = levels.iter().filter(|l| l.sink.flow_m3s > 0.0).map(|l| {
                let Sink { centre_m, flow_m3s, opening } = l.sink;
                let mut water = self.curve(centre_m, opening).at(flow_m3s);
                solids.push((flow_m3s, water.solids_mg_l()));
                water.temperature_c += site.bias_c(l.outlets[0]).unwrap_or(0.0);
                (flow_m3s, water)
            });
            let streams: Vec<_> = streams.collect();
            let flow_m3s: f64 = streams.iter().map(|s| s.0).sum();
            let mean = |of: &dyn Fn(&gatemix::rank::Water) -> f64| {
                streams.iter().map(|(q, w)| q * of(w)).sum::<f64>() / flow_m3s
            };
            let known = streams.iter().all(|(_, w)| w.oxygen_mg_l.is_some());
            temperatures.push(mean(&|w| w.temperature_c));
            oxygens.push(known.then(|| self.below_mg_l(levels)));
            cold_m3s += weights[block] * flow_m3s * mean(&|w| w.cold_share);
            mean_m3s += weights[block] * flow_m3s;
            let through = |outlets: &[usize]| {
                let named =
                    trials.iter().flat_map(|t| &t.flows).filter(|f| f.1 > 0.0 && outlets.contains(&f.0));
                named.map(|f| f.2[block]).sum()
            };
            wholes.push(Whole {
                flow_m3s,
                solids_mg_l: Some(solids.iter().map(|(q, s)| q * s).sum::<f64>() / flow_m3s),
                share_flows_m3s: site.limits.shares.iter().map(|s| through(&s.outlets)).collect(),
                ..Whole::default()
            });
        }
        let over_time = |of: &[f64]| of.iter().zip(&weights).map(|(v, w)| v * w).sum::<f64>();
        let temperature_c = over_time(&temperatures);
        let known: Option<Vec<f64>> = oxygens.into_iter().collect();
        let parts: Vec<&Part> = self.parts.iter().collect();
        let moves =
            now.map(|now| limits::moves(site, now, &self.over_the_day(trials, &parts), &mut Vec::new()));
        let mut checks = Vec::new();
        for whole in wholes {
            let before = Before { flow_m3s: None, ..before };
            let whole = Whole { temperature_c, moves, before: Some(before), ..whole };
            limits::whole(site, profile.pool_m, &whole, &mut checks);
        }
        // changes and fall of the release were asked for, not found; leaks and spill come beside it
        let found = |rule: Rule| matches!(rule, Rule::ReleaseMin | Rule::ReleaseMax);
        checks.retain(|c| c.broken() && (found(c.rule) || !OF_THE_RELEASE.contains(&c.rule)));
        let day = Day {
            temperatures: &temperatures,
            mean_c: temperature_c,
            oxygens: known.as_deref(),
            mean_mg_l: known.as_deref().map(over_time),
            cold_share: cold_m3s / mean_m3s,
            cost: moves.map_or(0.0, |m| m.cost),
            hours: moves.map_or(0.0, |m| m.crew_hours),
        };
        (day.water(self.question, &self.afar), worst(checks))
    }

    /// Oxygen below the dam: what each well and each outlet on none carries gains on its way.
    fn below_mg_l(&self, levels: &[Level]) -> f64 {
        let site = self.site();
        let mut conduits: BTreeMap<String, (Option<Aeration>, [f64; 4])> = BTreeMap::new();
        for level in levels.iter().filter(|l| l.sink.flow_m3s > 0.0) {
            let Sink { centre_m, flow_m3s, opening } = level.sink;
            let water = self.curve(centre_m, opening).at(flow_m3s);
            for (&outlet, flow) in level.outlets.iter().zip(&level.flows_m3s) {
                let o = &site.outlets[outlet];
                let well = o.well.map(|w| &site.wells[w]);
                let (name, aeration) = well.map_or((&o.name, o.aeration), |w| (&w.name, w.aeration));
                let (_, sums) = conduits.entry(name.clone()).or_insert((aeration, [0.0; 4]));
                let each = [1.0, water.temperature_c, water.oxygen_mg_l.unwrap_or(0.0), water.salt_g_per_kg];
                sums.iter_mut().zip(each).for_each(|(sum, each)| *sum += flow * each);
            }
        }
        let gained = |(aeration, [flow, heat, oxygen, salt]): &(Option<Aeration>, [f64; 4])| {
            let (t, o) = (heat / flow, oxygen / flow);
            let saturation = site.saturation_below_mg_l(t, salt / flow);
            let aired = aeration.map_or(o, |a| a.by.below_mg_l(o, saturation, t));
            flow * match site.learned_gain_mg_l() {
                Some(gain) if gain < 0.0 => (aired + gain).max(0.0),
                Some(gain) => aired.max((aired + gain).min(saturation)),
                None => aired,
            }
        };
        let carried = conduits.values().filter(|c| c.1[0] > 0.0);
        carried.clone().map(gained).sum::<f64>() / carried.map(|c| c.1[0]).sum::<f64>()
    }

    /// Limits that the release asked for breaks, whatever the mix.
    pub(super) fn hopeless(&self) -> Vec<Check> {
        let Question { site, profile, blocks, before, .. } = *self.question;
        let mut checks = Vec::new();
        let mut judge = |flow_m3s: f64, of_a_day: bool| {
            let release = Whole { flow_m3s, before: Some(before), ..Whole::default() };
            let mut all = Vec::new();
            limits::whole(site, profile.pool_m, &release, &mut all);
            let mine = |c: &Check| OF_THE_RELEASE.contains(&c.rule) && (c.rule == Rule::Drawdown) == of_a_day;
            checks.extend(all.into_iter().filter(|c| c.broken() && mine(c)));
        };
        for block in blocks {
            judge(block.1, false);
        }
        judge(blocks.iter().map(|b| b.0 * b.1).sum(), true);
        worst(checks)
    }
}

const OF_THE_RELEASE: [Rule; 5] =
    [Rule::ReleaseMin, Rule::ReleaseMax, Rule::FlowChangePerHour, Rule::FlowChangePerDay, Rule::Drawdown];

/// A day's water and what the change to it takes.
struct Day<'a> {
    temperatures: &'a [f64],
    mean_c: f64,
    oxygens: Option<&'a [f64]>,
    mean_mg_l: Option<f64>,
    cold_share: f64,
    cost: f64,
    hours: f64,
}

impl Day<'_> {
    /// Its place in the order, by the rules valid at the dam.
    fn water(&self, question: &Question, afar: &Afar) -> Water {
        let bins = question.site.bins;
        let (mut outside, mut short, mut distance_c) = (0.0_f64, 0.0_f64, 0.0_f64);
        let mut has_floor = false;
        let least = |of: &[f64]| of.iter().copied().fold(f64::INFINITY, f64::min);
        let most = |of: &[f64]| of.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let site = question.site;
        let steady = self.temperatures.len() == 1;
        let mean_c = self.mean_c;
        for asked in question.day.rules(site).iter() {
            let wish = is_wish(site, asked.target, &afar.conflicts);
            // each value with the ends it is held against: `true` for the upper
            let values: Vec<(f64, [bool; 2])> = match (asked.point, &asked.today) {
                (_, Err(_)) => Vec::new(),
                (None, Ok(today)) => match today.figure {
                    Figure::HourlyChange => Vec::new(),
                    _ if steady => vec![(mean_c, [true; 2])],
                    Figure::Max => vec![(most(self.temperatures), [true; 2])],
                    Figure::Min => vec![(least(self.temperatures), [true; 2])],
                    Figure::Both => {
                        vec![(most(self.temperatures), [true; 2]), (least(self.temperatures), [true; 2])]
                    }
                    Figure::Mean => vec![(mean_c, [true; 2])],
                },
                // with a given equilibrium only the mean is known of a steady day, of blocks every hour
                (Some(point), Ok(today)) => afar.at_point(point, today.figure, mean_c),
            };
            if let Ok(today) = &asked.today {
                let low = today.low_c.filter(|low| today.base_c.is_none_or(|base| *low > base));
                for (value, [lower, upper]) in values {
                    let over = |bound: Option<f64>| bound.filter(|_| upper).map_or(0.0, |b| value - b);
                    let under = |bound: Option<f64>| bound.filter(|_| lower).map_or(0.0, |b| b - value);
                    if !wish {
                        outside = outside.max(over(today.high_c)).max(under(low));
                    }
                    let (down, up) = (today.preferred_c.or(low), today.preferred_c.or(today.high_c));
                    distance_c = distance_c.max(over(up)).max(under(down));
                }
            }
            let Some(air) = asked.air.filter(|_| !wish) else { continue };
            let release = match air.figure {
                OxygenFigure::Mean => self.mean_mg_l,
                OxygenFigure::Min => self.oxygens.map(least),
            };
            let Some((found, full)) = afar.oxygen(asked.point, air.figure, mean_c, release) else { continue };
            has_floor = true;
            short = short.max(found.map_or(0.0, |o| air.floor_mg_l(full) - o));
        }
        let mut at_edge = false;
        let mut floor = |value: f64| {
            at_edge |= value.abs() > EDGE && (value + ROUND_OFF - (value + ROUND_OFF).round()).abs() < EDGE;
            (value + ROUND_OFF).floor()
        };
        let mut steps = |criterion: Criterion| -> Vec<(f64, f64)> {
            match criterion {
                Criterion::Oxygen if self.oxygens.is_none() => vec![(f64::from(u8::from(has_floor)), 256.0)],
                Criterion::Oxygen if short <= ROUND_OFF => vec![(0.0, 256.0)],
                // a part of a bin counts as a whole one, after all that keep the floor and all not known
                Criterion::Oxygen => vec![(1.0 - floor(-short / bins.oxygen_mg_l), 256.0)],
                Criterion::Range if outside <= ROUND_OFF => vec![(0.0, 256.0)],
                Criterion::Range => vec![(-floor(-outside / bins.temperature_c), 256.0)],
                Criterion::Preferred => vec![(floor(distance_c / bins.temperature_c), 256.0)],
                Criterion::ColdWater => vec![(floor(self.cold_share / bins.cold_share), 128.0)],
                Criterion::Moves => {
                    vec![((self.cost / 0.1).round(), 1024.0), ((self.hours / 0.25).round(), 1024.0)]
                }
            }
        };
        let mut key = 0.0;
        for (value, places) in question.order.iter().flat_map(|c| steps(*c)) {
            key = key * places + value.min(places - 1.0);
        }
        Water { temperature_c: self.mean_c, oxygen_mg_l: self.mean_mg_l, distance_c, key, at_edge }
    }
}
