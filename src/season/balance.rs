//! What came and went in a day: water and heat, term by term, and how far they fail to close.
//!
//! Methods: `docs/methods.md`, section 8.

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
