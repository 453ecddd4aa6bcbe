//! Values over dates: bands shaded, lines each with its stroke, mark and name, limits and dates marked.

use chrono::{Datelike, Days, NaiveDate};

use super::paper::{
    At, BLACK, DASHES, GREY, LINE_MM, MARKS, PALE, Paper, SERIES, Side, apart, fitted, words_mm,
};
use crate::plot::Scale;
use crate::report::page::DaysPicture;

/// Least span of the axis, in its unit (choice).
const LEAST: f64 = 1.0;
/// Marks along a line.
const SPOTS: usize = 8;

/// The frame: dates across, values up.
struct Frame {
    left: f64,
    right: f64,
    top: f64,
    foot: f64,
    first: NaiveDate,
    days: f64,
    values: Scale,
}

impl Frame {
    fn x(&self, date: NaiveDate) -> f64 {
        let share = (date - self.first).num_days() as f64 / self.days;
        self.left + share.clamp(0.0, 1.0) * (self.right - self.left)
    }

    fn y(&self, value: f64) -> Option<f64> {
        Some(self.foot - self.values.share(value)?.clamp(0.0, 1.0) * (self.foot - self.top))
    }
}

/// Draws the days; nothing without a value.
pub(super) fn draw(paper: &Paper, days: &DaysPicture) -> Option<()> {
    let banded =
        days.bands.iter().flat_map(|b| b.1.iter().flat_map(|(d, low, high)| [(*d, *low), (*d, *high)]));
    let lined = days.lines.iter().flat_map(|l| l.1.iter().copied());
    let limits = days.limits.iter().flat_map(|(_, from, to, value)| [(*from, *value), (*to, *value)]);
    let all: Vec<(NaiveDate, f64)> = banded.chain(lined).chain(limits).filter(|p| p.1.is_finite()).collect();
    let first = all.iter().map(|p| p.0).min()?;
    let last = all.iter().map(|p| p.0).max()?.max(first.checked_add_days(Days::new(1))?);
    let low = all.iter().map(|p| p.1).reduce(f64::min)?;
    let high = all.iter().map(|p| p.1).reduce(f64::max)?;
    let names = days.lines.iter().map(|l| words_mm(&l.0)).fold(0.0, f64::max);
    let frame = Frame {
        left: 14.0,
        right: paper.size.wide - names.min(0.3 * paper.size.wide) - 5.0,
        top: 9.5,
        foot: paper.size.high - 5.5,
        first,
        days: (last - first).num_days() as f64,
        values: Scale::round(low, high, LEAST, 6),
    };
    axes(paper, days, &frame, last)?;
    for (_, points) in &days.bands {
        band(paper, &frame, points)?;
    }
    for (_, from, to, value) in days.limits.iter().filter(|l| l.3.is_finite()) {
        let y = frame.y(*value)?;
        paper.dashed(vec![(frame.x(*from), y), (frame.x(*to), y)], BLACK, 4, (2, 1))?;
    }
    let mut ends = Vec::new();
    for (series, (name, points)) in days.lines.iter().enumerate() {
        line(paper, &frame, points, series)?;
        let last = points.iter().rev().find(|p| p.1.is_finite());
        if let Some(end) = last.and_then(|p| Some((frame.x(p.0), frame.y(p.1)?))) {
            ends.push((end, series, name));
        }
    }
    ends.sort_by(|a, b| a.0.1.total_cmp(&b.0.1));
    let wants: Vec<f64> = ends.iter().map(|e| e.0.1).collect();
    for ((_, series, name), y) in ends.iter().zip(apart(&wants, (frame.top + 1.0, frame.foot - 1.0))) {
        let x = frame.right + 2.0;
        paper.mark((x, y), MARKS[series % MARKS.len()], SERIES[series % SERIES.len()])?;
        paper.words((x + 2.0, y), &fitted(name, paper.size.wide - x - 2.0), Side::Right, false)?;
    }
    limits_named(paper, days, &frame)
}

fn axes(paper: &Paper, days: &DaysPicture, frame: &Frame, last: NaiveDate) -> Option<()> {
    let marks = frame.values.marks(7);
    for value in &marks.values {
        let y = frame.y(*value)?;
        paper.line(vec![(frame.left, y), (frame.right, y)], PALE, 1)?;
        let label = format!("{value:.*}", usize::from(marks.decimals));
        paper.words((frame.left - 1.0, y), &label, Side::Left, false)?;
    }
    paper.words((0.5, 2.0), &fitted(&days.axis, 0.5 * paper.size.wide), Side::Right, true)?;
    let mut free = 0.0;
    for (date, label) in dates(frame.first, last) {
        let (x, half) = (frame.x(date), 0.5 * words_mm(&label));
        paper.line(vec![(x, frame.foot), (x, frame.foot + 1.0)], BLACK, 2)?;
        if x - half >= free && x + half <= paper.size.wide {
            paper.words((x, frame.foot + 3.0), &label, Side::Middle, false)?;
            free = x + half + 1.5;
        }
    }
    let mut free = 0.0;
    for (date, label) in &days.marks {
        if *date < frame.first || *date > last {
            continue;
        }
        let x = frame.x(*date);
        paper.dashed(vec![(x, frame.top), (x, frame.foot)], GREY, 2, (1, 1))?;
        let (y, wide) = (frame.top - 2.0, words_mm(label));
        let from = (x - 0.5 * wide).clamp(frame.left, (paper.size.wide - wide).max(frame.left));
        // a mark without its word is still told by those beside it and by the words below the picture
        if from >= free {
            paper.words((from, y), label, Side::Right, false)?;
            free = from + wide + 1.5;
        }
    }
    let mut x = paper.size.wide;
    for (name, _) in days.bands.iter().rev() {
        let name = fitted(name, 0.4 * paper.size.wide);
        paper.words((x - 0.5, 2.0), &name, Side::Left, false)?;
        let from = x - 1.5 - words_mm(&name);
        paper.shaded(vec![(from - 4.0, 0.7), (from, 0.7), (from, 3.3), (from - 4.0, 3.3)], GREY, 0.35)?;
        x = from - 6.0;
    }
    paper.line(vec![(frame.left, frame.top), (frame.left, frame.foot), (frame.right, frame.foot)], BLACK, 2)
}

/// Dates named below the axis: days, weeks, months or years, as many as can be read.
fn dates(first: NaiveDate, last: NaiveDate) -> Vec<(NaiveDate, String)> {
    let span = (last - first).num_days();
    let named = |date: NaiveDate| -> Option<String> {
        let month = date.day() == 1;
        match span {
            ..=10 => Some(date.format("%b %-d").to_string()),
            11..=75 => ((date - first).num_days() % 7 == 0).then(|| date.format("%b %-d").to_string()),
            76..=700 => month.then(|| {
                let shown = if date.month() == 1 { "%Y" } else { "%b" };
                date.format(shown).to_string()
            }),
            _ => (month && date.month() == 1).then(|| date.format("%Y").to_string()),
        }
    };
    first.iter_days().take_while(|date| *date <= last).filter_map(|date| Some((date, named(date)?))).collect()
}

/// Runs without a gap of more than a day.
fn runs<T>(points: &[T], date: impl Fn(&T) -> NaiveDate) -> Vec<&[T]> {
    points.chunk_by(|a, b| (date(b) - date(a)).num_days() <= 1).collect()
}

fn band(paper: &Paper, frame: &Frame, points: &[(NaiveDate, f64, f64)]) -> Option<()> {
    let points: Vec<_> = points.iter().copied().filter(|p| p.1.is_finite() && p.2.is_finite()).collect();
    for run in runs(&points, |p| p.0) {
        let low: Vec<At> = run.iter().filter_map(|p| Some((frame.x(p.0), frame.y(p.1)?))).collect();
        let high: Vec<At> = run.iter().filter_map(|p| Some((frame.x(p.0), frame.y(p.2)?))).collect();
        if let ([only], [above]) = (&low[..], &high[..]) {
            paper.line(vec![*only, *above], GREY, 6)?;
            continue;
        }
        paper.line(low.clone(), GREY, 1)?;
        paper.line(high.clone(), GREY, 1)?;
        let around = low.into_iter().chain(high.into_iter().rev()).collect();
        paper.shaded(around, GREY, 0.35)?;
    }
    Some(())
}

/// A line, whole over each run of days.
fn line(paper: &Paper, frame: &Frame, points: &[(NaiveDate, f64)], series: usize) -> Option<()> {
    let points: Vec<_> = points.iter().copied().filter(|p| p.1.is_finite()).collect();
    let place = |p: &(NaiveDate, f64)| Some((frame.x(p.0), frame.y(p.1)?));
    let (mark, colour) = (MARKS[series % MARKS.len()], SERIES[series % SERIES.len()]);
    for run in runs(&points, |p| p.0) {
        let places: Vec<At> = run.iter().filter_map(place).collect();
        if places.len() > 1 {
            paper.stroke(places, series)?;
        } else if let Some(at) = places.first() {
            paper.mark(*at, mark, colour)?;
        }
    }
    let stride = (points.len() / SPOTS).max(1);
    // lines that run together still show whose they are, since their marks stand apart
    let shift = series * stride / (DASHES.len() + 1);
    for at in points.iter().skip(shift).step_by(stride).filter_map(place) {
        paper.mark(at, mark, colour)?;
    }
    Some(())
}

/// Each limit's name once, above its first piece.
fn limits_named(paper: &Paper, days: &DaysPicture, frame: &Frame) -> Option<()> {
    let mut named: Vec<&str> = Vec::new();
    for (name, from, _, value) in days.limits.iter().filter(|l| l.3.is_finite()) {
        if named.contains(&name.as_str()) {
            continue;
        }
        named.push(name);
        let name = fitted(name, frame.right - frame.left);
        let x = (frame.x(*from) + 1.0).min(frame.right - words_mm(&name)).max(frame.left + 0.5);
        let y = frame.y(*value)? - 0.6 * LINE_MM;
        paper.over((x, y.max(frame.top + 0.5 * LINE_MM)), &name, Side::Right)?;
    }
    Some(())
}
