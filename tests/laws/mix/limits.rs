//! Limits in the warnings and what is listed as not checked.

use gatemix::mix::Mix;
use gatemix::site::{Raw, RawOutlet, RawWell};

use super::sites::{Case, basin, gate, port};
use crate::columns::worked;

/// Given by no site here: these stand at the end of every list.
const NEVER: [&str; 8] = [
    "max_flow_change_per_hour",
    "max_flow_change_per_day",
    "max_drawdown_per_day",
    "max_temperature_change_per_hour",
    "max_temperature_change_per_day",
    "solids_max",
    "max_moves",
    "max_crew_hours",
];

/// A site that gives every limit, with a setting that touches several and breaks none: both gates of the well at
/// 10 m3/s, the sluice at 5; 25 in all.
fn kept() -> Case {
    let mut raw = basin(&worked());
    raw.wells = vec![RawWell {
        name: Some("Shaft".into()),
        conduit_m: Some(2.0),
        max_open: Some(2.0),
        max_head_loss_m: Some(3.0),
        max_flow_m3s: Some(20.0),
        ..RawWell::default()
    }];
    let limited = |name: &str, centre_m: f64, well: Option<&str>| RawOutlet {
        well: well.map(str::to_owned),
        min_submergence_m: Some(9.0),
        flow_min_m3s: Some(5.0),
        flow_max_m3s: Some(40.0),
        ..port(name, centre_m, 2.0, 3.0)
    };
    raw.outlets = vec![
        // the top of its opening stands at 51 m: exactly the 9 m it asks for
        limited("Upper", 50.0, Some("Shaft")),
        limited("Lower", 30.0, Some("Shaft")),
        limited("Sluice", 8.0, None),
    ];
    raw.release_min_m3s = Some(25.0);
    raw.release_max_m3s = Some(25.0);
    Case { raw, water: worked(), gates: vec![gate(0, 10.0), gate(1, 10.0), gate(2, 5.0)] }
}

fn mix(change: &dyn Fn(&mut Case)) -> Mix {
    let mut case = kept();
    change(&mut case);
    case.ready().unwrap().judged()
}

fn broken(mix: &Mix) -> Vec<&str> {
    mix.warnings.iter().filter(|w| w.kind == "limit").map(|w| w.words.as_str()).collect()
}

type Change = (&'static str, fn(&mut Case));

#[test]
fn scenario_limits_met_exactly_are_not_broken() {
    let mix = mix(&|_| {});
    assert_eq!(broken(&mix), [""; 0]);
    let told: Vec<&str> = mix.not_checked.iter().map(String::as_str).collect();
    let open = [
        "pool_window of Lower, Sluice, Upper",
        "moves_under_flow of Lower, Sluice, Upper",
        "max_entrance_velocity of Lower, Sluice, Upper",
        // given, but a setting alone does not tell the head
        "max_head_loss of Shaft",
    ];
    assert_eq!(told, [&open[..], &NEVER[..]].concat());
}

#[test]
fn scenario_each_broken_limit_is_said_once_by_name() {
    let changes: [Change; 7] = [
        ("min_submergence of `Upper`", |c| c.raw.outlets[0].min_submergence_m = Some(9.01)),
        ("flow.min of `Sluice`", |c| c.raw.outlets[2].flow_min_m3s = Some(5.01)),
        ("flow.min of `Lower`", |c| c.raw.outlets[1].flow_min_m3s = Some(10.01)),
        ("max_flow of well `Shaft`", |c| c.raw.wells[0].max_flow_m3s = Some(19.99)),
        ("max_open of well `Shaft`", |c| c.raw.wells[0].max_open = Some(1.0)),
        ("release.min", |c| {
            c.raw.release_min_m3s = Some(25.01);
            c.raw.release_max_m3s = Some(30.0);
        }),
        ("release.max", |c| {
            c.raw.release_min_m3s = Some(20.0);
            c.raw.release_max_m3s = Some(24.99);
        }),
    ];
    for (name, change) in changes {
        let mix = mix(&change);
        let words = broken(&mix);
        assert!(words.len() == 1 && words[0].starts_with(name), "{name}: {words:?}");
    }
    let all = mix(&|case| {
        for (_, change) in changes {
            change(case);
        }
    });
    assert_eq!(broken(&all).len(), 6, "release.min is widened again by the last change");
}

/// A gate with less of its height open has more water above it.
#[test]
fn scenario_submergence_is_that_of_the_open_part() {
    let deeper = |case: &mut Case| {
        case.raw.outlets[0].min_submergence_m = Some(10.0);
        case.gates[0].opening = 0.5;
    };
    // half of 2 m from the sill at 49 m: the top stands at 50 m, 10 m under
    assert_eq!(broken(&mix(&deeper)), [""; 0]);
}

#[test]
fn scenario_what_nobody_gave_is_listed_as_not_checked() {
    let absent: [Change; 6] = [
        ("min_submergence of Upper", |c| c.raw.outlets[0].min_submergence_m = None),
        ("flow.max of Lower", |c| c.raw.outlets[1].flow_max_m3s = None),
        ("max_flow of Shaft", |c| c.raw.wells[0].max_flow_m3s = None),
        ("max_open of Shaft", |c| c.raw.wells[0].max_open = None),
        ("release.min", |c| c.raw.release_min_m3s = None),
        ("release.max", |c| c.raw.release_max_m3s = None),
    ];
    let before = mix(&|_| {}).not_checked;
    for (name, change) in absent {
        let mut told = mix(&change).not_checked;
        let at = told.iter().position(|n| n == name);
        told.remove(at.unwrap_or_else(|| panic!("{name} is missing from {told:?}")));
        assert_eq!(told, before, "beside {name}");
    }
}

/// Only what the setting uses is spoken of.
#[test]
fn scenario_limits_of_shut_gates_are_not_spoken_of() {
    let bare = |case: &mut Case| {
        let Raw { outlets, wells, .. } = &mut case.raw;
        outlets[0].min_submergence_m = Some(30.0);
        (outlets[1].flow_max_m3s, wells[0].max_open) = (None, None);
        case.gates = vec![gate(2, 25.0)];
    };
    let mix = mix(&bare);
    assert_eq!(broken(&mix), [""; 0]);
    let open = ["pool_window of Sluice", "moves_under_flow of Sluice", "max_entrance_velocity of Sluice"];
    assert_eq!(mix.not_checked, [&open[..], &NEVER[..]].concat());
}
