//! How far the mix decided on inside a season lies from the first of the full ranking.

use std::collections::BTreeMap;
use std::ops::ControlFlow;
use std::sync::Arc;

use gatemix::files::folder::{Folder, demonstrations};
use gatemix::mix::Day;
use gatemix::mix::limits::Before;
use gatemix::rank::{Criterion, Order, Question, rank};
use gatemix::river::Conditions;
use gatemix::season::{Choosing, Plan, PlanDay, Setup, Skies, run};
use gatemix::site::{Case, Strategy};

/// The release decided on inside a season lies within this of that of the full ranking at 5 %, C (stated in
/// `docs/methods.md`, section 8): both lie within a bin of what is preferred.
const WITHIN_C: f64 = 0.6;
/// It lies no farther outside its ranges, within this, C: layers are slices of the cast.
const FARTHER_C: f64 = 0.1;
/// Every so many casts of each demonstration site.
const EACH: usize = 7;

#[test]
fn scenario_a_mix_inside_a_season_is_near_that_of_the_full_ranking() {
    let (mut apart, mut count): (Vec<f64>, usize) = (Vec::new(), 0);
    for name in demonstrations() {
        let folder = Folder::demonstration(name).unwrap();
        let conditions = Conditions { observed: BTreeMap::new(), ..(*folder.conditions()).clone() };
        let conditions = Arc::new(conditions);
        let site = &folder.site;
        for listed in folder.casts().iter().step_by(EACH) {
            let Some(start) = folder.profile_of(listed).0 else { continue };
            let Some(begins) = start.taken.map(|taken| taken.with_timezone(&site.offset).date_naive()) else {
                continue;
            };
            let release_m3s = site.release.wanted_m3s.or(site.release.min_m3s).unwrap();
            let day = Day::new(site, begins, conditions.clone());
            let blocks = [(1.0, release_m3s)];
            let order = Criterion::NAMES.map(|c| c.1);
            let question = Question {
                site,
                profile: &start,
                day: &day,
                blocks: &blocks,
                now: None,
                before: Before { flow_m3s: Some(release_m3s), temperature_c: None },
                steps: 20,
                order: &order,
                without: &[],
            };
            let ranking = rank(&question, &|_| ControlFlow::Continue(())).unwrap();
            let planned = PlanDay {
                date: begins,
                pool_m: None,
                release_m3s: Some(release_m3s),
                inflow_m3s: release_m3s,
                inflow_c: 12.0,
                inflow_mg_l: None,
                inflow_salt_g_per_kg: None,
                inflow_suspended_mg_l: None,
            };
            let plan = Plan {
                name: "a day".into(),
                file: "day.csv".into(),
                days: vec![planned],
                outages: Vec::new(),
                notes: Vec::new(),
            };
            let case = Case { name: "still".into(), air_c: 0.0, wind: 1.0, inflow: 1.0, inflow_c: 0.0 };
            let skies = Skies {
                case,
                year: None,
                days: BTreeMap::new(),
                site: Arc::new(site.clone()),
                conditions: conditions.clone(),
                from: "no air".into(),
            };
            let setup = Setup {
                start: &start,
                begins,
                decides: begins,
                now: None,
                plan: &plan,
                skies: &skies,
                choosing: Choosing::By(Strategy::Best),
                decide_days: 7,
                order: &gatemix::rank::Criterion::USUAL,
            };
            let run = run(&setup, &|_| ControlFlow::Continue(())).unwrap();
            let (Some(full), Some(inside)) = (ranking.mixes.first(), run.days.first()) else {
                assert!(ranking.mixes.is_empty() && run.ended.is_some(), "{name} {begins}: {:?}", run.ended);
                continue;
            };
            let (full_c, inside_c) = (full.temperature_c, inside.release.unwrap().temperature_c);
            let order = Order::of(&question);
            let outside = [full_c, inside_c].map(|c| order.off_c(c).0);
            println!("{name} {begins}: full {full_c:.2} C, inside {inside_c:.2} C, outside {outside:.2?}");
            assert!(outside[1] <= outside[0] + FARTHER_C, "{name} {begins}: {outside:?}");
            apart.push((full_c - inside_c).abs());
            count += 1;
        }
    }
    let most = apart.iter().copied().fold(0.0, f64::max);
    println!("{count} casts, at most {most:.3} C apart");
    assert!(count >= 6 && most <= WITHIN_C, "{most} C");
}
