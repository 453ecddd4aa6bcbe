//! When a change begins.

use chrono::{DateTime, DurationRound, FixedOffset, TimeDelta};

use crate::files::cast::{TIME_CURE, parse_time};
use crate::tasks::{Context, Failure};

/// When the change begins: as typed, else when the decision does where that is not past, else with the next full hour.
pub(super) fn begins(
    context: &Context,
    typed: Option<&str>,
    decided: Option<DateTime<FixedOffset>>,
) -> Result<DateTime<FixedOffset>, Failure> {
    let offset = context.site().offset;
    if let Some(text) = typed {
        let at = parse_time(text, offset)
            .map_err(|words| Failure::Usage(format!("--at {text}: {words}; {TIME_CURE}")))?
            .with_timezone(&offset);
        if at < context.on {
            let on = context.on.format("%Y-%m-%dT%H:%M");
            return Err(Failure::Usage(format!("--at {text} lies before the moment of the answer, {on}")));
        }
        return Ok(at);
    }
    let on = context.on.with_timezone(&offset);
    Ok(decided
        .filter(|from| *from >= context.on)
        .map_or_else(|| full_hour(on), |from| from.with_timezone(&offset)))
}

/// The full hour that comes next, or that it is.
fn full_hour(on: DateTime<FixedOffset>) -> DateTime<FixedOffset> {
    match on.duration_trunc(TimeDelta::hours(1)) {
        Ok(hour) if hour < on => hour.checked_add_signed(TimeDelta::hours(1)).unwrap_or(on),
        _ => on,
    }
}
