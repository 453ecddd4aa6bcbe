//! From what was typed to the bytes of an answer.

use std::path::Path;

use chrono::{DateTime, Utc};
use clap::CommandFactory;

use crate::files::atomic;
use crate::files::folder::{demonstration_files, demonstrations};
use crate::mix::TargetStanding;
use crate::problem::{Problem, any_refused, harmless};
use crate::report::{self, json, text};
use crate::tasks::rank::RankAsked;
use crate::tasks::season::SeasonAsked;
use crate::tasks::{self, Asked, Failure};
use crate::tui;
use crate::units::System;

use super::arguments::{Cli, Command};
use super::endings::{End, Stop};
use super::progress::Progress;

/// Share of the progress of a ranking before the seasons of its mixes.
const RANKING: f64 = 0.2;

/// The answer to a command line, at a moment.
///
/// # Errors
/// Why there is none.
pub(super) fn answer(cli: &Cli, clock: DateTime<Utc>, progress: Progress) -> Result<(Vec<u8>, End), Stop> {
    let strictly = |strict: bool, missed: bool| if strict && missed { End::Missed } else { End::Answered };
    let (shown, end) = match &cli.command {
        None => {
            mistyped(cli.folder.as_deref())?;
            let asked = Asked { site: cli.folder.clone(), ..Asked::default() };
            return match tui::run(asked) {
                Ok(()) => Ok((Vec::new(), End::Answered)),
                Err(problem) if problem.kind == "no-terminal" => {
                    Err(Failure::Usage(problem.advice(System::default())).into())
                }
                Err(problem) => Err(Stop::Machine(problem)),
            };
        }
        Some(Command::Pool { common }) => {
            let context = tasks::open(&common.asked(), clock)?;
            let answer = tasks::pool(&context);
            let shown = if common.json {
                json::pool(&context, &answer)
            } else {
                common.color.of(&text::pool(&context, &answer))
            };
            (shown, End::Answered)
        }
        Some(Command::Mix { common, setting, release, strict }) => {
            let context = tasks::open(&common.asked(), clock)?;
            let answer = tasks::mix(&context, &setting.words(release.as_deref()))?;
            let shown = if common.json {
                json::mix(&context, &answer)
            } else {
                common.color.of(&text::mix(&context, &answer))
            };
            (shown, strictly(*strict, answer.mix.targets.iter().any(TargetStanding::missed)))
        }
        Some(Command::Rank { common, asked, season, plan, case, strict }) => {
            let context = tasks::open(&common.asked(), clock)?;
            // the seasons of the mixes take the larger part
            let part = if *season { RANKING } else { 1.0 };
            let answer = tasks::rank::rank(&context, &asked.asked(), &|done| progress.tell(part * done))?;
            let ahead = SeasonAsked { plan: plan.clone(), case: case.clone(), ..SeasonAsked::default() };
            let priced = || {
                tasks::season::prices(&context, &answer, &ahead, &|done| {
                    progress.tell(RANKING + (1.0 - RANKING) * done)
                })
            };
            let prices = season.then(priced).transpose()?;
            drop(progress);
            let shown = match (&prices, common.json) {
                (None, true) => json::rank(&context, &answer),
                (Some(prices), true) => json::rank_priced(&context, &answer, prices),
                (None, false) => common.color.of(&text::rank(&context, &answer)),
                (Some(prices), false) => common.color.of(&text::rank_priced(&context, &answer, prices)),
            };
            let best = answer.mixes.first();
            let missed = best.is_none_or(|best| best.targets.iter().any(TargetStanding::missed));
            (shown, strictly(*strict, missed))
        }
        Some(Command::River { common, setting, release, strict }) => {
            let context = tasks::open(&common.asked(), clock)?;
            let alone = setting.set.is_empty() && setting.open.is_empty();
            let words = if alone { Vec::new() } else { setting.words(release.as_deref()) };
            let ranked = RankAsked { release: release.clone().filter(|_| alone), ..RankAsked::default() };
            let answer = tasks::river::river(&context, &words, &ranked, &|done| progress.tell(done))?;
            drop(progress);
            let shown = if common.json {
                json::river(&context, &answer)
            } else {
                common.color.of(&text::river(&context, &answer))
            };
            let missed = answer.spoken().is_none_or(|way| way.targets.iter().any(TargetStanding::missed));
            (shown, strictly(*strict, missed))
        }
        Some(Command::Season { common, asked, learn: Some(casts), .. }) => {
            let context = tasks::open(&common.asked(), clock)?;
            let answer = tasks::season::learn(&context, &asked.learning(casts), &|done| progress.tell(done))?;
            drop(progress);
            let shown = if common.json {
                json::learned(&context, &answer)
            } else {
                common.color.of(&text::learned(&context, &answer))
            };
            (shown, End::Answered)
        }
        Some(Command::Season { common, asked, left: Some(date), .. }) => {
            let context = tasks::open(&common.asked(), clock)?;
            let date = Some(date.as_str()).filter(|date| !date.is_empty());
            let answer = tasks::season::needed(&context, &asked.asked(), date, &|done| progress.tell(done))?;
            drop(progress);
            let shown = if common.json {
                json::needed(&context, &answer)
            } else {
                common.color.of(&text::needed(&context, &answer))
            };
            (shown, End::Answered)
        }
        Some(Command::Season { common, asked, csv, strict, .. }) => {
            let context = tasks::open(&common.asked(), clock)?;
            let answer = tasks::season::season(&context, &asked.asked(), &|done| progress.tell(done))?;
            drop(progress);
            let shown = if common.json {
                json::season(&context, &answer)
            } else if *csv {
                report::csv::season(&context, &answer)
            } else {
                common.color.of(&text::season(&context, &answer))
            };
            (shown, strictly(*strict, answer.main.missed()))
        }
        Some(Command::Log { common, asked, setting, release }) => {
            let context = tasks::open(&common.asked(), clock)?;
            let logged = if asked.decides() {
                let asked = asked.decision(setting, release.as_deref());
                Some(tasks::log::decide(&context, &asked, clock, &|done| progress.tell(done))?)
            } else if let Some(text) = &asked.event {
                Some(tasks::log::event(&context, &asked.event(text), clock)?)
            } else if let Some(word) = asked.idle(setting) {
                let words = format!("{word} goes with --decide, --amend NUMBER or --event TEXT");
                return Err(Failure::Usage(words).into());
            } else {
                None
            };
            let shown = match (&logged, common.json) {
                (None, is_json) => {
                    let past = tasks::log::past(&context, &|done| progress.tell(done))?;
                    drop(progress);
                    if is_json {
                        json::log(&context, &past)
                    } else {
                        common.color.of(&text::log::log(&context, &past))
                    }
                }
                (Some(logged), true) => json::logged(logged),
                (Some(logged), false) => common.color.of(&text::log::logged(&context, logged)),
            };
            (shown, End::Answered)
        }
        Some(Command::Note { common, setting, asked, piece }) => {
            let context = tasks::open(&common.asked(), clock)?;
            let answer = tasks::note::note(&context, &asked.asked(setting), &|done| progress.tell(done))?;
            drop(progress);
            let shown = if common.json {
                json::note(&context, &answer)
            } else {
                piece.written(&report::note::page(&context, &answer))?
            };
            (shown, End::Answered)
        }
        Some(Command::Check { site, json }) => {
            let (problems, system) = tasks::check(site);
            let shown = if *json { json::check(&problems) } else { text::check(site, &problems, system) };
            (shown, if any_refused(&problems) { End::Refused } else { End::Answered })
        }
        Some(Command::New { folder, units }) => (new(folder, units.system())?, End::Answered),
        Some(Command::Demo { folder }) => (demo(folder)?, End::Answered),
        Some(Command::Completions { shell }) => {
            let mut bytes = Vec::new();
            clap_complete::generate(*shell, &mut Cli::command(), "gatemix", &mut bytes);
            return Ok((bytes, End::Answered));
        }
        Some(Command::Man) => {
            let mut bytes = Vec::new();
            return match clap_mangen::Man::new(Cli::command()).render(&mut bytes) {
                Ok(()) => Ok((bytes, End::Answered)),
                Err(error) => Err(Stop::Machine(Problem::refused("manual", error.to_string(), ""))),
            };
        }
    };
    Ok((shown.into_bytes(), end))
}

/// A lone word that is neither a path nor a demonstration site was meant as a command.
fn mistyped(word: Option<&str>) -> Result<(), Failure> {
    let Some(word) = word else { return Ok(()) };
    let names = demonstrations();
    if word.contains(std::path::MAIN_SEPARATOR) || Path::new(word).exists() || names.contains(&word) {
        return Ok(());
    }
    let commands: Vec<String> = Cli::command()
        .get_subcommands()
        .filter(|c| !c.is_hide_set())
        .map(|c| c.get_name().to_owned())
        .collect();
    Err(Failure::Usage(format!(
        "`{word}` is no folder, no demonstration site ({}) and no command ({})",
        names.join(", "),
        commands.join(", ")
    )))
}

/// Begins a site in a folder.
fn new(folder: &Path, system: System) -> Result<String, Stop> {
    let written = tasks::new(folder, system).map_err(Stop::Machine)?;
    let list: Vec<String> = written.iter().map(|path| harmless(&path.display().to_string())).collect();
    Ok(format!(
        "wrote {}; put your own numbers into site.yaml from top to bottom, then: gatemix check {}\n",
        list.join(" and "),
        harmless(&folder.display().to_string())
    ))
}

/// Writes the demonstration sites below a folder. A file that is there with other contents is left alone and stops
/// the writing before it begins, so nothing of the user's is lost.
fn demo(folder: &Path) -> Result<String, Stop> {
    let files = demonstration_files();
    let differs = |path: &Path, bytes: &[u8]| std::fs::read(path).is_ok_and(|there| there != bytes);
    for (path, bytes) in &files {
        let target = folder.join(path);
        if differs(&target, bytes) {
            return Err(Stop::Machine(
                Problem::refused(
                    "exists",
                    "a file with other contents is there; nothing was written",
                    "name another folder",
                )
                .in_file(target.display().to_string()),
            ));
        }
    }
    for (path, bytes) in &files {
        let target = folder.join(path);
        if let Some(parent) = target.parent() {
            atomic::folder(parent).map_err(Stop::Machine)?;
        }
        atomic::write(&target, bytes).map_err(Stop::Machine)?;
    }
    let first = demonstrations().first().copied().unwrap_or_default();
    Ok(format!(
        "wrote {} files below {}; try: gatemix pool {}\n",
        files.len(),
        harmless(&folder.display().to_string()),
        harmless(&folder.join(first).display().to_string())
    ))
}
