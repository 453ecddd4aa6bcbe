//! A piece as one HTML file that stands by itself: its style within, its pictures within, no script, nothing fetched.
//! Printed it fits A4 and Letter.

use std::fmt::{self, Display, Write as _};

use super::picture::{ALONE, BESIDE, PAIRED, Size, drawn};
use super::table::Squared;
use super::{Block, Page, Picture, clean, joined};

/// How it looks, on a screen and on paper.
const STYLE: &str = include_str!("page.css");

/// Text of the piece in HTML: cleaned, and every mark with a meaning by its name.
pub(super) struct Escaped<'a>(pub(super) &'a str);

impl Display for Escaped<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for c in clean(self.0).chars() {
            match c {
                '&' => f.write_str("&amp;")?,
                '<' => f.write_str("&lt;")?,
                '>' => f.write_str("&gt;")?,
                '"' => f.write_str("&quot;")?,
                '\'' => f.write_str("&#39;")?,
                _ => f.write_char(c)?,
            }
        }
        Ok(())
    }
}

/// A cell of so few letters stays on one line where the paper has the room (choice): two figures in two units do.
const SHORT: usize = 26;
/// The head of a row, the same (choice): a name with its place does.
const NAME: usize = 40;

/// The piece as HTML.
pub(super) fn written(page: &Page) -> String {
    let title = Escaped(&page.title);
    let mut out = format!(
        "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n\
         <meta http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; style-src 'unsafe-inline'\">\n\
         <meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n\
         <title>{title}</title>\n<style>\n{STYLE}</style>\n</head>\n<body>\n<main>\n<section>\n<h1>{title}</h1>\n"
    );
    let pictured = |block: &Block| matches!(block, Block::Picture(_));
    for run in page.blocks.chunk_by(|a, b| pictured(a) && pictured(b)) {
        match run {
            [first, _, ..] if pictured(first) => out.push_str(&beside(run)),
            _ => run.iter().for_each(|block| out.push_str(&one(block))),
        }
    }
    out.push_str("</section>\n</main>\n</body>\n</html>\n");
    out
}

fn one(block: &Block) -> String {
    match block {
        Block::Heading(level, text) => {
            let level = (*level).clamp(1, 5) + 1;
            format!("<h{level}>{}</h{level}>\n", Escaped(text))
        }
        Block::Words(text) => format!("<p>{}</p>\n", Escaped(text)),
        Block::Warning(text) => {
            format!("<p class=\"warning\"><strong>Warning:</strong> {}</p>\n", Escaped(text))
        }
        Block::List(texts) => {
            let items = joined(texts, |text| format!("<li>{}</li>\n", Escaped(text)));
            format!("<ul>\n{items}</ul>\n")
        }
        Block::Facts(facts) => {
            let fact = |(label, value): &(String, String)| {
                format!("<div><dt>{}</dt><dd>{}</dd></div>\n", Escaped(label), Escaped(value))
            };
            format!("<dl>\n{}</dl>\n", joined(facts, fact))
        }
        Block::Table(table) => rows(&Squared::of(table)),
        Block::Blanks(labels) => {
            let line = |label: &String| {
                format!("<li><span>{}</span><span class=\"rule\"></span></li>\n", Escaped(label))
            };
            format!("<ul class=\"blanks\">\n{}</ul>\n", joined(labels, line))
        }
        Block::Picture(picture) => figure(picture, ALONE),
        Block::Beside(table, picture) => {
            format!(
                "<div class=\"beside\">\n{}{}</div>\n",
                rows(&Squared::of(table)),
                figure(picture, BESIDE)
            )
        }
        Block::Sheet => "</section>\n<section class=\"sheet\">\n".to_owned(),
    }
}

/// Pictures that follow each other: two beside each other, an odd one below over the whole width.
fn beside(run: &[Block]) -> String {
    let pictures: Vec<&Picture> =
        run.iter().filter_map(|b| if let Block::Picture(p) = b { Some(&**p) } else { None }).collect();
    let odd = pictures.len() % 2 == 1;
    let sized = |(at, picture): (usize, &&Picture)| {
        figure(picture, if odd && at + 1 == pictures.len() { ALONE } else { PAIRED })
    };
    let figures: String = pictures.iter().enumerate().map(sized).collect();
    format!("<div class=\"pictures\">\n{figures}</div>\n")
}

/// A picture with its title and words. On paper the words of one that is drawn are left to the picture, its `desc` and
/// the tables beside it; one that cannot be drawn is told in words there too.
fn figure(picture: &Picture, size: Size) -> String {
    let svg = drawn(picture, size);
    let class = if size == PAIRED { " class=\"half\"" } else { "" };
    let told = if svg.is_some() { " class=\"told\"" } else { "" };
    format!(
        "<figure{class}>\n{}<figcaption><strong>{}.</strong> <span{told}>{}</span></figcaption>\n</figure>\n",
        svg.unwrap_or_default(),
        Escaped(&picture.title),
        Escaped(&picture.words)
    )
}

fn rows(table: &Squared) -> String {
    let class = |column: usize| if table.is_right(column) { " class=\"right\"" } else { "" };
    let class_of = |column: usize, cell: &str| {
        let most = if column == 0 { NAME } else { SHORT };
        match (table.is_right(column), cell.chars().count() <= most) {
            (true, _) => " class=\"right\"",
            (false, true) => " class=\"short\"",
            (false, false) => "",
        }
    };
    let mut out = "<table>\n".to_owned();
    let _ = writeln!(out, "<caption>{}</caption>", Escaped(&table.caption));
    out.push_str("<thead><tr>");
    for (column, cell) in table.head.iter().enumerate() {
        let _ = write!(out, "<th scope=\"col\"{}>{}</th>", class(column), Escaped(cell));
    }
    out.push_str("</tr></thead>\n<tbody>\n");
    for row in &table.rows {
        out.push_str("<tr>");
        for (column, cell) in row.iter().enumerate() {
            let (name, scope) = if column == 0 { ("th", " scope=\"row\"") } else { ("td", "") };
            let _ = write!(out, "<{name}{scope}{}>{}</{name}>", class_of(column, cell), Escaped(cell));
        }
        out.push_str("</tr>\n");
    }
    out.push_str("</tbody>\n</table>\n");
    out
}
