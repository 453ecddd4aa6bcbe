//! What comes out of a setting.

use crate::intake;
use crate::mix::{Gate, Mix, Perturbed, Setting, judge, refusals};
use crate::problem::Problem;
use crate::site::{SetNow, Site};
use crate::units::Dimension;

use super::{Context, Failure};

/// The answer of `mix`.
#[derive(Debug, Clone)]
pub struct MixAnswer {
    /// What was set.
    pub setting: Setting,
    /// The setting judged.
    pub mix: Mix,
    /// The setting now, judged the same way, where it is known and another.
    pub now: Option<(Setting, Mix)>,
}

/// What comes out. `sets` are gates and flows as typed (`N1=30`, `Sluice=5cfs`, a bare crest name); none means the
/// setting now.
///
/// # Errors
/// Words that cannot be understood; a gate above the water; a flow above capacity.
pub fn mix(context: &Context, sets: &[String]) -> Result<MixAnswer, Failure> {
    let site = context.site();
    let now = now_setting(site);
    let mut setting = if sets.is_empty() {
        now.clone().ok_or_else(|| {
            Failure::Usage("no setting: give --set GATE=FLOW, or flows under `now` in site.yaml".into())
        })?
    } else {
        parse_setting(site, sets, context.profile.pool_m)?
    };
    spill(site, context.profile.pool_m, &mut setting);
    let refused = refusals(site, &setting, context.profile.pool_m);
    if !refused.is_empty() {
        return Err(Failure::Refused(refused, context.system));
    }
    let perturbed = Perturbed::new(site, &context.profile, context.age_days);
    let date = context.on.date_naive();
    let judged = judge(site, &context.profile, &perturbed, &setting, date);
    let Some(mut mix) = judged else {
        let problem = Problem::refused("no-flow", "nothing flows in this setting", "give a flow above zero");
        return Err(Failure::Refused(vec![problem], context.system));
    };
    mix.warnings.extend(opening_note(site, &setting));
    let (now, why_not) = judged_now(context, &perturbed, &setting);
    mix.warnings.extend(why_not);
    Ok(MixAnswer { setting, mix, now })
}

/// The setting now judged beside another, or why it cannot be shown.
fn judged_now(
    context: &Context,
    perturbed: &Perturbed,
    tried: &Setting,
) -> (Option<(Setting, Mix)>, Option<Problem>) {
    let site = context.site();
    let unshown = |why: String| {
        (None, Some(Problem::note("now-not-shown", format!("the setting now is not shown: {why}"))))
    };
    if site.now.is_empty() && site.now_wells.is_empty() {
        return unshown("the site file gives none under `now`".into());
    }
    let Some(mut now) = now_setting(site) else {
        return unshown(
            "it is given in openings or a well's total, and the flows they make are not computed".into(),
        );
    };
    spill(site, context.profile.pool_m, &mut now);
    if let Some(problem) = refusals(site, &now, context.profile.pool_m).first() {
        return unshown(problem.words.clone());
    }
    if same(&now, tried) {
        return (None, None);
    }
    let judged = judge(site, &context.profile, perturbed, &now, context.on.date_naive());
    (judged.map(|mix| (now, mix)), None)
}

/// Gates set by flow alone are taken fully open, and the output says so.
fn opening_note(site: &Site, setting: &Setting) -> Option<Problem> {
    let mut names: Vec<&str> = setting
        .gates
        .iter()
        .filter_map(|g| site.outlets.get(g.outlet))
        .filter(|o| !o.is_crest() || o.positions.iter().any(|p| p.crest_m.is_some()))
        .map(|o| o.name.as_str())
        .collect();
    names.sort_unstable();
    (!names.is_empty()).then(|| {
        Problem::note("opening-assumed", format!("set by flow, taken fully open: {}", names.join(", ")))
    })
}

fn same(a: &Setting, b: &Setting) -> bool {
    let flows = |s: &Setting| {
        let mut flows: Vec<(usize, u64)> = s.gates.iter().map(|g| (g.outlet, g.flow_m3s.to_bits())).collect();
        flows.sort_unstable();
        flows
    };
    flows(a) == flows(b)
}

/// The setting now, where the site gives it in flows.
pub fn now_setting(site: &Site) -> Option<Setting> {
    // a well's total is no flow of any one gate
    if !site.now_wells.is_empty() {
        return None;
    }
    let gates: Vec<Gate> = site
        .now
        .iter()
        .map(|(outlet, set)| match set {
            SetNow::Flow(flow_m3s) => Some(Gate { outlet: *outlet, opening: 1.0, flow_m3s: *flow_m3s }),
            SetNow::Opening(_) => None,
        })
        .collect::<Option<_>>()?;
    let gates: Vec<Gate> = gates.into_iter().filter(|g| g.flow_m3s > 0.0).collect();
    (!gates.is_empty()).then_some(Setting::of(gates))
}

/// A crest without gates spills whenever the pool stands above it, set or not.
fn spill(site: &Site, pool_m: f64, setting: &mut Setting) {
    for (outlet, o) in site.outlets.iter().enumerate() {
        let set = setting.gates.iter().any(|g| g.outlet == outlet);
        if !set && intake::spills_by_itself(o) {
            let flow_m3s = intake::crest_flow_m3s(o, 1.0, pool_m).unwrap_or(0.0);
            if flow_m3s > 0.0 {
                setting.gates.push(Gate { outlet, opening: 1.0, flow_m3s });
            }
        }
    }
}

fn parse_setting(site: &Site, sets: &[String], pool_m: f64) -> Result<Setting, Failure> {
    let mut gates: Vec<Gate> = Vec::new();
    for set in sets {
        let (name, flow) = match set.split_once('=') {
            Some((name, flow)) => (name.trim(), Some(flow.trim())),
            None => (set.trim(), None),
        };
        let Some(outlet) = site.outlet(name) else {
            let names: Vec<&str> = site.outlets.iter().map(|o| o.name.as_str()).collect();
            return Err(Failure::Usage(format!(
                "--set {set}: no gate is named `{name}`; there are {}",
                names.join(", ")
            )));
        };
        if gates.iter().any(|g| g.outlet == outlet) {
            return Err(Failure::Usage(format!("--set {set}: `{name}` is set twice")));
        }
        let flow_m3s = match flow {
            Some(text) => site
                .units
                .parse(text, Dimension::Flow)
                .map_err(|error| Failure::Usage(format!("--set {set}: {error}")))?,
            None if intake::spills_by_itself(&site.outlets[outlet]) => {
                intake::crest_flow_m3s(&site.outlets[outlet], 1.0, pool_m).unwrap_or(0.0)
            }
            None => return Err(Failure::Usage(format!("--set {set}: give a flow, such as {name}=30"))),
        };
        if flow_m3s < 0.0 {
            return Err(Failure::Usage(format!("--set {set}: a flow cannot be negative")));
        }
        gates.push(Gate { outlet, opening: 1.0, flow_m3s });
    }
    Ok(Setting::of(gates))
}
