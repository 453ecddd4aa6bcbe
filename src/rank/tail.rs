//! The parts that stand alone, taken together: rows by the share they take, in blocks judged side by side.
//!
//! Methods: `docs/methods.md`, section 10.

use super::choices::{Choice, Choices, Lanes, Levels, MOST_BLOCKS};
use super::goal::Days;

/// Rows of a block (choice): enough for side by side, few enough that their water is alike.
pub(super) const ROWS: usize = 8;

/// Values of the rows of a block; rows that are not there repeat the last.
type Column = [f64; ROWS];

/// What the head adds to every row, at hand.
pub(super) struct Head<const B: usize> {
    /// Flow, heat and oxygen in each part of the day.
    water: [[f64; 3]; B],
    cold: f64,
    effort: f64,
    /// Share of the day of each part.
    weights: [f64; B],
}

impl<const B: usize> Head<B> {
    pub(super) fn of(sums: &[f64], levels: &Levels) -> Self {
        let lanes = levels.lanes;
        Self {
            water: std::array::from_fn(|b| [sums[3 * b], sums[3 * b + 1], sums[3 * b + 2]]),
            cold: sums[lanes.cold()],
            effort: sums[lanes.effort()],
            weights: std::array::from_fn(|b| if B == 1 { 1.0 } else { levels.weights[b] }),
        }
    }
}

/// Some rows that take one share and whose water is alike.
#[derive(Debug, Clone)]
pub(super) struct Block {
    /// Number of rows.
    pub(super) rows: usize,
    /// Each lane of the rows.
    lanes: Vec<Column>,
    /// Least and greatest of what they add in each part of the day: flow, heat, oxygen.
    water: [[[f64; 2]; 3]; MOST_BLOCKS],
    /// Least of the cold water and of the effort they add.
    least: [f64; 2],
    /// Oxygen of each row is unknown.
    pub(super) unknown: [bool; ROWS],
    /// Index of the idea of each row.
    pub(super) idea: [usize; ROWS],
    /// The ideas there are.
    pub(super) ideas: Vec<usize>,
    /// Number of each row.
    pub(super) number: [u64; ROWS],
}

impl Block {
    fn new(rows: &[&Choice], lanes: Lanes) -> Option<Self> {
        let row = |i: usize| rows[i.min(rows.len() - 1)];
        rows.first()?;
        let columns: Vec<Column> =
            (0..lanes.count()).map(|lane| std::array::from_fn(|i| row(i).lanes[lane])).collect();
        let span = |column: &Column| {
            let least = column.iter().copied().fold(f64::INFINITY, f64::min);
            [least, column.iter().copied().fold(f64::NEG_INFINITY, f64::max)]
        };
        let water = std::array::from_fn(|b| {
            [0, 1, 2].map(|i| if b < lanes.blocks { span(&columns[3 * b + i]) } else { [0.0; 2] })
        });
        let mut ideas: Vec<usize> = rows.iter().map(|r| r.idea).collect();
        ideas.sort_unstable();
        ideas.dedup();
        Some(Self {
            rows: rows.len(),
            water,
            least: [lanes.cold(), lanes.effort()].map(|lane| span(&columns[lane])[0]),
            lanes: columns,
            unknown: std::array::from_fn(|i| row(i).unknown),
            idea: std::array::from_fn(|i| row(i).idea),
            ideas,
            number: std::array::from_fn(|i| row(i).number),
        })
    }

    /// Value of one lane of a row.
    pub(super) fn lane(&self, lane: usize, row: usize) -> f64 {
        self.lanes[lane][row]
    }

    /// Whether any oxygen is unknown.
    pub(super) fn any_unknown(&self) -> bool {
        self.unknown.contains(&true)
    }

    /// What all rows together span, with what the head adds; and the least of their oxygen, mg/L.
    #[inline]
    pub(super) fn span<const B: usize>(&self, head: &Head<B>) -> (Days<1>, f64) {
        let mut days = Days::<1>::default();
        let (mut least_mg_l, mut mean_flow) = (0.0, 0.0);
        for b in 0..B {
            let [flow, heat, oxygen] = [0, 1, 2].map(|i| self.water[b][i].map(|end| head.water[b][i] + end));
            let per = flow.map(|q| 1.0 / q);
            // heat may lie below zero, so either end of the flow can make the least and the greatest
            let low = (heat[0] * per[0]).min(heat[0] * per[1]);
            let high = (heat[1] * per[0]).max(heat[1] * per[1]);
            let weight = head.weights[b];
            mean_flow += weight * flow[1];
            least_mg_l += weight * oxygen[0] * per[1];
            days.oxygen_mg_l[0][0] += weight * oxygen[1] * per[0];
            days.low_c[0][0] += weight * low;
            days.high_c[0][0] += weight * high;
            if B > 1 {
                let keep = |kept: &mut f64, new: f64, better: bool| {
                    if b == 0 || better {
                        *kept = new;
                    }
                };
                let aired = oxygen[1] * per[0];
                let better = aired < days.oxygen_mg_l[1][0];
                keep(&mut days.oxygen_mg_l[1][0], aired, better);
                for (kept, t) in [(&mut days.low_c, low), (&mut days.high_c, high)] {
                    let [_, greatest, least] = kept;
                    let (warmer, colder) = (t > greatest[0], t < least[0]);
                    keep(&mut greatest[0], t, warmer);
                    keep(&mut least[0], t, colder);
                }
            }
        }
        days.cold_share[0] = (head.cold + self.least[0]) / mean_flow;
        days.effort[0] = head.effort + self.least[1];
        (days, least_mg_l)
    }
}

/// The rows, by share.
#[derive(Debug, Clone)]
pub(super) struct Tail {
    /// Blocks of each share.
    pub(super) by_share: Vec<Vec<Block>>,
}

impl Tail {
    pub(super) fn new(choices: &Choices, lanes: Lanes) -> Self {
        let blocks = |at: &Vec<Choice>| {
            let mut rows: Vec<&Choice> = at.iter().collect();
            // by heat, so that a block spans little
            rows.sort_by(|a, b| a.lanes[1].total_cmp(&b.lanes[1]).then(a.number.cmp(&b.number)));
            rows.chunks(ROWS).filter_map(|rows| Block::new(rows, lanes)).collect()
        };
        Self { by_share: choices.by_share.iter().map(blocks).collect() }
    }
}

/// Fills in temperature and oxygen of a block's rows, with what the head adds to each; gives the mean flow of each, of
/// a steady day one over it.
#[inline]
pub(super) fn waters<const B: usize>(days: &mut Days<ROWS>, block: &Block, head: &Head<B>) -> Column {
    let mut flows = [0.0; ROWS];
    for b in 0..B {
        let [flow, heat, oxygen] = [3 * b, 3 * b + 1, 3 * b + 2].map(|lane| &block.lanes[lane]);
        let [head_flow, head_heat, head_oxygen] = head.water[b];
        let weight = head.weights[b];
        let (mut per, mut t, mut o) = ([0.0; ROWS], [0.0; ROWS], [0.0; ROWS]);
        for i in 0..ROWS {
            per[i] = 1.0 / (head_flow + flow[i]);
        }
        for i in 0..ROWS {
            t[i] = (head_heat + heat[i]) * per[i];
            o[i] = (head_oxygen + oxygen[i]) * per[i];
        }
        if B == 1 {
            (days.low_c[0], days.oxygen_mg_l[0], flows) = (t, o, per);
            continue;
        }
        for i in 0..ROWS {
            let first = b == 0;
            let sum = |so_far: f64, more: f64| if first { weight * more } else { so_far + weight * more };
            flows[i] = sum(flows[i], head_flow + flow[i]);
            let [mean, greatest, least] = &mut days.low_c;
            mean[i] = sum(mean[i], t[i]);
            greatest[i] = if first || t[i] > greatest[i] { t[i] } else { greatest[i] };
            least[i] = if first || t[i] < least[i] { t[i] } else { least[i] };
            let [mean, least] = &mut days.oxygen_mg_l;
            mean[i] = sum(mean[i], o[i]);
            least[i] = if first || o[i] < least[i] { o[i] } else { least[i] };
        }
    }
    for statistic in 0..if B == 1 { 1 } else { 3 } {
        days.high_c[statistic] = days.low_c[statistic];
    }
    flows
}

/// Fills in the days of a block's rows, with what the head adds to each.
#[inline]
pub(super) fn fill<const B: usize>(days: &mut Days<ROWS>, block: &Block, head: &Head<B>, lanes: Lanes) {
    let flows = waters(days, block, head);
    let [cold, effort] = [lanes.cold(), lanes.effort()].map(|lane| &block.lanes[lane]);
    for i in 0..ROWS {
        let cold = head.cold + cold[i];
        days.cold_share[i] = if B == 1 { cold * flows[i] } else { cold / flows[i] };
    }
    for (sum, effort) in days.effort.iter_mut().zip(effort) {
        *sum = head.effort + effort;
    }
}

/// The least of a block's values.
#[inline]
pub(super) fn least(values: &Column) -> f64 {
    values.iter().fold(f64::INFINITY, |a, &b| if b < a { b } else { a })
}

/// The greatest of a block's values.
#[inline]
pub(super) fn greatest(values: &Column) -> f64 {
    values.iter().fold(f64::NEG_INFINITY, |a, &b| if b > a { b } else { a })
}
