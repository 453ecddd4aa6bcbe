//! One line of the log: a decision, or an event that nobody planned.
//!
//! Numbers are in SI, outlets stand by name, absent is `null`. What is written stays: a decision is changed by a later
//! line that amends it.

use std::collections::BTreeMap;

use chrono::{DateTime, FixedOffset, NaiveDate};
use serde::{Deserialize, Serialize};

/// A line of the log.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "line", rename_all = "snake_case")]
pub enum Line {
    /// Something was decided, or a decision amended.
    Decision(Box<Decision>),
    /// Something happened.
    Event(Event),
}

impl Line {
    /// Its number.
    pub fn id(&self) -> u64 {
        match self {
            Self::Decision(decision) => decision.id,
            Self::Event(event) => event.id,
        }
    }
}

/// A decision, with what was known when it was made.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Decision {
    /// Its number in the log.
    pub id: u64,
    /// When it was written down.
    pub at: DateTime<FixedOffset>,
    /// By whom.
    pub by: String,
    /// From when its gates stand.
    pub from: DateTime<FixedOffset>,
    /// The day by which it is to be decided again, where one is named.
    pub until: Option<NaiveDate>,
    /// What would end it earlier, in the user's words.
    pub trigger: Option<String>,
    /// Why, in the user's words.
    pub why: String,
    /// The decision that this line amends.
    pub amends: Option<u64>,
    /// Whether it takes that decision back.
    #[serde(default)]
    pub withdrawn: bool,
    /// What was known.
    pub known: Known,
    /// What was considered, the first ranked first.
    pub considered: Vec<Considered>,
    /// What was chosen.
    pub chosen: Gates,
    /// What is expected of it, at the dam and then at the points of the river.
    pub expected: Vec<Expected>,
    /// Version of the program that wrote it.
    pub version: String,
    /// How it computes.
    pub method: String,
}

/// What was known when something was decided.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Known {
    /// Fingerprint of all inputs, as the answers print it.
    pub inputs: String,
    /// Fingerprint of the site file.
    pub site: String,
    /// Fingerprint of the cast.
    pub profile: String,
    /// When that was taken.
    pub taken: Option<DateTime<FixedOffset>>,
    /// Fingerprint of the plan of the season, where one was looked at.
    pub plan: Option<String>,
    /// Pool, m.
    pub pool_m: f64,
    /// Release asked, m3/s.
    pub release_m3s: f64,
    /// What was set before.
    pub before: Option<Gates>,
    /// The targets of the day.
    pub targets: Vec<Rule>,
}

/// A target as it stood on the day.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Rule {
    /// Name.
    pub name: String,
    /// Where it applies.
    pub point: String,
    /// Least, C.
    pub low_c: Option<f64>,
    /// Preferred, C.
    pub preferred_c: Option<f64>,
    /// Greatest, C.
    pub high_c: Option<f64>,
    /// Least oxygen, mg/L.
    pub oxygen_min_mg_l: Option<f64>,
    /// How what was chosen stands against its temperature.
    pub standing: String,
    /// And against its oxygen.
    pub oxygen_standing: String,
}

/// Gates by name.
#[derive(Debug, Clone, Default, PartialEq, Serialize, Deserialize)]
pub struct Gates {
    /// Flow, m3/s.
    pub set: BTreeMap<String, f64>,
    /// Opening, percent.
    pub open: BTreeMap<String, f64>,
}

/// A mix that was considered.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Considered {
    /// Its gates.
    #[serde(flatten)]
    pub gates: Gates,
    /// Release temperature, C.
    pub temperature_c: f64,
    /// The same without what was learned from the gauge; `None` where nothing learned is applied.
    pub plain_temperature_c: Option<f64>,
    /// Oxygen below the dam, mg/L.
    pub oxygen_mg_l: Option<f64>,
    /// Gates moved; `None` where nothing was known to be set.
    pub moves: Option<usize>,
    /// Hard targets it is outside of, by name.
    pub outside: Vec<String>,
}

/// What is expected at a place.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Expected {
    /// The dam, or a point of the river.
    pub point: String,
    /// Temperature, C: the mean of a day.
    pub temperature_c: Option<f64>,
    /// Its band, C.
    pub band_c: Option<[f64; 2]>,
    /// The temperature without what was learned from the gauge, C; `None` where nothing learned is applied.
    pub plain_temperature_c: Option<f64>,
    /// Oxygen, mg/L.
    pub oxygen_mg_l: Option<f64>,
    /// Its band, mg/L.
    pub band_oxygen_mg_l: Option<[f64; 2]>,
}

/// Something that nobody planned: a gate that failed, a meter at fault. Its days tell nothing of how the program computes.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Event {
    /// Its number in the log.
    pub id: u64,
    /// When it was written down.
    pub at: DateTime<FixedOffset>,
    /// By whom.
    pub by: String,
    /// What happened, in the user's words.
    pub text: String,
    /// From when.
    pub from: DateTime<FixedOffset>,
    /// The last day of it; `None` while it lasts.
    pub until: Option<NaiveDate>,
    /// The event that this line amends.
    pub amends: Option<u64>,
}

impl Event {
    /// That it lasts, in the user's words.
    pub fn lasts(&self) -> String {
        format!("event {} of the log lasts: {}", self.id, self.text)
    }

    /// Whether it lasts on a day.
    pub fn covers(&self, date: NaiveDate) -> bool {
        self.from.date_naive() <= date && self.until.is_none_or(|until| date <= until)
    }
}
