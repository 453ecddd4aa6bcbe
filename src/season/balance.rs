//! What came and went in a day: water and heat, term by term, and how far they fail to close.
//!
//! Methods: `docs/methods.md`, section 8.

use super::step::MOST_OPEN;

/// The terms of one conserved quantity over a day, each counted as it adds to the pool.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Terms {
    /// Held at the start.
    pub before: f64,
    /// Brought by the inflow.
    pub inflow: f64,
    /// Taken by the release; negative.
    pub release: f64,
    /// Through the surface: sun, air, contact and what evaporation cools, in the balance of heat; what evaporates, in
    /// that of water; negative where it leaves.
    pub surface: f64,
    /// Held at the end.
    pub after: f64,
}

impl Terms {
    /// What is held at the end beyond what the terms account for.
    pub fn error(&self) -> f64 {
        self.after - self.before - self.inflow - self.release - self.surface
    }

    /// The error over the largest of the terms.
    pub fn relative_error(&self) -> f64 {
        let most = [self.before, self.inflow, self.release, self.surface, self.after]
            .into_iter()
            .map(f64::abs)
            .fold(0.0, f64::max);
        if most > 0.0 { self.error().abs() / most } else { 0.0 }
    }
}

/// The balances of a day.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Balance {
    /// Of water, m3.
    pub water_m3: Terms,
    /// Of heat above 0 C, J.
    pub heat_j: Terms,
}

impl Balance {
    /// Whether both close to round-off.
    ///
    /// # Errors
    /// The quantity that does not, with its terms, in words.
    pub fn closes(&self) -> Result<(), String> {
        for (what, unit, terms) in [("water", "m3", &self.water_m3), ("heat", "J", &self.heat_j)] {
            let open = terms.relative_error();
            // a sum that is no number is open too
            if open <= MOST_OPEN {
                continue;
            }
            let Terms { before, inflow, release, surface, after } = *terms;
            return Err(format!(
                "the balance of {what} is open by {:.3e} {unit}: before {before:.6e}, inflow {inflow:.6e}, release \
                 {release:.6e}, surface {surface:.6e}, after {after:.6e}",
                terms.error()
            ));
        }
        Ok(())
    }
}
