//! One standing on the way with its water and limits; whatever was computed once is kept.
//!
//! Methods: `docs/methods.md`, section 11.

use std::collections::HashMap;
use std::rc::Rc;

use chrono::NaiveDate;

use crate::intake;
use crate::mix::limits::{self, Check, Group, Of, Rule};
use crate::mix::{Asked, Blend, Drawn, Level, Setting, checks, groups, levels, release, shared_out};
use crate::profile::Column;
use crate::site::Site;
use crate::withdrawal::{CrestForm, Draw, Opening, Zone, zone};

use super::standing::Standing;
use super::{Moved, Question};

/// What a limit is of, with its place in its list.
type Key = (Rule, Of, usize);
/// Where a level draws, and how much.
type Place = (u64, bool, u64, u64);

/// A standing computed in full.
#[derive(Debug, Clone)]
pub(super) struct Full {
    pub(super) setting: Setting,
    pub(super) release: Option<Blend>,
    pub(super) checks: Vec<Check>,
}

/// What the search needs of a standing.
#[derive(Debug, Clone)]
pub(super) struct State {
    /// What leaves the dam.
    pub(super) value: Value,
    /// Hard limits missed, and missed by more than now.
    pub(super) broken: Vec<Check>,
    /// Flows to avoid, kept or missed.
    pub(super) bands: Vec<Check>,
}

/// A release as rates of change see it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Value {
    /// Flow, m3/s.
    pub(super) flow_m3s: f64,
    /// Temperature, C; `None` where it is not known.
    pub(super) temperature_c: Option<f64>,
}

/// The dam on the way.
pub(super) struct Works<'a> {
    pub(super) site: &'a Site,
    pub(super) column: &'a Column,
    pub(super) pool_m: f64,
    date: NaiveDate,
    groups: Vec<Vec<usize>>,
    /// Which outlets share levels or wells: the number of the lot each belongs to.
    lots: Vec<usize>,
    /// Limits missed by the setting now, with their room.
    now: HashMap<Key, f64>,
    /// Temperature of the release now, C: that of the water in the river where nothing leaves the dam.
    now_c: Option<f64>,
    settings: HashMap<(usize, Vec<u64>), Rc<Setting>>,
    draws: HashMap<Place, (Option<Zone>, Option<Draw>)>,
    states: HashMap<Vec<u64>, Rc<State>>,
}

impl<'a> Works<'a> {
    pub(super) fn new(question: &Question<'a>) -> Self {
        let site = question.site;
        let groups = groups(site);
        let lots = lots(site, &groups);
        Self {
            site,
            column: &question.profile.column,
            pool_m: question.profile.pool_m,
            date: question.date,
            groups,
            lots,
            now: HashMap::new(),
            now_c: None,
            settings: HashMap::new(),
            draws: HashMap::new(),
            states: HashMap::new(),
        }
    }

    /// How many standings have been looked at.
    pub(super) fn count(&self) -> usize {
        self.states.len()
    }

    /// Takes what a standing misses as what may stay missed, by no more.
    pub(super) fn begin(&mut self, now: &Full) {
        let missed = now.checks.iter().filter(|c| is_hard(c) && c.broken());
        self.now = missed.map(|c| (key(c), c.room)).collect();
        self.now_c = now.release.map(|r| r.temperature_c);
        self.states.clear();
    }

    /// Whether a limit stands in the way: hard, missed, and by more than now.
    pub(super) fn stops(&self, check: &Check) -> bool {
        let slack = SAME * check.bound.abs().clamp(1.0, 1e12);
        is_hard(check)
            && check.broken()
            && self.now.get(&key(check)).is_none_or(|room| check.room < *room - slack)
    }

    /// A release as rates of change see it. Where nothing leaves the dam the temperature now counts (choice), so that no
    /// stop, however long, hides a leap of it.
    pub(super) fn value(&self, full: &Full) -> Value {
        Value {
            flow_m3s: full.release.map_or(0.0, |r| r.flow_m3s),
            temperature_c: full.release.map(|r| r.temperature_c).or(self.now_c),
        }
    }

    /// What the search needs of a standing.
    pub(super) fn state(&mut self, standing: &Standing) -> Rc<State> {
        let at = standing.key(self.site);
        if let Some(known) = self.states.get(&at) {
            return Rc::clone(known);
        }
        let full = self.full(standing);
        let broken = full.checks.iter().filter(|c| self.stops(c)).copied().collect();
        let value = self.value(&full);
        let bands = full.checks.iter().filter(|c| c.rule == Rule::AvoidFlow).copied().collect();
        let state = Rc::new(State { value, broken, bands });
        self.states.insert(at, Rc::clone(&state));
        state
    }

    /// A standing with its setting, its release and every limit of it.
    pub(super) fn full(&mut self, standing: &Standing) -> Full {
        let site = self.site;
        let setting = self.shared_out(standing);
        let levels = levels(site, &self.groups, &setting, self.pool_m, 0.5, CrestForm::Overflow);
        let drawn: Vec<Drawn> = levels.into_iter().map(|level| self.drawn(level)).collect();
        let release = release(&drawn).map(|r| r.aerated(site, &drawn, 0.5));
        let mut found =
            checks(site, self.column, &setting, self.pool_m, self.date, &drawn, &release.unwrap_or(DRY));
        self.without_port(&standing.asked(site, |_| true), &mut found);
        Full { setting, release, checks: found }
    }

    /// Wells that are to carry water and have no open gate, and open gates above the water, which their wells leave
    /// out.
    fn without_port(&self, asked: &Asked, out: &mut Vec<Check>) {
        for &(outlet, opening) in &asked.open {
            if !intake::is_wet(&self.site.outlets[outlet], opening, self.pool_m) {
                limits::still(self.site, outlet, opening, self.pool_m, self.date, out);
            }
        }
        for &(well, flow_m3s) in &asked.totals {
            if asked.open.iter().all(|(outlet, _)| self.site.outlets[*outlet].well != Some(well)) {
                let of = Of::Well(well);
                let room = -flow_m3s;
                out.push(Check { rule: Rule::Capacity, of, item: 0, found: flow_m3s, bound: 0.0, room });
            }
        }
    }

    /// The setting of a standing, lot by lot: what shares no level and no well does not touch another.
    fn shared_out(&mut self, standing: &Standing) -> Setting {
        let site = self.site;
        let mut out = Setting::default();
        let last = self.lots.iter().copied().max().map_or(0, |last| last + 1);
        for lot in 0..last {
            let asked = standing.asked(site, |outlet| self.lots[outlet] == lot);
            let setting = if asked.totals.is_empty() {
                Rc::new(Setting::of(asked.direct))
            } else {
                let known = self.settings.entry((lot, bits(&asked)));
                let share = || shared_out(site, self.column, &self.groups, &asked, self.pool_m);
                Rc::clone(known.or_insert_with(|| Rc::new(share())))
            };
            out.gates.extend(&setting.gates);
            out.leaks.extend(&setting.leaks);
            out.wells.extend(setting.wells.iter().cloned());
        }
        out.wells.sort_by_key(|w| &site.wells[w.well].name);
        out
    }

    fn drawn(&mut self, level: Level) -> Drawn {
        let sink = level.sink;
        let (is_crest, size) = match sink.opening {
            Opening::Port { angle_rad } => (false, angle_rad),
            Opening::Crest { length_m, .. } => (true, length_m),
        };
        let at = (sink.centre_m.to_bits(), is_crest, size.to_bits(), sink.flow_m3s.to_bits());
        let (column, factor) = (self.column, self.site.zone_factor());
        let (zone, draw) = *self.draws.entry(at).or_insert_with(|| {
            let zone = zone(column, &sink, factor);
            (zone, zone.and_then(|z| z.draw(column)))
        });
        Drawn { level, zone, draw }
    }
}

/// Rooms nearer than this share of the bound are one (choice: round-off of sums).
const SAME: f64 = 1e-9;

/// No water: its figures stand for nothing, since no limit asks them of a release without flow.
const DRY: Blend = Blend {
    flow_m3s: 0.0,
    temperature_c: 0.0,
    bias_c: 0.0,
    oxygen_mg_l: None,
    oxygen_below_mg_l: None,
    salt_g_per_kg: 0.0,
    suspended_mg_l: 0.0,
    oxygen_low_share: 0.0,
};

/// What a check is of.
pub(super) fn key(check: &Check) -> Key {
    (check.rule, check.of, check.item)
}

/// Room as a share of the bound, by which limits of several kinds are told apart (choice); of a bound that is an
/// elevation, or nothing, the room itself.
pub(super) fn room_share(check: &Check) -> f64 {
    let bound = check.bound.abs();
    let is_measure = bound > 0.0 && !matches!(check.rule, Rule::Dry | Rule::PoolWindow);
    if is_measure { check.room / bound } else { check.room }
}

/// What crew and power would rather have does not hold up a change; everything else does (choice).
pub(super) fn is_hard(check: &Check) -> bool {
    check.rule.group() != Group::Convenience
}

/// Lots of outlets that share a level or a well, each by a number.
fn lots(site: &Site, groups: &[Vec<usize>]) -> Vec<usize> {
    let mut lots: Vec<usize> = (0..site.outlets.len()).collect();
    let mut join = |a: usize, b: usize| {
        let (keep, drop) = (lots[a].min(lots[b]), lots[a].max(lots[b]));
        lots.iter_mut().filter(|lot| **lot == drop).for_each(|lot| *lot = keep);
    };
    for group in groups {
        group.windows(2).for_each(|pair| join(pair[0], pair[1]));
    }
    for well in 0..site.wells.len() {
        let on: Vec<usize> =
            (0..site.outlets.len()).filter(|&i| site.outlets[i].well == Some(well)).collect();
        on.windows(2).for_each(|pair| join(pair[0], pair[1]));
    }
    lots
}

/// What is asked, to the bit.
fn bits(asked: &Asked) -> Vec<u64> {
    let direct =
        asked.direct.iter().flat_map(|g| [g.outlet as u64, g.opening.to_bits(), g.flow_m3s.to_bits()]);
    let open = asked.open.iter().flat_map(|o| [o.0 as u64, o.1.to_bits()]);
    let totals = asked.totals.iter().flat_map(|t| [t.0 as u64, t.1.to_bits()]);
    direct.chain([u64::MAX]).chain(open).chain([u64::MAX]).chain(totals).collect()
}

impl Moved {
    /// Whether a limit of this is its own, or of a gate on it.
    pub(super) fn owns(self, site: &Site, of: Of) -> bool {
        match (self, of) {
            (Self::Gate(own) | Self::Outlet(own), Of::Outlet(outlet)) => own == outlet,
            (Self::Well(own), Of::Outlet(outlet)) => {
                site.outlets.get(outlet).is_some_and(|o| o.well == Some(own))
            }
            (Self::Well(own), Of::Well(well)) => own == well,
            _ => false,
        }
    }
}
