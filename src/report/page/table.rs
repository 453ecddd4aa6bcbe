//! A table made square, its texts cleaned: what every writer begins with.

use super::{Table, clean};

/// A table whose head and rows have the same number of cells, one at least.
pub(super) struct Squared {
    /// Caption; may be empty.
    pub(super) caption: String,
    /// Head.
    pub(super) head: Vec<String>,
    /// Rows, each as long as the head.
    pub(super) rows: Vec<Vec<String>>,
    right: Vec<usize>,
}

impl Squared {
    /// Squares a table: what is short is filled with empty cells, nothing is cut.
    pub(super) fn of(table: &Table) -> Self {
        let wide = table.rows.iter().map(Vec::len).chain([table.head.len(), 1]).max().unwrap_or(1);
        let row = |cells: &Vec<String>| -> Vec<String> {
            let mut out: Vec<String> = cells.iter().map(|c| clean(c)).collect();
            out.resize(wide, String::new());
            out
        };
        Self {
            caption: clean(&table.caption),
            head: row(&table.head),
            rows: table.rows.iter().map(row).collect(),
            right: table.right.clone(),
        }
    }

    /// Whether a column is set to the right.
    pub(super) fn is_right(&self, column: usize) -> bool {
        self.right.contains(&column)
    }
}
