//! What the user chose for the screens: a small YAML file in the user's configuration folder. It holds words only;
//! the screens know what they mean.

use std::path::{Path, PathBuf};

use etcetera::BaseStrategy;
use serde::Serialize;

use crate::problem::{Problem, Weight};

use super::atomic;
use super::cursor::{Map, Walk};
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
    let read = match text::read(path, Format::Yaml) {
        Err(problem) if problem.kind == "missing-file" => return Default::default(),
        Err(problem) => Err(vec![problem]),
        Ok(source) => match Document::parse(&source.text) {
            Err(problem) => Err(vec![problem.in_file(&source.name)]),
            Ok(document) => Ok(settings(&document, &source.name)),
        },
    };
    let (settings, problems) = read.unwrap_or_else(|problems| (Settings::default(), problems));
    // the screens open all the same
    (settings, problems.into_iter().map(|p| Problem { weight: Weight::Flag, ..p }).collect())
}

fn settings(document: &Document, file: &str) -> (Settings, Vec<Problem>) {
    let walk = Walk::new(document);
    let word = |map: &Map, key| map.optional(key).and_then(|v| v.text().map(str::to_owned));
    let settings = walk.root().map().map_or_else(Settings::default, |map| {
        let settings = Settings {
            units: word(&map, "units"),
            symbols: word(&map, "symbols"),
            theme: word(&map, "theme"),
            mouse: map.optional("mouse").and_then(|v| v.boolean()),
        };
        map.finish();
        settings
    });
    (settings, walk.problems(file))
}

/// Saves the settings of this user whole or not at all, in place of what was there; the folder is made.
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
    path.parent().map_or(Ok(()), atomic::folder)?;
    atomic::write(path, format!("# what gatemix remembers; its screens write this file\n{text}").as_bytes())
}
