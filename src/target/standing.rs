//! Where a value stands against a range.

/// Where a value stands against a range.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Standing {
    /// Within the range, or above the oxygen minimum.
    Inside,
    /// Below it.
    Below,
    /// Above it.
    Above,
    /// The value is missing, or the rule sets no such bound.
    Unknown,
}

impl Standing {
    /// The word used in every output.
    pub fn word(self) -> &'static str {
        match self {
            Self::Inside => "inside",
            Self::Below => "below",
            Self::Above => "above",
            Self::Unknown => "unknown",
        }
    }
}
