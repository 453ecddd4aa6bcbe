//! Limits of a site file: one change and the one thing said of it, and what a sound file becomes.

use gatemix::files::site::site;
use gatemix::site::{Avoided, Bins, Crew, GenerationLost, Layer, SetNow};
use gatemix::units::Folder;

use super::site::{Case, SOUND};

/// Tried by the test of all errors of a site.
pub(super) const REFUSED: &[Case] = &[
    ("min_flow: 3", "min_flow: 99", "flow-order", "wells[0].min_flow", "is above max_flow"),
    ("min_flow: 3", "min_flow: -3", "negative", "wells[0].min_flow", "cannot be negative"),
    ("plan_area: 60", "plan_area: 0", "not-positive", "wells[0].plan_area", "above zero"),
    ("[50, 61]", "[61, 50]", "pool-window", "outlets[0].pool_window", "ends where it begins"),
    ("[50, 61]", "[150, 161]", "outside-pool", "outlets[0].pool_window", "outside the pool"),
    ("[50, 61]", "[50, 55, 61]", "pair", "outlets[0].pool_window", "two numbers"),
    ("open: [60, 90]", "reason: shakes", "avoid", "outlets[0].avoid[0]", "either openings or flows"),
    ("open: [60, 90]", "open: [60, 90], flow: [1, 2]", "avoid", "outlets[0].avoid[0]", "either"),
    ("open: [60, 90]", "open: [90, 60]", "avoid", "outlets[0].avoid[0].open", "ends where it begins"),
    ("open: [60, 90]", "open: [60, 190]", "avoid", "outlets[0].avoid[0].open", "cannot be set"),
    ("flow: [5, 12]", "flow: [-5, 12]", "avoid", "outlets[2].avoid[0].flow", "cannot be set"),
    ("velocity: 1.3", "velocity: 0", "not-positive", "outlets[0].max_entrance_velocity", "above zero"),
    ("velocity: 1.3", "velocity: 3 cfs", "quantity", "outlets[0].max_entrance_velocity", "unit of flow"),
    (
        "centre: 58",
        "centre: 58, max_entrance_velocity: 1",
        "shape",
        "outlets[3].max_entrance_velocity",
        "under water",
    ),
    ("under_flow: false", "under_flow: 3", "wrong-type", "outlets[0].moves_under_flow", "true or false"),
    ("hours: 3,", "hours: -3,", "negative", "outlets[0].crew.hours", "cannot be negative"),
    ("lead_days: 7", "lead_days: -7", "negative", "outlets[0].crew.lead_days", "cannot be negative"),
    ("cost: 1.5", "cost: -1", "negative", "outlets[0].crew.cost", "cannot be negative"),
    ("uncertain: true", "uncertain: maybe", "wrong-type", "outlets[0].uncertain", "true or false"),
    ("flow: 10, power", "flow: 0, power", "not-positive", "outlets[2].generation_lost.flow", "above zero"),
    ("power: 3.2", "power: -3", "negative", "outlets[2].generation_lost.power", "cannot be negative"),
    (", power: 3.2", "", "missing-key", "outlets[2].generation_lost.power", "power is missing"),
    ("wanted: 40", "wanted: 140", "release-wanted", "release.wanted", "outside release.min"),
    ("wanted: 40", "wanted: 14", "release-wanted", "release.wanted", "outside release.min"),
    ("North: 20", "North: 20%", "now-well", "now.North", "has no opening"),
    ("N1: 50%, North", "N1: 15, North", "now-well", "now.N1", "total of its well"),
    ("Leaves: two leaves", "Leaves: two leafs", "position", "now.Leaves", "no position `two leafs`"),
    ("Leaves: two leaves", "Leaves: 4 leaves", "quantity", "now.Leaves", "not a unit of flow"),
    ("inflow: 25", "inflow: -25", "negative", "inflow", "cannot be negative"),
    ("hours: 18", "hours: 19", "blocks", "blocks", "sum to 25"),
    (", { name: off-peak, hours: 18, flow: 20 }", "", "blocks", "blocks", "the day has 1 parts"),
    ("hours: 6, flow: 60", "hours: 6, flow: 0", "not-positive", "blocks[0].flow", "above zero"),
    ("name: off-peak", "name: peak", "name-twice", "blocks[1].name", "another block"),
    ("hours: 6, flow: 60", "flow: 60", "missing-key", "blocks[0].hours", "hours is missing"),
    ("oxygen: 0.3", "oxygen: 0", "not-positive", "bins.oxygen", "above zero"),
    ("cold_water: 20", "cold_water: -20", "not-positive", "bins.cold_water", "above zero"),
    ("outlet: N2, from", "outlet: N8, from", "unknown-outlet", "limits.outages[0].outlet", "`N8`"),
    ("from: 2026-07-01", "from: 2026-06-31", "day", "limits.outages[0].from", "`2026-06-31` is not a date"),
    ("to: 2026-08-15", "to: 26-08-15", "day", "limits.outages[0].to", "`26-08-15` is not a date"),
    ("to: 2026-08-15", "to: 2026-06-15", "day-order", "limits.outages[0].to", "ends before it begins"),
    ("from: 2026-07-01, ", "", "missing-key", "limits.outages[0].from", "from is missing"),
    (
        "outlet: Cone, from: 2026-09-01",
        "outlet: N2, from: 2026-07-01",
        "listed-twice",
        "limits.outages[1].outlet",
        "already listed",
    ),
    ("[N1, N2], min", "[N1, N7], min", "unknown-outlet", "limits.shares[0].outlets[1]", "`N7`"),
    ("[N1, N2], min", "[N1, N1], min", "listed-twice", "limits.shares[0].outlets[1]", "`N1` is listed twice"),
    ("min: 40, max: 90", "min: 95, max: 90", "share", "limits.shares[0].min", "min is above max"),
    ("min: 40, max: 90", "min: 40, max: 190", "share", "limits.shares[0].max", "outside 0 to 100 %"),
    ("[Cone], max: 30", "[Cone]", "share", "limits.shares[1]", "neither min nor max"),
    ("name: low", "name: upper", "name-twice", "limits.shares[1].name", "another share"),
    ("outlets: [Cone]", "outlets: []", "share", "limits.shares[1].outlets", "names no outlet"),
    ("outlet: Cone, flow", "outlet: C, flow", "unknown-outlet", "limits.reserved[0].outlet", "`C`"),
    ("flow: 1.1", "flow: 0", "not-positive", "limits.reserved[0].flow", "above zero"),
    (
        "outlet: Cone, flow: 1.1",
        "outlet: N1, flow: 81",
        "reserved",
        "limits.reserved[0].flow",
        "above its flow.max",
    ),
    ("outlet: N2, flow: 4", "outlet: Cone, flow: 4", "listed-twice", "limits.reserved[1].outlet", "reserved"),
    ("from: 0, to: 8.5", "from: 8.5, to: 8.5", "layer", "limits.undrawn[0].from", "ends where it begins"),
    ("from: 0, to: 8.5", "from: 100, to: 108", "outside-pool", "limits.undrawn[0].from", "outside the pool"),
    ("from: 0, to: 8.5", "from: 0", "layer", "limits.undrawn[0]", "not told in one way"),
    ("depth: [0, 1.5]", "depth: [0, 1.5], from: 1, to: 2", "layer", "limits.undrawn[1]", "one way"),
    ("depth: [0, 1.5]", "reason: scum", "layer", "limits.undrawn[1]", "one way"),
    ("depth: [0, 1.5]", "depth: [2, 1.5]", "layer", "limits.undrawn[1].depth", "ends where it begins"),
    ("depth: [0, 1.5]", "depth: [-1, 1.5]", "negative", "limits.undrawn[1].depth", "cannot be negative"),
    ("oxygen_below: 2.5", "oxygen_below: 0", "not-positive", "limits.undrawn[2].oxygen_below", "above zero"),
    ("hour: 10.1", "hour: 0", "not-positive", "limits.max_flow_change_per_hour", "above zero"),
    ("day: 40.1", "day: 0", "not-positive", "limits.max_flow_change_per_day", "above zero"),
    ("hour: 1.1", "hour: 0", "not-positive", "limits.max_temperature_change_per_hour", "above zero"),
    ("day: 2.1", "day: 0", "not-positive", "limits.max_temperature_change_per_day", "above zero"),
    ("hours: 3.1", "hours: 0", "not-positive", "limits.change_hours", "above zero"),
    ("day: 0.31", "day: -0.3", "negative", "limits.max_drawdown_per_day", "cannot be negative"),
    ("solids_max: 500.1", "solids_max: 0", "not-positive", "limits.solids_max", "above zero"),
    ("max_moves: 4", "max_moves: 4.5", "whole-number", "limits.max_moves", "not a whole number"),
    ("hours: 8.1", "hours: -8", "negative", "limits.max_crew_hours", "cannot be negative"),
];

#[test]
fn scenario_every_limit_of_a_sound_file_reaches_the_site() {
    let read = site(SOUND, "site.yaml").site.unwrap();
    let index = |name: &str| read.outlet(name).unwrap();
    let (n1, n2, cone) = (index("N1"), index("N2"), index("Cone"));
    let day = |text: &str| text.parse().unwrap();
    let l = &read.limits;
    assert_eq!(
        [l.flow_change_m3s_per_hour, l.flow_change_m3s_per_day, l.change_hours, l.max_crew_hours],
        [Some(10.1), Some(40.1), Some(3.1), Some(8.1)]
    );
    assert_eq!(
        [
            l.temperature_change_c_per_hour,
            l.temperature_change_c_per_day,
            l.drawdown_m_per_day,
            l.solids_max_mg_l
        ],
        [Some(1.1), Some(2.1), Some(0.31), Some(500.1)]
    );
    assert_eq!(l.max_moves, Some(4));
    let outages: Vec<_> = l.outages.iter().map(|o| (o.outlet, o.from, o.to, o.reason.as_str())).collect();
    assert_eq!(
        outages,
        [(n2, day("2026-07-01"), Some(day("2026-08-15")), "rack"), (cone, day("2026-09-01"), None, "")]
    );
    let shares: Vec<_> = l.shares.iter().map(|s| (s.name.as_str(), &s.outlets[..], s.min, s.max)).collect();
    assert_eq!(shares, [("upper", &[n1, n2][..], Some(0.4), Some(0.9)), ("low", &[cone], None, Some(0.3))]);
    let reserved: Vec<_> = l.reserved.iter().map(|r| (r.outlet, r.flow_m3s, r.reason.as_str())).collect();
    assert_eq!(reserved, [(cone, 1.1, "hatchery"), (n2, 4.0, "")]);
    let undrawn: Vec<_> = l.undrawn.iter().map(|u| u.layer).collect();
    assert_eq!(undrawn, [Layer::Elevations(0.0, 8.5), Layer::Depths(0.0, 1.5), Layer::OxygenBelow(2.5)]);
    let gate = &read.outlets[n1];
    assert_eq!((gate.pool_window_m, gate.max_entrance_m_s), (Some((50.0, 61.0)), Some(1.3)));
    assert_eq!((gate.avoid[0].what, gate.moves_under_flow), (Avoided::Openings(0.6, 0.9), Some(false)));
    assert_eq!((gate.crew, gate.uncertain), (Crew { hours: 3.0, lead_days: 7.0, cost: 1.5 }, true));
    assert_eq!(read.outlets[n2].crew, Crew::default());
    assert_eq!(read.outlets[cone].avoid[0].what, Avoided::Flows(5.0, 12.0));
    assert_eq!(read.outlets[cone].generation_lost, Some(GenerationLost { flow_m3s: 10.0, power_mw: 3.2 }));
    assert_eq!((read.wells[0].min_flow_m3s, read.wells[0].plan_area_m2), (3.0, Some(60.0)));
    assert_eq!((read.release.wanted_m3s, read.inflow_m3s), (Some(40.0), Some(25.0)));
    let blocks: Vec<_> = read.blocks.iter().map(|b| (b.name.as_str(), b.hours, b.flow_m3s)).collect();
    assert_eq!(blocks, [("peak", 6.0, 60.0), ("off-peak", 18.0, 20.0)]);
    assert_eq!(read.bins, Bins { temperature_c: 0.4, oxygen_mg_l: 0.3, cold_share: 0.2 });
}

#[test]
fn scenario_a_position_is_named_a_well_given_its_total() {
    let now = |text: &str| {
        let text = SOUND.replacen("{ N1: 50%, North: 20, Leaves: two leaves }", text, 1);
        let site = site(&text, "site.yaml").site.unwrap();
        (site.now.clone(), site.now_wells.clone(), site.outlet("Leaves").unwrap())
    };
    let (gates, wells, leaves) = now("{ N1: 50%, North: 20, Leaves: two leaves }");
    // of two crests the lower is fully open
    assert_eq!(gates, [(0, SetNow::Opening(0.5)), (leaves, SetNow::Opening(1.0))]);
    assert_eq!(wells, [(0, 20.0)]);
    // a name that begins with a figure is a name where the outlet has it, and a quantity elsewhere
    let (gates, wells, leaves) = now("{ Leaves: 3 leaves, Cone: 3 cfs, N1: \"50\" }");
    let cfs = Folder::default().parse("1cfs", gatemix::units::Dimension::Flow).unwrap();
    assert_eq!(
        gates,
        [(leaves, SetNow::Opening(0.5)), (2, SetNow::Flow(3.0 * cfs)), (0, SetNow::Flow(50.0)),]
    );
    assert!(wells.is_empty());
}

#[test]
fn scenario_a_velocity_without_a_unit_is_in_the_lengths_unit() {
    let text = "
name: Feet (invented)
units: { length: ft }
pool: { bed: 0, full: 10, table: [[0, 0], [10, 1000]] }
outlets: [ { name: A, centre: 3, height: 1, width: 1, max_entrance_velocity: 4 } ]
";
    let read = site(text, "site.yaml").site.unwrap();
    approx::assert_relative_eq!(read.outlets[0].max_entrance_m_s.unwrap(), 1.2192);
}
