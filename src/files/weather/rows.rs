//! Rows of a weather file into airs: moments, gaps, cloud that radiation tells, hours and days.

use std::collections::{BTreeMap, BTreeSet};

use chrono::{DateTime, Datelike, FixedOffset, NaiveDate, TimeDelta, Timelike};

use crate::problem::Problem;
use crate::series::LONGEST_GAP_H;
use crate::site::Site;
use crate::units::say;
use crate::weather::believed::DEW_ABOVE_C;
use crate::weather::{Air, Stand, Weather, sun};

use super::super::cast::{SENTINELS, TIME_CURE, parse_date, parse_time};
use super::super::table::{MOST_PROBLEMS, Table};
use super::columns::{Column, Row};

/// A row with its moment.
struct Dated {
    line: usize,
    /// Moment of hourly weather, noon of daily.
    time: DateTime<FixedOffset>,
    row: Row,
}

/// Keeps the first [`MOST_PROBLEMS`] problems of single rows and counts the rest.
struct Kept<'p> {
    problems: &'p mut Vec<Problem>,
    room: usize,
    beyond: usize,
}

impl Kept<'_> {
    fn say(&mut self, problem: Problem) {
        if self.room == 0 {
            self.beyond += 1;
            return;
        }
        self.room -= 1;
        self.problems.push(problem);
    }

    fn end(self) {
        if self.beyond > 0 {
            let words = format!("problems on further lines, not shown: {}", self.beyond);
            self.problems.push(Problem::refused("more", words, "cure the ones above first"));
        }
    }
}

/// The weather of the rows of a table.
pub(super) fn weather(
    table: &Table,
    columns: &[Option<Column>],
    site: &Site,
    wind_height_m: f64,
    problems: &mut Vec<Problem>,
) -> Weather {
    let hourly = columns.contains(&Some(Column::Time));
    let mut dated = dated(table, columns, site, problems);
    if hourly {
        cloud_of_days(site, &mut dated);
    }
    let (mut lacking, mut assumed, mut damp) = (Vec::new(), Vec::new(), Vec::new());
    let mut airs: BTreeMap<DateTime<FixedOffset>, Air> = BTreeMap::new();
    let (mut twice, mut said) = (Vec::new(), BTreeSet::new());
    let mut kept = Kept { problems, room: MOST_PROBLEMS, beyond: 0 };
    for Dated { line, time, row } in &dated {
        let Some(reading) = row.reading(wind_height_m) else {
            if !row.is_blank() {
                lacking.push(*line);
            }
            continue;
        };
        if row.dew_above_air_c().is_some_and(|above| above > DEW_ABOVE_C) {
            damp.push(*line);
        }
        match reading.air(&stand(site, *time, hourly)) {
            Ok((air, guessed)) => {
                if guessed {
                    assumed.push(*line);
                }
                if airs.insert(*time, air).is_some() {
                    twice.push(*line);
                }
            }
            // the same for every row of the file
            Err(problem) if problem.kind == "no-latitude" => {
                if said.insert(problem.kind) {
                    kept.say(problem.on_line(*line));
                }
            }
            Err(problem) => kept.say(problem.on_line(*line)),
        }
    }
    kept.end();
    let mut flag = |lines: &[usize], kind, words: &str, cure: &str| {
        if let Some(first) = lines.first() {
            problems
                .push(Problem::flag(kind, format!("{} row(s) {words}", lines.len()), cure).on_line(*first));
        }
    };
    let cure = "fill them, or leave the whole row out";
    flag(&lacking, "weather-lacking", "lack the air, its water, the wind or the sky; left out", cure);
    flag(&twice, "weather-twice", "repeat a moment; the last of each is taken", "keep one row for each");
    flag(
        &assumed,
        "cloud-assumed",
        "tell no cloud and no radiation to take it from: 0.5 is assumed",
        "give cloud, or `place: { latitude: 44.1 }`",
    );
    let words = format!("have a dew point over {} above the air", say::dc(DEW_ABOVE_C, 0));
    flag(&damp, "dew-above-air", &words, "check both columns");
    let weather = if hourly { by_hour(airs, problems) } else { by_day(airs) };
    gaps(&weather, problems);
    if weather.days.is_empty() && weather.hours.is_empty() && !crate::problem::any_refused(problems) {
        let words = "no row tells the air, its water, the wind and the sky";
        problems.push(Problem::refused("no-weather", words, "fill the rows").on_line(table.header_line));
    }
    weather
}

/// The rows with a moment, in the order of the file; what cannot be read or believed is told.
fn dated(table: &Table, columns: &[Option<Column>], site: &Site, problems: &mut Vec<Problem>) -> Vec<Dated> {
    let mut out = Vec::with_capacity(table.len());
    let mut absent = Vec::new();
    let mut kept = Kept { problems, room: MOST_PROBLEMS, beyond: 0 };
    for r in 0..table.len() {
        let line = table.line(r).unwrap_or(0);
        let (mut row, mut time) = (Row::default(), None);
        for (c, column) in columns.iter().enumerate() {
            let Some(column) = column else { continue };
            if let Column::Time | Column::Date = column {
                match moment(table.cell(r, c).unwrap_or_default(), *column, site.offset) {
                    Ok(moment) => time = Some(moment),
                    Err(problem) => kept.say(problem.on_line(line).at(column.name())),
                }
                continue;
            }
            match table.number(r, c) {
                Ok(Some(value)) if SENTINELS.iter().any(|s| (s - value).abs() < 1e-9) => absent.push(line),
                Ok(Some(value)) => {
                    let (si, told) = (column.to_si(value), column.told());
                    let (least, most, range) = told.range();
                    if (least..=most).contains(&si) {
                        row.put(told, si);
                    } else {
                        let words = format!("{value} is not {}; {range} is believed", told.words());
                        let cure = "check the unit of the column, or leave the cell blank";
                        kept.say(
                            Problem::refused("weather-range", words, cure).on_line(line).at(column.name()),
                        );
                    }
                }
                Ok(None) => {}
                Err(problem) => kept.say(problem),
            }
        }
        if let Some(time) = time {
            out.push(Dated { line, time, row });
        }
    }
    kept.end();
    if let Some(first) = absent.first() {
        let words = format!("{} cell(s) such as -999 read as no reading", absent.len());
        problems.push(Problem::note("no-reading", words).on_line(*first));
    }
    out
}

fn moment(text: &str, column: Column, offset: FixedOffset) -> Result<DateTime<FixedOffset>, Problem> {
    if column == Column::Date {
        parse_date(text)?;
    }
    // a date alone counts as its noon
    parse_time(text, offset).map_err(|words| Problem::refused("time", words, TIME_CURE))
}

/// Where the sun of a moment stands. Without a longitude, it is highest at 12:00 of the site's clock.
fn stand(site: &Site, time: DateTime<FixedOffset>, hourly: bool) -> Stand {
    let from = f64::from(time.hour());
    Stand {
        latitude_deg: site.place.latitude_deg,
        altitude_m: site.place.altitude_m.map(|altitude| altitude + site.pool.bed_m),
        day: time.ordinal(),
        hours: hourly.then_some((from, from + 1.0)),
    }
}

/// Gives the hours that have radiation and no cloud that of their day: what came down over what a clear sky lets
/// down in the same hours. Single hours cannot tell it, least of all at night.
fn cloud_of_days(site: &Site, dated: &mut [Dated]) {
    let mut days: BTreeMap<NaiveDate, [f64; 2]> = BTreeMap::new();
    for d in dated.iter() {
        if let (Some(solar), Some(clear)) = (d.row.sky.solar_w_m2, stand(site, d.time, true).clear_w_m2()) {
            let sums = days.entry(d.time.date_naive()).or_default();
            *sums = [sums[0] + solar, sums[1] + clear];
        }
    }
    for d in dated.iter_mut().filter(|d| d.row.sky.solar_w_m2.is_some() && d.row.sky.cloud.is_none()) {
        let day = days.get(&d.time.date_naive()).filter(|[_, clear]| *clear > 0.0);
        d.row.sky.cloud = day.map(|[solar, clear]| sun::cloud_of_share(solar / clear));
    }
}

/// Several rows within an hour are one hour, their mean; hours missing in short gaps are put in and noted.
fn by_hour(airs: BTreeMap<DateTime<FixedOffset>, Air>, problems: &mut Vec<Problem>) -> Weather {
    let mut hours: BTreeMap<DateTime<FixedOffset>, Vec<Air>> = BTreeMap::new();
    for (time, air) in airs {
        let begin = TimeDelta::seconds(i64::from(time.minute() * 60 + time.second()))
            + TimeDelta::nanoseconds(i64::from(time.nanosecond()));
        hours.entry(time - begin).or_default().push(air);
    }
    let told = hours.len();
    let means = hours.into_iter().filter_map(|(hour, airs)| Some((hour, Air::mean(&airs)?)));
    let weather = Weather::of_hours(means.collect());
    let put = weather.hours.len().saturating_sub(told);
    if put > 0 {
        let words =
            format!("{put} hour(s) are put in, straight between rows no more than {LONGEST_GAP_H} h apart");
        problems.push(Problem::note("weather-between", words));
    }
    weather
}

fn by_day(airs: BTreeMap<DateTime<FixedOffset>, Air>) -> Weather {
    let days = airs.into_iter().map(|(time, air)| (time.date_naive(), air)).collect();
    Weather { days, ..Weather::default() }
}

/// Tells hours or days that are missing between the first and the last.
fn gaps(weather: &Weather, problems: &mut Vec<Problem>) {
    let span = |first: i64, last: i64, count: usize| {
        usize::try_from(last - first + 1).unwrap_or(0).saturating_sub(count)
    };
    let ends = (weather.hours.first_key_value(), weather.hours.last_key_value());
    let (missing, what) = if let (Some((first, _)), Some((last, _))) = ends {
        let hour = |time: &DateTime<FixedOffset>| time.timestamp().div_euclid(3600);
        (span(hour(first), hour(last), weather.hours.len()), "hour(s)")
    } else if let (Some((first, _)), Some((last, _))) =
        (weather.days.first_key_value(), weather.days.last_key_value())
    {
        let day = |date: &NaiveDate| i64::from(date.num_days_from_ce());
        (span(day(first), day(last), weather.days.len()), "day(s)")
    } else {
        return;
    };
    if missing > 0 {
        let words = format!("{missing} {what} between the first and the last are missing");
        let cure = "add them; until then the river takes the day before again, and says so";
        problems.push(Problem::flag("weather-gap", words, cure));
    }
}
