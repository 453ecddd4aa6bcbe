//! Wells and outlets of `site.yaml`.

use crate::files::cursor::{Map, Value};
use crate::files::yaml::Node;
use crate::problem::Problem;
use crate::site::{GenerationLost, Leakage, Opens, Position, RawAeration, RawAvoid, RawOutlet, RawWell};
use crate::units::Dimension;

use super::limits::reason;
use super::{In, each, number, pair, set_number, text, within};

pub(super) fn well(read: &In, map: &Map) -> RawWell {
    RawWell {
        name: map.required("name").and_then(|v| v.text().map(str::to_owned)),
        conduit_m: read.required(map, "conduit", Dimension::Length),
        max_open: number(map, "max_open"),
        max_head_loss_m: read.optional(map, "max_head_loss", Dimension::Length),
        min_flow_m3s: read.optional(map, "min_flow", Dimension::Flow),
        max_flow_m3s: read.optional(map, "max_flow", Dimension::Flow),
        plan_area_m2: read.optional(map, "plan_area", Dimension::Area),
        aeration: aeration(read, map),
    }
}

pub(super) fn outlet(read: &In, map: &Map) -> RawOutlet {
    let mut out = RawOutlet {
        name: map.required("name").and_then(|v| v.text().map(str::to_owned)),
        well: text(map, "well"),
        kind: text(map, "kind"),
        centre_m: read.required(map, "centre", Dimension::Length),
        height_m: read.optional(map, "height", Dimension::Length),
        width_m: read.optional(map, "width", Dimension::Length),
        diameter_m: read.optional(map, "diameter", Dimension::Length),
        angle_deg: number(map, "angle"),
        loss: number(map, "loss"),
        discharge: number(map, "discharge"),
        opens: opens(map),
        gated: map.optional("gated").and_then(|v| v.boolean()),
        min_submergence_m: read.optional(map, "min_submergence", Dimension::Length),
        max_entrance_m_s: read.optional(map, "max_entrance_velocity", Dimension::Velocity),
        moves_under_flow: map.optional("moves_under_flow").and_then(|v| v.boolean()),
        uncertain: map.optional("uncertain").and_then(|v| v.boolean()).unwrap_or(false),
        ..RawOutlet::default()
    };
    out.rating = map
        .optional("rating")
        .and_then(|v| v.list())
        .unwrap_or_default()
        .iter()
        .filter_map(|row| pair(read, row, [Dimension::Length, Dimension::Flow]))
        .collect();
    out.positions = map
        .optional("positions")
        .and_then(|v| v.list())
        .unwrap_or_default()
        .iter()
        .filter_map(|v| position(read, v))
        .collect();
    within(map, "flow", |m| {
        out.flow_min_m3s = read.optional(m, "min", Dimension::Flow);
        out.flow_max_m3s = read.optional(m, "max", Dimension::Flow);
    });
    within(map, "leakage", |m| {
        let flow = read.required(m, "flow", Dimension::Flow);
        let head = read.required(m, "head", Dimension::Length);
        let range_m3s = m.optional("range").and_then(|v| pair(read, &v, [Dimension::Flow, Dimension::Flow]));
        out.leakage = flow.zip(head).map(|(flow_m3s, head_m)| Leakage { flow_m3s, head_m, range_m3s });
    });
    out.aeration = aeration(read, map);
    let span = |m: &Map, key, dimension| m.optional(key).and_then(|v| pair(read, &v, [dimension, dimension]));
    out.pool_window_m = span(map, "pool_window", Dimension::Length);
    out.avoid = each(map, "avoid", |m| RawAvoid {
        openings: span(m, "open", Dimension::Percent).map(|(from, to)| (from / 100.0, to / 100.0)),
        flows_m3s: span(m, "flow", Dimension::Flow),
        reason: reason(m),
    });
    within(map, "crew", |m| {
        set_number(m, "hours", &mut out.crew.hours);
        set_number(m, "lead_days", &mut out.crew.lead_days);
        set_number(m, "cost", &mut out.crew.cost);
    });
    within(map, "generation_lost", |m| {
        let flow = read.required(m, "flow", Dimension::Flow);
        let power = m.required("power").and_then(|v| v.number());
        out.generation_lost =
            flow.zip(power).map(|(flow_m3s, power_mw)| GenerationLost { flow_m3s, power_mw });
    });
    out
}

/// What the conduit of a well or of a direct outlet does to oxygen.
fn aeration(read: &In, map: &Map) -> Option<RawAeration> {
    let mut out = None;
    within(map, "aeration", |m| {
        let percent = |value: f64| value / 100.0;
        let efficiency = read.optional(m, "efficiency", Dimension::Percent).map(percent);
        // the range is in the unit of the figure it stands about
        let (dimension, factor) =
            if efficiency.is_some() { (Dimension::Percent, 0.01) } else { (Dimension::Concentration, 1.0) };
        let range = m.optional("range").and_then(|v| pair(read, &v, [dimension, dimension]));
        out = Some(RawAeration {
            fall_m: read.optional(m, "fall", Dimension::Length),
            quality: number(m, "quality"),
            form: number(m, "form"),
            efficiency,
            gain_mg_l: read.optional(m, "gain", Dimension::Concentration),
            range: range.map(|(low, high)| (factor * low, factor * high)),
        });
    });
    out
}

fn opens(map: &Map) -> Opens {
    let Some(value) = map.optional("opens") else { return Opens::Up };
    match value.text() {
        Some("up") | None => Opens::Up,
        Some("down") => Opens::Down,
        Some("both") => Opens::Both,
        Some(_) => {
            value.report(Problem::refused(
                "opens",
                "a gate opens `up`, `down` or `both`",
                "say from which edge the open part grows",
            ));
            Opens::Up
        }
    }
}

fn position(read: &In, value: &Value) -> Option<Position> {
    if let Node::Map(_) = value.node() {
        let map = value.map()?;
        let name = map.required("name").and_then(|v| v.text().map(str::to_owned));
        let crest_m = read.optional(&map, "crest", Dimension::Length);
        let opening = read.optional(&map, "open", Dimension::Percent).map_or(1.0, |p| p / 100.0);
        map.finish();
        return Some(Position { name: name?, opening, crest_m });
    }
    let percent = read.quantity(value, Dimension::Percent)?;
    Some(Position { name: format!("{percent}"), opening: percent / 100.0, crest_m: None })
}
