//! Levels that the pool sinks below in the course of a day.

use super::{date, go, layers, level, no_inflow, still};

/// A pool that sinks below a level in the course of a day still gives it its flow of the day, and keeps its balances.
#[test]
fn law_a_level_that_falls_dry_in_the_day_gives_what_it_was_asked() {
    let site = still(&[(0.0, 1e4), (30.0, 1e4)]);
    let mut pool = layers(&site, 20.0, 20, &|z| (5.0 + 0.5 * z, 8.0));
    // 2 m leave by the low level, 0.1 m by the one that stands half a metre below the surface
    let (low, high) = (2e4 / 86_400.0, 1e3 / 86_400.0);
    let stepped = go(&mut pool, &site, None, no_inflow(), &[level(5.0, low), level(19.5, high)]);
    assert!(stepped.steps > 1, "{} on {}", stepped.steps, date());
    assert!((pool.pool_m(&site.pool) - 17.9).abs() < 1e-6, "{}", pool.pool_m(&site.pool));
    let drawn = stepped.drawn[1].draw.unwrap();
    assert!(drawn.temperature_c > 13.0, "{drawn:?}");
}
