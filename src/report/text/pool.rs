//! The layers of the pool and the outlets in it.

use std::fmt::Write as _;

use crate::problem::harmless;
use crate::tasks::{Context, PoolAnswer, Since};
use crate::units::System;

use super::{fitted, length, oxygen, step, temperature, volume, wrapped};

pub(super) fn layers(context: &Context, answer: &PoolAnswer) -> String {
    let mut out = String::new();
    for line in layer_words(context, answer, context.system) {
        let _ = writeln!(out, "{line}");
    }
    if let Some(since) = since_words(context, answer, context.system) {
        out.push_str(&wrapped(&since, 1));
    }
    out.push_str(&cold_water(context, answer));
    out.push('\n');
    out
}

/// How the water is layered, one statement each.
pub fn layer_words(context: &Context, answer: &PoolAnswer, system: System) -> Vec<String> {
    let l = &answer.layering;
    let temperatures = format!(
        "Surface {}, bed {}, mean {}; stored {}",
        temperature(l.surface_c, system),
        temperature(l.bed_c, system),
        temperature(l.mean_c, system),
        volume(l.volume_m3, system)
    );
    let thermocline = match &l.thermocline {
        None => {
            format!("No thermocline: top and bottom differ by less than about {}", step(1.0, system))
        }
        Some(t) => {
            let per = match system {
                System::Us => format!("{:.1} F per ft", t.gradient_c_m * 1.8 * 0.3048),
                System::Si => format!("{:.1} C per m", t.gradient_c_m),
            };
            format!(
                "Thermocline at {}, {} below the surface: {per}",
                length(t.elevation_m, system),
                length(context.profile.pool_m - t.elevation_m, system)
            )
        }
    };
    let mixed = format!(
        "Mixed layer down to {}; Schmidt stability {:.0} J/m2",
        length(l.mixed_base_m, system),
        l.schmidt_j_m2
    );
    let least = l.oxygen_min.map_or_else(
        || "No oxygen measured".to_owned(),
        |least| {
            format!("Lowest oxygen {:.1} mg/L at {}", least.oxygen_mg_l, length(least.elevation_m, system))
        },
    );
    vec![temperatures, thermocline, mixed, least]
}

/// What the water did since the cast before, where there is one.
pub fn since_words(context: &Context, answer: &PoolAnswer, system: System) -> Option<String> {
    let s = answer.since.as_ref()?;
    let between =
        if s.days < 2.0 { format!("{:.0} hours", s.days * 24.0) } else { format!("{:.0} days", s.days) };
    let mut out = format!(
        "Since {} ({between}): surface {}, bed {}, mean {}; pool {}",
        date(context, s),
        bare(&signed(step(s.surface_c, system))),
        bare(&signed(step(s.bed_c, system))),
        signed(step(s.mean_c, system)),
        signed(length(s.pool_m, system))
    );
    let thermocline = s.thermocline_m.map(|m| m.map(|m| length(m, system)));
    let oxygen = s.oxygen_min_mg_l.map(|o| o.map(|o| oxygen(Some(o))));
    for (name, [then, now], absent) in
        [("thermocline", thermocline, "none"), ("lowest oxygen", oxygen, "unknown")]
    {
        let _ = match (then, now) {
            (None, None) => Ok(()),
            (Some(then), Some(now)) => write!(out, "; {name} {} to {now}", bare(&then)),
            (Some(then), None) => write!(out, "; {name} {then} to {absent}"),
            (None, Some(now)) => write!(out, "; {name} {absent} to {now}"),
        };
    }
    if let Some(flux) = s.heat_w_m2 {
        let _ = write!(out, "; heat {}", signed(format!("{flux:.0} W/m2")));
    }
    Some(out)
}

/// A figure without its unit, where the next one says it.
fn bare(figure: &str) -> &str {
    figure.split(' ').next().unwrap_or_default()
}

fn date(context: &Context, since: &Since) -> String {
    since.taken.with_timezone(&context.site().offset).format("%Y-%m-%d").to_string()
}

/// A figure with its unit as a change: with a plus above zero, without a sign where it rounds to zero.
fn signed(figure: String) -> String {
    let is_zero = !bare(&figure).contains(|c| matches!(c, '1'..='9'));
    match figure.strip_prefix('-') {
        Some(bare) if is_zero => bare.to_owned(),
        None if !is_zero => format!("+{figure}"),
        _ => figure,
    }
}

fn cold_water(context: &Context, answer: &PoolAnswer) -> String {
    let system = context.system;
    let mut out = String::new();
    if answer.cold.is_empty() {
        return out;
    }
    let _ = writeln!(out, "\n{:<14} {:>18} {:>18} {:>18}", "Cold water", "usable", "unreachable", "total");
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
    if let Some(reach) = reach_words(answer, system) {
        let _ = writeln!(out, "{reach}");
    }
    if let Some(since) = cold_since_words(context, answer, system) {
        out.push_str(&wrapped(&since, 2));
    }
    out
}

/// What usable means of cold water, where an outlet is usable.
pub fn reach_words(answer: &PoolAnswer, system: System) -> Option<String> {
    let reach = length(answer.reach_m?, system);
    Some(format!("usable: above {reach}, the lowest that the deepest usable outlet draws from"))
}

/// How the volumes of cold water changed since the cast before, where there is one and the site names a threshold.
pub fn cold_since_words(context: &Context, answer: &PoolAnswer, system: System) -> Option<String> {
    let since = answer.since.as_ref().filter(|s| !s.cold.is_empty())?;
    let changes = since.cold.iter().map(|c| {
        let of = |m3: f64| signed(volume(m3, system));
        let change = match (c.usable_m3.map(of), of(c.total_m3)) {
            (Some(usable), total) => format!("{usable} usable, {} in all", bare(&total)),
            (None, total) => format!("{total} in all"),
        };
        format!("below {} {change}", temperature(c.threshold_c, system))
    });
    let changes: Vec<String> = changes.collect();
    Some(format!("since {}: {}", date(context, since), changes.join("; ")))
}

pub(super) fn outlets(context: &Context, answer: &PoolAnswer) -> String {
    let (site, system) = (context.site(), context.system);
    let mut out = format!("{:<14} {:>12} {:>16}\n", "Outlet", "elevation", "water above it");
    for s in &answer.outlets {
        let o = &site.outlets[s.outlet];
        let asked = || length(o.min_submergence_m.unwrap_or(0.0), system);
        let state = match (s.wet, s.kept) {
            (false, _) => "DRY".to_owned(),
            (true, Some(false)) => format!("SHORT, {} asked for", asked()),
            (true, Some(true)) => format!("keeps {}", asked()),
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
    out
}
