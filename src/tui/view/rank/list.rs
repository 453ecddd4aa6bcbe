//! The list: the setting now, then the mixes, best first.

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};

use crate::report::text::rank;
use crate::tui::look::Role;

use super::super::lists::first_line;
use super::super::write::{cut, put, row_style};
use super::Screen;

/// Columns of the mark before a row.
const MARK: usize = 2;

/// Whose a row is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Of {
    Heading,
    Now,
    Mix(usize),
}

/// Every row of the list: heading, the setting now, the mixes.
pub(super) fn rows(screen: &Screen, width: usize) -> Vec<String> {
    numbered(screen, width).into_iter().map(|r| r.1).collect()
}

fn numbered(screen: &Screen, width: usize) -> Vec<(Of, String)> {
    let answer = &screen.ranked.answer;
    let lines = rank::lines(&screen.ranked.context, answer, screen.model.system());
    if lines.len() == 1 {
        return Vec::new();
    }
    let whose = [Of::Heading].into_iter().chain(answer.now.iter().map(|_| Of::Now));
    let whose = whose.chain((0..answer.mixes.len()).map(Of::Mix));
    let table = rank::table(&lines, width.saturating_sub(MARK));
    whose.zip(table).flat_map(|(of, rows)| rows.into_iter().map(move |row| (of, row))).collect()
}

/// Rows shown in an area: heading and setting now stay, the mixes scroll so that the one chosen is seen.
fn shown(screen: &Screen, area: Rect) -> Vec<(Of, String)> {
    let all = numbered(screen, usize::from(area.width));
    let height = usize::from(area.height);
    let (mut fixed, mixes): (Vec<_>, Vec<_>) = all.into_iter().partition(|r| !matches!(r.0, Of::Mix(_)));
    if !mixes.is_empty() {
        // what the setting now breaks is told again with what is rejected
        fixed.truncate(height.saturating_sub(3).max(2));
    }
    let left = area.height.saturating_sub(u16::try_from(fixed.len()).unwrap_or(u16::MAX));
    let of_chosen = |r: &(Of, String)| r.0 == Of::Mix(screen.session.rank.at);
    let first = mixes.iter().position(of_chosen).unwrap_or(0);
    let last = mixes.iter().rposition(of_chosen).unwrap_or(0);
    let from = first_line(first, mixes.len(), left);
    // its last row too, where both fit
    let from = from.max((last + 1).saturating_sub(usize::from(left))).min(first.max(from));
    fixed.extend(mixes.into_iter().skip(from));
    fixed.truncate(height);
    fixed
}

/// Draws the list.
pub(super) fn draw(screen: &Screen, area: Rect, buf: &mut Buffer) {
    let look = screen.model.look;
    let mut marked = false;
    for (row, (of, words)) in (0..area.height).zip(shown(screen, area)) {
        let chosen = of == Of::Mix(screen.session.rank.at);
        let role = match of {
            Of::Heading => Role::Quiet,
            _ if screen.old => Role::Old,
            Of::Now => Role::Now,
            Of::Mix(_) => Role::Plain,
        };
        if chosen && !marked {
            put(buf, area, 0, row, ">", look.style(Role::Strong));
            marked = true;
        }
        put(buf, area, 2, row, &cut(&words, usize::from(area.width).saturating_sub(MARK)), look.style(role));
        if chosen {
            row_style(buf, area, row, look.style(Role::Chosen));
        }
    }
}

/// The mix of a row.
pub(super) fn mix_at(screen: &Screen, area: Rect, at: Position) -> Option<usize> {
    let row = usize::from(at.y.checked_sub(area.y)?);
    match shown(screen, area).get(row)?.0 {
        Of::Mix(mix) => Some(mix),
        Of::Heading | Of::Now => None,
    }
}
