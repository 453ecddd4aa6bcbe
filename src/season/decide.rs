//! The mix of a day inside a season: the ranking at splits of a tenth, the best two refined.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::Asked;
use crate::mix::limits::Check;

/// Why a mix was decided on.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Why {
    /// The season begins.
    Begin,
    /// The days between decisions have passed, or the schedule says so.
    Due,
    /// What was set can no longer be kept.
    Forced(Check),
}

/// What was decided on a day.
#[derive(Debug, Clone, PartialEq)]
pub struct Decision {
    /// The day.
    pub date: NaiveDate,
    /// Why.
    pub why: Why,
    /// What is set; flows are shares of the release of the day on which it was decided.
    pub asked: Asked,
    /// Gates moved.
    pub moves: usize,
    /// Crew hours.
    pub crew_hours: f64,
    /// Coldest and warmest release that an allowed mix gives, C.
    pub attainable_c: Option<[f64; 2]>,
}
