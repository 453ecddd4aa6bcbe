//! Marks of the trade picture: the line of the unbeaten mixes, and the numbers of the ranked ones.
//!
//! Figures of the layout are choices.

use crate::tui::draw::pen::Pen;
use crate::tui::{Look, Role};

use super::axes::{Frame, OVER, SIDE};
use super::{TradePicture, TradePoint};

/// Marks that stand together take at most so many columns.
const TOGETHER: usize = 12;

/// What a mark stands for: the setting now, or a ranked mix.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Of {
    Now,
    Mix(usize),
}

#[derive(Debug, Clone)]
struct Mark {
    col: usize,
    row: usize,
    of: Of,
    text: String,
    selected: bool,
}

/// Marks of one row that would touch, written with commas between.
pub(super) struct Cluster(Vec<Mark>);

/// Cells that marks take in a row: from a column up to, not including, another.
pub(super) struct Taken {
    pub(super) row: usize,
    pub(super) from: usize,
    pub(super) to: usize,
}

impl Cluster {
    /// What is written and by which mark each piece: those that do not fit are counted.
    fn pieces(&self) -> Vec<(Option<&Mark>, String)> {
        let all: Vec<(Option<&Mark>, String)> = self.0.iter().map(|m| (Some(m), m.text.clone())).collect();
        let width = |pieces: &[(Option<&Mark>, String)]| pieces.iter().map(|p| p.1.len() + 1).sum::<usize>();
        if width(&all) <= TOGETHER + 1 {
            return all;
        }
        let mut order: Vec<&Mark> = self.0.iter().collect();
        order.sort_by_key(|m| (!m.selected, m.of));
        let mut used = "+10".len();
        let chosen: Vec<Of> = order
            .iter()
            .take_while(|m| {
                used += m.text.len() + 1;
                used <= TOGETHER
            })
            .map(|m| m.of)
            .collect();
        let is_kept = |p: &(Option<&Mark>, String)| p.0.is_some_and(|m| chosen.contains(&m.of));
        let mut kept: Vec<(Option<&Mark>, String)> = all.iter().filter(|p| is_kept(p)).cloned().collect();
        let more = all.len() - kept.len();
        kept.push((None, format!("+{more}")));
        kept
    }

    fn width(&self) -> usize {
        self.pieces().iter().map(|p| p.1.len() + 1).sum::<usize>().saturating_sub(1)
    }

    /// Column it begins at: the selected mark, else the first, stands on its own column.
    fn start(&self, frame: &Frame) -> usize {
        let mut before = 0;
        let mut start = self.0.first().map_or(0, |m| m.col);
        for (mark, text) in self.pieces() {
            if let Some(mark) = mark.filter(|m| m.selected) {
                start = mark.col.saturating_sub(before + 1);
            }
            before += text.len() + 1;
        }
        let last = (SIDE + frame.cols).saturating_sub(self.width());
        start.clamp(SIDE, last.max(SIDE))
    }
}

fn marks(picture: &TradePicture, frame: &Frame) -> Vec<Mark> {
    let mark = |of: Of, point: &TradePoint| {
        let (text, place, selected) = match of {
            Of::Now => ("N".to_owned(), (0, picture.count()), false),
            Of::Mix(i) if picture.selected == Some(i) => (format!("[{}]", i + 1), picture.place(i), true),
            Of::Mix(i) => ((i + 1).to_string(), picture.place(i), false),
        };
        let col = frame.col(picture, point.temperature_c);
        Mark { col, row: frame.row(point, place), of, text, selected }
    };
    let mixes = picture.mixes.iter().enumerate().map(|(i, p)| mark(Of::Mix(i), p));
    picture.now.iter().map(|p| mark(Of::Now, p)).chain(mixes).collect()
}

/// Clusters of every row, none touching another.
pub(super) fn clusters(picture: &TradePicture, frame: &Frame) -> Vec<(usize, Cluster)> {
    let marks = marks(picture, frame);
    let mut out = Vec::new();
    for row in OVER..OVER + frame.rows {
        let mut here: Vec<Mark> = marks.iter().filter(|m| m.row == row).cloned().collect();
        here.sort_by_key(|m| m.col);
        let mut clusters: Vec<Cluster> = here.into_iter().map(|m| Cluster(vec![m])).collect();
        let touch = |a: &Cluster, b: &Cluster| a.start(frame) + a.width() >= b.start(frame);
        while let Some(i) = (1..clusters.len()).find(|&i| touch(&clusters[i - 1], &clusters[i])) {
            let next = clusters.remove(i);
            clusters[i - 1].0.extend(next.0);
        }
        out.extend(clusters.into_iter().map(|c| (row, c)));
    }
    out
}

/// The cells that clusters take.
pub(super) fn taken(clusters: &[(usize, Cluster)], frame: &Frame) -> Vec<Taken> {
    let of = |(row, cluster): &(usize, Cluster)| {
        let from = cluster.start(frame);
        Taken { row: *row, from, to: from + cluster.width() }
    };
    clusters.iter().map(of).collect()
}

pub(super) fn draw(
    picture: &TradePicture,
    frame: &Frame,
    clusters: &[(usize, Cluster)],
    pen: &mut Pen,
    look: Look,
) {
    unbeaten(picture, frame, pen, look);
    for &(row, ref cluster) in clusters {
        let mut col = cluster.start(frame);
        for (n, (mark, text)) in cluster.pieces().into_iter().enumerate() {
            if n > 0 {
                pen.put(col, row, ",", Role::Plain);
                col += 1;
            }
            let role = match mark {
                Some(m) if m.selected => Role::Chosen,
                Some(Mark { of: Of::Now, .. }) => Role::Now,
                Some(_) => Role::Strong,
                None => Role::Quiet,
            };
            pen.put(col, row, &text, role);
            col += text.len();
        }
    }
}

/// The ranked mix whose number stands at a cell.
pub(super) fn at(picture: &TradePicture, frame: &Frame, col: usize, row: usize) -> Option<usize> {
    for (_, cluster) in clusters(picture, frame).iter().filter(|c| c.0 == row) {
        let mut start = cluster.start(frame);
        for (mark, text) in cluster.pieces() {
            if (start..start + text.len()).contains(&col) {
                return mark.and_then(|m| if let Of::Mix(i) = m.of { Some(i) } else { None });
            }
            start += text.len() + 1;
        }
    }
    None
}

/// The mixes no other beats, joined from the coldest to the warmest.
fn unbeaten(picture: &TradePicture, frame: &Frame, pen: &mut Pen, look: Look) {
    let mut points: Vec<&TradePoint> = picture.unbeaten.iter().filter(|p| p.oxygen_mg_l.is_some()).collect();
    points.sort_by(|a, b| a.temperature_c.total_cmp(&b.temperature_c));
    let line = frame.line(picture, &points, look.symbols.grain());
    for (row, col) in (0..frame.rows).flat_map(|row| (0..frame.cols).map(move |col| (row, col))) {
        let Some(spot) = line.as_ref().and_then(|line| line.spot(col, row)) else { continue };
        pen.put(SIDE + col, OVER + row, &spot.glyph.to_string(), Role::Oxygen);
    }
    for point in points {
        let (col, row) = (frame.col(picture, point.temperature_c), frame.row(point, (0, 1)));
        pen.put(col, row, "o", Role::Oxygen);
    }
}
