//! Why days of a season are not judged against a rule.

use crate::river::Figures;
use crate::season::{SeasonDay, TargetTally};
use crate::site::Site;
use crate::target::{DAM, Standing, Statistic, Target};

/// Why days are not judged against the temperature of a rule, or against its oxygen.
pub(super) fn why(
    site: &Site,
    days: &[SeasonDay],
    rule: &Target,
    told: &TargetTally,
    oxygen: bool,
) -> String {
    let points = site.river.as_ref().map_or(&[][..], |river| &river.points);
    let point = points.iter().position(|p| p.name == rule.point).filter(|_| rule.point != DAM);
    let arrives = |day: &SeasonDay| -> Option<Figures> { day.points.as_ref()?.get(point?).copied() };
    if rule.point != DAM && !days.iter().any(|day| arrives(day).is_some()) {
        return "what arrives there is not known".to_owned();
    }
    let oxygen_known = |day: &SeasonDay| match point {
        Some(_) => arrives(day).is_some_and(|f| f.oxygen_mean_mg_l.is_some()),
        None => day.release.is_some_and(|release| release.oxygen_below_mg_l.is_some()),
    };
    if oxygen && !days.iter().any(oxygen_known) {
        return "the oxygen is not known".to_owned();
    }
    let marks = if oxygen { &told.oxygen_days } else { &told.temperature_days };
    let is_closed = |date| days.iter().any(|day| day.date == date && day.release.is_none());
    let unknown = || marks.iter().filter(|(_, mark)| mark.standing == Standing::Unknown);
    if unknown().next().is_some() && unknown().all(|(date, _)| is_closed(*date)) {
        return "nothing is released".to_owned();
    }
    let begun = marks.iter().position(|(_, mark)| mark.standing != Standing::Unknown);
    let first_only = begun.is_some_and(|at| marks[at..].iter().all(|(_, m)| m.standing != Standing::Unknown));
    if first_only {
        return match (oxygen, rule.statistic) {
            (false, Statistic::MeanOfDays(count)) => format!("the first of a mean of {count} days"),
            _ => "the first, which have too few before them".to_owned(),
        };
    }
    let hours_known = |day: &SeasonDay| match point {
        Some(_) => arrives(day).is_some_and(|f| f.range_c.is_some()),
        None => true,
    };
    if !days.iter().any(hours_known) {
        return "the hours of a day are not known".to_owned();
    }
    if rule.reference.is_some() {
        return "what it is held against is not known".to_owned();
    }
    "too little is known of them".to_owned()
}
