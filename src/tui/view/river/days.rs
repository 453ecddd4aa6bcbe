//! What arrives day by day if a release is held.

use crate::report::text::river;
use crate::tui::look::Role;

use super::{Lines, Screen, say};

/// A line a day under a heading.
pub(super) fn strip(screen: &Screen, width: usize) -> Lines {
    let (context, answer, system) = (&screen.down.context, &screen.down.answer, screen.model.system());
    let role = |i: usize| if i == 0 { Role::Strong } else { Role::Plain };
    river::days(context, answer, system, width)
        .into_iter()
        .enumerate()
        .map(|(i, line)| (line, role(i)))
        .collect()
}

pub(super) fn lines(screen: &Screen, width: usize) -> Lines {
    let (context, answer, system) = (&screen.down.context, &screen.down.answer, screen.model.system());
    let mut out = Lines::new();
    say(&mut out, "What arrives day by day, each release held; d or Esc goes back.", width, 2, Role::Quiet);
    out.extend(strip(screen, width));
    for words in river::timely_words(context, answer, system) {
        say(&mut out, &words, width, 2, Role::Warn);
    }
    out
}
