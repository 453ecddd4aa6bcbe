//! Columns a station's file can have, and the words of its `mark` column.

/// A column of a station's file.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Column {
    /// Moment of the reading.
    Time,
    /// Temperature, C.
    TemperatureC,
    /// Temperature, F.
    TemperatureF,
    /// Oxygen, mg/L.
    Oxygen,
    /// Oxygen, percent of saturation.
    OxygenPercent,
    /// Flow, m3/s.
    FlowM3s,
    /// Flow, cubic feet per second.
    FlowCfs,
    /// How far the reading was looked through.
    Mark,
}

impl Column {
    /// Every column.
    pub const ALL: [Self; 8] = [
        Self::Time,
        Self::TemperatureC,
        Self::TemperatureF,
        Self::Oxygen,
        Self::OxygenPercent,
        Self::FlowM3s,
        Self::FlowCfs,
        Self::Mark,
    ];

    /// Its name in a header; any case is read.
    pub fn name(self) -> &'static str {
        match self {
            Self::Time => "time",
            Self::TemperatureC => "temperature_C",
            Self::TemperatureF => "temperature_F",
            Self::Oxygen => "oxygen_mg_l",
            Self::OxygenPercent => "oxygen_percent",
            Self::FlowM3s => "flow_m3s",
            Self::FlowCfs => "flow_cfs",
            Self::Mark => "mark",
        }
    }

    /// The column of a name, in any case.
    pub fn parse(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|c| c.name().eq_ignore_ascii_case(name.trim()))
    }

    /// Whether it holds a quantity.
    pub(super) fn is_reading(self) -> bool {
        !matches!(self, Self::Time | Self::Mark)
    }
}

/// Words of the `mark` column and of `# data:`, in lower case, and whether such data are still provisional.
const MARKS: [(&str, bool); 9] = [
    ("provisional", true),
    ("p", true),
    ("estimated", true),
    ("e", true),
    ("reviewed", false),
    ("approved", false),
    ("a", false),
    ("final", false),
    ("checked", false),
];

/// Whether a word marks data as provisional; `None` where it is not a known one.
pub(super) fn provisional(word: &str) -> Option<bool> {
    let word = word.trim();
    MARKS.iter().find(|(known, _)| known.eq_ignore_ascii_case(word)).map(|(_, of)| *of)
}

/// What the cure of an unknown word says.
pub(super) const MARK_CURE: &str = "write provisional, estimated or reviewed, or leave it blank";
