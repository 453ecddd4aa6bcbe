//! Arguments and words: the command line over the tasks.

use std::ffi::OsString;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::ExitCode;

use chrono::{DateTime, Utc};
use clap::{Args, CommandFactory, Parser, Subcommand, ValueEnum};

use crate::files::atomic;
use crate::files::folder::{demonstration_files, demonstrations};
use crate::mix::TargetStanding;
use crate::problem::{Problem, any_refused, harmless};
use crate::report::{json, text};
use crate::tasks::{self, Asked, Failure, Word};
use crate::units::System;

/// Which gates, how far open: release temperature and oxygen from a layered reservoir.
#[derive(Debug, Parser)]
#[command(name = "gatemix", version, args_conflicts_with_subcommands = true, after_help = crate::report::caution())]
struct Cli {
    /// A site folder; without one, the first demonstration site.
    folder: Option<String>,
    #[command(subcommand)]
    command: Option<Command>,
}

#[derive(Debug, Subcommand)]
enum Command {
    /// Is this profile sound, how is the water layered?
    Pool {
        #[command(flatten)]
        common: Common,
    },
    /// What comes out of a gate setting?
    Mix {
        #[command(flatten)]
        common: Common,
        /// A gate and its flow, such as N1=30 or Sluice=5cfs, or a well and its total; repeat for each. Without
        /// any setting, the one now.
        #[arg(long = "set", value_name = "GATE=FLOW")]
        set: Vec<String>,
        /// A gate and its opening, such as N1=50% or the name of a position; its well decides the flow.
        #[arg(long = "open", value_name = "GATE=OPENING")]
        open: Vec<String>,
        /// What the well of the gates opened carries, where only one well has any and nothing is set beside.
        #[arg(long, value_name = "FLOW")]
        release: Option<String>,
        /// Exit with 4 when a target is missed.
        #[arg(long)]
        strict: bool,
    },
    /// Are my files sound? Every problem of the site file and of every cast.
    Check {
        /// Site folder.
        site: String,
        /// As JSON.
        #[arg(long)]
        json: bool,
    },
    /// Write the demonstration sites out as files.
    Demo {
        /// Folder to write them into.
        #[arg(default_value = "gatemix-sites")]
        folder: PathBuf,
    },
    /// Shell completions.
    #[command(hide = true)]
    Completions {
        /// Shell to complete for.
        shell: clap_complete::Shell,
    },
    /// The manual page.
    #[command(hide = true)]
    Man,
}

#[derive(Debug, Args)]
struct Common {
    /// Site folder, its site.yaml, or the name of a demonstration site.
    site: String,
    /// The cast: a file, or - for standard input; without it, the newest.
    #[arg(long, value_name = "FILE")]
    profile: Option<String>,
    /// When that cast was taken, where its file does not say.
    #[arg(long, value_name = "TIME")]
    taken: Option<String>,
    /// Pool elevation, with a unit or in the site's.
    #[arg(long, value_name = "ELEVATION", allow_hyphen_values = true)]
    pool: Option<String>,
    /// The date and time to decide for, or `now`.
    #[arg(long, value_name = "DATE")]
    on: Option<String>,
    /// Units shown; without it, the site's.
    #[arg(long, value_enum)]
    units: Option<Units>,
    /// As JSON, in SI.
    #[arg(long)]
    json: bool,
    /// Whether to colour.
    #[arg(long, value_enum, default_value_t = Colour::Auto)]
    color: Colour,
}

#[derive(Debug, Clone, Copy, ValueEnum)]
enum Units {
    Us,
    Si,
}

#[derive(Debug, Clone, Copy, ValueEnum)]
enum Colour {
    Auto,
    Never,
}

/// Words that tell of a miss; they stand in capitals, so weight only helps the eye.
const MISSES: [&str; 5] = ["ABOVE", "BELOW", "UNKNOWN", "DRY", "SHORT"];

impl Colour {
    /// The text with the release and every miss in bold. The stream strips it where there is no terminal.
    fn of(self, text: &str) -> String {
        if matches!(self, Self::Never) {
            return text.to_owned();
        }
        let bold = |words: &str| format!("\u{1b}[1m{words}\u{1b}[0m");
        let mut out = String::with_capacity(text.len() + 64);
        for line in text.split_inclusive('\n') {
            let (line, end) = line.strip_suffix('\n').map_or((line, ""), |l| (l, "\n"));
            if line.starts_with("Release  ") {
                out.push_str(&bold(line));
            } else {
                out.push_str(&MISSES.iter().fold(line.to_owned(), |l, miss| l.replace(miss, &bold(miss))));
            }
            out.push_str(end);
        }
        out
    }
}

impl Common {
    fn asked(&self) -> Asked {
        Asked {
            site: Some(self.site.clone()),
            profile: self.profile.clone(),
            taken: self.taken.clone(),
            pool: self.pool.clone(),
            on: self.on.clone(),
            units: self.units.map(|u| match u {
                Units::Us => System::Us,
                Units::Si => System::Si,
            }),
        }
    }
}

/// How a run ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum End {
    Answered,
    Failed,
    Usage,
    Refused,
    Missed,
}

impl From<End> for ExitCode {
    fn from(end: End) -> Self {
        Self::from(match end {
            End::Answered => 0_u8,
            End::Failed => 1,
            End::Usage => 2,
            End::Refused => 3,
            End::Missed => 4,
        })
    }
}

/// Runs the command line against the machine's clock.
pub fn run(arguments: impl Iterator<Item = OsString>) -> ExitCode {
    run_at(arguments, Utc::now(), &mut anstream::stdout().lock(), &mut anstream::stderr().lock())
}

/// Runs the command line at a given moment, with streams to write to.
pub fn run_at(
    arguments: impl Iterator<Item = OsString>,
    clock: DateTime<Utc>,
    out: &mut dyn Write,
    err: &mut dyn Write,
) -> ExitCode {
    let cli = match Cli::try_parse_from(arguments) {
        Ok(cli) => cli,
        Err(error) => {
            let end = if error.use_stderr() { End::Usage } else { End::Answered };
            let words = error.render().to_string();
            return match end {
                End::Usage => said(&words, end, err),
                _ => finished(words.as_bytes(), end, out, err),
            };
        }
    };
    match answer(&cli, clock) {
        Ok((bytes, end)) => finished(&bytes, end, out, err),
        Err(failure) => {
            let (words, end) = failed(&failure);
            said(&words, end, err)
        }
    }
}

/// Writes the answer. A closed pipe is no error; anything else that stops the writing is.
fn finished(bytes: &[u8], end: End, out: &mut dyn Write, err: &mut dyn Write) -> ExitCode {
    match out.write_all(bytes).and_then(|()| out.flush()) {
        Err(error) if error.kind() != std::io::ErrorKind::BrokenPipe => {
            said(&format!("gatemix: the answer cannot be written: {error}\n"), End::Failed, err)
        }
        _ => end.into(),
    }
}

/// Writes why there is none. Where even that cannot be written, the exit code is all that is left.
fn said(words: &str, end: End, err: &mut dyn Write) -> ExitCode {
    _ = err.write_all(words.as_bytes());
    end.into()
}

/// Why there is no answer: of the command line, of the files, or of the machine.
enum Stop {
    Task(Failure),
    Machine(Problem),
}

impl From<Failure> for Stop {
    fn from(failure: Failure) -> Self {
        Self::Task(failure)
    }
}

fn failed(stop: &Stop) -> (String, End) {
    match stop {
        Stop::Task(Failure::Usage(words)) => (format!("gatemix: {}\n", harmless(words)), End::Usage),
        Stop::Task(Failure::Refused(problems, system)) => {
            let lines: Vec<String> = problems.iter().map(|p| p.text(*system)).collect();
            (lines.join("\n") + "\n", End::Refused)
        }
        Stop::Task(Failure::Stopped) => ("gatemix: stopped\n".to_owned(), End::Failed),
        Stop::Machine(problem) => (format!("{problem}\n"), End::Failed),
    }
}

fn answer(cli: &Cli, clock: DateTime<Utc>) -> Result<(Vec<u8>, End), Stop> {
    match &cli.command {
        None => {
            mistyped(cli.folder.as_deref())?;
            let asked = Asked { site: cli.folder.clone(), ..Asked::default() };
            let context = tasks::open(&asked, clock)?;
            let pool = tasks::pool(&context);
            let shown = match tasks::mix(&context, &[]) {
                Ok(mix) => text::both(&context, &pool, &mix),
                // no setting now in flows: the pool alone is the answer
                Err(Failure::Usage(_)) => text::pool(&context, &pool),
                Err(failure) => return Err(failure.into()),
            };
            let shown = Colour::Auto.of(&shown);
            Ok((shown.into_bytes(), End::Answered))
        }
        Some(Command::Pool { common }) => {
            let context = tasks::open(&common.asked(), clock)?;
            let answer = tasks::pool(&context);
            let shown = if common.json {
                json::pool(&context, &answer)
            } else {
                common.color.of(&text::pool(&context, &answer))
            };
            Ok((shown.into_bytes(), End::Answered))
        }
        Some(Command::Mix { common, set, open, release, strict }) => {
            let context = tasks::open(&common.asked(), clock)?;
            let words: Vec<Word> = (set.iter().map(|text| Word::Set(text)))
                .chain(open.iter().map(|text| Word::Open(text)))
                .chain(release.iter().map(|text| Word::Release(text)))
                .collect();
            let answer = tasks::mix(&context, &words)?;
            let shown = if common.json { json::mix(&context, &answer) } else { text::mix(&context, &answer) };
            let missed = *strict && answer.mix.targets.iter().any(TargetStanding::missed);
            Ok((shown.into_bytes(), if missed { End::Missed } else { End::Answered }))
        }
        Some(Command::Check { site, json }) => {
            let (problems, system) = tasks::check(site);
            let shown = if *json { json::check(&problems) } else { text::check(site, &problems, system) };
            let end = if any_refused(&problems) { End::Refused } else { End::Answered };
            Ok((shown.into_bytes(), end))
        }
        Some(Command::Demo { folder }) => Ok((demo(folder)?.into_bytes(), End::Answered)),
        Some(Command::Completions { shell }) => {
            let mut bytes = Vec::new();
            clap_complete::generate(*shell, &mut Cli::command(), "gatemix", &mut bytes);
            Ok((bytes, End::Answered))
        }
        Some(Command::Man) => {
            let mut bytes = Vec::new();
            let rendered = clap_mangen::Man::new(Cli::command()).render(&mut bytes);
            match rendered {
                Ok(()) => Ok((bytes, End::Answered)),
                Err(error) => Err(Stop::Machine(Problem::refused("manual", error.to_string(), ""))),
            }
        }
    }
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
            std::fs::create_dir_all(parent).map_err(|error| {
                Stop::Machine(
                    Problem::refused("cannot-write", error.to_string(), "name a folder you may write to")
                        .in_file(parent.display().to_string()),
                )
            })?;
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
