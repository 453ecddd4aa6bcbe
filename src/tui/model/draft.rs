//! What the user changes, as one value: every change makes a new one, so that any can be taken back.

use crate::rank::Criterion;
use crate::tasks::{Changed, Given};

/// Changes kept for undo (choice).
const KEPT: usize = 200;

/// Everything the user changes on the screens.
#[derive(Debug, Clone, PartialEq)]
pub struct Draft {
    /// Pool, date and targets where they differ from the files.
    pub changed: Changed,
    /// Total release to rank at, m3/s; the site's own when absent.
    pub release_m3s: Option<f64>,
    /// Order of the criteria.
    pub order: Vec<Criterion>,
    /// Outlets the ranking leaves out.
    pub without: Vec<usize>,
    /// Days between the decisions of a season; the site's own when absent.
    pub every: Option<u32>,
    /// Settings tried; a well may keep a total while all its gates are shut.
    pub tries: Vec<Given>,
    /// The one on the board.
    pub at: usize,
    /// The one beside it.
    pub beside: Option<usize>,
}

impl Draft {
    /// Nothing changed, the setting now tried.
    pub fn begin(now: Given) -> Self {
        Self {
            changed: Changed::default(),
            release_m3s: None,
            order: Criterion::USUAL.to_vec(),
            every: None,
            without: Vec::new(),
            tries: vec![now],
            at: 0,
            beside: None,
        }
    }

    /// The order of the criteria in words, where it is not the usual one.
    pub fn order_words(&self) -> Option<String> {
        let names = || self.order.iter().map(|c| c.name()).collect::<Vec<_>>().join(",");
        (self.order != Criterion::USUAL).then(names)
    }

    /// Whether another asks for the same seasons.
    pub fn goes_as(&self, other: &Self) -> bool {
        self.changed == other.changed && self.order == other.order && self.every == other.every
    }

    /// Whether another asks for the same ranking, gates left out aside.
    pub fn ranks_beside(&self, other: &Self) -> bool {
        self.changed == other.changed
            && self.release_m3s.map(f64::to_bits) == other.release_m3s.map(f64::to_bits)
            && self.order == other.order
    }

    /// Whether another asks for the same ranking.
    pub fn ranks_as(&self, other: &Self) -> bool {
        self.ranks_beside(other) && self.without == other.without
    }

    /// The setting on the board.
    pub fn tried(&self) -> Option<&Given> {
        self.tries.get(self.at)
    }

    /// The setting on the board, to be changed.
    pub fn tried_mut(&mut self) -> Option<&mut Given> {
        self.tries.get_mut(self.at)
    }
}

/// A draft with those before it and those taken back.
#[derive(Debug, Clone)]
pub struct History {
    past: Vec<Draft>,
    now: Draft,
    future: Vec<Draft>,
}

impl History {
    /// Begins with a draft.
    pub fn begin(draft: Draft) -> Self {
        Self { past: Vec::new(), now: draft, future: Vec::new() }
    }

    /// The draft.
    pub fn now(&self) -> &Draft {
        &self.now
    }

    /// Takes a new draft; whether it differs from the last. Looking at another try is no change to be taken back.
    pub fn change(&mut self, draft: Draft) -> bool {
        if draft == self.now {
            return false;
        }
        if (Draft { at: self.now.at, beside: self.now.beside, ..draft.clone() }) == self.now {
            self.now = draft;
            return true;
        }
        self.past.push(std::mem::replace(&mut self.now, draft));
        if self.past.len() > KEPT {
            self.past.remove(0);
        }
        self.future.clear();
        true
    }

    /// Forgets targets that were tried, in every draft; whether there were any now.
    pub fn drop_targets(&mut self) -> bool {
        let tried = self.now.changed.targets.is_some();
        let drafts = self.past.iter_mut().chain(self.future.iter_mut()).chain([&mut self.now]);
        drafts.for_each(|draft| draft.changed.targets = None);
        tried
    }

    /// Takes the last change back; whether there was one.
    pub fn undo(&mut self) -> bool {
        let Some(before) = self.past.pop() else { return false };
        self.future.push(std::mem::replace(&mut self.now, before));
        true
    }

    /// Makes it again; whether there was one.
    pub fn redo(&mut self) -> bool {
        let Some(after) = self.future.pop() else { return false };
        self.past.push(std::mem::replace(&mut self.now, after));
        true
    }
}
