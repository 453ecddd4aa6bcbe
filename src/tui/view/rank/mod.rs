//! The rank screen.
//!
//! ```text
//! what was ranked: release, order, drill; why nothing fits
//! list: the setting now, the mixes, best first
//! ------------------------------------+-----------------------------
//! the mix chosen: what to set, what   | temperature against oxygen
//! moves, why, what to beware of       | with the mix chosen marked
//! ```
//! What is rejected, the answers beyond the list and the prices take the place of everything under the first lines.

mod head;
mod list;
mod pages;
mod said;

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};

use crate::tui::draw::trade::{TradePicture, mix_at, trade};
use crate::tui::look::Role;
use crate::tui::model::{Model, Page, Ranked, Session};

use super::Hit;
use super::scroll::{self, Lines};
use super::write::wrapped;

/// Least rows of what is said of the mix chosen, where the screen has them: the trade curve fits in.
const BELOW: u16 = 8;

/// Where the parts lie.
struct Parts {
    head: Rect,
    list: Rect,
    said: Rect,
    trade: Rect,
}

/// A screen that has a ranking to show.
struct Screen<'a> {
    model: &'a Model,
    session: &'a Session,
    ranked: &'a Ranked,
    /// Whether the ranking is not of what is set now.
    old: bool,
}

impl Screen<'_> {
    /// The trade curve, the mix chosen marked.
    fn picture(&self) -> TradePicture {
        let ranked = self.ranked;
        let selected = Some(self.session.rank.at);
        TradePicture::of(ranked.context.site(), self.model.system(), &ranked.answer, selected)
    }
}

fn parts(screen: &Screen, area: Rect) -> Parts {
    let width = usize::from(area.width);
    let rows = |count: usize| u16::try_from(count).unwrap_or(u16::MAX);
    let head = rows(head::lines(screen, area).len()).min(area.height);
    let left = area.height - head;
    let on_list = screen.session.rank.page == Page::List;
    let below = BELOW.max(left / 3).min(left / 2 + 1).min(left);
    let list = if on_list { rows(list::rows(screen, width).len()).min(left - below) } else { 0 };
    let said = Rect { y: area.y + head + list, height: left - list, ..area };
    let pictured = on_list && !screen.ranked.answer.mixes.is_empty();
    let picture = if pictured { area.width / 2 } else { 0 };
    // so that a line of the one is not read on into the other
    let gap = if picture > 0 { 2 } else { 0 };
    Parts {
        head: Rect { height: head, ..area },
        list: Rect { y: area.y + head, height: list, ..area },
        said: Rect { width: area.width.saturating_sub(picture + gap), ..said },
        trade: Rect { x: area.x + area.width - picture, width: picture, ..said },
    }
}

/// Draws the rank screen.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let Some(screen) = screen(model, session) else {
        let lines = head::without_ranking(model, session, usize::from(area.width));
        scroll::write(&lines, area, model.look, buf);
        return;
    };
    let parts = parts(&screen, area);
    scroll::write(&head::lines(&screen, area), parts.head, model.look, buf);
    list::draw(&screen, parts.list, buf);
    let lines = page(&screen, parts.said);
    let from = session.rank.scroll.min(scroll::last(&lines, parts.said));
    scroll::scrolled(&lines, parts.said, from, model.look, buf);
    if parts.trade.width > 0 {
        trade(&screen.picture(), parts.trade, buf, model.look);
    }
}

/// What lies under a place.
pub(super) fn hit(model: &Model, session: &Session, area: Rect, at: Position) -> Option<Hit> {
    let screen = screen(model, session)?;
    let parts = parts(&screen, area);
    if parts.list.contains(at) {
        return list::mix_at(&screen, parts.list, at).map(Hit::Mix);
    }
    if parts.trade.contains(at) {
        return mix_at(&screen.picture(), parts.trade, at.x, at.y).map(Hit::Mix);
    }
    None
}

/// The main figures, where the window is small: warnings, the mix chosen.
pub(super) fn in_short(model: &Model, session: &Session, width: usize) -> Lines {
    let Some(screen) = screen(model, session) else {
        return head::without_ranking(model, session, width);
    };
    let mut out = head::alone(&screen, width);
    out.extend(said::lines(&screen, width));
    out
}

/// The furthest that what scrolls can be scrolled.
pub(super) fn last(model: &Model, session: &Session, area: Rect) -> usize {
    let Some(screen) = screen(model, session) else { return 0 };
    let said = parts(&screen, area).said;
    scroll::last(&page(&screen, said), said)
}

fn screen<'a>(model: &'a Model, session: &'a Session) -> Option<Screen<'a>> {
    let ranked = session.ranked.as_ref()?;
    Some(Screen { model, session, ranked, old: !session.ranks_now() })
}

/// What scrolls.
fn page(screen: &Screen, area: Rect) -> Lines {
    let width = usize::from(area.width);
    match screen.session.rank.page {
        Page::List if screen.ranked.answer.mixes.is_empty() => pages::rejected(screen, width),
        Page::List => said::lines(screen, width),
        Page::Rejected => pages::rejected(screen, width),
        Page::Others => pages::others(screen, width),
        Page::Prices => pages::prices(screen, width),
    }
}

/// Adds words, wrapped, later lines indented.
fn say(lines: &mut Lines, text: &str, width: usize, indent: usize, role: Role) {
    lines.extend(wrapped(text, width, indent).into_iter().map(|line| (line, role)));
}

/// Adds a label and words beside it, wrapped.
fn labelled(lines: &mut Lines, label: &str, margin: usize, text: &str, width: usize, role: Role) {
    let beside = wrapped(text, width.saturating_sub(margin).max(1), 0);
    for (at, line) in beside.into_iter().enumerate() {
        let label = if at == 0 { label } else { "" };
        lines.push((format!("{label:margin$}{line}"), role));
    }
}
