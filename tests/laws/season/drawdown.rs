//! Water drawn from below lets all above it sink as it is.

use gatemix::season::Layers;
use proptest::prelude::*;

use crate::columns::config;

use super::{go, layers, level, no_inflow, pool, still, warmer_m3};

/// Cold below an elevation, and from there warmer and warmer up to 20 C.
fn two_waters(z: f64, line_m: f64) -> (f64, f64) {
    let up_m = z - line_m;
    (if up_m > 0.0 { 9.0 + 11.0 * (up_m / 8.0).min(1.0) } else { 6.0 }, 8.0)
}

/// A box of 80 m: 30 m of it drawn from below the thermocline, and all above moves 30 m down as it is.
#[test]
fn law_a_box_sinks_as_it_is() {
    let site = still(&[(0.0, 1e6), (80.0, 1e6)]);
    let start = layers(&site, 80.0, 80, &|z| two_waters(z, 60.0));
    let mut now = start.clone();
    let flow = 1e6 / 86_400.0; // a metre a day
    for _ in 0..30 {
        let made = go(&mut now, &site, None, no_inflow(), &[level(5.0, flow)]);
        let draw = made.drawn[0].draw.unwrap();
        assert!((draw.temperature_c - 6.0).abs() < 1e-12, "{draw:?}");
        assert!((made.balance.water_m3.release + 1e6).abs() < 1e-3);
    }
    assert!((now.pool_m(&site.pool) - 50.0).abs() < 1e-9);
    let above = |l: &Layers, down_m: f64| -> Vec<(f64, f64)> {
        let edges = l.edges_m(&site.pool);
        let all = edges.iter().zip(&l.layers).map(|(z, l)| (z + down_m, l.temperature_c));
        all.filter(|(z, _)| *z > 59.5).collect()
    };
    let (was, is) = (above(&start, 0.0), above(&now, 30.0));
    assert_eq!(was.len(), 20);
    assert_eq!(was.len(), is.len());
    for (was, is) in was.iter().zip(&is) {
        assert!((was.0 - is.0).abs() < 1e-9 && (was.1 - is.1).abs() < 1e-12, "{was:?} {is:?}");
    }
}

/// Greatest change, over temperatures from `from_c` up, of the volume above each temperature times how far above it
/// is, as a share of that at `from_c`: the curve of temperature and volume, summed from its warm end.
fn changed(start: &Layers, now: &Layers, from_c: f64) -> f64 {
    let of = |l: &Layers, c: f64| -> f64 {
        l.layers.iter().map(|l| l.volume_m3 * (l.temperature_c - c).max(0.0)).sum()
    };
    let all = of(start, from_c);
    (0..120)
        .map(|i| from_c + 0.1 * f64::from(i))
        .map(|c| (of(now, c) - of(start, c)).abs() / all)
        .fold(0.0, f64::max)
}

/// The water that is looked at is warmer, C.
const FROM_C: f64 = 11.0;

/// A valley of 90 m, of which 30 m are drawn from below the thermocline: the curve of temperature and volume above it keeps
/// within what diffusion does to it while nothing is drawn, and without diffusion it stays.
#[test]
fn law_drawdown_does_not_smear_the_thermocline() {
    let table = [(0.0, 3e6), (40.0, 4e6), (90.0, 6e6)];
    let after = |diffusion: f64, metres: f64| {
        let mut site = still(&table);
        site.season.knobs.diffusion = diffusion;
        let start = layers(&site, 90.0, 90, &|z| two_waters(z, 62.0));
        let mut now = start.clone();
        let mut top_m = f64::NEG_INFINITY;
        for i in 0..120 {
            let surface = 90.0 - metres * f64::from(i) / 120.0;
            let volume = |z: f64| site.pool.volume_m3(z);
            let flow = (volume(surface) - volume(surface - metres / 120.0)) / 86_400.0;
            let made = go(&mut now, &site, None, no_inflow(), &[level(3.0, flow)]);
            let line = now.edges_m(&site.pool);
            let warm = now.layers.iter().position(|l| l.temperature_c > FROM_C).unwrap();
            top_m = made.drawn[0].zone.map_or(top_m, |z| top_m.max(z.upper.limit_m - line[warm]));
        }
        (start, now, top_m, site)
    };
    // the zone stays below the water that is looked at
    let (start, now, below_m, site) = after(0.0, 30.0);
    assert!(below_m < 0.0, "{below_m}");
    assert!((now.pool_m(&site.pool) - 60.0).abs() < 1e-6);
    assert!(changed(&start, &now, FROM_C) < 1e-12, "{}", changed(&start, &now, FROM_C));
    let (start, drawn, below_m, _) = after(1.0, 30.0);
    let (_, calm, ..) = after(1.0, 0.0);
    let (by, asked) = (changed(&start, &drawn, FROM_C), changed(&start, &calm, FROM_C));
    println!("drawn {by:.4}, at rest {asked:.4}");
    assert!(below_m < 0.0 && asked > 0.001, "{below_m} {asked}");
    assert!(by < 1.1 * asked, "{by} {asked}");
}

proptest! {
    #![proptest_config(config(48))]

    /// Whatever the basin, a day's draw leaves the volume of every water that lies above its zone.
    #[test]
    fn law_water_above_the_zone_keeps_its_volume(
        steps in prop::collection::vec((5.0..25.0_f64, 1e4..4e6_f64), 1..5),
        centre in 0.02..0.5_f64, share in 0.001..0.1_f64, warm in 3.0..20.0_f64, count in 6..60_usize
    ) {
        let mut table = vec![(0.0, 1e5)];
        for (up, more) in steps {
            let &(z, area) = table.last().unwrap();
            table.push((z + up, area + more));
        }
        let surface = table.last().unwrap().0;
        let site = still(&table);
        let start = layers(&site, surface, count, &|z| (5.0 + warm * z / surface, 6.0));
        let mut now = start.clone();
        let flow = share * start.volume_m3() / 86_400.0;
        let made = go(&mut now, &site, None, no_inflow(), &[level(centre * surface, flow)]);
        let zone = made.drawn[0].zone.unwrap();
        // a layer that was drawn thin may have joined the one above, which may have been cut
        let edges = start.edges_m(&site.pool);
        let clear = edges.iter().filter(|z| **z >= zone.upper.limit_m).count();
        let above: Vec<f64> = start.layers.iter().rev().take(clear.saturating_sub(2)).map(|l| l.temperature_c).collect();
        if made.steps == 1 {
            for x in above {
                let (was, is) = (warmer_m3(&start, x), warmer_m3(&now, x));
                prop_assert!((was - is).abs() <= 1e-12 * start.volume_m3(), "{} {} at {}", was, is, x);
            }
        }
    }

    /// A curve by volume is not touched by how a layer is cut: the total and the mean stay.
    #[test]
    fn law_layers_of_a_cast_hold_its_water(count in 1..40_usize, surface in 20.0..60.0_f64) {
        let site = pool(&[(0.0, 2e5), (20.0, 1e6), (60.0, 4e6)]);
        let start = layers(&site, surface, count, &|z| (5.0 + 0.2 * z, 6.0));
        let cast = start.profile(&site, "2026-07-01T12:00:00Z".parse().unwrap()).unwrap();
        let again = Layers::of_profile(&site, &cast, surface / count as f64).unwrap();
        prop_assert!((again.volume_m3() / start.volume_m3() - 1.0).abs() < 1e-12);
        prop_assert_eq!(again.layers.len(), count);
        // linear water is held by its means, all but the ends, where the cast holds its last value
        for (a, b) in again.layers.iter().zip(&start.layers).skip(1).take(count.saturating_sub(2)) {
            prop_assert!((a.temperature_c - b.temperature_c).abs() < 0.2 * surface / count as f64 / 4.0);
        }
        prop_assert!((again.pool_m(&site.pool) - surface).abs() < 1e-9);
    }
}
