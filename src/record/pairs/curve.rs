//! The release of one day as a function of the zone factor.
//!
//! Methods: `docs/methods.md`, section 9.

use crate::mix::{Blend, Drawn, Setting, draw_levels, levels, release};
use crate::profile::Profile;
use crate::site::Site;
use crate::withdrawal::CrestForm;

/// Range of the zone factor that is learned (choice: that of the members of the band).
pub const ZONE_FACTORS: [f64; 2] = [0.70, 1.15];
/// Release with zones thinner and thicker than published: a parabola through those of the least factor, of 1 and of
/// the greatest, and straight on beyond these.
#[derive(Debug, Clone, PartialEq)]
pub struct Curve {
    /// Temperature, C.
    temperature_c: Parabola,
    /// Oxygen below the dam, mg/L; `None` where any of the three is unknown.
    oxygen_mg_l: Option<Parabola>,
}

/// Middle, slope and bend about the zones as published.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Parabola([f64; 3]);

impl Parabola {
    /// Through the values at the least factor, at 1 and at the greatest.
    fn through([low, middle, high]: [f64; 3]) -> Self {
        let [a, b] = ZONE_FACTORS.map(|factor| factor - 1.0);
        let slopes = [(low - middle) / a, (high - middle) / b];
        let bend = (slopes[1] - slopes[0]) / (b - a);
        Self([middle, slopes[0] - bend * a, bend])
    }

    fn at(self, factor: f64) -> f64 {
        let held = factor.clamp(ZONE_FACTORS[0], ZONE_FACTORS[1]);
        let [middle, slope, bend] = self.0;
        let x = held - 1.0;
        middle + x * (slope + x * bend) + (factor - held) * self.slope(held)
    }

    fn slope(self, factor: f64) -> f64 {
        self.0[1] + 2.0 * self.0[2] * (factor.clamp(ZONE_FACTORS[0], ZONE_FACTORS[1]) - 1.0)
    }
}

impl Curve {
    /// The curve of a setting on a profile, with what its levels draw and the release as published. `None` where
    /// nothing flows.
    pub(super) fn of(
        site: &Site,
        groups: &[Vec<usize>],
        profile: &Profile,
        setting: &Setting,
    ) -> Option<(Self, Vec<Drawn>, Blend)> {
        let levels = levels(site, groups, setting, profile.pool_m, 0.5, CrestForm::Overflow);
        let at = |factor: f64| {
            let drawn = draw_levels(&profile.column, &levels, factor);
            let release = release(&drawn)?.aerated(site, &drawn, 0.5);
            Some((drawn, release))
        };
        let (drawn, published) = at(1.0)?;
        let [low, high] = [at(ZONE_FACTORS[0])?.1, at(ZONE_FACTORS[1])?.1];
        let three = [&low, &published, &high];
        let oxygen = three.map(|release| release.oxygen_below_mg_l);
        let curve = Self {
            temperature_c: Parabola::through(three.map(|release| release.temperature_c)),
            oxygen_mg_l: match oxygen {
                [Some(low), Some(middle), Some(high)] => Some(Parabola::through([low, middle, high])),
                _ => None,
            },
        };
        Some((curve, drawn, published))
    }

    /// Temperature (C) and oxygen (mg/L) at a factor.
    pub fn at(&self, factor: f64) -> (f64, Option<f64>) {
        (self.temperature_c.at(factor), self.oxygen_mg_l.map(|oxygen| oxygen.at(factor)))
    }

    /// How the temperature changes with the factor, C.
    pub fn slope_c(&self, factor: f64) -> f64 {
        self.temperature_c.slope(factor)
    }
}
