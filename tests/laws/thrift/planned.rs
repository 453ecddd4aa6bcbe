//! Seasons by the pool, from casts that do not stand on the plan, and what a decision costs and tells.

use std::ops::ControlFlow;
use std::sync::Mutex;

use gatemix::mix::{Gate, Setting};
use gatemix::season::{Setup, outcome, run};
use gatemix::site::Strategy;

use super::strategies::OF;
use super::tiny::{AREA_M2, Of, SURFACE_M, Tiny};

/// A table that begins with water below the bed changes nothing of a season.
#[test]
fn law_water_below_the_bed_is_no_water_of_the_season() {
    let raised = |text: String| {
        let (own, all) = (AREA_M2 * 30.0, AREA_M2 * 30.0 + 5e6);
        text.replace(&format!("{AREA_M2}, 0]"), &format!("{AREA_M2}, 5.0e6]"))
            .replace(&format!("{AREA_M2}, {own}]"), &format!("{AREA_M2}, {all}]"))
    };
    let [plain, raised] = [Tiny::new(OF), Tiny::edited(OF, &raised)].map(|tiny| {
        let tiny = tiny.by_pool(SURFACE_M, 0.2);
        tiny.by(&tiny.skies(0.0), Strategy::Best)
    });
    assert_eq!((plain.days.len(), raised.days.len()), (10, 10), "{:?}", raised.ended);
    for (a, b) in plain.days.iter().zip(&raised.days) {
        assert!((a.release_m3s() - b.release_m3s()).abs() < 1e-6, "{}", b.release_m3s());
        assert!((a.pool_m - b.pool_m).abs() < 1e-6);
    }
}

/// A cast above or below the plan comes to it by its next bend, in equal parts, and that is told.
#[test]
fn law_a_cast_off_its_plan_comes_to_it_by_the_next_bend() {
    for off_m in [0.8, -0.8] {
        let mut tiny = Tiny::new(OF).by_pool(SURFACE_M - off_m, 0.0);
        // the second row, on the evening of the eighth day; then it rises a little
        for (i, day) in tiny.plan.days.iter_mut().enumerate() {
            day.pool_m = Some(SURFACE_M - off_m - 0.3 + 0.1 * (i as f64 - 7.0).abs());
            day.inflow_m3s = 3.0;
        }
        let skies = tiny.skies(0.0);
        let setup = tiny.setup(&skies, gatemix::season::Choosing::By(Strategy::Hold));
        let run = run(&setup, &|_| ControlFlow::Continue(())).unwrap();
        assert_eq!(run.days.len(), 10, "{:?}", run.ended);
        let end_m = SURFACE_M - off_m - 0.3;
        for (i, day) in run.days.iter().take(8).enumerate() {
            let planned_m = SURFACE_M + (i + 1) as f64 / 8.0 * (end_m - SURFACE_M);
            assert!((day.pool_m - planned_m).abs() < 0.02, "{off_m} {i}: {} of {planned_m}", day.pool_m);
        }
        assert!((run.days[9].pool_m - (end_m + 0.2)).abs() < 0.02);
        let told = outcome(&setup, &run).warnings;
        let off = told.iter().find(|w| w.kind == "off-plan").unwrap();
        assert!(off.words.contains(if off_m > 0.0 { "above" } else { "below" }), "{}", off.words);
        assert!(off.words.contains("2026-07-08"), "{}", off.words);
    }
    let on = Tiny::new(OF).by_pool(SURFACE_M, 0.2);
    let skies = on.skies(0.0);
    let setup = on.setup(&skies, gatemix::season::Choosing::By(Strategy::Hold));
    let run = run(&setup, &|_| ControlFlow::Continue(())).unwrap();
    assert!(outcome(&setup, &run).warnings.iter().all(|w| w.kind != "off-plan"));
}

/// Whoever looks on is told how far the season is, and never more.
#[test]
fn law_progress_is_the_share_of_the_days_done() {
    let tiny = Tiny::new(OF);
    let skies = tiny.skies(0.0);
    let told = Mutex::new(Vec::new());
    let setup = tiny.setup(&skies, gatemix::season::Choosing::By(Strategy::Best));
    run(&setup, &|share| {
        told.lock().unwrap().push(share);
        ControlFlow::Continue(())
    });
    let told = told.into_inner().unwrap();
    assert!(told.windows(2).all(|pair| pair[0] <= pair[1]), "{told:?}");
    assert!(told.len() > 10 && told.iter().all(|share| *share < 0.95), "{told:?}");
}

/// What is within reach is told without the limits of the change, and those are kept.
#[test]
fn law_limits_of_the_change_bind_the_mix_and_not_what_is_within_reach() {
    let now = Setting::of(vec![Gate { outlet: 2, opening: 1.0, flow_m3s: 1.2 }]);
    let season = |more: &[&str]| {
        let tiny = Tiny::with(OF, more);
        let skies = tiny.skies(0.0);
        let setup =
            Setup { now: Some(&now), ..tiny.setup(&skies, gatemix::season::Choosing::By(Strategy::Best)) };
        run(&setup, &|_| ControlFlow::Continue(())).unwrap().decisions
    };
    let (free, bound) = (season(&[]), season(&["limits: { max_moves: 1 }"]));
    assert!(free[0].moves > 1, "{:?}", free[0]);
    assert!(bound.iter().all(|d| d.moves <= 1 && d.past.is_empty()), "{bound:?}");
    let [free, bound] = [&free[0], &bound[0]].map(|d| d.attainable_c.unwrap());
    assert!((free[0] - bound[0]).abs() < 0.02 && (free[1] - bound[1]).abs() < 0.02, "{free:?} {bound:?}");
}

/// What a level can pass beyond the last whole tenth of the release is within reach, and may be what reaches the target.
#[test]
fn law_what_is_within_reach_is_not_cut_to_tenths() {
    // cold water up to 11 m and one gate in it, which passes 37 % of the release
    let of = Of { gates: 2, thermocline_m: 11.0, early_high_c: 16.3, late_high_c: 16.3, ..OF };
    let few = |text: String| text.replace("name: G0,", "name: G0, flow: { max: 0.444 },");
    let tiny = Tiny::edited(of, &few);
    let skies = tiny.skies(0.0);
    let setup = tiny.setup(&skies, gatemix::season::Choosing::By(Strategy::Best));
    let run = run(&setup, &|_| ControlFlow::Continue(())).unwrap();
    let share = |at: f64| at * of.cold_c + (1.0 - at) * of.warm_c;
    let coldest_c = run.decisions[0].attainable_c.unwrap()[0];
    assert!(share(0.3) > of.early_high_c && share(0.37) < of.early_high_c);
    assert!((coldest_c - share(0.37)).abs() < 0.2, "{coldest_c} of {}", share(0.37));
    assert!(outcome(&setup, &run).exhausted.on() != Some(run.decisions[0].date));
}

/// A flood that passes the whole release over a free crest leaves the gates as they are asked.
#[test]
fn law_a_flood_over_a_free_crest_does_not_lose_what_is_held() {
    let crest = "  - { name: Spill, kind: crest, centre: 24.5, width: 0.2 }\ntargets:\n";
    let mut tiny = Tiny::edited(OF, &|text| text.replacen("targets:\n", crest, 1));
    for (i, day) in tiny.plan.days.iter_mut().enumerate() {
        // it rises over the crest by the third day, and what spills until the seventh is more than is asked
        day.inflow_m3s = if i < 2 { 2.5 } else { 0.8 };
        day.release_m3s = Some(if (2..7).contains(&i) { 0.2 } else { 1.2 });
    }
    let now = Setting::of(vec![Gate { outlet: 1, opening: 1.0, flow_m3s: 1.2 }]);
    let skies = tiny.skies(0.0);
    let hold = gatemix::season::Choosing::By(Strategy::Hold);
    let setup = Setup { now: Some(&now), ..tiny.setup(&skies, hold) };
    let run = run(&setup, &|_| ControlFlow::Continue(())).unwrap();
    assert_eq!(run.days.len(), 10, "{:?}", run.ended);
    let flow = |day: usize, outlet: usize| {
        let gates = run.days[day].gates.iter().filter(|g| g.outlet == outlet);
        gates.map(|g| g.flow_m3s).sum::<f64>()
    };
    // a decision is due while only the crest passes water
    let due = run.decisions.iter().filter_map(|d| run.days.iter().position(|day| day.date == d.date));
    assert!(due.into_iter().any(|day| flow(day, 3) > 0.2 && flow(day, 1) <= 0.0), "{:?}", run.decisions);
    assert!(flow(9, 1) > 0.1 && flow(9, 0) + flow(9, 2) <= 0.0, "{:?}", run.days[9].gates);
    assert!(run.decisions.iter().all(|d| d.moves == 0), "{:?}", run.decisions);
}
