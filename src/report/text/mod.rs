//! Answers as text a person can read aloud.

mod gates;
pub mod learned;
pub mod log;
mod mix;
mod pool;
pub mod rank;
pub mod river;
pub mod season;
mod targets;

use std::fmt::Write as _;

use unicode_width::UnicodeWidthStr;

use crate::problem::{Problem, Weight, harmless};
use crate::tasks::rank::RankAnswer;
use crate::tasks::river::RiverAnswer;
use crate::tasks::season::{LearnAnswer, NeededAnswer, Prices, SeasonAnswer};
use crate::tasks::{Context, Freshness, MixAnswer, PoolAnswer};
use crate::units::{Dimension, System, show};

pub use gates::{instruction, moves, openings};

pub use mix::{apart, difference, missed, release_line, release_words, setting_words, wells_changed};
pub use pool::{cold_since_words, layer_words, reach_words, since_words};
pub use targets::{EXAMPLE, named, range, standing_words};

use super::column::drawn_column;
use super::fitted;
use super::sentence::{caution, days, flags_of};

/// Width text is wrapped at.
const WIDTH: usize = 80;
/// Width of the margin that holds `Set`, `Release`, `Target`.
const MARGIN: usize = 9;
/// Flags shown before the rest is counted.
const FLAGS: usize = 12;

/// The answer of `pool`.
pub fn pool(context: &Context, answer: &PoolAnswer) -> String {
    let mut out = head(context, &answer.fingerprint);
    out.push_str(&pool::layers(context, answer));
    out.push_str(&pool::outlets(context, answer));
    out.push_str(&drawn_column(context.site(), &context.profile, &[], context.system));
    out.push('\n');
    out.push_str(&cast_flags(context, &answer.against_previous));
    out.push_str(&wrapped(caution(), 0));
    out
}

/// The answer of `mix`.
pub fn mix(context: &Context, answer: &MixAnswer) -> String {
    let mut out = head(context, &context.fingerprint);
    out.push_str(&mix::body(context, answer));
    out.push_str(&cast_flags(context, &[]));
    out.push_str(&mix::not_checked(answer));
    out.push_str(&wrapped(caution(), 0));
    out
}

/// The answer of `rank`.
pub fn rank(context: &Context, answer: &RankAnswer) -> String {
    let mut out = head(context, &context.fingerprint);
    out.push_str(&rank::body(context, answer));
    out.push_str(&wrapped(caution(), 0));
    out
}

/// The answer of `rank` with what its mixes cost by the end of the season.
pub fn rank_priced(context: &Context, answer: &RankAnswer, prices: &Prices) -> String {
    let mut out = head(context, &prices.fingerprint);
    out.push_str(&rank::body(context, answer));
    out.push('\n');
    out.push_str(&season::price::block(context, prices));
    out.push_str(&wrapped(caution(), 0));
    out
}

/// The answer of `river`.
pub fn river(context: &Context, answer: &RiverAnswer) -> String {
    let mut out = head(context, &context.fingerprint);
    out.push_str(&river::body(context, answer));
    out.push_str(&wrapped(caution(), 0));
    out
}

/// The answer of `season`.
pub fn season(context: &Context, answer: &SeasonAnswer) -> String {
    let mut out = head(context, &answer.fingerprint);
    out.push_str(&season::body(context, answer));
    out.push_str(&wrapped(caution(), 0));
    out
}

/// The answer of `season --learn`.
pub fn learned(context: &Context, answer: &LearnAnswer) -> String {
    let mut out = head(context, &answer.fingerprint);
    out.push_str(&season::learned::body(context, answer));
    out.push_str(&wrapped(caution(), 0));
    out
}

/// The answer of `season --left`.
pub fn needed(context: &Context, answer: &NeededAnswer) -> String {
    let mut out = head(context, &answer.fingerprint);
    out.push_str(&season::needed::body(context, answer));
    out.push_str(&wrapped(caution(), 0));
    out
}

/// The answer of `check`: every refusal, then every flag, then every note, and a closing line.
pub fn check(named: &str, problems: &[Problem], system: System) -> String {
    let mut out = String::new();
    let of = |weight: Weight| problems.iter().filter(move |p| p.weight == weight);
    for p in [Weight::Refused, Weight::Flag, Weight::Note].into_iter().flat_map(of) {
        let _ = writeln!(out, "{}", p.text(system));
    }
    let count = |weight: Weight| of(weight).count();
    let _ = writeln!(
        out,
        "{}: {} refused, {} flagged, {} noted",
        harmless(named),
        count(Weight::Refused),
        count(Weight::Flag),
        count(Weight::Note)
    );
    out
}

/// The head of every answer: site, pool, datum, cast, age, date, fingerprint.
fn head(context: &Context, fingerprint: &str) -> String {
    let site = context.site();
    let profile = &context.profile;
    let mut out = harmless(&site.name);
    if let Some(river) = &site.river_name {
        let _ = write!(out, " on the {}", harmless(river));
    }
    if site.demonstration {
        out.push_str(if context.folder.in_memory() {
            " [demonstration, held in memory]"
        } else {
            " [demonstration]"
        });
    }
    let _ =
        writeln!(out, "\nPool  {} ({})", length(profile.pool_m, context.system), harmless(site.datum.name()));
    let taken = profile.taken.map_or_else(
        || "at an unknown time".to_owned(),
        |t| t.with_timezone(&site.offset).format("%Y-%m-%d %H:%M %:z").to_string(),
    );
    let age = context.age_days.map_or_else(String::new, |d| format!(", {} old", days(d)));
    let badge = Freshness::of(site, context.age_days).word();
    let _ = writeln!(out, "Cast  {taken}{age}: {badge}");
    let unread = profile.flags.iter().filter(|p| p.kind == "cast-unreadable").count();
    if unread > 0 {
        let _ = writeln!(out, "      ! {unread} cast(s) of the site cannot be read, named below");
    }
    let _ = writeln!(out, "For   {} ({})", context.on.format("%Y-%m-%d %H:%M %:z"), context.on_from.words());
    let _ = writeln!(out, "From  inputs {}, gatemix {}\n", fingerprint, env!("CARGO_PKG_VERSION"));
    out
}

fn cast_flags(context: &Context, more: &[Problem]) -> String {
    let mut flags = flags_of(&context.profile.flags);
    flags.extend(more.iter());
    list("The cast", &flags, true, context.system)
}

/// Flags (`!`) and notes (`-`) under a heading, each with its line, the rest counted.
fn list(heading: &str, problems: &[&Problem], rows: bool, system: System) -> String {
    if problems.is_empty() {
        return String::new();
    }
    let mut out = format!("{heading}\n");
    for p in problems.iter().take(FLAGS) {
        let mark = if p.weight == Weight::Note { '-' } else { '!' };
        let row = p.place.line.filter(|_| rows).map_or_else(String::new, |l| format!(" (line {l})"));
        out.push_str(&wrapped(&format!("  {mark} {}{row}: {}", p.kind, p.advice(system)), 4));
    }
    if problems.len() > FLAGS {
        let _ = writeln!(out, "  {} more; `gatemix check` lists all", problems.len() - FLAGS);
    }
    out.push('\n');
    out
}

/// A word in the left margin and its text beside it, wrapped.
fn labelled(label: &str, text: &str) -> String {
    let body = wrapped(&format!("{:MARGIN$}{text}", ""), MARGIN);
    // the margin of the first line is blank and as wide as the label's field
    format!("{label:<MARGIN$}{}", body.get(MARGIN..).unwrap_or_default())
}

/// Words wrapped at 80 cells, later lines indented.
fn wrapped(text: &str, indent: usize) -> String {
    wrapped_at(text, indent, WIDTH)
}

/// Words wrapped at so many cells, later lines indented.
pub(in crate::report) fn wrapped_at(text: &str, indent: usize, width: usize) -> String {
    let lead = text.len() - text.trim_start().len();
    let mut out = " ".repeat(lead);
    let mut used = lead;
    let mut first = true;
    for word in text.split_whitespace() {
        let wide = word.width();
        if !first && used + 1 + wide > width {
            out.push('\n');
            out.push_str(&" ".repeat(indent));
            used = indent;
        } else if !first {
            out.push(' ');
            used += 1;
        }
        out.push_str(word);
        used += wide;
        first = false;
    }
    out.push('\n');
    out
}

fn flow(m3s: f64, system: System) -> String {
    show(m3s, Dimension::Flow, system, u8::from(system != System::Us))
}

fn length(m: f64, system: System) -> String {
    show(m, Dimension::Length, system, 1)
}

fn temperature(c: f64, system: System) -> String {
    show(c, Dimension::Temperature, system, 1)
}

fn step(c: f64, system: System) -> String {
    show(c, Dimension::TemperatureDifference, system, 1)
}

fn oxygen(mg_l: Option<f64>) -> String {
    mg_l.map_or_else(|| "unknown".to_owned(), |o| format!("{o:.1} mg/L"))
}

/// A volume of water.
pub fn volume(m3: f64, system: System) -> String {
    match system {
        System::Us => show(m3, Dimension::Volume, system, 0),
        System::Si => format!("{:.2} hm3", m3 / 1e6),
    }
}
