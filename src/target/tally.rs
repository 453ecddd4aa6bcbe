//! The days of a record outside a rule, counted: in all, by month and by season.
//!
//! Methods: `docs/methods.md`, section 7.

use std::collections::BTreeMap;

use chrono::{Datelike, NaiveDate};

use super::{Span, Standing};

/// How one day of the record stands.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Mark {
    /// The rule's statistic that day: C, or of a share of days 0 to 1, of days above a count, of degree-days C days,
    /// of oxygen mg/L or a share of saturation. `None` where too little was recorded.
    pub value: Option<f64>,
    /// Where it stands; unknown where there is no value.
    pub standing: Standing,
    /// How far outside, in the unit of the value; 0 inside, `None` where unknown.
    pub by: Option<f64>,
}

impl Mark {
    /// A day without answer.
    pub const UNKNOWN: Self = Self { value: None, standing: Standing::Unknown, by: None };

    /// Whether the day lies outside the rule, on either side.
    pub fn outside(self) -> bool {
        matches!(self.standing, Standing::Above | Standing::Below)
    }
}

/// What the days of some stretch of time come to.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Tally {
    /// Days with an answer.
    pub judged: u32,
    /// Days of the rule without one: too little was recorded.
    pub unknown: u32,
    /// Days above the rule.
    pub over: u32,
    /// Days below it.
    pub under: u32,
    /// Most days outside in a row; a day without answer ends the row.
    pub longest_run: u32,
    /// Farthest outside, in the unit of the values, and when first.
    pub worst: Option<(f64, NaiveDate)>,
    /// How far outside, summed over the days: degree-days for a temperature.
    pub sum_outside: f64,
}

/// What a record comes to against one bound of a rule: its temperature range, or an oxygen floor.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Held {
    /// Every day of the record on which the rule is valid.
    pub days: Vec<(NaiveDate, Mark)>,
    /// All of them together.
    pub all: Tally,
    /// By year and month.
    pub months: BTreeMap<(i32, u32), Tally>,
    /// By season, named by the year in which its span began.
    pub seasons: BTreeMap<i32, Tally>,
}

/// The days of a record, counted.
pub(super) fn held(span: &Span, days: Vec<(NaiveDate, Mark)>) -> Held {
    let mut out = Held::default();
    let mut runs = [(); 3].map(|()| Run::default());
    for (date, mark) in &days {
        let month = (date.year(), date.month());
        let season = span.began(*date).unwrap_or(*date).year();
        let tallies =
            [&mut out.all, out.months.entry(month).or_default(), out.seasons.entry(season).or_default()];
        let groups = [(0, 0), (month.0, month.1), (season, 0)];
        for ((tally, run), group) in tallies.into_iter().zip(&mut runs).zip(groups) {
            tally.longest_run = tally.longest_run.max(run.next(*date, group, mark.outside()));
            tally.count(*date, mark);
        }
    }
    Held { days, ..out }
}

impl Tally {
    fn count(&mut self, date: NaiveDate, mark: &Mark) {
        match mark.standing {
            Standing::Unknown => self.unknown += 1,
            Standing::Inside => {}
            Standing::Above => self.over += 1,
            Standing::Below => self.under += 1,
        }
        let Some(by) = mark.by else { return };
        self.judged += 1;
        self.sum_outside += by;
        if by > self.worst.map_or(0.0, |w| w.0) {
            self.worst = Some((by, date));
        }
    }
}

/// Days outside in a row, within one month, season or the whole record.
#[derive(Debug, Clone, Copy, Default)]
struct Run {
    length: u32,
    last: Option<(NaiveDate, (i32, u32))>,
}

impl Run {
    fn next(&mut self, date: NaiveDate, group: (i32, u32), outside: bool) -> u32 {
        let goes_on = self.last.is_some_and(|(day, of)| day.succ_opt() == Some(date) && of == group);
        self.length = if outside { 1 + if goes_on { self.length } else { 0 } } else { 0 };
        self.last = Some((date, group));
        self.length
    }
}
