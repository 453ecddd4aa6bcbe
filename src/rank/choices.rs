//! What one part of the dam can do at each share of the release, and two parts taken together.
//!
//! Methods: `docs/methods.md`, section 10.

use crate::site::Site;

use super::curve::Curves;
use super::gain::Conduit;

/// Most blocks of a day.
pub(super) const MOST_BLOCKS: usize = 4;

/// Places of the sums a choice adds to: for each block flow, flow times temperature and flow times oxygen; then
/// cold water, effort, hours and moves; then, block by block, what rules of the whole mix need.
#[derive(Debug, Clone, Copy)]
pub(super) struct Lanes {
    /// Blocks of the day, 1 to [`MOST_BLOCKS`].
    pub(super) blocks: usize,
    /// Whether solids are limited.
    pub(super) solids: bool,
    /// Number of share rules.
    pub(super) shares: usize,
}

impl Lanes {
    pub(super) fn count(self) -> usize {
        self.share(self.shares, 0)
    }
    pub(super) fn cold(self) -> usize {
        3 * self.blocks
    }
    pub(super) fn effort(self) -> usize {
        3 * self.blocks + 1
    }
    pub(super) fn hours(self) -> usize {
        3 * self.blocks + 2
    }
    pub(super) fn moves(self) -> usize {
        3 * self.blocks + 3
    }
    pub(super) fn solids(self, block: usize) -> usize {
        3 * self.blocks + 4 + block
    }
    pub(super) fn share(self, rule: usize, block: usize) -> usize {
        3 * self.blocks + 4 + self.blocks * (usize::from(self.solids) + rule) + block
    }
}

/// A level that more than one part of the dam can draw through.
#[derive(Debug, Clone)]
pub(super) struct Slot {
    /// Curve of each opening of its outlets, by code; `None` where nothing is open.
    pub(super) curves: Vec<Option<usize>>,
    /// Greatest flow of each curve that keeps out of the layers not to be drawn, m3/s, for each such layer.
    pub(super) kept_m3s: Vec<Vec<f64>>,
}

/// What a choice sends through a slot.
#[derive(Debug, Clone)]
pub(super) struct Part {
    /// Index of the slot.
    pub(super) slot: usize,
    /// Its part of the slot's code.
    pub(super) code: usize,
    /// A gate that somebody set is among it: no leak, and nothing that spills by itself.
    pub(super) set: bool,
    /// Flow in each block, m3/s.
    pub(super) flows_m3s: [f64; MOST_BLOCKS],
    /// What it adds to the lanes when nothing else draws there; already in the choice's lanes.
    pub(super) alone: Vec<f64>,
    /// Oxygen is unknown when nothing else draws there.
    pub(super) alone_unknown: bool,
    /// The conduit of its unit, where that adds oxygen; what it adds alone is in the choice's lanes.
    pub(super) conduit: Option<Conduit>,
}

/// One choice of a part of the dam at one share of the release.
#[derive(Debug, Clone)]
pub(super) struct Choice {
    /// Sums, as [`Lanes`] places them.
    pub(super) lanes: Vec<f64>,
    /// Oxygen of its own water is unknown in some block, as far as nothing else draws there.
    pub(super) unknown: bool,
    /// Its part of the index of ideas: which outlets are open.
    pub(super) idea: usize,
    /// Its part of the number of the mix; numbers follow the fixed order.
    pub(super) number: u64,
    /// What it sends through levels it shares with other parts.
    pub(super) parts: Vec<Part>,
    /// Slots of its parts, as bits.
    pub(super) slots: u64,
}

/// The choices of a part of the dam, by share: `by_share[k]` at `k` steps of the release.
#[derive(Debug, Clone, Default)]
pub(super) struct Choices {
    /// Choices at each share.
    pub(super) by_share: Vec<Vec<Choice>>,
    /// Parts of the dam, as bits, that the choices speak for.
    pub(super) units: u64,
}

impl Choices {
    /// Only the choices at every so many steps.
    pub(super) fn every(&self, steps: usize) -> Self {
        let thinned = |(k, at): (usize, &Vec<Choice>)| if k % steps == 0 { at.clone() } else { Vec::new() };
        Self { by_share: self.by_share.iter().enumerate().map(thinned).collect(), units: self.units }
    }

    /// Number of choices over all shares.
    pub(super) fn len(&self) -> usize {
        self.by_share.iter().map(Vec::len).sum()
    }

    /// Number of pairs two lists make together within the release.
    pub(super) fn pairs(&self, other: &Self) -> usize {
        let steps = self.by_share.len();
        (0..steps)
            .map(|k| self.by_share[k].len() * other.by_share[..steps - k].iter().map(Vec::len).sum::<usize>())
            .sum()
    }

    /// Number of choices at each share.
    pub(super) fn counts(&self) -> Vec<u64> {
        self.by_share.iter().map(|c| c.len() as u64).collect()
    }
}

/// What happens where several choices draw through one level.
pub(super) struct Levels<'a> {
    pub(super) site: &'a Site,
    pub(super) slots: &'a [Slot],
    pub(super) curves: &'a Curves,
    pub(super) lanes: Lanes,
    /// Share of the day of each block.
    pub(super) weights: &'a [f64],
}

impl Levels<'_> {
    /// Makes good that parts drawn through one level act as one sink: what each would add alone is taken off and
    /// what they add together put on. `shared` has a bit for each slot with several parts. Tells whether the oxygen is
    /// unknown in any slot.
    #[inline]
    pub(super) fn join(&self, parts: &[&Part], mut shared: u64, lanes: &mut [f64]) -> bool {
        let mut unknown = false;
        if shared != 0 && parts.iter().any(|p| p.conduit.is_some()) {
            self.gain_together(parts, shared, lanes);
        }
        for part in parts {
            unknown |= part.alone_unknown && shared & (1 << part.slot) == 0;
        }
        while shared != 0 {
            let slot = shared.trailing_zeros() as usize;
            shared &= shared - 1;
            let mut code = 0;
            let mut flows = [0.0; MOST_BLOCKS];
            for part in parts.iter().filter(|p| p.slot == slot) {
                code += part.code;
                for (sum, flow) in flows.iter_mut().zip(part.flows_m3s) {
                    *sum += flow;
                }
                for (lane, alone) in lanes.iter_mut().zip(&part.alone) {
                    *lane -= alone;
                }
            }
            unknown |= self.add(self.slots[slot].curves[code], &flows, lanes);
        }
        unknown
    }

    /// Adds the water of one curve at the flow of each block. Tells whether its oxygen is unknown in any.
    pub(super) fn add(&self, curve: Option<usize>, flows: &[f64; MOST_BLOCKS], lanes: &mut [f64]) -> bool {
        let Some((curve, bias_c)) = curve.and_then(|c| Some((self.curves.get(c)?, self.curves.bias_c(c))))
        else {
            return false;
        };
        let mut unknown = false;
        for block in 0..self.lanes.blocks {
            let flow = flows[block];
            if flow <= 0.0 {
                continue;
            }
            let water = curve.at(flow);
            lanes[3 * block] += flow;
            lanes[3 * block + 1] += flow * (water.temperature_c + bias_c);
            lanes[3 * block + 2] += flow * water.oxygen_mg_l.unwrap_or(0.0);
            unknown |= water.oxygen_mg_l.is_none();
            lanes[self.lanes.cold()] += self.weights[block] * flow * water.cold_share;
            if self.lanes.solids {
                lanes[self.lanes.solids(block)] += flow * water.solids_mg_l();
            }
        }
        unknown
    }
}

/// Two lists taken together: every pair within the release, in their order.
pub(super) fn together(a: &Choices, b: &Choices) -> Choices {
    let steps = a.by_share.len();
    let mut by_share: Vec<Vec<Choice>> = vec![Vec::new(); steps];
    for (k, first) in a.by_share.iter().enumerate() {
        for (j, second) in b.by_share.iter().take(steps - k).enumerate() {
            for (x, y) in first.iter().flat_map(|x| second.iter().map(move |y| (x, y))) {
                by_share[k + j].push(Choice {
                    lanes: x.lanes.iter().zip(&y.lanes).map(|(p, q)| p + q).collect(),
                    unknown: x.unknown || y.unknown,
                    idea: x.idea + y.idea,
                    number: x.number + y.number,
                    parts: x.parts.iter().chain(&y.parts).cloned().collect(),
                    slots: x.slots | y.slots,
                });
            }
        }
    }
    Choices { by_share, units: a.units | b.units }
}

/// Choices whose levels nothing else draws through: what they share is made good once and for all.
pub(super) fn settled(mut choices: Choices, levels: &Levels) -> Choices {
    for choice in choices.by_share.iter_mut().flatten() {
        let parts = std::mem::take(&mut choice.parts);
        let parts: Vec<&Part> = parts.iter().collect();
        choice.unknown |= levels.join(&parts, shared(&parts), &mut choice.lanes);
        choice.slots = 0;
    }
    choices
}

/// Slots with several parts, as bits.
pub(super) fn shared(parts: &[&Part]) -> u64 {
    let mut seen = 0;
    parts.iter().fold(0, |shared, part| {
        let bit = 1 << part.slot;
        let again = seen & bit;
        seen |= bit;
        shared | again
    })
}
