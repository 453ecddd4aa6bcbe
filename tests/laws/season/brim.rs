//! A pool at the top of its table.

use gatemix::profile::Column;
use gatemix::season::{Forcing, Inflow, Sky, day};
use gatemix::weather::Air;

use super::{date, go, layers, no_inflow, still};

const TABLE: [(f64, f64); 2] = [(0.0, 1e6), (30.0, 1e6)];

#[test]
fn law_dew_on_a_pool_at_the_top_of_its_table_stops_nothing_and_a_flood_does() {
    let mut site = still(&TABLE);
    site.season.evaporates = true;
    let mut full = layers(&site, 30.0, 30, &|_| (6.0, 8.0));
    let flooded = full.clone();
    let dewy = Air { temperature_c: 18.0, dew_point_c: 17.0, wind_m_s: 3.0, cloud: 0.8, solar_w_m2: 50.0 };
    // a day that fails panics in `go`
    let made = go(&mut full, &site, Some(Sky::Air(dewy)), no_inflow(), &[]);
    let dew_m3 = made.balance.water_m3.surface;
    assert!(dew_m3 > 100.0 && dew_m3 < 1e4, "{dew_m3}");
    // 0.02 m more, and nothing leaves
    let inflow = Inflow { flow_m3s: 2e4 / 86_400.0, ..no_inflow() };
    let forcing = Forcing { date: date(), sky: None, inflow };
    let failed = day(&mut flooded.clone(), &site, &forcing, &|_: &Column, _| Vec::new()).unwrap_err();
    assert!(failed.words.contains("more than its table"), "{}", failed.words);
}
