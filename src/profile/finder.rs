//! The interval that holds an elevation, found by its place in a table instead of by halving.

/// Table over rising edges: for evenly spaced elevations, the interval that holds each.
#[derive(Debug, Clone, Default)]
pub(super) struct Finder {
    lowest_m: f64,
    /// Entries per metre.
    per_m: f64,
    entries: Vec<usize>,
}

/// Entries for each interval (choice: about one step from the entry to the interval).
const ENTRIES: usize = 2;

impl Finder {
    /// `edges` rise; at least two.
    pub(super) fn new(edges: &[f64]) -> Self {
        let (Some(&lowest_m), Some(&highest_m)) = (edges.first(), edges.last()) else {
            return Self::default();
        };
        let count = ENTRIES * edges.len();
        let height_m = (highest_m - lowest_m) / count as f64;
        let mut i = 0;
        let holding = |k: usize| {
            let z = lowest_m + height_m * k as f64;
            while i + 2 < edges.len() && edges[i + 1] <= z {
                i += 1;
            }
            i
        };
        Self { lowest_m, per_m: 1.0 / height_m, entries: (0..count).map(holding).collect() }
    }

    /// Index `i` with `edges[i] <= z < edges[i + 1]`, the nearest interval beyond the ends; `edges` as in
    /// [`Finder::new`].
    #[inline]
    pub(super) fn find(&self, edges: &[f64], z: f64) -> usize {
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "an index is meant, and the cast stops at the ends"
        )]
        let entry = ((z - self.lowest_m) * self.per_m) as usize;
        let mut i = self.entries[entry.min(self.entries.len() - 1)];
        while i + 2 < edges.len() && edges[i + 1] <= z {
            i += 1;
        }
        // round-off of the entry
        while i > 0 && edges[i] > z {
            i -= 1;
        }
        i
    }
}
