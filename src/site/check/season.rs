//! Checks of how the season ahead is looked at.

use std::ops::RangeInclusive;

use crate::problem::Problem;
use crate::site::{
    Case, Knobs, Raw, RawCase, RawReserve, RawSeason, RawStages, Reserve, SeasonInputs, Stages, Strategy,
};
use crate::target::{DAM, YearDay};
use crate::units::say;
use crate::water::extinction_per_m;

use super::months;
use super::outlets::positive;

/// Days between decisions (choice: from every day to once a year).
const DECIDE_DAYS: RangeInclusive<usize> = 1..=366;
/// Thickness of a layer, m (choice: thinner ones cost time and show nothing, thicker ones smear a thermocline).
const LAYER_M: RangeInclusive<f64> = 0.1..=10.0;
/// Depth at which a white disk is lost from sight, m (choice: from mud to the clearest lakes).
const SECCHI_M: RangeInclusive<f64> = 0.1..=50.0;
/// Extinction of light, per m (choice: that of pure water to that of mud).
const LIGHT_PER_M: RangeInclusive<f64> = 0.02..=20.0;
/// Share of the work of the wind (choice: none to beyond the 1.3 of the literature).
const WIND_SHARE: RangeInclusive<f64> = 0.0..=2.0;
/// Factor on the diffusion (choice: none to far beyond any published spread).
const DIFFUSION: RangeInclusive<f64> = 0.0..=100.0;
/// Oxygen taken by the water, mg/L per day (choice: none to that of sewage).
const WATER_DEMAND: RangeInclusive<f64> = 0.0..=10.0;
/// Oxygen taken by the bed, g/m2 per day (choice: none to that of sludge).
const BED_DEMAND: RangeInclusive<f64> = 0.0..=20.0;
/// Transfer of oxygen through the surface, m/day (choice: none to that of a storm).
const TRANSFER_M_DAY: RangeInclusive<f64> = 0.0..=20.0;
/// Surface water taken in, as a share of the inflow (choice).
const TAKES_IN: RangeInclusive<f64> = 0.0..=5.0;
/// Least share above none that is believed to be meant in percent (choice): 0.2 stands for 20 % more often than for
/// 0.2 %.
const LEAST_SHARE: f64 = 0.01;
/// Likewise of a case: 1.1 stands for 110 % more often than for 1.1 % (choice).
const LEAST_FACTOR: f64 = 0.1;
/// Shift of a case, C (choice: either way).
const MOST_SHIFT_C: f64 = 15.0;
/// Factor of a case on wind and inflow (choice).
const FACTOR: RangeInclusive<f64> = 0.0..=10.0;

/// The checked figures of the season; what is left out is as usual.
pub(super) fn season(raw: &Raw, problems: &mut Vec<Problem>) -> SeasonInputs {
    let (r, usual) = (&raw.season, SeasonInputs::default());
    ranges(r, problems);
    let days = r.decide_days.unwrap_or(usual.decide_days as usize);
    if !DECIDE_DAYS.contains(&days) {
        let words = format!("decide_days must be {} to {}", DECIDE_DAYS.start(), DECIDE_DAYS.end());
        problems.push(Problem::refused("season", words, "7 is a week").at("season.decide_days"));
    }
    SeasonInputs {
        knobs: Knobs {
            wind: r.wind.unwrap_or(usual.knobs.wind),
            light_per_m: r
                .light_per_m
                .or(r.secchi_m.map(extinction_per_m))
                .unwrap_or(usual.knobs.light_per_m),
            diffusion: r.diffusion.unwrap_or(usual.knobs.diffusion),
            water_demand_mg_l_day: r.water_demand_mg_l_day.unwrap_or(usual.knobs.water_demand_mg_l_day),
            bed_demand_g_m2_day: r.bed_demand_g_m2_day.unwrap_or(usual.knobs.bed_demand_g_m2_day),
        },
        layer_m: r.layer_m.unwrap_or(usual.layer_m),
        step_s: usual.step_s,
        decide_days: u32::try_from(days).unwrap_or(usual.decide_days),
        strategy: strategy(r, problems),
        inflow_takes_in: r.inflow_takes_in.unwrap_or(usual.inflow_takes_in),
        evaporates: r.evaporates.unwrap_or(usual.evaporates),
        transfer_m_day: r.transfer_m_day.unwrap_or(usual.transfer_m_day),
        monthly: monthly(raw, problems),
        weather: weather(raw, problems),
        years: r.years.clone(),
        cases: r.cases.as_deref().map_or(usual.cases, |cases| self::cases(cases, problems)),
        reserves: r.reserves.iter().enumerate().filter_map(|(i, r)| reserve(r, i, problems)).collect(),
        stages: stages(raw, problems),
    }
}

/// Flags a share that reads like a part of one rather than like percent.
fn in_percent(share: Option<f64>, least: f64, path: &str, problems: &mut Vec<Problem>) {
    if let Some(share) = share.filter(|share| *share > 0.0 && *share < least) {
        // without the round-off of the way from percent
        let told = |percent: f64| (1e4 * percent).round() / 1e4;
        let words = format!("{} % is hardly any", told(100.0 * share));
        let (of_one, meant) = (told(100.0 * share), told(1e4 * share));
        let cure = format!("it is read in percent: where {of_one} of one is meant write {meant} %");
        problems.push(Problem::flag("share-small", words, cure).at(path));
    }
}

fn ranges(r: &RawSeason, problems: &mut Vec<Problem>) {
    for (share, key) in [(r.wind, "wind_share"), (r.inflow_takes_in, "inflow_takes_in")] {
        in_percent(share, LEAST_SHARE, &format!("season.{key}"), problems);
    }
    let mut refuse = |key: &str, words: String, cure: &str| {
        problems.push(Problem::refused("season", words, cure).at(format!("season.{key}")));
    };
    let outside =
        |value: Option<f64>, range: &RangeInclusive<f64>| value.is_some_and(|v| !range.contains(&v));
    for (value, key, range) in [(r.layer_m, "layer", LAYER_M), (r.secchi_m, "secchi", SECCHI_M)] {
        if outside(value, &range) {
            let words =
                format!("{key} lies outside {} to {}", say::m(*range.start(), 1), say::m(*range.end(), 0));
            refuse(key, words, "check the figure and its unit");
        }
    }
    for (value, key, range, unit) in [
        (r.light_per_m, "light_per_m", LIGHT_PER_M, " per m"),
        (r.diffusion, "diffusion", DIFFUSION, ""),
        (r.water_demand_mg_l_day, "oxygen_demand.water", WATER_DEMAND, " mg/L per day"),
        (r.bed_demand_g_m2_day, "oxygen_demand.bed", BED_DEMAND, " g/m2 per day"),
        (r.transfer_m_day, "transfer_m_per_day", TRANSFER_M_DAY, " m per day"),
    ] {
        if outside(value, &range) {
            let words = format!("{key} lies outside {} to {}{unit}", range.start(), range.end());
            refuse(key, words, "check the figure and its unit");
        }
    }
    for (value, key, range) in
        [(r.wind, "wind_share", WIND_SHARE), (r.inflow_takes_in, "inflow_takes_in", TAKES_IN)]
    {
        if outside(value, &range) {
            let words = format!("{key} lies outside 0 to {:.0} %", 100.0 * range.end());
            refuse(key, words, "give percent");
        }
    }
    if r.secchi_m.is_some() && r.light_per_m.is_some() {
        let words = "secchi and light_per_m both tell the light".to_owned();
        refuse("secchi", words, "give one of both");
    }
}

fn strategy(r: &RawSeason, problems: &mut Vec<Problem>) -> Strategy {
    let Some(name) = r.strategy.as_deref() else { return Strategy::default() };
    Strategy::parse(name).unwrap_or_else(|| {
        let known: Vec<&str> = Strategy::NAMES.iter().map(|(name, _)| *name).collect();
        let words = format!("`{name}` is not a strategy");
        let cure = format!("use one of {}", known.join(", "));
        problems.push(Problem::refused("strategy", words, cure).at("season.strategy"));
        Strategy::default()
    })
}

/// The months over the pool: its own, else those of the river.
fn monthly(raw: &Raw, problems: &mut Vec<Problem>) -> Option<Box<[crate::weather::Air; 12]>> {
    if let Some(own) = &raw.season.monthly {
        return months::air(own, raw, "season.monthly", problems).map(Box::new);
    }
    let of_river = raw.river.as_ref()?.monthly.as_ref()?;
    // what is wrong with them is told at the river
    months::air(of_river, raw, "river.monthly", &mut Vec::new()).map(Box::new)
}

/// The weather file where the river names none: a folder has one.
fn weather(raw: &Raw, problems: &mut Vec<Problem>) -> Option<String> {
    let own = raw.season.weather.clone()?;
    let of_river = raw.river.as_ref().and_then(|river| river.weather.as_ref());
    if of_river.is_some_and(|file| *file != own) {
        let words = "another file than river.weather is named, and pool and river have one weather";
        problems.push(Problem::refused("season", words, "name it once, at the river").at("season.weather"));
    }
    Some(own)
}

fn cases(cases: &[RawCase], problems: &mut Vec<Problem>) -> Vec<Case> {
    if cases.is_empty() {
        let cure = "list one at least, or leave `cases` out for warm, middling and cool";
        problems.push(Problem::refused("season", "there is no case", cure).at("season.cases"));
    }
    let mut out: Vec<Case> = Vec::new();
    for (i, c) in cases.iter().enumerate() {
        let at = |key: &str| format!("season.cases[{i}].{key}");
        for (value, key) in [(c.air_c, "air"), (c.inflow_c, "inflow_temperature")] {
            if value.is_some_and(|v| v.abs() > MOST_SHIFT_C) {
                let words = format!("no case shifts {key} by more than {}", say::dc(MOST_SHIFT_C, 0));
                let cure = "give the step from what is given, such as +2, not a temperature";
                problems.push(Problem::refused("season", words, cure).at(at(key)));
            }
        }
        for (value, key) in [(c.wind, "wind"), (c.inflow, "inflow")] {
            in_percent(value, LEAST_FACTOR, &at(key), problems);
            if value.is_some_and(|v| !FACTOR.contains(&v)) {
                let words = format!("{key} lies outside 0 to {:.0} %", 100.0 * FACTOR.end());
                problems.push(
                    Problem::refused("season", words, "give percent of what is given, such as 80%")
                        .at(at(key)),
                );
            }
        }
        let Some(name) = c.name.clone() else { continue };
        named(&name, out.iter().any(|other| other.name == name), "case", at("name"), problems);
        out.push(Case {
            name,
            air_c: c.air_c.unwrap_or(0.0),
            wind: c.wind.unwrap_or(1.0),
            inflow: c.inflow.unwrap_or(1.0),
            inflow_c: c.inflow_c.unwrap_or(0.0),
        });
    }
    out
}

/// A name is there and is used once.
fn named(name: &str, taken: bool, what: &str, path: String, problems: &mut Vec<Problem>) {
    if name.trim().is_empty() {
        let words = format!("`{name}` names no {what}");
        problems.push(Problem::refused("name", words, "give a word").at(path));
    } else if taken {
        let words = format!("the name `{name}` is already used by another {what}");
        problems.push(Problem::refused("name-twice", words, "give each a name of its own").at(path));
    }
}

fn day(text: Option<&str>, path: String, problems: &mut Vec<Problem>) -> Option<YearDay> {
    let text = text?;
    let day = YearDay::parse(text);
    if day.is_none() {
        let words = format!("`{text}` is not a day of the year");
        problems.push(Problem::refused("date", words, "write month-day, such as 08-01").at(path));
    }
    day
}

fn reserve(r: &RawReserve, i: usize, problems: &mut Vec<Problem>) -> Option<Reserve> {
    let at = |key: &str| format!("season.reserves[{i}].{key}");
    let from = day(r.from.as_deref(), at("from"), problems);
    positive(r.volume_m3, at("volume"), "volume", problems);
    Some(Reserve { from: from?, colder_c: r.colder_c?, volume_m3: r.volume_m3? })
}

fn stages(raw: &Raw, problems: &mut Vec<Problem>) -> Vec<Stages> {
    let points = raw.river.iter().flat_map(|r| &r.points).filter_map(|p| p.name.as_deref());
    let points: Vec<&str> = std::iter::once(DAM).chain(points).collect();
    let mut out: Vec<Stages> = Vec::new();
    for (i, s) in raw.season.stages.iter().enumerate() {
        let at = |key: &str| format!("season.stages[{i}].{key}");
        let point = s.point.as_deref().unwrap_or(DAM);
        if !points.contains(&point) {
            let known: Vec<String> = points.iter().map(|name| format!("`{name}`")).collect();
            let words = format!("no point is named `{point}`");
            let cure = format!("use {}", known.join(" or "));
            problems.push(Problem::refused("unknown-point", words, cure).at(at("point")));
        }
        let rising = s.at.windows(2).all(|pair| matches!(pair, [a, b] if a.1 < b.1));
        if s.at.is_empty() || !rising || s.at.first().is_some_and(|first| first.1 <= 0.0) {
            let words = "the stages need degree-days above zero that rise from one to the next";
            let cure = "write at: { hatch: 450, emergence: 900 }";
            problems.push(Problem::refused("season", words, cure).at(at("at")));
        }
        let since = day(s.from.as_deref(), at("from"), problems);
        let Some(built) = build(s, point, since) else { continue };
        named(&built.name, out.iter().any(|o| o.name == built.name), "set of stages", at("name"), problems);
        out.push(built);
    }
    out
}

fn build(s: &RawStages, point: &str, since: Option<YearDay>) -> Option<Stages> {
    Some(Stages {
        name: s.name.clone()?,
        point: point.to_owned(),
        since: since?,
        base_c: s.base_c.unwrap_or(0.0),
        at: s.at.clone(),
    })
}
