//! Why the gauge may have left the band: what speaks for and against each cause, in numbers, blaming nobody.
//!
//! Each piece of evidence has a weight; causes are ordered by what is left of those for them after those against. What
//! counts as evidence, and its weight, are choices.
//!
//! Methods: `docs/methods.md`, section 9.

mod clues;
mod gauge;
mod pool;
mod works;

pub use clues::{Clue, Clues, Step, otherwise, range};
pub use pool::swing_h;

/// Something that may be why the gauge left the band.
#[derive(Debug, Clone, PartialEq)]
pub struct Cause {
    /// What it is, in plain words that blame nobody.
    pub name: &'static str,
    /// What speaks for it.
    pub speaks_for: Vec<String>,
    /// What speaks against it.
    pub against: Vec<String>,
    /// What would tell, where neither does.
    pub to_tell: &'static str,
}

/// A cause being weighed.
struct Weighed {
    cause: Cause,
    weight: f64,
}

impl Weighed {
    fn new(name: &'static str, to_tell: &'static str) -> Self {
        Self { cause: Cause { name, speaks_for: Vec::new(), against: Vec::new(), to_tell }, weight: 0.0 }
    }

    fn pro(&mut self, weight: f64, words: String) {
        self.weight += weight;
        self.cause.speaks_for.push(words);
    }

    fn con(&mut self, weight: f64, words: String) {
        self.weight -= weight;
        self.cause.against.push(words);
    }
}

/// Every cause with its evidence, the one that most speaks for first; of equals as they stand here.
pub fn causes(clues: &Clues) -> Vec<Cause> {
    if clues.days.is_empty() {
        return Vec::new();
    }
    let mut all = [
        works::gate(clues),
        works::peaking(clues),
        works::leakage(clues),
        pool::heave(clues),
        gauge::sensor(clues),
        pool::stale(clues),
    ];
    all.sort_by(|a, b| b.weight.total_cmp(&a.weight));
    all.into_iter().map(|weighed| weighed.cause).collect()
}

/// Whether so many of all are most of them: two of three (choice).
fn most(count: usize, all: usize) -> bool {
    all > 0 && 3 * count >= 2 * all
}

fn mean(values: impl Iterator<Item = f64>) -> Option<f64> {
    let (sum, count) = values.fold((0.0, 0_u32), |(sum, count), value| (sum + value, count + 1));
    (count > 0).then(|| sum / f64::from(count))
}

fn root_mean_square(values: impl Iterator<Item = f64>) -> Option<f64> {
    mean(values.map(|value| value * value)).map(f64::sqrt)
}

/// `1 day`, `3 days`.
fn days(count: usize) -> String {
    format!("{count} day{}", if count == 1 { "" } else { "s" })
}
