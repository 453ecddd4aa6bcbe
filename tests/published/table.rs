//! Reading `tests/data/*.csv`, and judging a whole column at once.
#![expect(clippy::unwrap_used, clippy::print_stdout, reason = "helpers of tests, outside a test function")]

use std::collections::HashMap;
use std::path::Path;

/// One row, by column name.
pub(crate) struct Row(HashMap<String, String>);

impl Row {
    /// The text of a column; a column that does not exist fails the test.
    pub(crate) fn text(&self, column: &str) -> &str {
        self.0.get(column).unwrap_or_else(|| panic!("no column {column}"))
    }

    /// The number of a column, or nothing where the cell is blank.
    pub(crate) fn maybe(&self, column: &str) -> Option<f64> {
        let text = self.text(column);
        (!text.is_empty()).then(|| text.parse().unwrap_or_else(|_| panic!("{column}: {text}")))
    }

    /// The number of a column.
    pub(crate) fn number(&self, column: &str) -> f64 {
        self.maybe(column).unwrap_or_else(|| panic!("{column} is blank"))
    }
}

/// All rows of a data file; their number is given so that none can go missing.
pub(crate) fn rows(file: &str, count: usize) -> Vec<Row> {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/data").join(file);
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_path(path).unwrap();
    let rows: Vec<Row> = reader.deserialize().map(|row| Row(row.unwrap())).collect();
    assert_eq!(rows.len(), count, "rows of {file}");
    rows
}

/// How far a set of computed values is from the published one, by size.
#[derive(Debug)]
pub(crate) struct Spread {
    pub(crate) p75: f64,
    pub(crate) p99: f64,
    pub(crate) max: f64,
}

/// Sorts the sizes of `computed - published`, prints and returns 75th and 99th percentile (nearest rank)
/// and the largest.
pub(crate) fn spread(name: &str, pairs: impl IntoIterator<Item = (f64, f64)>) -> Spread {
    let mut sizes: Vec<f64> = pairs.into_iter().map(|(a, b)| (a - b).abs()).collect();
    assert!(sizes.iter().all(|size| size.is_finite()), "{name}: not finite");
    sizes.sort_by(f64::total_cmp);
    let rank = |percent: usize| sizes[(sizes.len() * percent).div_ceil(100).max(1) - 1];
    let spread = Spread { p75: rank(75), p99: rank(99), max: rank(100) };
    println!(
        "{name}: {} values, 75 % {:.2e}, 99 % {:.2e}, largest {:.2e}",
        sizes.len(),
        spread.p75,
        spread.p99,
        spread.max
    );
    spread
}

/// Holds what a formula gives for each row of a file against the row's value, within the row's tolerance.
pub(crate) fn hold(file: &str, count: usize, computed: impl Fn(&Row) -> f64) {
    let wrong: Vec<String> = rows(file, count)
        .iter()
        .filter_map(|row| {
            let (value, expected) = (computed(row), row.number("value"));
            let off = (value - expected).abs();
            (off.is_nan() || off > row.number("tolerance"))
                .then(|| format!("{}: {value} for {expected} ({})", row.text("id"), row.text("source")))
        })
        .collect();
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
