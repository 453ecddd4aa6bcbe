//! Single checks: what applies to whom, layers, moves, and how a figure is told.

use std::collections::BTreeSet;

use gatemix::mix::limits::{
    Check, Measure, Moves, Of, Rule, level, moves, not_checked, passing, still, well,
};
use gatemix::mix::{Drawn, Gate, Setting};
use gatemix::site::{Crew, Position, Raw, RawOutage, RawReserved, RawUndrawn, RawWell, Site};
use gatemix::units::{Dimension, System, in_system};
use gatemix::withdrawal::{End, Side, Zone};

use super::sites::{basin, checked, day, gate, port};
use crate::columns::{Pool, worked};

fn site(change: &dyn Fn(&mut Raw)) -> Site {
    let mut raw = basin(&worked());
    raw.outlets = vec![port("Gate", 50.0, 2.0, 3.0), port("Sluice", 8.0, 2.0, 2.0)];
    change(&mut raw);
    checked(&raw)
}

fn gathered(push: impl FnOnce(&mut Vec<Check>)) -> Vec<Check> {
    let mut out = Vec::new();
    push(&mut out);
    out
}

fn rules(checks: &[Check]) -> Vec<Rule> {
    checks.iter().map(|c| c.rule).collect()
}

#[test]
fn scenario_a_gate_level_with_the_water_is_dry() {
    let site = site(&|_| {});
    let at = |pool_m: f64| gathered(|out| still(&site, 0, 1.0, pool_m, day(), out))[0];
    for (pool_m, dry) in [(49.3, true), (50.0, true), (50.001, false), (53.0, false)] {
        let check = at(pool_m);
        assert_eq!((check.rule, check.broken()), (Rule::Dry, dry), "{pool_m}");
        assert!((check.room - (pool_m - 50.0)).abs() < 1e-9);
    }
    let told = in_system(&at(49.3).words(&site), System::Si);
    assert_eq!(told, "dry of `Gate`: its opening at 50.00 m, the pool at 49.30 m");
}

#[test]
fn scenario_a_pool_window_is_left_on_either_side() {
    let site = site(&|raw| raw.outlets[0].pool_window_m = Some((51.0, 61.0)));
    let room = |pool_m: f64| {
        let checks = gathered(|out| still(&site, 0, 1.0, pool_m, day(), out));
        let check = checks.iter().find(|c| c.rule == Rule::PoolWindow).unwrap();
        (check.room, check.bound, check.broken())
    };
    assert_eq!(room(50.5), (-0.5, 51.0, true));
    assert_eq!(room(52.0), (1.0, 51.0, false));
    assert_eq!(room(60.0), (1.0, 61.0, false));
    assert_eq!(room(62.0), (-1.0, 61.0, true));
}

#[test]
fn scenario_an_outage_counts_its_days() {
    let with = |from: &str, to: Option<&str>| {
        let site = site(&|raw| {
            raw.limits.outages = vec![RawOutage {
                outlet: Some("Gate".into()),
                from: Some(from.into()),
                to: to.map(str::to_owned),
                reason: String::new(),
            }];
        });
        let checks = gathered(|out| still(&site, 0, 1.0, 60.0, day(), out));
        let check = checks.into_iter().find(|c| c.rule == Rule::Outage);
        check.map(|c| (c.room, c.broken(), in_system(&c.words(&site), System::Si)))
    };
    let told = |words: &str| format!("outage of `Gate`: {words}");
    // the last day is one of them
    assert_eq!(with("2025-07-14", Some("2025-07-14")), Some((-1.0, true, told("out of use for 1 day"))));
    assert_eq!(with("2025-01-01", None), Some((f64::NEG_INFINITY, true, told("out of use, no end told"))));
    assert_eq!(with("2025-07-19", None), Some((5.0, false, told("out of use in 5 days"))));
    assert_eq!(with("2025-07-01", Some("2025-07-13")), None);
}

#[test]
fn scenario_a_shut_outlet_owes_its_reserved_flow_and_nothing_else() {
    let site = site(&|raw| {
        raw.outlets[1].flow_min_m3s = Some(2.0);
        raw.limits.reserved = vec![RawReserved {
            outlet: Some("Sluice".into()),
            flow_m3s: Some(1.0),
            reason: "hatchery".into(),
        }];
    });
    let shut = gathered(|out| passing(&site, 1, 0.0, 0.0, 60.0, out));
    assert_eq!(rules(&shut), [Rule::Reserved]);
    assert!(shut[0].broken() && (shut[0].room + 1.0).abs() < 1e-12);
    let told = in_system(&shut[0].words(&site), System::Us);
    assert_eq!(told, "reserved of `Sluice`: 0 cfs given, 35 cfs required (hatchery)");
    let open = gathered(|out| passing(&site, 1, 1.0, 3.0, 60.0, out));
    assert_eq!(rules(&open), [Rule::Reserved, Rule::FlowMin, Rule::Capacity]);
    assert!(!open.iter().any(Check::broken));
    // nothing is reserved from the other
    assert!(gathered(|out| passing(&site, 0, 0.0, 0.0, 60.0, out)).is_empty());
}

#[test]
fn scenario_a_well_that_carries_nothing_need_not_carry_its_least() {
    let site = site(&|raw| {
        raw.wells = vec![RawWell {
            name: Some("W".into()),
            conduit_m: Some(2.0),
            min_flow_m3s: Some(4.0),
            max_open: Some(1.0),
            ..RawWell::default()
        }];
        raw.outlets[0].well = Some("W".into());
    });
    assert_eq!(rules(&gathered(|out| well(&site, 0, 0, 0.0, None, out))), [Rule::MaxOpen]);
    let little = gathered(|out| well(&site, 0, 2, 3.0, None, out));
    let broken: Vec<(Rule, f64)> =
        little.iter().filter(|c| c.broken()).map(|c| (c.rule, c.margin())).collect();
    assert_eq!(broken, [(Rule::MaxOpen, -1.0), (Rule::WellMinFlow, -1.0)]);
}

/// A zone between two elevations, as far as layers see it.
fn zone(lower_m: f64, upper_m: f64) -> Zone {
    let side = |limit_m| Side { limit_m, end: End::Free, boundary_flow_m3s: None, free_weight: 1.0 };
    let middle_m = 0.5 * (lower_m + upper_m);
    Zone { lower: side(lower_m), upper: side(upper_m), peak_m: middle_m, centre_m: middle_m }
}

fn layered() -> Site {
    site(&|raw| {
        let layer = RawUndrawn::default;
        raw.limits.undrawn = vec![
            RawUndrawn { from_m: Some(0.0), to_m: Some(8.0), reason: "sulphide".into(), ..layer() },
            RawUndrawn { depths_m: Some((0.0, 1.5)), ..layer() },
            // 1 mg/L at the bed and 3 mg/L at 20 m: less than 2 up to 10 m
            RawUndrawn { oxygen_below_mg_l: Some(2.0), ..layer() },
            RawUndrawn { oxygen_below_mg_l: Some(0.5), ..layer() },
        ];
    })
}

#[test]
fn scenario_a_zone_is_held_against_every_layer_in_its_order() {
    let site = layered();
    let column = worked().column();
    let found = |lower_m: f64, upper_m: f64| {
        let checks = gathered(|out| level(&site, &column, &zone(lower_m, upper_m), Of::Outlet(1), out));
        let rooms: Vec<f64> = checks.iter().map(|c| (1e9 * c.room).round() / 1e9).collect();
        let words: Vec<String> = checks.iter().map(|c| in_system(&c.words(&site), System::Si)).collect();
        (rooms, words)
    };
    // 3 m, 0 m and 5 m of it lie in the layers; no water has less than 0.5 mg/L
    let (rooms, words) = found(5.0, 55.0);
    assert_eq!(rooms, [-3.0, 3.5, -5.0, f64::INFINITY]);
    assert_eq!(
        words,
        [
            "undrawn of `Sluice`: its zone reaches 3.00 m into the water between 0.00 m and 8.00 m (sulphide)",
            "undrawn of `Sluice`: its zone keeps 3.50 m from the water 0.00 m to 1.50 m below the surface",
            "undrawn of `Sluice`: its zone reaches 5.00 m into water with less than 2.0 mg/L of oxygen",
            "undrawn of `Sluice`: there is no water with less than 0.5 mg/L of oxygen",
        ]
    );
    assert_eq!(found(12.0, 59.0).0, [4.0, -0.5, 2.0, f64::INFINITY]);
    // just touching is no drawing
    assert_eq!(found(10.0, 58.5).0, [2.0, 0.0, 0.0, f64::INFINITY]);
}

#[test]
fn scenario_a_layer_told_by_oxygen_is_not_checked_where_none_is_measured() {
    let site = layered();
    let mut pool: Pool = worked();
    // readings reach from 20 m up, and a little below
    pool.oxygen.retain(|o| o.elevation_m >= 20.0);
    let setting = Setting::of(vec![gate(1, 5.0)]);
    let told = |lower_m: f64, pool: &Pool| {
        let column = pool.column();
        let setting = setting.clone();
        let level = gatemix::mix::levels(
            &site,
            &gatemix::mix::groups(&site),
            &setting,
            60.0,
            0.5,
            gatemix::withdrawal::CrestForm::Overflow,
        )
        .remove(0);
        let drawn = [Drawn { level, zone: Some(zone(lower_m, 40.0)), draw: None }];
        let list = not_checked(&site, &column, &setting, &drawn, &[]);
        list.into_iter().find(|entry| entry.starts_with("undrawn"))
    };
    let entry = Some("undrawn of Sluice (oxygen is not measured in the whole zone)".to_owned());
    assert_eq!(told(5.0, &pool), entry);
    assert_eq!(told(25.0, &pool), None);
    assert_eq!(told(5.0, &worked()), None);
}

#[test]
fn scenario_a_move_is_counted_with_its_crew() {
    let site = site(&|raw| {
        let crew = |hours, lead_days, cost| Crew { hours, lead_days, cost };
        (raw.outlets[0].crew, raw.outlets[1].crew) = (crew(3.0, 7.0, 2.0), crew(0.5, 1.0, 0.25));
        raw.outlets[0].positions = [0.0, 0.5, 1.0]
            .map(|opening| Position { name: format!("{opening}"), opening, crest_m: None })
            .into();
    });
    let half = |flow_m3s| Gate { opening: 0.5, ..gate(0, flow_m3s) };
    let moved = |now: Vec<Gate>, to: Vec<Gate>| {
        let mut out = Vec::new();
        let moves = moves(&site, &Setting::of(now), &Setting::of(to), &mut out);
        assert!(out.is_empty(), "nothing is said of moves under flow");
        (moves.count, moves.cost, moves.crew_hours, moves.lead_days)
    };
    let both = (2, 2.25, 3.5, 7.0);
    let (first, second, none) = ((1, 2.0, 3.0, 7.0), (1, 0.25, 0.5, 1.0), (0, 0.0, 0.0, 0.0));
    assert_eq!(moved(vec![], vec![half(5.0), gate(1, 5.0)]), both);
    assert_eq!(moved(vec![half(5.0), gate(1, 5.0)], vec![]), both);
    // a positioned gate moves with its opening, whatever its flow; shut is an opening of 0
    assert_eq!(moved(vec![half(5.0)], vec![half(9.0)]), none);
    assert_eq!(moved(vec![half(5.0)], vec![gate(0, 5.0)]), first);
    assert_eq!(moved(vec![half(0.0)], vec![half(5.0)]), first);
    // an outlet of any flow with its flow, from 0.5 % of the larger one
    assert_eq!(moved(vec![gate(1, 10.0)], vec![gate(1, 10.04)]), none);
    assert_eq!(moved(vec![gate(1, 10.0)], vec![gate(1, 10.06)]), second);
    assert_eq!(Moves::default().count, 0);
}

#[test]
fn scenario_gates_not_to_be_moved_under_flow() {
    let site = site(&|raw| raw.outlets.iter_mut().for_each(|o| o.moves_under_flow = Some(false)));
    let rooms = |now: Vec<Gate>, to: Vec<Gate>| {
        let checks = gathered(|out| _ = moves(&site, &Setting::of(now), &Setting::of(to), out));
        assert!(rules(&checks).iter().all(|r| *r == Rule::MovesUnderFlow));
        checks.iter().map(|c| c.room).collect::<Vec<f64>>()
    };
    // from nothing and to nothing is allowed, from one flow to another is not
    assert_eq!(rooms(vec![], vec![gate(0, 5.0), gate(1, 5.0)]), [0.0, 0.0]);
    assert_eq!(rooms(vec![gate(0, 5.0)], vec![]), [0.0, 0.0]);
    assert_eq!(rooms(vec![gate(0, 5.0), gate(1, 2.0)], vec![gate(0, 3.0), gate(1, 2.0)]), [-3.0, 0.0]);
}

#[test]
fn scenario_a_small_miss_does_not_read_as_none() {
    let site = site(&|raw| raw.outlets[0].flow_min_m3s = Some(10.0));
    let told = |flow: f64, system| {
        let checks = gathered(|out| passing(&site, 0, 1.0, flow, 60.0, out));
        in_system(&checks[0].words(&site), system)
    };
    assert_eq!(told(9.5, System::Si), "flow.min of `Gate`: 9.50 m3/s set, 10.00 m3/s required");
    assert_eq!(told(9.999, System::Si), "flow.min of `Gate`: 9.9990 m3/s set, 10.0000 m3/s required");
    assert_eq!(told(9.999, System::Us), "flow.min of `Gate`: 353.11 cfs set, 353.15 cfs required");
    assert_eq!(Rule::FlowMin.unit(), Measure::Quantity(Dimension::Flow));
    // a share is told and measured in percent
    let share = Check { rule: Rule::ShareMin, of: Of::Whole, item: 0, found: 0.4, bound: 0.5, room: -0.1 };
    assert!((share.margin() + 10.0).abs() < 1e-12 && Rule::ShareMin.unit().symbol() == "%");
}

/// A search lists rejections by rule, so rules must stand by group.
#[test]
fn law_rules_stand_by_group_with_names_of_their_own() {
    assert!(Rule::ALL.is_sorted_by_key(|r| (r.group(), *r)));
    let names: BTreeSet<&str> = Rule::ALL.iter().map(|r| r.name()).collect();
    assert_eq!(names.len(), Rule::ALL.len());
    assert!(Rule::ALL.iter().all(|r| !r.unit().symbol().is_empty() && !r.group().words().is_empty()));
}
