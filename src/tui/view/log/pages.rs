//! Scores, spells outside the band, what is learned, the hindcast: in the words of the command.

use crate::problem::harmless;
use crate::report::text::learned::{applied, learned_yaml};
use crate::report::text::log::{hindcast, learning, left_out, scores, spell};
use crate::tasks::Context;
use crate::tasks::log::Past;
use crate::tui::look::Role;
use crate::tui::model::LogPage;

use super::super::scroll::{Lines, say};
use super::Screen;

/// What a page says below its first line: headings, and lines under each.
type Parts = Vec<(&'static str, Vec<String>)>;

/// A page; the time line and the decision in full are none.
pub(super) fn lines(screen: &Screen, width: usize) -> Lines {
    let mut out = Lines::new();
    let (words, parts): (&str, fn(&Context, &Past) -> Parts) = match screen.session.log.page {
        LogPage::Scores => ("The gauge beside what was expected; s or Esc goes back.", |context, past| {
            vec![("", scores(context, past)), ("Left out of scores and learning", left_out(past))]
        }),
        LogPage::Spells => {
            ("When the gauge left the band, and what may be why; c or Esc goes back.", |context, past| {
                let told = past.spells.iter().flat_map(|told| spell(told, context.system));
                vec![("", told.collect())]
            })
        }
        LogPage::Learned => (
            "What the record teaches; only the site file applies it. l or Esc goes back.",
            |context, past| taught(context, past),
        ),
        LogPage::Hindcast => ("The season gone through again; h or Esc goes back.", |context, past| {
            let notes = past.notes.iter().map(|note| note.advice(context.system));
            vec![("", hindcast(context, past)), ("Assumed", notes.collect())]
        }),
        LogPage::Line | LogPage::Decision => return out,
    };
    say(&mut out, words, width, 2, Role::Quiet);
    let Some(passed) = screen.passed else {
        say(&mut out, "There is no past yet.", width, 2, Role::Plain);
        return out;
    };
    let before = out.len();
    for (heading, lines) in parts(&screen.context(&passed.context), &passed.past) {
        if lines.is_empty() {
            continue;
        }
        if !heading.is_empty() {
            out.push((String::new(), Role::Plain));
            say(&mut out, heading, width, 2, Role::Strong);
        }
        for line in lines {
            // the blanks that make columns stay where a line has room
            if line.chars().count() <= width {
                out.push((line, Role::Plain));
            } else {
                let lead = line.chars().take_while(|c| *c == ' ').count();
                say(&mut out, &line, width, lead + 2, Role::Plain);
            }
        }
    }
    if out.len() == before {
        say(&mut out, nothing(screen.session.log.page), width, 2, Role::Plain);
    }
    out
}

/// What can be learned, what the site file applies, and the lines that would.
fn taught(context: &Context, past: &Past) -> Parts {
    let (site, system) = (context.site(), context.system);
    let lines = learned_yaml(site, &past.learning).unwrap_or_default();
    vec![
        ("", learning(context, past)),
        ("What is applied", applied(site, system).into_iter().collect()),
        ("For site.yaml; nothing was written", lines.lines().map(harmless).collect()),
    ]
}

/// What is said where a page has nothing to tell.
fn nothing(page: LogPage) -> &'static str {
    match page {
        LogPage::Spells => "The gauge left the band on no days in a row.",
        LogPage::Learned => "No day can be held against the gauge, so nothing is learned.",
        _ => "No day can be held against the gauge.",
    }
}
