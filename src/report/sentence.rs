//! Sentences that every output shares.

use crate::problem::{Problem, Weight};
use crate::site::Site;
use crate::tasks::rank::Unsure;
use crate::units::say;

/// What every output says, on one line.
pub fn caution() -> &'static str {
    "Advisory estimate. Operations defer to the dam-safety authority and the approved water control plan; a responsible licensed engineer decides. Warn downstream users of changes in stage and cold water."
}

/// The longest form of the caution that one line of so many cells holds; the shortest where none fits.
pub fn caution_within(cells: usize) -> &'static str {
    const SHORTER: [&str; 5] = [
        "Advisory estimate: the dam-safety authority and the approved water control plan rule; a licensed engineer decides.",
        "Advisory: dam safety and water control plan rule; a licensed engineer decides.",
        "Advisory: dam safety comes first; an engineer decides.",
        "Advisory; an engineer decides.",
        "Advisory estimate",
    ];
    let fits = |text: &&str| text.chars().count() <= cells;
    std::iter::once(caution()).chain(SHORTER).find(fits).unwrap_or(SHORTER[4])
}

/// `1 day`, `14 days`: days to the nearest.
pub fn days(days: f64) -> String {
    let figure = format!("{days:.0}");
    let plural = if figure == "1" { "" } else { "s" };
    format!("{figure} day{plural}")
}

/// Flags and notes of a list, flags first, each in the order it was found.
pub fn flags_of(problems: &[Problem]) -> Vec<&Problem> {
    let mut out: Vec<&Problem> = problems.iter().collect();
    out.sort_by_key(|p| std::cmp::Reverse(p.weight));
    out.retain(|p| p.weight != Weight::Refused);
    out
}

/// What a gate whose position is not confirmed would change; quantities as [`say`] marks them.
pub(super) fn unsure_words(site: &Site, unsure: &Unsure) -> String {
    let name = &site.outlets[unsure.outlet].name;
    let (taken, otherwise) = if unsure.open { ("open", "shut") } else { ("shut", "fully open") };
    let gives = match unsure.otherwise {
        None => "nothing flows".to_owned(),
        Some((t, None)) => format!("{}, oxygen unknown", say::c(t, 1)),
        Some((t, Some(oxygen))) => format!("{}, oxygen {oxygen:.1} mg/L", say::c(t, 1)),
    };
    format!("{name} is not confirmed {taken}; if it is {otherwise}: {gives}")
}
