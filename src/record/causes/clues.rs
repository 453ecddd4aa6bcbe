//! What is known of the days on which the gauge lay outside the band.

use chrono::NaiveDate;

use crate::intake;
use crate::mix::{Gate, Setting, draw_levels, levels, release};
use crate::profile::Profile;
use crate::site::Site;
use crate::withdrawal::CrestForm;

/// One day outside.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Clue {
    /// The date.
    pub date: NaiveDate,
    /// Release expected, C.
    pub expected_c: f64,
    /// Its band, C.
    pub band_c: (f64, f64),
    /// Mean of the day at the gauge, C.
    pub measured_c: f64,
    /// Flow released as it was set, m3/s.
    pub flow_m3s: f64,
    /// Age of the cast, days.
    pub age_days: i64,
    /// Its file.
    pub cast: String,
    /// Warmest less coldest water of the cast, C.
    pub cast_range_c: f64,
    /// Readings of the gauge in the course of the day, C; their time in hours.
    pub readings: Vec<(f64, f64)>,
    /// Mean, least and greatest flow at the gauge, m3/s.
    pub gauge_flow_m3s: Option<(f64, f64, f64)>,
    /// Release if one gate stood otherwise, C, by what is otherwise.
    pub otherwise_c: Vec<(String, f64)>,
    /// Water before each level that is shut, C, by its outlets.
    pub shut_c: Vec<(String, f64)>,
    /// Least and greatest release as the layers heave, nothing else in doubt, C.
    pub heave_c: Option<(f64, f64)>,
    /// Days to the next cast, and the release on its water, C.
    pub next_c: Option<(i64, f64)>,
    /// Whether the oxygen of the gauge lay inside its band.
    pub oxygen_inside: Option<bool>,
}

impl Clue {
    /// Measured less expected, C.
    pub fn off_c(&self) -> f64 {
        self.measured_c - self.expected_c
    }

    /// Half the width of the band, C.
    pub(super) fn half_c(&self) -> f64 {
        0.5 * (self.band_c.1 - self.band_c.0)
    }

    /// By how much the gauge moved in the course of the day, C.
    pub(super) fn range_c(&self) -> Option<f64> {
        range(&self.readings)
    }

    /// Longest time without the smallest change, hours.
    pub(super) fn flat_h(&self) -> f64 {
        let run =
            |run: &[(f64, f64)]| run.last().zip(run.first()).map_or(0.0, |(last, first)| last.0 - first.0);
        self.readings.chunk_by(|a, b| a.1.to_bits() == b.1.to_bits()).map(run).fold(0.0, f64::max)
    }
}

/// Greatest less least of some readings, by their time in hours; `None` of fewer than three.
pub fn range(readings: &[(f64, f64)]) -> Option<f64> {
    let values = || readings.iter().map(|reading| reading.1);
    let (least, greatest) = (values().reduce(f64::min)?, values().reduce(f64::max)?);
    // two readings tell no day
    (readings.len() > 2).then_some(greatest - least)
}

/// A jump of the gauge from one reading to the next.
#[derive(Debug, Clone, PartialEq)]
pub struct Step {
    /// When, in words.
    pub at: String,
    /// By how much, C.
    pub by_c: f64,
    /// Whether gates were changed by the log on that day.
    pub decided: bool,
}

/// A spell outside the band with what is known beside it.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Clues {
    /// Days outside, or some of many, by date.
    pub days: Vec<Clue>,
    /// By how much the gauge moves in a day that lies inside, C: the middle one of them.
    pub usual_range_c: Option<f64>,
    /// How far the gauge jumps between readings on a day inside, C: the middle one of them.
    pub usual_step_c: Option<f64>,
    /// Greatest jump as the spell begins.
    pub step: Option<Step>,
    /// Days inside the band just before or after with the same gates.
    pub same_inside: usize,
    /// Whether the mixed pool speaks against a sensor of these days.
    pub suspect: bool,
    /// How long the layers take to swing, hours.
    pub period_h: Option<f64>,
    /// Least and greatest release of the parts of the day that the site tells, m3/s.
    pub blocks_m3s: Option<(f64, f64)>,
}

/// Release if one gate stood otherwise, C: one shut and its flow through the others, one opened that is shut, or one in
/// the place of another. The release as a whole stays.
///
/// # Units
/// Temperatures C.
///
/// # References
/// A choice of what one gate can be wrong by; the release as of any setting (methods section 4).
pub fn otherwise(
    site: &Site,
    groups: &[Vec<usize>],
    profile: &Profile,
    gates: &[Gate],
) -> Vec<(String, f64)> {
    let open: Vec<&Gate> = gates.iter().filter(|gate| gate.flow_m3s > 0.0).collect();
    let name = |outlet: usize| site.outlets.get(outlet).map_or("", |o| o.name.as_str());
    let is_free = |(index, outlet): &(usize, &crate::site::Outlet)| {
        !open.iter().any(|gate| gate.outlet == *index)
            && !intake::spills_by_itself(outlet)
            && intake::is_wet(outlet, 1.0, profile.pool_m)
    };
    let free: Vec<usize> = site.outlets.iter().enumerate().filter(is_free).map(|(index, _)| index).collect();
    let total: f64 = open.iter().map(|gate| gate.flow_m3s).sum();
    let others = |without: Option<usize>, flow_m3s: f64| -> Vec<Gate> {
        let kept = open.iter().filter(|gate| Some(gate.outlet) != without);
        let carried: f64 = kept.clone().map(|gate| gate.flow_m3s).sum();
        let times = if carried > 0.0 { flow_m3s / carried } else { 0.0 };
        kept.map(|gate| Gate { flow_m3s: gate.flow_m3s * times, ..**gate }).collect()
    };
    let mut ways: Vec<(String, Vec<Gate>)> = Vec::new();
    for gate in &open {
        if open.len() > 1 {
            ways.push((format!("{} shut", name(gate.outlet)), others(Some(gate.outlet), total)));
        }
        for &outlet in &free {
            let mut gates = others(Some(gate.outlet), total - gate.flow_m3s);
            gates.push(Gate { outlet, opening: 1.0, flow_m3s: gate.flow_m3s });
            ways.push((format!("{} in the place of {}", name(outlet), name(gate.outlet)), gates));
        }
    }
    for &outlet in &free {
        let share = total / (open.len() + 1) as f64;
        let mut gates = others(None, total - share);
        gates.push(Gate { outlet, opening: 1.0, flow_m3s: share });
        ways.push((format!("{} open as well", name(outlet)), gates));
    }
    let of = |(words, gates): (String, Vec<Gate>)| {
        let levels = levels(site, groups, &Setting::of(gates), profile.pool_m, 0.5, CrestForm::Overflow);
        let release = release(&draw_levels(&profile.column, &levels, 1.0))?;
        Some((words, release.temperature_c))
    };
    ways.into_iter().filter_map(of).collect()
}
