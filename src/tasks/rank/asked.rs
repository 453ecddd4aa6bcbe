//! What a ranking is asked, as typed.

use crate::mix::Setting;
use crate::problem::Problem;
use crate::rank::Criterion;
use crate::tasks::{Context, Failure};
use crate::units::Dimension;

/// Step of the split where none is asked for, as a share of the release (choice).
const STEP: f64 = 0.05;
/// Finest step (choice).
const FINEST: f64 = 0.01;

/// What a ranking is asked, as typed.
#[derive(Debug, Clone, PartialEq)]
pub struct RankAsked {
    /// Total release.
    pub release: Option<String>,
    /// The setting now, gate by gate: `N1=30` or `N1=50%`; empty for the site's own.
    pub now: Vec<String>,
    /// Step of the split, percent.
    pub step: Option<String>,
    /// Criteria by name, comma between; those not named follow in their usual order.
    pub order: Option<String>,
    /// Number of mixes shown.
    pub top: usize,
    /// Gates left out, by name.
    pub without: Vec<String>,
}

impl Default for RankAsked {
    fn default() -> Self {
        Self { release: None, now: Vec::new(), step: None, order: None, top: 10, without: Vec::new() }
    }
}

/// Where the total release comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ReleaseFrom {
    /// The user named it.
    Asked,
    /// The blocks of the day in the site file.
    Blocks,
    /// `release.wanted` in the site file.
    Wanted,
    /// What is released now.
    Now,
    /// The least release of the site file.
    Least,
}

impl ReleaseFrom {
    /// As every output says it.
    pub fn words(self) -> &'static str {
        match self {
            Self::Asked => "as asked",
            Self::Blocks => "the blocks of the day in the site file",
            Self::Wanted => "release.wanted in the site file",
            Self::Now => "as much as now",
            Self::Least => "release.min in the site file",
        }
    }
}

/// What is asked, understood.
pub(super) struct Plan {
    pub(super) steps: usize,
    pub(super) order: Vec<Criterion>,
    pub(super) without: Vec<usize>,
    pub(super) notes: Vec<Problem>,
}

pub(super) fn plan(context: &Context, asked: &RankAsked) -> Result<Plan, Failure> {
    let site = context.site();
    let mut notes = Vec::new();
    let step = match &asked.step {
        None => STEP,
        Some(text) => site
            .units
            .parse(text, Dimension::Percent)
            .map(|percent| percent / 100.0)
            .map_err(|error| Failure::Usage(format!("--step {text}: {error}")))?,
    };
    if !(FINEST..=1.0).contains(&step) {
        return Err(Failure::Usage(format!(
            "--step: {:.1} % is outside {:.0} to 100 %",
            100.0 * step,
            100.0 * FINEST
        )));
    }
    let steps = (1..=100_usize)
        .min_by(|a, b| (1.0 / *a as f64 - step).abs().total_cmp(&(1.0 / *b as f64 - step).abs()))
        .unwrap_or(20);
    if (1.0 / steps as f64 - step).abs() > 1e-9 {
        let words = format!(
            "--step: {:.2} % is taken, of which there are {steps} in the release",
            100.0 / steps as f64
        );
        notes.push(Problem::note("step", words));
    }
    let without = asked
        .without
        .iter()
        .map(|name| {
            site.outlet(name).ok_or_else(|| {
                let names: Vec<&str> = site.outlets.iter().map(|o| o.name.as_str()).collect();
                Failure::Usage(format!(
                    "--without {name}: no gate is named `{name}`; there are {}",
                    names.join(", ")
                ))
            })
        })
        .collect::<Result<Vec<usize>, Failure>>()?;
    Ok(Plan { steps, order: order(asked.order.as_deref())?, without, notes })
}

/// The criteria in an order: those named first, the rest as usual.
pub(in crate::tasks) fn order(typed: Option<&str>) -> Result<Vec<Criterion>, Failure> {
    let mut out: Vec<Criterion> = Vec::new();
    for name in typed.into_iter().flat_map(|t| t.split(',')).map(str::trim) {
        let Some((_, criterion)) = Criterion::NAMES.iter().find(|(n, _)| *n == name) else {
            let names: Vec<&str> = Criterion::NAMES.iter().map(|n| n.0).collect();
            let words = format!("--order: `{name}` is no criterion; there are {}", names.join(", "));
            return Err(Failure::Usage(words));
        };
        if out.contains(criterion) {
            return Err(Failure::Usage(format!("--order: `{name}` stands twice")));
        }
        out.push(*criterion);
    }
    let rest: Vec<Criterion> = Criterion::NAMES.iter().map(|n| n.1).filter(|c| !out.contains(c)).collect();
    out.extend(rest);
    Ok(out)
}

/// Parts of the day with their release, m3/s, and where that comes from.
pub(super) fn release(
    context: &Context,
    asked: &RankAsked,
    now: Option<&Setting>,
) -> Result<(Vec<(f64, f64)>, ReleaseFrom), Failure> {
    let site = context.site();
    let steady = |flow: f64| vec![(1.0, flow)];
    if let Some(text) = &asked.release {
        let flow = site
            .units
            .parse(text, Dimension::Flow)
            .map_err(|error| Failure::Usage(format!("--release {text}: {error}")))?;
        if flow <= 0.0 || !Dimension::Flow.is_plausible(flow) {
            return Err(Failure::Usage(format!("--release {text}: give a flow above zero")));
        }
        return Ok((steady(flow), ReleaseFrom::Asked));
    }
    if !site.blocks.is_empty() {
        let parts = site.blocks.iter().map(|b| (b.hours / 24.0, b.flow_m3s)).collect();
        return Ok((parts, ReleaseFrom::Blocks));
    }
    let of_now = now.map(|s| s.gates.iter().chain(&s.leaks).map(|g| g.flow_m3s).sum::<f64>());
    let choices = [
        (site.release.wanted_m3s, ReleaseFrom::Wanted),
        (of_now, ReleaseFrom::Now),
        (site.release.min_m3s, ReleaseFrom::Least),
    ];
    choices
        .into_iter()
        .find_map(|(flow, from)| Some((steady(flow.filter(|f| *f > 0.0)?), from)))
        .ok_or_else(|| Failure::Usage("how much is to be released? give --release FLOW".into()))
}
