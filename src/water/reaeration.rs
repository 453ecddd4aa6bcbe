//! Oxygen that a river takes from the air, and the sag where its water uses oxygen up.
//!
//! Methods: `docs/methods.md`, section 6.

/// Depth below which the form for shallow streams is taken, m (recalled).
const SHALLOW_M: f64 = 0.6;
/// Velocity from which the form for fast rivers is taken, m/s (recalled).
const FAST_M_S: f64 = 0.55;
/// Slowest transfer through the surface, m/day (recalled: 0.6 of still water in light wind).
const LEAST_M_PER_DAY: f64 = 0.6;
/// How reaeration rises with each degree (recalled; Elmore & West 1961).
const PER_C: f64 = 1.024;

/// Reaeration at 20 C of slow and deep rivers.
///
/// # Units
/// Velocity m/s, depth m; per day.
///
/// # References
/// 3.93 U^0.5 H^-1.5, O'Connor & Dobbins 1958; coefficients as in Chin 2006 (recalled).
pub fn o_connor_dobbins_per_day(velocity_m_s: f64, depth_m: f64) -> f64 {
    3.93 * velocity_m_s.sqrt() * depth_m.powf(-1.5)
}

/// Reaeration at 20 C of fast rivers.
///
/// # Units
/// Velocity m/s, depth m; per day.
///
/// # References
/// 5.026 U^0.969 H^-1.673, Churchill, Elmore & Buckingham 1962 (recalled).
pub fn churchill_per_day(velocity_m_s: f64, depth_m: f64) -> f64 {
    5.026 * velocity_m_s.powf(0.969) * depth_m.powf(-1.673)
}

/// Reaeration at 20 C of shallow streams.
///
/// # Units
/// Velocity m/s, depth m; per day.
///
/// # References
/// 5.32 U^0.67 H^-1.85, Owens, Edwards & Gibbs 1964; coefficients as in Chin 2006 (recalled).
pub fn owens_gibbs_per_day(velocity_m_s: f64, depth_m: f64) -> f64 {
    5.32 * velocity_m_s.powf(0.67) * depth_m.powf(-1.85)
}

/// Reaeration at 20 C by velocity and depth, and whether both lie where its form was measured; outside, the nearest
/// form is carried on. Never less than 0.6 m a day through the surface.
///
/// # Units
/// Velocity m/s from 0, depth m above 0; per day.
///
/// # References
/// [`owens_gibbs_per_day`] below 0.6 m of depth, else [`o_connor_dobbins_per_day`] below 0.55 m/s, else
/// [`churchill_per_day`]. Measured at depths of 0.12-0.73, 0.30-9.14 and 0.61-3.35 m and at velocities of 0.03-0.55,
/// 0.15-0.49 and 0.55-1.52 m/s (recalled). The first two are joined at 0.55 m/s, so up to there counts as measured.
pub fn reaeration_per_day(velocity_m_s: f64, depth_m: f64) -> (f64, bool) {
    let (form, depths, velocities): (fn(f64, f64) -> f64, _, _) = if depth_m < SHALLOW_M {
        (owens_gibbs_per_day, 0.12..=0.73, 0.03..=FAST_M_S)
    } else if velocity_m_s < FAST_M_S {
        (o_connor_dobbins_per_day, 0.30..=9.14, 0.15..=FAST_M_S)
    } else {
        (churchill_per_day, 0.61..=3.35, FAST_M_S..=1.52)
    };
    let within = depths.contains(&depth_m) && velocities.contains(&velocity_m_s);
    (form(velocity_m_s, depth_m).max(LEAST_M_PER_DAY / depth_m), within)
}

/// Reaeration at another temperature than 20 C.
///
/// # Units
/// Per day, C; per day.
///
/// # References
/// k 1.024^(T - 20), Elmore & West 1961 (recalled).
pub fn reaeration_at_per_day(at_20_c_per_day: f64, temperature_c: f64) -> f64 {
    at_20_c_per_day * PER_C.powf(temperature_c - 20.0)
}

/// The oxygen that water starts with and what changes it on its way.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sag {
    /// What is missing to saturation at the start, mg/L; negative above saturation.
    pub deficit_mg_l: f64,
    /// Oxygen that the water will still use up, mg/L.
    pub demand_mg_l: f64,
    /// How fast it does, per day.
    pub decay_per_day: f64,
    /// Reaeration, per day.
    pub reaeration_per_day: f64,
}

/// What is missing to saturation after a time. Beyond saturation itself the water is empty: the caller stops there.
///
/// # Units
/// Days from 0; mg/L.
///
/// # References
/// Streeter & Phelps 1925: D = D0 exp(-ka t) + kd L0 (exp(-kd t) - exp(-ka t))/(ka - kd) (standard); written with
/// expm1, so that equal rates are no special case (derived).
pub fn deficit_mg_l(sag: &Sag, days: f64) -> f64 {
    let (kd, ka) = (sag.decay_per_day, sag.reaeration_per_day);
    let apart = (ka - kd).abs() * days;
    // the mean of exp(-x) between 0 and the difference of the two exponents; 1 where they are equal
    let mean = if apart > 0.0 { -(-apart).exp_m1() / apart } else { 1.0 };
    let used = sag.demand_mg_l * kd * days * (-kd.min(ka) * days).exp() * mean;
    sag.deficit_mg_l * (-ka * days).exp() + used
}

/// When and how deep the oxygen sags to its lowest: days and deficit. `None` where it never sags, because it only
/// rises from the start, or sinks without end for want of reaeration.
///
/// # Units
/// Days and mg/L.
///
/// # References
/// Where [`deficit_mg_l`] stands still: tc = ln[(ka/kd)(1 - D0 (ka - kd)/(kd L0))]/(ka - kd), for equal rates
/// (1 - D0/L0)/k (derived).
pub fn critical_sag(sag: &Sag) -> Option<(f64, f64)> {
    let Sag { deficit_mg_l: start, demand_mg_l: demand, decay_per_day: kd, reaeration_per_day: ka } = *sag;
    if demand <= 0.0 || kd <= 0.0 || ka <= 0.0 {
        return None;
    }
    let apart = (ka - kd) / kd;
    let bent = -start * apart / demand;
    if bent <= -1.0 {
        return None;
    }
    let days = if apart == 0.0 {
        (1.0 - start / demand) / kd
    } else {
        (apart.ln_1p() + bent.ln_1p()) / (apart * kd)
    };
    (days > 0.0).then(|| (days, deficit_mg_l(sag, days)))
}
