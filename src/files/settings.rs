//! What the user chose for the screens: a small YAML file in the user's configuration folder. It holds words only;
//! the screens know what they mean.

use std::path::{Path, PathBuf};

use etcetera::BaseStrategy;
use serde::Serialize;

use crate::problem::{Problem, Weight};

use super::atomic;
use super::cursor::Walk;
use super::text::{self, Format};
use super::yaml::Document;

/// The choices; `None` where none was made.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize)]
pub struct Settings {
    /// Units shown.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub units: Option<String>,
    /// What curves are drawn with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub symbols: Option<String>,
    /// Colours.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub theme: Option<String>,
    /// Whether the mouse is listened to.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub mouse: Option<bool>,
}

/// Where the settings of this user are: `gatemix/settings.yaml` below `$XDG_CONFIG_HOME`, else below `~/.config`; on
/// Windows below the roaming application data. `None` for a user without a home.
pub fn path() -> Option<PathBuf> {
    Some(etcetera::choose_base_strategy().ok()?.config_dir().join("gatemix").join("settings.yaml"))
}

/// The user's settings, with a flag for each that could not be read. No file is no problem.
pub fn load() -> (Settings, Vec<Problem>) {
    path().map_or_else(Default::default, |path| load_from(&path))
}

/// As [`load`], from a file.
pub fn load_from(path: &Path) -> (Settings, Vec<Problem>) {
    let (settings, problems) = read(path).unwrap_or_else(|problems| (Settings::default(), problems));
    // the screens open all the same
    (settings, problems.into_iter().map(|p| Problem { weight: Weight::Flag, ..p }).collect())
}

/// The choices of a file and what is wrong with some of them; or why it cannot be read at all.
fn read(path: &Path) -> Result<(Settings, Vec<Problem>), Vec<Problem>> {
    let source = match text::read(path, Format::Yaml) {
        Err(problem) if problem.kind == "missing-file" => return Ok(Default::default()),
        read => read.map_err(|problem| vec![problem])?,
    };
    let document = Document::parse(&source.text).map_err(|problem| vec![problem.in_file(&source.name)])?;
    let walk = Walk::new(&document);
    let settings = walk.root().map().map(|map| {
        let word = |key| map.optional(key).and_then(|v| v.text().map(str::to_owned));
        let settings = Settings {
            units: word("units"),
            symbols: word("symbols"),
            theme: word("theme"),
            mouse: map.optional("mouse").and_then(|v| v.boolean()),
        };
        map.finish();
        settings
    });
    let problems = walk.problems(&source.name);
    match settings {
        Some(settings) => Ok((settings, problems)),
        None => Err(problems),
    }
}

/// Saves the settings of this user whole or not at all, in place of what was there; the folder is made. A file that
/// cannot be read is left as it is: it may hold more than a slip of the pen.
///
/// # Errors
/// `no-home` for a user without one, `cannot-write` naming what cannot be written.
pub fn save(settings: &Settings) -> Result<(), Problem> {
    let no_home = || Problem::refused("no-home", "there is no home folder to keep settings in", "set HOME");
    save_to(&path().ok_or_else(no_home)?, settings)
}

/// As [`save`], to a file.
///
/// # Errors
/// As [`save`].
pub fn save_to(path: &Path, settings: &Settings) -> Result<(), Problem> {
    // such a struct always has a YAML form
    let text = serde_yaml::to_string(settings).map_err(|error| {
        Problem::refused("cannot-write", error.to_string(), "").in_file(path.display().to_string())
    })?;
    if let Some(why) = read(path).err().and_then(|p| p.into_iter().next()).filter(|p| p.kind != "empty") {
        let words = format!("a file that cannot be read cannot be written over: {}", why.words);
        let problem = Problem::refused("cannot-write", words, "mend or delete it");
        return Err(Problem { place: why.place, ..problem });
    }
    path.parent().map_or(Ok(()), atomic::folder)?;
    atomic::write(path, format!("# what gatemix remembers; its screens write this file\n{text}").as_bytes())
}
