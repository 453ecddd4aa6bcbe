//! A written piece, whatever the format it is read in: headings, words, tables, lines to be filled by hand, pictures.
//! One shape, three writers; each cleans every text (`clean`) and then escapes it for its own format.

mod clean;
mod html;
mod markdown;
mod picture;
mod table;
mod text;

pub use clean::clean;

/// Parts of a piece one after the other.
fn joined<T>(items: &[T], one: impl Fn(&T) -> String) -> String {
    items.iter().map(one).collect::<Vec<_>>().concat()
}

/// The formats a piece is written in.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Format {
    /// Markdown.
    Markdown,
    /// Plain text.
    Text,
    /// One HTML file that stands by itself.
    Html,
}

/// A piece: its title and what follows. Every text in it is plain text, whatever the user typed or a file held; the
/// writers escape it.
#[derive(Debug, Clone, PartialEq)]
pub struct Page {
    /// Title.
    pub title: String,
    /// What follows.
    pub blocks: Vec<Block>,
}

/// The piece in a format. The same piece gives the same bytes.
pub fn written(page: &Page, format: Format) -> String {
    match format {
        Format::Markdown => markdown::written(page),
        Format::Text => text::written(page),
        Format::Html => html::written(page),
    }
}

/// A part of a piece.
#[derive(Debug, Clone, PartialEq)]
pub enum Block {
    /// A heading; 1 is the greatest below the title.
    Heading(u8, String),
    /// A paragraph.
    Words(String),
    /// A paragraph that must not be passed over.
    Warning(String),
    /// Points without an order.
    List(Vec<String>),
    /// Label and value, line by line.
    Facts(Vec<(String, String)>),
    /// A table.
    Table(Table),
    /// Lines to be filled by hand, each with its label.
    Blanks(Vec<String>),
    /// A picture; formats that show none tell its words.
    Picture(Box<Picture>),
    /// A table with a picture of what it tells; side by side where the paper has the room.
    Beside(Table, Box<Picture>),
    /// A new sheet begins.
    Sheet,
}

/// A table.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Table {
    /// What it is about.
    pub caption: String,
    /// Heads of the columns.
    pub head: Vec<String>,
    /// Rows, each as long as the head.
    pub rows: Vec<Vec<String>>,
    /// Columns of numbers, set to the right.
    pub right: Vec<usize>,
}

/// A picture with what it says in words, for those who do not see it.
#[derive(Debug, Clone, PartialEq)]
pub struct Picture {
    /// Title.
    pub title: String,
    /// What it says.
    pub words: String,
    /// What it shows; numbers in the units shown.
    pub shows: Shows,
}

/// What a picture shows.
#[derive(Debug, Clone, PartialEq)]
pub enum Shows {
    /// The pool from bed to surface.
    Pool(PoolPicture),
    /// Ranges with values in them, one under the other on one axis: a release against its target, ranked alternatives.
    Ranges(RangesPicture),
    /// Values over dates, with bands and limits.
    Days(DaysPicture),
}

/// The pool from bed to surface, elevation up.
#[derive(Debug, Clone, PartialEq)]
pub struct PoolPicture {
    /// Unit of elevation.
    pub elevation_unit: String,
    /// Bed and surface.
    pub ends: (f64, f64),
    /// Unit of temperature.
    pub temperature_unit: String,
    /// Elevation and temperature.
    pub temperature: Vec<(f64, f64)>,
    /// Elevation and oxygen, mg/L; empty where unknown.
    pub oxygen: Vec<(f64, f64)>,
    /// Outlets: name, lower and upper end of the opening, whether it is open.
    pub outlets: Vec<(String, f64, f64, bool)>,
    /// Zones: name, lower and upper end.
    pub zones: Vec<(String, f64, f64)>,
}

/// A row of ranges: label, value, band.
pub type RangeRow = (String, Option<f64>, Option<(f64, f64)>);

/// Rows of ranges on one axis.
#[derive(Debug, Clone, PartialEq)]
pub struct RangesPicture {
    /// Unit of the axis.
    pub unit: String,
    /// Range asked: least, preferred, greatest, each where it is given.
    pub asked: (Option<f64>, Option<f64>, Option<f64>),
    /// Rows: label, value, band.
    pub rows: Vec<RangeRow>,
}

/// A date with its low and high.
pub type DayRange = (chrono::NaiveDate, f64, f64);
/// A limit: name, from, to, value.
pub type DayLimit = (String, chrono::NaiveDate, chrono::NaiveDate, f64);

/// Series over dates.
#[derive(Debug, Clone, PartialEq)]
pub struct DaysPicture {
    /// What is measured, with its unit.
    pub axis: String,
    /// Bands: name, and by date low and high.
    pub bands: Vec<(String, Vec<DayRange>)>,
    /// Lines: name and points by date; a gap of more than a day is not bridged.
    pub lines: Vec<(String, Vec<(chrono::NaiveDate, f64)>)>,
    /// Limits: name, from, to, value.
    pub limits: Vec<DayLimit>,
    /// Dates marked, such as decisions.
    pub marks: Vec<(chrono::NaiveDate, String)>,
}
