//! What is said of a cast.

use crate::problem::{Problem, Weight};
use crate::profile::Profile;
use crate::report::flags_of;
use crate::tui::look::Role;
use crate::units::{Dimension, System, show};

use super::{Line, filled};

/// Elevation of a line of the file, m, where a sample stands on it.
fn elevation_m(profile: &Profile, line: usize) -> Option<f64> {
    let at = profile.lines.iter().position(|l| *l == line)?;
    profile.samples.get(at).map(|s| s.elevation_m)
}

/// Elevation (m) and word of each flag of a row; the list tells the rest.
pub(super) fn at_elevations(profile: &Profile) -> Vec<(f64, String)> {
    let flags = profile.flags.iter().filter(|p| p.weight == Weight::Flag);
    flags.filter_map(|p| Some((elevation_m(profile, p.place.line?)?, p.kind.to_owned()))).collect()
}

/// Every flag and note, flags first; refusals where there are any come before them.
pub(super) fn lines(
    problems: &[Problem],
    profile: Option<&Profile>,
    system: System,
    width: usize,
) -> Vec<Line> {
    let refused = problems.iter().filter(|p| p.weight == Weight::Refused);
    let line = |p: &Problem| {
        let (mark, role) = match p.weight {
            Weight::Refused => ("x", Role::Outside),
            Weight::Flag => ("!", Role::Warn),
            Weight::Note => ("-", Role::Plain),
        };
        let elevation = p.place.line.zip(profile).and_then(|(line, profile)| elevation_m(profile, line));
        let place = match (p.place.line, elevation) {
            (Some(line), Some(z)) => {
                format!(" (line {line}, {})", show(z, Dimension::Length, system, 1))
            }
            (Some(line), None) => format!(" (line {line})"),
            (None, _) => String::new(),
        };
        let words = format!("{mark} {}{place}: {}", p.kind, p.advice(system));
        filled(&words, width, 2).into_iter().map(move |line| (line, role)).collect::<Vec<_>>()
    };
    refused.chain(flags_of(problems)).flat_map(line).collect()
}

/// How many flags and notes there are, in words; the problems alone where there are any.
pub(super) fn counted(problems: &[Problem]) -> (String, Role) {
    let of = |weight: Weight, one: &str| {
        let count = problems.iter().filter(|p| p.weight == weight).count();
        let plural = if count == 1 { "" } else { "s" };
        (count > 0).then(|| format!("{count} {one}{plural}"))
    };
    let mut kinds: Vec<&str> = Vec::new();
    for p in problems.iter().filter(|p| p.weight == Weight::Flag) {
        if !kinds.contains(&p.kind) {
            kinds.push(p.kind);
        }
    }
    let flags = of(Weight::Flag, "flag").map(|flags| format!("{flags} ({})", kinds.join(", ")));
    if let Some(refused) = of(Weight::Refused, "problem") {
        return (format!("x {refused} to be mended"), Role::Outside);
    }
    let role = if flags.is_some() { Role::Warn } else { Role::Plain };
    match (flags, of(Weight::Note, "note")) {
        (None, None) => ("no flags".into(), role),
        (None, Some(notes)) => (format!("no flags, {notes}"), role),
        (Some(flags), None) => (format!("! {flags}"), role),
        (Some(flags), Some(notes)) => (format!("! {flags}, {notes}"), role),
    }
}
