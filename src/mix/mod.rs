//! One setting: what each level draws, what the blend is, how sure, and how it stands.

mod band;
mod beware;
mod blend;
mod conflict;
mod day;
mod gain;
mod judge;
mod levels;
pub mod limits;
mod links;
mod place;
mod reach;
pub mod split;
mod standing;
mod wells;

pub use band::{GREATEST_LOSS, LEAST_LOSS, Member, Perturbed, Plain, Spread, members, quantile};
pub use beware::LOW_OXYGEN_SHARE;
pub use blend::{Blend, Drawn, blend, draw_levels, overlapping, release, release_joined};
pub use conflict::{Conflict, conflicts};
pub use day::{Day, RuleToday, reference_days};
pub use gain::learned_mg_l;
pub use judge::{Mix, checks, judge, refusals};
pub use levels::{Gate, Level, Seat, Setting, as_one, groups, levels, seat};
pub use links::Links;
pub use reach::{OutletState, outlet_states, reach_m};
pub use standing::{Held, Part, TargetStanding, held, is_wish, standings};
pub use wells::{Asked, WellState, port, resolve, shared_out};
