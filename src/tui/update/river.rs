//! The river screen: choosing a rule and changing it, what arrives day by day, what was recorded.

use super::super::keys::Action;
use super::super::model::{Model, RiverPage, Row, Session, rows};
use super::mix::{back_and_forth, edit};
use super::{Effect, river_rows, rule_in_sight};

/// Lines of a page (choice).
const PAGE: usize = 5;

/// Does what a key asks for.
pub(super) fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let page = session.river.page;
    let rules = rules(session).len();
    match action {
        Action::DayByDay => turn(model, RiverPage::Days),
        Action::Record => turn(model, RiverPage::Record),
        Action::Undo => return back_and_forth(model, true),
        Action::Redo => return back_and_forth(model, false),
        Action::PageUp => scroll(model, |at, _| at.saturating_sub(PAGE)),
        Action::PageDown => scroll(model, |at, _| at + PAGE),
        Action::Up if page != RiverPage::Rules => scroll(model, |at, _| at.saturating_sub(1)),
        Action::Down if page != RiverPage::Rules => scroll(model, |at, _| at + 1),
        Action::Up => choose(model, |rule| rule.saturating_sub(1), 0),
        Action::Down => choose(model, |rule| (rule + 1).min(rules.saturating_sub(1)), 0),
        Action::Left => choose(model, |rule| rule, -1),
        Action::Right => choose(model, |rule| rule, 1),
        Action::More | Action::Less | Action::MuchMore | Action::MuchLess | Action::Enter => {
            return changed(model, action);
        }
        _ => {}
    }
    Vec::new()
}

/// Back to the rules.
pub(super) fn back(model: &mut Model) {
    if let Some(session) = model.session_mut() {
        session.river.page = RiverPage::Rules;
        session.river.scroll = 0;
    }
}

/// A rule pressed with the mouse is chosen.
pub(super) fn pressed(model: &mut Model, at: usize) -> Vec<Effect> {
    let chosen = model.session().is_some_and(|s| s.river.rule == at);
    choose(model, |_| at, 0);
    if chosen { changed(model, Action::Enter) } else { Vec::new() }
}

/// The rules valid on the date, as rows of the board.
pub(crate) fn rules(session: &Session) -> Vec<Row> {
    let context = session.context();
    let all = rows(context.site(), context.on.date_naive());
    all.into_iter().filter(|row| matches!(row, Row::Target(_))).collect()
}

fn turn(model: &mut Model, page: RiverPage) {
    if let Some(session) = model.session_mut() {
        let view = &mut session.river;
        view.page = if view.page == page { RiverPage::Rules } else { page };
        view.scroll = 0;
    }
}

fn choose(model: &mut Model, to: impl Fn(usize) -> usize, right: isize) {
    if let Some(session) = model.session_mut() {
        let count = rules(session).len();
        let view = &mut session.river;
        view.rule = to(view.rule).min(count.saturating_sub(1));
        view.column = view.column.saturating_add_signed(right).min(CELLS - 1);
    }
    let from = rule_in_sight(model);
    if let Some(session) = model.session_mut() {
        session.river.scroll = from;
    }
}

/// Cells of a rule: low, preferred, high, oxygen.
const CELLS: usize = 4;

/// Turns or types the cell chosen of the rule chosen.
fn changed(model: &mut Model, action: Action) -> Vec<Effect> {
    let cell = model.session().and_then(|session| {
        let row = rules(session).get(session.river.rule).copied()?;
        row.cells(session.base.site()).get(session.river.column).copied()
    });
    cell.map_or_else(Vec::new, |cell| edit(model, cell, action))
}

/// Scrolls what scrolls below, no further than its last line.
fn scroll(model: &mut Model, to: impl Fn(usize, usize) -> usize) {
    let last = river_rows(model);
    if let Some(session) = model.session_mut() {
        session.river.scroll = to(session.river.scroll.min(last), last).min(last);
    }
}
