//! The days of a plan as one case sees them, from the cast on.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::site::Case;

use super::layers::Layer;
use super::plan::PlanDay;
use super::run::Setup;
use super::skies::Sky;
use super::step::{Forcing, Inflow};

/// A plan that leaves a straight line by more than this bends, m (choice: far above round-off, far below a gauge).
const BEND_M: f64 = 1e-6;

/// Every day from the first of the season to the last of the plan, the inflow shifted as the case says. Before the
/// first row its inflow and release hold. The pool goes straight from `pool_m`, that of the cast, to the plan where it
/// next bends.
pub(super) fn ahead(setup: &Setup, pool_m: f64) -> Vec<PlanDay> {
    let Some(first) = setup.plan.days.first() else { return Vec::new() };
    let before = setup.begins.iter_days().take_while(|date| *date < first.date);
    let before = before.map(|date| PlanDay { date, ..*first });
    let planned = setup.plan.days.iter().copied().filter(|day| day.date >= setup.begins);
    let mut days: Vec<PlanDay> = before.chain(planned).collect();
    if let Some((until, to_m)) = meets(setup) {
        let count = ((until - setup.begins).num_days() + 1) as f64;
        for (i, day) in days.iter_mut().take_while(|day| day.date < until).enumerate() {
            day.pool_m = Some(pool_m + (i + 1) as f64 / count * (to_m - pool_m));
        }
    }
    days.into_iter().map(|day| shifted(day, &setup.skies.case)).collect()
}

/// Where the pool of the cast has come to that of a plan by the pool: its first row where that is still to come, else the
/// first day after the cast's on which the plan bends, else its last.
pub(super) fn meets(setup: &Setup) -> Option<(NaiveDate, f64)> {
    let days = &setup.plan.days;
    let bends = |days: &&[PlanDay]| {
        let pools: Vec<f64> = days.iter().filter_map(|day| day.pool_m).collect();
        matches!(pools[..], [a, b, c] if (a - 2.0 * b + c).abs() > BEND_M)
    };
    let first = days.first().filter(|day| day.date > setup.begins);
    let bend = || {
        let after = days.windows(3).filter(|w| w.get(1).is_some_and(|day| day.date > setup.begins));
        after.filter(bends).find_map(|w| w.get(1))
    };
    let day = first.or_else(bend).or_else(|| days.last())?;
    Some((day.date, day.pool_m?))
}

/// How far the cast's pool lies above the plan of its day, m, below as less than zero, and until when the two are brought
/// together; `None` where the plan does not go by the pool or has not begun.
pub(super) fn off_plan(setup: &Setup, pool_m: f64) -> Option<(f64, NaiveDate)> {
    let planned = |date: NaiveDate| setup.plan.days.iter().find(|day| day.date == date)?.pool_m;
    let evening_m = planned(setup.begins)?;
    // a cast of the day lies between the evening before and its own; as a plan begins, it has come as it goes on
    let before = || planned(setup.begins.pred_opt()?);
    let after = || Some(2.0 * evening_m - planned(setup.begins.succ_opt()?)?);
    let morning_m = before().or_else(after).unwrap_or(evening_m);
    let nearest_m = pool_m.clamp(evening_m.min(morning_m), evening_m.max(morning_m));
    Some((pool_m - nearest_m, meets(setup)?.0))
}

fn shifted(day: PlanDay, case: &Case) -> PlanDay {
    PlanDay {
        inflow_m3s: day.inflow_m3s * case.inflow,
        // water colder than 0 C is none
        inflow_c: (day.inflow_c + case.inflow_c).max(0.0),
        ..day
    }
}

/// What a day brings. Solids of the inflow that the plan does not tell are those of the surface layer.
pub(super) fn forcing(plan: &PlanDay, sky: Option<Sky>, surface: Option<&Layer>) -> Forcing {
    let told = |told: Option<f64>, of: fn(&Layer) -> f64| told.or(surface.map(of)).unwrap_or_default();
    let inflow = Inflow {
        flow_m3s: plan.inflow_m3s,
        temperature_c: plan.inflow_c,
        oxygen_mg_l: plan.inflow_mg_l,
        salt_g_per_kg: told(plan.inflow_salt_g_per_kg, |l| l.salt_g_per_kg),
        suspended_mg_l: told(plan.inflow_suspended_mg_l, |l| l.suspended_mg_l),
    };
    Forcing { date: plan.date, sky, inflow }
}
