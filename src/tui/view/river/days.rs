//! What arrives day by day if a release is held.

use crate::report::text::river;
use crate::tui::look::Role;

use super::{Lines, Screen, say};

pub(super) fn lines(screen: &Screen, width: usize) -> Lines {
    let (context, answer, system) = (&screen.down.context, &screen.down.answer, screen.model.system());
    let mut out = Lines::new();
    say(&mut out, "What arrives day by day, each release held; d or Esc goes back.", width, 2, Role::Quiet);
    for (i, line) in river::days(context, answer, system).into_iter().enumerate() {
        out.push((line, if i == 0 { Role::Strong } else { Role::Plain }));
    }
    for words in river::timely_words(context, answer, system) {
        say(&mut out, &words, width, 2, Role::Warn);
    }
    out
}
