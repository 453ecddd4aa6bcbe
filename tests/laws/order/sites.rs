//! Random small dams with a change to make. All of them are invented.

use gatemix::mix::{Asked, Gate, Setting, groups, resolve};
use gatemix::order::{Manner, NoOrder, Order, Question, order};
use gatemix::profile::Profile;
use gatemix::site::{Position, Raw, RawAvoid, RawUndrawn, RawWell, Site};

use crate::columns::{Pool, stable};
use crate::mix::sites::{basin, cast, checked, day, port};
use crate::rank::dice::Dice;

const PLACES: [f64; 6] = [0.1, 0.3, 0.31, 0.5, 0.7, 0.85];
const POSITIONS: [&[f64]; 4] = [&[0.0, 1.0], &[0.0, 0.5, 1.0], &[0.4, 1.0], &[]];
const NAMES: [&str; 4] = ["C", "A", "D", "B"];
const WELLS: [&str; 2] = ["West", "East"];

/// Which limits a dam may have.
#[derive(Debug, Clone, Copy)]
pub(super) struct Kinds {
    /// Least flows of what stands open, which starts and stops pass.
    pub(super) starts: bool,
    /// Rates of change.
    pub(super) rates: bool,
    /// Bands narrower than the looks at a step, and flows to avoid; else limits that leave little room.
    pub(super) narrow: bool,
}

/// A dam and the change.
pub(super) struct Case {
    pub(super) site: Site,
    pub(super) profile: Profile,
    pub(super) now: Asked,
    pub(super) wanted: Asked,
}

impl Case {
    pub(super) fn setting(&self, asked: &Asked) -> Setting {
        resolve(&self.site, &self.profile.column, &groups(&self.site), asked, self.profile.pool_m)
    }

    pub(super) fn order(&self, manner: Manner) -> Result<Order, NoOrder> {
        self.between(&self.setting(&self.now), &self.setting(&self.wanted), manner)
    }

    pub(super) fn between(&self, now: &Setting, wanted: &Setting, manner: Manner) -> Result<Order, NoOrder> {
        order(&Question { site: &self.site, profile: &self.profile, date: day(), now, wanted, manner })
    }
}

/// Case number so and so; `None` where its cast is refused.
pub(super) fn case(seed: u64, kinds: Kinds) -> Option<Case> {
    let dice = &mut Dice::new(seed);
    let water = dice.draw(stable());
    let depth_m = water.surface_m - water.bed_m;
    let flow_m3s = 10.0_f64.powf(dice.between(0.8..1.6));
    let mut raw = basin(&water);
    let wells = 1 + usize::from(dice.once_in(3));
    let conduit = |dice: &mut Dice| Some(water.at(dice.one_of(&[0.0, 0.1, 0.4])));
    raw.wells = WELLS[..wells]
        .iter()
        .map(|name| RawWell { name: Some((*name).into()), conduit_m: conduit(dice), ..RawWell::default() })
        .collect();
    let count = 2 + dice.below(3);
    for name in &NAMES[..count] {
        let share = dice.one_of(&PLACES);
        let mut out = port(name, water.at(share), 0.05 * depth_m, dice.between(2.0..6.0));
        if dice.once_in(4) {
            out.flow_max_m3s = Some(3.0 * flow_m3s);
        } else {
            out.well = Some(WELLS[dice.below(wells)].into());
            out.loss = Some(dice.between(0.8..2.5));
            let position =
                |opening: &f64| Position { name: format!("{opening}"), opening: *opening, crest_m: None };
            out.positions = dice.one_of(&POSITIONS).iter().map(position).collect();
        }
        raw.outlets.push(out);
    }
    let mut total = || {
        let one = dice.between(0.3..1.0) * flow_m3s;
        // half of the changes leave what a well carries as it is
        (one, if dice.once_in(2) { one } else { dice.between(0.3..1.0) * flow_m3s })
    };
    let totals: Vec<(f64, f64)> = (0..wells).map(|_| total()).collect();
    let ends = [0, 1].map(|end| ask(&raw, &totals, end, flow_m3s, dice));
    limit(&mut raw, &water, (&ends[0], &ends[1]), kinds, dice);
    let site = checked(&raw);
    let profile = Profile::build(&cast(&water), &site, None).0?;
    let [now, wanted] = ends;
    Some(Case { site, profile, now, wanted })
}

/// A setting: gates of each well anyhow, its total where any is open, and outlets at some flow or none.
fn ask(raw: &Raw, totals: &[(f64, f64)], end: usize, flow_m3s: f64, dice: &mut Dice) -> Asked {
    let mut out = Asked::default();
    for (index, outlet) in raw.outlets.iter().enumerate() {
        if outlet.well.is_none() {
            let flow = dice.one_of(&[0.0, 0.2, 0.7]) * flow_m3s;
            if flow > 0.0 {
                out.direct.push(Gate { outlet: index, opening: 1.0, flow_m3s: flow });
            }
            continue;
        }
        let free: &[f64] = if outlet.positions.is_empty() { &[0.6, 1.0] } else { &[] };
        let positions = outlet.positions.iter().map(|p| p.opening);
        let openings: Vec<f64> = [0.0].into_iter().chain(positions).chain(free.iter().copied()).collect();
        let opening = dice.one_of(&openings);
        if opening > 0.0 {
            out.open.push((index, opening));
        }
    }
    for (well, total) in totals.iter().enumerate() {
        let open = out.open.iter().any(|o| raw.outlets[o.0].well.as_deref() == Some(WELLS[well]));
        if open {
            out.totals.push((well, if end == 0 { total.0 } else { total.1 }));
        }
    }
    out
}

fn sum(asked: &Asked) -> f64 {
    asked.direct.iter().map(|g| g.flow_m3s).sum::<f64>() + asked.totals.iter().map(|t| t.1).sum::<f64>()
}

/// Limits near what the change needs, so that some stand in its way.
fn limit(raw: &mut Raw, water: &Pool, (now, wanted): (&Asked, &Asked), kinds: Kinds, dice: &mut Dice) {
    let (low, high) = (sum(now).min(sum(wanted)), sum(now).max(sum(wanted)));
    let tight = !kinds.narrow;
    let least = if tight { dice.maybe(1, 0.8..1.0) } else { dice.maybe(2, 0.5..1.0) };
    raw.release_min_m3s = least.map(|share| share * low).filter(|least| *least > 0.0);
    raw.release_max_m3s = dice.maybe(2, 1.0..1.4).map(|share| share * high).filter(|most| *most > 0.0);
    let open = |asked: &Asked, name: &str, raw: &Raw| {
        asked.open.iter().filter(|o| raw.outlets[o.0].well.as_deref() == Some(name)).count()
    };
    for (well, name) in WELLS.into_iter().enumerate().take(raw.wells.len()) {
        let most = open(now, name, raw).max(open(wanted, name, raw)).max(1);
        raw.wells[well].max_open = dice.once_in(if tight { 1 } else { 3 }).then_some(most as f64);
        raw.wells[well].max_head_loss_m = dice.maybe(3, 0.2..4.0);
        raw.wells[well].min_flow_m3s = dice.maybe(3, 0.05..0.25).filter(|_| kinds.starts).map(|s| s * high);
    }
    for outlet in &mut raw.outlets {
        let gate = outlet.well.is_some();
        if dice.once_in(5) && gate {
            let bands = [(0.1, 0.35), (0.6, 0.9), (0.55, 0.58)];
            let (from, to) = dice.one_of(&bands[..if kinds.narrow { 3 } else { 2 }]);
            outlet.avoid.push(RawAvoid { openings: Some((from, to)), ..RawAvoid::default() });
        }
        if dice.once_in(8) && kinds.narrow {
            let from = dice.between(0.1..0.5) * high.max(1.0);
            outlet.avoid.push(RawAvoid { flows_m3s: Some((from, 1.1 * from)), ..RawAvoid::default() });
        }
        outlet.moves_under_flow =
            if gate { dice.one_of(&[None, None, Some(true), Some(false)]) } else { None };
        outlet.max_entrance_m_s = dice.maybe(6, 0.5..4.0);
        outlet.flow_min_m3s = dice.maybe(3, 0.02..0.2).filter(|_| kinds.starts).map(|s| s * high);
        outlet.min_submergence_m = dice.maybe(6, 0.0..0.2).map(|s| s * (water.surface_m - water.bed_m));
    }
    if dice.once_in(6) {
        let depths_m = Some((0.0, dice.between(0.05..2.0)));
        raw.limits.undrawn.push(RawUndrawn { depths_m, ..RawUndrawn::default() });
    }
    if kinds.rates {
        let limits = &mut raw.limits;
        limits.flow_change_m3s_per_hour = dice.maybe(2, 0.1..0.6).map(|s| s * high.max(1.0));
        limits.flow_change_m3s_per_day = dice.maybe(3, 0.3..1.5).map(|s| s * high.max(1.0));
        limits.temperature_change_c_per_hour = dice.maybe(2, 0.3..4.0);
        limits.temperature_change_c_per_day = dice.maybe(3, 0.5..6.0);
    }
}
