//! The season ahead: layers that move with their water, a plan, a strategy, and what comes of them.
//!
//! A [`Plan`] tells the pool and the inflow of every day, [`Skies`] the air of one case. [`Layers`] begin with the cast
//! and go through the days ([`day`]); a [`Strategy`](crate::site::Strategy) sets the gates. A [`Run`] is one such season,
//! an [`Outcome`] what people decide by.
//!
//! Methods: `docs/methods.md`, section 8.

mod ahead;
mod aims;
mod balance;
mod beware;
mod called;
mod cold;
mod decide;
mod deciding;
mod diffusion;
mod exact;
mod gates;
mod going;
mod inflow;
mod layers;
mod learn;
mod mixing;
mod needed;
mod outcome;
mod outflow;
mod oxygen;
mod plan;
mod price;
mod reached;
mod refine;
mod reshape;
mod run;
mod search;
mod set;
mod skies;
mod stages;
mod step;
mod strategy;
mod surface;
mod tally;
mod thrift;

pub use balance::{Balance, Terms};
pub use decide::{Decision, Why};
pub use diffusion::{diffuse, diffusivity_m2_s};
pub use inflow::{Neutral, neutral};
pub use layers::{Layer, Layers};
pub use learn::{
    AS_NEAR, Apart, DIFFUSION, Fitted, LEAST_DAYS, LEAST_SAMPLES, LIGHT_PER_M, Learned, Past,
    WATER_DEMAND_MG_L_DAY, WIND, learn, past,
};
pub use mixing::{friction_velocity_m_s, mixing_energy_j, wind_work_j_m2};
pub use needed::{Amount, Found, Needed, Stretch, needed};
pub use outcome::{
    Asks, ColdDay, ColdWater, Exhausted, Fully, GateLife, GateMoves, Left, Outcome, Reached, Spell,
    StageDate, StageFall, Stopping, Turned, outcome,
};
pub use oxygen::{demand_at, left_mg_l};
pub use plan::{Plan, PlanDay, RawPlan, RawPlanRow, Schedule};
pub use price::{Change, Difference, PRICE_MEMBERS, Price, Pricing, prices};
pub use run::{Choosing, Ended, Run, SeasonDay, Setup, passed, run};
pub use skies::{Skies, Sky};
pub use step::{Forcing, Inflow, MOST_OPEN, Stepped, Unbalanced, day, part_of_day};
pub use tally::{Score, TargetTally, is_in_degrees, lost, tallies};
