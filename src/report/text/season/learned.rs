//! What was learned of the pool, in words, with the lines to put into the site file.

use crate::problem::{Problem, harmless};
use crate::season::{AS_NEAR, Apart, Fitted, Learned};
use crate::tasks::Context;
use crate::tasks::season::LearnAnswer;
use crate::units::{Dimension, System, show};

use super::super::{labelled, list, wrapped};

/// Everything but head and caution.
pub(in crate::report::text) fn body(context: &Context, answer: &LearnAnswer) -> String {
    let system = context.system;
    let learned = &answer.learned;
    let [first, second, third] = &answer.casts;
    let mut out = labelled(
        "Learned",
        &format!(
            "from the cast of {} to that of {}, tested on that of {}",
            first.date, second.date, third.date
        ),
    );
    let gates = match &answer.schedule {
        Some(file) => format!("gates by {}", harmless(file)),
        None => "gates as they are set now, on all days".to_owned(),
    };
    let told = format!(
        "days by plan {} ({}), {gates}; air: {}",
        harmless(&answer.plan.name),
        harmless(&answer.plan.file),
        harmless(&answer.air)
    );
    out.push_str(&labelled("From", &told));
    let fitted = format!("the pool computed to {}: {}", second.date, off(learned.fitted, system));
    out.push_str(&labelled("Fitted", &fitted));
    let tested = format!("the pool computed on to {}, not used: {}", third.date, off(learned.tested, system));
    out.push_str(&labelled("Tested", &tested));
    out.push_str("\nWhat nobody measures         before    after   about as near    published range\n");
    for fit in learned.each() {
        out.push_str(&row(&fit));
    }
    let off = show(AS_NEAR, Dimension::TemperatureDifference, system, 2);
    let near = format!(
        "  about as near: with it there, and the others following, the pool is off by no more than {off} or {AS_NEAR:.2} \
         mg/L, or a tenth, beside the best"
    );
    out.push_str(&wrapped(&near, 4));
    if !learned.untold.is_empty() {
        out.push_str(&wrapped(
            "  - not told: all of the range comes about as near, so it stays as it was",
            4,
        ));
    }
    if !learned.at_end.is_empty() {
        out.push_str(&wrapped("  ! at an end of what is published: the pool asks for more than that", 4));
    }
    out.push_str("\nFor site.yaml, among what it says under `season`\n");
    for line in lines(learned) {
        out.push_str("  ");
        out.push_str(&line);
        out.push('\n');
    }
    out.push_str(&wrapped(
        "  light_per_m stands in the place of secchi, where that is given; nothing was written.",
        2,
    ));
    out.push('\n');
    let notes: Vec<&Problem> = answer.notes.iter().collect();
    out.push_str(&list("The days between", &notes, false, system));
    out
}

/// How far the computed pool is from a cast, with the knobs before and with those found.
fn off([before, after]: [Apart; 2], system: System) -> String {
    let c = |apart: Apart| show(apart.temperature_c, Dimension::TemperatureDifference, system, 2);
    let oxygen = before.oxygen_mg_l.zip(after.oxygen_mg_l).map_or_else(
        || "; oxygen not known".to_owned(),
        |(before, after)| format!("; oxygen by {before:.2} mg/L, now by {after:.2} mg/L"),
    );
    format!("off by {} (root mean square), now by {}{oxygen}", c(before), c(after))
}

/// A knob before and after, marked where it stands at an end of its range or the casts do not tell it.
fn row(fit: &Fitted) -> String {
    let scale = if fit.name == WIND { 100.0 } else { 1.0 };
    let of = |value: f64| figures(scale * value);
    let mark = match (fit.told, fit.at_end) {
        (false, _) => '-',
        (_, true) => '!',
        _ => ' ',
    };
    let [near, range] = [fit.near, fit.range].map(|[low, high]| format!("{} to {}", of(low), of(high)));
    let (before, after) = (of(fit.before), of(fit.after));
    format!("{mark} {:<24} {before:>8} {after:>8}   {near:<16} {range}\n", called(fit.name))
}

/// The knob whose figures are percent.
const WIND: &str = "wind";

/// A knob with its unit.
fn called(name: &str) -> String {
    let unit = match name {
        WIND => " share, %",
        "light" => " lost, per m",
        "oxygen demand" => ", mg/L a day",
        _ => ", a factor",
    };
    format!("{name}{unit}")
}

/// Three figures.
fn figures(value: f64) -> String {
    let decimals = match value.abs() {
        v if v >= 10.0 => 1,
        v if v >= 1.0 => 2,
        v if v >= 0.1 => 3,
        _ => 4,
    };
    format!("{value:.decimals$}")
}

/// The lines for the site file: of what the casts tell.
pub(in crate::report) fn lines(learned: &Learned) -> Vec<String> {
    let line = |fit: Fitted| {
        let value = figures(fit.after);
        match fit.name {
            WIND => format!("  wind_share: {}%", figures(100.0 * fit.after)),
            "light" => format!("  light_per_m: {value}"),
            // the bed's beside it, so that the line can stand in the place of one that is there
            "oxygen demand" => {
                let bed = learned.knobs.bed_demand_g_m2_day;
                format!("  oxygen_demand: {{ water: {value}, bed: {bed} }}")
            }
            other => format!("  {other}: {value}"),
        }
    };
    std::iter::once("season:".to_owned())
        .chain(learned.each().into_iter().filter(|fit| fit.told).map(line))
        .collect()
}
