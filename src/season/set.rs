//! What is asked, as it flows from the water of a day.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::mix::{Asked, Blend, Drawn, Setting, draw_levels, levels, release, resolve};
use crate::profile::Column;
use crate::site::Site;
use crate::withdrawal::CrestForm;

/// What is asked, with its flows and its water.
#[derive(Debug, Clone)]
pub(super) struct Flowing {
    /// What is set, its wells shared out.
    pub(super) setting: Setting,
    /// Its levels.
    pub(super) drawn: Vec<Drawn>,
    /// What it releases.
    pub(super) release: Blend,
}

/// What is asked of a column under a pool (m). `None` where nothing flows.
pub(super) fn flowing(
    site: &Site,
    groups: &[Vec<usize>],
    column: &Column,
    asked: &Asked,
    pool_m: f64,
) -> Option<Flowing> {
    let setting = resolve(site, column, groups, asked, pool_m);
    let drawn = draw_levels(
        column,
        &levels(site, groups, &setting, pool_m, 0.5, CrestForm::Overflow),
        site.zone_factor(),
    );
    let release = release(&drawn)?.aerated(site, &drawn, 0.5);
    Some(Flowing { setting, drawn, release })
}
