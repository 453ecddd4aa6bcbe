//! Readings that are none of a river.

use crate::problem::Problem;
use crate::units::{Dimension, say};

use super::Row;
use super::gather::Gather;

/// Liquid water, C; what lies outside is left out (choice, as for casts).
const WATER_C: std::ops::RangeInclusive<f64> = -1.0..=45.0;
/// Most oxygen a reading can be of, mg/L and percent; more is left out (choice, as for casts).
const OXYGEN_MOST: (f64, f64) = (40.0, 500.0);
/// Oxygen that is kept and flagged, mg/L and percent (choice).
const OXYGEN_HIGH: (f64, f64) = (20.0, 200.0);

/// Takes out what no river can be, and flags what hardly any is.
pub(super) fn in_range(rows: &mut [Row], said: &mut Gather) {
    let outside = |row: &&Row| row.reading.temperature_c.is_some_and(|t| !WATER_C.contains(&t));
    let (all, wrong) =
        (rows.iter().filter(|r| r.reading.temperature_c.is_some()).count(), rows.iter().filter(outside));
    let most = wrong.count() * 2 > all;
    for row in rows {
        let reading = &mut row.reading;
        let mut out = |kind: &'static str, words: String| {
            let percent = words.contains('%');
            let group = format!("{kind} {percent}");
            let problem = if most && kind == "temperature-range" {
                let words = format!("{words}, and so are most others");
                Problem::refused(kind, words, "check the unit in the header")
            } else {
                Problem::flag(kind, format!("{words}; it is left out"), "blank the cell, or correct it")
            };
            said.add(group, problem.on_line(row.line));
        };
        if let Some(t) = reading.temperature_c.take_if(|t| !WATER_C.contains(t)) {
            let words = format!(
                "the temperature {} is outside {} to {}",
                say::c(t, 1),
                say::c(*WATER_C.start(), 0),
                say::c(*WATER_C.end(), 0)
            );
            out("temperature-range", words);
        }
        if let Some(o) = reading.oxygen_mg_l.take_if(|o| !(0.0..=OXYGEN_MOST.0).contains(o)) {
            out("oxygen-range", format!("oxygen of {o} mg/L is outside 0 to {}", OXYGEN_MOST.0));
        }
        if let Some(o) = reading.oxygen_percent.take_if(|o| !(0.0..=OXYGEN_MOST.1).contains(o)) {
            out("oxygen-range", format!("oxygen of {o} % is outside 0 to {}", OXYGEN_MOST.1));
        }
        let flows = |q: &f64| *q >= 0.0 && Dimension::Flow.is_plausible(*q);
        if let Some(q) = reading.flow_m3s.take_if(|q| !flows(q)) {
            out("flow-range", format!("a flow of {} is none of a river", say::m3s(q, 1)));
        }
        let high = reading.oxygen_mg_l.is_some_and(|o| o > OXYGEN_HIGH.0)
            || reading.oxygen_percent.is_some_and(|o| o > OXYGEN_HIGH.1);
        if high {
            let words = format!("oxygen is above {} mg/L or {} %; it is kept", OXYGEN_HIGH.0, OXYGEN_HIGH.1);
            let cure = "check the sensor and the unit";
            said.add("oxygen-high", Problem::flag("oxygen-high", words, cure).on_line(row.line));
        }
    }
}
