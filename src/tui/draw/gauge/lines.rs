//! The lines of a gauge: which there are, which stay where there is little room, and their columns.
//!
//! Figures of the layout are choices.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::report::text;
use unicode_width::UnicodeWidthStr;

use crate::target::Standing;
use crate::tui::draw::pen::{Pen, cut};
use crate::tui::{Look, Role};

use super::bar::{Axis, Bar};
use super::{Attainable, Gauge, Held, Reading};

/// Least cells of a bar beside words in full, and beside shortened words.
const BAR_BESIDE: usize = 20;
const BAR_SHORT: usize = 8;
/// From this worth on a line is detail, for which nothing else is left out.
const DETAIL: u8 = 11;

struct Line {
    /// 0 stays longest.
    worth: u8,
    kind: Kind,
}

enum Kind {
    Title,
    /// Words of a target; whether they hold its name.
    Words(String, Role),
    Bar(Row),
    Rule,
    Ticks,
}

struct Row {
    /// In full, and where it is narrow.
    label: [String; 2],
    words: [String; 2],
    words_role: Role,
    bar: Bar,
}

/// Where label, bar and words of a row stand.
#[derive(Clone, Copy)]
struct Columns {
    label: usize,
    bar: usize,
    /// Words shortened.
    short: bool,
    /// Words over their bar.
    stacked: bool,
}

pub(super) fn rows(gauge: &Gauge, width: u16) -> u16 {
    let lines = lines(gauge, usize::from(width));
    let columns = columns(&lines, usize::from(width), usize::MAX);
    u16::try_from(height(&lines, columns.stacked)).unwrap_or(u16::MAX)
}

pub(super) fn draw(gauge: &Gauge, area: Rect, buf: &mut Buffer, look: Look) {
    let (width, room) = (usize::from(area.width), usize::from(area.height));
    let mut lines = lines(gauge, width);
    let columns = columns(&lines, width, room);
    let ranges = |lines: &[Line]| lines.iter().filter(|l| l.range().is_some()).count();
    let targets = ranges(&lines);
    while height(&lines, columns.stacked) > room {
        let Some(least) = (0..lines.len()).rev().max_by_key(|&i| (lines[i].worth, i)) else { return };
        lines.remove(least);
    }
    let unsaid = targets - ranges(&lines);
    let axis = Axis::of(gauge, columns.bar);
    let mut pen = Pen::new(buf, area, look);
    let mut row = 0;
    let mut named = false;
    for line in &lines {
        match &line.kind {
            Kind::Title => title(&mut pen, gauge, width, row, unsaid),
            Kind::Words(words, role) => pen.put(0, row, words, *role),
            Kind::Bar(bar) => {
                let (label, words) = bar.said(gauge, columns, named);
                pen.put(0, row, &label, Role::Plain);
                let left = if columns.stacked {
                    (label.width() + 1).max(columns.label + 1)
                } else {
                    columns.label + 1 + columns.bar + usize::from(columns.bar > 0)
                };
                pen.put(left, row, whole_words(&words, width.saturating_sub(left)), bar.words_role);
                row += usize::from(columns.stacked);
                if let Some(axis) = &axis {
                    axis.paint(&mut pen, (columns.bar_at(), row), gauge, &bar.bar, look);
                }
            }
            Kind::Rule => axis.iter().for_each(|a| a.rule(&mut pen, (columns.bar_at(), row), look)),
            Kind::Ticks => axis.iter().for_each(|a| a.labels(&mut pen, (columns.bar_at(), row))),
        }
        named = matches!(&line.kind, Kind::Words(..));
        row += 1;
    }
}

impl Columns {
    /// Column the bar begins at.
    fn bar_at(self) -> usize {
        if self.stacked { 0 } else { self.label + 1 }
    }
}

impl Line {
    fn range(&self) -> Option<usize> {
        match self.kind {
            Kind::Bar(Row { bar: Bar::Range(i), .. }) => Some(i),
            _ => None,
        }
    }
}

impl Row {
    /// Label and words as they fit; a range whose name found no line carries it as its label.
    fn said(&self, gauge: &Gauge, columns: Columns, named: bool) -> (String, String) {
        let [full, short] = &self.label;
        let label = match self.bar {
            Bar::Range(i) if !named => {
                gauge.targets.get(i).map_or(full, |held| held.point.as_ref().unwrap_or(&held.name))
            }
            _ if columns.label < full.width() && !columns.stacked => short,
            _ => full,
        };
        let label = if columns.stacked { label.clone() } else { cut(label, columns.label) };
        (label, self.words[usize::from(columns.short)].clone())
    }
}

fn title(pen: &mut Pen, gauge: &Gauge, width: usize, row: usize, unsaid: usize) {
    let heading = format!("{} {}", gauge.title, gauge.unit().symbol());
    pen.put(0, row, &heading, Role::Strong);
    let more = format!("and {unsaid} more target{}", if unsaid == 1 { "" } else { "s" });
    let note = if unsaid > 0 { Some(&more) } else { gauge.note.as_ref() };
    let room = width.saturating_sub(heading.width() + 2);
    if let Some(note) = note.filter(|note| note.width() <= room) {
        pen.put_before(width, row, note, if unsaid > 0 { Role::Warn } else { Role::Quiet });
    }
}

fn height(lines: &[Line], stacked: bool) -> usize {
    let bars = lines.iter().filter(|l| matches!(l.kind, Kind::Bar(_))).count();
    lines.len() + if stacked { bars } else { 0 }
}

/// Columns for the lines: the words in full beside the bar, else over it where there are rows for that, else cut short.
fn columns(lines: &[Line], width: usize, room: usize) -> Columns {
    let rows = || lines.iter().filter_map(|l| if let Kind::Bar(row) = &l.kind { Some(row) } else { None });
    let most = |of: &dyn Fn(&Row) -> usize| rows().map(of).max().unwrap_or(0);
    let beside = |i: usize| {
        let (label, words) = (most(&|r: &Row| r.label[i].width()), most(&|r: &Row| r.words[i].width()));
        (label, width.saturating_sub(label + words + 2))
    };
    let (label, bar) = beside(0);
    if bar >= BAR_BESIDE {
        return Columns { label, bar, short: false, stacked: false };
    }
    let needed = lines.iter().filter(|l| l.worth < DETAIL).count() + rows().count();
    let wide = rows().map(|r| r.label[0].width() + 1 + r.words[0].width()).max().unwrap_or(0);
    if needed <= room && wide <= width {
        return Columns { label: 0, bar: width, short: false, stacked: true };
    }
    let (label, bar) = beside(1);
    let bar = if bar >= BAR_SHORT { bar } else { 0 };
    Columns { label, bar, short: true, stacked: false }
}

/// Every line of a gauge, from the top.
fn lines(gauge: &Gauge, width: usize) -> Vec<Line> {
    let mut out = vec![Line { worth: 3, kind: Kind::Title }];
    if gauge.targets.is_empty() {
        out.push(Line { worth: 2, kind: Kind::Words(cut(gauge.no_target, width), Role::Warn) });
    }
    for (i, held) in gauge.targets.iter().enumerate() {
        let first = i == 0;
        // what stands now is told before a rule down the river that is kept
        let missed = matches!(held.standing, Standing::Above | Standing::Below);
        let spare = if held.point.is_some() && !missed { 9 } else { 5 };
        for (n, words) in wrapped(&gauge.pieces(held), width).into_iter().enumerate() {
            let worth = if n > 0 {
                DETAIL
            } else if first {
                2
            } else {
                spare + 1
            };
            let role = if n == 0 { Role::Range } else { Role::Quiet };
            out.push(Line { worth, kind: Kind::Words(words, role) });
        }
        out.push(Line { worth: if first { 0 } else { spare }, kind: Kind::Bar(gauge.range(i, held)) });
    }
    out.push(Line { worth: 1, kind: Kind::Bar(gauge.reading("tried", gauge.tried, Role::Tried)) });
    if let Some(now) = gauge.now {
        out.push(Line { worth: 7, kind: Kind::Bar(gauge.reading("now", now, Role::Now)) });
    }
    out.extend(gauge.attainable().map(|row| Line { worth: 8, kind: Kind::Bar(row) }));
    if Axis::of(gauge, width).is_some() {
        out.push(Line { worth: DETAIL + 1, kind: Kind::Rule });
        out.push(Line { worth: 4, kind: Kind::Ticks });
    }
    out
}

/// Pieces joined by commas into lines, none broken; one that is wider than a line is cut.
fn wrapped(pieces: &[String], width: usize) -> Vec<String> {
    let mut out: Vec<String> = Vec::new();
    for piece in pieces {
        match out.last_mut() {
            Some(line) if line.width() + 2 + piece.width() <= width => {
                line.push_str(", ");
                line.push_str(piece);
            }
            _ => out.push(cut(piece, width)),
        }
    }
    out
}

/// As many whole words as fit: half a number is another number.
fn whole_words(text: &str, room: usize) -> &str {
    let mut text = text;
    while text.width() > room {
        text = text.rfind(' ').map_or("", |end| &text[..end]);
    }
    text.trim_end_matches(" by")
}

/// `ABOVE by 0.4 F`, as the text report says it; a miss smaller than the last digit shown must not read as none.
fn missed(standing: Standing, by: f64, unit: &str) -> [String; 2] {
    let word = standing.word().to_uppercase();
    let short = if by < 0.05 { format!("{word} by <0.1") } else { format!("{word} by {by:.1}") };
    [text::missed(standing, by, unit), short]
}

impl Gauge {
    /// What is told of a target beside its standing: its name, whether it governs, shares, and its numbers.
    fn pieces(&self, held: &Held) -> Vec<String> {
        let unit = self.unit().symbol();
        let with_unit = |value: f64| format!("{} {unit}", self.figure(value));
        let mut out = vec![held.name.clone()];
        out.extend(held.governs.then(|| "governs".to_owned()));
        let apart = |v: &f64| self.tried.value.is_some_and(|t| self.figure(t) != self.figure(*v));
        let (there, elsewhere) = (if held.point.is_some() { " there" } else { "" }, held.point.is_some());
        let told = held.value.filter(|v| elsewhere || apart(v));
        out.extend(told.map(|v| format!("{}{there} {}", held.statistic, with_unit(v))));
        let percent = |share: f64| format!("{:.0} %", 100.0 * share);
        out.extend(held.share.map(|s| format!("{} of cases inside", percent(s))));
        out.extend(held.share_both.map(|s| format!("{} in oxygen too", percent(s))));
        out.push(match (held.low, held.high) {
            (Some(low), Some(high)) => format!("{} to {}", self.figure(low), with_unit(high)),
            (Some(low), None) => format!("at least {}", with_unit(low)),
            (None, Some(high)) => format!("at most {}", with_unit(high)),
            (None, None) => "no bound".to_owned(),
        });
        if held.buffer > 0.0 {
            out.push(format!("buffer {:.1} {unit}", self.difference(held.buffer)));
        }
        out.extend(held.preferred.map(|p| format!("P preferred {}", with_unit(p))));
        out.extend(held.example.then(|| text::EXAMPLE.to_owned()));
        out
    }

    fn range(&self, index: usize, held: &Held) -> Row {
        let label = match (&held.point, held.high) {
            (Some(_), _) => ["there", "there"],
            (None, None) => ["at least", "least"],
            (None, Some(_)) => ["range", "range"],
        };
        let (words, words_role) = match (held.standing, held.by) {
            (Standing::Unknown, _) => (["UNKNOWN".to_owned(), "UNKNOWN".to_owned()], Role::Warn),
            (standing, Some(by)) if by > 0.0 => {
                (missed(standing, self.difference(by), self.unit().symbol()), Role::Outside)
            }
            (standing, _) => ([standing.word().to_owned(), standing.word().to_owned()], Role::Inside),
        };
        Row { label: label.map(str::to_owned), words, words_role, bar: Bar::Range(index) }
    }

    fn reading(&self, label: &str, reading: Reading, role: Role) -> Row {
        let unit = self.unit().symbol();
        let words = match (reading.value, reading.band) {
            (None, _) => [(); 2].map(|()| "not measured".to_owned()),
            (Some(value), None) => {
                let value = self.figure(value);
                [format!("{value} {unit} (no band)"), value]
            }
            (Some(value), Some(band)) => {
                let value = self.figure(value);
                let [low, high] = band.map(|end| self.figure(end));
                [format!("{value} {unit} ({low} to {high})"), format!("{value} ({low}-{high})")]
            }
        };
        let words_role = if reading.value.is_some() { role } else { Role::Warn };
        Row { label: [(); 2].map(|()| label.to_owned()), words, words_role, bar: Bar::Reading(reading, role) }
    }

    fn attainable(&self) -> Option<Row> {
        let unit = self.unit().symbol();
        let said = |ends: [f64; 2]| {
            let [low, high] = ends.map(|end| self.figure(end));
            [format!("{low} to {high} {unit}"), format!("{low}-{high}")]
        };
        let (words, words_role, ends) = match self.attainable {
            Attainable::NotAsked => return None,
            Attainable::Computing => (["being computed", "computing"].map(str::to_owned), Role::Quiet, None),
            Attainable::Known(ends) => (said(ends), Role::Plain, Some(ends)),
            Attainable::Before(ends) => {
                let [low, high] = ends.map(|end| self.figure(end));
                (
                    [format!("{low} to {high} (from before)"), format!("{low}-{high} before")],
                    Role::Old,
                    Some(ends),
                )
            }
        };
        let label = ["attainable", "attain"].map(str::to_owned);
        Some(Row { label, words, words_role, bar: Bar::Attainable(ends, words_role) })
    }
}
