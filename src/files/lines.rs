//! Lines of a text file, and the cells of one line of a table.

use csv_core::{ReadRecordResult, Reader, ReaderBuilder};

use crate::problem::Problem;

/// Longest line that is split, in bytes (choice: a row of a table has some hundred).
const LONGEST_LINE: usize = 1 << 20;

/// Lines with their number from 1, without their ending: `\n`, `\r\n`, or `\r` where a file knows no `\n`.
pub(super) fn file_lines(text: &str) -> impl Iterator<Item = (usize, &str)> {
    let end = if text.contains('\n') { '\n' } else { '\r' };
    let lines = text.split_terminator(end).map(move |line| line.strip_suffix('\r').unwrap_or(line));
    lines.enumerate().map(|(index, line)| (index + 1, line))
}

/// What a comment line says: what follows the `#`, without the delimiters and the quotes that
/// spreadsheets put round it. A quoted `"#"` alone is a column name, as loggers write it.
pub(super) fn comment(line: &str) -> Option<&str> {
    let line = line.trim();
    if let Some(text) = line.strip_prefix('#') {
        return Some(bare(text));
    }
    let text = line.strip_prefix("\"#").filter(|text| !text.starts_with('"'))?;
    let text = bare(text);
    Some(text.strip_suffix('"').unwrap_or(text))
}

fn bare(comment: &str) -> &str {
    comment.trim_end_matches([',', ';', '|', '\t', ' ']).trim_start()
}

/// The delimiter that stands most often outside quotes; a comma where none does, for a single column.
pub(super) fn delimiter(line: &str) -> char {
    let mut counts = [(0, '\t'), (0, ';'), (0, ','), (0, '|')];
    let mut quoted = false;
    for c in line.chars() {
        quoted ^= c == '"';
        if let Some(count) = counts.iter_mut().find(|(_, d)| !quoted && *d == c) {
            count.0 += 1;
        }
    }
    let most = counts.iter().map(|(n, _)| *n).max().unwrap_or(0);
    counts.iter().find(|(n, _)| *n == most && most > 0).map_or(',', |(_, d)| *d)
}

/// Splits single lines into cells, so that a stray quote can never swallow the lines below it.
pub(super) struct Splitter {
    reader: Reader,
    cells: Vec<u8>,
    ends: Vec<usize>,
}

impl Splitter {
    pub(super) fn new(delimiter: char) -> Self {
        // the four delimiters are ASCII, so the conversion cannot fail
        let byte = u8::try_from(delimiter).unwrap_or(b',');
        let reader = ReaderBuilder::new().delimiter(byte).build();
        Self { reader, cells: Vec::new(), ends: Vec::new() }
    }

    /// The trimmed cells of one line, in order.
    pub(super) fn split(&mut self, line: &str) -> Result<Vec<String>, Problem> {
        if line.len() > LONGEST_LINE {
            let cure = "check that this is a table with one row on a line";
            return Err(Problem::refused("long-line", "this line is longer than 1 MiB", cure));
        }
        self.reader.reset();
        // a line never gives more bytes, nor more cells, than it has bytes
        self.cells.resize(line.len() + 2, 0);
        self.ends.resize(line.len() + 2, 0);
        let (_, _, written, ended) =
            self.reader.read_record(line.as_bytes(), &mut self.cells, &mut self.ends);
        let rest = (&mut self.cells[written..], &mut self.ends[ended..]);
        let (closed, _, _, more) = self.reader.read_record(b"\n", rest.0, rest.1);
        if closed != ReadRecordResult::Record {
            let words = "a quote is opened and not closed on this line";
            return Err(Problem::refused("open-quote", words, "close it or take it out"));
        }
        let mut start = 0;
        let cell = |end: &usize| {
            let bytes = &self.cells[start..*end];
            start = *end;
            let cell = String::from_utf8_lossy(bytes);
            // a blank between delimiter and quote hides the quotes from the splitter
            let cell = cell.trim();
            cell.strip_prefix('"').and_then(|c| c.strip_suffix('"')).unwrap_or(cell).to_owned()
        };
        Ok(self.ends[..ended + more].iter().map(cell).collect())
    }
}
