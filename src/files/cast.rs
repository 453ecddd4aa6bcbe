//! A cast file into a raw cast: columns by name, units by column, times and pool from its comments.

use chrono::{DateTime, Datelike, FixedOffset, NaiveDate, NaiveDateTime, NaiveTime};

use crate::problem::Problem;
use crate::profile::{Raw, RawRow};
use crate::site::Site;
use crate::units::{Datum, Dimension, Unit, say};

use super::table::Table;
use super::text::Source;

/// A column a cast can have.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Column {
    /// Depth below the surface, m.
    DepthM,
    /// Depth below the surface, ft.
    DepthFt,
    /// Elevation, m.
    ElevationM,
    /// Elevation, ft.
    ElevationFt,
    /// Temperature, C.
    TemperatureC,
    /// Temperature, F.
    TemperatureF,
    /// Oxygen, mg/L.
    Oxygen,
    /// Oxygen, percent of saturation.
    OxygenPercent,
    /// Specific conductance at 25 C, uS/cm.
    SpecificConductance,
    /// Raw conductivity, uS/cm.
    Conductivity,
    /// Dissolved solids, mg/L.
    Solids,
    /// Suspended solids, mg/L.
    Suspended,
}

impl Column {
    /// Every column.
    pub const ALL: [Self; 12] = [
        Self::DepthM,
        Self::DepthFt,
        Self::ElevationM,
        Self::ElevationFt,
        Self::TemperatureC,
        Self::TemperatureF,
        Self::Oxygen,
        Self::OxygenPercent,
        Self::SpecificConductance,
        Self::Conductivity,
        Self::Solids,
        Self::Suspended,
    ];

    /// Its name in a header; any case is read.
    pub fn name(self) -> &'static str {
        match self {
            Self::DepthM => "depth_m",
            Self::DepthFt => "depth_ft",
            Self::ElevationM => "elevation_m",
            Self::ElevationFt => "elevation_ft",
            Self::TemperatureC => "temperature_C",
            Self::TemperatureF => "temperature_F",
            Self::Oxygen => "oxygen_mg_l",
            Self::OxygenPercent => "oxygen_percent",
            Self::SpecificConductance => "specific_conductance_us_cm",
            Self::Conductivity => "conductivity_us_cm",
            Self::Solids => "solids_mg_l",
            Self::Suspended => "suspended_mg_l",
        }
    }

    /// The column of a name, in any case.
    pub fn parse(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|c| c.name().eq_ignore_ascii_case(name.trim()))
    }

    fn is_place(self) -> bool {
        matches!(self, Self::DepthM | Self::DepthFt | Self::ElevationM | Self::ElevationFt)
    }

    fn is_temperature(self) -> bool {
        matches!(self, Self::TemperatureC | Self::TemperatureF)
    }

    fn put(self, row: &mut RawRow, value: f64) {
        match self {
            Self::DepthM => row.depth_m = Some(value),
            Self::DepthFt => row.depth_m = Some(Unit::Foot.to_si(value)),
            Self::ElevationM => row.elevation_m = Some(value),
            Self::ElevationFt => row.elevation_m = Some(Unit::Foot.to_si(value)),
            Self::TemperatureC => row.temperature_c = Some(value),
            Self::TemperatureF => row.temperature_c = Some(Unit::Fahrenheit.to_si(value)),
            Self::Oxygen => row.oxygen_mg_l = Some(value),
            Self::OxygenPercent => row.oxygen_percent = Some(value),
            Self::SpecificConductance => row.specific_us_cm = Some(value),
            Self::Conductivity => row.conductivity_us_cm = Some(value),
            Self::Solids => row.solids_mg_l = Some(value),
            Self::Suspended => row.suspended_mg_l = Some(value),
        }
    }
}

/// Values that loggers write for "no reading" (common practice, no source).
pub(super) const SENTINELS: [f64; 9] =
    [-99.0, -99.9, -99.99, -999.0, -999.9, -999.99, -9999.0, -9999.9, -99999.0];

/// Whether a number is one that loggers write for "no reading".
pub(super) fn is_sentinel(value: f64) -> bool {
    SENTINELS.iter().any(|s| (s - value).abs() < 1e-9)
}

/// What the command line or the site file says of a cast that the cast itself may lack.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Told {
    /// When it was taken, as written.
    pub taken: Option<String>,
    /// Pool elevation, m.
    pub pool_m: Option<f64>,
}

/// Reads the text of a cast against its site. The list holds every problem and note with file and line; the cast
/// is `None` when any refuses.
pub fn cast(source: &Source, site: &Site, told: &Told) -> (Option<Raw>, Vec<Problem>) {
    let mut problems: Vec<Problem> = source.note().into_iter().collect();
    let raw = read(source, site, told, &mut problems);
    for p in &mut problems {
        p.place.file.get_or_insert_with(|| source.name.clone());
    }
    if crate::problem::any_refused(&problems) { (None, problems) } else { (raw, problems) }
}

fn known(site: &Site, name: &str) -> Option<Column> {
    let mapped = site.columns.iter().find(|(from, _)| from.trim().eq_ignore_ascii_case(name.trim()));
    Column::parse(mapped.map_or(name, |(_, to)| to.as_str()))
}

fn read(source: &Source, site: &Site, told: &Told, problems: &mut Vec<Problem>) -> Option<Raw> {
    let is_header = |cells: &[String]| {
        let found: Vec<Column> = cells.iter().filter_map(|c| known(site, c)).collect();
        found.iter().any(|c| c.is_place()) && found.iter().any(|c| c.is_temperature())
    };
    let table = match Table::parse_with(&source.text, &is_header) {
        Ok(table) => table,
        Err(mut found) => {
            if found.iter().all(|p| p.kind == "no-header") {
                found = vec![no_header(source, site)];
            }
            problems.append(&mut found);
            return None;
        }
    };
    problems.extend(table.notes.iter().cloned());
    let columns: Vec<Option<Column>> = table.columns.iter().map(|c| known(site, c)).collect();
    twice(&table, &columns, problems);
    let unused: Vec<&str> = table
        .columns
        .iter()
        .zip(&columns)
        .filter(|(name, column)| column.is_none() && !name.is_empty())
        .map(|(name, _)| name.as_str())
        .collect();
    if !unused.is_empty() {
        problems.push(
            Problem::note("column-unused", format!("columns not used: {}", unused.join(", ")))
                .on_line(table.header_line),
        );
    }
    let rows = rows(&table, &columns, problems);
    let (own_taken, own_pool_m) = meta(&table, site, problems);
    let told_taken = told.taken.as_deref().and_then(|text| match parse_time(text, site.offset) {
        Ok(time) => Some(time),
        Err(words) => {
            problems.push(Problem::refused("time", words, TIME_CURE));
            None
        }
    });
    let mut otherwise = |words: String| {
        let cure = "keep the right one in the file, and leave it out of --taken and of `casts` in site.yaml";
        problems.push(Problem::flag("told-otherwise", words, cure));
    };
    if let (Some(own), Some(told)) = (own_taken, told_taken)
        && own != told
    {
        otherwise(format!("the cast says it was taken {own}; told otherwise, {told} is used"));
    }
    if let (Some(own), Some(told)) = (own_pool_m, told.pool_m)
        && (own - told).abs() > 1e-9
    {
        otherwise(format!(
            "the cast says the pool stood at {}; told otherwise, {} is used",
            say::m(own, 2),
            say::m(told, 2)
        ));
    }
    Some(Raw {
        file: source.name.clone(),
        taken: told_taken.or(own_taken),
        pool_m: told.pool_m.or(own_pool_m),
        rows,
    })
}

fn no_header(source: &Source, site: &Site) -> Problem {
    let first = source
        .text
        .lines()
        .enumerate()
        .find(|(_, l)| !l.trim().is_empty() && !l.trim_start().starts_with('#'));
    let names: Vec<&str> = Column::ALL.iter().map(|c| c.name()).collect();
    let cure = format!(
        "name a depth or elevation and a temperature with their units ({}), or map the logger's names under `columns` in site.yaml",
        names.join(", ")
    );
    let Some((at, line)) = first else {
        return Problem::refused("no-header", "the file holds no table", cure);
    };
    let cells: Vec<&str> = line.split([',', ';', '\t']).map(str::trim).collect();
    let has = |test: &dyn Fn(Column) -> bool| cells.iter().any(|c| known(site, c).is_some_and(test));
    let words = match (has(&Column::is_place), has(&Column::is_temperature)) {
        (false, true) => "no column is a depth or elevation with its unit",
        (true, false) => "no column is a temperature with its unit",
        _ => "no line names a depth or elevation and a temperature with their units",
    };
    Problem::refused("no-header", words, cure).on_line(at + 1)
}

/// A quantity given by two columns cannot be chosen for the user; depth beside elevation, and percent beside
/// mg/L, are different readings and may stand together.
fn twice(table: &Table, columns: &[Option<Column>], problems: &mut Vec<Problem>) {
    let clash = |a: Column, b: Column| columns.contains(&Some(a)) && columns.contains(&Some(b));
    for (a, b) in [
        (Column::DepthM, Column::DepthFt),
        (Column::ElevationM, Column::ElevationFt),
        (Column::TemperatureC, Column::TemperatureF),
    ] {
        if clash(a, b) {
            problems.push(
                Problem::refused(
                    "column-twice",
                    format!("both {} and {} are given", a.name(), b.name()),
                    "keep one of the two columns",
                )
                .on_line(table.header_line),
            );
        }
    }
    for column in Column::ALL {
        if columns.iter().filter(|c| **c == Some(column)).count() > 1 {
            problems.push(
                Problem::refused(
                    "column-twice",
                    format!("two columns are read as {}", column.name()),
                    "keep one of them under `columns` in site.yaml",
                )
                .on_line(table.header_line),
            );
        }
    }
}

/// The rows in the order of the file, and what is to be said of them: cells that cannot be read, cells that hold
/// no reading, readings that hang nowhere.
fn rows(table: &Table, columns: &[Option<Column>], problems: &mut Vec<Problem>) -> Vec<RawRow> {
    let mut rows = Vec::with_capacity(table.len());
    let (mut absent, mut adrift) = (Vec::new(), Vec::new());
    for r in 0..table.len() {
        let line = table.line(r).unwrap_or(0);
        let mut row = RawRow { line, ..RawRow::default() };
        for (c, column) in columns.iter().enumerate() {
            let Some(column) = column else { continue };
            match table.number(r, c) {
                Ok(Some(value)) if is_sentinel(value) => absent.push(line),
                Ok(Some(value)) => column.put(&mut row, value),
                Ok(None) => {}
                Err(problem) => problems.push(problem),
            }
        }
        let placed = row.depth_m.is_some() || row.elevation_m.is_some();
        if !placed && row != (RawRow { line, ..RawRow::default() }) {
            adrift.push(line);
        }
        rows.push(row);
    }
    if let Some(first) = absent.first() {
        let words = format!("{} cell(s) such as -999 read as no reading", absent.len());
        problems.push(Problem::note("no-reading", words).on_line(*first));
    }
    if let Some(first) = adrift.first() {
        let words = format!("{} row(s) have readings but no depth or elevation; left out", adrift.len());
        problems.push(Problem::flag("no-place", words, "give their depth").on_line(*first));
    }
    rows
}

type Meta = (Option<DateTime<FixedOffset>>, Option<f64>);

fn meta(table: &Table, site: &Site, problems: &mut Vec<Problem>) -> Meta {
    let (mut taken, mut pool) = (None, None);
    let mut said: Vec<(String, &str, usize)> = Vec::new();
    for (key, value, line) in table.meta() {
        if !["taken", "pool", "datum"].contains(&key.as_str()) {
            continue;
        }
        if let Some((_, _, first)) = said.iter().find(|(k, v, _)| *k == key && *v != value) {
            let words = format!("`# {key}` says another thing than on line {first}");
            problems.push(Problem::refused("said-twice", words, "keep the right one").on_line(line));
        }
        said.push((key.clone(), value, line));
        match key.as_str() {
            "taken" => match parse_time(value, site.offset) {
                Ok(time) => taken = Some(time),
                Err(words) => problems.push(Problem::refused("time", words, TIME_CURE).on_line(line)),
            },
            "pool" => match site.units.parse(value, Dimension::Length) {
                Ok(elevation) => pool = Some(elevation),
                Err(error) => problems.push(
                    Problem::refused(
                        "pool",
                        format!("the pool elevation: {error}"),
                        "write `# pool: 1443.2 ft`",
                    )
                    .on_line(line),
                ),
            },
            "datum" => {
                if let Err(error) = Datum::new(value).and_then(|datum| site.datum.agree(&datum)) {
                    problems.push(
                        Problem::refused("datum", error.to_string(), "convert the elevations of the cast")
                            .on_line(line),
                    );
                }
            }
            _ => {}
        }
    }
    (taken, pool)
}

/// What to write instead of a time that cannot be read.
pub const TIME_CURE: &str =
    "write 2025-07-14T10:30 (local in the site's offset) or 2025-07-14T10:30:00-07:00";

/// A moment as written: RFC 3339, or local in the site's offset with or without seconds, or a date alone, which
/// counts as its noon.
///
/// # Errors
/// A sentence that names what was written.
pub fn parse_time(text: &str, offset: FixedOffset) -> Result<DateTime<FixedOffset>, String> {
    let text = text.trim();
    // seconds may be left out beside an offset too; `Z` is the offset zero
    let zoned = text.strip_suffix('Z').map_or_else(|| text.to_owned(), |rest| format!("{rest}+00:00"));
    let told = DateTime::parse_from_rfc3339(text)
        .or_else(|_| DateTime::parse_from_str(&zoned, "%Y-%m-%dT%H:%M%:z"))
        .map(|time| time.with_timezone(&offset));
    let formats = ["%Y-%m-%dT%H:%M:%S", "%Y-%m-%dT%H:%M", "%Y-%m-%d %H:%M:%S", "%Y-%m-%d %H:%M"];
    let local = || formats.iter().find_map(|f| NaiveDateTime::parse_from_str(text, f).ok());
    let noon = || {
        let date = NaiveDate::parse_from_str(text, "%Y-%m-%d").ok()?;
        Some(date.and_time(NaiveTime::from_hms_opt(12, 0, 0)?))
    };
    told.ok()
        .or_else(|| local().or_else(noon)?.and_local_timezone(offset).single())
        .filter(|time| YEARS.contains(&time.year()))
        .ok_or_else(|| format!("`{text}` is not a date and time of our days"))
}

/// A day as written: year, month and day.
///
/// # Errors
/// A problem that names what was written.
pub(super) fn parse_date(text: &str) -> Result<NaiveDate, Problem> {
    let text = text.trim();
    let date = NaiveDate::parse_from_str(text, "%Y-%m-%d").ok();
    date.filter(|date| YEARS.contains(&date.year())).ok_or_else(|| {
        let short: String = text.chars().take(40).collect();
        Problem::refused(
            "time",
            format!("`{short}` is not a date of our days"),
            "write YYYY-MM-DD, such as 2025-07-14",
        )
    })
}

/// Years a cast or a decision can be of (choice): others are slips of the pen.
pub(super) const YEARS: std::ops::RangeInclusive<i32> = 1900..=2200;
