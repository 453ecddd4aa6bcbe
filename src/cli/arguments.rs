//! What can be typed after `gatemix`.

use std::path::PathBuf;

use clap::{Args, Parser, Subcommand, ValueEnum};

use crate::tasks::rank::RankAsked;
use crate::tasks::season::{LearnAsked, SeasonAsked};
use crate::tasks::{Asked, Word};
use crate::units::System;

use super::colour::Colour;
use super::entry::Entry;
use super::note::{Noted, Piece};

/// Which gates, how far open: release temperature and oxygen from a layered reservoir.
#[derive(Debug, Parser)]
#[command(name = "gatemix", version, args_conflicts_with_subcommands = true, after_help = crate::report::caution())]
pub(super) struct Cli {
    /// A site folder; without one, the first demonstration site.
    pub(super) folder: Option<String>,
    #[command(subcommand)]
    pub(super) command: Option<Command>,
}

#[derive(Debug, Subcommand)]
pub(super) enum Command {
    /// Is this profile sound, how is the water layered?
    Pool {
        #[command(flatten)]
        common: Common,
    },
    /// What comes out of a gate setting?
    Mix {
        #[command(flatten)]
        common: Common,
        #[command(flatten)]
        setting: Setting,
        /// What the well of the gates opened carries, where only one well has any and nothing is set beside.
        #[arg(long, value_name = "FLOW")]
        release: Option<String>,
        /// Exit with 4 when a target is missed.
        #[arg(long)]
        strict: bool,
    },
    /// Which mixes fit, in what order, and why not the rest?
    Rank {
        #[command(flatten)]
        common: Common,
        #[command(flatten)]
        asked: Ranked,
        /// Price each mix shown by the end of the season, under a plan of the site.
        #[arg(long)]
        season: bool,
        /// Plan of that season; without it the first by file name.
        #[arg(long, value_name = "FILE|NAME", requires = "season")]
        plan: Option<String>,
        /// Case of that season; without it the middle one.
        #[arg(long, value_name = "NAME", requires = "season")]
        case: Option<String>,
        /// Exit with 4 when the best mix misses a target, or none is allowed.
        #[arg(long)]
        strict: bool,
    },
    /// What arrives downstream, and what release would each point need?
    River {
        #[command(flatten)]
        common: Common,
        #[command(flatten)]
        setting: Setting,
        /// What the well of the gates opened carries; without a setting, the total release the best is ranked at.
        #[arg(long, value_name = "FLOW")]
        release: Option<String>,
        /// Exit with 4 when a target is missed.
        #[arg(long)]
        strict: bool,
    },
    /// What does it cost later: the season ahead under a plan?
    Season {
        #[command(flatten)]
        common: Common,
        #[command(flatten)]
        asked: Ahead,
        /// Learn what nobody measures of the pool from the casts of two dates, test it on a third: their dates or files,
        /// comma between; without them the last three that a plan and a schedule tell the days of.
        #[arg(
            long,
            value_name = "FROM,TO,TEST",
            num_args = 0..=1,
            default_missing_value = "",
            conflicts_with_all = ["case", "every_case", "strategy", "every", "order", "csv", "strict"]
        )]
        learn: Option<String>,
        /// How much cold water must be left at the end of a date for no later day outside the hard targets by their
        /// temperature, in each case; without the date on the first of a month.
        #[arg(
            long,
            value_name = "DATE",
            num_args = 0..=1,
            default_missing_value = "",
            conflicts_with_all = ["learn", "csv", "strict"]
        )]
        left: Option<String>,
        /// As a table for a spreadsheet, a row a day, in the units shown.
        #[arg(long, conflicts_with = "json")]
        csv: bool,
        /// Exit with 4 when a day lies outside a hard target, or the season stops before its plan.
        #[arg(long)]
        strict: bool,
    },
    /// What was decided, what happened; and a decision or an event to be logged.
    Log {
        #[command(flatten)]
        common: Common,
        #[command(flatten)]
        asked: Entry,
        #[command(flatten)]
        setting: Setting,
        /// What the well of the gates opened carries; without a setting, the total release the first is ranked at.
        #[arg(long, value_name = "FLOW", requires = "decide")]
        release: Option<String>,
    },
    /// A change order for those who carry it out, and a note for the agencies: of the gates set, else of the last
    /// decision that holds, else of the first ranked mix.
    Note {
        #[command(flatten)]
        common: Common,
        #[command(flatten)]
        setting: Setting,
        #[command(flatten)]
        asked: Noted,
        #[command(flatten)]
        piece: Piece,
    },
    /// Are my files sound? Every problem of the site file, of every cast and of every series.
    Check {
        /// Site folder.
        site: String,
        /// As JSON.
        #[arg(long)]
        json: bool,
    },
    /// Begin a site of your own: a commented template, to be edited from top to bottom, and an example cast.
    New {
        /// Folder of the new site.
        folder: PathBuf,
        /// Units of its numbers.
        #[arg(long, value_enum, default_value_t = Units::Si)]
        units: Units,
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
pub(super) struct Common {
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
    pub(super) json: bool,
    /// Whether to colour.
    #[arg(long, value_enum, default_value_t = Colour::Auto)]
    pub(super) color: Colour,
}

#[derive(Debug, Clone, Copy, ValueEnum)]
pub(super) enum Units {
    Us,
    Si,
}

impl Units {
    pub(super) fn system(self) -> System {
        match self {
            Self::Us => System::Us,
            Self::Si => System::Si,
        }
    }
}

impl Common {
    pub(super) fn asked(&self) -> Asked {
        Asked {
            site: Some(self.site.clone()),
            profile: self.profile.clone(),
            taken: self.taken.clone(),
            pool: self.pool.clone(),
            on: self.on.clone(),
            units: self.units.map(Units::system),
        }
    }
}

// a doc comment here would stand as what its command is about
#[derive(Debug, Args)]
pub(super) struct Setting {
    /// A gate and its flow, such as N1=30 or Sluice=5cfs, with its opening where that is known (N1=30@50%), or a
    /// well and its total; repeat for each. Without any setting, the one now.
    #[arg(long = "set", value_name = "GATE=FLOW")]
    pub(super) set: Vec<String>,
    /// A gate and its opening, such as N1=50% or the name of a position; its well decides the flow.
    #[arg(long = "open", value_name = "GATE=OPENING")]
    pub(super) open: Vec<String>,
}

impl Setting {
    /// What was typed, with what the opened gates are to carry.
    pub(super) fn words<'a>(&'a self, release: Option<&'a str>) -> Vec<Word<'a>> {
        (self.set.iter().map(|text| Word::Set(text)))
            .chain(self.open.iter().map(|text| Word::Open(text)))
            .chain(release.map(Word::Release))
            .collect()
    }
}

#[derive(Debug, Args)]
pub(super) struct Ranked {
    /// Total release; without it the site's blocks of the day, what it wants, what is released now, or its least.
    #[arg(long, value_name = "FLOW")]
    release: Option<String>,
    /// A gate as it stands now, such as N1=30, N1=50% or the name of a position; repeat for each. Without any, as
    /// the site file says.
    #[arg(long, value_name = "GATE=FLOW|GATE=OPENING")]
    now: Vec<String>,
    /// Step in which the release is split; without it, 5%.
    #[arg(long, value_name = "PERCENT")]
    step: Option<String>,
    /// What counts first, comma between: oxygen, range, preferred, cold_water, moves. Those left out follow in
    /// this order.
    #[arg(long, value_name = "CRITERIA")]
    order: Option<String>,
    /// Number of mixes shown.
    #[arg(long, value_name = "NUMBER", default_value_t = 10, value_parser = clap::value_parser!(u16).range(1..))]
    top: u16,
    /// A gate that is not to be used; repeat for each.
    #[arg(long, value_name = "GATE")]
    without: Vec<String>,
}

impl Ranked {
    pub(super) fn asked(&self) -> RankAsked {
        RankAsked {
            release: self.release.clone(),
            now: self.now.clone(),
            step: self.step.clone(),
            order: self.order.clone(),
            top: usize::from(self.top),
            without: self.without.clone(),
        }
    }
}

#[derive(Debug, Args)]
pub(super) struct Ahead {
    /// Plan: a file of `plans`, its name, or a path; without it the first by file name.
    #[arg(long, value_name = "FILE|NAME")]
    plan: Option<String>,
    /// Case of weather and inflow, by its name or year; without it the middle one.
    #[arg(long, value_name = "NAME")]
    case: Option<String>,
    /// The other plans in every case beside it, not only in the one spoken of.
    #[arg(long)]
    every_case: bool,
    /// How gates are chosen: hold, best or thrift; without it as the site file says.
    #[arg(long, value_name = "NAME")]
    strategy: Option<String>,
    /// A file of dates and gate flows to follow, instead of a strategy.
    #[arg(long, value_name = "FILE")]
    schedule: Option<String>,
    /// Days between decisions; without it as the site file says.
    #[arg(long, value_name = "DAYS")]
    every: Option<String>,
    /// What counts first where the mix of a day is chosen, comma between: oxygen, range, preferred, cold_water, moves.
    /// Those left out follow in this order.
    #[arg(long, value_name = "CRITERIA")]
    order: Option<String>,
    /// A gate as it stands now, such as N1=30, N1=50% or the name of a position; repeat for each. Without any, as
    /// the site file says.
    #[arg(long, value_name = "GATE=FLOW|GATE=OPENING")]
    now: Vec<String>,
}

impl Ahead {
    pub(super) fn asked(&self) -> SeasonAsked {
        SeasonAsked {
            plan: self.plan.clone(),
            case: self.case.clone(),
            every_case: self.every_case,
            strategy: self.strategy.clone(),
            schedule: self.schedule.clone(),
            every: self.every.clone(),
            order: self.order.clone(),
            now: self.now.clone(),
        }
    }

    /// The same for days that have passed; no casts named where none were typed.
    pub(super) fn learning(&self, casts: &str) -> LearnAsked {
        LearnAsked {
            casts: Some(casts.to_owned()).filter(|casts| !casts.is_empty()),
            plan: self.plan.clone(),
            schedule: self.schedule.clone(),
            now: self.now.clone(),
        }
    }
}
