//! Random small dams to rank, with what is asked of them. All of them are invented.

use gatemix::mix::limits::Before;
use gatemix::mix::{Day, Gate, Setting};
use gatemix::profile::Profile;
use gatemix::rank::{Criterion, Question};
use gatemix::site::{
    Leakage, Opens, Position, Raw, RawAeration, RawLearned, RawOutlet, RawTarget, RawWell, Site,
};
use proptest::prelude::*;

use super::dice::Dice;
use super::limits::limit;
use super::rivers::{self, recorded};
use crate::columns::{Pool, any_water, stable};
use crate::mix::sites::{basin, cast, checked, day, port};

/// Shares of the depth for centre-lines; near ones are one level.
const PLACES: [f64; 9] = [0.06, 0.25, 0.255, 0.26, 0.5, 0.505, 0.75, 0.88, 0.88];
/// Openings the crew can set; none where any flow can be.
const POSITIONS: [&[f64]; 4] = [&[], &[0.0, 0.5, 1.0], &[0.3, 1.0], &[1.0, 0.6]];
const NAMES: [&str; 5] = ["C", "A", "E", "B", "D"];
/// Seed of what conduits add.
const AIR: u64 = 0x0A1B;
/// Seed of what was learned.
const LEARNED: u64 = 0x1EA4;
pub(super) const WELLS: [&str; 2] = ["West", "East"];

/// A dam and what is asked of it.
#[derive(Debug, Clone)]
pub(super) struct Case {
    pub(super) raw: Raw,
    pub(super) water: Pool,
    pub(super) blocks: Vec<(f64, f64)>,
    pub(super) now: Option<Setting>,
    pub(super) before: Before,
    pub(super) steps: usize,
    pub(super) order: Vec<Criterion>,
    pub(super) without: Vec<usize>,
    /// Of the record of the days before; none, and only the dam, without.
    pub(super) recorded: Option<u64>,
}

/// A case checked.
pub(super) struct Dam {
    pub(super) site: Site,
    pub(super) profile: Profile,
    pub(super) day: Day,
}

impl Case {
    /// `None` where the water is so upside-down that the cast is refused.
    pub(super) fn dam(&self) -> Option<Dam> {
        let site = checked(&self.raw);
        let profile = Profile::build(&cast(&self.water), &site, None).0?;
        let day = self.recorded.map_or_else(|| day().into(), |seed| recorded(&site, &self.water, seed));
        Some(Dam { site, profile, day })
    }

    pub(super) fn question<'a>(&'a self, dam: &'a Dam) -> Question<'a> {
        Question {
            site: &dam.site,
            profile: &dam.profile,
            day: &dam.day,
            blocks: &self.blocks,
            now: self.now.as_ref(),
            before: self.before,
            steps: self.steps,
            order: &self.order,
            without: &self.without,
        }
    }
}

/// Case number so and so, with or without limits.
pub(super) fn case(seed: u64, limits: bool) -> Case {
    let dice = &mut Dice::new(seed);
    let mut water = dice.draw(prop_oneof![2 => stable(), 1 => any_water()]);
    if dice.once_in(3) {
        let from = water.at(dice.between(0.0..0.9));
        let to = from + dice.between(0.2..0.9) * (water.surface_m - water.bed_m);
        water.oxygen.retain(|o| o.elevation_m < from || o.elevation_m > to);
    }
    let flow_m3s = 10.0_f64.powf(dice.between(0.6..2.0));
    let mut raw = basin(&water);
    let wells = dice.below(3);
    raw.wells = WELLS[..wells].iter().map(|name| well(name, &water, dice)).collect();
    let with_losses = dice.draw(any::<bool>());
    let count = 2 + dice.below(4);
    raw.outlets = NAMES[..count].iter().map(|name| outlet(name, wells, with_losses, &water, dice)).collect();
    aerate(&mut raw, &mut Dice::new(seed ^ AIR));
    learned(&mut raw, &mut Dice::new(seed ^ LEARNED));
    raw.targets = (0..dice.below(4)).map(|i| target(i, &water, dice)).collect();
    raw.bins.temperature_c = dice.one_of(&[0.5, 0.25, 1.0]);
    raw.bins.oxygen_mg_l = dice.one_of(&[0.5, 0.3]);
    raw.bins.cold_share = dice.one_of(&[0.1, 0.07]);
    if dice.draw(any::<bool>()) {
        raw.cold_water_c =
            vec![water.samples[water.samples.len() / 2].temperature_c + dice.between(-1.0..1.0)];
    }
    let blocks = match dice.below(4) {
        2 => vec![(8.0 / 24.0, 1.5 * flow_m3s), (16.0 / 24.0, 0.75 * flow_m3s)],
        3 => vec![(0.25, flow_m3s), (0.25, 1.6 * flow_m3s), (0.5, 0.6 * flow_m3s)],
        _ => vec![(1.0, flow_m3s)],
    };
    let now = dice.once_in(2).then(|| now(&raw, flow_m3s, dice));
    if limits {
        limit(&mut raw, &water, flow_m3s, dice);
    }
    let before = Before {
        flow_m3s: dice.maybe(2, 0.5 * flow_m3s..1.7 * flow_m3s),
        temperature_c: dice.maybe(2, 4.0..20.0),
    };
    let mut order = dice.draw(Just(Criterion::NAMES.map(|c| c.1).to_vec()).prop_shuffle());
    if dice.once_in(2) {
        order = Criterion::NAMES.map(|c| c.1).to_vec();
    } else if dice.once_in(4) {
        order.truncate(2);
    }
    let without = if dice.once_in(6) { vec![dice.below(count)] } else { Vec::new() };
    let steps = dice.one_of(&[4, 5, 6, 8, 10]);
    let recorded = dice.once_in(2).then_some(seed);
    if recorded.is_some() {
        rivers::add(&mut raw, &water, dice);
    }
    Case { raw, water, blocks, now, before, steps, order, without, recorded }
}

fn well(name: &str, water: &Pool, dice: &mut Dice) -> RawWell {
    RawWell {
        name: Some(name.into()),
        conduit_m: Some(water.at(dice.one_of(&[0.0, 0.1, 0.4]))),
        ..RawWell::default()
    }
}

fn outlet(name: &str, wells: usize, with_losses: bool, water: &Pool, dice: &mut Dice) -> RawOutlet {
    let depth_m = water.surface_m - water.bed_m;
    let share = dice.one_of(&PLACES);
    let width_m = dice.between(1.0..6.0);
    let mut out = port(name, water.at(share), 0.05 * depth_m, width_m);
    // most stand on a well, where there is one
    let well = (wells > 0 && !dice.once_in(3)).then(|| dice.below(wells));
    out.well = well.map(|w| WELLS[w].to_owned());
    out.loss = (with_losses && well.is_some()).then(|| dice.between(0.8..2.5));
    out.angle_deg = Some(if dice.once_in(5) { 360.0 } else { 180.0 });
    out.opens = dice.one_of(&[Opens::Up, Opens::Down, Opens::Both]);
    if share > 0.8 && !dice.once_in(4) {
        crest(&mut out, water, dice);
    } else {
        if dice.once_in(3) {
            (out.height_m, out.width_m, out.diameter_m) = (None, None, Some(0.05 * depth_m));
        }
        let position =
            |opening: &f64| Position { name: format!("{opening}"), opening: *opening, crest_m: None };
        out.positions = dice.one_of(&POSITIONS).iter().map(position).collect();
    }
    out.crew.hours = dice.one_of(&[0.0, 1.0, 2.75]);
    out.crew.cost = dice.one_of(&[1.0, 1.0, 0.3, 2.5]);
    let leak = dice.one_of(&[0.01, 0.1, 0.8]);
    out.leakage =
        dice.once_in(3).then(|| Leakage { flow_m3s: leak, head_m: dice.between(1.0..20.0), range_m3s: None });
    out
}

/// Lets some conduits add oxygen; drawn apart, so that the rest of a case is as it was.
fn aerate(raw: &mut Raw, dice: &mut Dice) {
    if !dice.once_in(3) {
        return;
    }
    let mut some = || {
        let one = match dice.below(4) {
            0 => RawAeration { fall_m: Some(dice.between(0.5..6.0)), ..RawAeration::default() },
            1 => RawAeration { efficiency: Some(dice.between(0.0..1.0)), ..RawAeration::default() },
            2 => RawAeration { gain_mg_l: Some(dice.between(0.2..4.0)), ..RawAeration::default() },
            _ => return None,
        };
        Some(one)
    };
    raw.wells.iter_mut().for_each(|well| well.aeration = some());
    raw.outlets.iter_mut().filter(|o| o.well.is_none()).for_each(|outlet| outlet.aeration = some());
}

/// Something learned is applied; drawn apart too.
fn learned(raw: &mut Raw, dice: &mut Dice) {
    if !dice.once_in(3) {
        return;
    }
    let factor = dice.maybe(2, 0.7..1.15);
    let level = raw.outlets[0].name.clone().filter(|_| dice.once_in(2));
    raw.learned = RawLearned {
        bias_c: dice.maybe(2, -1.5..1.5),
        by_level_c: level.into_iter().map(|name| (name, dice.between(-1.5..1.5))).collect(),
        zone_factor: factor,
        zone_range: factor.map(|factor| (factor - 0.1, factor + 0.1)),
        oxygen_gain_mg_l: dice.maybe(2, -1.0..2.0),
        window: Some(["2025-05-01".into(), "2025-07-10".into()]),
        n: Some(40),
        ..RawLearned::default()
    };
}

/// A crest instead of a port: stacked leaves, gated, or spilling by itself.
fn crest(out: &mut RawOutlet, water: &Pool, dice: &mut Dice) {
    out.kind = Some("crest".into());
    out.height_m = None;
    out.width_m = Some(dice.between(2.0..12.0));
    if dice.once_in(3) {
        out.gated = Some(true);
        let leaf = |name: &str, below_m: f64| Position {
            name: name.into(),
            opening: 1.0,
            crest_m: Some(water.surface_m - below_m),
        };
        out.positions = vec![leaf("three leaves", 0.4), leaf("two leaves", 2.0), leaf("one leaf", 4.5)];
    } else if out.well.is_none() && dice.once_in(2) {
        // now and then above the water
        out.centre_m = Some(water.surface_m - dice.between(-0.2..2.0));
    } else {
        out.gated = Some(true);
        out.centre_m = Some(water.surface_m - dice.between(-0.3..3.0));
    }
}

fn target(i: usize, water: &Pool, dice: &mut Dice) -> RawTarget {
    let middle_c = water.samples[dice.below(water.samples.len())].temperature_c;
    let low_c = dice.maybe(2, middle_c - 4.0..middle_c);
    let high_c = Some(middle_c + dice.between(0.0..3.0));
    let statistics = ["daily_mean", "daily_max", "daily_min", "instantaneous", "7dadm"];
    RawTarget {
        name: Some(format!("rule {i}")),
        low_c,
        high_c,
        preferred_c: dice.once_in(2).then_some(middle_c),
        buffer_c: dice.once_in(4).then_some(0.1).filter(|_| low_c.is_none()),
        oxygen_min_mg_l: dice.maybe(2, 2.0..10.0),
        statistic: Some(dice.one_of(&statistics).into()),
        ..RawTarget::default()
    }
}

/// Some gates open, each where it can be.
fn now(raw: &Raw, flow_m3s: f64, dice: &mut Dice) -> Setting {
    let mut gates = Vec::new();
    for (outlet, o) in raw.outlets.iter().enumerate() {
        if dice.once_in(2) {
            continue;
        }
        let opening = match (o.positions.iter().any(|p| p.crest_m.is_some()), o.positions.is_empty()) {
            (true, _) => dice.one_of(&[1.0 / 3.0, 2.0 / 3.0, 1.0]),
            (_, true) => 1.0,
            _ => dice.one_of(&o.positions).opening,
        };
        if opening > 0.0 {
            gates.push(Gate { outlet, opening, flow_m3s: dice.between(0.1..0.6) * flow_m3s });
        }
    }
    Setting::of(gates)
}
