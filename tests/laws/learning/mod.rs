//! What is learned from records in which something known is hidden, and from records in which nothing is.
#![expect(clippy::print_stdout, reason = "the figures are part of what is shown")]

mod made;
mod rules;

use gatemix::record::{Candidate, Effect, Learning, Verdict, WINDOW_DAYS, learn};
use rayon::prelude::*;

use made::{Hidden, Luck, Season};

/// Seasons of water; each gives a record without and two with something hidden.
const POOLS: u64 = 100;
/// Pairs of a season at most.
const PAIRS: u64 = 45;

/// One value that was learned from one record.
#[derive(Debug, Clone, Copy)]
struct Told {
    covered: bool,
    /// Width of the 80 % interval over that of the prior.
    width: f64,
    informative: bool,
}

/// What became of one record.
struct Outcome {
    hidden: Hidden,
    told: Vec<Told>,
    kept: Option<Effect>,
}

/// Width of 80 % of a normal distribution of a deviation of 0.4 C, what the band holds for the method itself.
const PRIOR_C: f64 = 2.0 * 1.2816 * 0.4;
/// The same of the zone factor: from the middle of a tenth of 0.70 to 1 to that of 1 to 1.15.
const PRIOR_FACTOR: f64 = 1.12 - 0.76;

fn of(learning: &Learning, effect: Effect) -> &Candidate {
    learning.candidates.iter().find(|c| c.effect == effect).unwrap()
}

fn outcome(season: &Season, luck: &mut Luck, hidden: Hidden) -> Outcome {
    let gauge_c = luck.between(0.1, 0.4);
    let (pairs, by_level) = season.record(luck, hidden, gauge_c);
    let learning = learn(season.site(), &pairs, WINDOW_DAYS);
    let effect = match hidden {
        Hidden::Nothing | Hidden::Bias(_) => Effect::Bias,
        Hidden::Leak(..) => Effect::ByLevel,
        Hidden::Zone(_) => Effect::ZoneFactor,
    };
    let candidate = of(&learning, effect);
    let told = candidate.figures.iter().filter_map(|figure| {
        let (low, high) = figure.interval?;
        let (truth, prior) = match hidden {
            Hidden::Nothing => (0.0, PRIOR_C),
            Hidden::Bias(bias_c) => (bias_c, PRIOR_C),
            Hidden::Zone(factor) => (factor, PRIOR_FACTOR),
            Hidden::Leak(..) => (by_level[figure.level?]?, PRIOR_C),
        };
        let informative = match hidden {
            // the zones of the lowest and of the greatest factor would give releases apart by a degree
            Hidden::Zone(_) => {
                let apart = |p: &gatemix::record::Pair| (p.curve.at(1.15).0 - p.curve.at(0.70).0).powi(2);
                (pairs.iter().map(apart).sum::<f64>() / pairs.len() as f64).sqrt() >= 0.5
            }
            _ => figure.n >= 15,
        };
        Some(Told { covered: (low..=high).contains(&truth), width: (high - low) / prior, informative })
    });
    if std::env::var("SHOW").is_ok() {
        let apart = |p: &gatemix::record::Pair| (p.curve.at(1.15).0 - p.curve.at(0.70).0).powi(2);
        let rms = (pairs.iter().map(apart).sum::<f64>() / pairs.len() as f64).sqrt();
        let zone = &of(&learning, Effect::ZoneFactor).figures; println!("{hidden:.2?} f {:.2?} n {} stretches {} apart {rms:.2} {:.2?} before/after {:.2?} {:.2?} {:.2?} {by_level:.2?}", zone.iter().map(|f| f.value).collect::<Vec<_>>(), candidate.n, candidate.stretches, candidate.figures.iter().map(|f| (f.level, f.value, f.interval)).collect::<Vec<_>>(), candidate.rmse, candidate.held_out, candidate.verdict);
    }
    let kept = learning.candidates.iter().find(|c| c.verdict == Verdict::Kept).map(|c| c.effect);
    Outcome { hidden, told: told.collect(), kept }
}

#[test]
fn scenario_what_is_hidden_in_two_hundred_seasons_is_found() {
    let season = |pool: u64| {
        let mut luck = Luck::new(1000 + pool);
        let blends = pool % 2 == 1;
        let season = Season::new(&mut luck, PAIRS, blends);
        let below = luck.below(2) == 0;
        let factor = if below { luck.between(0.70, 1.0) } else { luck.between(1.0, 1.15) };
        let other = if blends {
            Hidden::Bias(luck.between(-1.0, 1.0))
        } else {
            Hidden::Leak(2 * luck.below(2) as usize, luck.between(0.0, 0.2))
        };
        [Hidden::Nothing, Hidden::Zone(factor), other].map(|hidden| outcome(&season, &mut luck, hidden))
    };
    let all: Vec<Outcome> = (0..POOLS).into_par_iter().flat_map_iter(season).collect();
    let some = |of: fn(&Hidden) -> bool| all.iter().filter(move |o| of(&o.hidden));
    let share = |told: &[Told]| told.iter().filter(|t| t.covered).count() as f64 / told.len() as f64;
    let median = |told: &[Told]| {
        let mut widths: Vec<f64> = told.iter().filter(|t| t.informative).map(|t| t.width).collect();
        widths.sort_by(f64::total_cmp);
        let at = |share: f64| widths.get((widths.len() as f64 * share) as usize).copied();
        (widths.len(), at(0.5), at(0.9))
    };
    let kinds: [(&str, fn(&Hidden) -> bool); 4] = [
        ("nothing", |h| *h == Hidden::Nothing),
        ("bias", |h| matches!(h, Hidden::Bias(_))),
        ("leak", |h| matches!(h, Hidden::Leak(..))),
        ("zone factor", |h| matches!(h, Hidden::Zone(_))),
    ];
    for (name, kind) in kinds {
        let told: Vec<Told> = some(kind).flat_map(|o| o.told.iter().copied()).collect();
        let kept = |effect: Effect| some(kind).filter(|o| o.kept == Some(effect)).count();
        println!(
            "{name}: {} seasons, {} values, covered {:.3}, informative (count, median and 90 % width over prior) {:.2?}; kept bias {}, zone factor {}, by level {}",
            some(kind).count(),
            told.len(),
            share(&told),
            median(&told),
            kept(Effect::Bias),
            kept(Effect::ZoneFactor),
            kept(Effect::ByLevel),
        );
    }
}
