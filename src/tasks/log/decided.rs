//! A decision with everything that was known when it was made.

use crate::mix::{Setting, Spread, TargetStanding};
use crate::problem::Problem;
use crate::rank::Progress;
use crate::record::METHOD;
use crate::record::line::{Considered, Decision, Expected, Gates, Known, Rule};
use crate::site::Site;
use crate::target::DAM;
use crate::tasks::rank::{RankAnswer, Shown, rank};
use crate::tasks::river::{Way, Which};
use crate::tasks::{Context, Failure, mix, now_setting};

use super::asked::DecisionAsked;

/// The decision that is asked, without what the user says of it, and what to know of it.
pub(super) fn decided(
    context: &Context,
    asked: &DecisionAsked,
    progress: Progress,
) -> Result<(Decision, Vec<Problem>), Failure> {
    let ranking = rank(context, &asked.ranked, progress)?;
    let (way, setting, mut said) = if asked.words.is_empty() {
        first(context, &ranking)?
    } else {
        let answer = mix(context, &asked.words)?;
        let said = answer.mix.warnings.clone();
        (Way::of_mix(context, Which::Tried, &answer), answer.setting, said)
    };
    // what makes the gates other than they should be, or than somebody named them
    said.retain(|p| matches!(p.kind, "limit" | "not-a-position" | "opening-assumed" | "event"));
    let site = context.site();
    let mixes = ranking.mixes.iter().map(|shown| considered(site, shown));
    let decision = Decision {
        id: 0,
        at: context.on,
        by: String::new(),
        from: context.on,
        until: None,
        trigger: None,
        why: String::new(),
        amends: None,
        withdrawn: false,
        known: known(context, &way),
        considered: mixes.collect(),
        chosen: gates(site, &setting),
        expected: expected(context, &way),
        version: env!("CARGO_PKG_VERSION").to_owned(),
        method: METHOD.to_owned(),
    };
    Ok((decision, said))
}

/// The first ranked mix.
fn first(context: &Context, ranking: &RankAnswer) -> Result<(Way, Setting, Vec<Problem>), Failure> {
    let Some(best) = ranking.mixes.first() else {
        let words = "no mix is allowed, so there is none to log";
        let problem = Problem::refused("no-mix", words, "name the gates with --set or --open");
        return Err(Failure::Refused(vec![problem], context.system));
    };
    Ok((Way::of_ranked(context, Which::Best, best), best.day.clone(), best.warnings.clone()))
}

fn known(context: &Context, way: &Way) -> Known {
    let site = context.site();
    Known {
        inputs: context.fingerprint.clone(),
        site: context.folder.fingerprint(&[]),
        profile: context.cast_fingerprint(),
        taken: context.profile.taken,
        plan: None,
        pool_m: context.profile.pool_m,
        release_m3s: way.flow_m3s(),
        before: now_setting(context).ok().map(|now| gates(site, &now.setting)),
        targets: way.targets.iter().filter_map(|standing| rule(site, standing)).collect(),
    }
}

fn rule(site: &Site, standing: &TargetStanding) -> Option<Rule> {
    let target = site.targets.get(standing.target)?;
    Some(Rule {
        name: target.name.clone(),
        point: target.point.clone(),
        low_c: standing.left_c[0],
        preferred_c: target.preferred_c,
        high_c: standing.left_c[1],
        oxygen_min_mg_l: standing.floor_mg_l,
        standing: standing.temperature.0.word().to_owned(),
        oxygen_standing: standing.oxygen.0.word().to_owned(),
    })
}

fn considered(site: &Site, shown: &Shown) -> Considered {
    let outside = shown.targets.iter().filter(|standing| standing.missed());
    Considered {
        gates: gates(site, &shown.day),
        temperature_c: shown.temperature_c,
        plain_temperature_c: shown.without.as_ref().map(|without| without.temperature_c),
        oxygen_mg_l: shown.oxygen_mg_l,
        moves: shown.change.as_ref().map(|change| change.moves.count),
        outside: outside.filter_map(|s| Some(site.targets.get(s.target)?.name.clone())).collect(),
    }
}

/// Gates by name, openings in percent.
pub(in crate::tasks) fn gates(site: &Site, setting: &Setting) -> Gates {
    let mut out = Gates::default();
    for gate in &setting.gates {
        if let Some(outlet) = site.outlets.get(gate.outlet) {
            out.set.insert(outlet.name.clone(), gate.flow_m3s);
            out.open.insert(outlet.name.clone(), 100.0 * gate.opening);
        }
    }
    out
}

/// What is expected at the dam and at every point of the river.
fn expected(context: &Context, way: &Way) -> Vec<Expected> {
    let pair = |range: Option<(f64, f64)>| range.map(|(low, high)| [low, high]);
    let of =
        |point: &str, temperature_c, plain_temperature_c, oxygen_mg_l, spread: Option<&Spread>| Expected {
            point: point.to_owned(),
            temperature_c,
            band_c: pair(spread.and_then(Spread::band_c)),
            plain_temperature_c,
            oxygen_mg_l,
            band_oxygen_mg_l: pair(spread.and_then(Spread::band_oxygen_mg_l)),
        };
    let plain_c = way.without.as_ref().map(|without| without.temperature_c);
    let mut out = vec![of(DAM, Some(way.temperature_c()), plain_c, way.oxygen_mg_l(), Some(&way.at_dam()))];
    let points = context.site().river.iter().flat_map(|river| &river.points).enumerate();
    for (index, point) in points {
        let arriving = || way.course.iter().flat_map(|course| &course.points);
        let figures = arriving().find(|at| at.point == index).map(|at| at.figures);
        let spread = arriving().zip(&way.spreads).find(|(at, _)| at.point == index).map(|(_, spread)| spread);
        let plain = way.without_course.iter().flat_map(|course| &course.points).find(|at| at.point == index);
        out.push(of(
            &point.name,
            figures.map(|f| f.mean_c),
            plain.map(|at| at.figures.mean_c),
            figures.and_then(|f| f.oxygen_mean_mg_l),
            spread,
        ));
    }
    out
}
