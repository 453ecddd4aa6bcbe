//! Checks of targets.

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::site::{Raw, RawTarget, River};
use crate::target::{DAM, OxygenStatistic, Reference, Span, Target, YearDay};

use super::statistic::statistic;

/// The source that marks values as nobody's licence.
const EXAMPLE_ONLY: &str = "example only";
/// Highest floor of oxygen that is believed, mg/L (choice: above saturation of any fresh water at sea level).
const MOST_FLOOR_MG_L: f64 = 15.0;
/// The word for the temperature of a river in balance with the air.
const NATURAL: &str = "natural";

/// A target as it is checked, and problems at its keys.
pub(super) struct Checking<'a> {
    pub(super) rule: &'a RawTarget,
    pub(super) path: String,
    pub(super) problems: &'a mut Vec<Problem>,
}

impl Checking<'_> {
    pub(super) fn refuse(&mut self, kind: &'static str, key: &str, words: String, cure: impl Into<String>) {
        self.problems.push(Problem::refused(kind, words, cure).at(format!("{}.{key}", self.path)));
    }

    pub(super) fn day(&mut self, text: Option<&str>, key: &str, fallback: YearDay) -> Option<YearDay> {
        let Some(text) = text else { return Some(fallback) };
        let day = YearDay::parse(text);
        if day.is_none() {
            let words = format!("`{text}` is not a day of the year");
            self.refuse("date", key, words, "write month-day, such as 05-01");
        }
        day
    }

    /// The statistic of the oxygen where one is given; what is wrong with it refuses the site.
    fn oxygen_statistic(&mut self) -> Option<OxygenStatistic> {
        let t = self.rule;
        if t.oxygen_min_mg_l.is_some() && t.oxygen_min_share.is_some() {
            let words = "oxygen_min and oxygen_min_percent are both given".to_owned();
            self.refuse("target-oxygen", "oxygen_min_percent", words, "make two targets of them");
        }
        if t.oxygen_min_share.is_some_and(|share| share <= 0.0 || share > 2.0) {
            let words = "the floor of oxygen lies outside 0 to 200 % of saturation".to_owned();
            self.refuse("target-oxygen", "oxygen_min_percent", words, "write percent, such as 80");
        }
        // fresh water at 0 C holds 14.6 mg/L; more is a slip of the pen or of the unit
        if t.oxygen_min_mg_l.is_some_and(|least| least > MOST_FLOOR_MG_L) {
            let words = format!("a floor of oxygen above {MOST_FLOOR_MG_L} mg/L is kept by no water");
            self.refuse("target-oxygen", "oxygen_min", words, "write mg/L, or oxygen_min_percent");
        }
        let name = t.oxygen_statistic.as_deref()?;
        if t.oxygen_min_mg_l.is_none() && t.oxygen_min_share.is_none() {
            let words = "oxygen_statistic is given without a floor of oxygen".to_owned();
            self.refuse("target-oxygen", "oxygen_statistic", words, "give oxygen_min, or drop it");
        }
        let found = OxygenStatistic::parse(name);
        if found.is_none() {
            let known: Vec<&str> = OxygenStatistic::NAMES.iter().map(|(n, _)| *n).collect();
            let words = format!("`{name}` is not a statistic of oxygen");
            self.refuse("statistic", "oxygen_statistic", words, format!("use one of {}", known.join(", ")));
        }
        found
    }

    /// The day that ends it, and the event of that day; `None` where that is wrong.
    fn until(&mut self, raw: &Raw, span: Span) -> Option<(Option<NaiveDate>, Option<String>)> {
        let Some(text) = self.rule.until.as_deref() else { return Some((None, None)) };
        if let Ok(date) = text.parse::<NaiveDate>() {
            return self.within(date, span).then_some((Some(date), None));
        }
        let Some((name, dated)) = raw.events.iter().find(|(name, _)| name == text) else {
            let words = format!("`{text}` is neither a date nor one of the events");
            self.refuse("event", "until", words, "write YYYY-MM-DD, or name it under `events`");
            return None;
        };
        // a date that is none is told at the event
        let date = dated.as_deref().and_then(|date| date.parse::<NaiveDate>().ok());
        if dated.is_none() {
            let words = format!("`{name}` has no date yet: the rule holds to the end of its span");
            self.problems.push(Problem::note("event-open", words).at(format!("{}.until", self.path)));
        }
        date.is_none_or(|date| self.within(date, span)).then(|| (date, Some(name.clone())))
    }

    fn within(&mut self, date: NaiveDate, span: Span) -> bool {
        let within = span.contains(date);
        if !within {
            let words = format!("{date} lies outside the span from `from` to `to`");
            self.refuse("event", "until", words, "correct the date or the span");
        }
        within
    }
}

/// A target, checked; its point is checked with the river.
pub(super) fn target(raw: &Raw, i: usize, problems: &mut Vec<Problem>) -> Option<Target> {
    let t = raw.targets.get(i)?;
    let mut of = Checking { rule: t, path: format!("targets[{i}]"), problems };
    let from = of.day(t.from.as_deref(), "from", Span::YEAR.from);
    let to = of.day(t.to.as_deref(), "to", Span::YEAR.to);
    let statistic = statistic(&mut of, from);
    let oxygen_statistic = of.oxygen_statistic();
    if !t.years.is_empty() && raw.year_type.is_none() {
        let words = "the rule holds in some water years, and the site does not say which this is".to_owned();
        of.refuse("year-type", "years", words, "give year_type of the site");
    }
    if let Some(this) = raw.year_type.as_ref().filter(|this| !t.years.is_empty() && !t.years.contains(this)) {
        let years = t.years.join("`, `");
        let words =
            format!("the rule does not hold this water year: it is `{this}`, and `years` says `{years}`");
        of.problems.push(Problem::note("year-off", words).at(format!("{}.years", of.path)));
    }
    if t.priority == Some(0) {
        let words = "0 is no priority".to_owned();
        of.refuse("priority", "priority", words, "1 comes first; give 1 or more");
    }
    let span = Span { from: from?, to: to? };
    let (until, until_event) = of.until(raw, span)?;
    let point = t.point.clone().unwrap_or_else(|| DAM.into());
    let marked = t.source.as_deref().is_some_and(|s| s.trim().eq_ignore_ascii_case(EXAMPLE_ONLY));
    let built = Target {
        name: t.name.clone()?,
        span,
        statistic: statistic?,
        low_c: t.low_c,
        preferred_c: t.preferred_c,
        high_c: t.high_c,
        buffer_c: t.buffer_c.unwrap_or(0.0),
        oxygen_min_mg_l: t.oxygen_min_mg_l,
        oxygen_min_share: t.oxygen_min_share,
        oxygen_statistic,
        point,
        reference: t.reference.as_deref().map(|name| match name {
            NATURAL => Reference::Natural,
            name => Reference::Stream(name.to_owned()),
        }),
        years: t.years.clone(),
        until,
        until_event,
        soft: t.soft,
        priority: t.priority.and_then(|p| u32::try_from(p).ok()).unwrap_or(1),
        authority: t.authority.clone(),
        source: t.source.clone(),
        example: t.example.unwrap_or(marked || raw.demonstration),
    };
    problems.extend(built.problems(&format!("targets[{i}]")));
    Some(built)
}

/// Events with their dates; those without one have not come yet.
pub(super) fn events(raw: &Raw, problems: &mut Vec<Problem>) -> Vec<(String, NaiveDate)> {
    let mut dated = Vec::new();
    for (name, date) in &raw.events {
        let Some(text) = date else { continue };
        match text.parse() {
            Ok(date) => dated.push((name.clone(), date)),
            Err(_) => problems.push(
                Problem::refused("date", format!("`{text}` is not a date"), "write YYYY-MM-DD")
                    .at(format!("events.{name}")),
            ),
        }
    }
    dated
}

/// References must name a side stream or a point of the river; the natural temperature needs to know the air.
pub(super) fn references(targets: &[Option<Target>], river: Option<&River>, problems: &mut Vec<Problem>) {
    for (i, rule) in targets.iter().enumerate() {
        let Some(reference) = rule.as_ref().and_then(|rule| rule.reference.as_ref()) else { continue };
        let mut refuse = |words: String, cure: &str| {
            problems.push(Problem::refused("reference", words, cure).at(format!("targets[{i}].reference")));
        };
        match reference {
            Reference::Natural if river.is_none_or(|river| river.surface.is_none()) => refuse(
                "the natural temperature is that of a river in balance with the air, which is not given"
                    .into(),
                "give `equilibrium`, `monthly` or `weather` of the river",
            ),
            Reference::Stream(name) if !river.is_some_and(|river| names(river).any(|n| n == name)) => {
                let words = format!("no side stream or point is named `{name}`");
                refuse(words, "use `natural`, or a name under `river`");
            }
            _ => {}
        }
    }
}

/// Names of the side streams and points of a river.
fn names(river: &River) -> impl Iterator<Item = &str> {
    let streams = river.reaches.iter().flat_map(|reach| &reach.inflows).map(|inflow| inflow.name.as_str());
    streams.chain(river.points.iter().map(|point| point.name.as_str()))
}
