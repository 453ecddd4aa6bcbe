//! Capacity, open part, levels, leaks and quantiles worked by hand; g = 9.80665 m/s2. The closed forms are those of
//! `docs/methods.md`, section 4.

use std::f64::consts::PI;

use approx::assert_relative_eq;
use gatemix::intake::{capacity_m3s, crest_flow_m3s, leak_area_m2, leak_m3s, submergence_m};
use gatemix::mix::{Gate, Setting, Spread, groups, levels};
use gatemix::site::{Leakage, Opens, Outlet, Raw, RawOutlet, RawPool, RawRow, RawWell, Site};
use gatemix::withdrawal::CrestForm;

/// A rectangular port.
fn port(name: &str, centre_m: f64, height_m: f64, width_m: f64) -> RawOutlet {
    RawOutlet {
        name: Some(name.into()),
        centre_m: Some(centre_m),
        height_m: Some(height_m),
        width_m: Some(width_m),
        ..RawOutlet::default()
    }
}

/// A crest 20 m long at 58 m.
fn crest(rating: &[(f64, f64)]) -> RawOutlet {
    RawOutlet {
        name: Some("crest".into()),
        kind: Some("crest".into()),
        centre_m: Some(58.0),
        width_m: Some(20.0),
        rating: rating.to_vec(),
        ..RawOutlet::default()
    }
}

/// A box of water from 0 to 64 m with these outlets and one well; `max_head_m` is what its gates are allowed.
fn site(outlets: Vec<RawOutlet>, max_head_m: Option<f64>) -> Site {
    let row = |elevation_m: f64, area_m2: f64| RawRow { elevation_m, area_m2, ..RawRow::default() };
    let raw = Raw {
        name: Some("invented".into()),
        pool: RawPool {
            bed_m: Some(0.0),
            full_m: Some(60.0),
            table: vec![row(0.0, 1e5), row(64.0, 2e6)],
            ..RawPool::default()
        },
        wells: vec![RawWell {
            name: Some("well".into()),
            conduit_m: Some(2.0),
            max_head_loss_m: max_head_m,
            ..RawWell::default()
        }],
        outlets,
        ..Raw::default()
    };
    Site::check(&raw).0.unwrap()
}

fn alone(outlet: RawOutlet) -> Outlet {
    site(vec![outlet], None).outlets.remove(0)
}

fn capacity(outlet: RawOutlet, max_head_m: Option<f64>, opening: f64) -> Option<f64> {
    let site = site(vec![outlet], max_head_m);
    capacity_m3s(&site, &site.outlets[0], opening, 60.0)
}

fn near(value: f64, by_hand: f64) {
    assert_relative_eq!(value, by_hand, max_relative = 1e-7);
}

/// 2 m by 3 m under 40 m: sqrt(2 g 40) = 28.009498 m/s, times 6 m2, times Cd.
#[test]
fn published_capacity_of_a_direct_outlet() {
    let direct = |discharge| RawOutlet { discharge, ..port("port", 20.0, 2.0, 3.0) };
    near(capacity(direct(None), None, 1.0).unwrap(), 100.834194);
    near(capacity(direct(Some(0.7)), None, 1.0).unwrap(), 117.639893);
    // half open from its sill at 19 m: 3 m2 about 19.5 m, under 40.5 m: 0.6 x 3 x sqrt(2 g 40.5)
    near(capacity(direct(None), None, 0.5).unwrap(), 1.8 * (2.0 * 9.80665 * 40.5_f64).sqrt());
    assert_eq!(capacity(RawOutlet { flow_max_m3s: Some(30.0), ..direct(None) }, None, 1.0), Some(30.0));
    // out of the water nothing comes
    let high = RawOutlet { discharge: None, ..port("port", 62.0, 2.0, 3.0) };
    assert_eq!(capacity(high, None, 1.0), Some(0.0));
}

/// 6 m2 at 1.5 m of head: with K = 1.5, sqrt(2 g) = 4.428690 m/s; with K = 2.4, sqrt(2 g/1.6) = 3.501187 m/s.
#[test]
fn published_capacity_of_a_well_port() {
    let on_well = |loss| RawOutlet { well: Some("well".into()), loss, ..port("port", 20.0, 2.0, 3.0) };
    near(capacity(on_well(Some(1.5)), Some(1.5), 1.0).unwrap(), 26.572143);
    near(capacity(on_well(None), Some(1.5), 1.0).unwrap(), 26.572143);
    near(capacity(on_well(Some(2.4)), Some(1.5), 1.0).unwrap(), 21.007124);
    near(capacity(on_well(Some(1.5)), Some(1.5), 0.25).unwrap(), 26.572143 / 4.0);
    // without a head allowed nothing bounds it
    assert_eq!(capacity(on_well(Some(1.5)), None, 1.0), None);
}

/// Francis: 1.84 x 20 x 2^1.5 = 104.086118 m3/s; a rating of the site is preferred and runs straight between rows.
#[test]
fn published_flow_over_a_crest() {
    let flow =
        |rating: &[(f64, f64)], pool_m: f64| crest_flow_m3s(&alone(crest(rating)), 1.0, pool_m).unwrap();
    near(flow(&[], 60.0), 104.086118);
    near(flow(&[], 57.0), 0.0);
    let rated = [(0.5, 10.0), (1.0, 40.0), (3.0, 200.0)];
    for (pool_m, by_hand) in [
        (58.0, 0.0),
        (58.25, 5.0), // half of the first head, half of its flow
        (58.5, 10.0),
        (58.75, 25.0), // midway from 10 to 40
        (60.0, 120.0), // midway from 40 to 200
        (61.0, 200.0),
        (63.0, 200.0), // held beyond the last row
    ] {
        assert_relative_eq!(flow(&rated, pool_m), by_hand, max_relative = 1e-12);
    }
    near(capacity(crest(&[]), None, 1.0).unwrap(), 104.086118);
    let capped = RawOutlet { flow_max_m3s: Some(90.0), ..crest(&[]) };
    assert_eq!(capacity(capped, None, 1.0), Some(90.0));
    let loose = RawOutlet { flow_max_m3s: Some(900.0), ..crest(&[]) };
    near(capacity(loose, None, 1.0).unwrap(), 104.086118);
    assert_eq!(crest_flow_m3s(&alone(port("port", 20.0, 2.0, 3.0)), 1.0, 60.0), None);
}

/// Opening, area, centre-line and top edge by hand.
type Part = (f64, f64, f64, f64);

fn parts(outlet: &RawOutlet, opens: Opens, by_hand: &[Part]) {
    let outlet = alone(RawOutlet { opens, ..outlet.clone() });
    for &(opening, area_m2, centre_m, top_m) in by_hand {
        let part = outlet.open_part(opening);
        assert_relative_eq!(part.area_m2, area_m2, max_relative = 1e-7, epsilon = 1e-12);
        assert_relative_eq!(part.centre_m, centre_m, max_relative = 1e-12);
        assert_relative_eq!(part.top_m, top_m, max_relative = 1e-12);
        // under 60 m of water
        assert_relative_eq!(submergence_m(&outlet, opening, 60.0), 60.0 - top_m, max_relative = 1e-12);
    }
}

/// 4 m high from 48 to 52 m, 3 m wide.
#[test]
fn published_open_part_of_a_rectangle() {
    let gate = port("gate", 50.0, 4.0, 3.0);
    let up =
        [(0.0, 0.0, 48.0, 48.0), (0.25, 3.0, 48.5, 49.0), (0.5, 6.0, 49.0, 50.0), (1.0, 12.0, 50.0, 52.0)];
    let down =
        [(0.0, 0.0, 52.0, 52.0), (0.25, 3.0, 51.5, 52.0), (0.5, 6.0, 51.0, 52.0), (1.0, 12.0, 50.0, 52.0)];
    let both =
        [(0.0, 0.0, 50.0, 50.0), (0.25, 3.0, 50.0, 50.5), (0.5, 6.0, 50.0, 51.0), (1.0, 12.0, 50.0, 52.0)];
    parts(&gate, Opens::Up, &up);
    parts(&gate, Opens::Down, &down);
    parts(&gate, Opens::Both, &both);
}

/// 4 m across from 48 to 52 m, r = 2 m. A segment 1 m high subtends half an angle of 60 degrees:
/// 4 (pi/3 - sin 60 cos 60) = 4 (1.0471976 - 0.4330127) = 2.4567394; half the circle is 2 pi. From the middle both
/// ways 1 m: 4 pi less two segments 1.5 m high, half angle acos 0.25 = 1.3181161,
/// 4 (1.3181161 - 0.25 x 0.9682458) = 4.3042182 each: 3.9579337; 2 m: 4 pi - 2 x 2.4567394 = 7.6528919.
#[test]
fn published_open_part_of_a_circle() {
    let pipe = RawOutlet {
        name: Some("pipe".into()),
        centre_m: Some(50.0),
        diameter_m: Some(4.0),
        ..RawOutlet::default()
    };
    let (quarter, half, whole) = (2.4567394, 2.0 * PI, 4.0 * PI);
    let up = [
        (0.0, 0.0, 48.0, 48.0),
        (0.25, quarter, 48.5, 49.0),
        (0.5, half, 49.0, 50.0),
        (1.0, whole, 50.0, 52.0),
    ];
    let down = [
        (0.0, 0.0, 52.0, 52.0),
        (0.25, quarter, 51.5, 52.0),
        (0.5, half, 51.0, 52.0),
        (1.0, whole, 50.0, 52.0),
    ];
    let both = [
        (0.0, 0.0, 50.0, 50.0),
        (0.25, 3.9579337, 50.0, 50.5),
        (0.5, 7.6528919, 50.0, 51.0),
        (1.0, whole, 50.0, 52.0),
    ];
    parts(&pipe, Opens::Up, &up);
    parts(&pipe, Opens::Down, &down);
    parts(&pipe, Opens::Both, &both);
}

fn grouped(outlets: Vec<RawOutlet>) -> Vec<Vec<String>> {
    let site = site(outlets, None);
    let name = |i: &usize| site.outlets[*i].name.clone();
    groups(&site).iter().map(|g| g.iter().map(name).collect()).collect()
}

/// Heights 4 m and 2 m: half the smaller is 1 m.
#[test]
fn published_outlets_within_half_the_smaller_height_are_one_level() {
    let pair = |apart: f64| grouped(vec![port("tall", 30.0, 4.0, 3.0), port("low", 30.0 + apart, 2.0, 3.0)]);
    assert_eq!(pair(1.0), [["tall", "low"]]);
    assert_eq!(pair(1.01), [["tall"], ["low"]]);
    assert_eq!(pair(-1.0), [["low", "tall"]]);
    // the middle one links both others, 1.8 m apart, in whatever order they stand in the file
    let three = [("a", 30.0), ("c", 31.8), ("b", 30.9)].map(|(name, z)| port(name, z, 2.0, 3.0));
    assert_eq!(grouped(three.into()), [["a", "b", "c"]]);
    let angled = |angle: f64| RawOutlet { angle_deg: Some(angle), ..port("tower", 30.0, 4.0, 3.0) };
    assert_eq!(grouped(vec![port("wall", 30.0, 4.0, 3.0), angled(360.0)]).len(), 2);
    assert_eq!(grouped(vec![port("wall", 30.0, 4.0, 3.0), angled(180.0)]).len(), 1);
    let bay = |name: &str, z: f64| RawOutlet { name: Some(name.into()), centre_m: Some(z), ..crest(&[]) };
    assert_eq!(grouped(vec![bay("1", 58.0), bay("2", 58.05), bay("3", 58.3)]), [vec!["1", "2"], vec!["3"]]);
    // a crest is no port, however near
    assert_eq!(grouped(vec![bay("1", 58.0), port("port", 58.0, 2.0, 3.0)]).len(), 2);
}

/// Elevation and flow of each level.
fn sinks(site: &Site, gates: &[Gate]) -> Vec<(f64, f64)> {
    let setting = Setting::of(gates.to_vec());
    levels(site, &groups(site), &setting, 60.0, 0.5, CrestForm::Overflow)
        .iter()
        .map(|l| (l.sink.centre_m, l.sink.flow_m3s))
        .collect()
}

/// 6 m2 at 50 m and 3 m2 at 51 m: (6 x 50 + 3 x 51)/9 = 50.3333 m. The first half open from its sill at 49 m is 3 m2
/// about 49.5 m: (3 x 49.5 + 3 x 51)/6 = 50.25 m, and still the same level.
#[test]
fn published_a_level_lies_at_the_area_weighted_mean_of_its_open_parts() {
    let site = site(vec![port("wide", 50.0, 2.0, 3.0), port("narrow", 51.0, 2.0, 1.5)], None);
    let at = |opening: f64| {
        let gates =
            [Gate { outlet: 0, opening, flow_m3s: 4.0 }, Gate { outlet: 1, opening: 1.0, flow_m3s: 11.0 }];
        let sinks = sinks(&site, &gates);
        assert_eq!(sinks.len(), 1);
        assert_relative_eq!(sinks[0].1, 15.0, max_relative = 1e-12);
        sinks[0].0
    };
    assert_relative_eq!(at(1.0), 453.0 / 9.0, max_relative = 1e-12);
    assert_relative_eq!(at(0.5), 50.25, max_relative = 1e-12);
}

/// 0.3 m3/s at 9 m: sqrt(4/9) of it is 0.2 at 4 m, sqrt(36/9) of it 0.6 at 36 m. Over the range, in equal steps on
/// either side of the figure.
#[test]
fn published_leak_goes_as_the_root_of_the_head() {
    let leakage = Leakage { flow_m3s: 0.3, head_m: 9.0, range_m3s: Some((0.1, 0.5)) };
    let gate = alone(RawOutlet { leakage: Some(leakage), ..port("gate", 20.0, 2.0, 3.0) });
    for (head, by_hand) in [(0.0, 0.0), (-1.0, 0.0), (4.0, 0.2), (9.0, 0.3), (36.0, 0.6)] {
        assert_relative_eq!(leak_m3s(&gate, head, 0.5), by_hand, max_relative = 1e-12);
    }
    for (place, by_hand) in [(0.0, 0.1), (0.25, 0.2), (0.5, 0.3), (0.75, 0.4), (1.0, 0.5)] {
        assert_relative_eq!(leak_m3s(&gate, 9.0, place), by_hand, max_relative = 1e-12);
        // 0.3 sqrt(1.5/(2 g 9)) = 0.027654785 m2
        near(leak_area_m2(&gate, place), 0.027654785 * by_hand / 0.3);
    }
    near(leak_m3s(&alone(port("gate", 20.0, 2.0, 3.0)), 9.0, 0.5), 0.0);
}

/// An open gate of 6 m2 and a shut one that leaks like 0.6 m2, equal losses: 22 m3/s part as 20 and 2. The leak that
/// is 0.6 m2 large: 0.6 sqrt(2 g 1.5/1.5) = 2.6572143 m3/s at 1.5 m with K = 1.5. Direct, under 40 m, it adds
/// 2.6572143 sqrt(40/1.5) = 13.7217956 m3/s.
#[test]
fn published_a_leak_takes_its_share_of_a_well_and_adds_to_what_leaves_directly() {
    let leakage = Some(Leakage { flow_m3s: 2.6572143, head_m: 1.5, range_m3s: None });
    let with = |well: Option<&str>| {
        let well = well.map(str::to_owned);
        let open = RawOutlet { well: well.clone(), ..port("open", 40.0, 2.0, 3.0) };
        let shut = RawOutlet { well, leakage, ..port("shut", 20.0, 2.0, 3.0) };
        sinks(&site(vec![open, shut], None), &[Gate { outlet: 0, opening: 1.0, flow_m3s: 22.0 }])
    };
    for (sinks, by_hand) in
        [(with(Some("well")), [(20.0, 2.0), (40.0, 20.0)]), (with(None), [(20.0, 13.7217956), (40.0, 22.0)])]
    {
        assert_eq!(sinks.len(), 2);
        for (sink, by_hand) in sinks.iter().zip(by_hand) {
            near(sink.0, by_hand.0);
            near(sink.1, by_hand.1);
        }
    }
}

/// Straight between order statistics: of four, the tenth part lies 0.3 of the way from the first to the second, nine
/// tenths 0.7 of the way from the third to the fourth.
#[test]
fn published_quantiles_of_known_lists() {
    let spread = |values: &[f64]| Spread { cases: values.iter().map(|&v| (v, Some(0.5 * v))).collect() };
    let four = spread(&[4.0, 1.0, 8.0, 2.0]);
    let (low, high) = four.band_c().unwrap();
    assert_relative_eq!(low, 1.3, max_relative = 1e-12);
    assert_relative_eq!(high, 6.8, max_relative = 1e-12);
    let (low, high) = four.band_oxygen_mg_l().unwrap();
    assert_relative_eq!(low, 0.65, max_relative = 1e-12);
    assert_relative_eq!(high, 3.4, max_relative = 1e-12);
    let eleven = spread(&[10.0, 0.0, 9.0, 1.0, 8.0, 2.0, 7.0, 3.0, 6.0, 4.0, 5.0]);
    let (low, high) = eleven.band_c().unwrap();
    assert_relative_eq!(low, 1.0, max_relative = 1e-12);
    assert_relative_eq!(high, 9.0, max_relative = 1e-12);
    assert_eq!(spread(&[7.0]).band_c(), Some((7.0, 7.0)));
    assert_eq!(spread(&[]).band_c(), None);
    let holed = Spread { cases: vec![(1.0, Some(5.0)), (2.0, None)] };
    assert!(holed.band_c().is_some() && holed.band_oxygen_mg_l().is_none());
}
