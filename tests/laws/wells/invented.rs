//! Wells to try laws on, and their relations written anew. All wells here are invented.

use std::f64::consts::PI;

use gatemix::intake::{Entering, Port, Shaft, Split};
use gatemix::profile::Column;
use gatemix::water::{self, SEDIMENT_DENSITY_KG_M3};
use gatemix::withdrawal::zone;
use proptest::prelude::*;

use crate::columns::{Pool, port as sink, share};

pub(crate) const GRAVITY_M_S2: f64 = 9.80665;

/// What enters the ports. Salt and silt are those of the centre-line where nothing else is said.
#[derive(Debug, Clone)]
pub(crate) enum Supply {
    /// The water at each centre-line, whatever the flow.
    Centre,
    /// What the zone of each port draws.
    Zones,
    /// Temperatures given, in any order.
    Given(Vec<f64>),
}

/// A well in a pool, and the flow asked of it.
#[derive(Debug, Clone)]
pub(crate) struct Well {
    pub(crate) pool: Pool,
    pub(crate) conduit_m: f64,
    pub(crate) ports: Vec<Port>,
    pub(crate) flow_m3s: f64,
    pub(crate) supply: Supply,
}

impl Well {
    pub(crate) fn shaft<'a>(&self, column: &'a Column) -> Shaft<'a> {
        Shaft { column, conduit_m: self.conduit_m, solids_kg_m3: SEDIMENT_DENSITY_KG_M3 }
    }

    pub(crate) fn enters(&self, column: &Column, k: usize, flow: f64) -> Entering {
        let centre_m = self.ports[k].centre_m;
        let read = column.reading(centre_m);
        let centre = Entering {
            temperature_c: read.temperature_c,
            salt_g_per_kg: read.salt_g_per_kg,
            suspended_mg_l: read.suspended_mg_l,
        };
        match &self.supply {
            Supply::Centre => centre,
            Supply::Given(temperature) => Entering { temperature_c: temperature[k], ..centre },
            Supply::Zones => {
                // what it would supply is what a drop a second draws: in mixed water that is the whole layer
                let drawn =
                    zone(column, &sink(centre_m, flow.max(1e-7), PI), 1.0).and_then(|z| z.draw(column));
                drawn.map_or(centre, |d| Entering {
                    temperature_c: d.temperature_c,
                    salt_g_per_kg: d.salt_g_per_kg,
                    suspended_mg_l: d.suspended_mg_l,
                })
            }
        }
    }

    pub(crate) fn split(&self, column: &Column) -> Split {
        let supply = |k: usize, flow: f64| self.enters(column, k, flow);
        self.shaft(column).split(&self.ports, self.flow_m3s, supply).unwrap()
    }

    /// The split of the same ports with another flow.
    pub(crate) fn at_flow(&self, flow_m3s: f64) -> Self {
        Self { flow_m3s, ..self.clone() }
    }

    /// Shares of the flow that A/sqrt(K) would give.
    pub(crate) fn even_shares(&self) -> Vec<f64> {
        let each: Vec<f64> = self.ports.iter().map(|p| p.area_m2 / p.loss.sqrt()).collect();
        let whole: f64 = each.iter().sum();
        each.iter().map(|e| e / whole).collect()
    }
}

pub(crate) fn density(water: Entering) -> f64 {
    let Entering { temperature_c, salt_g_per_kg, suspended_mg_l } = water;
    water::density_kg_m3(temperature_c, salt_g_per_kg, suspended_mg_l, SEDIMENT_DENSITY_KG_M3)
}

/// int (rho_pool - rho)/1000 dz, m, three Gauss points between every two nodes of the column, halved thrice.
pub(crate) fn drive_m(column: &Column, from_m: f64, to_m: f64, rho: f64) -> f64 {
    let (low, high) = (from_m.min(to_m), from_m.max(to_m));
    let mut edges = vec![low, high];
    edges.extend(column.nodes_m().iter().copied().filter(|z| *z > low && *z < high));
    edges.sort_by(f64::total_cmp);
    let mut sum = 0.0;
    for ends in edges.windows(2) {
        let step = (ends[1] - ends[0]) / 8.0;
        for i in 0..8 {
            let middle = ends[0] + (f64::from(i) + 0.5) * step;
            for (at, weight) in [(-0.6_f64.sqrt(), 5.0), (0.0, 8.0), (0.6_f64.sqrt(), 5.0)] {
                sum += weight / 18.0 * step * (column.density_kg_m3(middle + 0.5 * at * step) - rho);
            }
        }
    }
    sum * (to_m - from_m).signum() / 1000.0
}

/// How far a split is from its relations.
#[derive(Debug, Default)]
pub(crate) struct Misfit {
    /// Largest misfit of head at ports that flow and at the conduit, as a share of it and a tenth of a millimetre.
    pub(crate) flowing: f64,
    /// Largest head at a port that is blocked, its own water standing from it inward, m.
    pub(crate) blocked_m: f64,
}

/// Puts a split back into the relations: Bernoulli at each port, hydrostatics between them.
pub(crate) fn misfit(well: &Well, column: &Column, split: &Split) -> Misfit {
    let mut out = Misfit::default();
    let head = |k: usize| {
        let port = well.ports[k];
        port.loss * (split.flows_m3s[k] / port.area_m2).powi(2) / (2.0 * GRAVITY_M_S2)
    };
    let mut at_conduit: Vec<(f64, f64)> = Vec::new();
    let mut sides: [Vec<usize>; 2] = [Vec::new(), Vec::new()];
    for k in 0..well.ports.len() {
        if well.ports[k].area_m2 > 0.0 {
            sides[usize::from(well.ports[k].centre_m >= well.conduit_m)].push(k);
        }
    }
    for side in &mut sides {
        let far = |k: usize| (well.ports[k].centre_m - well.conduit_m).abs();
        side.sort_by(|&a, &b| far(b).total_cmp(&far(a)));
        // flow, temperature, salt, silt that have gathered; head and elevation of the port just passed
        let mut gathered = [0.0_f64; 4];
        let mut passed: Option<(f64, f64)> = None;
        for &k in side.iter() {
            let (z, flow) = (well.ports[k].centre_m, split.flows_m3s[k]);
            if let Some((from, head_m)) = passed {
                let found = head_m - drive_m(column, from, z, mixture(gathered));
                if flow > 0.0 {
                    out.flowing = out.flowing.max((found - head(k)).abs() / (head(k) + 1e-4));
                    passed = Some((z, head(k)));
                } else {
                    out.blocked_m = out.blocked_m.max(found);
                    passed = Some((z, found));
                }
            } else if flow > 0.0 {
                passed = Some((z, head(k)));
            }
            if flow > 0.0 {
                let w = well.enters(column, k, flow);
                for (sum, add) in
                    gathered.iter_mut().zip([1.0, w.temperature_c, w.salt_g_per_kg, w.suspended_mg_l])
                {
                    *sum += flow * add;
                }
            }
        }
        if let Some((from, head_m)) = passed {
            at_conduit.push((head_m - drive_m(column, from, well.conduit_m, mixture(gathered)), head_m));
        }
    }
    if let [a, b] = at_conduit[..] {
        out.flowing = out.flowing.max((a.0 - b.0).abs() / (a.1.max(b.1) + 1e-4));
    }
    // outward again over the ports beyond the last that flows
    for side in &sides {
        let still = side.iter().position(|&k| split.flows_m3s[k] > 0.0).unwrap_or(side.len());
        let mut from = match side.get(still) {
            Some(&k) => (well.ports[k].centre_m, head(k)),
            None => (well.conduit_m, at_conduit[0].0),
        };
        for &k in side[..still].iter().rev() {
            let z = well.ports[k].centre_m;
            let here = from.1 + drive_m(column, z, from.0, density(well.enters(column, k, 0.0)));
            out.blocked_m = out.blocked_m.max(here);
            from = (z, here);
        }
    }
    out
}

fn mixture([flow, temperature, salt, silt]: [f64; 4]) -> f64 {
    density(Entering {
        temperature_c: temperature / flow,
        salt_g_per_kg: salt / flow,
        suspended_mg_l: silt / flow,
    })
}

fn one_port() -> impl Strategy<Value = (f64, Port)> {
    let area = prop_oneof![4 => 0.5..30.0_f64, 1 => 0.001..0.1_f64];
    (share(), area, 0.5..4.0_f64).prop_map(|(at, area_m2, loss)| (at, Port { centre_m: 0.0, area_m2, loss }))
}

/// Ports of a number in a range, anywhere in a pool; conduit at any elevation, below bed and above surface too;
/// flow from a trickle to what needs heads of metres.
pub(crate) fn wells(
    count: std::ops::RangeInclusive<usize>,
    conduit: impl Strategy<Value = f64>,
    pool: impl Strategy<Value = Pool>,
    supply: impl Strategy<Value = Supply>,
) -> impl Strategy<Value = Well> {
    (pool, conduit, prop::collection::vec(one_port(), count), -3.0..1.0_f64, supply).prop_map(
        |(pool, conduit, ports, speed, supply)| {
            let ports: Vec<Port> =
                ports.iter().map(|&(at, port)| Port { centre_m: pool.at(at), ..port }).collect();
            let area: f64 = ports.iter().map(|p| p.area_m2).sum();
            Well {
                conduit_m: pool.bed_m + conduit * (pool.surface_m - pool.bed_m),
                flow_m3s: area * 10.0_f64.powf(speed),
                pool,
                ports,
                supply,
            }
        },
    )
}

/// A conduit anywhere, as a share of the depth.
pub(crate) fn anywhere() -> impl Strategy<Value = f64> {
    prop_oneof![1 => Just(-0.05), 1 => Just(1.05), 3 => 0.0..1.0_f64]
}

pub(crate) fn own_supply() -> impl Strategy<Value = Supply> {
    prop_oneof![Just(Supply::Centre), Just(Supply::Zones)]
}

/// Water that knows nothing of the pool.
pub(crate) fn unordered() -> impl Strategy<Value = Supply> {
    prop::collection::vec(4.0..28.0_f64, 8).prop_map(Supply::Given)
}
