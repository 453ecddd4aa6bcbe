//! Checks of what a conduit does to oxygen.

use crate::problem::Problem;
use crate::site::{Aeration, Raw, RawAeration};
use crate::units::say;
use crate::water::{self, GREATEST_FALL_M};

/// Highest fall that is believed, m (choice).
const HIGHEST_FALL_M: f64 = 500.0;
/// Greatest factor of water quality and of form that is believed (recalled: both lie below 2).
const GREATEST_FACTOR: f64 = 2.0;
/// Greatest gain that is believed, mg/L (choice: cold water holds 15).
const GREATEST_GAIN_MG_L: f64 = 15.0;

/// The gain told at a path such as `wells[0]`.
pub(super) fn aeration(
    raw: Option<&RawAeration>,
    path: &str,
    problems: &mut Vec<Problem>,
) -> Option<Aeration> {
    let raw = raw?;
    let before = problems.len();
    let mut refuse = |key: &str, words: String, cure: &str| {
        let at = if key.is_empty() { format!("{path}.aeration") } else { format!("{path}.aeration.{key}") };
        problems.push(Problem::refused("aeration", words, cure).at(at));
    };
    let one = "give one of `fall`, `efficiency` and `gain`";
    let by = match (raw.fall_m, raw.efficiency, raw.gain_mg_l) {
        (Some(height_m), None, None) => {
            let (quality, form) = (raw.quality.unwrap_or(1.0), raw.form.unwrap_or(1.0));
            Some((water::Aeration::Fall { height_m, quality, weir: form }, "fall"))
        }
        (None, Some(share), None) => Some((water::Aeration::Efficiency(share), "efficiency")),
        (None, None, Some(gain)) => Some((water::Aeration::Gain(gain), "gain")),
        (None, None, None) => {
            refuse("", "nothing says what the water gains".to_owned(), one);
            None
        }
        _ => {
            refuse("", "the gain is told in more than one way".to_owned(), one);
            None
        }
    };
    let (by, key) = by?;
    let (figure, most, believed) = match by {
        water::Aeration::Fall { height_m, quality, weir } => {
            for (key, factor) in [("quality", quality), ("form", weir)] {
                if !(0.0..=GREATEST_FACTOR).contains(&factor) {
                    let words = format!("{key} lies outside 0 to {GREATEST_FACTOR:.0}");
                    refuse(key, words, "give 1 for slightly polluted water, and 1 for a free fall");
                }
            }
            if raw.range.is_some() {
                refuse("range", "a fall has no range".to_owned(), "give an efficiency with its range");
            }
            (height_m, HIGHEST_FALL_M, format!("0 to {}", say::m(HIGHEST_FALL_M, 0)))
        }
        water::Aeration::Efficiency(share) => (share, 1.0, "0 to 100 %".to_owned()),
        water::Aeration::Gain(gain) => {
            (gain, GREATEST_GAIN_MG_L, format!("0 to {GREATEST_GAIN_MG_L:.0} mg/L"))
        }
    };
    if key != "fall" {
        for factor in [raw.quality.map(|_| "quality"), raw.form.map(|_| "form")].into_iter().flatten() {
            refuse(factor, format!("{factor} belongs to a fall"), "leave it out, or give the `fall`");
        }
    }
    if !(0.0..=most).contains(&figure) {
        refuse(key, format!("{key} lies outside {believed}"), "correct the figure");
    }
    if let Some((low, high)) = raw.range.filter(|_| key != "fall")
        && !(low >= 0.0 && low <= figure && figure <= high && high <= most)
    {
        let words = format!("{key} lies outside its range, or the range outside {believed}");
        refuse("range", words, "give the range as [least, most] around the figure");
    }
    if problems.len() > before {
        return None;
    }
    if key == "fall" && figure > GREATEST_FALL_M {
        let words = format!(
            "the form for falls ends near {}: a fall of {} counts as that",
            say::m(GREATEST_FALL_M, 1),
            say::m(figure, 1)
        );
        let cure = "give an efficiency measured at the site";
        problems.push(Problem::flag("fall-held", words, cure).at(format!("{path}.aeration.fall")));
    }
    Some(Aeration { by, range: raw.range })
}

/// The conduit of a well does it, not its gates.
pub(super) fn on_gates(raw: &Raw, problems: &mut Vec<Problem>) {
    for (i, outlet) in raw.outlets.iter().enumerate() {
        if let (Some(well), Some(_)) = (&outlet.well, &outlet.aeration) {
            let words = format!("the water gains oxygen below the well, not at a gate of `{well}`");
            let cure = "give `aeration` to the well";
            problems.push(Problem::refused("aeration", words, cure).at(format!("outlets[{i}].aeration")));
        }
    }
}
