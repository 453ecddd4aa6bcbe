//! The regulating pool below the dam: the release mixes with what it holds and warms over its surface.
//!
//! Methods: `docs/methods.md`, section 6.

use crate::site::{Afterbay, Decay};
use crate::units::DAY_S;
use crate::water::{reaeration_at_per_day, saturation_mg_l};

use super::sky::Sky;
use super::slices::Slice;
use super::water::{DECAY_PER_C, HEAT_J_M3_C, Water};

/// Transfer of oxygen through still water's surface, m/day (recalled: light wind).
const STILL_M_PER_DAY: f64 = 0.6;

/// A day has come back when nothing differs by more, C and mg/L (choice).
const SAME: f64 = 1e-7;
/// Most days until it has (choice).
const MOST_DAYS: usize = 200;
/// Longest step, h (choice).
const STEP_H: f64 = 1.0;
/// Steps towards the balance of a mean day, from which the first day begins (choice).
const BALANCING: usize = 20;

/// Seconds of an hour (standard).
const HOUR_S: f64 = 3600.0;

/// Hours that water stays, at a flow.
pub(super) fn stay_h(bay: &Afterbay, flow_m3s: f64) -> f64 {
    if flow_m3s > 0.0 { bay.volume_m3 * bay.mixed / flow_m3s / HOUR_S } else { 0.0 }
}

/// What leaves the pool in each slice of a day that repeats itself.
///
/// # References
/// Balance of a mixed volume: V dT/dt = Q (Tin - T) + A H(T)/(rho cp), oxygen and demand alike, each step exact for
/// what is straight in it (derived).
pub(super) fn through(
    bay: &Afterbay,
    slices: &[Slice],
    sky: &Sky,
    decay: Decay,
    pressure_atm: f64,
) -> Vec<Slice> {
    let Some(first) = slices.first() else { return Vec::new() };
    let mut pool = Pool { bay, sky, decay, pressure_atm, water: first.water };
    pool.balance(slices);
    let mut out = Vec::with_capacity(slices.len());
    for _ in 0..MOST_DAYS {
        let start = pool.water;
        out.clear();
        for slice in slices {
            let water = pool.through(slice);
            out.push(Slice { water, ..*slice });
        }
        let near = |a: f64, b: f64| (a - b).abs() < SAME;
        let oxygen = start.oxygen_mg_l.zip(pool.water.oxygen_mg_l).is_none_or(|(a, b)| near(a, b));
        if near(start.temperature_c, pool.water.temperature_c)
            && oxygen
            && near(start.demand_mg_l, pool.water.demand_mg_l)
        {
            break;
        }
    }
    out
}

struct Pool<'a> {
    bay: &'a Afterbay,
    sky: &'a Sky,
    decay: Decay,
    pressure_atm: f64,
    water: Water,
}

impl Pool<'_> {
    /// Brings the pool near the balance of the day's means, so that a slow one need not be followed for months.
    fn balance(&mut self, slices: &[Slice]) {
        let volume = self.bay.volume_m3 * self.bay.mixed;
        let per_j = self.bay.area_m2 / (HEAT_J_M3_C * volume);
        for _ in 0..BALANCING {
            let (mut drive, mut rate) = (0.0, 0.0);
            for slice in slices {
                let (net, slope) = self.sky.heat(slice.leaves_h(), self.water.temperature_c, 0.0);
                let refill = slice.water.flow_m3s / volume;
                let off = slice.water.temperature_c - self.water.temperature_c;
                drive += slice.hours * (refill * off + net * per_j);
                rate += slice.hours * (refill - slope * per_j);
            }
            if rate > 0.0 {
                self.water.temperature_c = (self.water.temperature_c + drive / rate).max(0.0);
            }
        }
        let (mut flow, mut demand, mut oxygen) = (0.0, 0.0, Some(0.0));
        for slice in slices {
            let passed = slice.hours * slice.water.flow_m3s;
            flow += passed;
            demand += passed * slice.water.demand_mg_l;
            oxygen = oxygen.zip(slice.water.oxygen_mg_l).map(|(sum, o)| sum + passed * o);
        }
        let hours: f64 = slices.iter().map(|s| s.hours).sum();
        let (refill, air, decay) = (
            flow / hours / volume,
            self.air_per_s(self.water.temperature_c),
            self.decay_per_s(self.water.temperature_c),
        );
        if flow > 0.0 {
            self.water.demand_mg_l = refill * demand / flow / (refill + decay);
            let saturation = saturation_mg_l(self.water.temperature_c, 0.0, self.pressure_atm);
            let gained = air * saturation - decay * self.water.demand_mg_l;
            self.water.oxygen_mg_l =
                oxygen.map(|sum| ((refill * sum / flow + gained) / (refill + air)).max(0.0));
        }
    }

    fn air_per_s(&self, temperature_c: f64) -> f64 {
        let volume = self.bay.volume_m3 * self.bay.mixed;
        reaeration_at_per_day(STILL_M_PER_DAY * self.bay.area_m2 / volume, temperature_c) / DAY_S
    }

    fn decay_per_s(&self, temperature_c: f64) -> f64 {
        self.decay.per_day * DECAY_PER_C.powf(temperature_c - 20.0) / DAY_S
    }

    /// Takes a slice in and gives the mean of what leaves meanwhile.
    fn through(&mut self, slice: &Slice) -> Water {
        let volume = self.bay.volume_m3 * self.bay.mixed;
        let steps = (1..24).find(|n| slice.hours / f64::from(*n) <= STEP_H).unwrap_or(24);
        let step_s = slice.hours * HOUR_S / f64::from(steps);
        let entering = slice.water;
        let refill = entering.flow_m3s / volume;
        let (mut heat, mut oxygen, mut demand) = (0.0, Some(0.0), 0.0);
        for i in 0..steps {
            let clock_h = slice.start_h + (f64::from(i) + 0.5) * step_s / HOUR_S;
            let now = self.water;
            let (net, slope) = self.sky.heat(clock_h, now.temperature_c, 0.0);
            let per_j = self.bay.area_m2 / (HEAT_J_M3_C * volume);
            let drive = refill * (entering.temperature_c - now.temperature_c) + net * per_j;
            let (end, mean) = relax(now.temperature_c, drive, refill - slope * per_j, step_s);
            let middle_c = 0.5 * (now.temperature_c + end);
            let decay = self.decay_per_s(middle_c);
            let demand_drive = refill * (entering.demand_mg_l - now.demand_mg_l) - decay * now.demand_mg_l;
            let (demand_end, demand_mean) = relax(now.demand_mg_l, demand_drive, refill + decay, step_s);
            let air = self.air_per_s(middle_c);
            let saturation = saturation_mg_l(middle_c, 0.0, self.pressure_atm);
            let aired = now.oxygen_mg_l.zip(entering.oxygen_mg_l).map(|(own, into)| {
                let drive = refill * (into - own) + air * (saturation - own) - decay * demand_mean;
                relax(own, drive, refill + air, step_s)
            });
            self.water = Water {
                flow_m3s: entering.flow_m3s,
                temperature_c: end.max(0.0),
                oxygen_mg_l: aired.map(|a| a.0.max(0.0)),
                demand_mg_l: demand_end,
            };
            heat += mean;
            oxygen = oxygen.zip(aired).map(|(sum, a)| sum + a.1);
            demand += demand_mean;
        }
        let n = f64::from(steps);
        Water {
            flow_m3s: entering.flow_m3s,
            temperature_c: heat / n,
            oxygen_mg_l: oxygen.map(|sum| sum / n),
            demand_mg_l: demand / n,
        }
    }
}

/// Where a value is after a time, and its mean meanwhile, when it is driven by `drive` a second that wanes by `rate`.
fn relax(value: f64, drive: f64, rate: f64, seconds: f64) -> (f64, f64) {
    let x = rate * seconds;
    if x < 1e-9 {
        return (value + drive * seconds, value + 0.5 * drive * seconds);
    }
    let gone = -(-x).exp_m1() / x;
    (value + drive * seconds * gone, value + drive * seconds * (1.0 - gone) / x)
}
