//! Stands in for what is being built beside this, until it is there.

use crate::report::page::{Format, Page};
use crate::tasks::Context;
use crate::tasks::note::NoteAnswer;

pub(super) fn page(_: &Context, answer: &NoteAnswer) -> Page {
    Page { title: answer.why.clone().unwrap_or_default(), blocks: Vec::new() }
}

pub(super) fn written(page: &Page, _: Format) -> String {
    page.title.clone()
}
