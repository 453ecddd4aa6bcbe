//! One function per task. The command line and the screens call the same ones, so both show the same number.
//!
//! A task takes what the user asked as text where its meaning depends on the site (its units, its gates), and
//! the clock from its caller.

use std::path::{Path, PathBuf};
use std::sync::Arc;

use chrono::{DateTime, FixedOffset, SubsecRound, Utc};

use crate::files::cast::{TIME_CURE, parse_time};
use crate::files::folder::{self, Folder, demonstrations};
use crate::files::log::ReadLog;
use crate::files::template;
use crate::files::text::Source;
use crate::mix::Day;
use crate::problem::Problem;
use crate::profile::Profile;
use crate::river::Conditions;
use crate::site::Site;
use crate::units::{Dimension, System};

mod apart;
mod casts;
mod change;
mod changed;
mod day;
pub mod learned;
pub mod log;
mod mix;
pub mod note;
mod pool;
pub mod rank;
pub mod report;
pub mod river;
pub mod season;
mod setting;
mod since;
mod solve;
mod words;

pub use crate::mix::OutletState;
pub use crate::mix::limits::Move;
pub use casts::{Cast, casts};
pub use change::Change;
pub use changed::Changed;
pub use day::{BlockAnswer, DayAnswer};
pub use mix::{MixAnswer, mix, mix_given};
pub use pool::{ColdWater, PoolAnswer, cold_water, pool};
pub use setting::{Understood, given, now_setting, setting};
pub use since::{ColdChange, Since};
pub use solve::{Solved, preferred_c, solve};
pub use words::{ByFlow, Given, Word};

/// Why a task gave no answer.
#[derive(Debug, Clone, PartialEq)]
pub enum Failure {
    /// The command line cannot be understood.
    Usage(String),
    /// The caller stopped it.
    Stopped,
    /// It can, but the files, or the files with these numbers, give no answer; with the units to say it in.
    Refused(Vec<Problem>, System),
}

impl Failure {
    /// Why, in one sentence; quantities as [`say`](crate::units::say) marks them.
    pub fn words(&self) -> String {
        match self {
            Self::Usage(words) => words.clone(),
            Self::Stopped => "stopped".to_owned(),
            Self::Refused(problems, _) => problems.first().map_or_else(String::new, |p| p.words.clone()),
        }
    }
}

/// The answer of `check`: everything said of a site folder, and the units to say it in.
pub fn check(named: &str) -> (Vec<Problem>, System) {
    folder::check(named)
}

/// Writes a site to start from into a folder, in a system of units, and tells the files written.
///
/// # Errors
/// A file of one of their names is there, or the machine cannot write; nothing of the user's is touched.
pub fn new(folder: &Path, system: System) -> Result<Vec<PathBuf>, Problem> {
    template::write(folder, system)
}

/// What every task is asked with.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Asked {
    /// Site folder, or the name of a demonstration site; the first demonstration site when absent.
    pub site: Option<String>,
    /// Cast: a file, or `-`.
    pub profile: Option<String>,
    /// When that cast was taken.
    pub taken: Option<String>,
    /// Pool elevation, with a unit or in the folder's.
    pub pool: Option<String>,
    /// Decision date, or `now`.
    pub on: Option<String>,
    /// Units shown; the folder's when absent.
    pub units: Option<System>,
}

/// Where the decision date came from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum OnFrom {
    /// The user named it.
    Asked,
    /// The clock.
    Clock,
    /// The newest cast of a demonstration site.
    NewestCast,
}

impl OnFrom {
    /// As every output says it.
    pub fn words(self) -> &'static str {
        match self {
            Self::Asked => "as asked",
            Self::Clock => "the clock",
            Self::NewestCast => "the newest cast's time: demonstration",
        }
    }
}

/// A site with the cast and the date a task works on.
#[derive(Debug, Clone)]
pub struct Context {
    /// The opened folder.
    pub folder: Folder,
    /// The cast held against the site.
    pub profile: Profile,
    /// Decision date.
    pub on: DateTime<FixedOffset>,
    /// Where it came from.
    pub on_from: OnFrom,
    /// Age of the cast, days; negative when taken after the decision date.
    pub age_days: Option<f64>,
    /// Fingerprint of the inputs.
    pub fingerprint: String,
    /// Units shown.
    pub system: System,
    /// What the folder tells of the river.
    pub conditions: Arc<Conditions>,
    /// What an answer has to say of the files that tell it.
    pub said: Vec<Problem>,
    /// What was decided at the site.
    pub log: Arc<ReadLog>,
    /// What is taken as set now instead of what the log and the site file say.
    set_before: Option<Arc<Given>>,
    /// The cast's bytes.
    source: Source,
}

impl Context {
    /// The checked site.
    pub fn site(&self) -> &Site {
        &self.folder.site
    }

    /// The decision date with what is known around the river.
    pub fn day(&self) -> Day {
        Day::new(self.site(), self.on.date_naive(), self.conditions.clone())
    }

    /// Fingerprint of the cast alone.
    pub fn cast_fingerprint(&self) -> String {
        folder::fingerprint(std::iter::once(self.source.bytes.as_slice()))
    }

    /// How many rules of this season do not hold today, and why; `None` where all do.
    pub fn rules_off(&self) -> Option<Problem> {
        let (year, event) = self.site().targets_off(self.on.date_naive());
        let one = |count: usize, why: &str| (count > 0).then(|| format!("{count} {why}"));
        let counted = [one(year, "by the type of water year"), one(event, "ended by an event")];
        let counted: Vec<String> = counted.into_iter().flatten().collect();
        let words = format!("rules of this season that do not hold today: {}", counted.join(", "));
        (!counted.is_empty()).then(|| Problem::note("rules-off", words))
    }

    /// A site with a cast of it and a decision date.
    fn of(
        folder: Folder,
        read: folder::Read,
        (on, on_from): (DateTime<FixedOffset>, OnFrom),
        system: System,
    ) -> Self {
        let folder::Read { mut profile, source } = read;
        let age_days = profile.age_days(on);
        age_flags(&folder.site, &mut profile, age_days);
        let around = folder.around();
        let said = around.said.clone();
        // every answer tells which files it passes over, as it does of casts
        profile.flags.extend(said.iter().filter(|p| is_passed_over(p)).cloned());
        let sources: Vec<&Source> = [&source].into_iter().chain(&around.sources).collect();
        let log = Arc::new(folder.log());
        profile.flags.extend(log.problems.iter().cloned());
        let fingerprint = fingerprint(&folder, &sources, &log);
        let conditions = folder.conditions();
        profile.flags.extend(apart::tailwater(&folder.site, &conditions, &profile));
        Self {
            folder,
            profile,
            on,
            on_from,
            age_days,
            fingerprint,
            system,
            conditions,
            said,
            log,
            set_before: None,
            source,
        }
    }
}

/// Fingerprint of inputs with the log, since what was decided is what is set now.
fn fingerprint(folder: &Folder, sources: &[&Source], log: &ReadLog) -> String {
    let logged = Some(log.bytes.as_slice()).filter(|bytes| !bytes.is_empty());
    folder.fingerprint_of(sources.iter().map(|source| source.bytes.as_slice()).chain(logged))
}

/// Whether a problem says that a file beside the casts is passed over.
fn is_passed_over(problem: &Problem) -> bool {
    matches!(problem.kind, "file-missing" | "file-unreadable")
}

/// Opens what a task works on. `clock` is the time of day of the machine.
///
/// # Errors
/// Every problem of the files, or a word of the command line that cannot be understood.
pub fn open(asked: &Asked, clock: DateTime<Utc>) -> Result<Context, Failure> {
    let folder = open_folder(asked)?;
    let site = &folder.site;
    let system = asked.units.unwrap_or_else(|| site.units.system());
    let pool_m = match &asked.pool {
        None => None,
        Some(text) => Some(
            site.units
                .parse(text, Dimension::Length)
                .map_err(|error| Failure::Usage(format!("--pool {text}: {error}")))?,
        ),
    };
    if asked.taken.is_some() && asked.profile.is_none() {
        return Err(Failure::Usage(
            "--taken tells when a cast was taken: name the cast with --profile".into(),
        ));
    }
    if let Some(taken) = &asked.taken {
        parse_time(taken, site.offset)
            .map_err(|words| Failure::Usage(format!("--taken: {words}; {TIME_CURE}")))?;
    }
    let read = match &asked.profile {
        Some(named) => folder.cast(named, asked.taken.as_deref(), pool_m),
        None => folder.newest(pool_m),
    }
    .map_err(|problems| Failure::Refused(problems, system))?;
    let on = decision_date(asked, &folder, clock)?;
    Ok(Context::of(folder, read, on, system))
}

fn open_folder(asked: &Asked) -> Result<Folder, Failure> {
    let first = || demonstrations().first().copied().unwrap_or_default();
    let opened = asked.site.as_deref().map_or_else(|| Folder::demonstration(first()), Folder::open);
    opened.map_err(|refused| Failure::Refused(refused.problems, asked.units.unwrap_or(refused.system)))
}

fn decision_date(
    asked: &Asked,
    folder: &Folder,
    clock: DateTime<Utc>,
) -> Result<(DateTime<FixedOffset>, OnFrom), Failure> {
    let site = &folder.site;
    // whole seconds: finer ones say nothing and would differ at every call
    let now = clock.with_timezone(&site.offset).trunc_subsecs(0);
    match asked.on.as_deref() {
        Some("now") => Ok((now, OnFrom::Clock)),
        Some(text) => parse_time(text, site.offset)
            .map(|time| (time, OnFrom::Asked))
            .map_err(|words| Failure::Usage(format!("--on: {words}; {TIME_CURE}, or `now`"))),
        None => match folder.newest_time().filter(|_| site.demonstration) {
            Some(taken) => Ok((taken, OnFrom::NewestCast)),
            None => Ok((now, OnFrom::Clock)),
        },
    }
}

/// Flags a cast that is old, or that lies after the decision date.
fn age_flags(site: &Site, profile: &mut Profile, age_days: Option<f64>) {
    let Some(age) = age_days else { return };
    let flag = if age < 0.0 {
        Problem::flag(
            "later",
            format!("the cast was taken {:.1} days after the decision date", -age),
            "check --on and `# taken`",
        )
    } else if age > site.checks.stale_days {
        Problem::flag(
            "stale",
            format!("the cast is {age:.0} days old (stale after {:.0})", site.checks.stale_days),
            "cast again: layers move within a week",
        )
    } else {
        return;
    };
    profile.flags.push(flag.in_file(&profile.file));
}

/// How fresh a cast is, as a badge.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Freshness {
    /// Young enough.
    Fresh,
    /// Worth another cast soon.
    Ageing,
    /// Too old to trust.
    Stale,
    /// Its time is not known.
    Unknown,
    /// Taken after the decision date.
    Later,
}

impl Freshness {
    /// The badge of a cast of some age at a site.
    pub fn of(site: &Site, age_days: Option<f64>) -> Self {
        match age_days {
            None => Self::Unknown,
            Some(age) if age < 0.0 => Self::Later,
            Some(age) if age > site.checks.stale_days => Self::Stale,
            Some(age) if age > site.checks.ageing_days => Self::Ageing,
            Some(_) => Self::Fresh,
        }
    }

    /// The word of the badge.
    pub fn word(self) -> &'static str {
        match self {
            Self::Fresh => "fresh",
            Self::Ageing => "ageing",
            Self::Stale => "stale",
            Self::Unknown => "age unknown",
            Self::Later => "later than the date",
        }
    }
}
