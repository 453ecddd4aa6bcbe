//! A pool at the top of its table.

use gatemix::season::Sky;
use gatemix::weather::Air;

use super::{go, layers, no_inflow, still};

const TABLE: [(f64, f64); 2] = [(0.0, 1e6), (30.0, 1e6)];

/// Damp warm air over cold water.
fn dewy() -> Sky {
    Sky::Air(Air { temperature_c: 18.0, dew_point_c: 17.0, wind_m_s: 3.0, cloud: 0.8, solar_w_m2: 50.0 })
}

#[test]
fn law_dew_does_not_lift_a_pool_above_the_top_of_its_table() {
    let mut site = still(&TABLE);
    site.season.evaporates = true;
    let brim_m3 = site.pool.volume_m3(30.0);
    let mut full = layers(&site, 30.0, 30, &|_| (6.0, 8.0));
    // a day that does not balance panics in `go`
    let made = go(&mut full, &site, Some(dewy()), no_inflow(), &[]);
    assert!((full.volume_m3() - brim_m3).abs() < 1e-9 * brim_m3, "{}", full.volume_m3());
    assert!(made.balance.water_m3.surface.abs() < 1e-9 * brim_m3);
    // a little below there is room for a part of it, lower down for all
    let dew = |below_m: f64| {
        let mut pool = layers(&site, 30.0 - below_m, 30, &|_| (6.0, 8.0));
        go(&mut pool, &site, Some(dewy()), no_inflow(), &[]).balance.water_m3.surface
    };
    let all_m3 = dew(1.0);
    assert!(all_m3 > 100.0, "{all_m3}");
    assert!((dew(0.5 * all_m3 / 1e6) - 0.5 * all_m3).abs() < 1e-3 * all_m3);
}
