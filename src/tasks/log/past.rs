//! What happened: every day of the past held against the gauge, each decision, what a season cost beside doing nothing
//! and beside perfect hindsight, and what the record teaches.

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::record::{Learning, Left, Score, Scores};

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

/// Something that may be why the gauge left the band.
#[derive(Debug, Clone, PartialEq)]
pub struct Cause {
    /// What it is, in plain words that blame nobody.
    pub name: &'static str,
    /// What speaks for it.
    pub speaks_for: Vec<String>,
    /// What speaks against it.
    pub against: Vec<String>,
    /// What would tell, where neither does.
    pub to_tell: &'static str,
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
    /// The whole past, temperature.
    pub temperature: Scores,
    /// And oxygen.
    pub oxygen: Scores,
    /// The same with what the record teaches, whether applied or not.
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
