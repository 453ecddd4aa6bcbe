//! Weather, river and gates of the invented years, day by day.

use chrono::NaiveDate;
use rand_pcg::Pcg32;

use super::super::column::{Column, Forcing, Water};
use super::super::season::{bell, fading, through, yearly};
use super::super::water::oxygen_saturation_mg_l;
use super::{CFS_M3S, FOOT_M, Site};

/// Noise of the day: departures from the season, standard deviation 1, that fade over some days.
pub(super) struct Weather {
    random: Pcg32,
    air: f64,
    wind: f64,
    rain: f64,
}

impl Weather {
    pub(super) fn new() -> Self {
        Self { random: Pcg32::new(1475, 1), air: 0.0, wind: 0.0, rain: 0.0 }
    }

    /// The next day's, each an autoregression whose variance stays 1.
    pub(super) fn next(&mut self) -> &Self {
        let mut draw = |kept, old| fading(&mut self.random, kept, old);
        self.air = draw(0.8, self.air);
        self.wind = draw(0.4, self.wind);
        self.rain = draw(0.85, self.rain);
        self
    }
}

/// One day's weather, inflow and gates.
pub(super) fn operate(site: &Site, column: &Column, day: NaiveDate, weather: &Weather) -> Forcing {
    let melt = bell(day, 130.0, 27.0);
    let storms = 0.5 + 0.5 * yearly(day, 350.0);
    let inflow_cfs = 260.0 + 2500.0 * melt + 550.0 * storms * (0.8 * weather.rain).exp();
    let river_c = (10.6 + 5.4 * yearly(day, 207.0) - 2.0 * melt + 0.8 * weather.air).max(1.0);
    let inflow_m3s = CFS_M3S * inflow_cfs;
    let wanted_m3 = site.basin.volume_m3(FOOT_M * rule_curve_ft(day));
    let surplus_m3s = (column.volume_m3() - wanted_m3) / 86400.0;
    let release_m3s = (inflow_m3s + surplus_m3s).clamp(400.0 * CFS_M3S, 4000.0 * CFS_M3S);
    let wanted_c = 10.0 + 3.0 * yearly(day, 210.0);
    Forcing {
        inflow_m3s,
        inflow: Water {
            temperature_c: river_c,
            // rapids keep a river near its balance with the air
            oxygen_mg_l: 0.98 * oxygen_saturation_mg_l(river_c, site.altitude_m + site.full_m),
            conductance_us_cm: 125.0 - 60.0 * melt - 15.0 * storms,
        },
        releases: blend(site, column, wanted_c).map(|(gate_m, share)| (gate_m, share * release_m3s)),
        equilibrium_c: 13.3 + 11.0 * yearly(day, 199.0) + 1.6 * weather.air,
        sun_w_m2: 165.0 + 115.0 * yearly(day, 172.0),
        wind_m_s: (3.6 - 0.5 * yearly(day, 200.0) + 1.3 * weather.wind).max(0.5),
    }
}

/// The two neighbouring gates whose waters lie around the wanted temperature, and the share of each that
/// gives it; the nearest gate alone where none is warmer or none colder. A gate needs 14 ft over its centre.
fn blend(site: &Site, column: &Column, wanted_c: f64) -> [(f64, f64); 2] {
    let pool_m = column.pool_m();
    let covered = site.gates_m.iter().copied().filter(|z_m| pool_m - z_m > 14.0 * FOOT_M);
    let mut gates: Vec<(f64, f64)> = covered.map(|z_m| (z_m, column.at(z_m).temperature_c)).collect();
    gates.sort_by(|a, b| a.1.total_cmp(&b.1));
    let warmer = gates.partition_point(|gate| gate.1 < wanted_c).clamp(1, gates.len() - 1);
    let ((cold_m, cold_c), (warm_m, warm_c)) = (gates[warmer - 1], gates[warmer]);
    let share = ((wanted_c - cold_c) / (warm_c - cold_c).max(0.01)).clamp(0.0, 1.0);
    [(warm_m, share), (cold_m, 1.0 - share)]
}

/// The pool the dam is run for, ft: low in winter for floods, full by June, drawn down from July on.
pub(super) fn rule_curve_ft(day: NaiveDate) -> f64 {
    // day of the year from 0, pool
    const CURVE: [(f64, f64); 9] = [
        (0.0, 1411.0),
        (35.0, 1406.0),
        (60.0, 1408.0),
        (155.0, 1473.0),
        (182.0, 1473.5),
        (200.0, 1470.5),
        (305.0, 1416.0),
        (335.0, 1411.0),
        (367.0, 1411.0),
    ];
    through(&CURVE, day)
}
