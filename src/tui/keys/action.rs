//! What keys ask for.

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
    /// Log the candidate as a decision.
    Decide,
    /// Log something that nobody planned.
    Happened,
    /// Other words for the decision chosen.
    Amend,
    /// Take the decision chosen back.
    Withdraw,
    /// How far off: the scores.
    Scores,
    /// Spells outside the band.
    Spells,
    /// What can be learned.
    Learned,
    /// The season gone through again.
    Hindcast,
    /// More or less of the past.
    Span,
    /// What the note is of.
    NoteOf,
    /// The other sheet of the note.
    Sheet,
    /// Type why.
    Why,
    /// Type remarks.
    Remarks,
    /// Type when the change begins.
    Begins,
    /// The next format.
    Format,
    /// Save the note.
    Save,
}
