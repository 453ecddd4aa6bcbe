//! A box with a title.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::symbols::border;
use ratatui::widgets::{Block, Borders, Padding, Widget};

use super::super::look::{Look, Role, Symbols};

/// Lines of a box in plain characters.
const PLAIN: border::Set<'static> = border::Set {
    top_left: "+",
    top_right: "+",
    bottom_left: "+",
    bottom_right: "+",
    vertical_left: "|",
    vertical_right: "|",
    horizontal_top: "-",
    horizontal_bottom: "-",
};

/// Draws a box; the area inside.
pub fn boxed(area: Rect, title: &str, buf: &mut Buffer, look: Look) -> Rect {
    let set = if look.symbols == Symbols::Ascii { PLAIN } else { border::PLAIN };
    let block = Block::new()
        .borders(Borders::ALL)
        .border_set(set)
        .border_style(look.style(Role::Quiet))
        .title(format!(" {title} "))
        .title_style(look.style(Role::Strong))
        .padding(Padding::horizontal(1));
    let inside = block.inner(area);
    block.render(area.intersection(*buf.area()), buf);
    inside
}
