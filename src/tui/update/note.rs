//! The note screen: asking for the note, the words of the user, saving.

use std::path::{Path, PathBuf};

use crate::problem::{Problem, harmless};
use crate::report::page::written;
use crate::tasks::{Context, Failure};

use super::super::keys::Action;
use super::super::model::{
    FORMATS, Field, Model, NoteLine, Noted, Over, Saved, Screen, Session, Typed, format_of,
};
use super::super::work::{Lane, Work};
use super::{Effect, complain, note_rows, say};

/// Lines of a page (choice).
const PAGE: usize = 10;

/// Does what a key asks for.
pub(super) fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let view = session.note.clone();
    match action {
        Action::NoteOf => {
            with(model, |session| {
                session.note.candidate = !session.note.candidate;
                (session.note.scroll, session.note_wrong) = (0, None);
            });
            model.message = None;
            return ask(model).into_iter().collect();
        }
        Action::Again => return again(model),
        Action::Why => {
            let why = session.noted.as_ref().and_then(|noted| noted.answer.why.clone());
            typing(model, NoteLine::Why, view.why.or(why));
        }
        Action::Remarks => typing(model, NoteLine::Remarks, view.remarks),
        Action::Begins => {
            let begins = session.noted.as_ref().map(|noted| noted.answer.begins);
            let begins = begins.map(|begins| begins.format("%Y-%m-%d %H:%M").to_string());
            typing(model, NoteLine::Begins, view.begins.or(begins));
        }
        Action::Format => {
            let at = FORMATS.iter().position(|(format, _)| *format == view.format).unwrap_or(0);
            if let Some((format, name)) = FORMATS.get((at + 1) % FORMATS.len()) {
                with(model, |session| session.note.format = *format);
                say(model, format!("it is saved as {name}"));
            }
        }
        Action::Save => save(model),
        Action::Left => sheet(model, |at| at.saturating_sub(1)),
        Action::Right => sheet(model, |at| at + 1),
        Action::Up => scroll(model, |at| at.saturating_sub(1)),
        Action::Down => scroll(model, |at| at + 1),
        Action::PageUp => scroll(model, |at| at.saturating_sub(PAGE)),
        Action::PageDown => scroll(model, |at| at + PAGE),
        Action::First => scroll(model, |_| 0),
        Action::Last => scroll(model, |_| usize::MAX),
        _ => {}
    }
    Vec::new()
}

/// Asks for the note, where it is looked at, not known yet and not on its way.
pub(super) fn ask(model: &mut Model) -> Option<Effect> {
    let system = model.system();
    let session = model.session().filter(|s| s.screen == Screen::Note && !s.notes_now(system))?;
    let question = session.note_question(system);
    let asked = session.note_asked.as_ref().is_some_and(|q| q.is(&question));
    if asked && (model.note.is_some() || session.note_wrong.is_some()) {
        return None;
    }
    asking(model)
}

fn asking(model: &mut Model) -> Option<Effect> {
    let system = model.system();
    let session = model.session_mut()?;
    let question = session.note_question(system);
    session.note_asked = Some(question.clone());
    session.note_wrong = None;
    Some(super::ask(model, Work::Note(Box::new(question))))
}

fn again(model: &mut Model) -> Vec<Effect> {
    let system = model.system();
    if model.session().is_some_and(|s| s.notes_now(system)) {
        say(model, "this note is of what is set now");
        return Vec::new();
    }
    model.message = None;
    asking(model).into_iter().collect()
}

/// Takes what a worker says of the note.
pub(super) fn told(model: &mut Model, told: Result<Box<Noted>, Failure>) -> Vec<Effect> {
    with(model, |session| match told {
        Ok(noted) => {
            session.note_wrong = None;
            session.take_note(*noted);
        }
        Err(failure) => session.note_wrong = Some(failure),
    });
    scroll(model, |at| at);
    ask(model).into_iter().collect()
}

/// Stops what is under way.
pub(super) fn stop(model: &mut Model) -> Option<Effect> {
    let under = model.note.take()?;
    with(model, |session| session.note_wrong = Some(Failure::Stopped));
    say(model, "stopped; r makes the note");
    Some(Effect::Stop(Lane::Note, under.generation + 1))
}

fn with(model: &mut Model, change: impl FnOnce(&mut Session)) {
    if let Some(session) = model.session_mut() {
        change(session);
    }
}

/// Opens a field that holds what is there; words are edited, not replaced.
fn typing(model: &mut Model, line: NoteLine, there: Option<String>) {
    let mut field = Field::new(Typed::Note(line), harmless(&there.unwrap_or_default()));
    field.untouched = matches!(line, NoteLine::Begins | NoteLine::File);
    model.over = Some(Over::Field(field));
}

/// Takes what was typed of the note.
pub(super) fn entered(model: &mut Model, line: NoteLine, words: String) -> Vec<Effect> {
    let given = Some(words).filter(|words| !words.is_empty());
    match line {
        NoteLine::File | NoteLine::FileThere => {
            let file = given.unwrap_or_default();
            return saving(model, &file, line == NoteLine::FileThere).into_iter().collect();
        }
        NoteLine::Begins => {
            with(model, |session| (session.note.begins, session.note_wrong) = (given, None));
            return ask(model).into_iter().collect();
        }
        NoteLine::Why => with(model, |session| session.note.why = given),
        NoteLine::Remarks => with(model, |session| session.note.remarks = given),
    }
    with(model, |session| {
        if let Some(noted) = session.noted.take() {
            session.take_note(noted);
        }
    });
    scroll(model, |at| at);
    Vec::new()
}

/// Asks for a name for the file, where there is a note of what is set now.
fn save(model: &mut Model) {
    let system = model.system();
    let Some(session) = model.session() else { return };
    match session.noted.as_ref() {
        Some(noted) if session.notes_now(system) => {
            let file = noted.file(session.note.format);
            typing(model, NoteLine::File, Some(file));
        }
        Some(_) => complain(model, "what is shown is from before: nothing is saved"),
        None => complain(model, "there is no note to save yet"),
    }
}

/// Has it saved.
fn saving(model: &mut Model, file: &str, replace: bool) -> Option<Effect> {
    let system = model.system();
    let session = model.session()?;
    let noted = session.noted.as_ref();
    let Some(noted) = noted.filter(|_| session.notes_now(system)) else {
        complain(model, "what is shown is from before: nothing is saved");
        return None;
    };
    let format = format_of(file).ok()?;
    let (path, text) = (folder(&noted.context).join(file), written(&noted.page, format));
    say(model, "being saved ...");
    Some(Effect::Save(Saved { path, typed: file.to_owned(), text, replace }))
}

/// The folder of the site; the one the program was started in for what is held in memory.
fn folder(context: &Context) -> PathBuf {
    let log = context.folder.log_path();
    log.as_deref().and_then(Path::parent).map_or_else(PathBuf::new, Path::to_path_buf)
}

/// Says where it was saved; where a file of that name is there, it takes a second word to write over it.
pub(super) fn saved(model: &mut Model, saved: Saved, problem: Option<Problem>) -> Vec<Effect> {
    let system = model.system();
    match problem {
        None => say(model, format!("saved in {}", harmless(&saved.path.display().to_string()))),
        Some(problem) if problem.kind == "exists" && model.over.is_none() => {
            model.message = None;
            let mut field = Field::new(Typed::Note(NoteLine::FileThere), saved.typed);
            field.wrong = Some("a file of this name is there: Enter writes over it, or type another".into());
            model.over = Some(Over::Field(field));
        }
        Some(problem) => complain(model, problem.text(system)),
    }
    Vec::new()
}

fn sheet(model: &mut Model, to: impl Fn(usize) -> usize) {
    with(model, |session| {
        let sheets = session.noted.as_ref().map_or(0, |noted| noted.sheets.len());
        let at = to(session.note.sheet).min(sheets.saturating_sub(1));
        if at != session.note.sheet {
            (session.note.sheet, session.note.scroll) = (at, 0);
        }
    });
}

/// Scrolls what scrolls, no further than its last line.
fn scroll(model: &mut Model, to: impl Fn(usize) -> usize) {
    let last = note_rows(model);
    with(model, |session| session.note.scroll = to(session.note.scroll.min(last)).min(last));
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::tasks::{Asked, open};

    #[test]
    fn scenario_what_is_held_in_memory_is_saved_where_the_program_was_started() {
        let asked = Asked { site: Some("ashlar".into()), ..Asked::default() };
        let context = open(&asked, chrono::DateTime::UNIX_EPOCH).unwrap();
        assert_eq!(folder(&context).join("notes/a.html"), Path::new("notes/a.html"));
    }
}
