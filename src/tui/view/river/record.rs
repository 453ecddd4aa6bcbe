//! What stations recorded, against the rules, with a calendar of days outside.

use crate::report::text::river;
use crate::tui::look::Role;

use super::{Lines, Screen, say};

pub(super) fn lines(screen: &Screen, width: usize) -> Lines {
    let (context, answer, system) = (&screen.down.context, &screen.down.answer, screen.model.system());
    let mut out = Lines::new();
    say(&mut out, "What was recorded, against the rules; v or Esc goes back.", width, 2, Role::Quiet);
    for (words, strong) in river::record(context, answer, system, width) {
        out.push((words, if strong { Role::Strong } else { Role::Plain }));
    }
    out
}
