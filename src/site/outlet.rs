//! Outlets: openings that can release, their shape and what part of them is open.

use std::f64::consts::PI;

use super::Aeration;
use super::limits::{Avoid, Crew, GenerationLost};

/// Openings nearer than this are one position (choice: round-off).
pub const SAME_OPENING: f64 = 1e-6;

/// Shape of a submerged opening.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Shape {
    /// Rectangular, height and width in m.
    Rectangle {
        /// Full height, m.
        height_m: f64,
        /// Width, m.
        width_m: f64,
    },
    /// Circular, diameter in m.
    Circle {
        /// Diameter, m.
        diameter_m: f64,
    },
}

/// What kind of opening an outlet is.
#[derive(Debug, Clone, PartialEq)]
pub enum Kind {
    /// A submerged opening.
    Orifice(Shape),
    /// Water over an edge: spillway, shutter, stacked leaves.
    Crest {
        /// Length of the crest, m.
        length_m: f64,
        /// Whether gates hold the flow below that of the free crest.
        gated: bool,
        /// The site's own rating, head (m) against flow (m3/s), rising.
        rating: Vec<(f64, f64)>,
    },
}

/// From which edge the open part of a gate grows.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Opens {
    /// From the sill upward.
    #[default]
    Up,
    /// From the top downward.
    Down,
    /// From the middle both ways.
    Both,
}

/// One position the crew can set.
#[derive(Debug, Clone, PartialEq)]
pub struct Position {
    /// As it is called, such as `50` or `two leaves`.
    pub name: String,
    /// Open share of the full height, 0 to 1. Of positions with crests of their own the lowest crest is 1, and the
    /// others follow in equal parts.
    pub opening: f64,
    /// Crest elevation of this position, for stacked leaves, m.
    pub crest_m: Option<f64>,
}

/// Leak through a shut gate: a flow at a head.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Leakage {
    /// Leak at the reference head, m3/s.
    pub flow_m3s: f64,
    /// Reference head, m.
    pub head_m: f64,
    /// Range of the leak at that head, m3/s, for the band.
    pub range_m3s: Option<(f64, f64)>,
}

/// The part of an outlet through which water passes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OpenPart {
    /// Area, m2; for a crest its length times one metre, so that lengths weigh.
    pub area_m2: f64,
    /// Centre-line, or the crest, m.
    pub centre_m: f64,
    /// Upper edge; for a crest the crest itself, m.
    pub top_m: f64,
    /// Height, m; 0 for a crest.
    pub height_m: f64,
}

/// A checked outlet.
#[derive(Debug, Clone, PartialEq)]
pub struct Outlet {
    /// Name, unique in the site.
    pub name: String,
    /// Index of its well, for a gate on a well.
    pub well: Option<usize>,
    /// Kind and shape.
    pub kind: Kind,
    /// Centre-line of the fully open outlet, or the crest, m.
    pub centre_m: f64,
    /// Withdrawal angle, rad.
    pub angle_rad: f64,
    /// Loss coefficient on the port velocity, everything from pool to well.
    pub loss: Option<f64>,
    /// Discharge coefficient of a direct outlet.
    pub discharge: Option<f64>,
    /// From which edge it opens.
    pub opens: Opens,
    /// Positions; empty means any flow can be set.
    pub positions: Vec<Position>,
    /// Least water above the top of the open part, m; absent, not checked.
    pub min_submergence_m: Option<f64>,
    /// Least flow when open, m3/s.
    pub flow_min_m3s: f64,
    /// Most flow, m3/s; absent, computed from opening and head.
    pub flow_max_m3s: Option<f64>,
    /// Leak when shut.
    pub leakage: Option<Leakage>,
    /// What a direct outlet does to oxygen.
    pub aeration: Option<Aeration>,
    /// Pool elevations at which it may be used, m.
    pub pool_window_m: Option<(f64, f64)>,
    /// Openings and flows to avoid.
    pub avoid: Vec<Avoid>,
    /// Most velocity through the open part, m/s.
    pub max_entrance_m_s: Option<f64>,
    /// Whether it may be moved while water passes its well or itself; absent, not checked.
    pub moves_under_flow: Option<bool>,
    /// What a move takes.
    pub crew: Crew,
    /// Power not made by water that passes here.
    pub generation_lost: Option<GenerationLost>,
    /// Its position is not confirmed.
    pub uncertain: bool,
}

impl Outlet {
    /// Whether water passes over an edge here.
    pub fn is_crest(&self) -> bool {
        matches!(self.kind, Kind::Crest { .. })
    }

    /// Whether an opening says more of it than its flow: what has no positions and stands on no well is set by its flow
    /// alone.
    pub fn has_opening(&self) -> bool {
        self.well.is_some() || !self.positions.is_empty()
    }

    /// Full height of the opening, m; 0 for a crest.
    pub fn height_m(&self) -> f64 {
        match self.kind {
            Kind::Orifice(Shape::Rectangle { height_m, .. }) => height_m,
            Kind::Orifice(Shape::Circle { diameter_m }) => diameter_m,
            Kind::Crest { .. } => 0.0,
        }
    }

    /// Lowest edge of the fully open outlet, m.
    pub fn sill_m(&self) -> f64 {
        self.centre_m - 0.5 * self.height_m()
    }

    /// Crest at an opening, m: that of the nearest position where positions have crests of their own.
    pub fn crest_m(&self, opening: f64) -> f64 {
        let off = |p: &Position| (p.opening - opening).abs();
        self.positions
            .iter()
            .filter(|p| p.crest_m.is_some())
            .min_by(|a, b| off(a).total_cmp(&off(b)))
            .and_then(|p| p.crest_m)
            .unwrap_or(self.centre_m)
    }

    /// What the crew calls an opening: the name of a position, or percent.
    pub fn opening_name(&self, opening: f64) -> String {
        let named = self.positions.iter().find(|p| (p.opening - opening).abs() < SAME_OPENING);
        match named.filter(|p| p.name.parse::<f64>().is_err()) {
            Some(position) => position.name.clone(),
            None => format!("{:.0} %", 100.0 * opening),
        }
    }

    /// The open part at an opening of 0 to 1 of the full height.
    ///
    /// A rectangle opens in proportion; of a circle the open part is the circular segment uncovered
    /// (derived), its centre-line taken at half the uncovered height (choice).
    pub fn open_part(&self, opening: f64) -> OpenPart {
        let full = self.height_m();
        let height_m = full * opening.clamp(0.0, 1.0);
        let (area_m2, centre_m) = match self.kind {
            Kind::Crest { length_m, .. } => {
                let crest_m = self.crest_m(opening);
                return OpenPart { area_m2: length_m, centre_m: crest_m, top_m: crest_m, height_m: 0.0 };
            }
            Kind::Orifice(Shape::Rectangle { width_m, .. }) => (height_m * width_m, self.centre(height_m)),
            Kind::Orifice(Shape::Circle { diameter_m }) => {
                let r = 0.5 * diameter_m;
                let area = match self.opens {
                    Opens::Both => PI * r * r - 2.0 * segment_m2(r, r - 0.5 * height_m),
                    Opens::Up | Opens::Down => segment_m2(r, height_m),
                };
                (area, self.centre(height_m))
            }
        };
        OpenPart { area_m2, centre_m, top_m: centre_m + 0.5 * height_m, height_m }
    }

    fn centre(&self, height_m: f64) -> f64 {
        match self.opens {
            Opens::Up => self.sill_m() + 0.5 * height_m,
            Opens::Down => self.centre_m + 0.5 * (self.height_m() - height_m),
            Opens::Both => self.centre_m,
        }
    }
}

/// Area of a circular segment of height `h` cut from a circle of radius `r`, m2.
fn segment_m2(r: f64, h: f64) -> f64 {
    let h = h.clamp(0.0, 2.0 * r);
    let angle = (1.0 - h / r).clamp(-1.0, 1.0).acos();
    r * r * (angle - angle.sin() * angle.cos())
}
