//! Two tries side by side.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::problem::harmless;
use crate::report::text;
use crate::target::Standing;
use crate::tasks::MixAnswer;
use crate::tui::draw::boxed;
use crate::tui::look::Role;
use crate::tui::model::{Model, Session};
use crate::units::{Dimension, System, figure, show};

use super::super::failure_words;
use super::super::write::{cut, put, wrapped};
use super::digits;

/// Draws the try on the board beside another.
pub(super) fn draw(model: &Model, session: &Session, beside: usize, area: Rect, buf: &mut Buffer) {
    let look = model.look;
    let inside = boxed(area, "two tries; c goes on", buf, look);
    let system = model.system();
    let at = session.draft().at;
    // what each figure is stands in the first quarter
    let name = (inside.width / 4).clamp(8, 12);
    let half = inside.width.saturating_sub(name) / 2;
    let places = [name, name + half];
    let answers = [at, beside].map(|i| session.answer(i));
    for ((i, place), role) in [at, beside].into_iter().zip(places).zip([Role::Tried, Role::Plain]) {
        put(buf, inside, place, 0, &format!("try {}", i + 1), look.style(role));
    }
    let mut row = 1;
    let mut line = |name: &str, words: [String; 2], buf: &mut Buffer| {
        if words.iter().all(String::is_empty) {
            return;
        }
        put(buf, inside, 0, row, name, look.style(Role::Quiet));
        let cells = usize::from(half.saturating_sub(1)).max(1);
        let columns = words.map(|w| wrapped(&w, cells, 1));
        let rows = columns.iter().map(Vec::len).max().unwrap_or(1);
        for (column, place) in columns.iter().zip(places) {
            for (below, text) in (0..).zip(column) {
                put(buf, inside, place, row + below, &cut(text, cells), look.style(Role::Plain));
            }
        }
        row = row.saturating_add(u16::try_from(rows.max(1)).unwrap_or(1));
    };
    let each = |of: &dyn Fn(&MixAnswer) -> String| {
        answers.map(|answer| match answer {
            Some(Ok(answer)) => of(answer),
            Some(Err(failure)) => failure_words(failure, system),
            None => "computing ...".to_owned(),
        })
    };
    let site = session.context().site();
    line("water", each(&|a| release(a, system, true)[0].clone()), buf);
    line("", each(&|a| release(a, system, true)[1].clone()), buf);
    line("oxygen", each(&|a| release(a, system, false)[0].clone()), buf);
    line("", each(&|a| release(a, system, false)[1].clone()), buf);
    line("total", each(&|a| show(a.mix.release.flow_m3s, Dimension::Flow, system, digits(model))), buf);
    line(
        "stands",
        each(&|a| {
            let missed = a.mix.targets.iter().filter(|s| s.missed()).count();
            match (a.mix.targets.len(), missed) {
                (0, _) => "no target".into(),
                (_, 0) if a.mix.targets.iter().any(|s| s.temperature.0 == Standing::Unknown) => {
                    "UNKNOWN".into()
                }
                (_, 0) => "inside".into(),
                (_, n) => format!("{n} MISSED"),
            }
        }),
        buf,
    );
    line(
        "cases",
        each(&|a| {
            let share =
                a.mix.targets.iter().find(|s| s.governs).and_then(|s| s.share_inside_both.or(s.share_inside));
            share.map_or_else(|| "-".into(), |s| format!("{:.0} %", 100.0 * s))
        }),
        buf,
    );
    line(
        "moves",
        each(&|a| {
            a.change
                .as_ref()
                .map_or_else(|| "none".into(), |c| format!("{}, {:.1} h", c.moves.count, c.moves.crew_hours))
        }),
        buf,
    );
    line(
        "limits",
        each(&|a| {
            let broken: Vec<String> = a
                .mix
                .limits
                .iter()
                .filter(|c| c.broken())
                .map(|c| format!("{} {}", c.rule.name(), c.of.name(site).map_or_else(String::new, harmless)))
                .collect();
            if broken.is_empty() { "all kept".into() } else { format!("! {}", broken.join(", ")) }
        }),
        buf,
    );
    line("set", each(&|a| text::setting_words(site, &a.setting, system)), buf);
}

/// The release and its band.
fn release(answer: &MixAnswer, system: System, warm: bool) -> [String; 2] {
    let mix = &answer.mix;
    let unit = system.unit(Dimension::Temperature);
    let band = |band: Option<(f64, f64)>, of: &dyn Fn(f64) -> String| {
        band.map_or_else(String::new, |(low, high)| format!("{}-{}", of(low), of(high)))
    };
    if warm {
        let value = show(mix.release.temperature_c, Dimension::Temperature, system, 1);
        return [value, band(mix.spread.band_c(), &|c| figure(c, unit, 1))];
    }
    match mix.release.oxygen_below_mg_l {
        None => ["unknown".into(), String::new()],
        Some(oxygen) => {
            [format!("{oxygen:.1} mg/L"), band(mix.spread.band_oxygen_mg_l(), &|o| format!("{o:.1}"))]
        }
    }
}
