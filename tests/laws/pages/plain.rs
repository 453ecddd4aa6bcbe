//! Plain text: within its width, harmless, and nothing lost.

use gatemix::report::page::{Block, Format, Page, Table, written};
use proptest::prelude::*;
use unicode_width::UnicodeWidthStr;

use crate::columns::config;

use super::{HOSTILE, sample, texts, wanted};

fn held(page: &Page) -> Result<String, TestCaseError> {
    let text = written(page, Format::Text);
    prop_assert!(text.chars().all(|c| c == '\n' || !gatemix::problem::is_harmful(c)), "{:?}", text);
    for line in text.lines() {
        let longest = line.split(' ').map(UnicodeWidthStr::width).max().unwrap_or(0);
        // a word without a blank in it may be longer than the page
        prop_assert!(line.width() <= 80 || longest > 60, "{}", line);
        prop_assert_eq!(line, line.trim_end());
    }
    Ok(text)
}

#[test]
fn scenario_text_is_set_in_columns() {
    let text = held(&sample::ordinary()).unwrap();
    assert!(text.contains("\nNo.  Time                     Gate     From  To            Head\n"), "{text}");
    assert!(text.contains("\n  1  2026-07-01 08:30 -08:00  North 1  shut  0.50 open  12.4 ft\n"), "{text}");
    assert!(text.contains("\nWARNING: Two casts"));
    assert!(text.lines().any(|l| l.starts_with("Ordered by ____") && l.len() == 80));
    assert_eq!(text.lines().filter(|l| *l == "=".repeat(80)).count(), 1);
}

#[test]
fn scenario_wide_tables_are_narrowed_and_then_told_row_by_row() {
    let table = |columns: usize| {
        let cell = |k: usize| format!("a cell with some words in it {k}");
        Block::Table(Table {
            caption: "Wide".into(),
            head: (0..columns).map(|k| format!("head {k}")).collect(),
            rows: vec![(0..columns).map(cell).collect()],
            right: vec![],
        })
    };
    for (columns, told) in [(4, false), (20, true)] {
        let page = Page { title: "t".into(), blocks: vec![table(columns)] };
        let text = held(&page).unwrap();
        assert_eq!(text.contains("head 3   a cell with some words in it 3"), told, "{text}");
        for k in 0..columns {
            assert!(text.contains(&format!("head {k}")), "{text}");
        }
        assert_eq!(text.matches("words").count(), columns, "{text}");
    }
}

proptest! {
    #![proptest_config(config(60))]
    #[test]
    fn law_plain_text_is_harmless_and_whole(text in texts()) {
        let page = sample::with(&text);
        let out = held(&page)?;
        let letters = |s: &str| s.chars().filter(|c| !c.is_whitespace()).collect::<String>();
        // in paragraphs at the least the text stands whole
        let whole = letters(&out).contains(&letters(&format!("WARNING: {}", wanted(&text))));
        prop_assert!(whole);
    }
}

#[test]
fn law_plain_text_keeps_hostile_texts_harmless() {
    for text in HOSTILE {
        held(&sample::with(text)).unwrap_or_else(|why| panic!("{text:?}: {why}"));
    }
}
