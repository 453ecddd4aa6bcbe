//! What one level gives as a function of its flow: solved once on a few flows, read many times between them.
//!
//! Methods: `docs/methods.md`, section 10.

use std::collections::BTreeMap;

use crate::profile::Column;
use crate::water;
use crate::withdrawal::{Opening, Sink, zone};

/// The table is cut finer until half-way between two of its flows it errs by less than this, C and mg/L (choice).
const APART: f64 = 5e-4;
/// The same for the share of cold water (choice).
const APART_SHARE: f64 = 5e-3;
/// The same for dissolved and suspended solids, as a share of the value (choice).
const APART_SOLIDS: f64 = 1e-3;
/// Where the table is tried beside half-way, as a share of a step (choice).
const BESIDE: f64 = 0.3;
/// Steps of the first cut, even in the root of the flow (choice).
const FIRST: u32 = 16;
/// The first step is cut in halves towards no flow this often (choice): a trickle draws otherwise than a stream, and
/// half-way between the two need not show it.
const TRICKLES: i32 = 5;
/// A step is halved this often at most (choice): where the oxygen becomes unknown the table jumps.
const HALVINGS: u32 = 10;
/// Least flow of the table as a share of its greatest (choice); below it the water is that of this flow.
const LEAST: f64 = 1e-7;

/// How finely curves are cut.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Cut {
    /// How many times the distances above a curve may err.
    times: f64,
    first: u32,
    trickles: i32,
    halvings: u32,
    /// Whether it is tried beside half-way too.
    beside: bool,
}

impl Cut {
    /// As mixes are shown.
    pub(super) const FINE: Self =
        Self { times: 1.0, first: FIRST, trickles: TRICKLES, halvings: HALVINGS, beside: true };
    /// To a hundredth of a degree or so, where what is found is computed in full afterwards (choice).
    pub(super) const ROUGH: Self = Self { times: 20.0, first: 8, trickles: 2, halvings: 4, beside: false };
}

/// Water of a level at one flow.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Water {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen, mg/L; `None` where it is not known.
    pub oxygen_mg_l: Option<f64>,
    /// Share of the flow from water colder than the threshold, 0 to 1.
    pub cold_share: f64,
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: f64,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: f64,
}

impl Water {
    /// Dissolved and suspended solids, mg/L.
    pub fn solids_mg_l(&self) -> f64 {
        self.salt_g_per_kg * water::pure_water_kg_m3(self.temperature_c) + self.suspended_mg_l
    }
}

/// One knot: the root of the flow, and temperature, oxygen, cold share, dissolved and suspended solids there.
#[derive(Debug, Clone, Copy)]
struct Knot {
    root: f64,
    values: [f64; 5],
    oxygen_known: bool,
}

/// The release of one level as a function of its flow, linear in the root of the flow between knots.
#[derive(Debug, Clone)]
pub struct Curve {
    knots: Vec<Knot>,
    /// First knot of each of a number of even steps of the root, so that a reading starts near its place.
    starts: Vec<u32>,
    steps_per_root: f64,
}

impl Curve {
    /// Solves a level in a pool, with a factor on its zone, at the flows it needs, up to `most_m3s`. `cold_c` is the threshold of cold water. `None` for a level out of the water.
    ///
    /// Flows at which the zone meets bed or surface are knots, since the release bends there.
    pub fn new(
        (column, zone_factor): (&Column, f64),
        centre_m: f64,
        opening: Opening,
        most_m3s: f64,
        cold_c: Option<f64>,
    ) -> Option<Self> {
        Self::cut((column, zone_factor), (centre_m, opening), most_m3s, cold_c, &Cut::FINE)
    }

    /// The same cut as finely as is asked.
    fn cut(
        (column, zone_factor): (&Column, f64),
        (centre_m, opening): (f64, Opening),
        most_m3s: f64,
        cold_c: Option<f64>,
        cut: &Cut,
    ) -> Option<Self> {
        let solve = |root: f64| {
            let sink = Sink { centre_m, flow_m3s: root * root, opening };
            let zone = zone(column, &sink, zone_factor)?;
            let draw = zone.draw(column)?;
            let values = [
                draw.temperature_c,
                draw.oxygen_mg_l.unwrap_or(0.0),
                cold_c.map_or(0.0, |c| zone.colder_share(column, c)),
                draw.salt_g_per_kg,
                draw.suspended_mg_l,
            ];
            Some((Knot { root, values, oxygen_known: draw.oxygen_mg_l.is_some() }, zone))
        };
        let top = most_m3s.sqrt();
        let mut roots: Vec<f64> =
            (1..=cut.first).map(|i| top * f64::from(i) / f64::from(cut.first)).collect();
        roots.extend((1..=cut.trickles).map(|i| top / f64::from(cut.first) * 0.5_f64.powi(i)));
        roots.push(top * LEAST.sqrt());
        let (last, widest) = solve(top)?;
        let meets = [widest.lower, widest.upper].into_iter().filter_map(|side| side.boundary_flow_m3s);
        roots.extend(meets.map(f64::sqrt).filter(|&r| r > top * LEAST.sqrt() && r < top));
        roots.sort_by(f64::total_cmp);
        roots.dedup();
        let mut knots: Vec<Knot> = Vec::new();
        for root in roots {
            let knot = if root.total_cmp(&top).is_eq() { last } else { solve(root)?.0 };
            if let Some(&before) = knots.last() {
                refine(&|r| solve(r).map(|s| s.0), before, knot, (cut, cut.halvings), &mut knots);
            }
            knots.push(knot);
        }
        let count = 2 * knots.len();
        let steps_per_root = count as f64 / top;
        let mut at = 0;
        let starts = (0..=count)
            .map(|step| {
                while at + 2 < knots.len() && knots[at + 1].root * steps_per_root <= step as f64 {
                    at += 1;
                }
                u32::try_from(at).unwrap_or(u32::MAX)
            })
            .collect();
        Some(Self { knots, starts, steps_per_root })
    }

    /// Water at a flow, m3/s, held beyond both ends of the table.
    #[inline]
    pub fn at(&self, flow_m3s: f64) -> Water {
        let (low, high, share) = self.place(flow_m3s);
        let [temperature_c, oxygen, cold_share, salt_g_per_kg, suspended_mg_l] =
            [0, 1, 2, 3, 4].map(|i| low.values[i] + share * (high.values[i] - low.values[i]));
        let known = low.oxygen_known && high.oxygen_known;
        Water {
            temperature_c,
            oxygen_mg_l: known.then_some(oxygen),
            cold_share,
            salt_g_per_kg,
            suspended_mg_l,
        }
    }

    /// The two knots about a flow and the share of the way between them.
    #[inline]
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "no less than zero, and capped"
    )]
    fn place(&self, flow_m3s: f64) -> (&Knot, &Knot, f64) {
        let root = flow_m3s.max(0.0).sqrt();
        let step = ((root * self.steps_per_root) as usize).min(self.starts.len() - 1);
        let mut at = self.starts[step] as usize;
        while at + 2 < self.knots.len() && self.knots[at + 1].root <= root {
            at += 1;
        }
        let (low, high) = (&self.knots[at], &self.knots[at + 1]);
        (low, high, ((root - low.root) / (high.root - low.root)).clamp(0.0, 1.0))
    }

    /// Number of flows solved.
    pub fn knots(&self) -> usize {
        self.knots.len()
    }
}

/// Adds knots between two until a straight line between neighbours is near enough half-way and beside it: what bends
/// evenly about the middle does not show there.
fn refine(
    solve: &impl Fn(f64) -> Option<Knot>,
    a: Knot,
    b: Knot,
    (cut, halvings): (&Cut, u32),
    knots: &mut Vec<Knot>,
) {
    let between = |share: f64| solve(a.root + share * (b.root - a.root));
    let (true, Some(knot)) = (halvings > 0, between(0.5)) else { return };
    let near = |share: f64, knot: Knot| {
        let off = |i: usize| (knot.values[i] - a.values[i] - share * (b.values[i] - a.values[i])).abs();
        let known = [a, knot, b].map(|k| k.oxygen_known);
        off(0) < cut.times * APART
            && off(2) < cut.times * APART_SHARE
            && off(3) < cut.times * APART_SOLIDS * (0.1 + knot.values[3])
            && off(4) < cut.times * APART_SOLIDS * (1.0 + knot.values[4])
            && known.iter().all(|&k| k == known[0])
            && (!known[0] || off(1) < cut.times * APART)
    };
    if near(0.5, knot) && (!cut.beside || between(BESIDE).is_none_or(|knot| near(BESIDE, knot))) {
        return;
    }
    refine(solve, a, knot, (cut, halvings - 1), knots);
    knots.push(knot);
    refine(solve, knot, b, (cut, halvings - 1), knots);
}

/// Curves of a pool, each sink solved once however many gates share it.
#[derive(Debug, Default)]
pub struct Curves {
    places: BTreeMap<[u64; 4], usize>,
    solved: Vec<Option<Curve>>,
    sinks: Vec<(f64, Opening)>,
    bias_c: Vec<f64>,
}

impl Curves {
    /// Asks for the curve of a sink whose water comes out with a bias that was learned (C); its index among the curves.
    pub fn ask(&mut self, centre_m: f64, opening: Opening, bias_c: f64) -> usize {
        let (kind, size) = match opening {
            Opening::Port { angle_rad } => (0, angle_rad),
            Opening::Crest { length_m, .. } => (1, length_m),
        };
        let next = self.sinks.len();
        let index =
            *self.places.entry([kind, size.to_bits(), centre_m.to_bits(), bias_c.to_bits()]).or_insert(next);
        if index == next {
            self.sinks.push((centre_m, opening));
            self.bias_c.push(bias_c);
        }
        index
    }

    /// Solves what was asked for in a pool, with a factor on every zone, on all cores.
    pub(super) fn solve(&mut self, water: (&Column, f64), most_m3s: f64, cold_c: Option<f64>, cut: &Cut) {
        use rayon::prelude::*;
        self.solved =
            self.sinks.par_iter().map(|&sink| Curve::cut(water, sink, most_m3s, cold_c, cut)).collect();
    }

    /// A solved curve; `None` for a sink out of the water.
    #[inline]
    pub fn get(&self, index: usize) -> Option<&Curve> {
        self.solved.get(index)?.as_ref()
    }

    /// Bias that was learned of a curve's level, C.
    #[inline]
    pub fn bias_c(&self, index: usize) -> f64 {
        self.bias_c.get(index).copied().unwrap_or(0.0)
    }

    /// Where a curve draws.
    pub fn sink(&self, index: usize) -> Option<(f64, Opening)> {
        self.sinks.get(index).copied()
    }
}
