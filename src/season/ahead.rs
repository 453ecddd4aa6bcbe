//! The days of a plan as one case sees them, from the cast on.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::site::Case;

use super::layers::Layer;
use super::plan::PlanDay;
use super::run::Setup;
use super::skies::Sky;
use super::step::{Forcing, Inflow};

/// Every day from the first of the season to the last of the plan, the inflow shifted as the case says. Before the
/// first row its inflow and release hold, and the pool goes straight from `pool_m` to it.
pub(super) fn ahead(setup: &Setup, pool_m: f64) -> Vec<PlanDay> {
    let Some(first) = setup.plan.days.first() else { return Vec::new() };
    let until = (first.date - setup.begins).num_days();
    let day_before = |date: chrono::NaiveDate| {
        let share = ((date - setup.begins).num_days() + 1) as f64 / (until + 1) as f64;
        PlanDay { date, pool_m: first.pool_m.map(|to_m| pool_m + share * (to_m - pool_m)), ..*first }
    };
    let before = setup.begins.iter_days().take_while(|date| *date < first.date).map(day_before);
    let planned = setup.plan.days.iter().copied().filter(|day| day.date >= setup.begins);
    before.chain(planned).map(|day| shifted(day, &setup.skies.case)).collect()
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
