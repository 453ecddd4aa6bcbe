//! Each limit in a site where it, and only it, rejects mixes; the smallest miss by hand. The dam and its water are
//! invented.

use std::collections::BTreeSet;
use std::ops::ControlFlow;

use approx::assert_abs_diff_eq;
use chrono::NaiveDate;
use gatemix::files::site::site;
use gatemix::mix::limits::{Before, Of, Rule};
use gatemix::mix::{Asked, Gate, Setting, groups, resolve};
use gatemix::profile::{self, Profile};
use gatemix::rank::{Criterion, Question, Ranking, rank};
use gatemix::site::Site;
use gatemix::withdrawal::{Opening, Sink, zone};

const SITE: &str = r#"name: Reject Dam (invented)
units: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }
utc_offset: "+00:00"
place: { altitude: 100 }
pool: { bed: 0, full: 62, table: [[0, 1.0e5], [40, 5.0e6], [62, 9.0e6]] }
wells: [ { name: North, conduit: 2 } ]
outlets:
  - { name: N1, well: North, centre: 45, height: 3, width: 4, loss: 1.5, positions: [0, 50, 100] }
  - { name: N2, well: North, centre: 30, height: 3, width: 4, loss: 1.5, positions: [0, 50, 100] }
  - { name: Sluice, centre: 8, height: 2, width: 2 }
  - { name: Crest, kind: crest, gated: true, centre: 58, width: 40 }
"#;
const POOL_M: f64 = 60.0;
const FLOW_M3S: f64 = 40.0;
/// A quarter of the release: 10 m3/s.
const STEPS: usize = 4;

/// Elevation, temperature, oxygen, dissolved solids.
const WATER: [[f64; 4]; 8] = [
    [0.0, 6.0, 1.0, 300.0],
    [20.0, 6.5, 3.0, 250.0],
    [30.0, 8.0, 5.0, 220.0],
    [40.0, 11.0, 6.0, 200.0],
    [45.0, 15.0, 7.0, 150.0],
    [50.0, 20.0, 8.0, 100.0],
    [54.0, 24.0, 8.4, 100.0],
    [60.0, 24.0, 8.4, 100.0],
];

fn checked(text: &str) -> Site {
    let read = site(text, "site.yaml");
    read.site.unwrap_or_else(|| panic!("{:?}", read.problems))
}

fn water(site: &Site) -> Profile {
    let row = |(i, [z, t, o, s]): (usize, [f64; 4])| profile::RawRow {
        line: i + 1,
        elevation_m: Some(z),
        temperature_c: Some(t),
        oxygen_mg_l: Some(o),
        solids_mg_l: Some(s),
        ..profile::RawRow::default()
    };
    let raw = profile::Raw {
        file: "invented.csv".into(),
        taken: "2025-07-14T10:00:00Z".parse().ok(),
        pool_m: Some(POOL_M),
        rows: WATER.into_iter().enumerate().map(row).collect(),
    };
    Profile::build(&raw, site, None).0.unwrap()
}

/// N1 fully open, the well giving this much.
fn now(site: &Site, profile: &Profile, flow_m3s: f64) -> Setting {
    let asked = Asked { open: vec![(0, 1.0)], totals: vec![(0, flow_m3s)], ..Asked::default() };
    resolve(site, &profile.column, &groups(site), &asked, POOL_M)
}

/// The ranking of a site; with what the well gives now through N1, and the temperature of that, where a change counts.
fn ranked(site: &Site, from: Option<(f64, f64)>) -> Ranking {
    ranked_at(site, from, FLOW_M3S)
}

fn ranked_at(site: &Site, from: Option<(f64, f64)>, flow_m3s: f64) -> Ranking {
    let profile = water(site);
    let before = from.map(|(flow, _)| now(site, &profile, flow));
    let question = Question {
        site,
        profile: &profile,
        day: &NaiveDate::from_ymd_opt(2025, 7, 14).unwrap().into(),
        blocks: &[(1.0, flow_m3s)],
        now: before.as_ref(),
        before: Before { flow_m3s: from.map(|f| f.0), temperature_c: from.map(|f| f.1) },
        steps: STEPS,
        order: &Criterion::NAMES.map(|c| c.1),
        without: &[],
    };
    rank(&question, &|_| ControlFlow::Continue(())).unwrap()
}

/// A change of the site file (`>` lines are added at its end), what is released now, the rule that then rejects, what
/// it is of, and its smallest miss in its own unit.
type Case = (&'static [(&'static str, &'static str)], Option<(f64, f64)>, &'static str, &'static str, f64);

const CASES: &[Case] = &[
    (
        &[(
            ">",
            "limits: { outages: [ { outlet: N1, from: 2025-07-01, to: 2025-07-20, reason: painting } ] }",
        )],
        None,
        "outage",
        "N1",
        -7.0, // from the 14th to the 20th, both counted
    ),
    // half open from the sill at 59.5 its middle is at 60.25
    (&[("name: N1, well: North, centre: 45", "name: N1, well: North, centre: 61")], None, "dry", "N1", -0.25),
    (
        &[("name: N1, well: North,", "name: N1, well: North, pool_window: [61, 62],")],
        None,
        "pool_window",
        "N1",
        -1.0,
    ),
    // fully open its top is at 46.5, half open at 45
    (
        &[("name: N1, well: North,", "name: N1, well: North, min_submergence: 15,")],
        None,
        "min_submergence",
        "N1",
        -1.5,
    ),
    (
        &[(
            "name: N1, well: North,",
            "name: N1, well: North, avoid: [ { open: [40, 80], reason: shakes } ],",
        )],
        None,
        "avoid.open",
        "N1",
        -0.1,
    ),
    (
        &[("name: Sluice,", "name: Sluice, avoid: [ { flow: [5, 26], reason: rough } ],")],
        None,
        "avoid.flow",
        "Sluice",
        -5.0, // at 10 and 20 m3/s; 20 is 6 from the upper end
    ),
    (
        &[("name: N1, well: North,", "name: N1, well: North, moves_under_flow: false,")],
        Some((40.0, 15.0)),
        "moves_under_flow",
        "N1",
        -10.0, // the well gives 10 at least where it gives any
    ),
    (&[("name: Sluice,", "name: Sluice, flow: { min: 12 },")], None, "flow.min", "Sluice", -2.0),
    (&[("name: Sluice,", "name: Sluice, flow: { max: 25 },")], None, "flow.max", "Sluice", -5.0),
    // 0.6 x 1 m2 x sqrt(2 x 9.80665 x 52) = 19.16145
    (
        &[("centre: 8, height: 2, width: 2", "centre: 8, height: 1, width: 1")],
        None,
        "capacity",
        "Sluice",
        -0.838_55,
    ),
    (
        &[("name: Sluice,", "name: Sluice, max_entrance_velocity: 2,")],
        None,
        "max_entrance_velocity",
        "Sluice",
        -0.5,
    ),
    (
        &[(">", "limits: { reserved: [ { outlet: Sluice, flow: 10, reason: ladder } ] }")],
        None,
        "reserved",
        "Sluice",
        -10.0,
    ),
    (&[("conduit: 2", "conduit: 2, max_open: 1")], None, "max_open", "North", -1.0),
    (&[("conduit: 2", "conduit: 2, min_flow: 15")], None, "min_flow", "North", -5.0),
    (&[("conduit: 2", "conduit: 2, max_flow: 35")], None, "max_flow", "North", -5.0),
    (&[(">", "release: { min: 45 }")], None, "release.min", "", -5.0),
    (&[(">", "release: { max: 30 }")], None, "release.max", "", -10.0),
    (
        &[(">", "limits: { max_flow_change_per_hour: 5 }")],
        Some((20.0, 15.0)),
        "max_flow_change_per_hour",
        "",
        -15.0,
    ),
    (
        &[(">", "limits: { max_flow_change_per_day: 12 }")],
        Some((20.0, 15.0)),
        "max_flow_change_per_day",
        "",
        -8.0,
    ),
    (
        &[(">", "limits: { max_flow_change_per_hour: 5, change_hours: 3 }")],
        Some((20.0, 15.0)),
        "max_flow_change_per_hour",
        "",
        -5.0,
    ),
    // 40 x 86400 over an area of 5e6 + 4e6 x 20/22
    (
        &[(">", "inflow: 0\nlimits: { max_drawdown_per_day: 0.3 }")],
        None,
        "max_drawdown_per_day",
        "",
        -0.100_179,
    ),
    (
        &[(">", "limits: { shares: [ { name: low, outlets: [Sluice], min: 50 } ] }")],
        None,
        "share.min",
        "low",
        -0.25,
    ),
    (
        &[(">", "limits: { shares: [ { name: low, outlets: [Sluice], max: 50 } ] }")],
        None,
        "share.max",
        "low",
        -0.25,
    ),
    // N1 open now: one more gate of the well, or the sluice, is a second move where N1 moves too
    (&[(">", "limits: { max_moves: 1 }")], Some((40.0, 15.0)), "max_moves", "", -1.0),
    (
        &[
            ("name: N1, well: North,", "name: N1, well: North, crew: { hours: 3 },"),
            ("name: N2, well: North,", "name: N2, well: North, crew: { hours: 3 },"),
            (">", "limits: { max_crew_hours: 4 }"),
        ],
        Some((40.0, 15.0)),
        "max_crew_hours",
        "",
        -2.0,
    ),
];

fn changed(changes: &[(&str, &str)]) -> Site {
    let mut text = SITE.to_owned();
    for (from, to) in changes {
        if *from == ">" {
            text += to;
            text += "\n";
        } else {
            assert!(text.contains(from), "{from}");
            text = text.replace(from, to);
        }
    }
    checked(&text)
}

fn of_name(site: &Site, of: Of) -> String {
    match of {
        Of::Outlet(i) => site.outlets[i].name.clone(),
        Of::Well(i) => site.wells[i].name.clone(),
        Of::Share(i) => site.limits.shares[i].name.clone(),
        Of::Whole => String::new(),
    }
}

#[test]
fn scenario_without_limits_nothing_is_rejected() {
    let site = checked(SITE);
    for from in [None, Some((40.0, 15.0))] {
        let ranking = ranked(&site, from);
        assert!(ranking.rejected.is_empty(), "{:?}", ranking.rejected);
        // 8 states of the well: compositions of 4 into three parts, times 8 where the well has any
        assert_eq!(ranking.examined, 5 + 8 * 10);
        assert_eq!((ranking.judged, ranking.skipped, ranking.allowed), (85, 0, 85));
    }
}

#[test]
fn scenario_each_limit_and_only_it_rejects_by_its_margin() {
    for (changes, from, rule, of, room) in CASES {
        let site = changed(changes);
        let ranking = ranked(&site, *from);
        let found: Vec<(&str, String)> =
            ranking.rejected.iter().map(|r| (r.check.rule.name(), of_name(&site, r.check.of))).collect();
        assert_eq!(found, [(*rule, (*of).to_owned())], "{rule}");
        let rejected = &ranking.rejected[0];
        assert_abs_diff_eq!(rejected.check.room, *room, epsilon = 1e-4);
        assert!(rejected.count > 0 && rejected.count <= ranking.examined, "{rule}");
        // one limit alone: what it does not reject is allowed
        assert_eq!(ranking.allowed, ranking.examined - rejected.count, "{rule}");
        assert_eq!(ranking.examined, ranking.judged + ranking.skipped, "{rule}");
    }
}

/// Rules with a scenario of their own below.
const APART: [&str; 5] = [
    "max_head_loss",
    "undrawn",
    "solids_max",
    "max_temperature_change_per_hour",
    "max_temperature_change_per_day",
];

#[test]
fn scenario_no_rule_is_without_a_site_where_it_rejects() {
    let tried: BTreeSet<&str> = CASES.iter().map(|c| c.2).chain(APART).collect();
    let all: BTreeSet<&str> = Rule::ALL.iter().map(|r| r.name()).collect();
    assert_eq!(tried, all);
}

#[test]
fn scenario_head_rejects_by_the_loss_of_the_hardest_driven_gate() {
    // with a most flow given, no capacity is computed from that head
    let site = changed(&[
        ("conduit: 2", "conduit: 2, max_head_loss: 1"),
        ("well: North,", "well: North, flow: { max: 100 },"),
    ]);
    let ranking = ranked(&site, None);
    let [rejected] = &ranking.rejected[..] else { panic!("{:?}", ranking.rejected) };
    assert_eq!(
        (rejected.check.rule.name(), of_name(&site, rejected.check.of)),
        ("max_head_loss", "North".into())
    );
    // a half-open gate alone at 30 m3/s: 1.5 (30/6)^2/(2 x 9.80665) = 1.912 m, and millimetres of density
    assert_abs_diff_eq!(rejected.check.room, 1.0 - 1.912, epsilon = 0.03);
    // half open alone at 30 and at 40 m3/s, either gate: with one and with no step left for the other two outlets
    assert_eq!(rejected.count, 2 * (2 + 1));
}

#[test]
fn scenario_a_layer_not_to_be_drawn_rejects_by_its_overlap() {
    let site = changed(&[(">", "limits: { undrawn: [ { from: 0, to: 6, reason: sulphide } ] }")]);
    let ranking = ranked(&site, None);
    let profile = water(&site);
    let sink = Sink { centre_m: 8.0, flow_m3s: 10.0, opening: Opening::FACE };
    let lower_m = zone(&profile.column, &sink, 1.0).unwrap().lower.limit_m;
    let sluice: Vec<_> = ranking.rejected.iter().filter(|r| of_name(&site, r.check.of) == "Sluice").collect();
    assert_eq!(sluice.len(), 1, "{:?}", ranking.rejected);
    assert!(lower_m < 6.0);
    assert_abs_diff_eq!(sluice[0].check.room, lower_m - 6.0, epsilon = 1e-9);
    assert!(ranking.rejected.iter().all(|r| r.check.rule == Rule::Undrawn));
}

#[test]
fn scenario_limits_of_the_blend_reject_by_what_it_is() {
    // dissolved solids of the sluice's water are above 250 mg/L, of the surface 100
    let site = changed(&[(">", "limits: { solids_max: 250 }")]);
    let ranking = ranked(&site, None);
    let [rejected] = &ranking.rejected[..] else { panic!("{:?}", ranking.rejected) };
    assert_eq!(rejected.check.rule.name(), "solids_max");
    assert_abs_diff_eq!(rejected.check.found - rejected.check.bound, -rejected.check.room, epsilon = 1e-9);
    assert!(rejected.check.room < 0.0 && rejected.check.room > -50.0);
    for (key, rule) in [
        ("max_temperature_change_per_hour: 3", "max_temperature_change_per_hour"),
        ("max_temperature_change_per_day: 3", "max_temperature_change_per_day"),
    ] {
        let site = changed(&[(">", &format!("limits: {{ {key} }}"))]);
        let ranking = ranked(&site, Some((40.0, 15.0)));
        let [rejected] = &ranking.rejected[..] else { panic!("{:?}", ranking.rejected) };
        assert_eq!(rejected.check.rule.name(), rule);
        assert!(rejected.count > 0 && ranking.allowed > 0);
        let [coldest, warmest] = ranking.attainable_c.as_ref().unwrap();
        // 15 C is released now, so only 12 to 18 C are allowed, and some mix lies just outside
        assert!(coldest.value >= 12.0 && warmest.value <= 18.0, "{coldest:?} {warmest:?}");
        assert!(rejected.check.room < 0.0 && rejected.check.room > -1.0);
    }
}

#[test]
fn scenario_when_every_mix_is_rejected_nothing_is_ranked() {
    let site = changed(&[
        ("conduit: 2", "conduit: 2, max_flow: 5"),
        ("name: Sluice,", "name: Sluice, flow: { max: 6 },"),
        ("name: Crest,", "name: Crest, flow: { max: 7 },"),
    ]);
    let ranking = ranked(&site, None);
    assert_eq!((ranking.allowed, ranking.judged, ranking.mixes.len()), (0, 0, 0));
    assert_eq!(ranking.skipped, ranking.examined);
    assert!(ranking.attainable_c.is_none() && ranking.trade.is_empty());
    let misses: Vec<(String, f64)> =
        ranking.rejected.iter().map(|r| (of_name(&site, r.check.of), r.check.room)).collect();
    assert_eq!(misses, [("Sluice".into(), -4.0), ("Crest".into(), -3.0), ("North".into(), -5.0)]);
}

#[test]
fn scenario_what_spills_by_itself_is_in_every_mix() {
    let site = changed(&[("gated: true, ", "")]);
    // 1.84 x 40 x 2^1.5 = 208.2 m3/s spill whatever is asked
    let spilt_m3s = 1.84 * 40.0 * 2.0_f64.powf(1.5);
    let alone = ranked_at(&site, None, FLOW_M3S);
    assert_eq!((alone.examined, alone.allowed), (1, 1));
    assert_abs_diff_eq!(alone.mixes[0].asked[0].direct[0].flow_m3s, spilt_m3s, epsilon = 1e-9);
    let ranking = ranked_at(&site, None, spilt_m3s + FLOW_M3S);
    // two units share out the rest: the well in 8 states and the sluice
    assert_eq!((ranking.examined, ranking.allowed), (1 + 8 * 4, 1 + 8 * 4));
    for mix in &ranking.mixes {
        let crest: Vec<&Gate> =
            mix.asked[0].direct.iter().filter(|g| site.outlets[g.outlet].name == "Crest").collect();
        assert_eq!(crest.len(), 1);
        assert_abs_diff_eq!(crest[0].flow_m3s, spilt_m3s, epsilon = 1e-9);
    }
}
