//! The relations behind a limit: the free limit, the boundary factor, and the root that meets a flow.
//!
//! Methods: `docs/methods.md`, section 3.

use std::f64::consts::PI;

use crate::profile::Column;
use crate::water::G_M_S2;

/// Factor of a zone cut by a boundary at `r` of its own half-thickness, (1 + r + sin(pi r)/pi)/2, 1 for
/// r >= 1: the share of a raised-cosine layer that a wall leaves (derived).
///
/// # References
/// WES TR E-87-2, 1987 (recalled).
pub fn boundary_factor(r: f64) -> f64 {
    if r >= 1.0 { 1.0 } else { 0.5 * (1.0 + r + (PI * r).sin() / PI) }
}

/// Half-thickness of the free zone in a linear density, Z = (Q/N)^(1/3) for angle pi, m.
///
/// # Units
/// Flow m3/s, buoyancy frequency N 1/s.
pub fn linear_limit_m(flow_m3s: f64, buoyancy_s: f64) -> f64 {
    (flow_m3s / buoyancy_s).cbrt()
}

/// Least flow at which water first comes across a sharp interface `height_m` from the port, m3/s:
/// 2.54 (theta/pi) sqrt(g') h^2.5. A yes-or-no test of its own, narrower than the zone by design.
///
/// # References
/// Craya 1949, La Houille Blanche (recalled; derived from Bernoulli with a point sink).
pub fn first_entrainment_flow_m3s(reduced_gravity_m_s2: f64, height_m: f64, angle_rad: f64) -> f64 {
    2.54 * (angle_rad / PI) * reduced_gravity_m_s2.sqrt() * height_m.powf(2.5)
}

/// Upward or downward from the centre-line.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Way {
    Up,
    Down,
}

/// What is known of a port while its limits are sought.
pub(super) struct Reach<'a> {
    pub(super) column: &'a Column,
    pub(super) centre_m: f64,
    /// Density at the centre-line, kg/m3.
    pub(super) density: f64,
    /// theta/pi.
    pub(super) angle: f64,
}

impl Reach<'_> {
    pub(super) fn boundary_m(&self, way: Way) -> f64 {
        match way {
            Way::Up => self.column.surface_m(),
            Way::Down => self.column.bed_m(),
        }
    }

    /// Distance from the centre-line to the boundary, m.
    pub(super) fn room_m(&self, way: Way) -> f64 {
        (self.boundary_m(way) - self.centre_m).abs()
    }

    fn node(&self, i: usize) -> (f64, f64) {
        let z = self.column.nodes_m()[i];
        ((z - self.centre_m).abs(), (self.column.node_density_kg_m3()[i] - self.density).abs())
    }

    /// The free-limit flow F(Z) = (theta/pi) Z^2.5 sqrt(g drho/rho0), m3/s, from the density difference.
    #[inline]
    fn flow(&self, distance: f64, difference: f64) -> f64 {
        self.angle * distance * distance * (distance * G_M_S2 * difference / self.density).sqrt()
    }

    /// Distance (m) and density difference (kg/m3) from the centre-line to the boundary.
    pub(super) fn boundary(&self, way: Way) -> (f64, f64) {
        self.node(match way {
            Way::Up => self.column.nodes_m().len() - 1,
            Way::Down => 0,
        })
    }

    /// F at the boundary, m3/s.
    pub(super) fn boundary_flow_m3s(&self, way: Way) -> f64 {
        let (distance, difference) = self.boundary(way);
        self.flow(distance, difference)
    }

    /// Free limit on one side: elevation where F = `flow`, or `None` when the boundary comes first.
    pub(super) fn free(&self, way: Way, flow: f64) -> Option<f64> {
        self.meet(way, |distance, difference| self.flow(distance, difference) - flow)
    }

    /// Limit on one side when the other is bounded at `bound_m` from the centre-line and would just touch at
    /// `bound_flow`: elevation where phi F = `flow`, or `None` when the boundary comes first.
    pub(super) fn bounded(&self, way: Way, flow: f64, bound_m: f64, bound_flow: f64) -> Option<f64> {
        let touched = (bound_flow / flow).cbrt();
        self.meet(way, |distance, difference| {
            boundary_factor((bound_m / distance).max(touched)) * self.flow(distance, difference) - flow
        })
    }

    /// The elevation at which a flow relation meets the flow: `excess(distance, density difference)` is below
    /// zero short of it and never falls outward, so the nodes are bisected first and the stretch between two
    /// of them is then solved. `None` when it is not met before the boundary.
    pub(super) fn meet(&self, way: Way, excess: impl Fn(f64, f64) -> f64) -> Option<f64> {
        let nodes = self.column.nodes_m();
        let at_node = |i: usize| {
            let (distance, difference) = self.node(i);
            excess(distance, difference)
        };
        let first_above = nodes.partition_point(|&z| z <= self.centre_m);
        // the outermost node still short of the flow is `inner`; the one beyond meets it
        let (segment, from, to) = match way {
            Way::Up => {
                let meets = partition(first_above, nodes.len(), |i| at_node(i) < 0.0);
                if meets == nodes.len() {
                    return None;
                }
                let inner = if meets == first_above { self.centre_m } else { nodes[meets - 1] };
                (meets - 1, inner, nodes[meets])
            }
            Way::Down => {
                let below = nodes.partition_point(|&z| z < self.centre_m);
                let meets = partition(0, below, |i| at_node(i) >= 0.0);
                if meets == 0 {
                    return None;
                }
                let inner = if meets == below { self.centre_m } else { nodes[meets] };
                (meets - 1, inner, nodes[meets - 1])
            }
        };
        let value = |z: f64| {
            let difference = (self.column.density_in(segment, z) - self.density).abs();
            excess((z - self.centre_m).abs(), difference)
        };
        Some(root(value, from, to))
    }
}

/// First index of `low..high` at which `pred` turns false.
fn partition(mut low: usize, mut high: usize, pred: impl Fn(usize) -> bool) -> usize {
    while low < high {
        let middle = low + (high - low) / 2;
        if pred(middle) {
            low = middle + 1;
        } else {
            high = middle;
        }
    }
    low
}

/// Limits are found to this distance, m.
const LIMIT_M: f64 = 1e-10;
/// Most steps of the root search; bisection alone would need about 45 from 10 km.
const STEPS: usize = 100;

/// Root of a function that is below zero at `short` and not below it at `beyond`, by false position with
/// the Anderson-Bjorck weight, which keeps the bracket.
pub(super) fn root(value: impl Fn(f64) -> f64, short: f64, beyond: f64) -> f64 {
    let (mut a, mut b) = (short, beyond);
    let (mut fa, mut fb) = (value(a), value(b));
    // round-off at a node can turn the sign there; the node is then the limit
    if fb <= 0.0 {
        return b;
    }
    if fa >= 0.0 {
        return a;
    }
    for _ in 0..STEPS {
        let c = (a * fb - b * fa) / (fb - fa);
        // false position can leave the bracket only by round-off
        let c = if (c - a) * (c - b) < 0.0 { c } else { 0.5 * (a + b) };
        let fc = value(c);
        if fc == 0.0 {
            return c;
        }
        if fc * fb < 0.0 {
            (a, fa) = (b, fb);
        } else {
            let weight = 1.0 - fc / fb;
            fa *= if weight > 0.0 { weight } else { 0.5 };
        }
        let moved = (c - b).abs();
        (b, fb) = (c, fc);
        if (b - a).abs() < LIMIT_M || moved < LIMIT_M * 1e-2 {
            break;
        }
    }
    b
}
