//! What happened, as JSON.

use serde::Serialize;

use crate::mix::groups;
use crate::record::{Candidate, Misfit, Score, Scores, Verdict};
use crate::report::text::learned::learned_yaml;
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::log::{Hindcast, Past, PastDay, Scored, Spell, Turned};
use crate::units::{System, in_system};

use super::shape::WarningJson;
use super::{ends, warnings};

#[derive(Serialize)]
pub(super) struct PastJson {
    days: Vec<DayJson>,
    scores: ScoresJson,
    decisions: Vec<TurnedJson>,
    left_out: Vec<LeftJson>,
    spells: Vec<SpellJson>,
    hindcast: Option<HindcastJson>,
    /// Why there is no hindcast.
    no_hindcast: Option<String>,
    learning: LearningJson,
    notes: Vec<WarningJson>,
}

#[derive(Serialize)]
struct DayJson {
    date: String,
    decision: Option<u64>,
    expected_c: Option<f64>,
    plain_c: Option<f64>,
    band_c: Option<[f64; 2]>,
    measured_c: Option<f64>,
    expected_mg_l: Option<f64>,
    plain_mg_l: Option<f64>,
    band_mg_l: Option<[f64; 2]>,
    measured_mg_l: Option<f64>,
    left_out: Option<String>,
}

#[derive(Serialize)]
struct ScoresJson {
    /// With nothing learned.
    temperature: ScoredJson,
    oxygen: ScoredJson,
    with_applied: Option<BothJson>,
    /// Fitted on these very days.
    with_learned: Option<BothJson>,
}

#[derive(Serialize)]
struct BothJson {
    temperature: ScoreJson,
    oxygen: ScoreJson,
}

#[derive(Serialize)]
struct ScoredJson {
    all: ScoreJson,
    by_level: Vec<LevelJson>,
    by_flow: Vec<FlowJson>,
    by_month: Vec<MonthJson>,
}

#[derive(Serialize)]
struct LevelJson {
    outlets: Vec<String>,
    #[serde(flatten)]
    score: ScoreJson,
}

#[derive(Serialize)]
struct FlowJson {
    flow_m3s: [f64; 2],
    #[serde(flatten)]
    score: ScoreJson,
}

#[derive(Serialize)]
struct MonthJson {
    month: u32,
    #[serde(flatten)]
    score: ScoreJson,
}

#[derive(Serialize)]
struct ScoreJson {
    n: usize,
    not_measured: usize,
    bias: Option<f64>,
    rmse: Option<f64>,
    percentile_75: Option<f64>,
    percentile_99: Option<f64>,
    greatest: Option<f64>,
    with_band: usize,
    inside: usize,
}

#[derive(Serialize)]
struct TurnedJson {
    decision: u64,
    from: String,
    to: String,
    places: Vec<PlaceJson>,
}

#[derive(Serialize)]
struct PlaceJson {
    point: String,
    temperature: ScoreJson,
    oxygen: ScoreJson,
}

#[derive(Serialize)]
struct LeftJson {
    date: String,
    why: String,
}

#[derive(Serialize)]
struct SpellJson {
    from: String,
    to: String,
    days_outside: usize,
    off_c: f64,
    causes: Vec<CauseJson>,
}

#[derive(Serialize)]
struct CauseJson {
    name: &'static str,
    speaks_for: Vec<String>,
    against: Vec<String>,
    to_tell: &'static str,
}

#[derive(Serialize)]
struct HindcastJson {
    from: String,
    to: String,
    plan: String,
    as_set: SeasonJson,
    nothing: SeasonJson,
    /// Chosen in view of all that came: no evidence of what could have been known.
    hindsight: SeasonJson,
    observed: Option<SeasonJson>,
}

#[derive(Serialize)]
struct SeasonJson {
    name: String,
    days_outside: usize,
    degree_days_c: f64,
    days_judged: usize,
    days_not_reached: usize,
}

#[derive(Serialize)]
struct LearningJson {
    from: Option<String>,
    to: Option<String>,
    n: usize,
    effects: Vec<EffectJson>,
    alike: Vec<String>,
    suspect: Option<String>,
    release_c: Option<f64>,
    release_mg_l: Option<f64>,
    /// The lines that apply it; null where nothing is kept.
    site_lines: Option<Vec<String>>,
}

#[derive(Serialize)]
struct EffectJson {
    effect: &'static str,
    values: Vec<FigureJson>,
    n: usize,
    stretches: usize,
    rmse: Option<[f64; 2]>,
    held_out: Option<[f64; 2]>,
    kept: bool,
    why_not: Option<String>,
}

#[derive(Serialize)]
struct FigureJson {
    outlets: Option<Vec<String>>,
    value: f64,
    interval: Option<[f64; 2]>,
    n: usize,
}

/// What happened.
pub(super) fn past(context: &Context, past: &Past) -> PastJson {
    let site = context.site();
    let both =
        |(warmth, breath): &(Score, Score)| BothJson { temperature: score(warmth), oxygen: score(breath) };
    let left =
        |left: &crate::record::Left| LeftJson { date: left.date.to_string(), why: si(&left.why.words()) };
    PastJson {
        days: past.days.iter().map(day).collect(),
        scores: ScoresJson {
            temperature: scored(site, &past.temperature),
            oxygen: scored(site, &past.oxygen),
            with_applied: past.with_applied.as_ref().map(both),
            with_learned: past.with_learned.as_ref().map(both),
        },
        decisions: past.decisions.iter().map(turned).collect(),
        left_out: past.left_out.iter().map(left).collect(),
        spells: past.spells.iter().map(spell).collect(),
        hindcast: past.hindcast.as_ref().ok().map(hindcast),
        no_hindcast: past.hindcast.as_ref().err().cloned(),
        learning: learning(site, past),
        notes: warnings(&past.notes),
    }
}

/// A sentence with its quantities in SI.
fn si(words: &str) -> String {
    in_system(words, System::Si)
}

fn outlets(site: &Site, level: usize) -> Vec<String> {
    let groups = groups(site);
    let outlets = groups.get(level).into_iter().flatten().filter_map(|&i| site.outlets.get(i));
    outlets.map(|outlet| outlet.name.clone()).collect()
}

fn day(day: &PastDay) -> DayJson {
    DayJson {
        date: day.date.to_string(),
        decision: day.decision,
        expected_c: day.expected_c,
        plain_c: day.plain_c,
        band_c: ends(day.band_c),
        measured_c: day.measured_c,
        expected_mg_l: day.expected_mg_l,
        plain_mg_l: day.plain_mg_l,
        band_mg_l: ends(day.band_mg_l),
        measured_mg_l: day.measured_mg_l,
        left_out: day.left_out.clone(),
    }
}

fn score(of: &Score) -> ScoreJson {
    let misfit = |read: fn(&Misfit) -> f64| of.misfit.as_ref().map(read);
    ScoreJson {
        n: of.n,
        not_measured: of.not_measured,
        bias: misfit(|m| m.bias),
        rmse: misfit(|m| m.rmse),
        percentile_75: misfit(|m| m.percentiles[0]),
        percentile_99: misfit(|m| m.percentiles[1]),
        greatest: misfit(|m| m.greatest),
        with_band: of.with_band,
        inside: of.inside,
    }
}

fn scored(site: &Site, of: &Scores) -> ScoredJson {
    let level = |(level, of): &(usize, Score)| LevelJson { outlets: outlets(site, *level), score: score(of) };
    let month = |(month, of): &(u32, Score)| MonthJson { month: *month, score: score(of) };
    ScoredJson {
        all: score(&of.all),
        by_level: of.by_level.iter().map(level).collect(),
        by_flow: of
            .by_flow
            .iter()
            .map(|class| FlowJson { flow_m3s: class.flow_m3s.into(), score: score(&class.score) })
            .collect(),
        by_month: of.by_month.iter().map(month).collect(),
    }
}

fn turned(turned: &Turned) -> TurnedJson {
    let place = |(point, warmth, breath): &(String, Score, Score)| PlaceJson {
        point: point.clone(),
        temperature: score(warmth),
        oxygen: score(breath),
    };
    TurnedJson {
        decision: turned.id,
        from: turned.days.0.to_string(),
        to: turned.days.1.to_string(),
        places: turned.places.iter().map(place).collect(),
    }
}

fn spell(spell: &Spell) -> SpellJson {
    let cause = |cause: &crate::record::Cause| CauseJson {
        name: cause.name,
        speaks_for: cause.speaks_for.iter().map(|words| si(words)).collect(),
        against: cause.against.iter().map(|words| si(words)).collect(),
        to_tell: cause.to_tell,
    };
    SpellJson {
        from: spell.days.0.to_string(),
        to: spell.days.1.to_string(),
        days_outside: spell.outside,
        off_c: spell.off_c,
        causes: spell.causes.iter().map(cause).collect(),
    }
}

fn hindcast(of: &Hindcast) -> HindcastJson {
    let season = |scored: &Scored| SeasonJson {
        name: scored.name.clone(),
        days_outside: scored.days_outside,
        degree_days_c: scored.degree_days_c,
        days_judged: scored.judged,
        days_not_reached: scored.lost,
    };
    HindcastJson {
        from: of.days.0.to_string(),
        to: of.days.1.to_string(),
        plan: of.plan.clone(),
        as_set: season(&of.as_set),
        nothing: season(&of.nothing),
        hindsight: season(&of.hindsight),
        observed: of.observed.as_ref().map(season),
    }
}

fn learning(site: &Site, past: &Past) -> LearningJson {
    let of = &past.learning;
    LearningJson {
        from: of.learned.window.map(|window| window.0.to_string()),
        to: of.learned.window.map(|window| window.1.to_string()),
        n: of.learned.n,
        effects: of.candidates.iter().map(|candidate| effect(site, candidate)).collect(),
        alike: of.alike.iter().map(|words| si(words)).collect(),
        suspect: of.suspect.as_ref().map(|suspect| si(&suspect.words())),
        release_c: of.learned.release_c,
        release_mg_l: of.learned.release_mg_l,
        site_lines: learned_yaml(site, of).map(|text| text.lines().map(str::to_owned).collect()),
    }
}

fn effect(site: &Site, of: &Candidate) -> EffectJson {
    let figure = |figure: &crate::record::Figure| FigureJson {
        outlets: figure.level.map(|level| outlets(site, level)),
        value: figure.value,
        interval: ends(figure.interval),
        n: figure.n,
    };
    EffectJson {
        effect: of.effect.name(),
        values: of.figures.iter().map(figure).collect(),
        n: of.n,
        stretches: of.stretches,
        rmse: of.rmse,
        held_out: of.held_out,
        kept: of.verdict == Verdict::Kept,
        why_not: match &of.verdict {
            Verdict::Kept => None,
            Verdict::Passed(why) | Verdict::Refused(why) => Some(si(why)),
        },
    }
}
