//! What stirs the surface layer down: denser water above lighter, and the wind.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::site::Pool;
use crate::water::{G_M_S2, RHO_REF_KG_M3};

use super::layers::Layer;

/// Density of the air, kg/m3 (recalled: at sea level and 20 C).
const AIR_KG_M3: f64 = 1.2;
/// Drag of the wind on water (recalled: 1.0e-3 to 1.5e-3 over lakes).
const DRAG: f64 = 1.3e-3;
/// Water heavier than the surface layer's by no more than this is mixed with it, kg/m3 (choice).
const MIXED_KG_M3: f64 = 0.01;
/// Halvings that find how much of a layer the wind takes in.
const HALVINGS: usize = 50;

/// Friction velocity in the water under a wind.
///
/// # Units
/// m/s, kg/m3 of the water; m/s.
///
/// # References
/// u*^2 = rho_a Cd U^2/rho_w (derived: one stress on both sides), Cd 1.3e-3 (recalled).
pub fn friction_velocity_m_s(wind_m_s: f64, water_kg_m3: f64) -> f64 {
    wind_m_s * (AIR_KG_M3 * DRAG / water_kg_m3).sqrt()
}

/// Work of the wind on a square metre, of which a share deepens the surface layer.
///
/// # Units
/// m/s, s; J/m2.
///
/// # References
/// rho u*^3 dt (recalled; Kraus & Turner 1967).
pub fn wind_work_j_m2(friction_velocity_m_s: f64, seconds: f64) -> f64 {
    RHO_REF_KG_M3 * friction_velocity_m_s.powi(3) * seconds
}

/// Potential energy that it takes to mix two waters lying over each other.
///
/// # Units
/// Upper and lower: density kg/m3, volume m3, centre of volume m; J.
///
/// # References
/// g (rho2 - rho1) V1 V2/(V1 + V2) (z1 - z2) (derived: heights from the common centre of volume, so that what mixing
/// does to the density itself lifts nothing).
pub fn mixing_energy_j(upper: [f64; 3], lower: [f64; 3]) -> f64 {
    let [upper_kg_m3, upper_m3, upper_m] = upper;
    let [lower_kg_m3, lower_m3, lower_m] = lower;
    let both = upper_m3 * lower_m3 / (upper_m3 + lower_m3);
    G_M_S2 * (lower_kg_m3 - upper_kg_m3) * both * (upper_m - lower_m)
}

/// Centre of volume between two elevations, m: exact between two rows of the pool table, where volume is quadratic.
pub(super) fn centre_m(pool: &Pool, low_m: f64, high_m: f64) -> f64 {
    let below = pool.volume_m3(low_m);
    let half = pool.volume_m3(0.5 * (low_m + high_m)) - below;
    let whole = pool.volume_m3(high_m) - below;
    if whole <= 0.0 {
        return 0.5 * (low_m + high_m);
    }
    high_m - (high_m - low_m) * (4.0 * half + whole) / (6.0 * whole)
}

/// The surface layer and those below that are hardly heavier: they answer to the air as one.
pub(super) fn mixed(layers: &mut [Layer], grain_kg_m3: f64) -> &mut [Layer] {
    let most = layers.last().map_or(f64::MAX, |top| top.density_kg_m3(grain_kg_m3) + MIXED_KG_M3);
    let count = layers.iter().rev().take_while(|l| l.density_kg_m3(grain_kg_m3) <= most).count();
    let first = layers.len() - count;
    &mut layers[first..]
}

/// Share of what passes in a first moment that passes over a time in which the water answers: (1 - exp(-x))/x, x the
/// exchange over what the water holds for each unit (derived: linear exchange).
pub(super) fn answered(x: f64) -> f64 {
    if x > 1e-9 { -(-x).exp_m1() / x } else { 1.0 }
}

/// Mixes neighbours of which the upper is the denser until none is left. Whether that reached from surface to bed.
pub(super) fn overturn(layers: &mut [Layer], grain_kg_m3: f64) -> bool {
    let mut groups: Vec<(usize, Layer, f64)> = Vec::with_capacity(layers.len());
    for (i, layer) in layers.iter().enumerate() {
        let mut group = (i, *layer, layer.density_kg_m3(grain_kg_m3));
        // what two waters make is denser than either may be, so it is compared with the next again
        while let Some((first, below, _)) = groups.pop_if(|below| below.2 < group.2) {
            let both = below.joined(&group.1);
            group = (first, both, both.density_kg_m3(grain_kg_m3));
        }
        groups.push(group);
    }
    let whole = groups.len() == 1 && layers.len() > 1;
    let mut end = layers.len();
    while let Some((first, water, _)) = groups.pop() {
        if end - first > 1 {
            stir(&mut layers[first..end], &water);
        }
        end = first;
    }
    whole
}

/// Gives layers one water.
fn stir(layers: &mut [Layer], water: &Layer) {
    for layer in layers {
        *layer = water.part(layer.volume_m3);
    }
}

/// Deepens the surface layer while the work of the wind (J) covers the potential energy; of the layer that it does not
/// cover whole a part is taken in. Whether it reached the bed.
pub(super) fn deepen(
    layers: &mut [Layer],
    pool: &Pool,
    edges_m: &[f64],
    grain_kg_m3: f64,
    work_j: f64,
) -> bool {
    let Some(mut bottom) = layers.len().checked_sub(1) else {
        return false;
    };
    if work_j <= 0.0 {
        return false;
    }
    let centre = |i: usize| centre_m(pool, edges_m[i], edges_m[i + 1]);
    let mut mixed = layers[bottom];
    let mut at_m = centre(bottom);
    let mut left_j = work_j;
    let top = bottom;
    while bottom > 0 {
        let (next, next_m) = (layers[bottom - 1], centre(bottom - 1));
        let upper = [mixed.density_kg_m3(grain_kg_m3), mixed.volume_m3, at_m];
        let next_kg_m3 = next.density_kg_m3(grain_kg_m3);
        let need_j = mixing_energy_j(upper, [next_kg_m3, next.volume_m3, next_m]);
        if need_j > left_j {
            let edge_m = edges_m[bottom];
            let need = |part: f64| {
                let centre_m = edge_m + part * (next_m - edge_m);
                mixing_energy_j(upper, [next_kg_m3, part * next.volume_m3, centre_m])
            };
            let taken_m3 = next.volume_m3 * covered(need, left_j);
            mixed = mixed.joined(&next.part(taken_m3));
            layers[bottom - 1].volume_m3 -= taken_m3;
            layers[bottom].volume_m3 += taken_m3;
            break;
        }
        let both = mixed.joined(&next);
        at_m += (next_m - at_m) * next.volume_m3 / both.volume_m3;
        mixed = both;
        bottom -= 1;
        left_j -= need_j.max(0.0);
    }
    stir(&mut layers[bottom..], &mixed);
    bottom == 0 && top > 0
}

/// The part, 0 to 1, whose need is what is there; the need rises with it.
fn covered(need: impl Fn(f64) -> f64, there: f64) -> f64 {
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..HALVINGS {
        let middle = 0.5 * (low + high);
        if need(middle) > there {
            high = middle;
        } else {
            low = middle;
        }
    }
    low
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::site::{RawRow, WidthSource};

    const GRAIN_KG_M3: f64 = 2650.0;

    /// A valley without a volume column, so that its centres of volume have a closed form.
    fn valley() -> Pool {
        let row = |elevation_m: f64, area_m2: f64| RawRow { elevation_m, area_m2, ..RawRow::default() };
        let table = [row(0.0, 1e6), row(40.0, 5e6)];
        Pool::check(0.0, 40.0, &table, WidthSource::Table, &mut Vec::new()).unwrap()
    }

    /// Two waters, the lower up to 12 m and the upper to 20 m, with the edges.
    fn two(pool: &Pool) -> ([Layer; 2], [f64; 3]) {
        let edges = [0.0, 12.0, 20.0];
        let layer = |low: f64, high: f64, temperature_c: f64| Layer {
            volume_m3: pool.volume_m3(high) - pool.volume_m3(low),
            temperature_c,
            oxygen_mg_l: temperature_c,
            salt_g_per_kg: 0.0,
            suspended_mg_l: 0.0,
        };
        ([layer(0.0, 12.0, 8.0), layer(12.0, 20.0, 18.0)], edges)
    }

    /// Area 1e6 + 1e5 z: centre of volume by its integrals.
    fn exact_centre_m(low: f64, high: f64) -> f64 {
        let volume = |z: f64| 1e6 * z + 0.5e5 * z * z;
        let moment = |z: f64| 0.5e6 * z * z + 1e5 / 3.0 * z * z * z;
        (moment(high) - moment(low)) / (volume(high) - volume(low))
    }

    #[test]
    fn law_a_centre_of_volume_is_that_of_its_integrals() {
        let pool = valley();
        for (low, high) in [(0.0, 12.0), (12.0, 20.0), (3.0, 3.5), (0.0, 40.0)] {
            assert!((centre_m(&pool, low, high) - exact_centre_m(low, high)).abs() < 1e-9, "{low} {high}");
        }
    }

    /// Two layers that mix keep their heat and take exactly the potential energy by which their centre of mass rises,
    /// reckoned from the common centre of volume.
    #[test]
    fn law_two_mixed_layers_take_exactly_their_potential_energy() {
        let pool = valley();
        let (before, edges) = two(&pool);
        let heat = |layers: &[Layer; 2]| layers.iter().map(Layer::heat_j).sum::<f64>();
        let datum = exact_centre_m(0.0, 20.0);
        let potential = |layers: &[Layer; 2]| {
            let at = [exact_centre_m(0.0, 12.0), exact_centre_m(12.0, 20.0)];
            let part =
                |(l, z): (&Layer, f64)| G_M_S2 * l.density_kg_m3(GRAIN_KG_M3) * l.volume_m3 * (z - datum);
            layers.iter().zip(at).map(part).sum::<f64>()
        };
        let mut mixed = before;
        // a little less leaves some of the lower water as it is, just enough mixes all
        let whole = before[0].joined(&before[1]);
        let all = before.map(|l| whole.part(l.volume_m3));
        let needed = potential(&all) - potential(&before);
        assert!(needed > 0.0);
        assert!(!deepen(&mut mixed, &pool, &edges, GRAIN_KG_M3, needed * (1.0 - 1e-9)));
        assert!(mixed[0].temperature_c < mixed[1].temperature_c);
        assert!((heat(&mixed) / heat(&before) - 1.0).abs() < 1e-14);
        let mut mixed = before;
        assert!(deepen(&mut mixed, &pool, &edges, GRAIN_KG_M3, needed * (1.0 + 1e-9)));
        assert_eq!(mixed, all);
        assert!((heat(&mixed) / heat(&before) - 1.0).abs() < 1e-14);
    }

    /// Half the work takes in a part of the layer, and what that part takes is the work: in a box, where its centre is
    /// known.
    #[test]
    fn law_a_part_takes_the_work_there_is() {
        let row = |elevation_m: f64| RawRow { elevation_m, area_m2: 1e6, ..RawRow::default() };
        let pool =
            Pool::check(0.0, 40.0, &[row(0.0), row(40.0)], WidthSource::Table, &mut Vec::new()).unwrap();
        let (before, edges) = two(&pool);
        let work_j = 4e8;
        let mut mixed = before;
        deepen(&mut mixed, &pool, &edges, GRAIN_KG_M3, work_j);
        let taken_m = (mixed[1].volume_m3 - before[1].volume_m3) / 1e6;
        assert!(taken_m > 0.0 && taken_m < 12.0);
        // g drho h1 h2/2 per square metre (derived)
        let drop = before[0].density_kg_m3(GRAIN_KG_M3) - before[1].density_kg_m3(GRAIN_KG_M3);
        let need_j = G_M_S2 * drop * 8.0 * taken_m / 2.0 * 1e6;
        assert!((need_j / work_j - 1.0).abs() < 1e-9, "{need_j}");
        let heat = |layers: &[Layer]| layers.iter().map(Layer::heat_j).sum::<f64>();
        assert!((heat(&mixed) / heat(&before) - 1.0).abs() < 1e-14);
    }

    /// Water of 8 C over 4 C lies as it is, 2 C over 4 C too, and 4 C over either sinks.
    #[test]
    fn law_what_overturns_goes_by_density_and_not_by_temperature() {
        let pool = valley();
        let (layers, _) = two(&pool);
        let water = |low: f64, high: f64| {
            let mut pair = layers;
            pair[0].temperature_c = low;
            pair[1].temperature_c = high;
            let turned = overturn(&mut pair, GRAIN_KG_M3);
            (turned, pair.map(|l| l.temperature_c))
        };
        assert_eq!(water(4.0, 8.0), (false, [4.0, 8.0]));
        assert_eq!(water(4.0, 2.0), (false, [4.0, 2.0]));
        assert!(water(8.0, 4.0).0 && water(2.0, 4.0).0);
        let (_, [low, high]) = water(2.0, 4.0);
        assert!(low.total_cmp(&high).is_eq());
    }
}
