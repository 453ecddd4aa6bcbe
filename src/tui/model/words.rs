//! A setting as it would be typed to a command, to the last digit.

use crate::site::Site;
use crate::tasks::{Given, Word};

/// Words of a setting; none where nothing is set.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct AsTyped(Vec<Kept>);

/// A word with its text.
#[derive(Debug, Clone, PartialEq, Eq)]
enum Kept {
    Set(String),
    Open(String),
    Release(String),
}

impl AsTyped {
    /// The words of what is given.
    pub fn of(site: &Site, given: &Given) -> Self {
        let outlet = |i: usize| site.outlets.get(i).map_or("", |o| o.name.as_str());
        let flows = given.flows.iter().map(|gate| {
            let open = gate.opening.map_or_else(String::new, |open| format!("@{}%", 100.0 * open));
            Kept::Set(format!("{}={} m3/s{open}", outlet(gate.outlet), gate.flow_m3s))
        });
        let open =
            given.open.iter().map(|(gate, open)| Kept::Open(format!("{}={}%", outlet(*gate), 100.0 * open)));
        let totals = given.totals.iter().map(|(well, flow)| {
            let name = site.wells.get(*well).map_or("", |w| w.name.as_str());
            Kept::Set(format!("{name}={flow} m3/s"))
        });
        let release = given.release_m3s.map(|flow| Kept::Release(format!("{flow} m3/s")));
        Self(flows.chain(open).chain(totals).chain(release).collect())
    }

    /// Whether there are none.
    pub fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// The words.
    pub fn words(&self) -> Vec<Word<'_>> {
        self.0.iter().map(Kept::word).collect()
    }
}

impl Kept {
    fn word(&self) -> Word<'_> {
        match self {
            Self::Set(text) => Word::Set(text),
            Self::Open(text) => Word::Open(text),
            Self::Release(text) => Word::Release(text),
        }
    }
}
