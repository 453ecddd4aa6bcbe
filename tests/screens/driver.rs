//! Drives the screens without a terminal: keys in, text out, every question answered on the spot.

use std::collections::VecDeque;
use std::ops::ControlFlow;
use std::path::Path;

use chrono::{DateTime, Utc};
use crossterm::event::{KeyCode, KeyEvent, KeyModifiers};
use gatemix::problem::Problem;
use gatemix::tasks::log::NotLogged;
use gatemix::tasks::{self, Asked, Failure};
use gatemix::tui::model::{Choice, Likes, Model, Session};
use gatemix::tui::{self, Done, Effect, Event, Lane, Look, Sent, Symbols, Theme, Work, draw_model};
use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};
use unicode_width::UnicodeWidthStr;

/// The screens with what the loop around them would do.
pub(crate) struct Driver {
    pub(crate) model: Model,
    /// The newest question of each lane that has no answer yet: an older one is wanted no more.
    waiting: VecDeque<(u64, Work)>,
    /// Answers are held back until they are asked for.
    pub(crate) held: bool,
    pub(crate) quit: bool,
    pub(crate) copied: Vec<String>,
    pub(crate) kept: Vec<Likes>,
    /// The sites told instead of those that are there.
    pub(crate) listed: Option<Vec<Choice>>,
}

/// The moment at which every test looks.
pub(crate) fn clock() -> DateTime<Utc> {
    "2026-07-14T18:30:00Z".parse().unwrap()
}

impl Driver {
    /// Opens what the command line would name and waits for every answer.
    pub(crate) fn open(site: Option<&str>, size: (u16, u16)) -> Self {
        let asked = Asked { site: site.map(str::to_owned), ..Asked::default() };
        Self::asked(asked, Likes::default(), size)
    }

    pub(crate) fn asked(asked: Asked, likes: Likes, size: (u16, u16)) -> Self {
        let mut model = Model::new(asked, likes, Theme::Palette, size, clock());
        let effects = tui::start(&mut model);
        let mut driver = Self {
            model,
            waiting: VecDeque::new(),
            held: false,
            quit: false,
            copied: Vec::new(),
            kept: Vec::new(),
            listed: None,
        };
        driver.perform(effects);
        driver.settle();
        driver
    }

    pub(crate) fn session(&self) -> &Session {
        self.model.session().unwrap()
    }

    /// Tells the model something and does what it then asks for, as the loop does.
    pub(crate) fn send(&mut self, event: Event) {
        let effects = tui::update(&mut self.model, event);
        self.perform(effects);
    }

    fn perform(&mut self, effects: Vec<Effect>) {
        for effect in effects {
            match effect {
                Effect::Ask(generation, work) => {
                    self.waiting.retain(|(_, old)| old.lane() != work.lane());
                    self.waiting.push_back((generation, *work));
                }
                Effect::Stop(lane, _) => self.waiting.retain(|(_, old)| old.lane() != lane),
                Effect::List(folder) => {
                    let list = self.listed.clone().unwrap_or_else(|| tui::sites(folder.as_deref()));
                    self.send(Event::Sites(list));
                }
                // the names of a storm are no names for folders
                Effect::NewSite(..) if self.listed.is_some() => {}
                Effect::NewSite(folder, system) => {
                    let made = tasks::new(Path::new(&folder), system).map(|_| folder);
                    self.send(Event::Made(made));
                }
                // nothing is written in a storm
                Effect::Log(_) if self.listed.is_some() => {
                    self.send(Event::Logged(Err(NotLogged::Task(Failure::Stopped))));
                }
                Effect::Save(saved) if self.listed.is_some() => {
                    let there =
                        (!saved.replace).then(|| Problem::refused("exists", "it is there", "name another"));
                    self.send(Event::Saved(Box::new(saved), there));
                }
                Effect::Log(entry) => self.send(tui::log(&entry, clock())),
                Effect::Save(saved) => self.send(tui::save(saved)),
                Effect::Copy(text) => self.copied.push(text),
                Effect::Keep(likes) => self.kept.push(likes),
                Effect::Quit => self.quit = true,
                Effect::Watch(_) | Effect::Suspend => {}
            }
        }
    }

    /// Takes a question that waits, of a lane.
    pub(crate) fn question(&mut self, lane: Lane) -> Option<(u64, Work)> {
        let at = self.waiting.iter().position(|(_, work)| work.lane() == lane)?;
        self.waiting.remove(at)
    }

    /// Whether a question of a lane waits.
    pub(crate) fn waits(&self, lane: Lane) -> bool {
        self.waiting.iter().any(|(_, work)| work.lane() == lane)
    }

    /// Answers a question.
    pub(crate) fn answer(&mut self, (generation, work): (u64, Work)) {
        let lane = work.lane();
        let done: Done = work.perform(&|_| ControlFlow::Continue(()));
        self.send(Event::Sent(Sent::Done(lane, generation, done)));
    }

    /// Answers until nothing is asked any more.
    pub(crate) fn settle(&mut self) {
        // the ranking and the river come last: what the others tell may ask for them anew
        let lanes = [Lane::Quick, Lane::Aside, Lane::Long, Lane::Down, Lane::Ahead, Lane::Needed];
        let lanes = lanes.into_iter().chain([Lane::Past, Lane::Note]);
        let next = |d: &mut Self| lanes.clone().find_map(|l| d.question(l));
        while let Some(question) = next(self) {
            self.answer(question);
        }
    }

    /// Presses keys, named as in the help and parted by spaces; answers follow, unless they are held back.
    pub(crate) fn keys(&mut self, keys: &str) -> &mut Self {
        for word in keys.split(' ') {
            self.send(Event::Key(key(word)));
            // a key that follows an answer may depend on it; the ranking follows when there is time
            while !self.held
                && let Some(question) = self.question(Lane::Quick)
            {
                self.answer(question);
            }
        }
        if !self.held {
            self.settle();
        }
        self
    }

    /// Types text, letter by letter.
    pub(crate) fn typed(&mut self, text: &str) -> &mut Self {
        for c in text.chars() {
            self.send(Event::Key(KeyEvent::new(KeyCode::Char(c), KeyModifiers::NONE)));
        }
        self
    }

    pub(crate) fn resize(&mut self, size: (u16, u16)) -> &mut Self {
        self.send(Event::Resize(size.0, size.1));
        self
    }

    /// Draws in these colours, whatever is liked.
    pub(crate) fn theme(&mut self, theme: Theme) -> &mut Self {
        self.model.look = Look { theme, ..self.model.look };
        self
    }

    /// Draws with these symbols, whatever is liked.
    pub(crate) fn symbols(&mut self, symbols: Symbols) -> &mut Self {
        self.model.look = Look { symbols, ..self.model.look };
        self
    }

    /// The screen in cells, and where the cursor stands.
    pub(crate) fn drawn(&self) -> (Buffer, Option<Position>) {
        let area = Rect::new(0, 0, self.model.size.0, self.model.size.1);
        let mut buffer = Buffer::empty(area);
        let cursor = draw_model(&self.model, area, &mut buffer);
        (buffer, cursor)
    }

    pub(crate) fn buffer(&self) -> Buffer {
        self.drawn().0
    }

    /// The whole screen, a line a row, without the blanks at the ends.
    pub(crate) fn text(&self) -> String {
        text(&self.buffer())
    }
}

/// A buffer as text.
pub(crate) fn text(buffer: &Buffer) -> String {
    let area = buffer.area;
    let mut out = String::new();
    for y in 0..area.height {
        let mut line = String::new();
        let mut x = 0;
        while x < area.width {
            let symbol = buffer[(x, y)].symbol();
            line.push_str(symbol);
            // the second cell of a wide character holds nothing
            x += u16::try_from(symbol.width().max(1)).unwrap();
        }
        out.push_str(line.trim_end());
        out.push('\n');
    }
    out
}

/// A key by its name.
pub(crate) fn key(word: &str) -> KeyEvent {
    let (word, modifiers) = match word.strip_prefix("Ctrl-") {
        Some(letter) => (letter.to_lowercase(), KeyModifiers::CONTROL),
        None => (word.to_owned(), KeyModifiers::NONE),
    };
    let code = match word.as_str() {
        "Up" => KeyCode::Up,
        "Down" => KeyCode::Down,
        "Left" => KeyCode::Left,
        "Right" => KeyCode::Right,
        "PgUp" => KeyCode::PageUp,
        "PgDn" => KeyCode::PageDown,
        "Home" => KeyCode::Home,
        "End" => KeyCode::End,
        "Enter" => KeyCode::Enter,
        "Esc" => KeyCode::Esc,
        "Tab" => KeyCode::Tab,
        "BackTab" => KeyCode::BackTab,
        "Backspace" => KeyCode::Backspace,
        "Space" => KeyCode::Char(' '),
        other => {
            let mut letters = other.chars();
            let letter = letters.next().unwrap();
            assert!(letters.next().is_none(), "no key is named {other}");
            KeyCode::Char(letter)
        }
    };
    KeyEvent::new(code, modifiers)
}
