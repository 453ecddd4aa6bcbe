//! A piece whose quantities are still marked, with each in both systems of units.

use crate::report::page::{Block, Page, Picture, Table};
use crate::units::{System, in_both};

/// The piece with every marked quantity as a figure in both systems, one of them first.
pub(super) fn in_both_units(page: Page, first: System) -> Page {
    let both = |text: String| in_both(&text, first);
    let all = |texts: Vec<String>| texts.into_iter().map(both).collect::<Vec<String>>();
    let table = |of: Table| Table {
        caption: both(of.caption),
        head: all(of.head),
        rows: of.rows.into_iter().map(all).collect(),
        right: of.right,
    };
    let picture = |of: Picture| Picture { title: both(of.title), words: both(of.words), shows: of.shows };
    let block = |block: Block| match block {
        Block::Heading(level, text) => Block::Heading(level, both(text)),
        Block::Words(text) => Block::Words(both(text)),
        Block::Warning(text) => Block::Warning(both(text)),
        Block::List(texts) => Block::List(all(texts)),
        Block::Facts(facts) => {
            Block::Facts(facts.into_iter().map(|(label, value)| (both(label), both(value))).collect())
        }
        Block::Table(of) => Block::Table(table(of)),
        Block::Blanks(labels) => Block::Blanks(all(labels)),
        Block::Picture(of) => Block::Picture(Box::new(picture(*of))),
        Block::Beside(of, drawn) => Block::Beside(table(of), Box::new(picture(*drawn))),
        Block::Sheet => Block::Sheet,
    };
    Page { title: both(page.title), blocks: page.blocks.into_iter().map(block).collect() }
}
