//! Where nothing moves, nothing changes; the same day gives the same bytes; bad days are told.

use gatemix::profile::Column;
use gatemix::season::{Forcing, Sky, day};
use gatemix::units::{System, say::in_system};
use proptest::prelude::*;

use crate::columns::config;

use super::{air, date, go, layers, level, no_inflow, pool, still};

const TABLE: [(f64, f64); 3] = [(0.0, 2e5), (20.0, 1e6), (60.0, 4e6)];

proptest! {
    #![proptest_config(config(64))]

    #[test]
    fn law_without_flow_or_heat_nothing_changes(
        count in 1..30_usize, surface in 12.0..60.0_f64, warm in 5.0..25.0_f64, days in 1..5
    ) {
        let site = still(&TABLE);
        let start = layers(&site, surface, count, &|z| (4.5 + warm * (z / surface).powi(3), 3.0 + 0.1 * z));
        let mut now = start.clone();
        for _ in 0..days {
            let made = go(&mut now, &site, None, no_inflow(), &[]);
            prop_assert_eq!(made.balance.heat_j.error(), 0.0);
            prop_assert!(!made.overturned && made.drawn.is_empty() && made.steps == 1);
        }
        prop_assert_eq!(now, start);
    }

    /// Water of one temperature stays so through any diffusion, wind and draw, to the last digit.
    #[test]
    fn law_one_water_stays_one_water(count in 2..20_usize, surface in 12.0..60.0_f64, flow in 0.0..40.0_f64) {
        let mut site = still(&TABLE);
        site.season.knobs.diffusion = 1.0;
        let mut now = layers(&site, surface, count, &|_| (11.3, 7.7));
        go(&mut now, &site, None, no_inflow(), &[level(6.0, flow)]);
        for layer in &now.layers {
            prop_assert_eq!(layer.temperature_c, 11.3);
            prop_assert_eq!(layer.oxygen_mg_l, 7.7);
        }
    }
}

#[test]
fn law_the_same_season_gives_the_same_bytes() {
    let run = || {
        let site = pool(&TABLE);
        let mut now = layers(&site, 50.0, 50, &|z| (5.0 + 0.3 * z, 2.0 + 0.1 * z));
        let made: Vec<String> = (0..20)
            .map(|i| {
                let sky = Some(Sky::Air(air(12.0 + f64::from(i), 2.0 + f64::from(i % 5), 180.0)));
                let mut inflow = no_inflow();
                inflow.flow_m3s = 12.0;
                format!("{:?}", go(&mut now, &site, sky, inflow, &[level(8.0, 10.0), level(30.0, 7.0)]))
            })
            .collect();
        (format!("{now:?}"), made)
    };
    assert_eq!(run(), run());
}

#[test]
fn scenario_a_pool_that_cannot_give_is_told_and_left_as_it_was() {
    let site = still(&TABLE);
    let start = layers(&site, 10.0, 10, &|z| (5.0 + z, 5.0));
    let ask = |centre_m: f64, flow_m3s: f64, inflow_m3s: f64| {
        let mut now = start.clone();
        let mut inflow = no_inflow();
        inflow.flow_m3s = inflow_m3s;
        let forcing = Forcing { date: date(), sky: None, inflow };
        let levels = |_: &Column, _: f64| vec![level(centre_m, flow_m3s)];
        let told = day(&mut now, &site, &forcing, &levels).unwrap_err();
        assert_eq!(now, start);
        assert_eq!(told.date, date());
        in_system(&told.words, System::Si)
    };
    // the pool holds 4e6 m3, which 5000 m3/s empty within a quarter of an hour
    let told = ask(4.0, 5000.0, 0.0);
    assert!(told.starts_with("the pool does not hold the water asked: "), "{told}");
    let told = ask(12.0, 1.0, 0.0);
    assert!(told.contains("at 12.00 m, which lies outside the water (0.00 m to 10.00 m)"), "{told}");
    // it falls below the level before the day is over, which then draws from the surface until nothing is left
    let told = ask(4.0, 60.0, 0.0);
    assert!(told.starts_with("the pool does not hold the water asked: "), "{told}");
    let told = ask(4.0, 1.0, 2000.0);
    assert!(told.contains("more than its table, which ends at 60.00 m"), "{told}");
}
