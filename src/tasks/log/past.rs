//! What happened: every day of the past held against the gauge, each decision, what a season cost beside doing nothing
//! and beside perfect hindsight, and what the record teaches.
//!
//! Methods: `docs/methods.md`, section 9.

mod applied;
mod days;
mod hindcast;
mod spells;
mod stood;
mod turned;

use std::collections::BTreeMap;

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::rank::Progress;
pub use crate::record::Cause;
use crate::record::{Learned, Learning, Left, Pair, Paired, Row, Score, Scores, learn, pairs, scores};
use crate::series::{Daily, Record};
use crate::target::DAM;
use crate::tasks::{Context, Failure};

use applied::{Applied, applied, scored};
use days::{Known, casts, known};
use hindcast::hindcast;
use spells::{From, spells};
use stood::Tellers;
use turned::turned;

/// Share of the work that the days are; the rest is the season gone through again (choice).
const DAYS: f64 = 0.2;

/// A day of the past.
#[derive(Debug, Clone, PartialEq)]
pub struct PastDay {
    /// The date.
    pub date: NaiveDate,
    /// The decision whose gates stood, by the number it was first written under.
    pub decision: Option<u64>,
    /// Release as it is computed of the newest cast and what was set, with what is applied of the learned, C.
    pub expected_c: Option<f64>,
    /// The same with nothing learned, C; `None` where nothing learned is applied.
    pub plain_c: Option<f64>,
    /// Its 10-90 % band, C.
    pub band_c: Option<(f64, f64)>,
    /// Mean of the day at the gauge, C.
    pub measured_c: Option<f64>,
    /// Oxygen below the dam, mg/L.
    pub expected_mg_l: Option<f64>,
    /// The same with nothing learned, mg/L.
    pub plain_mg_l: Option<f64>,
    /// Its band, mg/L.
    pub band_mg_l: Option<(f64, f64)>,
    /// Oxygen at the gauge, mg/L.
    pub measured_mg_l: Option<f64>,
    /// Why it is left out of scores and of learning; `None` where it is in.
    pub left_out: Option<String>,
}

/// What became of a decision: what it expected when it was written, against the gauges while it stood.
#[derive(Debug, Clone, PartialEq)]
pub struct Turned {
    /// The number it was first written under.
    pub id: u64,
    /// First and last day on which it stood.
    pub days: (NaiveDate, NaiveDate),
    /// By place, the dam first: temperature, and oxygen.
    pub places: Vec<(String, Score, Score)>,
}

/// Days in a row on which the gauge lay outside the band.
#[derive(Debug, Clone, PartialEq)]
pub struct Spell {
    /// First and last day.
    pub days: (NaiveDate, NaiveDate),
    /// Days outside among them.
    pub outside: usize,
    /// Mean of measured less expected over these, C.
    pub off_c: f64,
    /// What may be why, the likeliest first.
    pub causes: Vec<Cause>,
}

/// How a season is scored.
#[derive(Debug, Clone, PartialEq)]
pub struct Scored {
    /// What it is, in words.
    pub name: String,
    /// Days outside the hard targets.
    pub days_outside: usize,
    /// Degree-days outside, C day.
    pub degree_days_c: f64,
    /// Days that could be judged.
    pub judged: usize,
    /// Days at the end that it does not reach, because no mix was allowed any more.
    pub lost: usize,
}

/// A past season gone through again.
#[derive(Debug, Clone, PartialEq)]
pub struct Hindcast {
    /// First and last day.
    pub days: (NaiveDate, NaiveDate),
    /// What tells the inflow of its days.
    pub plan: String,
    /// As it was set.
    pub as_set: Scored,
    /// As the gauge read it, where there is a record.
    pub observed: Option<Scored>,
    /// Doing nothing: the gates of the first day all season.
    pub nothing: Scored,
    /// Perfect hindsight: chosen in view of all that came. No evidence of what could have been known.
    pub hindsight: Scored,
}

/// What happened.
#[derive(Debug, Clone)]
pub struct Past {
    /// By date.
    pub days: Vec<PastDay>,
    /// Every decision that stood on a past day, by number.
    pub decisions: Vec<Turned>,
    /// The whole past, temperature, with nothing learned.
    pub temperature: Scores,
    /// And oxygen.
    pub oxygen: Scores,
    /// The same with what the site file applies of the learned; `None` where it applies nothing.
    pub with_applied: Option<(Score, Score)>,
    /// The same with what the record teaches, whether applied or not: fitted on these very days.
    pub with_learned: Option<(Score, Score)>,
    /// Days left out, each with its reason.
    pub left_out: Vec<Left>,
    /// What can be learned from it; nothing of it is applied but by the site file.
    pub learning: Learning,
    /// Spells outside the band.
    pub spells: Vec<Spell>,
    /// The season gone through again, or why it cannot be.
    pub hindcast: Result<Hindcast, String>,
    /// What was assumed.
    pub notes: Vec<Problem>,
}

/// What happened up to the date of the answer. Days are computed with nothing learned, and then with what the site file
/// applies of it.
///
/// # Errors
/// [`Failure::Stopped`], where `progress` stops it.
pub fn past(context: &Context, progress: Progress) -> Result<Past, Failure> {
    past_within(context, (NaiveDate::MIN, NaiveDate::MAX), progress)
}

/// How well the release was foreseen, and what the record teaches: the past without its seasons gone through again.
#[derive(Debug, Clone, PartialEq)]
pub struct Skill {
    /// Temperature, with nothing learned.
    pub temperature: Score,
    /// And oxygen.
    pub oxygen: Score,
    /// What can be learned from it.
    pub learning: Learning,
}

/// How well the release was foreseen up to the date of the answer.
///
/// # Errors
/// As [`past`].
pub fn skill(context: &Context, progress: Progress) -> Result<Skill, Failure> {
    let tellers = Tellers::of(context);
    let (gauges, nothing) = (gauges(context), Daily::default());
    let gauge = gauges.get(DAM).unwrap_or(&nothing);
    let days = known(context, &tellers, &casts(context), gauge);
    let (paired, learning) = taught(context, &days, gauge, progress)?;
    Ok(Skill { temperature: scores(&warmth(&paired)).all, oxygen: scores(&breath(&paired)).all, learning })
}

/// The same of the days of a span alone; what the record teaches is taken from all of it.
///
/// # Errors
/// As [`past`].
pub fn past_within(
    context: &Context,
    span: (NaiveDate, NaiveDate),
    progress: Progress,
) -> Result<Past, Failure> {
    let site = context.site();
    let tellers = Tellers::of(context);
    let (gauges, nothing) = (gauges(context), Daily::default());
    let gauge = gauges.get(DAM).unwrap_or(&nothing);
    let casts = casts(context);
    let mut days = known(context, &tellers, &casts, gauge);
    let (mut paired, learning) = taught(context, &days, gauge, &|done| progress(DAYS * done))?;
    let later = |done: f64| progress(DAYS + (1.0 - DAYS) * done);
    let hindcast = hindcast(context, &tellers, &casts, gauge, &later)?;
    let is_inside = |date: NaiveDate| (span.0..=span.1).contains(&date);
    days.retain(|day| is_inside(day.date));
    paired.keep(&is_inside);
    let computed: BTreeMap<NaiveDate, &Pair> =
        paired.pairs.iter().chain(&paired.beside).map(|pair| (pair.date, pair)).collect();
    let with_applied = applied(site, &days, &computed);
    let shown = shown(&days, &computed, &with_applied, &paired.left_out, gauge);
    let plain = site.without_learned();
    let spells = spells(&From {
        context,
        plain: plain.as_ref().unwrap_or(site),
        days: &shown,
        known: &days,
        pairs: &paired.pairs,
        casts: &casts,
        suspect: learning.suspect.as_ref(),
    });
    Ok(Past {
        days: shown,
        decisions: turned(&tellers, &days, &gauges),
        temperature: scores(&warmth(&paired)),
        oxygen: scores(&breath(&paired)),
        with_applied: scored(&paired.pairs, &with_applied),
        with_learned: with(&paired.pairs, &learning.learned),
        left_out: paired.left_out,
        learning,
        spells,
        hindcast,
        notes: tellers.notes,
    })
}

/// What every gauge read, by day.
fn gauges(context: &Context) -> BTreeMap<String, Daily> {
    let site = context.site();
    let daily = |record: &Record| record.daily(site.offset, site.coverage);
    context.conditions.observed.iter().map(|(point, record)| (point.clone(), daily(record))).collect()
}

/// The days held against the gauge, and what they teach.
fn taught(
    context: &Context,
    days: &[Known],
    gauge: &Daily,
    progress: Progress,
) -> Result<(Paired, Learning), Failure> {
    let site = context.site();
    let told: Vec<_> = days.iter().map(Known::day).collect();
    let paired = pairs(site, &told, gauge, progress).ok_or(Failure::Stopped)?;
    let learning = learn(site, &paired.pairs, site.learning_days);
    Ok((paired, learning))
}

fn warmth(paired: &Paired) -> Vec<Row> {
    paired.pairs.iter().map(Pair::temperature_row).collect()
}

fn breath(paired: &Paired) -> Vec<Row> {
    paired.pairs.iter().map(Pair::oxygen_row).collect()
}

/// The scores of pairs with what was learned put to them; `None` where nothing was.
fn with(pairs: &[Pair], learned: &Learned) -> Option<(Score, Score)> {
    let moved = |band: (f64, f64), by: f64| (band.0 + by, band.1 + by);
    let rows = pairs.iter().map(|pair| {
        let (temperature_c, oxygen_mg_l) = pair.with(learned);
        let (warmth, breath) = (pair.temperature_row(), pair.oxygen_row());
        let gained = oxygen_mg_l.zip(pair.computed_mg_l).map(|(with, plain)| with - plain);
        (
            Row {
                expected: Some(temperature_c),
                band: Some(moved(pair.band_c, temperature_c - pair.computed_c)),
                ..warmth
            },
            Row {
                expected: oxygen_mg_l,
                band: pair.band_mg_l.zip(gained).map(|(band, by)| moved(band, by)),
                ..breath
            },
        )
    });
    let (warmth, breath): (Vec<Row>, Vec<Row>) = rows.unzip();
    learned.has_effect().then(|| (Score::of(&warmth), Score::of(&breath)))
}

/// The days as they are shown.
fn shown(
    days: &[Known],
    pairs: &BTreeMap<NaiveDate, &Pair>,
    applied: &BTreeMap<NaiveDate, Applied>,
    left_out: &[Left],
    gauge: &Daily,
) -> Vec<PastDay> {
    let left: BTreeMap<NaiveDate, &Left> = left_out.iter().map(|left| (left.date, left)).collect();
    let one = |day: &Known| {
        let pair = pairs.get(&day.date);
        let with = applied.get(&day.date);
        PastDay {
            date: day.date,
            decision: day.stood.as_ref().and_then(|stood| stood.decision),
            expected_c: with.map(|with| with.expected_c).or(pair.map(|pair| pair.computed_c)),
            plain_c: with.and(pair).map(|pair| pair.computed_c),
            band_c: with.map_or(pair.map(|pair| pair.band_c), |with| with.band_c),
            measured_c: gauge.temperature_c.on(day.date).map(|day| day.mean),
            expected_mg_l: with.map_or(pair.and_then(|pair| pair.computed_mg_l), |with| with.expected_mg_l),
            plain_mg_l: with.and(pair).and_then(|pair| pair.computed_mg_l),
            band_mg_l: with.map_or(pair.and_then(|pair| pair.band_mg_l), |with| with.band_mg_l),
            measured_mg_l: gauge.oxygen_mg_l.on(day.date).map(|day| day.mean),
            left_out: left.get(&day.date).map(|left| left.why.words()),
        }
    };
    days.iter().map(one).collect()
}
