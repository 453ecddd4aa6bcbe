//! What is moved, and why there is no order, in words.

use crate::mix::limits::{Check, Rule};
use crate::site::Site;
use crate::units::say;

use super::{Moved, NoOrder, Stand, Stuck};

impl Moved {
    /// Name of the outlet or the well.
    pub fn name(self, site: &Site) -> &str {
        match self {
            Self::Gate(outlet) | Self::Outlet(outlet) => site.outlets.get(outlet).map_or("", |o| &o.name),
            Self::Well(well) => site.wells.get(well).map_or("", |w| &w.name),
        }
    }

    /// How it stands: of a gate its opening, of what is set by flow that.
    fn standing(self, site: &Site, stand: Stand) -> String {
        let outlet = match self {
            Self::Gate(outlet) | Self::Outlet(outlet) => site.outlets.get(outlet),
            Self::Well(_) => None,
        };
        let opening = outlet.zip(stand.opening).map(|(o, opening)| o.opening_name(opening));
        match (self, opening) {
            (Self::Gate(_), Some(opening)) => opening,
            (Self::Outlet(_), Some(opening)) => format!("{} at {opening}", say::m3s(stand.flow_m3s, 2)),
            _ => say::m3s(stand.flow_m3s, 2).to_string(),
        }
    }
}

impl Stuck {
    /// The step and the limit that it would miss.
    pub fn words(&self, site: &Site) -> String {
        format!(
            "step {}, `{}` from {} to {}, would break {}",
            self.steps.len() + 1,
            self.moved.name(site),
            self.moved.standing(site, self.from),
            self.moved.standing(site, self.to),
            missed(&self.check, site)
        )
    }
}

impl NoOrder {
    /// Why there is none, quantities in the reader's units.
    pub fn words(&self, site: &Site) -> String {
        match self {
            Self::Wanted(checks) => {
                let all: Vec<String> = checks.iter().map(|c| c.words(site)).collect();
                format!("no order: the setting wanted itself misses {}", all.join("; "))
            }
            Self::Missing(stuck) => format!("no order found: {}", stuck.words(site)),
            Self::Impossible(stuck) => format!("impossible: {}, however it is split", stuck.words(site)),
            Self::Unsettled { states } => {
                format!("not settled: no order among the first {states} states of the dam on the way")
            }
        }
    }
}

/// A limit missed; a rate as the step breaks it by itself.
fn missed(check: &Check, site: &Site) -> String {
    let (found, bound, span) = match check.rule {
        Rule::FlowChangePerHour => (say::m3s(check.found, 2), say::m3s(check.bound, 2), "an hour"),
        Rule::FlowChangePerDay => (say::m3s(check.found, 2), say::m3s(check.bound, 2), "a day"),
        Rule::TemperatureChangePerHour => (say::dc(check.found, 2), say::dc(check.bound, 2), "an hour"),
        Rule::TemperatureChangePerDay => (say::dc(check.found, 2), say::dc(check.bound, 2), "a day"),
        _ => return check.words(site),
    };
    format!("{}: a change of {found} at once, {bound} allowed in {span}", check.rule.name())
}
