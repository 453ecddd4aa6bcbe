//! Answers as text a person can read aloud.

use std::fmt::Write as _;

use unicode_width::UnicodeWidthStr;

use crate::mix::{Drawn, Mix, Setting, TargetStanding};
use crate::problem::{Problem, Weight, harmless};
use crate::site::Site;
use crate::target::{Standing, Target};
use crate::tasks::{Context, Freshness, MixAnswer, PoolAnswer};
use crate::units::{Dimension, System, show};
use crate::withdrawal::End;

use super::column::{drawn_column, fitted};
use super::sentence::{caution, flags_of, sentence};

/// Width text is wrapped at.
const WIDTH: usize = 80;
/// Flags shown before the rest is counted.
const FLAGS: usize = 12;

/// What is set, for each gate: `W3 600 cfs`.
fn setting_words(site: &Site, setting: &Setting, system: System) -> String {
    let mut gates: Vec<(&str, f64)> = setting
        .gates
        .iter()
        .filter_map(|g| Some((site.outlets.get(g.outlet)?.name.as_str(), g.flow_m3s)))
        .collect();
    gates.sort_unstable_by(|a, b| a.0.cmp(b.0));
    let words: Vec<String> = gates
        .iter()
        .map(|(name, flow)| format!("{} {}", harmless(name), self::flow(*flow, system)))
        .collect();
    words.join(", ")
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

/// The head of every answer: site, datum, cast, age, date, fingerprint.
fn head(context: &Context) -> String {
    let site = context.site();
    let profile = &context.profile;
    let mut out = String::new();
    let _ = write!(out, "{}", harmless(&site.name));
    if let Some(river) = &site.river {
        let _ = write!(out, " on the {}", harmless(river));
    }
    if site.demonstration {
        out.push_str(if context.folder.in_memory() {
            " [demonstration, held in memory]"
        } else {
            " [demonstration]"
        });
    }
    out.push('\n');
    let taken = profile.taken.map_or_else(
        || "at an unknown time".to_owned(),
        |t| format!("{}", t.with_timezone(&site.offset).format("%Y-%m-%d %H:%M %:z")),
    );
    let freshness = Freshness::of(site, context.age_days).word();
    let age = context.age_days.map_or_else(String::new, |d| format!(", {d:.0} days old"));
    let _ = writeln!(
        out,
        "Pool {} ({}); cast {taken}{age}, {freshness}",
        length(profile.pool_m, context.system),
        harmless(site.datum.name())
    );
    let _ = writeln!(
        out,
        "For {} ({}); inputs {}, gatemix {}",
        context.on.format("%Y-%m-%d %H:%M %:z"),
        context.on_from.words(),
        context.fingerprint,
        env!("CARGO_PKG_VERSION")
    );
    out
}

fn band(ends: Option<(f64, f64)>, one: impl Fn(f64) -> String, bare: impl Fn(f64) -> String) -> String {
    ends.map_or_else(|| "no band".to_owned(), |(low, high)| format!("{} to {}", bare(low), one(high)))
}

fn release_line(mix: &Mix, system: System) -> String {
    let unit = system.unit(Dimension::Temperature);
    let warm = band(mix.spread.band_c(), |c| temperature(c, system), |c| format!("{:.1}", unit.from_si(c)));
    let mut out = format!("{} ({warm})", temperature(mix.release.temperature_c, system));
    let _ = write!(out, ", oxygen {}", oxygen(mix.release.oxygen_mg_l));
    if mix.release.oxygen_mg_l.is_some() {
        let aired = band(mix.spread.band_oxygen_mg_l(), |o| format!("{o:.1} mg/L"), |o| format!("{o:.1}"));
        let _ = write!(out, " ({aired})");
    }
    out
}

/// The answer of `mix`.
pub fn mix(context: &Context, answer: &MixAnswer) -> String {
    let site = context.site();
    let system = context.system;
    let mut out = head(context);
    let _ = writeln!(
        out,
        "\nSet      {} = {} in total",
        setting_words(site, &answer.setting, system),
        flow(answer.mix.release.flow_m3s, system)
    );
    let _ = writeln!(out, "Release  {}", release_line(&answer.mix, system));
    if let Some((now, mix)) = &answer.now {
        let warmer = answer.mix.release.temperature_c - mix.release.temperature_c;
        let _ = writeln!(out, "Now      {}: {}", setting_words(site, now, system), release_line(mix, system));
        let _ = writeln!(
            out,
            "         the setting tried is {} {} than now",
            step(warmer.abs(), system),
            if warmer < 0.0 { "colder" } else { "warmer" }
        );
    }
    out.push_str("         leaving the pool; brackets hold 10-90 % of our perturbed cases\n\n");
    out.push_str(&standings(site, &answer.mix, system));
    out.push_str(&levels(site, &answer.mix.levels, system));
    out.push('\n');
    out.push_str(&drawn_column(site, &context.profile, &answer.mix.levels, system));
    out.push('\n');
    out.push_str(&list("Warnings", &flags_of(&answer.mix.warnings), false, system));
    out.push_str(&list("Cast", &flags_of(&context.profile.flags), true, system));
    out.push_str(&wrapped(&format!("Not checked: {}", answer.mix.not_checked.join(", ")), 13));
    out.push_str(&wrapped(caution(), 0));
    out
}

fn range(rule: &Target, system: System) -> String {
    let mut words = match (rule.low_c, rule.high_c) {
        (Some(low), Some(high)) => {
            let unit = system.unit(Dimension::Temperature);
            format!("{:.1} to {}", unit.from_si(low), temperature(high, system))
        }
        (Some(low), None) => format!("from {}", temperature(low, system)),
        (None, Some(high)) => format!("to {}", temperature(high, system)),
        (None, None) => String::new(),
    };
    if rule.buffer_c > 0.0 {
        let _ = write!(words, " less {} each side", step(rule.buffer_c, system));
    }
    if let Some(preferred) = rule.preferred_c {
        let _ = write!(words, ", preferred {}", temperature(preferred, system));
    }
    if let Some(least) = rule.oxygen_min_mg_l {
        let _ = write!(words, "{}oxygen at least {least:.1} mg/L", if words.is_empty() { "" } else { ", " });
    }
    words
}

fn standing_words(s: &TargetStanding, rule: &Target, system: System) -> String {
    let warm = match s.temperature {
        (Standing::Unknown, _) => None,
        (standing, Some(by)) if by > 0.0 => {
            // a miss smaller than the last digit shown must not read as none
            let shown = step(by, system);
            let small = shown.trim_start_matches(['0', '.']).starts_with(' ');
            Some(format!(
                "temperature {} by {}",
                standing.word().to_uppercase(),
                if small { "less than a tenth".to_owned() } else { shown }
            ))
        }
        (standing, _) => Some(format!("temperature {}", standing.word())),
    };
    let aired = match s.oxygen {
        (Standing::Unknown, _) if rule.oxygen_min_mg_l.is_some() => Some("oxygen UNKNOWN".to_owned()),
        (Standing::Unknown, _) => None,
        (standing, Some(by)) if by > 0.0 => {
            let shown = if by < 0.05 { "less than a tenth".to_owned() } else { format!("{by:.1} mg/L") };
            Some(format!("oxygen {} by {shown}", standing.word().to_uppercase()))
        }
        (standing, _) => Some(format!("oxygen {}", standing.word())),
    };
    [warm, aired].into_iter().flatten().collect::<Vec<_>>().join(", ")
}

fn share(value: Option<f64>) -> String {
    value.map_or_else(|| "unknown".to_owned(), |s| format!("{:.0} %", 100.0 * s))
}

fn standings(site: &Site, mix: &Mix, system: System) -> String {
    if mix.targets.is_empty() {
        return "Targets  none is valid on this date\n\n".to_owned();
    }
    let mut out = String::new();
    for s in &mix.targets {
        let rule = &site.targets[s.target];
        let _ = writeln!(
            out,
            "Target   {} at the {} ({}, steady release){}",
            harmless(&rule.name),
            harmless(&rule.point),
            rule.statistic.name().replace('_', " "),
            if s.governs { ": governs" } else { "" }
        );
        let source = rule.source.as_deref().map_or_else(|| "no source given".to_owned(), harmless);
        out.push_str(&wrapped(&format!("         {} [{source}]", range(rule, system)), 9));
        let _ = writeln!(
            out,
            "         {}; {} of cases inside{}",
            standing_words(s, rule, system),
            share(s.share_inside_both.or(s.share_inside)),
            if s.share_inside_both.is_none() && s.share_inside.is_some() {
                " (temperature alone)"
            } else {
                ""
            }
        );
    }
    out.push('\n');
    out
}

fn levels(site: &Site, drawn: &[Drawn], system: System) -> String {
    let mut out = format!(
        "{:<18} {:>10}  {:>10}  {:<25} {:>7}  {}\n",
        "Level", "elevation", "flow", "draws from", "water", "oxygen"
    );
    for d in drawn.iter().rev() {
        let names: Vec<String> = d.level.outlets.iter().map(|&i| harmless(&site.outlets[i].name)).collect();
        let zone = d.zone.map_or_else(
            || "nothing".to_owned(),
            |z| {
                let end = |side: &crate::withdrawal::Side, word: &str| {
                    if side.end == End::Free { length(side.limit_m, system) } else { word.to_owned() }
                };
                format!("{} to {}", end(&z.lower, "bed"), end(&z.upper, "surface"))
            },
        );
        let _ = writeln!(
            out,
            "{} {:>10}  {:>10}  {zone:<25} {:>7}  {}",
            fitted(&names.join(" "), 18),
            length(d.level.sink.centre_m, system),
            flow(d.level.sink.flow_m3s, system),
            d.draw.map_or_else(|| "-".to_owned(), |w| temperature(w.temperature_c, system)),
            d.draw.map_or_else(|| "-".to_owned(), |w| oxygen(w.oxygen_mg_l)),
        );
    }
    out
}

/// The answer of `pool`.
pub fn pool(context: &Context, answer: &PoolAnswer) -> String {
    let site = context.site();
    let system = context.system;
    let l = &answer.layering;
    let mut out = head(context);
    let _ = writeln!(
        out,
        "\nSurface {}, bed {}; mean {}",
        temperature(l.surface_c, system),
        temperature(l.bed_c, system),
        temperature(l.mean_c, system)
    );
    match &l.thermocline {
        None => out.push_str("No thermocline: top and bottom differ by less than about 1 C (1.8 F)\n"),
        Some(t) => {
            let per = match system {
                System::Us => format!("{:.1} F per ft", t.gradient_c_m * 1.8 * 0.3048),
                System::Si => format!("{:.1} C per m", t.gradient_c_m),
            };
            let _ = writeln!(
                out,
                "Thermocline at {}, {} below the surface: {per}",
                length(t.elevation_m, system),
                length(context.profile.pool_m - t.elevation_m, system)
            );
        }
    }
    let _ = writeln!(
        out,
        "Mixed layer down to {}; Schmidt stability {:.0} J/m2",
        length(l.mixed_base_m, system),
        l.schmidt_j_m2
    );
    if let Some(least) = l.oxygen_min {
        let _ = writeln!(
            out,
            "Lowest oxygen {:.1} mg/L at {}",
            least.oxygen_mg_l,
            length(least.elevation_m, system)
        );
    }
    let _ = writeln!(out, "Stored {}", volume(l.volume_m3, system));
    if !answer.cold.is_empty() {
        let _ =
            writeln!(out, "\n{:<14} {:>18} {:>18} {:>18}", "Cold water", "usable", "unreachable", "total");
        for c in &answer.cold {
            let of = |v: Option<f64>| v.map_or_else(|| "no outlet usable".to_owned(), |v| volume(v, system));
            let _ = writeln!(
                out,
                "{:<14} {:>18} {:>18} {:>18}",
                format!("below {}", temperature(c.threshold_c, system)),
                of(c.usable_m3),
                of(c.usable_m3.map(|u| c.total_m3 - u)),
                volume(c.total_m3, system)
            );
        }
        if let Some(reach) = answer.reach_m {
            let _ = writeln!(
                out,
                "usable: above {}, the lowest any usable outlet draws from",
                length(reach, system)
            );
        }
    }
    let _ = writeln!(out, "\n{:<14} {:>12} {:>16}", "Outlet", "elevation", "water above it");
    for s in &answer.outlets {
        let o = &site.outlets[s.outlet];
        let state = match (s.wet, s.kept) {
            (false, _) => "DRY".to_owned(),
            (true, Some(false)) => {
                format!("SHORT, {} asked for", length(o.min_submergence_m.unwrap_or(0.0), system))
            }
            (true, Some(true)) => format!("keeps {}", length(o.min_submergence_m.unwrap_or(0.0), system)),
            (true, None) => "submergence not checked".to_owned(),
        };
        let _ = writeln!(
            out,
            "{} {:>12} {:>16}  {state}",
            fitted(&harmless(&o.name), 14),
            length(o.centre_m, system),
            length(s.submergence_m, system)
        );
    }
    out.push('\n');
    out.push_str(&drawn_column(site, &context.profile, &[], system));
    out.push('\n');
    let mut flags = flags_of(&context.profile.flags);
    flags.extend(answer.against_previous.iter());
    out.push_str(&list("Cast", &flags, true, system));
    out.push_str(&wrapped(caution(), 0));
    out
}

fn volume(m3: f64, system: System) -> String {
    match system {
        System::Us => show(m3, Dimension::Volume, system, 0),
        System::Si => format!("{:.2} hm3", m3 / 1e6),
    }
}

/// The answer of `check`: every problem, flag and note, and a closing line.
pub fn check(named: &str, problems: &[Problem]) -> String {
    let mut out = String::new();
    for p in problems {
        let _ = writeln!(out, "{p}");
    }
    let count = |weight: Weight| problems.iter().filter(|p| p.weight == weight).count();
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

/// Flags and notes, each on its own lines, the rest counted.
fn list(heading: &str, problems: &[&Problem], rows: bool, system: System) -> String {
    let mut out = String::new();
    for p in problems.iter().take(FLAGS) {
        let row = if rows {
            p.place.line.map_or_else(String::new, |l| format!(" line {l},"))
        } else {
            String::new()
        };
        out.push_str(&wrapped(
            &format!("{heading}:{row} {} ({}): {}", p.kind, p.weight.word(), sentence(p, system)),
            2,
        ));
    }
    if problems.len() > FLAGS {
        let _ = writeln!(out, "{heading}: {} more; `gatemix check` lists all", problems.len() - FLAGS);
    }
    out
}

/// Words wrapped at 80 cells, later lines indented.
fn wrapped(text: &str, indent: usize) -> String {
    let lead = text.len() - text.trim_start().len();
    let mut out = " ".repeat(lead);
    let mut used = lead;
    let mut first = true;
    for word in text.split_whitespace() {
        let wide = word.width();
        if !first && used + 1 + wide > WIDTH {
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
