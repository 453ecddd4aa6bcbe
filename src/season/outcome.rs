//! What people decide by: cold water by date, exhaustion, gates lost, days outside, stages, moves.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::limits::Move;
use crate::site::Site;

use super::reached::SAME_C;
use super::run::{Run, SeasonDay, Setup};
use super::tally::{Score, TargetTally, tallies};
use super::{beware, cold, gates, reached, stages};

/// Cold water on a day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ColdDay {
    /// The day, at its end.
    pub date: NaiveDate,
    /// All of it, m3.
    pub total_m3: f64,
    /// What the outlets usable on that date can draw, m3; `None` where none is usable.
    pub usable_m3: Option<f64>,
}

impl ColdDay {
    /// What no usable outlet can draw, m3.
    pub fn unreachable_m3(&self) -> f64 {
        self.total_m3 - self.usable_m3.unwrap_or(0.0)
    }
}

/// Cold water below one threshold, day by day.
#[derive(Debug, Clone, PartialEq)]
pub struct ColdWater {
    /// Threshold, C.
    pub threshold_c: f64,
    /// By day.
    pub days: Vec<ColdDay>,
}

/// What was left on a date, and what came of it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Left {
    /// The day, at its end.
    pub date: NaiveDate,
    /// Usable water below the first threshold of the site, m3; `None` where no outlet is usable.
    pub usable_m3: Option<f64>,
    /// Days after it outside hard targets, summed over the targets.
    pub days_outside: u32,
}

/// When something runs out.
#[derive(Debug, Clone, PartialEq)]
pub enum Exhausted {
    /// On this day.
    On(NaiveDate),
    /// Not by the end of the season, this day.
    NotBy(NaiveDate),
    /// It cannot be said.
    Unknown(String),
}

impl Exhausted {
    /// The day, where it is one of the season.
    pub fn on(&self) -> Option<NaiveDate> {
        match self {
            Self::On(date) => Some(*date),
            Self::NotBy(_) | Self::Unknown(_) => None,
        }
    }
}

/// A stretch of days of decision on which no allowed mix reaches the high of the target at the dam.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Spell {
    /// Its first day of decision.
    pub from: NaiveDate,
    /// Its last, of those on which a rule asks.
    pub to: NaiveDate,
    /// The first after it on which a mix reaches it again.
    pub until: Option<NaiveDate>,
    /// How far the coldest mix lies above at most, C.
    pub most_c: f64,
}

/// On which days of a stretch a gate can be opened to the widest of its positions.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Fully {
    /// On all of them.
    Always,
    /// On none.
    Never,
    /// From the first of these to the last.
    Within(NaiveDate, NaiveDate),
}

impl Fully {
    /// Of the days of a stretch, and those of them on which it can.
    pub(super) fn of(days: usize, on: &[NaiveDate]) -> Self {
        match on {
            [] => Self::Never,
            all if all.len() == days => Self::Always,
            [first, ..] => Self::Within(*first, on.last().copied().unwrap_or(*first)),
        }
    }
}

/// A stretch of days in which a gate can be used.
#[derive(Debug, Clone, PartialEq)]
pub struct GateLife {
    /// Index of the outlet.
    pub outlet: usize,
    /// First day it can be used, of those of the season.
    pub first_day: Option<NaiveDate>,
    /// Last day in a row from then; `None` while it can be used to the end.
    pub last_day: Option<NaiveDate>,
    /// Why not after the last, and without one why not before the first, by the name of the limit and in words.
    pub reason: Option<(&'static str, String)>,
    /// The day by which its crew must be told of the move that the last day asks for, as in the calendar of moves; `None`
    /// where it is not moved then, or needs no notice.
    pub book_by: Option<NaiveDate>,
    /// On which of these days it can be opened as wide as it goes.
    pub fully: Fully,
}

impl GateLife {
    /// A gate that no day has.
    pub(super) fn never(outlet: usize) -> Self {
        Self { outlet, first_day: None, last_day: None, reason: None, book_by: None, fully: Fully::Never }
    }
}

/// Gates moved on a day.
#[derive(Debug, Clone, PartialEq)]
pub struct GateMoves {
    /// The day.
    pub date: NaiveDate,
    /// Which, in the order of the site.
    pub moved: Vec<Move>,
    /// The limit that forces it, by name and in words; `None` where none does.
    pub forced: Option<(&'static str, String)>,
    /// What else called for it; `None` where its time had come, or a limit forces it.
    pub because: Option<String>,
    /// Crew hours.
    pub crew_hours: f64,
    /// The day by which the crew must be told; `None` where it needs no notice.
    pub book_by: Option<NaiveDate>,
}

/// An outlet of any flow that is turned between decisions, so that each part keeps its share of the release: no move is
/// counted for it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Turned {
    /// Index of the outlet.
    pub outlet: usize,
    /// Days on which it is.
    pub days: usize,
    /// The largest change from one day to the next, m3/s.
    pub most_m3s: f64,
    /// The day of it.
    pub date: NaiveDate,
}

/// What a hard rule at the dam asks of a steady day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Asks {
    /// Index of the target.
    pub target: usize,
    /// Least it leaves, buffer counted in, C.
    pub low_c: Option<f64>,
    /// Greatest it leaves, C.
    pub high_c: Option<f64>,
}

/// What is within reach on a day of decision; of the days after it nothing is known to the next.
#[derive(Debug, Clone, PartialEq)]
pub struct Reached {
    /// The day.
    pub date: NaiveDate,
    /// Coldest and warmest release that an allowed mix gives, what is released counted in, C; `None` where it was not
    /// asked, or no mix is allowed.
    pub attainable_c: Option<[f64; 2]>,
    /// What the rules ask.
    pub asks: Vec<Asks>,
    /// What called for the decision, or the limit that forced it; `None` where its time had come.
    pub because: Option<String>,
}

impl Reached {
    /// The range that all rules leave together, C.
    pub fn range_c(&self) -> (Option<f64>, Option<f64>) {
        let low = self.asks.iter().filter_map(|a| a.low_c).reduce(f64::max);
        let high = self.asks.iter().filter_map(|a| a.high_c).reduce(f64::min);
        (low, high)
    }

    /// How far the nearest release within reach lies outside, C: above as more than zero, below as less; `None` where
    /// nothing is asked, or not known.
    pub fn by_c(&self) -> Option<f64> {
        let [coldest, warmest] = self.attainable_c?;
        match self.range_c() {
            (None, None) => None,
            (_, Some(high)) if coldest > high + SAME_C => Some(coldest - high),
            (Some(low), _) if warmest < low - SAME_C => Some(warmest - low),
            _ => Some(0.0),
        }
    }
}

/// The fastest fall of the stage at a point of the river.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StageFall {
    /// Index of the point.
    pub point: usize,
    /// Fall, m per hour.
    pub m_per_hour: f64,
    /// The day.
    pub date: NaiveDate,
}

/// A stage of eggs or young.
#[derive(Debug, Clone, PartialEq)]
pub struct StageDate {
    /// Index in the stages of the site, and of the stage.
    pub stages: usize,
    /// See `stages`.
    pub stage: usize,
    /// When it is reached.
    pub on: Exhausted,
}

/// What hampers a season.
#[derive(Debug, Clone, PartialEq)]
pub struct Stopping {
    /// First day.
    pub date: NaiveDate,
    /// Short fixed word for programs.
    pub kind: &'static str,
    /// What; quantities as [`say`](crate::units::say) marks them.
    pub words: String,
}

/// What comes of a season.
#[derive(Debug, Clone, PartialEq)]
pub struct Outcome {
    /// Cold water below each threshold of the site, by day.
    pub cold: Vec<ColdWater>,
    /// Cold water below the threshold of each reserve of the site, by day, and the first day under it.
    pub reserves: Vec<(ColdWater, Exhausted)>,
    /// What was left on the first of every month.
    pub left: Vec<Left>,
    /// First day of decision on which no allowed mix reaches the high of the target at the required release.
    pub exhausted: Exhausted,
    /// Every stretch of days of decision on which none does.
    pub spells: Vec<Spell>,
    /// The least room between that high and the coldest release within reach on a day of decision, C, below zero where
    /// that is warmer, and the day; `None` where no day tells.
    pub nearest: Option<(f64, NaiveDate)>,
    /// First day under a reserve of the site; `None` where it has none.
    pub under_reserve: Option<Exhausted>,
    /// What is within reach on the days of decision.
    pub reached: Vec<Reached>,
    /// When every gate can be used.
    pub gates: Vec<GateLife>,
    /// What is moved when, each from what was set as it would flow on the day; nothing is told of the first change where
    /// the setting now is not known.
    pub calendar: Vec<GateMoves>,
    /// What is turned between decisions without a move that is counted.
    pub turned: Vec<Turned>,
    /// Every target.
    pub targets: Vec<TargetTally>,
    /// What the season is measured by.
    pub score: Score,
    /// Stages.
    pub stages: Vec<StageDate>,
    /// Gates moved.
    pub moves: usize,
    /// Crew hours.
    pub crew_hours: f64,
    /// The day the pool overturns.
    pub turnover: Option<NaiveDate>,
    /// Least oxygen below the dam, mg/L, and when.
    pub least_oxygen: Option<(f64, NaiveDate)>,
    /// Energy not generated, MWh.
    pub generation_lost_mwh: Option<f64>,
    /// The fastest fall of the pool in a day, m, and when.
    pub fastest_fall: Option<(f64, NaiveDate)>,
    /// The fastest fall of the stage at each point with a rating.
    pub stage_falls: Vec<StageFall>,
    /// The largest errors of the balances of water and of heat, over their largest term.
    pub errors: (f64, f64),
    /// A cast off its plan, releases beyond their bounds, deep water newly drawn, a pool that falls too fast.
    pub warnings: Vec<Stopping>,
}

/// Hours of a day; exact.
const HOURS: f64 = 24.0;

/// What comes of a run.
pub fn outcome(setup: &Setup, run: &Run) -> Outcome {
    let site = &season_site(setup);
    let days = &run.days;
    let reaches = cold::reaches_m(site, days);
    let colder = |threshold_c: f64| cold::by_day(site, days, &reaches, threshold_c);
    let reserves: Vec<(ColdWater, Exhausted)> = (site.season.reserves.iter())
        .map(|reserve| {
            let cold = colder(reserve.colder_c);
            let under = cold::under(reserve, &cold);
            (cold, under)
        })
        .collect();
    let reached = reached::reached(setup, site, run);
    let (exhausted, spells) = reached::exhausted(&reached, run);
    let targets = tallies(site, &setup.skies.conditions, days);
    let cold: Vec<ColdWater> = site.cold_water_c.iter().map(|&c| colder(c)).collect();
    let largest = |of: fn(&SeasonDay) -> f64| days.iter().map(of).fold(0.0, f64::max);
    Outcome {
        left: cold::left(site, cold.first(), &targets),
        cold,
        under_reserve: first(&reserves.iter().map(|r| &r.1).collect::<Vec<_>>()),
        reserves,
        exhausted,
        spells,
        nearest: reached::nearest(&reached),
        reached,
        gates: gates::lives(site, run),
        calendar: gates::moves(site, run),
        turned: gates::turned(site, run),
        targets,
        score: Score::of(setup, run),
        stages: stages::stages(site, days),
        moves: run.decisions.iter().map(|d| d.moves).sum(),
        crew_hours: run.decisions.iter().map(|d| d.crew_hours).sum(),
        turnover: beware::turnover(run),
        least_oxygen: least_oxygen(days),
        generation_lost_mwh: generation_lost_mwh(site, days),
        fastest_fall: beware::fastest_fall(site, run),
        stage_falls: beware::stage_falls(site, days),
        errors: (
            largest(|day| day.balance.water_m3.relative_error()),
            largest(|day| day.balance.heat_j.relative_error()),
        ),
        warnings: beware::warnings(setup, site, run),
    }
}

/// The site of a season: under the air of its case, with the outages of its plan.
pub(super) fn season_site(setup: &Setup) -> Site {
    let mut site = Site::clone(&setup.skies.site);
    site.limits.outages.extend(setup.plan.outages.iter().cloned());
    site
}

/// The first day of several; where none has one, the first that is not known, else the end.
fn first(all: &[&Exhausted]) -> Option<Exhausted> {
    let on = all.iter().filter_map(|one| one.on()).min().map(Exhausted::On);
    let unknown = || all.iter().find(|one| matches!(one, Exhausted::Unknown(_)));
    on.or_else(|| unknown().or_else(|| all.first()).map(|one| Exhausted::clone(one)))
}

/// The least of the season; days of which it is not known are passed over.
fn least_oxygen(days: &[SeasonDay]) -> Option<(f64, NaiveDate)> {
    let known = days.iter().filter_map(|day| Some((day.release?.oxygen_below_mg_l?, day.date)));
    known.min_by(|a, b| a.0.total_cmp(&b.0))
}

/// Energy that the water of the season does not make, MWh; `None` where no outlet tells it.
fn generation_lost_mwh(site: &Site, days: &[SeasonDay]) -> Option<f64> {
    let of = |day: &SeasonDay| {
        site.generation_lost_mw(day.gates.iter().map(|g| (g.outlet, g.flow_m3s))).map(|mw| HOURS * mw)
    };
    days.iter().map(of).sum()
}
