//! What the words of the settings file mean, and which words are kept there.

use crate::files::settings::Settings;
use crate::problem::Problem;
use crate::units::System;

use super::look::{Look, Symbols, Theme};
use super::model::Likes;

/// Units with their names in the settings.
const UNITS: [(&str, System); 2] = [("us", System::Us), ("si", System::Si)];

/// The settings as they were found, with what they meant: what is not changed is kept as it stands there, left out or
/// not understood.
#[derive(Debug, Clone)]
pub(super) struct Kept {
    words: Settings,
    /// What they meant.
    pub(super) likes: Likes,
}

impl Kept {
    /// Understands settings, with `guessed` symbols where none are chosen, and flags the words it does not know;
    /// `file` is where they stand.
    pub(super) fn of(words: Settings, guessed: Symbols, file: &str) -> (Self, Vec<Problem>) {
        let mut unknown = Vec::new();
        let units = known(&UNITS, ("units", words.units.as_deref()), file, &mut unknown);
        let symbols = known(&Symbols::NAMES, ("symbols", words.symbols.as_deref()), file, &mut unknown);
        let theme = known(&Theme::NAMES, ("theme", words.theme.as_deref()), file, &mut unknown);
        let look = Look { symbols: symbols.unwrap_or(guessed), theme: theme.unwrap_or_default() };
        let likes = Likes { units, look, no_mouse: words.mouse == Some(false) };
        (Self { words, likes }, unknown)
    }

    /// The settings to keep for what is liked now.
    pub(super) fn words(&self, now: Likes) -> Settings {
        let (then, words) = (self.likes, &self.words);
        let (look, before) = (now.look, then.look);
        Settings {
            units: if now.units == then.units {
                words.units.clone()
            } else {
                now.units.and_then(|units| name(&UNITS, units))
            },
            symbols: if look.symbols == before.symbols {
                words.symbols.clone()
            } else {
                name(&Symbols::NAMES, look.symbols)
            },
            theme: if look.theme == before.theme {
                words.theme.clone()
            } else {
                name(&Theme::NAMES, look.theme)
            },
            mouse: if now.no_mouse == then.no_mouse { words.mouse } else { Some(!now.no_mouse) },
        }
    }
}

fn name<T: PartialEq + Copy>(names: &[(&str, T)], value: T) -> Option<String> {
    names.iter().find(|n| n.1 == value).map(|n| n.0.to_owned())
}

fn known<T: Copy>(
    names: &[(&str, T)],
    (key, word): (&str, Option<&str>),
    file: &str,
    unknown: &mut Vec<Problem>,
) -> Option<T> {
    let word = word?;
    let meant = names.iter().find(|n| n.0 == word).map(|n| n.1);
    if meant.is_none() {
        let choices: Vec<&str> = names.iter().map(|n| n.0).collect();
        let words = format!("`{word}` is no choice here, and is left alone");
        let cure = format!("write one of {}", choices.join(", "));
        unknown.push(Problem::flag("unknown-word", words, cure).in_file(file).at(key));
    }
    meant
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(words: &Settings, guessed: Symbols) -> Kept {
        let (kept, unknown) = Kept::of(words.clone(), guessed, "f");
        assert_eq!(unknown, []);
        kept
    }

    #[test]
    fn scenario_symbols_that_were_guessed_are_not_kept_as_chosen() {
        for guessed in Symbols::NAMES.map(|n| n.1) {
            let kept = of(&Settings::default(), guessed);
            let units = Likes { units: Some(System::Si), ..kept.likes };
            let wanted = Settings { units: Some("si".into()), ..Settings::default() };
            assert_eq!(kept.words(units), wanted);
            for (word, symbols) in Symbols::NAMES {
                let look = Look { symbols, ..kept.likes.look };
                let words = kept.words(Likes { look, ..kept.likes });
                assert_eq!(words.symbols.as_deref(), (symbols != guessed).then_some(word));
            }
        }
    }

    #[test]
    fn law_what_is_kept_means_what_was_liked() {
        let start = Settings { theme: Some("mono".into()), mouse: Some(false), ..Settings::default() };
        let kept = of(&start, Symbols::Ascii);
        for units in [None, Some(System::Us), Some(System::Si)] {
            for (_, symbols) in Symbols::NAMES {
                for (_, theme) in Theme::NAMES {
                    for no_mouse in [false, true] {
                        let likes = Likes { units, look: Look { symbols, theme }, no_mouse };
                        assert_eq!(of(&kept.words(likes), Symbols::Ascii).likes, likes);
                    }
                }
            }
        }
    }

    #[test]
    fn scenario_words_it_does_not_know_are_flagged_and_left_alone() {
        let words = Settings {
            units: Some("imperial".into()),
            theme: Some("dark".into()),
            symbols: Some("dots".into()),
            mouse: None,
        };
        let (kept, unknown) = Kept::of(words.clone(), Symbols::Block, "f.yaml");
        let said: Vec<String> = unknown.iter().map(|p| p.text(System::Si)).collect();
        assert_eq!(
            said,
            [
                "f.yaml: flag: units: `imperial` is no choice here, and is left alone; write one of us, si",
                "f.yaml: flag: symbols: `dots` is no choice here, and is left alone; write one of braille, block, ascii",
                "f.yaml: flag: theme: `dark` is no choice here, and is left alone; write one of auto, ansi, 256, mono",
            ]
        );
        assert_eq!(kept.likes.look.symbols, Symbols::Block);
        let mouse = Likes { no_mouse: true, ..kept.likes };
        assert_eq!(kept.words(mouse), Settings { mouse: Some(false), ..words });
    }
}
