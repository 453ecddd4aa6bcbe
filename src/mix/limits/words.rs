//! A check in words, quantities in the reader's units.

use crate::site::{Avoided, Layer, Site};
use crate::units::{Dimension, say};

use super::{Check, Measure, Of, Rule};

impl Check {
    /// The check as a sentence: the limit by name, what was found, what is asked, and the site's reason.
    pub fn words(&self, site: &Site) -> String {
        let found = self.said(self.found);
        let bound = self.said(self.bound);
        let limits = &site.limits;
        let (words, reason) = match self.rule {
            Rule::Outage => {
                (self.outage(), limits.outages.get(self.item).map(|outage| outage.reason.as_str()))
            }
            Rule::Dry => (format!("its opening at {bound}, the pool at {found}"), None),
            Rule::PoolWindow => {
                let end = if self.bound_is_highest(site) { "highest" } else { "lowest" };
                (format!("the pool at {found}, {bound} the {end} it may be used at"), None)
            }
            Rule::MinSubmergence => (format!("{found} of water above it, {bound} required"), None),
            Rule::AvoidOpening | Rule::AvoidFlow => self.avoided(site),
            Rule::MovesUnderFlow if self.found > 0.0 => {
                (format!("it moves while {found} pass, none allowed"), None)
            }
            Rule::MovesUnderFlow => ("it does not move while water passes".to_owned(), None),
            Rule::FlowMin | Rule::WellMinFlow => (format!("{found} set, {bound} required"), None),
            Rule::FlowMax | Rule::WellMaxFlow => (format!("{found} set, {bound} allowed"), None),
            Rule::Capacity => (format!("{found} set, {bound} at most under this pool"), None),
            Rule::MaxOpen => (format!("{found} gates open, {bound} allowed"), None),
            Rule::MaxHeadLoss => (format!("{found} of head, {bound} allowed"), None),
            Rule::ReleaseMin => (format!("{found} in total, {bound} required"), None),
            Rule::ReleaseMax => (format!("{found} in total, {bound} allowed"), None),
            Rule::FlowChangePerHour
            | Rule::FlowChangePerDay
            | Rule::TemperatureChangePerHour
            | Rule::TemperatureChangePerDay => (self.change(site), None),
            Rule::Drawdown if self.found < 0.0 => (
                format!("the pool rises {} in a day, a fall of {bound} allowed", self.said(-self.found)),
                None,
            ),
            Rule::Drawdown => (format!("the pool falls {found} in a day, {bound} allowed"), None),
            Rule::Reserved => {
                let reason = limits.reserved.get(self.item).map(|reserved| reserved.reason.as_str());
                (format!("{found} given, {bound} required"), reason)
            }
            Rule::EntranceVelocity => (format!("{found} through its opening, {bound} allowed"), None),
            Rule::Undrawn => self.undrawn(site),
            Rule::ShareMin => (format!("{found} of the release, {bound} required"), None),
            Rule::ShareMax => (format!("{found} of the release, {bound} allowed"), None),
            Rule::MaxMoves => (format!("{found} gates move, {bound} allowed"), None),
            Rule::SolidsMax | Rule::MaxCrewHours => (format!("{found}, {bound} allowed"), None),
        };
        let reason = reason.filter(|r| !r.is_empty()).map_or_else(String::new, |r| format!(" ({r})"));
        format!("{}{}: {words}{reason}", self.rule.name(), self.of_words(site))
    }

    /// The check as a sentence of a calendar: why a gate cannot be used under a pool, without the name of the limit.
    pub fn plain(&self, site: &Site) -> String {
        let name = self.of.name(site).unwrap_or_default();
        match self.rule {
            Rule::MinSubmergence => {
                let [found, bound] = [self.found, self.bound].map(|m| self.said(m));
                format!("too little water above `{name}`: {found}, {bound} required")
            }
            Rule::Dry => {
                format!("`{name}` lies above the pool, its opening at {}", self.said(self.bound))
            }
            _ => self.words(site),
        }
    }

    /// The room left of a limit that is kept, quantities in the reader's units; `None` where nothing bounds it.
    pub fn spare(&self) -> Option<String> {
        (self.room.is_finite() && !self.broken()).then(|| self.said(self.room))
    }

    /// What to do about a missed limit.
    pub fn cure(&self) -> &'static str {
        match self.rule {
            Rule::Outage | Rule::PoolWindow => "use another outlet",
            Rule::Dry => "choose an outlet below the water",
            Rule::MinSubmergence => "use a lower outlet",
            Rule::AvoidOpening => "open it less, or further",
            Rule::AvoidFlow => "give it less, or more",
            Rule::MovesUnderFlow => "leave it as it is, or stop the flow first",
            Rule::FlowMin | Rule::WellMinFlow => "raise its flow, or shut it",
            Rule::FlowMax | Rule::Capacity => "lower the flow, or share it with another outlet",
            Rule::MaxOpen => "open fewer of its gates",
            Rule::WellMaxFlow => "lower the flow of its gates",
            Rule::ReleaseMin => "release more",
            Rule::ReleaseMax | Rule::Drawdown => "release less",
            Rule::FlowChangePerHour | Rule::FlowChangePerDay => "change the flow in smaller steps",
            Rule::TemperatureChangePerHour | Rule::TemperatureChangePerDay => {
                "change the temperature in smaller steps"
            }
            Rule::Reserved => "give it that flow",
            Rule::MaxHeadLoss | Rule::EntranceVelocity => "lower its flow, or open it further",
            Rule::Undrawn => "lower the flow, or use another outlet",
            Rule::SolidsMax => "take clearer water",
            Rule::ShareMin => "give these outlets more",
            Rule::ShareMax => "give these outlets less",
            Rule::MaxMoves | Rule::MaxCrewHours => "move fewer gates",
        }
    }

    fn of_words(&self, site: &Site) -> String {
        let well = if matches!(self.of, Of::Well(_)) { "well " } else { "" };
        self.of.name(site).map_or_else(String::new, |name| format!(" of {well}`{name}`"))
    }

    fn outage(&self) -> String {
        if !self.broken() {
            return format!("out of use in {}", Self::figure(Measure::Days, self.room, 0));
        }
        if self.found.is_finite() {
            format!("out of use for {}", Self::figure(Measure::Days, self.found, 0))
        } else {
            "out of use, no end told".to_owned()
        }
    }

    fn bound_is_highest(&self, site: &Site) -> bool {
        let Of::Outlet(i) = self.of else { return false };
        let window = site.outlets.get(i).and_then(|o| o.pool_window_m);
        window.is_some_and(|(_, high)| high.total_cmp(&self.bound).is_eq())
    }

    fn avoided<'s>(&self, site: &'s Site) -> (String, Option<&'s str>) {
        let Of::Outlet(i) = self.of else { return (String::new(), None) };
        let Some(avoid) = site.outlets.get(i).and_then(|o| o.avoid.get(self.item)) else {
            return (String::new(), None);
        };
        let (Avoided::Openings(from, to) | Avoided::Flows(from, to)) = avoid.what;
        let set = if self.rule == Rule::AvoidOpening { "open" } else { "set" };
        let words = format!(
            "{} {set}, {} to {} to be avoided",
            self.said(self.found),
            self.said(from),
            self.said(to)
        );
        (words, Some(&avoid.reason))
    }

    fn change(&self, site: &Site) -> String {
        let (found, bound) = (self.said(self.found), self.said(self.bound));
        let hours = site
            .limits
            .change_hours
            .map_or_else(|| "1 hour, assumed".to_owned(), |hours| Self::figure(Measure::Hours, hours, 1));
        format!("a change of {found}, {bound} allowed (made in {hours})")
    }

    fn undrawn<'s>(&self, site: &'s Site) -> (String, Option<&'s str>) {
        let Some(undrawn) = site.limits.undrawn.get(self.item) else { return (String::new(), None) };
        let layer = match undrawn.layer {
            Layer::Elevations(from, to) => {
                format!("the water between {} and {}", say::m(from, 2), say::m(to, 2))
            }
            Layer::Depths(from, to) => {
                format!("the water {} to {} below the surface", say::m(from, 2), say::m(to, 2))
            }
            Layer::OxygenBelow(least) => format!("water with less than {least:.1} mg/L of oxygen"),
        };
        let words = if self.found > 0.0 {
            format!("its zone reaches {} into {layer}", self.said(self.found))
        } else if self.room.is_finite() {
            format!("its zone keeps {} from {layer}", self.said(self.room))
        } else {
            format!("there is no {layer}", layer = layer.trim_start_matches("the "))
        };
        (words, Some(&undrawn.reason))
    }

    /// A figure of this check, with enough digits that a miss does not read as none.
    fn said(&self, value: f64) -> String {
        let usual: u8 = match self.rule.unit() {
            Measure::Quantity(Dimension::TemperatureDifference | Dimension::Concentration)
            | Measure::Hours => 1,
            Measure::Quantity(Dimension::Percent) | Measure::Count | Measure::Days => 0,
            Measure::Quantity(_) => 2,
        };
        // round-off must not cost a digit
        let miss = self.margin().abs() * (1.0 + 1e-6);
        let digits = if self.broken() && miss > 0.0 && miss < 2.0 * 10_f64.powi(-i32::from(usual)) {
            // one digit more than the miss, since customary figures are shown with fewer
            (usual..9).find(|d| miss >= 10_f64.powi(1 - i32::from(*d))).unwrap_or(9)
        } else {
            usual
        };
        Self::figure(self.rule.unit(), value, digits)
    }

    fn figure(measure: Measure, value: f64, digits: u8) -> String {
        let counted = |one: &str| {
            let figure = format!("{value:.*}", usize::from(digits));
            let figure = if figure.contains('.') {
                figure.trim_end_matches('0').trim_end_matches('.').to_owned()
            } else {
                figure
            };
            let plural = if figure == "1" { "" } else { "s" };
            format!("{figure} {one}{plural}")
        };
        match measure {
            Measure::Quantity(dimension) => match dimension {
                Dimension::Length => say::m(value, digits).to_string(),
                Dimension::Flow => say::m3s(value, digits).to_string(),
                Dimension::Velocity => say::m_s(value, digits).to_string(),
                Dimension::TemperatureDifference => say::dc(value, digits).to_string(),
                Dimension::Percent => format!("{:.*} %", usize::from(digits), 100.0 * value),
                _ => format!("{value:.*} mg/L", usize::from(digits)),
            },
            Measure::Count => format!("{value:.0}"),
            Measure::Hours => counted("hour"),
            Measure::Days => counted("day"),
        }
    }
}
