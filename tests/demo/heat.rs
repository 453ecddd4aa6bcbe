//! Heat through a water surface, on purpose by other relations than the program's own.

/// The air over water, of an hour or of a day.
#[derive(Clone, Copy)]
pub(crate) struct Hour {
    pub(crate) air_c: f64,
    pub(crate) dew_point_c: f64,
    /// At 10 m.
    pub(crate) wind_m_s: f64,
    /// 0 to 1.
    pub(crate) cloud: f64,
    pub(crate) sun_w_m2: f64,
}

const STEFAN_BOLTZMANN_W_M2_K4: f64 = 5.67e-8;
const KELVIN: f64 = 273.15;

/// Heat into a square metre of water at a temperature (C) with a share of the sun kept off, W/m2.
///
/// # References
/// Long waves of a clear sky by Brutsaert 1975, 1.24 (e/T)^(1/7) (from memory), more under cloud by 0.22 of its square;
/// vapour pressure by Magnus (from memory); evaporation by a straight line of wind and contact by the ratio of Bowen,
/// 0.62 hPa/C; 6 % of the sun and 3 % of the long waves are thrown back (each a choice).
pub(crate) fn net_w_m2(air: &Hour, water_c: f64, shade: f64) -> f64 {
    let vapour_hpa = |t: f64| 6.112 * (17.62 * t / (243.12 + t)).exp();
    let (held_hpa, air_k) = (vapour_hpa(air.dew_point_c), air.air_c + KELVIN);
    let sky = 1.24 * (held_hpa / air_k).powf(1.0 / 7.0) * (1.0 + 0.22 * air.cloud * air.cloud);
    let long = |t_k: f64| 0.97 * STEFAN_BOLTZMANN_W_M2_K4 * t_k.powi(4);
    let per_hpa = 6.5 + 1.1 * air.wind_m_s;
    0.94 * (1.0 - shade) * air.sun_w_m2 + sky.min(1.0) * long(air_k)
        - long(water_c + KELVIN)
        - per_hpa * (vapour_hpa(water_c) - held_hpa + 0.62 * (water_c - air.air_c))
}

/// The water temperature (C) at which a day's hours give no heat.
pub(crate) fn equilibrium_c(hours: &[Hour; 24]) -> f64 {
    let (mut low, mut high) = (-10.0, 50.0);
    for _ in 0..50 {
        let middle = f64::midpoint(low, high);
        let gained: f64 = hours.iter().map(|hour| net_w_m2(hour, middle, 0.0)).sum();
        if gained > 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
    f64::midpoint(low, high)
}
