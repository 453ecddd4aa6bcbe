//! Orders worked by hand: which step comes first, when, and what stands in the way. The dam and its water are invented.

use approx::assert_abs_diff_eq;
use chrono::NaiveDate;
use gatemix::files::site::site;
use gatemix::mix::limits::{Of, Rule};
use gatemix::mix::{Asked, Gate, Setting, groups, resolve};
use gatemix::order::{Manner, Moved, NoOrder, Order, Question, Step, order};
use gatemix::profile::{self, Profile};
use gatemix::site::Site;

const SITE: &str = r#"name: Order Dam (invented)
units: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }
utc_offset: "+00:00"
place: { altitude: 100 }
pool: { bed: 0, full: 62, table: [[0, 1.0e5], [40, 5.0e6], [62, 9.0e6]] }
wells: [ { name: North, conduit: 2 } ]
outlets:
  - { name: N1, well: North, centre: 45, height: 3, width: 4, loss: 1.5, positions: [0, 50, 100] }
  - { name: N2, well: North, centre: 30, height: 3, width: 4, loss: 1.5, positions: [0, 50, 100] }
  - { name: Sluice, centre: 8, height: 2, width: 2, flow: { max: 60 } }
  - { name: Low, centre: 20, height: 2, width: 2, flow: { max: 60 } }
  - { name: Cone, centre: 12, height: 2, width: 2, positions: [0, 50, 100] }
"#;
const POOL_M: f64 = 60.0;
const N1: usize = 0;
const N2: usize = 1;
const SLUICE: usize = 2;
const LOW: usize = 3;
const CONE: usize = 4;
const NORTH: usize = 0;

/// Elevation, temperature, oxygen.
const WATER: [[f64; 3]; 8] = [
    [0.0, 6.0, 1.0],
    [20.0, 6.5, 3.0],
    [30.0, 8.0, 5.0],
    [40.0, 11.0, 6.0],
    [45.0, 15.0, 7.0],
    [50.0, 20.0, 8.0],
    [54.0, 24.0, 8.4],
    [60.0, 24.0, 8.4],
];

/// A change: gates of the well with its total, and flows of outlets.
#[derive(Clone, Copy, Default)]
struct Set<'a> {
    open: &'a [(usize, f64)],
    north_m3s: f64,
    /// Outlet, opening, flow.
    direct: &'a [(usize, f64, f64)],
}

struct Dam {
    site: Site,
    profile: Profile,
}

impl Dam {
    /// The site with more lines, and with parts of lines replaced.
    fn new(more: &str, replaced: &[(&str, &str)]) -> Self {
        let mut text = format!("{SITE}{more}");
        for (from, to) in replaced {
            assert!(text.contains(from), "{from}");
            text = text.replace(from, to);
        }
        let read = site(&text, "site.yaml");
        let site = read.site.unwrap_or_else(|| panic!("{:?}", read.problems));
        let row = |(i, [z, t, o]): (usize, [f64; 3])| profile::RawRow {
            line: i + 1,
            elevation_m: Some(z),
            temperature_c: Some(t),
            oxygen_mg_l: Some(o),
            ..profile::RawRow::default()
        };
        let raw = profile::Raw {
            file: "invented.csv".into(),
            taken: "2025-07-14T10:00:00Z".parse().ok(),
            pool_m: Some(POOL_M),
            rows: WATER.into_iter().enumerate().map(row).collect(),
        };
        let profile = Profile::build(&raw, &site, None).0.unwrap();
        Self { site, profile }
    }

    fn setting(&self, set: Set) -> Setting {
        let gate = |&(outlet, opening, flow_m3s): &(usize, f64, f64)| Gate { outlet, opening, flow_m3s };
        let asked = Asked {
            direct: set.direct.iter().map(gate).collect(),
            open: set.open.to_vec(),
            totals: if set.north_m3s > 0.0 { vec![(NORTH, set.north_m3s)] } else { Vec::new() },
        };
        resolve(&self.site, &self.profile.column, &groups(&self.site), &asked, POOL_M)
    }

    fn order(&self, now: Set, wanted: Set, manner: Manner) -> Result<Order, NoOrder> {
        let (now, wanted) = (self.setting(now), self.setting(wanted));
        let date = NaiveDate::from_ymd_opt(2025, 7, 14).unwrap();
        order(&Question {
            site: &self.site,
            profile: &self.profile,
            date,
            now: &now,
            wanted: &wanted,
            manner,
        })
    }

    fn usual(&self, now: Set, wanted: Set) -> Result<Order, NoOrder> {
        self.order(now, wanted, Manner::default())
    }
}

/// What moves, and to where: gates by percent, the others by flow.
fn moves(order: &Order) -> Vec<(Moved, f64)> {
    order.steps.iter().map(|s| (s.moved, stands(s))).collect()
}

fn stands(step: &Step) -> f64 {
    match step.moved {
        Moved::Gate(_) => 100.0 * step.to.opening.unwrap(),
        _ => step.to.flow_m3s,
    }
}

fn times(order: &Order) -> Vec<f64> {
    order.steps.iter().map(|s| s.at_min).collect()
}

const N1_OPEN: Set = Set { open: &[(N1, 1.0)], north_m3s: 20.0, direct: &[] };
const N2_OPEN: Set = Set { open: &[(N2, 1.0)], north_m3s: 20.0, direct: &[] };

#[test]
fn published_in_one_well_the_new_gate_opens_before_the_old_one_shuts() {
    let dam = Dam::new("", &[]);
    let found = dam.usual(N1_OPEN, N2_OPEN).unwrap();
    let gate = Moved::Gate;
    assert_eq!(moves(&found), [(gate(N2), 50.0), (gate(N2), 100.0), (gate(N1), 50.0), (gate(N1), 0.0)]);
    assert_eq!(times(&found), [0.0; 4]);
    assert_eq!(found.stops, 0);
    let last = found.steps.last().unwrap();
    assert_eq!(last.after, found.after);
    assert_eq!(last.setting.gates.len(), 1);
    // 1.5 v2/2g at 20 m3/s through 12 m2, the well filled with the water that enters
    assert_abs_diff_eq!(last.heads_m[0].1, 1.5 * (20.0_f64 / 12.0).powi(2) / (2.0 * 9.80665), epsilon = 0.05);
    let shut_first = Manner { shut_first: true, ..Manner::default() };
    let found = dam.order(N1_OPEN, N2_OPEN, shut_first).unwrap();
    // the last gate open cannot shut before another is
    assert_eq!(moves(&found), [(gate(N1), 50.0), (gate(N2), 50.0), (gate(N1), 0.0), (gate(N2), 100.0)]);
}

#[test]
fn published_bounds_of_the_release_make_two_outlets_take_turns() {
    let sluice = Set { direct: &[(SLUICE, 1.0, 30.0)], ..Set::default() };
    let low = Set { direct: &[(LOW, 1.0, 30.0)], ..Set::default() };
    let (s, l) = (Moved::Outlet(SLUICE), Moved::Outlet(LOW));
    let free = Dam::new("", &[]).usual(sluice, low).unwrap();
    assert_eq!(moves(&free), [(l, 30.0), (s, 0.0)]);
    let half = Dam::new("release: { min: 30, max: 45 }\n", &[]).usual(sluice, low).unwrap();
    assert_eq!(moves(&half), [(l, 15.0), (s, 15.0), (l, 30.0), (s, 0.0)]);
    let max = Dam::new("release: { min: 20, max: 30 }\n", &[]).usual(sluice, low).unwrap();
    let turns = [(s, 22.5), (l, 7.5), (s, 15.0), (l, 15.0), (s, 7.5), (l, 22.5), (s, 0.0), (l, 30.0)];
    assert_eq!(moves(&max), turns);
    // parts of a quarter are too coarse for this one
    let near = Dam::new("release: { min: 28, max: 30 }\n", &[]).usual(sluice, low).unwrap();
    assert_eq!(near.steps.len(), 32);
    assert_eq!(moves(&near)[..2], [(s, 28.125), (l, 1.875)]);
}

#[test]
fn published_a_gate_that_may_not_move_under_flow_gets_its_stop() {
    let still = (
        "positions: [0, 50, 100] }\n  - { name: N2",
        "positions: [0, 50, 100], moves_under_flow: false }\n  - { name: N2",
    );
    let beside = [(SLUICE, 1.0, 10.0)];
    let (now, wanted) = (Set { direct: &beside, ..N1_OPEN }, Set { direct: &beside, ..N2_OPEN });
    let found = Dam::new("release: { min: 10 }\n", &[still]).usual(now, wanted).unwrap();
    let (gate, north) = (Moved::Gate, Moved::Well(NORTH));
    let all =
        [(north, 0.0), (gate(N2), 50.0), (gate(N2), 100.0), (gate(N1), 50.0), (gate(N1), 0.0), (north, 20.0)];
    let mut told = moves(&found);
    // N2 may move under flow, so it opens before the stop
    assert_eq!(told[..3], [(gate(N2), 50.0), (gate(N2), 100.0), (north, 0.0)]);
    told.sort_by_key(|m| m.0);
    let mut all = all.to_vec();
    all.sort_by_key(|m| m.0);
    assert_eq!(told, all);
    assert_eq!(
        found.steps.iter().map(|s| s.stop).collect::<Vec<_>>(),
        [false, false, true, false, false, false]
    );
    assert_eq!(found.stops, 1);
    // nobody else keeps the least release
    let dam = Dam::new("release: { min: 11 }\n", &[still]);
    let Err(NoOrder::Missing(stuck)) = dam.usual(now, wanted) else { panic!("an order of none") };
    assert_eq!((stuck.check.rule, stuck.moved), (Rule::ReleaseMin, north));
    let words = NoOrder::Missing(stuck).words(&dam.site);
    assert!(words.starts_with("no order found: step 3, `North` from "), "{words}");
    assert!(words.contains("would break release.min: "), "{words}");
}

#[test]
fn published_an_outlet_that_only_its_flow_moves_is_stopped_between_two_flows() {
    let still = (
        "flow: { max: 60 } }\n  - { name: Low",
        "flow: { max: 60 }, moves_under_flow: false }\n  - { name: Low",
    );
    let (from, to) = ([(LOW, 1.0, 10.0), (SLUICE, 1.0, 10.0)], [(LOW, 1.0, 10.0), (SLUICE, 1.0, 30.0)]);
    let (now, wanted) = (Set { direct: &from, ..Set::default() }, Set { direct: &to, ..Set::default() });
    let found = Dam::new("", &[still]).usual(now, wanted).unwrap();
    assert_eq!(moves(&found), [(Moved::Outlet(SLUICE), 0.0), (Moved::Outlet(SLUICE), 30.0)]);
    assert_eq!((found.stops, found.steps[0].stop), (1, true));
}

#[test]
fn published_a_well_of_one_open_gate_stops_to_change_it() {
    let dam = Dam::new("", &[("conduit: 2", "conduit: 2, max_open: 1")]);
    let found = dam.usual(N1_OPEN, N2_OPEN).unwrap();
    assert_eq!(found.stops, 1);
    assert_eq!(moves(&found)[0], (Moved::Well(NORTH), 0.0));
    assert_eq!(*moves(&found).last().unwrap(), (Moved::Well(NORTH), 20.0));
}

#[test]
fn published_half_moved_gates_keep_limits_that_their_positions_keep() {
    let cone = |opening, flow| [(CONE, opening, flow)];
    let dam = Dam::new(
        "",
        &[(
            "width: 2, positions: [0, 50, 100] }",
            "width: 2, positions: [0, 50, 100], avoid: [ { open: [20, 40], reason: vibration } ] }",
        )],
    );
    // Cd A sqrt(2 g h) through one metre of it, half open
    let half = 0.6 * 2.0 * (2.0 * 9.80665 * (60.0 - 11.5_f64)).sqrt();
    let (shut, open) = (Set { direct: &[(SLUICE, 1.0, 5.0)], ..Set::default() }, cone(0.5, half));
    let both = [(SLUICE, 1.0, 5.0), open[0]];
    let wanted = Set { direct: &both, ..Set::default() };
    let Err(NoOrder::Missing(stuck)) = dam.usual(shut, wanted) else { panic!("an order of none") };
    assert_eq!((stuck.check.rule, stuck.check.of), (Rule::AvoidOpening, Of::Outlet(CONE)));
    assert_abs_diff_eq!(stuck.check.found, 0.25);
    let words = NoOrder::Missing(stuck).words(&dam.site);
    assert!(words.contains("20 % to 40 % to be avoided (vibration)"), "{words}");
    let through = Manner { through_bands: true, ..Manner::default() };
    let found = dam.order(shut, wanted, through).unwrap();
    assert_eq!(found.steps.len(), 1);
    assert_eq!(found.steps[0].passes.iter().map(|c| c.rule).collect::<Vec<_>>(), [Rule::AvoidOpening]);
    // a gate on a well crosses its band while the well stands still
    let banded = (
        "positions: [0, 50, 100] }\n  - { name: Sluice",
        "positions: [0, 50, 100], avoid: [ { open: [60, 90] } ] }\n  - { name: Sluice",
    );
    let found = Dam::new("", &[banded]).usual(N1_OPEN, N2_OPEN).unwrap();
    assert_eq!(found.stops, 1);
}

#[test]
fn published_steps_wait_for_the_rates_of_change() {
    let flow = |q| [(SLUICE, 1.0, q)];
    let (from, to) = (flow(10.0), flow(30.0));
    let (now, wanted) = (Set { direct: &from, ..Set::default() }, Set { direct: &to, ..Set::default() });
    let by_hour = |rate: &str| Dam::new(&format!("limits: {{ {rate} }}\n"), &[]).usual(now, wanted).unwrap();
    let found = by_hour("max_flow_change_per_hour: 5, change_hours: 2");
    assert_eq!(times(&found), [0.0, 60.0, 120.0, 180.0]);
    assert_eq!(found.over_hours, Some(1.0));
    let found = by_hour("max_flow_change_per_hour: 10, change_hours: 2");
    assert_eq!(
        (moves(&found), times(&found)),
        (vec![(Moved::Outlet(SLUICE), 20.0), (Moved::Outlet(SLUICE), 30.0)], vec![0.0, 60.0])
    );
    assert_eq!(found.over_hours, None);
    let found = by_hour("max_flow_change_per_hour: 10, max_flow_change_per_day: 10");
    assert_eq!(times(&found), [0.0, 1440.0]);
}

#[test]
fn published_a_position_that_breaks_a_rate_by_itself_is_impossible() {
    let dam = Dam::new("release: { min: 5 }\nlimits: { max_temperature_change_per_hour: 0.5 }\n", &[]);
    let Err(NoOrder::Impossible(stuck)) = dam.usual(N1_OPEN, N2_OPEN) else { panic!("not impossible") };
    assert_eq!(stuck.check.rule, Rule::TemperatureChangePerHour);
    assert!(stuck.check.found > 0.5 && stuck.check.room < 0.0);
    let words = NoOrder::Impossible(stuck).words(&dam.site);
    assert!(words.starts_with("impossible: step 2, `N1` from 100 % to 50 %, would break "), "{words}");
    assert!(words.ends_with("allowed in an hour, however it is split"), "{words}");
}

#[test]
fn published_an_outlet_starts_at_its_least_flow_at_once() {
    let least = ("flow: { max: 60 } }\n  - { name: Low", "flow: { min: 8, max: 60 } }\n  - { name: Low");
    let (from, to) = ([(LOW, 1.0, 10.0)], [(LOW, 1.0, 10.0), (SLUICE, 1.0, 20.0)]);
    let (now, wanted) = (Set { direct: &from, ..Set::default() }, Set { direct: &to, ..Set::default() });
    let paced = |rate: f64| Dam::new(&format!("limits: {{ max_flow_change_per_hour: {rate} }}\n"), &[least]);
    let found = paced(8.0).usual(now, wanted).unwrap();
    assert_abs_diff_eq!(stands(&found.steps[0]), 8.0);
    assert_eq!(found.steps[0].passes.iter().map(|c| c.rule).collect::<Vec<_>>(), [Rule::FlowMin]);
    let Err(NoOrder::Impossible(stuck)) = paced(7.9).usual(now, wanted) else { panic!("not impossible") };
    assert_eq!((stuck.check.rule, stuck.check.found), (Rule::FlowChangePerHour, 8.0));
}

#[test]
fn published_what_now_misses_may_stay_and_what_is_wanted_may_miss_nothing() {
    let flow = |q| [(SLUICE, 1.0, q)];
    let (little, more, much) = (flow(4.0), flow(20.0), flow(50.0));
    let set = |direct| Set { direct, ..Set::default() };
    let dam = Dam::new("release: { min: 10, max: 40 }\n", &[]);
    let found = dam.usual(set(&little), set(&more)).unwrap();
    assert_eq!(found.missed_now.iter().map(|c| c.rule).collect::<Vec<_>>(), [Rule::ReleaseMin]);
    assert_eq!(found.steps.len(), 1);
    let refused = dam.usual(set(&more), set(&much)).unwrap_err();
    assert!(matches!(&refused, NoOrder::Wanted(checks) if checks[0].rule == Rule::ReleaseMax));
    let words = refused.words(&dam.site);
    assert!(words.starts_with("no order: the setting wanted itself misses release.max: "), "{words}");
    // with nothing to move there is nothing to do
    assert_eq!(dam.usual(set(&more), set(&more)).unwrap().steps, []);
}

#[test]
fn published_too_many_states_is_no_answer() {
    let dam = Dam::new("", &[]);
    let few = Manner { most_states: 3, ..Manner::default() };
    let unsettled = dam.order(N1_OPEN, N2_OPEN, few).unwrap_err();
    assert!(matches!(unsettled, NoOrder::Unsettled { .. }));
    assert!(unsettled.words(&dam.site).starts_with("not settled: "));
}
