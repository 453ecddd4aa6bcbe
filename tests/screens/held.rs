//! Texts held in the docs: written anew when told to, else compared.

use std::fs;
use std::path::PathBuf;

/// A file of the docs.
pub(crate) fn doc(name: &str) -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("docs").join(name)
}

/// Whether the docs are to be written.
pub(crate) fn writing() -> bool {
    std::env::var_os("GATEMIX_WRITE_SCREENS").is_some()
}

/// Writes a text, or what differs from the one that is there.
pub(crate) fn hold(name: &str, text: &str) -> Option<String> {
    let path = doc(name);
    if writing() {
        fs::write(path, text).unwrap();
        return None;
    }
    let Ok(there) = fs::read_to_string(path) else { return Some(format!("docs/{name} is missing")) };
    if there == text {
        return None;
    }
    let lines = there.lines().zip(text.lines()).enumerate();
    let differing = lines.filter(|(_, (a, b))| a != b).map(|(i, (a, b))| format!("{}\n- {a}\n+ {b}", i + 1));
    let told: Vec<String> = differing.take(6).collect();
    Some(format!(
        "docs/{name} differs ({} lines held, {} drawn), from line {}",
        there.lines().count(),
        text.lines().count(),
        told.join("\n")
    ))
}

/// Stops where something differs.
pub(crate) fn stop_at(differing: &[String]) {
    assert!(
        differing.is_empty(),
        "{}\nlook, then rewrite with GATEMIX_WRITE_SCREENS=1 cargo test --test screens",
        differing.join("\n\n")
    );
}
