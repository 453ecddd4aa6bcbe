//! A gate schedule into its changes: dates down, outlets across, flows in the unit of the folder.

use chrono::NaiveDate;

use crate::mix::Gate;
use crate::problem::{Problem, any_refused};
use crate::season::Schedule;
use crate::site::{SAME_OPENING, Site};
use crate::units::Dimension;

use super::cast::parse_date;
use super::table::Table;
use super::text::Source;

/// The first word of the header.
const DATE: &str = "date";

const CELL_CURE: &str =
    "write a flow, such as 600 or 600cfs, its opening after an @ where it is not fully open, such as 600@50%";

/// Reads a gate schedule. The list holds everything said of it; the schedule is `None` when anything refuses it.
///
/// A row tells all that is set from its date on: a blank cell is a shut gate.
pub fn schedule(source: &Source, site: &Site) -> (Option<Schedule>, Vec<Problem>) {
    let mut problems: Vec<Problem> = source.note().into_iter().collect();
    let changes = read(source, site, &mut problems);
    for p in &mut problems {
        p.place.file.get_or_insert_with(|| source.name.clone());
    }
    let schedule = changes.filter(|_| !any_refused(&problems));
    (schedule.map(|changes| Schedule { file: source.name.clone(), changes }), problems)
}

type Changes = Vec<(NaiveDate, Vec<Gate>)>;

fn read(source: &Source, site: &Site, problems: &mut Vec<Problem>) -> Option<Changes> {
    let is_header = |cells: &[String]| cells.first().is_some_and(|c| c.eq_ignore_ascii_case(DATE));
    let table = Table::of(&source.text, &is_header, || no_header(site), problems)?;
    let mut outlets = Vec::with_capacity(table.columns.len());
    for (c, name) in table.columns.iter().enumerate().skip(1) {
        match site.outlet(name) {
            Some(outlet) => outlets.push((c, outlet)),
            None => problems.push(no_outlet(name, site).on_line(table.header_line)),
        }
    }
    if table.is_empty() {
        let words = "the schedule has no row";
        problems.push(Problem::refused("plan-short", words, "write from when on what is set"));
    }
    let mut changes: Changes = Vec::with_capacity(table.len());
    for r in 0..table.len() {
        let line = table.line(r).unwrap_or(0);
        let date = match parse_date(table.cell(r, 0).unwrap_or_default()) {
            Ok(date) => date,
            Err(problem) => {
                problems.push(problem.on_line(line).at(DATE));
                continue;
            }
        };
        if let Some((last, _)) = changes.last().filter(|(last, _)| date <= *last) {
            let cure = "give each day one row, the earlier ones first";
            let words = if date == *last {
                format!("{date} stands there twice")
            } else {
                format!("{date} comes after {last}")
            };
            problems.push(Problem::refused("plan-order", words, cure).on_line(line));
        }
        let mut gates = Vec::new();
        for (c, outlet) in &outlets {
            let cell = table.cell(r, *c).unwrap_or_default();
            match gate(cell, *outlet, site) {
                Ok(gate) => gates.extend(gate),
                Err(words) => {
                    let name = table.columns.get(*c).map_or("", String::as_str);
                    problems.push(Problem::refused("set", words, CELL_CURE).on_line(line).at(name));
                }
            }
        }
        if gates.is_empty() && !outlets.is_empty() && !any_refused(problems) {
            let words = "nothing is set in this row, so no water would be released";
            problems.push(Problem::refused("set", words, CELL_CURE).on_line(line));
        }
        changes.push((date, gates));
    }
    Some(changes)
}

fn no_header(site: &Site) -> Problem {
    let names: Vec<&str> = site.outlets.iter().map(|o| o.name.as_str()).collect();
    let words = "no line begins with `date` and names outlets";
    Problem::refused(
        "no-header",
        words,
        format!("write date, and of {} those that are used", names.join(", ")),
    )
}

fn no_outlet(name: &str, site: &Site) -> Problem {
    let short: String = name.chars().take(40).collect();
    let known: Vec<&str> = site.outlets.iter().map(|o| o.name.as_str()).collect();
    let cure = format!("use {}", known.join(", "));
    Problem::refused("unknown-outlet", format!("no outlet is named `{short}`"), cure)
}

/// What a cell sets; nothing where it is blank or gives no flow.
fn gate(cell: &str, outlet: usize, site: &Site) -> Result<Option<Gate>, String> {
    if cell.is_empty() {
        return Ok(None);
    }
    let (flow, opening) = cell.split_once('@').map_or((cell, None), |(q, o)| (q.trim(), Some(o.trim())));
    let flow_m3s = site.units.parse(flow, Dimension::Flow).map_err(|error| error.to_string())?;
    if flow_m3s < 0.0 || !Dimension::Flow.is_plausible(flow_m3s) {
        return Err("no gate passes such a flow".into());
    }
    let opening = opening.map_or(Ok(1.0), |text| position(text, outlet, site))?;
    Ok((flow_m3s > 0.0).then_some(Gate { outlet, opening, flow_m3s }))
}

/// An opening, 0 to 1: percent, or the name of a position.
fn position(text: &str, outlet: usize, site: &Site) -> Result<f64, String> {
    let positions = site.outlets.get(outlet).map_or(&[][..], |o| o.positions.as_slice());
    if let Some(named) = positions.iter().find(|p| p.name == text) {
        return Ok(named.opening);
    }
    let percent = site.units.parse(text, Dimension::Percent).map_err(|error| error.to_string())?;
    let opening = percent / 100.0;
    if opening <= 0.0 || opening > 1.0 {
        return Err("an opening lies above 0 and up to 100 %".into());
    }
    if !positions.is_empty() && !positions.iter().any(|p| (p.opening - opening).abs() < SAME_OPENING) {
        let known: Vec<&str> = positions.iter().map(|p| p.name.as_str()).collect();
        return Err(format!("the gate has the positions {}", known.join(", ")));
    }
    Ok(opening)
}
