//! What makes the second site believable, and what it was invented for.

use std::sync::LazyLock;

use approx::assert_abs_diff_eq;
use gatemix::files::folder::Folder;
use gatemix::river::{Part, course};

use super::super::column::Water;
use super::super::water::oxygen_saturation_mg_l;
use super::{Cast, FORECAST_DAYS, Hour, Site, Years, heat, stations, years};

/// The site and all that happened there; made once.
pub(crate) static SORREL: LazyLock<(Site, Years)> = LazyLock::new(|| {
    let file = concat!(env!("CARGO_MANIFEST_DIR"), "/sites/sorrel/site.yaml");
    let site = Site::read(&std::fs::read_to_string(file).unwrap());
    let years = years(&site);
    (site, years)
});

/// Reading nearest to a depth, m.
fn near(cast: &Cast, depth_m: f64) -> Water {
    let off = |row: &&(f64, Water)| (row.0 - depth_m).abs();
    cast.rows.iter().min_by(|a, b| off(a).total_cmp(&off(b))).unwrap().1
}

fn cast(date: &str) -> &'static Cast {
    SORREL.1.casts.iter().find(|cast| cast.taken.date().to_string() == date).unwrap()
}

#[test]
fn law_casts_stay_inside_the_pool_and_what_water_can_hold() {
    let (site, years) = &*SORREL;
    for cast in &years.casts {
        assert!(cast.pool_m > site.basin.bed_m() && cast.pool_m < site.full_m, "{}", cast.taken);
        assert!((20..=30).contains(&cast.rows.len()), "{}", cast.taken);
        for (depth_m, water) in &cast.rows {
            assert!(cast.pool_m - depth_m > site.basin.bed_m(), "{} at {depth_m}", cast.taken);
            let share = water.oxygen_mg_l / oxygen_saturation_mg_l(water.temperature_c, cast.pool_m);
            assert!((0.0..1.15).contains(&share), "{} at {depth_m}: {share}", cast.taken);
            assert!((2.0..32.0).contains(&water.temperature_c), "{} at {depth_m}", cast.taken);
        }
    }
}

#[test]
fn law_volumes_of_the_second_site_follow_from_its_areas() {
    let text =
        std::fs::read_to_string(concat!(env!("CARGO_MANIFEST_DIR"), "/sites/sorrel/site.yaml")).unwrap();
    let written: serde_yaml::Value = serde_yaml::from_str(&text).unwrap();
    let rows = written["pool"]["table"].as_sequence().unwrap();
    assert_eq!(rows.len(), SORREL.0.basin.volumes_m3().count());
    for (row, volume_m3) in rows.iter().zip(SORREL.0.basin.volumes_m3()) {
        assert_abs_diff_eq!(row[2].as_f64().unwrap(), 1e-6 * volume_m3, epsilon = 1e-6);
    }
}

#[test]
fn scenario_the_layer_of_the_wanted_temperature_is_short_of_oxygen() {
    for date in ["2026-07-28", "2026-07-07", "2025-07-29", "2025-08-19"] {
        let cast = cast(date);
        let wanted = cast.rows.iter().filter(|row| (18.0..23.5).contains(&row.1.temperature_c));
        let most = wanted.map(|row| row.1.oxygen_mg_l).max_by(f64::total_cmp).unwrap();
        assert!(most < 2.5, "{date}: {most}");
        let top = near(cast, 1.0);
        assert!(top.temperature_c > 26.0 && top.oxygen_mg_l > 5.5, "{date}");
        for depth_m in [12.0, 15.0, 20.0] {
            assert!(near(cast, depth_m).oxygen_mg_l < 1.2, "{date} at {depth_m}");
        }
    }
    let winter = cast("2026-01-27");
    assert_abs_diff_eq!(near(winter, 1.0).temperature_c, near(winter, 20.0).temperature_c, epsilon = 0.3);
}

#[test]
fn scenario_the_ports_stand_as_the_last_day_left_them() {
    let text =
        std::fs::read_to_string(concat!(env!("CARGO_MANIFEST_DIR"), "/sites/sorrel/site.yaml")).unwrap();
    let written: serde_yaml::Value = serde_yaml::from_str(&text).unwrap();
    let newest = &SORREL.1.days[SORREL.1.days.len() - 1 - FORECAST_DAYS as usize];
    for (name, flow_m3s) in ["Upper", "Middle", "Lower"].iter().zip(&newest.ports_m3s) {
        assert_abs_diff_eq!(written["now"][name].as_f64().unwrap_or(0.0), *flow_m3s, epsilon = 0.3);
    }
}

/// Hours between two readings, the longest first.
fn gaps_h(file: &str) -> Vec<i64> {
    let (site, years) = &*SORREL;
    let files = stations::files(site, years);
    let text = &files.iter().find(|(name, _)| name == file).unwrap().1;
    let hour =
        |line: &str| chrono::NaiveDateTime::parse_from_str(line.split(',').next()?, "%Y-%m-%dT%H:%M").ok();
    let times: Vec<_> = text.lines().filter_map(hour).collect();
    let mut gaps: Vec<i64> =
        times.windows(2).map(|w| (w[1] - w[0]).num_hours()).filter(|&h| h != 1).collect();
    gaps.sort_by(|a, b| b.cmp(a));
    gaps
}

#[test]
fn scenario_the_stations_have_the_gaps_that_were_planted_and_no_others() {
    assert_eq!(gaps_h("tailwater.csv"), [95]);
    assert_eq!(gaps_h("pell-ford.csv"), [] as [i64; 0]);
    assert_eq!(gaps_h("cotter-bridge.csv"), [115, 11]);
}

#[test]
fn law_the_generators_heat_falls_as_water_warms_and_ends_at_its_balance() {
    let noon = Hour { air_c: 25.0, dew_point_c: 17.0, wind_m_s: 3.0, cloud: 0.3, sun_w_m2: 600.0 };
    let net = |t: f64| heat::net_w_m2(&noon, t, 0.0);
    assert!((0..30).all(|t| net(f64::from(t)) > net(f64::from(t) + 1.0)));
    assert!((10..40).all(|t| heat::net_w_m2(&noon, f64::from(t), 0.5) < net(f64::from(t))));
    assert_abs_diff_eq!(net(heat::equilibrium_c(&[noon; 24])), 0.0, epsilon = 1e-6);
}

/// The stations were made with a heat budget and an oxygen balance of the generator's own; two budgets that share no
/// coefficient should still tell one river. What left the dam is put into the program as the generator has it.
#[test]
fn scenario_what_the_program_computes_for_the_points_is_near_what_their_stations_recorded() {
    let folder = Folder::open(concat!(env!("CARGO_MANIFEST_DIR"), "/sites/sorrel")).unwrap();
    let (site, conditions) = (&folder.site, folder.conditions());
    let river = site.river.as_ref().unwrap();
    let mut off: Vec<Vec<(f64, f64)>> = vec![Vec::new(); river.points.len()];
    for day in SORREL.1.days.iter().filter(|day| (6..=7).contains(&chrono::Datelike::month(&day.date))) {
        let Water { temperature_c, oxygen_mg_l, .. } = day.released;
        let part =
            Part { hours: 24.0, flow_m3s: day.flow_m3s, temperature_c, oxygen_mg_l: Some(oxygen_mg_l) };
        let Some(way) = course(site, &conditions, day.date, &[part]) else { continue };
        for at in &way.points {
            let record = &conditions.observed[&river.points[at.point].name];
            let daily = record.daily(site.offset, site.coverage);
            // the water of the lower point is on its way for most of a day
            let arrives = day.date + chrono::Days::new((at.travel_h / 24.0).round() as u64);
            if let (Some(t), Some(o)) =
                (daily.temperature_c.days.get(&arrives), daily.oxygen_mg_l.days.get(&arrives))
            {
                off[at.point]
                    .push((at.figures.mean_c - t.mean, at.figures.oxygen_mean_mg_l.unwrap() - o.mean));
            }
        }
    }
    for (point, off) in off.iter().enumerate() {
        let n = off.len() as f64;
        let mean = |of: fn(&(f64, f64)) -> f64| off.iter().map(of).sum::<f64>() / n;
        let rms = mean(|d| d.0 * d.0).sqrt();
        let told =
            format!("{point}: n {n}, {:.2} C, rms {rms:.2} C, {:.2} mg/L", mean(|d| d.0), mean(|d| d.1));
        println!("{told}");
        assert!(n > 30.0 && mean(|d| d.0).abs() < 0.8 && rms < 1.2 && mean(|d| d.1).abs() < 0.8, "{told}");
    }
}
