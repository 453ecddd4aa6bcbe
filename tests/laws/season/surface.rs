//! What passes the surface, what enters, and what breathes.

use gatemix::season::{Balance, Inflow, Layers, MOST_OPEN, Sky, Terms};
use gatemix::water::{CP_REF_J_KG_K, RHO_REF_KG_M3, latent_heat_j_kg, light_left, saturation_mg_l};
use gatemix::weather::{REFLECTED, budget};
use proptest::prelude::*;

use crate::columns::config;

use super::{air, go, layers, level, no_inflow, pool, still};

const TABLE: [(f64, f64); 4] = [(0.0, 2e5), (20.0, 1e6), (35.0, 1.2e6), (60.0, 4e6)];
const DAY_S: f64 = 86_400.0;
const HEAT_J_M3_C: f64 = RHO_REF_KG_M3 * CP_REF_J_KG_K;

proptest! {
    #![proptest_config(config(32))]

    /// Each layer below the first is warmed by the light that comes in above less what goes out below, by the areas
    /// there; the bed keeps all that reaches it.
    #[test]
    fn law_light_warms_each_layer_by_what_it_keeps(
        kd in 0.1..3.0_f64, sun in 10.0..340.0_f64, surface in 12.0..60.0_f64, count in 2..15_usize
    ) {
        let mut site = still(&TABLE);
        site.season.knobs.light_per_m = kd;
        // so steep that no light overturns it
        let start = layers(&site, surface, count, &|z| (5.0 + 25.0 * z / surface, 6.0));
        let edges = start.edges_m(&site.pool);
        let mut now = start.clone();
        go(&mut now, &site, Some(Sky::Air(air(40.0, 0.0, sun))), no_inflow(), &[]);
        prop_assert_eq!(now.layers.len(), count);
        let passing = |i: usize| {
            let left = if i > 0 { light_left(kd, surface - edges[i]) * site.pool.area_m2(edges[i]) } else { 0.0 };
            sun * (1.0 - REFLECTED) * left
        };
        for i in 0..count - 1 {
            let warmed = (passing(i + 1) - passing(i)) * DAY_S / HEAT_J_M3_C / start.layers[i].volume_m3;
            let got = now.layers[i].temperature_c - start.layers[i].temperature_c;
            prop_assert!((got - warmed).abs() < 1e-9 * (1.0 + warmed), "{} {}", got, warmed);
        }
    }

    /// Under a given sky the surface goes towards the equilibrium and never beyond it.
    #[test]
    fn law_a_surface_never_passes_its_equilibrium(
        equilibrium in 4.5..35.0_f64, exchange in 5.0..80.0_f64, top in 4.5..30.0_f64, thickness in 2.1..7.9_f64
    ) {
        let site = still(&TABLE);
        let mut now = layers(&site, 40.0, 10, &|_| (4.5, 6.0));
        let last = now.layers.len() - 1;
        now.layers[last].volume_m3 = site.pool.volume_m3(36.0 + thickness) - site.pool.volume_m3(36.0);
        now.layers[last].temperature_c = top;
        let sky = Sky::Given { equilibrium_c: equilibrium, exchange_w_m2_c: exchange };
        for _ in 0..4 {
            let was = now.layers[now.layers.len() - 1].temperature_c;
            go(&mut now, &site, Some(sky), no_inflow(), &[]);
            let is = now.layers[now.layers.len() - 1].temperature_c;
            prop_assert!(is >= was.min(equilibrium) - 1e-9 && is <= was.max(equilibrium) + 1e-9, "{} {}", was, is);
        }
    }
}

/// In deep mixed water hardly any answer comes within a day: what passes is the exchange times the difference.
#[test]
fn law_deep_water_takes_the_whole_exchange() {
    let site = still(&TABLE);
    let mut now = layers(&site, 50.0, 50, &|_| (12.0, 6.0));
    let sky = Sky::Given { equilibrium_c: 7.0, exchange_w_m2_c: 20.0 };
    let made = go(&mut now, &site, Some(sky), no_inflow(), &[]);
    let whole = 20.0 * (7.0 - 12.0) * site.pool.area_m2(50.0) * DAY_S;
    let share = made.balance.heat_j.surface / whole;
    assert!(share > 0.97 && share < 1.0, "{share}");
    // cooled water sinks to the bed, and the whole pool is one again
    assert!(made.overturned);
    assert_eq!(now.layers[0].temperature_c, now.layers[49].temperature_c);
}

#[test]
fn law_water_is_not_cooled_below_freezing() {
    let mut site = pool(&TABLE);
    site.season.evaporates = false;
    let mut now = layers(&site, 30.0, 15, &|z| (3.9 - 0.05 * z, 12.0));
    for i in 0..60 {
        let before = now.heat_j();
        let made = go(&mut now, &site, Some(Sky::Air(air(-20.0, 1.0, 20.0))), no_inflow(), &[]);
        assert!(now.layers.iter().all(|l| l.temperature_c >= 0.0), "{now:?}");
        // what is booked is what passed
        let passed = made.balance.heat_j.surface;
        assert!((now.heat_j() - before - passed).abs() <= 1e-9 * before, "{i}");
    }
    assert!(now.layers[now.layers.len() - 1].temperature_c < 0.5);
}

#[test]
fn law_evaporation_takes_the_water_that_its_heat_pays_for() {
    let mut site = pool(&TABLE);
    let run = |site: &gatemix::site::Site| {
        let mut now = layers(site, 45.0, 15, &|z| (6.0 + 0.3 * z, 8.0));
        now.layers[14].salt_g_per_kg = 0.2;
        let start = now.clone();
        let sky = air(18.0, 4.0, 200.0);
        let made = go(&mut now, site, Some(Sky::Air(sky)), no_inflow(), &[]);
        let latent = budget(&sky, start.layers[14].temperature_c, 0.0).evaporation;
        (start, now, made.balance.water_m3.surface, -latent * site.pool.area_m2(45.0) * DAY_S)
    };
    let salt = |l: &Layers| l.layers.iter().map(|l| l.salt_g_per_kg * l.volume_m3).sum::<f64>();
    let (start, now, gone, heat) = run(&site);
    let paid = heat / (RHO_REF_KG_M3 * latent_heat_j_kg(now.layers[14].temperature_c));
    assert!(paid > 0.0 && (gone / -paid - 1.0).abs() < 2e-3, "{gone} {paid}");
    // what is dissolved stays
    assert!((salt(&now) / salt(&start) - 1.0).abs() < 1e-12);
    site.season.evaporates = false;
    let (start, now, gone, _) = run(&site);
    assert_eq!((gone, now.volume_m3()), (0.0, start.volume_m3()));
}

/// A river colder than all goes to the bed, one warmer lies on the surface, one between lies between: as the water that
/// it makes with the surface water it takes in.
#[test]
fn law_an_inflow_finds_its_own_density() {
    let mut site = still(&TABLE);
    site.season.inflow_takes_in = 0.25;
    let start = layers(&site, 40.0, 40, &|z| (5.0 + 0.4 * z, 4.0));
    let top_c = start.layers[39].temperature_c;
    let put = |c: f64, flow: f64| {
        let mut now = start.clone();
        let inflow = Inflow { flow_m3s: flow, temperature_c: c, oxygen_mg_l: Some(9.0), ..no_inflow() };
        let made = go(&mut now, &site, None, inflow, &[]);
        let oxygen = |l: &Layers| l.layers.iter().map(|l| l.oxygen_mg_l * l.volume_m3).sum::<f64>();
        assert!((oxygen(&now) - oxygen(&start) - 9.0 * flow * DAY_S).abs() < 1e-9 * oxygen(&start));
        assert!((made.balance.heat_j.inflow - HEAT_J_M3_C * flow * DAY_S * c).abs() < 1.0);
        now
    };
    // enough for a layer of its own
    let flow = 20.0;
    for c in [4.2, 8.0, 13.0, 26.0] {
        let mixed_c = (c + 0.25 * top_c) / 1.25;
        let now = put(c, flow);
        let own = now.layers.iter().position(|l| (l.temperature_c - mixed_c).abs() < 1e-9).unwrap();
        // where the pool is narrow it stands higher than two layers, and is cut
        let all: Vec<f64> = now
            .layers
            .iter()
            .filter(|l| (l.temperature_c - mixed_c).abs() < 1e-9)
            .map(|l| l.volume_m3)
            .collect();
        assert!((all.iter().sum::<f64>() / (1.25 * flow * DAY_S) - 1.0).abs() < 1e-9);
        assert_eq!(now.layers.len(), 40 + all.len());
        let below = start.layers.iter().filter(|l| l.temperature_c < mixed_c).count();
        assert_eq!(own, below, "{c}");
    }
    // too little for one: it joins the nearest
    let now = put(8.0, 0.5);
    assert_eq!(now.layers.len(), 40);
    let changed = |(a, b): (&gatemix::season::Layer, &gatemix::season::Layer)| a.volume_m3 < b.volume_m3;
    let joined: Vec<usize> = start
        .layers
        .iter()
        .zip(&now.layers)
        .enumerate()
        .filter(|(_, p)| changed(*p))
        .map(|(i, _)| i)
        .collect();
    assert_eq!(joined.len(), 1);
    let mixed_c = (8.0 + 0.25 * top_c) / 1.25;
    assert!((start.layers[joined[0]].temperature_c - mixed_c).abs() <= 0.21);
}

/// Demand takes oxygen down to zero; at the surface oxygen goes towards saturation from either side.
#[test]
fn law_oxygen_goes_to_zero_below_and_to_saturation_above() {
    let mut site = still(&TABLE);
    site.season.knobs.water_demand_mg_l_day = 0.5;
    site.season.knobs.bed_demand_g_m2_day = 1.0;
    let mut now = layers(&site, 40.0, 20, &|z| (5.0 + 0.4 * z, 3.0));
    let first = now.layers[0].oxygen_mg_l;
    go(&mut now, &site, None, no_inflow(), &[]);
    // both demands at the layer's temperature; its bed is all below its upper edge
    let layer = &now.layers[0];
    let asked = (0.5 + site.pool.area_m2(2.0) / layer.volume_m3) * 1.065_f64.powf(layer.temperature_c - 20.0);
    assert!((first - layer.oxygen_mg_l - asked).abs() < 1e-12);
    for _ in 0..60 {
        go(&mut now, &site, None, no_inflow(), &[]);
        assert!(now.layers.iter().all(|l| l.oxygen_mg_l >= 0.0));
    }
    assert_eq!(now.layers[0].oxygen_mg_l, 0.0);
    let mut site = still(&TABLE);
    site.season.transfer_m_day = 0.5;
    for begun in [2.0, 14.0] {
        let mut now = layers(&site, 40.0, 20, &|z| (5.0 + 0.4 * z, begun));
        let top = |l: &Layers| l.layers[19].oxygen_mg_l;
        let saturation = saturation_mg_l(now.layers[19].temperature_c, 0.0, 1.0);
        let mut apart = (begun - saturation).abs();
        for _ in 0..20 {
            go(&mut now, &site, None, no_inflow(), &[]);
            assert_eq!((top(&now) > saturation), begun > saturation);
            assert!((top(&now) - saturation).abs() < apart);
            apart = (top(&now) - saturation).abs();
        }
        // half a metre a day on the depth of the layer
        let depth_m = now.layers[19].volume_m3 / site.pool.area_m2(40.0);
        let left = apart / (begun - saturation).abs();
        assert!((left / (-0.5 / depth_m * 20.0_f64).exp() - 1.0).abs() < 1e-9, "{left}");
        assert_eq!(now.layers[18].oxygen_mg_l, begun);
    }
}

#[test]
fn scenario_a_balance_that_does_not_close_names_its_term() {
    let open = Terms { before: 1e9, inflow: 2e6, release: -1e6, surface: 0.0, after: 1e9 + 1e6 + 3.0 };
    assert!(open.relative_error() > MOST_OPEN);
    let told = Balance { water_m3: open, ..Balance::default() }.closes().unwrap_err();
    assert!(told.starts_with("the balance of water is open by 3.000e0 m3: before 1.0"), "{told}");
    let told = Balance { heat_j: open, ..Balance::default() }.closes().unwrap_err();
    assert!(told.starts_with("the balance of heat is open by 3.000e0 J"), "{told}");
    let told = Balance { heat_j: Terms { after: f64::NAN, ..open }, ..Balance::default() }.closes();
    assert!(told.is_err());
    assert_eq!(
        Balance { heat_j: Terms { after: open.after - 3.0, ..open }, ..Balance::default() }.closes(),
        Ok(())
    );
}

/// Layers half as thick change the release of a summer by little: no result hangs on how the pool is cut.
#[test]
fn law_thinner_layers_change_the_release_by_little() {
    let summer = |count: usize| {
        let site = pool(&TABLE);
        let mut now = layers(&site, 50.0, count, &|z| (5.0 + 10.0 * (z / 50.0).powi(4), 9.0));
        let day = |i: i32| {
            let turn = f64::from((i * 5) % 7) / 7.0;
            let sky = Sky::Air(air(16.0 + 6.0 * turn, 1.0 + 3.0 * turn, 150.0 + 100.0 * turn));
            let inflow = Inflow { flow_m3s: 6.0, temperature_c: 11.0, ..no_inflow() };
            let made = go(&mut now, &site, Some(sky), inflow, &[level(15.0, 4.0), level(38.0, 6.0)]);
            [0, 1].map(|k| made.drawn[k].draw.unwrap().temperature_c)
        };
        (0..60).map(day).collect::<Vec<_>>()
    };
    let (fine, coarse) = (summer(50), summer(25));
    let apart = fine.iter().flatten().zip(coarse.iter().flatten()).map(|(a, b)| (a - b).abs());
    let most = apart.fold(0.0, f64::max);
    println!("2 m against 1 m: at most {most:.3} C");
    assert!(most < 0.25, "{most}");
    assert!(fine[59][1] > fine[0][1] + 0.5, "{fine:?}");
}
