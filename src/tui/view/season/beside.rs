//! Cases, plans and strategies side by side: every season computed since the files or what is set changed.

use crate::problem::harmless;
use crate::report::text::season::{Row, columns, meaning, out_of_reach, side};
use crate::tui::look::Role;

use super::super::scroll::{Lines, say};
use super::Screen;

pub(super) fn lines(screen: &Screen, width: usize) -> Lines {
    let (system, answer) = (screen.model.system(), &screen.shown.ahead.answer);
    let mut out = Lines::new();
    let words = "Seasons side by side; c, p and s go through them, t or Esc goes back.";
    say(&mut out, words, width, 2, Role::Quiet);
    let run = &screen.shown.run.run;
    let here = [&run.plan, &run.case, &run.strategy].map(|name| harmless(name));
    let mut rows: Vec<Row> = Vec::new();
    for ahead in screen.session.seasons_beside(screen.shown.ahead) {
        // the newest of each stands first already; two plans of one answer may have one name
        let known = rows.len();
        for row in side(&ahead.answer, system) {
            let is = |r: &Row| (&r.name, r.seen) == (&row.name, row.seen);
            if !rows.iter().take(known).any(is) {
                rows.push(row);
            }
        }
    }
    rows.sort_by(|a, b| (a.seen, &a.name).cmp(&(b.seen, &b.name)));
    for row in &mut rows {
        row.main = row.name == here && row.foresight == screen.shown.run.foresight;
    }
    for (i, line) in columns(&rows).into_iter().enumerate() {
        let chosen = i.checked_sub(1).and_then(|i| rows.get(i)).is_some_and(|row| row.main);
        let role = match i {
            0 => Role::Strong,
            _ if chosen => Role::Chosen,
            _ => Role::Plain,
        };
        out.push((line, role));
    }
    say(&mut out, &meaning(&rows, system), width, 2, Role::Quiet);
    out.push((String::new(), Role::Plain));
    if let Some(words) = out_of_reach(answer) {
        say(&mut out, &words, width, 2, Role::Strong);
    }
    for note in &answer.notes {
        say(&mut out, &format!("- {}", note.advice(system)), width, 2, Role::Plain);
    }
    out
}
