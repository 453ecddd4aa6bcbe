//! Ranges one under the other on one axis. A value inside what is asked is a full dot, one outside a cross.

use super::paper::{At, BLACK, GREY, LINE_MM, Mark, PALE, Paper, SERIES, Side, fitted, words_mm};
use crate::plot::Scale;
use crate::report::page::RangesPicture;

/// Height of head and axis, mm.
const AROUND: f64 = 20.0;
/// Least height of a row, mm.
const ROW: f64 = 4.2;
/// Least span of the axis, in its unit: less would draw noise (choice).
const LEAST: f64 = 1.0;

/// Height the rows need, mm.
pub(super) fn least_high(ranges: &RangesPicture) -> f64 {
    AROUND + ROW * ranges.rows.len() as f64
}

/// Draws the rows; nothing without a value or an end.
pub(super) fn draw(paper: &Paper, ranges: &RangesPicture) -> Option<()> {
    let finite = |end: Option<f64>| end.filter(|value| value.is_finite());
    let ends: [Option<f64>; 3] = <[_; 3]>::from(ranges.asked).map(finite);
    let [least, preferred, greatest] = ends;
    let values =
        ranges.rows.iter().flat_map(|(_, value, band)| [*value, band.map(|b| b.0), band.map(|b| b.1)]);
    let all: Vec<f64> =
        values.chain([least, preferred, greatest]).flatten().filter(|v| v.is_finite()).collect();
    let low = all.iter().copied().reduce(f64::min)?;
    let high = all.iter().copied().reduce(f64::max)?;
    let scale = Scale::round(low, high, LEAST, 6);
    let labels = ranges.rows.iter().map(|(label, ..)| words_mm(label)).fold(0.0, f64::max);
    let left = labels.clamp(8.0, 0.34 * paper.size.wide) + 3.0;
    let right = paper.size.wide - 15.0;
    let (top, foot) = (8.0, paper.size.high - 9.5);
    let x = |value: f64| scale.share(value).map(|share| left + share.clamp(0.0, 1.0) * (right - left));

    asked(paper, ends, &x, (left, right), (top, foot))?;
    let marks = scale.marks(7);
    for mark in &marks.values {
        let x = x(*mark)?;
        paper.line(vec![(x, top), (x, foot)], PALE, 1)?;
        paper.line(vec![(x, foot), (x, foot + 1.0)], BLACK, 2)?;
        let label = format!("{mark:.*}", usize::from(marks.decimals));
        paper.words((x, foot + 3.0), &label, Side::Middle, false)?;
    }
    paper.line(vec![(left, foot), (right, foot)], BLACK, 2)?;
    let legend = "dot: as asked; cross: not; bar: band";
    let under = if least.is_none() && greatest.is_none() { "dot: value; bar: band" } else { legend };
    paper.words((0.5, foot + 7.0), &fitted(under, paper.size.wide - 1.0), Side::Right, false)?;
    paper.words((right + 14.0, foot + 3.0), &fitted(&ranges.unit, 9.5), Side::Left, true)?;

    let pitch = (foot - top) / ranges.rows.len().max(1) as f64;
    for (at, (label, value, band)) in ranges.rows.iter().enumerate() {
        let y = top + (at as f64 + 0.5) * pitch;
        paper.words((0.5, y), &fitted(label, left - 2.5), Side::Right, false)?;
        if let Some((low, high)) = band.filter(|(low, high)| low.is_finite() && high.is_finite()) {
            bar(paper, (x(low)?, x(high)?), y)?;
        }
        let told = match value.filter(|v| v.is_finite()) {
            Some(value) => {
                let within = least.is_none_or(|l| value >= l) && greatest.is_none_or(|g| value <= g);
                let (mark, colour) = if within { (Mark::Dot, SERIES[0]) } else { (Mark::Cross, SERIES[1]) };
                paper.mark((x(value)?, y), mark, colour)?;
                format!("{value:.1}")
            }
            None => "unknown".to_owned(),
        };
        paper.words((paper.size.wide - 0.5, y), &told, Side::Left, false)?;
    }
    Some(())
}

/// What is asked: shaded between its ends, with its numbers above.
fn asked(
    paper: &Paper,
    [least, preferred, greatest]: [Option<f64>; 3],
    x: &dyn Fn(f64) -> Option<f64>,
    (left, right): At,
    (top, foot): At,
) -> Option<()> {
    if least.is_some() || greatest.is_some() {
        let a = least.and_then(x).unwrap_or(left);
        let b = greatest.and_then(x).unwrap_or(right);
        paper.shaded(vec![(a, top), (b, top), (b, foot), (a, foot)], GREY, 0.18)?;
    }
    for (end, dashes) in [(least, (3, 1)), (preferred, (1, 1)), (greatest, (3, 1))] {
        if let Some(x) = end.and_then(x) {
            paper.dashed(vec![(x, top), (x, foot)], BLACK, 3, dashes)?;
        }
    }
    let between = match (least, greatest) {
        (Some(least), Some(greatest)) => Some(format!("{least:.1} to {greatest:.1}")),
        (Some(least), None) => Some(format!("{least:.1} or more")),
        (None, Some(greatest)) => Some(format!("{greatest:.1} or less")),
        (None, None) => None,
    };
    let best = preferred.map(|value| format!("preferred {value:.1}"));
    let told: Vec<String> = between.into_iter().chain(best).collect();
    if told.is_empty() {
        return Some(());
    }
    let words = fitted(&format!("asked: {}", told.join(", ")), paper.size.wide - 1.0);
    paper.words((0.5, top - LINE_MM), &words, Side::Right, true)
}

fn bar(paper: &Paper, (low, high): (f64, f64), y: f64) -> Option<()> {
    paper.line(vec![(low, y), (high, y)], BLACK, 3)?;
    for end in [low, high] {
        paper.line(vec![(end, y - 1.0), (end, y + 1.0)], BLACK, 3)?;
    }
    Some(())
}
