//! The pool screen.
//!
//! ```text
//! picture of the pool        | which cast, how old, how many flags
//! with outlets, flags,       | layers, cold water, since the cast before,
//! casts laid over            | outlets, flags and notes: scrolls
//! which cast is which        | how much more there is
//! ```

mod flags;
mod picture;
mod tables;
mod words;

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};
use unicode_width::UnicodeWidthChar;

use crate::problem::harmless;
use crate::tasks::Cast;
use crate::tui::draw::column::{Picture, column, elevation_at};
use crate::tui::look::Role;
use crate::tui::model::{Model, Session};

use super::write::{put, put_right, wrapped};
use super::{Hit, failure_words, frame};

/// Columns of the picture at least: fewer show no casts laid over.
const PICTURE: u16 = 44;
/// And at most: more would only stretch it.
const WIDEST: u16 = 90;
/// Columns of the words at most: longer lines lose the eye.
const WORDS: u16 = 100;

/// Columns from which two stay blank before the words.
const ROOMY: u16 = 100;

/// A line with its meaning.
type Line = (String, Role);

/// Where the parts lie.
struct Parts {
    picture: Rect,
    legend: Rect,
    head: Rect,
    words: Rect,
    more: Rect,
}

fn parts(session: &Session, area: Rect) -> Parts {
    let width = (area.width / 2 + 2).clamp(PICTURE, WIDEST).min(area.width);
    let legend = picture::legend(session, usize::from(width)).len();
    let legend = u16::try_from(legend).unwrap_or(u16::MAX).min(area.height / 4);
    // the marks at the edge of the picture must not be read as marks of the words
    let gap = if area.width >= ROOMY { 2 } else { 1 };
    let x = area.x + (width + gap).min(area.width);
    let right = Rect { x, width: (area.right() - x).min(WORDS), ..area };
    let head = words::head(session, usize::from(right.width)).len();
    let head = u16::try_from(head).unwrap_or(u16::MAX).min(area.height / 2);
    let below = area.height - head;
    let more = u16::from(below > 1);
    Parts {
        picture: Rect { width, height: area.height - legend, ..area },
        legend: Rect { y: area.bottom() - legend, width, height: legend, ..area },
        head: Rect { height: head, ..right },
        words: Rect { y: right.y + head, height: below - more, ..right },
        more: Rect { y: area.bottom() - more, height: more, ..right },
    }
}

/// Draws the pool screen.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let look = model.look;
    if session.shown.is_none() {
        let words = session
            .wrong
            .as_ref()
            .map_or_else(|| "computing ...".into(), |f| failure_words(f, model.system()));
        for (row, line) in (0..area.height).zip(wrapped(&words, usize::from(area.width), 2)) {
            put(buf, area, 0, row, &line, look.style(Role::Plain));
        }
        return;
    }
    let parts = parts(session, area);
    match picture::picture(model, session) {
        Some(picture) => column(&picture, parts.picture, buf, look),
        None => {
            put(buf, parts.picture, 0, 1, "no picture: this cast cannot be read", look.style(Role::Outside));
        }
    }
    let write = |lines: &[Line], area: Rect, buf: &mut Buffer| {
        for (row, (line, role)) in (0..area.height).zip(lines) {
            put(buf, area, 0, row, line, look.style(*role));
        }
    };
    write(&picture::legend(session, usize::from(parts.legend.width)), parts.legend, buf);
    write(&words::head(session, usize::from(parts.head.width)), parts.head, buf);
    let lines = words::lines(model, session, usize::from(parts.words.width));
    let from = from(session, lines.len(), parts.words);
    write(&lines[from..], parts.words, buf);
    let below = lines.len().saturating_sub(from + usize::from(parts.words.height));
    let words = match (below, from) {
        (0, 0) => String::new(),
        (0, above) => format!("{above} lines above, PgUp"),
        (below, _) => format!("{below} more lines, PgDn"),
    };
    put_right(buf, parts.more, parts.more.width, 0, &words, look.style(Role::Key));
}

/// Words wrapped at a width; what has no blank to break at, such as a long name, is broken anywhere.
fn filled(text: &str, width: usize, indent: usize) -> Vec<String> {
    let mut out = Vec::new();
    for line in wrapped(text, width, indent) {
        let (mut part, mut used) = (String::new(), 0);
        for c in line.chars() {
            let cells = c.width().unwrap_or(0);
            if used > 0 && used + cells > width {
                out.push(std::mem::take(&mut part));
                used = 0;
            }
            part.push(c);
            used += cells;
        }
        out.push(part);
    }
    out
}

/// First line shown of so many.
fn from(session: &Session, lines: usize, area: Rect) -> usize {
    session.pool.scroll.min(lines.saturating_sub(usize::from(area.height)))
}

/// What lies under a place.
pub(super) fn hit(model: &Model, session: &Session, area: Rect, at: Position) -> Option<Hit> {
    let parts = parts(session, area);
    let inside = parts.picture.contains(at);
    let picture = picture::picture(model, session).filter(|_| inside)?;
    elevation_at(&picture, parts.picture, at.y).map(Hit::Elevation)
}

/// The body of the screen as it is now.
fn body(model: &Model) -> Rect {
    frame::parts(model, Rect::new(0, 0, model.size.0, model.size.1)).body
}

/// The elevation some rows of the picture below the one read, m; the thermocline, else the middle, where none is read.
pub(in crate::tui) fn stepped_m(model: &Model, rows: i32) -> Option<f64> {
    let session = model.session()?;
    let mut picture: Picture = picture::picture(model, session)?;
    let middle = f64::midpoint(picture.bed_m, picture.surface_m);
    let Some(now) = session.pool.cursor_m else { return Some(picture.thermocline_m.unwrap_or(middle)) };
    picture.cursor_m = Some(now);
    let area = parts(session, body(model)).picture;
    let rows_m = (area.y..area.bottom()).filter_map(|row| elevation_at(&picture, area, row));
    let rows_m: Vec<f64> = rows_m.filter(|z| *z <= picture.surface_m).collect();
    let here = (0..rows_m.len()).min_by(|a, b| (rows_m[*a] - now).abs().total_cmp(&(rows_m[*b] - now).abs()));
    let Some(here) = here else {
        // where the window holds no picture, a step is a fiftieth of the water
        let step = (picture.surface_m - picture.bed_m) / 50.0;
        return Some((now - step * f64::from(rows)).clamp(picture.bed_m, picture.surface_m));
    };
    let next = i64::try_from(here).unwrap_or(0) + i64::from(rows);
    let next = usize::try_from(next).unwrap_or(0).min(rows_m.len() - 1);
    rows_m.get(next).copied()
}

/// First line of the words after some pages down.
pub(in crate::tui) fn scrolled(model: &Model, pages: i32) -> usize {
    let Some(session) = model.session() else { return 0 };
    let area = parts(session, body(model)).words;
    let lines = words::lines(model, session, usize::from(area.width)).len();
    // two lines stay, so that the eye finds its place again
    let page = usize::from(area.height).saturating_sub(2).max(1);
    let now = from(session, lines, area);
    let next = if pages < 0 { now.saturating_sub(page) } else { now + page };
    next.min(lines.saturating_sub(usize::from(area.height)))
}

/// A cast by its date, with the hour where another was taken that day; by its file where its time is not known.
pub(in crate::tui) fn named(session: &Session, cast: &Cast) -> String {
    let offset = session.base.site().offset;
    let day = |c: &Cast| c.taken.map(|t| t.with_timezone(&offset).date_naive());
    let base = |file: &str| harmless(file.rsplit(['/', '\\']).next().unwrap_or(file));
    let Some(taken) = cast.taken else { return base(&cast.file) };
    let taken = taken.with_timezone(&offset);
    let alike = |other: &&Cast| other.file != cast.file && day(other) == day(cast);
    let others: Vec<&Cast> = session.casts.iter().flatten().filter(alike).collect();
    if others.iter().any(|o| o.taken == cast.taken) {
        format!("{} ({})", taken.format("%Y-%m-%d %H:%M"), base(&cast.file))
    } else if others.is_empty() {
        taken.format("%Y-%m-%d").to_string()
    } else {
        taken.format("%Y-%m-%d %H:%M").to_string()
    }
}
