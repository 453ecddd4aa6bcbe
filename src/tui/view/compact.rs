//! The main figures, where the window is small.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::problem::harmless;
use crate::report::{caution_within, text};
use crate::tasks::Freshness;

use super::super::look::Role;
use super::super::model::{Model, Screen, Stage};
use super::write::{cut, put, wrapped};

/// Draws the main figures and that the window is small.
pub(super) fn draw(model: &Model, area: Rect, buf: &mut Buffer) {
    let width = usize::from(area.width);
    let look = model.look;
    let last = area.height.saturating_sub(1);
    put(buf, area, 0, last, caution_within(width), look.style(Role::Caution));
    let size = format!("{}x{}: small, all from 72x20", area.width, area.height);
    put(buf, area, 0, last.saturating_sub(1), &cut(&size, width), look.style(Role::Quiet));
    let mut lines: Vec<(String, Role)> = Vec::new();
    match &model.stage {
        Stage::Opening { .. } => lines.push(("opening ...".into(), Role::Plain)),
        Stage::Sites { list, at, .. } => {
            lines.push(("which site?".into(), Role::Strong));
            lines.extend(list.get(*at).map(|c| (format!("> {}", harmless(&c.name)), Role::Plain)));
        }
        Stage::Broken { problems, system, scroll, .. } => {
            lines.push(("the files give no answer".into(), Role::Strong));
            for p in problems.iter().skip(*scroll) {
                lines.extend(wrapped(&p.text(*system), width, 2).into_iter().map(|l| (l, Role::Plain)));
            }
        }
        Stage::Site(session) => {
            let context = session.context();
            let site = context.site();
            let screen = Screen::ALL.iter().find(|s| s.1 == session.screen).map_or("", |s| s.0);
            let mark = if site.demonstration { "[demonstration] " } else { "" };
            lines.push((format!("{mark}{}", harmless(&site.name)), Role::Strong));
            let badge = Freshness::of(site, context.age_days).word();
            let pool = crate::units::show(
                context.profile.pool_m,
                crate::units::Dimension::Length,
                model.system(),
                1,
            );
            lines.push((format!("{screen}: pool {pool}, cast {badge}"), Role::Plain));
            let (words, role) = super::frame::status(model, session);
            if !words.is_empty() {
                lines.push((words, role));
            }
            if session.screen == Screen::River {
                lines.extend(super::river::in_short(model, session, width));
            } else if session.screen == Screen::Season {
                lines.extend(super::season::in_short(model, session, width));
            } else if session.screen == Screen::Log {
                lines.extend(super::log::in_short(model, session, width));
            } else if session.screen == Screen::Note {
                lines.extend(super::note::in_short(model, session, width));
            } else if session.screen == Screen::Rank {
                for (line, role) in super::rank::in_short(model, session, width) {
                    lines.push((line, role));
                }
            } else if let Some(answer) = session.tried() {
                let system = model.system();
                let words = format!("tried {}", text::release_line(&answer.mix, system));
                lines.extend(wrapped(&words, width, 2).into_iter().map(|l| (l, Role::Tried)));
                for s in answer.mix.targets.iter().filter(|s| s.governs) {
                    let words = text::standing_words(s, &site.targets[s.target], system);
                    lines.extend(wrapped(&words, width, 2).into_iter().map(|l| (l, Role::Plain)));
                }
            } else if let Some(Err(failure)) = session.answer(session.draft().at) {
                let words = super::failure_words(failure, model.system());
                lines.extend(wrapped(&words, width, 2).into_iter().map(|l| (l, Role::Outside)));
            }
        }
    }
    if let Some(message) = &model.message {
        lines.push((message.words.clone(), Role::Plain));
    }
    for (row, (line, role)) in (0..last.saturating_sub(1)).zip(lines) {
        put(buf, area, 0, row, &cut(&line, width), look.style(role));
    }
}
