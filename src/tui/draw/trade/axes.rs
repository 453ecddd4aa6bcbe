//! Frame of the trade picture: scales, ticks, bounds and the lines that lead to the selected mix.
//!
//! Figures of the layout are choices.

use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use crate::plot::{Dots, Grain, Scale, Stroke, ticks};
use crate::tui::draw::pen::{Pen, cut, decimals};
use crate::tui::{Look, Role, Symbols};
use crate::units::Dimension;

use super::marks::Taken;
use super::{TradePicture, TradePoint};

/// Columns of the numbers up the side, with the line of the axis.
pub(super) const SIDE: usize = 6;
/// Rows over the plot and under it.
pub(super) const OVER: usize = 2;
const UNDER: usize = 2;
/// Least columns and rows of a plot.
const LEAST: (usize, usize) = (12, 3);
/// Least width of the scales, units shown and mg/L (choice): noise must not fill the picture.
const LEAST_WIDTH: f64 = 1.0;
/// A bound or a floor this near the mixes, as a share of what they span, is drawn in (choice).
const NEAR: f64 = 0.35;
/// Cells a tick wants along and up.
const TICK_COLS: usize = 8;
const TICK_ROWS: usize = 2;

/// Where the plot lies and its scales: temperature in the unit shown, oxygen in mg/L.
pub(super) struct Frame {
    pub(super) cols: usize,
    pub(super) rows: usize,
    x: Scale,
    y: Option<Scale>,
    /// The last row holds mixes whose oxygen is unknown.
    unknown_row: bool,
    width: usize,
}

impl Frame {
    /// `None` where there is nothing to draw or no room for it.
    pub(super) fn of(picture: &TradePicture, area: Rect) -> Option<Self> {
        let (width, height) = (usize::from(area.width), usize::from(area.height));
        let (cols, rows) = (width.checked_sub(SIDE)?, height.checked_sub(OVER + UNDER)?);
        if cols < LEAST.0 || rows < LEAST.1 {
            return None;
        }
        let temperatures: Vec<f64> = picture.points().map(|p| picture.shown(p.temperature_c)).collect();
        let bounds = [picture.low_c, picture.preferred_c, picture.high_c];
        let bounds = bounds.into_iter().flatten().map(|c| picture.shown(c));
        let x = scale(&temperatures, bounds, false, ticks_in(cols, TICK_COLS))?;
        let oxygens: Vec<f64> = picture.points().filter_map(|p| p.oxygen_mg_l).collect();
        let unknown_row = !oxygens.is_empty() && oxygens.len() < temperatures.len();
        let y = scale(&oxygens, picture.floor_mg_l.into_iter(), true, ticks_in(rows, TICK_ROWS));
        Some(Self { cols, rows, x, y, unknown_row, width })
    }

    /// Column of a temperature on the picture.
    pub(super) fn col(&self, picture: &TradePicture, c: f64) -> usize {
        SIDE + self.x.cell(picture.shown(c), self.cols).unwrap_or(0)
    }

    /// Row of a point; without any oxygen that of its place in the list of `count`.
    pub(super) fn row(&self, point: &TradePoint, (place, count): (usize, usize)) -> usize {
        let Some(y) = self.y else {
            return OVER + (place * self.rows / count.max(1)).min(self.rows - 1);
        };
        match point.oxygen_mg_l {
            Some(oxygen) => OVER + self.up(&y, oxygen),
            None => OVER + self.rows - 1,
        }
    }

    /// Points of known oxygen joined in their order; `None` without an axis of oxygen.
    pub(super) fn line(&self, picture: &TradePicture, points: &[&TradePoint], grain: Grain) -> Option<Dots> {
        let at = |p: &&TradePoint| Some((picture.shown(p.temperature_c), p.oxygen_mg_l?));
        let points: Vec<(f64, f64)> = points.iter().filter_map(at).collect();
        let mut dots = Dots::new(grain, self.cols, self.plot_rows());
        dots.curve(0, Stroke::Thin, &points, &self.x, &self.y?);
        Some(dots)
    }

    /// Rows of the plot that the scale of oxygen spans.
    fn plot_rows(&self) -> usize {
        self.rows - usize::from(self.unknown_row)
    }

    fn up(&self, scale: &Scale, oxygen: f64) -> usize {
        let rows = self.plot_rows();
        rows - 1 - scale.cell(oxygen, rows).unwrap_or(0)
    }

    /// Draws everything but the mixes, which will take what is `taken`.
    pub(super) fn draw(&self, picture: &TradePicture, taken: &[Taken], pen: &mut Pen, look: Look) {
        let ascii = look.symbols == Symbols::Ascii;
        self.heading(picture, pen);
        self.lead(picture, pen, ascii);
        self.bounds(picture, pen, ascii);
        self.floor(picture, taken, pen, ascii);
        self.side(picture, pen, ascii);
        self.foot(picture, pen, ascii);
        self.led(picture, pen);
    }

    fn heading(&self, picture: &TradePicture, pen: &mut Pen) {
        let said = picture.selected_words();
        pen.put(0, 0, &said, Role::Strong);
        let room = self.width.saturating_sub(said.width() + 2);
        let mut legend = Vec::new();
        if self.y.is_none() {
            let short = "oxygen not measured";
            let full = "oxygen not measured: temperature alone";
            legend.push(if full.len() <= room { full } else { short });
        }
        if picture.of_day {
            legend.push("means of the day");
        }
        if picture.now.is_some() {
            legend.push("N now");
        }
        if self.y.is_some() && !picture.unbeaten.is_empty() {
            legend.push("o unbeaten");
        }
        while legend.join(", ").len() > room && legend.len() > 1 {
            legend.pop();
        }
        let role = if self.y.is_none() { Role::Warn } else { Role::Quiet };
        pen.put_before(self.width, 0, &cut(&legend.join(", "), room), role);
    }

    /// Bounds of the range as lines with their numbers over them; one beyond the picture points out of it.
    fn bounds(&self, picture: &TradePicture, pen: &mut Pen, ascii: bool) {
        let (bound, preferred) = if ascii { ("|", ":") } else { ("│", "┊") };
        let mut taken: Vec<(usize, usize)> = Vec::new();
        if self.y.is_some() {
            pen.put_before(SIDE - 1, 1, "mg/L", Role::Quiet);
        }
        let all = [
            (picture.low_c, "from ", bound),
            (picture.high_c, "to ", bound),
            (picture.preferred_c, "P ", preferred),
        ];
        // a range that lies all on one side is named whole: one of its ends alone would read as reaching here
        let aside = match (picture.low_c, picture.high_c) {
            (Some(low), Some(high)) if picture.shown(high) < self.x.low() => Some((low, high, true)),
            (Some(low), Some(high)) if picture.shown(low) > self.x.high() => Some((low, high, false)),
            _ => None,
        };
        if let Some((low, high, left)) = aside {
            let [low, high] = [low, high].map(|c| picture.temperature(c));
            let text =
                if left { format!("<range {low} to {high}") } else { format!("range {low} to {high}>") };
            let start = if left { SIDE } else { (SIDE + self.cols).saturating_sub(text.len()).max(SIDE) };
            pen.put(start, 1, &text, Role::Range);
            return;
        }
        for (value, word, line) in all {
            let Some(c) = value else { continue };
            let number = picture.temperature(c);
            let at = picture.shown(c);
            let (below, above) = (at < self.x.low(), at > self.x.high());
            let (open, close) = (if below { "<" } else { "" }, if above { ">" } else { "" });
            let col = self.col(picture, c);
            if !below && !above {
                (0..self.rows).for_each(|row| pen.put(col, OVER + row, line, Role::Range));
            }
            let place = |text: &str| {
                let last = (SIDE + self.cols).saturating_sub(text.len()).max(SIDE);
                let places = [text.len() / 2, 0, text.len() - 1].map(|back| col.saturating_sub(back));
                let free = |start: &usize| taken.iter().all(|t| start + text.len() < t.0 || t.1 < *start);
                places.into_iter().map(|start| start.clamp(SIDE, last)).find(free)
            };
            let texts = [format!("{open}{word}{number}{close}"), format!("{open}{number}{close}")];
            let said = texts.iter().find_map(|text| Some((place(text)?, text)));
            if let Some((start, text)) = said.filter(|s| s.1.starts_with(word) || word != "P ") {
                pen.put(start, 1, text, Role::Range);
                taken.push((start, start + text.len()));
            } else if word == "P " && !below && !above {
                pen.put(col, OVER, "P", Role::Range);
            }
        }
    }

    /// The floor as a line, its label where no mix stands.
    fn floor(&self, picture: &TradePicture, taken: &[Taken], pen: &mut Pen, ascii: bool) {
        let (Some(floor), Some(y)) = (picture.floor_mg_l, self.y) else { return };
        let end = SIDE + self.cols;
        if floor < y.low() {
            pen.put_before(end, OVER + self.plot_rows() - 1, &format!("floor {floor:.1} below"), Role::Range);
        } else if floor > y.high() {
            pen.put_before(end, OVER, &format!("floor {floor:.1} above"), Role::Range);
        } else {
            let row = OVER + self.up(&y, floor);
            (SIDE..end).for_each(|col| pen.put(col, row, if ascii { "-" } else { "─" }, Role::Range));
            let label = format!(" floor {floor:.1} ");
            let right = end.saturating_sub(label.len());
            let rows = [row, row + 1, row.saturating_sub(1)];
            let places = rows.into_iter().flat_map(|row| [(right, row), (SIDE + 1, row)]);
            let inside = |row: usize| (OVER..OVER + self.rows).contains(&row);
            let free = |&(col, row): &(usize, usize)| {
                inside(row)
                    && taken.iter().all(|t| t.row != row || col + label.len() <= t.from || t.to <= col)
            };
            let (col, row) = places.into_iter().find(free).unwrap_or((right, row));
            pen.put(col, row, &label, Role::Range);
        }
    }

    /// The axis of oxygen.
    fn side(&self, picture: &TradePicture, pen: &mut Pen, ascii: bool) {
        for row in 0..self.rows {
            pen.put(SIDE - 1, OVER + row, if ascii { "|" } else { "│" }, Role::Quiet);
        }
        let Some(y) = self.y else { return };
        let ticks = ticks(y.low(), y.high(), ticks_in(self.plot_rows(), TICK_ROWS));
        let decimals = decimals(&ticks).max(1);
        let selected = picture.selected().and_then(|(_, p)| p.oxygen_mg_l).map(|o| format!("{o:.1}"));
        for value in ticks {
            let row = OVER + self.up(&y, value);
            let text = format!("{value:.decimals$}");
            // beside the value of the selected mix the same number would stand twice
            if selected.as_ref() != Some(&text) {
                pen.put_before(SIDE - 1, row, &(text + " "), Role::Quiet);
            }
            pen.put(SIDE - 1, row, if ascii { "+" } else { "┤" }, Role::Quiet);
        }
        if self.unknown_row {
            pen.put_before(SIDE - 1, OVER + self.rows - 1, " O2? ", Role::Warn);
        }
    }

    /// The axis of temperature; the value of the selected mix rules out the ticks it would touch.
    fn foot(&self, picture: &TradePicture, pen: &mut Pen, ascii: bool) {
        let (line, tick, corner) = if ascii { ("-", "+", "+") } else { ("─", "┬", "└") };
        let row = OVER + self.rows;
        pen.put(SIDE - 1, row, corner, Role::Quiet);
        (0..self.cols).for_each(|col| pen.put(SIDE + col, row, line, Role::Quiet));
        let unit = picture.system.unit(Dimension::Temperature).symbol();
        pen.put(0, row + 1, unit, Role::Quiet);
        let end = SIDE + self.cols;
        let mut taken: Vec<(usize, usize)> = Vec::new();
        let mut label = |pen: &mut Pen, col: usize, text: &str, role: Role| {
            let start = col.saturating_sub(text.len() / 2).clamp(2, end.saturating_sub(text.len()).max(2));
            let stop = start + text.len();
            if taken.iter().all(|&(from, to)| stop < from || to < start) {
                pen.put(start, row + 1, text, role);
                taken.push((start, stop));
            }
        };
        if let Some((_, point)) = picture.selected() {
            let col = self.col(picture, point.temperature_c);
            label(pen, col, &picture.temperature(point.temperature_c), Role::Chosen);
        }
        let ticks = ticks(self.x.low(), self.x.high(), ticks_in(self.cols, TICK_COLS));
        let decimals = decimals(&ticks);
        for value in ticks {
            let col = SIDE + self.x.cell(value, self.cols).unwrap_or(0);
            pen.put(col, row, tick, Role::Quiet);
            label(pen, col, &format!("{value:.decimals$}"), Role::Quiet);
        }
    }

    /// Lines from the selected mix to both axes.
    fn lead(&self, picture: &TradePicture, pen: &mut Pen, ascii: bool) {
        let Some((i, point)) = picture.selected() else { return };
        let (along, down) = if ascii { (".", ".") } else { ("╌", "╎") };
        let col = self.col(picture, point.temperature_c);
        let row = self.row(point, picture.place(i));
        (row + 1..OVER + self.rows).for_each(|r| pen.put(col, r, down, Role::Tried));
        if self.y.is_some() && point.oxygen_mg_l.is_some() {
            (SIDE..col).for_each(|c| pen.put(c, row, along, Role::Tried));
        }
    }

    /// The values they lead to, on the axes.
    fn led(&self, picture: &TradePicture, pen: &mut Pen) {
        let Some((i, point)) = picture.selected() else { return };
        let (col, row) = (self.col(picture, point.temperature_c), self.row(point, picture.place(i)));
        pen.put(col, OVER + self.rows, "^", Role::Tried);
        if let (Some(_), Some(oxygen)) = (self.y, point.oxygen_mg_l) {
            pen.put(0, row, "     ", Role::Plain);
            pen.put_before(SIDE - 2, row, &format!("{oxygen:.1}"), Role::Chosen);
            pen.put(SIDE - 1, row, ">", Role::Tried);
        }
    }
}

fn ticks_in(cells: usize, each: usize) -> u32 {
    u32::try_from(cells / each).unwrap_or(9).clamp(3, 9)
}

/// A scale over values and the bounds near them.
fn scale(values: &[f64], bounds: impl Iterator<Item = f64>, from_zero: bool, most: u32) -> Option<Scale> {
    let low = values.iter().copied().reduce(f64::min)?;
    let high = values.iter().copied().reduce(f64::max)?;
    let near = NEAR * (high - low).max(LEAST_WIDTH);
    let near: Vec<f64> = bounds.filter(|b| low - near <= *b && *b <= high + near).collect();
    let low = near.iter().copied().fold(low, f64::min);
    let high = near.iter().copied().fold(high, f64::max);
    let scale = Scale::round(low, high, LEAST_WIDTH, most);
    if from_zero && low >= 0.0 && scale.low() < 0.0 {
        return Some(Scale::round(0.0, high.max(LEAST_WIDTH), 0.0, most));
    }
    Some(scale)
}

impl TradePicture {
    /// Place of a ranked mix, or of the setting now, among the rows of a picture without oxygen.
    pub(super) fn place(&self, mix: usize) -> (usize, usize) {
        (mix + usize::from(self.now.is_some()), self.count())
    }

    pub(super) fn count(&self) -> usize {
        self.mixes.len() + usize::from(self.now.is_some())
    }

    /// What can be said without a plot.
    pub(super) fn in_words(&self, pen: &mut Pen, area: Rect) {
        let width = usize::from(area.width);
        let said = if self.mixes.is_empty() && self.now.is_none() {
            "no mix to draw".to_owned()
        } else {
            self.selected_words()
        };
        pen.put(0, 0, &cut(&said, width), Role::Strong);
        if let Some(now) = &self.now {
            pen.put(0, 1, &cut(&format!("now {}", self.words(now)), width), Role::Now);
        }
        if self.airless() {
            pen.put(0, 2, &cut("oxygen not measured", width), Role::Warn);
        }
    }
}
