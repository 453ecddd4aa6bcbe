//! A setting judged: what stops it, what it gives, how it stands, and what to beware of.

use chrono::NaiveDate;

use crate::intake;
use crate::problem::Problem;
use crate::profile::{Column, Profile};
use crate::river::AtPoint;
use crate::site::{Outlet, Site};
use crate::units::{Dimension, say};
use crate::withdrawal::CrestForm;

use super::band::{Perturbed, Plain, Spread};
use super::beware;
use super::blend::{Blend, Drawn, draw_levels, release};
use super::conflict::Conflict;
use super::day::Day;
use super::levels::{Gate, Setting, groups, levels};
use super::limits::{self, Check, Of, Rule, Whole};
use super::standing::{Held, TargetStanding, held};

/// Flow over an ungated crest set by hand may differ from its rating by this share (choice).
const CREST_SHARE: f64 = 0.05;

/// A setting with everything computed from it.
#[derive(Debug, Clone, PartialEq)]
pub struct Mix {
    /// Levels from the lowest up.
    pub levels: Vec<Drawn>,
    /// The release.
    pub release: Blend,
    /// The perturbed cases.
    pub spread: Spread,
    /// The same with nothing learned, where something is.
    pub plain: Option<Plain>,
    /// Standing against every target valid on the date.
    pub targets: Vec<TargetStanding>,
    /// Hard targets that leave nothing in common.
    pub conflicts: Vec<Conflict>,
    /// What arrives at the points of the river that targets speak of.
    pub points: Vec<AtPoint>,
    /// Every limit that applies, kept or broken.
    pub limits: Vec<Check>,
    /// Limits that nobody gave or that what is known does not reach.
    pub not_checked: Vec<String>,
    /// What to beware of, limits broken included.
    pub warnings: Vec<Problem>,
}

/// Gates of a setting with their outlets, by name: the order in which they were typed shows nowhere.
fn by_name<'a>(site: &'a Site, setting: &'a Setting) -> Vec<(&'a Gate, &'a Outlet)> {
    let mut gates: Vec<(&Gate, &Outlet)> =
        setting.gates.iter().filter_map(|g| Some((g, site.outlets.get(g.outlet)?))).collect();
    gates.sort_by(|a, b| a.1.name.cmp(&b.1.name));
    gates
}

/// What makes a setting impossible under a pool: a gate out of the water, a flow above capacity. A pool below a
/// gate is no error in itself; naming that gate in a setting is.
pub fn refusals(site: &Site, setting: &Setting, pool_m: f64) -> Vec<Problem> {
    let mut out = Vec::new();
    for (gate, outlet) in by_name(site, setting) {
        let name = &outlet.name;
        if !intake::is_wet(outlet, gate.opening, pool_m) {
            let centre = outlet.open_part(gate.opening).centre_m;
            out.push(Problem::refused(
                "dry",
                format!(
                    "`{name}` at {} is dry, {} above the pool {}",
                    say::m(centre, 2),
                    say::m(centre - pool_m, 2),
                    say::m(pool_m, 2)
                ),
                "choose an outlet below the water",
            ));
            continue;
        }
        let free = intake::crest_flow_m3s(outlet, gate.opening, pool_m);
        if let (true, Some(free)) = (intake::spills_by_itself(outlet), free)
            && (gate.flow_m3s - free).abs() > CREST_SHARE * free
        {
            out.push(Problem::refused(
                "crest-flow",
                format!(
                    "`{name}` has no gates: at this pool it passes {}, not {}",
                    say::m3s(free, 2),
                    say::m3s(gate.flow_m3s, 2)
                ),
                "leave out its flow; it spills by itself",
            ));
            continue;
        }
        let most = intake::capacity_m3s(site, outlet, gate.opening, pool_m);
        if most.is_none() && !Dimension::Flow.is_plausible(gate.flow_m3s) {
            let words = format!("no outlet passes {} as set on `{name}`", say::m3s(gate.flow_m3s, 2));
            out.push(Problem::refused("capacity", words, "correct the flow"));
        }
        if let Some(most) = most
            && gate.flow_m3s > most * (1.0 + 1e-9)
        {
            out.push(Problem::refused(
                "capacity",
                format!(
                    "{} through `{name}` is above its capacity of {}",
                    say::m3s(gate.flow_m3s, 2),
                    say::m3s(most, 2)
                ),
                "lower the flow, or share it with another outlet",
            ));
        }
    }
    out
}

/// Judges a setting against a profile on a date. `None` when nothing flows.
pub fn judge(
    site: &Site,
    profile: &Profile,
    perturbed: &Perturbed,
    setting: &Setting,
    day: impl Into<Day>,
) -> Option<Mix> {
    let day: Day = day.into();
    let column = &profile.column;
    let groups = groups(site);
    let drawn = draw_levels(
        column,
        &levels(site, &groups, setting, profile.pool_m, 0.5, CrestForm::Overflow),
        site.zone_factor(),
    );
    let release = release(&drawn)?.aerated(site, &drawn, 0.5);
    let spread = perturbed.spread(site, &groups, setting, &release);
    let plain = perturbed.plain(column, &groups, setting);
    let Held { targets, conflicts, points, flags } = held(site, &[(1.0, &release, &spread)], &day);
    let limits = checks(site, column, setting, profile.pool_m, day.date, &drawn, &release);
    let mut warnings: Vec<Problem> = broken(site, &limits).collect();
    warnings.extend(conflicts.iter().map(|conflict| conflict.problem(site)));
    beware::zones(site, column, &drawn, &mut warnings);
    beware::overlaps(site, column, &drawn, &release, &mut warnings);
    beware::oxygen(site, &drawn, &release, &spread, &mut warnings);
    beware::gain(site, &drawn, &release, &mut warnings);
    beware::half_dry(site, setting, profile.pool_m, &mut warnings);
    beware::leaks(site, setting, &drawn, &mut warnings);
    beware::wells(site, &groups, setting, profile.pool_m, &mut warnings);
    beware::vortices(site, setting, profile.pool_m, &mut warnings);
    beware::cautions(site, column, &drawn, &mut warnings);
    warnings.extend(flags);
    let not_checked = limits::not_checked(site, column, setting, &drawn, &limits);
    Some(Mix {
        levels: drawn,
        release,
        spread,
        plain,
        targets,
        conflicts,
        points,
        limits,
        not_checked,
        warnings,
    })
}

/// Every limit that applies to a setting under a pool (m) on a date, by the names of outlets and wells; `drawn` and
/// `release` are what it gives. Limits of a change from another setting are [`limits::change`].
pub fn checks(
    site: &Site,
    column: &Column,
    setting: &Setting,
    pool_m: f64,
    date: NaiveDate,
    drawn: &[Drawn],
    release: &Blend,
) -> Vec<Check> {
    let mut out = Vec::new();
    let mut wells = vec![(0.0_f64, 0_usize); site.wells.len()];
    // a gate set to nothing is as good as shut
    let open: Vec<(&Gate, &Outlet)> =
        by_name(site, setting).into_iter().filter(|(gate, _)| setting.stands_open(site, gate)).collect();
    for (gate, outlet) in &open {
        limits::still(site, gate.outlet, gate.opening, pool_m, date, &mut out);
        limits::passing(site, gate.outlet, gate.opening, gate.flow_m3s, pool_m, &mut out);
        if let Some(well) = outlet.well {
            wells[well].0 += gate.flow_m3s;
            wells[well].1 += 1;
        }
    }
    let is_open = |outlet: usize| open.iter().any(|(gate, _)| gate.outlet == outlet);
    let mut shut: Vec<usize> =
        site.limits.reserved.iter().map(|r| r.outlet).filter(|&o| !is_open(o)).collect();
    shut.sort_unstable_by_key(|&o| &site.outlets[o].name);
    for outlet in shut {
        limits::passing(site, outlet, 0.0, 0.0, pool_m, &mut out);
    }
    for leak in &setting.leaks {
        if let Some(well) = site.outlets.get(leak.outlet).and_then(|o| o.well) {
            wells[well].0 += leak.flow_m3s;
        }
    }
    let mut order: Vec<usize> = (0..wells.len()).filter(|&w| wells[w].1 > 0).collect();
    order.sort_unstable_by_key(|&w| &site.wells[w].name);
    for well in order {
        limits::well(site, well, wells[well].1, wells[well].0, setting.head_m(well), &mut out);
    }
    for level in drawn {
        let first = level.level.outlets.iter().copied().find(|&o| is_open(o));
        if let (Some(zone), Some(outlet)) = (&level.zone, first) {
            limits::level(site, column, zone, Of::Outlet(outlet), &mut out);
        }
    }
    let through = |outlets: &[usize]| {
        open.iter().filter(|(gate, _)| outlets.contains(&gate.outlet)).map(|(gate, _)| gate.flow_m3s).sum()
    };
    let whole = Whole {
        flow_m3s: release.flow_m3s,
        temperature_c: release.temperature_c,
        // water without any solids is water whose solids nobody measured
        solids_mg_l: Some(release.solids_mg_l()).filter(|s| *s > 0.0),
        share_flows_m3s: site.limits.shares.iter().map(|rule| through(&rule.outlets)).collect(),
        before: None,
        moves: None,
    };
    limits::whole(site, pool_m, &whole, &mut out);
    out
}

/// Warnings of the limits broken.
fn broken<'a>(site: &'a Site, checks: &'a [Check]) -> impl Iterator<Item = Problem> + 'a {
    checks.iter().filter(|c| c.broken()).map(|c| Problem::flag("limit", c.words(site), c.cure()))
}

impl Mix {
    /// Takes the checks of a rule out, for a caller who knows better than the setting alone, with their warnings.
    pub fn drop_limits(&mut self, site: &Site, rule: Rule) {
        let dropped: Vec<Check> = self.limits.extract_if(.., |c| c.rule == rule).collect();
        self.warnings.retain(|w| !broken(site, &dropped).any(|b| b == *w));
    }

    /// Adds limits judged by a caller who knows more than the setting: the setting now, the head of a well. Warnings
    /// and what is not checked follow.
    pub fn add_limits(&mut self, site: &Site, column: &Column, setting: &Setting, checks: Vec<Check>) {
        self.warnings.extend(broken(site, &checks));
        self.limits.extend(checks);
        self.not_checked = limits::not_checked(site, column, setting, &self.levels, &self.limits);
    }
}
