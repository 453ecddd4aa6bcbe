//! The release each point would need for its rules today.

use crate::mix::RuleToday;
use crate::tasks::Context;

use super::Way;

/// The release that keeps a point inside its rules today, as far as one does.
#[derive(Debug, Clone, PartialEq)]
pub struct Window {
    /// Index in the points of the river; `None` for the dam itself.
    pub point: Option<usize>,
    /// Coldest release that keeps every rule of the point, C; `None` where none asks for warmth.
    pub low_c: Option<f64>,
    /// Warmest, C; `None` where none asks for cold.
    pub high_c: Option<f64>,
    /// Rules, by their index in the targets, that set the ends.
    pub set_by: [Option<usize>; 2],
    /// Whether any release keeps them all.
    pub reachable: bool,
    /// Least oxygen of the release that keeps the floors at the temperature of the way spoken of, mg/L; `None` where
    /// there is no floor or it cannot be told.
    pub oxygen_min_mg_l: Option<f64>,
    /// The rule that sets it.
    pub oxygen_set_by: Option<usize>,
    /// What the point asks of its own temperature today, C, all its rules together.
    pub asked_c: [Option<f64>; 2],
    /// Its floor, mg/L.
    pub floor_mg_l: Option<f64>,
    /// What cannot be told, and why.
    pub unknown: Vec<String>,
}

/// The windows of the dam and of every point that rules speak of, under the flows of a way.
pub(super) fn windows(context: &Context, way: &Way) -> Vec<Window> {
    let site = context.site();
    let rules = context.day().rules(site);
    let points = site.river.as_ref().map_or(0, |r| r.points.len());
    let places = std::iter::once(None).chain((0..points).map(Some));
    let of = |point: Option<usize>| {
        let here: Vec<&RuleToday> = rules
            .iter()
            .filter(|r| r.point == point && site.targets.get(r.target).is_some_and(|t| !t.soft))
            .collect();
        (!here.is_empty()).then(|| window(context, way, point, &here))
    };
    places.filter_map(of).collect()
}

/// The window of a place under its rules.
fn window(context: &Context, way: &Way, point: Option<usize>, rules: &[&RuleToday]) -> Window {
    let _ = (context, way, rules);
    Window {
        point,
        low_c: None,
        high_c: None,
        set_by: [None, None],
        reachable: true,
        oxygen_min_mg_l: None,
        oxygen_set_by: None,
        asked_c: [None, None],
        floor_mg_l: None,
        unknown: Vec::new(),
    }
}
