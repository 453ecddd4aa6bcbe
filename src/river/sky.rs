//! What the surface trades with the air, by the clock of a parcel.
//!
//! Methods: `docs/methods.md`, section 6.

use chrono::{DateTime, Datelike, FixedOffset, TimeDelta};

use crate::site::Surface;
use crate::weather::{Air, Weather, budget};

/// Half of the step of temperature over which the slope of the heat is taken, C (choice).
const HALF_STEP_C: f64 = 0.5;

/// Hours of a day.
const DAY_H: usize = 24;

/// Most hours of weather that are laid out for a parcel on its way (choice: sixty days).
const MOST_HOURS: usize = 1440;

/// The air over the river from midnight of the day of release.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Sky {
    /// Equilibrium, C, and exchange, W/m2/C.
    Given(f64, f64),
    /// One air all the way.
    Steady(Air),
    /// An air for each hour; the last one holds on.
    Hours(Vec<Air>),
}

impl Sky {
    /// The air of a day and of the hours after it, and whether any of it had to be repeated from the day before.
    /// `None` where the day itself has none.
    pub(super) fn over(
        surface: &Surface,
        weather: &Weather,
        midnight: DateTime<FixedOffset>,
        hours: f64,
    ) -> Option<(Self, bool)> {
        let month = midnight.month();
        Some(match surface {
            Surface::Given { equilibrium_c, exchange_w_m2_c } => {
                (Self::Given(equilibrium_c.in_month(month), exchange_w_m2_c.in_month(month)), false)
            }
            Surface::Monthly(airs) => (Self::Steady(*airs.get(month as usize - 1)?), false),
            Surface::File(_) => {
                let wanted = (DAY_H..MOST_HOURS).find(|n| *n as f64 >= hours).unwrap_or(MOST_HOURS);
                let told = |i: usize| weather.at(midnight + TimeDelta::hours(i64::try_from(i).ok()?));
                let first = (0..DAY_H).find_map(told)?;
                let mut airs: Vec<Air> = Vec::with_capacity(wanted);
                let mut repeated = false;
                for i in 0..wanted {
                    let known = told(i);
                    repeated |= known.is_none();
                    let before = i.checked_sub(DAY_H).or(i.checked_sub(1)).and_then(|k| airs.get(k).copied());
                    airs.push(known.or(before).unwrap_or(first));
                }
                (Self::Hours(airs), repeated)
            }
        })
    }

    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "an hour of the way: not negative, and held at the end where it is too large"
    )]
    fn hour(clock_h: f64) -> usize {
        clock_h.max(0.0) as usize
    }

    /// Heat into water, W/m2, and how it changes with each degree of the water, W/m2/C: never above zero.
    pub(super) fn heat(&self, clock_h: f64, water_c: f64, shade: f64) -> (f64, f64) {
        let of = |air: &Air| {
            let net = |c: f64| budget(air, c, shade).net_w_m2();
            let slope = (net(water_c + HALF_STEP_C) - net(water_c - HALF_STEP_C)) / (2.0 * HALF_STEP_C);
            (net(water_c), slope)
        };
        match self {
            Self::Given(equilibrium_c, exchange) => (exchange * (equilibrium_c - water_c), -exchange),
            Self::Steady(air) => of(air),
            Self::Hours(airs) => airs.get(Self::hour(clock_h)).or(airs.last()).map_or((0.0, 0.0), of),
        }
    }

    /// Hours until the air changes.
    pub(super) fn lasts_h(&self, clock_h: f64) -> f64 {
        match self {
            Self::Hours(_) => clock_h.floor() + 1.0 - clock_h,
            _ => f64::INFINITY,
        }
    }
}
