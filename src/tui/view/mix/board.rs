//! The board: every gate, well, total, the pool, the date and the targets, as they are now and as they are tried.

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};

use crate::mix::limits::{Check, Of};
use crate::mix::{Gate, Setting};
use crate::problem::harmless;
use crate::report::fitted;
use crate::site::{Outlet, Site};
use crate::target::Target;
use crate::tasks::{MixAnswer, now_setting};
use crate::tui::look::Role;
use crate::tui::model::{Cell, Model, Row, Session, asked, rows, total_m3s};
use crate::units::{Dimension, System, figure};

use super::super::lists::first_line;
use super::super::write::{cut, put, put_right};
use super::digits;

/// Columns: name, now, tried opening, tried flow, room; each from its first cell.
struct Columns {
    now: u16,
    opening: u16,
    flow: u16,
    room: u16,
}

/// The columns of a board so wide.
fn columns(width: u16) -> Columns {
    // 46 cells are the least: 9 for the name, 12 for what is now, 7 and 8 for what is tried, the rest for the room
    let name = if width >= 56 { 12 } else { 9 };
    Columns { now: name, opening: name + 13, flow: name + 20, room: name + 29 }
}

/// Lines of the board, its heading included.
pub(super) fn lines(session: &Session) -> usize {
    let context = session.context();
    rows(context.site(), context.on.date_naive()).len() + 1
}

/// Rows shown, and how many are not. Where they do not all fit the total release stays in sight, last, since every
/// turn of a gate may change it.
fn shown_rows(session: &Session, area: Rect) -> (Vec<Row>, usize) {
    let context = session.context();
    let rows = rows(context.site(), context.on.date_naive());
    let height = area.height.saturating_sub(1);
    let at = rows.iter().position(|r| *r == session.mix.cell.row()).unwrap_or(0);
    let window = |height: u16| -> Vec<Row> {
        let from = first_line(at, rows.len(), height);
        rows.iter().copied().skip(from).take(usize::from(height)).collect()
    };
    let mut shown = window(height);
    if height > 2 && !shown.contains(&Row::Release) {
        shown = window(height - 1);
        if !shown.contains(&Row::Release) {
            shown.push(Row::Release);
        }
    }
    let hidden = rows.len().saturating_sub(shown.len());
    (shown, hidden)
}

/// The cell at a place.
pub(super) fn cell_at(_model: &Model, session: &Session, area: Rect, at: Position) -> Option<Cell> {
    let (rows, _) = shown_rows(session, area);
    let line = usize::from(at.y.checked_sub(area.y + 1)?);
    let row = rows.get(line)?;
    let cells = row.cells(session.context().site());
    let columns = columns(area.width);
    let places = places(*row, &columns, area.width);
    let column = at.x - area.x;
    let near = |i: &usize| {
        places.get(*i).map_or(u16::MAX, |(from, to)| from.abs_diff(column).min(to.abs_diff(column)))
    };
    (0..cells.len()).min_by_key(near).and_then(|i| cells.get(i).copied())
}

/// First and last cell of each value of a row.
fn places(row: Row, c: &Columns, width: u16) -> Vec<(u16, u16)> {
    match row {
        Row::Outlet(_) => vec![(c.opening, c.flow - 1), (c.flow, c.room - 1)],
        Row::Well(_) | Row::Release | Row::Pool | Row::Date => vec![(c.flow, c.room - 1)],
        Row::Target(_) => {
            // as wide as `low 48.0`, `pref 52.0`, `high 56.0` and `O2 7.0` with a blank each, and more where there is
            let more = width.saturating_sub(c.now + 37) / 4;
            let mut from = c.now;
            let next = |wide: u16| {
                let place = (from, from + wide + more - 1);
                from += wide + more;
                place
            };
            [9, 10, 10, 8].map(next).to_vec()
        }
    }
}

/// Draws the board.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let c = columns(area.width);
    let look = model.look;
    let flow = model.system().unit(Dimension::Flow).symbol();
    let quiet = look.style(Role::Quiet);
    let tries = session.draft().tries.len();
    put(buf, area, 0, 0, flow, quiet);
    put(buf, area, c.now, 0, "set now", look.style(Role::Now));
    let tried = if tries > 1 { format!("try {} of {tries}", session.draft().at + 1) } else { "tried".into() };
    put(buf, area, c.opening, 0, &tried, look.style(Role::Tried));
    let now = now_setting(session.context()).ok().map(|u| u.setting);
    let board = Board { model, session, now, c };
    let (rows, hidden) = shown_rows(session, area);
    for (line, row) in (1..area.height).zip(&rows) {
        board.row(*row, area, line, buf);
    }
    if hidden > 0 {
        put_right(buf, area, area.width, 0, &format!("{hidden} more rows"), quiet);
    } else {
        put(buf, area, board.c.room, 0, "limits", quiet);
    }
}

struct Board<'a> {
    model: &'a Model,
    session: &'a Session,
    now: Option<Setting>,
    c: Columns,
}

impl Board<'_> {
    fn site(&self) -> &Site {
        self.session.context().site()
    }

    /// Cells of the column of limits.
    fn room_cells(&self, area: Rect) -> usize {
        usize::from(area.width.saturating_sub(self.c.room + 1))
    }

    fn row(&self, row: Row, area: Rect, line: u16, buf: &mut Buffer) {
        let look = self.model.look;
        let here = self.session.mix.cell.row() == row;
        let mark = if here { ">" } else { " " };
        put(buf, area, 0, line, mark, look.style(Role::Strong));
        let name = fitted(&self.name(row), usize::from(self.c.now.saturating_sub(2)));
        put(buf, area, 1, line, &name, look.style(if here { Role::Strong } else { Role::Plain }));
        match row {
            Row::Outlet(i) => self.outlet(i, area, line, buf),
            Row::Target(i) => self.target(i, area, line, buf),
            other => self.whole(other, area, line, buf),
        }
    }

    fn name(&self, row: Row) -> String {
        let site = self.site();
        match row {
            Row::Outlet(i) => harmless(&site.outlets[i].name),
            Row::Well(i) => harmless(&site.wells[i].name),
            Row::Release => "total".into(),
            Row::Pool => "pool".into(),
            Row::Date => "date".into(),
            Row::Target(i) => harmless(&site.targets[i].name),
        }
    }

    /// Writes a value into its place, reversed where it is chosen, marked where it differs from now.
    fn value(&self, cell: Cell, text: &str, place: (u16, u16), line: u16, area: Rect, buf: &mut Buffer) {
        let look = self.model.look;
        let chosen = self.session.mix.cell == cell;
        let wide = usize::from(place.1 - place.0);
        let text = cut(text, wide);
        let padded = format!("{text:>wide$}");
        put(buf, area, place.0, line, &padded, look.style(if chosen { Role::Chosen } else { Role::Tried }));
    }

    /// A flow; dots while the wells have not shared it out yet.
    fn flow(&self, m3s: f64) -> String {
        if m3s.is_infinite() {
            return "...".into();
        }
        figure(m3s, self.model.system().unit(Dimension::Flow), digits(self.model))
    }

    fn stand(&self, o: &Outlet, gate: Option<&Gate>) -> (String, String) {
        match gate {
            None => ("shut".into(), "-".into()),
            Some(g) => {
                let opening = if o.has_opening() { o.opening_name(g.opening) } else { "open".into() };
                (opening, self.flow(g.flow_m3s))
            }
        }
    }

    fn outlet(&self, i: usize, area: Rect, line: u16, buf: &mut Buffer) {
        let look = self.model.look;
        let o = &self.site().outlets[i];
        let of = |setting: &Setting| setting.gates.iter().find(|g| g.outlet == i).copied();
        let c = &self.c;
        match &self.now {
            Some(now) => {
                let (opening, flow) = self.stand(o, of(now).as_ref());
                put_right(buf, area, c.now + 5, line, &opening, look.style(Role::Now));
                put_right(buf, area, c.now + 12, line, &flow, look.style(Role::Now));
            }
            None => put_right(buf, area, c.now + 12, line, "not known", look.style(Role::Quiet)),
        }
        // what is given rules; what the wells make of it follows when it is computed
        let draft = self.session.draft();
        let given = draft.tried();
        let by_flow = given.and_then(|g| g.flows.iter().find(|g| g.outlet == i));
        let by_opening = given.and_then(|g| g.open.iter().find(|g| g.0 == i)).map(|g| g.1);
        let answer = self.session.tried();
        let shared = answer.and_then(|a| of(&a.setting));
        let gate = match (by_flow, by_opening) {
            (Some(f), _) => Some(Gate { outlet: i, opening: f.opening.unwrap_or(1.0), flow_m3s: f.flow_m3s }),
            (None, Some(opening)) if opening > 0.0 => {
                Some(Gate { outlet: i, opening, flow_m3s: shared.map_or(f64::INFINITY, |g| g.flow_m3s) })
            }
            _ => shared.filter(|_| crate::intake::spills_by_itself(o)),
        };
        let (opening, flow) = self.stand(o, gate.as_ref());
        let spans = places(Row::Outlet(i), c, area.width);
        if o.has_opening() {
            self.value(Cell::Opening(i), &opening, spans[0], line, area, buf);
        } else if gate.is_none() {
            put_right(buf, area, spans[0].1, line, "shut", look.style(Role::Tried));
        }
        self.value(Cell::Flow(i), &flow, spans[1], line, area, buf);
        let was = self.now.as_ref().map(of);
        let same = |g: Option<Gate>, now: Option<Gate>| match (g, now) {
            (None, None) => true,
            (Some(a), Some(b)) => {
                (a.opening - b.opening).abs() < 1e-6 && (a.flow_m3s - b.flow_m3s).abs() < 1e-6
            }
            _ => false,
        };
        if was.is_some_and(|was| !same(gate, was)) {
            put(buf, area, spans[1].1, line, "*", look.style(Role::Tried));
        }
        let (words, role) = room(answer, Of::Outlet(i), gate.is_some(), self.room_cells(area));
        put(
            buf,
            area,
            c.room + 1,
            line,
            &cut(&words, usize::from(area.width.saturating_sub(c.room + 1))),
            look.style(role),
        );
    }

    fn whole(&self, row: Row, area: Rect, line: u16, buf: &mut Buffer) {
        let look = self.model.look;
        let (session, system, c) = (self.session, self.model.system(), &self.c);
        let draft = session.draft();
        let given = draft.tried().cloned().unwrap_or_default();
        let sum = |s: &Setting| s.gates.iter().map(|g| g.flow_m3s).sum::<f64>();
        let length = |m: f64| figure(m, system.unit(Dimension::Length), 1);
        let answer = session.tried();
        let (cell, now, tried, unit, of) = match row {
            Row::Well(i) => {
                let on = |g: &&Gate| self.site().outlets[g.outlet].well == Some(i);
                let of_now = self.now.as_ref().map(|s| s.gates.iter().filter(on).map(|g| g.flow_m3s).sum());
                let total = total_m3s(self.site(), &given, i);
                let idle = asked(self.site(), &given).totals.iter().all(|t| t.0 != i)
                    && given.flows.iter().all(|f| self.site().outlets[f.outlet].well != Some(i));
                let words = match total {
                    // its total waits for a gate; nothing passes
                    Some(_) if idle => "shut".into(),
                    Some(total) => self.flow(total),
                    None => "-".into(),
                };
                let of_now: Option<f64> = of_now;
                (Cell::Total(i), of_now.map(|f| self.flow(f)), words, "", Some(Of::Well(i)))
            }
            Row::Release => {
                let passing = asked(self.site(), &given);
                let flows = passing.flows.iter().map(|g| g.flow_m3s);
                let total: f64 = flows.chain(passing.totals.iter().map(|t| t.1)).sum();
                // leaks and spill included, as soon as they are computed
                let total = session.tried_now().map_or(total, |a| a.mix.release.flow_m3s);
                let of_now = answer.and_then(|a| {
                    let same = a.change.is_none().then_some(a.mix.release.flow_m3s);
                    a.now.as_ref().map(|now| now.1.release.flow_m3s).or(same)
                });
                let now = self.now.as_ref().map(|s| self.flow(of_now.unwrap_or_else(|| sum(s))));
                (Cell::Release, now, self.flow(total), "", Some(Of::Whole))
            }
            Row::Pool => {
                let tried = draft.changed.pool_m.unwrap_or(session.own_pool_m());
                (Cell::Pool, Some(length(session.base.profile.pool_m)), length(tried), "pool", None)
            }
            _ => {
                let on = draft.changed.on.unwrap_or(session.base.on);
                let day = |t: chrono::DateTime<chrono::FixedOffset>| t.format("%Y-%m-%d").to_string();
                (Cell::Date, Some(day(session.base.on)), day(on), "date", None)
            }
        };
        let now = now.unwrap_or_else(|| "not known".into());
        put_right(buf, area, c.now + 12, line, &now, look.style(Role::Now));
        // dates are as wide as opening and flow together
        let from = if matches!(row, Row::Date | Row::Pool) { c.opening } else { c.flow };
        self.value(cell, &tried, (from, c.room - 1), line, area, buf);
        if now != tried {
            put(buf, area, c.room - 1, line, "*", look.style(Role::Tried));
        }
        let (words, role) = match (unit, of) {
            ("pool", _) => (system.unit(Dimension::Length).symbol().to_owned(), Role::Quiet),
            ("date", _) => (String::new(), Role::Quiet),
            (_, Some(of)) => room(answer, of, true, self.room_cells(area)),
            _ => (String::new(), Role::Quiet),
        };
        put(
            buf,
            area,
            c.room + 1,
            line,
            &cut(&words, usize::from(area.width.saturating_sub(c.room + 1))),
            look.style(role),
        );
    }

    fn target(&self, i: usize, area: Rect, line: u16, buf: &mut Buffer) {
        let draft = self.session.draft();
        let targets = draft.changed.targets.as_ref().unwrap_or(&self.session.base.site().targets);
        let Some(target) = targets.get(i) else { return };
        let system = self.model.system();
        let spans = places(Row::Target(i), &self.c, area.width);
        for ((cell, words), place) in target_words(i, target, system).into_iter().zip(spans) {
            self.value(cell, &words, place, line, area, buf);
        }
        if targets.get(i) != self.session.base.site().targets.get(i) {
            put(buf, area, 0, line, "*", self.model.look.style(Role::Tried));
        }
    }
}

fn target_words(i: usize, target: &Target, system: System) -> [(Cell, String); 4] {
    let unit = system.unit(target.dimension());
    let warm =
        |word: &str, c: Option<f64>| format!("{word} {}", c.map_or("-".into(), |c| figure(c, unit, 1)));
    let air = match (target.oxygen_min_mg_l, target.oxygen_min_share) {
        (Some(least), _) => format!("{least:.1}"),
        (None, Some(least)) => format!("{:.0}%", 100.0 * least),
        (None, None) => "-".into(),
    };
    [
        (Cell::Low(i), warm("low", target.low_c)),
        (Cell::Preferred(i), warm("pref", target.preferred_c)),
        (Cell::High(i), warm("high", target.high_c)),
        (Cell::Oxygen(i), format!("O2 {air}")),
    ]
}

/// Limits of something: how many are kept, or the first that is not.
fn room(answer: Option<&MixAnswer>, of: Of, open: bool, cells: usize) -> (String, Role) {
    let Some(answer) = answer.filter(|_| open) else { return (String::new(), Role::Quiet) };
    let mine: Vec<&Check> = answer.mix.limits.iter().filter(|c| c.of == of).collect();
    match mine.iter().find(|c| c.broken()) {
        Some(broken) if broken.rule.name().len() + 2 <= cells => {
            (format!("! {}", broken.rule.name()), Role::Outside)
        }
        // the whole name is said below
        Some(_) => ("! broken".into(), Role::Outside),
        None if mine.is_empty() => ("none given".into(), Role::Quiet),
        None => (format!("{} kept", mine.len()), Role::Inside),
    }
}

/// What a cell is, in words, for the field it is typed into.
pub(in crate::tui::view) fn cell_words(model: &Model, cell: Cell) -> String {
    let Some(session) = model.session() else { return String::new() };
    let site = session.context().site();
    let system = model.system();
    let flow = system.unit(Dimension::Flow).symbol();
    let warm = system.unit(Dimension::Temperature).symbol();
    let target = |i: usize| site.targets.get(i).map_or_else(String::new, |t| harmless(&t.name));
    let outlet = |i: usize| harmless(&site.outlets[i].name);
    match cell {
        Cell::Opening(i) => format!("opening of {}, % or a position", outlet(i)),
        Cell::Flow(i) => format!("flow of {}, {flow}", outlet(i)),
        Cell::Total(i) => format!("total of {}, {flow}", harmless(&site.wells[i].name)),
        Cell::Release => format!("total release, {flow}; everything in proportion"),
        Cell::Pool => format!("pool elevation, {}", system.unit(Dimension::Length).symbol()),
        Cell::Date => "decision date".into(),
        Cell::Low(i) => format!("{}: low, {warm}; empty for none", target(i)),
        Cell::Preferred(i) => format!("{}: preferred, {warm}; empty for none", target(i)),
        Cell::High(i) => format!("{}: high, {warm}; empty for none", target(i)),
        Cell::Oxygen(i) => format!("{}: least oxygen, mg/L; empty for none", target(i)),
    }
}
