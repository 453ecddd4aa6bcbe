//! The second sheet: the note to the agencies.

use std::collections::BTreeSet;

use crate::mix::limits::Group;
use crate::mix::{Spread, TargetStanding};
use crate::problem::Weight;
use crate::record::METHOD;
use crate::report::caution;
use crate::report::page::{Block, Table};
use crate::report::text::learned::{applied_words, values};
use crate::site::Site;
use crate::target::Target;
use crate::tasks::Context;
use crate::tasks::Freshness;
use crate::tasks::log::Skill;
use crate::tasks::note::{NoteAnswer, Subject};
use crate::tasks::river::{Timely, Way, Which};
use crate::units::say;

use super::words::{aired, asks, banded, flow, gates, moment, named, percent, stands, subject};
use super::{pictures, ranked, season};

/// Cautions told before the rest is counted (choice: the note is to fit a page).
const CAUTIONS: usize = 6;

pub(super) fn sheet(context: &Context, answer: &NoteAnswer) -> Vec<Block> {
    let mut out = vec![Block::Sheet, Block::Heading(1, "Agency note".to_owned())];
    out.push(Block::Facts(facts(context, answer)));
    if answer.why.is_none() {
        out.push(Block::Blanks(vec!["Why it is done".to_owned()]));
    }
    out.extend(expected(context, answer).map(Block::Table));
    out.extend(targets(context.site(), answer));
    out.extend(ahead(context.site(), answer));
    out.extend(pictures::pictures(context, answer));
    out.extend(ranked::blocks(context, answer));
    out.extend(season::blocks(context, answer));
    out.extend(next(context, answer));
    out.push(Block::Heading(2, "What it rests on".to_owned()));
    out.push(Block::Words(data(context, answer).join(" ")));
    out.push(Block::Words(caution().to_owned()));
    out
}

fn facts(context: &Context, answer: &NoteAnswer) -> Vec<(String, String)> {
    let site = context.site();
    let release = &answer.mix.mix.release;
    let mut out = vec![
        ("Written for".to_owned(), format!("{} ({})", moment(site, context.on), context.on_from.words())),
        ("Of".to_owned(), subject(answer)),
    ];
    let set = gates(site, &answer.mix.setting);
    let (label, from) = if answer.stands {
        ("Stands", String::new())
    } else {
        ("Planned", format!(", from {} on", moment(site, answer.begins)))
    };
    out.push((label.to_owned(), format!("{set}; in all {}{from}", flow(release.flow_m3s))));
    out.extend(answer.why.clone().map(|why| ("Why".to_owned(), why)));
    out.extend(answer.remarks.clone().map(|remarks| ("Remarks".to_owned(), remarks)));
    out
}

/// What is expected at the dam and at every point, beside what there is now.
fn expected(context: &Context, answer: &NoteAnswer) -> Option<Table> {
    let of = |which: Which| answer.river.ways.iter().find(|way| way.which == which);
    // a setting that stands already is told once, as what is now
    let (way, now) = match of(Which::Tried) {
        Some(tried) => (tried, of(Which::Now)),
        None => (of(Which::Now)?, None),
    };
    let points = context.site().river.as_ref().map_or(&[][..], |river| &river.points);
    let row = |place: Option<usize>| {
        let name = place.map_or("the dam", |point| points.get(point).map_or("", |point| &point.name));
        let [warm, air] = figures(way, place);
        let mut row = vec![name.to_owned(), warm, air];
        if let Some(now) = now {
            let [warm, _] = figures(now, place);
            // without its band, which is much like the other's
            row.push(warm.split(" [").next().unwrap_or_default().to_owned());
        }
        row
    };
    let mut head = vec!["Place".to_owned(), "Temperature".to_owned(), "Oxygen".to_owned()];
    if now.is_some() {
        head.push("Temperature before".to_owned());
    }
    Some(Table {
        caption: "Expected, means of a day; brackets hold 10-90 % of our perturbed cases".to_owned(),
        head,
        rows: std::iter::once(None).chain((0..points.len()).map(Some)).map(row).collect(),
        right: Vec::new(),
    })
}

/// Temperature and oxygen of a release at a place, each with its band.
fn figures(way: &Way, place: Option<usize>) -> [String; 2] {
    let Some(point) = place else {
        let spread = way.at_dam();
        return [
            banded(way.temperature_c(), spread.band_c()),
            aired(way.oxygen_mg_l(), spread.band_oxygen_mg_l()),
        ];
    };
    let mut arriving = way
        .course
        .iter()
        .flat_map(|course| &course.points)
        .zip(way.spreads.iter().map(Some).chain(std::iter::repeat(None)));
    match arriving.find(|(at, _)| at.point == point) {
        None => ["not known".to_owned(), "not known".to_owned()],
        Some((at, spread)) => [
            banded(at.figures.mean_c, spread.and_then(Spread::band_c)),
            aired(at.figures.oxygen_mean_mg_l, spread.and_then(Spread::band_oxygen_mg_l)),
        ],
    }
}

/// How it stands against every target of the date.
fn targets(site: &Site, answer: &NoteAnswer) -> Vec<Block> {
    let source = |rule: &Target| rule.source.clone().unwrap_or_else(|| "no source given".to_owned());
    let rules = answer.mix.mix.targets.iter().filter_map(|standing| site.targets.get(standing.target));
    let sources: BTreeSet<String> = rules.map(source).collect();
    // one source of all is told once
    let same = sources.first().filter(|_| sources.len() == 1);
    let row = |standing: &TargetStanding| {
        let rule = site.targets.get(standing.target)?;
        let wish = if standing.wish { " (a wish)" } else { "" };
        let governs = if standing.governs { "; governs" } else { "" };
        let mut row = vec![
            format!("{}{wish}", named(rule)),
            asks(rule),
            format!("{}{governs}", stands(standing, rule)),
            percent(standing.share_inside_both.or(standing.share_inside)),
        ];
        row.extend(same.is_none().then(|| source(rule)));
        Some(row)
    };
    let rows: Vec<Vec<String>> = answer.mix.mix.targets.iter().filter_map(row).collect();
    if rows.is_empty() {
        return vec![Block::Words("No target is valid on this date.".to_owned())];
    }
    vec![Block::Table(Table {
        caption: format!(
            "Against the targets of this date; the share inside is of our perturbed cases{}",
            same.map_or_else(String::new, |source| format!("; source: {source}"))
        ),
        head: ["Target", "Asks", "Stands", "Inside", "Source"]
            .into_iter()
            .take(if same.is_some() { 4 } else { 5 })
            .map(str::to_owned)
            .collect(),
        rows,
        right: vec![3],
    })]
}

/// What is missed down the river in the days ahead, if the release is held.
fn ahead(site: &Site, answer: &NoteAnswer) -> Option<Block> {
    let points = site.river.as_ref().map_or(&[][..], |river| &river.points);
    let way = answer.river.spoken()?.which;
    let one = |t: &Timely| {
        let (point, rule) = (points.get(t.point)?, site.targets.get(t.target)?);
        let (on, _, by) = t.worst;
        let by = if rule.statistic.is_sum() { format!("{by:.0} days") } else { say::dc(by, 1).to_string() };
        let days = if t.days == 1 { "1 day".to_owned() } else { format!("{} days", t.days) };
        Some(format!(
            "at {} {} is missed for {days} from {}, by {by} on {}; a change must leave the dam by {}",
            point.name,
            rule.name,
            t.day,
            on,
            moment(site, t.leave_by)
        ))
    };
    let all: Vec<String> = answer.river.timely.iter().filter(|t| t.which == way).filter_map(one).collect();
    (!all.is_empty()).then(|| Block::Warning(format!("If this release is held, {}.", all.join("; "))))
}

/// When it is decided again, and what would end it earlier.
fn next(context: &Context, answer: &NoteAnswer) -> Vec<Block> {
    let decided = match answer.subject {
        Subject::Decision(id) => context.log.log.decision(id),
        Subject::FirstRanked | Subject::Named => None,
    };
    let until = decided.and_then(|decided| decided.decision.until).map(|until| until.to_string());
    let trigger = decided.and_then(|decided| decided.decision.trigger.clone());
    let mut facts = Vec::new();
    let mut blanks = Vec::new();
    for (label, text) in [("Decided again by", until), ("Earlier when", trigger)] {
        match text {
            Some(text) => facts.push((label.to_owned(), text)),
            None => blanks.push(label.to_owned()),
        }
    }
    let facts = (!facts.is_empty()).then_some(Block::Facts(facts));
    let blanks = (!blanks.is_empty()).then_some(Block::Blanks(blanks));
    facts.into_iter().chain(blanks).collect()
}

/// Cast, records, weather, limits, cautions and the program.
fn data(context: &Context, answer: &NoteAnswer) -> Vec<String> {
    let site = context.site();
    let profile = &context.profile;
    let taken = profile.taken.map_or_else(|| "at an unknown time".to_owned(), |at| moment(site, at));
    let age = context.age_days.map_or_else(String::new, |days| format!(", {days:.0} days old"));
    let flags = profile.flags.iter().filter(|p| p.weight == Weight::Flag).count();
    let flags = match flags {
        0 => "nothing flagged".to_owned(),
        1 => "1 flag".to_owned(),
        count => format!("{count} flags"),
    };
    let mut out = vec![format!(
        "Cast {taken}{age} ({}), under a pool of {}: {flags}.",
        Freshness::of(site, context.age_days).word(),
        say::m(profile.pool_m, 2)
    )];
    out.push(records(context));
    let weather = context.conditions.weather.last_day();
    out.push(match weather {
        Some(last) => format!("Weather by day to {last}."),
        None if site.river.as_ref().is_some_and(|river| river.surface.is_some()) => {
            "Air over the river by the site file, no weather by day.".to_owned()
        }
        None => "No weather is told.".to_owned(),
    });
    out.push(foreseen(&answer.skill));
    out.extend(learned(context, answer));
    // what a change costs the crew is the order's
    let unchecked = answer.not_checked.iter().filter(|one| one.rule.group() != Group::Convenience);
    let names: BTreeSet<&str> = unchecked.map(|one| one.rule.name()).collect();
    if !names.is_empty() {
        let names: Vec<&str> = names.into_iter().collect();
        out.push(format!("Limits not checked, by outlet in the change order: {}.", names.join(", ")));
    }
    let cautions = answer.cautions.iter().take(CAUTIONS).map(|words| format!("{words}."));
    out.extend(cautions);
    if answer.cautions.len() > CAUTIONS {
        out.push(format!("{} more cautions: gatemix mix.", answer.cautions.len() - CAUTIONS));
    }
    // the season has more inputs, its plans
    let inputs = answer.season.as_ref().map_or(&context.fingerprint, |season| &season.fingerprint);
    out.push(format!("gatemix {}, {METHOD}; inputs {inputs}.", env!("CARGO_PKG_VERSION")));
    out
}

/// How well the release of past days was foreseen.
fn foreseen(skill: &Skill) -> String {
    let Some(misfit) = skill.temperature.misfit else {
        return format!(
            "No past day can be held against the gauge below the dam: an honest resolution is about {}.",
            say::dc(1.0, 1)
        );
    };
    format!(
        "On {} days held against the gauge below the dam it read {} beside what is computed with nothing learned, {} \
         root mean square, inside the band of the day on {} of {}.",
        skill.temperature.n,
        say::dc(misfit.bias, 2).signed(),
        say::dc(misfit.rmse, 2),
        skill.temperature.inside,
        skill.temperature.with_band
    )
}

/// What was learned of the gauge and is applied, and what is expected without it.
fn learned(context: &Context, answer: &NoteAnswer) -> Option<String> {
    let Some(applied) = applied_words(context.site()) else {
        let learned = &answer.skill.learning.learned;
        let unused = values(context.site(), learned);
        return match (learned.has_effect(), answer.skill.temperature.misfit) {
            (true, _) => Some(format!("This teaches {unused}; none of it is applied to this note.")),
            (false, Some(_)) => Some("Nothing learned of it is applied.".to_owned()),
            (false, None) => None,
        };
    };
    let without = answer.mix.without.as_ref().map(|without| {
        let warm = banded(without.temperature_c, without.spread.band_c());
        format!(
            "; without it {warm}, oxygen {}",
            aired(without.oxygen_mg_l, without.spread.band_oxygen_mg_l())
        )
    });
    Some(format!("Learned of the gauge: {applied}{}.", without.unwrap_or_default()))
}

/// What was recorded in the river, and to when.
fn records(context: &Context) -> String {
    let observed = &context.conditions.observed;
    let one = |(point, record): (&String, &crate::series::Record)| {
        let last = record.temperature_c.readings().last().map(|reading| reading.0);
        let last = last.map_or_else(|| "empty".to_owned(), |at| format!("to {}", moment(context.site(), at)));
        format!("{point} {last}")
    };
    let all: Vec<String> = observed.iter().map(one).collect();
    if all.is_empty() {
        "No record of the river.".to_owned()
    } else {
        format!("Records of the river: {}.", all.join("; "))
    }
}
