//! A dam on the way, by this file's own sums: which hard limits it misses, and how far.

use std::collections::BTreeMap;

use gatemix::mix::limits::{Check, Group, Of, Rule, still};
use gatemix::mix::{Asked, Blend, Gate, checks, draw_levels, groups, levels, release};
use gatemix::order::Moved;
use gatemix::withdrawal::CrestForm;

use super::sites::Case;
use crate::mix::sites::day;

/// Openings, flows and totals; what is not in it is shut.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct Stands(pub(super) BTreeMap<Moved, (f64, f64)>);

/// Misses by limit.
pub(super) type Missed = BTreeMap<(Rule, Of, usize), f64>;

impl Stands {
    pub(super) fn of(asked: &Asked) -> Self {
        let direct = asked.direct.iter().map(|g| (Moved::Outlet(g.outlet), (g.opening, g.flow_m3s)));
        let open = asked.open.iter().map(|o| (Moved::Gate(o.0), (o.1, 0.0)));
        let totals = asked.totals.iter().map(|t| (Moved::Well(t.0), (0.0, t.1)));
        Self(direct.chain(open).chain(totals).collect())
    }

    pub(super) fn get(&self, moved: Moved) -> (f64, f64) {
        self.0.get(&moved).copied().unwrap_or((0.0, 0.0))
    }

    pub(super) fn with(&self, moved: Moved, at: (f64, f64)) -> Self {
        let mut out = self.clone();
        out.0.insert(moved, at);
        out
    }

    pub(super) fn total(&self, well: usize) -> f64 {
        self.get(Moved::Well(well)).1
    }

    fn asked(&self, case: &Case) -> Asked {
        let mut out = Asked::default();
        for (&moved, &(opening, flow_m3s)) in &self.0 {
            match moved {
                Moved::Outlet(outlet) if flow_m3s > 0.0 => {
                    out.direct.push(Gate { outlet, opening, flow_m3s });
                }
                Moved::Gate(outlet) => {
                    let well = case.site.outlets[outlet].well.unwrap();
                    if opening > 0.0 && self.total(well) > 0.0 {
                        out.open.push((outlet, opening));
                    }
                }
                Moved::Well(well) if flow_m3s > 0.0 => out.totals.push((well, flow_m3s)),
                _ => {}
            }
        }
        out
    }

    /// What leaves the dam, and the hard limits missed, with their room.
    pub(super) fn missed(&self, case: &Case) -> (Option<Blend>, Missed) {
        let (site, column, pool_m) = (&case.site, &case.profile.column, case.profile.pool_m);
        let asked = self.asked(case);
        let setting = case.setting(&asked);
        let drawn = draw_levels(
            column,
            &levels(site, &groups(site), &setting, pool_m, 0.5, CrestForm::Overflow),
            1.0,
        );
        let blend = release(&drawn);
        let nothing = Blend {
            bias_c: 0.0,
            flow_m3s: 0.0,
            temperature_c: 0.0,
            oxygen_mg_l: None,
            oxygen_below_mg_l: None,
            salt_g_per_kg: 0.0,
            suspended_mg_l: 0.0,
            oxygen_low_share: 0.0,
        };
        let mut found = checks(site, column, &setting, pool_m, day(), &drawn, &blend.unwrap_or(nothing));
        for &(outlet, opening) in &asked.open {
            still(site, outlet, opening, pool_m, day(), &mut found);
        }
        let hard = |c: &&Check| c.rule.group() != Group::Convenience && c.broken();
        let mut missed: Missed =
            found.iter().filter(hard).map(|c| ((c.rule, c.of, c.item), c.room)).collect();
        for (well, flow) in &asked.totals {
            if asked.open.iter().all(|o| site.outlets[o.0].well != Some(*well)) {
                missed.insert((Rule::Capacity, Of::Well(*well), 0), -flow);
            }
        }
        (blend, missed)
    }
}

/// What is missed and was not missed as much at the start.
pub(super) fn worse<'a>(
    missed: &'a Missed,
    start: &'a Missed,
) -> impl Iterator<Item = &'a (Rule, Of, usize)> {
    missed.iter().filter(|(of, room)| start.get(of).is_none_or(|was| **room < was - 1e-7)).map(|m| m.0)
}
