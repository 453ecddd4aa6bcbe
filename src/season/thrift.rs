//! Thrift: a season of aims that weighs the cold water spent early against that needed late.
//!
//! Methods: `docs/methods.md`, section 8.

use std::ops::ControlFlow;
use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};

use crate::rank::Progress;
use crate::site::Strategy;

use super::exact::{Stop, exact};
use super::going::Going;
use super::run::{Choosing, Run, Setup, run};
use super::search::{MOST, search};
use super::tally::Score;

/// The season of a setup under the aims that serve it best, of those the search tries. It is never worse than the best of
/// each day, which is the first of them. `None` where the caller stops it, or the cast shows no water.
pub(super) fn thrift(setup: &Setup, progress: Progress) -> Option<Run> {
    let daily = Setup { choosing: Choosing::By(Strategy::Best), ..setup.clone() };
    let going = Going::new(&daily)?;
    let last = setup.plan.days.last()?.date;
    let passed = (last - going.decides).num_days().max(0) / i64::from(setup.decide_days.max(1));
    let count = usize::try_from(passed).ok()? + 1;
    match exact(&daily, count, progress) {
        Ok(run) => return Some(run),
        Err(Stop::Cancelled) => return None,
        Err(Stop::TooLarge) => {}
    }
    let done = AtomicUsize::new(0);
    let season = |aims: &[f64]| {
        let aims = Arc::new(aims.to_vec());
        let setup = Setup { choosing: Choosing::Aims(aims.clone()), ..setup.clone() };
        let share = |of_this: f64| (done.load(Ordering::Relaxed) as f64 + of_this) / MOST as f64;
        let mut run = run(&setup, &|of_this| progress(share(of_this).min(1.0)))?;
        done.fetch_add(1, Ordering::Relaxed);
        run.aims = Some(aims);
        Some((Score::of(&setup, &run), run))
    };
    let (_, (_, run)) = search(count, &season, &|a: &(Score, Run), b| a.0.order(&b.0))?;
    match progress(1.0) {
        ControlFlow::Continue(()) => Some(run),
        ControlFlow::Break(()) => None,
    }
}
