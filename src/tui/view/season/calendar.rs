//! What has a date: gates, moves, what is within reach, cold water, and what else comes of the season.

use crate::report::text::season::{cold, exhausted, gates, moves, needed, reach, reserve, rest, targets};
use crate::tui::look::Role;

use super::super::scroll::{Lines, say};
use super::Screen;

pub(super) fn lines(screen: &Screen, width: usize) -> Lines {
    let (ahead, run, system) = (screen.shown.ahead, screen.shown.run, screen.model.system());
    let context = &ahead.context;
    let mut out = Lines::new();
    say(&mut out, "Gates and moves by date; g or Esc goes back.", width, 2, Role::Quiet);
    let day = screen.day().and_then(|i| run.run.days.get(i));
    let left = day.and_then(|day| screen.session.left_on(day.date));
    let needed = left.map_or_else(Vec::new, |left| needed(&left.context, &left.answer, system));
    let on = day.map_or_else(String::new, |day| format!("Cold water needed on {}", day.date));
    let parts = [
        (on.as_str(), needed),
        ("Gates", gates(context, run, system)),
        ("Moves", moves(context, run, system)),
        ("Targets", targets(context, run, system)),
        ("Runs out", vec![exhausted(&run.outcome, system)]),
        ("Reserve", reserve(context, &run.outcome, system).into_iter().collect()),
        ("Within reach on the days of decision", reach(run, system)),
        ("Cold water", cold(run, system)),
        ("Beside", rest(context, run, system)),
    ];
    for (heading, lines) in parts.into_iter().filter(|part| !part.1.is_empty()) {
        out.push((heading.to_owned(), Role::Strong));
        for line in lines {
            // the blanks that make columns stay where a line has room
            let line = format!("  {line}");
            if line.chars().count() <= width {
                out.push((line, Role::Plain));
            } else {
                say(&mut out, &line, width, 4, Role::Plain);
            }
        }
    }
    out
}
