//! A day's release carried down the river.
//!
//! Methods: `docs/methods.md`, section 6.

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::site::Site;

use super::Conditions;
use super::figures::{Figures, hourly};
use super::hours::Hours;
use super::run::{Run, Seen};
use super::slices::{Slice, slices};
use super::water::Water;

/// A part of the day with its release, in the order of the day from midnight.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Part {
    /// Hours it lasts; the parts of a day sum to 24.
    pub hours: f64,
    /// Flow, m3/s.
    pub flow_m3s: f64,
    /// Temperature below the dam, C.
    pub temperature_c: f64,
    /// Oxygen below the dam, mg/L.
    pub oxygen_mg_l: Option<f64>,
}

/// How finely a day was carried down.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum By {
    /// One parcel for the day.
    Day,
    /// Each hour by itself for the blocks of the release, under air that is not known by the hour: greatest, least and
    /// change lack the day's cycle of the air.
    Blocks,
    /// Each hour by itself, under its own air.
    Hours,
}

/// What arrives at a point.
#[derive(Debug, Clone, PartialEq)]
pub struct AtPoint {
    /// Index in the points of the site's river.
    pub point: usize,
    /// Its figures.
    pub figures: Figures,
    /// Hours the water takes from the dam, by the mean flow of the day.
    pub travel_h: f64,
    /// Hours before which a change of flow cannot arrive, by the greatest flow of the day: a larger one is sooner.
    pub rise_first_h: f64,
    /// Hours its bulk takes, by the greatest flow of the day.
    pub rise_h: f64,
    /// Least and greatest flow of the day there, with what joined on the way, m3/s.
    pub flow_range_m3s: (f64, f64),
    /// Temperature by the hour of release, C; empty where only days are known.
    pub hourly_c: Vec<f64>,
}

/// The river at one distance, for a picture of it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Place {
    /// Distance from the dam, m.
    pub at_m: f64,
    /// Its figures.
    pub figures: Figures,
}

/// A day's release on its way down.
#[derive(Debug, Clone, PartialEq)]
pub struct Course {
    /// What arrives at every point, in the order of the site's river.
    pub points: Vec<AtPoint>,
    /// The river from the dam to its end.
    pub along: Vec<Place>,
    /// How finely it was carried down.
    pub by: By,
    /// What to beware of: a travel table held at its end, a coefficient beyond its range, weather that ends.
    pub flags: Vec<Problem>,
}

/// Looks along the river for a picture, beside those that points and streams bring (choice).
const LOOKS: usize = 80;

/// Carries a day's release down the river. `None` where the site has no river or what its surface trades with the air
/// on that day is not known.
///
/// With parts of the day, or weather by the hour, each hour's water goes down by itself; else one parcel speaks for the
/// day, released at noon.
pub fn course(site: &Site, conditions: &Conditions, date: NaiveDate, parts: &[Part]) -> Option<Course> {
    let flows: Vec<(f64, f64)> = parts.iter().map(|p| (p.hours, p.flow_m3s)).collect();
    let run = Run::new(site, conditions, date, &flows, LOOKS)?;
    let slices = slices(parts, run.river().decay.demand_mg_l, run.by_hour());
    let (rows, met) = run.carry(&slices);
    Some(Course {
        points: at_points(&run, &slices, &rows),
        along: along(&run, &slices, &rows),
        by: run.by,
        flags: run.flags(&met),
    })
}

/// What arrives at every point.
pub(super) fn at_points(run: &Run, slices: &[Slice], rows: &[Vec<Seen>]) -> Vec<AtPoint> {
    let day: f64 = slices.iter().map(|s| s.hours).sum();
    let flow = slices.iter().map(|s| s.hours * s.water.flow_m3s).sum::<f64>() / day;
    let greatest = slices.iter().map(|s| s.water.flow_m3s).fold(flow, f64::max);
    let (hours, rises) = (run.hours(flow), run.hours(greatest));
    let one = |(point, (water, rise)): (usize, (&Hours, &Hours))| {
        let there = there(rows, |seen| seen.point == Some(point));
        let figures = Figures::of(slices, &there, run.by_hour(), run.pressure_atm);
        let flows = there.iter().map(|w| w.flow_m3s);
        AtPoint {
            point,
            figures,
            travel_h: water.water,
            rise_first_h: rise.first,
            rise_h: rise.bulk,
            flow_range_m3s: (
                flows.clone().reduce(f64::min).unwrap_or(figures.flow_m3s),
                flows.reduce(f64::max).unwrap_or(figures.flow_m3s),
            ),
            hourly_c: if run.by_hour() { hourly(slices, &there) } else { Vec::new() },
        }
    };
    hours.iter().zip(&rises).enumerate().map(one).collect()
}

fn along(run: &Run, slices: &[Slice], rows: &[Vec<Seen>]) -> Vec<Place> {
    let Some(first) = rows.first() else { return Vec::new() };
    let place = |(i, seen): (usize, &Seen)| {
        let there: Vec<Water> = rows.iter().filter_map(|row| row.get(i)).map(|s| s.water).collect();
        Place { at_m: seen.at_m, figures: Figures::of(slices, &there, run.by_hour(), run.pressure_atm) }
    };
    first.iter().enumerate().map(place).collect()
}

/// Each slice's water at the place that is asked for.
fn there(rows: &[Vec<Seen>], is_it: impl Fn(&Seen) -> bool) -> Vec<Water> {
    rows.iter().filter_map(|row| row.iter().find(|seen| is_it(seen))).map(|seen| seen.water).collect()
}
