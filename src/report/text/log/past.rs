//! What happened, in words: scores, days left out, spells outside the band, the season gone through again. The lines are
//! made for the command and the screens alike.

use chrono::{Month, NaiveDate};

use crate::mix::groups;
use crate::problem::harmless;
use crate::record::Score;
use crate::report::text::flow;
use crate::report::text::river::amounts::degree_days;
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::log::{Cause, Hindcast, Past, Scored, Spell, Turned};
use crate::units::{Dimension, System, figure, in_system, show};

/// Spells told in full; the rest are counted (choice).
const SPELLS: usize = 5;

/// A bias or an error of temperature.
pub(in crate::report) fn apart(c: f64, system: System) -> String {
    show(c, Dimension::TemperatureDifference, system, 2)
}

/// The same with its sign.
pub(in crate::report) fn signed(c: f64, system: System) -> String {
    let told = apart(c, system);
    if c > 0.0 && !told.starts_with('-') { format!("+{told}") } else { told }
}

/// `12 days`, `1 day`.
pub(in crate::report) fn count(days: usize) -> String {
    format!("{days} day{}", if days == 1 { "" } else { "s" })
}

/// Dates as a sentence gives them.
pub(in crate::report) fn span((from, to): (NaiveDate, NaiveDate)) -> String {
    if from == to { from.to_string() } else { format!("{from} to {to}") }
}

/// How a decision turned out, a line for each place with a gauge.
pub fn turned(turned: &Turned, system: System) -> Vec<String> {
    let of = |score: &Score, is_oxygen: bool| {
        let misfit = score.misfit?;
        let (bias, rmse) = if is_oxygen {
            (format!("{:+.2} mg/L", misfit.bias), format!("{:.2} mg/L", misfit.rmse))
        } else {
            (signed(misfit.bias, system), apart(misfit.rmse, system))
        };
        let inside = if score.with_band > 0 {
            format!(", inside the band it wrote on {} of {}", score.inside, score.with_band)
        } else {
            String::new()
        };
        Some(format!("gauge beside it {bias} on the mean, {rmse} root mean square{inside}"))
    };
    let place = |(point, warmth, breath): &(String, Score, Score)| {
        let at = harmless(point);
        let warmth = of(warmth, false).map(|words| format!("at {at}, {}: {words}", count(warmth.n)));
        let breath = of(breath, true).map(|words| format!("at {at}, oxygen, {}: {words}", count(breath.n)));
        warmth.into_iter().chain(breath).collect::<Vec<_>>()
    };
    turned.places.iter().flat_map(place).collect()
}

/// The table of scores: a heading, then a row for all days, with what is learned, and by level, flow and month.
pub fn scores(context: &Context, past: &Past) -> Vec<String> {
    let (site, system) = (context.site(), context.system);
    if past.temperature.all.n == 0 && past.oxygen.all.n == 0 {
        return Vec::new();
    }
    let unit = system.unit(Dimension::TemperatureDifference);
    let mut out = vec![
        format!("{:<21}{:>27}   {:>27}", "", format!("temperature, {unit}"), "oxygen, mg/L"),
        format!(
            "{:<21}{:>5}{:>8}{:>7}{:>7}   {:>5}{:>8}{:>7}{:>7}",
            "", "n", "bias", "RMSE", "inside", "n", "bias", "RMSE", "inside"
        ),
    ];
    let mut row = |name: String, warmth: Option<&Score>, breath: Option<&Score>| {
        let half = |score: Option<&Score>, in_c: bool| {
            let said = |value: f64| if in_c { figure(value, unit, 2) } else { format!("{value:.2}") };
            let n = score.map_or(0, |score| score.n);
            let Some((score, misfit)) = score.and_then(|score| Some((score, score.misfit?))) else {
                return format!("{n:>5}{:>8}{:>7}{:>7}", "-", "-", "-");
            };
            let inside = score.share_inside().map_or("-".into(), |share| format!("{:.0}%", 100.0 * share));
            format!("{n:>5}{:>8}{:>7}{inside:>7}", said(misfit.bias), said(misfit.rmse))
        };
        out.push(format!("{name:<21}{}   {}", half(warmth, true), half(breath, false)));
    };
    row("All days".into(), Some(&past.temperature.all), Some(&past.oxygen.all));
    if let Some((warmth, breath)) = &past.with_applied {
        row("with what is applied".into(), Some(warmth), Some(breath));
    }
    if let Some((warmth, breath)) = &past.with_learned {
        row("with what is learned*".into(), Some(warmth), Some(breath));
    }
    for (level, score) in &past.temperature.by_level {
        let breath = past.oxygen.by_level.iter().find(|other| other.0 == *level).map(|other| &other.1);
        row(cut(&format!("most from {}", level_name(site, *level))), Some(score), breath);
    }
    for (at, class) in past.temperature.by_flow.iter().enumerate() {
        let [low, high] = [class.flow_m3s.0, class.flow_m3s.1].map(|m3s| flow(m3s, system));
        let low = low.split(' ').next().unwrap_or_default().to_owned();
        row(format!("{low} to {high}"), Some(&class.score), past.oxygen.by_flow.get(at).map(|c| &c.score));
    }
    for (month, score) in &past.temperature.by_month {
        let name = u8::try_from(*month).ok().and_then(|m| Month::try_from(m).ok()).map_or("", |m| m.name());
        let breath = past.oxygen.by_month.iter().find(|other| other.0 == *month).map(|other| &other.1);
        row(name.to_owned(), Some(score), breath);
    }
    if past.with_learned.is_some() {
        out.push("* fitted on these very days; the errors on days left out stand below".into());
    }
    out
}

fn cut(name: &str) -> String {
    let name = harmless(name);
    if name.chars().count() <= 21 { name } else { name.chars().take(20).chain(['.']).collect() }
}

/// The outlets of a level.
pub fn level_name(site: &Site, level: usize) -> String {
    let names = groups(site);
    let outlets = names.get(level).into_iter().flatten().filter_map(|&i| site.outlets.get(i));
    harmless(&outlets.map(|outlet| outlet.name.as_str()).collect::<Vec<_>>().join("/"))
}

/// Days left out of scores and of learning, a line for each reason.
pub fn left_out(past: &Past) -> Vec<String> {
    let mut reasons: Vec<(String, Vec<NaiveDate>)> = Vec::new();
    for left in &past.left_out {
        let words = match &left.why {
            crate::record::Why::Stale(_) => "the cast is too old".to_owned(),
            why => harmless(&why.words()),
        };
        match reasons.iter_mut().find(|reason| reason.0 == words) {
            Some(reason) => reason.1.push(left.date),
            None => reasons.push((words, vec![left.date])),
        }
    }
    let dates = |days: &[NaiveDate]| {
        let runs = days.chunk_by(|a, b| a.succ_opt() == Some(*b));
        let runs: Vec<String> = runs.filter_map(|run| Some(span((*run.first()?, *run.last()?)))).collect();
        match runs.as_slice() {
            [first, .., last] if runs.len() > 4 => format!("{first} ... {last}"),
            few => few.join(", "),
        }
    };
    reasons.iter().map(|(words, days)| format!("{}: {words} ({})", count(days.len()), dates(days))).collect()
}

/// Spells outside the band, the farthest first where they are many, each with its causes.
pub fn spells(context: &Context, past: &Past) -> Vec<String> {
    let system = context.system;
    let mut told: Vec<&Spell> = past.spells.iter().collect();
    let size = |spell: &Spell| spell.outside as f64 * spell.off_c.abs();
    told.sort_by(|a, b| size(b).total_cmp(&size(a)));
    let more = told.len().saturating_sub(SPELLS);
    told.truncate(SPELLS);
    told.sort_by_key(|spell| spell.days);
    let mut out: Vec<String> = told.into_iter().flat_map(|told| spell(told, system)).collect();
    if more > 0 {
        out.push(format!("smaller ones beside these: {more}; log --json tells all"));
    }
    out
}

/// One spell: what it was, and each cause with its evidence, the likeliest in full.
pub fn spell(spell: &Spell, system: System) -> Vec<String> {
    let mut out = vec![format!(
        "{}: outside on {}, the gauge {} beside what was expected",
        span(spell.days),
        count(spell.outside),
        signed(spell.off_c, system)
    )];
    let likely = |cause: &&Cause| !cause.speaks_for.is_empty();
    // what nothing speaks for is not told as if it might be
    let first = spell.causes.iter().take(2).take_while(likely).count();
    if first == 0 {
        out.push("  nothing that is known speaks for one cause before the others".into());
    }
    for (at, cause) in spell.causes.iter().take(first).enumerate() {
        let lead = if at == 0 { "may be" } else { "or" };
        out.push(format!("  {lead} {}", cause.name));
        out.extend(cause.speaks_for.iter().map(|words| said("    for: ", words, system)));
        out.extend(cause.against.iter().map(|words| said("    against: ", words, system)));
        out.push(format!("    would tell: {}", cause.to_tell));
    }
    let rest: Vec<&str> = spell.causes.iter().skip(first).map(|cause| cause.name).collect();
    if !rest.is_empty() {
        out.push(format!("  less spoken for: {}", rest.join(", ")));
    }
    out
}

fn said(lead: &str, words: &str, system: System) -> String {
    format!("{lead}{}", harmless(&in_system(words, system)))
}

/// The season gone through again, or why it is not.
pub fn hindcast(context: &Context, past: &Past) -> Vec<String> {
    let system = context.system;
    let of = |scored: &Scored, name: &str| {
        let lost = if scored.lost == 0 {
            String::new()
        } else {
            format!("; it ends {} early, as no mix is allowed any more", count(scored.lost))
        };
        format!(
            "{name}: outside on {} of {} judged, {} in all{lost}",
            scored.days_outside,
            count(scored.judged),
            degree_days(scored.degree_days_c, system)
        )
    };
    match &past.hindcast {
        Err(why) => vec![harmless(why)],
        Ok(Hindcast { days, plan, as_set, observed, nothing, hindsight }) => {
            let mut out = vec![format!(
                "{}, inflow by plan {}; hard targets at the dam, as the program computes the pool",
                span(*days),
                harmless(plan)
            )];
            out.push(of(as_set, &as_set.name));
            out.push(of(nothing, &nothing.name));
            out.push(of(hindsight, &hindsight.name));
            out.extend(observed.as_ref().map(|observed| of(observed, &observed.name)));
            out.push("hindsight saw all that came: it is no evidence of what could have been known".into());
            out
        }
    }
}
