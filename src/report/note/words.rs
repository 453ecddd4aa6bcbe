//! Words that both sheets of a note share; quantities as [`say`](crate::units::say) marks them.

use chrono::{DateTime, FixedOffset};

use crate::mix::limits::Check;
use crate::mix::{Gate, Setting, TargetStanding};
use crate::site::{Outlet, Site};
use crate::target::{DAM, Standing, Statistic, Target};
use crate::tasks::note::{NoteAnswer, Subject};
use crate::units::{Dimension, say};

/// A moment in the site's offset.
pub(super) fn moment(site: &Site, at: DateTime<FixedOffset>) -> String {
    at.with_timezone(&site.offset).format("%Y-%m-%d %H:%M %:z").to_string()
}

/// The dam with its river.
pub(super) fn dam(site: &Site) -> String {
    let river = site.river_name.as_ref().map_or_else(String::new, |river| format!(" on the {river}"));
    let invented = if site.demonstration { " [invented demonstration]" } else { "" };
    format!("{}{river}{invented}", site.name)
}

/// What the note is of.
pub(super) fn subject(answer: &NoteAnswer) -> String {
    match answer.subject {
        Subject::Decision(id) => format!("decision {id} of the log, which holds on this date"),
        Subject::FirstRanked => "the first ranked mix: no decision of the log holds on this date".to_owned(),
        Subject::Named => "gates as named for this note".to_owned(),
    }
}

/// A temperature.
pub(super) fn warmth(c: f64) -> String {
    say::c(c, 1).to_string()
}

/// A flow.
pub(super) fn flow(m3s: f64) -> String {
    say::m3s(m3s, 1).to_string()
}

/// A flow with its sign.
pub(super) fn flow_change(m3s: f64) -> String {
    say::m3s(m3s, 1).signed().to_string()
}

/// A temperature with its band.
pub(super) fn banded(c: f64, band_c: Option<(f64, f64)>) -> String {
    let band = band_c.map(|(low, high)| format!(" [{} to {}]", say::c(low, 1), say::c(high, 1)));
    warmth(c) + &band.unwrap_or_default()
}

/// Oxygen with its band.
pub(super) fn aired(mg_l: Option<f64>, band: Option<(f64, f64)>) -> String {
    let Some(mg_l) = mg_l else { return "not known".to_owned() };
    let band = band.map(|(low, high)| format!(" [{low:.1} to {high:.1}]"));
    format!("{mg_l:.1}{} mg/L", band.unwrap_or_default())
}

/// How an outlet stands: `shut`, `open 50%`, or by its position.
pub(super) fn opening(outlet: &Outlet, opening: f64) -> String {
    if opening <= 0.0 {
        "shut".to_owned()
    } else {
        format!("open {}", outlet.opening_name(opening).replace(" %", "%"))
    }
}

/// The gates of a setting in the order of their names.
pub(super) fn sorted<'a>(site: &'a Site, setting: &'a Setting) -> Vec<(&'a Outlet, &'a Gate)> {
    let gates = setting.gates.iter().filter(|gate| setting.stands_open(site, gate));
    let mut out: Vec<(&Outlet, &Gate)> =
        gates.filter_map(|gate| Some((site.outlets.get(gate.outlet)?, gate))).collect();
    out.sort_by(|a, b| a.0.name.cmp(&b.0.name));
    out
}

/// How an outlet stands with its flow; of one that is set by its flow alone that.
pub(super) fn stand(outlet: &Outlet, gate: &Gate) -> String {
    if outlet.well.is_some() || !outlet.positions.is_empty() {
        format!("{}, {}", opening(outlet, gate.opening), flow(gate.flow_m3s))
    } else {
        flow(gate.flow_m3s)
    }
}

/// A setting in one line: `N3 open 100%, 600 cfs; Sluice 180 cfs`.
pub(super) fn gates(site: &Site, setting: &Setting) -> String {
    let all: Vec<String> = sorted(site, setting)
        .iter()
        .map(|(outlet, gate)| format!("{} {}", outlet.name, stand(outlet, gate)))
        .collect();
    if all.is_empty() { "every gate shut".to_owned() } else { all.join("; ") }
}

/// The room left of a limit: `min_submergence of N3: 12.0 ft left`.
pub(super) fn room(site: &Site, check: &Check) -> Option<String> {
    let of = check.of.name(site).map_or_else(String::new, |name| format!(" of {name}"));
    Some(format!("{}{of}: {} left", check.rule.name(), check.spare()?))
}

/// A target by name, with its place and its statistic where they are not the usual ones.
pub(super) fn named(rule: &Target) -> String {
    let place = if rule.point == DAM { String::new() } else { format!(" at {}", rule.point) };
    let statistic = match rule.statistic {
        Statistic::DailyMean => String::new(),
        _ => format!(" ({})", rule.statistic.words()),
    };
    format!("{}{place}{statistic}", rule.name)
}

/// What a target asks.
pub(super) fn asks(rule: &Target) -> String {
    let bound = |c: f64| match rule.dimension() {
        Dimension::Temperature => say::c(c, 1),
        _ => say::dc(c, 1),
    };
    let days = if rule.statistic.is_sum() { " days" } else { "" };
    let range = match (rule.low_c, rule.high_c) {
        (Some(low), Some(high)) => Some(format!("{} to {}{days}", bound(low), bound(high))),
        (Some(low), None) => Some(format!("from {}{days}", bound(low))),
        (None, Some(high)) => Some(format!("to {}{days}", bound(high))),
        (None, None) => None,
    };
    let mut parts: Vec<String> = range.into_iter().collect();
    if rule.reference.is_some() {
        parts.push("as a difference".to_owned());
    }
    if rule.buffer_c > 0.0 {
        parts.push(format!("buffer {}", say::dc(rule.buffer_c, 1)));
    }
    parts.extend(rule.preferred_c.map(|c| format!("preferred {}", bound(c))));
    parts.extend(rule.oxygen_min_mg_l.map(|least| format!("oxygen from {least:.1} mg/L")));
    parts.extend(
        rule.oxygen_min_share.map(|least| format!("oxygen from {:.0} % of saturation", 100.0 * least)),
    );
    parts.join(", ")
}

/// How what is expected stands against a target.
pub(super) fn stands(standing: &TargetStanding, rule: &Target) -> String {
    let days = if rule.statistic.is_sum() { " days" } else { "" };
    let warm = match standing.temperature {
        _ if !rule.has_range() => None,
        (Standing::Unknown, _) => Some("temperature UNKNOWN".to_owned()),
        (is, Some(by)) if by > 0.0 => {
            Some(format!("temperature {} by {}{days}", is.word().to_uppercase(), say::dc(by, 1)))
        }
        (is, _) => Some(format!("temperature {}", is.word())),
    };
    let aired = match standing.oxygen {
        _ if !rule.has_floor() => None,
        (Standing::Unknown, _) => Some("oxygen UNKNOWN".to_owned()),
        (is, Some(by)) if by > 0.0 => Some(format!("oxygen {} by {by:.1} mg/L", is.word().to_uppercase())),
        (is, _) => Some(format!("oxygen {}", is.word())),
    };
    let words: Vec<String> = [warm, aired].into_iter().flatten().collect();
    words.join(", ")
}

/// Whole percent of a share.
pub(super) fn percent(share: Option<f64>) -> String {
    share.map_or_else(|| "-".to_owned(), |share| format!("{:.0} %", 100.0 * share))
}
