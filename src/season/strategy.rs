//! What each strategy wants of a day.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::{Asked, Gate, Setting};
use crate::site::{Site, Strategy};

use super::aims::aim_on;
use super::decide::Why;
use super::plan::Schedule;
use super::run::{Choosing, Setup};

/// What is wanted of a day on which something is decided.
pub(super) enum Wants {
    /// What is set stays, as long as it can.
    Stay,
    /// The best mix, with an aim.
    Best(f64),
    /// These gates.
    These(Asked),
}

impl Choosing {
    /// Its name.
    pub fn name(&self) -> String {
        match self {
            Self::By(strategy) => strategy.name().to_owned(),
            Self::Schedule(of) => Schedule::called(&of.file),
            Self::Aims(_) | Self::Found(_) => Strategy::Thrift.name().to_owned(),
            Self::Held(..) => "held".to_owned(),
        }
    }
}

/// Whether a schedule changes gates on a date.
pub(super) fn changes_on(setup: &Setup, date: NaiveDate) -> bool {
    schedule(&setup.choosing).is_some_and(|s| s.changes.iter().any(|change| change.0 == date))
}

/// What is wanted of a day on which something is decided for a reason.
pub(super) fn wants(setup: &Setup, decides: NaiveDate, site: &Site, date: NaiveDate, why: Why) -> Wants {
    let is_forced = matches!(why, Why::Forced(_));
    match &setup.choosing {
        Choosing::Held(asked, until) if date < *until && !is_forced => {
            if why == Why::Begin {
                Wants::These(asked.clone())
            } else {
                Wants::Stay
            }
        }
        Choosing::By(Strategy::Best | Strategy::Thrift) | Choosing::Held(..) => Wants::Best(0.0),
        Choosing::Aims(aims) => Wants::Best(aim_on(aims, decides, setup.decide_days, date)),
        Choosing::By(Strategy::Hold) if is_forced => Wants::Best(0.0),
        Choosing::By(Strategy::Hold) => Wants::Stay,
        Choosing::Schedule(of) | Choosing::Found(of) => scheduled(of, site, date, why),
    }
}

fn schedule(choosing: &Choosing) -> Option<&Schedule> {
    match choosing {
        Choosing::Schedule(schedule) | Choosing::Found(schedule) => Some(schedule),
        Choosing::By(_) | Choosing::Aims(_) | Choosing::Held(..) => None,
    }
}

/// What the schedule of a setup has come to by a date; `None` before its first change, and without one.
pub(super) fn set_by<'a>(setup: &'a Setup, date: NaiveDate) -> Option<&'a Vec<Gate>> {
    come(schedule(&setup.choosing)?, date).map(|change| &change.1)
}

fn come(schedule: &Schedule, date: NaiveDate) -> Option<&(NaiveDate, Vec<Gate>)> {
    schedule.changes.iter().take_while(|change| change.0 <= date).last()
}

/// What a schedule says on a date: at its changes, and on the first day of decisions what it has come to by then. What
/// was forced holds until its next change.
fn scheduled(schedule: &Schedule, site: &Site, date: NaiveDate, why: Why) -> Wants {
    let gates = match (come(schedule, date), why) {
        (Some(change), _) if change.0 == date => Some(&change.1),
        (Some(change), Why::Begin) => Some(&change.1),
        (_, Why::Forced(_)) => return Wants::Best(0.0),
        _ => None,
    };
    gates.map_or(Wants::Stay, |gates| Wants::These(Asked::of(site, &Setting::of(gates.clone()))))
}
