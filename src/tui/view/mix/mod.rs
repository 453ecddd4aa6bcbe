//! The mix screen.
//!
//! ```text
//! picture of the pool        | board: what is set now, what is tried, room
//! with the zones, or two     | the cell chosen, its limits
//! tries side by side         | difference, change, warnings, not checked
//! ---------------------------+--------------------------------------------
//! release against every target: temperature          oxygen
//! ```

mod board;
mod compare;
mod said;

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};

use crate::mix::{Drawn, Setting};
use crate::tasks::MixAnswer;
use crate::tui::draw::column::{Picture, column, gate_at};
use crate::tui::draw::gauge::{Attainable, Gauge, Release, gauges, gauges_rows};
use crate::tui::look::Role;
use crate::tui::model::{Cell, Model, Row, Session, Shown, opening_of};
use crate::units::{Dimension, show};

use super::water::{self, Stands};
use super::write::put;
use super::{Hit, failure_words};

pub(super) use board::cell_words;

/// Least rows of the picture and the board, whatever the gauges would like.
const LEAST_ABOVE: u16 = 9;

/// Where the parts lie.
struct Parts {
    picture: Rect,
    board: Rect,
    said: Rect,
    gauges: Rect,
}

fn parts(model: &Model, session: &Session, area: Rect) -> Parts {
    let wanted = gauge_pair(model, session).map_or(6, |g| gauges_rows([&g[0], &g[1]], area.width));
    // low screens keep two thirds for the board: the gauges say less in fewer rows, the board would only scroll;
    // so do high ones where many rules hold
    let most = if area.height < 24 { area.height / 3 } else { area.height * 2 / 5 };
    let below = wanted.min(area.height.saturating_sub(LEAST_ABOVE)).min(most);
    let above = area.height - below;
    let board_width = (area.width / 2).max(46).min(area.width);
    // a blank column between the two keeps their figures apart
    let left = area.width - board_width;
    let picture = Rect { width: left.saturating_sub(1), height: above, ..area };
    let right = Rect { x: area.x + left, width: board_width, height: above, ..area };
    let rows = u16::try_from(board::lines(session)).unwrap_or(u16::MAX);
    // what is said gets at least four rows; where the board is longer than the rest it scrolls
    let board_height = rows.min(above.saturating_sub(4));
    Parts {
        picture,
        board: Rect { height: board_height, ..right },
        said: Rect { y: right.y + board_height, height: above - board_height, ..right },
        gauges: Rect { y: area.y + above, height: below, ..area },
    }
}

/// The last line that what is said scrolls to.
pub(super) fn last_line(model: &Model, session: &Session, area: Rect) -> usize {
    said::last(model, session, parts(model, session, area).said)
}

/// Draws the mix screen.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let Some(shown) = &session.shown else {
        let words = session
            .wrong
            .as_ref()
            .map_or_else(|| "computing ...".into(), |f| failure_words(f, model.system()));
        for (row, line) in (0..area.height).zip(super::write::wrapped(&words, usize::from(area.width), 2)) {
            put(buf, area, 0, row, &line, model.look.style(Role::Plain));
        }
        return;
    };
    let parts = parts(model, session, area);
    board::draw(model, session, parts.board, buf);
    said::draw(model, session, parts.said, buf);
    match session.draft().beside {
        Some(beside) => {
            let (upper, lower) = halves(parts.picture);
            compare::draw(model, session, beside, upper, buf);
            if lower.height > 0 {
                column(&picture(model, session, shown), lower, buf, model.look);
            }
        }
        None => column(&picture(model, session, shown), parts.picture, buf, model.look),
    }
    match gauge_pair(model, session) {
        Some(pair) => gauges([&pair[0], &pair[1]], parts.gauges, buf, model.look),
        None => no_release(model, session, parts.gauges, buf),
    }
}

/// Rows of the comparison where the picture has room below it, and the fewest rows of such a picture.
const COMPARED: u16 = 15;
const PICTURED: u16 = 10;

/// Where two tries are compared and, where there is room for it, the picture below.
fn halves(area: Rect) -> (Rect, Rect) {
    let upper = if area.height >= COMPARED + PICTURED { COMPARED } else { area.height };
    let lower = Rect { y: area.y + upper, height: area.height - upper, ..area };
    (Rect { height: upper, ..area }, lower)
}

/// Why there is no release to hold against anything.
fn no_release(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let why = match session.answer(session.draft().at) {
        Some(Err(failure)) => failure_words(failure, model.system()),
        _ => "computing ...".to_owned(),
    };
    put(buf, area, 0, 0, "No release: this setting gives no answer", model.look.style(Role::Outside));
    for (row, line) in (1..area.height).zip(super::write::wrapped(&why, usize::from(area.width), 2)) {
        put(buf, area, 0, row, &line, model.look.style(Role::Plain));
    }
}

/// What lies under a place.
pub(super) fn hit(model: &Model, session: &Session, area: Rect, at: Position) -> Option<Hit> {
    let parts = parts(model, session, area);
    if parts.board.contains(at) {
        return board::cell_at(model, session, parts.board, at).map(Hit::Cell);
    }
    let shown = session.shown.as_ref()?;
    let place = if session.draft().beside.is_some() { halves(parts.picture).1 } else { parts.picture };
    if !place.contains(at) {
        return None;
    }
    let gate = gate_at(&picture(model, session, shown), place, at.x, at.y)?;
    let cells = Row::Outlet(gate).cells(session.context().site());
    cells.first().copied().map(Hit::Cell)
}

/// The setting on the board as it was computed, else as it is given.
fn setting(session: &Session) -> Option<&Setting> {
    session.tried().map(|answer| &answer.setting)
}

fn picture(model: &Model, session: &Session, shown: &Shown) -> Picture {
    let context = &shown.on.context;
    let (site, profile) = (context.site(), &context.profile);
    let date = context.on.date_naive();
    let chosen = match session.mix.cell {
        Cell::Opening(i) | Cell::Flow(i) => Some(i),
        _ => None,
    };
    let stands = |outlet: usize| {
        let gate = setting(session).and_then(|s| s.gates.iter().find(|g| g.outlet == outlet).copied());
        // without an answer a gate stands as it is given, and nothing is known to pass
        let given = session.draft().tried().filter(|_| setting(session).is_none());
        let opening = given.map_or(0.0, |given| opening_of(given, outlet));
        Stands {
            opening: gate.map_or(opening, |g| g.opening),
            flow_m3s: gate.map_or(0.0, |g| g.flow_m3s),
            out: water::is_out(site, outlet, date),
        }
    };
    let gates = (0..site.outlets.len())
        .map(|i| water::gate(site, i, stands(i), profile.pool_m, chosen == Some(i), model.system()))
        .collect();
    // where not all zones fit the largest flows keep theirs
    let mut levels: Vec<&Drawn> = session.tried().map_or_else(Vec::new, |a| a.mix.levels.iter().collect());
    levels.sort_by(|a, b| b.level.sink.flow_m3s.total_cmp(&a.level.sink.flow_m3s));
    Picture {
        gates,
        zones: levels.iter().filter_map(|d| water::zone(site, profile, d)).collect(),
        ..water::pool(site, profile, &shown.on.pool.layering, model.system())
    }
}

/// The release tried against the targets, beside the one now.
fn gauge_pair(model: &Model, session: &Session) -> Option<[Gauge; 2]> {
    let answer: &MixAnswer = session.tried()?;
    let context = session.context();
    let (site, system) = (context.site(), model.system());
    let now = answer.now.as_ref().map(|(_, mix)| Release::from(mix));
    let tried = Release::from(&answer.mix);
    let old = !session.ranks_now();
    let attainable = |range: fn(&crate::tasks::rank::RankAnswer) -> Option<[f64; 2]>| match &session.ranked {
        None if model.long.is_some() => Attainable::Computing,
        None => Attainable::NotAsked,
        Some(ranked) => match range(&ranked.answer) {
            Some(range) if old => Attainable::Before(range),
            Some(range) => Attainable::Known(range),
            None => Attainable::NotAsked,
        },
    };
    let at = session.ranked.as_ref().and_then(|r| match r.answer.blocks[..] {
        _ if !r.answer.without.is_empty() => Some("attainable in the drill".to_owned()),
        [(_, flow)] => Some(format!("attainable at {}", show(flow, Dimension::Flow, system, digits(model)))),
        _ => None,
    });
    let note = if super::frame::is_old(model) {
        Some("FROM BEFORE, computing".to_owned())
    } else if session.wrong.is_some() {
        Some("FROM BEFORE".to_owned())
    } else {
        at
    };
    let noted = |gauge: Gauge| match &note {
        Some(note) => gauge.noted(note.clone()),
        None => gauge,
    };
    Some([
        noted(Gauge::temperature(site, system, tried, now, attainable(|r| r.attainable_c))),
        noted(Gauge::oxygen(site, system, tried, now, attainable(|r| r.attainable_oxygen_mg_l))),
    ])
}

/// Decimals of a flow.
fn digits(model: &Model) -> u8 {
    u8::from(model.system() == crate::units::System::Si)
}
