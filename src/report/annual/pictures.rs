//! Pictures of a season: the gauge with what was expected, and the pool.

use chrono::NaiveDate;

use crate::report::page::{Block, DaysPicture, Picture, Shows};
use crate::report::pooled::pooled;
use crate::report::text::log::{apart, signed};
use crate::target::{DAM, Statistic};
use crate::tasks::Context;
use crate::tasks::log::PastDay;
use crate::tasks::report::ReportAnswer;
use crate::units::{Dimension, show};

use super::pictured;

/// The gauge by day over the expected band, the targets of daily means at the dam, and the decisions; none where neither
/// gauge nor computing tells a day.
pub(super) fn gauge(context: &Context, answer: &ReportAnswer) -> Vec<Block> {
    let system = context.system;
    let degree = system.unit(Dimension::Temperature);
    let days = &answer.past.days;
    let line = |read: fn(&PastDay) -> Option<f64>| -> Vec<(NaiveDate, f64)> {
        days.iter().filter_map(|day| Some((day.date, degree.from_si(read(day)?)))).collect()
    };
    let (measured, expected) = (line(|day| day.measured_c), line(|day| day.expected_c));
    if measured.is_empty() && expected.is_empty() {
        return Vec::new();
    }
    let band = days.iter().filter_map(|day| {
        let (low, high) = day.band_c?;
        Some((day.date, degree.from_si(low), degree.from_si(high)))
    });
    let score = &answer.past.temperature.all;
    let words = match score.misfit {
        None => "No day has both a figure of the gauge and what was expected.".to_owned(),
        Some(misfit) => format!(
            "On {} days with both the gauge read {} beside what was expected on the mean, {} root mean square, and lay \
             inside the band on {} of {}.",
            score.n,
            signed(misfit.bias, system),
            apart(misfit.rmse, system),
            score.inside,
            score.with_band
        ),
    };
    let marks = answer.decided(context).into_iter().map(|decided| {
        (decided.decision.from.with_timezone(&context.site().offset).date_naive(), decided.id.to_string())
    });
    let inside = |(date, _): &(NaiveDate, String)| (answer.days.0..=answer.days.1).contains(date);
    vec![pictured(Picture {
        title: "The release at the gauge below the dam, and as it was expected".to_owned(),
        words,
        shows: Shows::Days(DaysPicture {
            axis: format!("release, {}", degree.symbol()),
            bands: vec![("expected, 10-90 %".to_owned(), band.collect())],
            lines: vec![("gauge, daily mean".to_owned(), measured), ("expected".to_owned(), expected)],
            limits: limits(context, answer),
            marks: marks.filter(inside).collect(),
        }),
    })]
}

/// Bounds of the hard targets of the daily mean at the dam, as long as they are valid.
fn limits(context: &Context, answer: &ReportAnswer) -> Vec<(String, NaiveDate, NaiveDate, f64)> {
    let site = context.site();
    let degree = context.system.unit(Dimension::Temperature);
    let dates = || answer.days.0.iter_days().take_while(|date| *date <= answer.days.1);
    let mut out: Vec<(String, NaiveDate, NaiveDate, f64)> = Vec::new();
    let is_drawn = |rule: &&crate::target::Target| {
        rule.point == DAM && !rule.soft && rule.is_of_temperature() && rule.statistic == Statistic::DailyMean
    };
    for rule in site.targets.iter().filter(is_drawn) {
        for (name, bound) in [("least asked", rule.low_c), ("greatest asked", rule.high_c)] {
            let Some(bound) = bound.map(|c| degree.from_si(c)) else { continue };
            let mut last: Option<(NaiveDate, NaiveDate)> = None;
            for date in dates().filter(|date| rule.valid_on(*date, site.year_type.as_deref())) {
                last = match last {
                    Some((from, to)) if to.succ_opt() == Some(date) => Some((from, date)),
                    Some((from, to)) => {
                        out.push((name.to_owned(), from, to, bound));
                        Some((date, date))
                    }
                    None => Some((date, date)),
                };
            }
            out.extend(last.map(|(from, to)| (name.to_owned(), from, to, bound)));
        }
    }
    out
}

/// The pool by the cast that the report is made with.
pub(super) fn pool(context: &Context) -> Block {
    let (site, column, system) = (context.site(), &context.profile.column, context.system);
    let (bed_m, surface_m) = (column.bed_m(), column.surface_m());
    let set = context.standing().map(|decided| &decided.decision.chosen);
    let opening = |index: usize| {
        let (set, name) = (set?, &site.outlets.get(index)?.name);
        set.set.get(name).filter(|flow_m3s| **flow_m3s > 0.0)?;
        Some(set.open.get(name).map_or(1.0, |percent| percent / 100.0))
    };
    let warm = |z_m: f64| show(column.reading(z_m).temperature_c, Dimension::Temperature, system, 1);
    pictured(Picture {
        title: format!("The pool at the cast of {}", super::data::taken(context)),
        words: format!(
            "Bed at {}, surface at {}; surface water {}, deepest water {}.",
            show(bed_m, Dimension::Length, system, 1),
            show(surface_m, Dimension::Length, system, 1),
            warm(surface_m),
            warm(bed_m)
        ),
        shows: Shows::Pool(pooled(context, opening, Vec::new())),
    })
}
