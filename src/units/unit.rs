//! The table of units: what is accepted, and the exact factor to SI.

use std::fmt;

/// International foot, m. Exact by definition (NIST Special Publication 811, Appendix B; from memory).
const FOOT_M: f64 = 0.3048;
/// International acre, 43 560 square feet, m2. Exact from the foot (the survey acre is 4 ppm larger and
/// was retired at the end of 2022; NIST SP 811, Appendix B; from memory).
const ACRE_M2: f64 = 43_560.0 * FOOT_M * FOOT_M;
/// US gallon, 231 cubic inches, m3. Exact (NIST SP 811, Appendix B; from memory).
const US_GALLON_M3: f64 = 3.785_411_784e-3;
/// Length of the day, s; exact.
pub const DAY_S: f64 = 86_400.0;

/// What a number measures.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Dimension {
    /// Elevation, depth, head, width; m.
    Length,
    /// Way along a river; m inside, km or miles outside.
    Distance,
    /// Plan area; m2.
    Area,
    /// Stored water; m3.
    Volume,
    /// Flow of water; m3/s.
    Flow,
    /// Speed of water; m/s.
    Velocity,
    /// A temperature on its scale; C.
    Temperature,
    /// A step or spread of temperature, without the offset of the scale; C.
    TemperatureDifference,
    /// Dissolved oxygen, dissolved or suspended solids; mg/L.
    Concentration,
    /// Opening, share, percent of saturation; percent, not a fraction.
    Percent,
}

impl Dimension {
    /// The units accepted for this dimension, the SI one first.
    pub fn units(self) -> impl Iterator<Item = Unit> {
        Unit::ALL.iter().copied().filter(move |unit| unit.dimension() == self)
    }

    /// Whether an SI value can be that of a reservoir at all (choice, far beyond any): larger ones are slips that
    /// would drown every other figure.
    pub fn is_plausible(self, value_si: f64) -> bool {
        let most = match self {
            Self::Length => 1e5,
            Self::Area => 1e12,
            Self::Volume => 1e15,
            Self::Distance | Self::Flow => 1e7,
            Self::Velocity | Self::Temperature => 1e3,
            Self::TemperatureDifference => 1e2,
            Self::Concentration => 1e6,
            Self::Percent => 1e4,
        };
        value_si.abs() <= most
    }

    /// The accepted symbols as a sentence gives them, such as `m or ft`.
    pub fn accepted(self) -> String {
        let symbols: Vec<&str> = self.units().map(Unit::symbol).collect();
        match symbols.split_last() {
            Some((last, rest)) if !rest.is_empty() => format!("{} or {last}", rest.join(", ")),
            _ => symbols.concat(),
        }
    }
}

impl fmt::Display for Dimension {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Length => "length",
            Self::Distance => "distance",
            Self::Area => "area",
            Self::Volume => "volume",
            Self::Flow => "flow",
            Self::Velocity => "velocity",
            Self::Temperature => "temperature",
            Self::TemperatureDifference => "temperature difference",
            Self::Concentration => "concentration",
            Self::Percent => "percentage",
        })
    }
}

struct Row {
    dimension: Dimension,
    symbol: &'static str,
    spellings: &'static [&'static str],
    /// SI units in one of this unit.
    factor: f64,
    /// This unit's reading at the SI zero.
    zero: f64,
}

macro_rules! table {
    ($($name:ident: $dimension:ident, $symbol:literal, $spellings:expr, $factor:expr, $zero:expr;)+) => {
        /// A unit that a file, an option or a screen may use.
        #[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
        pub enum Unit {
            $(#[doc = concat!("`", $symbol, "`")] $name,)+
        }

        impl Unit {
            /// Every unit, the SI one first within its dimension.
            pub const ALL: &'static [Self] = &[$(Self::$name),+];

            const fn row(self) -> Row {
                match self {
                    $(Self::$name => Row {
                        dimension: Dimension::$dimension,
                        symbol: $symbol,
                        spellings: &$spellings,
                        factor: $factor,
                        zero: $zero,
                    },)+
                }
            }
        }
    };
}

table! {
    Metre: Length, "m", ["metre", "metres", "meter", "meters"], 1.0, 0.0;
    Foot: Length, "ft", ["foot", "feet"], FOOT_M, 0.0;
    Kilometre: Distance, "km", ["kilometre", "kilometres", "kilometer", "kilometers"], 1e3, 0.0;
    Mile: Distance, "mi", ["mile", "miles"], 5280.0 * FOOT_M, 0.0;
    SquareMetre: Area, "m2", ["sq m"], 1.0, 0.0;
    SquareKilometre: Area, "km2", ["sq km"], 1e6, 0.0;
    Hectare: Area, "ha", ["hectare", "hectares"], 1e4, 0.0;
    Acre: Area, "acre", ["acres", "ac"], ACRE_M2, 0.0;
    CubicMetre: Volume, "m3", ["cu m"], 1.0, 0.0;
    CubicHectometre: Volume, "hm3", [], 1e6, 0.0;
    AcreFoot: Volume, "acre-ft",
        ["acre-foot", "acre-feet", "acre ft", "acre foot", "acre feet", "ac-ft", "ac ft", "af"],
        ACRE_M2 * FOOT_M, 0.0;
    ThousandAcreFeet: Volume, "kaf", ["taf"], 1e3 * ACRE_M2 * FOOT_M, 0.0;
    CubicMetrePerSecond: Flow, "m3/s", ["cms", "cumec", "cumecs"], 1.0, 0.0;
    CubicFootPerSecond: Flow, "cfs", ["ft3/s"], FOOT_M * FOOT_M * FOOT_M, 0.0;
    ThousandCubicFeetPerSecond: Flow, "kcfs", [], 1e3 * FOOT_M * FOOT_M * FOOT_M, 0.0;
    MegalitrePerDay: Flow, "ML/d", ["ML/day"], 1e3 / DAY_S, 0.0;
    MillionGallonsPerDay: Flow, "mgd", [], 1e6 * US_GALLON_M3 / DAY_S, 0.0;
    MetrePerSecond: Velocity, "m/s", [], 1.0, 0.0;
    FootPerSecond: Velocity, "ft/s", ["fps"], FOOT_M, 0.0;
    Celsius: Temperature, "C", ["degC", "deg C", "°C", "° C", "Celsius"], 1.0, 0.0;
    Fahrenheit: Temperature, "F", ["degF", "deg F", "°F", "° F", "Fahrenheit"], 5.0 / 9.0, 32.0;
    CelsiusDifference: TemperatureDifference, "C",
        ["degC", "deg C", "°C", "° C", "Celsius", "K"], 1.0, 0.0;
    FahrenheitDifference: TemperatureDifference, "F",
        ["degF", "deg F", "°F", "° F", "Fahrenheit"], 5.0 / 9.0, 0.0;
    MilligramPerLitre: Concentration, "mg/L", ["g/m3"], 1.0, 0.0;
    Percent: Percent, "%", ["percent", "pct"], 1.0, 0.0;
}

impl Unit {
    /// What the unit measures.
    pub fn dimension(self) -> Dimension {
        self.row().dimension
    }

    /// How it is printed. A temperature and its difference share a symbol.
    pub fn symbol(self) -> &'static str {
        self.row().symbol
    }

    /// A value in this unit, in SI.
    pub fn to_si(self, value: f64) -> f64 {
        let row = self.row();
        (value - row.zero) * row.factor
    }

    /// An SI value, in this unit.
    pub fn from_si(self, value_si: f64) -> f64 {
        let row = self.row();
        value_si / row.factor + row.zero
    }

    /// The unit of a step on this temperature scale; any other unit measures its own differences.
    #[must_use]
    pub fn of_difference(self) -> Self {
        match self {
            Self::Celsius => Self::CelsiusDifference,
            Self::Fahrenheit => Self::FahrenheitDifference,
            other => other,
        }
    }

    /// Whether a word, already stripped of carets and superscripts, names this unit. Case is free, except
    /// that a leading capital M is the prefix mega: `ml/d` would be a millilitre.
    pub(super) fn is_spelled(self, word: &str) -> bool {
        let row = self.row();
        let same = |known: &str| {
            if known.starts_with('M') { known == word } else { known.eq_ignore_ascii_case(word) }
        };
        same(row.symbol) || row.spellings.iter().copied().any(same)
    }
}

/// The symbol.
impl fmt::Display for Unit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.symbol())
    }
}
