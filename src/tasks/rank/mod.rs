//! Which mixes fit, in what order, and why not the rest.

mod answers;
mod asked;
mod kitchen;
mod reasons;
mod shown;

use std::ops::ControlFlow;

use crate::intake;
use crate::mix::limits::Before;
use crate::mix::{Asked, Perturbed, Setting, groups, resolve};
use crate::problem::Problem;
use crate::rank::{Criterion, Question, Ranking, Stopped, rank as search};
use crate::units::say;

use super::words::Word;
use super::{Context, Failure, now_setting, setting};

pub use crate::mix::split::Part;
pub use answers::{Least, Lost, Pocket, PreferredSplit, Root, Trade};
pub(super) use asked::order;
pub use asked::{RankAsked, ReleaseFrom};
pub use shown::{Shown, ShownPart, Unsure};

use answers::Answers;
use kitchen::Kitchen;
use reasons::reasons;

/// The answer of `rank`.
#[derive(Debug, Clone)]
pub struct RankAnswer {
    /// Parts of the day: share of it and total release, m3/s; one for a steady day.
    pub blocks: Vec<(f64, f64)>,
    /// Where the release comes from.
    pub release_from: ReleaseFrom,
    /// Steps the release is cut into.
    pub steps: usize,
    /// Criteria, the first first.
    pub order: Vec<Criterion>,
    /// Outlets left out.
    pub without: Vec<usize>,
    /// What the search found.
    pub ranking: Ranking,
    /// The best mix of each idea, best first, computed in full.
    pub mixes: Vec<Shown>,
    /// The setting now, unchanged, with what it gives today.
    pub now: Option<Shown>,
    /// Largest difference between the search and the full computation, over every mix shown: C and mg/L.
    pub apart: (f64, Option<f64>),
    /// Coldest and warmest allowed release, computed in full, C.
    pub attainable_c: Option<[f64; 2]>,
    /// Least and most oxygen of allowed releases, computed in full, mg/L.
    pub attainable_oxygen_mg_l: Option<[f64; 2]>,
    /// Where no mix keeps every target: the one that comes nearest, by oxygen first and then by temperature. `None`
    /// where one does, or where none is allowed.
    pub nearest: Option<Box<Shown>>,
    /// Mixes no other beats in both temperature and oxygen.
    pub trade: Vec<Trade>,
    /// The best fallback for each single gate lost, of those the best mix or the setting now uses.
    pub lost: Vec<Lost>,
    /// The exact split that gives the preferred temperature.
    pub split: Option<PreferredSplit>,
    /// Least total release with which some mix keeps every target.
    pub least: Option<Least>,
    /// What more release does to the best mix.
    pub pocket: Option<Pocket>,
    /// What was assumed.
    pub notes: Vec<Problem>,
}

/// Why nothing fits.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum NothingFits {
    /// Every mix breaks a limit.
    NoneAllowed,
    /// No mix is known to keep every target.
    NoneReaches,
}

impl NothingFits {
    /// As every output says it.
    pub fn words(self) -> &'static str {
        match self {
            Self::NoneAllowed => "every mix examined breaks a limit",
            Self::NoneReaches => "no mix examined is known to reach every target",
        }
    }
}

impl RankAnswer {
    /// Why nothing fits; `None` where some mix does.
    pub fn nothing_fits(&self) -> Option<NothingFits> {
        if self.mixes.is_empty() {
            Some(NothingFits::NoneAllowed)
        } else {
            self.nearest.as_ref().map(|_| NothingFits::NoneReaches)
        }
    }
}

/// Ranks every mix of a site. `progress` is told how much is done and may stop it.
///
/// # Errors
/// Words that cannot be understood; more mixes than can be judged; a caller who stops it ([`Failure::Stopped`]).
pub fn rank(
    context: &Context,
    asked: &RankAsked,
    progress: &(dyn Fn(f64) -> ControlFlow<()> + Sync),
) -> Result<RankAnswer, Failure> {
    let site = context.site();
    let plan = asked::plan(context, asked)?;
    let mut notes = plan.notes;
    let now = now(context, &asked.now, &mut notes)?;
    let (blocks, release_from) = asked::release(context, asked, now.as_ref())?;
    notes.extend(spill(context, &blocks));
    notes.extend(context.rules_off());
    notes.extend(context.record_flags());
    if site.aerates() {
        let words = "oxygen is told and held against targets below the dam, with what the conduits add";
        notes.push(Problem::note("oxygen-gain", words));
    }
    let perturbed = Perturbed::new(site, &context.profile, context.age_days);
    let groups = groups(site);
    let day = &context.day();
    let (now, before) = (now.as_ref(), Before::default());
    let mut kitchen = Kitchen { context, perturbed: &perturbed, groups: &groups, day, now, before };
    if let Some(release) = now.and_then(|setting| kitchen.blend(setting)) {
        kitchen.before =
            Before { flow_m3s: Some(release.flow_m3s), temperature_c: Some(release.temperature_c) };
    }
    let mut now_shown = now.and_then(|setting| kitchen.now(setting));
    if let Some(shown) = &mut now_shown {
        shown.reasons = reasons(site, shown);
    }
    let question = Question {
        site,
        profile: &context.profile,
        day,
        blocks: &blocks,
        now,
        before: kitchen.before,
        steps: plan.steps,
        order: &plan.order,
        without: &plan.without,
    };
    let ranking = search(&question, progress).map_err(|stopped| match stopped {
        Stopped::Cancelled => Failure::Stopped,
        Stopped::Refused(problem) => Failure::Refused(vec![problem], context.system),
    })?;
    let answers = Answers { kitchen: &kitchen, question: &question, ranking: &ranking };
    let mixes = answers.mixes(asked.top);
    let extremes = |found: &Option<[crate::rank::Extreme; 2]>| {
        found.as_ref().map(|f| f.each_ref().map(|e| kitchen.release(&e.mix)))
    };
    let (coldest, oxygen) = (extremes(&ranking.attainable_c), extremes(&ranking.attainable_oxygen_mg_l));
    let trade = answers.trade();
    let lost = answers.lost();
    let apart = answers.apart(&mixes, &trade);
    let mixes: Vec<Shown> = mixes.into_iter().map(|(_, shown)| shown).collect();
    let answer = RankAnswer {
        attainable_c: coldest.and_then(|[a, b]| Some([a?.0, b?.0])),
        attainable_oxygen_mg_l: oxygen.and_then(|[a, b]| Some([a?.1?, b?.1?])),
        split: answers.preferred_split(),
        least: answers.least(progress),
        pocket: answers.pocket(),
        blocks: blocks.clone(),
        release_from,
        steps: plan.steps,
        order: plan.order.clone(),
        without: plan.without.clone(),
        now: now_shown,
        apart,
        nearest: answers.nearest(&mixes, progress).map(Box::new),
        trade,
        lost,
        mixes,
        notes,
        ranking: ranking.clone(),
    };
    // whoever stops it while answers are sought would read less than there is
    if progress(1.0).is_break() { Err(Failure::Stopped) } else { Ok(answer) }
}

/// The setting now, as typed or else as the site file gives it; what was assumed, or why there is none, becomes a note.
pub(super) fn now(
    context: &Context,
    typed: &[String],
    notes: &mut Vec<Problem>,
) -> Result<Option<Setting>, Failure> {
    let understood = if typed.is_empty() {
        match now_setting(context) {
            Ok(understood) => understood,
            Err(failure) => {
                notes.push(no_now(failure));
                return Ok(None);
            }
        }
    } else {
        let words: Vec<Word> = typed.iter().map(|w| Word::Now(w)).collect();
        setting(context, &words)?
    };
    notes.extend(understood.notes);
    notes.extend(not_of_the_wells(context, &understood.setting));
    Ok(Some(understood.setting))
}

/// A flow of a gate that the wells make otherwise of the same openings and total, as a share of the total (choice).
const SHARED_OTHERWISE: f64 = 0.05;

/// Where flows are given that the wells do not make of the openings they go with.
fn not_of_the_wells(context: &Context, setting: &Setting) -> Option<Problem> {
    let (site, pool_m) = (context.site(), context.profile.pool_m);
    let made = resolve(site, &context.profile.column, &groups(site), &Asked::of(site, setting), pool_m);
    let off: Vec<String> = setting
        .gates
        .iter()
        .filter_map(|gate| {
            let outlet = site.outlets.get(gate.outlet)?;
            let total: f64 = setting
                .gates
                .iter()
                .filter(|other| site.outlets.get(other.outlet).is_some_and(|o| o.well == outlet.well))
                .map(|other| other.flow_m3s)
                .sum();
            outlet.well?;
            let passes =
                made.gates.iter().find(|other| other.outlet == gate.outlet).map_or(0.0, |g| g.flow_m3s);
            ((passes - gate.flow_m3s).abs() > SHARED_OTHERWISE * total).then(|| {
                let [given, passes] = [gate.flow_m3s, passes].map(|flow| say::m3s(flow, 2));
                format!("{} passes {passes}, not {given}", outlet.name)
            })
        })
        .collect();
    let words = format!(
        "the flows of the setting now are not what its wells make of the openings: {}. Today's figures of it go by the \
         flows as given; mixes, and the days of a season, by what the wells make",
        off.join(", ")
    );
    (!off.is_empty()).then(|| Problem::note("now-split", words))
}

/// Where as much spills by itself as is wanted.
fn spill(context: &Context, blocks: &[(f64, f64)]) -> Option<Problem> {
    let spilling = context.site().outlets.iter().filter(|o| intake::spills_by_itself(o));
    let flows: Vec<(&str, f64)> = spilling
        .filter_map(|o| Some((o.name.as_str(), intake::crest_flow_m3s(o, 1.0, context.profile.pool_m)?)))
        .filter(|(_, flow)| *flow > 0.0)
        .collect();
    let spilt: f64 = flows.iter().map(|f| f.1).sum();
    let least = blocks.iter().map(|b| b.1).fold(f64::INFINITY, f64::min);
    (spilt >= least).then(|| {
        let names: Vec<&str> = flows.iter().map(|f| f.0).collect();
        let words = format!(
            "{} spills {} by itself: of a release of {} nothing is left to share out",
            names.join(", "),
            say::m3s(spilt, 2),
            say::m3s(least, 2)
        );
        Problem::flag("spills", words, "the pool must fall before less can be released")
    })
}

/// Why there is no setting now, plainly.
fn no_now(failure: Failure) -> Problem {
    let why = match failure {
        Failure::Usage(why) => why,
        Failure::Refused(problems, _) => problems.first().map_or_else(String::new, |p| p.words.clone()),
        Failure::Stopped => String::new(),
    };
    Problem::note(
        "now-unknown",
        format!(
            "the setting now is not known ({why}): moves are not counted and rates of change not checked"
        ),
    )
}
