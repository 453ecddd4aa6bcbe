//! What comes out of a setting.

use crate::mix::limits::Before;
use crate::mix::{Blend, Mix, Perturbed, Setting, judge};
use crate::problem::Problem;

use super::change::{Change, change};
use super::day::{DayAnswer, day};
use super::learned::Without;
use super::setting::{Understood, given, now_setting};
use super::words::{Given, Word};
use super::{Context, Failure};

/// The answer of `mix`.
#[derive(Debug, Clone)]
pub struct MixAnswer {
    /// What was set, with what each well makes of it.
    pub setting: Setting,
    /// The setting judged.
    pub mix: Mix,
    /// The release with nothing learned, where something is.
    pub without: Option<Without>,
    /// The setting now, judged the same way, where it is known and another.
    pub now: Option<(Setting, Mix)>,
    /// What the change from it takes.
    pub change: Option<Change>,
    /// The blocks of the day, where the site has any and openings alone were given; the setting and the mix are then
    /// those of the longest, the standings of the mix those of the day.
    pub day: Option<DayAnswer>,
}

/// What comes out of the setting that words say; without any, of the setting now.
///
/// # Errors
/// Words that cannot be understood or do not fit together; a gate above the water; a flow above capacity.
pub fn mix(context: &Context, words: &[Word]) -> Result<MixAnswer, Failure> {
    let site = context.site();
    if !words.is_empty() {
        return mix_given(context, &Given::typed(site, words, context.profile.pool_m)?);
    }
    let now = now_setting(context).map_err(|failure| match failure {
        Failure::Usage(why) => Failure::Usage(format!(
            "no setting: give --set GATE=FLOW, or --open GATE=PERCENT with --release FLOW; of the setting now, {why}"
        )),
        other => other,
    })?;
    answer(context, &perturbed(context), now, None)
}

/// What comes out of the setting that is given in numbers.
///
/// # Errors
/// As [`mix`].
pub fn mix_given(context: &Context, asked: &Given) -> Result<MixAnswer, Failure> {
    let perturbed = perturbed(context);
    let Some((day, notes)) = day(context, &perturbed, asked)? else {
        return answer(context, &perturbed, given(context, asked)?, None);
    };
    // the words above the day speak of its longest block
    match day.blocks.iter().rev().max_by(|a, b| a.share.total_cmp(&b.share)) {
        None => answer(context, &perturbed, given(context, asked)?, None),
        Some(longest) => {
            let longest = Understood { setting: longest.setting.clone(), notes };
            answer(context, &perturbed, longest, Some(day))
        }
    }
}

fn perturbed(context: &Context) -> Perturbed {
    Perturbed::new(context.site(), &context.profile, context.age_days)
}

fn answer(
    context: &Context,
    perturbed: &Perturbed,
    understood: Understood,
    day: Option<DayAnswer>,
) -> Result<MixAnswer, Failure> {
    let site = context.site();
    let judged = judge(site, &context.profile, perturbed, &understood.setting, context.day());
    let Some(mut mix) = judged else {
        let problem = Problem::refused("no-flow", "nothing flows in this setting", "give a flow above zero");
        return Err(Failure::Refused(vec![problem], context.system));
    };
    mix.warnings.extend(understood.notes);
    mix.warnings.extend(context.rules_off());
    mix.warnings.extend(context.record_flags());
    let (now, why_not) = judged_now(context, perturbed, &understood.setting);
    mix.warnings.extend(why_not);
    let change = now.as_ref().map(|(now, was)| {
        let Blend { flow_m3s, temperature_c, .. } = was.release;
        let before = Before { flow_m3s: Some(flow_m3s), temperature_c: Some(temperature_c) };
        let mut checks = Vec::new();
        let change = change(
            site,
            (now, before),
            &understood.setting,
            &[mix.release],
            context.on.date_naive(),
            &mut checks,
        );
        mix.add_limits(site, &context.profile.column, &understood.setting, checks);
        change
    });
    if let Some(day) = &day {
        mix.targets.clone_from(&day.held.targets);
        mix.points.clone_from(&day.held.points);
        mix.conflicts.clone_from(&day.held.conflicts);
        mix.warnings.extend(other_blocks(day, &mix.warnings));
    }
    let without = Without::of(std::iter::once((1.0, &mix)));
    Ok(MixAnswer { setting: understood.setting, mix, without, now, change, day })
}

/// Limits that blocks other than the longest miss.
fn other_blocks(day: &DayAnswer, told: &[Problem]) -> Vec<Problem> {
    let mut out: Vec<Problem> = Vec::new();
    for problem in day.blocks.iter().flat_map(|b| &b.mix.warnings).filter(|p| p.kind == "limit") {
        if !told.contains(problem) && !out.contains(problem) {
            out.push(problem.clone());
        }
    }
    out
}

/// The setting now judged beside another, or why it cannot be shown.
fn judged_now(
    context: &Context,
    perturbed: &Perturbed,
    tried: &Setting,
) -> (Option<(Setting, Mix)>, Option<Problem>) {
    let why = match now_setting(context) {
        Ok(now) if same(&now.setting, tried) => return (None, None),
        Ok(now) => match judge(context.site(), &context.profile, perturbed, &now.setting, context.day()) {
            Some(mix) => return (Some((now.setting, mix)), None),
            None => "nothing flows in it".to_owned(),
        },
        Err(Failure::Usage(why)) => why,
        Err(Failure::Stopped) => String::new(),
        Err(Failure::Refused(problems, _)) => problems.first().map_or_else(String::new, |p| p.words.clone()),
    };
    (None, Some(Problem::note("now-not-shown", format!("the setting now is not shown: {why}"))))
}

/// Whether two settings are one: the same gates, as far open, with the same flows.
pub(super) fn same(a: &Setting, b: &Setting) -> bool {
    let gates = |s: &Setting| {
        let mut gates: Vec<(usize, u64, u64)> =
            s.gates.iter().map(|g| (g.outlet, g.opening.to_bits(), g.flow_m3s.to_bits())).collect();
        gates.sort_unstable();
        gates
    };
    gates(a) == gates(b)
}
