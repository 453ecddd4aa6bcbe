//! Lists: help, settings, criteria, the drill, sites, problems; and the field that is typed into.

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};
use ratatui::widgets::{Clear, Widget};
use unicode_width::UnicodeWidthStr;

use crate::problem::{Problem, Weight, harmless};
use crate::report::caution;
use crate::units::System;

use super::super::draw::boxed;
use super::super::keys::{Place, TABLE};
use super::super::look::{Role, Symbols, Theme};
use super::super::model::{Choice, Field, Model, NoteLine, Over, Screen, Stage, Typed};
use super::write::{cut, put, row_style, wrapped};

/// Lines for what is wrong with what is typed (choice: the longest cure takes three).
const FIELD_WORDS: usize = 3;

/// Lines the help can be scrolled to on a terminal so many rows high.
pub(in crate::tui) fn help_lines(rows: u16) -> usize {
    // the caution and the box take five rows
    (help(Place::Everywhere).len() + 1).saturating_sub(usize::from(rows.saturating_sub(5)))
}

/// The help, made from the table of keys: heading or key and words.
fn help(here: Place) -> Vec<(String, String)> {
    let mut out = Vec::new();
    // what works here comes first
    let (first, rest): (Vec<_>, Vec<_>) = Place::HEADINGS.into_iter().partition(|(place, _)| *place == here);
    for (place, heading) in first.into_iter().chain(rest) {
        out.push((heading.to_owned(), String::new()));
        let told = TABLE.iter().filter(|b| b.place == place && !b.words.is_empty());
        out.extend(told.map(|b| (format!("  {}", b.shown), b.words.to_owned())));
    }
    out.push(("mouse".into(), String::new()));
    out.push(("  press".into(), "tabs, gates, rows; again on a row types or opens".into()));
    out.push(("  wheel".into(), "up, down".into()));
    out.push(("caution".into(), String::new()));
    out.extend(wrapped(caution(), 64, 0).into_iter().map(|l| (String::new(), l)));
    out
}

/// The place of the screen below.
fn here(model: &Model) -> Place {
    match &model.stage {
        Stage::Site(session) => match session.screen {
            Screen::Pool => Place::Pool,
            Screen::Mix => Place::Mix,
            Screen::Rank => Place::Rank,
            Screen::River => Place::River,
            Screen::Season => Place::Season,
            Screen::Log => Place::Log,
            Screen::Note => Place::Note,
        },
        Stage::Sites { .. } => Place::Sites,
        Stage::Broken { .. } => Place::Problems,
        Stage::Opening { .. } => Place::Everywhere,
    }
}

/// A box in the middle, so many lines and cells inside; the inside.
pub(super) fn middle(
    model: &Model,
    area: Rect,
    title: &str,
    width: u16,
    lines: usize,
    buf: &mut Buffer,
) -> Rect {
    let width = (width + 4).min(area.width);
    let height =
        u16::try_from(lines).unwrap_or(u16::MAX).saturating_add(2).min(area.height.saturating_sub(2));
    let over = Rect {
        x: area.x + (area.width - width) / 2,
        y: area.y + area.height.saturating_sub(height) / 2,
        width,
        height,
    };
    Clear.render(over, buf);
    boxed(over, title, buf, model.look)
}

/// Draws what lies over the screen; where the cursor stands.
pub(super) fn over(model: &Model, area: Rect, buf: &mut Buffer) -> Option<Position> {
    // the caution stays in sight whatever lies over the screen
    let area = Rect { height: area.height.saturating_sub(1), ..area };
    match model.over.as_ref()? {
        Over::Help(from) => {
            let lines = help(here(model));
            let inside = middle(model, area, "help: Up Down scroll, Esc closes", 84, lines.len(), buf);
            let last = lines.len().saturating_sub(usize::from(inside.height));
            for (row, (key, words)) in (0..inside.height).zip(lines.iter().skip((*from).min(last))) {
                let role = if words.is_empty() { Role::Strong } else { Role::Key };
                put(buf, inside, 0, row, key, model.look.style(role));
                put(
                    buf,
                    inside,
                    if key.is_empty() { 0 } else { 15 },
                    row,
                    words,
                    model.look.style(Role::Plain),
                );
            }
            None
        }
        Over::Settings(at) => {
            settings(model, *at, area, buf);
            None
        }
        Over::Order(at) => {
            let session = model.session()?;
            let lines: Vec<String> = session
                .draft()
                .order
                .iter()
                .enumerate()
                .map(|(i, c)| format!("{}. {}", i + 1, criterion_words(*c)))
                .collect();
            list(model, "criteria: + - move, Enter done", &lines, *at, area, buf);
            None
        }
        Over::Drill(at) => {
            let session = model.session()?;
            let lines: Vec<String> = session
                .base
                .site()
                .outlets
                .iter()
                .enumerate()
                .map(|(i, o)| {
                    let lost = session.draft().without.contains(&i);
                    format!("{} {}", if lost { "[lost]" } else { "[    ]" }, harmless(&o.name))
                })
                .collect();
            list(model, "lost-gate drill: Space takes a gate out, Enter done", &lines, *at, area, buf);
            None
        }
        Over::Field(field) => Some(typed(model, field, area, buf)),
        Over::Form(form) => Some(super::form::draw(model, form, area, buf)),
    }
}

/// A criterion as a person says it.
pub(super) fn criterion_words(criterion: crate::rank::Criterion) -> &'static str {
    use crate::rank::Criterion as C;
    match criterion {
        C::Oxygen => "oxygen below the floor",
        C::Range => "temperature outside the range",
        C::Preferred => "distance from the preferred temperature",
        C::ColdWater => "cold water taken",
        C::Moves => "moves and crew hours",
    }
}

fn list(model: &Model, title: &str, lines: &[String], at: usize, area: Rect, buf: &mut Buffer) {
    let wide = lines.iter().map(|l| l.width()).chain([title.width()]).max().unwrap_or(0) + 4;
    let inside = middle(model, area, title, u16::try_from(wide).unwrap_or(u16::MAX), lines.len(), buf);
    chosen(model, lines, at, inside, buf);
}

/// Lines of which one is chosen, scrolled so that it is seen.
fn chosen(model: &Model, lines: &[String], at: usize, inside: Rect, buf: &mut Buffer) {
    let from = first_line(at, lines.len(), inside.height);
    for (row, (i, line)) in (0..inside.height).zip(lines.iter().enumerate().skip(from)) {
        let mark = if i == at { "> " } else { "  " };
        let column = put(buf, inside, 0, row, mark, model.look.style(Role::Strong));
        put(buf, inside, column, row, line, model.look.style(Role::Plain));
        if i == at {
            row_style(buf, inside, row, model.look.style(Role::Chosen));
        }
    }
}

/// First line shown so that one is seen.
pub(super) fn first_line(at: usize, count: usize, height: u16) -> usize {
    let height = usize::from(height.max(1));
    at.saturating_sub(height / 2).min(count.saturating_sub(height))
}

fn settings(model: &Model, at: usize, area: Rect, buf: &mut Buffer) {
    let likes = model.likes;
    let of = |names: &[(&'static str, Symbols)]| {
        names.iter().find(|n| n.1 == likes.look.symbols).map_or("", |n| n.0).to_owned()
    };
    let theme = Theme::NAMES.iter().find(|n| n.1 == likes.look.theme).map_or("", |n| n.0);
    let units = match likes.units {
        None => "as the site",
        Some(System::Us) => "US: ft, cfs, F",
        Some(System::Si) => "SI: m, m3/s, C",
    };
    let mono = if model.terminal == Theme::Mono { " (this terminal shows none)" } else { "" };
    let lines = vec![
        format!("units    {units}"),
        format!("symbols  {}", of(&Symbols::NAMES)),
        format!("colours  {theme}{mono}"),
        format!("mouse    {}", if likes.no_mouse { "left to the terminal" } else { "used here" }),
    ];
    list(model, "settings: Space changes, Esc closes", &lines, at, area, buf);
}

fn typed(model: &Model, field: &Field, area: Rect, buf: &mut Buffer) -> Position {
    let title = match field.typed {
        Typed::Cell(cell) => super::mix::cell_words(model, cell),
        Typed::Colder => {
            let unit = model.system().unit(crate::units::Dimension::Temperature).symbol();
            format!("volume colder than, {unit}; empty for none")
        }
        Typed::Release => "total release to rank at".into(),
        Typed::NewSite => "folder of the new site".into(),
        Typed::Line(line) => line.label().into(),
        Typed::Note(NoteLine::Why) => "why, as the note says it; empty: as it was decided".into(),
        Typed::Note(NoteLine::Remarks) => "remarks, as the note says them".into(),
        Typed::Note(NoteLine::Begins) => "when the change begins; empty: the next full hour".into(),
        Typed::Note(NoteLine::File | NoteLine::FileThere) => "save in the file".into(),
    };
    let inside = middle(model, area, &title, 60, 1 + FIELD_WORDS, buf);
    let look = model.look;
    let width = usize::from(inside.width.saturating_sub(1));
    let scroll = field.input.visual_scroll(width);
    let text: String = harmless(field.input.value());
    let shown: String = text.chars().skip(scroll).collect();
    row_style(buf, inside, 0, look.style(Role::Field));
    put(buf, inside, 0, 0, &shown, look.style(Role::Field));
    let (words, role) = match (&field.wrong, field.typed) {
        (Some(why), _) => (format!("! {}", harmless(why)), Role::Outside),
        (None, Typed::Release) => {
            ("Enter sets it, empty: as the site gives it; Esc leaves it".to_owned(), Role::Quiet)
        }
        (None, Typed::Note(NoteLine::File | NoteLine::FileThere)) => {
            ("Enter saves it, in the folder of the site; .html, .md or .txt".to_owned(), Role::Quiet)
        }
        (None, _) => ("Enter sets it, Esc leaves it as it was".to_owned(), Role::Quiet),
    };
    for (row, line) in (1..inside.height).zip(wrapped(&words, width, 2)) {
        put(buf, inside, 0, row, &cut(&line, width), look.style(role));
    }
    let column = u16::try_from(field.input.visual_cursor().saturating_sub(scroll)).unwrap_or(0);
    Position::new(inside.x + column.min(inside.width.saturating_sub(1)), inside.y)
}

/// Draws the list of sites.
pub(super) fn sites(model: &Model, list: &[Choice], at: usize, area: Rect, buf: &mut Buffer) {
    let lines: Vec<String> = list
        .iter()
        .map(|c| {
            let mark = if c.demonstration { "  [demonstration data, held in memory]" } else { "" };
            format!("{}{mark}", harmless(&c.name))
        })
        .collect();
    chosen(model, &lines, at, area, buf);
}

/// The line of the list of sites at a place, as long as no line is scrolled away.
pub(super) fn site_at(count: usize, area: Rect, at: Position) -> Option<usize> {
    let line = usize::from(at.y.checked_sub(area.y)?);
    (area.contains(at) && line < count && count <= usize::from(area.height)).then_some(line)
}

/// Draws every problem of a site that gives no answer.
pub(super) fn problems(
    model: &Model,
    problems: &[Problem],
    system: System,
    scroll: usize,
    kept: bool,
    area: Rect,
    buf: &mut Buffer,
) {
    let look = model.look;
    let count = problems.iter().filter(|p| p.weight == Weight::Refused).count();
    let again = if kept { ", with your tries" } else { "" };
    let words = format!("{count} to be mended; then it opens by itself{again}:");
    put(buf, area, 0, 0, &words, look.style(Role::Plain));
    let width = usize::from(area.width).saturating_sub(4);
    let texts: Vec<Vec<String>> = problems.iter().map(|p| wrapped(&p.text(system), width, 2)).collect();
    let mut row = 1;
    for (problem, lines) in problems.iter().zip(&texts).skip(scroll.min(last_page(&texts, area.height))) {
        let (mark, role) = match problem.weight {
            Weight::Refused => ("x", Role::Outside),
            Weight::Flag => ("!", Role::Warn),
            Weight::Note => ("-", Role::Plain),
        };
        for (i, line) in lines.iter().enumerate() {
            if i == 0 {
                put(buf, area, 0, row, mark, look.style(role));
            }
            put(buf, area, 2, row, line, look.style(if i == 0 { role } else { Role::Plain }));
            row += 1;
        }
        if row >= area.height {
            return;
        }
    }
}

/// The first of some texts from which all that follow fit below a heading: nothing scrolls away that could stay.
fn last_page(texts: &[Vec<String>], height: u16) -> usize {
    let mut left = usize::from(height.saturating_sub(1));
    let fits = texts.iter().rev().take_while(|lines| {
        let fits = lines.len() <= left;
        left = left.saturating_sub(lines.len());
        fits
    });
    let fits = fits.count();
    // the last is always to be seen
    (texts.len() - fits).min(texts.len().saturating_sub(1))
}
