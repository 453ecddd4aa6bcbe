//! A dam with too many mixes to try one by one: nothing that the search passes over is better than what it tells.

use std::ops::Range;

use gatemix::files::site::site;
use gatemix::mix::limits::Before;
use gatemix::mix::{Gate, Setting};
use gatemix::profile::{self, Profile};
use gatemix::rank::{Criterion, Ranked, Ranking};
use gatemix::site::Site;

use super::brute::{count, ranked, trade_bin};
use super::dice::Dice;
use super::mixes::Number;
use super::parts::Works;
use super::sites::{Case, Dam, case};
use crate::columns::worked;

const POOL_M: f64 = 72.0;
const DRAWS: usize = 10_000;
const LARGE_DAMS: usize = 5;
/// Round-off of sums taken in another order.
const SAME: f64 = 1e-9;
/// Most and fewest mixes of a random dam that is ranked with and without passing over: more take too long, of fewer
/// every one is judged.
const MIXES: Range<usize> = 200_000..2_000_000;

/// A dam of two wells with five gates each, a sluice and a crest beside them. The dam is invented.
fn site_of_many() -> Site {
    let mut text = String::from(
        "name: Many Gates (invented)
units: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }
place: { altitude: 100 }
pool: { bed: 0, full: 75, table: [[0, 1e5], [75, 9e6]] }
wells:
  - { name: North, conduit: 3, max_open: 2, max_head_loss: 0.4, min_flow: 8 }
  - { name: South, conduit: 30, max_open: 2, max_head_loss: 2 }
targets:
  - { name: cold, low: 9, preferred: 12, high: 14, oxygen_min: 7 }
cold_water: [10]
outlets:
  - { name: Sluice, centre: 8, height: 3, width: 3, flow: { max: 40 } }
  - { name: Crest, kind: crest, gated: true, centre: 69, width: 30 }
",
    );
    for (well, offset) in [("North", 0.0), ("South", 4.0)] {
        for i in 0..5 {
            let centre = 66.0 - 11.0 * f64::from(i) - offset;
            let line = format!(
                "  - {{ name: {}{i}, well: {well}, centre: {centre}, height: 4, width: 3, loss: 1.5, positions: [0, 50, 100], min_submergence: 3 }}\n",
                &well[..1]
            );
            text.push_str(&line);
        }
    }
    site(&text, "site.yaml").site.unwrap()
}

fn water_before(site: &Site) -> Profile {
    let step = |z: f64, middle: f64, width: f64| 1.0 / (1.0 + ((middle - z) / width).exp());
    let rows = (0..120).map(|i| {
        let z = POOL_M * f64::from(i) / 119.0;
        let hollow = (-((z - 47.0) / 5.0).powi(2)).exp();
        profile::RawRow {
            elevation_m: Some(z),
            temperature_c: Some(5.2 + 0.012 * z + 16.0 * step(z, 54.0, 3.2)),
            oxygen_mg_l: Some(3.0 + 5.5 * step(z, 50.0, 4.0) - 2.4 * hollow),
            ..profile::RawRow::default()
        }
    });
    let raw = profile::Raw {
        file: "invented.csv".into(),
        taken: "2025-07-14T10:00:00Z".parse().ok(),
        pool_m: Some(POOL_M),
        rows: rows.collect(),
    };
    Profile::build(&raw, site, None).0.unwrap()
}

fn many() -> (Case, Dam) {
    let site = site_of_many();
    let profile = water_before(&site);
    let gate = |outlet| Gate { outlet, opening: 1.0, flow_m3s: 30.0 };
    let asked = Case {
        water: worked(),
        blocks: vec![(1.0, 60.0)],
        now: Some(Setting::of(vec![gate(3), gate(8)])),
        before: Before::default(),
        steps: 10,
        order: Criterion::NAMES.map(|c| c.1).to_vec(),
        without: Vec::new(),
        ..case(0, false)
    };
    let day = crate::mix::sites::day().into();
    (asked, Dam { site, profile, day })
}

/// Any mix: some parts open, each in any of its states, the steps shared out among them.
fn any_mix(works: &Works, dice: &mut Dice) -> Number {
    let mut number = vec![(0, 0); works.parts.len()];
    let mut order: Vec<usize> = (0..number.len()).collect();
    (1..order.len()).for_each(|i| order.swap(i, dice.below(i + 1)));
    order.truncate(1 + dice.below(number.len()));
    let mut left = works.steps;
    for (i, &part) in order.iter().enumerate() {
        let others = order.len() - i - 1;
        let share = if others == 0 { left } else { 1 + dice.below(left - others) };
        number[part] = (share, 1 + dice.below(works.parts[part].states.len() - 1));
        left -= share;
    }
    number
}

/// The number of a mix of a ranking, by what is asked for in the first part of the day.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a whole number from 0")]
fn number_of(works: &Works, mix: &Ranked) -> Number {
    let asked = &mix.asked[0];
    let number = works.parts.iter().map(|part| {
        let opening = |o: &usize| {
            let direct = asked.direct.iter().find(|g| g.outlet == *o).map(|g| g.opening);
            direct.or(asked.open.iter().find(|g| g.0 == *o).map(|g| g.1)).unwrap_or(0.0)
        };
        let openings: Vec<f64> = part.outlets.iter().map(opening).collect();
        let state = part.states.iter().position(|s| *s == openings).unwrap();
        let total = asked.totals.iter().find(|t| Some(t.0) == part.well).map(|t| t.1);
        let direct = asked.direct.iter().find(|g| part.outlets.contains(&g.outlet)).map(|g| g.flow_m3s);
        let flow_m3s = total.or(direct).unwrap_or(0.0);
        ((flow_m3s / works.shared_out_m3s[0] * works.steps as f64).round() as usize, state)
    });
    number.collect()
}

/// What a mix breaks is told with no larger a miss; what it gives is not ahead of what is told.
fn not_ahead(works: &Works, ranking: &Ranking, trade: &[(usize, f64)], number: &Number) -> bool {
    let judged = works.judge(number);
    for check in &judged.broken {
        let same =
            |c: &gatemix::mix::limits::Check| (c.rule, c.of, c.item) == (check.rule, check.of, check.item);
        let told = ranking.rejected.iter().find(|r| same(&r.check)).unwrap();
        assert!(told.check.room >= check.room - SAME, "{told:?} {check:?}");
    }
    let Some(water) = judged.water else { return false };
    let at = ranking.mixes.iter().position(|m| m.open == judged.open).unwrap();
    assert!(ranking.keys[at] <= water.key || water.at_edge, "{number:?} {water:?} {:?}", ranking.mixes[at]);
    let [coldest, warmest] = ranking.attainable_c.as_ref().unwrap();
    assert!(coldest.value - SAME <= water.temperature_c && water.temperature_c <= warmest.value + SAME);
    let [least, most] = ranking.attainable_oxygen_mg_l.as_ref().unwrap();
    let oxygen = water.oxygen_mg_l.unwrap();
    assert!(least.value - SAME <= oxygen && oxygen <= most.value + SAME);
    let bin = trade_bin(water.distance_c);
    assert!(trade.iter().any(|t| t.0 <= bin && t.1 >= oxygen - SAME), "{bin} {oxygen} {trade:?}");
    true
}

#[test]
fn law_no_mix_passed_over_is_better_than_what_is_told() {
    let (asked, dam) = many();
    let question = asked.question(&dam);
    let ranking = ranked(&question).unwrap();
    let works = Works::new(&question);
    assert!(ranking.allowed > 200_000 && ranking.judged < ranking.allowed, "something is passed over");
    // everything told is what it is told to be
    for (mix, key) in ranking.mixes.iter().zip(&ranking.keys) {
        let judged = works.judge(&number_of(&works, mix));
        let water = judged.water.unwrap();
        assert!(judged.open == mix.open && (water.key == *key || water.at_edge), "{mix:?} {key} {water:?}");
    }
    let point = |e: &gatemix::rank::Extreme| {
        let water = works.judge(&number_of(&works, &e.mix)).water.unwrap();
        (trade_bin(water.distance_c), water.oxygen_mg_l.unwrap())
    };
    let trade: Vec<(usize, f64)> = ranking.trade.iter().map(point).collect();
    let dice = &mut Dice::new(1);
    let allowed = (0..DRAWS).filter(|_| not_ahead(&works, &ranking, &trade, &any_mix(&works, dice))).count();
    assert!(allowed > DRAWS / 20 && allowed < DRAWS * 19 / 20, "{allowed}");
}

/// The same with a limit of the whole that nothing breaks: then every mix is judged.
fn judged_in_full(asked: &Case, dam: &Dam) -> Ranking {
    let mut site = dam.site.clone();
    site.limits.solids_max_mg_l = Some(1e9);
    let question = asked.question(dam);
    ranked(&gatemix::rank::Question { site: &site, ..question }).unwrap()
}

/// Everything but how many were judged and passed over.
fn told(ranking: Ranking) -> Ranking {
    Ranking { judged: 0, skipped: 0, ..ranking }
}

#[test]
fn law_passing_over_changes_nothing_but_the_time_it_takes() {
    let (asked, dam) = many();
    let (quick, full) = (ranked(&asked.question(&dam)).unwrap(), judged_in_full(&asked, &dam));
    assert!(quick.judged < full.judged && full.judged == full.allowed, "{} {}", quick.judged, full.judged);
    assert_eq!(told(quick), told(full));
}

#[test]
fn law_passing_over_changes_nothing_at_random_dams() {
    let mut compared = 0;
    for seed in 8000..8400 {
        if compared == LARGE_DAMS {
            break;
        }
        let mut asked = case(seed, false);
        asked.steps = 40;
        let Some(dam) = asked.dam() else { continue };
        let question = asked.question(&dam);
        let works = Works::new(&question);
        if !MIXES.contains(&count(&works, works.steps)) {
            continue;
        }
        let quick = ranked(&question).unwrap();
        if quick.judged == quick.allowed {
            continue;
        }
        assert_eq!(told(quick), told(judged_in_full(&asked, &dam)), "case {seed}");
        compared += 1;
    }
    assert_eq!(compared, LARGE_DAMS);
}
