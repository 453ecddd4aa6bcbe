//! What the screens stand on. Drawing reads it; only a message changes it.

mod board;
mod draft;
mod field;
mod form;
mod log;
mod note;
mod season;
mod session;
mod tries;
mod words;

use chrono::{DateTime, Utc};

use crate::problem::Problem;
use crate::tasks::Asked;
use crate::units::System;

pub use board::{Cell, Row, rows};
pub use draft::{Draft, History};
pub use field::{Field, Line, NoteLine, Typed, Value};
pub use form::{Entry, EntryOf, Form, Logs};
pub use log::{LogPage, LogSpan, LogView, Passed};
pub use note::{FORMATS, NoteQuestion, NoteView, Noted, Saved, format_of};
pub use season::{Ahead, Left, Priced, SeasonPage, SeasonQuestion, SeasonShown, SeasonView};
pub use session::{
    Downstream, MixView, Page, PoolView, RankView, Ranked, RiverPage, RiverView, Session, Shown, Whole,
};
pub use tries::{Nudge, asked, opening_of, set_flow, set_opening, set_release, set_total, taken, total_m3s};
pub use words::AsTyped;

use super::look::{Look, Theme};
use super::work::Lane;

/// A screen of a site.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Screen {
    /// Is this profile sound, how is the water layered.
    Pool,
    /// What comes out.
    Mix,
    /// Which mixes fit.
    Rank,
    /// What arrives downstream.
    River,
    /// What it costs later.
    Season,
    /// What was decided, and how it turned out.
    Log,
    /// Change order and agency note.
    Note,
}

impl Screen {
    /// The screens there are, in the order of their numbers.
    pub const ALL: [(&'static str, Self); 7] = [
        ("pool", Self::Pool),
        ("mix", Self::Mix),
        ("rank", Self::Rank),
        ("river", Self::River),
        ("season", Self::Season),
        ("log", Self::Log),
        ("note", Self::Note),
    ];
}

/// A site of the list.
#[derive(Debug, Clone, PartialEq)]
pub struct Choice {
    /// Name shown.
    pub name: String,
    /// What is opened: a path, or the name of a demonstration.
    pub named: String,
    /// Whether it is a demonstration held in memory.
    pub demonstration: bool,
}

/// What fills the screen.
#[derive(Debug)]
pub enum Stage {
    /// A site is being opened.
    Opening {
        /// The session that goes on with it.
        kept: Option<Box<Session>>,
    },
    /// A list of sites.
    Sites {
        /// The sites.
        list: Vec<Choice>,
        /// The line chosen.
        at: usize,
        /// The session to go back to.
        kept: Option<Box<Session>>,
    },
    /// A site whose files give no answer.
    Broken {
        /// Everything wrong with them.
        problems: Vec<Problem>,
        /// Units of the words.
        system: System,
        /// First line shown.
        scroll: usize,
        /// The session to go on with once they are mended.
        kept: Option<Box<Session>>,
    },
    /// A site.
    Site(Box<Session>),
}

/// What lies over the screen.
#[derive(Debug, Clone)]
pub enum Over {
    /// The help, from a line.
    Help(usize),
    /// The settings, at a line.
    Settings(usize),
    /// The order of the criteria, at a line.
    Order(usize),
    /// Gates taken out of the ranking, at a line.
    Drill(usize),
    /// Something typed.
    Field(Field),
    /// Something to be logged.
    Form(Box<Form>),
}

/// What is said on the message line.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Message {
    /// The words, harmless.
    pub words: String,
    /// Whether something went wrong.
    pub wrong: bool,
}

/// What the user likes, kept between runs.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct Likes {
    /// Units shown; the site's own when absent.
    pub units: Option<System>,
    /// Symbols and colours as chosen.
    pub look: Look,
    /// Whether the mouse is left to the terminal.
    pub no_mouse: bool,
}

/// How far long work is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Under {
    /// Its generation.
    pub generation: u64,
    /// When it was asked.
    pub since: DateTime<Utc>,
    /// How much is done, 0 to 1.
    pub done: f64,
    /// Whether files are being opened.
    pub opening: bool,
}

/// The model.
#[derive(Debug)]
pub struct Model {
    /// What is to be opened, as the command line says it.
    pub asked: Asked,
    /// Folder of the list of sites.
    pub folder: Option<String>,
    /// What fills the screen.
    pub stage: Stage,
    /// What lies over it.
    pub over: Option<Over>,
    /// The message line.
    pub message: Option<Message>,
    /// What the user likes.
    pub likes: Likes,
    /// What the terminal says of its colours.
    pub terminal: Theme,
    /// How it is drawn on: likes with the terminal's own say.
    pub look: Look,
    /// Columns and rows of the terminal.
    pub size: (u16, u16),
    /// Time of day, as the last tick told it.
    pub clock: DateTime<Utc>,
    /// Number of questions asked so far.
    pub generation: u64,
    /// What is being computed in the quick lane.
    pub quick: Option<Under>,
    /// What is being computed in the long lane.
    pub long: Option<Under>,
    /// What is being read in the lane aside.
    pub aside: Option<Under>,
    /// What is being computed of the river.
    pub down: Option<Under>,
    /// What is being computed of the season.
    pub ahead: Option<Under>,
    /// What is being sought of the cold water needed on a date.
    pub needed: Option<Under>,
    /// What is being computed of the past.
    pub past: Option<Under>,
    /// What is being computed of the note.
    pub note: Option<Under>,
    /// Who logs, as last typed; not kept beyond this run.
    pub by: String,
    /// What is being logged, to be shown again where it cannot be.
    pub logging: Option<Box<Form>>,
}

impl Model {
    /// Before anything is opened.
    pub fn new(asked: Asked, likes: Likes, terminal: Theme, size: (u16, u16), clock: DateTime<Utc>) -> Self {
        Self {
            asked,
            folder: None,
            stage: Stage::Opening { kept: None },
            over: None,
            message: None,
            likes,
            terminal,
            look: likes.look.settled(terminal),
            size,
            clock,
            generation: 0,
            quick: None,
            long: None,
            aside: None,
            down: None,
            ahead: None,
            needed: None,
            past: None,
            note: None,
            by: String::new(),
            logging: None,
        }
    }

    /// The open site.
    pub fn session(&self) -> Option<&Session> {
        if let Stage::Site(session) = &self.stage { Some(session) } else { None }
    }

    /// The open site, to be changed.
    pub fn session_mut(&mut self) -> Option<&mut Session> {
        if let Stage::Site(session) = &mut self.stage { Some(session) } else { None }
    }

    /// Units shown: as liked, else the site's.
    pub fn system(&self) -> System {
        let of_site = self.session().map(|s| s.base.site().units.system());
        self.likes.units.or(self.asked.units).or(of_site).unwrap_or_default()
    }

    /// Whether what is computed in the lane of the season is the price of mixes.
    pub fn prices_mixes(&self) -> bool {
        self.ahead.is_some() && self.session().is_some_and(|s| s.season_asked.is_none())
    }

    /// Whether anything is being computed.
    pub fn under_way(&self) -> bool {
        let lanes = [&self.quick, &self.long, &self.aside, &self.down, &self.ahead, &self.needed];
        lanes.into_iter().chain([&self.past, &self.note]).any(Option::is_some)
    }

    /// What is under way in a lane.
    pub fn under(&mut self, lane: Lane) -> &mut Option<Under> {
        match lane {
            Lane::Quick => &mut self.quick,
            Lane::Long => &mut self.long,
            Lane::Aside => &mut self.aside,
            Lane::Down => &mut self.down,
            Lane::Ahead => &mut self.ahead,
            Lane::Needed => &mut self.needed,
            Lane::Past => &mut self.past,
            Lane::Note => &mut self.note,
        }
    }
}
