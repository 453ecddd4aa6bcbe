//! Heat through the surface of a river or a pool.
//!
//! Net heat falls as the water warms, whatever the weather: so there is one equilibrium, and halving finds it.
//!
//! Methods: `docs/methods.md`, section 6.

use super::Air;
use super::humidity::saturation_mmhg;

/// Kelvin at 0 C (standard; exact by definition).
const KELVIN: f64 = 273.15;
/// Stefan-Boltzmann constant, W/m2/K4 (standard; CODATA 2018).
const SIGMA: f64 = 5.670374e-8;
/// Share of its long waves that water sends and takes up (recalled; Edinger, Brady & Geyer 1974).
const EMISSIVITY: f64 = 0.97;
/// Emissivity of a clear sky over the square of its temperature, 1/K2 (recalled; Swinbank 1963).
const CLEAR_SKY_PER_K2: f64 = 0.937e-5;
/// What full cloud adds to the long waves of the sky (recalled; Edinger, Brady & Geyer 1974).
const CLOUD_GAIN: f64 = 0.17;
/// Wind function in still air, W/m2/mmHg (recalled; Brady, Graves & Geyer 1969).
const STILL: f64 = 9.2;
/// What the square of the wind at 7 m adds to it (recalled; Brady, Graves & Geyer 1969).
const WINDY: f64 = 0.46;
/// Contact heat beside evaporation, mmHg/C (Bowen's ratio; recalled, Edinger, Brady & Geyer 1974).
const BOWEN_MMHG_C: f64 = 0.47;
/// Share of the sun that water throws back (recalled: 0.06 to 0.10 through a day; the middle is our choice).
pub const REFLECTED: f64 = 0.08;

/// Warmest water in which an equilibrium is sought, C (choice; the sun of the desert stays far below).
const WARMEST_C: f64 = 100.0;
/// Halvings that bring 100 C to 1e-13 C.
const HALVINGS: usize = 50;

/// The parts of the heat through a square metre of surface, W/m2, each counted as it warms the water.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Budget {
    /// Sun and sky that get in.
    pub solar: f64,
    /// Long waves from the air.
    pub air: f64,
    /// Long waves sent back; negative.
    pub back: f64,
    /// Evaporation; negative where water leaves.
    pub evaporation: f64,
    /// Warmth from the air by contact.
    pub contact: f64,
}

impl Budget {
    /// All parts together, W/m2.
    pub fn net_w_m2(&self) -> f64 {
        self.solar + self.air + self.back + self.evaporation + self.contact
    }
}

/// How strongly wind carries vapour off.
///
/// # Units
/// Wind at 7 m, m/s; W/m2/mmHg.
///
/// # References
/// f = 9.2 + 0.46 W^2, Brady, Graves & Geyer 1969 (recalled).
pub fn wind_function(wind_m_s: f64) -> f64 {
    STILL + WINDY * wind_m_s * wind_m_s
}

/// Slope of the pressure at saturation as the exchange takes it.
///
/// # Units
/// Middle of water temperature and dew point, C; mmHg/C.
///
/// # References
/// beta = 0.35 + 0.015 Tm + 0.0012 Tm^2, Brady, Graves & Geyer 1969 (recalled).
pub fn vapour_slope_mmhg_c(middle_c: f64) -> f64 {
    0.35 + middle_c * (0.015 + 0.0012 * middle_c)
}

/// The heat that comes in through the surface of water under a share of shade. Shade keeps off the sun only.
///
/// # Units
/// C, share 0 to 1; W/m2.
///
/// # References
/// Hs (1 - reflected)(1 - shade) + 0.97 x 0.937e-5 sigma Ta^6 (1 + 0.17 C^2) - 0.97 sigma Ts^4 - f (es - ea)
/// - 0.47 f (Ts - Ta): Swinbank 1963; Brady, Graves & Geyer 1969; Edinger, Brady & Geyer 1974 (recalled).
pub fn budget(air: &Air, water_c: f64, shade: f64) -> Budget {
    let f = wind_function(air.wind_m_s);
    let sky = CLEAR_SKY_PER_K2 * (1.0 + CLOUD_GAIN * air.cloud * air.cloud);
    Budget {
        solar: air.solar_w_m2 * (1.0 - REFLECTED) * (1.0 - shade),
        air: EMISSIVITY * SIGMA * sky * (air.temperature_c + KELVIN).powi(6),
        back: -EMISSIVITY * SIGMA * (water_c + KELVIN).powi(4),
        evaporation: f * (saturation_mmhg(air.dew_point_c) - saturation_mmhg(water_c)),
        contact: BOWEN_MMHG_C * f * (air.temperature_c - water_c),
    }
}

/// The temperature at which no heat passes; `None` where water would freeze.
///
/// # Units
/// Share of shade 0 to 1; C.
///
/// # References
/// Root of [`budget`] (derived).
pub fn equilibrium_c(air: &Air, shade: f64) -> Option<f64> {
    let net = |water_c: f64| budget(air, water_c, shade).net_w_m2();
    let (mut low, mut high) = (0.0, WARMEST_C);
    if net(low) < 0.0 || net(high) > 0.0 {
        return None;
    }
    for _ in 0..HALVINGS {
        let middle = 0.5 * (low + high);
        if net(middle) > 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
    Some(0.5 * (low + high))
}

/// Heat that passes for each degree from equilibrium. With weather it is evaluated at the equilibrium.
///
/// # Units
/// C of the water; W/m2/C.
///
/// # References
/// K = 4.5 + 0.05 Ts + beta f + 0.47 f, Brady, Graves & Geyer 1969 (recalled).
pub fn exchange_w_m2_c(air: &Air, water_c: f64) -> f64 {
    let f = wind_function(air.wind_m_s);
    let beta = vapour_slope_mmhg_c(0.5 * (water_c + air.dew_point_c));
    4.5 + 0.05 * water_c + (beta + BOWEN_MMHG_C) * f
}
