//! From a point back to the dam: the release that keeps the point in its range, and when it must leave.
//!
//! Methods: `docs/methods.md`, section 6.

use chrono::{DateTime, FixedOffset, NaiveDate, TimeDelta};

use crate::site::Site;
use crate::water::saturation_mg_l;

use super::Conditions;
use super::figures::Figures;
use super::hours::hours;
use super::legs::legs;
use super::link::figures;
use super::run::Run;

/// Coldest and warmest release that is looked at, C (choice: beyond what reservoirs hold).
pub const RELEASES_C: (f64, f64) = (0.5, 35.0);

/// Most oxygen of a release that is looked at, mg/L (choice: beyond what reservoirs hold).
pub const MOST_OXYGEN_MG_L: f64 = 20.0;

/// Releases at which the point is looked at before a root is sought (choice).
const SCAN: usize = 8;

/// A root is found when the point is this near, C or mg/L (choice).
const NEAR: f64 = 1e-6;
/// Most steps of a root; halving alone would come below round-off (choice).
const STEPS: usize = 80;
/// A root after which the point is still farther off is a step, C or mg/L (choice).
const STEP: f64 = 5e-3;

/// The figure of the day that a range speaks of. Where only days are known, not hours, each is the mean.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Figure {
    /// The mean.
    Mean,
    /// The greatest.
    Greatest,
    /// The least.
    Least,
}

/// The range that a point wants.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Wanted {
    /// Lowest, C.
    pub low_c: Option<f64>,
    /// Highest, C.
    pub high_c: Option<f64>,
    /// Of which figure.
    pub of: Figure,
}

/// The release temperatures that keep a point in its range.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Window {
    /// Coldest release, C; `None` where even the coldest looked at is warm enough, and where none serves.
    pub low_c: Option<f64>,
    /// Warmest release, C; `None` where even the warmest looked at is cool enough, and where none serves.
    pub high_c: Option<f64>,
    /// Whether any release serves.
    pub reachable: bool,
    /// An end is a step: the point passes it without ever standing at it, or passes it more than once.
    pub step: bool,
}

/// The release temperatures, alike in all parts of the day, that keep a point in its range: `flows` are the parts as
/// hours and m3/s. `None` where [`course`](super::course) is, or where there is no such point.
pub fn window(
    site: &Site,
    conditions: &Conditions,
    date: NaiveDate,
    flows: &[(f64, f64)],
    point: usize,
    wanted: Wanted,
) -> Option<Window> {
    let run = Run::new(site, conditions, date, flows, 0)?;
    let at = |release_c: f64| {
        figures(&run, flows, release_c, None).get(point).map(|f| match wanted.of {
            Figure::Mean => f.mean_c,
            Figure::Greatest => f.range_c.map_or(f.mean_c, |r| r.0),
            Figure::Least => f.range_c.map_or(f.mean_c, |r| r.1),
        })
    };
    let end = |wanted: Option<f64>| match wanted {
        Some(value) => End::of(&at, RELEASES_C, value).map(Some),
        None => Some(None),
    };
    let (low, high) = (end(wanted.low_c)?, end(wanted.high_c)?);
    // the coldest release that is warm enough, the warmest that is cool enough
    let (low_c, low_reached) = match low {
        None | Some(End::Below) => (None, true),
        Some(End::At(c, _)) => (Some(c), true),
        Some(End::Above) => (None, false),
    };
    let (high_c, high_reached) = match high {
        None | Some(End::Above) => (None, true),
        Some(End::At(c, _)) => (Some(c), true),
        Some(End::Below) => (None, false),
    };
    let ordered = low_c.zip(high_c).is_none_or(|(low, high)| low <= high + NEAR);
    let reachable = low_reached && high_reached && ordered;
    let step = [low, high].iter().flatten().any(|end| matches!(end, End::At(_, true)));
    Some(Window { low_c: low_c.filter(|_| reachable), high_c: high_c.filter(|_| reachable), reachable, step })
}

/// The least oxygen that a point wants.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Floor {
    /// Least of the day, mg/L.
    Least(f64),
    /// Mean of the day, mg/L.
    Mean(f64),
    /// Least of the day over saturation.
    LeastShare(f64),
    /// Mean of the day over saturation.
    MeanShare(f64),
}

/// The oxygen of the release that keeps a point at its floor.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LeastOxygen {
    /// Least oxygen of the release, mg/L; 0 where any serves; `None` where none does.
    pub least_mg_l: Option<f64>,
    /// Oxygen at saturation at the dam at that temperature, mg/L: more must be gained on the way out.
    pub saturation_mg_l: f64,
}

/// The least oxygen that a release of a temperature must hold for a floor at a point. `None` where
/// [`course`](super::course) is, where there is no such point, or where the oxygen of water that joins is not known.
pub fn least_oxygen(
    site: &Site,
    conditions: &Conditions,
    date: NaiveDate,
    flows: &[(f64, f64)],
    (point, release_c): (usize, f64),
    floor: Floor,
) -> Option<LeastOxygen> {
    let run = Run::new(site, conditions, date, flows, 0)?;
    let figure = |f: &Figures| match floor {
        Floor::Least(_) => f.oxygen_min_mg_l,
        Floor::Mean(_) => f.oxygen_mean_mg_l,
        Floor::LeastShare(_) => f.oxygen_share.map(|s| s.0),
        Floor::MeanShare(_) => f.oxygen_share.map(|s| s.1),
    };
    let (Floor::Least(wanted) | Floor::Mean(wanted) | Floor::LeastShare(wanted) | Floor::MeanShare(wanted)) =
        floor;
    let at = |oxygen: f64| figures(&run, flows, release_c, Some(oxygen)).get(point).and_then(figure);
    let least_mg_l = match End::of(&at, (0.0, MOST_OXYGEN_MG_L), wanted)? {
        End::Below => Some(0.0),
        End::At(oxygen, _) => Some(oxygen),
        End::Above => None,
    };
    Some(LeastOxygen { least_mg_l, saturation_mg_l: saturation_mg_l(release_c, 0.0, run.pressure_atm) })
}

/// The latest moment at which water must leave the dam to be at a point by a moment, at a flow. `None` where the site
/// has no river or no such point.
pub fn latest(
    site: &Site,
    conditions: &Conditions,
    flow_m3s: f64,
    point: usize,
    by: DateTime<FixedOffset>,
) -> Option<DateTime<FixedOffset>> {
    let river = site.river.as_ref()?;
    let water_h = hours(river, conditions, by, &legs(river, 0), flow_m3s).get(point)?.water;
    by.checked_sub_signed(TimeDelta::try_milliseconds(super::run::round(water_h * 3.6e6)?)?)
}

/// Where a value wanted lies among those a point can be brought to.
#[derive(Debug, Clone, Copy, PartialEq)]
enum End {
    /// Below all of them.
    Below,
    /// Reached here; whether as a step.
    At(f64, bool),
    /// Above all of them.
    Above,
}

impl End {
    /// `None` where the point's value is not known.
    fn of(at: &impl Fn(f64) -> Option<f64>, (from, to): (f64, f64), wanted: f64) -> Option<Self> {
        let place = |k: usize| from + (to - from) * k as f64 / SCAN as f64;
        let mut crossings = Vec::new();
        let mut before = (from, at(from)? - wanted);
        if before.1 >= 0.0 && at(to)? - wanted >= 0.0 {
            return Some(Self::Below);
        }
        for k in 1..=SCAN {
            let here = (place(k), at(place(k))? - wanted);
            if (before.1 < 0.0) != (here.1 < 0.0) {
                crossings.push((before, here));
            }
            before = here;
        }
        let Some((a, b)) = crossings.first().copied() else {
            return Some(if before.1 < 0.0 { Self::Above } else { Self::Below });
        };
        let (x, off) = root(at, wanted, a, b)?;
        Some(Self::At(x, crossings.len() > 1 || off.abs() > STEP))
    }
}

/// Where the value passes the wanted one between two places, and how far off it stays there.
///
/// # References
/// False position with the Illinois change, Dowell & Jarratt 1971, BIT 11:168-174 (recalled), halving where it stalls.
fn root(
    at: &impl Fn(f64) -> Option<f64>,
    wanted: f64,
    mut a: (f64, f64),
    mut b: (f64, f64),
) -> Option<(f64, f64)> {
    let (mut weight_a, mut weight_b) = (a.1, b.1);
    let mut moved_a = None;
    let mut best = if a.1.abs() < b.1.abs() { a } else { b };
    for step in 0..STEPS {
        if best.1.abs() <= NEAR || (b.0 - a.0).abs() <= f64::EPSILON * b.0.abs() {
            break;
        }
        let straight = (a.0 * weight_b - b.0 * weight_a) / (weight_b - weight_a);
        let inside = straight > a.0.min(b.0) && straight < a.0.max(b.0);
        let x = if inside && step % 4 != 3 { straight } else { 0.5 * (a.0 + b.0) };
        let off = at(x)? - wanted;
        if off.abs() < best.1.abs() {
            best = (x, off);
        }
        let moves_a = (off < 0.0) == (a.1 < 0.0);
        // the end that stays twice counts for half
        let stays = if moved_a == Some(moves_a) { 0.5 } else { 1.0 };
        if moves_a {
            a = (x, off);
            (weight_a, weight_b) = (off, stays * weight_b);
        } else {
            b = (x, off);
            (weight_b, weight_a) = (off, stays * weight_a);
        }
        moved_a = Some(moves_a);
    }
    Some(best)
}
