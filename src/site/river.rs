//! The river below the dam: reaches, what joins it, the points where rules apply, the air above it.

use crate::weather::Air;

/// A figure that is the same all year, or differs from month to month.
#[derive(Debug, Clone, PartialEq)]
pub enum Yearly {
    /// The same all year.
    Constant(f64),
    /// By month, January first.
    Monthly([f64; 12]),
}

/// What the surface of the river trades with the air.
#[derive(Debug, Clone, PartialEq)]
pub enum Surface {
    /// A given equilibrium temperature, C, and exchange, W/m2/C.
    Given {
        /// Equilibrium temperature, C.
        equilibrium_c: Yearly,
        /// Exchange, W/m2/C.
        exchange_w_m2_c: Yearly,
    },
    /// Mean weather of each month, January first.
    Monthly(Box<[Air; 12]>),
    /// The weather of a file in the folder.
    File(String),
}

/// A side stream, or a second release that joins the river.
#[derive(Debug, Clone, PartialEq)]
pub struct Inflow {
    /// Name.
    pub name: String,
    /// Distance from the dam, m.
    pub at_m: f64,
    /// Flow, m3/s.
    pub flow_m3s: Option<Yearly>,
    /// Temperature, C.
    pub temperature_c: Option<Yearly>,
    /// Oxygen, mg/L.
    pub oxygen_mg_l: Option<Yearly>,
    /// A file of its flow, temperature and oxygen; where it tells a moment, it rules over the figures above.
    pub series: Option<String>,
    /// It is water of another release, not of a stream.
    pub release: bool,
}

/// Water that enters all along a reach, such as from the ground.
#[derive(Debug, Clone, PartialEq)]
pub struct Seepage {
    /// Flow over the whole reach, m3/s.
    pub flow_m3s: Yearly,
    /// Its temperature, C.
    pub temperature_c: Yearly,
    /// Its oxygen, mg/L.
    pub oxygen_mg_l: Option<Yearly>,
}

/// A piece of river.
#[derive(Debug, Clone, PartialEq)]
pub struct Reach {
    /// Name.
    pub name: String,
    /// Where it begins, from the dam, m.
    pub from_m: f64,
    /// Length, m.
    pub length_m: f64,
    /// Width at the surface, m.
    pub width_m: f64,
    /// Mean depth, m.
    pub depth_m: f64,
    /// Slope of the bed, where travel comes from width, depth and slope.
    pub slope: Option<f64>,
    /// Roughness after Manning, where travel comes from the slope.
    pub roughness: f64,
    /// Flow (m3/s) and hours the water takes through the reach, by flow; empty where it comes from the geometry.
    pub travel_h: Vec<(f64, f64)>,
    /// Flow (m3/s) and hours the bulk of a rise takes, by flow; empty where it is computed.
    pub rise_h: Vec<(f64, f64)>,
    /// Share of the sun kept off, 0 to 1.
    pub shade: f64,
    /// Streams that join, from the dam down.
    pub inflows: Vec<Inflow>,
    /// Water that enters all along.
    pub seepage: Option<Seepage>,
    /// Reaeration at 20 C, per day, where it is known; else computed from velocity and depth.
    pub reaeration_per_day: Option<f64>,
}

/// The regulating pool below the dam.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Afterbay {
    /// Volume, m3.
    pub volume_m3: f64,
    /// Surface, m2.
    pub area_m2: f64,
    /// Share of the volume that mixes; the rest stands still.
    pub mixed: f64,
}

/// A place in the river where rules apply.
#[derive(Debug, Clone, PartialEq)]
pub struct Point {
    /// Name.
    pub name: String,
    /// Distance from the dam, m.
    pub at_m: f64,
    /// Flow (m3/s) and stage (m), by flow; empty where none is given.
    pub rating: Vec<(f64, f64)>,
    /// Most that the stage may fall, m per hour.
    pub stage_fall_m_per_hour: Option<f64>,
    /// File of what its station recorded.
    pub observed: Option<String>,
    /// Warning time the site gives for a rise, hours.
    pub warning_h: Option<f64>,
}

/// What takes oxygen from the river.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Decay {
    /// Ultimate oxygen demand of the water that leaves the dam, mg/L.
    pub demand_mg_l: f64,
    /// Its decay at 20 C, per day.
    pub per_day: f64,
}

/// The river from the dam down.
#[derive(Debug, Clone, PartialEq)]
pub struct River {
    /// Reaches, from the dam down, end to end.
    pub reaches: Vec<Reach>,
    /// Points, from the dam down.
    pub points: Vec<Point>,
    /// The regulating pool below the dam.
    pub afterbay: Option<Afterbay>,
    /// What its surface trades with the air; `None` where nothing is given.
    pub surface: Option<Surface>,
    /// What takes its oxygen.
    pub decay: Decay,
}

impl Yearly {
    /// The figure in a month, 1 to 12.
    pub fn in_month(&self, month: u32) -> f64 {
        match self {
            Self::Constant(value) => *value,
            Self::Monthly(values) => values[(month.clamp(1, 12) - 1) as usize],
        }
    }
}

impl Reach {
    /// Where it ends, from the dam, m.
    pub fn to_m(&self) -> f64 {
        self.from_m + self.length_m
    }
}

impl Inflow {
    /// What it is called in a sentence.
    pub fn what(&self) -> &'static str {
        if self.release { "second release" } else { "side stream" }
    }
}

impl Point {
    /// Stage of a flow by its rating, m; `None` without a rating and outside its rows.
    pub fn stage_m(&self, flow_m3s: f64) -> Option<f64> {
        self.rating.windows(2).find_map(|rows| {
            let [(q0, s0), (q1, s1)] = *rows else { return None };
            ((q0..=q1).contains(&flow_m3s) && q1 > q0).then(|| s0 + (s1 - s0) * (flow_m3s - q0) / (q1 - q0))
        })
    }
}

impl River {
    /// Where the last reach ends, m from the dam.
    pub fn length_m(&self) -> f64 {
        self.reaches.last().map_or(0.0, Reach::to_m)
    }
}
