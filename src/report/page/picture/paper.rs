//! A sheet in millimetres with what pictures are made of.

use plotters::coord::Shift;
use plotters::coord::types::RangedCoordf64;
use plotters::element::DashedPathElement;
use plotters::prelude::*;
use plotters::style::text_anchor::{HPos, Pos, VPos};
use unicode_width::{UnicodeWidthChar, UnicodeWidthStr};

use super::Size;
use crate::report::page::clean;

/// Units of the drawing in a millimetre: fine enough that steps are not seen.
const FINE: u32 = 8;
/// Height of letters: 24 units are 3 mm, 8.5 pt. The library divides by 1.24.
const LETTERS: f64 = 24.0 * 1.24;
/// Width of a letter, mm, on the wide side, since the reader's font is not known.
const LETTER_MM: f64 = 1.75;
/// Height a line of words takes, mm.
pub(super) const LINE_MM: f64 = 3.7;

/// Colours that those who see few colours tell apart, each dark enough to print (Okabe and Ito 2008, recalled).
pub(super) const BLACK: RGBColor = RGBColor(0, 0, 0);
/// Grey of rules.
pub(super) const GREY: RGBColor = RGBColor(110, 110, 110);
/// Light grey of grids.
pub(super) const PALE: RGBColor = RGBColor(205, 205, 205);
/// Colours of series, in order.
pub(super) const SERIES: [RGBColor; 5] = [
    RGBColor(0, 90, 160),
    RGBColor(190, 70, 0),
    RGBColor(0, 115, 85),
    RGBColor(140, 60, 120),
    RGBColor(0, 0, 0),
];

/// Where words stand from their point.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Side {
    /// To its right.
    Right,
    /// To its left.
    Left,
    /// About it.
    Middle,
    /// About it, read from below.
    Upward,
}

/// Marks that differ in shape.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Mark {
    /// A full dot.
    Dot,
    /// A full triangle.
    Triangle,
    /// A cross.
    Cross,
    /// An empty ring.
    Ring,
}

/// Marks of series, in order.
pub(super) const MARKS: [Mark; 4] = [Mark::Dot, Mark::Triangle, Mark::Cross, Mark::Ring];
/// Strokes of series, in order: dash and gap, mm.
pub(super) const DASHES: [Option<(u32, u32)>; 4] = [None, Some((3, 1)), Some((1, 1)), Some((5, 2))];

/// A place on the sheet, mm from its upper left.
pub(super) type At = (f64, f64);

/// A sheet. Drawing on it fails only with the library, and then the picture is told in words.
pub(super) struct Paper<'a> {
    area: DrawingArea<SVGBackend<'a>, Cartesian2d<RangedCoordf64, RangedCoordf64>>,
    /// Size.
    pub(super) size: Size,
}

impl<'a> Paper<'a> {
    /// A sheet that is written into a text.
    pub(super) fn new(into: &'a mut String, size: Size) -> Self {
        let units = |mm: f64| (1..2000_u32).take_while(|k| f64::from(*k) <= mm).last().unwrap_or(1) * FINE;
        let (wide, high) = (units(size.wide), units(size.high));
        let whole: DrawingArea<_, Shift> = SVGBackend::with_string(into, (wide, high)).into_drawing_area();
        let ends = (0..wide.cast_signed(), 0..high.cast_signed());
        let spec = Cartesian2d::<RangedCoordf64, RangedCoordf64>::new(0.0..size.wide, 0.0..size.high, ends);
        Self { area: whole.apply_coord_spec(spec), size }
    }

    /// Ends the sheet.
    pub(super) fn done(&self) -> Option<()> {
        self.area.present().ok()
    }

    /// A line through points, `wide` eighths of a millimetre.
    pub(super) fn line(&self, points: Vec<At>, colour: RGBColor, wide: u32) -> Option<()> {
        self.area.draw(&PathElement::new(points, colour.stroke_width(wide))).ok()
    }

    /// A line of dashes; dash and gap in mm.
    pub(super) fn dashed(
        &self,
        points: Vec<At>,
        colour: RGBColor,
        wide: u32,
        (dash, gap): (u32, u32),
    ) -> Option<()> {
        let style = colour.stroke_width(wide);
        self.area.draw(&DashedPathElement::new(points, dash * FINE, gap * FINE, style)).ok()
    }

    /// A line in one of the strokes of series.
    pub(super) fn stroke(&self, points: Vec<At>, series: usize) -> Option<()> {
        let colour = SERIES[series % SERIES.len()];
        match DASHES[series % DASHES.len()] {
            None => self.line(points, colour, 3),
            Some(dashes) => self.dashed(points, colour, 3, dashes),
        }
    }

    /// A filled box.
    pub(super) fn filled(&self, a: At, b: At, colour: RGBColor) -> Option<()> {
        self.area.draw(&Rectangle::new([a, b], colour.filled())).ok()
    }

    /// A shape filled so that what lies below shows.
    pub(super) fn shaded(&self, points: Vec<At>, colour: RGBColor, share: f64) -> Option<()> {
        self.area.draw(&Polygon::new(points, colour.mix(share).filled())).ok()
    }

    /// The outline of a box.
    pub(super) fn frame(&self, a: At, b: At, colour: RGBColor, wide: u32) -> Option<()> {
        self.line(vec![a, (b.0, a.1), b, (a.0, b.1), a], colour, wide)
    }

    /// A mark.
    pub(super) fn mark(&self, at: At, mark: Mark, colour: RGBColor) -> Option<()> {
        let white = RGBColor(255, 255, 255);
        match mark {
            Mark::Dot => self.area.draw(&Circle::new(at, FINE, colour.filled())).ok(),
            Mark::Triangle => self.area.draw(&TriangleMarker::new(at, FINE + 2, colour.filled())).ok(),
            Mark::Cross => self.area.draw(&Cross::new(at, FINE, colour.stroke_width(3))).ok(),
            Mark::Ring => {
                self.area.draw(&Circle::new(at, FINE, white.filled())).ok()?;
                self.area.draw(&Circle::new(at, FINE, colour.stroke_width(3))).ok()
            }
        }
    }

    /// Words.
    pub(super) fn words(&self, at: At, text: &str, side: Side, bold: bool) -> Option<()> {
        let style = if bold { FontStyle::Bold } else { FontStyle::Normal };
        let font = FontDesc::new(FontFamily::SansSerif, LETTERS, style);
        let font = if side == Side::Upward { font.transform(FontTransform::Rotate270) } else { font };
        let across = match side {
            Side::Right => HPos::Left,
            Side::Left => HPos::Right,
            Side::Middle | Side::Upward => HPos::Center,
        };
        let style = TextStyle::from(font).color(&BLACK).pos(Pos::new(across, VPos::Center));
        self.area.draw(&Text::new(clean(text), at, style)).ok()
    }

    /// Words on white, so that a line below does not cross them.
    pub(super) fn over(&self, (x, y): At, text: &str, side: Side) -> Option<()> {
        let wide = words_mm(text);
        let left = match side {
            Side::Right => x,
            Side::Left => x - wide,
            Side::Middle | Side::Upward => x - 0.5 * wide,
        };
        let (a, b) = ((left - 0.3, y - 0.45 * LINE_MM), (left + wide + 0.3, y + 0.45 * LINE_MM));
        self.filled(a, b, RGBColor(255, 255, 255))?;
        self.words((x, y), text, side, false)
    }
}

/// Width words take, mm.
pub(super) fn words_mm(text: &str) -> f64 {
    LETTER_MM * clean(text).width() as f64
}

/// Words cut to a width, mm; that they are cut is seen.
pub(super) fn fitted(text: &str, mm: f64) -> String {
    let text = clean(text);
    if words_mm(&text) <= mm {
        return text;
    }
    let mut out = String::new();
    let mut used = LETTER_MM;
    for c in text.chars() {
        used += LETTER_MM * c.width().unwrap_or(0) as f64;
        if used > mm {
            break;
        }
        out.push(c);
    }
    format!("{}…", out.trim_end())
}

/// Heights for words that each want one, in rising order, so that none covers another: those below give way, and
/// where the foot is reached all above move up.
pub(super) fn apart(wants: &[f64], (top, foot): (f64, f64)) -> Vec<f64> {
    let mut out = wants.to_vec();
    let mut free = top;
    for y in &mut out {
        *y = y.max(free);
        free = *y + LINE_MM;
    }
    let mut free = foot;
    for y in out.iter_mut().rev() {
        *y = y.min(free);
        free = *y - LINE_MM;
    }
    out
}
