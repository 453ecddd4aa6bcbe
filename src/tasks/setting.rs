//! From what is typed, or stands under `now` in the site file, to the flows of a setting.

use crate::intake::{self, ASSUMED_DISCHARGE};
use crate::mix::{Asked, Gate, Setting, groups, refusals, resolve};
use crate::problem::Problem;
use crate::profile::Profile;
use crate::site::{SAME_OPENING, Site};
use crate::units::{Dimension, say};

use super::words::{ByFlow, Given, Word};
use super::{Context, Failure};

/// A setting understood: its flows, and what was assumed on the way to them.
#[derive(Debug, Clone, PartialEq)]
pub struct Understood {
    /// Every flow, the wells' totals shared out.
    pub setting: Setting,
    /// What was assumed, as notes and flags.
    pub notes: Vec<Problem>,
}

/// The setting that words say, whatever their order.
///
/// # Errors
/// Words that cannot be understood or do not fit together; a gate above the water; a flow above capacity.
pub fn setting(context: &Context, words: &[Word]) -> Result<Understood, Failure> {
    given(context, &Given::typed(context.site(), words, context.profile.pool_m)?)
}

/// The setting now: that of the last decision in the log, else as the site file gives it.
///
/// # Errors
/// As [`setting`]; [`Failure::Usage`] too where there is none.
pub fn now_setting(context: &Context) -> Result<Understood, Failure> {
    let (now, said) = context.now_given();
    if now == Given::default() {
        return Err(Failure::Usage("no decision is logged, and the site file gives none under `now`".into()));
    }
    let mut understood = given(context, &now)?;
    understood.notes.extend(said);
    Ok(understood)
}

/// The setting that is given in numbers.
///
/// # Errors
/// As [`setting`].
pub fn given(context: &Context, given: &Given) -> Result<Understood, Failure> {
    let (site, pool_m) = (context.site(), context.profile.pool_m);
    let refused = |problems: Vec<Problem>| Err(Failure::Refused(problems, context.system));
    let totals = totals(site, given)?;
    let mut problems = impossible_totals(site, &totals);
    let mut asked = Asked { totals, ..Asked::default() };
    let mut notes = Vec::new();
    let flow_of = |&ByFlow { outlet, flow_m3s, opening }: &ByFlow| Gate {
        outlet,
        opening: opening.unwrap_or(1.0),
        flow_m3s,
    };
    asked.direct.extend(given.flows.iter().map(flow_of));
    for g in &given.flows {
        notes.extend(g.opening.and_then(|opening| not_a_position(site, g.outlet, opening)));
        if g.opening.is_some_and(|opening| opening <= 0.0) && g.flow_m3s > 0.0 {
            problems.push(shut_with_flow(site, g.outlet));
        }
    }
    let mut by_opening = Vec::new();
    for &(outlet, opening) in &given.open {
        let o = &site.outlets[outlet];
        notes.extend(not_a_position(site, outlet, opening));
        if o.well.is_some() {
            asked.open.extend((opening > 0.0).then_some((outlet, opening)));
        } else if opening > 0.0 || intake::spills_by_itself(o) {
            match intake::opening_flow_m3s(o, opening, pool_m).filter(|_| opening > 0.0) {
                Some(flow_m3s) => asked.direct.push(Gate { outlet, opening, flow_m3s }),
                None => problems.push(no_flow_of(site, outlet, opening)),
            }
            by_opening.push(outlet);
        }
    }
    spill(site, pool_m, &mut asked);
    let mut told = by_opening.clone();
    told.extend(given.flows.iter().filter(|g| g.opening.is_some()).map(|g| g.outlet));
    notes.extend(assumed_open(site, &asked.direct, &told));
    notes.extend(flow_computed(site, &by_opening));
    // a gate above the water is no port of its well, so it is told before the wells share out
    let mut gates = asked.direct.clone();
    gates.extend(asked.open.iter().map(|&(outlet, opening)| Gate { outlet, opening, flow_m3s: 0.0 }));
    problems.extend(refusals(site, &Setting::of(gates), pool_m));
    if !problems.is_empty() {
        return refused(problems);
    }
    let setting = resolve(site, &context.profile.column, &groups(site), &asked, pool_m);
    let problems = refusals(site, &setting, pool_m);
    if problems.is_empty() { Ok(Understood { setting, notes }) } else { refused(problems) }
}

/// The flows of gates as they once stood, under the pool and on the water of a cast: whatever limit stood against it.
pub(super) fn as_it_was(site: &Site, profile: &Profile, gates: &[Gate]) -> Setting {
    let mut asked = Asked { direct: gates.to_vec(), ..Asked::default() };
    spill(site, profile.pool_m, &mut asked);
    resolve(site, &profile.column, &groups(site), &asked, profile.pool_m)
}

/// Totals of the wells, once it is sure that each gate and each well is set in one way.
fn totals(site: &Site, given: &Given) -> Result<Vec<(usize, f64)>, Failure> {
    let usage = |words: String| Err(Failure::Usage(words));
    if let Some(&(outlet, _)) = given.open.iter().find(|(o, _)| given.flows.iter().any(|g| g.outlet == *o)) {
        let name = &site.outlets[outlet].name;
        return usage(format!("`{name}` is given a flow and an opening; give one of them"));
    }
    let is_on = |well: usize| move |g: &&(usize, f64)| site.outlets[g.0].well == Some(well);
    let mut totals = given.totals.clone();
    let opened: Vec<usize> = (0..site.wells.len())
        .filter(|&well| given.open.iter().filter(is_on(well)).any(|g| g.1 > 0.0))
        .collect();
    if let Some(flow_m3s) = given.release_m3s {
        let beside = !given.flows.is_empty()
            || !totals.is_empty()
            || given.open.iter().any(|g| site.outlets[g.0].well.is_none());
        match opened[..] {
            [well] if !beside => totals.push((well, flow_m3s)),
            _ => {
                let words = "--release stands for the total of a well only where one well has open gates and nothing else is set; give gates with --open, and each well's total with --set";
                return usage(words.into());
            }
        }
    }
    for (index, well) in site.wells.iter().enumerate() {
        let name = &well.name;
        let total = totals.iter().any(|t| t.0 == index);
        let by_flow = given.flows.iter().find(|g| site.outlets[g.outlet].well == Some(index));
        let by_flow = by_flow.map(|g| &site.outlets[g.outlet].name);
        let open = opened.contains(&index);
        match (total, open, by_flow) {
            (_, true, Some(gate)) => {
                return usage(format!(
                    "well `{name}`: {gate} is given a flow and another gate an opening; give flows of its gates, or openings and the well's total"
                ));
            }
            (true, _, Some(gate)) => {
                return usage(format!(
                    "well `{name}` is given a total and {gate} a flow; give flows of its gates, or openings and the well's total"
                ));
            }
            (false, true, None) => {
                return usage(format!(
                    "well `{name}` has an open gate and no total; give what it is to carry (--set {name}=30; under `now`, {name}: 30)"
                ));
            }
            (true, false, None) => {
                return usage(format!(
                    "well `{name}` is given a total and none of its gates is open; give an opening of one"
                ));
            }
            _ => {}
        }
    }
    Ok(totals)
}

fn impossible_totals(site: &Site, totals: &[(usize, f64)]) -> Vec<Problem> {
    totals
        .iter()
        .filter(|(_, flow)| !Dimension::Flow.is_plausible(*flow))
        .map(|&(well, flow)| {
            let words = format!("no well passes {} as set on `{}`", say::m3s(flow, 2), site.wells[well].name);
            Problem::refused("capacity", words, "correct the flow")
        })
        .collect()
}

/// An opening that no position of the gate has. Shut it can always be.
fn not_a_position(site: &Site, outlet: usize, opening: f64) -> Option<Problem> {
    let o = &site.outlets[outlet];
    let stands = o.positions.iter().any(|p| (p.opening - opening).abs() < SAME_OPENING);
    (opening > 0.0 && !stands && !o.positions.is_empty()).then(|| {
        let positions: Vec<String> = o.positions.iter().map(|p| o.opening_name(p.opening)).collect();
        Problem::flag(
            "not-a-position",
            format!(
                "{}: {} is none of its positions ({})",
                o.name,
                o.opening_name(opening),
                positions.join(", ")
            ),
            "the crew cannot set it so",
        )
    })
}

fn no_flow_of(site: &Site, outlet: usize, opening: f64) -> Problem {
    let o = &site.outlets[outlet];
    let words = if intake::spills_by_itself(o) {
        format!("`{}` has no gates: it cannot stand at {}", o.name, o.opening_name(opening))
    } else {
        format!("the flow under the gate of `{}` at {} is not computed", o.name, o.opening_name(opening))
    };
    Problem::refused("opening", words, "open it fully or to one of its crests, or give its flow")
}

/// A crest without gates spills whenever the pool stands above it, set or not.
fn spill(site: &Site, pool_m: f64, asked: &mut Asked) {
    for (outlet, o) in site.outlets.iter().enumerate() {
        let set = asked.direct.iter().any(|g| g.outlet == outlet);
        if !set && intake::spills_by_itself(o) {
            let flow_m3s = intake::crest_flow_m3s(o, 1.0, pool_m).unwrap_or(0.0);
            if flow_m3s > 0.0 {
                asked.direct.push(Gate { outlet, opening: 1.0, flow_m3s });
            }
        }
    }
}

fn shut_with_flow(site: &Site, outlet: usize) -> Problem {
    let words = format!("`{}` is shut and given a flow", site.outlets[outlet].name);
    Problem::refused("opening", words, "open it, or give it no flow")
}

/// Gates set by flow alone are taken fully open, and the output says so.
fn assumed_open(site: &Site, direct: &[Gate], by_opening: &[usize]) -> Option<Problem> {
    let gates = direct.iter().map(|g| g.outlet).filter(|outlet| {
        let o = &site.outlets[*outlet];
        let set = !o.is_crest() || o.positions.iter().any(|p| p.crest_m.is_some());
        set && !by_opening.contains(outlet)
    });
    let names = names(site, gates)?;
    Some(Problem::note("opening-assumed", format!("set by flow, taken fully open: {names}")))
}

/// Outlets on no well that are set by opening alone pass what that opening lets through.
fn flow_computed(site: &Site, by_opening: &[usize]) -> Option<Problem> {
    let names = names(site, by_opening.iter().copied())?;
    let assumed =
        by_opening.iter().any(|&i| !site.outlets[i].is_crest() && site.outlets[i].discharge.is_none());
    let coefficient =
        if assumed { format!(" (discharge coefficient {ASSUMED_DISCHARGE} assumed)") } else { String::new() };
    let words = format!("set by opening, its flow what that lets through at this pool{coefficient}: {names}");
    Some(Problem::note("flow-computed", words))
}

fn names(site: &Site, outlets: impl Iterator<Item = usize>) -> Option<String> {
    let mut names: Vec<&str> = outlets.map(|i| site.outlets[i].name.as_str()).collect();
    names.sort_unstable();
    (!names.is_empty()).then(|| names.join(", "))
}
