//! Learning the pool: the knobs that carry it from one cast to the next.
//!
//! The temperature of the second cast fits wind, light and diffusion, its oxygen the demand of the water; a third cast
//! that the fit has not seen says whether it is worth keeping.
//!
//! Methods: `docs/methods.md`, section 8.

use std::ops::ControlFlow;

use chrono::NaiveDate;

use crate::mix::Level;
use crate::profile::{Column, Profile};
use crate::rank::Progress;
use crate::site::{Knobs, Site};
use crate::units::say;

use super::ahead::{ahead, forcing};
use super::layers::Layers;
use super::plan::PlanDay;
use super::run::{Run, SeasonDay, Setup};
use super::step::{Forcing, day};

/// Casts nearer than this tell too little of what lies between them, days (choice).
pub const LEAST_DAYS: i64 = 14;
/// Fewest samples of a cast (choice).
pub const LEAST_SAMPLES: usize = 5;
/// Range of the share of the wind's work (recalled: 0.05 to 1.3 in the literature).
pub const WIND: [f64; 2] = [0.05, 1.3];
/// Range of the extinction of light, 1/m (recalled: from clear mountain water to turbid pools).
pub const LIGHT_PER_M: [f64; 2] = [0.1, 2.5];
/// Range of the factor on the diffusion (recalled: fits to lakes spread about threefold either way).
pub const DIFFUSION: [f64; 2] = [0.3, 3.0];
/// Range of the demand of the water, mg/L per day at 20 C (recalled: 0.01 to 0.3 by deep waters).
pub const WATER_DEMAND_MG_L_DAY: [f64; 2] = [0.01, 0.3];

/// Rounds over the knobs; each looks nearer about what the last found (choice).
const ROUNDS: usize = 5;
/// How much nearer (choice).
const NEARER: f64 = 0.5;
/// How far a round looks on along the way that the knobs have gone together, as a multiple of it (choice).
const BEYOND: f64 = 4.0;
/// Trials along each way (choice).
const TRIALS: usize = 9;
/// The golden section.
const GOLDEN: f64 = 0.618_033_988_749_894_9;

/// One day that has passed.
#[derive(Debug, Clone, PartialEq)]
pub struct Past {
    /// What it brought.
    pub forcing: Forcing,
    /// What was drawn.
    pub levels: Vec<Level>,
}

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

/// How far a computed pool is from a cast, as the root of the mean square over its samples.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Apart {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen, mg/L, where the casts have it.
    pub oxygen_mg_l: Option<f64>,
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
}

/// One knob of what was learned.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Fitted {
    /// What it is called.
    pub name: &'static str,
    /// Its value before.
    pub before: f64,
    /// Its value found.
    pub after: f64,
    /// The published range it was sought in.
    pub range: [f64; 2],
    /// Whether it ended at an end of it.
    pub at_end: bool,
}

impl Learned {
    /// The knobs that were fitted, the oxygen's where the casts have it.
    pub fn each(&self) -> Vec<Fitted> {
        let with_oxygen = self.fitted.iter().chain(&self.tested).all(|a| a.oxygen_mg_l.is_some());
        let one = |knob: &Knob| Fitted {
            name: knob.name,
            before: *(knob.of)(&mut self.before.clone()),
            after: *(knob.of)(&mut self.knobs.clone()),
            range: knob.range,
            at_end: self.at_end.contains(&knob.name),
        };
        WARMTH.iter().chain(BREATH.iter().filter(|_| with_oxygen)).map(one).collect()
    }
}

/// A knob that is fitted.
struct Knob {
    name: &'static str,
    range: [f64; 2],
    of: fn(&mut Knobs) -> &mut f64,
}

/// Those of the temperature.
const WARMTH: [Knob; 3] = [
    Knob { name: "wind", range: WIND, of: |k| &mut k.wind },
    Knob { name: "light", range: LIGHT_PER_M, of: |k| &mut k.light_per_m },
    Knob { name: "diffusion", range: DIFFUSION, of: |k| &mut k.diffusion },
];
/// That of the oxygen.
const BREATH: [Knob; 1] =
    [Knob { name: "oxygen demand", range: WATER_DEMAND_MG_L_DAY, of: |k| &mut k.water_demand_mg_l_day }];

/// Fits the knobs of a site between two casts and tests them on a third; `days` hold every day from that of the first
/// cast to the one before that of the third. `None` where `progress` stopped it.
///
/// # Errors
/// Why nothing was learned, in words: too few days or samples, days that are not told, no better, or worse on the third.
pub fn learn(
    site: &Site,
    casts: [&Profile; 3],
    days: &[Past],
    progress: Progress,
) -> Option<Result<Learned, String>> {
    let [first, second, third] = match dates(site, casts) {
        Ok(dates) => dates,
        Err(words) => return Some(Err(words)),
    };
    let before = site.season.knobs;
    let stretch = |from: NaiveDate, to: NaiveDate| between(days, from, to);
    let (fit, test) = match (stretch(first, second), stretch(second, third)) {
        (Ok(fit), Ok(test)) => (fit, test),
        (Err(words), _) | (_, Err(words)) => return Some(Err(words)),
    };
    let mut trial = site.clone();
    let mut far = |knobs: Knobs, begun: &Profile, days: &[&Past], cast: &Profile| {
        trial.season.knobs = knobs;
        apart(&trial, begun, days, cast)
    };
    let mut knobs = before;
    // of the temperature one way for each knob and one for all together, of the oxygen a single one; and the start of each
    let total = (ROUNDS * TRIALS * (WARMTH.len() + 1 + BREATH.len()) + 2) as f64;
    let mut done = 0.0;
    // oxygen moves no water, so the temperature is fitted first
    let with_oxygen = casts.iter().all(|c| !c.oxygen.is_empty());
    for (some, oxygen) in [(&WARMTH[..], false), (&BREATH[..], true)] {
        if oxygen && !with_oxygen {
            continue;
        }
        let mut miss = |knobs: Knobs| -> Option<f64> {
            done += 1.0;
            if progress(done / total) == ControlFlow::Break(()) {
                return None;
            }
            let far = far(knobs, casts[0], &fit, casts[1]);
            Some(far.map_or(f64::INFINITY, |a| {
                if oxygen { a.oxygen_mg_l.unwrap_or(0.0) } else { a.temperature_c }
            }))
        };
        knobs = search(some, knobs, &mut miss)?;
    }
    let mut pair = |begun: usize, days: &[&Past]| {
        let mut of = |knobs: Knobs| far(knobs, casts[begun], days, casts[begun + 1]);
        Ok::<_, String>([of(before)?, of(knobs)?])
    };
    let (fitted, tested) = match (pair(0, &fit), pair(1, &test)) {
        (Ok(fitted), Ok(tested)) => (fitted, tested),
        (Err(words), _) | (_, Err(words)) => return Some(Err(words)),
    };
    if let Err(words) = worth(fitted, tested) {
        return Some(Err(words));
    }
    let ended = |knob: &&Knob| {
        let value = *(knob.of)(&mut knobs.clone());
        knob.range.iter().any(|end| (value / end - 1.0).abs() < 0.01)
    };
    let fitted_knobs = WARMTH.iter().chain(BREATH.iter().filter(|_| with_oxygen));
    let at_end = fitted_knobs.filter(ended).map(|knob| knob.name).collect();
    Some(Ok(Learned { before, knobs, fitted, tested, at_end }))
}

/// Whether the knobs that were found are worth keeping.
fn worth(fitted: [Apart; 2], tested: [Apart; 2]) -> Result<(), String> {
    let worse = |[before, after]: [f64; 2]| after > before;
    let warmth = |a: [Apart; 2]| a.map(|a| a.temperature_c);
    let breath = |a: [Apart; 2]| Some([a[0].oxygen_mg_l?, a[1].oxygen_mg_l?]);
    let [was, is] = warmth(fitted);
    if is >= was {
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

/// The dates of three casts, where they can be learned from.
fn dates(site: &Site, casts: [&Profile; 3]) -> Result<[NaiveDate; 3], String> {
    let date = |cast: &Profile| {
        let few = cast.samples.len();
        if few < LEAST_SAMPLES {
            return Err(format!("{} has {few} samples, and {LEAST_SAMPLES} are needed", cast.file));
        }
        let taken = cast.taken.ok_or_else(|| format!("{} does not say when it was taken", cast.file))?;
        Ok(taken.with_timezone(&site.offset).date_naive())
    };
    let dates = [date(casts[0])?, date(casts[1])?, date(casts[2])?];
    for (pair, cast) in dates.windows(2).zip(casts.iter().skip(1)) {
        let days = (pair[1] - pair[0]).num_days();
        if days < LEAST_DAYS {
            return Err(format!(
                "{} lies {days} days after the cast before it, and {LEAST_DAYS} are needed",
                cast.file
            ));
        }
    }
    Ok(dates)
}

/// The days from one date to the day before another, one after the other.
fn between(days: &[Past], from: NaiveDate, to: NaiveDate) -> Result<Vec<&Past>, String> {
    let wanted = from.iter_days().take_while(|d| *d < to);
    let told = |date: NaiveDate| {
        let of = days.iter().find(|p| p.forcing.date == date);
        of.ok_or_else(|| format!("nothing tells what came and went on {date}"))
    };
    wanted.map(told).collect()
}

/// Takes the pool of one cast through days and holds it against another cast.
fn apart(site: &Site, begun: &Profile, days: &[&Past], cast: &Profile) -> Result<Apart, String> {
    let none = || format!("{} shows no water", begun.file);
    let mut layers = Layers::of_profile(site, begun, site.season.layer_m).ok_or_else(none)?;
    for past in days {
        let levels = |_: &Column, _: f64| past.levels.clone();
        day(&mut layers, site, &past.forcing, &levels).map_err(|e| format!("on {}: {}", e.date, e.words))?;
    }
    let column = layers.column(site).ok_or_else(none)?;
    let warmth = cast.samples.iter().map(|s| s.temperature_c - column.reading(s.elevation_m).temperature_c);
    let breath =
        cast.oxygen.iter().filter_map(|o| Some(o.oxygen_mg_l - column.reading(o.elevation_m).oxygen_mg_l?));
    Ok(Apart {
        temperature_c: root_mean_square(warmth).unwrap_or(0.0),
        oxygen_mg_l: root_mean_square(breath),
    })
}

fn root_mean_square(values: impl Iterator<Item = f64>) -> Option<f64> {
    let (count, sum) = values.fold((0.0, 0.0), |(n, sum), v| (n + 1.0, sum + v * v));
    (count > 0.0).then(|| f64::sqrt(sum / count))
}

/// The knobs that miss least, by their logarithms: in each round one after the other, then all along the way they have
/// gone together; round after round nearer about the best so far, which is never given up for a worse. `None` where
/// `miss` stops it.
fn search(some: &[Knob], from: Knobs, miss: &mut dyn FnMut(Knobs) -> Option<f64>) -> Option<Knobs> {
    let ends: Vec<[f64; 2]> = some.iter().map(|knob| knob.range.map(f64::ln)).collect();
    let put = |place: &[f64]| {
        let mut knobs = from;
        for ((knob, x), [least, most]) in some.iter().zip(place).zip(&ends) {
            *(knob.of)(&mut knobs) = x.clamp(*least, *most).exp();
        }
        knobs
    };
    let mut knobs = from;
    let mut far = |place: &[f64]| miss(put(place));
    let mut place: Vec<f64> = Vec::new();
    for (knob, [least, most]) in some.iter().zip(&ends) {
        place.push((knob.of)(&mut knobs).ln().clamp(*least, *most));
    }
    let mut best = (far(&place)?, place);
    let mut reach = 1.0;
    for _ in 0..ROUNDS {
        let begun = best.1.clone();
        for (i, [least, most]) in ends.iter().enumerate() {
            let mut way = vec![0.0; some.len()];
            way[i] = most - least;
            along(&mut best, &way, [-reach, reach], &mut far)?;
        }
        let way: Vec<f64> = best.1.iter().zip(&begun).map(|(is, was)| is - was).collect();
        if some.len() > 1 {
            along(&mut best, &way, [-1.0, BEYOND], &mut far)?;
        }
        reach *= NEARER;
    }
    Some(put(&best.1))
}

/// Looks along a way from the best place by golden section, between two multiples of it.
fn along(
    best: &mut (f64, Vec<f64>),
    way: &[f64],
    [mut low, mut high]: [f64; 2],
    far: &mut dyn FnMut(&[f64]) -> Option<f64>,
) -> Option<()> {
    let from = best.1.clone();
    let mut at = |t: f64| {
        let place: Vec<f64> = from.iter().zip(way).map(|(x, w)| x + t * w).collect();
        let miss = far(&place)?;
        if miss < best.0 {
            *best = (miss, place);
        }
        Some(miss)
    };
    let mut inner = [high - GOLDEN * (high - low), low + GOLDEN * (high - low)];
    let mut missed = [at(inner[0])?, at(inner[1])?];
    for _ in 2..TRIALS {
        if missed[0] <= missed[1] {
            high = inner[1];
            inner = [high - GOLDEN * (high - low), inner[0]];
            missed = [at(inner[0])?, missed[0]];
        } else {
            low = inner[0];
            inner = [inner[1], low + GOLDEN * (high - low)];
            missed = [missed[1], at(inner[1])?];
        }
    }
    Some(())
}
