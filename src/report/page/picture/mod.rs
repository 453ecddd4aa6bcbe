//! Pictures of a piece as SVG: lines, boxes, marks and words by `plotters`, where they go by `plot`. What differs,
//! differs in shape, stroke and words, never in colour alone, so that it reads in black and white.

mod days;
mod paper;
mod pool;
mod ranges;

use super::html::Escaped;
use super::{Picture, Shows};
use paper::Paper;

/// Size of a picture on paper.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Size {
    /// Width, mm.
    pub(super) wide: f64,
    /// Height, mm; a picture with many rows takes more.
    pub(super) high: f64,
}

/// A picture over the whole width of the page.
pub(super) const ALONE: Size = Size { wide: 186.0, high: 85.0 };
/// One of two side by side.
pub(super) const PAIRED: Size = Size { wide: 91.0, high: 50.0 };
/// One with a table beside it.
pub(super) const BESIDE: Size = Size { wide: 78.0, high: 33.0 };

/// The picture as an SVG element with its title and words. `None` where it holds nothing that can be drawn, so that
/// only its words are told.
pub(super) fn drawn(picture: &Picture, size: Size) -> Option<String> {
    let mut svg = String::new();
    let size = Size { high: size.high.max(least_high(&picture.shows)), ..size };
    {
        let paper = Paper::new(&mut svg, size);
        match &picture.shows {
            Shows::Pool(pool) => pool::draw(&paper, pool),
            Shows::Ranges(ranges) => ranges::draw(&paper, ranges),
            Shows::Days(days) => days::draw(&paper, days),
        }?;
        paper.done()?;
    }
    // the library writes neither; they belong first, for readers that speak the picture
    let (tag, rest) = svg.split_once(">\n")?;
    let tag = tag.strip_prefix("<svg ")?;
    Some(format!(
        "<svg role=\"img\" {tag}>\n<title>{}</title>\n<desc>{}</desc>\n{rest}",
        Escaped(&picture.title),
        Escaped(&picture.words)
    ))
}

fn least_high(shows: &Shows) -> f64 {
    match shows {
        Shows::Ranges(ranges) => ranges::least_high(ranges),
        Shows::Pool(_) | Shows::Days(_) => 0.0,
    }
}
