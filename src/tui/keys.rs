//! The one table of keys: what each does where. Hints and help are made from it.

mod action;
mod table;

use crossterm::event::{KeyCode, KeyEvent, KeyEventKind, KeyModifiers};

pub use action::Action;
pub use table::TABLE;

/// Where a key works.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Place {
    /// Wherever nothing is being typed.
    Everywhere,
    /// Every screen of a site.
    Site,
    /// The pool screen.
    Pool,
    /// The mix screen.
    Mix,
    /// The rank screen.
    Rank,
    /// The river screen.
    River,
    /// The season screen.
    Season,
    /// The log screen.
    Log,
    /// The note screen.
    Note,
    /// The list of sites.
    Sites,
    /// The list of problems of a broken site.
    Problems,
    /// The help.
    Help,
    /// Lists laid over a screen.
    List,
    /// While typing.
    Field,
    /// While typing what is to be logged.
    Form,
}

impl Place {
    /// Every place with its heading in the help.
    pub const HEADINGS: [(Self, &'static str); 15] = [
        (Self::Everywhere, "everywhere"),
        (Self::Site, "every screen"),
        (Self::Pool, "pool"),
        (Self::Mix, "mix"),
        (Self::Rank, "rank"),
        (Self::River, "river"),
        (Self::Season, "season"),
        (Self::Log, "log"),
        (Self::Note, "note"),
        (Self::Sites, "list of sites"),
        (Self::Problems, "problems of the files"),
        (Self::Help, "this help"),
        (Self::List, "lists and settings"),
        (Self::Field, "while typing"),
        (Self::Form, "what is to be logged"),
    ];
}

/// One line of the table.
#[derive(Debug, Clone, Copy)]
pub struct Binding {
    /// Where it works.
    pub place: Place,
    /// The key.
    pub key: KeyCode,
    /// Whether Ctrl is held.
    pub ctrl: bool,
    /// The key as it is shown; empty for a second key of an action.
    pub shown: &'static str,
    /// The short word in the hints; empty where help alone tells it.
    pub hint: &'static str,
    /// What it does, in the help.
    pub words: &'static str,
    /// What it asks for.
    pub action: Action,
}

/// What a key asks for in the first of some places that knows it. A key let go asks for nothing.
pub(super) fn action(event: &KeyEvent, places: &[Place]) -> Option<Action> {
    if event.kind == KeyEventKind::Release {
        return None;
    }
    let held = event.modifiers.contains(KeyModifiers::CONTROL);
    let other = event.modifiers.intersects(KeyModifiers::ALT | KeyModifiers::SUPER);
    let is = |b: &&Binding| b.key == event.code && b.ctrl == held && !other;
    places.iter().find_map(|place| TABLE.iter().filter(|b| b.place == *place).find(is)).map(|b| b.action)
}

/// Hints for some places, the first first: key and word.
pub(super) fn hints(places: &[Place]) -> Vec<(&'static str, &'static str)> {
    let of = |place: &Place| {
        let place = *place;
        TABLE.iter().filter(move |b| b.place == place && !b.hint.is_empty())
    };
    places.iter().flat_map(of).map(|b| (b.shown, b.hint)).collect()
}

#[cfg(test)]
mod tests;
