//! What the stations below the dam recorded in the last season, with all that happens to sensors.

use chrono::{Datelike, NaiveDate, NaiveDateTime, TimeDelta};
use rand_distr::{Distribution, StandardNormal};
use rand_pcg::Pcg32;

use super::super::record::{Reading, Unit, text};
use super::{Day, FORECAST_DAYS, Site, Years, river};

/// Sensor noise as a standard deviation: C, mg/L.
const NOISE: (f64, f64) = (0.04, 0.08);
/// Hours of the newest cast's day that are already recorded.
const RECORDED_H: usize = 9;

/// The tailwater's file and one of each point, from May to the morning of the newest cast.
pub(super) fn files(site: &Site, years: &Years) -> Vec<(String, String)> {
    let past = &years.days[..years.days.len() - FORECAST_DAYS as usize];
    let newest = past[past.len() - 1].date;
    let may = NaiveDate::from_ymd_opt(newest.year(), 5, 1).unwrap();
    // a week before May fills the river
    let from = past.iter().position(|day| day.date == may).unwrap() - 7;
    let days = &past[from..];
    let mut random = Pcg32::new(214, 3);
    let mut stations = vec![("tailwater.csv".to_owned(), "the tailwater".to_owned(), 0.0)];
    stations.extend(site.points.iter().map(|point| (point.file.clone(), point.name.clone(), point.at_km)));
    let station = |(file, name, at_km): (String, String, f64)| {
        let mut readings = record(site, days, at_km, &mut random);
        happen(&file, days, &mut readings);
        let of = format!("Sorrel Dam on the Tamble River, {name}");
        (file, text(&of, Unit::Celsius, &readings))
    };
    stations.into_iter().map(station).collect()
}

/// Hourly readings from the eighth day on.
fn record(site: &Site, days: &[Day], at_km: f64, random: &mut Pcg32) -> Vec<Reading> {
    let passing = river::passing(site, days, at_km);
    let midnight = days[0].date.and_hms_opt(0, 0, 0).unwrap();
    let hours = 7 * 24..24 * (days.len() - 1) + RECORDED_H;
    hours
        .map(|hour| {
            let at_h = hour as f64;
            let after = passing.partition_point(|row| row.0 < at_h).clamp(1, passing.len() - 1);
            let ((h0, t0, o0), (h1, t1, o1)) = (passing[after - 1], passing[after]);
            let share = ((at_h - h0) / (h1 - h0).max(1e-9)).clamp(0.0, 1.0);
            let mut noisy = |value: f64, deviation: f64| {
                let draw: f64 = StandardNormal.sample(random);
                value + deviation * draw
            };
            Reading {
                time: midnight + TimeDelta::hours(hour as i64),
                temperature_c: noisy(t0 + share * (t1 - t0), NOISE.0),
                oxygen_mg_l: Some(noisy(o0 + share * (o1 - o0), NOISE.1).max(0.0)),
            }
        })
        .collect()
}

fn time(text: &str) -> NaiveDateTime {
    NaiveDateTime::parse_from_str(text, "%Y-%m-%dT%H:%M").unwrap()
}

/// What happened to each sensor: the tailwater's logger stood still for four days in June, and its oxygen sensor was
/// fouled and taken out in May; at Pell Ford low water left the sensor in the air for three days of July; at Cotter
/// Bridge the battery failed twice, once for ten hours of one day.
fn happen(file: &str, days: &[Day], readings: &mut Vec<Reading>) {
    let gap = |readings: &mut Vec<Reading>, from: &str, to: &str| {
        let (from, to) = (time(from), time(to));
        readings.retain(|reading| reading.time < from || reading.time > to);
    };
    match file {
        "tailwater.csv" => {
            gap(readings, "2026-06-09T11:00", "2026-06-13T08:00");
            let (from, to) = (time("2026-05-17T00:00"), time("2026-05-20T10:00"));
            for reading in readings.iter_mut().filter(|r| r.time >= from && r.time <= to) {
                reading.oxygen_mg_l = None;
            }
        }
        "pell-ford.csv" => in_the_air(days, readings, time("2026-07-10T14:00"), time("2026-07-13T10:00")),
        _ => {
            gap(readings, "2026-05-22T19:00", "2026-05-27T12:00");
            gap(readings, "2026-07-02T01:00", "2026-07-02T10:00");
        }
    }
}

/// A sensor in the air reads the air, and more while the sun stands on its dark case; its oxygen cell dries out.
fn in_the_air(days: &[Day], readings: &mut [Reading], from: NaiveDateTime, to: NaiveDateTime) {
    let first = days[0].date.and_hms_opt(0, 0, 0).unwrap();
    for reading in readings.iter_mut().filter(|r| r.time >= from && r.time <= to) {
        let hour = (reading.time - first).num_hours() as usize;
        let air = &days[hour / 24].hours[hour % 24];
        reading.temperature_c = air.air_c + 0.015 * air.sun_w_m2;
        reading.oxygen_mg_l = None;
    }
}
