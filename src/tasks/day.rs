//! A day of several blocks: gates that stand still while the release changes.

use crate::mix::{Held, Mix, Perturbed, Setting, held, judge};
use crate::problem::Problem;

use super::setting::given;
use super::words::Given;
use super::{Context, Failure};

/// One block of the day under some openings.
#[derive(Debug, Clone)]
pub struct BlockAnswer {
    /// Index of the block in the site.
    pub block: usize,
    /// Its share of the day.
    pub share: f64,
    /// What its release makes of the openings.
    pub setting: Setting,
    /// What comes out.
    pub mix: Mix,
}

/// A day of several blocks: what a gauge sees, and what heat balances use.
#[derive(Debug, Clone)]
pub struct DayAnswer {
    /// The blocks, in the order of the site.
    pub blocks: Vec<BlockAnswer>,
    /// Temperature by time, C.
    pub time_mean_c: f64,
    /// Coldest and warmest block, C.
    pub extremes_c: [f64; 2],
    /// Temperature by flow, C.
    pub by_flow_c: f64,
    /// Oxygen by time, mg/L.
    pub time_mean_mg_l: Option<f64>,
    /// Standings over the day, and what arrives at the points.
    pub held: Held,
}

/// The site's blocks under openings alone, where it has any and no release is given; the openings are then held all
/// day and each block's release is what the one well with open gates carries.
///
/// # Errors
/// As [`given`].
pub(super) fn day(
    context: &Context,
    perturbed: &Perturbed,
    asked: &Given,
) -> Result<Option<(DayAnswer, Vec<Problem>)>, Failure> {
    let site = context.site();
    let by_opening = asked.flows.is_empty() && asked.totals.is_empty() && !asked.open.is_empty();
    let by_opening = by_opening && asked.release_m3s.is_none();
    if site.blocks.is_empty() || !by_opening {
        return Ok(None);
    }
    let (mut notes, of_day) = (Vec::new(), context.day());
    let mut blocks = Vec::new();
    for (block, of) in site.blocks.iter().enumerate() {
        let of_block = Given { release_m3s: Some(of.flow_m3s), ..asked.clone() };
        let understood = given(context, &of_block)?;
        notes = understood.notes;
        let Some(mix) = judge(site, &context.profile, perturbed, &understood.setting, &of_day) else {
            return Ok(None);
        };
        blocks.push(BlockAnswer { block, share: of.hours / 24.0, setting: understood.setting, mix });
    }
    let parts: Vec<_> = blocks.iter().map(|b| (b.share, &b.mix.release, &b.mix.spread)).collect();
    let held = held(site, &parts, &of_day);
    let temperatures = || blocks.iter().map(|b| b.mix.release.temperature_c);
    let flow = |b: &BlockAnswer| b.share * b.mix.release.flow_m3s;
    let answer = DayAnswer {
        time_mean_c: blocks.iter().map(|b| b.share * b.mix.release.temperature_c).sum(),
        extremes_c: [
            temperatures().fold(f64::INFINITY, f64::min),
            temperatures().fold(f64::NEG_INFINITY, f64::max),
        ],
        by_flow_c: blocks.iter().map(|b| flow(b) * b.mix.release.temperature_c).sum::<f64>()
            / blocks.iter().map(flow).sum::<f64>(),
        time_mean_mg_l: blocks.iter().map(|b| Some(b.share * b.mix.release.oxygen_below_mg_l?)).sum(),
        held,
        blocks,
    };
    Ok(Some((answer, notes)))
}
