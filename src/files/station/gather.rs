//! Problems of one kind told once, with the lines on which they stand.

use crate::problem::Problem;

/// Further lines named beside the first (choice).
const LINES_NAMED: usize = 3;

/// Problems of a long file, those of one kind together in the order in which the kinds came.
#[derive(Debug, Default)]
pub(super) struct Gather {
    told: Vec<(String, Problem, Vec<usize>)>,
}

impl Gather {
    /// Adds a problem; of one `group` the first is kept, of the others their lines.
    pub(super) fn add(&mut self, group: impl Into<String>, problem: Problem) {
        let group = group.into();
        match self.told.iter_mut().find(|(of, _, _)| *of == group) {
            Some((_, _, lines)) => lines.push(problem.place.line.unwrap_or(0)),
            None => self.told.push((group, problem, Vec::new())),
        }
    }

    /// Each kind once: `words; the same on line 41, 57, 60 and 9 more`.
    pub(super) fn finish(self) -> Vec<Problem> {
        let told = |(_, mut problem, lines): (String, Problem, Vec<usize>)| {
            let named: Vec<String> = lines.iter().take(LINES_NAMED).map(ToString::to_string).collect();
            if !named.is_empty() {
                let lines = match lines.len() - named.len() {
                    0 => named.join(", "),
                    more => format!("{} and {more} more", named.join(", ")),
                };
                problem.words = format!("{}; the same on line {lines}", problem.words);
            }
            problem
        };
        self.told.into_iter().map(told).collect()
    }
}
