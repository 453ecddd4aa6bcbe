//! Targets in words, and how a release stands against them.

use crate::mix::TargetStanding;
use crate::problem::harmless;
use crate::site::Site;
use crate::target::{Basis, DAM, Reference, Standing, Statistic, Target};
use crate::units::{Dimension, System, figure, in_system};

use super::mix::missed;
use super::{labelled, step, temperature};

/// What a hard rule is told as where another comes before it.
pub(super) const HELD_AS_WISH: &str = "held as a wish: a rule of smaller priority number leaves it nothing";

/// Said wherever a target stands whose values are an example.
pub const EXAMPLE: &str = "example values, not your licence's";

/// A target by name, with its point where that is not the dam and its statistic where that is not the daily mean:
/// `rearing at Mill Bridge (7-day mean of daily maxima)`.
pub fn named(rule: &Target, system: System) -> String {
    let mut out = harmless(&rule.name);
    if rule.point != DAM {
        out = format!("{out} at {}", harmless(&rule.point));
    }
    if rule.statistic != Statistic::DailyMean {
        out = format!("{out} ({})", in_system(&rule.statistic.words(), system));
    }
    out
}

/// A target in words: `48.0 to 56.0 F, preferred 52.0 F, oxygen at least 7.0 mg/L`.
pub fn range(rule: &Target, system: System) -> String {
    let mut parts = Vec::new();
    let (one, both) = in_words(rule, system);
    match (rule.low_c, rule.high_c) {
        (Some(low), Some(high)) => parts.push(format!("{} to {}", both(low), one(high))),
        (Some(low), None) => parts.push(format!("from {}", one(low))),
        (None, Some(high)) => parts.push(format!("to {}", one(high))),
        (None, None) => {}
    }
    match &rule.reference {
        Some(Reference::Natural) => {
            parts.push("from the natural temperature (the balance with the air that day)".to_owned());
        }
        Some(Reference::Stream(name)) => parts.push(format!("from the temperature of {}", harmless(name))),
        None => {}
    }
    if rule.buffer_c > 0.0 {
        parts.push(format!("buffer {}", step(rule.buffer_c, system)));
    }
    if let Some(preferred) = rule.preferred_c {
        parts.push(format!("preferred {}", one(preferred)));
    }
    let of = match rule.oxygen_statistic {
        Some(statistic) => format!("oxygen ({})", statistic.words()),
        None => "oxygen".to_owned(),
    };
    if let Some(least) = rule.oxygen_min_mg_l {
        parts.push(format!("{of} at least {least:.1} mg/L"));
    }
    if let Some(least) = rule.oxygen_min_share {
        parts.push(format!("{of} at least {:.0} % of saturation", 100.0 * least));
    }
    if rule.soft {
        parts.push("a wish".to_owned());
    }
    if rule.example {
        parts.push(EXAMPLE.to_owned());
    }
    parts.join(", ")
}

/// A bound with its unit and without it.
type Said = Box<dyn Fn(f64) -> String>;

/// How the bounds of a rule are said, with the unit and without.
fn in_words(rule: &Target, system: System) -> (Said, Said) {
    let unit = system.unit(Dimension::TemperatureDifference);
    if rule.is_of_temperature() {
        let unit = system.unit(Dimension::Temperature);
        return (Box::new(move |c| temperature(c, system)), Box::new(move |c| figure(c, unit, 1)));
    }
    let (digits, days) = if rule.statistic.is_sum() { (0, " days") } else { (1, "") };
    let plain = move |c: f64| figure(c, unit, digits);
    (Box::new(move |c| format!("{} {}{days}", plain(c), unit.symbol())), Box::new(plain))
}

/// How the release stands against a target: `temperature ABOVE by 0.4 F, oxygen inside`.
pub fn standing_words(s: &TargetStanding, rule: &Target, system: System) -> String {
    let unit = system.unit(Dimension::TemperatureDifference);
    let days = if rule.statistic.is_sum() { " days" } else { "" };
    let warm = match s.temperature {
        (Standing::Unknown, _) if rule.has_range() => Some("temperature UNKNOWN".to_owned()),
        (Standing::Unknown, _) => None,
        (standing, Some(by)) if by > 0.0 => {
            Some(format!("temperature {}{days}", missed(standing, unit.from_si(by), unit.symbol())))
        }
        (standing, _) => Some(format!("temperature {}", standing.word())),
    };
    let aired = match s.oxygen {
        (Standing::Unknown, _) if rule.has_floor() => Some("oxygen UNKNOWN".to_owned()),
        (Standing::Unknown, _) => None,
        (standing, Some(by)) if by > 0.0 => Some(format!("oxygen {}", missed(standing, by, "mg/L"))),
        (standing, _) => Some(format!("oxygen {}", standing.word())),
    };
    [warm, aired].into_iter().flatten().collect::<Vec<_>>().join(", ")
}

/// `1 day`, `3 days`
fn days(count: f64) -> String {
    let days = if (count - 1.0).abs() < 0.5 { "day" } else { "days" };
    format!("{count:.0} {days}")
}

/// What is held against a target, where that is not simply the release: `mean 57.3 F, oxygen 8.1 mg/L`.
pub(super) fn value_words(s: &TargetStanding, rule: &Target, system: System) -> Option<String> {
    let (one, _) = in_words(rule, system);
    let plain = rule.point == DAM && rule.is_of_temperature() && s.basis != Basis::Observed;
    let warm = s.value_c.filter(|_| !plain && rule.has_range()).map(one);
    let count = s.count.map(|count| match rule.statistic {
        Statistic::ShareOfDays(_) => format!("with today {count:.0} % of days above"),
        Statistic::DaysInARow(_) => format!("with today {} in a row above", days(count)),
        _ => format!("with today {} above", days(count)),
    });
    let share = s.oxygen_share.filter(|_| rule.oxygen_min_share.is_some());
    let aired = match (s.oxygen_mg_l.filter(|_| rule.has_floor() && rule.point != DAM), share) {
        (_, Some(share)) => Some(format!("oxygen {:.0} % of saturation", 100.0 * share)),
        (Some(oxygen), None) => Some(format!("oxygen {oxygen:.1} mg/L")),
        (None, None) => None,
    };
    let words: Vec<String> = [warm, count, aired].into_iter().flatten().collect();
    (!words.is_empty()).then(|| words.join(", "))
}

/// Every target valid on the day with its standing.
pub(super) fn standings(site: &Site, targets: &[TargetStanding], system: System) -> String {
    if targets.is_empty() {
        return labelled("Target", "none is valid on this date") + "\n";
    }
    let mut out = String::new();
    for s in targets {
        let rule = &site.targets[s.target];
        let governs = if s.governs && targets.len() > 1 { ": governs" } else { "" };
        let statistic = in_system(&rule.statistic.words(), system);
        let basis = match s.basis {
            Basis::Steady => "steady release",
            Basis::Blocks => "blocks of the day",
            Basis::Observed => Basis::Observed.words(),
        };
        let name = harmless(&rule.name);
        let place = if rule.point == DAM { "the dam".to_owned() } else { harmless(&rule.point) };
        out.push_str(&labelled("Target", &format!("{name} at {place} ({statistic}, {basis}){governs}")));
        let source = rule.source.as_deref().map_or_else(|| "no source given".to_owned(), harmless);
        let source = match &rule.authority {
            Some(authority) => format!("{}; {source}", harmless(authority)),
            None => source,
        };
        out.push_str(&labelled("", &format!("{} [{source}]", range(rule, system))));
        if let Some(value) = value_words(s, rule, system) {
            out.push_str(&labelled("", &value));
        }
        let percent = |share: Option<f64>| share.map(|s| format!("{:.0} %", 100.0 * s));
        let cases = match (percent(s.share_inside_both), percent(s.share_inside)) {
            (Some(both), _) => format!("{both} of perturbed cases inside"),
            (None, Some(warm)) => format!("{warm} of perturbed cases inside in temperature"),
            (None, None) => "no share known".to_owned(),
        };
        out.push_str(&labelled("", &format!("{}; {cases}", standing_words(s, rule, system))));
        if s.wish && !rule.soft {
            out.push_str(&labelled("", HELD_AS_WISH));
        }
        if let Some(words) = &s.words {
            out.push_str(&labelled("", &harmless(&in_system(words, system))));
        }
    }
    out.push('\n');
    out
}
