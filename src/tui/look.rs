//! How things look: the characters of pictures, and a style for every meaning.
//!
//! A colour never stands alone: whatever it tells is also told by a sign or a word.

use ratatui::style::{Color, Modifier, Style};

use crate::plot::Grain;

/// Characters that pictures are drawn with.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Symbols {
    /// Braille dots, two by four in a cell.
    #[default]
    Braille,
    /// Half blocks, one by two in a cell: for terminals whose letters lack the dots.
    Block,
    /// Plain characters.
    Ascii,
}

impl Symbols {
    /// Each with its name in the settings.
    pub const NAMES: [(&'static str, Self); 3] =
        [("braille", Self::Braille), ("block", Self::Block), ("ascii", Self::Ascii)];

    /// The dots that curves are drawn with.
    pub fn grain(self) -> Grain {
        match self {
            Self::Braille => Grain::Braille,
            Self::Block => Grain::Block,
            Self::Ascii => Grain::Ascii,
        }
    }
}

/// Where colours come from.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Theme {
    /// What the terminal says of itself: no colours under `NO_COLOR`, the palette where it has 256, else the 16.
    #[default]
    Auto,
    /// The 16 colours of the terminal, which follow the user's own.
    Ansi,
    /// Eight colours that colour-blind eyes tell apart, out of the 256.
    Palette,
    /// None.
    Mono,
}

impl Theme {
    /// Each with its name in the settings.
    pub const NAMES: [(&'static str, Self); 4] =
        [("auto", Self::Auto), ("ansi", Self::Ansi), ("256", Self::Palette), ("mono", Self::Mono)];
}

/// What a piece of the screen means.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Role {
    /// Ordinary text.
    Plain,
    /// Axes, units, what is said beside.
    Quiet,
    /// Headings.
    Strong,
    /// The row or tab chosen.
    Chosen,
    /// A key that can be pressed.
    Key,
    /// The temperature curve and what belongs to it.
    Temperature,
    /// The oxygen curve and what belongs to it.
    Oxygen,
    /// The withdrawal zone of a level.
    Zone,
    /// Water colder than the threshold, and its line.
    Cold,
    /// The range of a target.
    Range,
    /// The setting now.
    Now,
    /// The setting tried.
    Tried,
    /// Inside a target, within a limit.
    Inside,
    /// Outside a target, beyond a limit.
    Outside,
    /// A band of the water in a picture of the season, the coldest 0.
    Band(usize),
    /// A mark over such a band.
    Mark,
    /// What is within reach, behind curves.
    Reach,
    /// Worth a second look.
    Warn,
    /// A field being typed.
    Field,
    /// Shown from before, while the new is made.
    Old,
    /// The caution.
    Caution,
}

/// Symbols and colours together.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct Look {
    /// Characters of pictures.
    pub symbols: Symbols,
    /// Colours; what [`Theme::Auto`] comes to is settled by whoever knows the terminal.
    pub theme: Theme,
}

// Colours after Okabe and Ito, "Color universal design", 2008, nearest of the 256 (recalled).
const SKY: Color = Color::Indexed(74);
const ORANGE: Color = Color::Indexed(214);
const GREEN: Color = Color::Indexed(36);
const VERMILLION: Color = Color::Indexed(166);
const BLUE: Color = Color::Indexed(32);
const PURPLE: Color = Color::Indexed(175);
const YELLOW: Color = Color::Indexed(227);
const WHITE: Color = Color::Indexed(231);
const DARK: Color = Color::Indexed(237);
const LESS_DARK: Color = Color::Indexed(242);

/// Colours of the bands, from cold to warm; what they tell is also told by the characters.
const BANDS: [(Color, Color); 6] = [
    (BLUE, Color::Blue),
    (SKY, Color::Cyan),
    (GREEN, Color::Green),
    (YELLOW, Color::Yellow),
    (ORANGE, Color::Magenta),
    (VERMILLION, Color::Red),
];

/// The same, darker: behind their characters, so that a mark leaves a band to be seen (choice).
const BEHIND: [Color; 6] = [
    BLUE,
    Color::Indexed(31),
    Color::Indexed(29),
    Color::Indexed(100),
    Color::Indexed(136),
    Color::Indexed(130),
];

impl Look {
    /// The same with [`Theme::Auto`] settled by what the terminal says of itself. Where that is that it has no colours,
    /// nothing the user likes gives it any.
    #[must_use]
    pub fn settled(self, terminal: Theme) -> Self {
        let theme = if self.theme == Theme::Auto || terminal == Theme::Mono { terminal } else { self.theme };
        Self { theme, ..self }
    }

    /// The style of a meaning.
    pub fn style(self, role: Role) -> Style {
        let plain = Style::new();
        let shape = match role {
            Role::Strong | Role::Tried | Role::Outside | Role::Key | Role::Mark => {
                plain.add_modifier(Modifier::BOLD)
            }
            Role::Chosen | Role::Field => plain.add_modifier(Modifier::REVERSED),
            Role::Old => plain.add_modifier(Modifier::DIM),
            Role::Quiet if self.theme != Theme::Mono => plain.add_modifier(Modifier::DIM),
            _ => plain,
        };
        // reversed text keeps the terminal's own colours: two attributes in one cell are lost on some terminals
        let shape = match self.colour(role) {
            Some(colour) if !matches!(role, Role::Chosen | Role::Field) => shape.fg(colour),
            _ => shape,
        };
        self.behind(role).map_or(shape, |colour| shape.bg(colour))
    }

    /// The colour behind a meaning. The 16 of the terminal are too few to lay one on the other, the range apart.
    fn behind(self, role: Role) -> Option<Color> {
        match (self.theme, role) {
            (Theme::Palette | Theme::Auto, Role::Band(band)) => Some(BEHIND[band.min(BEHIND.len() - 1)]),
            (Theme::Palette | Theme::Auto, Role::Reach) => Some(DARK),
            (Theme::Ansi, Role::Reach) => Some(Color::DarkGray),
            _ => None,
        }
    }

    fn colour(self, role: Role) -> Option<Color> {
        let (palette, ansi) = match role {
            Role::Band(band) => BANDS[band.min(BANDS.len() - 1)],
            Role::Temperature | Role::Warn | Role::Caution => (ORANGE, Color::Yellow),
            Role::Oxygen | Role::Cold | Role::Key => (SKY, Color::Cyan),
            Role::Zone => (BLUE, Color::Blue),
            Role::Range | Role::Inside => (GREEN, Color::Cyan),
            Role::Now => (PURPLE, Color::Magenta),
            Role::Tried => (YELLOW, Color::Yellow),
            Role::Outside => (VERMILLION, Color::Red),
            // over a band of the palette; the bands of the 16 have nothing behind them
            Role::Mark if self.theme != Theme::Ansi => (WHITE, Color::Reset),
            Role::Reach => (LESS_DARK, Color::Gray),
            Role::Plain
            | Role::Quiet
            | Role::Strong
            | Role::Chosen
            | Role::Field
            | Role::Old
            | Role::Mark => return None,
        };
        match self.theme {
            Theme::Mono => None,
            Theme::Ansi => Some(ansi),
            Theme::Palette | Theme::Auto => Some(palette),
        }
    }
}
