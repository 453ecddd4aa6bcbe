//! What a folder holds for the season ahead: plans, gate schedules, weather of years.

use std::path::Path;
use std::sync::Arc;

use chrono::NaiveDate;

use crate::files::plan::plan;
use crate::files::schedule::schedule;
use crate::files::text::{self, Format, Source};
use crate::files::weather::weather;
use crate::problem::Problem;
use crate::season::{Plan, Schedule};
use crate::weather::Weather;

use super::{Folder, base};

/// Where the plans of a site are.
pub(super) const PLANS: &str = "plans";
/// Where its gate schedules are.
pub(super) const SCHEDULES: &str = "schedules";

/// One plan of the folder: its file, the plan if it can be used, and everything said of it.
#[derive(Debug, Clone)]
pub struct ListedPlan {
    /// File as shown.
    pub file: String,
    /// The plan; `None` where it is refused.
    pub plan: Option<Arc<Plan>>,
    /// Problems, flags and notes.
    pub problems: Vec<Problem>,
    /// The bytes it came from.
    pub source: Option<Source>,
}

/// A gate schedule as read.
#[derive(Debug, Clone)]
pub struct ReadSchedule {
    /// The schedule; `None` where it is refused.
    pub schedule: Option<Arc<Schedule>>,
    /// Problems, flags and notes.
    pub problems: Vec<Problem>,
    /// The bytes it came from.
    pub source: Source,
}

/// Weather of several years, as the site file names it.
#[derive(Debug, Clone)]
pub struct Years {
    /// The weather; `None` where its file is not there or is refused.
    pub weather: Option<Arc<Weather>>,
    /// Problems, flags and notes.
    pub problems: Vec<Problem>,
    /// The bytes it came from.
    pub source: Option<Source>,
}

impl ListedPlan {
    fn of(folder: &Folder, file: String, source: Result<Source, Problem>) -> Self {
        match source {
            Err(problem) => Self { file, plan: None, problems: vec![problem], source: None },
            Ok(source) => {
                let (plan, problems) = plan(&source, &folder.site);
                Self { file, plan: plan.map(Arc::new), problems, source: Some(source) }
            }
        }
    }

    /// The same plan under a name that none of the others has: where its own is taken its file stands for it, flagged.
    fn apart(mut self, others: &[Self]) -> Self {
        let of = |name: &str| {
            others.iter().find(|other| other.plan.as_ref().is_some_and(|plan| plan.name == name))
        };
        let Some(plan) = self.plan.as_mut().map(Arc::make_mut) else { return self };
        let Some(other) = of(&plan.name) else { return self };
        let base = base(&self.file);
        let stem = base.rsplit_once('.').map_or(base, |(stem, _)| stem);
        let free = [stem, base].into_iter().find(|name| of(name).is_none());
        let name = free.unwrap_or(&self.file).to_owned();
        let words = format!(
            "the name `{}` is already that of {}, so this plan is called `{name}`",
            plan.name, other.file
        );
        let cure = "give each plan a `# name` of its own";
        let mut flag = Problem::flag("name-twice", words, cure).in_file(&self.file);
        flag.place.line = self.source.as_ref().and_then(|source| Some(name_of(&source.text)?.0));
        plan.name = name;
        plan.notes.push(flag.clone());
        self.problems.push(flag);
        self
    }

    /// Whether it goes by a name: its file with or without its ending, or the name it gives itself.
    fn is_named(&self, name: &str) -> bool {
        let base = base(&self.file);
        let stem = base.rsplit_once('.').map_or(base, |(stem, _)| stem);
        [self.file.as_str(), base, stem].contains(&name) || self.name() == Some(name)
    }

    /// The name it gives itself, also where it is refused.
    fn name(&self) -> Option<&str> {
        let told = || name_of(&self.source.as_ref()?.text).map(|(_, name)| name);
        self.plan.as_ref().map_or_else(told, |plan| Some(&plan.name))
    }

    /// Its name with its file, and whether it is refused, for a list.
    fn listed(&self) -> String {
        let base = base(&self.file);
        let refused = if self.plan.is_none() { ", refused" } else { "" };
        match self.name() {
            Some(name) => format!("{name} ({base}{refused})"),
            None if refused.is_empty() => base.to_owned(),
            None => format!("{base} (refused)"),
        }
    }
}

impl Folder {
    /// Every plan of the folder, ordered by file name; they are read once, as the casts are.
    pub fn plans(&self) -> &[ListedPlan] {
        self.plans.get_or_init(|| {
            let mut plans: Vec<ListedPlan> = Vec::new();
            for (file, source) in self.csv_sources(PLANS, |_| true) {
                let listed = ListedPlan::of(self, file, source).apart(&plans);
                plans.push(listed);
            }
            plans
        })
    }

    /// A plan: one of the folder by its file, with or without its ending, or by its own name; else a file at a path.
    ///
    /// # Errors
    /// There is none; the cure names those there are.
    pub fn plan(&self, named: &str) -> Result<ListedPlan, Problem> {
        if let Some(listed) = self.plans().iter().find(|listed| listed.is_named(named)) {
            return Ok(listed.clone());
        }
        if Path::new(named).is_file() {
            let source = text::read(Path::new(named), Format::Csv);
            return Ok(ListedPlan::of(self, named.to_owned(), source).apart(self.plans()));
        }
        let known: Vec<String> = self.plans().iter().map(ListedPlan::listed).collect();
        Err(unknown("plan", named, PLANS, &known))
    }

    /// A gate schedule: one of the folder `schedules` by its file, with or without its ending, else a file at a path.
    ///
    /// # Errors
    /// There is none, or it is no text.
    pub fn schedule(&self, named: &str) -> Result<ReadSchedule, Problem> {
        let is_named = |file: &str| base(file) == named || base(file) == format!("{named}.csv");
        let source = match self.csv_sources(SCHEDULES, is_named).pop() {
            Some((_, source)) => source?,
            None if Path::new(named).is_file() => text::read(Path::new(named), Format::Csv)?,
            None => {
                return Err(unknown("gate schedule", named, SCHEDULES, &self.schedules()));
            }
        };
        Ok(self.read_schedule(source))
    }

    /// Files of the gate schedules of the folder, without their folder, in order.
    pub fn schedules(&self) -> Vec<String> {
        self.csv_sources(SCHEDULES, |_| true).iter().map(|(file, _)| base(file).to_owned()).collect()
    }

    /// The gate schedule of the folder whose file is called as that of a plan; `None` where there is none.
    pub fn schedule_of(&self, plan: &ListedPlan) -> Option<Result<ReadSchedule, Problem>> {
        let (_, source) = self.csv_sources(SCHEDULES, |file| base(file) == base(&plan.file)).pop()?;
        Some(source.map(|source| self.read_schedule(source)))
    }

    fn read_schedule(&self, source: Source) -> ReadSchedule {
        let (schedule, problems) = schedule(&source, &self.site);
        ReadSchedule { schedule: schedule.map(Arc::new), problems, source }
    }

    /// What is to be said of every plan of the folder, also where its flows bring the pool above full from the newest
    /// cast that is not later than its days.
    pub fn plans_said(&self) -> Vec<Problem> {
        let casts: Vec<(NaiveDate, f64)> = self
            .casts()
            .iter()
            .filter_map(|listed| {
                let profile = self.profile_of(listed).0?;
                Some((profile.taken?.with_timezone(&self.site.offset).date_naive(), profile.pool_m))
            })
            .collect();
        let said = |listed: &ListedPlan| {
            let above_full = listed.plan.as_ref().and_then(|plan| {
                let (_, last) = plan.span()?;
                let (date, pool_m) = casts.iter().rev().find(|(date, _)| *date < last)?;
                plan.above_full(&self.site, *date, *pool_m)
            });
            listed.problems.iter().cloned().chain(above_full).collect::<Vec<_>>()
        };
        self.plans().iter().flat_map(said).collect()
    }

    /// What is to be said of every gate schedule of the folder, also where its changes lie on the days of none of its
    /// plans.
    pub fn schedules_said(&self) -> Vec<Problem> {
        let spans: Vec<(NaiveDate, NaiveDate)> =
            self.plans().iter().filter_map(|listed| listed.plan.as_ref()?.span()).collect();
        let planned = |date: NaiveDate| spans.iter().any(|(from, to)| (*from..=*to).contains(&date));
        let said = |(file, source): (String, Result<Source, Problem>)| match source {
            Err(problem) => vec![problem],
            Ok(source) => {
                let ReadSchedule { schedule, mut problems, .. } = self.read_schedule(source);
                let apart = |s: &Arc<Schedule>| !s.changes.iter().any(|(date, _)| planned(*date));
                if !spans.is_empty() && schedule.as_ref().is_some_and(apart) {
                    let words = "no change of the schedule lies on the days of a plan";
                    let cure = "correct its dates, or add the plan of its days";
                    problems.push(Problem::flag("schedule-days", words, cure).in_file(&file));
                }
                problems
            }
        };
        self.csv_sources(SCHEDULES, |_| true).into_iter().flat_map(said).collect()
    }

    /// The weather of several years that the site file names; `None` where it names none. It is read once.
    pub fn years(&self) -> Option<&Years> {
        let name = self.site.season.years.as_deref()?;
        Some(self.years.get_or_init(|| {
            let missing = || {
                let words = format!("there is no file `{name}` in the folder of the site");
                let cure =
                    "correct the name, or take it out; a file lies in the folder of site.yaml or below it";
                self.located(Problem::refused("file-missing", words, cure).at("season.years"))
            };
            match self.beside(name).unwrap_or_else(|| Err(missing())) {
                Err(problem) => Years { weather: None, problems: vec![problem], source: None },
                Ok(source) => {
                    let (read, problems) = weather(&source, &self.site);
                    Years { weather: read.map(Arc::new), problems, source: Some(source) }
                }
            }
        }))
    }
}

/// The line of a plan that tells its name, and the name.
fn name_of(text: &str) -> Option<(usize, &str)> {
    text.lines().enumerate().find_map(|(before, line)| {
        let (key, value) = line.trim_start().strip_prefix('#')?.split_once(':')?;
        let value = value.trim();
        let is_name = key.trim().eq_ignore_ascii_case("name") && !value.is_empty();
        is_name.then_some((before + 1, value))
    })
}

fn unknown(what: &str, named: &str, folder: &str, known: &[String]) -> Problem {
    let short: String = named.chars().take(60).collect();
    let cure = if known.is_empty() {
        format!("put one into the folder `{folder}` of the site, or give the path of a file")
    } else {
        format!("there are {}; or give the path of a file", known.join(", "))
    };
    Problem::refused("unknown-name", format!("no {what} is named `{short}`"), cure)
}
