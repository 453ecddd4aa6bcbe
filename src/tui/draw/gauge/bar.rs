//! The bars of a gauge on their axis.
//!
//! Figures of the layout are choices.

use crate::plot::{Scale, ticks};
use crate::tui::draw::pen::{Pen, decimals};
use crate::tui::{Look, Role, Symbols};
use crate::units::{Unit, figure};

use super::{Attainable, Gauge, Held, Reading};

/// Least width of an axis, display units (choice): noise must not fill it.
const LEAST_WIDTH: f64 = 2.0;
/// Cells a tick with its label wants.
const TICK_CELLS: usize = 4;
/// What is attainable widens the axis to no more than so many times what it holds without it (choice).
const WIDENED: f64 = 2.0;

/// What a bar shows.
#[derive(Debug, Clone, Copy)]
pub(super) enum Bar {
    /// The range of a target, by its index.
    Range(usize),
    /// A value and its band.
    Reading(Reading, Role),
    /// The ends of what is attainable.
    Attainable(Option<[f64; 2]>, Role),
}

/// The axis of a gauge, in display units.
pub(super) struct Axis {
    scale: Scale,
    ticks: Vec<f64>,
    cells: usize,
}

impl Gauge {
    pub(super) fn unit(&self) -> Unit {
        self.system.unit(self.dimension)
    }

    /// A value as the text report writes it.
    pub(super) fn figure(&self, value: f64) -> String {
        figure(value, self.unit(), 1)
    }

    /// A distance in the unit shown.
    pub(super) fn difference(&self, by: f64) -> f64 {
        self.unit().of_difference().from_si(by)
    }
}

impl Held {
    /// What arrives at its point, SI; `None` at the dam, where the rows of the releases tell it.
    fn arrives(&self) -> Option<f64> {
        self.value.filter(|_| self.point.is_some())
    }

    /// Ends of the range that the buffer leaves.
    fn kept(&self) -> [Option<f64>; 2] {
        [self.low.map(|v| v + self.buffer), self.high.map(|v| v - self.buffer)]
    }
}

impl Axis {
    /// The axis over ranges, values, bands and, where that does not press the rest together, what is attainable.
    /// `None` where there is no value at all or no cell.
    pub(super) fn of(gauge: &Gauge, cells: usize) -> Option<Self> {
        let ends = |h: &Held| [h.low, h.high, h.preferred, h.arrives()];
        let held = gauge.targets.iter().flat_map(ends).flatten();
        let read = [Some(gauge.tried), gauge.now].into_iter().flatten();
        let read = read.flat_map(|r| r.value.into_iter().chain(r.band.into_iter().flatten()));
        let unit = gauge.unit();
        let values: Vec<f64> = held.chain(read).map(|v| unit.from_si(v)).collect();
        let mut low = values.iter().copied().reduce(f64::min)?;
        let mut high = values.iter().copied().reduce(f64::max)?;
        if let Attainable::Known(ends) | Attainable::Before(ends) = gauge.attainable {
            let ends = ends.map(|v| unit.from_si(v));
            let (wider_low, wider_high) = (low.min(ends[0]), high.max(ends[1]));
            if wider_high - wider_low <= WIDENED * (high - low).max(LEAST_WIDTH) {
                (low, high) = (wider_low, wider_high);
            }
        }
        let most = u32::try_from(cells / TICK_CELLS).unwrap_or(9).clamp(3, 9);
        let mut scale = Scale::round(low, high, LEAST_WIDTH, most);
        if low >= 0.0 && scale.low() < 0.0 {
            scale = Scale::round(0.0, high.max(LEAST_WIDTH), 0.0, most);
        }
        let ticks = ticks(scale.low(), scale.high(), most);
        (cells > 0).then_some(Self { scale, ticks, cells })
    }

    /// Cell of a value; `Err` with the nearest one where it lies beyond the axis.
    fn cell(&self, value: f64) -> Result<usize, usize> {
        let cell = self.scale.cell(value, self.cells).unwrap_or(0);
        let slack = 1e-9 * (self.scale.high() - self.scale.low());
        let on = self.scale.low() - slack <= value && value <= self.scale.high() + slack;
        if on { Ok(cell) } else { Err(cell) }
    }

    fn nearest(&self, value: f64) -> usize {
        self.cell(value).unwrap_or_else(|edge| edge)
    }

    /// Draws a bar from a place on.
    pub(super) fn paint(&self, pen: &mut Pen, at: (usize, usize), gauge: &Gauge, bar: &Bar, look: Look) {
        let ascii = look.symbols == Symbols::Ascii;
        let unit = gauge.unit();
        let cell = |v: f64| self.nearest(unit.from_si(v));
        let (x, row) = at;
        let mut put = |cell: usize, text: &str, role: Role| pen.put(x + cell, row, text, role);
        match *bar {
            Bar::Range(index) => {
                let Some(held) = gauge.targets.get(index) else { return };
                let (first, last) = (held.low.map_or(0, cell), held.high.map_or(self.cells - 1, cell));
                let [kept_low, kept_high] = held.kept().map(|end| end.map(cell));
                let (kept, spare) = if ascii { ("=", "-") } else { ("═", "╌") };
                for at in first..=last {
                    let inside = kept_low.is_none_or(|low| low <= at) && kept_high.is_none_or(|h| at <= h);
                    put(at, if inside { kept } else { spare }, Role::Range);
                }
                put(first, if held.low.is_some() { "[" } else { "<" }, Role::Range);
                put(last, if held.high.is_some() { "]" } else { ">" }, Role::Range);
                if let Some(preferred) = held.preferred {
                    put(cell(preferred), "P", Role::Range);
                }
                if let Some(arrives) = held.arrives() {
                    put(cell(arrives), "o", Role::Tried);
                }
            }
            Bar::Reading(reading, role) => {
                if let Some(band) = reading.band {
                    let [first, last] = band.map(cell);
                    let (line, ends) = if ascii { ("-", ["|", "|"]) } else { ("─", ["├", "┤"]) };
                    (first..=last).for_each(|at| put(at, line, role));
                    put(first, ends[0], role);
                    put(last, ends[1], role);
                }
                if let Some(value) = reading.value {
                    put(cell(value), "o", role);
                }
            }
            Bar::Attainable(Some(ends), role) => {
                let [first, last] = ends.map(cell);
                (first..=last).for_each(|at| put(at, if ascii { "-" } else { "─" }, role));
                put(first, "<", role);
                put(last, ">", role);
                // an end beyond the axis stands at its edge with its number
                let beyond = |v: f64| self.cell(unit.from_si(v)).is_err();
                if beyond(ends[0]) {
                    put(first, &format!("<{}", gauge.figure(ends[0])), role);
                }
                if beyond(ends[1]) {
                    let number = format!("{}>", gauge.figure(ends[1]));
                    put((last + 1).saturating_sub(number.len()), &number, role);
                }
            }
            Bar::Attainable(None, _) => {}
        }
        if matches!(bar, Bar::Range(_)) {
            return;
        }
        // the bounds of the governing range run down through the other rows; those of a point say nothing of a release
        let at_dam = gauge.targets.iter().find(|held| held.point.is_none());
        for end in at_dam.map(Held::kept).into_iter().flatten().flatten() {
            pen.fill(x + cell(end), row, if ascii { ":" } else { "┊" }, Role::Range);
        }
    }

    /// The line under the bars, with a mark at each tick.
    pub(super) fn rule(&self, pen: &mut Pen, (x, row): (usize, usize), look: Look) {
        let (line, tick) = if look.symbols == Symbols::Ascii { ("-", "+") } else { ("─", "┴") };
        (0..self.cells).for_each(|cell| pen.put(x + cell, row, line, Role::Quiet));
        for value in &self.ticks {
            pen.put(x + self.nearest(*value), row, tick, Role::Quiet);
        }
    }

    /// Numbers of the ticks, each under its cell: of every one, or of every second or third, so that none touch.
    pub(super) fn labels(&self, pen: &mut Pen, (x, row): (usize, usize)) {
        let decimals = decimals(&self.ticks);
        let labels: Vec<(usize, String)> = self
            .ticks
            .iter()
            .map(|value| {
                let text = format!("{value:.decimals$}");
                let last = self.cells.saturating_sub(text.len());
                (self.nearest(*value).saturating_sub(text.len() / 2).min(last), text)
            })
            .collect();
        let apart = |every: &usize| {
            let kept: Vec<&(usize, String)> = labels.iter().step_by(*every).collect();
            kept.windows(2).all(|pair| pair[0].0 + pair[0].1.len() < pair[1].0)
        };
        let every = (1..labels.len()).find(apart).unwrap_or(labels.len().max(1));
        for (at, text) in labels.iter().step_by(every) {
            pen.put(x + at, row, text, Role::Quiet);
        }
    }
}
