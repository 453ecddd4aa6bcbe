//! The search for aims: constant ones, then early or late ones, then piece by piece.
//!
//! Methods: `docs/methods.md`, section 8.

use std::cmp::Ordering;

use rayon::prelude::*;

/// Aims that hold through the whole season (choice); the first is day by day.
const CONSTANT: [f64; 5] = [0.0, 0.25, 0.5, 0.75, 1.0];
/// Aims before and after a turn in the season, tried with the turn at each quarter (choice).
const TURNS: [(f64, f64); 3] = [(1.0, 0.0), (0.5, 0.0), (0.0, 1.0)];
/// Rounds over equal pieces of the season: how many, and by how much the aim of one is raised or lowered (choice).
const PIECES: [(usize, f64); 2] = [(4, 0.5), (8, 0.25)];

/// Most seasons that a search runs (derived from the rounds): 5 + 9 + 8 + 16.
pub(super) const MOST: usize = 38;

/// What was found: aims, and what came of them.
pub(super) type Found<S> = (Vec<f64>, S);

/// Seeks the aims, `count` of them, of which the least comes in `order`. `season` tells what comes of some aims; `None`
/// from it stops the search.
///
/// It begins with no aim at all, and takes others only where they are less: what it finds is never more. Seasons of one
/// round go side by side, and of equals the first is kept, so that cores change nothing.
pub(super) fn search<S: Send>(
    count: usize,
    season: &(dyn Fn(&[f64]) -> Option<S> + Sync),
    order: &dyn Fn(&S, &S) -> Ordering,
) -> Option<Found<S>> {
    let mut seen: Vec<Vec<f64>> = Vec::new();
    let mut best: Option<Found<S>> = None;
    let mut round = |tries: Vec<Vec<f64>>, best: &mut Option<Found<S>>| -> Option<()> {
        let mut fresh: Vec<Vec<f64>> = Vec::new();
        for aims in tries {
            if !seen.contains(&aims) && !fresh.contains(&aims) {
                fresh.push(aims);
            }
        }
        let came: Vec<Option<S>> = fresh.par_iter().map(|aims| season(aims)).collect();
        seen.extend(fresh.iter().cloned());
        for (aims, came) in fresh.into_iter().zip(came) {
            let came = came?;
            if best.as_ref().is_none_or(|(_, least)| order(&came, least).is_lt()) {
                *best = Some((aims, came));
            }
        }
        Some(())
    };
    round(CONSTANT.iter().map(|&aim| vec![aim; count]).collect(), &mut best)?;
    round(turns(count), &mut best)?;
    for (pieces, by) in PIECES {
        let around = best.as_ref().map_or_else(Vec::new, |(aims, _)| varied(aims, pieces, by));
        round(around, &mut best)?;
    }
    best
}

fn turns(count: usize) -> Vec<Vec<f64>> {
    let of = |(early, late): (f64, f64), quarter: usize| {
        (0..count).map(|i| if 4 * i < quarter * count { early } else { late }).collect()
    };
    TURNS.into_iter().flat_map(|turn| (1..4).map(move |quarter| of(turn, quarter))).collect()
}

/// The same aims with one of so many equal pieces raised or lowered.
fn varied(aims: &[f64], pieces: usize, by: f64) -> Vec<Vec<f64>> {
    let piece = |at: usize, up: f64| {
        let inside = |i: usize| i * pieces / aims.len().max(1) == at;
        let moved = |(i, aim): (usize, &f64)| if inside(i) { (aim + up).clamp(0.0, 1.0) } else { *aim };
        aims.iter().enumerate().map(moved).collect()
    };
    (0..pieces).flat_map(|at| [by, -by].map(|up| piece(at, up))).collect()
}

#[cfg(test)]
mod tests {
    use std::cell::Cell;
    use std::sync::atomic::{AtomicUsize, Ordering::Relaxed};

    use super::*;

    /// A store is filled once and drawn down by whatever is cooler than it need be; what is warmer than the top counts.
    fn game(wants: &[f64], store: f64) -> impl Fn(&[f64]) -> Option<f64> + Sync {
        let wants = wants.to_vec();
        move |aims: &[f64]| {
            let mut left = store;
            let mut worst = 0.0_f64;
            for (aim, want) in aims.iter().zip(&wants) {
                let asked = want * (1.0 - aim);
                let given = asked.min(left);
                left -= given;
                worst = worst.max(0.3 * want - given);
            }
            Some(worst)
        }
    }

    #[test]
    fn law_the_search_is_never_worse_than_no_aim_and_runs_no_more_than_it_says() {
        let mut better = 0;
        for seed in 0..100_u32 {
            let count = 1 + (seed as usize % 31);
            let want = |i: u32| 1.0 + f64::from((seed * 7919 + 104_729 * i) % 97) / 50.0;
            let wants: Vec<f64> = (0..).take(count).map(want).collect();
            let store = 0.6 * wants.iter().sum::<f64>();
            let play = game(&wants, store);
            let runs = AtomicUsize::new(0);
            let season = |aims: &[f64]| {
                runs.fetch_add(1, Relaxed);
                play(aims)
            };
            let (aims, worst) = search(count, &season, &f64::total_cmp).unwrap();
            let none = play(&vec![0.0; count]).unwrap();
            assert!(worst <= none, "{seed}: {worst} is worse than {none}");
            assert!(runs.into_inner() <= MOST);
            assert!(aims.len() == count && aims.iter().all(|aim| (0.0..=1.0).contains(aim)));
            better += usize::from(worst < none);
        }
        assert!(better > 50, "{better} of 100 better");
    }

    #[test]
    fn law_a_stopped_search_finds_nothing() {
        let left = AtomicUsize::new(7);
        let season =
            |_: &[f64]| left.fetch_update(Relaxed, Relaxed, |n| n.checked_sub(1)).ok().map(|n| n as f64);
        let looks = Cell::new(0);
        let order = |a: &f64, b: &f64| {
            looks.set(looks.get() + 1);
            a.total_cmp(b)
        };
        assert!(search(8, &season, &order).is_none());
    }
}
