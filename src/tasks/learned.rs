//! What the record does to an answer: what is learned and applied and what it would be without that, events that last.

use chrono::NaiveDate;

use crate::mix::{Mix, Plain, Spread, groups};
use crate::problem::Problem;
use crate::record::line::Event;

use super::Context;

/// Days after the window's end beyond which it is flagged (choice: two years, over which gates and gauges change).
const OLD_DAYS: i64 = 730;

/// The release of a day with nothing learned, as time means.
#[derive(Debug, Clone, PartialEq)]
pub struct Without {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen below the dam, mg/L.
    pub oxygen_mg_l: Option<f64>,
    /// The perturbed cases.
    pub spread: Spread,
    /// The parts of the day: share, and what each gives.
    pub parts: Vec<(f64, Plain)>,
}

impl Without {
    /// Of the parts of a day; `None` where nothing is learned.
    pub(super) fn of<'a>(parts: impl Iterator<Item = (f64, &'a Mix)>) -> Option<Self> {
        let parts: Vec<(f64, Plain)> =
            parts.map(|(share, mix)| Some((share, mix.plain.clone()?))).collect::<Option<_>>()?;
        let count = parts.iter().map(|p| p.1.spread.cases.len()).min()?;
        let case = |i: usize| {
            let of = |p: &(f64, Plain)| p.1.spread.cases[i];
            let oxygen = parts.iter().map(|p| Some(p.0 * of(p).1?)).sum();
            (parts.iter().map(|p| p.0 * of(p).0).sum(), oxygen)
        };
        Some(Self {
            temperature_c: parts.iter().map(|p| p.0 * p.1.release.temperature_c).sum(),
            oxygen_mg_l: parts.iter().map(|p| Some(p.0 * p.1.release.oxygen_below_mg_l?)).sum(),
            spread: Spread { cases: (0..count).map(case).collect() },
            parts,
        })
    }
}

impl Context {
    /// Events of the log that last on a day: a gate that failed may be one of those chosen.
    pub fn lasting(&self, date: NaiveDate) -> impl Iterator<Item = &Event> {
        self.log.log.events().into_iter().filter(move |event| event.covers(date))
    }

    /// What the record has to say of an answer: events that last, what is applied of it and was learned long ago or not
    /// of every level.
    pub fn record_flags(&self) -> Vec<Problem> {
        let event = |event: &Event| {
            let cure = format!("once it is over: gatemix log --event TEXT --amend {} --until DATE", event.id);
            Problem::flag("event", event.lasts(), cure)
        };
        let mut out: Vec<Problem> = self.lasting(self.on.date_naive()).map(event).collect();
        out.extend(self.learned_flags());
        out
    }

    fn learned_flags(&self) -> Vec<Problem> {
        let site = self.site();
        let Some(learned) = site.learned() else { return Vec::new() };
        let mut out = Vec::new();
        if let Some((_, to)) = learned.window
            && (self.on.date_naive() - to).num_days() > OLD_DAYS
        {
            let words = format!("what is applied was learned of days up to {to}, more than two years before");
            let cure = "hold newer days against the gauge with `gatemix log`, or take `learned` out";
            out.push(Problem::flag("learned-old", words, cure));
        }
        if !learned.by_level_c.is_empty() {
            let told = |level: usize| learned.by_level_c.iter().any(|l| l.0 == level);
            let untold: Vec<String> = groups(site)
                .iter()
                .enumerate()
                .filter(|(level, _)| !told(*level))
                .filter_map(|(_, outlets)| Some(format!("`{}`", site.outlets.get(*outlets.first()?)?.name)))
                .collect();
            if !untold.is_empty() {
                let words = format!(
                    "no bias was learned for the level of {}: none is put to its water",
                    untold.join(", ")
                );
                let cure = "use these levels on days that the gauge sees, and learn again";
                out.push(Problem::flag("learned-levels", words, cure));
            }
        }
        out
    }
}
