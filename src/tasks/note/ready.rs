//! What keeps a note from being ready for signature, and what to know all the same.

use chrono::{DateTime, FixedOffset};

use crate::mix::limits::{Check, Group};
use crate::order::{NoOrder, Order};
use crate::problem::{Problem, Weight};
use crate::record::line::Event;
use crate::site::Site;
use crate::tasks::{Context, Freshness, MixAnswer, Understood};
use crate::units::say;

use super::{StageChange, Unchecked};

/// What is looked at.
pub(super) struct Ready<'a> {
    pub(super) context: &'a Context,
    pub(super) mix: &'a MixAnswer,
    /// What is set now, or why nobody knows.
    pub(super) before: &'a Result<Understood, String>,
    pub(super) stands: bool,
    pub(super) order: Option<&'a Result<Order, NoOrder>>,
    pub(super) not_checked: &'a [Unchecked],
    pub(super) stages: &'a [StageChange],
    pub(super) begins: DateTime<FixedOffset>,
}

impl Ready<'_> {
    /// Reasons not to sign; none where there is nothing to move.
    pub(super) fn not_ready(&self, cannot: Vec<String>) -> Vec<String> {
        if self.stands {
            return Vec::new();
        }
        let mut out = Vec::new();
        let site = self.context.site();
        if site.demonstration {
            out.push("this site is an invented demonstration".to_owned());
        }
        match self.before {
            Err(why) => out.push(format!("nobody knows what is set now ({why})")),
            Ok(now) => {
                out.extend(now.notes.iter().filter(|p| is_guessed(p)).map(|p| format!("now {}", p.words)));
            }
        }
        match self.order {
            Some(Err(no)) => out.push(no.words(site)),
            Some(Ok(order)) => out.extend(missed(site, &order.missed_now)),
            None => {}
        }
        out.extend(cannot);
        out.extend(self.context.lasting(self.begins.date_naive()).map(Event::lasts));
        out.extend(self.as_warned("not-a-position"));
        let weighty: Vec<String> =
            self.not_checked.iter().filter(|one| one.weighs()).map(Unchecked::words).collect();
        if !weighty.is_empty() {
            let words = "limits of structure and water control are not checked";
            out.push(format!("{words}: {}", weighty.join("; ")));
        }
        out.extend(self.falls());
        out.extend(unsure(site, self.mix));
        out.extend(self.stale());
        if let Some(change) = &self.mix.change
            && let Some(day) = change.earliest.filter(|day| *day > self.begins.date_naive())
        {
            let begins = self.begins.date_naive();
            out.push(format!(
                "the crew can come from {day}, and the change begins on {begins}: name a time with --at"
            ));
        }
        if let Some(words) = examples(site, self.mix) {
            out.push(words);
        }
        out
    }

    /// What to know all the same.
    pub(super) fn cautions(&self, said: Vec<String>) -> Vec<String> {
        let mut out = said;
        let site = self.context.site();
        if let Some(Ok(order)) = self.order {
            if let Some(over) = order.over_hours {
                out.push(format!(
                    "the order takes {over:.1} hours longer than a change is said to take (change_hours)"
                ));
            }
            if site.limits.change_hours.is_none() && self.mix.change.is_some() {
                out.push(
                    "how long a change takes is not given (change_hours): one hour is assumed".to_owned(),
                );
            }
        }
        if self.stands {
            let broken =
                self.mix.mix.limits.iter().filter(|c| c.broken() && is_hard(c)).copied().collect::<Vec<_>>();
            out.extend(missed(site, &broken));
            out.extend(unsure(site, self.mix));
            out.extend(self.stale());
        }
        let kept = |p: &&Problem| {
            p.weight == Weight::Flag
                && !matches!(p.kind, "limit" | "not-a-position" | "stale" | "later" | "event")
        };
        out.extend(self.mix.mix.warnings.iter().filter(kept).map(|p| p.words.clone()));
        out.extend(self.as_warned("opening-assumed"));
        if Freshness::of(site, self.context.age_days) == Freshness::Ageing {
            out.push("the cast is ageing: cast again before long".to_owned());
        }
        out.extend(self.context.profile.flags.iter().filter(kept).map(|p| p.words.clone()));
        out.dedup();
        out
    }

    /// Points whose stage would fall faster than it may.
    fn falls(&self) -> Option<String> {
        let points = self.context.site().river.as_ref().map_or(&[][..], |river| &river.points);
        let of = |stage: &StageChange| {
            let (point, fall, most) = (points.get(stage.point)?, stage.fall_m?, stage.most_fall_m?);
            Some(format!("{} by {} in an hour, {} allowed", point.name, say::m(fall, 3), say::m(most, 3)))
        };
        let all: Vec<String> = self.stages.iter().filter(|s| s.falls_too_fast()).filter_map(of).collect();
        (!all.is_empty()).then(|| format!("the stage may fall faster than allowed: {}", all.join("; ")))
    }

    fn as_warned(&self, kind: &'static str) -> impl Iterator<Item = String> {
        self.mix.mix.warnings.iter().filter(move |p| p.kind == kind).map(|p| p.words.clone())
    }

    /// That the water is not as the cast shows it, or nobody knows.
    fn stale(&self) -> Option<String> {
        let site = self.context.site();
        match Freshness::of(site, self.context.age_days) {
            Freshness::Stale => Some(format!(
                "the cast is {:.0} days old, stale after {:.0}: cast again",
                self.context.age_days.unwrap_or(0.0),
                site.checks.stale_days
            )),
            Freshness::Later => Some("the cast is later than the date of the note".to_owned()),
            Freshness::Unknown => Some("nobody knows when the cast was taken".to_owned()),
            Freshness::Fresh | Freshness::Ageing => None,
        }
    }
}

/// Whether a note says that nobody told how a gate stands, or told what cannot be.
fn is_guessed(problem: &Problem) -> bool {
    matches!(problem.kind, "opening-assumed" | "not-a-position")
}

/// Limits that what is set now misses.
fn missed(site: &Site, checks: &[Check]) -> Option<String> {
    let all: Vec<String> = checks.iter().map(|check| check.words(site)).collect();
    (!all.is_empty()).then(|| format!("what is set now misses limits: {}", all.join("; ")))
}

/// Whether a limit holds up a change.
fn is_hard(check: &Check) -> bool {
    check.rule.group() != Group::Convenience
}

/// Gates of which nobody is sure how they stand.
fn unsure(site: &Site, mix: &MixAnswer) -> Option<String> {
    let stands = |index: usize| {
        let gate = mix.setting.gates.iter().find(|gate| gate.outlet == index);
        if gate.is_some_and(|gate| gate.opening > 0.0) { "open" } else { "shut" }
    };
    let of = site.outlets.iter().enumerate().filter(|(_, outlet)| outlet.uncertain);
    let names: Vec<String> =
        of.map(|(index, outlet)| format!("{} (taken as {})", outlet.name, stands(index))).collect();
    (!names.is_empty())
        .then(|| format!("positions are not confirmed of {}: look before the first step", names.join(", ")))
}

/// Targets whose values nobody has put in yet.
fn examples(site: &Site, mix: &MixAnswer) -> Option<String> {
    let rules = mix.mix.targets.iter().filter_map(|s| site.targets.get(s.target)).filter(|rule| rule.example);
    let names: Vec<&str> = rules.map(|rule| rule.name.as_str()).collect();
    (!names.is_empty()).then(|| format!("targets hold example values: {}", names.join(", ")))
}
