//! Drawing: from the model to cells, and from a place on the screen back to what is drawn there.

mod compact;
mod form;
mod frame;
mod lists;
mod log;
mod mix;
mod note;
mod pool;
mod rank;
mod river;
mod scroll;
mod season;
mod water;
mod write;

use std::path::Path;

use chrono::NaiveDate;
use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};

use crate::problem::{Problem, Weight, any_refused, harmless};
use crate::report::page::{Format, written};
use crate::report::text;
use crate::tasks::{Context, Failure};
use crate::units::System;

use super::model::{Cell, Model, Screen, Stage};

pub(super) use lists::help_lines;
pub(super) use pool::{named as cast_named, scrolled as pool_scrolled, stepped_m as pool_stepped_m};

/// Fewer cells than this and only the main figures are shown (choice: the board and its figures need them).
const SMALL: (u16, u16) = (72, 20);
/// Fewer than this and nothing can be (choice).
const LEAST: (u16, u16) = (24, 6);

/// What lies under a place on the screen.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Hit {
    /// A tab, from 1.
    Screen(usize),
    /// A line of the list of sites.
    Site(usize),
    /// An elevation of the picture of the pool, m.
    Elevation(f64),
    /// A cell of the board.
    Cell(Cell),
    /// A mix of the ranking.
    Mix(usize),
    /// A rule of the river screen.
    Rule(usize),
    /// A date of the season, or of the record.
    Day(NaiveDate),
}

/// Draws the model; where the cursor stands, while typing.
pub fn draw(model: &Model, area: Rect, buf: &mut Buffer) -> Option<Position> {
    let area = area.intersection(*buf.area());
    if area.width < LEAST.0 || area.height < LEAST.1 {
        frame::too_small(area, buf);
        return None;
    }
    if area.width < SMALL.0 || area.height < SMALL.1 {
        compact::draw(model, area, buf);
    } else {
        let parts = frame::parts(model, area);
        frame::draw(model, &parts, buf);
        match &model.stage {
            Stage::Opening { .. } => {}
            Stage::Sites { list, at, .. } => lists::sites(model, list, *at, parts.body, buf),
            Stage::Broken { problems, system, scroll, kept } => {
                lists::problems(model, problems, *system, *scroll, kept.is_some(), parts.body, buf);
            }
            Stage::Site(session) => match session.screen {
                Screen::Pool => pool::draw(model, session, parts.body, buf),
                Screen::Mix => mix::draw(model, session, parts.body, buf),
                Screen::Rank => rank::draw(model, session, parts.body, buf),
                Screen::River => river::draw(model, session, parts.body, buf),
                Screen::Season => season::draw(model, session, parts.body, buf),
                Screen::Log => log::draw(model, session, parts.body, buf),
                Screen::Note => note::draw(model, session, parts.body, buf),
            },
        }
    }
    lists::over(model, area, buf)
}

/// What lies under a place.
pub fn hit(model: &Model, column: u16, row: u16) -> Option<Hit> {
    let area = Rect::new(0, 0, model.size.0, model.size.1);
    if area.width < SMALL.0 || area.height < SMALL.1 {
        return None;
    }
    let parts = frame::parts(model, area);
    let at = Position::new(column, row);
    if let Some(number) = frame::tab_at(model, &parts, at) {
        return Some(Hit::Screen(number));
    }
    match &model.stage {
        Stage::Sites { list, .. } => lists::site_at(list.len(), parts.body, at).map(Hit::Site),
        Stage::Site(session) => match session.screen {
            Screen::Pool => pool::hit(model, session, parts.body, at),
            Screen::Mix => mix::hit(model, session, parts.body, at),
            Screen::Rank => rank::hit(model, session, parts.body, at),
            Screen::River => river::hit(model, session, parts.body, at).map(Hit::Rule),
            Screen::Season => season::hit(model, session, parts.body, at).map(Hit::Day),
            Screen::Log => log::hit(model, session, parts.body, at).map(Hit::Day),
            Screen::Note => None,
        },
        Stage::Opening { .. } | Stage::Broken { .. } => None,
    }
}

/// The furthest that what scrolls on the rank screen can be scrolled.
pub(super) fn rank_rows(model: &Model) -> usize {
    let area = Rect::new(0, 0, model.size.0, model.size.1);
    model.session().map_or(0, |session| rank::last(model, session, frame::parts(model, area).body))
}

/// The furthest that what scrolls on the river screen can be scrolled.
pub(super) fn river_rows(model: &Model) -> usize {
    let area = Rect::new(0, 0, model.size.0, model.size.1);
    model.session().map_or(0, |session| river::last(model, session, frame::parts(model, area).body))
}

/// The furthest that what scrolls on the season screen can be scrolled.
pub(super) fn season_rows(model: &Model) -> usize {
    let area = Rect::new(0, 0, model.size.0, model.size.1);
    model.session().map_or(0, |session| season::last(model, session, frame::parts(model, area).body))
}

/// The furthest that what scrolls on the log screen can be scrolled.
pub(super) fn log_rows(model: &Model) -> usize {
    let area = Rect::new(0, 0, model.size.0, model.size.1);
    model.session().map_or(0, |session| log::last(model, session, frame::parts(model, area).body))
}

/// The furthest that the sheet of the note screen can be scrolled.
pub(super) fn note_rows(model: &Model) -> usize {
    let area = Rect::new(0, 0, model.size.0, model.size.1);
    model.session().map_or(0, |session| note::last(model, session, frame::parts(model, area).body))
}

/// The first line of the rules with which the one chosen is in sight.
pub(super) fn rule_in_sight(model: &Model) -> usize {
    let area = Rect::new(0, 0, model.size.0, model.size.1);
    model.session().map_or(0, |session| river::in_sight(model, session, frame::parts(model, area).body))
}

/// The furthest that what is said on the mix screen can be scrolled.
pub(super) fn mix_rows(model: &Model) -> usize {
    let area = Rect::new(0, 0, model.size.0, model.size.1);
    model.session().map_or(0, |session| mix::last_line(model, session, frame::parts(model, area).body))
}

/// Why there is no answer, in one sentence.
pub(super) fn failure_words(failure: &Failure, system: System) -> String {
    match failure {
        Failure::Usage(words) => harmless(words),
        Failure::Refused(problems, _) => {
            // what refuses, not what else was said of the files
            let all = !any_refused(problems);
            let refuses = |p: &&Problem| all || p.weight == Weight::Refused;
            let words = |p: &Problem| place(p) + &p.advice(system);
            problems.iter().filter(refuses).map(words).collect::<Vec<_>>().join("; ")
        }
        Failure::Stopped => "stopped".to_owned(),
    }
}

/// `1-planned.csv:11: ` of a problem on a line of a file; nothing of one that was typed.
fn place(problem: &Problem) -> String {
    let (Some(file), Some(line)) = (&problem.place.file, problem.place.line) else { return String::new() };
    let name =
        Path::new(file).file_name().map_or_else(|| file.as_str().into(), |name| name.to_string_lossy());
    format!("{}:{line}: ", harmless(&name))
}

/// The answer of the screen as the command gives it, in the units shown.
pub(super) fn answer_text(model: &Model) -> Option<String> {
    let session = model.session()?;
    let shown = session.shown.as_ref()?;
    let in_units = |context: &Context| {
        let mut context = context.clone();
        context.system = model.system();
        context
    };
    let context = in_units(&shown.on.context);
    match session.screen {
        Screen::Pool => session.pool_shown().map(|(context, answer)| text::pool(&in_units(context), answer)),
        Screen::Mix => Some(text::mix(&context, session.tried()?)),
        Screen::Rank => session.ranked.as_ref().map(|r| text::rank(&in_units(&r.context), &r.answer)),
        Screen::River => session.downstream.as_ref().map(|d| text::river(&in_units(&d.context), &d.answer)),
        Screen::Season => {
            let ahead = session.season_shown()?.ahead;
            Some(text::season(&in_units(&ahead.context), &ahead.answer))
        }
        Screen::Log => {
            session.past.as_ref().map(|passed| text::log::log(&in_units(&passed.context), &passed.past))
        }
        Screen::Note => session.noted.as_ref().map(|noted| written(&noted.page, Format::Text)),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn scenario_a_file_that_is_refused_is_named_with_its_line_and_nothing_else_is_told() {
        let note = Problem::note("inflow-solids", "no solids are given").in_file("/far/plans/a.csv");
        let order = Problem::refused("date-order", "the days go back", "earlier ones first");
        let order = order.in_file("/far/plans/a.csv").on_line(11);
        let told = |problems| failure_words(&Failure::Refused(problems, System::Si), System::Si);
        assert_eq!(told(vec![note, order]), "a.csv:11: the days go back; earlier ones first");
        assert_eq!(told(vec![Problem::refused("dry", "the gate is dry", "")]), "the gate is dry");
    }
}
