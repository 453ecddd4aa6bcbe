//! A piece as Markdown: CommonMark with pipe tables. Pictures are told in their words.

use std::fmt::Write as _;

use super::table::Squared;
use super::{Block, Page, clean, joined};

/// A rule to write on. After a blank and before a line's end the marks stand for nothing else.
const RULE: &str = "______________________________";

/// The piece as Markdown.
pub(super) fn written(page: &Page) -> String {
    let mut out = format!("# {}\n", escaped(&page.title));
    for block in &page.blocks {
        out.push('\n');
        out.push_str(&one(block));
    }
    out
}

/// Points, facts and blanks have each their bullet, since lists of one bullet that follow each other become one.
fn one(block: &Block) -> String {
    match block {
        Block::Heading(level, text) => {
            format!("{} {}\n", "#".repeat(usize::from((*level).clamp(1, 5)) + 1), escaped(text))
        }
        Block::Words(text) => format!("{}\n", escaped(text)),
        Block::Warning(text) => format!("**Warning:** {}\n", escaped(text)),
        Block::List(texts) => joined(texts, |text| format!("- {}\n", escaped(text))),
        Block::Facts(facts) => joined(facts, |(l, value)| format!("* {} {}\n", bold(l), escaped(value))),
        Block::Table(table) => rows(&Squared::of(table)),
        Block::Blanks(labels) => joined(labels, |label| format!("+ {}: {RULE}\n", escaped(label))),
        Block::Picture(picture) => {
            format!("> {} {}\n", bold(&format!("Picture: {}", picture.title)), escaped(&picture.words))
        }
        Block::Beside(table, picture) => {
            format!("{}\n{}", rows(&Squared::of(table)), one(&Block::Picture(picture.clone())))
        }
        Block::Sheet => "---\n".to_owned(),
    }
}

fn rows(table: &Squared) -> String {
    let line = |cells: &[String]| -> String {
        let cells: Vec<String> = cells.iter().map(|cell| escaped(cell)).collect();
        format!("| {} |\n", cells.join(" | "))
    };
    let mut out = String::new();
    if !table.caption.is_empty() {
        let _ = writeln!(out, "{}\n", bold(&table.caption));
    }
    out.push_str(&line(&table.head));
    let rules: Vec<&str> =
        (0..table.head.len()).map(|column| if table.is_right(column) { "---:" } else { "---" }).collect();
    let _ = writeln!(out, "| {} |", rules.join(" | "));
    table.rows.iter().for_each(|row| out.push_str(&line(row)));
    out
}

/// Label or caption set off from what follows, which begins with a blank or a new line.
fn bold(text: &str) -> String {
    let text = clean(text);
    let stop = if text.ends_with([':', '.', '?', '!']) { "" } else { ":" };
    format!("**{}{stop}**", escaped(&text))
}

/// Text as Markdown that reads as exactly this text: every mark with a meaning loses it. A bar is written by its
/// number, since readers part rows at bars before they look at backslashes.
fn escaped(text: &str) -> String {
    let text = clean(text);
    let mut out = String::with_capacity(text.len());
    let digits = text.bytes().take_while(u8::is_ascii_digit).count();
    for (at, c) in text.char_indices() {
        let rest = text.get(at..).unwrap_or_default();
        let begins = (at == 0 && matches!(c, '-' | '+' | '=' | '>' | ':'))
            || (at == digits && digits > 0 && matches!(c, '.' | ')'));
        // what some readers make a link of by itself
        let links = rest.starts_with("://") || (c == '.' && out.to_ascii_lowercase().ends_with("www"));
        match c {
            '|' => out.push_str("&#124;"),
            '\\' | '`' | '*' | '_' | '[' | ']' | '<' | '&' | '#' | '~' | '!' | '$' => out.extend(['\\', c]),
            _ if begins || links => out.extend(['\\', c]),
            _ => out.push(c),
        }
    }
    out
}
