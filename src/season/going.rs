//! A season under way: day after day what is set, what is decided, what the pool then does.
//!
//! Methods: `docs/methods.md`, section 8.

use std::ops::ControlFlow;

use chrono::{Days, NaiveDate, NaiveTime};

use crate::mix::limits::{Before, Check};
use crate::mix::{Asked, Day, groups, levels, release};
use crate::profile::Profile;
use crate::river;
use crate::site::{Site, Strategy};
use crate::target::DAM;
use crate::withdrawal::CrestForm;

use super::aims::asking;
use super::ahead::ahead;
use super::decide::{Choice, Chosen, Decision, NoMix, Why};
use super::layers::Layers;
use super::plan::PlanDay;
use super::run::{Choosing, Ended, Run, SeasonDay, Setup};
use super::set::{Flowing, flowing};
use super::step::{Forcing, Inflow, day};

/// Length of the day, s; exact.
const DAY_S: f64 = 86_400.0;

/// A season under way.
#[derive(Clone)]
pub(super) struct Going<'a> {
    setup: &'a Setup<'a>,
    /// The site under the air of the case, with the outages of the plan and the inflow of the day.
    site: Site,
    groups: Vec<Vec<usize>>,
    /// What is left of the plan.
    ahead: std::vec::IntoIter<PlanDay>,
    length: usize,
    layers: Layers,
    /// What is set.
    asked: Option<Asked>,
    /// Temperature of the last release, C.
    last_c: Option<f64>,
    run: Run,
}

/// What a day needs before it can be gone through.
struct Morning {
    plan: PlanDay,
    pool_m: f64,
    release_m3s: f64,
    profile: Profile,
    /// What was set, as it would flow today.
    set: Option<Flowing>,
}
