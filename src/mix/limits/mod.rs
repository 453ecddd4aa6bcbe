//! Limits held against a setting: what each asks, what was found, and the room left or missed.
//!
//! Every limit that applies gives one [`Check`], kept or broken. Checks hold numbers only, since a search asks for
//! them by the hundred thousand; words are made when somebody reads them.

mod gates;
mod moves;
mod unchecked;
mod whole;
mod words;

use std::collections::HashSet;

use crate::site::Site;
use crate::units::Dimension;

pub use gates::{head, level, passing, still, well};
pub use moves::{Move, Moves, is_moved, moved, moves, notice};
pub use unchecked::not_checked;
pub use whole::{Before, Whole, change, change_times, whole};

/// A limit is missed where its room is below zero by more than this share of its bound: round-off of sums (choice).
const SAME: f64 = 1e-9;

/// Whose a limit is, the weightiest first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Group {
    /// The works themselves: what breaks or shakes them.
    Structure,
    /// The plan by which the pool is run.
    WaterControlPlan,
    /// What lives in the pool and the river, and who drinks from them.
    Environment,
    /// Crew and power.
    Convenience,
}

impl Group {
    /// The group in words.
    pub fn words(self) -> &'static str {
        match self {
            Self::Structure => "structure",
            Self::WaterControlPlan => "water control plan",
            Self::Environment => "environment",
            Self::Convenience => "convenience",
        }
    }
}

/// What a limit is measured in.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Measure {
    /// A quantity in its SI unit; for [`Dimension::Percent`] a share, 0 to 1.
    Quantity(Dimension),
    /// Gates or moves.
    Count,
    /// Crew hours.
    Hours,
    /// Days.
    Days,
}

impl Measure {
    /// A figure of a check in the unit of [`symbol`](Self::symbol).
    pub fn figure(self, value: f64) -> f64 {
        if self == Self::Quantity(Dimension::Percent) { 100.0 * value } else { value }
    }

    /// Unit of a margin as data give it: SI, percent for shares.
    pub fn symbol(self) -> &'static str {
        match self {
            Self::Quantity(dimension) => dimension.units().next().map_or("", |unit| unit.symbol()),
            Self::Count => "count",
            Self::Hours => "hours",
            Self::Days => "days",
        }
    }
}

macro_rules! rules {
    ($($rule:ident: $name:literal, $group:ident, $measure:expr, $meaning:literal;)+) => {
        /// A kind of limit; by group, and in the order of its sentence within it.
        #[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub enum Rule {
            $(#[doc = $meaning] $rule,)+
        }

        impl Rule {
            /// Every rule.
            pub const ALL: &'static [Self] = &[$(Self::$rule),+];

            /// Its key in the site file, or the word for what no key gives.
            pub fn name(self) -> &'static str {
                match self {
                    $(Self::$rule => $name,)+
                }
            }

            /// Whose it is.
            pub fn group(self) -> Group {
                match self {
                    $(Self::$rule => Group::$group,)+
                }
            }

            /// What it is measured in.
            pub fn unit(self) -> Measure {
                use Dimension::{
                    Concentration, Flow, Length, Percent, TemperatureDifference, Velocity,
                };
                use Measure::{Count, Days, Hours, Quantity};
                match self {
                    $(Self::$rule => $measure,)+
                }
            }
        }
    };
}

rules! {
    Outage: "outage", Structure, Days, "An outlet out of use; its room is the days until it begins or, missed, ends.";
    Dry: "dry", Structure, Quantity(Length), "An opening at or above the water.";
    PoolWindow: "pool_window", Structure, Quantity(Length), "Pool elevations at which an outlet may be used.";
    MinSubmergence: "min_submergence", Structure, Quantity(Length), "Water above the top of the open part.";
    AvoidOpening: "avoid.open", Structure, Quantity(Percent), "Openings to avoid.";
    AvoidFlow: "avoid.flow", Structure, Quantity(Flow), "Flows of an outlet to avoid.";
    MovesUnderFlow: "moves_under_flow", Structure, Quantity(Flow), "A gate not to be moved while water passes.";
    FlowMin: "flow.min", Structure, Quantity(Flow), "Least flow of an open outlet.";
    FlowMax: "flow.max", Structure, Quantity(Flow), "Most flow of an outlet, as given.";
    Capacity: "capacity", Structure, Quantity(Flow), "Most flow of an outlet, computed.";
    MaxOpen: "max_open", Structure, Count, "Most gates of a well open at once.";
    WellMinFlow: "min_flow", Structure, Quantity(Flow), "Least flow of a well that flows.";
    WellMaxFlow: "max_flow", Structure, Quantity(Flow), "Most flow of a well.";
    MaxHeadLoss: "max_head_loss", Structure, Quantity(Length), "Most head between pool and well.";
    ReleaseMin: "release.min", WaterControlPlan, Quantity(Flow), "Least total release.";
    ReleaseMax: "release.max", WaterControlPlan, Quantity(Flow), "Most total release.";
    FlowChangePerHour: "max_flow_change_per_hour", WaterControlPlan, Quantity(Flow), "Change of the release in an hour.";
    FlowChangePerDay: "max_flow_change_per_day", WaterControlPlan, Quantity(Flow), "Change of the release in a day.";
    Drawdown: "max_drawdown_per_day", WaterControlPlan, Quantity(Length), "Fall of the pool in a day.";
    Reserved: "reserved", Environment, Quantity(Flow), "Flow that an outlet must always give.";
    EntranceVelocity: "max_entrance_velocity", Environment, Quantity(Velocity), "Velocity through the open part.";
    Undrawn: "undrawn", Environment, Quantity(Length), "Water that no zone may reach.";
    TemperatureChangePerHour: "max_temperature_change_per_hour", Environment, Quantity(TemperatureDifference), "Change of the release temperature in an hour.";
    TemperatureChangePerDay: "max_temperature_change_per_day", Environment, Quantity(TemperatureDifference), "Change of the release temperature in a day.";
    SolidsMax: "solids_max", Environment, Quantity(Concentration), "Solids in the release.";
    ShareMin: "share.min", Convenience, Quantity(Percent), "Least share of the release through named outlets.";
    ShareMax: "share.max", Convenience, Quantity(Percent), "Greatest share of the release through named outlets.";
    MaxMoves: "max_moves", Convenience, Count, "Moves in one change.";
    MaxCrewHours: "max_crew_hours", Convenience, Hours, "Crew hours of one change.";
}

/// What a limit is of.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Of {
    /// An outlet, by index.
    Outlet(usize),
    /// A well, by index.
    Well(usize),
    /// A share rule, by index.
    Share(usize),
    /// The release or the change as a whole.
    Whole,
}

impl Of {
    /// Name of the outlet, well or share rule; `None` for the whole.
    pub fn name(self, site: &Site) -> Option<&str> {
        match self {
            Self::Outlet(i) => site.outlets.get(i).map(|o| o.name.as_str()),
            Self::Well(i) => site.wells.get(i).map(|w| w.name.as_str()),
            Self::Share(i) => site.limits.shares.get(i).map(|s| s.name.as_str()),
            Self::Whole => None,
        }
    }
}

/// One limit held against a setting. All figures in SI, shares 0 to 1.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Check {
    /// The limit.
    pub rule: Rule,
    /// What it is of.
    pub of: Of,
    /// Place in the list the limit comes from (`outages`, `avoid`, `reserved`, `undrawn`); 0 where it is none.
    pub item: usize,
    /// What was found.
    pub found: f64,
    /// What is asked.
    pub bound: f64,
    /// Room left, negative where missed; endless where nothing bounds it.
    pub room: f64,
}

impl Check {
    /// What was found is to be no less than the bound.
    fn least(rule: Rule, of: Of, found: f64, bound: f64) -> Self {
        Self { rule, of, item: 0, found, bound, room: found - bound }
    }

    /// What was found is to be no more than the bound.
    fn most(rule: Rule, of: Of, found: f64, bound: f64) -> Self {
        Self { rule, of, item: 0, found, bound, room: bound - found }
    }

    /// What was found lies strictly inside a stretch, or outside with room to the nearer end.
    fn outside(rule: Rule, of: Of, found: f64, (from, to): (f64, f64)) -> Self {
        let bound = if found - from < to - found { from } else { to };
        let room = (from - found).max(found - to);
        Self { rule, of, item: 0, found, bound, room }
    }

    fn item(self, item: usize) -> Self {
        Self { item, ..self }
    }

    /// Whether the limit is missed. One met exactly is kept, but an opening whose centre-line is level with the water
    /// gives none.
    pub fn broken(&self) -> bool {
        let slack = if self.bound.is_finite() { SAME * self.bound.abs().max(1.0) } else { SAME };
        self.room < -slack || (self.rule == Rule::Dry && self.room <= 0.0)
    }

    /// The room in the unit of the rule's [`Measure::symbol`].
    pub fn margin(&self) -> f64 {
        self.rule.unit().figure(self.room)
    }
}

/// The rules that checks hold, with what they are of.
fn held(checks: &[Check]) -> HashSet<(Rule, Of)> {
    checks.iter().map(|c| (c.rule, c.of)).collect()
}
