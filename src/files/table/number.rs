//! Numbers in the cells of a table: points, decimal commas, and what is refused.

use super::Table;
use crate::problem::Problem;

/// Which decimal marks a table uses, with the first line of each.
///
/// `1,234` beside `12.5` may be a thousand or a little more than one; so a comma is taken as decimal
/// mark only where no number of the table is written with a point.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Decimals {
    comma_line: Option<usize>,
    point_line: Option<usize>,
}

impl Decimals {
    pub(super) fn learn(&mut self, line: usize, cell: &str, delimiter: char) {
        if self.point_line.is_none() && cell.contains('.') && cell.parse::<f64>().is_ok() {
            self.point_line = Some(line);
        }
        if self.comma_line.is_none() && with_point(cell, delimiter).is_some() {
            self.comma_line = Some(line);
        }
    }

    pub(super) fn note(&self) -> Option<Problem> {
        let line = self.comma_line.filter(|_| self.point_line.is_none())?;
        Some(Problem::note("decimal-comma", "decimal commas were read as decimal points").on_line(line))
    }
}

/// A number with one decimal comma, written with a point; `None` for anything else.
fn with_point(cell: &str, delimiter: char) -> Option<String> {
    let (whole, decimals) = cell.split_once(',').filter(|_| delimiter != ',')?;
    let digits = !decimals.is_empty() && decimals.bytes().all(|b| b.is_ascii_digit());
    let pointed = format!("{whole}.{decimals}");
    (digits && !whole.contains('.') && pointed.parse::<f64>().is_ok()).then_some(pointed)
}

/// Whether a cell holds a number, with a point or a decimal comma.
pub(super) fn is_number(cell: &str, delimiter: char) -> bool {
    cell.parse::<f64>().is_ok() || with_point(cell, delimiter).is_some()
}

impl Table {
    /// The number in a cell. `None` where the cell is blank or lies outside the table; values that a
    /// logger writes for "missing", such as -999, are numbers here.
    ///
    /// # Errors
    /// `not-a-number` for anything that is not a finite number, with line and column; that includes
    /// `NaN`, `inf`, `NA` and `-`.
    pub fn number(&self, row: usize, column: usize) -> Result<Option<f64>, Problem> {
        let (Some(cell), Some(line)) = (self.cell(row, column), self.line(row)) else { return Ok(None) };
        if cell.is_empty() {
            return Ok(None);
        }
        let refused = |words: String, cure: &str| {
            let name = self.columns.get(column).map_or("", String::as_str);
            Err(Problem::refused("not-a-number", words, cure).on_line(line).at(name))
        };
        let pointed = with_point(cell, self.delimiter);
        if let (Some(_), Some(other)) = (&pointed, self.decimals.point_line) {
            let words = format!("\"{cell}\" has a comma where line {other} writes a decimal point");
            return refused(words, "write every number with a point and no thousands mark");
        }
        match pointed.as_deref().unwrap_or(cell).parse::<f64>() {
            Ok(value) if value.is_finite() => Ok(Some(value)),
            Ok(_) => refused(
                format!("\"{cell}\" is not a finite number"),
                "leave the cell blank where nothing was measured",
            ),
            Err(_) => {
                let short: String = cell.chars().take(60).collect();
                refused(
                    format!("\"{short}\" is not a number"),
                    "leave the cell blank where nothing was measured",
                )
            }
        }
    }
}
