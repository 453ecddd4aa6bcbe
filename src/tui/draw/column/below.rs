//! What the cursor reads out, and the meaning of the signs.

use crate::problem::harmless;
use crate::tui::Role;
use crate::units::{Dimension, figure, show};

use super::curves::at;
use super::layout::Layout;
use super::pen::{DRAWN, Lines, Pen, cells};
use super::{GateState, Picture};

/// The row read out, and its numbers.
pub(super) fn cursor(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let Some(z) = picture.cursor_m.filter(|z| layout.row_inside(*z).is_some()) else { return };
    let row = layout.row(z);
    let system = picture.system;
    let length = system.unit(Dimension::Length);
    pen.behind(layout.wall + 1, layout.area.right(), row, pen.lines.cursor, Role::Plain);
    pen.text(
        layout.area.x,
        row,
        layout.wall - layout.area.x,
        &" ".repeat(usize::from(layout.wall)),
        Role::Plain,
    );
    pen.text_before(layout.wall, row, &figure(z, length, u8::from(layout.wide)), Role::Chosen);
    let Some(line) = layout.readout else { return };
    let mut x = layout.area.x;
    let mut say = |text: &str, role: Role| {
        pen.text(x, line, layout.area.right().saturating_sub(x), text, role);
        x = x.saturating_add(cells(text)).saturating_add(2);
    };
    say(&show(z, Dimension::Length, system, 1), Role::Strong);
    if z > picture.surface_m {
        say("above the water", Role::Plain);
        return;
    }
    match at(&picture.water.temperature, z) {
        Some(t) => say(&show(t, Dimension::Temperature, system, 1), Role::Temperature),
        None => say("no temperature", Role::Temperature),
    }
    match picture.water.oxygen.iter().find_map(|s| at(s, z)) {
        Some(o) => say(&show(o, Dimension::Concentration, system, 1), Role::Oxygen),
        None => say("no oxygen here", Role::Oxygen),
    }
    for (_, words) in picture.flags.iter().filter(|(z, _)| layout.row_inside(*z) == Some(row)) {
        say(&format!("! {}", harmless(words)), Role::Warn);
    }
}

/// What the signs mean.
fn meanings(picture: &Picture, lines: &Lines) -> Vec<String> {
    let present = |state: GateState| picture.gates.iter().any(|g| g.state == state);
    let signs = GateState::SIGNS.iter().filter(|s| present(s.0) && s.1 != ' ');
    let mut out: Vec<String> = signs.map(|(_, sign, words)| format!("{sign} {words}")).collect();
    if !picture.zones.is_empty() {
        out.push("< peak".into());
        out.push(format!("{} free end", lines.ends_free[0]));
        out.push(format!("{} end cut short", lines.ends_cut[0]));
    }
    if picture.cold_c.is_some() {
        out.push("c cold line".into());
    }
    out
}

/// Where each meaning goes: its row, counted from the first, and column.
fn laid(items: &[String], width: u16) -> Vec<(u16, u16)> {
    let (mut row, mut x) = (0, 0);
    let mut out = Vec::new();
    for item in items {
        if x > 0 && x + cells(item) > width {
            (row, x) = (row + 1, 0);
        }
        out.push((row, x));
        x += cells(item) + 2;
    }
    out
}

/// Rows that the legend would fill.
pub(super) fn legend_rows(picture: &Picture, width: u16) -> u16 {
    laid(&meanings(picture, &DRAWN), width).last().map_or(0, |at| at.0 + 1)
}

pub(super) fn legend(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let items = meanings(picture, pen.lines);
    for (item, (row, x)) in items.iter().zip(laid(&items, layout.area.width)) {
        if row < layout.legend.height {
            pen.text(layout.area.x + x, layout.legend.y + row, cells(item), item, Role::Quiet);
        }
    }
}
