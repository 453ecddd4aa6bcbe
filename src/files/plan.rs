//! A plan of the season into a raw plan: the pool or the release of its days, what flows in, outages.

use crate::problem::{Problem, any_refused};
use crate::season::{Plan, RawPlan, RawPlanRow};
use crate::site::Site;
use crate::units::Unit;
use crate::water;

use super::cast::{is_sentinel, parse_date};
use super::table::{MOST_PROBLEMS, Table};
use super::text::Source;

/// A column a plan can have.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Column {
    /// Day.
    Date,
    /// Pool at its end, m.
    PoolM,
    /// Pool at its end, ft.
    PoolFt,
    /// Required release, m3/s.
    ReleaseM3s,
    /// Required release, cubic feet per second.
    ReleaseCfs,
    /// Inflow, m3/s.
    InflowM3s,
    /// Inflow, cubic feet per second.
    InflowCfs,
    /// Temperature of the inflow, C.
    InflowC,
    /// Temperature of the inflow, F.
    InflowF,
    /// Oxygen of the inflow, mg/L.
    Oxygen,
    /// Oxygen of the inflow, percent of saturation.
    OxygenPercent,
    /// Dissolved solids of the inflow, mg/L.
    Solids,
    /// Suspended solids of the inflow, mg/L.
    Suspended,
}

impl Column {
    /// Every column.
    pub const ALL: [Self; 13] = [
        Self::Date,
        Self::PoolM,
        Self::PoolFt,
        Self::ReleaseM3s,
        Self::ReleaseCfs,
        Self::InflowM3s,
        Self::InflowCfs,
        Self::InflowC,
        Self::InflowF,
        Self::Oxygen,
        Self::OxygenPercent,
        Self::Solids,
        Self::Suspended,
    ];

    /// Its name in a header; any case is read.
    pub fn name(self) -> &'static str {
        match self {
            Self::Date => "date",
            Self::PoolM => "pool_m",
            Self::PoolFt => "pool_ft",
            Self::ReleaseM3s => "release_m3s",
            Self::ReleaseCfs => "release_cfs",
            Self::InflowM3s => "inflow_m3s",
            Self::InflowCfs => "inflow_cfs",
            Self::InflowC => "inflow_temperature_C",
            Self::InflowF => "inflow_temperature_F",
            Self::Oxygen => "inflow_oxygen_mg_l",
            Self::OxygenPercent => "inflow_oxygen_percent",
            Self::Solids => "inflow_solids_mg_l",
            Self::Suspended => "inflow_suspended_mg_l",
        }
    }

    /// The column of a name, in any case.
    pub fn parse(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|c| c.name().eq_ignore_ascii_case(name.trim()))
    }
}

/// Columns that tell one quantity; of each group a plan may have one.
const GROUPS: [&[Column]; 8] = [
    &[Column::Date],
    &[Column::PoolM, Column::PoolFt],
    &[Column::ReleaseM3s, Column::ReleaseCfs],
    &[Column::InflowM3s, Column::InflowCfs],
    &[Column::InflowC, Column::InflowF],
    &[Column::Oxygen, Column::OxygenPercent],
    &[Column::Solids],
    &[Column::Suspended],
];

/// Reads and checks a plan. The list holds everything said of it; the plan is `None` when anything refuses it.
pub fn plan(source: &Source, site: &Site) -> (Option<Plan>, Vec<Problem>) {
    let mut problems: Vec<Problem> = source.note().into_iter().collect();
    let raw = read(source, site, &mut problems);
    let mut plan = None;
    if let Some(raw) = raw {
        let (checked, found) = Plan::check(&raw, site);
        problems.extend(found);
        plan = checked;
    }
    problems.sort_by_key(|p| p.place.line.unwrap_or(0));
    for p in &mut problems {
        p.place.file.get_or_insert_with(|| source.name.clone());
    }
    if any_refused(&problems) {
        return (None, problems);
    }
    if let Some(plan) = &mut plan {
        plan.notes.clone_from(&problems);
    }
    (plan, problems)
}

fn read(source: &Source, site: &Site, problems: &mut Vec<Problem>) -> Option<RawPlan> {
    let is_header = |cells: &[String]| {
        let found: Vec<Column> = cells.iter().filter_map(|c| Column::parse(c)).collect();
        found.contains(&Column::Date) && found.len() > 1
    };
    let table = Table::of(&source.text, &is_header, no_header, problems)?;
    let columns: Vec<Option<Column>> = table.columns.iter().map(|c| Column::parse(c)).collect();
    if !header(&table, &columns, problems) {
        return None;
    }
    let has = |group: &[Column]| columns.iter().flatten().any(|column| group.contains(column));
    let mut raw = RawPlan {
        file: source.name.clone(),
        by_pool: has(&[Column::PoolM, Column::PoolFt]),
        by_release: has(&[Column::ReleaseM3s, Column::ReleaseCfs]),
        ..RawPlan::default()
    };
    meta(&table, &mut raw, problems);
    raw.rows = rows(&table, &columns, site, problems);
    Some(raw)
}

fn no_header() -> Problem {
    let names: Vec<&str> = Column::ALL.iter().map(|c| c.name()).collect();
    let words = "no line names a date and what is planned, with its unit";
    Problem::refused("no-header", words, format!("use {}", names.join(", ")))
}

/// Whether the columns tell all that a plan needs, each once.
fn header(table: &Table, columns: &[Option<Column>], problems: &mut Vec<Problem>) -> bool {
    let mut sound = true;
    let mut refuse = |kind, words: String, cure: &str| {
        problems.push(Problem::refused(kind, words, cure).on_line(table.header_line));
        sound = false;
    };
    let found: Vec<Column> = columns.iter().flatten().copied().collect();
    for group in GROUPS {
        let of: Vec<&str> = found.iter().filter(|c| group.contains(c)).map(|c| c.name()).collect();
        if let [first, second, ..] = of.as_slice() {
            refuse(
                "column-twice",
                format!("both {first} and {second} are given"),
                "keep one of the two columns",
            );
        }
    }
    for (group, words, cure) in [
        (
            &[Column::InflowM3s, Column::InflowCfs][..],
            "no column tells the inflow",
            "add inflow_m3s or inflow_cfs",
        ),
        (
            &[Column::InflowC, Column::InflowF],
            "no column tells the temperature of the inflow",
            "add inflow_temperature_C or inflow_temperature_F",
        ),
        (
            &[Column::PoolM, Column::PoolFt, Column::ReleaseM3s, Column::ReleaseCfs],
            "no column tells the pool or the release",
            "add pool_m, pool_ft, release_m3s or release_cfs",
        ),
    ] {
        if !found.iter().any(|c| group.contains(c)) {
            refuse("no-column", words.to_owned(), cure);
        }
    }
    let unused = table.columns.iter().zip(columns).filter(|(name, of)| of.is_none() && !name.is_empty());
    let unused: Vec<&str> = unused.map(|(name, _)| name.as_str()).collect();
    if !unused.is_empty() {
        let words = format!("columns not used: {}", unused.join(", "));
        problems.push(Problem::note("column-unused", words).on_line(table.header_line));
    }
    sound
}

/// Name and outages, from the comments.
fn meta(table: &Table, raw: &mut RawPlan, problems: &mut Vec<Problem>) {
    for (key, value, line) in table.meta() {
        match key.as_str() {
            "outage" => raw.outages.push((line, value.to_owned())),
            "name" if value.is_empty() => {}
            "name" if raw.name.as_deref().is_some_and(|name| name != value) => {
                let words = "`# name` says another thing than above";
                problems.push(Problem::refused("said-twice", words, "keep the right one").on_line(line));
            }
            "name" => raw.name = Some(value.to_owned()),
            other if other.starts_with("out") && !other.contains(char::is_whitespace) => {
                let short: String = other.chars().take(40).collect();
                let words = format!("`# {short}:` is not read, and no outage comes of it");
                let cure = "write `# outage: N2, 2026-09-01, 2026-10-15, hoist repair`, a line for each";
                problems.push(Problem::flag("plan-line", words, cure).on_line(line));
            }
            _ => {}
        }
    }
}

fn rows(
    table: &Table,
    columns: &[Option<Column>],
    site: &Site,
    problems: &mut Vec<Problem>,
) -> Vec<RawPlanRow> {
    let mut out = Vec::with_capacity(table.len());
    let mut beyond = 0_usize;
    let mut room = MOST_PROBLEMS;
    for r in 0..table.len() {
        let mut row = RawPlanRow { line: table.line(r).unwrap_or(0), ..RawPlanRow::default() };
        let mut percent = None;
        for (c, column) in columns.iter().enumerate() {
            let Some(column) = column else { continue };
            match cell(table, r, c, *column, &mut row) {
                Ok(None) => {}
                Ok(Some(share)) => percent = Some(share),
                Err(problem) => {
                    row.unread = true;
                    if room == 0 {
                        beyond += 1;
                    } else {
                        room -= 1;
                        problems.push(problem);
                    }
                }
            }
        }
        if let (Some(percent), Some(water_c)) = (percent, row.inflow_c) {
            row.inflow_mg_l = Some(oxygen_mg_l(percent, water_c, site));
        }
        out.push(row);
    }
    if beyond > 0 {
        let words = format!("problems on further lines, not shown: {beyond}");
        problems.push(Problem::refused("more", words, "cure the ones above first"));
    }
    out
}

/// Oxygen of an inflow told in percent, mg/L: fresh water at the height of the full pool (choice).
fn oxygen_mg_l(percent: f64, water_c: f64, site: &Site) -> f64 {
    let pressure_atm = site.surface_pressure_atm(site.pool.full_m);
    water::oxygen_from_percent_mg_l(percent, water::saturation_mg_l(water_c, 0.0, pressure_atm))
}

/// Puts one cell into its row; a percentage of oxygen comes back, as it needs the temperature beside it.
fn cell(
    table: &Table,
    r: usize,
    c: usize,
    column: Column,
    row: &mut RawPlanRow,
) -> Result<Option<f64>, Problem> {
    if column == Column::Date {
        let date = parse_date(table.cell(r, c).unwrap_or_default());
        row.date = Some(date.map_err(|problem| problem.on_line(row.line).at(column.name()))?);
        return Ok(None);
    }
    let value = table.number(r, c)?;
    if value.is_some_and(is_sentinel) {
        let words = "a plan has no cell such as -999";
        let cure = "write what is planned, or leave the whole row out";
        return Err(Problem::refused("not-a-number", words, cure).on_line(row.line).at(column.name()));
    }
    let in_unit = |unit: Unit| value.map(|v| unit.to_si(v));
    match column {
        Column::Date => {}
        Column::PoolM => row.pool_m = value,
        Column::PoolFt => row.pool_m = in_unit(Unit::Foot),
        Column::ReleaseM3s => row.release_m3s = value,
        Column::ReleaseCfs => row.release_m3s = in_unit(Unit::CubicFootPerSecond),
        Column::InflowM3s => row.inflow_m3s = value,
        Column::InflowCfs => row.inflow_m3s = in_unit(Unit::CubicFootPerSecond),
        Column::InflowC => row.inflow_c = value,
        Column::InflowF => row.inflow_c = in_unit(Unit::Fahrenheit),
        Column::Oxygen => row.inflow_mg_l = value,
        Column::OxygenPercent => return Ok(value),
        Column::Solids => row.inflow_solids_mg_l = value,
        Column::Suspended => row.inflow_suspended_mg_l = value,
    }
    Ok(None)
}
