//! The knobs of a pool learned from its casts, and when they are not.

use std::ops::ControlFlow;

use chrono::NaiveDate;
use gatemix::profile::{Column, Profile};
use gatemix::season::{
    Choosing, Forcing, Inflow, Layers, Learned, Past, Sky, WIND, learn, part_of_day, past,
};
use gatemix::site::{Knobs, Site, Strategy};
use gatemix::units::{DAY_S, System, say::in_system};

use crate::thrift::tiny::{Of, Tiny};

use super::{air, date, go, layers, level, no_inflow, pool};

const DAYS: usize = 16;
/// The hour at which casts are taken: 09:20.
const HOUR_S: f64 = 33600.0;

fn site(knobs: Knobs) -> Site {
    let mut site = pool(&[(0.0, 1e6), (15.0, 2e6), (30.0, 4e6)]);
    site.season.knobs = knobs;
    site.season.layer_m = 1.0;
    site
}

fn truth() -> Knobs {
    Knobs { wind: 0.5, light_per_m: 0.9, diffusion: 1.7, water_demand_mg_l_day: 0.12, ..Knobs::default() }
}

/// Days of changing weather, under so many times its wind.
fn days_under(count: usize, wind: f64) -> Vec<Past> {
    let past = |(i, date): (usize, NaiveDate)| {
        let turn = ((i * 5) % 11) as f64 / 11.0;
        let wind_m_s = wind * (0.5 + 6.0 * (1.0 - turn));
        let sky = Sky::Air(air(14.0 + 8.0 * turn + 0.1 * i as f64, wind_m_s, 140.0 + 130.0 * turn));
        let inflow = Inflow { flow_m3s: 5.0, temperature_c: 10.0, ..no_inflow() };
        let forcing = Forcing { date, sky: Some(sky), inflow };
        Past { forcing, levels: vec![level(8.0, 5.0)] }
    };
    date().iter_days().take(count).enumerate().map(past).collect()
}

/// The days of two stretches, and that of the last cast.
fn days() -> Vec<Past> {
    days_under(2 * DAYS + 1, 1.0)
}

fn at(day: NaiveDate) -> chrono::DateTime<chrono::FixedOffset> {
    (day.and_time(chrono::NaiveTime::MIN) + chrono::TimeDelta::seconds(HOUR_S as i64))
        .and_utc()
        .fixed_offset()
}

fn warm(site: &Site) -> Layers {
    layers(site, 26.0, 26, &|z| (6.0 + 12.0 * (z / 26.0).powi(2), 5.0 + 0.1 * z))
}

fn goes(now: &mut Layers, site: &Site, past: &Past, lasts_s: f64) {
    let levels = |_: &Column, _: f64| past.levels.clone();
    part_of_day(now, site, &past.forcing, lasts_s, &levels).unwrap();
}

/// Casts of a pool with these knobs, each stretch begun from the water that the cast before it shows.
fn casts(days: &[Past], knobs: [Knobs; 2], stretches: [usize; 2]) -> [Profile; 3] {
    let first = site(knobs[0]);
    let mut out = vec![warm(&first).profile(&first, at(date())).unwrap()];
    let mut begins = 0;
    for (knobs, length) in knobs.iter().zip(stretches) {
        let site = site(*knobs);
        let mut now = Layers::of_profile(&site, out.last().unwrap(), site.season.layer_m).unwrap();
        let ends = begins + length;
        goes(&mut now, &site, &days[begins], DAY_S - HOUR_S);
        days[begins + 1..ends].iter().for_each(|past| goes(&mut now, &site, past, DAY_S));
        goes(&mut now, &site, &days[ends], HOUR_S);
        out.push(now.profile(&site, at(days[ends].forcing.date)).unwrap());
        begins = ends;
    }
    out.try_into().unwrap()
}

/// Casts of a pool that goes on by itself, day by day, whenever they are taken.
fn casts_meanwhile(days: &[Past], knobs: Knobs) -> [Profile; 3] {
    let site = site(knobs);
    let mut now = warm(&site);
    let mut out = Vec::new();
    for (i, past) in days.iter().enumerate() {
        if i % DAYS == 0 {
            let mut morning = now.clone();
            goes(&mut morning, &site, past, HOUR_S);
            out.push(morning.profile(&site, at(past.forcing.date)).unwrap());
        }
        goes(&mut now, &site, past, DAY_S);
    }
    out.try_into().unwrap()
}

fn learned(casts: &[Profile; 3], days: &[Past]) -> Result<Learned, String> {
    let go_on = |_| ControlFlow::Continue(());
    let told = learn(&site(Knobs::default()), [&casts[0], &casts[1], &casts[2]], days, &go_on).unwrap();
    told.map_err(|words| in_system(&words, System::Si))
}

#[test]
fn law_the_knobs_of_a_known_pool_are_found_again() {
    let days = days();
    let found = learned(&casts(&days, [truth(); 2], [DAYS, DAYS]), &days).unwrap();
    let near = |of: fn(&Knobs) -> f64, within: f64| {
        let (is, was) = (of(&found.knobs), of(&truth()));
        assert!((is / was - 1.0).abs() < within, "{is} for {was}");
    };
    near(|k| k.wind, 0.01);
    near(|k| k.light_per_m, 0.01);
    near(|k| k.diffusion, 0.01);
    near(|k| k.water_demand_mg_l_day, 0.01);
    assert_eq!(found.before, Knobs::default());
    for [before, after] in [found.fitted, found.tested] {
        assert!(after.temperature_c < 0.01 * before.temperature_c);
        assert!(after.oxygen_mg_l.unwrap() < 0.01 * before.oxygen_mg_l.unwrap());
    }
    assert!(found.at_end.is_empty() && found.untold.is_empty());
    // what is not fitted stays
    assert_eq!(found.knobs.bed_demand_g_m2_day, truth().bed_demand_g_m2_day);
}

/// The pool goes on by itself: what a cast loses of its layers, and that a day is cut at the hour of the cast, is what is
/// left.
#[test]
fn law_a_pool_sounded_in_the_morning_is_learned_by_the_hour() {
    let days = days();
    let found = learned(&casts_meanwhile(&days, truth()), &days).unwrap();
    for [_, after] in [found.fitted, found.tested] {
        assert!(after.temperature_c < 0.05, "{found:?}");
    }
    let (is, was) = (found.knobs, truth());
    for (is, was) in [(is.wind, was.wind), (is.light_per_m, was.light_per_m), (is.diffusion, was.diffusion)] {
        assert!((is / was - 1.0).abs() < 0.05, "{is} for {was}");
    }
}

/// Under no wind the share of its work does nothing: it is not told, and stays.
#[test]
fn law_without_wind_its_share_is_not_told_and_stays() {
    let days = days_under(2 * DAYS + 1, 0.0);
    let found = learned(&casts(&days, [truth(); 2], [DAYS, DAYS]), &days).unwrap();
    assert_eq!(found.untold, ["wind"]);
    assert_eq!(found.knobs.wind, Knobs::default().wind);
    let wind = found.each().into_iter().find(|fit| fit.name == "wind").unwrap();
    assert!(!wind.told && !wind.at_end);
    assert!((found.knobs.light_per_m / truth().light_per_m - 1.0).abs() < 0.02, "{found:?}");
    assert!((found.knobs.diffusion / truth().diffusion - 1.0).abs() < 0.02, "{found:?}");
}

#[test]
fn scenario_a_pool_beyond_the_published_says_so() {
    let days = days();
    let windy = Knobs { wind: 4.0 * WIND[1], ..Knobs::default() };
    let found = learned(&casts(&days, [windy; 2], [DAYS, DAYS]), &days).unwrap();
    assert!(found.at_end.contains(&"wind"), "{found:?}");
    assert!(found.knobs.wind <= WIND[1] && found.fitted[1].temperature_c < found.fitted[0].temperature_c);
}

#[test]
fn scenario_too_little_is_refused() {
    let days = days();
    let near = casts(&days, [truth(); 2], [13, DAYS]);
    let told = learned(&near, &days).unwrap_err();
    assert!(told.ends_with("lies 13 days after the cast before it, and 14 are needed"), "{told}");
    let mut few = casts(&days, [truth(); 2], [DAYS, DAYS]);
    few[2].samples.truncate(4);
    assert!(learned(&few, &days).unwrap_err().ends_with("has 4 samples, and 5 are needed"));
    few[1].taken = None;
    assert!(learned(&few, &days).unwrap_err().ends_with("does not say when it was taken"));
    let casts = casts(&days, [truth(); 2], [DAYS, DAYS]);
    let mut gap = days.clone();
    gap.remove(20);
    assert_eq!(learned(&casts, &gap).unwrap_err(), "nothing tells what came and went on 2026-07-21");
    let mut dry = days;
    dry[3].levels[0].sink.centre_m = 29.0;
    let told = learned(&casts, &dry).unwrap_err();
    assert!(told.starts_with("on 2026-07-04: 5.0 m3/s is asked of the level at 29.00 m"), "{told}");
}

#[test]
fn scenario_a_fit_that_fails_its_test_is_refused() {
    let days = days();
    // the second month goes by the knobs of before
    let told = learned(&casts(&days, [truth(), Knobs::default()], [DAYS, DAYS]), &days).unwrap_err();
    assert!(told.starts_with("on the third cast the fit is worse than before: off by "), "{told}");
    // nothing to be learned of a pool that goes as it is thought to
    let told = learned(&casts(&days, [Knobs::default(); 2], [DAYS, DAYS]), &days).unwrap_err();
    assert_eq!(told, "no knobs within the published ranges come nearer to the second cast than 0.00 C");
}

#[test]
fn scenario_learning_can_be_stopped() {
    let days = days();
    let casts = casts(&days, [truth(); 2], [DAYS, DAYS]);
    let stop = |done: f64| if done > 0.1 { ControlFlow::Break(()) } else { ControlFlow::Continue(()) };
    assert_eq!(learn(&site(Knobs::default()), [&casts[0], &casts[1], &casts[2]], &days, &stop), None);
}

/// The days of a run, gone through again, lead to the same pool to the last digit: its solids, its shifts and all.
#[test]
fn law_the_days_of_a_run_are_those_that_passed() {
    let season = Tiny::new(Of {
        gates: 3,
        on_a_well: true,
        days: 9,
        every: 3,
        thermocline_m: 14.0,
        warm_c: 20.0,
        cold_c: 8.0,
        release_m3s: 1.5,
        early_high_c: 16.0,
        late_high_c: 14.0,
        equilibrium_c: 22.0,
    });
    let skies = season.skies(1.5);
    let setup = season.setup(&skies, Choosing::By(Strategy::Best));
    let run = season.by(&skies, Strategy::Best);
    let days = past(&setup, &run);
    assert_eq!((days.len(), run.days.len()), (9, 9));
    let mut now = run.start.clone();
    for (past, day) in days.iter().zip(&run.days) {
        go(&mut now, &skies.site, past.forcing.sky, past.forcing.inflow, &past.levels);
        assert_eq!(past.forcing.date, day.date);
        assert_eq!(now, day.layers);
    }
}
