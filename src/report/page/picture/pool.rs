//! The pool from bed to surface: elevation up the side, outlets where they open, zones beside them, and the curves of
//! temperature and oxygen.

use super::paper::{At, BLACK, GREY, LINE_MM, MARKS, PALE, Paper, SERIES, Side, apart, fitted, words_mm};
use crate::plot::Scale;
use crate::report::page::PoolPicture;

/// Zones drawn beside each other; more are told in the words.
const ZONES: usize = 6;
/// Width of a zone with its name, mm.
const LANE: f64 = 5.0;
/// Least span of the temperature axis, in its unit (choice).
const LEAST: f64 = 4.0;
/// Marks along a curve.
const SPOTS: usize = 7;

/// The frame of the curves and the elevations.
struct Frame {
    left: f64,
    right: f64,
    top: f64,
    foot: f64,
    heights: Scale,
}

impl Frame {
    fn y(&self, elevation: f64) -> Option<f64> {
        let share = self.heights.share(elevation)?.clamp(0.0, 1.0);
        Some(self.foot - share * (self.foot - self.top))
    }

    fn x(&self, scale: &Scale, value: f64) -> Option<f64> {
        Some(self.left + scale.share(value)?.clamp(0.0, 1.0) * (self.right - self.left))
    }
}

/// Draws the pool; nothing where it has no depth.
pub(super) fn draw(paper: &Paper, pool: &PoolPicture) -> Option<()> {
    // an outlet may lie above the water, and is shown there
    let tops = pool.outlets.iter().map(|o| o.2).filter(|z| z.is_finite());
    let heights = Scale::new(pool.ends.0, tops.fold(pool.ends.1, f64::max))?;
    let names =
        pool.outlets.iter().map(|o| words_mm(&o.0)).fold(0.0, f64::max).clamp(6.0, 0.2 * paper.size.wide);
    let axis = 15.0;
    let boxes = axis + names + 3.0;
    let zones = boxes + 7.0;
    let left = zones + LANE * pool.zones.len().min(ZONES) as f64 + 2.0;
    let frame =
        Frame { left, right: paper.size.wide - 4.0, top: 10.0, foot: paper.size.high - 14.0, heights };
    water(paper, pool, &frame, axis)?;
    outlets(paper, pool, &frame, (axis, boxes))?;
    for (lane, (name, low, high)) in pool.zones.iter().take(ZONES).enumerate() {
        zone(paper, &frame, zones + LANE * lane as f64, (name, *low, *high))?;
    }
    curves(paper, pool, &frame)?;
    let y = paper.size.high - 2.0;
    paper.filled((0.5, y - 1.0), (2.5, y + 1.0), BLACK)?;
    paper.words((3.5, y), "open", Side::Right, false)?;
    paper.frame((15.5, y - 1.0), (17.5, y + 1.0), BLACK, 2)?;
    paper.words((18.5, y), "shut", Side::Right, false)?;
    if pool.zones.is_empty() {
        return Some(());
    }
    paper.line(vec![(30.5, y - 1.3), (30.5, y + 1.3)], BLACK, 8)?;
    paper.words((32.5, y), "height drawn from", Side::Right, false)
}

/// Surface, bed, and the elevations.
fn water(paper: &Paper, pool: &PoolPicture, frame: &Frame, axis: f64) -> Option<()> {
    let (bed, surface) = (frame.y(pool.ends.0)?, frame.y(pool.ends.1)?);
    let (a, b) = (axis, frame.right);
    paper.shaded(vec![(a, surface), (b, surface), (b, bed), (a, bed)], SERIES[0], 0.07)?;
    let marks = frame.heights.marks(7);
    for mark in &marks.values {
        let y = frame.y(*mark)?;
        paper.line(vec![(axis, y), (frame.right, y)], PALE, 1)?;
        let label = format!("{mark:.*}", usize::from(marks.decimals));
        paper.words((axis - 1.0, y), &label, Side::Left, false)?;
    }
    paper.line(vec![(axis, frame.top), (axis, frame.foot)], BLACK, 2)?;
    paper.line(vec![(axis, surface), (frame.right, surface)], SERIES[0], 5)?;
    paper.line(vec![(axis, bed), (frame.right, bed)], BLACK, 8)?;
    paper.words((0.5, 2.0), &fitted(&format!("elevation, {}", pool.elevation_unit), 40.0), Side::Right, true)
}

/// Outlets where they open: full boxes open, empty ones shut; those at one height share their words.
fn outlets(paper: &Paper, pool: &PoolPicture, frame: &Frame, (left, boxes): At) -> Option<()> {
    let mut told: Vec<(f64, bool, String)> = Vec::new();
    for (name, low, high, open) in &pool.outlets {
        let (Some(a), Some(b)) = (frame.y(*high), frame.y(*low)) else {
            continue;
        };
        // a low opening is still to be seen
        let (a, b) = if b - a < 1.2 { (0.5 * (a + b) - 0.6, 0.5 * (a + b) + 0.6) } else { (a, b) };
        // open and shut at one height stand beside each other
        let x = if *open { boxes + 3.0 } else { boxes };
        if *open {
            paper.filled((x, a), (x + 2.2, b), BLACK)?;
        } else {
            paper.frame((x, a), (x + 2.2, b), BLACK, 2)?;
        }
        let middle = 0.5 * (a + b);
        let same = |t: &&mut (f64, bool, String)| (t.0 - middle).abs() < 0.5 && t.1 == *open;
        match told.iter_mut().find(same) {
            Some(there) => there.2 = format!("{} {name}", there.2),
            None => told.push((middle, *open, name.clone())),
        }
    }
    told.sort_by(|a, b| a.0.total_cmp(&b.0).then(b.1.cmp(&a.1)));
    let wants: Vec<f64> = told.iter().map(|t| t.0).collect();
    let places = apart(&wants, (frame.top, frame.foot + 1.0));
    for ((middle, open, names), y) in told.iter().zip(places) {
        paper.words((left + 1.0, y), &fitted(names, boxes - left - 2.0), Side::Right, *open)?;
        let begins = (left + 1.0 + words_mm(&fitted(names, boxes - left - 2.0))).min(boxes - 1.0);
        let end = if *open { boxes + 3.0 } else { boxes };
        paper.line(vec![(begins, y), (end, *middle)], GREY, 1)?;
    }
    Some(())
}

/// A height that is drawn from, with its name beside it.
fn zone(paper: &Paper, frame: &Frame, x: f64, (name, low, high): (&str, f64, f64)) -> Option<()> {
    let (Some(a), Some(b)) = (frame.y(high), frame.y(low)) else {
        return Some(());
    };
    paper.line(vec![(x, a), (x, b)], BLACK, 8)?;
    for end in [a, b] {
        paper.line(vec![(x - 0.9, end), (x + 0.9, end)], BLACK, 3)?;
    }
    let name = fitted(name, frame.foot - frame.top);
    let half = 0.5 * words_mm(&name).min(frame.foot - frame.top);
    let y = (0.5 * (a + b)).clamp(frame.top + half, frame.foot - half);
    paper.words((x + 2.3, y), &name, Side::Upward, false)
}

fn curves(paper: &Paper, pool: &PoolPicture, frame: &Frame) -> Option<()> {
    paper.frame((frame.left, frame.top), (frame.right, frame.foot), BLACK, 2)?;
    let temperature = format!("temperature, {}", pool.temperature_unit);
    curve(paper, frame, &pool.temperature, (0, &temperature), LEAST)?;
    curve(paper, frame, &pool.oxygen, (1, "oxygen, mg/L"), LEAST)
}

/// A curve with its axis: the first above the frame, the second below.
fn curve(
    paper: &Paper,
    frame: &Frame,
    points: &[(f64, f64)],
    (series, name): (usize, &str),
    least: f64,
) -> Option<()> {
    let points: Vec<(f64, f64)> =
        points.iter().copied().filter(|(z, v)| z.is_finite() && v.is_finite()).collect();
    let (Some(low), Some(high)) =
        (points.iter().map(|p| p.1).reduce(f64::min), points.iter().map(|p| p.1).reduce(f64::max))
    else {
        return Some(());
    };
    let scale = Scale::round(low, high, least, 4);
    let places: Vec<At> =
        points.iter().filter_map(|(z, v)| Some((frame.x(&scale, *v)?, frame.y(*z)?))).collect();
    paper.stroke(places.clone(), series)?;
    let stride = (places.len() / SPOTS).max(1);
    let (mark, colour) = (MARKS[series % MARKS.len()], SERIES[series % SERIES.len()]);
    for at in places.iter().skip(stride / 2 * (1 - series.min(1))).step_by(stride) {
        paper.mark(*at, mark, colour)?;
    }
    let above = series == 0;
    let edge = if above { frame.top } else { frame.foot };
    let out = if above { -1.0 } else { 1.0 };
    let marks = scale.marks(5);
    for value in &marks.values {
        let x = frame.x(&scale, *value)?;
        paper.line(vec![(x, edge), (x, edge + out)], BLACK, 2)?;
        let label = format!("{value:.*}", usize::from(marks.decimals));
        paper.words((x, edge + 2.7 * out), &label, Side::Middle, false)?;
    }
    let y = edge + out * (2.7 + LINE_MM);
    let name = fitted(name, frame.right - frame.left + 8.0);
    let half = 0.5 * words_mm(&name) + 2.0;
    let middle = (0.5 * (frame.left + frame.right)).min(paper.size.wide - half);
    paper.mark((middle - half + 0.5, y), mark, colour)?;
    paper.words((middle - half + 2.5, y), &name, Side::Right, true)
}
