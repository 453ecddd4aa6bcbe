//! Tessel Dam on the Varr Water, both invented: two years of weather, inflow and operation, and the casts taken from
//! the tower meanwhile; of the last spring also what came in, what was decided and set, and what the river below recorded.
//!
//! The pool is the column of the other sites with a clear upland pool's nature; what drives it is harmonics with noise from
//! a fixed seed, and the weather file the air that goes with it. Every number is a choice for a supply dam at 46 degrees north and 350 m.

mod gauge;
pub(crate) mod log;
mod meetings;
mod weather;

use std::collections::BTreeMap;

use chrono::{NaiveDate, NaiveDateTime, NaiveTime, TimeDelta};
use rand_pcg::Pcg32;
use serde_yaml::Value;

use super::basin::Basin;
use super::column::{Column, Forcing, Nature, Water};
use super::past::{Past, PastDay};
use super::season::{bell, fading, through, yearly};
use super::sonde::{Cast, sound, times};
use super::water::oxygen_saturation_mg_l;
use gauge::Gauge;
pub(crate) use gauge::TOO_WARM_C;
pub(crate) use meetings::MADE_LATE;
use meetings::at;
use weather::Weather;

/// The column runs from here, mixed as pools are in November.
const FIRST_DAY: (i32, u32, u32) = (2024, 11, 20);
const STEPS_A_DAY: u32 = 6;
const NATURE: Nature = Nature { zone_m: 3.0, light_loss_1_m: 0.45, demand: 1.1 };
/// Times of all casts, local standard time, the newest last.
const TAKEN: [&str; 18] = [
    "2025-05-13T09:30",
    "2025-06-24T09:50",
    "2025-08-05T09:40",
    "2025-09-09T10:10",
    "2025-10-14T10:20",
    "2025-11-18T10:45",
    "2026-04-07T10:00",
    "2026-04-21T09:40",
    "2026-04-28T09:25",
    "2026-05-05T09:55",
    "2026-05-12T10:05",
    "2026-05-19T09:35",
    "2026-05-26T09:40",
    "2026-06-02T10:10",
    "2026-06-09T09:30",
    "2026-06-16T09:45",
    "2026-06-23T09:50",
    "2026-06-30T09:20",
];
/// The days since the seventh cast, of this year, are told by a plan and a schedule of what has been.
const PAST_FROM: usize = 6;
const OF: &str = "Tessel Dam on the Varr Water";
/// Water over the centre of a gate with which it draws no air, m.
const LEAST_OVER_GATE_M: f64 = 3.7;
/// Share by which a day's release strays from what was decided, as a standard deviation.
const DRIFT: f64 = 0.02;
const HOURS: i64 = 24;

/// What the maker needs to know of the site; read from its own file, so that the two cannot part.
struct Site {
    basin: Basin,
    full_m: f64,
    /// Centres of the tower's gates, m.
    gates_m: Vec<f64>,
}

impl Site {
    /// From the text of `site.yaml`, lengths in metres, areas in km2.
    fn read(text: &str) -> Self {
        let site: Value = serde_yaml::from_str(text).unwrap();
        let number = |value: &Value| value.as_f64().unwrap();
        let rows = site["pool"]["table"].as_sequence().unwrap();
        let outlets = site["outlets"].as_sequence().unwrap().iter();
        let gates = outlets.filter(|outlet| outlet["well"].as_str() == Some("Tower"));
        Self {
            basin: Basin::new(rows.iter().map(|row| (number(&row[0]), 1e6 * number(&row[1])))),
            full_m: number(&site["pool"]["full"]),
            gates_m: gates.map(|gate| number(&gate["centre"])).collect(),
        }
    }
}

/// Every file beside `site.yaml` and the plans but the log, by its path in the folder, and the pool at the time of each
/// meeting, m.
pub(crate) fn files(text: &str) -> (BTreeMap<String, String>, Vec<f64>) {
    let Years { casts, spring, air, gauge, pools_m } = years(&Site::read(text));
    let newest = casts[casts.len() - 1].taken;
    let casts = casts.iter().map(|cast| cast.file(OF));
    let files =
        casts.chain([spring.plan(OF), spring.schedule(OF), air.file(OF), gauge.file(OF, newest)]).collect();
    (files, pools_m)
}

/// All that happened.
struct Years {
    casts: Vec<Cast>,
    spring: Past,
    air: Weather,
    gauge: Gauge,
    pools_m: Vec<f64>,
}

fn years(site: &Site) -> Years {
    let times: Vec<NaiveDateTime> = times(&TAKEN);
    let last = times[times.len() - 1].date();
    let (y, m, d) = FIRST_DAY;
    let mut day = NaiveDate::from_ymd_opt(y, m, d).unwrap();
    // streams of their own, so that one more cast leaves the weather as it is
    let [mut weather, mut sensor, mut meter] = [1, 2, 5].map(|stream| Pcg32::new(352, stream));
    let mut noise = [0.0; 3];
    let autumn = Water { temperature_c: 9.0, oxygen_mg_l: 10.4, conductance_us_cm: 210.0 };
    let mut column = Column::mixed(&site.basin, 0.0, rule_curve_m(day), autumn).with(NATURE);
    let (mut casts, mut spring, mut air) = (Vec::new(), Past::default(), Weather::new());
    let (mut gauge, mut pools_m) = (Gauge::new(), Vec::new());
    while day <= last {
        for (value, kept) in noise.iter_mut().zip([0.8, 0.4, 0.85]) {
            *value = fading(&mut weather, kept, *value);
        }
        let forcing = operate(site, &column, day, noise);
        air.keep(day, &forcing);
        let drift = 1.0 + DRIFT * fading(&mut meter, 0.0, 0.0);
        let midnight = day.and_time(NaiveTime::MIN);
        let step_s = 86400.0 / f64::from(STEPS_A_DAY);
        let mut book = Vec::new();
        for step in 0..STEPS_A_DAY {
            let begins_s = f64::from(step) * step_s;
            let moment = midnight + TimeDelta::hours(i64::from(step * (24 / STEPS_A_DAY)));
            let mut forcing = Forcing { ..forcing };
            if let Some((decided, made)) = at(moment) {
                if decided.from() == moment {
                    pools_m.push(column.pool_m());
                }
                let release_m3s = drift * decided.release_m3s;
                forcing.releases = decided.flows_m3s(&site.gates_m, release_m3s);
                book.push(forcing.releases);
                forcing.releases = made.flows_m3s(&site.gates_m, release_m3s);
                gauge.read(moment, HOURS / i64::from(STEPS_A_DAY), given(&column, &forcing));
            } else {
                book.push(forcing.releases);
            }
            let mut gone_s = 0.0;
            // the sonde finds the pool as it is at its hour
            for &taken in &times {
                let after_s = (taken - midnight).num_seconds() as f64 - begins_s;
                if (0.0..step_s).contains(&after_s) {
                    column.step(&forcing, after_s - gone_s);
                    gone_s = after_s;
                    casts.push(sound(&site.basin, &column, taken, &mut sensor));
                }
            }
            column.step(&forcing, step_s - gone_s);
        }
        if day >= times[PAST_FROM].date() {
            spring.days.push(passed(site, day, &forcing, &book));
        }
        day = day.succ_opt().unwrap();
    }
    Years { casts, spring, air, gauge, pools_m }
}

/// The water that the gates give as they stand.
fn given(column: &Column, forcing: &Forcing) -> Water {
    let [(one_m, one_m3s), (other_m, other_m3s)] = forcing.releases;
    column.drawn(one_m).blended(column.drawn(other_m), other_m3s / (one_m3s + other_m3s))
}

/// One day as the dam's book has it: the mean flow of each gate, by its place among the tower's, the uppermost first.
fn passed(site: &Site, day: NaiveDate, forcing: &Forcing, book: &[[(f64, f64); 2]]) -> PastDay {
    let mean = |&gate_m: &f64| {
        let of = book.iter().flatten().filter(|set| (set.0 - gate_m).abs() < 1e-9);
        of.map(|set| set.1).sum::<f64>() / book.len() as f64
    };
    PastDay {
        day,
        inflow_m3s: forcing.inflow_m3s,
        inflow: forcing.inflow,
        gates: site.gates_m.iter().map(mean).enumerate().collect(),
    }
}

/// One day's weather, inflow and gates; the noise is of air, wind and rain.
fn operate(site: &Site, column: &Column, day: NaiveDate, [air, wind, rain]: [f64; 3]) -> Forcing {
    let melt = bell(day, 125.0, 30.0);
    let inflow_m3s = 4.0 + 16.0 * melt + 5.0 * (0.5 + 0.5 * yearly(day, 20.0)) * (0.7 * rain).exp();
    let river_c = (9.8 + 6.6 * yearly(day, 205.0) - 1.2 * melt + 0.9 * air).max(1.0);
    let wanted_m3 = site.basin.volume_m3(rule_curve_m(day));
    let surplus_m3s = (column.volume_m3() - wanted_m3) / (2.0 * 86400.0);
    let release_m3s = (inflow_m3s + surplus_m3s).clamp(3.0, 30.0);
    Forcing {
        inflow_m3s,
        inflow: Water {
            temperature_c: river_c,
            oxygen_mg_l: 0.97 * oxygen_saturation_mg_l(river_c, site.full_m),
            conductance_us_cm: 240.0 - 90.0 * melt - 15.0 * rain,
        },
        releases: blend(site, column, 10.0 + 4.0 * yearly(day, 205.0))
            .map(|(gate_m, share)| (gate_m, share * release_m3s)),
        equilibrium_c: (12.2 + 11.0 * yearly(day, 200.0) + 1.7 * air).max(2.0),
        sun_w_m2: 148.0 + 108.0 * yearly(day, 172.0),
        wind_m_s: (2.5 + 1.1 * wind).max(0.4),
    }
}

/// The two neighbouring gates whose waters lie around the wanted temperature, and the share of each that gives it.
fn blend(site: &Site, column: &Column, wanted_c: f64) -> [(f64, f64); 2] {
    let covered = site.gates_m.iter().filter(|&z_m| column.pool_m() - z_m > LEAST_OVER_GATE_M);
    let mut gates: Vec<(f64, f64)> = covered.map(|&z_m| (z_m, column.drawn(z_m).temperature_c)).collect();
    gates.sort_by(|a, b| a.1.total_cmp(&b.1));
    let warmer = gates.partition_point(|gate| gate.1 < wanted_c).clamp(1, gates.len() - 1);
    let ((cold_m, cold_c), (warm_m, warm_c)) = (gates[warmer - 1], gates[warmer]);
    let share = ((wanted_c - cold_c) / (warm_c - cold_c).max(0.01)).clamp(0.0, 1.0);
    [(warm_m, share), (cold_m, 1.0 - share)]
}

/// The pool the dam is run for, m: filled by June, drawn down for supply from July on.
fn rule_curve_m(day: NaiveDate) -> f64 {
    const CURVE: [(f64, f64); 7] = [
        (0.0, 336.0),
        (60.0, 337.5),
        (150.0, 350.5),
        (182.0, 350.5),
        (280.0, 333.0),
        (335.0, 334.0),
        (367.0, 336.0),
    ];
    through(&CURVE, day)
}
