//! Learning the pool: the knobs that carry it from one cast to the next.
//!
//! The temperature of the second cast fits wind, light and diffusion, its oxygen the demand of the water; a third cast
//! that the fit has not seen says whether it is worth keeping. A knob that the casts do not tell stays as it was.
//!
//! Methods: `docs/methods.md`, section 8.

mod knob;
mod nearest;
mod stretch;

use std::ops::ControlFlow;

use crate::profile::Profile;
use crate::rank::Progress;
use crate::site::{Knobs, Site};
use crate::units::say;

use super::ahead::{ahead, forcing};
use super::layers::Layers;
use super::plan::PlanDay;
use super::run::{Run, SeasonDay, Setup};

use knob::{BREATH, Knob, WARMTH};
pub use knob::{DIFFUSION, Fitted, LIGHT_PER_M, WATER_DEMAND_MG_L_DAY, WIND};
pub use nearest::AS_NEAR;
use nearest::nearest;
pub use stretch::{Apart, Past};
use stretch::{Stretch, times};

/// Casts nearer than this tell too little of what lies between them, days (choice).
pub const LEAST_DAYS: i64 = 14;
/// Fewest samples of a cast (choice).
pub const LEAST_SAMPLES: usize = 5;
/// Trials about as many as most searches take, for the progress alone (choice).
const USUAL_TRIALS: f64 = 400.0;

/// The days of a run, as they passed: for a plan and a gate schedule that tell what has been.
pub fn past(setup: &Setup, run: &Run) -> Vec<Past> {
    let days = ahead(setup, run.start.pool_m(&setup.skies.site.pool));
    let mornings = std::iter::once(&run.start).chain(run.days.iter().map(|day| &day.layers));
    let one = |((plan, day), morning): ((&PlanDay, &SeasonDay), &Layers)| Past {
        forcing: forcing(plan, setup.skies.days.get(&plan.date).copied(), morning.layers.last()),
        levels: day.drawn.iter().map(|drawn| drawn.level.clone()).collect(),
    };
    days.iter().zip(&run.days).zip(mornings).map(one).collect()
}

/// What was learned of a pool.
#[derive(Debug, Clone, PartialEq)]
pub struct Learned {
    /// The knobs before.
    pub before: Knobs,
    /// The knobs that were found.
    pub knobs: Knobs,
    /// The second cast, with the knobs before and with those found.
    pub fitted: [Apart; 2],
    /// The third cast, begun from the second: the test.
    pub tested: [Apart; 2],
    /// Knobs that ended at an end of their range: the pool asks for more than is published.
    pub at_end: Vec<&'static str>,
    /// Knobs that the casts tell, and how far each can go while the pool comes about as near.
    pub near: Vec<(&'static str, [f64; 2])>,
    /// Knobs that the casts do not tell: they stay as they were.
    pub untold: Vec<&'static str>,
}

impl Learned {
    /// The knobs that were fitted, the oxygen's where the casts have it.
    pub fn each(&self) -> Vec<Fitted> {
        let with_oxygen = self.fitted.iter().chain(&self.tested).all(|a| a.oxygen_mg_l.is_some());
        let near =
            |knob: &Knob| self.near.iter().find(|near| near.0 == knob.name).map_or(knob.range, |n| n.1);
        let one = |knob: &Knob| Fitted {
            name: knob.name,
            before: *(knob.of)(&mut self.before.clone()),
            after: *(knob.of)(&mut self.knobs.clone()),
            range: knob.range,
            near: near(knob),
            at_end: self.at_end.contains(&knob.name),
            told: !self.untold.contains(&knob.name),
        };
        WARMTH.iter().chain(BREATH.iter().filter(|_| with_oxygen)).map(one).collect()
    }
}

/// Fits the knobs of a site between two casts and tests them on a third; `days` hold every day from that of the first
/// cast to the one before that of the third, and where it is told that one. Days of casts count from and to the hour of
/// the cast. `None` where `progress` stopped it.
///
/// # Errors
/// Why nothing was learned, in words: too few days or samples, days that are not told, no better, or worse on the third.
pub fn learn(
    site: &Site,
    casts: [&Profile; 3],
    days: &[Past],
    progress: Progress,
) -> Option<Result<Learned, String>> {
    let stretches = times(site, casts).and_then(|[first, second, third]| {
        let fit = Stretch::new([casts[0], casts[1]], [first, second], days)?;
        Ok([fit, Stretch::new([casts[1], casts[2]], [second, third], days)?])
    });
    let [fit, test] = match stretches {
        Ok(stretches) => stretches,
        Err(words) => return Some(Err(words)),
    };
    let before = site.season.knobs;
    let mut trial = site.clone();
    let mut off = |knobs: Knobs, stretch: &Stretch| {
        trial.season.knobs = knobs;
        stretch.off(&trial)
    };
    let (mut knobs, mut near, mut untold) = (before, Vec::new(), Vec::new());
    let mut done = 0.0;
    // oxygen moves no water, so the temperature is fitted first
    let with_oxygen = casts.iter().all(|c| !c.oxygen.is_empty());
    for (some, oxygen) in [(&WARMTH[..], false), (&BREATH[..], true)] {
        if oxygen && !with_oxygen {
            continue;
        }
        let found = nearest(some, knobs, &mut |knobs| {
            done += 1.0;
            if progress(done / (done + USUAL_TRIALS)) == ControlFlow::Break(()) {
                return None;
            }
            let off = off(knobs, &fit).ok();
            Some(off.map(|off| if oxygen { off.breath_mg_l } else { off.warmth_c }))
        })?;
        knobs = found.knobs;
        near.extend(found.near);
        untold.extend(found.untold);
    }
    let mut pair = |stretch: &Stretch| {
        let mut of = |knobs: Knobs| Ok::<_, String>(off(knobs, stretch)?.apart());
        Ok::<_, String>([of(before)?, of(knobs)?])
    };
    let (fitted, tested) = match (pair(&fit), pair(&test)) {
        (Ok(fitted), Ok(tested)) => (fitted, tested),
        (Err(words), _) | (_, Err(words)) => return Some(Err(words)),
    };
    if let Err(words) = worth(fitted, tested) {
        return Some(Err(words));
    }
    let ended = |knob: &&Knob| {
        let value = *(knob.of)(&mut knobs.clone());
        !untold.contains(&knob.name) && knob.range.iter().any(|end| (value / end - 1.0).abs() < 0.01)
    };
    let fitted_knobs = WARMTH.iter().chain(BREATH.iter().filter(|_| with_oxygen));
    let at_end = fitted_knobs.filter(ended).map(|knob| knob.name).collect();
    Some(Ok(Learned { before, knobs, fitted, tested, at_end, near, untold }))
}

/// Whether the knobs that were found are worth keeping.
fn worth(fitted: [Apart; 2], tested: [Apart; 2]) -> Result<(), String> {
    let worse = |[before, after]: [f64; 2]| after > before;
    let warmth = |a: [Apart; 2]| a.map(|a| a.temperature_c);
    let breath = |a: [Apart; 2]| Some([a[0].oxygen_mg_l?, a[1].oxygen_mg_l?]);
    let [was, is] = warmth(fitted);
    let breathes = breath(fitted).is_some_and(|[was, is]| is < was);
    if is > was || (is >= was && !breathes) {
        let was = say::dc(was, 2);
        return Err(format!(
            "no knobs within the published ranges come nearer to the second cast than {was}"
        ));
    }
    if worse(warmth(tested)) {
        let [was, is] = warmth(tested).map(|c| say::dc(c, 2));
        return Err(format!("on the third cast the fit is worse than before: off by {is} against {was}"));
    }
    if let Some([was, is]) = breath(tested).filter(|pair| worse(*pair)) {
        return Err(format!(
            "on the third cast the oxygen of the fit is worse than before: off by {is:.2} mg/L against {was:.2}"
        ));
    }
    Ok(())
}
