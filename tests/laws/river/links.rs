//! Links against the way down itself.

use gatemix::river::{Conditions, course, links};

use super::{GIVEN, WEATHER, day, hourly, long, part};

/// How near a link stays to the course over releases 10 C apart, 34 km down: the mean, C; greatest and least, C, which bend
/// where another hour takes their part; oxygen of a release of 8 mg/L, and of 4 to 12, mg/L.
const NEAR: [f64; 4] = [0.005, 0.1, 0.05, 0.4];

#[test]
fn law_a_link_follows_the_course() {
    let mut most = [0.0_f64; 4];
    for (site, conditions) in [(long(GIVEN), Conditions::default()), (long(WEATHER), hourly(0.8))] {
        for flows in [vec![(24.0, 20.0)], vec![(6.0, 60.0), (18.0, 20.0)]] {
            let found = links(&site, &conditions, day(), &flows, (6.0, 16.0));
            assert_eq!(found.len(), 2);
            for step in 0..=10 {
                let release = 6.0 + f64::from(step);
                for oxygen in [4.0, 8.0, 12.0] {
                    let parts: Vec<_> = flows.iter().map(|f| part(f.0, f.1, release, oxygen)).collect();
                    let course = course(&site, &conditions, day(), &parts).unwrap();
                    for (link, point) in found.iter().zip(&course.points) {
                        let f = point.figures;
                        assert_eq!(link.point, Some(point.point));
                        let mut off = |which: usize, by: f64| most[which] = most[which].max(by.abs());
                        off(0, link.mean_c.at(release) - f.mean_c);
                        assert_eq!(link.range_c.is_some(), f.range_c.is_some());
                        if let (Some((greatest, least)), Some(range)) = (link.range_c, f.range_c) {
                            off(1, greatest.at(release) - range.0);
                            off(1, least.at(release) - range.1);
                        }
                        let which = if (oxygen - 8.0_f64).abs() < 1e-9 { 2 } else { 3 };
                        for (way, value) in
                            [(link.oxygen_mean, f.oxygen_mean_mg_l), (link.oxygen_min, f.oxygen_min_mg_l)]
                        {
                            let (curve, slope) = way.unwrap();
                            off(which, curve.at(release) + slope * oxygen - value.unwrap());
                        }
                    }
                }
            }
        }
    }
    println!("links are at most so far from the course: {most:.4?}");
    assert!(most.iter().zip(NEAR).all(|(most, near)| *most < near), "{most:?}");
}

#[test]
fn scenario_without_weather_there_is_no_link() {
    assert!(links(&long(WEATHER), &Conditions::default(), day(), &[(24.0, 20.0)], (6.0, 16.0)).is_empty());
}
