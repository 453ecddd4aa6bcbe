//! Marks of the trade picture: the line of the unbeaten mixes, and the numbers of the ranked ones.

use crate::tui::draw::pen::Pen;
use crate::tui::{Look, Role, Symbols};

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
    let per = match look.symbols {
        Symbols::Braille => (2, 4),
        Symbols::Block => (1, 2),
        Symbols::Ascii => (1, 1),
    };
    let rows = frame.rows * per.1;
    let mut dots = vec![false; frame.cols * per.0 * rows];
    for pair in points.windows(2) {
        let ends = [pair[0], pair[1]].map(|p| frame.dots(picture, p, per));
        let [Some(from), Some(to)] = ends else { continue };
        // closer than a dot, so that no line is broken
        let steps = (2.0 * (to[0] - from[0]).abs().max((to[1] - from[1]).abs())).ceil().max(1.0);
        let mut step = 0.0;
        while step <= steps {
            let along = |i: usize| from[i] + (to[i] - from[i]) * step / steps;
            let dot = |place: f64, cells: usize| {
                // counted rather than cast: casts hide what lies outside
                (1..cells).take_while(|&c| place >= c as f64).last().unwrap_or(0)
            };
            let (x, y) = (dot(along(0), frame.cols * per.0), dot(along(1), rows));
            dots[y * frame.cols * per.0 + x] = true;
            step += 1.0;
        }
    }
    let lit = |x: usize, y: usize| dots[y * frame.cols * per.0 + x];
    for row in 0..frame.rows {
        for col in 0..frame.cols {
            let cell = |dx: usize, dy: usize| lit(col * per.0 + dx, row * per.1 + dy);
            let symbol = match look.symbols {
                Symbols::Braille => braille(&cell),
                Symbols::Block => match (cell(0, 0), cell(0, 1)) {
                    (true, true) => Some('█'),
                    (true, false) => Some('▀'),
                    (false, true) => Some('▄'),
                    _ => None,
                },
                Symbols::Ascii => cell(0, 0).then_some('*'),
            };
            if let Some(symbol) = symbol {
                pen.put(SIDE + col, OVER + row, &symbol.to_string(), Role::Oxygen);
            }
        }
    }
    for point in points {
        let (col, row) = (frame.col(picture, point.temperature_c), frame.row(point, (0, 1)));
        pen.put(col, row, "o", Role::Oxygen);
    }
}

/// The braille letter of a cell of two by four dots.
fn braille(lit: &dyn Fn(usize, usize) -> bool) -> Option<char> {
    // dots are numbered down the left, down the right, then the lowest row (Unicode, block Braille Patterns, standard)
    let places = [(0, 0), (0, 1), (0, 2), (1, 0), (1, 1), (1, 2), (0, 3), (1, 3)];
    let bits: u32 = places.iter().zip(0..).map(|(&(x, y), bit)| u32::from(lit(x, y)) << bit).sum();
    if bits == 0 { None } else { char::from_u32(0x2800 + bits) }
}
