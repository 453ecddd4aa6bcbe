//! Every limit of a site: met exactly it is kept, and missed it is missed alone, by the room that a hand computes.

use std::collections::BTreeSet;

use approx::assert_relative_eq;
use gatemix::mix::limits::{Before, Check, Of, Rule, change, head};
use gatemix::mix::{Gate, Mix, Setting};
use gatemix::site::{
    Crew, Position, RawAvoid, RawLimits, RawOutage, RawOutlet, RawReserved, RawShare, RawUndrawn, RawWell,
    Site,
};
use gatemix::units::{System, in_system};

use super::sites::{Case, basin, gate, port};
use crate::columns::worked;

/// What a case is judged from, beside the setting: the head of the well and what leaves the dam now.
struct Tried {
    case: Case,
    head_m: f64,
    flow_now_m3s: f64,
    colder_by_c: f64,
    now: Setting,
}

const UPPER: usize = 0;
const LOWER: usize = 1;
const SLUICE: usize = 2;

/// Every limit there is, each met exactly or nearly: gates of 2 by 3 m at 50, 30 and 8 m under 60 m of water give
/// 10, 10 and 5 m3/s; one fifth of the 25 comes through the sluice.
fn kept() -> Tried {
    let mut raw = basin(&worked());
    raw.wells = vec![RawWell {
        name: Some("Shaft".into()),
        conduit_m: Some(2.0),
        max_open: Some(2.0),
        max_head_loss_m: Some(3.0),
        min_flow_m3s: Some(20.0),
        max_flow_m3s: Some(20.0),
        ..RawWell::default()
    }];
    let limited = |name: &str, centre_m: f64, flow: (f64, f64), well: Option<&str>| RawOutlet {
        well: well.map(str::to_owned),
        flow_min_m3s: Some(flow.0),
        flow_max_m3s: Some(flow.1),
        crew: Crew { hours: 3.0, lead_days: 7.0, cost: 1.5 },
        ..port(name, centre_m, 2.0, 3.0)
    };
    raw.outlets = vec![
        limited("Upper", 50.0, (10.0, 10.0), Some("Shaft")),
        limited("Lower", 30.0, (10.0, 10.0), Some("Shaft")),
        limited("Sluice", 8.0, (5.0, 5.0), None),
    ];
    raw.outlets[UPPER].positions = [("50", 0.5), ("100", 1.0)]
        .map(|(name, opening)| Position { name: name.into(), opening, crest_m: None })
        .into();
    raw.outlets[UPPER].min_submergence_m = Some(9.0);
    raw.outlets[UPPER].pool_window_m = Some((50.0, 60.0));
    raw.outlets[UPPER].max_entrance_m_s = Some(10.0 / 6.0);
    let avoid = |openings, flows_m3s| RawAvoid { openings, flows_m3s, reason: "vibration".into() };
    raw.outlets[LOWER].avoid = vec![avoid(Some((0.2, 1.0)), None)];
    raw.outlets[SLUICE].avoid = vec![avoid(None, Some((5.0, 8.0)))];
    raw.outlets[SLUICE].moves_under_flow = Some(false);
    (raw.release_min_m3s, raw.release_max_m3s, raw.inflow_m3s) = (Some(25.0), Some(25.0), Some(25.0));
    let mut water = worked();
    water.samples.iter_mut().for_each(|s| s.suspended_mg_l = 30.0);
    raw.limits = RawLimits {
        outages: vec![outage("Upper", "2025-07-15", None), outage("Lower", "2025-07-01", Some("2025-07-13"))],
        shares: vec![RawShare {
            name: Some("tower".into()),
            outlets: vec!["Upper".into(), "Lower".into()],
            min: Some(0.8),
            max: Some(0.8),
        }],
        reserved: vec![RawReserved {
            outlet: Some("Sluice".into()),
            flow_m3s: Some(5.0),
            reason: "hatchery".into(),
        }],
        flow_change_m3s_per_hour: Some(5.0),
        flow_change_m3s_per_day: Some(10.0),
        temperature_change_c_per_hour: Some(1.0),
        temperature_change_c_per_day: Some(2.0),
        change_hours: Some(2.0),
        drawdown_m_per_day: Some(0.0),
        solids_max_mg_l: Some(30.0),
        max_moves: Some(2),
        max_crew_hours: Some(6.0),
        ..RawLimits::default()
    };
    let gates = vec![gate(UPPER, 10.0), gate(LOWER, 10.0), gate(SLUICE, 5.0)];
    let mut tried = Tried {
        case: Case { raw, water, gates },
        head_m: 3.0,
        flow_now_m3s: 15.0,
        colder_by_c: 2.0,
        // the sluice's flow moves by less than its tolerance
        now: Setting::of(vec![Gate { opening: 0.5, ..gate(UPPER, 10.0) }, gate(SLUICE, 5.02)]),
    };
    // the warm layer begins where the zone of the upper gate ends
    let upper_m = tried.mix().1.levels[2].zone.unwrap().upper.limit_m;
    tried.case.raw.limits.undrawn = vec![RawUndrawn {
        from_m: Some(upper_m),
        to_m: Some(60.0),
        reason: "scum".into(),
        ..RawUndrawn::default()
    }];
    tried
}

fn outage(outlet: &str, from: &str, to: Option<&str>) -> RawOutage {
    RawOutage {
        outlet: Some(outlet.into()),
        from: Some(from.into()),
        to: to.map(str::to_owned),
        reason: "trash rack".into(),
    }
}

impl Tried {
    fn mix(&self) -> (Site, Mix) {
        let ready = self.case.ready().unwrap();
        let mut mix = ready.judged();
        let mut more = Vec::new();
        head(&ready.site, 0, self.head_m, &mut more);
        let before = Before {
            flow_m3s: Some(self.flow_now_m3s),
            temperature_c: Some(mix.release.temperature_c - self.colder_by_c),
        };
        change(&ready.site, &self.now, before, &ready.setting, &mix.release, &mut more);
        mix.add_limits(&ready.site, &ready.profile.column, &ready.setting, more);
        (ready.site, mix)
    }
}

type Miss = (Rule, fn(&mut Tried), Of, f64, &'static str);

/// What is changed, what it then breaks, by how much, and words it is told in.
const MISSES: [Miss; 28] = [
    (
        Rule::Outage,
        |t| t.case.raw.limits.outages.push(outage("Upper", "2025-07-01", Some("2025-07-20"))),
        Of::Outlet(UPPER),
        // seven days with this one
        -7.0,
        "outage of `Upper`: out of use for 7 days (trash rack)",
    ),
    (
        Rule::PoolWindow,
        |t| t.case.raw.outlets[UPPER].pool_window_m = Some((50.0, 59.0)),
        Of::Outlet(UPPER),
        -1.0,
        "pool_window of `Upper`: the pool at 60.00 m, 59.00 m the highest it may be used at",
    ),
    (
        Rule::MinSubmergence,
        // the top of its opening stands at 51 m
        |t| t.case.raw.outlets[UPPER].min_submergence_m = Some(9.5),
        Of::Outlet(UPPER),
        -0.5,
        "min_submergence of `Upper`: 9.00 m of water above it, 9.50 m required",
    ),
    (
        Rule::AvoidOpening,
        |t| t.case.gates[1].opening = 0.9,
        Of::Outlet(LOWER),
        -0.1,
        "avoid.open of `Lower`: 90 % open, 20 % to 100 % to be avoided (vibration)",
    ),
    (
        Rule::AvoidFlow,
        |t| t.case.raw.outlets[SLUICE].avoid[0].flows_m3s = Some((4.0, 8.0)),
        Of::Outlet(SLUICE),
        -1.0,
        "avoid.flow of `Sluice`: 5.00 m3/s set, 4.00 m3/s to 8.00 m3/s to be avoided (vibration)",
    ),
    (
        Rule::MovesUnderFlow,
        |t| t.case.raw.outlets[LOWER].moves_under_flow = Some(false),
        Of::Outlet(LOWER),
        // its well passes 10 before and 20 after
        -10.0,
        "moves_under_flow of `Lower`: it moves while 10.00 m3/s pass, none allowed",
    ),
    (
        Rule::FlowMin,
        |t| {
            t.case.raw.outlets[SLUICE].flow_min_m3s = Some(5.5);
            t.case.raw.outlets[SLUICE].flow_max_m3s = Some(6.0);
        },
        Of::Outlet(SLUICE),
        -0.5,
        "flow.min of `Sluice`: 5.00 m3/s set, 5.50 m3/s required",
    ),
    (
        Rule::FlowMax,
        |t| {
            t.case.raw.outlets[LOWER].flow_min_m3s = None;
            t.case.raw.outlets[LOWER].flow_max_m3s = Some(9.5);
        },
        Of::Outlet(LOWER),
        -0.5,
        "flow.max of `Lower`: 10.00 m3/s set, 9.50 m3/s allowed",
    ),
    (
        Rule::Capacity,
        |t| {
            t.case.raw.outlets[SLUICE].flow_max_m3s = None;
            t.case.raw.outlets[SLUICE].discharge = Some(0.01);
        },
        Of::Outlet(SLUICE),
        // 0.01 x 6 m2 x sqrt(2 g 52 m) = 1.91615
        -3.083_85,
        "capacity of `Sluice`: 5.00 m3/s set, 1.92 m3/s at most under this pool",
    ),
    (
        Rule::MaxOpen,
        |t| t.case.raw.wells[0].max_open = Some(1.0),
        Of::Well(0),
        -1.0,
        "max_open of well `Shaft`: 2 gates open, 1 allowed",
    ),
    (
        Rule::WellMinFlow,
        |t| (t.case.raw.wells[0].min_flow_m3s, t.case.raw.wells[0].max_flow_m3s) = (Some(20.5), None),
        Of::Well(0),
        -0.5,
        "min_flow of well `Shaft`: 20.00 m3/s set, 20.50 m3/s required",
    ),
    (
        Rule::WellMaxFlow,
        |t| (t.case.raw.wells[0].min_flow_m3s, t.case.raw.wells[0].max_flow_m3s) = (None, Some(19.5)),
        Of::Well(0),
        -0.5,
        "max_flow of well `Shaft`: 20.00 m3/s set, 19.50 m3/s allowed",
    ),
    (
        Rule::MaxHeadLoss,
        |t| t.head_m = 3.2,
        Of::Well(0),
        -0.2,
        "max_head_loss of well `Shaft`: 3.20 m of head, 3.00 m allowed",
    ),
    (
        Rule::ReleaseMin,
        |t| (t.case.raw.release_min_m3s, t.case.raw.release_max_m3s) = (Some(25.5), None),
        Of::Whole,
        -0.5,
        "release.min: 25.00 m3/s in total, 25.50 m3/s required",
    ),
    (
        Rule::ReleaseMax,
        |t| (t.case.raw.release_min_m3s, t.case.raw.release_max_m3s) = (None, Some(24.5)),
        Of::Whole,
        -0.5,
        "release.max: 25.00 m3/s in total, 24.50 m3/s allowed",
    ),
    (
        Rule::FlowChangePerHour,
        |t| t.case.raw.limits.flow_change_m3s_per_hour = Some(4.0),
        Of::Whole,
        // from 15 to 25 m3/s in two hours
        -2.0,
        "max_flow_change_per_hour: a change of 10.00 m3/s, 8.00 m3/s allowed (made in 2 hours)",
    ),
    (
        Rule::FlowChangePerDay,
        |t| t.case.raw.limits.flow_change_m3s_per_day = Some(9.0),
        Of::Whole,
        -1.0,
        "max_flow_change_per_day: a change of 10.00 m3/s, 9.00 m3/s allowed (made in 2 hours)",
    ),
    (
        Rule::Drawdown,
        |t| t.case.raw.inflow_m3s = Some(24.0),
        Of::Whole,
        // 86400 m3 from 1e5 + 1.9e6 x 60/62 = 1.938710e6 m2
        -0.044_566,
        "max_drawdown_per_day: the pool falls 0.04 m in a day, 0.00 m allowed",
    ),
    (
        Rule::Reserved,
        |t| {
            t.case.raw.outlets[SLUICE].flow_max_m3s = Some(6.0);
            t.case.raw.limits.reserved[0].flow_m3s = Some(5.5);
        },
        Of::Outlet(SLUICE),
        -0.5,
        "reserved of `Sluice`: 5.00 m3/s given, 5.50 m3/s required (hatchery)",
    ),
    (
        Rule::EntranceVelocity,
        |t| t.case.raw.outlets[UPPER].max_entrance_m_s = Some(1.5),
        Of::Outlet(UPPER),
        1.5 - 10.0 / 6.0,
        "max_entrance_velocity of `Upper`: 1.67 m/s through its opening, 1.50 m/s allowed",
    ),
    (
        Rule::Undrawn,
        |t| {
            let layer = &mut t.case.raw.limits.undrawn[0];
            layer.from_m = layer.from_m.map(|from| from - 1.0);
        },
        Of::Outlet(UPPER),
        -1.0,
        "undrawn of `Upper`: its zone reaches 1.00 m into the water between ",
    ),
    (
        Rule::TemperatureChangePerHour,
        |t| t.case.raw.limits.temperature_change_c_per_hour = Some(0.9),
        Of::Whole,
        -0.2,
        "max_temperature_change_per_hour: a change of 2.0 C, 1.8 C allowed (made in 2 hours)",
    ),
    (
        Rule::TemperatureChangePerDay,
        |t| t.case.raw.limits.temperature_change_c_per_day = Some(1.5),
        Of::Whole,
        -0.5,
        "max_temperature_change_per_day: a change of 2.0 C, 1.5 C allowed (made in 2 hours)",
    ),
    (
        Rule::SolidsMax,
        |t| t.case.raw.limits.solids_max_mg_l = Some(29.0),
        Of::Whole,
        -1.0,
        "solids_max: 30.0 mg/L, 29.0 mg/L allowed",
    ),
    (
        Rule::ShareMin,
        |t| (t.case.raw.limits.shares[0].min, t.case.raw.limits.shares[0].max) = (Some(0.85), None),
        Of::Share(0),
        -0.05,
        "share.min of `tower`: 80 % of the release, 85 % required",
    ),
    (
        Rule::ShareMax,
        |t| (t.case.raw.limits.shares[0].min, t.case.raw.limits.shares[0].max) = (None, Some(0.75)),
        Of::Share(0),
        -0.05,
        "share.max of `tower`: 80 % of the release, 75 % allowed",
    ),
    (
        Rule::MaxMoves,
        |t| t.case.raw.limits.max_moves = Some(1),
        Of::Whole,
        -1.0,
        "max_moves: 2 gates move, 1 allowed",
    ),
    (
        Rule::MaxCrewHours,
        |t| t.case.raw.limits.max_crew_hours = Some(5.0),
        Of::Whole,
        -1.0,
        "max_crew_hours: 6 hours, 5 hours allowed",
    ),
];

#[test]
fn scenario_every_limit_met_exactly_is_kept_and_checked() {
    let (_, mix) = kept().mix();
    let broken: Vec<_> = mix.limits.iter().filter(|c| c.broken()).collect();
    assert!(broken.is_empty(), "{broken:?}");
    assert!(!mix.warnings.iter().any(|w| w.kind == "limit"));
    let checked: BTreeSet<Rule> = mix.limits.iter().map(|c| c.rule).collect();
    // what is computed where it is not given is tried by the miss of its own
    let all: BTreeSet<Rule> = Rule::ALL.iter().copied().filter(|r| *r != Rule::Capacity).collect();
    assert_eq!(checked, all);
    let open = [
        "pool_window of Lower, Sluice",
        "min_submergence of Lower, Sluice",
        "moves_under_flow of Lower, Upper",
        "max_entrance_velocity of Lower, Sluice",
    ];
    assert_eq!(mix.not_checked, open);
}

#[test]
fn scenario_every_limit_missed_is_missed_alone_and_by_how_much() {
    for (rule, change, of, room, words) in MISSES {
        let mut tried = kept();
        change(&mut tried);
        let (site, mix) = tried.mix();
        let broken: Vec<&Check> = mix.limits.iter().filter(|c| c.broken()).collect();
        let [check] = broken[..] else { panic!("{rule:?}: {broken:?}") };
        assert_eq!((check.rule, check.of), (rule, of));
        assert_relative_eq!(check.room, room, max_relative = 2e-5);
        let told = in_system(&check.words(&site), System::Si);
        assert!(told.starts_with(words), "{told}");
        let warned: Vec<_> = mix.warnings.iter().filter(|w| w.kind == "limit").collect();
        assert_eq!(warned.len(), 1);
        assert!(warned[0].words == check.words(&site) && !warned[0].cure.is_empty());
    }
    let missed: BTreeSet<Rule> = MISSES.iter().map(|m| m.0).collect();
    assert_eq!(missed.len(), Rule::ALL.len() - 1, "a gate above the water has its own test");
}
