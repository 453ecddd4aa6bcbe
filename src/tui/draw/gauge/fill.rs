//! Gauges of a release and of its standings.

use crate::mix::{Mix, Spread, TargetStanding};
use crate::problem::harmless;
use crate::site::Site;
use crate::target::{Basis, DAM, Standing, Target};
use crate::tasks::rank::Shown;
use crate::units::{Dimension, System, in_system};

use super::{Attainable, Gauge, Held, Reading};

/// A release with all that a gauge tells of it.
#[derive(Debug, Clone, Copy)]
pub struct Release<'a> {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen, mg/L.
    pub oxygen_mg_l: Option<f64>,
    /// The perturbed cases.
    pub spread: &'a Spread,
    /// Standing against every target valid on the date.
    pub targets: &'a [TargetStanding],
}

impl<'a> From<&'a Mix> for Release<'a> {
    fn from(mix: &'a Mix) -> Self {
        let (temperature_c, oxygen_mg_l) = (mix.release.temperature_c, mix.release.oxygen_below_mg_l);
        Self { temperature_c, oxygen_mg_l, spread: &mix.spread, targets: &mix.targets }
    }
}

impl<'a> From<&'a Shown> for Release<'a> {
    fn from(shown: &'a Shown) -> Self {
        let (temperature_c, oxygen_mg_l) = (shown.temperature_c, shown.oxygen_mg_l);
        Self { temperature_c, oxygen_mg_l, spread: &shown.spread, targets: &shown.targets }
    }
}

impl Release<'_> {
    fn temperature(self) -> Reading {
        Reading { value: Some(self.temperature_c), band: self.spread.band_c().map(<[f64; 2]>::from) }
    }

    fn oxygen(self) -> Reading {
        let band = self.spread.band_oxygen_mg_l().map(<[f64; 2]>::from);
        Reading { value: self.oxygen_mg_l, band: self.oxygen_mg_l.and(band) }
    }

    /// Its targets that have a bound, the governing one first.
    fn held(self, site: &Site, of: impl Fn(&TargetStanding, &Target) -> Option<Held>) -> Vec<Held> {
        let mut held: Vec<Held> =
            self.targets.iter().filter_map(|s| of(s, site.targets.get(s.target)?)).collect();
        let missed = |h: &Held| matches!(h.standing, Standing::Above | Standing::Below);
        held.sort_by_key(|h| (!h.governs, !missed(h), h.point.is_some()));
        held
    }
}

/// What is said without a bound of a kind.
fn no_target(release: Release, of_kind: &'static str) -> &'static str {
    if release.targets.is_empty() { "no target on this date" } else { of_kind }
}

/// The name of a rule, with its point where that is not the dam.
fn placed(rule: &Target) -> String {
    let name = harmless(&rule.name);
    point(rule).map_or_else(|| name.clone(), |point| format!("{name} at {point}"))
}

/// The point of a rule; `None` at the dam.
fn point(rule: &Target) -> Option<String> {
    (rule.point != DAM).then(|| harmless(&rule.point))
}

impl Gauge {
    /// The gauge of the temperature; attainable in C.
    pub fn temperature(
        site: &Site,
        system: System,
        tried: Release,
        now: Option<Release>,
        attainable: Attainable,
    ) -> Self {
        let several = tried.targets.len() > 1;
        let held = |s: &TargetStanding, rule: &Target| {
            // on an axis of temperatures a rule of another kind stands as what it leaves to today's
            let plain = rule.is_of_temperature() && s.basis != Basis::Observed;
            let [low, high] = s.left_c;
            rule.has_range().then(|| Held {
                name: placed(rule),
                point: point(rule),
                low: if plain { rule.low_c } else { low },
                high: if plain { rule.high_c } else { high },
                preferred: rule.preferred_c.filter(|_| rule.is_of_temperature()),
                buffer: if plain { rule.buffer_c } else { 0.0 },
                value: if plain { s.value_c } else { s.figure_c },
                statistic: if plain { in_system(&rule.statistic.words(), system) } else { "today".into() },
                standing: s.temperature.0,
                by: s.by_c(site),
                share: s.share_inside,
                share_both: s.share_inside_both.filter(|_| rule.has_floor()),
                governs: several && s.governs,
                example: rule.example,
            })
        };
        Self {
            title: "Temperature",
            dimension: Dimension::Temperature,
            system,
            note: None,
            targets: tried.held(site, held),
            no_target: no_target(tried, "no target on this date bounds it"),
            tried: tried.temperature(),
            now: now.map(Release::temperature),
            attainable,
        }
    }

    /// The gauge of the oxygen; attainable in mg/L.
    pub fn oxygen(
        site: &Site,
        system: System,
        tried: Release,
        now: Option<Release>,
        attainable: Attainable,
    ) -> Self {
        let several = tried.targets.len() > 1;
        let held = |s: &TargetStanding, rule: &Target| {
            rule.oxygen_min_mg_l.or(s.floor_mg_l).map(|least| Held {
                name: placed(rule),
                point: point(rule),
                low: Some(least),
                high: None,
                preferred: None,
                buffer: 0.0,
                value: s.oxygen_mg_l,
                statistic: rule.oxygen_statistic().words().to_owned(),
                standing: s.oxygen.0,
                by: s.oxygen.1,
                share: s.oxygen_share_inside,
                share_both: None,
                governs: several && s.governs,
                example: rule.example,
            })
        };
        Self {
            title: "Oxygen",
            dimension: Dimension::Concentration,
            system,
            note: None,
            targets: tried.held(site, held),
            no_target: no_target(tried, "no target on this date bounds it"),
            tried: tried.oxygen(),
            now: now.map(Release::oxygen),
            attainable,
        }
    }

    /// The same with a word on what it holds for, such as `at 1,200 cfs`.
    #[must_use]
    pub fn noted(self, note: String) -> Self {
        Self { note: Some(note), ..self }
    }
}
