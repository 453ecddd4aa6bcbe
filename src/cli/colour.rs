//! Weight in the text, where a terminal shows it.

use clap::ValueEnum;

/// Words that tell of a miss; they stand in capitals, so weight only helps the eye.
const MISSES: [&str; 5] = ["ABOVE", "BELOW", "UNKNOWN", "DRY", "SHORT"];

/// Whether to colour.
#[derive(Debug, Clone, Copy, ValueEnum)]
pub(super) enum Colour {
    Auto,
    Never,
}

impl Colour {
    /// The text with the release and every miss in bold. The stream strips it where there is no terminal.
    pub(super) fn of(self, text: &str) -> String {
        if matches!(self, Self::Never) {
            return text.to_owned();
        }
        let bold = |words: &str| format!("\u{1b}[1m{words}\u{1b}[0m");
        let mut out = String::with_capacity(text.len() + 64);
        for line in text.split_inclusive('\n') {
            let (line, end) = line.strip_suffix('\n').map_or((line, ""), |l| (l, "\n"));
            if line.starts_with("Release  ") {
                out.push_str(&bold(line));
            } else {
                out.push_str(&MISSES.iter().fold(line.to_owned(), |l, miss| l.replace(miss, &bold(miss))));
            }
            out.push_str(end);
        }
        out
    }
}
