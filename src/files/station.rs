//! What a station in the river recorded: times, temperature, oxygen, flow, as its logger wrote them.

mod clock;
mod column;
mod faults;
mod gather;
mod range;

use chrono::{DateTime, FixedOffset};

use crate::problem::{Problem, any_refused};
use crate::series::{Record, Series};
use crate::site::Site;
use crate::units::Unit;
use crate::water;

use super::cast::is_sentinel;
use super::table::Table;
use super::text::Source;
use clock::{Daylight, Stamp};
use column::{MARK_CURE, provisional};
use gather::Gather;

pub use column::Column;

const TIME_CURE: &str = "write 2026-07-01T10:00 (standard time of the site) or 2026-07-01T10:00:00-07:00, and a time on every row";

/// The readings of one row.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
struct Reading {
    temperature_c: Option<f64>,
    oxygen_mg_l: Option<f64>,
    oxygen_percent: Option<f64>,
    flow_m3s: Option<f64>,
    /// Whether its mark says that it is provisional; `None` where it is blank.
    provisional: Option<bool>,
}

impl Reading {
    /// Takes out what a sensor in the air cannot tell.
    fn dry(&mut self) {
        (self.temperature_c, self.oxygen_mg_l, self.oxygen_percent) = (None, None, None);
    }

    fn is_empty(&self) -> bool {
        self.temperature_c.or(self.oxygen_mg_l).or(self.oxygen_percent).or(self.flow_m3s).is_none()
    }
}

/// A row whose moment is known.
#[derive(Debug, Clone, Copy)]
struct Row {
    line: usize,
    time: DateTime<FixedOffset>,
    reading: Reading,
}

/// Reads a station's file. The list holds everything said of it; the record is `None` when anything refuses it.
pub fn station(source: &Source, site: &Site) -> (Option<Record>, Vec<Problem>) {
    let mut problems: Vec<Problem> = source.note().into_iter().collect();
    let record = read(source, site, &mut problems);
    problems.sort_by_key(|p| p.place.line.unwrap_or(0));
    for p in &mut problems {
        p.place.file.get_or_insert_with(|| source.name.clone());
    }
    if any_refused(&problems) { (None, problems) } else { (record, problems) }
}

fn known(site: &Site, name: &str) -> Option<Column> {
    let mapped = site.columns.iter().find(|(from, _)| from.trim().eq_ignore_ascii_case(name.trim()));
    Column::parse(mapped.map_or(name, |(_, to)| to.as_str()))
}

fn read(source: &Source, site: &Site, problems: &mut Vec<Problem>) -> Option<Record> {
    let is_header = |cells: &[String]| {
        let found: Vec<Column> = cells.iter().filter_map(|c| known(site, c)).collect();
        found.contains(&Column::Time) && found.iter().any(|c| c.is_reading())
    };
    let table = match Table::parse_with(&source.text, &is_header) {
        Ok(table) => table,
        Err(found) => {
            let unnamed = found.iter().all(|p| p.kind == "no-header");
            problems.extend(if unnamed { vec![no_header()] } else { found });
            return None;
        }
    };
    problems.extend(table.notes.iter().cloned());
    let columns: Vec<Option<Column>> = table.columns.iter().map(|c| known(site, c)).collect();
    twice(&table, &columns, problems);
    let daylight = Daylight::told(&table, problems);
    let usual = data(&table, problems);
    let mut said = Gather::default();
    let (readings, stamps) = cells(&table, &columns, site.offset, &mut said);
    let same = |a: usize, b: usize| readings.get(a) == readings.get(b);
    let placed = clock::ordered(stamps, &daylight, site.offset, same, &mut said);
    let row =
        |p: clock::Placed| Some(Row { line: p.line, time: p.time, reading: readings.get(p.row).copied()? });
    let mut rows: Vec<Row> = placed.into_iter().filter_map(row).collect();
    range::in_range(&mut rows, &mut said);
    faults::faults(&mut rows, &mut said);
    problems.extend(said.finish());
    if rows.iter().all(|r| r.reading.is_empty()) && !any_refused(problems) {
        let cure = "check the columns and their units against docs/files.md";
        problems.push(Problem::refused(
            "no-reading-left",
            "the file holds no reading that can be used",
            cure,
        ));
        return None;
    }
    Some(record(&rows, site, usual, problems))
}

fn no_header() -> Problem {
    let names: Vec<&str> = Column::ALL.iter().map(|c| c.name()).collect();
    Problem::refused(
        "no-header",
        "no line names a time and a reading with its unit",
        format!("name them ({}), or map the logger's names under `columns` in site.yaml", names.join(", ")),
    )
}

/// One quantity in two columns cannot be chosen for the user; percent beside mg/L are two readings.
fn twice(table: &Table, columns: &[Option<Column>], problems: &mut Vec<Problem>) {
    let count = |of: &[Column]| columns.iter().flatten().filter(|c| of.contains(c)).count();
    let pairs: [&[Column]; 6] = [
        &[Column::Time],
        &[Column::TemperatureC, Column::TemperatureF],
        &[Column::Oxygen],
        &[Column::OxygenPercent],
        &[Column::FlowM3s, Column::FlowCfs],
        &[Column::Mark],
    ];
    for of in pairs.into_iter().filter(|of| count(of) > 1) {
        let names: Vec<&str> = of.iter().map(|c| c.name()).collect();
        problems.push(
            Problem::refused(
                "column-twice",
                format!("two columns are read as {}", names.join(" or ")),
                "keep one of them",
            )
            .on_line(table.header_line),
        );
    }
    let unused = table.columns.iter().zip(columns).filter(|(name, of)| of.is_none() && !name.is_empty());
    let unused: Vec<&str> = unused.map(|(name, _)| name.as_str()).collect();
    if !unused.is_empty() {
        let words = format!("columns not used: {}", unused.join(", "));
        problems.push(Problem::note("column-unused", words).on_line(table.header_line));
    }
}

/// Whether rows without a mark are provisional: what nobody said to be reviewed is (choice).
fn data(table: &Table, problems: &mut Vec<Problem>) -> bool {
    let mut usual = true;
    for (_, value, line) in table.meta().filter(|m| m.0 == "data") {
        let short: String = value.chars().take(30).collect();
        let of = provisional(&short);
        usual = of.unwrap_or(true);
        if of.is_none() {
            let words = format!("`# data: {short}` is not a word known here; the data count as provisional");
            problems.push(Problem::flag("mark", words, MARK_CURE).on_line(line));
        }
    }
    usual
}

type Stamps = Vec<(usize, usize, Stamp)>;

/// The readings of every row, and the moments of those that have one.
fn cells(
    table: &Table,
    columns: &[Option<Column>],
    offset: FixedOffset,
    said: &mut Gather,
) -> (Vec<Reading>, Stamps) {
    let mut readings = Vec::with_capacity(table.len());
    let mut stamps = Vec::with_capacity(table.len());
    for r in 0..table.len() {
        let line = table.line(r).unwrap_or(0);
        let mut reading = Reading::default();
        for (c, column) in columns.iter().enumerate() {
            match column {
                None => {}
                Some(Column::Time) => match Stamp::parse(table.cell(r, c).unwrap_or_default(), offset) {
                    Ok(stamp) => stamps.push((r, line, stamp)),
                    Err(words) => {
                        said.add("time", Problem::refused("time", words, TIME_CURE).on_line(line));
                    }
                },
                Some(Column::Mark) => {
                    reading.provisional = mark(table.cell(r, c).unwrap_or_default(), line, said);
                }
                Some(column) => match table.number(r, c) {
                    Ok(Some(value)) if is_sentinel(value) => {
                        let words = "a cell such as -999 is read as no reading";
                        said.add("no-reading", Problem::note("no-reading", words).on_line(line));
                    }
                    Ok(value) => put(*column, &mut reading, value),
                    Err(problem) => said.add(format!("not-a-number {c}"), problem),
                },
            }
        }
        readings.push(reading);
    }
    (readings, stamps)
}

fn put(column: Column, reading: &mut Reading, value: Option<f64>) {
    match column {
        Column::TemperatureC => reading.temperature_c = value,
        Column::TemperatureF => reading.temperature_c = value.map(|v| Unit::Fahrenheit.to_si(v)),
        Column::Oxygen => reading.oxygen_mg_l = value,
        Column::OxygenPercent => reading.oxygen_percent = value,
        Column::FlowM3s => reading.flow_m3s = value,
        Column::FlowCfs => reading.flow_m3s = value.map(|v| Unit::CubicFootPerSecond.to_si(v)),
        Column::Time | Column::Mark => {}
    }
}

fn mark(cell: &str, line: usize, said: &mut Gather) -> Option<bool> {
    if cell.is_empty() {
        return None;
    }
    let of = provisional(cell);
    if of.is_none() {
        let short: String = cell.chars().take(30).collect();
        let words = format!("`{short}` is not a mark known here; the reading counts as provisional");
        said.add("mark", Problem::flag("mark", words, MARK_CURE).on_line(line));
    }
    of.or(Some(true))
}

/// Rows into series. Saturation is that of fresh water at the altitude of the bed at the dam: the river's own is not
/// known.
fn record(rows: &[Row], site: &Site, usual: bool, problems: &mut Vec<Problem>) -> Record {
    let pressure_atm = site.surface_pressure_atm(site.pool.bed_m);
    let full = |t: f64| water::saturation_mg_l(t, 0.0, pressure_atm);
    let series = |of: &dyn Fn(&Reading) -> Option<f64>| {
        Series::new(rows.iter().filter_map(|r| Some((r.time, of(&r.reading)?))).collect())
    };
    let converted =
        |r: &Reading| Some(water::oxygen_from_percent_mg_l(r.oxygen_percent?, full(r.temperature_c?)));
    if let Some(row) =
        rows.iter().find(|r| r.reading.oxygen_mg_l.is_none() && converted(&r.reading).is_some())
    {
        let words = "oxygen in percent was converted at the pressure of the bed at the dam";
        problems.push(Problem::note("oxygen-converted", words).on_line(row.line));
    }
    Record {
        temperature_c: series(&|r| r.temperature_c),
        oxygen_mg_l: series(&|r| r.oxygen_mg_l.or_else(|| converted(r))),
        oxygen_share: series(&|r| {
            let measured = r.oxygen_percent.map(|p| p / 100.0);
            measured.or_else(|| Some(r.oxygen_mg_l? / full(r.temperature_c?)))
        }),
        flow_m3s: series(&|r| r.flow_m3s),
        provisional: rows.iter().any(|r| !r.reading.is_empty() && r.reading.provisional.unwrap_or(usual)),
    }
}
