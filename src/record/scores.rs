//! Expected against observed: how far off, how often inside the band, and when.
//!
//! Methods: `docs/methods.md`, section 9.

use std::collections::BTreeMap;

use chrono::{Datelike, NaiveDate};

use crate::mix::quantile;

use super::pairs::Pair;

/// What was expected of one day and what came.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Row {
    /// The date.
    pub date: NaiveDate,
    /// What was expected, C or mg/L; `None` where nothing could be computed.
    pub expected: Option<f64>,
    /// Its 10-90 % band.
    pub band: Option<(f64, f64)>,
    /// What the gauge read; `None` without a valid mean of the day.
    pub measured: Option<f64>,
    /// The level that carried most, by its place among the levels of the site.
    pub level: Option<usize>,
    /// Flow, m3/s.
    pub flow_m3s: Option<f64>,
}

/// How measured and expected differ, over the days that have both.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Misfit {
    /// Mean of measured less expected.
    pub bias: f64,
    /// Root of the mean square.
    pub rmse: f64,
    /// 75th and 99th percentile of the size of the error.
    pub percentiles: [f64; 2],
    /// Greatest size of the error.
    pub greatest: f64,
}

/// A score; a day that lacks something is counted by what it lacks.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Score {
    /// Days with both.
    pub n: usize,
    /// Days for which nothing could be computed.
    pub not_computed: usize,
    /// Days computed that the gauge does not tell.
    pub not_measured: usize,
    /// How far off; `None` without a day that has both.
    pub misfit: Option<Misfit>,
    /// Of the days with both, those with a band.
    pub with_band: usize,
    /// Of these, those that the gauge read inside it.
    pub inside: usize,
}

/// Days of like flow.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Class {
    /// Least and greatest flow among them, m3/s.
    pub flow_m3s: (f64, f64),
    /// Their score.
    pub score: Score,
}

/// The scores of a record.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Scores {
    /// All days.
    pub all: Score,
    /// By the level that carried most, from the lowest; days that name none are only among all.
    pub by_level: Vec<(usize, Score)>,
    /// By flow, low to high, in up to three classes of about as many days each.
    pub by_flow: Vec<Class>,
    /// By month of the year, 1 to 12.
    pub by_month: Vec<(u32, Score)>,
}

/// Scores rows, together and by level, flow and month.
///
/// # Units
/// C or mg/L throughout, flows m3/s.
///
/// # References
/// Common practice, no source; percentiles are linear between the ordered values, the classes of flow a choice.
pub fn scores(rows: &[Row]) -> Scores {
    let by = |key: &dyn Fn(&Row) -> Option<usize>| {
        let mut parts: BTreeMap<usize, Vec<Row>> = BTreeMap::new();
        for row in rows {
            if let Some(key) = key(row) {
                parts.entry(key).or_default().push(*row);
            }
        }
        parts
    };
    let cuts = cuts_m3s(rows);
    let class = |row: &Row| row.flow_m3s.map(|flow| cuts.iter().filter(|cut| flow > **cut).count());
    let months = by(&|row| usize::try_from(row.date.month()).ok());
    Scores {
        all: Score::of(rows),
        by_level: by(&|row| row.level).into_iter().map(|(level, rows)| (level, Score::of(&rows))).collect(),
        by_flow: by(&class).into_values().map(|rows| Class::of(&rows)).collect(),
        by_month: months
            .into_values()
            .filter_map(|rows| Some((rows.first()?.date.month(), Score::of(&rows))))
            .collect(),
    }
}

/// Flows that part the rows into thirds, m3/s.
fn cuts_m3s(rows: &[Row]) -> Vec<f64> {
    let mut flows: Vec<f64> = rows.iter().filter_map(|row| row.flow_m3s).collect();
    flows.sort_by(f64::total_cmp);
    [1.0 / 3.0, 2.0 / 3.0].into_iter().filter_map(|share| quantile(&flows, share)).collect()
}

impl Class {
    fn of(rows: &[Row]) -> Self {
        let flows = || rows.iter().filter_map(|row| row.flow_m3s);
        let ends = (flows().fold(f64::INFINITY, f64::min), flows().fold(f64::NEG_INFINITY, f64::max));
        Self { flow_m3s: ends, score: Score::of(rows) }
    }
}

impl Score {
    /// The score of some rows.
    pub fn of(rows: &[Row]) -> Self {
        let both: Vec<(f64, &Row)> =
            rows.iter().filter_map(|row| Some((row.measured? - row.expected?, row))).collect();
        let banded = both.iter().filter_map(|(_, row)| Some((row.band?, row.measured?)));
        Self {
            n: both.len(),
            not_computed: rows.iter().filter(|row| row.expected.is_none()).count(),
            not_measured: rows.iter().filter(|row| row.expected.is_some() && row.measured.is_none()).count(),
            misfit: Misfit::of(both.iter().map(|b| b.0).collect()),
            with_band: banded.clone().count(),
            inside: banded.filter(|((low, high), measured)| (low..=high).contains(&measured)).count(),
        }
    }

    /// Share of the days with a band that lay inside it, 0 to 1.
    pub fn share_inside(&self) -> Option<f64> {
        (self.with_band > 0).then(|| self.inside as f64 / self.with_band as f64)
    }
}

impl Misfit {
    fn of(errors: Vec<f64>) -> Option<Self> {
        let count = errors.len() as f64;
        let bias = errors.iter().sum::<f64>() / count;
        let rmse = (errors.iter().map(|e| e * e).sum::<f64>() / count).sqrt();
        let mut sizes: Vec<f64> = errors.into_iter().map(f64::abs).collect();
        sizes.sort_by(f64::total_cmp);
        let percentiles = [quantile(&sizes, 0.75)?, quantile(&sizes, 0.99)?];
        Some(Self { bias, rmse, percentiles, greatest: *sizes.last()? })
    }
}

impl Pair {
    /// The row of its temperature, as computed with nothing learned.
    pub fn temperature_row(&self) -> Row {
        Row {
            date: self.date,
            expected: Some(self.computed_c),
            band: Some(self.band_c),
            measured: self.measured_c,
            level: self.level(),
            flow_m3s: Some(self.flow_m3s),
        }
    }

    /// The row of its oxygen.
    pub fn oxygen_row(&self) -> Row {
        let (expected, band, measured) = (self.computed_mg_l, self.band_mg_l, self.measured_mg_l);
        Row { expected, band, measured, ..self.temperature_row() }
    }
}
