//! The water's way down the invented river: each hour's release is followed as a parcel, by small steps.

use serde_yaml::Value;

use super::super::column::Water;
use super::super::water::oxygen_saturation_mg_l;
use super::heat::net_w_m2;
use super::{Day, Site};

const HEAT_CAPACITY_J_M3_C: f64 = 4.19e6;
const STEP_H: f64 = 0.25;
/// Reaeration at 20 C, 1/day, and its growth with each degree.
const REAERATION_1_DAY: (f64, f64) = (3.4, 1.024);
/// Oxygen made in the light, mg/L/h for each W/m2, and used at 20 C, mg/L/h, growing with each degree.
const MADE: f64 = 5.0e-4;
const USED: (f64, f64) = (0.13, 1.05);

/// A piece of river.
pub(crate) struct Reach {
    pub(crate) length_km: f64,
    pub(crate) depth_m: f64,
    pub(crate) shade: f64,
    /// Flow, m3/s, and hours the water takes.
    pub(crate) travel: Vec<(f64, f64)>,
    /// Where a brook joins, from the dam, km.
    pub(crate) brook_km: Option<f64>,
}

/// A place with a station.
pub(crate) struct Point {
    pub(crate) name: String,
    pub(crate) at_km: f64,
    pub(crate) file: String,
}

pub(super) fn reaches(river: &Value) -> Vec<Reach> {
    let number = |value: &Value| value.as_f64().unwrap();
    let percent = |value: &Value| value.as_str().unwrap().trim_end_matches('%').parse::<f64>().unwrap();
    let reach = |reach: &Value| Reach {
        length_km: number(&reach["length_km"]),
        depth_m: number(&reach["depth"]),
        shade: percent(&reach["shade"]) / 100.0,
        travel: reach["travel_hours"]
            .as_sequence()
            .unwrap()
            .iter()
            .map(|row| (number(&row[0]), number(&row[1])))
            .collect(),
        brook_km: reach["inflows"][0]["at_km"].as_f64(),
    };
    river["reaches"].as_sequence().unwrap().iter().map(reach).collect()
}

pub(super) fn points(river: &Value) -> Vec<Point> {
    let word = |value: &Value| value.as_str().unwrap().to_owned();
    let point = |point: &Value| Point {
        name: word(&point["name"]),
        at_km: point["at_km"].as_f64().unwrap(),
        file: word(&point["observed"]),
    };
    river["points"].as_sequence().unwrap().iter().map(point).collect()
}

impl Reach {
    /// Speed of the water at a flow inside the table, km/h.
    fn km_h(&self, flow_m3s: f64) -> f64 {
        let i = self.travel.partition_point(|row| row.0 <= flow_m3s).clamp(1, self.travel.len() - 1);
        let ((q0, h0), (q1, h1)) = (self.travel[i - 1], self.travel[i]);
        let share = ((flow_m3s - q0) / (q1 - q0)).clamp(0.0, 1.0);
        self.length_km / (h0 + share * (h1 - h0))
    }
}

/// Temperature (C) and oxygen (mg/L) of the water leaving the dam at a time, hours from the first day's midnight: straight
/// between the noons of days.
pub(super) fn leaving(days: &[Day], at_h: f64) -> (f64, f64) {
    let noons = ((at_h - 12.0) / 24.0).clamp(0.0, days.len() as f64 - 1.0);
    let (before, after) = (noons.floor() as usize, noons.ceil() as usize);
    let share = noons - noons.floor();
    let blended = days[before].released.blended(days[after].released, share);
    (blended.temperature_c, blended.oxygen_mg_l)
}

/// What passes a point by the hour: times (hours from the first day's midnight), temperature and oxygen, for the water
/// that left the dam in the hours of `days`.
pub(super) fn passing(site: &Site, days: &[Day], at_km: f64) -> Vec<(f64, f64, f64)> {
    (0..24 * days.len()).filter_map(|hour| parcel(site, days, hour as f64, at_km)).collect()
}

/// The parcel that left at a time, when and how it passes a place; `None` past the last day.
fn parcel(site: &Site, days: &[Day], left_h: f64, at_km: f64) -> Option<(f64, f64, f64)> {
    let mut flow_m3s = days.get(left_h as usize / 24)?.flow_m3s;
    let (mut t, mut oxygen) = leaving(days, left_h);
    let (mut now_h, mut km, mut end_km) = (left_h, 0.0, 0.0);
    let mut joined = false;
    for reach in &site.reaches {
        end_km += reach.length_km;
        while km < end_km.min(at_km) - 1e-9 {
            let brook_km = reach.brook_km.filter(|_| !joined);
            if let Some(brook) =
                brook_km.filter(|&brook| km >= brook - 1e-9).map(|_| days[now_h as usize / 24].brook)
            {
                let share = brook.flow_m3s / (brook.flow_m3s + flow_m3s);
                let Water { temperature_c, oxygen_mg_l, .. } = brook.water;
                t += share * (temperature_c - t);
                oxygen += share * (oxygen_mg_l - oxygen);
                flow_m3s += brook.flow_m3s;
                joined = true;
                continue;
            }
            let speed = reach.km_h(flow_m3s);
            let next_km = brook_km.unwrap_or(end_km).min(end_km).min(at_km);
            let step_h = STEP_H.min((next_km - km) / speed);
            let air = &days.get(now_h as usize / 24)?.hours[now_h as usize % 24];
            t += net_w_m2(air, t, reach.shade) * 3600.0 * step_h / (HEAT_CAPACITY_J_M3_C * reach.depth_m);
            let (k_day, grows) = REAERATION_1_DAY;
            let missing = oxygen_saturation_mg_l(t, site.full_m - 30.0) - oxygen;
            oxygen += k_day / 24.0 * grows.powf(t - 20.0) * missing * step_h;
            oxygen += (MADE * air.sun_w_m2 - USED.0 * USED.1.powf(t - 20.0)) * step_h;
            km += speed * step_h;
            now_h += step_h;
        }
    }
    Some((now_h, t, oxygen.max(0.0)))
}
