//! Random limits, so placed that some mixes break them and some do not.

use gatemix::site::{Raw, RawAvoid, RawOutage, RawReserved, RawShare, RawUndrawn};

use super::dice::Dice;
use crate::columns::Pool;

/// Gives a dam limits of every kind, each now and then.
pub(super) fn limit(raw: &mut Raw, water: &Pool, flow_m3s: f64, dice: &mut Dice) {
    let depth_m = water.surface_m - water.bed_m;
    for i in 0..raw.outlets.len() {
        outlet(raw, i, water, flow_m3s, dice);
    }
    for well in &mut raw.wells {
        well.max_open = dice.once_in(2).then(|| dice.one_of(&[1.0, 2.0]));
        well.max_head_loss_m = dice.maybe(4, 0.05..3.0);
        well.min_flow_m3s = dice.maybe(4, 0.0..0.4 * flow_m3s);
        well.max_flow_m3s = dice.maybe(4, 0.5 * flow_m3s..1.5 * flow_m3s);
    }
    raw.release_min_m3s = dice.maybe(30, 0.5 * flow_m3s..0.89 * flow_m3s);
    raw.release_max_m3s = dice.maybe(20, 0.9 * flow_m3s..2.5 * flow_m3s);
    let names = |raw: &Raw, count: usize| -> Vec<String> {
        raw.outlets.iter().take(count).filter_map(|o| o.name.clone()).collect()
    };
    if dice.once_in(3) {
        let min = dice.between(0.02..0.4);
        raw.limits.shares.push(RawShare {
            name: Some("units".into()),
            outlets: names(raw, 2),
            min: Some(min),
            max: dice.maybe(2, min..1.0),
        });
    }
    if dice.once_in(4) {
        let max = Some(dice.one_of(&[0.5, 0.25, 0.7]));
        raw.limits.shares.push(RawShare {
            name: Some("spill".into()),
            outlets: names(raw, 1),
            min: None,
            max,
        });
    }
    if dice.once_in(8) {
        raw.limits.reserved.push(RawReserved {
            outlet: raw.outlets[dice.below(raw.outlets.len())].name.clone(),
            flow_m3s: Some(dice.between(0.01..0.3) * flow_m3s),
            reason: "hatchery".into(),
        });
    }
    if dice.once_in(6) {
        raw.limits.outages.push(RawOutage {
            outlet: raw.outlets[dice.below(raw.outlets.len())].name.clone(),
            from: Some("2025-07-01".into()),
            to: dice.one_of(&[None, Some("2025-07-20"), Some("2025-07-10")]).map(str::to_owned),
            reason: String::new(),
        });
    }
    if dice.once_in(3) {
        let from = water.at(dice.between(0.0..0.9));
        let layer = match dice.below(3) {
            0 => RawUndrawn {
                from_m: Some(from),
                to_m: Some(from + dice.between(0.01..0.1) * depth_m),
                ..RawUndrawn::default()
            },
            1 => {
                let depths_m = Some((0.0, dice.between(0.05..1.0)));
                RawUndrawn { depths_m, ..RawUndrawn::default() }
            }
            _ => RawUndrawn { oxygen_below_mg_l: Some(dice.between(0.05..1.0)), ..RawUndrawn::default() },
        };
        raw.limits.undrawn.push(layer);
        if dice.once_in(3) {
            let depths_m = Some((0.0, dice.between(0.05..0.5)));
            raw.limits.undrawn.push(RawUndrawn { depths_m, ..RawUndrawn::default() });
        }
    }
    let limits = &mut raw.limits;
    limits.flow_change_m3s_per_hour = dice.maybe(20, 0.3 * flow_m3s..flow_m3s);
    limits.flow_change_m3s_per_day = dice.maybe(20, 0.5 * flow_m3s..2.0 * flow_m3s);
    limits.temperature_change_c_per_hour = dice.maybe(6, 0.5..5.0);
    limits.temperature_change_c_per_day = dice.maybe(6, 1.0..8.0);
    limits.change_hours = dice.maybe(4, 1.0..30.0);
    limits.drawdown_m_per_day = dice.maybe(12, 0.05..2.0);
    limits.solids_max_mg_l = dice.maybe(4, 20.0..300.0);
    limits.max_moves = dice.once_in(4).then(|| dice.one_of(&[1, 2, 3]));
    limits.max_crew_hours = dice.maybe(5, 0.0..6.0);
    raw.inflow_m3s = Some(dice.between(0.1..1.2) * flow_m3s);
}

fn outlet(raw: &mut Raw, i: usize, water: &Pool, flow_m3s: f64, dice: &mut Dice) {
    let depth_m = water.surface_m - water.bed_m;
    let o = &mut raw.outlets[i];
    let crest = o.kind.is_some();
    o.min_submergence_m = dice.maybe(5, 0.0..0.2 * depth_m);
    o.flow_min_m3s = dice.maybe(5, 0.0..0.25 * flow_m3s);
    o.flow_max_m3s = dice.maybe(4, 0.4 * flow_m3s..1.3 * flow_m3s);
    if dice.once_in(15) {
        let low_m = water.at(dice.between(0.7..1.0)) + dice.one_of(&[0.0, 1.0]);
        o.pool_window_m = Some((low_m.min(water.surface_m + 1.0), water.surface_m + dice.between(1.1..1.9)));
    }
    if dice.once_in(6) {
        o.avoid.push(RawAvoid { openings: Some((0.4, 0.7)), ..RawAvoid::default() });
    }
    if dice.once_in(5) {
        let from = dice.between(0.05..0.5) * flow_m3s;
        o.avoid.push(RawAvoid { flows_m3s: Some((from, 1.5 * from)), ..RawAvoid::default() });
    }
    if dice.once_in(5) && !crest {
        o.max_entrance_m_s = Some(dice.between(0.2..4.0));
    }
    o.moves_under_flow = dice.one_of(&[None, None, None, None, Some(true), Some(false)]);
}
