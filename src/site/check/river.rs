//! Checks of the river: its points and what trades heat with it.

use crate::problem::Problem;
use crate::site::{Afterbay, Decay, Point, Raw, RawPoint, RawRiver, River, Surface, Yearly};
use crate::target::DAM;
use crate::units::say;

use super::outlets::{not_negative, positive};
use super::reaches;

/// Water below this does not flow, C (standard).
const FREEZING_C: f64 = 0.0;

/// The checked river; `None` where the file names one at most.
pub(super) fn river(raw: &Raw, problems: &mut Vec<Problem>) -> Option<River> {
    let river = raw.river.as_ref()?;
    if river.reaches.is_empty() {
        let only_named = *river == RawRiver::default();
        if !only_named {
            let words = "the river is described without a reach";
            problems
                .push(Problem::refused("no-reach", words, "list its reaches, from the dam down").at("river"));
        }
        return None;
    }
    let reaches = reaches::reaches(river, problems);
    let surface = surface(raw, river, problems);
    let afterbay = river.afterbay.and_then(|a| {
        let at = |key: &str| format!("river.afterbay.{key}");
        positive(a.volume_m3, at("volume"), "volume", problems);
        positive(a.area_m2, at("area"), "area", problems);
        let mixed = a.mixed.unwrap_or(1.0);
        if !(mixed > 0.0 && mixed <= 1.0) {
            let words = "the share that mixes lies outside 0 to 100 %";
            problems.push(Problem::refused("share", words, "give 100 where all of it mixes").at(at("mixed")));
        }
        Some(Afterbay { volume_m3: a.volume_m3?, area_m2: a.area_m2?, mixed })
    });
    let decay = river.decay.map_or(Decay::default(), |(demand, per_day)| {
        let per_day_at = "river.decay.per_day".to_owned();
        not_negative(demand, "river.decay.demand".into(), "demand", problems);
        not_negative(per_day, per_day_at, "per_day", problems);
        Decay { demand_mg_l: demand.unwrap_or(0.0), per_day: per_day.unwrap_or(0.0) }
    });
    let end_m = reaches.iter().map(|r| r.as_ref().map(crate::site::Reach::to_m)).next_back().flatten();
    let mut points = Vec::new();
    for (i, p) in river.points.iter().enumerate() {
        points.push(point(p, i, end_m, problems));
    }
    reaches::names(river, problems);
    let mut points = points.into_iter().collect::<Option<Vec<_>>>()?;
    points.sort_by(|a, b| a.at_m.total_cmp(&b.at_m));
    Some(River { reaches: reaches.into_iter().collect::<Option<_>>()?, points, afterbay, surface, decay })
}

fn point(p: &RawPoint, i: usize, end_m: Option<f64>, problems: &mut Vec<Problem>) -> Option<Point> {
    let path = format!("river.points[{i}]");
    if let (Some(at_m), Some(end_m)) = (p.at_m, end_m)
        && !(0.0..=end_m + reaches::SLACK_M).contains(&at_m)
    {
        let words = format!(
            "it lies {} from the dam, where the river described ends at {}",
            say::along(at_m, 2),
            say::along(end_m, 2)
        );
        problems.push(Problem::refused("outside-river", words, "correct at_km, or add a reach").at(&path));
    }
    not_negative(p.warning_h, format!("{path}.warning_hours"), "warning_hours", problems);
    let fall = format!("{path}.max_stage_fall_per_hour");
    if p.stage_fall_m_per_hour.is_some() && p.rating.is_empty() {
        let words = "a limit of the fall of the stage, and no rating tells the stage";
        problems.push(Problem::refused("stage-fall", words, "give the point a rating").at(&fall));
    }
    positive(p.stage_fall_m_per_hour, fall, "max_stage_fall_per_hour", problems);
    let rising = p.rating.windows(2).all(|rows| match *rows {
        [(q0, s0), (q1, s1)] => q0 < q1 && s0 < s1,
        _ => true,
    });
    if !rising || p.rating.len() == 1 || p.rating.first().is_some_and(|row| row.0 < 0.0) {
        problems.push(
            Problem::refused(
                "stage-rating",
                "a stage rating needs at least two rows, flow and stage both rising",
                "write rating: [[5, 0.4], [20, 0.9], [60, 1.8]]",
            )
            .at(format!("{path}.rating")),
        );
    }
    Some(Point {
        name: p.name.clone()?,
        at_m: p.at_m?.min(end_m?),
        rating: p.rating.clone(),
        stage_fall_m_per_hour: p.stage_fall_m_per_hour,
        observed: p.observed.clone(),
        warning_h: p.warning_h,
    })
}

/// What trades heat with the river: a weather file before months, months before a given equilibrium.
fn surface(raw: &Raw, river: &RawRiver, problems: &mut Vec<Problem>) -> Option<Surface> {
    let given = match (&river.equilibrium_c, &river.exchange_w_m2_c) {
        (Some(equilibrium_c), Some(exchange_w_m2_c)) => Some(Surface::Given {
            equilibrium_c: equilibrium_c.clone(),
            exchange_w_m2_c: exchange_w_m2_c.clone(),
        }),
        (None, None) => None,
        (Some(_), None) => {
            let words = "an equilibrium is given without its exchange";
            let cure = "add exchange_w_m2_c, often 20 to 40, or give weather";
            problems.push(Problem::refused("equilibrium", words, cure).at("river.equilibrium"));
            None
        }
        (None, Some(_)) => {
            let words = "an exchange is given without an equilibrium";
            let cure = "add equilibrium, the temperature that still water would settle at, or give weather";
            problems.push(Problem::refused("equilibrium", words, cure).at("river.exchange_w_m2_c"));
            None
        }
    };
    if river.equilibrium_c.as_ref().is_some_and(|t| extreme(t, f64::max) > *reaches::WATER_C.end()) {
        let words = format!("no equilibrium above {} is meant", say::c(*reaches::WATER_C.end(), 0));
        problems.push(Problem::refused("equilibrium", words, "check its unit").at("river.equilibrium"));
    }
    if river.equilibrium_c.as_ref().is_some_and(|t| extreme(t, f64::min) < FREEZING_C) {
        let words = "the equilibrium lies below freezing, and no ice is computed";
        let cure = "give the months of open water, with 0 C for the others";
        problems.push(Problem::refused("equilibrium", words, cure).at("river.equilibrium"));
    }
    if river.exchange_w_m2_c.as_ref().is_some_and(|k| extreme(k, f64::min) <= 0.0) {
        let at = "river.exchange_w_m2_c".to_owned();
        positive(Some(0.0), at, "exchange_w_m2_c", problems);
    }
    let months = river.monthly.as_ref().and_then(|m| super::months::air(m, raw, "river.monthly", problems));
    let all = [river.weather.is_some(), river.monthly.is_some(), given.is_some()];
    if all.iter().filter(|is| **is).count() > 1 {
        let used = if river.weather.is_some() { "the weather file" } else { "the monthly weather" };
        let words = format!("the river has its weather in more than one way: {used} is used");
        problems.push(Problem::note("weather-twice", words).at("river"));
    }
    if all == [false; 3] && river.equilibrium_c.is_none() && river.exchange_w_m2_c.is_none() {
        problems.push(
            Problem::flag(
                "no-weather",
                "nothing tells what the river trades with the air, so no temperature below the dam is computed",
                "give weather: weather.csv, monthly: {...}, or equilibrium and exchange_w_m2_c",
            )
            .at("river"),
        );
    }
    river.weather.clone().map(Surface::File).or(months.map(|m| Surface::Monthly(Box::new(m)))).or(given)
}

fn extreme(yearly: &Yearly, of: fn(f64, f64) -> f64) -> f64 {
    (2..=12).fold(yearly.in_month(1), |so_far, month| of(so_far, yearly.in_month(month)))
}

/// Targets name the dam or a point of the river.
pub(super) fn points_of_targets(raw: &Raw, problems: &mut Vec<Problem>) {
    let named: Vec<&str> =
        raw.river.iter().flat_map(|r| &r.points).filter_map(|p| p.name.as_deref()).collect();
    for (i, target) in raw.targets.iter().enumerate() {
        let Some(point) = target.point.as_deref().filter(|p| *p != DAM && !named.contains(p)) else {
            continue;
        };
        let known: Vec<String> = [DAM].iter().chain(&named).map(|n| format!("`{n}`")).collect();
        let cure = format!("use {}", known.join(" or "));
        problems.push(
            Problem::refused("unknown-point", format!("no point is named `{point}`"), cure)
                .at(format!("targets[{i}].point")),
        );
    }
}
