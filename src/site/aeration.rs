//! What a conduit below the dam does to the oxygen of its water, as the site tells it.

use crate::water;

/// The gain of a conduit, with how far it may be off.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Aeration {
    /// What it does.
    pub by: water::Aeration,
    /// Least and greatest efficiency (0 to 1) or gain (mg/L), for the band; a fall has none.
    pub range: Option<(f64, f64)>,
}

impl Aeration {
    /// What it does at a place within its range, 0 to 1; 0.5 is the figure itself.
    pub fn at(&self, place: f64) -> water::Aeration {
        let within = |figure: f64| {
            let (low, high) = self.range.unwrap_or((figure, figure));
            if place < 0.5 {
                low + (figure - low) * place * 2.0
            } else {
                figure + (high - figure) * (place - 0.5) * 2.0
            }
        };
        match self.by {
            water::Aeration::Efficiency(share) => water::Aeration::Efficiency(within(share)),
            water::Aeration::Gain(gain_mg_l) => water::Aeration::Gain(within(gain_mg_l)),
            fall @ water::Aeration::Fall { .. } => fall,
        }
    }
}
