//! Scores, spells outside the band, what is learned, the hindcast.

use crate::mix::groups;
use crate::problem::harmless;
use crate::record::{Candidate, Score, Verdict};
use crate::tasks::log::{Past, Scored};
use crate::tui::look::Role;
use crate::units::{Dimension, figure, in_system};

use super::super::scroll::{Lines, say};
use super::super::season::plural;
use super::{Screen, by, error};

/// Columns of the name of a row.
const NAME: usize = 30;

/// The past, or a line that says there is none.
fn past<'a>(screen: &Screen<'a>, out: &mut Lines, width: usize) -> Option<&'a Past> {
    if screen.passed.is_none() {
        say(out, "There is no past yet.", width, 2, Role::Plain);
    }
    screen.passed.map(|passed| &passed.past)
}

/// How far off: all, by level, by flow, by month.
pub(super) fn scores(screen: &Screen, width: usize) -> Lines {
    let mut out = Lines::new();
    let (system, oxygen) = (screen.system(), screen.session.log.oxygen);
    let what = if oxygen { "oxygen" } else { "release temperature" };
    let words =
        format!("Gauge less expected, {what}, mean of the day; x turns to the other, s or Esc goes back.");
    say(&mut out, &words, width, 2, Role::Quiet);
    let Some(past) = past(screen, &mut out, width) else { return out };
    let scores = if oxygen { &past.oxygen } else { &past.temperature };
    out.push((
        format!("{:NAME$}{:>5} {:>11} {:>10} {:>9}", "", "days", "bias", "RMSE", "inside"),
        Role::Strong,
    ));
    let mut row = |name: &str, score: &Score| {
        let inside = if score.with_band > 0 {
            format!("{}/{}", score.inside, score.with_band)
        } else {
            "-".to_owned()
        };
        let of = |value: Option<f64>, say: &dyn Fn(f64) -> String| value.map_or_else(|| "-".to_owned(), say);
        let bias = of(score.misfit.map(|m| m.bias), &|v| by(v, oxygen, system));
        let rmse = of(score.misfit.map(|m| m.rmse), &|v| error(v, oxygen, system));
        let name: String = name.chars().take(NAME - 1).collect();
        out.push((format!("{name:NAME$}{:>5} {bias:>11} {rmse:>10} {inside:>9}", score.n), Role::Plain));
    };
    row("all", &scores.all);
    let site = screen.session.context().site();
    let levels = groups(site);
    for (level, score) in &scores.by_level {
        let outlets = levels.get(*level).map_or(&[][..], Vec::as_slice);
        let names = outlets.iter().filter_map(|i| site.outlets.get(*i)).map(|o| harmless(&o.name));
        row(&format!("most from {}", names.collect::<Vec<_>>().join(" ")), score);
    }
    let unit = system.unit(Dimension::Flow);
    for class in &scores.by_flow {
        let [low, high] = [class.flow_m3s.0, class.flow_m3s.1].map(|flow| figure(flow, unit, 0));
        row(&format!("{low} to {high} {}", unit.symbol()), &class.score);
    }
    for (month, score) in &scores.by_month {
        row(month_name(*month), score);
    }
    if let Some((temperature, gain)) = &past.with_learned {
        row("with what is learned", if oxygen { gain } else { temperature });
    }
    let all = &scores.all;
    let words = format!(
        "{} without an expected value, {} without a valid mean at the gauge; inside: of the days that have a 10-90 % band.",
        plural(all.not_computed as u64, "day"),
        plural(all.not_measured as u64, "day")
    );
    say(&mut out, &words, width, 2, Role::Quiet);
    if past.with_learned.is_some() {
        let words =
            "With what is learned: fitted on these very days, no evidence; l has the error on days left out.";
        say(&mut out, words, width, 2, Role::Quiet);
    }
    out.push((String::new(), Role::Plain));
    left_out(past, width, &mut out);
    out
}

fn month_name(month: u32) -> &'static str {
    u8::try_from(month)
        .ok()
        .and_then(|month| chrono::Month::try_from(month).ok())
        .map_or("", |month| month.name())
}

/// Days left out, by their reason.
fn left_out(past: &Past, width: usize, out: &mut Lines) {
    if past.left_out.is_empty() {
        say(out, "No day is left out.", width, 2, Role::Plain);
        return;
    }
    say(out, "Left out of scores and learning", width, 2, Role::Strong);
    let mut reasons: Vec<(String, usize)> = Vec::new();
    for left in &past.left_out {
        let words = harmless(&left.why.words());
        match reasons.iter_mut().find(|reason| reason.0 == words) {
            Some(reason) => reason.1 += 1,
            None => reasons.push((words, 1)),
        }
    }
    for (words, count) in reasons {
        say(out, &format!("  {}: {words}", plural(count as u64, "day")), width, 4, Role::Plain);
    }
}

/// Days in a row outside the band, with what may be why.
pub(super) fn spells(screen: &Screen, width: usize) -> Lines {
    let mut out = Lines::new();
    let system = screen.system();
    let words = "When the gauge left the band, and what may be why, the likeliest first; c or Esc goes back.";
    say(&mut out, words, width, 2, Role::Quiet);
    let Some(past) = past(screen, &mut out, width) else { return out };
    if past.spells.is_empty() {
        say(&mut out, "The gauge left the band on no days in a row.", width, 2, Role::Plain);
    }
    for spell in &past.spells {
        let (from, to) = spell.days;
        let words = format!(
            "{from} to {to}: {} outside, gauge less expected {}",
            plural(spell.outside as u64, "day"),
            by(spell.off_c, false, system)
        );
        say(&mut out, &words, width, 2, Role::Strong);
        for cause in &spell.causes {
            say(&mut out, &format!("- {}", cause.name), width, 2, Role::Plain);
            let told = |words: &str| harmless(&in_system(words, system));
            for words in &cause.speaks_for {
                say(&mut out, &format!("    for: {}", told(words)), width, 9, Role::Plain);
            }
            for words in &cause.against {
                say(&mut out, &format!("    against: {}", told(words)), width, 9, Role::Plain);
            }
            if cause.speaks_for.is_empty() && cause.against.is_empty() {
                say(&mut out, &format!("    it would tell: {}", told(cause.to_tell)), width, 9, Role::Quiet);
            }
        }
    }
    out
}

/// What can be learned of the record, and what the site file applies.
pub(super) fn learned(screen: &Screen, width: usize) -> Lines {
    let mut out = Lines::new();
    let system = screen.system();
    let words = "What the record teaches; nothing of it is applied but by the site file. l or Esc goes back.";
    say(&mut out, words, width, 2, Role::Quiet);
    let Some(past) = past(screen, &mut out, width) else { return out };
    let learning = &past.learning;
    if let Some((from, to)) = learning.learned.window {
        let days = plural(learning.learned.n as u64, "day");
        say(&mut out, &format!("window {from} to {to}, {days} that can be used"), width, 2, Role::Plain);
    }
    for candidate in &learning.candidates {
        one(screen, candidate, width, &mut out);
    }
    for words in &learning.alike {
        say(&mut out, &format!("! {}", in_system(words, system)), width, 2, Role::Warn);
    }
    if let Some(suspect) = &learning.suspect {
        let words = harmless(&in_system(&suspect.words(), system));
        say(&mut out, &format!("! sensor: {words}"), width, 2, Role::Warn);
    }
    out
}

/// An effect: its values, what it does to days left out of its fit, whether it is kept.
fn one(screen: &Screen, candidate: &Candidate, width: usize, out: &mut Lines) {
    let system = screen.system();
    let effect = candidate.effect;
    let site = screen.session.context().site();
    let (word, role, why) = match &candidate.verdict {
        Verdict::Kept => ("KEPT", Role::Inside, None),
        Verdict::Passed(why) => ("passed over", Role::Plain, Some(why)),
        Verdict::Refused(why) => ("refused", Role::Plain, Some(why)),
    };
    say(out, &format!("{}: {word}", effect.name()), width, 2, Role::Strong);
    let levels = groups(site);
    for told in &candidate.figures {
        let level = told.level.and_then(|level| levels.get(level)).map_or_else(String::new, |outlets| {
            let names = outlets.iter().filter_map(|i| site.outlets.get(*i)).map(|o| harmless(&o.name));
            format!("{}: ", names.collect::<Vec<_>>().join(" "))
        });
        let interval = told
            .interval
            .map_or_else(String::new, |of| format!(", 80 % interval {}", effect.interval_words(of)));
        let words = format!("  {level}{}{interval}, {}", effect.value_words(told.value), days(told.n));
        say(out, &in_system(&words, system), width, 4, role);
    }
    if let Some([before, after]) = candidate.held_out {
        let words = format!(
            "  error on days left out of its fit {} -> {}, over {}, {} stretches",
            effect.error_words(before),
            effect.error_words(after),
            days(candidate.n),
            candidate.stretches
        );
        say(out, &in_system(&words, system), width, 4, Role::Plain);
    }
    if let Some(why) = why {
        say(out, &format!("  {}", in_system(why, system)), width, 4, Role::Plain);
    }
}

fn days(count: usize) -> String {
    plural(count as u64, "day")
}

/// The season gone through again.
pub(super) fn hindcast(screen: &Screen, width: usize) -> Lines {
    let mut out = Lines::new();
    let words =
        "A past season gone through again, by days outside the hard targets at the dam; h or Esc goes back.";
    say(&mut out, words, width, 2, Role::Quiet);
    let Some(past) = past(screen, &mut out, width) else { return out };
    let hindcast = match &past.hindcast {
        Ok(hindcast) => hindcast,
        Err(why) => {
            let words = harmless(&in_system(why, screen.system()));
            say(&mut out, &format!("No hindcast: {words}"), width, 2, Role::Plain);
            return out;
        }
    };
    let (from, to) = hindcast.days;
    say(&mut out, &format!("{from} to {to}, inflow of {}", harmless(&hindcast.plan)), width, 2, Role::Strong);
    out.push((format!("{:NAME$}{:>8} {:>8} {:>13}", "", "outside", "judged", "degree-days"), Role::Strong));
    let degrees = screen.system().unit(Dimension::Temperature).of_difference();
    let rows: [Option<&Scored>; 4] = [
        hindcast.observed.as_ref(),
        Some(&hindcast.as_set),
        Some(&hindcast.nothing),
        Some(&hindcast.hindsight),
    ];
    for row in rows.into_iter().flatten() {
        let name: String = harmless(&row.name).chars().take(NAME - 1).collect();
        let days = figure(row.degree_days_c, degrees, 1);
        let line = format!("{name:NAME$}{:>6} d {:>6} d {days:>13}", row.days_outside, row.judged);
        out.push((line, Role::Plain));
    }
    say(
        &mut out,
        "Perfect hindsight saw all that came: no evidence of what could be known.",
        width,
        2,
        Role::Quiet,
    );
    for note in &past.notes {
        say(&mut out, &format!("- {}", note.advice(screen.system())), width, 2, Role::Plain);
    }
    out
}
