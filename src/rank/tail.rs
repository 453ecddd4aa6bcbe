//! The parts that stand alone, taken together: rows by the share they take, in blocks judged side by side.

use super::choices::{Choice, Choices, Lanes, Levels};
use super::goal::Day;

/// Rows of a block (choice): enough for side by side, few enough that their water is alike.
pub(super) const ROWS: usize = 16;

/// Values of the rows of a block; rows that are not there repeat the last.
type Column = [f64; ROWS];

/// Some rows that take one share and whose water is alike.
#[derive(Debug, Clone)]
pub(super) struct Block {
    /// Number of rows.
    pub(super) rows: usize,
    /// Each lane of the rows.
    lanes: Vec<Column>,
    /// Least and greatest of each lane.
    spans: Vec<[f64; 2]>,
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
        let mut ideas: Vec<usize> = rows.iter().map(|r| r.idea).collect();
        ideas.sort_unstable();
        ideas.dedup();
        Some(Self {
            rows: rows.len(),
            spans: columns.iter().map(span).collect(),
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
    pub(super) fn span<const B: usize>(&self, head: &[f64], levels: &Levels) -> (Day, f64) {
        let lanes = levels.lanes;
        let ends = |lane: usize| [head[lane] + self.spans[lane][0], head[lane] + self.spans[lane][1]];
        let mut day = Day {
            temperature_c: [[0.0; 2], [f64::NEG_INFINITY; 2], [f64::INFINITY; 2]],
            oxygen_mg_l: [0.0, f64::INFINITY],
            cold_share: 0.0,
            cost: ends(lanes.cost())[0],
            hours: ends(lanes.hours())[0],
        };
        let (mut least_mg_l, mut mean_flow) = (0.0, 0.0);
        for b in 0..B {
            let [flow, heat, oxygen] = [3 * b, 3 * b + 1, 3 * b + 2].map(ends);
            let per = flow.map(|q| 1.0 / q);
            // heat may lie below zero, so either end of the flow can make the least and the greatest
            let low = (heat[0] * per[0]).min(heat[0] * per[1]);
            let high = (heat[1] * per[0]).max(heat[1] * per[1]);
            let weight = if B == 1 { 1.0 } else { levels.weights[b] };
            mean_flow += weight * flow[1];
            least_mg_l += weight * oxygen[0] * per[1];
            day.oxygen_mg_l[0] += weight * oxygen[1] * per[0];
            day.temperature_c[0][0] += weight * low;
            day.temperature_c[0][1] += weight * high;
            if B > 1 {
                day.oxygen_mg_l[1] = day.oxygen_mg_l[1].min(oxygen[1] * per[0]);
                for (end, t) in [low, high].into_iter().enumerate() {
                    day.temperature_c[1][end] = day.temperature_c[1][end].max(t);
                    day.temperature_c[2][end] = day.temperature_c[2][end].min(t);
                }
            }
        }
        day.cold_share = ends(lanes.cold())[0] / mean_flow;
        (day, least_mg_l)
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

/// Days of a block's rows.
#[derive(Debug, Clone)]
pub(super) struct Days {
    /// Time mean, greatest and least temperature, C.
    pub(super) temperature_c: [Column; 3],
    /// Time mean and least oxygen, mg/L.
    pub(super) oxygen_mg_l: [Column; 2],
    cold_share: Column,
    cost: Column,
    hours: Column,
}

impl Default for Days {
    fn default() -> Self {
        let none = [0.0; ROWS];
        Self { temperature_c: [none; 3], oxygen_mg_l: [none; 2], cold_share: none, cost: none, hours: none }
    }
}

impl Days {
    /// Days of a block's rows, with what the head adds to each.
    #[inline]
    pub(super) fn fill<const B: usize>(&mut self, block: &Block, head: &[f64], levels: &Levels) {
        let lanes = levels.lanes;
        let mut mean_flow = [0.0; ROWS];
        for b in 0..B {
            let [flow, heat, oxygen] = [3 * b, 3 * b + 1, 3 * b + 2].map(|lane| &block.lanes[lane]);
            let [head_flow, head_heat, head_oxygen] = [head[3 * b], head[3 * b + 1], head[3 * b + 2]];
            let weight = if B == 1 { 1.0 } else { levels.weights[b] };
            for i in 0..ROWS {
                let flow = head_flow + flow[i];
                let per = 1.0 / flow;
                let t = (head_heat + heat[i]) * per;
                let o = (head_oxygen + oxygen[i]) * per;
                if B == 1 {
                    (self.temperature_c[0][i], self.oxygen_mg_l[0][i], mean_flow[i]) = (t, o, flow);
                    continue;
                }
                let first = b == 0;
                let sum = |so_far: f64, more: f64| if first { weight * more } else { so_far + weight * more };
                mean_flow[i] = sum(mean_flow[i], flow);
                self.temperature_c[0][i] = sum(self.temperature_c[0][i], t);
                self.oxygen_mg_l[0][i] = sum(self.oxygen_mg_l[0][i], o);
                let [_, greatest, least] = &mut self.temperature_c;
                greatest[i] = if first || t > greatest[i] { t } else { greatest[i] };
                least[i] = if first || t < least[i] { t } else { least[i] };
                let least = &mut self.oxygen_mg_l[1][i];
                *least = if first || o < *least { o } else { *least };
            }
        }
        let [cold, cost, hours] = [lanes.cold(), lanes.cost(), lanes.hours()].map(|lane| &block.lanes[lane]);
        let [head_cold, head_cost, head_hours] = [lanes.cold(), lanes.cost(), lanes.hours()].map(|l| head[l]);
        for i in 0..ROWS {
            self.cold_share[i] = (head_cold + cold[i]) / mean_flow[i];
            self.cost[i] = head_cost + cost[i];
            self.hours[i] = head_hours + hours[i];
        }
    }

    #[inline]
    pub(super) fn day(&self, i: usize) -> Day {
        Day {
            temperature_c: self.temperature_c.each_ref().map(|t| [t[i]; 2]),
            oxygen_mg_l: self.oxygen_mg_l.each_ref().map(|o| o[i]),
            cold_share: self.cold_share[i],
            cost: self.cost[i],
            hours: self.hours[i],
        }
    }
}
