//! What the time line of the record is drawn from.

use ratatui::layout::Rect;

use crate::plot::Stroke;
use crate::tasks::log::PastDay;
use crate::tui::draw::past::{DayMark, PastPicture};
use crate::tui::draw::through::{CurvesThrough, LineThrough};
use crate::tui::look::Role;

use super::super::scroll::{Lines, say};
use super::Screen;

/// How the gauge is drawn, and what was expected with and without what is learned.
pub(super) const GAUGE: (Stroke, &str) = (Stroke::Broad, "*");
pub(super) const EXPECTED: (Stroke, &str) = (Stroke::Thin, "-");
const PLAIN: (Stroke, &str) = (Stroke::Dotted, ".");

/// A day of the past by what is looked at.
#[derive(Debug, Clone, Copy)]
pub(super) struct Told {
    /// What was expected, with what is applied of the learned.
    pub(super) expected: Option<f64>,
    /// The same with nothing learned, where anything is applied.
    pub(super) plain: Option<f64>,
    /// Its band.
    pub(super) band: Option<(f64, f64)>,
    /// What the gauge read.
    pub(super) measured: Option<f64>,
}

impl Told {
    /// Whether the gauge lies outside the band; `None` where nobody knows.
    pub(super) fn outside(&self) -> Option<bool> {
        let ((low, high), measured) = (self.band?, self.measured?);
        Some(!(low..=high).contains(&measured))
    }
}

impl Screen<'_> {
    /// A day by what is looked at.
    pub(super) fn told(&self, day: &PastDay) -> Told {
        if self.session.log.oxygen {
            Told {
                expected: day.expected_mg_l,
                plain: day.plain_mg_l,
                band: day.band_mg_l,
                measured: day.measured_mg_l,
            }
        } else {
            Told { expected: day.expected_c, plain: day.plain_c, band: day.band_c, measured: day.measured_c }
        }
    }

    /// Whether something that nobody planned is why a day is left out.
    pub(super) fn is_event(&self, day: &PastDay) -> bool {
        day.left_out.is_some() && self.session.context().log.log.event_on(day.date).is_some()
    }
}

/// The time line; `None` where there is no day to show. The scale holds the whole past, so that zooming moves nothing
/// up or down.
pub(super) fn picture(screen: &Screen) -> Option<PastPicture> {
    let session = screen.session;
    let (all, span) = (session.past_days(), session.past_span());
    let days = all.get(span.clone()).filter(|days| !days.is_empty())?;
    let first = days.first()?.date;
    let told: Vec<Told> = days.iter().map(|day| screen.told(day)).collect();
    let values = all.iter().map(|day| screen.told(day)).flat_map(|told| {
        let band = told.band.map(|(low, high)| [low, high]);
        [told.expected, told.plain, told.measured].into_iter().flatten().chain(band.into_iter().flatten())
    });
    let ends = values.fold(None, |ends: Option<(f64, f64)>, v| {
        Some(ends.map_or((v, v), |(low, high)| (low.min(v), high.max(v))))
    });
    let line =
        |name: &str, (stroke, mark): (Stroke, &'static str), role, of: &dyn Fn(&Told) -> Option<f64>| {
            LineThrough { name: name.to_owned(), role, stroke, mark, values: told.iter().map(of).collect() }
        };
    let gauge = if session.log.oxygen { Role::Oxygen } else { Role::Temperature };
    let mut lines = vec![
        line("expected", EXPECTED, Role::Range, &|t| t.expected),
        line("gauge", GAUGE, gauge, &|t| t.measured),
    ];
    if told.iter().any(|t| t.plain.is_some()) {
        lines.insert(0, line("nothing learned", PLAIN, Role::Plain, &|t| t.plain));
    }
    let band = told.iter().map(|t| t.band.map(|(low, high)| [low, high])).collect();
    Some(PastPicture {
        system: screen.system(),
        first,
        days: days.len(),
        cursor: session.past_read().and_then(|at| at.checked_sub(span.start)),
        curves: CurvesThrough {
            name: if session.log.oxygen { "oxygen" } else { "release" }.to_owned(),
            dimension: screen.dimension(),
            span: ends.unwrap_or((0.0, 1.0)),
            shaded: ("expected band".to_owned(), band),
            lines,
        },
        decided: decided(screen, days),
        marks: days.iter().map(|day| mark(screen, day)).collect(),
    })
}

/// The decisions of some days: the first of them on which each stands.
fn decided(screen: &Screen, days: &[PastDay]) -> Vec<(usize, u64, bool)> {
    let session = screen.session;
    let all = session.decisions();
    let chosen = session.decision_at().and_then(|at| all.get(at)).map(|d| d.id);
    let mut out: Vec<(usize, u64, bool)> = Vec::new();
    for (i, day) in days.iter().enumerate() {
        if let Some(id) = day.decision.filter(|id| out.last().is_none_or(|last| last.1 != *id)) {
            out.push((i, id, chosen == Some(id)));
        }
    }
    out
}

/// How a day stands.
pub(super) fn mark(screen: &Screen, day: &PastDay) -> DayMark {
    match (&day.left_out, screen.told(day).outside()) {
        (Some(_), _) if screen.is_event(day) => DayMark::Event,
        (Some(_), _) => DayMark::LeftOut,
        (None, Some(true)) => DayMark::Outside,
        (None, _) => DayMark::None,
    }
}

/// What stands in place of the time line where there is none.
pub(super) fn without(screen: &Screen, area: Rect) -> Lines {
    let mut out = Lines::new();
    let (words, role) = match &screen.passed {
        Some(_) => {
            let words = "No day of the past is told: no decision, no gate schedule of days gone by, no record \
                         of the tailwater.";
            (words, Role::Plain)
        }
        None => ("", Role::Plain),
    };
    say(&mut out, words, usize::from(area.width), 2, role);
    out
}
