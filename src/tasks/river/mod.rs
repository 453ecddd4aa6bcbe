//! What arrives downstream: of the setting now, the one tried and the best; what each point would need; what it got.

mod ahead;
mod asked;
mod observed;
mod way;

use crate::mix::Conflict;
use crate::problem::Problem;
use crate::target::DAM;

use super::rank::{RankAsked, Shown, rank};
use super::{Context, Failure, MixAnswer, Word, mix};
use crate::rank::Progress;

use ahead::Ahead;
pub use ahead::{Arriving, Timely};
pub use asked::Window;
pub use observed::Observed;
pub(in crate::tasks) use observed::observed_on;
pub use way::{Way, WayPart, Which};

/// The answer of `river`.
#[derive(Debug, Clone)]
pub struct RiverAnswer {
    /// The releases, each once: now, tried, best.
    pub ways: Vec<Way>,
    /// The release each point would need, in the order of the points, under the flows of the way spoken of.
    pub windows: Vec<Window>,
    /// What arrives day by day, today first.
    pub days: Vec<Arriving>,
    /// When a change must leave the dam to be in time for a day that would be too warm.
    pub timely: Vec<Timely>,
    /// What stations recorded, against the rules.
    pub observed: Vec<Observed>,
    /// What was assumed, and what to beware of.
    pub notes: Vec<Problem>,
}

impl RiverAnswer {
    /// Rules that leave no release in common.
    pub fn conflicts(&self) -> &[Conflict] {
        self.spoken().map_or(&[], |way| &way.conflicts)
    }

    /// The way that is spoken of where only one can be: the one tried, else the one now, else the best.
    pub fn spoken(&self) -> Option<&Way> {
        let of = |which: Which| self.ways.iter().find(|w| w.which == which);
        of(Which::Tried).or_else(|| of(Which::Now)).or_else(|| of(Which::Best))
    }
}

/// What arrives of the setting that words say, beside the one now and the best of the ranking that is asked: as on the
/// screens, at a release of its own.
///
/// # Errors
/// As [`mix`]; nothing set, nothing now and nothing ranked.
pub fn river(
    context: &Context,
    words: &[Word],
    asked: &RankAsked,
    progress: Progress,
) -> Result<RiverAnswer, Failure> {
    let tried = if words.is_empty() { None } else { Some(mix(context, words)?) };
    let now = match (&tried, mix(context, &[])) {
        (_, Ok(now)) => Ok(now),
        (Some(_), Err(_)) => Err(None),
        (None, Err(failure)) => Err(Some(failure)),
    };
    let mut notes = Vec::new();
    let ranked = match rank(context, asked, progress) {
        Ok(answer) => {
            if answer.mixes.is_empty() {
                notes.push(Problem::note("no-best", "no mix is allowed: there is no best"));
            }
            answer.mixes.into_iter().next()
        }
        Err(Failure::Stopped) => return Err(Failure::Stopped),
        Err(failure) => {
            let why = failure.words();
            notes.push(Problem::note("no-best", format!("there is no ranking and so no best: {why}")));
            None
        }
    };
    let now = match (now, &tried, &ranked) {
        (Ok(now), ..) => Some(now),
        (Err(Some(failure)), None, None) => return Err(failure),
        _ => None,
    };
    let mut answer = downstream(context, tried.as_ref(), now.as_ref(), ranked.as_ref());
    answer.notes.extend(notes);
    Ok(answer)
}

/// The same of answers that are there already.
pub fn downstream(
    context: &Context,
    tried: Option<&MixAnswer>,
    now: Option<&MixAnswer>,
    best: Option<&Shown>,
) -> RiverAnswer {
    let now = now.map(|a| Way::of_mix(context, Which::Now, a));
    // what is tried and is what stands now is told once
    let tried = tried.map(|a| Way::of_mix(context, Which::Tried, a));
    let tried = tried.filter(|t| now.as_ref().is_none_or(|now| !now.sets_as(t)));
    let best = best.map(|b| Way::of_ranked(context, Which::Best, b));
    let mut answer = RiverAnswer {
        ways: [now, tried, best].into_iter().flatten().collect(),
        windows: Vec::new(),
        days: Vec::new(),
        timely: Vec::new(),
        observed: observed::observed(context),
        notes: context
            .said
            .iter()
            .cloned()
            .chain(context.rules_off())
            .chain(context.record_flags())
            .chain(notes(context))
            .collect(),
    };
    if let Some(way) = answer.spoken() {
        let windows = asked::windows(context, way);
        let ahead = Ahead::of(context, &answer.ways);
        let (days, timely) = (ahead.days(), ahead.timely());
        let flags: Vec<Problem> = way.course.iter().flat_map(|c| c.flags.iter().cloned()).collect();
        answer.notes.extend(flags);
        (answer.windows, answer.days, answer.timely) = (windows, days, timely);
    }
    answer
}

/// What keeps the river from being known.
fn notes(context: &Context) -> Vec<Problem> {
    let site = context.site();
    let Some(river) = &site.river else {
        let elsewhere = site.targets.iter().any(|t| t.point != DAM);
        let cure = "give `river:` its reaches and points in site.yaml";
        let words = "the site file tells nothing of the river below the dam";
        let problem =
            if elsewhere { Problem::flag("no-river", words, cure) } else { Problem::note("no-river", words) };
        return vec![problem];
    };
    if river.surface.is_none() {
        let cure = "give `river:` its weather, monthly figures, or equilibrium and exchange_w_m2_c";
        let words =
            "what the river trades with the air is not given: temperatures below the dam are not known";
        return vec![Problem::flag("no-weather", words, cure)];
    }
    Vec::new()
}
