//! Reaeration, the oxygen sag and the gain over a fall.

use approx::assert_abs_diff_eq;
use gatemix::water::{self, Aeration, Sag};

use crate::table::{Row, hold};

fn sag(row: &Row) -> Sag {
    Sag {
        deficit_mg_l: row.number("deficit_mg_l"),
        demand_mg_l: row.number("demand_mg_l"),
        decay_per_day: row.number("decay_per_day"),
        reaeration_per_day: row.number("reaeration_per_day"),
    }
}

fn computed(row: &Row) -> f64 {
    let river = |form: fn(f64, f64) -> f64| form(row.number("velocity_m_s"), row.number("depth_m"));
    let lowest = || water::critical_sag(&sag(row)).unwrap_or((f64::NAN, f64::NAN));
    match row.text("formula") {
        "o_connor_dobbins" => river(water::o_connor_dobbins_per_day),
        "churchill" => river(water::churchill_per_day),
        "owens_gibbs" => river(water::owens_gibbs_per_day),
        "critical_days" => lowest().0,
        "critical_deficit" => lowest().1,
        "critical_oxygen" => row.number("saturation_mg_l") - lowest().1,
        "deficit" => water::deficit_mg_l(&sag(row), row.number("days")),
        "fall" => {
            let (quality, weir) = (row.number("quality"), row.number("weir"));
            water::deficit_ratio_of_fall(row.number("fall_m"), quality, weir, row.number("t_c"))
        }
        "efficiency" => water::efficiency_of_ratio(row.number("ratio")),
        "below" => {
            let efficiency = water::efficiency_of_ratio(row.number("ratio"));
            let (oxygen, saturation) = (row.number("oxygen_mg_l"), row.number("saturation_mg_l"));
            Aeration::Efficiency(efficiency).below_mg_l(oxygen, saturation, 20.0)
        }
        other => panic!("no formula {other}"),
    }
}

#[test]
fn published_single_values_of_gas() {
    hold("checks_gas.csv", 17, computed);
}

#[test]
fn scenario_each_river_takes_its_form() {
    let at = |velocity: f64, depth: f64| water::reaeration_per_day(velocity, depth);
    assert_eq!(at(0.3, 1.0), (water::o_connor_dobbins_per_day(0.3, 1.0), true));
    assert_eq!(at(0.8, 1.5), (water::churchill_per_day(0.8, 1.5), true));
    assert_eq!(at(0.4, 0.5), (water::owens_gibbs_per_day(0.4, 0.5), true));
    // beyond what was measured the nearest form is carried on, and told
    assert_eq!(at(1.0, 5.0), (water::churchill_per_day(1.0, 5.0), false));
    assert_eq!(at(0.8, 0.5), (water::owens_gibbs_per_day(0.8, 0.5), false));
    // still and deep water keeps what passes any surface
    assert_eq!(at(0.0, 12.0), (0.6 / 12.0, false));
    assert_abs_diff_eq!(water::reaeration_at_per_day(2.0, 30.0), 2.0 * 1.024_f64.powi(10), epsilon = 1e-12);
}

#[test]
fn scenario_the_sag_without_a_lowest_point() {
    let sag = |deficit_mg_l: f64, demand_mg_l: f64, decay_per_day: f64, reaeration_per_day: f64| Sag {
        deficit_mg_l,
        demand_mg_l,
        decay_per_day,
        reaeration_per_day,
    };
    // little demand and much missing: it only rises
    assert_eq!(water::critical_sag(&sag(5.0, 1.0, 0.2, 0.8)), None);
    assert_eq!(water::critical_sag(&sag(5.0, 0.0, 0.2, 0.8)), None);
    // no reaeration: it only sinks
    assert_eq!(water::critical_sag(&sag(1.0, 5.0, 0.2, 0.0)), None);
    // equal rates: D = (D0 + k L0 t) exp(-k t), lowest at (1 - D0/L0)/k
    let equal = sag(1.0, 8.0, 0.5, 0.5);
    assert_abs_diff_eq!(water::deficit_mg_l(&equal, 2.0), 9.0 * (-1.0_f64).exp(), epsilon = 1e-12);
    let (days, deficit) = water::critical_sag(&equal).unwrap();
    assert_abs_diff_eq!(days, 1.75, epsilon = 1e-12);
    assert_abs_diff_eq!(deficit, 8.0 * (-0.875_f64).exp(), epsilon = 1e-12);
}
