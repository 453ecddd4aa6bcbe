//! The one table of keys: what each does where. Hints and help are made from it.

use crossterm::event::{KeyCode, KeyEvent, KeyEventKind, KeyModifiers};

/// What a key asks for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Action {
    /// Leave the program.
    Quit,
    /// Stop the program for the shell.
    Suspend,
    /// Help.
    Help,
    /// Settings.
    Settings,
    /// Copy the answer.
    Copy,
    /// Choose another site.
    Sites,
    /// Back, or stop computing.
    Back,
    /// A screen by its number, from 1.
    Screen(usize),
    /// The screen after this.
    NextScreen,
    /// The screen before this.
    PreviousScreen,
    /// One row up.
    Up,
    /// One row down.
    Down,
    /// One cell left.
    Left,
    /// One cell right.
    Right,
    /// A page up.
    PageUp,
    /// A page down.
    PageDown,
    /// To the first.
    First,
    /// To the last.
    Last,
    /// Take, or type into.
    Enter,
    /// A step more.
    More,
    /// A step less.
    Less,
    /// A large step more.
    MuchMore,
    /// A large step less.
    MuchLess,
    /// Open or shut; take in or leave out.
    Toggle,
    /// The one before, of casts or tries.
    Before,
    /// The one after.
    After,
    /// Lay this cast over the one used.
    Overlay,
    /// Work with this cast.
    UseCast,
    /// Type a threshold of cold water.
    Colder,
    /// Take the last change back.
    Undo,
    /// Make it again.
    Redo,
    /// Solve for the preferred temperature.
    Solve,
    /// Keep this try and begin another like it.
    NewTry,
    /// Drop this try.
    DropTry,
    /// Compare with another try.
    Compare,
    /// Begin again from the setting now.
    Reset,
    /// What is rejected.
    Rejected,
    /// Lost-gate drill.
    Drill,
    /// Order of the criteria.
    Order,
    /// Type the release.
    Release,
    /// The answers beyond the list.
    Others,
    /// Rank again after it was stopped.
    Again,
    /// Begin a new site.
    NewSite,
    /// What arrives day by day.
    DayByDay,
    /// What stations recorded.
    Record,
    /// The next case of weather.
    Case,
    /// The next plan.
    Plan,
    /// The next strategy.
    Strategy,
    /// Cases, plans and strategies side by side.
    Beside,
    /// Moves and gates by date.
    Calendar,
    /// The next number of days between decisions.
    Every,
    /// The cold water needed on a date.
    Needed,
    /// Oxygen in place of temperature.
    Oxygen,
    /// What the mixes cost by the end of the season.
    Prices,
}

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
}

impl Place {
    /// Every place with its heading in the help.
    pub const HEADINGS: [(Self, &'static str); 12] = [
        (Self::Everywhere, "everywhere"),
        (Self::Site, "every screen"),
        (Self::Pool, "pool"),
        (Self::Mix, "mix"),
        (Self::Rank, "rank"),
        (Self::River, "river"),
        (Self::Season, "season"),
        (Self::Sites, "list of sites"),
        (Self::Problems, "problems of the files"),
        (Self::Help, "this help"),
        (Self::List, "lists and settings"),
        (Self::Field, "while typing"),
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

const fn on(
    place: Place,
    key: KeyCode,
    shown: &'static str,
    hint: &'static str,
    words: &'static str,
    action: Action,
) -> Binding {
    Binding { place, key, ctrl: false, shown, hint, words, action }
}

const fn ctrl(key: char, shown: &'static str, words: &'static str, action: Action) -> Binding {
    Binding { place: Place::Everywhere, key: KeyCode::Char(key), ctrl: true, shown, hint: "", words, action }
}

use Action as A;
use KeyCode::Char;
use Place as P;

/// The table.
pub const TABLE: &[Binding] = &[
    on(P::Everywhere, Char('?'), "?", "help", "this help", A::Help),
    on(P::Everywhere, Char('q'), "q", "quit", "quit", A::Quit),
    ctrl('c', "Ctrl-C", "quit, also while typing", A::Quit),
    ctrl('z', "Ctrl-Z", "to the shell; fg comes back", A::Suspend),
    on(P::Everywhere, KeyCode::Esc, "Esc", "", "back; stops computing", A::Back),
    on(P::Everywhere, Char(','), ",", "", "settings: units, symbols, colours, mouse", A::Settings),
    on(P::Site, Char('1'), "1-5", "", "pool, mix, rank, river, season", A::Screen(1)),
    on(P::Site, Char('2'), "", "", "", A::Screen(2)),
    on(P::Site, Char('3'), "", "", "", A::Screen(3)),
    on(P::Site, Char('4'), "", "", "", A::Screen(4)),
    on(P::Site, Char('5'), "", "", "", A::Screen(5)),
    on(P::Site, KeyCode::Tab, "Tab", "", "the next screen", A::NextScreen),
    on(P::Site, KeyCode::BackTab, "", "", "", A::PreviousScreen),
    on(P::Site, Char('y'), "y", "", "copy this answer to the clipboard of the terminal", A::Copy),
    on(P::Site, Char('o'), "o", "", "open another site", A::Sites),
    on(P::Pool, KeyCode::Up, "Up Down", "read", "read the water at an elevation", A::Up),
    on(P::Pool, KeyCode::Down, "", "", "", A::Down),
    on(P::Pool, Char('['), "[ ]", "casts", "the cast before, the cast after", A::Before),
    on(P::Pool, Char(']'), "", "", "", A::After),
    on(P::Pool, Char('l'), "l", "lay over", "lay this cast over the others, or take it off", A::Overlay),
    on(P::Pool, Char('w'), "w", "work with", "work with the cast looked at", A::UseCast),
    on(P::Pool, Char('c'), "c", "colder than", "volume colder than a temperature you type", A::Colder),
    on(P::Pool, Char('u'), "u", "", "take the last change back", A::Undo),
    on(P::Pool, Char('r'), "r", "", "make it again", A::Redo),
    on(P::Pool, KeyCode::PageUp, "PgUp PgDn", "", "scroll what is said of the pool", A::PageUp),
    on(P::Pool, KeyCode::PageDown, "", "", "", A::PageDown),
    on(P::Pool, KeyCode::Home, "Home End", "", "surface, bed", A::First),
    on(P::Pool, KeyCode::End, "", "", "", A::Last),
    on(P::Mix, KeyCode::Up, "Arrows", "", "choose what to change", A::Up),
    on(P::Mix, KeyCode::Down, "", "", "", A::Down),
    on(P::Mix, KeyCode::Left, "", "", "", A::Left),
    on(P::Mix, KeyCode::Right, "", "", "", A::Right),
    on(P::Mix, Char('+'), "+ -", "turn", "a step more, a step less", A::More),
    on(P::Mix, Char('='), "", "", "", A::More),
    on(P::Mix, Char('-'), "", "", "", A::Less),
    on(P::Mix, Char('>'), "> <", "", "a large step more, less", A::MuchMore),
    on(P::Mix, Char('<'), "", "", "", A::MuchLess),
    on(P::Mix, Char('.'), "", "", "", A::MuchMore),
    on(P::Mix, KeyCode::Enter, "Enter", "type", "type a value, with a unit or without", A::Enter),
    on(P::Mix, Char(' '), "Space", "open/shut", "open the gate fully, or shut it", A::Toggle),
    on(P::Mix, Char('u'), "u", "undo", "take the last change back", A::Undo),
    on(P::Mix, Char('r'), "r", "", "make it again", A::Redo),
    on(
        P::Mix,
        Char('p'),
        "p",
        "solve",
        "split the two largest flows for the preferred temperature",
        A::Solve,
    ),
    on(P::Mix, Char('n'), "n", "keep", "keep this try and begin another like it", A::NewTry),
    on(P::Mix, Char('['), "[ ]", "tries", "the try before, the try after", A::Before),
    on(P::Mix, Char(']'), "", "", "", A::After),
    on(P::Mix, Char('c'), "c", "compare", "compare with the next try, side by side", A::Compare),
    on(P::Mix, Char('d'), "d", "", "drop this try", A::DropTry),
    on(P::Mix, Char('z'), "z", "", "begin again from what is set now", A::Reset),
    on(P::Mix, KeyCode::PageUp, "PgUp PgDn", "", "scroll what is said of the mix", A::PageUp),
    on(P::Mix, KeyCode::PageDown, "", "", "", A::PageDown),
    on(P::Rank, KeyCode::Up, "Up Down", "", "choose a mix; scroll what is rejected", A::Up),
    on(P::Rank, KeyCode::Down, "", "", "", A::Down),
    on(P::Rank, KeyCode::Enter, "Enter", "take", "take the mix to the mix screen", A::Enter),
    on(P::Rank, Char('x'), "x", "rejected", "what is rejected, and by how much; and back", A::Rejected),
    on(
        P::Rank,
        Char('m'),
        "m",
        "more",
        "exact split, least release, more release, lost gates; and back",
        A::Others,
    ),
    on(
        P::Rank,
        Char('l'),
        "l",
        "drill",
        "lost-gate drill: rank without gates you choose; Esc ends it",
        A::Drill,
    ),
    on(P::Rank, Char('p'), "p", "price", "what each mix costs by the end of the season; and back", A::Prices),
    on(P::Rank, Char('c'), "c", "order", "order the criteria", A::Order),
    on(P::Rank, Char('t'), "t", "release", "type the total release", A::Release),
    on(P::Rank, Char('r'), "r", "", "rank, or compute the prices, again after it was stopped", A::Again),
    on(P::Rank, KeyCode::PageUp, "PgUp PgDn", "", "scroll what is said of the mix", A::PageUp),
    on(P::Rank, KeyCode::PageDown, "", "", "", A::PageDown),
    on(P::Rank, KeyCode::Home, "Home End", "", "the first, the last", A::First),
    on(P::Rank, KeyCode::End, "", "", "", A::Last),
    on(P::River, KeyCode::Up, "Arrows", "", "choose a rule and what to change of it; scroll", A::Up),
    on(P::River, KeyCode::Down, "", "", "", A::Down),
    on(P::River, KeyCode::Left, "", "", "", A::Left),
    on(P::River, KeyCode::Right, "", "", "", A::Right),
    on(P::River, KeyCode::Enter, "Enter", "type", "type a value, with a unit or without", A::Enter),
    on(P::River, Char('+'), "+ -", "turn", "a step more, a step less", A::More),
    on(P::River, Char('='), "", "", "", A::More),
    on(P::River, Char('-'), "", "", "", A::Less),
    on(P::River, Char('>'), "> <", "", "a large step more, less", A::MuchMore),
    on(P::River, Char('<'), "", "", "", A::MuchLess),
    on(P::River, Char('.'), "", "", "", A::MuchMore),
    on(P::River, Char('d'), "d", "days", "what arrives day by day; and back", A::DayByDay),
    on(P::River, Char('v'), "v", "record", "what stations recorded, against the rules; and back", A::Record),
    on(P::River, Char('u'), "u", "undo", "take the last change back", A::Undo),
    on(P::River, Char('r'), "r", "", "make it again", A::Redo),
    on(P::River, KeyCode::PageUp, "PgUp PgDn", "", "scroll", A::PageUp),
    on(P::River, KeyCode::PageDown, "", "", "", A::PageDown),
    on(P::Season, Char('c'), "c", "case", "the next case of weather and inflow", A::Case),
    on(P::Season, Char('p'), "p", "plan", "the next plan", A::Plan),
    on(
        P::Season,
        Char('s'),
        "s",
        "strategy",
        "the next strategy: hold, best, thrift, each schedule",
        A::Strategy,
    ),
    on(P::Season, Char('e'), "e", "every", "decide every 1, 3, 7, 14 days, or as the site says", A::Every),
    on(P::Season, Char('l'), "l", "left", "cold water needed to be left on the date read", A::Needed),
    on(P::Season, Char('t'), "t", "table", "cases, plans and strategies side by side; and back", A::Beside),
    on(P::Season, Char('g'), "g", "gates", "moves and gates by date; and back", A::Calendar),
    on(P::Season, Char('x'), "x", "oxygen", "oxygen in place of temperature; and back", A::Oxygen),
    on(P::Season, KeyCode::Left, "Left Right", "date", "a day back, a day on", A::Left),
    on(P::Season, KeyCode::Right, "", "", "", A::Right),
    on(P::Season, Char('['), "[ ]", "", "a week back, a week on", A::Before),
    on(P::Season, Char(']'), "", "", "", A::After),
    on(P::Season, Char('<'), "< >", "moves", "the move before, the move after", A::MuchLess),
    on(P::Season, Char('>'), "", "", "", A::MuchMore),
    on(P::Season, Char('.'), "", "", "", A::MuchMore),
    on(
        P::Season,
        KeyCode::Up,
        "Up Down",
        "",
        "where the release is looked at: the dam, the points; scroll",
        A::Up,
    ),
    on(P::Season, KeyCode::Down, "", "", "", A::Down),
    on(P::Season, Char('u'), "u", "", "take the last change back", A::Undo),
    on(
        P::Season,
        Char('r'),
        "r",
        "",
        "compute what is shown as the case it is solved on; again after a stop",
        A::Again,
    ),
    on(P::Season, KeyCode::PageUp, "PgUp PgDn", "", "scroll what is said", A::PageUp),
    on(P::Season, KeyCode::PageDown, "", "", "", A::PageDown),
    on(P::Season, KeyCode::Home, "Home End", "", "the first day, the last", A::First),
    on(P::Season, KeyCode::End, "", "", "", A::Last),
    on(P::Sites, KeyCode::Up, "Up Down", "choose", "choose a site", A::Up),
    on(P::Sites, KeyCode::Down, "", "", "", A::Down),
    on(P::Sites, KeyCode::Enter, "Enter", "open", "open it", A::Enter),
    on(P::Sites, Char('n'), "n", "new site", "begin a new site from a template", A::NewSite),
    on(P::Problems, KeyCode::Up, "Up Down", "scroll", "scroll", A::Up),
    on(P::Problems, KeyCode::Down, "", "", "", A::Down),
    on(P::Problems, KeyCode::PageUp, "", "", "", A::PageUp),
    on(P::Problems, KeyCode::PageDown, "", "", "", A::PageDown),
    on(P::Problems, Char('o'), "o", "other site", "open another site", A::Sites),
    on(P::Help, KeyCode::Up, "Up Down", "scroll", "scroll", A::Up),
    on(P::Help, KeyCode::Down, "", "", "", A::Down),
    on(P::Help, KeyCode::PageUp, "PgUp PgDn", "page", "a page", A::PageUp),
    on(P::Help, KeyCode::PageDown, "", "", "", A::PageDown),
    on(P::Help, KeyCode::Enter, "Enter", "close", "close it, as Esc does", A::Enter),
    on(P::List, KeyCode::Up, "Up Down", "choose", "choose a line", A::Up),
    on(P::List, KeyCode::Down, "", "", "", A::Down),
    on(P::List, KeyCode::PageUp, "PgUp PgDn", "", "scroll", A::PageUp),
    on(P::List, KeyCode::PageDown, "", "", "", A::PageDown),
    on(P::List, Char(' '), "Space", "change", "change it", A::Toggle),
    on(P::List, Char('+'), "+ -", "", "further up or down in the order", A::More),
    on(P::List, Char('='), "", "", "", A::More),
    on(P::List, Char('-'), "", "", "", A::Less),
    on(P::List, KeyCode::Enter, "Enter", "done", "done", A::Enter),
    on(P::Field, KeyCode::Enter, "Enter", "set", "set it", A::Enter),
    on(P::Field, KeyCode::Esc, "Esc", "leave as it was", "leave it as it was", A::Back),
];

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
