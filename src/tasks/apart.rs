//! The cast against what the station below the dam recorded: the river is a blend of waters of the pool.
//!
//! Methods: `docs/methods.md`, section 2.

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::profile::Profile;
use crate::river::Conditions;
use crate::site::Site;
use crate::target::DAM;
use crate::units::say;

/// A flag where the day's mean of the tailwater record lies outside what the cast could blend to: below its coldest
/// water or above its warmest by more than `checks.tailwater`.
///
/// The record speaks on the day of the cast, else on the day before it, else on the day after (choice).
pub(super) fn tailwater(site: &Site, conditions: &Conditions, profile: &Profile) -> Option<Problem> {
    let cast_on = profile.taken?.with_timezone(&site.offset).date_naive();
    let record = conditions.observed.get(DAM)?;
    let days = record.temperature_c.days(site.offset, site.coverage).days;
    let near = [Some(cast_on), cast_on.pred_opt(), cast_on.succ_opt()];
    let (date, mean_c): (NaiveDate, f64) =
        near.into_iter().flatten().find_map(|date| Some((date, days.get(&date)?.mean)))?;
    let waters = || profile.samples.iter().map(|s| s.temperature_c);
    let (coldest_c, warmest_c) = (waters().reduce(f64::min)?, waters().reduce(f64::max)?);
    let off_c = (mean_c - warmest_c).max(coldest_c - mean_c);
    if off_c <= site.checks.tailwater_c {
        return None;
    }
    let (side, end_c) =
        if mean_c > warmest_c { ("above the warmest", warmest_c) } else { ("below the coldest", coldest_c) };
    let words = format!(
        "tailwater.csv has a mean of {} on {date}, {} {side} water of the cast, {} (flagged beyond {})",
        say::c(mean_c, 1),
        say::dc(off_c, 1),
        say::c(end_c, 1),
        say::dc(site.checks.tailwater_c, 1)
    );
    let cure = "look whether the cast's sensor or the station's is off, and whether their dates are right";
    Some(Problem::flag("tailwater-apart", words, cure).in_file(&profile.file))
}
