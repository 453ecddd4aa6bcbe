//! The cold water of a season by date: all of it, what the outlets usable on that date can draw, the reserves; and a pool
//! with more or less of it.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::Datelike;

use crate::mix;
use crate::site::{Reserve, Site};
use crate::target::YearDay;

use super::gates::usable;
use super::layers::{Layer, Layers};
use super::outcome::{ColdDay, ColdWater, Exhausted, Left};
use super::reshape::cut;
use super::run::SeasonDay;
use super::tally::TargetTally;

/// Lowest elevation that the deepest outlet usable on each day draws from at the release of that day, m; `None` where
/// none is usable. A day without a release is taken at that of the day before: its water can still be drawn.
pub(super) fn reaches_m(site: &Site, days: &[SeasonDay]) -> Vec<Option<f64>> {
    let first = days.iter().find_map(|day| day.release).map_or(0.0, |release| release.flow_m3s);
    let reach = |flow_m3s: &mut f64, day: &SeasonDay| {
        *flow_m3s = day.release.map_or(*flow_m3s, |release| release.flow_m3s);
        Some(reach_m(site, day, *flow_m3s))
    };
    days.iter().scan(first, reach).collect()
}

fn reach_m(site: &Site, day: &SeasonDay, flow_m3s: f64) -> Option<f64> {
    let column = day.layers.column(site)?;
    let states = mix::outlet_states(site, day.pool_m);
    let deepest = states.iter().rev().find(|s| usable(site, s.outlet, day.pool_m, day.date).is_ok())?;
    mix::reach_m(site, &column, deepest.outlet, flow_m3s)
}

/// Cold water below a threshold (C) at the end of each day, where each day's outlets reach down to an elevation.
pub(super) fn by_day(
    site: &Site,
    days: &[SeasonDay],
    reaches_m: &[Option<f64>],
    threshold_c: f64,
) -> ColdWater {
    let one = |(day, reach): (&SeasonDay, &Option<f64>)| {
        let above = |from: f64| day.layers.colder_m3(&site.pool, threshold_c, from, day.pool_m);
        ColdDay { date: day.date, total_m3: above(site.pool.bed_m), usable_m3: reach.map(above) }
    };
    ColdWater { threshold_c, days: days.iter().zip(reaches_m).map(one).collect() }
}

/// What was left below a threshold on the first of every month, with the days outside hard targets that came after.
pub(super) fn left(site: &Site, cold: Option<&ColdWater>, targets: &[TargetTally]) -> Vec<Left> {
    let hard = || targets.iter().filter(|t| site.targets.get(t.target).is_some_and(|rule| !rule.soft));
    let of = |day: &ColdDay| Left {
        date: day.date,
        usable_m3: day.usable_m3,
        days_outside: hard().map(|t| t.days_outside_after(day.date)).sum(),
    };
    let first_of_month = |day: &&ColdDay| day.date.day() == 1;
    cold.into_iter().flat_map(|cold| cold.days.iter().filter(first_of_month).map(of)).collect()
}

/// First day on which usable water colder than a reserve asks is less than it keeps, from its day of the year to the end
/// of the season. Where no outlet is usable nothing of it is left to draw.
pub(super) fn under(reserve: &Reserve, cold: &ColdWater) -> Exhausted {
    let Some(last) = cold.days.last() else {
        return Exhausted::Unknown("the season has no day".to_owned());
    };
    let holds = |day: &&ColdDay| YearDay { month: day.date.month(), day: day.date.day() } >= reserve.from;
    let mut kept = cold.days.iter().skip_while(|day| !holds(day)).peekable();
    if kept.peek().is_none() {
        return Exhausted::Unknown(format!(
            "the reserve begins on {:02}-{:02}, after the season",
            reserve.from.month, reserve.from.day
        ));
    }
    kept.find(|day| day.usable_m3.unwrap_or(0.0) < reserve.volume_m3)
        .map_or(Exhausted::NotBy(last.date), |day| Exhausted::On(day.date))
}

impl Layers {
    /// Water colder than a threshold (C), and the rest, m3.
    pub(super) fn parted_m3(&self, threshold_c: f64) -> [f64; 2] {
        let of = |colder: bool| {
            let those = self.layers.iter().filter(|l| (l.temperature_c < threshold_c) == colder);
            those.map(|l| l.volume_m3).sum()
        };
        [of(true), of(false)]
    }

    /// The same pool with so much of its water (m3) colder than a threshold (C): every colder layer is given one factor,
    /// every other the one that keeps the volume of all; what grows too thick is cut. `None` where no water is colder, or
    /// all of it is.
    ///
    /// # Units
    /// m3, C.
    ///
    /// # References
    /// The heave of section 9 by volume instead of height, its knee at the threshold: ours (choice).
    #[must_use]
    pub fn with_cold(&self, site: &Site, threshold_c: f64, cold_m3: f64) -> Option<Self> {
        let [colder, warmer] = self.parted_m3(threshold_c);
        if colder <= 0.0 || warmer <= 0.0 {
            return None;
        }
        let cold_m3 = cold_m3.clamp(0.0, colder + warmer);
        let factor = |layer: &Layer| {
            if layer.temperature_c < threshold_c {
                cold_m3 / colder
            } else {
                (colder - cold_m3 + warmer) / warmer
            }
        };
        let mut out = self.clone();
        out.layers.iter_mut().for_each(|layer| layer.volume_m3 *= factor(layer));
        out.layers.retain(|layer| layer.volume_m3 > 0.0);
        let edges = out.edges_m(&site.pool);
        cut(&mut out, site, edges);
        Some(out)
    }
}
