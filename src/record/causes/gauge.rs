//! Causes at the sensors: of the gauge, or of the cast.
//!
//! Methods: `docs/methods.md`, section 9.

use crate::units::say;

use super::clues::Clues;
use super::works::unexplained_step;
use super::{Weighed, days, mean, most};

/// Longest time without the smallest change, hours (choice: as readers of records take it).
const STUCK_H: f64 = 12.0;
/// A cast whose waters differ by no more is of one temperature, C (choice).
const MIXED_C: f64 = 0.3;

/// A sensor that reads beside the water.
pub(super) fn sensor(clues: &Clues) -> Weighed {
    let mut out = Weighed::new("sensor", "hold a second thermometer beside the gauge for an hour");
    let n = clues.days.len();
    let flat: Vec<f64> = clues.days.iter().map(super::Clue::flat_h).filter(|h| *h >= STUCK_H).collect();
    if let Some(longest) = flat.iter().copied().reduce(f64::max) {
        let (count, hours) = (days(flat.len()), format!("{longest:.0} hours on end"));
        out.pro(3.0, format!("on {count} the gauge read the same to its last digit, {hours} at the longest"));
    } else if let (Some(range), Some(usual)) =
        (mean(clues.days.iter().filter_map(super::Clue::range_c)), clues.usual_range_c)
    {
        let (range, usual) = (say::dc(range, 1), say::dc(usual, 1));
        out.con(
            0.5,
            format!("the gauge is alive: it moves by {range} in the course of a day, and {usual} is usual"),
        );
    }
    let mixed = clues.days.iter().filter(|day| day.cast_range_c <= MIXED_C).count();
    if most(mixed, n) {
        let words = "where no gate, zone or leak makes a difference";
        out.pro(2.0, format!("on {} the pool was of one temperature, {words}", days(mixed)));
    }
    if clues.suspect {
        out.pro(2.0, "the mixed pool speaks against a sensor of these days".into());
    }
    if let Some(words) = unexplained_step(clues) {
        out.pro(1.5, format!("{words}, and no single gate gives it"));
    }
    let oxygen: Vec<bool> = clues.days.iter().filter_map(|day| day.oxygen_inside).collect();
    let inside = oxygen.iter().filter(|inside| **inside).count();
    if most(inside, oxygen.len()) {
        let all = days(oxygen.len());
        out.pro(0.3, format!("the oxygen of the same gauge lay inside its band on {inside} of {all}: other water would show there too"));
    } else if !oxygen.is_empty() {
        let all = days(oxygen.len());
        out.con(
            0.3,
            format!(
                "the oxygen of the same gauge lay outside its band too, on {} of {all}",
                oxygen.len() - inside
            ),
        );
    }
    out
}
