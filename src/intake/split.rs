//! How the flow of a wet well divides among its ports.
//!
//! Water enters at several elevations, each port against its loss, and stands in the shaft as columns of other
//! densities than the pool beside them. Where the shaft is heavier or lighter than the pool, a port gives more
//! or less than its area would say, or nothing at all (density blockage).
//!
//! Methods: `docs/methods.md`, section 4.

use crate::profile::Column;
use crate::water::G_M_S2;

use super::branch::{Branch, FOUND, Inlet, Place, TRICKLE};
use super::root::root;

/// A split has settled when flows meet their sum, and two branches one pressure, to this share (choice: the round-off
/// of densities, which need not matter to a port under a large head, shows at one under a small head).
const SETTLED: f64 = 1e-6;

/// One port of a well: the open part of a gate, or a leak.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Port {
    /// Centre-line, m.
    pub centre_m: f64,
    /// Open area, m2; 0 where it is shut tight.
    pub area_m2: f64,
    /// Loss from pool to well, on the velocity through the area; above zero.
    pub loss: f64,
}

/// Water that enters a port, as far as its density goes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Entering {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: f64,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: f64,
}

impl Entering {
    /// Mixed with a share of other water; equal waters mix into the same, to the last digit.
    pub(super) fn with(self, other: Self, share: f64) -> Self {
        let mix = |a: f64, b: f64| a + share * (b - a);
        Self {
            temperature_c: mix(self.temperature_c, other.temperature_c),
            salt_g_per_kg: mix(self.salt_g_per_kg, other.salt_g_per_kg),
            suspended_mg_l: mix(self.suspended_mg_l, other.suspended_mg_l),
        }
    }
}

/// How a well's flow divides.
#[derive(Debug, Clone, PartialEq)]
pub struct Split {
    /// Flow of each port, in the order given, m3/s; 0 where density blocks it.
    pub flows_m3s: Vec<f64>,
    /// Largest head of the pool over the well at any port given, shut ones among them, m of water of 1000 kg/m3.
    pub head_m: f64,
    /// Whether flows meet their sum, and both branches one pressure, to a millionth. Water that leaps with the flow
    /// can prevent it.
    pub settled: bool,
}

/// The shaft of a well beside the pool.
#[derive(Debug, Clone, Copy)]
pub struct Shaft<'a> {
    /// The pool.
    pub column: &'a Column,
    /// Where the conduit leaves the well, m.
    pub conduit_m: f64,
    /// Density of suspended solids, kg/m3.
    pub solids_kg_m3: f64,
}

impl Shaft<'_> {
    /// Splits a flow among ports. `supply(k, q)` is the water that port `k` takes in at the flow `q`, continuous in
    /// it; at 0 what it would supply. It is asked for flows down to far below any that is set.
    ///
    /// At a port dp = p_pool - p_well = 1000 K q^2/(2 A^2), none where dp <= 0. Towards the conduit p_pool changes
    /// by the integral of g times the pool's density, p_well by g times that of the mixture of all that entered
    /// farther out, or of the port just passed where nothing did; both branches meet at one pressure at the
    /// conduit. Beyond the farthest open port its own water stands still (choice), in a branch without open ports
    /// the water at the conduit (choice). The shaft's own velocity head and friction are neglected. Where more
    /// than one split meets all this, as it can when heavier water enters above lighter, one of them is found.
    ///
    /// The order of the ports changes nothing. Without flow, nothing moves and no head is told. `None` when a
    /// flow is to pass and every port is shut tight.
    ///
    /// # Units
    /// m3/s.
    ///
    /// # References
    /// Bernoulli along each port and hydrostatics in the shaft (derived); Howington 1989, US Army WES (abstract
    /// read), has theory and tests of the two-port case.
    pub fn split(
        &self,
        ports: &[Port],
        flow_m3s: f64,
        supply: impl Fn(usize, f64) -> Entering,
    ) -> Option<Split> {
        let mut split = Split { flows_m3s: vec![0.0; ports.len()], head_m: 0.0, settled: true };
        if flow_m3s <= 0.0 {
            return Some(split);
        }
        let mut upper = self.branch(ports, TRICKLE * flow_m3s, &supply, |z| z >= self.conduit_m);
        let mut lower = self.branch(ports, TRICKLE * flow_m3s, &supply, |z| z < self.conduit_m);
        let apart_m = match (upper.is_empty(), lower.is_empty()) {
            (true, true) => return None,
            (false, true) => {
                upper.carry(flow_m3s);
                0.0
            }
            (true, false) => {
                lower.carry(flow_m3s);
                0.0
            }
            (false, false) => {
                let apart_m = join(&mut upper, &mut lower, flow_m3s);
                let near = SETTLED * upper.largest_head_m().max(lower.largest_head_m());
                if apart_m.abs() <= near { apart_m } else { join(&mut lower, &mut upper, flow_m3s) }
            }
        };
        let arriving = if upper.flow_m3s() > 0.0 { upper.arriving() } else { lower.arriving() };
        let whole = lower.flow_m3s() + upper.flow_m3s();
        for branch in [&mut lower, &mut upper] {
            branch.rest(arriving);
            for inlet in &branch.inlets {
                // the last digits go where they belong
                split.flows_m3s[inlet.port] = inlet.flow_m3s * (flow_m3s / whole);
                split.head_m = split.head_m.max(inlet.head_m);
            }
        }
        split.settled =
            (whole - flow_m3s).abs() <= SETTLED * flow_m3s && apart_m.abs() <= SETTLED * split.head_m;
        for port in ports.iter().filter(|p| p.area_m2 <= 0.0) {
            let branch = if port.centre_m >= self.conduit_m { &upper } else { &lower };
            split.head_m = split.head_m.max(branch.head_at_m(self.place(port.centre_m), arriving));
        }
        Some(split)
    }

    fn place(&self, z_m: f64) -> Place {
        Place { z_m, excess_kg_m2: self.column.excess_kg_m2(z_m) }
    }

    /// The open ports on one side of the conduit.
    fn branch<F>(
        &self,
        ports: &[Port],
        trickle_m3s: f64,
        supply: F,
        side: impl Fn(f64) -> bool,
    ) -> Branch<'_, F> {
        let open = ports.iter().enumerate().filter(|(_, p)| p.area_m2 > 0.0 && side(p.centre_m));
        let mut inlets: Vec<Inlet> = open
            .map(|(port, p)| Inlet {
                port,
                place: self.place(p.centre_m),
                conveyance: p.area_m2 * (2.0 * G_M_S2 / p.loss).sqrt(),
                ..Inlet::default()
            })
            .collect();
        inlets.sort_by(|a, b| {
            let [far_a, far_b] = [a, b].map(|i| (i.place.z_m - self.conduit_m).abs());
            let [a, b] = [a.port, b.port].map(|k| (ports[k].area_m2, ports[k].loss, k));
            let larger = b.0.total_cmp(&a.0);
            far_b.total_cmp(&far_a).then(larger).then(a.1.total_cmp(&b.1)).then(a.2.cmp(&b.2))
        });
        Branch { shaft: *self, conduit: self.place(self.conduit_m), supply, trickle_m3s, inlets }
    }
}

/// Shares a flow between two branches so that both bring one pressure to the conduit; how far apart they stay, m.
///
/// `one` is followed by the head at its farthest port, along which it never leaps, though one flow of a branch can
/// come about in several ways; the other carries the rest.
fn join<F: Fn(usize, f64) -> Entering>(one: &mut Branch<F>, other: &mut Branch<F>, flow_m3s: f64) -> f64 {
    let trickle = TRICKLE * flow_m3s;
    let even_head_m = (flow_m3s / (one.conveyance() + other.conveyance())).powi(2);
    let ends = [trickle, flow_m3s - trickle].map(|flow| one.farthest_m3s(flow));
    let mut apart_m = |farthest_m3s: f64| {
        let flow = one.follow(0, farthest_m3s);
        other.carry((flow_m3s - flow).max(trickle));
        one.arriving().head_m - other.arriving().head_m
    };
    let at_ends = ends.map(&mut apart_m);
    if at_ends[0] >= 0.0 {
        one.shut();
        other.carry(flow_m3s);
        return 0.0;
    }
    if at_ends[1] <= 0.0 {
        other.shut();
        one.carry(flow_m3s);
        return 0.0;
    }
    let found = root(&mut apart_m, ends, at_ends, FOUND * even_head_m);
    apart_m(found)
}
