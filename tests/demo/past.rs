//! What has been, as a plan and a gate schedule that the pool can be learned from.

use std::fmt::Write;

use chrono::NaiveDate;

use super::column::Water;

/// A day of the dam's book.
pub(crate) struct PastDay {
    pub(crate) day: NaiveDate,
    pub(crate) inflow_m3s: f64,
    pub(crate) inflow: Water,
    /// Gates by their place in the tower, from the uppermost, and their flows.
    pub(crate) gates: Vec<(usize, f64)>,
}

/// Days one after the other.
#[derive(Default)]
pub(crate) struct Past {
    pub(crate) days: Vec<PastDay>,
}

/// A gate given less than two decimals show stays shut, m3/s.
const SHUT_M3S: f64 = 0.005;
/// Dissolved solids to specific conductance, mg/L for uS/cm.
const SOLIDS: f64 = 0.65;
/// Gates of the tower.
const GATES: usize = 4;

impl Past {
    /// The release and what came in, a row a day.
    pub(crate) fn plan(&self, of: &str) -> (String, String) {
        let mut text =
            format!("# {of}: what has been, invented days of an invented place.\n# name: past spring\n");
        text.push_str(
            "date,release_m3s,inflow_m3s,inflow_temperature_C,inflow_oxygen_mg_l,inflow_solids_mg_l\n",
        );
        for day in &self.days {
            let release_m3s: f64 = day.gates.iter().map(|gate| gate.1).sum();
            let PastDay { day, inflow_m3s, inflow, .. } = day;
            let (c, oxygen) = (inflow.temperature_c, inflow.oxygen_mg_l);
            let solids_mg_l = SOLIDS * inflow.conductance_us_cm;
            writeln!(text, "{day},{release_m3s:.2},{inflow_m3s:.2},{c:.2},{oxygen:.2},{solids_mg_l:.0}")
                .unwrap();
        }
        ("plans/past-2026.csv".to_owned(), text)
    }

    /// The gates of the tower, a row a day.
    pub(crate) fn schedule(&self, of: &str) -> (String, String) {
        let mut text =
            format!("# {of}: what was set, invented days of an invented place.\ndate,T1,T2,T3,T4\n");
        for day in &self.days {
            let mut flows = [0.0; GATES];
            for &(gate, flow_m3s) in &day.gates {
                flows[gate] += flow_m3s;
            }
            let cells = flows.map(|q| if q < SHUT_M3S { String::new() } else { format!("{q:.2}") });
            writeln!(text, "{},{}", day.day, cells.join(",")).unwrap();
        }
        ("schedules/past-2026.csv".to_owned(), text)
    }
}
