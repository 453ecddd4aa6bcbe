//! The axis of values of curves: its scale, its ticks, how large values are counted.
//!
//! Figures of the layout are choices.

use crate::plot::Scale;
use crate::units::{Dimension, System, Unit};

/// Values of an axis from which on volumes are counted in thousands.
const LARGE: f64 = 5000.0;
const THOUSAND: f64 = 1000.0;
/// Room over and under curves, as a share of what they span.
const MARGIN: f64 = 0.04;

/// Row of a value, from the top of so many.
pub(in crate::tui::draw) fn row(scale: &Scale, value: f64, rows: usize) -> usize {
    rows.saturating_sub(1 + scale.cell(value, rows).unwrap_or(0))
}

/// Value in the middle of a row, counted from the top of so many.
pub(in crate::tui::draw) fn middle(scale: &Scale, row: usize, rows: usize) -> f64 {
    scale.value(1.0 - (row as f64 + 0.5) / rows as f64)
}

/// How a value is counted on an axis, and the name of that: volumes in what leaves few digits.
pub(in crate::tui::draw) fn counted(dimension: Dimension, system: System, greatest: f64) -> (f64, String) {
    let unit = system.unit(dimension);
    let large = unit.from_si(greatest).abs() >= LARGE;
    match (dimension, system) {
        (Dimension::Volume, System::Si) => {
            (Unit::CubicHectometre.to_si(1.0), Unit::CubicHectometre.symbol().to_owned())
        }
        (Dimension::Volume, System::Us) if large => (THOUSAND, format!("{THOUSAND:.0} {}", unit.symbol())),
        _ => (1.0, unit.symbol().to_owned()),
    }
}

/// The scale of values in the unit shown: as narrow as they allow, so that little of the picture is empty.
pub(in crate::tui::draw) fn scale(low: f64, high: f64) -> Option<Scale> {
    let room = (MARGIN * (high - low)).max(1e-6 * high.abs().max(1.0));
    Scale::new(low - room, high + room)
}

/// Ticks that so many rows have room for.
pub(in crate::tui::draw) fn steps(rows: usize) -> u32 {
    u32::try_from(rows / 2).unwrap_or(4).clamp(2, 5)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn scenario_volumes_are_counted_in_what_is_read_at_a_glance() {
        let of = |m3, system| counted(Dimension::Volume, system, m3);
        assert_eq!(of(5e7, System::Si), (1e6, "hm3".into()));
        assert_eq!(of(5e7, System::Us), (1e3, "1000 acre-ft".into()));
        assert_eq!(of(9e5, System::Us), (1.0, "acre-ft".into()));
        assert_eq!(counted(Dimension::Temperature, System::Us, 2e7), (1.0, "F".into()));
    }
}
