//! Ashlar Dam on the Quillon River, both invented: two and a half years of weather, inflow and operation,
//! and the casts that someone with a sonde would have taken from the dam meanwhile.
//!
//! The years are harmonics and bells with day-to-day noise from a fixed seed; the pool follows a rule curve
//! and the gates are chosen for a wanted release temperature, as an operator would. Every number is a choice
//! for a snow-fed river at 44 degrees north and 1500 ft, and the column does the rest. The noise is drawn by
//! libraries whose versions the lock file holds, so the same casts come out each time.
//!
//! One cast, [`FAULTY`], is spoilt on purpose so that the checks have something to find; see [`spoil`].

mod operation;

use std::f64::consts::TAU;
use std::fmt::Write;

use chrono::{NaiveDate, NaiveDateTime, TimeDelta, Timelike};
use rand_distr::{Distribution, StandardNormal};
use rand_pcg::Pcg32;
use serde_yaml::Value;

use super::basin::Basin;
use super::column::{Column, Water};
use super::record::{self, Reading, Unit};
use operation::{Weather, operate, rule_curve_ft};

pub(crate) const FOOT_M: f64 = 0.3048;
/// International acre, m2.
const ACRE_M2: f64 = 4046.8564224;
const CFS_M3S: f64 = 0.028316846592;
/// The column runs from here; the first year lets it forget how it began.
const FIRST_DAY: (i32, u32, u32) = (2024, 1, 1);
const STEPS_A_DAY: u32 = 4;
/// Sensor noise as a standard deviation: C, mg/L, uS/cm.
const NOISE: (f64, f64, f64) = (0.03, 0.05, 0.4);
/// The cast with the planted faults.
pub(crate) const FAULTY: &str = "2025-08-26T09:55";
/// Times of all casts, local standard time, the newest last.
const TAKEN: [&str; 22] = [
    "2025-01-14T11:05",
    "2025-02-11T10:50",
    "2025-03-18T10:20",
    "2025-04-15T10:10",
    "2025-05-13T09:40",
    "2025-06-17T10:15",
    "2025-07-08T10:00",
    "2025-07-29T09:35",
    "2025-08-12T10:25",
    FAULTY,
    "2025-09-09T10:40",
    "2025-09-23T10:05",
    "2025-10-14T10:30",
    "2025-11-12T11:15",
    "2025-12-09T11:00",
    "2026-01-20T11:20",
    "2026-04-14T10:20",
    "2026-05-05T10:00",
    "2026-05-26T09:50",
    "2026-06-16T10:10",
    "2026-06-30T10:05",
    "2026-07-14T10:30",
];

/// What the casts need to know of the site; read from its own file, so that the two cannot part.
pub(crate) struct Site {
    pub(crate) basin: Basin,
    pub(crate) altitude_m: f64,
    /// Full pool, m.
    pub(crate) full_m: f64,
    /// Centres of the wells' gates, m.
    gates_m: Vec<f64>,
}

impl Site {
    /// From the text of `site.yaml`, lengths in feet and areas in acres.
    pub(crate) fn read(text: &str) -> Self {
        let site: Value = serde_yaml::from_str(text).unwrap();
        let number = |value: &Value| value.as_f64().unwrap();
        let rows = site["pool"]["table"].as_sequence().unwrap();
        let areas = rows.iter().map(|row| (FOOT_M * number(&row[0]), ACRE_M2 * number(&row[1])));
        let outlets = site["outlets"].as_sequence().unwrap().iter();
        let gates = outlets.filter(|outlet| outlet["well"].as_str() == Some("North"));
        Self {
            basin: Basin::new(areas),
            altitude_m: FOOT_M * number(&site["place"]["altitude"]),
            full_m: FOOT_M * number(&site["pool"]["full"]),
            gates_m: gates.map(|gate| FOOT_M * number(&gate["centre"])).collect(),
        }
    }
}

/// One cast: when, the pool (ft) and its rows of depth (ft) and what the sonde read there.
pub(crate) struct Cast {
    pub(crate) taken: NaiveDateTime,
    pub(crate) pool_ft: f64,
    pub(crate) rows: Vec<(f64, Water)>,
}

/// All that happened: casts, oldest first, and the water that left the dam on each day.
pub(crate) struct Years {
    pub(crate) casts: Vec<Cast>,
    released: Vec<(NaiveDate, Water)>,
}

pub(crate) fn years(site: &Site) -> Years {
    let times: Vec<NaiveDateTime> =
        TAKEN.iter().map(|text| NaiveDateTime::parse_from_str(text, "%Y-%m-%dT%H:%M").unwrap()).collect();
    let last = times[times.len() - 1].date();
    let (y, m, d) = FIRST_DAY;
    let mut day = NaiveDate::from_ymd_opt(y, m, d).unwrap();
    // two streams, so that one more cast leaves the weather as it is
    let (mut weather, mut sensor) = (Weather::new(), Pcg32::new(1480, 2));
    let winter = Water { temperature_c: 5.0, oxygen_mg_l: 11.0, conductance_us_cm: 95.0 };
    let mut column = Column::mixed(&site.basin, site.altitude_m, FOOT_M * rule_curve_ft(day), winter);
    let (mut casts, mut released) = (Vec::new(), Vec::new());
    while day <= last {
        let forcing = operate(site, &column, day, weather.next());
        let [(warm_m, warm_m3s), (cold_m, cold_m3s)] = forcing.releases;
        let share = warm_m3s / (warm_m3s + cold_m3s);
        released.push((day, column.drawn(cold_m).blended(column.drawn(warm_m), share)));
        for _ in 0..STEPS_A_DAY {
            column.step(&forcing, 86400.0 / f64::from(STEPS_A_DAY));
        }
        for &taken in times.iter().filter(|taken| taken.date() == day) {
            let mut cast = sound(site, &column, taken, &mut sensor);
            if taken.format("%Y-%m-%dT%H:%M").to_string() == FAULTY {
                spoil(&mut cast);
            }
            casts.push(cast);
        }
        day = day.succ_opt().unwrap();
    }
    Years { casts, released }
}

/// `tailwater.csv`: the last seven weeks by the hour, with four days lost in June.
pub(crate) fn tailwater(years: &Years) -> (String, String) {
    let time = |text: &str| NaiveDateTime::parse_from_str(text, "%Y-%m-%dT%H:%M").unwrap();
    let lost = time("2026-06-20T15:00")..time("2026-06-24T09:00");
    let noon = |day: &NaiveDate| day.and_hms_opt(12, 0, 0).unwrap();
    let mut random = Pcg32::new(1481, 3);
    let mut noisy = |value: f64, deviation: f64| {
        let draw: f64 = StandardNormal.sample(&mut random);
        value + deviation * draw
    };
    let (mut now, mut readings) = (time("2026-05-26T00:00"), Vec::new());
    while now <= time("2026-07-14T09:00") {
        let after = years.released.partition_point(|(day, _)| noon(day) <= now);
        let after = after.clamp(1, years.released.len() - 1);
        let ((day, before), (_, then)) = (&years.released[after - 1], &years.released[after]);
        let share = (now - noon(day)).num_minutes() as f64 / (24.0 * 60.0);
        let water = before.blended(*then, share.min(1.0));
        // the gauge stands a little below the dam, in the sun of the afternoon
        let sun_c = 0.15 * (TAU * (f64::from(now.hour()) - 16.0) / 24.0).cos();
        if !lost.contains(&now) {
            readings.push(Reading {
                time: now,
                temperature_c: noisy(water.temperature_c + sun_c, NOISE.0),
                oxygen_mg_l: Some(noisy(water.oxygen_mg_l, NOISE.1)),
            });
        }
        now += TimeDelta::hours(1);
    }
    let of = "Ashlar Dam on the Quillon River, the tailwater";
    ("tailwater.csv".into(), record::text(of, Unit::Fahrenheit, &readings))
}

/// File name and text of a cast.
pub(crate) fn file(cast: &Cast) -> (String, String) {
    let mut text = String::from("# Ashlar Dam on the Quillon River: invented data of an invented place.\n");
    writeln!(text, "# taken: {}", cast.taken.format("%Y-%m-%dT%H:%M")).unwrap();
    writeln!(text, "# pool: {:.1} ft", cast.pool_ft).unwrap();
    text.push_str("depth_ft,temperature_F,oxygen_mg_l,specific_conductance_us_cm\n");
    for (depth_ft, water) in &cast.rows {
        let fahrenheit = 32.0 + 1.8 * water.temperature_c;
        let (oxygen, conductance) = (water.oxygen_mg_l, water.conductance_us_cm);
        writeln!(text, "{depth_ft:.1},{fahrenheit:.2},{oxygen:.2},{conductance:.1}").unwrap();
    }
    (format!("profiles/{}.csv", cast.taken.date()), text)
}

/// Lowers the sonde: every 3 ft through the layers that matter, every 10 ft below, to 3 ft above the bed.
fn sound(site: &Site, column: &Column, taken: NaiveDateTime, random: &mut Pcg32) -> Cast {
    let pool_ft = (10.0 * column.pool_m() / FOOT_M).round() / 10.0;
    let bed_ft = pool_ft - site.basin.bed_m() / FOOT_M;
    let fine = (1..=34).map(|i| 3.0 * f64::from(i));
    let coarse = (11..).map(|i| 10.0 * f64::from(i)).take_while(|&depth| depth < bed_ft - 3.0);
    let depths = std::iter::once(0.5).chain(fine).chain(coarse).chain([bed_ft - 3.0]);
    let mut noisy = |value: f64, deviation: f64| {
        let draw: f64 = StandardNormal.sample(random);
        value + deviation * draw
    };
    let rows = depths.map(|depth_ft| {
        let water = column.at(FOOT_M * (pool_ft - depth_ft));
        let read = Water {
            temperature_c: noisy(water.temperature_c, NOISE.0),
            oxygen_mg_l: noisy(water.oxygen_mg_l, NOISE.1).max(0.0),
            conductance_us_cm: noisy(water.conductance_us_cm, NOISE.2),
        };
        (depth_ft, read)
    });
    Cast { taken, pool_ft, rows: rows.collect() }
}

/// What goes wrong with a sonde, all in one cast: a temperature spike of 3 C at 60 ft, the reading at 75 ft
/// written twice with slightly different values, nothing between 120 and 170 ft where the logger stalled,
/// and at 200 and 210 ft water 0.5 C warmer than above it, an inversion that salt does not explain.
fn spoil(cast: &mut Cast) {
    let at = |rows: &[(f64, Water)], depth_ft: f64| {
        rows.iter().position(|row| (row.0 - depth_ft).abs() < 0.05).unwrap()
    };
    for (depth_ft, error_c) in [(60.0, 3.0), (200.0, 0.5), (210.0, 0.5)] {
        let row = at(&cast.rows, depth_ft);
        cast.rows[row].1.temperature_c += error_c;
    }
    let twice = at(&cast.rows, 75.0);
    let (depth_ft, mut again) = cast.rows[twice];
    again.temperature_c -= 0.08;
    again.oxygen_mg_l -= 0.06;
    cast.rows.insert(twice + 1, (depth_ft, again));
    cast.rows.retain(|row| row.0 < 125.0 || row.0 > 165.0);
}
