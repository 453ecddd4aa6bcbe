//! The site: pool, outlets, wells, limits and targets, raw as read and checked.
//!
//! [`Raw`] holds what a file said, in SI; [`Site`] can only be made from it by [`Site::check`], which
//! reports every problem at once.

mod aeration;
mod check;
mod learned;
mod levels;
mod limits;
mod order_texts;
mod outlet;
mod pool;
mod raw;
mod raw_river;
mod raw_season;
mod river;
mod season;
mod travel;

use chrono::{FixedOffset, NaiveDate};

use crate::series::Coverage;
use crate::target::Target;
use crate::units::{Datum, Folder};

pub use aeration::Aeration;
pub use learned::{Learned, RawLearned, WINDOW_DAYS};
pub use levels::level_groups;
pub use limits::{
    Avoid, Avoided, Bins, Block, Crew, GenerationLost, Layer, Limits, Outage, Reserved, ShareRule, Undrawn,
};
pub use order_texts::{HoldPoint, OrderTexts, RawOrder};
pub use outlet::{Kind, Leakage, OpenPart, Opens, Outlet, Position, SAME_OPENING, Shape};
pub use pool::{Pool, RawRow, WidthSource};
pub use raw::{
    Raw, RawAeration, RawAvoid, RawLimits, RawNow, RawOutage, RawOutlet, RawPool, RawReserved, RawShare,
    RawTarget, RawUndrawn, RawWell,
};
pub use raw_river::{RawAfterbay, RawInflow, RawMonthly, RawPoint, RawReach, RawRiver, RawSeepage};
pub use raw_season::{RawCase, RawReserve, RawSeason, RawStages};
pub use river::{Afterbay, Decay, Inflow, Point, Reach, River, Seepage, Surface, Yearly};
pub use season::{Case, Knobs, Reserve, SeasonInputs, Stages, Strategy};
pub use travel::{BULK_PER_WATER, MOST_TRAVEL_H, ROUGHNESS, hours_at};

/// Where the dam stands.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Whereabouts {
    /// Altitude above sea level of elevation 0 of the site's datum, m.
    pub altitude_m: Option<f64>,
    /// Latitude, degrees north.
    pub latitude_deg: Option<f64>,
}

/// A wet well: a shaft shared by gates, drained by one conduit.
#[derive(Debug, Clone, PartialEq)]
pub struct Well {
    /// Name, unique among wells and outlets.
    pub name: String,
    /// Elevation of the conduit, m.
    pub conduit_m: f64,
    /// Most gates open at once.
    pub max_open: Option<usize>,
    /// Most head across the structure, m.
    pub max_head_loss_m: Option<f64>,
    /// Least flow when it flows, m3/s.
    pub min_flow_m3s: f64,
    /// Most flow, m3/s.
    pub max_flow_m3s: Option<f64>,
    /// Area of the shaft in plan, m2.
    pub plan_area_m2: Option<f64>,
    /// What its conduit does to oxygen.
    pub aeration: Option<Aeration>,
}

/// Limits of the total release.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct ReleaseLimits {
    /// Least total release, m3/s.
    pub min_m3s: Option<f64>,
    /// Most total release, m3/s.
    pub max_m3s: Option<f64>,
    /// Total release that is wanted now, m3/s.
    pub wanted_m3s: Option<f64>,
}

/// What is set at an outlet now.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum SetNow {
    /// A flow, m3/s.
    Flow(f64),
    /// An opening, 0 to 1.
    Opening(f64),
}

/// Water chemistry that turns readings into density.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Chemistry {
    /// Dissolved solids, mg/L, per uS/cm of specific conductance (recalled: 0.6 to 0.9 by water; default 0.65).
    pub tds_per_us_cm: f64,
    /// Density of suspended solids, kg/m3 (quartz; default 2650).
    pub solids_kg_m3: f64,
}

impl Default for Chemistry {
    fn default() -> Self {
        Self {
            tds_per_us_cm: crate::water::SOLIDS_PER_CONDUCTANCE,
            solids_kg_m3: crate::water::SEDIMENT_DENSITY_KG_M3,
        }
    }
}

/// When a cast is flagged; every figure is a choice the site can change.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CastChecks {
    /// Longest stretch without a sample, m.
    pub gap_m: f64,
    /// Longest stretch beyond the last sample, m.
    pub extrapolate_m: f64,
    /// A reading that stands off both neighbours by more is a spike, C.
    pub spike_c: f64,
    /// The same for oxygen, mg/L.
    pub spike_mg_l: f64,
    /// Oxygen above this share of saturation is flagged.
    pub oxygen_share: f64,
    /// A cast older than this is ageing, days.
    pub ageing_days: f64,
    /// A cast older than this is stale, days.
    pub stale_days: f64,
    /// More heat gained or lost between casts than weather brings, W per m2 of surface.
    pub heat_w_m2: f64,
    /// The river below the dam may be this much colder or warmer than any water of the cast, C.
    pub tailwater_c: f64,
}

impl Default for CastChecks {
    fn default() -> Self {
        Self {
            gap_m: 10.0,
            extrapolate_m: 5.0,
            spike_c: 1.0,
            spike_mg_l: 2.0,
            oxygen_share: 1.25,
            ageing_days: 7.0,
            stale_days: 14.0,
            heat_w_m2: 400.0,
            tailwater_c: 1.0,
        }
    }
}

/// Spread of the perturbed cases behind the band (methods section 9; defaults are choice).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BandInputs {
    /// Number of members.
    pub members: usize,
    /// Seed of the draws.
    pub seed: u64,
    /// Common offset of the cast, standard deviation, C.
    pub cast_c: f64,
    /// Common offset of the oxygen readings, standard deviation, mg/L.
    pub cast_mg_l: f64,
    /// Heave of the layers, standard deviation at age 0, m.
    pub heave_m: f64,
    /// Heave added per day of age, m.
    pub heave_m_per_day: f64,
    /// Most heave (standard deviation), m.
    pub heave_max_m: f64,
    /// Flow, standard deviation as a share.
    pub flow_share: f64,
    /// Least zone factor.
    pub zone_low: f64,
    /// Zone factor between the two halves of the members; 1 unless another was learned.
    pub zone_middle: f64,
    /// Greatest zone factor.
    pub zone_high: f64,
    /// What the method misses, standard deviation, C.
    pub release_c: f64,
    /// What the method misses, standard deviation, mg/L.
    pub release_mg_l: f64,
}

impl Default for BandInputs {
    fn default() -> Self {
        Self {
            members: 200,
            seed: 1,
            cast_c: 0.2,
            cast_mg_l: 0.3,
            heave_m: 1.0,
            heave_m_per_day: 0.1,
            heave_max_m: 3.0,
            flow_share: 0.02,
            zone_low: 0.70,
            zone_middle: 1.0,
            zone_high: 1.15,
            release_c: 0.4,
            release_mg_l: 0.5,
        }
    }
}

/// A cast the site file names because the logger's own file lacks its time or pool.
#[derive(Debug, Clone, PartialEq)]
pub struct ListedCast {
    /// File inside `profiles/`.
    pub file: String,
    /// When it was taken, as written.
    pub taken: Option<String>,
    /// Pool elevation, m.
    pub pool_m: Option<f64>,
}

/// A checked site.
#[derive(Debug, Clone, PartialEq)]
pub struct Site {
    /// Name.
    pub name: String,
    /// Name of the river below the dam.
    pub river_name: Option<String>,
    /// The river down to where rules apply.
    pub river: Option<River>,
    /// Units of bare numbers in the folder.
    pub units: Folder,
    /// Datum of every elevation.
    pub datum: Datum,
    /// Offset of local times.
    pub offset: FixedOffset,
    /// Where it stands.
    pub place: Whereabouts,
    /// Pool table.
    pub pool: Pool,
    /// Wells.
    pub wells: Vec<Well>,
    /// Outlets in the order of the file.
    pub outlets: Vec<Outlet>,
    /// Limits of the total release.
    pub release: ReleaseLimits,
    /// Limits beside those of single outlets, wells and the total.
    pub limits: Limits,
    /// Parts of the day with their own release; empty for a steady day.
    pub blocks: Vec<Block>,
    /// Inflow to the pool, m3/s.
    pub inflow_m3s: Option<f64>,
    /// Differences too small to order by.
    pub bins: Bins,
    /// What is set now: outlet index and setting.
    pub now: Vec<(usize, SetNow)>,
    /// Totals of wells now: well index and flow, m3/s.
    pub now_wells: Vec<(usize, f64)>,
    /// Targets.
    pub targets: Vec<Target>,
    /// Type of the water year, as the rules name it.
    pub year_type: Option<String>,
    /// Events that end rules, with their dates.
    pub events: Vec<(String, NaiveDate)>,
    /// How much of a record must be there.
    pub coverage: Coverage,
    /// Thresholds of cold water, C.
    pub cold_water_c: Vec<f64>,
    /// Water chemistry.
    pub water: Chemistry,
    /// When a cast is flagged.
    pub checks: CastChecks,
    /// Spread of the perturbed cases.
    pub band: BandInputs,
    /// What was learned and is applied: [`Site::learned`].
    applied: Option<learned::Applied>,
    /// Days that learning looks back.
    pub learning_days: u64,
    /// Header words of the logger, mapped to ours.
    pub columns: Vec<(String, String)>,
    /// Casts whose time or pool the site file gives.
    pub casts: Vec<ListedCast>,
    /// How the season ahead is looked at.
    pub season: SeasonInputs,
    /// Texts of a change order, and how its moves are made.
    pub order: OrderTexts,
    /// Invented data.
    pub demonstration: bool,
}

impl Site {
    /// Index of an outlet by name.
    pub fn outlet(&self, name: &str) -> Option<usize> {
        self.outlets.iter().position(|o| o.name == name)
    }

    /// Index of a well by name.
    pub fn well(&self, name: &str) -> Option<usize> {
        self.wells.iter().position(|w| w.name == name)
    }

    /// Targets valid on a date, each with its index.
    pub fn targets_on(&self, date: NaiveDate) -> impl Iterator<Item = (usize, &Target)> {
        let year_type = self.year_type.as_deref();
        self.targets.iter().enumerate().filter(move |(_, rule)| rule.valid_on(date, year_type))
    }

    /// Rules within their span on a date that do not hold all the same: how many by the type of water year, and how many
    /// because an event has ended them.
    pub fn targets_off(&self, date: NaiveDate) -> (usize, usize) {
        let year_type = self.year_type.as_deref();
        let off = |rule: &&Target| rule.span.contains(date) && !rule.valid_on(date, year_type);
        let by_year = |rule: &&Target| !rule.holds_in(year_type);
        let (year, event): (Vec<&Target>, Vec<&Target>) = self.targets.iter().filter(off).partition(by_year);
        (year.len(), event.len())
    }

    /// What happens to the oxygen of water that leaves through an outlet: on a well, in its conduit.
    pub fn aeration(&self, outlet: usize) -> Option<&Aeration> {
        let outlet = self.outlets.get(outlet)?;
        match outlet.well {
            Some(well) => self.wells.get(well)?.aeration.as_ref(),
            None => outlet.aeration.as_ref(),
        }
    }

    /// Whether the site tells of any conduit what it does to oxygen.
    pub fn aerates(&self) -> bool {
        (0..self.outlets.len()).any(|outlet| self.aeration(outlet).is_some())
    }

    /// Power that flows (m3/s) through outlets do not make, MW; `None` where no outlet tells it.
    pub fn generation_lost_mw(&self, flows: impl Iterator<Item = (usize, f64)>) -> Option<f64> {
        let per = |outlet: usize| {
            let lost = self.outlets.get(outlet)?.generation_lost?;
            Some(lost.power_mw / lost.flow_m3s)
        };
        (0..self.outlets.len()).find_map(per)?;
        Some(flows.filter_map(|(outlet, flow)| Some(flow * per(outlet)?)).sum())
    }

    /// Oxygen at saturation below the dam, mg/L, of water that leaves it: the river begins at the elevation of the
    /// bed (choice).
    pub fn saturation_below_mg_l(&self, temperature_c: f64, salt_g_per_kg: f64) -> f64 {
        let pressure = self.surface_pressure_atm(self.pool.bed_m);
        crate::water::saturation_mg_l(temperature_c, salt_g_per_kg, pressure)
    }

    /// Air pressure at the water surface, atm; at sea level where the altitude is not known.
    pub fn surface_pressure_atm(&self, pool_m: f64) -> f64 {
        self.place.altitude_m.map_or(1.0, |altitude| crate::water::pressure_atm(altitude + pool_m))
    }
}
