//! One function per task. The command line and the screens call the same ones, so both show the same number.
//!
//! A task takes what the user asked as text where its meaning depends on the site (its units, its gates), and
//! the clock from its caller.

use chrono::{DateTime, FixedOffset, Utc};

use crate::files::cast::{TIME_CURE, parse_time};
use crate::files::folder::{Folder, Listed, demonstrations};
use crate::intake;
use crate::mix::{Gate, Mix, Perturbed, Setting, judge, refusals};
use crate::problem::Problem;
use crate::profile::{Layering, Profile, colder_m3};
use crate::site::{SetNow, Site};
use crate::units::{Dimension, System};
use crate::water::{CP_REF_J_KG_K, RHO_REF_KG_M3};
use crate::withdrawal::{Opening, Sink, zone};

/// Why a task gave no answer.
#[derive(Debug, Clone, PartialEq)]
pub enum Failure {
    /// The command line cannot be understood.
    Usage(String),
    /// It can, but the files, or the files with these numbers, give no answer.
    Refused(Vec<Problem>),
}

impl From<Vec<Problem>> for Failure {
    fn from(problems: Vec<Problem>) -> Self {
        Self::Refused(problems)
    }
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
            Self::NewestCast => "the cast's time: demonstration",
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
}

impl Context {
    /// The checked site.
    pub fn site(&self) -> &Site {
        &self.folder.site
    }
}

/// Opens what a task works on. `clock` is the time of day of the machine.
///
/// # Errors
/// Every problem of the files, or a word of the command line that cannot be understood.
pub fn open(asked: &Asked, clock: DateTime<Utc>) -> Result<Context, Failure> {
    let folder = open_folder(asked)?;
    let site = &folder.site;
    let pool_m = match &asked.pool {
        None => None,
        Some(text) => Some(
            site.units
                .parse(text, Dimension::Length)
                .map_err(|error| Failure::Usage(format!("--pool {text}: {error}")))?,
        ),
    };
    if let Some(taken) = &asked.taken {
        parse_time(taken, site.offset)
            .map_err(|words| Failure::Usage(format!("--taken: {words}; {TIME_CURE}")))?;
    }
    let read = match &asked.profile {
        Some(named) => folder.cast(named, asked.taken.as_deref(), pool_m)?,
        None => folder.newest(pool_m)?,
    };
    let mut profile = read.profile;
    let (on, on_from) = decision_date(asked, site, &profile, clock)?;
    let age_days = profile.age_days(on);
    age_flags(site, &mut profile, age_days);
    let fingerprint = folder.fingerprint(&[&read.source]);
    let system = asked.units.unwrap_or_else(|| site.units.system());
    Ok(Context { folder, profile, on, on_from, age_days, fingerprint, system })
}

fn open_folder(asked: &Asked) -> Result<Folder, Failure> {
    if let Some(named) = &asked.site {
        Ok(Folder::open(named)?)
    } else {
        let first = demonstrations().first().copied().unwrap_or_default();
        Ok(Folder::demonstration(first)?)
    }
}

fn decision_date(
    asked: &Asked,
    site: &Site,
    profile: &Profile,
    clock: DateTime<Utc>,
) -> Result<(DateTime<FixedOffset>, OnFrom), Failure> {
    let now = clock.with_timezone(&site.offset);
    match asked.on.as_deref() {
        Some("now") => Ok((now, OnFrom::Clock)),
        Some(text) => parse_time(text, site.offset)
            .map(|time| (time, OnFrom::Asked))
            .map_err(|words| Failure::Usage(format!("--on: {words}; {TIME_CURE}, or `now`"))),
        None => match profile.taken.filter(|_| site.demonstration) {
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
}

impl Freshness {
    /// The badge of a cast of some age at a site.
    pub fn of(site: &Site, age_days: Option<f64>) -> Self {
        match age_days {
            None => Self::Unknown,
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
        }
    }
}

/// Volume colder than a threshold.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ColdWater {
    /// Threshold, C.
    pub threshold_c: f64,
    /// In the whole pool, m3.
    pub total_m3: f64,
    /// What the usable outlets can draw, m3; `None` when no outlet is usable.
    pub usable_m3: Option<f64>,
}

/// An outlet under the pool.
#[derive(Debug, Clone, PartialEq)]
pub struct OutletState {
    /// Index of the outlet.
    pub outlet: usize,
    /// Water above the top of the fully open outlet, m.
    pub submergence_m: f64,
    /// Whether it has water.
    pub wet: bool,
    /// Whether it keeps the submergence asked for; `None` where none is.
    pub kept: Option<bool>,
}

/// The answer of `pool`.
#[derive(Debug, Clone)]
pub struct PoolAnswer {
    /// How the water is layered.
    pub layering: Layering,
    /// Cold water below each threshold of the site.
    pub cold: Vec<ColdWater>,
    /// Lowest elevation the usable outlets draw from, m.
    pub reach_m: Option<f64>,
    /// Outlets from the highest down.
    pub outlets: Vec<OutletState>,
    /// Flags against the cast before this one.
    pub against_previous: Vec<Problem>,
}

/// Is this profile sound, how is the water layered.
pub fn pool(context: &Context) -> PoolAnswer {
    let site = context.site();
    let profile = &context.profile;
    let layering = Layering::of(profile, &site.pool);
    let mut outlets: Vec<OutletState> = site
        .outlets
        .iter()
        .enumerate()
        .map(|(outlet, o)| {
            let submergence_m = intake::submergence_m(o, 1.0, profile.pool_m);
            OutletState {
                outlet,
                submergence_m,
                wet: intake::is_wet(o, 1.0, profile.pool_m),
                kept: o.min_submergence_m.map(|least| submergence_m >= least),
            }
        })
        .collect();
    let place = |s: &OutletState| (site.outlets[s.outlet].centre_m, &site.outlets[s.outlet].name);
    outlets.sort_by(|a, b| {
        let (a, b) = (place(a), place(b));
        b.0.total_cmp(&a.0).then_with(|| a.1.cmp(b.1))
    });
    let reach_m = reach_m(site, profile, &outlets);
    let cold = site
        .cold_water_c
        .iter()
        .map(|&threshold_c| {
            let colder =
                |from: f64| colder_m3(&profile.column, &site.pool, threshold_c, from, profile.pool_m);
            ColdWater { threshold_c, total_m3: colder(site.pool.bed_m), usable_m3: reach_m.map(colder) }
        })
        .collect();
    let against_previous = previous(context, &layering);
    PoolAnswer { layering, cold, reach_m, outlets, against_previous }
}

/// Lowest limit of the deepest usable outlet at the least release of the site, m; its centre-line where the site
/// asks for none.
fn reach_m(site: &Site, profile: &Profile, outlets: &[OutletState]) -> Option<f64> {
    let deepest = outlets.iter().rev().find(|s| s.wet && s.kept != Some(false))?;
    let outlet = &site.outlets[deepest.outlet];
    let most = intake::capacity_m3s(site, outlet, 1.0, profile.pool_m).unwrap_or(f64::INFINITY);
    let flow_m3s = site.release.min_m3s.unwrap_or(0.0).min(most);
    let sink = Sink {
        centre_m: outlet.open_part(1.0).centre_m,
        flow_m3s,
        opening: Opening::Port { angle_rad: outlet.angle_rad },
    };
    Some(zone(&profile.column, &sink, 1.0).map_or(sink.centre_m, |z| z.lower.limit_m))
}

/// Heat gained or lost since the cast before, against what weather brings.
fn previous(context: &Context, layering: &Layering) -> Vec<Problem> {
    let site = context.site();
    let Some(taken) = context.profile.taken else { return Vec::new() };
    let casts = context.folder.casts();
    let before = |l: &&Listed| l.raw.as_ref().and_then(|r| r.taken).is_some_and(|t| t < taken);
    let Some(last) = casts.iter().rev().find(before) else { return Vec::new() };
    let (Some(earlier), _) = context.folder.profile_of(last) else { return Vec::new() };
    let Some(days) = earlier.age_days(taken).filter(|d| *d > 0.5) else { return Vec::new() };
    let old = Layering::of(&earlier, &site.pool);
    // the common volume gains this much per area: volumes themselves come and go with the river
    let depth_m = layering.volume_m3 / site.pool.area_m2(context.profile.pool_m);
    let flux = RHO_REF_KG_M3 * CP_REF_J_KG_K * depth_m * (layering.mean_c - old.mean_c) / (days * 86_400.0);
    if flux.abs() <= site.checks.heat_w_m2 {
        return Vec::new();
    }
    vec![
        Problem::flag(
            "heat-change",
            format!(
                "the water changed by {flux:+.0} W/m2 over {days:.0} days since {}: more than weather brings ({:.0})",
                earlier.file, site.checks.heat_w_m2
            ),
            "one of the two casts may be wrong, or the river exchanged the pool",
        )
        .in_file(&context.profile.file),
    ]
}

/// The answer of `mix`.
#[derive(Debug, Clone)]
pub struct MixAnswer {
    /// What was set.
    pub setting: Setting,
    /// The setting judged.
    pub mix: Mix,
    /// The setting now, judged the same way, where it is known and another.
    pub now: Option<(Setting, Mix)>,
}

/// What comes out. `sets` are gates and flows as typed (`N1=30`, `Sluice=5cfs`, a bare crest name); none means the
/// setting now.
///
/// # Errors
/// Words that cannot be understood; a gate above the water; a flow above capacity.
pub fn mix(context: &Context, sets: &[String]) -> Result<MixAnswer, Failure> {
    let site = context.site();
    let now = now_setting(site);
    let mut setting = if sets.is_empty() {
        now.clone().ok_or_else(|| {
            Failure::Usage("no setting: give --set GATE=FLOW, or flows under `now` in site.yaml".into())
        })?
    } else {
        parse_setting(site, sets, context.profile.pool_m)?
    };
    spill(site, context.profile.pool_m, &mut setting);
    let refused = refusals(site, &setting, context.profile.pool_m);
    if !refused.is_empty() {
        return Err(Failure::Refused(refused));
    }
    let perturbed = Perturbed::new(site, &context.profile, context.age_days.unwrap_or(0.0));
    let date = context.on.date_naive();
    let judged = judge(site, &context.profile, &perturbed, &setting, date);
    let Some(mut mix) = judged else {
        return Err(Failure::Refused(vec![Problem::refused(
            "no-flow",
            "nothing flows in this setting",
            "give a flow above zero",
        )]));
    };
    mix.warnings.extend(opening_note(site, &setting));
    let now = now.and_then(|mut now| {
        spill(site, context.profile.pool_m, &mut now);
        let possible = refusals(site, &now, context.profile.pool_m).is_empty();
        if !possible || same(&now, &setting) {
            return None;
        }
        let judged = judge(site, &context.profile, &perturbed, &now, date)?;
        Some((now, judged))
    });
    Ok(MixAnswer { setting, mix, now })
}

/// Gates set by flow alone are taken fully open, and the output says so.
fn opening_note(site: &Site, setting: &Setting) -> Option<Problem> {
    let mut names: Vec<&str> = setting
        .gates
        .iter()
        .filter_map(|g| site.outlets.get(g.outlet))
        .filter(|o| !o.is_crest())
        .map(|o| o.name.as_str())
        .collect();
    names.sort_unstable();
    (!names.is_empty()).then(|| {
        Problem::note("opening-assumed", format!("set by flow, taken fully open: {}", names.join(", ")))
    })
}

fn same(a: &Setting, b: &Setting) -> bool {
    let flows = |s: &Setting| {
        let mut flows: Vec<(usize, u64)> = s.gates.iter().map(|g| (g.outlet, g.flow_m3s.to_bits())).collect();
        flows.sort_unstable();
        flows
    };
    flows(a) == flows(b)
}

/// The setting now, where the site gives it in flows.
pub fn now_setting(site: &Site) -> Option<Setting> {
    let gates: Vec<Gate> = site
        .now
        .iter()
        .map(|(outlet, set)| match set {
            SetNow::Flow(flow_m3s) => Some(Gate { outlet: *outlet, opening: 1.0, flow_m3s: *flow_m3s }),
            SetNow::Opening(_) => None,
        })
        .collect::<Option<_>>()?;
    let gates: Vec<Gate> = gates.into_iter().filter(|g| g.flow_m3s > 0.0).collect();
    (!gates.is_empty()).then_some(Setting { gates })
}

/// A crest without gates spills whenever the pool stands above it, set or not.
fn spill(site: &Site, pool_m: f64, setting: &mut Setting) {
    for (outlet, o) in site.outlets.iter().enumerate() {
        let set = setting.gates.iter().any(|g| g.outlet == outlet);
        if !set && intake::spills_by_itself(o) {
            let flow_m3s = intake::crest_flow_m3s(o, pool_m).unwrap_or(0.0);
            if flow_m3s > 0.0 {
                setting.gates.push(Gate { outlet, opening: 1.0, flow_m3s });
            }
        }
    }
}

fn parse_setting(site: &Site, sets: &[String], pool_m: f64) -> Result<Setting, Failure> {
    let mut gates: Vec<Gate> = Vec::new();
    for set in sets {
        let (name, flow) = match set.split_once('=') {
            Some((name, flow)) => (name.trim(), Some(flow.trim())),
            None => (set.trim(), None),
        };
        let Some(outlet) = site.outlet(name) else {
            let names: Vec<&str> = site.outlets.iter().map(|o| o.name.as_str()).collect();
            return Err(Failure::Usage(format!(
                "--set {set}: no gate is named `{name}`; there are {}",
                names.join(", ")
            )));
        };
        if gates.iter().any(|g| g.outlet == outlet) {
            return Err(Failure::Usage(format!("--set {set}: `{name}` is set twice")));
        }
        let flow_m3s = match flow {
            Some(text) => site
                .units
                .parse(text, Dimension::Flow)
                .map_err(|error| Failure::Usage(format!("--set {set}: {error}")))?,
            None if intake::spills_by_itself(&site.outlets[outlet]) => {
                intake::crest_flow_m3s(&site.outlets[outlet], pool_m).unwrap_or(0.0)
            }
            None => return Err(Failure::Usage(format!("--set {set}: give a flow, such as {name}=30"))),
        };
        if flow_m3s < 0.0 {
            return Err(Failure::Usage(format!("--set {set}: a flow cannot be negative")));
        }
        gates.push(Gate { outlet, opening: 1.0, flow_m3s });
    }
    Ok(Setting { gates })
}
