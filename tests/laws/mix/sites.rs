//! Small sites, casts and settings to try laws on. All of them are invented.

use chrono::NaiveDate;
use gatemix::mix::{Gate, Mix, Perturbed, Setting, judge};
use gatemix::profile::{self, Profile};
use gatemix::site::{Leakage, Opens, Raw, RawOutlet, RawPool, RawRow, RawTarget, RawWell, Site};
use proptest::prelude::*;
use proptest::sample::{select, subsequence};

use crate::columns::{Pool, any_water, flow, stable};

/// Members of the band, few, for speed.
const MEMBERS: usize = 12;
/// Leak areas as a share of the whole outlet: some as large as an open gate.
const LEAK_SHARES: std::ops::Range<f64> = 0.001..1.5;
/// Shares of the depth for centre-lines, some so close that outlets of 5 % of the depth in height are one level.
const PLACES: [f64; 9] = [0.06, 0.25, 0.25, 0.265, 0.28, 0.5, 0.515, 0.75, 0.88];
const NAMES: [&str; 7] = ["C", "A", "G", "F", "B", "E", "D"];

/// A day inside every target's span below.
pub(crate) fn day() -> NaiveDate {
    NaiveDate::from_ymd_opt(2025, 7, 14).unwrap()
}

/// A site, the water before it, and a setting of it.
#[derive(Debug, Clone)]
pub(super) struct Case {
    pub(super) raw: Raw,
    pub(super) water: Pool,
    pub(super) gates: Vec<Gate>,
}

/// A case checked and ready.
pub(super) struct Ready {
    pub(super) site: Site,
    pub(super) profile: Profile,
    pub(super) setting: Setting,
}

impl Case {
    /// Checked; `None` where the water is so upside-down that the cast is refused.
    pub(super) fn ready(&self) -> Option<Ready> {
        let site = checked(&self.raw);
        let profile = Profile::build(&cast(&self.water), &site, None).0?;
        Some(Ready { site, profile, setting: Setting::of(self.gates.clone()) })
    }

    /// Index of each outlet that no gate of the setting opens.
    pub(super) fn shut(&self) -> Vec<usize> {
        (0..self.raw.outlets.len()).filter(|&i| !self.gates.iter().any(|g| g.outlet == i)).collect()
    }
}

impl Ready {
    pub(super) fn judged(&self) -> Mix {
        let perturbed = Perturbed::new(&self.site, &self.profile, Some(2.0));
        judge(&self.site, &self.profile, &perturbed, &self.setting, day()).unwrap()
    }

    /// Sum of the flows set, m3/s.
    pub(super) fn set_m3s(&self) -> f64 {
        self.setting.gates.iter().map(|g| g.flow_m3s).sum()
    }
}

pub(crate) fn checked(raw: &Raw) -> Site {
    let (site, problems) = Site::check(raw);
    site.unwrap_or_else(|| panic!("{problems:?}"))
}

/// A cast that reads the water where it was sampled.
pub(crate) fn cast(water: &Pool) -> profile::Raw {
    let rows = water.samples.iter().enumerate().map(|(i, s)| profile::RawRow {
        line: i + 4,
        elevation_m: Some(s.elevation_m),
        temperature_c: Some(s.temperature_c),
        solids_mg_l: Some(1000.0 * s.salt_g_per_kg),
        suspended_mg_l: Some(s.suspended_mg_l),
        oxygen_mg_l: water
            .oxygen
            .iter()
            .find(|o| o.elevation_m.total_cmp(&s.elevation_m).is_eq())
            .map(|o| o.oxygen_mg_l),
        ..profile::RawRow::default()
    });
    profile::Raw {
        file: "invented.csv".into(),
        taken: Some("2025-07-14T10:00:00Z".parse().unwrap()),
        pool_m: Some(water.surface_m),
        rows: rows.collect(),
    }
}

/// A box of water that reaches a little above the surface, without outlets.
pub(crate) fn basin(water: &Pool) -> Raw {
    let top_m = water.surface_m + 2.0;
    let row = |elevation_m: f64, area_m2: f64| RawRow { elevation_m, area_m2, ..RawRow::default() };
    let mut raw = Raw {
        name: Some("invented".into()),
        pool: RawPool {
            bed_m: Some(water.bed_m),
            full_m: Some(water.surface_m),
            table: vec![row(water.bed_m, 1e5), row(top_m, 2e6)],
            ..RawPool::default()
        },
        ..Raw::default()
    };
    raw.band.members = MEMBERS;
    raw
}

/// A rectangular port.
pub(crate) fn port(name: &str, centre_m: f64, height_m: f64, width_m: f64) -> RawOutlet {
    RawOutlet {
        name: Some(name.into()),
        centre_m: Some(centre_m),
        height_m: Some(height_m),
        width_m: Some(width_m),
        ..RawOutlet::default()
    }
}

/// A gate fully open.
pub(super) fn gate(outlet: usize, flow_m3s: f64) -> Gate {
    Gate { outlet, opening: 1.0, flow_m3s }
}

/// What kinds of outlet a random site has.
#[derive(Debug, Clone, Copy)]
pub(super) struct Kinds {
    pub(super) leaks: bool,
    pub(super) crests: bool,
}

type Draft = (f64, f64, f64, Option<usize>, Opens, Option<f64>, bool);

/// Place, angle, width, well, opening edge, leak as a share of the area, round.
fn draft() -> impl Strategy<Value = Draft> {
    let opens = select(vec![Opens::Up, Opens::Down, Opens::Both]);
    let angle = prop_oneof![4 => Just(180.0), 1 => Just(360.0)];
    let well = prop_oneof![1 => Just(None), 2 => (0..2_usize).prop_map(Some)];
    let leak = prop_oneof![1 => Just(None), 1 => LEAK_SHARES.prop_map(Some)];
    (select(PLACES.to_vec()), angle, 0.5..6.0_f64, well, opens, leak, any::<bool>())
}

fn outlet(name: &str, draft: Draft, water: &Pool, kinds: Kinds) -> RawOutlet {
    let (share, angle, width_m, well, opens, leak, round) = draft;
    let depth_m = water.surface_m - water.bed_m;
    let height_m = 0.05 * depth_m;
    let mut out = port(name, water.at(share), height_m, width_m);
    let mut area_m2 = height_m * width_m;
    if kinds.crests && share > 0.8 {
        out.kind = Some("crest".into());
        out.gated = Some(true);
        out.height_m = None;
        area_m2 = width_m;
    } else if round {
        (out.height_m, out.width_m, out.diameter_m) = (None, None, Some(height_m));
        area_m2 = 0.25 * std::f64::consts::PI * height_m * height_m;
    }
    out.angle_deg = Some(angle);
    out.opens = opens;
    out.well = well.map(|w| ["West", "East"][w].to_owned());
    // through that area at 1 m of head, without loss
    let flow_m3s = leak.filter(|_| kinds.leaks).map(|share| share * area_m2 * (2.0 * 9.80665_f64).sqrt());
    out.leakage = flow_m3s.map(|flow_m3s| Leakage {
        flow_m3s,
        head_m: 1.0,
        range_m3s: Some((0.5 * flow_m3s, 1.7 * flow_m3s)),
    });
    out
}

/// Random small sites of one to seven outlets, some on two wells, with a setting that gives some water, and two
/// targets.
pub(super) fn cases(kinds: Kinds) -> impl Strategy<Value = Case> {
    let water = prop_oneof![stable(), any_water()];
    let drafts = prop::collection::vec(draft(), 1..=NAMES.len());
    let opening = prop_oneof![2 => Just(1.0), 1 => 0.2..1.0_f64];
    let gates = prop::collection::vec((opening, prop_oneof![9 => flow(), 1 => Just(0.0)]), NAMES.len());
    let open = subsequence((0..NAMES.len()).collect::<Vec<_>>(), 1..=NAMES.len());
    (water, drafts, gates, open, targets()).prop_map(move |(water, drafts, gates, open, targets)| {
        let mut raw = basin(&water);
        raw.wells = ["West", "East"]
            .map(|name| RawWell {
                name: Some(name.into()),
                conduit_m: Some(water.bed_m),
                max_open: Some(1.0),
                max_flow_m3s: Some(1.0),
                ..RawWell::default()
            })
            .into();
        raw.outlets = drafts.iter().zip(NAMES).map(|(d, name)| outlet(name, *d, &water, kinds)).collect();
        for outlet in &mut raw.outlets {
            // so that several limits are broken at once
            outlet.min_submergence_m = Some(0.3 * (water.surface_m - water.bed_m));
            outlet.flow_min_m3s = Some(2.0);
        }
        raw.targets = targets;
        let count = raw.outlets.len();
        let mut gates: Vec<Gate> = open
            .iter()
            .filter(|&&outlet| outlet < count)
            .map(|&outlet| Gate { outlet, opening: gates[outlet].0, flow_m3s: gates[outlet].1 })
            .collect();
        if gates.iter().all(|g| g.flow_m3s <= 0.0) {
            gates = vec![gate(0, 20.0)];
        }
        Case { raw, water, gates }
    })
}

fn targets() -> impl Strategy<Value = Vec<RawTarget>> {
    let one = (
        prop::option::of(0.0..12.0_f64),
        prop::option::of(12.0..25.0_f64),
        prop::option::of(0.0..12.0_f64),
        any::<bool>(),
    );
    prop::collection::vec(one, 0..4).prop_map(|rules| {
        let rules = rules.into_iter().enumerate();
        rules
            .map(|(i, (low_c, high_c, oxygen_min_mg_l, all_year))| RawTarget {
                name: Some(format!("rule {i}")),
                from: (!all_year).then(|| "07-01".into()),
                to: (!all_year).then(|| "08-31".into()),
                low_c,
                // a rule with no bound at all is refused
                high_c: high_c.or(low_c.xor(oxygen_min_mg_l).is_none().then_some(15.0)),
                oxygen_min_mg_l,
                ..RawTarget::default()
            })
            .collect()
    })
}
