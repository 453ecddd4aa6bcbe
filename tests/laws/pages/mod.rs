//! Written pieces: whatever text a piece holds, each format's own reader finds exactly that text, made harmless, and
//! nothing that it would obey.

mod html;
mod markdown;
mod pictures;
mod plain;
mod sample;

use gatemix::report::page::clean;
use proptest::prelude::*;

/// Texts that mean something to some reader.
const HOSTILE: [&str; 22] = [
    "<script>alert(1)</script>",
    "\u{1b}[31mred\u{9b}2J",
    "]]>",
    "--!>",
    "&lt;&#60;&amp",
    "\u{202e}back\u{2066}wards",
    "</title></style></svg><img src=x onerror=alert(1)>",
    "| a | b |",
    "a\\|b\\\\|",
    "# head #",
    "- point",
    "1. first",
    "2) second",
    "> said",
    "```\ncode",
    "~~~ [x](http://a.example) ![y](z) <http://b.example>",
    "**bold** __bold__ *i* _i_ ~~gone~~ `c`",
    "    four blanks\n\n---\n===",
    "=== \u{fffe}\u{ffff}\u{fdd0}\u{0}",
    "[a]: /b 'c'",
    "\\",
    "",
];

/// Any text: hostile pieces, marks with a meaning, and the rest of Unicode.
fn texts() -> impl Strategy<Value = String> {
    let hostile = proptest::sample::select(HOSTILE.to_vec()).prop_map(str::to_owned);
    let marks = "[-+#=>:|*_`~!<&\\[\\]()\\\\'\"$. \n0-9a]{0,10}";
    let piece = prop_oneof![hostile, marks, any::<String>()];
    proptest::collection::vec(piece, 0..3).prop_map(|pieces| pieces.concat())
}

/// Text as a reader shows it: blanks run together.
fn shown(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

/// What a reader has to find of a text.
fn wanted(text: &str) -> String {
    clean(text)
}
