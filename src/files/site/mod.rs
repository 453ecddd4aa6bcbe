//! `site.yaml` into a raw site: every unknown key, wrong type and unit at once, each with its line.

mod learned;
mod limits;
mod order_texts;
mod outlets;
mod river;
mod season;
mod targets;

use chrono::{Offset, Utc};

use crate::problem::{Problem, any_refused};
use crate::site::{ListedCast, Raw, RawPool, RawRow, Site, WidthSource};
use crate::units::{Dimension, Folder, System};

use crate::files::cast::{Column, TIME_CURE, parse_time};
use crate::files::cursor::{Map, Scalar, Value, Walk};
use crate::files::station;
use crate::files::yaml::{Document, Node};

/// What a site file gave.
#[derive(Debug, Clone)]
pub struct Read {
    /// The site; `None` when any problem refuses it.
    pub site: Option<Site>,
    /// Every problem, flag and note with file and line.
    pub problems: Vec<Problem>,
    /// The units its user reads, known even where the site is refused.
    pub system: System,
}

/// Reads and checks the text of a site file. The list holds every problem, flag and note with file and line;
/// the site is `None` when any refuses.
pub fn site(text: &str, file: &str) -> Read {
    let document = match Document::parse(text) {
        Ok(document) => document,
        Err(problem) => {
            return Read { site: None, problems: vec![problem.in_file(file)], system: System::default() };
        }
    };
    let walk = Walk::new(&document);
    let raw = walk.root().map().map(raw_site);
    let mut problems = walk.problems(file);
    let system = raw.as_ref().map_or_else(System::default, |raw| raw.units.system());
    let checked = raw.and_then(|raw| {
        let (site, mut found) = Site::check(&raw);
        document.locate(&mut found, file);
        problems.extend(found);
        site
    });
    let site = if any_refused(&problems) { None } else { checked };
    problems.sort_by_key(|p| p.place.line.unwrap_or(0));
    Read { site, problems, system }
}

/// The folder's units and the quantities read in them.
struct In {
    units: Folder,
}

impl In {
    fn quantity(&self, value: &Value, dimension: Dimension) -> Option<f64> {
        let (si, written) = match value.scalar()? {
            Scalar::Number(number) => {
                let unit = self.units.unit(dimension);
                (self.units.to_si(number, dimension), format!("{number:e} {unit}"))
            }
            Scalar::Text(text) => match self.units.parse(text, dimension) {
                Ok(si) => (si, text.to_owned()),
                Err(error) => {
                    value.report(Problem::refused("quantity", error.to_string(), ""));
                    return None;
                }
            },
        };
        if dimension.is_plausible(si) {
            return Some(si);
        }
        let words = format!("{written} is too large a {dimension}");
        value.report(Problem::refused("quantity", words, "correct the figure"));
        None
    }

    fn optional(&self, map: &Map, key: &'static str, dimension: Dimension) -> Option<f64> {
        self.quantity(&map.optional(key)?, dimension)
    }

    fn required(&self, map: &Map, key: &'static str, dimension: Dimension) -> Option<f64> {
        self.quantity(&map.required(key)?, dimension)
    }

    /// Sets a figure that has a default.
    fn set(&self, map: &Map, key: &'static str, dimension: Dimension, figure: &mut f64) {
        if let Some(value) = self.optional(map, key, dimension) {
            *figure = value;
        }
    }
}

fn text(map: &Map, key: &'static str) -> Option<String> {
    map.optional(key).and_then(|v| v.text().map(str::to_owned))
}

fn number(map: &Map, key: &'static str) -> Option<f64> {
    map.optional(key).and_then(|v| v.number())
}

fn set_number(map: &Map, key: &'static str, figure: &mut f64) {
    if let Some(value) = number(map, key) {
        *figure = value;
    }
}

/// Does something with the map under a key, and ends it.
fn within<'d>(map: &Map<'d>, key: &'static str, mut read: impl FnMut(&Map<'d>)) {
    if let Some(inner) = map.optional(key).and_then(|v| v.map()) {
        read(&inner);
        inner.finish();
    }
}

/// Reads each map of the list under a key.
fn each<'d, T>(map: &Map<'d>, key: &'static str, mut read: impl FnMut(&Map<'d>) -> T) -> Vec<T> {
    map.optional(key)
        .and_then(|v| v.list())
        .unwrap_or_default()
        .iter()
        .filter_map(|value| {
            let inner = value.map()?;
            let out = read(&inner);
            inner.finish();
            Some(out)
        })
        .collect()
}

fn raw_site(map: Map) -> Raw {
    let mut raw = Raw { units: units(&map), ..Raw::default() };
    let read = In { units: raw.units };
    raw.name = map.required("name").and_then(|v| v.text().map(str::to_owned));
    river::river(&read, &map, &mut raw);
    raw.datum = text(&map, "datum");
    raw.utc_offset = text(&map, "utc_offset");
    within(&map, "place", |place| {
        raw.altitude_m = read.optional(place, "altitude", Dimension::Length);
        raw.latitude_deg = number(place, "latitude");
    });
    if let Some(inner) = map.required("pool").and_then(|v| v.map()) {
        raw.pool = pool(&read, &inner);
        inner.finish();
    }
    raw.wells = each(&map, "wells", |m| outlets::well(&read, m));
    // asked for as required first, so that its absence is told
    if map.required("outlets").is_some() {
        raw.outlets = each(&map, "outlets", |m| outlets::outlet(&read, m));
    }
    within(&map, "release", |m| {
        raw.release_min_m3s = read.optional(m, "min", Dimension::Flow);
        raw.release_max_m3s = read.optional(m, "max", Dimension::Flow);
        raw.release_wanted_m3s = read.optional(m, "wanted", Dimension::Flow);
    });
    within(&map, "now", |m| raw.now = limits::now(&read, m, &raw.outlets));
    raw.inflow_m3s = read.optional(&map, "inflow", Dimension::Flow);
    raw.blocks = limits::blocks(&read, &map);
    within(&map, "bins", |m| limits::bins(&read, m, &mut raw.bins));
    within(&map, "limits", |m| raw.limits = limits::limits(&read, m));
    raw.targets = each(&map, "targets", |m| targets::target(&read, m));
    raw.year_type = text(&map, "year_type");
    within(&map, "events", |m| raw.events = targets::events(m));
    raw.cold_water_c = map
        .optional("cold_water")
        .and_then(|v| v.list())
        .unwrap_or_default()
        .iter()
        .filter_map(|v| read.quantity(v, Dimension::Temperature))
        .collect();
    within(&map, "water", |m| {
        set_number(m, "tds_factor", &mut raw.water.tds_per_us_cm);
        set_number(m, "solids_density", &mut raw.water.solids_kg_m3);
    });
    within(&map, "checks", |m| checks(&read, m, &mut raw));
    within(&map, "band", |m| band(&read, m, &mut raw));
    within(&map, "learned", |m| raw.learned = learned::learned(&read, m));
    within(&map, "learning", |m| {
        raw.learning_days = whole(m, "window_days").map(|days| days as u64);
    });
    within(&map, "coverage", |m| {
        raw.coverage.hours = whole(m, "hours").unwrap_or(raw.coverage.hours);
        raw.coverage.days = whole(m, "days").unwrap_or(raw.coverage.days);
    });
    within(&map, "columns", |m| {
        raw.columns =
            m.entries().iter().filter_map(|(from, to)| Some(((*from).to_owned(), column(to)?))).collect();
    });
    raw.casts = each(&map, "casts", |m| ListedCast {
        file: m.required("file").and_then(|v| v.text()).unwrap_or_default().to_owned(),
        taken: m.optional("taken").and_then(|v| taken(&v)),
        pool_m: read.optional(m, "pool", Dimension::Length),
    });
    within(&map, "season", |m| raw.season = season::season(&read, m));
    within(&map, "order", |m| raw.order = order_texts::texts(m));
    raw.demonstration = map.optional("demonstration").and_then(|v| v.boolean()).unwrap_or(false);
    map.finish();
    raw
}

/// When a listed cast was taken. It is read once the offset is known; here only that such a moment exists.
fn taken(value: &Value) -> Option<String> {
    let text = value.text()?;
    if let Err(words) = parse_time(text, Utc.fix()) {
        value.report(Problem::refused("time", words, TIME_CURE));
    }
    Some(text.to_owned())
}

/// One of our column names, as a logger's header is mapped to it.
fn column(value: &Value) -> Option<String> {
    let name = value.text()?;
    if Column::parse(name).is_none() && station::Column::parse(name).is_none() {
        let mut known: Vec<&str> = Column::ALL.iter().map(|c| c.name()).collect();
        known.extend(station::Column::ALL.iter().map(|c| c.name()).filter(|n| Column::parse(n).is_none()));
        value.report(Problem::refused(
            "column",
            format!("`{name}` is not a column of a cast or a station"),
            format!("use one of {}", known.join(", ")),
        ));
    }
    Some(name.to_owned())
}

fn units(map: &Map) -> Folder {
    let mut folder = Folder::default();
    let Some(inner) = map.required("units").and_then(|v| v.map()) else { return folder };
    let keys = [
        ("length", Dimension::Length),
        ("area", Dimension::Area),
        ("volume", Dimension::Volume),
        ("flow", Dimension::Flow),
        ("temperature", Dimension::Temperature),
    ];
    for (key, dimension) in keys {
        let Some(value) = inner.optional(key) else { continue };
        let Some(word) = value.text() else { continue };
        if let Err(error) = folder.set(dimension, word) {
            value.report(Problem::refused("unit", error.to_string(), ""));
        }
    }
    inner.finish();
    folder
}

fn pool(read: &In, map: &Map) -> RawPool {
    let width = match map.optional("width").map(|v| (v.text(), v)) {
        Some((Some("from_area"), _)) => WidthSource::FromArea,
        Some((Some(_), value)) => {
            value.report(Problem::refused(
                "width",
                "the pool's width can only be `from_area`",
                "give widths in the table's fourth column",
            ));
            WidthSource::Table
        }
        _ => WidthSource::Table,
    };
    RawPool {
        bed_m: read.required(map, "bed", Dimension::Length),
        full_m: read.required(map, "full", Dimension::Length),
        table: map
            .required("table")
            .and_then(|v| v.list())
            .unwrap_or_default()
            .iter()
            .filter_map(|row| pool_row(read, row))
            .collect(),
        width,
    }
}

fn pool_row(read: &In, row: &Value) -> Option<RawRow> {
    let cells = row.list()?;
    if !(2..=4).contains(&cells.len()) {
        row.report(Problem::refused(
            "table-row",
            format!("the row holds {} numbers", cells.len()),
            "give [elevation, area, volume], with the width as a fourth if known",
        ));
        return None;
    }
    let cell = |i: usize, dimension| {
        cells.get(i).filter(|v| *v.node() != Node::Null).and_then(|v| read.quantity(v, dimension))
    };
    Some(RawRow {
        elevation_m: cell(0, Dimension::Length)?,
        area_m2: cell(1, Dimension::Area)?,
        volume_m3: cell(2, Dimension::Volume),
        width_m: cell(3, Dimension::Length),
    })
}

fn pair(read: &In, value: &Value, dimensions: [Dimension; 2]) -> Option<(f64, f64)> {
    let cells = value.list()?;
    let [first, second] = cells.as_slice() else {
        value.report(Problem::refused("pair", "two numbers belong here", "write [first, second]"));
        return None;
    };
    Some((read.quantity(first, dimensions[0])?, read.quantity(second, dimensions[1])?))
}

fn checks(read: &In, map: &Map, raw: &mut Raw) {
    let c = &mut raw.checks;
    read.set(map, "gap", Dimension::Length, &mut c.gap_m);
    read.set(map, "extrapolate", Dimension::Length, &mut c.extrapolate_m);
    read.set(map, "spike", Dimension::TemperatureDifference, &mut c.spike_c);
    read.set(map, "spike_oxygen", Dimension::Concentration, &mut c.spike_mg_l);
    if let Some(percent) = read.optional(map, "oxygen_percent", Dimension::Percent) {
        c.oxygen_share = percent / 100.0;
    }
    set_number(map, "ageing_days", &mut c.ageing_days);
    set_number(map, "stale_days", &mut c.stale_days);
    set_number(map, "heat_w_m2", &mut c.heat_w_m2);
    read.set(map, "tailwater", Dimension::TemperatureDifference, &mut c.tailwater_c);
}

fn band(read: &In, map: &Map, raw: &mut Raw) {
    let b = &mut raw.band;
    if let Some(count) = whole(map, "members") {
        b.members = count;
    }
    if let Some(seed) = whole(map, "seed") {
        b.seed = seed as u64;
    }
    read.set(map, "cast", Dimension::TemperatureDifference, &mut b.cast_c);
    read.set(map, "cast_oxygen", Dimension::Concentration, &mut b.cast_mg_l);
    read.set(map, "heave", Dimension::Length, &mut b.heave_m);
    read.set(map, "heave_per_day", Dimension::Length, &mut b.heave_m_per_day);
    read.set(map, "heave_max", Dimension::Length, &mut b.heave_max_m);
    if let Some(percent) = read.optional(map, "flow", Dimension::Percent) {
        b.flow_share = percent / 100.0;
    }
    if let Some(value) = map.optional("zone")
        && let Some(cells) = value.list()
    {
        match cells.iter().map(Value::number).collect::<Option<Vec<f64>>>().as_deref() {
            Some(&[low, high]) => (b.zone_low, b.zone_high) = (low, high),
            Some(_) => {
                value.report(Problem::refused("pair", "two numbers belong here", "write [first, second]"));
            }
            None => {}
        }
    }
    read.set(map, "release", Dimension::TemperatureDifference, &mut b.release_c);
    read.set(map, "release_oxygen", Dimension::Concentration, &mut b.release_mg_l);
}

/// A whole number up to a million under a key.
fn whole(map: &Map, key: &'static str) -> Option<usize> {
    let value = map.optional(key)?;
    let found = value.number().and_then(|n| format!("{n}").parse::<usize>().ok()).filter(|n| *n <= 1_000_000);
    if found.is_none() {
        value.report(Problem::refused(
            "whole-number",
            format!("{key} is not a whole number from 0 to 1000000"),
            "correct the figure",
        ));
    }
    found
}
