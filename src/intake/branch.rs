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

/// A port flows where this share of the flow, let through it, would not already draw more than the whole from
/// the ports nearer the conduit (choice; small enough to change no digit that is shown).
pub(super) const TRICKLE: f64 = 1e-12;
/// A flow is found when it misses by no more than this share of itself (choice, near round-off).
pub(super) const FOUND: f64 = 1e-14;

/// An elevation in the pool.
#[derive(Clone, Copy)]
pub(super) struct Place {
    pub(super) z_m: f64,
    /// The pool's excess mass up to there, kg/m2.
    pub(super) excess_kg_m2: f64,
}

/// An open port and what passes it.
#[derive(Clone, Copy)]
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
    pub(super) inlets: Vec<Inlet>,
}

impl<F: Fn(usize, f64) -> Entering> Branch<'_, F> {
    /// Change of head over a stretch of shaft towards the conduit, m: the pool's change of pressure less that of
    /// the water in the shaft, either way up.
    pub(super) fn step_m(&self, from: Place, to: Place, shaft_kg_m3: f64) -> f64 {
        let shaft = (shaft_kg_m3 - self.shaft.column.bed_density_kg_m3()) * (from.z_m - to.z_m);
        (from.excess_kg_m2 - to.excess_kg_m2 - shaft) / HEAD_KG_M3
    }

    pub(super) fn density_kg_m3(&self, water: Entering) -> f64 {
        let Entering { temperature_c, salt_g_per_kg, suspended_mg_l } = water;
        water::density_kg_m3(temperature_c, salt_g_per_kg, suspended_mg_l, self.shaft.solids_kg_m3)
    }

    /// Lets a flow in through one port, none through those farther out, and follows it to the last port: how much
    /// has gathered there, m3/s.
    fn follow(&mut self, first: usize, flow_m3s: f64) -> f64 {
        let mut inlet = self.inlets[first];
        let mut whole = flow_m3s;
        let mut water = (self.supply)(inlet.port, flow_m3s);
        inlet.flow_m3s = flow_m3s;
        inlet.head_m = (flow_m3s / inlet.conveyance).powi(2);
        inlet.shaft_kg_m3 = self.density_kg_m3(water);
        self.inlets[first] = inlet;
        for i in first + 1..self.inlets.len() {
            let outer = inlet;
            inlet = self.inlets[i];
            inlet.head_m = outer.head_m + self.step_m(outer.place, inlet.place, outer.shaft_kg_m3);
            inlet.flow_m3s = inlet.conveyance * inlet.head_m.max(0.0).sqrt();
            inlet.shaft_kg_m3 = outer.shaft_kg_m3;
            if inlet.flow_m3s > 0.0 {
                whole += inlet.flow_m3s;
                water = water.with((self.supply)(inlet.port, inlet.flow_m3s), inlet.flow_m3s / whole);
                inlet.shaft_kg_m3 = self.density_kg_m3(water);
            }
            self.inlets[i] = inlet;
        }
        whole
    }

    /// Shares a flow above zero among the ports. The branch has at least one.
    ///
    /// From the farthest port inward, each is tried with a trickle. Where the nearer ports would then already give
    /// more than the whole it stays shut, and so do those beside it; else its flow is the root.
    pub(super) fn carry(&mut self, flow_m3s: f64) {
        let last = self.inlets.len() - 1;
        let mut first = 0;
        while first < last {
            let trickle = TRICKLE * flow_m3s;
            let over = self.follow(first, trickle) - flow_m3s;
            if over <= 0.0 {
                let at_whole = self.follow(first, flow_m3s) - flow_m3s;
                let value = |flow: f64| self.follow(first, flow) - flow_m3s;
                let found = root(value, [trickle, flow_m3s], [over, at_whole], FOUND * flow_m3s);
                self.follow(first, found);
                return;
            }
            let z_m = self.inlets[first].place.z_m;
            while first < last && self.inlets[first].place.z_m.total_cmp(&z_m).is_eq() {
                self.inlets[first].flow_m3s = 0.0;
                first += 1;
            }
        }
        self.follow(last, flow_m3s);
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
        let at = |i: &Inlet| i.head_m + self.step_m(i.place, self.conduit, i.shaft_kg_m3);
        let inlet = self.inlets.last();
        Arriving { head_m: inlet.map_or(0.0, at), shaft_kg_m3: inlet.map_or(0.0, |i| i.shaft_kg_m3) }
    }

    /// Lets nothing through.
    pub(super) fn shut(&mut self) {
        for inlet in &mut self.inlets {
            inlet.flow_m3s = 0.0;
        }
    }

    /// Heads at the ports beyond the farthest that flows, once what arrives at the conduit is known: the water
    /// that a still port would supply stands from it inward.
    pub(super) fn rest(&mut self, arriving: Arriving) {
        let still = self.inlets.iter().position(|i| i.flow_m3s > 0.0).unwrap_or(self.inlets.len());
        let inner = self.inlets.get(still);
        let (mut head_m, mut place) = inner.map_or((arriving.head_m, self.conduit), |i| (i.head_m, i.place));
        for i in (0..still).rev() {
            let mut inlet = self.inlets[i];
            inlet.shaft_kg_m3 = self.density_kg_m3((self.supply)(inlet.port, 0.0));
            inlet.head_m = head_m - self.step_m(inlet.place, place, inlet.shaft_kg_m3);
            (head_m, place) = (inlet.head_m, inlet.place);
            self.inlets[i] = inlet;
        }
    }

    /// Head at a port that is shut tight, after [`rest`](Self::rest), m.
    pub(super) fn head_at_m(&self, place: Place, arriving: Arriving) -> f64 {
        let distance_m = |p: Place| (p.z_m - self.conduit.z_m).abs();
        let outer = self.inlets.iter().rev().find(|i| distance_m(i.place) >= distance_m(place));
        match (outer, self.inlets.first()) {
            (Some(outer), _) => outer.head_m + self.step_m(outer.place, place, outer.shaft_kg_m3),
            // beyond the farthest open port its own water stands, in a branch without any the water at the conduit
            (None, Some(inner)) => {
                let own_kg_m3 = self.density_kg_m3((self.supply)(inner.port, inner.flow_m3s));
                inner.head_m - self.step_m(place, inner.place, own_kg_m3)
            }
            (None, None) => arriving.head_m - self.step_m(place, self.conduit, arriving.shaft_kg_m3),
        }
    }
}
