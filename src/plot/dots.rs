//! Curves drawn onto cells finer than a character.

use super::Scale;

/// How finely a cell is divided.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Grain {
    /// Braille dots, two by four.
    Braille,
    /// Half blocks, one by two.
    Block,
    /// One mark, `*`.
    Ascii,
}

impl Grain {
    /// Dots of a cell, across and down.
    pub fn dots(self) -> (usize, usize) {
        match self {
            Self::Braille => (2, 4),
            Self::Block => (1, 2),
            Self::Ascii => (1, 1),
        }
    }

    fn bit(self, across: usize, down: usize) -> u8 {
        match (self, across, down) {
            // the fourth row came to the letters late, and its dots stand last
            (Self::Braille, _, 3) => 0x40 << across,
            (Self::Braille, _, _) => 1 << (down + 3 * across),
            (Self::Block | Self::Ascii, _, _) => 1 << down,
        }
    }

    fn glyph(self, bits: u8) -> char {
        match (self, bits) {
            (Self::Braille, _) => char::from_u32(0x2800 + u32::from(bits)).unwrap_or(' '),
            (Self::Block, 1) => '▀',
            (Self::Block, 2) => '▄',
            (Self::Block, _) => '█',
            (Self::Ascii, _) => '*',
        }
    }
}

/// How a curve is drawn.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Stroke {
    /// One dot wide.
    Thin,
    /// Two dots wide where a cell has them.
    Heavy,
    /// Two dots wide and high where a cell has more than two.
    Broad,
    /// Every second dot.
    Dotted,
}

/// What a cell shows.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Spot {
    /// Its character.
    pub glyph: char,
    /// The curve that drew there last.
    pub curve: usize,
    /// Whether another curve drew there too.
    pub shared: bool,
}

#[derive(Debug, Clone, Copy, Default)]
struct Cell {
    bits: u8,
    curve: usize,
    shared: bool,
}

/// A grid of cells onto which several curves are drawn; curves that meet in a cell merge their dots.
#[derive(Debug, Clone)]
pub struct Dots {
    grain: Grain,
    columns: usize,
    rows: usize,
    cells: Vec<Cell>,
}

impl Dots {
    /// An empty grid of so many cells.
    pub fn new(grain: Grain, columns: usize, rows: usize) -> Self {
        Self { grain, columns, rows, cells: vec![Cell::default(); columns * rows] }
    }

    /// Draws a line through points (x to the right, y upward), unbroken. A point that is no number parts it; what
    /// lies outside the scales is cut off.
    pub fn curve(&mut self, curve: usize, stroke: Stroke, points: &[(f64, f64)], x: &Scale, y: &Scale) {
        let (across, down) = self.size();
        let whole = Scale::new(0.0, 1.0);
        let at = |share: f64, cells| whole.and_then(|s| s.cell(share, cells));
        let mut last = None;
        let mut drawn = 0_usize;
        for i in 0..points.len() {
            let share = |i: usize| points.get(i).and_then(|p| x.share(p.0).zip(y.share(p.1)));
            let Some(from) = share(i) else { continue };
            // the last point of a stretch stands for itself, so that a lone one shows
            let to = share(i + 1).unwrap_or(from);
            let Some(ends) = clipped(from, to) else { continue };
            let dots = ends.map(|(x, y)| at(x, across).zip(at(1.0 - y, down)));
            let [Some(from), Some(to)] = dots else { return };
            let steps = from.0.abs_diff(to.0).max(from.1.abs_diff(to.1)).max(1);
            for k in 0..=steps {
                let between = |a: usize, b: usize| (a * (steps - k) + b * k + steps / 2) / steps;
                let dot = (between(from.0, to.0), between(from.1, to.1));
                if last == Some(dot) {
                    continue;
                }
                last = Some(dot);
                drawn += 1;
                if stroke == Stroke::Dotted && drawn.is_multiple_of(2) {
                    continue;
                }
                self.set(curve, dot);
                if stroke == Stroke::Heavy && self.grain.dots().0 > 1 {
                    self.set(curve, (inside(dot.0, across), dot.1));
                }
                if stroke == Stroke::Broad && self.grain.dots().1 > 2 {
                    let (beside, below) = (inside(dot.0, across), inside(dot.1, down));
                    for dot in [(beside, dot.1), (dot.0, below), (beside, below)] {
                        self.set(curve, dot);
                    }
                }
            }
        }
    }

    /// Fills every row of dots from the left; `length` says how far at a share of the height, 0 at the foot and 1 at
    /// the top. Whatever is above 0 shows.
    pub fn fill(&mut self, curve: usize, length: impl Fn(f64) -> f64) {
        let (across, down) = self.size();
        for dot in 0..down {
            let share = length(1.0 - (dot as f64 + 0.5) / down as f64);
            let full = (0..across)
                .take_while(|&k| share > 0.0 && (k == 0 || share * across as f64 >= k as f64 + 0.5));
            for k in full {
                self.set(curve, (k, dot));
            }
        }
    }

    /// What a cell shows; `None` where nothing was drawn.
    pub fn spot(&self, column: usize, row: usize) -> Option<Spot> {
        let cell =
            self.cells.get(row * self.columns + column).filter(|c| column < self.columns && c.bits > 0)?;
        Some(Spot { glyph: self.grain.glyph(cell.bits), curve: cell.curve, shared: cell.shared })
    }

    /// Dots of the grid, across and down.
    fn size(&self) -> (usize, usize) {
        let (across, down) = self.grain.dots();
        (self.columns * across, self.rows * down)
    }

    fn set(&mut self, curve: usize, dot: (usize, usize)) {
        let (across, down) = self.grain.dots();
        if let Some(cell) = self.cells.get_mut(dot.1 / down * self.columns + dot.0 / across) {
            cell.shared |= cell.bits > 0 && cell.curve != curve;
            cell.bits |= self.grain.bit(dot.0 % across, dot.1 % down);
            cell.curve = curve;
        }
    }
}

/// The dot after one of so many; the one before it where that is the last.
fn inside(dot: usize, dots: usize) -> usize {
    if dot + 1 < dots { dot + 1 } else { dot.saturating_sub(1) }
}

/// The part of a line inside the unit square, after Liang and Barsky, "A new concept and method for line clipping",
/// 1984 (recalled).
fn clipped(from: (f64, f64), to: (f64, f64)) -> Option<[(f64, f64); 2]> {
    let (dx, dy) = (to.0 - from.0, to.1 - from.1);
    let (mut enters, mut leaves) = (0.0_f64, 1.0_f64);
    for (towards, room) in [(-dx, from.0), (dx, 1.0 - from.0), (-dy, from.1), (dy, 1.0 - from.1)] {
        if towards < 0.0 {
            enters = enters.max(room / towards);
        } else if towards > 0.0 {
            leaves = leaves.min(room / towards);
        } else if room < 0.0 {
            return None;
        }
    }
    let at = |t: f64| (from.0 + t * dx, from.1 + t * dy);
    (enters <= leaves).then(|| [at(enters), at(leaves)])
}

#[cfg(test)]
mod tests {
    use super::*;

    fn unit() -> Scale {
        Scale::new(0.0, 1.0).unwrap()
    }

    fn text(dots: &Dots) -> Vec<String> {
        let line = |row| (0..dots.columns).map(|c| dots.spot(c, row).map_or(' ', |s| s.glyph)).collect();
        (0..dots.rows).map(line).collect()
    }

    fn drawn(grain: Grain, stroke: Stroke, points: &[(f64, f64)]) -> Vec<String> {
        let mut dots = Dots::new(grain, 4, 2);
        dots.curve(0, stroke, points, &unit(), &unit());
        text(&dots)
    }

    #[test]
    fn scenario_a_diagonal_in_every_grain() {
        let line = [(0.0, 1.0), (1.0, 0.0)];
        assert_eq!(drawn(Grain::Braille, Stroke::Thin, &line), ["⠑⢄  ", "  ⠑⢄"]);
        assert_eq!(drawn(Grain::Block, Stroke::Thin, &line), ["▀▄  ", "  ▀▄"]);
        assert_eq!(drawn(Grain::Ascii, Stroke::Thin, &line), ["**  ", "  **"]);
        assert_eq!(drawn(Grain::Braille, Stroke::Heavy, &[(0.0, 1.0), (0.0, 0.0)]), ["⣿   ", "⣿   "]);
        assert_eq!(drawn(Grain::Braille, Stroke::Broad, &[(0.0, 0.7), (1.0, 0.7)]), ["⣤⣤⣤⣤", "    "]);
        assert_eq!(drawn(Grain::Braille, Stroke::Dotted, &[(0.0, 1.0), (0.0, 0.0)]), ["⠅   ", "⠅   "]);
    }

    #[test]
    fn scenario_what_is_no_number_parts_a_curve_and_what_is_outside_is_cut() {
        let parted = [(0.1, 0.9), (f64::NAN, 0.5), (0.9, 0.9)];
        assert_eq!(drawn(Grain::Ascii, Stroke::Thin, &parted), ["*  *", "    "]);
        assert_eq!(drawn(Grain::Ascii, Stroke::Thin, &[(-1.0, 0.9), (2.0, 0.9)]), ["****", "    "]);
        assert_eq!(drawn(Grain::Ascii, Stroke::Thin, &[(-1.0, 0.9), (2.0, 3.0)]), ["    ", "    "]);
    }

    #[test]
    fn scenario_curves_that_meet_merge_and_the_last_is_remembered() {
        let mut dots = Dots::new(Grain::Braille, 1, 1);
        dots.curve(3, Stroke::Thin, &[(0.0, 1.0), (0.0, 0.0)], &unit(), &unit());
        assert_eq!(dots.spot(0, 0), Some(Spot { glyph: '⡇', curve: 3, shared: false }));
        dots.curve(5, Stroke::Thin, &[(1.0, 1.0), (1.0, 0.0)], &unit(), &unit());
        assert_eq!(dots.spot(0, 0), Some(Spot { glyph: '⣿', curve: 5, shared: true }));
        assert_eq!(dots.spot(1, 0), None);
    }

    #[test]
    fn scenario_a_filled_shape_shows_whatever_is_above_zero() {
        let mut dots = Dots::new(Grain::Ascii, 4, 4);
        dots.fill(0, |height| if height > 0.75 { 0.0 } else { (height - 0.125) / 0.5 });
        assert_eq!(text(&dots), ["    ", "****", "**  ", "    "]);
        dots.fill(0, |_| 1e-9);
        assert_eq!(text(&dots)[3], "*   ");
    }

    /// Dots of a drawn line by brute force from its characters.
    fn set(dots: &Dots) -> Vec<(usize, usize)> {
        let (across, down) = dots.grain.dots();
        let (columns, rows) = dots.size();
        let on = |x: usize, y: usize| {
            let cell = dots.cells[y / down * dots.columns + x / across];
            cell.bits & dots.grain.bit(x % across, y % down) > 0
        };
        (0..rows).flat_map(|y| (0..columns).map(move |x| (x, y))).filter(|&(x, y)| on(x, y)).collect()
    }

    #[test]
    fn law_lines_are_unbroken_between_their_ends() {
        for grain in [Grain::Braille, Grain::Block, Grain::Ascii] {
            for k in 0..200_usize {
                let spread = |n: usize| (k * n % 97) as f64 / 96.0;
                let mut dots = Dots::new(grain, 9, 7);
                let ends = [(spread(31), spread(17)), (spread(57), spread(83))];
                dots.curve(0, Stroke::Thin, &ends, &unit(), &unit());
                let mut left = set(&dots);
                let mut reached = vec![left.pop().unwrap()];
                while let Some((x, y)) = reached.pop() {
                    let near = |d: &(usize, usize)| d.0.abs_diff(x) <= 1 && d.1.abs_diff(y) <= 1;
                    reached.extend(left.iter().copied().filter(near));
                    left.retain(|d| !near(d));
                }
                assert_eq!(left, [], "{grain:?} {ends:?}");
                let (columns, rows) = dots.size();
                for (x, y) in ends {
                    let dot = (unit().cell(x, columns).unwrap(), unit().cell(1.0 - y, rows).unwrap());
                    assert!(set(&dots).contains(&dot), "{grain:?} {ends:?}");
                }
            }
        }
    }
}
