//! A day's release cut into pieces that go down together: whole hours, and the ends of its parts.

use super::Part;
use super::water::Water;

/// Differences of time that do not count, h (choice).
const SAME_H: f64 = 1e-9;

/// Hours of a day (standard).
const DAY_H: f64 = 24.0;

/// Water that is released alike for an hour or less, or all day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Slice {
    /// Hours since midnight.
    pub(super) start_h: f64,
    pub(super) hours: f64,
    pub(super) water: Water,
}

impl Slice {
    /// When its parcel leaves, hours since midnight.
    pub(super) fn leaves_h(&self) -> f64 {
        self.start_h + 0.5 * self.hours
    }
}

/// The slices of a day: by the hour, or one.
pub(super) fn slices(parts: &[Part], demand_mg_l: f64, by_hour: bool) -> Vec<Slice> {
    let mut out = Vec::new();
    let mut start_h = 0.0;
    for (i, part) in parts.iter().enumerate() {
        let last = i + 1 == parts.len();
        let end_h = if last { DAY_H } else { (start_h + part.hours).min(DAY_H) };
        let water = Water {
            flow_m3s: part.flow_m3s,
            temperature_c: part.temperature_c,
            oxygen_mg_l: part.oxygen_mg_l,
            demand_mg_l,
        };
        while end_h - start_h > SAME_H {
            let next_h = if by_hour { end_h.min((start_h + SAME_H).floor() + 1.0) } else { end_h };
            out.push(Slice { start_h, hours: next_h - start_h, water });
            start_h = next_h;
        }
    }
    out
}
