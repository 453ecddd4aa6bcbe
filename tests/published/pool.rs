//! The pool table: look-ups and inverses, as laws.

use gatemix::site::{self, Pool, WidthSource};
use proptest::prelude::*;

/// The pool of a sound table, from its first row to its last.
pub(crate) fn pool(table: &[site::RawRow]) -> Pool {
    let (bed, top) = (table[0].elevation_m, table[table.len() - 1].elevation_m);
    let mut problems = Vec::new();
    Pool::check(bed, top, table, WidthSource::Table, &mut problems).unwrap_or_else(|| panic!("{problems:?}"))
}

/// Elevations, areas and perhaps volumes of a pool: areas from a bed of any area, volumes off their areas by
/// up to a tenth.
pub(crate) fn tables() -> impl Strategy<Value = Vec<site::RawRow>> {
    let rows = prop::collection::vec((0.5..20.0_f64, 0.0..1e6_f64, 0.9..1.1_f64), 2..8);
    (rows, 0.0..1e6_f64, any::<bool>(), -50.0..500.0_f64).prop_map(|(steps, area, volumes, bed)| {
        let mut z = bed;
        let mut area = area;
        let mut volume = 0.0;
        let row = |elevation_m: f64, area_m2: f64, volume: f64| site::RawRow {
            elevation_m,
            area_m2,
            volume_m3: volumes.then_some(volume),
            width_m: None,
        };
        let mut table = vec![row(z, area, volume)];
        for (height, gain, share) in steps {
            // areas that hold water everywhere, so that every stretch has an inverse
            let next = area + gain + 1.0;
            volume += share * 0.5 * (area + next) * height;
            (z, area) = (z + height, next);
            table.push(row(z, area, volume));
        }
        table
    })
}

proptest! {

    #![proptest_config(crate::law_config())]
    /// Volume, area and their inverses go round; the table rules at its rows; dV = A dz inside a stretch.
    #[test]
    fn law_pool_look_ups_and_inverses(table in tables(), share in 0.0..1.0_f64) {
        let pool = pool(&table);
        let (bed, top) = (pool.bed_m, pool.top_m());
        let z = bed + share * (top - bed);
        let (volume, area) = (pool.volume_m3(z), pool.area_m2(z));
        let back = pool.elevation_of_volume_m(volume).unwrap();
        prop_assert!((back - z).abs() < 1e-6, "{back} {z}");
        prop_assert!((pool.volume_m3(back) - volume).abs() <= 1e-12 * pool.volume_m3(top));
        let back = pool.elevation_of_area_m(area).unwrap();
        prop_assert!((pool.area_m2(back) / area - 1.0).abs() < 1e-9 && (back - z).abs() < 1e-5, "{back} {z}");
        for row in &table {
            prop_assert!((pool.area_m2(row.elevation_m) - row.area_m2).abs() <= 1e-9 * row.area_m2);
            if let Some(told) = row.volume_m3 {
                prop_assert!((pool.volume_m3(row.elevation_m) - told).abs() <= 1e-12 * pool.volume_m3(top));
            }
        }
        let dz = 1e-4;
        let inside = table.windows(2).any(|w| w[0].elevation_m < z - dz && z + dz < w[1].elevation_m);
        if inside {
            let slope = (pool.volume_m3(z + dz) - pool.volume_m3(z - dz)) / (2.0 * dz);
            // a difference of volumes keeps fewer digits the smaller its share of the pool
            let digits = 1e-15 * pool.volume_m3(top) / dz;
            prop_assert!((slope - pool.effective_area_m2(z)).abs() < 1e-8 * slope + 4.0 * digits);
        }
        prop_assert_eq!(pool.elevation_of_volume_m(-1.0), None);
        prop_assert_eq!(pool.elevation_of_volume_m(1.001 * pool.volume_m3(top)), None);
        prop_assert_eq!(pool.elevation_of_area_m(1.001 * pool.area_m2(top)), None);
    }
}

/// The lowest elevation where the area stands still.
#[test]
fn law_area_inverse_takes_the_lowest() {
    let row = |elevation_m, area_m2| site::RawRow { elevation_m, area_m2, ..site::RawRow::default() };
    let pool = pool(&[row(0.0, 1e5), row(10.0, 3e5), row(20.0, 3e5), row(30.0, 5e5)]);
    assert_eq!(pool.elevation_of_area_m(3e5), Some(10.0));
    assert_eq!(pool.elevation_of_area_m(2e5), Some(5.0));
    assert_eq!(pool.elevation_of_area_m(5e5), Some(30.0));
    assert_eq!(pool.elevation_of_area_m(0.9e5), None);
}
