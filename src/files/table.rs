//! Rows and columns as loggers and spreadsheets write them.
//!
//! Comments, delimiters, decimal commas, quotes and line numbers are settled here; what a column means
//! is for the reader on top.

use std::collections::HashSet;

use super::lines::{Splitter, comment, delimiter, file_lines};
use crate::problem::Problem;

mod number;

/// Problems kept of one table (choice); the rest is counted in a last one.
pub const MOST_PROBLEMS: usize = 100;

/// Lines searched for the header below a logger's own preamble (choice).
const PREAMBLE_LINES: usize = 200;

const NAME_COLUMNS: &str = "put a line above the data that names each column and its unit";

/// A line of a file with its number from 1.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Line {
    /// Number of the line in its file, from 1.
    pub number: usize,
    /// Its text; for a comment what follows the `#`, trimmed.
    pub text: String,
}

/// A table of text cells. Every row has as many cells as there are columns.
#[derive(Debug, Clone)]
pub struct Table {
    /// Column names, trimmed, as the header writes them; a column may have no name.
    pub columns: Vec<String>,
    /// Line of the header, from 1.
    pub header_line: usize,
    /// What parts the cells: comma, semicolon, tab or bar.
    pub delimiter: char,
    /// Comment lines, in order.
    pub comments: Vec<Line>,
    /// Lines above the header that were passed over as a logger's preamble.
    pub skipped: Vec<Line>,
    /// What was passed over or taken for granted.
    pub notes: Vec<Problem>,
    /// All cells, row after row, end to end: a row of a large file then costs a few bytes beside its text.
    cells: String,
    ends: Vec<usize>,
    row_lines: Vec<usize>,
    decimals: number::Decimals,
}

impl Table {
    /// Parses a table whose first line, comments and blank lines apart, is the header.
    ///
    /// # Errors
    /// Every problem with its line: no header, a column named twice, a row with too few or too many
    /// cells, a quote left open.
    pub fn parse(text: &str) -> Result<Self, Vec<Problem>> {
        read(text, None)
    }

    /// Parses a table whose header is the first line that `is_header` accepts, given its cells; what
    /// stands above it is passed over, kept in [`Table::skipped`] and told in a note.
    ///
    /// # Errors
    /// As [`Table::parse`].
    pub fn parse_with(text: &str, is_header: &IsHeader<'_>) -> Result<Self, Vec<Problem>> {
        read(text, Some(is_header))
    }

    /// The same of what is no cast: `no_header` says what its header should be, since the table speaks of casts. Problems
    /// and notes are pushed; `None` where the text cannot be read.
    pub fn of(
        text: &str,
        is_header: &IsHeader<'_>,
        no_header: impl Fn() -> Problem,
        problems: &mut Vec<Problem>,
    ) -> Option<Self> {
        match Self::parse_with(text, is_header) {
            Ok(table) => {
                problems.extend(table.notes.iter().cloned());
                Some(table)
            }
            Err(found) => {
                let lost = |p: &Problem| p.kind == "no-header" && p.place.line.is_none();
                problems.extend(found.into_iter().map(|p| if lost(&p) { no_header() } else { p }));
                None
            }
        }
    }

    /// Number of rows.
    pub fn len(&self) -> usize {
        self.row_lines.len()
    }

    /// Whether there is a header but no row.
    pub fn is_empty(&self) -> bool {
        self.row_lines.is_empty()
    }

    /// Position of a column by its name, in any case.
    pub fn column(&self, name: &str) -> Option<usize> {
        let name = name.to_lowercase();
        self.columns.iter().position(|column| column.to_lowercase() == name)
    }

    /// Line of a row in its file, from 1.
    pub fn line(&self, row: usize) -> Option<usize> {
        self.row_lines.get(row).copied()
    }

    /// A cell, trimmed, blank where nothing stands; `None` outside the table.
    pub fn cell(&self, row: usize, column: usize) -> Option<&str> {
        if row >= self.len() || column >= self.columns.len() {
            return None;
        }
        let index = row * self.columns.len() + column;
        let start = index.checked_sub(1).map_or(0, |before| self.ends[before]);
        Some(&self.cells[start..self.ends[index]])
    }

    /// Comments of the shape `# key: value`, as key in lower case, value and line.
    pub fn meta(&self) -> impl Iterator<Item = (String, &str, usize)> {
        self.comments.iter().filter_map(|line| {
            let (key, value) = line.text.split_once(':')?;
            Some((key.trim().to_lowercase(), value.trim(), line.number))
        })
    }
}

/// Whether the cells of a line are those of a header.
type IsHeader<'f> = dyn Fn(&[String]) -> bool + 'f;

fn read(text: &str, is_header: Option<&IsHeader<'_>>) -> Result<Table, Vec<Problem>> {
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let mut comments = Vec::new();
    let mut lines = file_lines(text).filter(|(number, line)| match comment(line) {
        Some(said) => {
            comments.push(Line { number: *number, text: said.to_owned() });
            false
        }
        None => !line.trim().is_empty(),
    });
    let mut skipped = Vec::new();
    let (header_line, delimiter, columns) = loop {
        let Some((number, line)) = lines.next().filter(|_| skipped.len() < PREAMBLE_LINES) else {
            return Err(vec![no_header(is_header.is_some())]);
        };
        let delimiter = delimiter(line);
        match (Splitter::new(delimiter).split(line), is_header) {
            // nothing but delimiters, as spreadsheets write a blank line
            (Ok(cells), _) if cells.iter().all(String::is_empty) => {}
            (Ok(cells), None) => match number_among(&cells, delimiter) {
                Some(problem) => return Err(vec![problem.on_line(number)]),
                None => break (number, delimiter, cells),
            },
            (Ok(cells), Some(accepts)) if accepts(&cells) => break (number, delimiter, cells),
            (Err(problem), None) => return Err(vec![problem.on_line(number)]),
            _ => skipped.push(Line { number, text: line.to_owned() }),
        }
    };
    let mut table = Table {
        columns: header(columns, header_line)?,
        header_line,
        delimiter,
        comments: Vec::new(),
        skipped,
        notes: Vec::new(),
        cells: String::new(),
        ends: Vec::new(),
        row_lines: Vec::new(),
        decimals: number::Decimals::default(),
    };
    let problems = rows(&mut table, &mut lines);
    if !problems.is_empty() {
        return Err(problems);
    }
    drop(lines);
    table.comments = comments;
    if let Some(line) = table.skipped.first() {
        let words = format!("what stands above the header on line {header_line} was passed over");
        table.notes.push(Problem::note("preamble", words).on_line(line.number));
    }
    table.notes.extend(table.decimals.note());
    Ok(table)
}

/// Checks the header; blank names at its end, as spreadsheets write them, are not columns.
fn header(mut columns: Vec<String>, line: usize) -> Result<Vec<String>, Vec<Problem>> {
    while columns.last().is_some_and(String::is_empty) {
        columns.pop();
    }
    let mut seen = HashSet::new();
    let repeated = columns.iter().filter(|name| !name.is_empty() && !seen.insert(name.to_lowercase()));
    let problem = |name: &String| {
        let words = format!("two columns are named {name}");
        Problem::refused("duplicate-column", words, "keep one of them or rename the other").on_line(line)
    };
    let problems: Vec<_> = repeated.take(MOST_PROBLEMS).map(problem).collect();
    if problems.is_empty() { Ok(columns) } else { Err(problems) }
}

/// A number in the first line of a table: then it is data, and the header is missing.
fn number_among(cells: &[String], delimiter: char) -> Option<Problem> {
    let number = cells.iter().find(|cell| number::is_number(cell, delimiter))?;
    let words = format!("\"{number}\" stands where the header should name the columns");
    Some(Problem::refused("no-header", words, NAME_COLUMNS))
}

fn rows(table: &mut Table, lines: &mut dyn Iterator<Item = (usize, &str)>) -> Vec<Problem> {
    let mut splitter = Splitter::new(table.delimiter);
    let width = table.columns.len();
    let mut problems = Vec::new();
    let (mut beyond, mut rows, mut misfits) = (0, 0, 0);
    let mut first_misfit = (0, 0);
    for (number, line) in lines {
        let problem = match splitter.split(line) {
            Err(problem) => problem,
            Ok(cells) => {
                let used = cells.iter().rposition(|cell| !cell.is_empty()).map_or(0, |last| last + 1);
                if used == 0 {
                    continue;
                }
                rows += 1;
                // blank cells past the last column, as spreadsheets write them, are no cells
                if cells.len() >= width && used <= width {
                    table.push(number, &cells[..width]);
                    continue;
                }
                misfits += 1;
                let count = if cells.len() < width { cells.len() } else { used };
                if misfits == 1 {
                    first_misfit = (number, count);
                }
                cell_count(count, width, table.delimiter)
            }
        };
        if problems.len() < MOST_PROBLEMS {
            problems.push(problem.on_line(number));
        } else {
            beyond += 1;
        }
    }
    if misfits == rows && rows > 1 {
        let (line, count) = first_misfit;
        let words = format!(
            "this line names {width} columns, yet no line below has as many cells (line {line} has {count})"
        );
        let cure = "make the header name every column, and put # before lines above it";
        problems.retain(|problem| problem.kind != "cell-count");
        problems.insert(0, Problem::refused("no-header", words, cure).on_line(table.header_line));
    } else if beyond > 0 {
        let words = format!("problems on further lines, not shown: {beyond}");
        problems.push(Problem::refused("more", words, "cure the ones above first"));
    }
    problems
}

impl Table {
    fn push(&mut self, line: usize, cells: &[String]) {
        for cell in cells {
            self.decimals.learn(line, cell, self.delimiter);
            self.cells.push_str(cell);
            self.ends.push(self.cells.len());
        }
        self.row_lines.push(line);
    }
}

fn cell_count(count: usize, width: usize, delimiter: char) -> Problem {
    let words = format!("{count} cells where the header names {width}");
    let cure = match delimiter {
        ',' if count > width => "take out the surplus; a decimal comma needs semicolons between the cells",
        _ if count > width => "take out the surplus, or put a cell that holds the delimiter in quotes",
        _ => "add the missing cells; leave one blank where nothing was measured",
    };
    Problem::refused("cell-count", words, cure)
}

fn no_header(searched: bool) -> Problem {
    if searched {
        let cure =
            "name the columns with their units, such as depth_m, or map them under columns: in the site file";
        return Problem::refused("no-header", "no line names the columns", cure);
    }
    Problem::refused("no-header", "there is no line but comments", NAME_COLUMNS)
}
