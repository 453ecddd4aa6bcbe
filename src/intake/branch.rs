//! One branch of a well: the open ports on one side of the conduit, and the water that gathers on its way to it.
//!
//! From the flow of the farthest port that flows, everything nearer follows port by port: the head there, what that
//! port adds, what the mixture weighs. So a branch has one unknown however many ports it has, and water that
//! enters may depend on the flow without any guess to be repeated.
//!
//! Methods: `docs/methods.md`, section 4.

use crate::profile::HEAD_KG_M3;
use crate::water;

use super::root::root;
use super::split::{Entering, Shaft};

/// Share of a well's flow at which the water that passes a port fills the shaft there instead of the port's own
/// still water (choice: between them the water changes by degrees, so that nothing leaps as a port begins to
/// flow, and no flow that is shown is touched).
pub(super) const TRICKLE: f64 = 1e-9;
/// A flow is found when it misses by no more than this share of itself (choice, near round-off).
pub(super) const FOUND: f64 = 1e-14;

/// An elevation in the pool.
#[derive(Clone, Copy, Default)]
pub(super) struct Place {
    pub(super) z_m: f64,
    /// The pool's excess mass up to there, kg/m2.
    pub(super) excess_kg_m2: f64,
}

/// An open port and what passes it.
#[derive(Clone, Copy, Default)]
pub(super) struct Inlet {
    /// Index among the ports given.
    pub(super) port: usize,
    pub(super) place: Place,
    /// A sqrt(2 g/K): flow at a head of 1 m, m3/s.
    pub(super) conveyance: f64,
    pub(super) flow_m3s: f64,
    pub(super) head_m: f64,
    /// Density of the shaft's water from here towards the conduit, kg/m3.
    pub(super) shaft_kg_m3: f64,
}

/// What comes to the conduit.
#[derive(Clone, Copy)]
pub(super) struct Arriving {
    pub(super) head_m: f64,
    pub(super) shaft_kg_m3: f64,
}

/// The open ports on one side of the conduit, the farthest first.
pub(super) struct Branch<'a, F> {
    pub(super) shaft: Shaft<'a>,
    pub(super) conduit: Place,
    pub(super) supply: F,
    /// [`TRICKLE`] of the well's flow, m3/s.
    pub(super) trickle_m3s: f64,
    pub(super) inlets: Vec<Inlet>,
}

impl<F: Fn(usize, f64) -> Entering> Branch<'_, F> {
    /// Change of head from a port inward, m: the pool's change of pressure less that of the water in the shaft,
    /// either way up.
    fn step_m(&self, from: Inlet, to: Place) -> f64 {
        let shaft = (from.shaft_kg_m3 - self.shaft.column.bed_density_kg_m3()) * (from.place.z_m - to.z_m);
        (from.place.excess_kg_m2 - to.excess_kg_m2 - shaft) / HEAD_KG_M3
    }

    fn density_kg_m3(&self, water: Entering) -> f64 {
        let Entering { temperature_c, salt_g_per_kg, suspended_mg_l } = water;
        water::density_kg_m3(temperature_c, salt_g_per_kg, suspended_mg_l, self.shaft.solids_kg_m3)
    }

    /// Lets a flow in through one port, none through those farther out, and follows it to the last port: how much
    /// has gathered there, m3/s. A flow below zero stands for the head that would drive it out: none passes.
    pub(super) fn follow(&mut self, first: usize, flow_m3s: f64) -> f64 {
        let mut inlet = self.inlets[first];
        inlet.flow_m3s = flow_m3s.max(0.0);
        inlet.head_m = flow_m3s * flow_m3s.abs() / inlet.conveyance.powi(2);
        let mut water = (self.supply)(inlet.port, inlet.flow_m3s);
        inlet.shaft_kg_m3 = self.density_kg_m3(water);
        self.inlets[first] = inlet;
        let mut whole = inlet.flow_m3s;
        for i in first + 1..self.inlets.len() {
            let outer = inlet;
            inlet = self.inlets[i];
            inlet.head_m = outer.head_m + self.step_m(outer, inlet.place);
            inlet.flow_m3s = inlet.conveyance * inlet.head_m.max(0.0).sqrt();
            whole += inlet.flow_m3s;
            // the square makes the still water's part vanish beside any flow that counts
            let own = self.trickle_m3s * self.trickle_m3s / (self.trickle_m3s + whole);
            let share = (inlet.flow_m3s + own) / (whole + own);
            water = water.with((self.supply)(inlet.port, inlet.flow_m3s), share);
            inlet.shaft_kg_m3 = self.density_kg_m3(water);
            self.inlets[i] = inlet;
        }
        whole
    }

    /// Shares a flow above zero among the ports. The branch has at least one.
    ///
    /// From the farthest port inward, each is tried with no flow. Where the nearer ports would then already give
    /// more than the whole, less head suffices and it stays shut; else its flow is a root, since all of the flow
    /// through it is enough. A port that stays shut caps the head of those nearer, which keeps it shut.
    pub(super) fn carry(&mut self, flow_m3s: f64) {
        let last = self.inlets.len() - 1;
        let mut cap_m = f64::INFINITY;
        for first in 0..=last {
            if cap_m > 0.0 {
                let over = if first == last { -flow_m3s } else { self.follow(first, 0.0) - flow_m3s };
                if over <= 0.0 {
                    let most = flow_m3s.min(self.inlets[first].conveyance * cap_m.sqrt());
                    let at_most = self.follow(first, most) - flow_m3s;
                    if at_most > 0.0 {
                        let value = |flow: f64| self.follow(first, flow) - flow_m3s;
                        let found = root(value, [0.0, most], [over, at_most], FOUND * flow_m3s);
                        self.follow(first, found);
                    }
                    return;
                }
                cap_m = 0.0;
            }
            self.still(first);
            if let Some(next) = self.inlets.get(first + 1) {
                cap_m += self.step_m(self.inlets[first], next.place);
            }
        }
        self.follow(last, flow_m3s);
    }

    /// Nothing passes a port, and nothing comes from farther out: its own water stands in the shaft.
    fn still(&mut self, i: usize) {
        let own = (self.supply)(self.inlets[i].port, 0.0);
        self.inlets[i].flow_m3s = 0.0;
        self.inlets[i].shaft_kg_m3 = self.density_kg_m3(own);
    }

    /// What [`follow`](Self::follow) starts from at the farthest port when the branch carries a flow, m3/s.
    pub(super) fn farthest_m3s(&mut self, flow_m3s: f64) -> f64 {
        self.carry(flow_m3s);
        self.rest(self.arriving());
        let i = self.inlets[0];
        i.conveyance * i.head_m.abs().sqrt().copysign(i.head_m)
    }

    /// Largest head at a port that flows, m.
    pub(super) fn largest_head_m(&self) -> f64 {
        self.inlets.iter().filter(|i| i.flow_m3s > 0.0).map(|i| i.head_m).fold(0.0, f64::max)
    }

    pub(super) fn is_empty(&self) -> bool {
        self.inlets.is_empty()
    }

    /// Flow of all ports, m3/s.
    pub(super) fn flow_m3s(&self) -> f64 {
        self.inlets.iter().map(|i| i.flow_m3s).sum()
    }

    /// Flow of all ports at a head of 1 m, m3/s.
    pub(super) fn conveyance(&self) -> f64 {
        self.inlets.iter().map(|i| i.conveyance).sum()
    }

    /// Head and water at the conduit, after [`carry`](Self::carry) and where the branch gives any.
    pub(super) fn arriving(&self) -> Arriving {
        self.inlets.last().map_or(Arriving { head_m: 0.0, shaft_kg_m3: 0.0 }, |&i| Arriving {
            head_m: i.head_m + self.step_m(i, self.conduit),
            shaft_kg_m3: i.shaft_kg_m3,
        })
    }

    /// Lets nothing through.
    pub(super) fn shut(&mut self) {
        for inlet in &mut self.inlets {
            inlet.flow_m3s = 0.0;
        }
    }

    /// Heads at the ports beyond the farthest that flows, once what arrives at the conduit is known.
    pub(super) fn rest(&mut self, arriving: Arriving) {
        let still = self.inlets.iter().position(|i| i.flow_m3s > 0.0).unwrap_or(self.inlets.len());
        let inner = self.inlets.get(still);
        let (mut head_m, mut place) = inner.map_or((arriving.head_m, self.conduit), |i| (i.head_m, i.place));
        for i in (0..still).rev() {
            self.still(i);
            head_m -= self.step_m(self.inlets[i], place);
            place = self.inlets[i].place;
            self.inlets[i].head_m = head_m;
        }
    }

    /// Head at a port that is shut tight, after [`rest`](Self::rest), m.
    pub(super) fn head_at_m(&self, place: Place, arriving: Arriving) -> f64 {
        let distance_m = |p: Place| (p.z_m - self.conduit.z_m).abs();
        let outer = self.inlets.iter().rev().find(|i| distance_m(i.place) >= distance_m(place));
        let beyond = |shaft_kg_m3: f64| Inlet { place, shaft_kg_m3, ..Inlet::default() };
        match (outer, self.inlets.first()) {
            (Some(&outer), _) => outer.head_m + self.step_m(outer, place),
            // beyond the farthest open port its own water stands, in a branch without any the water at the conduit
            (None, Some(inner)) => {
                let own = (self.supply)(inner.port, inner.flow_m3s);
                inner.head_m - self.step_m(beyond(self.density_kg_m3(own)), inner.place)
            }
            (None, None) => arriving.head_m - self.step_m(beyond(arriving.shaft_kg_m3), self.conduit),
        }
    }
}
