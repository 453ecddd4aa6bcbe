//! The gates in the face of the dam, each with its sign and name.

use std::ops::Range;

use crate::plot::on_rows;
use crate::problem::harmless;
use crate::tui::Role;

use super::layout::Layout;
use super::pen::{Pen, cells, front};
use super::{GateMark, GateState, Picture};

/// Where a gate's name lies on the screen.
pub(super) struct Span {
    pub(super) gate: usize,
    pub(super) row: u16,
    /// Sign and name, and the cells beside them that brackets may take.
    pub(super) columns: Range<u16>,
    text: String,
}

/// Gates of each row, the chosen first, then those that draw, then short names, so that
/// as many as can be are named.
fn rows(picture: &Picture, layout: &Layout) -> Vec<(u16, Vec<usize>)> {
    let mut order: Vec<usize> = (0..picture.gates.len()).collect();
    let gate = |i: &usize| &picture.gates[*i];
    order.sort_by(|a, b| {
        gate(b).centre_m.total_cmp(&gate(a).centre_m).then_with(|| gate(a).name.cmp(&gate(b).name))
    });
    // gates at one elevation go together wherever they go
    let level = |a: &usize, b: &usize| (gate(a).centre_m - gate(b).centre_m).abs() < 0.01;
    let levels: Vec<&[usize]> = order.chunk_by(level).collect();
    let wants: Vec<usize> =
        levels.iter().map(|l| usize::from(layout.row(gate(&l[0]).centre_m) - layout.top)).collect();
    let mut out: Vec<(u16, Vec<usize>)> = Vec::new();
    for (row, level) in on_rows(&wants, usize::from(layout.rows)).into_iter().zip(levels) {
        let row = layout.top + u16::try_from(row).unwrap_or(0);
        match out.last_mut() {
            Some(last) if last.0 == row => last.1.extend_from_slice(level),
            _ => out.push((row, level.to_vec())),
        }
    }
    for (_, gates) in &mut out {
        gates.sort_by_key(|i| (!gate(i).chosen, gate(i).state != GateState::Drawing, cells(&gate(i).name)));
    }
    out
}

fn text(gate: &GateMark, most: u16) -> String {
    let name = harmless(&gate.name);
    format!("{}{}", gate.state.sign(), front(&name, most))
}

/// What is said beside the gates of a row: the chosen one's note, or one that holds for all.
fn note(picture: &Picture, gates: &[usize]) -> String {
    let first = gates.first().map(|i| &picture.gates[*i]);
    let speaks = first.filter(|f| f.chosen || gates.iter().all(|i| picture.gates[*i].note == f.note));
    speaks.map(|f| harmless(&f.note)).unwrap_or_default()
}

/// Columns that the gates would like.
pub(super) fn width(picture: &Picture, layout: &Layout) -> u16 {
    let row = |(_, gates): &(u16, Vec<usize>)| {
        let names: u16 = gates.iter().map(|i| cells(&text(&picture.gates[*i], u16::MAX)).min(40) + 1).sum();
        let note = if layout.notes { cells(&note(picture, gates)).min(20) } else { 0 };
        names + 1 + note + u16::from(note > 0)
    };
    rows(picture, layout).iter().map(row).max().unwrap_or(0).max(cells("gates") + 1)
}

/// Every gate named, with the number of those a row has no room for.
fn laid(picture: &Picture, layout: &Layout) -> (Vec<Span>, Vec<(u16, u16, usize)>) {
    let (mut spans, mut more) = (Vec::new(), Vec::new());
    let end = layout.gates.right();
    for (row, gates) in rows(picture, layout) {
        let mut x = layout.gates.x;
        for (k, &gate) in gates.iter().enumerate() {
            let left = gates.len() - k;
            // room for "+2" and a blank is kept as long as others follow
            let tail = if left > 1 { 4 } else { 1 };
            let room = end.saturating_sub(x + 1 + tail);
            let text = text(&picture.gates[gate], room.saturating_sub(1));
            let whole = cells(&harmless(&picture.gates[gate].name)) < room;
            if k > 0 && !whole {
                more.push((row, x + 1, left));
                break;
            }
            let columns = x..x + cells(&text) + 2;
            x = columns.end - 1;
            spans.push(Span { gate, row, columns, text });
        }
    }
    (spans, more)
}

/// Where each gate that is named lies.
pub(super) fn spans(picture: &Picture, layout: &Layout) -> Vec<Span> {
    laid(picture, layout).0
}

pub(super) fn draw(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let width = layout.gates.width;
    pen.text(layout.gates.x + 1, layout.area.y, width.saturating_sub(1), "gates", Role::Quiet);
    let (spans, more) = laid(picture, layout);
    for span in &spans {
        let gate = &picture.gates[span.gate];
        let role = match gate.state {
            _ if gate.chosen => Role::Chosen,
            GateState::Drawing => Role::Strong,
            GateState::OpenNoFlow | GateState::Short => Role::Warn,
            GateState::Shut | GateState::Wet => Role::Plain,
            GateState::Dry | GateState::Out => Role::Quiet,
        };
        let (first, last) = (span.columns.start, span.columns.end - 1);
        pen.text(first + 1, span.row, last - first - 1, &span.text, role);
        for x in [first, last] {
            pen.take(x, span.row);
        }
        if gate.chosen {
            pen.text(first, span.row, 1, "[", Role::Strong);
            pen.text(last, span.row, 1, "]", Role::Strong);
        }
    }
    for (row, x, left) in more {
        pen.text(x, row, layout.gates.right().saturating_sub(x), &format!("+{left}"), Role::Plain);
    }
    if layout.notes {
        for (row, gates) in rows(picture, layout) {
            let note = note(picture, &gates);
            let end = spans.iter().filter(|s| s.row == row).map(|s| s.columns.end).max().unwrap_or(0);
            if end + cells(&note) < layout.gates.right() {
                pen.text(end, row, cells(&note), &note, Role::Quiet);
            }
        }
    }
}
