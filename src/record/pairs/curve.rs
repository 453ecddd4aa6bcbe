//! The release of one day as a function of the zone factor.
//!
//! Methods: `docs/methods.md`, section 9.

use crate::mix::{Blend, Drawn, Setting, draw_levels, levels, release};
use crate::profile::Profile;
use crate::site::Site;
use crate::withdrawal::CrestForm;

/// Range of the zone factor that is learned (choice: that of the members of the band).
pub const ZONE_FACTORS: [f64; 2] = [0.70, 1.15];
/// Between two factors that a curve is computed for (choice).
const STEP: f64 = 0.05;
/// Factors that a curve is computed for.
const POINTS: usize = 10;
/// Which of them is 1, the zones as published.
const PUBLISHED: usize = 6;

/// Release with zones thinner and thicker than published: straight between the factors it was computed for, and
/// straight on beyond them.
#[derive(Debug, Clone, PartialEq)]
pub struct Curve {
    /// Temperature (C) and oxygen below the dam (mg/L) at each factor.
    points: [(f64, Option<f64>); POINTS],
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
        let mut points = [(published.temperature_c, published.oxygen_below_mg_l); POINTS];
        for (i, point) in points.iter_mut().enumerate().filter(|(i, _)| *i != PUBLISHED) {
            let release = at(ZONE_FACTORS[0] + STEP * i as f64)?.1;
            *point = (release.temperature_c, release.oxygen_below_mg_l);
        }
        Some((Self { points }, drawn, published))
    }

    /// Temperature (C) and oxygen (mg/L) at a factor.
    pub fn at(&self, factor: f64) -> (f64, Option<f64>) {
        let place = (factor - ZONE_FACTORS[0]) / STEP;
        let below = (1..POINTS - 1).take_while(|&i| i as f64 <= place).count();
        let (a, b) = (self.points[below], self.points[below + 1]);
        let share = place - below as f64;
        let between = |a: f64, b: f64| a + share * (b - a);
        (between(a.0, b.0), a.1.zip(b.1).map(|(a, b)| between(a, b)))
    }

    /// Its straight pieces: the factors at their ends and the temperatures there, C.
    pub(in crate::record) fn pieces(&self) -> impl Iterator<Item = ([f64; 2], [f64; 2])> {
        let factor = |i: usize| ZONE_FACTORS[0] + STEP * i as f64;
        let pieces = self.points.windows(2).enumerate();
        pieces.map(move |(i, pair)| ([factor(i), factor(i + 1)], [pair[0].0, pair[1].0]))
    }
}
