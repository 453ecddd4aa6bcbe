//! Text made fit for every format before its own escaping.

use crate::problem::is_harmful;

/// Text on one line: runs of blanks and line breaks become one blank, and what a terminal, a browser or an XML reader
/// may obey or refuse (control characters, marks that turn the writing direction, code points that are no characters)
/// becomes a visible `\u{1b}`.
pub fn clean(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for (i, word) in text.split_whitespace().enumerate() {
        if i > 0 {
            out.push(' ');
        }
        for c in word.chars() {
            if is_harmful(c) || is_refused(c) {
                out.extend(c.escape_unicode());
            } else {
                out.push(c);
            }
        }
    }
    out
}

/// Whether a reader of HTML or XML refuses a code point (Unicode's noncharacters), or it turns the writing direction
/// without being one of the usual marks (the Arabic letter mark).
fn is_refused(c: char) -> bool {
    let code = u32::from(c);
    c == '\u{61c}' || (0xfdd0..=0xfdef).contains(&code) || code & 0xfffe == 0xfffe
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn scenario_text_becomes_one_visible_line() {
        assert_eq!(clean("  two\r\n lines\t\u{a0}here "), "two lines here");
        assert_eq!(clean("\u{1b}[31m red"), "\\u{1b}[31m red");
        assert_eq!(
            clean("\u{202e}\u{61c}\u{ffff}\u{1fffe}\u{fdd0}"),
            "\\u{202e}\\u{61c}\\u{ffff}\\u{1fffe}\\u{fdd0}"
        );
        assert_eq!(clean("é 水 \u{1f600}"), "é 水 \u{1f600}");
    }
}
