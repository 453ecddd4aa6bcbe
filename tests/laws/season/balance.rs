//! Water and heat of random seasons close each day; the layers stay stable, oxygen stays at or above zero.

use gatemix::mix::Level;
use gatemix::season::{Inflow, Layers, Sky};
use gatemix::site::Site;
use proptest::prelude::*;

use crate::columns::config;

use super::{air, go, layers, level, no_inflow, pool};

/// What a day is given, as shares.
type Day = (f64, f64, f64, f64, f64, [f64; 3]);

fn days() -> impl Strategy<Value = Vec<Day>> {
    let shares = [0.0..1.0_f64, 0.0..1.0, 0.0..1.0];
    let one = (-15.0..35.0_f64, 0.0..12.0_f64, 0.0..340.0_f64, 0.0..0.04_f64, 0.5..25.0_f64, shares);
    prop::collection::vec(one, 1..40)
}

fn basin() -> impl Strategy<Value = Vec<(f64, f64)>> {
    let steps = prop::collection::vec((3.0..20.0_f64, 1e4..5e6_f64), 1..5);
    (steps, 0.0..1e6_f64).prop_map(|(steps, area)| {
        let mut table = vec![(-4.0, area)];
        for (up, more) in steps {
            let &(z, area) = table.last().unwrap();
            table.push((z + up, area + more));
        }
        table
    })
}

/// Sky, inflow and draws of a day: never more than a twentieth of the pool either way.
fn given(day: &Day, site: &Site, now: &Layers, given_sky: bool) -> (Sky, Inflow, Vec<Level>) {
    let &(air_c, wind, sun, share, inflow_c, shares) = day;
    let volume = now.volume_m3();
    let room = site.pool.volume_m3(site.pool.top_m()) - volume;
    let sky = if given_sky {
        Sky::Given { equilibrium_c: air_c, exchange_w_m2_c: 10.0 + 3.0 * wind }
    } else {
        Sky::Air(air(air_c, wind, sun))
    };
    let inflow = Inflow {
        flow_m3s: (share * volume).min(0.5 * room) / 86_400.0,
        temperature_c: inflow_c,
        oxygen_mg_l: (inflow_c > 12.0).then_some(7.0),
        salt_g_per_kg: 0.01 * inflow_c,
        suspended_mg_l: 4.0 * wind,
    };
    let (bed, surface) = (site.pool.bed_m, now.pool_m(&site.pool));
    let draw = |k: usize| {
        let centre = bed + (surface - bed) * (0.1 + 0.35 * k as f64);
        level(centre, 0.01 * shares[k] * volume / 86_400.0)
    };
    (sky, inflow, (0..3).map(draw).collect())
}

proptest! {
    #![proptest_config(config(48))]

    #[test]
    fn law_water_and_heat_close_each_day(
        table in basin(), days in days(), count in 1..13_usize, warm in 0.0..22.0_f64, given_sky: bool, evaporates: bool
    ) {
        let mut site = pool(&table);
        site.season.evaporates = evaporates;
        let (bed, top) = (site.pool.bed_m, site.pool.top_m());
        let surface = bed + 0.8 * (top - bed);
        let mut now = layers(&site, surface, count, &|z| (2.0 + warm * (z - bed) / (top - bed), 5.0));
        for day in &days {
            let (sky, inflow, draws) = given(day, &site, &now, given_sky);
            let was = now.clone();
            let made = go(&mut now, &site, Some(sky), inflow, &draws);
            let balance = made.balance;
            prop_assert!(balance.water_m3.relative_error() <= 1e-9 && balance.heat_j.relative_error() <= 1e-9, "{balance:?}");
            // the terms are what was asked, not only what adds up
            let asked: f64 = draws.iter().map(|l| l.sink.flow_m3s * 86_400.0).sum();
            prop_assert!((balance.water_m3.release + asked).abs() <= 1e-9 * was.volume_m3());
            prop_assert!((balance.water_m3.inflow - inflow.flow_m3s * 86_400.0).abs() <= 1e-9 * was.volume_m3());
            prop_assert_eq!(balance.water_m3.before, was.volume_m3());
            prop_assert_eq!(balance.water_m3.after, now.volume_m3());
            let heat: f64 = made.drawn.iter().map(|d| d.level.sink.flow_m3s * d.draw.map_or(0.0, |d| d.temperature_c)).sum();
            let per_c = gatemix::water::RHO_REF_KG_M3 * gatemix::water::CP_REF_J_KG_K;
            let off = balance.heat_j.release + heat * 86_400.0 * per_c;
            prop_assert!(off.abs() <= 1e-9 * was.heat_j().max(per_c * was.volume_m3()), "{off}");
            if !evaporates || given_sky {
                prop_assert_eq!(balance.water_m3.surface, 0.0);
            }
            let density = |l: &gatemix::season::Layer| l.density_kg_m3(site.water.solids_kg_m3);
            for pair in now.layers.windows(2) {
                prop_assert!(density(&pair[0]) >= density(&pair[1]), "{pair:?}");
            }
            for layer in &now.layers {
                prop_assert!(layer.oxygen_mg_l >= 0.0 && layer.temperature_c >= 0.0 && layer.volume_m3 > 0.0, "{layer:?}");
            }
            let edges = now.edges_m(&site.pool);
            for ends in edges.windows(2) {
                let thickness = ends[1] - ends[0];
                prop_assert!(now.layers.len() == 1 || thickness > 0.4999 * now.thickness_m, "{edges:?}");
            }
        }
    }

    /// Without evaporation the pool holds what came less what left, and no heat passes a surface without sky.
    #[test]
    fn law_without_sky_only_flows_change_the_pool(inflow in 0.0..30.0_f64, out in 0.0..30.0_f64, c in 1.0..25.0_f64) {
        let site = pool(&[(0.0, 2e5), (20.0, 1e6), (60.0, 4e6)]);
        let mut now = layers(&site, 45.0, 12, &|z| (5.0 + 0.3 * z, 6.0));
        let before = now.volume_m3();
        let brought = Inflow { flow_m3s: inflow, temperature_c: c, ..no_inflow() };
        let made = go(&mut now, &site, None, brought, &[level(10.0, out)]);
        prop_assert!((now.volume_m3() - before - 86_400.0 * (inflow - out)).abs() < 1e-9 * before);
        prop_assert_eq!(made.balance.heat_j.surface, 0.0);
    }
}
