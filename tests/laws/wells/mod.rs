//! The split of a well: its relations put back, what bounds it, and what must not matter.

mod invented;

use approx::assert_relative_eq;
use gatemix::intake::{Port, Split};
use gatemix::profile::Column;
use proptest::prelude::*;
use proptest::strategy::ValueTree;
use proptest::test_runner::TestRunner;

use crate::columns::{Pool, any_water, config, fresh, stable, worked};
use invented::{
    GRAVITY_M_S2, Misfit, Supply, Well, anywhere, density, drive_m, misfit, own_supply, unordered, wells,
};

/// Heads that round-off and the integral of density leave apart, m.
const NEAR_M: f64 = 1e-9;

fn uniform() -> impl Strategy<Value = Well> {
    let pool = (5.0..120.0_f64, 4.0..30.0_f64).prop_map(|(depth, temperature)| Pool {
        bed_m: 0.0,
        surface_m: depth,
        samples: vec![fresh(0.2 * depth, temperature), fresh(0.7 * depth, temperature)],
        oxygen: Vec::new(),
    });
    wells(1..=8, anywhere(), pool, Just(Supply::Centre))
}

/// The same ports in another order, and the split brought back to the first.
fn reordered(well: &Well, column: &Column, order: &[usize]) -> Split {
    let supply = match &well.supply {
        Supply::Given(given) => Supply::Given(order.iter().map(|&k| given[k]).collect()),
        other => other.clone(),
    };
    let ports = order.iter().map(|&k| well.ports[k]).collect();
    let mut split = Well { ports, supply, ..well.clone() }.split(column);
    let flows = split.flows_m3s.clone();
    for (&k, flow) in order.iter().zip(flows) {
        split.flows_m3s[k] = flow;
    }
    split
}

/// A flow so small that it only decides which water stands in the shaft.
fn trickles(well: &Well, split: &Split) -> bool {
    split.flows_m3s.iter().any(|q| *q > 0.0 && *q < 1e-4 * well.flow_m3s)
}

/// Distance of each share from that by A/sqrt(K).
fn from_even(well: &Well, column: &Column) -> Vec<f64> {
    let shares = well.split(column).flows_m3s.into_iter().map(|q| q / well.flow_m3s);
    shares.zip(well.even_shares()).map(|(share, even)| (share - even).abs()).collect()
}

proptest! {
    #![proptest_config(config(300))]

    /// Bernoulli at each port and hydrostatics between them, by code of their own.
    #[test]
    fn law_flows_and_pressures_satisfy_the_relations(
        well in wells(1..=8, anywhere(), stable(), own_supply())
    ) {
        let column = well.pool.column();
        let split = well.split(&column);
        prop_assume!(split.settled);
        let Misfit { flowing, blocked_m } = misfit(&well, &column, &split);
        prop_assert!(flowing < 1e-5 && blocked_m < NEAR_M, "{} {} {:?}", flowing, blocked_m, split);
    }

    #[test]
    fn law_two_ports_satisfy_the_relations_whatever_enters(
        well in wells(2..=2, anywhere(), any_water(), unordered())
    ) {
        let column = well.pool.column();
        let split = well.split(&column);
        prop_assume!(split.settled);
        let Misfit { flowing, blocked_m } = misfit(&well, &column, &split);
        prop_assert!(flowing < 1e-5 && blocked_m < NEAR_M, "{} {} {:?}", flowing, blocked_m, split);
    }

    /// A trickle that alone decides which water fills the shaft is left out: there no density is the mixture's.
    #[test]
    fn law_many_ports_satisfy_the_relations_whatever_enters(
        well in wells(3..=8, anywhere(), any_water(), unordered())
    ) {
        let column = well.pool.column();
        let split = well.split(&column);
        prop_assume!(split.settled && !trickles(&well, &split));
        let flowing = misfit(&well, &column, &split).flowing;
        prop_assert!(flowing < 1e-4, "{} {:?}", flowing, split);
    }

    #[test]
    fn law_flows_sum_to_the_whole_and_none_is_negative(
        well in wells(1..=8, anywhere(), any_water(), prop_oneof![own_supply(), unordered()])
    ) {
        let split = well.split(&well.pool.column());
        assert_relative_eq!(split.flows_m3s.iter().sum::<f64>(), well.flow_m3s, max_relative = 1e-12);
        prop_assert!(split.flows_m3s.iter().all(|q| *q >= 0.0) && split.head_m > 0.0);
    }

    #[test]
    fn law_order_of_ports_changes_no_digit(
        well in wells(2..=8, anywhere(), any_water(), prop_oneof![own_supply(), unordered()]), turn in 1..8_usize
    ) {
        // ports alike in all but their water have nothing to be ordered by
        let alike = |a: &Port, b: &Port| a == b;
        prop_assume!((1..well.ports.len()).all(|i| !well.ports[..i].iter().any(|p| alike(p, &well.ports[i]))));
        let column = well.pool.column();
        let mut order: Vec<usize> = (0..well.ports.len()).rev().collect();
        order.rotate_left(turn % well.ports.len());
        prop_assert_eq!(well.split(&column), reordered(&well, &column, &order));
    }

    /// The upper of two ports brings water no heavier than the pool below it: over a low conduit the lower port
    /// gains; under a high one the lower brings water no lighter than the pool above it, and the upper gains.
    #[test]
    fn law_the_port_nearer_the_conduit_has_at_least_its_share(
        well in wells(2..=2, prop_oneof![Just(-0.05), Just(1.05)], stable(), Just(Supply::Centre))
    ) {
        let split = well.split(&well.pool.column());
        let far = |k: usize| (well.ports[k].centre_m - well.conduit_m).abs();
        let near = usize::from(far(1) < far(0));
        let share = split.flows_m3s[near] / well.flow_m3s;
        prop_assert!(share >= well.even_shares()[near] - 1e-9, "{}", share);
    }

    #[test]
    fn law_more_flow_brings_two_ports_nearer_to_their_areas(
        well in wells(2..=2, anywhere(), stable(), prop_oneof![Just(Supply::Centre), unordered()]),
        more in 1.0..10.0_f64
    ) {
        let column = well.pool.column();
        let before = from_even(&well, &column);
        let after = from_even(&well.at_flow(more * well.flow_m3s), &column);
        prop_assert!(after[0] <= before[0] + 1e-9, "{:?} then {:?}", before, after);
    }

    #[test]
    fn law_a_flood_splits_by_areas(
        well in wells(2..=8, anywhere(), any_water(), prop_oneof![own_supply(), unordered()])
    ) {
        let column = well.pool.column();
        // heads of kilometres beside densities that differ by a few thousandths over less than 120 m
        let flood = well.at_flow(300.0 * well.ports.iter().map(|p| p.area_m2).sum::<f64>());
        let away = from_even(&flood, &column);
        prop_assert!(away.iter().all(|a| *a < 1e-3), "{:?}", away);
    }

    #[test]
    fn law_without_density_differences_areas_and_losses_alone_decide(well in uniform()) {
        let split = well.split(&well.pool.column());
        for (flow, even) in split.flows_m3s.iter().zip(well.even_shares()) {
            assert_relative_eq!(*flow, even * well.flow_m3s, max_relative = 1e-11);
        }
        let whole: f64 = well.ports.iter().map(|p| p.area_m2 / p.loss.sqrt()).sum();
        assert_relative_eq!(
            split.head_m, (well.flow_m3s / whole).powi(2) / (2.0 * GRAVITY_M_S2), max_relative = 1e-11
        );
        prop_assert!(split.settled);
    }

    /// In water of one density: at one flow a port less never lowers the head, at one head never raises the flow.
    #[test]
    fn law_shutting_a_port_takes_head_or_flow(well in uniform(), which in any::<prop::sample::Index>()) {
        prop_assume!(well.ports.len() > 1);
        let column = well.pool.column();
        let open = well.split(&column);
        let mut fewer = well.clone();
        let shut = which.index(well.ports.len());
        fewer.ports[shut].area_m2 = 0.0;
        let at_flow = fewer.split(&column);
        prop_assert!(at_flow.flows_m3s[shut] == 0.0);
        prop_assert!(at_flow.head_m >= open.head_m * (1.0 - 1e-12));
        let less = well.flow_m3s * (open.head_m / at_flow.head_m).sqrt();
        prop_assert!(less <= well.flow_m3s * (1.0 + 1e-12));
        assert_relative_eq!(fewer.at_flow(less).split(&column).head_m, open.head_m, max_relative = 1e-9);
    }

    /// Over a low conduit the upper port begins to flow where the closed form says, and not before.
    #[test]
    fn law_blockage_ends_where_the_closed_form_says(
        well in wells(2..=2, Just(-0.05), stable(), Just(Supply::Centre)), by in -8.0..-1.0_f64
    ) {
        let column = well.pool.column();
        let upper = usize::from(well.ports[1].centre_m > well.ports[0].centre_m);
        let (high, low) = (well.ports[upper], well.ports[1 - upper]);
        let own = density(well.enters(&column, upper, 0.0));
        let drive = drive_m(&column, low.centre_m, high.centre_m, own);
        prop_assume!(drive > 1e-4);
        let ends = low.area_m2 * (2.0 * GRAVITY_M_S2 * drive / low.loss).sqrt();
        let near = 10.0_f64.powf(by).max(1e-7);
        prop_assert!(well.at_flow(ends * (1.0 - near)).split(&column).flows_m3s[upper] == 0.0);
        prop_assert!(well.at_flow(ends * (1.0 + near)).split(&column).flows_m3s[upper] > 0.0);
    }

    #[test]
    fn law_no_flow_moves_nothing(
        well in wells(1..=8, anywhere(), any_water(), prop_oneof![own_supply(), unordered()])
    ) {
        let split = well.at_flow(0.0).split(&well.pool.column());
        prop_assert_eq!(split.flows_m3s, vec![0.0; well.ports.len()]);
        prop_assert!(split.head_m == 0.0 && split.settled);
    }
}

#[test]
fn law_ports_shut_tight_pass_nothing_at_all() {
    let pool = worked();
    let column = pool.column();
    let ports = vec![Port { centre_m: 30.0, area_m2: 0.0, loss: 1.5 }];
    let well = Well { pool, conduit_m: 2.0, ports, flow_m3s: 5.0, supply: Supply::Centre };
    let supply = |k: usize, flow: f64| well.enters(&column, k, flow);
    assert_eq!(well.shaft(&column).split(&well.ports, 5.0, supply), None);
    assert!(well.shaft(&column).split(&well.ports, 0.0, supply).is_some());
}

/// Two to four ports in stable and in any water, each with the water of its own zone: every one settles. The wells are
/// the same at every run, so that the count is one.
#[test]
fn law_splits_settle() {
    let mut runner = TestRunner::deterministic();
    for pools in [stable().boxed(), any_water().boxed()] {
        let any = wells(2..=4, anywhere(), pools, Just(Supply::Zones));
        let mut unsettled = 0;
        for _ in 0..2500 {
            let well = any.new_tree(&mut runner).unwrap().current();
            unsettled += usize::from(!well.split(&well.pool.column()).settled);
        }
        assert_eq!(unsettled, 0, "of 2500 splits did not settle");
    }
}
