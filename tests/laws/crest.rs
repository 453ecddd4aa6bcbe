//! Water over an edge: the relation of its lower limit, and where a short crest turns into a port.

use std::f64::consts::PI;

use approx::assert_relative_eq;
use gatemix::profile::Column;
use gatemix::withdrawal::{
    CrestForm, End, Opening, Sink, Zone, free_crest_flow_m3s, free_crest_head_m, zone,
};
use proptest::prelude::*;

use crate::columns::{Pool, config, flow, port, slack, stable};

const GRAVITY_M_S2: f64 = 9.80665;

fn over(column: &Column, crest_m: f64, flow_m3s: f64, length_m: f64, form: CrestForm) -> Zone {
    let sink = Sink { centre_m: crest_m, flow_m3s, opening: Opening::Crest { length_m, form } };
    zone(column, &sink, 1.0).unwrap()
}

/// Flow of the whole crest whose zone reaches down to `z`, by the overflow forms, written anew.
fn crest_flow(column: &Column, crest: f64, length: f64, form: CrestForm, z: f64) -> f64 {
    let (below, head) = (crest - z, column.surface_m() - crest);
    let home = column.density_kg_m3(crest);
    let gravity = GRAVITY_M_S2 * (column.density_kg_m3(z) - home) / home;
    length
        * match form {
            CrestForm::Control => (2.0_f64 / 3.0).powf(1.5) * gravity.sqrt() * (below + head).powf(1.5),
            CrestForm::Overflow | CrestForm::Larger => 0.32 * (below + head) * (gravity * below).sqrt(),
        }
}

/// Where the crest stands: a small share of the depth under the surface.
fn crest_of(pool: &Pool, under: f64) -> f64 {
    pool.at(1.0 - under)
}

fn under() -> impl Strategy<Value = f64> {
    0.01..0.3_f64
}

fn form() -> impl Strategy<Value = CrestForm> {
    prop::sample::select(vec![CrestForm::Overflow, CrestForm::Control])
}

proptest! {
    #![proptest_config(config(300))]

    #[test]
    fn law_a_long_crest_satisfies_its_relation(
        pool in stable(), under in under(), flow in flow(), form in form()
    ) {
        let column = pool.column();
        let crest = crest_of(&pool, under);
        // longer than the pool is deep: never like a port
        let length = 130.0;
        let zone = over(&column, crest, flow, length, form);
        prop_assert_eq!(zone.upper.limit_m, column.surface_m());
        let limit = zone.lower.limit_m;
        let [needed, further] = [limit, limit - 1e-8].map(|z| crest_flow(&column, crest, length, form, z));
        let slack = slack(column.density_kg_m3(limit) - column.density_kg_m3(crest), further - needed, flow);
        if zone.lower.end == End::Free {
            prop_assert!((needed / flow - 1.0).abs() < slack, "{} of {}", needed, flow);
        } else {
            prop_assert_eq!(zone.lower.limit_m, column.bed_m());
            prop_assert!(needed / flow - 1.0 < slack);
        }
    }

    #[test]
    fn law_a_crest_draws_from_the_surface_and_deeper_with_more_flow(
        pool in stable(), under in under(), flow in flow(), more in 1.0..1.5_f64,
        length in 1.0..60.0_f64, form in form()
    ) {
        let column = pool.column();
        let crest = crest_of(&pool, under);
        let [less, more] = [flow, flow * more].map(|q| over(&column, crest, q, length, form));
        for zone in [&less, &more] {
            prop_assert_eq!(zone.upper.limit_m, column.surface_m());
            prop_assert_eq!(zone.upper.end, End::Boundary);
        }
        prop_assert!(more.lower.limit_m <= less.lower.limit_m + 1e-6, "{:?} then {:?}", less, more);
    }

    /// A crest shorter than its zone is deep draws from all round: no deeper than a port at mid-head, but
    /// not shallower than its own length.
    #[test]
    fn law_a_short_crest_reaches_no_deeper_than_a_port(
        pool in stable(), under in under(), flow in flow(), length in 1.0..20.0_f64, form in form()
    ) {
        let column = pool.column();
        let crest = crest_of(&pool, under);
        let zone_over = over(&column, crest, flow, length, form);
        let round = zone(&column, &port(0.5 * (crest + column.surface_m()), flow, PI), 1.0).unwrap();
        let reach = crest - zone_over.lower.limit_m;
        let limit = zone_over.lower.limit_m;
        let [needed, further] = [limit, limit - 1e-8].map(|z| crest_flow(&column, crest, length, form, z));
        let slack = slack(column.density_kg_m3(limit) - column.density_kg_m3(crest), further - needed, flow);
        if reach < length - 1e-6 {
            // still long: the overflow form alone
            if zone_over.lower.end == End::Free {
                prop_assert!((needed / flow - 1.0).abs() < slack, "{} of {}", needed, flow);
            }
        } else {
            prop_assert!(needed / flow - 1.0 < slack);
            prop_assert!(zone_over.lower.limit_m >= round.lower.limit_m.min(crest - length) - 1e-6);
        }
    }

    /// No jump where a crest turns short.
    #[test]
    fn law_a_crest_has_no_jump_in_flow(
        pool in stable(), under in under(), flow in flow(), length in 1.0..30.0_f64, form in form()
    ) {
        let column = pool.column();
        let crest = crest_of(&pool, under);
        let release = |q: f64| over(&column, crest, q, length, form).draw(&column).unwrap().temperature_c;
        let (mut low, mut high) = (flow, flow * 1.5);
        let [mut at_low, mut at_high] = [release(low), release(high)];
        while high / low > 1.0 + 1e-6 {
            let middle = 0.5 * (low + high);
            let between = release(middle);
            if (between - at_low).abs() > (at_high - between).abs() {
                (high, at_high) = (middle, between);
            } else {
                (low, at_low) = (middle, between);
            }
        }
        prop_assert!((at_high - at_low).abs() < 5e-3, "{} C at {} m3/s", at_high - at_low, low);
    }

    #[test]
    fn law_head_and_flow_of_a_free_crest_undo_each_other(head in 0.01..5.0_f64, length in 1.0..60.0_f64) {
        let flow = free_crest_flow_m3s(head, length);
        assert_relative_eq!(free_crest_head_m(flow, length), head, max_relative = 1e-12);
        assert_relative_eq!(flow / length, 1.84 * head.powf(1.5), max_relative = 1e-12);
    }
}

#[test]
fn law_no_zone_over_a_dry_crest() {
    let column = crate::columns::worked().column();
    let opening = Opening::Crest { length_m: 10.0, form: CrestForm::Overflow };
    assert_eq!(zone(&column, &Sink { centre_m: 60.0, flow_m3s: 5.0, opening }, 1.0), None);
    assert_eq!(free_crest_flow_m3s(-1.0, 10.0), 0.0);
}
