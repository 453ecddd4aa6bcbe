//! Quantities inside sentences, whose units are chosen only when the sentence is shown.
//!
//! A check of the input knows no reader: it writes `format!("pool {} is too high", say::m(60.0, 2))`. The
//! figure enters the text as a mark holding its full SI value, and [`in_system`] puts `60.00 m` or `196.9 ft`
//! in its place.

use std::fmt::{self, Write as _};

use super::show::{System, show};
use super::unit::Dimension;

/// Start of a mark, START OF TEXT: text shown on a terminal never holds it.
const OPEN: char = '\u{2}';
/// End of a mark, END OF TEXT.
const CLOSE: char = '\u{3}';

/// The letter that names a dimension inside a mark.
const LETTERS: [(char, Dimension); 8] = [
    ('L', Dimension::Length),
    ('K', Dimension::Distance),
    ('A', Dimension::Area),
    ('V', Dimension::Volume),
    ('Q', Dimension::Flow),
    ('U', Dimension::Velocity),
    ('T', Dimension::Temperature),
    ('D', Dimension::TemperatureDifference),
];

/// Digits of a volume that has been converted (choice: a table of storage knows no more).
const MEASURED: f64 = 4.0;

/// A piece of a text.
#[derive(Debug, Clone, Copy)]
enum Piece<'a> {
    Text(&'a str),
    Said(Said),
}

/// A quantity to be written into a sentence; its `Display` is the mark, not the figure.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Said {
    letter: char,
    value_si: f64,
    decimals: u8,
    signed: bool,
}

/// An elevation, depth, height or head, m.
pub fn m(value_m: f64, decimals: u8) -> Said {
    Said::new('L', value_m, decimals)
}

/// A way along the river, m.
pub fn along(value_m: f64, decimals: u8) -> Said {
    Said::new('K', value_m, decimals)
}

/// An area, m2.
pub fn m2(value_m2: f64, decimals: u8) -> Said {
    Said::new('A', value_m2, decimals)
}

/// A volume, m3.
pub fn m3(value_m3: f64, decimals: u8) -> Said {
    Said::new('V', value_m3, decimals)
}

/// A flow, m3/s.
pub fn m3s(value_m3s: f64, decimals: u8) -> Said {
    Said::new('Q', value_m3s, decimals)
}

/// A velocity, m/s.
pub fn m_s(value_m_s: f64, decimals: u8) -> Said {
    Said::new('U', value_m_s, decimals)
}

/// A temperature on its scale, C.
pub fn c(value_c: f64, decimals: u8) -> Said {
    Said::new('T', value_c, decimals)
}

/// A difference of temperatures, C.
pub fn dc(value_c: f64, decimals: u8) -> Said {
    Said::new('D', value_c, decimals)
}

impl Said {
    /// `decimals` are those of SI, 9 at most.
    fn new(letter: char, value_si: f64, decimals: u8) -> Self {
        Self { letter, value_si, decimals: decimals.min(9), signed: false }
    }

    /// The same quantity with a plus before a figure above zero.
    #[must_use]
    pub fn signed(self) -> Self {
        Self { signed: true, ..self }
    }

    /// Reads what stands between [`OPEN`] and [`CLOSE`].
    fn read(mark: &str) -> Option<Self> {
        let mut chars = mark.chars();
        let (letter, decimals, sign) = (chars.next()?, chars.next()?.to_digit(10)?, chars.next()?);
        LETTERS.iter().find(|(known, _)| *known == letter)?;
        Some(Self {
            letter,
            value_si: chars.as_str().parse().ok()?,
            decimals: u8::try_from(decimals).ok()?,
            signed: match sign {
                '+' => true,
                '=' => false,
                _ => return None,
            },
        })
    }

    /// The figure with its unit; `None` when the letter names no dimension.
    fn shown(self, system: System) -> Option<String> {
        let (_, dimension) = *LETTERS.iter().find(|(letter, _)| *letter == self.letter)?;
        let figure = show(self.value_si, dimension, system, self.decimals_in(dimension, system));
        let above_zero = !figure.starts_with('-') && figure.contains(|c| matches!(c, '1'..='9'));
        Some(if self.signed && above_zero { format!("+{figure}") } else { figure })
    }

    /// The same as a figure converted for this system: a volume without the digits that nobody measured.
    fn converted(self, system: System) -> Self {
        let volume = LETTERS.iter().find(|known| **known == (self.letter, Dimension::Volume));
        let Some(unit) = volume.map(|(_, dimension)| system.unit(*dimension)) else { return self };
        let value = unit.from_si(self.value_si);
        let step = 10_f64.powf(value.abs().max(1.0).log10().floor() + 1.0 - MEASURED);
        Self { value_si: unit.to_si((value / step).round() * step), ..self }
    }

    /// The figure, or that of a range which it begins.
    fn up_to(self, end: Option<Self>, system: System) -> String {
        let figure = self.shown(system).unwrap_or_default();
        let Some(end) = end else { return figure };
        let bare = figure.rsplit_once(' ').map_or(figure.as_str(), |(bare, _)| bare);
        format!("{bare} to {}", end.shown(system).unwrap_or_default())
    }

    /// Decimals that keep about the precision of the SI figure (choice).
    fn decimals_in(self, dimension: Dimension, system: System) -> u8 {
        match (system, dimension) {
            (System::Si, _) | (System::Us, Dimension::Distance) => self.decimals,
            (System::Us, Dimension::Length | Dimension::Velocity) => self.decimals.saturating_sub(1),
            (System::Us, Dimension::Flow) => self.decimals.saturating_sub(2),
            // a small pool would read 0 acre
            (System::Us, Dimension::Area | Dimension::Volume) => {
                let small = system.unit(dimension).from_si(self.value_si).abs() < 10.0;
                if small { 2 } else { 0 }
            }
            // whoever asks for more than hundredths tells a hair's breadth
            (System::Us, _) => {
                if self.decimals > 2 {
                    self.decimals
                } else {
                    self.decimals.min(1)
                }
            }
        }
    }
}

/// The mark, for [`in_system`] to replace.
impl fmt::Display for Said {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let sign = if self.signed { '+' } else { '=' };
        write!(f, "{OPEN}{}{}{sign}{:e}{CLOSE}", self.letter, self.decimals, self.value_si)
    }
}

/// A text with every quantity in it as a figure with its unit. What only resembles a mark, from a name in
/// a user's file, stays as it is: the result is no safer for a terminal than the text was.
pub fn in_system(text: &str, system: System) -> String {
    let mut out = String::with_capacity(text.len());
    for piece in pieces(text) {
        match piece {
            Piece::Text(text) => out.push_str(text),
            Piece::Said(said) => out.push_str(&said.shown(system).unwrap_or_default()),
        }
    }
    out
}

/// A text with every quantity in it in both systems, one of them first: `54.6 F (12.6 C)`. Two of a kind with nothing
/// but `to` between them share their units: `53.5 to 56.1 F (11.9 to 13.4 C)`.
pub fn in_both(text: &str, first: System) -> String {
    let second = match first {
        System::Us => System::Si,
        System::Si => System::Us,
    };
    let pieces = pieces(text);
    let mut out = String::with_capacity(2 * text.len());
    let mut rest = &pieces[..];
    while let [piece, after @ ..] = rest {
        rest = after;
        let said = match piece {
            Piece::Text(text) => {
                out.push_str(text);
                continue;
            }
            Piece::Said(said) => *said,
        };
        let end = match after {
            [Piece::Text(" to "), Piece::Said(end), after @ ..] if end.letter == said.letter => {
                rest = after;
                Some(*end)
            }
            _ => None,
        };
        let one = said.up_to(end, first);
        let other = said.converted(second).up_to(end.map(|end| end.converted(second)), second);
        _ = write!(out, "{one} ({other})");
    }
    out
}

/// A text cut into quantities and what stands between them.
fn pieces(text: &str) -> Vec<Piece<'_>> {
    let mut out = Vec::new();
    let mut plain = 0;
    let mut at = 0;
    while let Some(close) = text.get(at..).and_then(|rest| rest.find(CLOSE)).map(|found| at + found) {
        let open = text.get(at..close).and_then(|piece| piece.rfind(OPEN)).map(|found| at + found);
        let mark = |open: usize| text.get(open + OPEN.len_utf8()..close).and_then(Said::read);
        at = close + CLOSE.len_utf8();
        if let Some((open, said)) = open.and_then(|open| Some((open, mark(open)?))) {
            out.extend(text.get(plain..open).filter(|t| !t.is_empty()).map(Piece::Text));
            out.push(Piece::Said(said));
            plain = at;
        }
    }
    out.extend(text.get(plain..).filter(|t| !t.is_empty()).map(Piece::Text));
    out
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    const BOTH: [System; 2] = [System::Si, System::Us];

    fn any_said() -> impl Strategy<Value = Said> {
        (proptest::sample::select(&LETTERS), any::<f64>(), any::<u8>(), any::<bool>()).prop_map(
            |((letter, _), value, decimals, signed)| {
                let said = Said::new(letter, value, decimals);
                if signed { said.signed() } else { said }
            },
        )
    }

    /// Text made of the pieces of marks, so that much of it is nearly one.
    fn nearly_marks() -> impl Strategy<Value = String> {
        let pieces =
            &["\u{2}", "\u{3}", "L", "T", "é", "2", "9", "+", "=", "1e3", "NaN", "-", " ", "\u{1b}["];
        proptest::collection::vec(proptest::sample::select(pieces), 0..24).prop_map(|p| p.concat())
    }

    proptest! {

        #![proptest_config(crate::units::law_config())]
        #[test]
        fn law_a_mark_keeps_its_value(said in any_said()) {
            let text = said.to_string();
            let read = Said::read(text.trim_matches([OPEN, CLOSE])).unwrap();
            prop_assert_eq!(read.value_si.to_bits(), said.value_si.to_bits());
            prop_assert_eq!(read, said);
        }

        #[test]
        fn law_the_text_around_a_quantity_does_not_matter(
            before in nearly_marks(), said in any_said(), after in nearly_marks()
        ) {
            for system in BOTH {
                let figure = said.shown(system).unwrap();
                prop_assert!(!figure.chars().any(char::is_control));
                prop_assert_eq!(
                    in_system(&format!("{before}{said}{after}"), system),
                    format!("{}{figure}{}", in_system(&before, system), in_system(&after, system))
                );
            }
        }

        #[test]
        fn law_text_without_a_mark_is_unchanged(text in ".*") {
            prop_assert_eq!(in_system(&text, System::Us), text.clone());
            prop_assert_eq!(in_both(&text, System::Us), text);
        }
    }

    #[test]
    fn scenario_one_sentence_in_both_systems() {
        let text = format!(
            "{} {} {} {} {} {} {}",
            m(60.0, 2),
            m2(2.0e6, 0),
            m3(2.44e8, 0),
            m3s(35.39605824, 2),
            m_s(1.2, 2),
            c(14.5, 2),
            dc(1.0, 2)
        );
        assert_eq!(
            in_system(&text, System::Si),
            "60.00 m 2,000,000 m2 244,000,000 m3 35.40 m3/s 1.20 m/s 14.50 C 1.00 C"
        );
        assert_eq!(
            in_system(&text, System::Us),
            "196.9 ft 494 acre 197,814 acre-ft 1,250 cfs 3.9 ft/s 58.1 F 1.8 F"
        );
        let small = format!("{} {} {}", m2(1000.0, 0), m(0.5, 0), c(9.0, 0));
        assert_eq!(in_system(&small, System::Us), "0.25 acre 2 ft 48 F");
    }

    #[test]
    fn scenario_one_sentence_in_both_systems_at_once() {
        let text = format!(
            "{} [{} to {}], {} then {}",
            c(12.6, 1),
            c(11.9, 1),
            c(13.4, 1),
            m3s(34.0, 1),
            m(-2.0, 1)
        );
        assert_eq!(
            in_both(&text, System::Us),
            "54.7 F (12.6 C) [53.4 to 56.1 F (11.9 to 13.4 C)], 1,201 cfs (34.0 m3/s) then -7 ft (-2.0 m)"
        );
        assert_eq!(
            in_both(&format!("{} to {}", c(1.0, 0), m(1.0, 1)), System::Si),
            "1 C (34 F) to 1.0 m (3 ft)"
        );
        let three = format!("{} to {} to {}", dc(1.0, 0), dc(2.0, 0), dc(3.0, 0).signed());
        assert_eq!(in_both(&three, System::Si), "1 to 2 C (2 to 4 F) to +3 C (+5 F)");
        // a converted volume tells no more than a table of storage knows; the reader's own stays as it is
        let volume = m3(49_339_274.0, 0).to_string();
        assert_eq!(in_both(&volume, System::Us), "40,000 acre-ft (49,340,000 m3)");
        assert_eq!(in_both(&volume, System::Si), "49,339,274 m3 (40,000 acre-ft)");
        assert_eq!(in_both(&m3(308.4, 0).to_string(), System::Si), "308 m3 (0.25 acre-ft)");
    }

    #[test]
    fn scenario_a_sign_stands_only_where_there_is_one() {
        let text =
            format!("{} {} {} {}", m(2.0, 1).signed(), m(-2.0, 1).signed(), dc(0.01, 1).signed(), m(2.0, 1));
        assert_eq!(in_system(&text, System::Si), "+2.0 m -2.0 m 0.0 C 2.0 m");
        assert_eq!(in_system(&text, System::Us), "+7 ft -7 ft 0.0 F 7 ft");
    }

    #[test]
    fn scenario_what_only_resembles_a_mark_stays() {
        for text in [
            "\u{2}\u{3}",
            "\u{2}L2=\u{3}",
            "\u{2}X2=1\u{3}",
            "\u{2}Lé=1\u{3}",
            "\u{2}L2*1\u{3}",
            "\u{2}L2=1",
            "L2=1\u{3}",
            "\u{3}L2=1\u{2}",
            "\u{2}L2=1 \u{3}",
        ] {
            assert_eq!(in_system(text, System::Us), text);
        }
    }
}
