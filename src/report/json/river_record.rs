//! What stations recorded, as JSON.

use serde::Serialize;

use crate::report::text::river::{PROVISIONAL, REVIEWED, unit_si};
use crate::target::{Held, Tally};
use crate::tasks::Context;
use crate::tasks::river::Observed;

#[derive(Serialize)]
pub(super) struct ObservedJson {
    target: String,
    point: String,
    of: &'static str,
    days: u32,
    days_over: u32,
    days_under: u32,
    days_unknown: u32,
    longest_run: u32,
    worst_by: Option<f64>,
    unit: &'static str,
    worst_by_c: Option<f64>,
    worst_by_mg_l: Option<f64>,
    worst_by_share: Option<f64>,
    worst_on: Option<String>,
    sum_outside: f64,
    months: Vec<StretchJson>,
    seasons: Vec<StretchJson>,
    outside: Vec<DayJson>,
    provisional: bool,
    note: &'static str,
}

#[derive(Serialize)]
struct StretchJson {
    of: String,
    days: u32,
    days_over: u32,
    days_under: u32,
    days_unknown: u32,
    longest_run: u32,
    worst_by: Option<f64>,
}

#[derive(Serialize)]
struct DayJson {
    date: String,
    value: Option<f64>,
    by: Option<f64>,
    standing: &'static str,
}

/// Every rule with a record at its point; temperature, oxygen and oxygen over saturation each on its own.
pub(super) fn observed(context: &Context, all: &[Observed]) -> Vec<ObservedJson> {
    let site = context.site();
    let mut out = Vec::new();
    for observed in all {
        let Some(rule) = site.targets.get(observed.target) else { continue };
        let r = &observed.record;
        for (of, held) in
            [("temperature", &r.temperature), ("oxygen", &r.oxygen), ("oxygen_share", &r.oxygen_share)]
        {
            let Some(held) = held else { continue };
            let unit = match of {
                "oxygen" => "mg/L",
                "oxygen_share" => "share",
                _ => unit_si(rule),
            };
            let worst = |kind: &str| held.all.worst.map(|w| w.0).filter(|_| of == kind);
            out.push(ObservedJson {
                target: rule.name.clone(),
                point: rule.point.clone(),
                of,
                days: held.all.judged,
                days_over: held.all.over,
                days_under: held.all.under,
                days_unknown: held.all.unknown,
                longest_run: held.all.longest_run,
                worst_by: held.all.worst.map(|w| w.0),
                unit,
                worst_by_c: worst("temperature").filter(|_| unit == "C"),
                worst_by_mg_l: worst("oxygen"),
                worst_by_share: worst("oxygen_share"),
                worst_on: held.all.worst.map(|w| w.1.to_string()),
                sum_outside: held.all.sum_outside,
                months: held.months.iter().map(|((y, m), t)| stretch(format!("{y}-{m:02}"), t)).collect(),
                seasons: held.seasons.iter().map(|(y, t)| stretch(y.to_string(), t)).collect(),
                outside: outside(held),
                provisional: r.provisional,
                note: if r.provisional { PROVISIONAL } else { REVIEWED },
            });
        }
    }
    out
}

fn stretch(of: String, t: &Tally) -> StretchJson {
    StretchJson {
        of,
        days: t.judged,
        days_over: t.over,
        days_under: t.under,
        days_unknown: t.unknown,
        longest_run: t.longest_run,
        worst_by: t.worst.map(|w| w.0),
    }
}

fn outside(held: &Held) -> Vec<DayJson> {
    let day = |(date, mark): &(chrono::NaiveDate, crate::target::Mark)| DayJson {
        date: date.to_string(),
        value: mark.value,
        by: mark.by,
        standing: mark.standing.word(),
    };
    held.days.iter().filter(|d| d.1.outside()).map(day).collect()
}
