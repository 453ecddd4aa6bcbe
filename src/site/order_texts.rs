//! What a change order of the site says beside what is computed: hold points, when to stop, who signs. Nothing of it is
//! ever made up: what the site file leaves out is a line to be filled by hand.

/// Texts of a change order, and how its moves are made.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct OrderTexts {
    /// Whom it goes to.
    pub to: Option<String>,
    /// What shuts goes before what opens.
    pub shut_first: bool,
    /// Openings and flows to avoid may be run through without a halt.
    pub through_bands: bool,
    /// Where to hold, and until what is seen.
    pub hold_points: Vec<HoldPoint>,
    /// When to stop.
    pub stop_when: Vec<String>,
    /// Who may cancel it.
    pub may_cancel: Option<String>,
    /// How people downstream are warned.
    pub warning: Option<String>,
    /// Labels of the lines to be signed; empty for the usual ones.
    pub sign: Vec<String>,
}

/// A point at which the work is held.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct HoldPoint {
    /// The outlet after whose moves it holds; `None`: after every step.
    pub after: Option<usize>,
    /// What is to be seen or done.
    pub text: String,
}

/// Texts of a change order as read.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct RawOrder {
    /// Whom it goes to.
    pub to: Option<String>,
    /// Whether what shuts goes first.
    pub shut_first: Option<bool>,
    /// Whether bands may be run through.
    pub through_bands: Option<bool>,
    /// Outlet, where one is named, and text.
    pub hold_points: Vec<(Option<String>, Option<String>)>,
    /// When to stop.
    pub stop_when: Vec<String>,
    /// Who may cancel it.
    pub may_cancel: Option<String>,
    /// How people downstream are warned.
    pub warning: Option<String>,
    /// Labels of the lines to be signed.
    pub sign: Vec<String>,
}
