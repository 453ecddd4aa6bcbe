//! What was learned from the record and is applied, as the site file names it; nothing is applied that it does not name.
//!
//! Methods: `docs/methods.md`, section 9.

use chrono::NaiveDate;

use super::levels::level_groups;
use super::{BandInputs, Site};

/// Days that learning looks back (choice): two seasons, after which gates and gauges have been worked on.
pub const WINDOW_DAYS: u64 = 730;

/// What was learned; nothing by default.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Learned {
    /// Constant bias, measured less computed, C.
    pub bias_c: Option<f64>,
    /// Bias by level, by its place among the levels of the site from the lowest, C.
    pub by_level_c: Vec<(usize, f64)>,
    /// Zone factor.
    pub zone_factor: Option<f64>,
    /// Its 80 % interval, from which the members of the band draw it.
    pub zone_range: Option<(f64, f64)>,
    /// Oxygen gained on the way to the gauge, mg/L.
    pub oxygen_gain_mg_l: Option<f64>,
    /// First and last day of the window.
    pub window: Option<(NaiveDate, NaiveDate)>,
    /// Pairs in it.
    pub n: usize,
    /// What the method misses once this is applied, standard deviation, C: stands for that of the band.
    pub release_c: Option<f64>,
    /// The same of the oxygen, mg/L.
    pub release_mg_l: Option<f64>,
}

/// `learned` as a file gives it, in SI.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawLearned {
    /// Constant bias, C.
    pub bias_c: Option<f64>,
    /// Bias of the level of each outlet named, C.
    pub by_level_c: Vec<(String, f64)>,
    /// Zone factor.
    pub zone_factor: Option<f64>,
    /// Its 80 % interval.
    pub zone_range: Option<(f64, f64)>,
    /// Oxygen gain, mg/L.
    pub oxygen_gain_mg_l: Option<f64>,
    /// First and last day of the window, `YYYY-MM-DD`.
    pub window: Option<[String; 2]>,
    /// Pairs in it.
    pub n: Option<usize>,
    /// What the method misses, C.
    pub release_c: Option<f64>,
    /// What the method misses, mg/L.
    pub release_mg_l: Option<f64>,
}

/// What was learned, made ready for the levels of a site.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Applied {
    learned: Learned,
    /// Bias of the level of each outlet, C.
    by_outlet_c: Vec<f64>,
}

impl Learned {
    /// What is added to the temperature of a release, C, by the share of each level.
    pub fn shift_c(&self, shares: &[(usize, f64)]) -> f64 {
        let of = |level: usize| self.by_level_c.iter().find(|l| l.0 == level).map_or(0.0, |l| l.1);
        self.bias_c.unwrap_or(0.0) + shares.iter().map(|(level, share)| share * of(*level)).sum::<f64>()
    }

    /// Whether it changes any figure that is computed.
    pub fn has_effect(&self) -> bool {
        self.bias_c.is_some()
            || !self.by_level_c.is_empty()
            || self.zone_factor.is_some()
            || self.oxygen_gain_mg_l.is_some()
    }
}

impl Site {
    /// The same site with other learned values applied; `None` for none.
    #[must_use]
    pub fn with_learned(mut self, learned: Option<Learned>) -> Self {
        self.applied = learned.map(|learned| {
            let mut by_outlet_c = vec![0.0; self.outlets.len()];
            for (level, outlets) in level_groups(&self.outlets).iter().enumerate() {
                let bias_c = learned.by_level_c.iter().find(|l| l.0 == level).map_or(0.0, |l| l.1);
                for &outlet in outlets {
                    by_outlet_c[outlet] = bias_c;
                }
            }
            Applied { learned, by_outlet_c }
        });
        self
    }

    /// The same site as if nothing had been learned; `None` where nothing is.
    pub fn without_learned(&self) -> Option<Self> {
        self.applied.as_ref()?;
        Some(self.clone().with_learned(None))
    }

    /// What was learned and is applied.
    pub fn learned(&self) -> Option<&Learned> {
        self.applied.as_ref().map(|applied| &applied.learned)
    }

    /// The factor on the thickness of every zone: 1 as published.
    pub fn zone_factor(&self) -> f64 {
        self.learned().and_then(|learned| learned.zone_factor).unwrap_or(1.0)
    }

    /// Bias of the release that is put to the water of the level of an outlet, C; `None` where no bias is applied.
    pub fn bias_c(&self, outlet: usize) -> Option<f64> {
        let Applied { learned, by_outlet_c } = self.applied.as_ref()?;
        if learned.bias_c.is_none() && learned.by_level_c.is_empty() {
            return None;
        }
        Some(learned.bias_c.unwrap_or(0.0) + by_outlet_c.get(outlet).copied().unwrap_or(0.0))
    }

    /// Oxygen gained below the dam on the way to the gauge, mg/L; `None` where none is applied.
    pub fn learned_gain_mg_l(&self) -> Option<f64> {
        self.learned()?.oxygen_gain_mg_l
    }

    /// Spread of the perturbed cases, with what was learned in the place of what was assumed.
    pub fn spreading(&self) -> BandInputs {
        let Some(learned) = self.learned() else { return self.band };
        let (zone_low, zone_high) = match learned.zone_factor {
            Some(factor) => learned.zone_range.unwrap_or((factor, factor)),
            None => (self.band.zone_low, self.band.zone_high),
        };
        BandInputs {
            zone_low,
            zone_middle: self.zone_factor(),
            zone_high,
            release_c: learned.release_c.unwrap_or(self.band.release_c),
            release_mg_l: learned.release_mg_l.unwrap_or(self.band.release_mg_l),
            ..self.band
        }
    }
}
