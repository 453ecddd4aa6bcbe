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

impl Way {
    fn other(self) -> Self {
        match self {
            Self::Up => Self::Down,
            Self::Down => Self::Up,
        }
    }
}

/// What is known of a sink while its limits are sought. Flow relations are kept squared, which spares the
/// search every root.
pub(super) struct Reach<'a> {
    column: &'a Column,
    centre_m: f64,
    /// Stretch of the column that holds the centre-line.
    home: usize,
    /// Density at the centre-line, kg/m3.
    pub(super) density: f64,
    /// (theta/pi)^2 g/rho0.
    scale: f64,
}

impl<'a> Reach<'a> {
    /// `centre_m` lies between bed and surface.
    pub(super) fn new(column: &'a Column, centre_m: f64, angle_rad: f64) -> Self {
        let home = column.holding(centre_m);
        let density = column.density_in(home, centre_m);
        Self { column, centre_m, home, density, scale: (angle_rad / PI).powi(2) * G_M_S2 / density }
    }

    pub(super) fn boundary_m(&self, way: Way) -> f64 {
        match way {
            Way::Up => self.column.surface_m(),
            Way::Down => self.column.bed_m(),
        }
    }

    /// Distance (m) and density difference (kg/m3) from the centre-line to a node.
    #[inline]
    fn node(&self, i: usize) -> (f64, f64) {
        let z = self.column.nodes_m()[i];
        ((z - self.centre_m).abs(), (self.column.node_density_kg_m3()[i] - self.density).abs())
    }

    /// The same to the boundary.
    pub(super) fn boundary(&self, way: Way) -> (f64, f64) {
        self.node(match way {
            Way::Up => self.column.nodes_m().len() - 1,
            Way::Down => 0,
        })
    }

    /// The free-limit flow F(Z) = (theta/pi) Z^2.5 sqrt(g drho/rho0), squared, from the density difference.
    #[inline]
    fn square(&self, distance: f64, difference: f64) -> f64 {
        let area = distance * distance;
        self.scale * area * area * distance * difference
    }

    /// F at the boundary, m3/s.
    pub(super) fn boundary_flow_m3s(&self, way: Way) -> f64 {
        let (distance, difference) = self.boundary(way);
        self.square(distance, difference).sqrt()
    }

    /// Free limit on one side: elevation where F = `flow`, or `None` when the boundary comes first.
    pub(super) fn free(&self, way: Way, flow: f64) -> Option<f64> {
        self.meet(way, flow, |distance, difference| self.square(distance, difference))
    }

    /// Limit on one side when the other has met its boundary: elevation where phi F = `flow`, or `None` when
    /// the boundary comes first.
    pub(super) fn bounded(&self, way: Way, flow: f64) -> Option<f64> {
        let other = way.other();
        let (bound, _) = self.boundary(other);
        let touched = (self.boundary_flow_m3s(other) / flow).cbrt();
        self.meet(way, flow, |distance, difference| {
            let share = boundary_factor((bound / distance).max(touched));
            share * share * self.square(distance, difference)
        })
    }

    /// The elevation at which a flow relation meets the flow. `square(distance, density difference)` is the
    /// relation squared; it never falls outward, so the nodes are halved first and the stretch between two of
    /// them is then solved. `None` when it is not met before the boundary.
    pub(super) fn meet(&self, way: Way, flow: f64, square: impl Fn(f64, f64) -> f64) -> Option<f64> {
        let nodes = self.column.nodes_m();
        // nodes are counted outward from the centre-line
        let (count, first) = match way {
            Way::Up => (nodes.len() - 1 - self.home, self.home + 1),
            Way::Down => (self.home + 1, self.home),
        };
        let outward = |i: usize, k: usize| if way == Way::Up { i + k } else { i - k };
        let node = |k: usize| outward(first, k);
        let target = flow * flow;
        let (meets, at_inner, at_outer) = first_at_least(target, count, |k| {
            let (distance, difference) = self.node(node(k));
            square(distance, difference)
        })?;
        // nearly straight in elevation where density is linear: there the square goes as Z^6, and this
        // quotient has no curvature where it is zero (derived; Halley's step for a sixth power)
        let excess = |square: f64| (square - target) / (square + 1.4 * target);
        let inner = if meets == 0 { self.centre_m } else { nodes[node(meets - 1)] };
        let stretch = self.column.stretch(outward(self.home, meets));
        let value = |z: f64| {
            let difference = (stretch.density_kg_m3(z) - self.density).abs();
            excess(square((z - self.centre_m).abs(), difference))
        };
        Some(root(value, [inner, nodes[node(meets)]], [excess(at_inner), excess(at_outer)]))
    }
}

/// First index below `count` at which a value that never falls is not below `target`, with the value before
/// it (0 before the first) and the value there. `None` when all are below.
#[inline]
fn first_at_least(target: f64, count: usize, value: impl Fn(usize) -> f64) -> Option<(usize, f64, f64)> {
    let (mut low, mut high) = (0, count);
    let (mut before, mut there) = (0.0, None);
    while low < high {
        let middle = low + (high - low) / 2;
        let at = value(middle);
        if at < target {
            (low, before) = (middle + 1, at);
        } else {
            (high, there) = (middle, Some(at));
        }
    }
    there.map(|there| (low, before, there))
}

/// The step from an excess smaller than this is the last (choice): it leaves a small part of it.
const LAST_EXCESS: f64 = 1e-7;
/// Elevations are not told apart more finely, m (choice): where density barely differs its round-off hides the
/// excess.
const LEAST_STEP_M: f64 = 1e-11;
/// Most steps of the root search; bisection alone would need about 45 from 10 km.
const STEPS: usize = 100;

/// Root of a function that is below zero at the first end and not below it at the second, by false position
/// with the Anderson-Bjorck weight, which keeps the bracket. The values at the ends are given.
fn root(value: impl Fn(f64) -> f64, [mut a, mut b]: [f64; 2], [mut at_a, mut at_b]: [f64; 2]) -> f64 {
    for _ in 0..STEPS {
        let step = (a - b) * at_b / (at_b - at_a);
        if at_b.abs() < LAST_EXCESS || step.abs() < LEAST_STEP_M {
            return b + step;
        }
        let c = b + step;
        let at_c = value(c);
        if at_c * at_b < 0.0 {
            (a, at_a) = (b, at_b);
        } else {
            let weight = 1.0 - at_c / at_b;
            at_a *= if weight > 0.0 { weight } else { 0.5 };
        }
        (b, at_b) = (c, at_c);
    }
    b
}
