//! The season ahead: layers that move with their water, a plan, a strategy, and what comes of them.
//!
//! A [`Plan`] tells the pool and the inflow of every day, [`Skies`] the air of one case. [`Layers`] begin with the cast
//! and go through the days ([`day`]); a [`Strategy`](crate::site::Strategy) sets the gates. A [`Run`] is one such season,
//! an [`Outcome`] what people decide by.
//!
//! Methods: `docs/methods.md`, section 8.

mod balance;
mod decide;
mod layers;
mod outcome;
mod plan;
mod refine;
mod run;
mod set;
mod skies;
mod step;
mod tally;

pub use balance::{Balance, Terms};
pub use decide::{Decision, Why};
pub use layers::{Layer, Layers};
pub use outcome::{ColdDay, ColdWater, Exhausted, GateLife, Outcome, StageDate, Stopping, outcome};
pub use plan::{Plan, PlanDay, RawPlan, RawPlanRow, Schedule};
pub use run::{Choosing, Ended, Run, SeasonDay, Setup, run};
pub use skies::{Skies, Sky};
pub use step::{Forcing, Inflow, Stepped, Unbalanced, day};
pub use tally::{Score, TargetTally, tallies};
