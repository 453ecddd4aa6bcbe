//! The split that gives a wanted temperature: of a setting, its two largest parts varied, everything else kept.

use crate::mix::{draw_levels, groups, levels, release};
use crate::target::{DAM, Target};
use crate::withdrawal::CrestForm;

use super::rank::{Part, Root};
use super::words::Given;
use super::{Context, Failure, given};

/// Shares of two parts between which roots are sought (choice).
const PLACES: u32 = 40;
/// Halvings of a root (choice: beyond any meter).
const HALVINGS: usize = 40;

/// A root gives the temperature wanted this nearly, C (choice: half of the tenth that is shown).
const ROOT_C: f64 = 0.05;

/// A setting solved for a temperature.
#[derive(Debug, Clone, PartialEq)]
pub struct Solved {
    /// The two parts that are varied.
    pub between: [Part; 2],
    /// The temperature wanted, C.
    pub wanted_c: f64,
    /// Every split found, each with the setting it makes.
    pub roots: Vec<(Root, Given)>,
    /// Coldest and warmest release over all splits, C.
    pub bracket_c: [f64; 2],
}

/// The temperature a site prefers on the date: of the first rule valid for the dam that names one, C.
pub fn preferred_c(context: &Context) -> Option<f64> {
    let at_dam = |t: &Target| t.point == DAM && t.is_of_temperature();
    let valid = context.site().targets_on(context.on.date_naive());
    valid.filter(|(_, t)| at_dam(t)).find_map(|(_, t)| t.preferred_c)
}

/// The splits of a setting's two largest parts, outlets set by flow or totals of wells, that give a temperature.
///
/// # Errors
/// [`Failure::Usage`] where fewer than two parts can be varied; as [`given`](super::given()) for the setting itself.
pub fn solve(context: &Context, asked: &Given, wanted_c: f64) -> Result<Solved, Failure> {
    given(context, asked)?;
    let mut parts = parts(asked);
    parts.sort_by(|a, b| b.1.total_cmp(&a.1));
    let Some(&[(a, flow_a), (b, flow_b)]) = parts.get(..2).and_then(|p| p.first_chunk::<2>()) else {
        let words = "solving takes two parts to split between: open gates of two wells, or a second outlet with a flow";
        return Err(Failure::Usage(words.into()));
    };
    let (between, both) = ([a, b], flow_a + flow_b);
    let groups = groups(context.site());
    let water = |share: f64| {
        let asked = with(asked, between, [both * share, both * (1.0 - share)]);
        // a split no outlet can pass is no split
        let setting = given(context, &asked).ok()?.setting;
        let (site, profile) = (context.site(), &context.profile);
        let levels = levels(site, &groups, &setting, profile.pool_m, 0.5, CrestForm::Overflow);
        let drawn = draw_levels(&profile.column, &levels, site.zone_factor());
        let release = release(&drawn)?.aerated(site, &drawn, 0.5);
        Some((release.temperature_c, release.oxygen_below_mg_l))
    };
    let (roots, bracket_c) = roots(&water, both, wanted_c);
    let roots = roots.into_iter().map(|root| (root.clone(), with(asked, between, root.flows_m3s))).collect();
    Ok(Solved { between, wanted_c, roots, bracket_c })
}

/// Temperature (C) and oxygen (mg/L) of a split, by the share of its first part.
pub(super) type Water<'a> = &'a dyn Fn(f64) -> Option<(f64, Option<f64>)>;

/// Every split of a flow (m3/s) between two parts that gives a temperature, and the coldest and warmest over all.
pub(super) fn roots(water: Water, both_m3s: f64, wanted_c: f64) -> (Vec<Root>, [f64; 2]) {
    let places: Vec<(f64, f64)> = (0..=PLACES)
        .filter_map(|i| {
            let share = f64::from(i) / f64::from(PLACES);
            Some((share, water(share)?.0))
        })
        .collect();
    let mut roots = Vec::new();
    let mut root = |share: f64| {
        // what halving finds at a jump, or where some splits cannot be, is no root
        let near = |water: &(f64, Option<f64>)| (water.0 - wanted_c).abs() < ROOT_C;
        if let Some((temperature_c, oxygen_mg_l)) = water(share).filter(near) {
            let flows_m3s = [both_m3s * share, both_m3s * (1.0 - share)];
            roots.push(Root { share, flows_m3s, temperature_c, oxygen_mg_l, breaks: Vec::new() });
        }
    };
    for pair in places.windows(2) {
        let [(mut low, at_low), (mut high, at_high)] = [pair[0], pair[1]];
        let (at_low, at_high) = (at_low - wanted_c, at_high - wanted_c);
        if at_low.abs() < 1e-12 {
            root(low);
        } else if at_low * at_high < 0.0 {
            for _ in 0..HALVINGS {
                let middle = 0.5 * (low + high);
                match water(middle) {
                    Some((t, _)) if (t - wanted_c) * at_low > 0.0 => low = middle,
                    _ => high = middle,
                }
            }
            root(0.5 * (low + high));
        }
    }
    if let Some(&(share, at)) = places.last()
        && (at - wanted_c).abs() < 1e-12
    {
        root(share);
    }
    let temperatures = || places.iter().map(|p| p.1);
    let bracket_c =
        [temperatures().fold(f64::INFINITY, f64::min), temperatures().fold(f64::NEG_INFINITY, f64::max)];
    (roots, bracket_c)
}

/// What can be varied, with its flow, m3/s: outlets set by flow, and wells by their total.
fn parts(asked: &Given) -> Vec<(Part, f64)> {
    let direct = asked.flows.iter().map(|g| (Part::Outlet(g.outlet), g.flow_m3s));
    direct.chain(asked.totals.iter().map(|t| (Part::Well(t.0), t.1))).collect()
}

/// The same with other flows of two parts.
fn with(asked: &Given, parts: [Part; 2], flows_m3s: [f64; 2]) -> Given {
    let mut out = asked.clone();
    for (part, flow) in parts.into_iter().zip(flows_m3s) {
        match part {
            Part::Outlet(outlet) => {
                out.flows.iter_mut().filter(|g| g.outlet == outlet).for_each(|g| g.flow_m3s = flow);
            }
            Part::Well(well) => out.totals.iter_mut().filter(|t| t.0 == well).for_each(|t| t.1 = flow),
        }
    }
    out
}
