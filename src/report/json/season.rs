//! The answer of `season` as JSON.

use chrono::NaiveDate;

use crate::mix::Setting;
use crate::problem::harmless;
use crate::report::text::river::unit_si;
use crate::season::{
    ColdDay, ColdWater, Decision, Exhausted, Fully, GateLife, Outcome, Score, SeasonDay, Spell, StageDate,
    StageFall, TargetTally, Why,
};
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::season::{SeasonAnswer, SeasonRun, Seen};
use crate::units::{System, in_system};

use super::season_shape::{
    BewareJson, ColdDayJson, ColdJson, DayJson, DecisionJson, GateJson, LeftJson, PlainDayJson,
    PlainSeasonJson, PointJson, ReleaseJson, ReserveJson, RunJson, ScoreJson, SeasonJson, SpellJson,
    StageFallJson, StageJson, TargetJson,
};
use super::{caution, head, moved_gates, setting, warnings, written};

/// The answer of `season`: the season spoken of at the top level, the others under `runs`.
pub fn season(context: &Context, answer: &SeasonAnswer) -> String {
    let site = context.site();
    let mut spoken = run(site, answer, &answer.main);
    // the same plan and strategy in the other cases belong to what is said of the targets
    let others = answer.cases().into_iter().filter(|r| !std::ptr::eq(*r, &raw const answer.main));
    spoken.targets.extend(others.flat_map(|r| targets(site, r)));
    let shown = SeasonJson {
        head: head(context, &answer.fingerprint, &[]),
        begins: answer.begins.to_string(),
        decides: answer.decides.to_string(),
        decide_days: answer.decide_days,
        order: answer.order.iter().map(|criterion| criterion.name()).collect(),
        run: spoken,
        runs: answer.others.iter().map(|r| run(site, answer, r)).collect(),
        plain: answer.without.as_ref().map(plain),
        warnings: warnings(&answer.notes),
        caution: caution(),
    };
    written(&shown)
}

/// A season with nothing learned.
fn plain(of: &SeasonRun) -> PlainSeasonJson {
    let day = |day: &SeasonDay| PlainDayJson {
        date: day.date.to_string(),
        temperature_c: day.release.map(|release| release.temperature_c),
        oxygen_below_mg_l: day.release.and_then(|release| release.oxygen_below_mg_l),
    };
    PlainSeasonJson {
        exhausted_on: on(&of.outcome.exhausted),
        score: score(&of.outcome.score),
        days: of.run.days.iter().map(day).collect(),
    }
}

fn score(score: &Score) -> ScoreJson {
    ScoreJson {
        days_not_reached: score.lost,
        worst_c: score.worst_c,
        days_outside: score.days_outside,
        degree_days_outside: score.degree_days,
        moves: score.moves,
    }
}

fn run(site: &Site, answer: &SeasonAnswer, of: &SeasonRun) -> RunJson {
    let Outcome { exhausted, cold, .. } = &of.outcome;
    let outcome = &of.outcome;
    RunJson {
        plan: of.run.plan.clone(),
        plan_file: of.plan.file.clone(),
        case: of.run.case.clone(),
        year: of.skies.year,
        weather: of.skies.from.clone(),
        strategy: of.run.strategy.clone(),
        foresight: of.foresight,
        weather_seen: answer.seen(of) != Seen::Nothing,
        cold_water_below_c: cold.first().map(|water| water.threshold_c),
        days: (of.run.days.iter().enumerate()).map(|(i, d)| day(site, of, d, cold.first(), i)).collect(),
        gates: outcome.gates.iter().map(|g| gate(site, g)).collect(),
        exhausted_on: on(exhausted),
        exhausted_until: outcome.spells.first().and_then(|spell| spell.until).map(|date| date.to_string()),
        exhausted: outcome.spells.iter().map(spell).collect(),
        nearest_c: outcome.nearest.map(|nearest| nearest.0),
        nearest_on: outcome.nearest.map(|nearest| nearest.1.to_string()),
        exhausted_unknown: unknown(exhausted),
        under_reserve_on: outcome.under_reserve.as_ref().and_then(on),
        targets: targets(site, of),
        score: score(&outcome.score),
        cold_water: cold.iter().map(cold_water).collect(),
        reserves: (site.season.reserves.iter().zip(&outcome.reserves))
            .map(|(reserve, (_, under))| ReserveJson {
                from: format!("{:02}-{:02}", reserve.from.month, reserve.from.day),
                colder_than_c: reserve.colder_c,
                volume_m3: reserve.volume_m3,
                under_on: on(under),
                unknown: unknown(under),
            })
            .collect(),
        left: (outcome.left.iter())
            .map(|left| LeftJson {
                date: left.date.to_string(),
                usable_m3: left.usable_m3,
                days_outside_after: left.days_outside,
            })
            .collect(),
        decisions: of.run.decisions.iter().map(|d| decision(site, outcome, d)).collect(),
        moves: outcome.moves,
        crew_hours: outcome.crew_hours,
        stages: outcome.stages.iter().filter_map(|s| stage(site, s)).collect(),
        turnover_on: outcome.turnover.map(|d| d.to_string()),
        oxygen_min_mg_l: outcome.least_oxygen.map(|o| o.0),
        oxygen_min_on: outcome.least_oxygen.map(|o| o.1.to_string()),
        generation_lost_mwh: outcome.generation_lost_mwh,
        fall_max_m_per_day: outcome.fastest_fall.map(|f| f.0),
        fall_max_on: outcome.fastest_fall.map(|f| f.1.to_string()),
        stage_falls: outcome.stage_falls.iter().filter_map(|f| stage_fall(site, f)).collect(),
        beware: (outcome.warnings.iter())
            .map(|w| BewareJson { date: w.date.to_string(), kind: w.kind, text: said(&w.words) })
            .collect(),
        balance_water_relative: outcome.errors.0,
        balance_heat_relative: outcome.errors.1,
        stops_on: of.run.ended.as_ref().map(|e| e.date.to_string()),
        stops_because: of.run.ended.as_ref().map(|e| said(&e.words)),
    }
}

/// A sentence in SI.
fn said(words: &str) -> String {
    harmless(&in_system(words, System::Si))
}

fn on(of: &Exhausted) -> Option<String> {
    of.on().map(|date| date.to_string())
}

fn unknown(of: &Exhausted) -> Option<String> {
    match of {
        Exhausted::Unknown(why) => Some(why.clone()),
        Exhausted::On(_) | Exhausted::NotBy(_) => None,
    }
}

fn day(site: &Site, of: &SeasonRun, day: &SeasonDay, cold: Option<&ColdWater>, at: usize) -> DayJson {
    let points = site.river.as_ref().map_or(&[][..], |r| &r.points);
    let arrives = |figures: &Vec<crate::river::Figures>| {
        let one = |(point, f): (&crate::site::Point, &crate::river::Figures)| PointJson {
            name: point.name.clone(),
            temperature_c: f.mean_c,
            temperature_max_c: f.range_c.map(|r| r.0),
            oxygen_mg_l: f.oxygen_mean_mg_l,
        };
        points.iter().zip(figures).map(one).collect()
    };
    let decided = of.run.decisions.iter().find(|d| d.date == day.date);
    DayJson {
        date: day.date.to_string(),
        pool_m: day.pool_m,
        inflow_m3s: day.inflow_m3s,
        setting: setting(site, &Setting::of(day.gates.clone())),
        release: day.release.map(|release| ReleaseJson {
            flow_m3s: release.flow_m3s,
            temperature_c: release.temperature_c,
            oxygen_mg_l: release.oxygen_mg_l,
            oxygen_below_mg_l: release.oxygen_below_mg_l,
        }),
        points: day.points.as_ref().map(arrives),
        cold_water_m3: cold.and_then(|c| c.days.get(at)?.usable_m3),
        attainable_c: decided.and_then(|d| d.attainable_c),
        outside: outside(site, of, day.date),
        balance_water_m3: day.balance.water_m3.error(),
        balance_heat_j: day.balance.heat_j.error(),
    }
}

/// Names of the hard targets that a day lies outside of.
fn outside(site: &Site, of: &SeasonRun, date: NaiveDate) -> Vec<String> {
    let missed = |told: &&TargetTally| {
        let marks = told.temperature_days.iter().chain(&told.oxygen_days);
        marks.into_iter().any(|(day, mark)| *day == date && mark.outside())
    };
    let hard = of.outcome.targets.iter().filter(missed).filter_map(|told| site.targets.get(told.target));
    hard.filter(|rule| !rule.soft).map(|rule| rule.name.clone()).collect()
}

fn gate(site: &Site, life: &GateLife) -> GateJson {
    let fully = match life.fully {
        Fully::Always => life.first_day.map(|first| (first, life.last_day)),
        Fully::Never => None,
        Fully::Within(first, last) => Some((first, Some(last))),
    };
    GateJson {
        outlet: site.outlets.get(life.outlet).map_or_else(String::new, |o| o.name.clone()),
        first_day: life.first_day.map(|d| d.to_string()),
        last_day: life.last_day.map(|d| d.to_string()),
        reason: life.reason.as_ref().map(|r| r.0),
        text: life.reason.as_ref().map(|r| said(&r.1)),
        book_by: life.book_by.map(|d| d.to_string()),
        fully_from: fully.map(|days| days.0.to_string()),
        fully_to: fully.and_then(|days| days.1).map(|d| d.to_string()),
    }
}

fn spell(of: &Spell) -> SpellJson {
    SpellJson {
        from: of.from.to_string(),
        to: of.to.to_string(),
        until: of.until.map(|date| date.to_string()),
        above_c: of.most_c,
    }
}

fn targets(site: &Site, of: &SeasonRun) -> Vec<TargetJson> {
    let one = |told: &TargetTally| {
        let rule = site.targets.get(told.target)?;
        let range = told.temperature.unwrap_or_default();
        let main = if told.temperature.is_some() { range } else { told.oxygen.unwrap_or_default() };
        let degrees = rule.is_of_temperature() && !rule.statistic.counts_days();
        Some(TargetJson {
            name: rule.name.clone(),
            point: rule.point.clone(),
            case: of.run.case.clone(),
            low: rule.low_c,
            preferred: rule.preferred_c,
            high: rule.high_c,
            oxygen_min_mg_l: rule.oxygen_min_mg_l,
            days_outside: told.days_outside(),
            degree_days_outside: told.temperature.as_ref().filter(|_| degrees).map(|t| t.sum_outside),
            longest_run: told.longest_run(),
            days: main.judged,
            days_unknown: main.unknown,
            days_above: range.over,
            days_below: range.under,
            worst_by: range.worst.map(|w| w.0),
            worst_on: range.worst.map(|w| w.1.to_string()),
            unit: unit_si(rule),
            oxygen_days_below: told.oxygen.as_ref().map(|t| t.over + t.under),
            soft: rule.soft,
        })
    };
    of.outcome.targets.iter().filter_map(one).collect()
}

fn cold_water(cold: &ColdWater) -> ColdJson {
    let one = |day: &ColdDay| ColdDayJson {
        date: day.date.to_string(),
        usable_m3: day.usable_m3,
        total_m3: day.total_m3,
        unreachable_m3: day.unreachable_m3(),
    };
    ColdJson { threshold_c: cold.threshold_c, days: cold.days.iter().map(one).collect() }
}

fn decision(site: &Site, outcome: &Outcome, of: &Decision) -> DecisionJson {
    let moves = outcome.calendar.iter().find(|m| m.date == of.date);
    let reached = outcome.reached.iter().find(|r| r.date == of.date);
    let asked = reached.map(crate::season::Reached::range_c);
    let because = reached.and_then(|on| on.because.as_deref()).map(said);
    let is_forced = matches!(of.why, Why::Forced(_));
    DecisionJson {
        date: of.date.to_string(),
        why: match of.why {
            Why::Begin => "begin",
            Why::Due => "due",
            Why::Forced(_) => "forced",
            Why::Rule { .. } => "rule",
            Why::OutageOver(_) => "outage_over",
            Why::Crew(_) => "crew",
        },
        limit: because.clone().filter(|_| is_forced),
        because: because.filter(|_| !is_forced),
        attainable_c: of.attainable_c,
        asked_c: asked.map_or([None, None], <[Option<f64>; 2]>::from),
        moves: of.moves,
        crew_hours: of.crew_hours,
        moved: moves.map_or_else(Vec::new, |m| moved_gates(site, &m.moved)),
        past: of.past.iter().map(|check| said(&check.words(site))).collect(),
        book_by: moves.and_then(|m| m.book_by).map(|d| d.to_string()),
    }
}

fn stage(site: &Site, of: &StageDate) -> Option<StageJson> {
    let stages = site.season.stages.get(of.stages)?;
    Some(StageJson {
        name: stages.name.clone(),
        stage: stages.at.get(of.stage)?.0.clone(),
        point: stages.point.clone(),
        on: on(&of.on),
        unknown: unknown(&of.on),
    })
}

fn stage_fall(site: &Site, of: &StageFall) -> Option<StageFallJson> {
    let point = site.river.as_ref()?.points.get(of.point)?;
    Some(StageFallJson {
        point: point.name.clone(),
        fall_m_per_hour: of.m_per_hour,
        allowed_m_per_hour: point.stage_fall_m_per_hour,
        on: of.date.to_string(),
    })
}
