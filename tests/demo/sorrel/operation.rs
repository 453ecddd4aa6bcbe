//! River, brook and ports of the invented years, day by day.

use chrono::{Datelike, NaiveDate};

use super::super::column::{Column, Forcing, Water};
use super::super::season::{through, yearly};
use super::super::water::oxygen_saturation_mg_l;
use super::{Day, Hour, Site, Weather, heat};

/// Least and greatest release through the well, m3/s.
const RELEASE_M3S: (f64, f64) = (4.0, 24.0);
/// Water over the centre of the upper port with which it draws no air, m.
const LEAST_OVER_UPPER_M: f64 = 2.3;
/// What the outlet's jet makes up of the oxygen that is missing.
const REGAINED: f64 = 0.15;

/// A stream's flow, m3/s, and water.
#[derive(Clone, Copy)]
pub(crate) struct Inflow {
    pub(crate) flow_m3s: f64,
    pub(crate) water: Water,
}

/// One day's forcing of the pool, and what the day is remembered by.
pub(super) fn operate(
    site: &Site,
    column: &Column,
    date: NaiveDate,
    hours: &[Hour; 24],
    weather: &Weather,
) -> (Forcing, Day) {
    let wet = 0.5 + 0.5 * yearly(date, 60.0);
    let inflow_m3s = 5.0 + 9.0 * wet * (0.6 * weather.rain).exp();
    let river_c = (13.2 + 10.3 * yearly(date, 200.0) + 1.2 * weather.air).max(1.0);
    // tilled land and sluggish water keep the river a little short of its balance with the air
    let fresh = |t: f64, share: f64| share * oxygen_saturation_mg_l(t, site.full_m);
    let wanted_m3 = site.basin.volume_m3(rule_curve_m(date));
    let surplus_m3s = (column.volume_m3() - wanted_m3) / (3.0 * 86400.0);
    let flow_m3s = (inflow_m3s + surplus_m3s).clamp(RELEASE_M3S.0, RELEASE_M3S.1);
    let (high, low, share) = blend(site, column, date, 14.0 + 9.5 * yearly(date, 207.0));
    let (high_m, low_m) = (site.ports_m[high], site.ports_m[low]);
    let mut released = column.drawn(low_m).blended(column.drawn(high_m), share);
    let missing = oxygen_saturation_mg_l(released.temperature_c, site.full_m - 24.0) - released.oxygen_mg_l;
    released.oxygen_mg_l += REGAINED * missing;
    let brook_c = 13.2 + 9.6 * yearly(date, 198.0);
    let brook = Inflow {
        flow_m3s: 2.2 + 1.45 * yearly(date, 65.0),
        water: Water {
            temperature_c: brook_c + 0.9 * weather.air,
            oxygen_mg_l: fresh(brook_c, 0.95),
            conductance_us_cm: 380.0,
        },
    };
    let mean = |of: fn(&Hour) -> f64| hours.iter().map(of).sum::<f64>() / 24.0;
    let forcing = Forcing {
        inflow_m3s,
        inflow: Water {
            temperature_c: river_c,
            oxygen_mg_l: fresh(river_c, 0.93),
            conductance_us_cm: 330.0 - 70.0 * wet - 20.0 * weather.rain,
        },
        releases: [(high_m, share * flow_m3s), (low_m, (1.0 - share) * flow_m3s)],
        // colder, ice would keep the heat in
        equilibrium_c: heat::equilibrium_c(hours).max(2.5),
        sun_w_m2: mean(|hour| hour.sun_w_m2),
        wind_m_s: mean(|hour| hour.wind_m_s),
    };
    let mut ports_m3s = vec![0.0; site.ports_m.len()];
    ports_m3s[high] = share * flow_m3s;
    ports_m3s[low] = (1.0 - share) * flow_m3s;
    (forcing, Day { date, hours: *hours, released, flow_m3s, ports_m3s, brook })
}

/// Two ports, the upper first, whose waters lie around the wanted temperature, and the share of the upper that gives it.
/// They are neighbours; from July on the uppermost and the lowest, whose mix holds more oxygen than the water between.
fn blend(site: &Site, column: &Column, date: NaiveDate, wanted_c: f64) -> (usize, usize, f64) {
    let waters: Vec<f64> = site.ports_m.iter().map(|&z_m| column.drawn(z_m).temperature_c).collect();
    let shallow = column.pool_m() - site.ports_m[0] < LEAST_OVER_UPPER_M;
    let (high, low) = match (date.month(), shallow) {
        (7..=9, false) => (0, 2),
        (_, false) if waters[1] <= wanted_c => (0, 1),
        _ => (1, 2),
    };
    let share = (wanted_c - waters[low]) / (waters[high] - waters[low]).max(0.01);
    (high, low, share.clamp(0.0, 1.0))
}

/// The pool the dam is run for, m: lower in winter, full by May, drawn down a little from June on.
pub(super) fn rule_curve_m(date: NaiveDate) -> f64 {
    const CURVE: [(f64, f64); 7] = [
        (0.0, 209.6),
        (45.0, 209.6),
        (120.0, 211.6),
        (165.0, 211.6),
        (208.0, 210.9),
        (305.0, 209.8),
        (367.0, 209.6),
    ];
    through(&CURVE, date)
}
