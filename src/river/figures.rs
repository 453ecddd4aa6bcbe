//! The figures of a day's water at one place, from its slices.
//!
//! Methods: `docs/methods.md`, section 6.

use crate::water::saturation_mg_l;

use super::slices::Slice;
use super::water::Water;

/// The figures of a day's water at one place.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Figures {
    /// Time mean of the temperature, C.
    pub mean_c: f64,
    /// Greatest and least temperature, C; `None` where only days are known, not hours.
    pub range_c: Option<(f64, f64)>,
    /// Greatest change from one hour to the next, C; `None` as above.
    pub hourly_change_c: Option<f64>,
    /// Time mean of the oxygen, mg/L.
    pub oxygen_mean_mg_l: Option<f64>,
    /// Least oxygen, mg/L; the mean where only days are known.
    pub oxygen_min_mg_l: Option<f64>,
    /// Least and mean oxygen over saturation.
    pub oxygen_share: Option<(f64, f64)>,
    /// Flow, m3/s, as its time mean.
    pub flow_m3s: f64,
}

impl Figures {
    /// Of what each slice became there, weighted by the time over which it was released: as a gauge sees it, not by
    /// flow.
    pub(super) fn of(slices: &[Slice], there: &[Water], by_hour: bool, pressure_atm: f64) -> Self {
        let hours: f64 = slices.iter().map(|s| s.hours).sum();
        let mean = |of: &dyn Fn(&Water) -> Option<f64>| {
            let sum = slices.iter().zip(there).map(|(s, w)| Some(s.hours * of(w)?)).sum::<Option<f64>>();
            sum.map(|sum| sum / hours)
        };
        let fold = |of: &dyn Fn(&Water) -> Option<f64>, with: fn(f64, f64) -> f64| {
            there.iter().map(of).collect::<Option<Vec<_>>>()?.into_iter().reduce(with)
        };
        let temperature = |w: &Water| Some(w.temperature_c);
        let oxygen = |w: &Water| w.oxygen_mg_l;
        let share = |w: &Water| {
            let full = saturation_mg_l(w.temperature_c, 0.0, pressure_atm);
            w.oxygen_mg_l.filter(|_| full > 0.0).map(|o| o / full)
        };
        let range = fold(&temperature, f64::max).zip(fold(&temperature, f64::min));
        let change = hourly(slices, there).windows(2).fold(0.0, |most, pair| match *pair {
            [a, b] => f64::max(most, (b - a).abs()),
            _ => most,
        });
        Self {
            mean_c: mean(&temperature).unwrap_or_default(),
            range_c: range.filter(|_| by_hour),
            hourly_change_c: by_hour.then_some(change),
            oxygen_mean_mg_l: mean(&oxygen),
            oxygen_min_mg_l: fold(&oxygen, f64::min),
            oxygen_share: fold(&share, f64::min).zip(mean(&share)),
            flow_m3s: mean(&|w| Some(w.flow_m3s)).unwrap_or_default(),
        }
    }
}

/// Mean temperature of each hour of release, C.
pub(super) fn hourly(slices: &[Slice], there: &[Water]) -> Vec<f64> {
    let mut sums: Vec<(f64, f64, f64)> = Vec::with_capacity(24);
    for (slice, water) in slices.iter().zip(there) {
        let hour = slice.leaves_h().floor();
        match sums.last_mut().filter(|s| (s.0 - hour).abs() < 0.5) {
            Some(sum) => {
                sum.1 += slice.hours;
                sum.2 += slice.hours * water.temperature_c;
            }
            None => sums.push((hour, slice.hours, slice.hours * water.temperature_c)),
        }
    }
    sums.into_iter().map(|(_, hours, sum)| sum / hours).collect()
}
