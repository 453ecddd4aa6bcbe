//! The pool from bed to surface: elevation up the side, outlets where they open, zones beside them, and the curves of
//! temperature and oxygen.

use super::paper::{At, BLACK, GREY, LINE_MM, MARKS, PALE, Paper, SERIES, Side, apart, fitted, words_mm};
use crate::plot::Scale;
use crate::report::page::PoolPicture;

/// Width of a zone with its name, mm. Those that leave the curves no room are told in the words alone.
const LANE: f64 = 6.0;
/// Room left for the curves, mm.
const CURVES: f64 = 26.0;
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
    let mut frame =
        Frame { left: 0.0, right: paper.size.wide - 4.0, top: 10.0, foot: paper.size.high - 14.0, heights };
    let told = told(pool, &frame);
    let names =
        told.iter().map(|t| words_mm(&t.names)).fold(0.0, f64::max).clamp(6.0, 0.22 * paper.size.wide);
    let axis = 15.0;
    let boxes = axis + names + 3.0;
    let zones = boxes + 7.0;
    let lanes = |count: usize| zones + LANE * count as f64;
    let shown = (0..=pool.zones.len()).take_while(|k| lanes(*k) + CURVES <= frame.right).last().unwrap_or(0);
    frame.left = lanes(shown) + 2.0;
    water(paper, pool, &frame, axis)?;
    outlets(paper, &told, &frame, (axis, boxes))?;
    for (lane, (name, low, high)) in pool.zones.iter().take(shown).enumerate() {
        zone(paper, &frame, lanes(lane), (name, *low, *high))?;
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

/// Outlets of one height and state.
struct Told {
    top: f64,
    foot: f64,
    open: bool,
    names: String,
}

/// Outlets from above, those of one height and state together.
fn told(pool: &PoolPicture, frame: &Frame) -> Vec<Told> {
    let mut told: Vec<Told> = Vec::new();
    for (name, low, high, open) in &pool.outlets {
        let (Some(top), Some(foot)) = (frame.y(*high), frame.y(*low)) else {
            continue;
        };
        let same = |t: &&mut Told| (t.top - top).abs().max((t.foot - foot).abs()) < 0.5 && t.open == *open;
        match told.iter_mut().find(same) {
            Some(there) => there.names = format!("{} {name}", there.names),
            None => told.push(Told { top, foot, open: *open, names: name.clone() }),
        }
    }
    told.sort_by(|a, b| (a.top + a.foot).total_cmp(&(b.top + b.foot)).then(b.open.cmp(&a.open)));
    told
}

/// Full boxes are open, empty ones shut; each with its names and a line to them.
fn outlets(paper: &Paper, told: &[Told], frame: &Frame, (left, boxes): At) -> Option<()> {
    let middles: Vec<f64> = told.iter().map(|t| 0.5 * (t.top + t.foot)).collect();
    let places = apart(&middles, (frame.top, frame.foot + 1.0));
    for ((outlet, middle), y) in told.iter().zip(middles).zip(places) {
        // a low opening is still to be seen
        let half = (0.5 * (outlet.foot - outlet.top)).max(0.6);
        // open and shut at one height stand beside each other
        let x = if outlet.open { boxes + 3.0 } else { boxes };
        let (a, b) = ((x, middle - half), (x + 2.2, middle + half));
        if outlet.open {
            paper.filled(a, b, BLACK)?;
        } else {
            paper.frame(a, b, BLACK, 2)?;
        }
        let names = fitted(&outlet.names, boxes - left - 2.0);
        paper.words((left + 1.0, y), &names, Side::Right, outlet.open)?;
        let begins = (left + 1.5 + words_mm(&names)).min(boxes - 1.0);
        paper.line(vec![(begins, y), (x, middle)], GREY, 1)?;
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
    let y = (0.5 * (a + b)).min(frame.foot - half).max(frame.top + half);
    paper.words((x + 2.8, y), &name, Side::Upward, false)
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
