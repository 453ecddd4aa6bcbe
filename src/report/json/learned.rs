//! What was learned of the pool, as JSON.

use serde::Serialize;

use crate::report::text::season::learned::lines;
use crate::season::{Apart, Fitted};
use crate::tasks::Context;
use crate::tasks::season::{Dated, LearnAnswer};

use super::shape::{Head, WarningJson};
use super::{caution, head, warnings, written};

#[derive(Serialize)]
struct Shown {
    #[serde(flatten)]
    head: Head,
    learned: LearnedJson,
    warnings: Vec<WarningJson>,
    caution: &'static str,
}

#[derive(Serialize)]
struct LearnedJson {
    /// From, to, and the one of the test.
    casts: Vec<CastJson>,
    plan: String,
    plan_file: String,
    /// Null where what is set now stands for the days.
    schedule_file: Option<String>,
    weather: String,
    knobs: Vec<KnobJson>,
    /// Root mean square against the second cast.
    fitted: PairJson,
    /// Against the third, which was not used.
    tested: PairJson,
    /// For the site file.
    site_lines: Vec<String>,
}

#[derive(Serialize)]
struct CastJson {
    date: String,
    file: String,
}

#[derive(Serialize)]
struct KnobJson {
    name: &'static str,
    before: f64,
    after: f64,
    range: [f64; 2],
    /// How far it can go while, the others following, the pool comes about as near.
    as_near: [f64; 2],
    at_end: bool,
    /// False: the casts do not tell it, and it stays as it was.
    told: bool,
}

#[derive(Serialize)]
struct PairJson {
    before: ApartJson,
    after: ApartJson,
}

#[derive(Serialize)]
struct ApartJson {
    temperature_c: f64,
    oxygen_mg_l: Option<f64>,
}

/// The answer of `season --learn`.
pub fn learned(context: &Context, answer: &LearnAnswer) -> String {
    let of = &answer.learned;
    let cast = |cast: &Dated| CastJson { date: cast.date.to_string(), file: cast.profile.file.clone() };
    let knob = |Fitted { name, before, after, range, near, at_end, told }| KnobJson {
        name,
        before,
        after,
        range,
        as_near: near,
        at_end,
        told,
    };
    written(&Shown {
        head: head(context, &answer.fingerprint, &[]),
        learned: LearnedJson {
            casts: answer.casts.iter().map(cast).collect(),
            plan: answer.plan.name.clone(),
            plan_file: answer.plan.file.clone(),
            schedule_file: answer.schedule.clone(),
            weather: answer.air.clone(),
            knobs: of.each().into_iter().map(knob).collect(),
            fitted: pair(of.fitted),
            tested: pair(of.tested),
            site_lines: lines(of),
        },
        warnings: warnings(&answer.notes),
        caution: caution(),
    })
}

fn pair([before, after]: [Apart; 2]) -> PairJson {
    let one = |Apart { temperature_c, oxygen_mg_l }| ApartJson { temperature_c, oxygen_mg_l };
    PairJson { before: one(before), after: one(after) }
}
