//! Stands in for what is being built beside this, until it is there.

use crate::rank::Progress;
use crate::report::page::{Format, Page};
use crate::tasks::log::Past;
use crate::tasks::note::{NoteAnswer, NoteAsked};
use crate::tasks::{Context, Failure};

fn not_yet<T>() -> Result<T, Failure> {
    Err(Failure::Usage("not there yet".into()))
}

pub(super) fn past(_: &Context, _: Progress) -> Result<Past, Failure> {
    not_yet()
}

pub(super) fn note(_: &Context, _: &NoteAsked, _: Progress) -> Result<NoteAnswer, Failure> {
    not_yet()
}

pub(super) fn page(_: &Context, answer: &NoteAnswer) -> Page {
    Page { title: answer.why.clone().unwrap_or_default(), blocks: Vec::new() }
}

pub(super) fn written(page: &Page, _: Format) -> String {
    page.title.clone()
}
