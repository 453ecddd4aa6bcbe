//! The loop: what arrives becomes a message, what the update asks for is done, the model is drawn.

use std::io;
use std::path::Path;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{Receiver, RecvTimeoutError, Sender, channel};
use std::sync::{Arc, Mutex, PoisonError};
use std::thread;
use std::time::Duration;

use chrono::Utc;
use crossterm::event::{Event as TermEvent, poll, read};

use crate::files::folder::{demonstrations, sites_in, stamps};
use crate::files::settings;
use crate::problem::Problem;
use crate::tasks::{self, Asked};
use crate::units::System;

use super::errands::{self, Errands};
use super::likes::Kept;
use super::model::{Choice, Message, Model, Stage};
use super::terminal::{self, Taken};
use super::update::{Effect, Event, begin, update};
use super::view::draw;
use super::work::{Lane, Seen, Worker};

/// How long the keyboard is listened to at a time (choice: the longest wait before the keys go to a shell).
const LISTEN: Duration = Duration::from_millis(200);
/// How often progress is drawn, how often an idle program looks whether it is to end, and how often at the files
/// (choices: what seems at once, and next to no work).
const BUSY: Duration = Duration::from_millis(100);
const IDLE: Duration = Duration::from_millis(250);
const FILES: Duration = Duration::from_secs(1);

/// What arrives.
enum Arrived {
    Event(Event),
    /// The terminal or the system asks to end.
    End,
}

/// Opens the screens on what the command line names.
///
/// # Errors
/// This is no terminal, or it cannot be written to.
pub fn run(asked: Asked) -> Result<(), Problem> {
    if !terminal::is_there() {
        return Err(Problem::refused(
            "no-terminal",
            "the screens need a terminal, and this is none",
            "run it in a terminal, or print an answer: gatemix pool, gatemix mix, gatemix rank",
        ));
    }
    on_terminal(asked)
        .map_err(|error| Problem::refused("terminal", error.to_string(), "try another terminal"))
}

fn on_terminal(asked: Asked) -> io::Result<()> {
    let (words, mut problems) = settings::load();
    let file = settings::path().map(|path| path.display().to_string()).unwrap_or_default();
    let (kept, unknown) = Kept::of(words, terminal::symbols(), &file);
    problems.extend(unknown);
    let likes = kept.likes;
    let (send, arrivals) = channel();
    // before the terminal is taken: a signal then must not leave it taken
    let end = signals()?;
    let mut taken = Taken::take(!likes.no_mouse)?;
    let mut model = Model::new(asked, likes, terminal::colours(), taken.size(), Utc::now());
    let said: Vec<String> = problems.iter().map(|p| p.text(System::default())).collect();
    model.message = (!said.is_empty()).then(|| Message { words: said.join("; "), wrong: true });
    let worker = |send: &Sender<Arrived>| {
        let send = send.clone();
        Worker::start(move |sent| _ = send.send(Arrived::Event(Event::Sent(sent))))
    };
    let mut outside = Outside {
        quick: worker(&send),
        long: worker(&send),
        aside: worker(&send),
        down: worker(&send),
        ahead: worker(&send),
        needed: worker(&send),
        past: worker(&send),
        note: worker(&send),
        errands: {
            let send = send.clone();
            Errands::start(move |event| _ = send.send(Arrived::Event(event)))
        },
        kept,
        watched: Arc::default(),
        send: send.clone(),
    };
    watch(&outside.watched, send.clone());
    let paused = Arc::new(AtomicBool::new(false));
    listen(send, Arc::clone(&paused));
    let mut effects = start(&mut model);
    loop {
        for effect in effects {
            if let Effect::Suspend = effect {
                paused.store(true, Ordering::Relaxed);
                taken.suspend()?;
                paused.store(false, Ordering::Relaxed);
                // the size may be another by now, and nobody told
                let (columns, rows) = taken.size();
                outside.answer(Event::Resize(columns, rows));
            } else if outside.perform(effect, &mut taken)? {
                return Ok(());
            }
        }
        taken.draw(|frame| {
            let area = frame.area();
            if let Some(cursor) = draw(&model, area, frame.buffer_mut()) {
                frame.set_cursor_position(cursor);
            }
        })?;
        match wait(&arrivals, &mut model, &end) {
            Some(next) => effects = next,
            None => return Ok(()),
        }
    }
}

/// What is done first: a list for a folder of sites, else the site.
pub fn start(model: &mut Model) -> Vec<Effect> {
    let named = model.asked.site.clone();
    let folder = named.filter(|named| !sites_in(Path::new(named)).is_empty());
    match folder {
        Some(folder) => {
            model.folder = Some(folder.clone());
            model.stage = Stage::Sites { list: sites(Some(&folder)), at: 0, kept: None };
            Vec::new()
        }
        None => begin(model),
    }
}

/// Waits until something arrives that changes what is shown; what then is to be done. `None` at the end.
fn wait(arrivals: &Receiver<Arrived>, model: &mut Model, end: &AtomicBool) -> Option<Vec<Effect>> {
    loop {
        // a terminal that is gone may leave the listener reading nothing for ever, so it is looked at here
        if end.load(Ordering::Relaxed) || !terminal::is_there() {
            return None;
        }
        let busy = model.under_way();
        let first = arrivals.recv_timeout(if busy { BUSY } else { IDLE });
        let mut effects = update(model, Event::Tick(Utc::now()));
        match first {
            Err(RecvTimeoutError::Disconnected) => return None,
            Err(RecvTimeoutError::Timeout) if !busy && effects.is_empty() => {}
            Err(RecvTimeoutError::Timeout) => return Some(effects),
            Ok(first) => {
                // all that waits is taken in before anything is drawn
                for arrived in std::iter::once(first).chain(arrivals.try_iter()) {
                    match arrived {
                        Arrived::End => return None,
                        Arrived::Event(event) => effects.extend(update(model, event)),
                    }
                }
                return Some(effects);
            }
        }
    }
}

/// What effects reach.
struct Outside {
    quick: Worker,
    long: Worker,
    aside: Worker,
    down: Worker,
    ahead: Worker,
    needed: Worker,
    past: Worker,
    note: Worker,
    errands: Errands,
    kept: Kept,
    watched: Arc<Mutex<Option<Seen>>>,
    send: Sender<Arrived>,
}

impl Outside {
    /// Does what is asked for; whether it is to leave.
    fn perform(&mut self, effect: Effect, taken: &mut Taken) -> io::Result<bool> {
        match effect {
            Effect::Ask(generation, work) => self.worker(work.lane()).ask(generation, *work),
            Effect::Stop(lane, generation) => self.worker(lane).stop(generation),
            Effect::Watch(seen) => {
                *self.watched.lock().unwrap_or_else(PoisonError::into_inner) = Some(seen);
            }
            Effect::List(folder) => self.errands.run(move || Some(Event::Sites(sites(folder.as_deref())))),
            Effect::NewSite(folder, system) => self.errands.run(move || {
                let made = tasks::new(Path::new(&folder), system).map(|_| folder);
                Some(Event::Made(made))
            }),
            Effect::Copy(text) => taken.copy(&text)?,
            Effect::Keep(likes) => {
                taken.mouse(!likes.no_mouse)?;
                let words = self.kept.words(likes);
                self.errands.run(move || settings::save(&words).err().map(Event::Said));
            }
            Effect::Log(entry) => self.errands.run(move || Some(errands::log(&entry, Utc::now()))),
            Effect::Save(saved) => self.errands.run(move || Some(errands::save(saved))),
            Effect::Quit => return Ok(true),
            Effect::Suspend => {}
        }
        Ok(false)
    }

    fn worker(&self, lane: Lane) -> &Worker {
        match lane {
            Lane::Quick => &self.quick,
            Lane::Long => &self.long,
            Lane::Aside => &self.aside,
            Lane::Down => &self.down,
            Lane::Ahead => &self.ahead,
            Lane::Needed => &self.needed,
            Lane::Past => &self.past,
            Lane::Note => &self.note,
        }
    }

    fn answer(&self, event: Event) {
        // the receiver lives as long as the loop that calls this
        _ = self.send.send(Arrived::Event(event));
    }
}

/// The sites of a folder, of this one where none is named, then the demonstrations that can be opened by name.
pub fn sites(folder: Option<&str>) -> Vec<Choice> {
    let found = sites_in(Path::new(folder.unwrap_or("."))).into_iter().map(|f| Choice {
        name: f.name,
        named: f.path.display().to_string(),
        demonstration: false,
    });
    // what is there on disk is opened in place of a demonstration of its name
    let free = demonstrations().into_iter().filter(|name| !Path::new(name).exists());
    let inside =
        free.map(|name| Choice { name: name.to_owned(), named: name.to_owned(), demonstration: true });
    found.chain(inside).collect()
}

/// Set by the signals that end a program.
fn signals() -> io::Result<Arc<AtomicBool>> {
    let end = Arc::new(AtomicBool::new(false));
    #[cfg(unix)]
    for signal in [signal_hook::consts::SIGTERM, signal_hook::consts::SIGHUP, signal_hook::consts::SIGINT] {
        signal_hook::flag::register(signal, Arc::clone(&end))?;
    }
    Ok(end)
}

/// Listens to the keyboard, except while the program is stopped.
fn listen(send: Sender<Arrived>, paused: Arc<AtomicBool>) {
    thread::spawn(move || {
        loop {
            if paused.load(Ordering::Relaxed) {
                thread::sleep(LISTEN);
                continue;
            }
            let arrived = match poll(LISTEN) {
                Ok(false) => continue,
                Ok(true) => read(),
                Err(error) => Err(error),
            };
            let event = match arrived {
                Ok(TermEvent::Key(key)) => Event::Key(key),
                Ok(TermEvent::Mouse(mouse)) => Event::Mouse(mouse),
                Ok(TermEvent::Paste(text)) => Event::Paste(text),
                Ok(TermEvent::Resize(columns, rows)) => Event::Resize(columns, rows),
                Ok(TermEvent::FocusGained | TermEvent::FocusLost) => continue,
                // a terminal that is gone says nothing more
                Err(_) => {
                    _ = send.send(Arrived::End);
                    return;
                }
            };
            if send.send(Arrived::Event(event)).is_err() {
                return;
            }
        }
    });
}

/// Looks each second whether the files of the site watched differ from what they were.
fn watch(watched: &Arc<Mutex<Option<Seen>>>, send: Sender<Arrived>) {
    let watched = Arc::clone(watched);
    thread::spawn(move || {
        loop {
            thread::sleep(FILES);
            // the screens must not wait for a slow disk: it is looked at while nothing is locked
            let Some(last) = watched.lock().unwrap_or_else(PoisonError::into_inner).clone() else { continue };
            let now = (last.0.clone(), stamps(&last.0));
            if now == last {
                continue;
            }
            let mut watched = watched.lock().unwrap_or_else(PoisonError::into_inner);
            if watched.as_ref() == Some(&last) {
                *watched = Some(now);
                if send.send(Arrived::Event(Event::FilesChanged)).is_err() {
                    return;
                }
            }
        }
    });
}
