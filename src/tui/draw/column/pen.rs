//! Writing into the picture's area, and the characters of its lines.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use crate::plot::{Dots, Grain};
use crate::tui::{Look, Role, Symbols};

/// Characters of the lines.
pub(super) struct Lines {
    pub(super) wall: &'static str,
    pub(super) tick: &'static str,
    pub(super) opening: &'static str,
    pub(super) opening_tick: &'static str,
    pub(super) surface: &'static str,
    pub(super) rule: &'static str,
    pub(super) bed: &'static str,
    pub(super) axis_tick: &'static str,
    pub(super) bed_tick: &'static str,
    pub(super) level: &'static str,
    pub(super) cursor: &'static str,
    pub(super) threshold: &'static str,
    pub(super) extent: &'static str,
    pub(super) ends_free: [&'static str; 2],
    pub(super) ends_cut: [&'static str; 2],
}

/// Box drawing, for braille and half blocks.
pub(super) const DRAWN: Lines = Lines {
    wall: "│",
    tick: "┤",
    opening: "║",
    opening_tick: "╢",
    surface: "~",
    rule: "─",
    bed: "═",
    axis_tick: "┴",
    bed_tick: "╤",
    level: "╌",
    cursor: "─",
    threshold: "┊",
    extent: "│",
    ends_free: ["┐", "┘"],
    ends_cut: ["╕", "╛"],
};

const TYPED: Lines = Lines {
    wall: "|",
    tick: "+",
    opening: "#",
    opening_tick: "#",
    surface: "~",
    rule: "-",
    bed: "=",
    axis_tick: "+",
    bed_tick: "+",
    level: "_",
    cursor: "-",
    threshold: ":",
    extent: "|",
    ends_free: [".", "'"],
    ends_cut: ["=", "="],
};

/// The area drawn into.
pub(super) struct Pen<'a> {
    buf: &'a mut Buffer,
    area: Rect,
    look: Look,
    /// Cells written, blanks of words included.
    taken: Vec<bool>,
    pub(super) lines: &'static Lines,
}

impl<'a> Pen<'a> {
    pub(super) fn new(buf: &'a mut Buffer, area: Rect, look: Look) -> Self {
        let lines = if look.symbols == Symbols::Ascii { &TYPED } else { &DRAWN };
        Self { buf, area, look, taken: vec![false; area.area() as usize], lines }
    }

    pub(super) fn clear(&mut self) {
        for at in self.area.positions() {
            self.buf[at].reset();
        }
    }

    pub(super) fn grain(&self) -> Grain {
        self.look.symbols.grain()
    }

    /// Text cut at `width` cells and at the area.
    pub(super) fn text(&mut self, x: u16, y: u16, width: u16, text: &str, role: Role) {
        if !(self.area.left()..self.area.right()).contains(&x)
            || !(self.area.top()..self.area.bottom()).contains(&y)
        {
            return;
        }
        let width = width.min(self.area.right() - x);
        let (end, _) = self.buf.set_stringn(x, y, text, usize::from(width), self.look.style(role));
        for x in x..end {
            self.take(x, y);
        }
    }

    /// Keeps a cell from what is drawn behind.
    pub(super) fn take(&mut self, x: u16, y: u16) {
        if let Some(taken) = self.place(x, y).and_then(|i| self.taken.get_mut(i)) {
            *taken = true;
        }
    }

    fn place(&self, x: u16, y: u16) -> Option<usize> {
        let inside = self.area.contains((x, y).into());
        inside.then(|| {
            usize::from(y - self.area.y) * usize::from(self.area.width) + usize::from(x - self.area.x)
        })
    }

    /// Text that ends before `end`, not beginning before the area.
    pub(super) fn text_before(&mut self, end: u16, y: u16, text: &str, role: Role) {
        let x = end.saturating_sub(cells(text)).max(self.area.x);
        self.text(x, y, end.saturating_sub(x), text, role);
    }

    /// Whether nothing was written to a cell.
    pub(super) fn blank(&self, x: u16, y: u16) -> bool {
        self.place(x, y).is_some_and(|i| !self.taken[i])
    }

    /// A character from `from` to before `to`, wherever nothing stands yet.
    pub(super) fn behind(&mut self, from: u16, to: u16, y: u16, line: &str, role: Role) {
        for x in from..to.min(self.area.right()) {
            if self.blank(x, y) {
                self.text(x, y, 1, line, role);
            }
        }
    }

    /// Dots into `into`; `role` by curve, and the plain character of each where there is no grain.
    pub(super) fn dots(&mut self, dots: &Dots, into: Rect, role: impl Fn(usize) -> (Role, &'static str)) {
        let mut glyph = [0; 4];
        for at in into.positions() {
            let Some(spot) = dots.spot(usize::from(at.x - into.x), usize::from(at.y - into.y)) else {
                continue;
            };
            let (role, letter) = role(spot.curve);
            let text: &str = match self.grain() {
                Grain::Ascii if spot.shared => "8",
                Grain::Ascii => letter,
                Grain::Braille | Grain::Block => spot.glyph.encode_utf8(&mut glyph),
            };
            self.text(at.x, at.y, 1, text, role);
        }
    }
}

/// Width of text in cells.
pub(super) fn cells(text: &str) -> u16 {
    u16::try_from(text.width()).unwrap_or(u16::MAX)
}

/// The front of a text that fits into so many cells.
pub(super) fn front(text: &str, width: u16) -> &str {
    let fits = |end: &usize| text.get(..*end).is_some_and(|t| cells(t) <= width);
    let end = text.char_indices().map(|(i, c)| i + c.len_utf8()).take_while(fits).last().unwrap_or(0);
    &text[..end]
}
