//! A season told for those who meet over it once a year: targets against what was observed, what was decided, how well
//! it was foreseen, what the record teaches.

use chrono::{Datelike, NaiveDate};

use crate::problem::Problem;
use crate::rank::Progress;
use crate::record::Decided;
use crate::record::line::Event;
use crate::target::Target;

use super::log::{Past, date, past_within};
use super::river::{Observed, observed_on};
use super::{Context, Failure};

/// The days wanted, as typed; the year of the answer up to its date when absent.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct ReportAsked {
    /// First day.
    pub from: Option<String>,
    /// Last day.
    pub to: Option<String>,
}

/// A season.
#[derive(Debug, Clone)]
pub struct ReportAnswer {
    /// First and last day of those wanted that anything is told of.
    pub days: (NaiveDate, NaiveDate),
    /// What happened on them.
    pub past: Past,
    /// Every target with a record at its point, held against it on these days.
    pub observed: Vec<Observed>,
    /// Targets valid on some of these days that no record tells of, by their places in the site.
    pub unobserved: Vec<usize>,
}

/// Tells a season from its log, its gauges and its casts.
///
/// # Errors
/// Dates that cannot be understood, days of which nothing is told; a caller who stops it.
pub fn report(context: &Context, asked: &ReportAsked, progress: Progress) -> Result<ReportAnswer, Failure> {
    let on = context.on.date_naive();
    let from = asked.from.as_deref().map(|text| date(context, text, "--from")).transpose()?;
    let to = asked.to.as_deref().map(|text| date(context, text, "--to")).transpose()?;
    let last = to.unwrap_or(on);
    let begins = || NaiveDate::from_ymd_opt(last.min(on).year(), 1, 1).unwrap_or(last);
    let first = from.unwrap_or_else(begins);
    if last < first {
        return Err(Failure::Usage(format!("--to {last} lies before {first}, where the report begins")));
    }
    let past = past_within(context, (first, last), progress)?;
    let (Some(begins), Some(ends)) = (past.days.first(), past.days.last()) else {
        let words =
            format!("of {first} to {last} nothing is told: no decision, no gate schedule and no gauge");
        let cure = "name other days with --from and --to; decisions are kept by `gatemix log`, what the gauge read in \
                    tailwater.csv";
        return Err(Failure::Refused(vec![Problem::refused("nothing-told", words, cure)], context.system));
    };
    let days = (begins.date, ends.date);
    let is_inside = |date: NaiveDate| (days.0..=days.1).contains(&date);
    let observed = observed_on(context, &is_inside);
    let year = context.site().year_type.as_deref();
    let is_told =
        |rule: &Target| days.0.iter_days().take_while(|d| *d <= days.1).any(|d| rule.valid_on(d, year));
    let rules = context.site().targets.iter().enumerate();
    let unobserved = rules
        .filter(|(index, rule)| !observed.iter().any(|o| o.target == *index) && is_told(rule))
        .map(|(index, _)| index)
        .collect();
    Ok(ReportAnswer { days, past, observed, unobserved })
}

impl ReportAnswer {
    /// The decisions that stood on these days, in order.
    pub fn decided<'c>(&self, context: &'c Context) -> Vec<Decided<'c>> {
        let ids: Vec<u64> = self.past.decisions.iter().map(|turned| turned.id).collect();
        context.log.log.decisions().into_iter().filter(|decided| ids.contains(&decided.id)).collect()
    }

    /// The events of these days, in order.
    pub fn events<'c>(&self, context: &'c Context) -> Vec<&'c Event> {
        let offset = context.site().offset;
        let touches = |event: &&Event| {
            let begins = event.from.with_timezone(&offset).date_naive();
            begins <= self.days.1 && event.until.is_none_or(|until| self.days.0 <= until)
        };
        context.log.log.events().into_iter().filter(touches).collect()
    }
}
