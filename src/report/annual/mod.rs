//! The report of a season as a written piece: targets against what was observed, what was decided and how it turned out,
//! how well the release was foreseen, what the record teaches.

mod data;
mod decided;
mod observed;
mod pictures;
mod skill;

use crate::report::caution;
use crate::report::page::{Block, Page};
use crate::tasks::Context;
use crate::tasks::report::ReportAnswer;

/// The report of a season.
pub fn page(context: &Context, answer: &ReportAnswer) -> Page {
    let (from, to) = answer.days;
    let mut blocks = data::begins(context, answer);
    let parts = [
        ("Targets against what was observed", observed::blocks(context, answer)),
        ("The release, day by day", pictures::gauge(context, answer)),
        ("Decisions and events", decided::blocks(context, answer)),
        ("How well it was foreseen", skill::blocks(context, answer)),
        ("Outside the band", skill::spells(context, answer)),
        ("The season gone through again", skill::hindcast(context, answer)),
        ("What the record teaches", skill::learning(context, answer)),
        ("What this rests on", data::blocks(context, answer)),
    ];
    for (heading, part) in parts.into_iter().filter(|(_, part)| !part.is_empty()) {
        blocks.push(Block::Heading(1, heading.to_owned()));
        blocks.extend(part);
    }
    blocks.push(Block::Words(caution().to_owned()));
    Page { title: format!("{}: report of the season, {from} to {to}", context.site().name), blocks }
}

/// A picture as a block.
fn pictured(picture: crate::report::page::Picture) -> Block {
    Block::Picture(Box::new(picture))
}

/// Cells from words.
fn cells(words: &[&str]) -> Vec<String> {
    words.iter().map(|&word| word.to_owned()).collect()
}
