//! The note as a written piece: the change order on its first sheet, the note to the agencies on its second.
//!
//! Quantities stand as [`say`](crate::units::say) marks them until the piece is done; then each becomes a figure in both
//! systems of units, the reader's first.

mod agency;
mod both;
mod head;
mod order;
mod pictures;
mod ranked;
mod season;
mod words;

use crate::report::page::Page;
use crate::tasks::Context;
use crate::tasks::note::NoteAnswer;

/// A note as a written piece.
pub fn page(context: &Context, answer: &NoteAnswer) -> Page {
    let mut blocks = order::sheet(context, answer);
    blocks.extend(agency::sheet(context, answer));
    let title = format!("{}: change order and agency note", context.site().name);
    both::in_both_units(Page { title, blocks }, context.system)
}
