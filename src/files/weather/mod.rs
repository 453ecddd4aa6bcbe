//! Weather as a station or a forecast wrote it, by the hour or by the day.

mod columns;
mod header;
mod rows;

use chrono::{DateTime, FixedOffset};

use crate::problem::{Problem, any_refused};
use crate::site::Site;
use crate::units::{Dimension, say};
use crate::weather::{STATION_HEIGHT_M, Weather};

use super::cast::{TIME_CURE, parse_time};
use super::table::Table;
use super::text::Source;

pub use columns::Column;
use columns::Told;

/// Heights at which wind is measured, m (choice).
const WIND_HEIGHTS_M: std::ops::RangeInclusive<f64> = 0.5..=200.0;

/// Reads a weather file. The list holds everything said of it; the weather is `None` when anything refuses it.
pub fn weather(source: &Source, site: &Site) -> (Option<Weather>, Vec<Problem>) {
    let mut problems: Vec<Problem> = source.note().into_iter().collect();
    let weather = read(source, site, &mut problems);
    for p in &mut problems {
        p.place.file.get_or_insert_with(|| source.name.clone());
    }
    if any_refused(&problems) { (None, problems) } else { (weather, problems) }
}

fn read(source: &Source, site: &Site, problems: &mut Vec<Problem>) -> Option<Weather> {
    let is_header = |cells: &[String]| {
        let has = |told| cells.iter().filter_map(|c| Column::parse(c)).any(|c| c.told() == told);
        has(Told::When) && has(Told::Air)
    };
    let table = Table::of(&source.text, &is_header, no_header, problems)?;
    let columns = header::columns(&table, problems);
    let (height_m, forecast_from) = meta(&table, site, problems);
    if any_refused(problems) {
        return None;
    }
    let height_m = height_m.unwrap_or_else(|| {
        let words = format!(
            "no `# wind height:` is given; the wind is taken as measured at {}",
            say::m(STATION_HEIGHT_M, 0)
        );
        problems.push(Problem::note("wind-height", words).on_line(table.header_line));
        STATION_HEIGHT_M
    });
    let weather = rows::weather(&table, &columns, site, height_m, problems);
    Some(Weather { forecast_from, ..weather })
}

fn no_header() -> Problem {
    let names: Vec<&str> = Column::ALL.iter().map(|c| c.name()).collect();
    let words = "no line names a time or a date and the air temperature with its unit";
    Problem::refused("no-header", words, format!("use {}", names.join(", ")))
}

type Meta = (Option<f64>, Option<DateTime<FixedOffset>>);

/// Height of the wind and where the forecast begins, from the comments.
fn meta(table: &Table, site: &Site, problems: &mut Vec<Problem>) -> Meta {
    let (mut height, mut forecast) = (None, None);
    let mut said: Vec<(String, &str, usize)> = Vec::new();
    for (key, value, line) in table.meta() {
        if !["wind height", "forecast from"].contains(&key.as_str()) {
            continue;
        }
        if let Some((_, _, first)) = said.iter().find(|(k, v, _)| *k == key && *v != value) {
            let words = format!("`# {key}` says another thing than on line {first}");
            problems.push(Problem::refused("said-twice", words, "keep the right one").on_line(line));
        }
        said.push((key.clone(), value, line));
        if key == "forecast from" {
            match parse_time(value, site.offset) {
                Ok(time) => forecast = Some(time),
                Err(words) => problems.push(Problem::refused("time", words, TIME_CURE).on_line(line)),
            }
            continue;
        }
        let words = match site.units.parse(value, Dimension::Length) {
            Ok(metres) if WIND_HEIGHTS_M.contains(&metres) => {
                height = Some(metres);
                continue;
            }
            Ok(metres) => format!("wind is not measured {} above the ground", say::m(metres, 1)),
            Err(error) => format!("the wind height: {error}"),
        };
        problems.push(Problem::refused("wind-height", words, "write `# wind height: 10 m`").on_line(line));
    }
    (height, forecast)
}
