//! The note as JSON.

use serde::Serialize;

use crate::order::{Moved, NoOrder, Order, Stand, Step};
use crate::report::caution;
use crate::season::Exhausted;
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::note::{NoteAnswer, StageChange, Subject};
use crate::units::{System, in_system};

use super::shape::{CheckJson, Head, ReleaseJson, SettingJson};
use super::targets::TargetJson;
use super::{checks, head, release, setting, targets, written};

#[derive(Serialize)]
struct NoteJson {
    #[serde(flatten)]
    head: Head,
    of: &'static str,
    decision: Option<u64>,
    why: Option<String>,
    remarks: Option<String>,
    #[serde(flatten)]
    setting: SettingJson,
    release: ReleaseJson,
    targets: Vec<TargetJson>,
    now: Option<SettingJson>,
    stands: bool,
    begins: String,
    /// Null where none is written.
    order: Option<OrderJson>,
    no_order: Option<String>,
    not_ready: Vec<String>,
    stages: Vec<StageJson>,
    season: Option<Vec<CaseJson>>,
    no_season: Option<String>,
    not_checked: Vec<String>,
    cautions: Vec<String>,
    caution: &'static str,
}

#[derive(Serialize)]
struct OrderJson {
    steps: Vec<StepJson>,
    stops: usize,
    astray_c: f64,
    over_hours: Option<f64>,
}

#[derive(Serialize)]
struct StepJson {
    moves: String,
    at_min: f64,
    stop: bool,
    from: StandJson,
    to: StandJson,
    flow_m3s: Option<f64>,
    temperature_c: Option<f64>,
    heads_m: Vec<(String, f64)>,
    nearest: Vec<CheckJson>,
    passes: Vec<CheckJson>,
}

#[derive(Serialize)]
struct StandJson {
    open: Option<f64>,
    /// Of a gate on a well what its well then gives it.
    flow_m3s: f64,
}

#[derive(Serialize)]
struct StageJson {
    point: String,
    now_m: Option<f64>,
    then_m: Option<f64>,
    fall_m_in_an_hour: Option<f64>,
    max_fall_m_in_an_hour: Option<f64>,
}

#[derive(Serialize)]
struct CaseJson {
    case: String,
    runs_out: Option<String>,
    under_reserve: Option<String>,
    days_outside: u32,
    worst_c: f64,
}

/// The answer of `note`.
pub fn note(context: &Context, answer: &NoteAnswer) -> String {
    let site = context.site();
    let said = |words: &String| in_system(words, System::Si);
    let season = answer.season.as_ref();
    let cases = season.ok().map(|season| {
        let case = |run: &&crate::tasks::season::SeasonRun| CaseJson {
            case: run.run.case.clone(),
            runs_out: run.outcome.exhausted.on().map(|date| date.to_string()),
            under_reserve: run
                .outcome
                .under_reserve
                .as_ref()
                .and_then(Exhausted::on)
                .map(|date| date.to_string()),
            days_outside: run.outcome.score.days_outside,
            worst_c: run.outcome.score.worst_c,
        };
        season.cases().iter().map(case).collect()
    });
    let fingerprint = season.map_or(&context.fingerprint, |season| &season.fingerprint);
    let (of, decision) = match answer.subject {
        Subject::Decision(id) => ("decision", Some(id)),
        Subject::FirstRanked => ("first_ranked", None),
        Subject::Named => ("named", None),
    };
    written(&NoteJson {
        head: head(context, fingerprint, &[]),
        of,
        decision,
        why: answer.why.clone(),
        remarks: answer.remarks.clone(),
        setting: setting(site, &answer.mix.setting),
        release: release(&answer.mix.mix),
        targets: targets(site, &answer.mix.mix.targets),
        now: answer.before.as_ref().map(|before| setting(site, before)),
        stands: answer.stands,
        begins: answer.begins.to_rfc3339(),
        order: answer.order.as_ref().and_then(|found| found.as_ref().ok()).map(|found| order(site, found)),
        no_order: answer
            .order
            .as_ref()
            .and_then(|found| found.as_ref().err())
            .map(|no: &NoOrder| said(&no.words(site))),
        not_ready: answer.not_ready.iter().map(said).collect(),
        stages: answer.stages.iter().filter_map(|stage| of_point(site, stage)).collect(),
        season: cases,
        no_season: season.err().map(said),
        not_checked: answer.not_checked.iter().map(crate::tasks::note::Unchecked::words).collect(),
        cautions: answer.cautions.iter().map(said).collect(),
        caution: caution(),
    })
}

fn order(site: &Site, order: &Order) -> OrderJson {
    OrderJson {
        steps: order.steps.iter().map(|one| step(site, one)).collect(),
        stops: order.stops,
        astray_c: order.astray_c,
        over_hours: order.over_hours,
    }
}

fn step(site: &Site, step: &Step) -> StepJson {
    let stand = |at: Stand| StandJson {
        open: at.opening.map(|opening| 100.0 * opening).filter(|_| !matches!(step.moved, Moved::Well(_))),
        flow_m3s: at.flow_m3s,
    };
    let head = |(well, head_m): &(usize, f64)| Some((site.wells.get(*well)?.name.clone(), *head_m));
    StepJson {
        moves: step.moved.name(site).to_owned(),
        at_min: step.at_min,
        stop: step.stop,
        from: stand(step.from),
        to: stand(step.to),
        flow_m3s: step.after.map(|after| after.flow_m3s),
        temperature_c: step.after.map(|after| after.temperature_c),
        heads_m: step.heads_m.iter().filter_map(head).collect(),
        nearest: checks(site, &step.nearest),
        passes: checks(site, &step.passes),
    }
}

fn of_point(site: &Site, stage: &StageChange) -> Option<StageJson> {
    Some(StageJson {
        point: site.river.as_ref()?.points.get(stage.point)?.name.clone(),
        now_m: stage.stage_m.map(|m| m.0),
        then_m: stage.stage_m.map(|m| m.1),
        fall_m_in_an_hour: stage.fall_m,
        max_fall_m_in_an_hour: stage.most_fall_m,
    })
}
