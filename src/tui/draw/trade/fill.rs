//! The picture of a ranking.

use crate::site::Site;
use crate::target::{DAM, Target};
use crate::tasks::rank::{RankAnswer, Shown};
use crate::units::System;

use super::{TradePicture, TradePoint};

impl TradePicture {
    /// The trade of a ranking. Its ranges are those left when every target valid on the date is to be kept.
    pub fn of(site: &Site, system: System, answer: &RankAnswer, selected: Option<usize>) -> Self {
        let point =
            |shown: &Shown| TradePoint { temperature_c: shown.temperature_c, oxygen_mg_l: shown.oxygen_mg_l };
        let unbeaten = answer.trade.iter();
        let unbeaten = unbeaten
            .map(|t| TradePoint { temperature_c: t.temperature_c, oxygen_mg_l: t.oxygen_mg_l })
            .collect();
        // every shown mix is held against the same targets: those valid on the date
        let held = answer.mixes.first().or(answer.now.as_ref()).map_or(&[][..], |shown| &shown.targets);
        // its axes are those of the release: rules of other places and kinds stand in the words beside it
        let of_release = |rule: &&Target| rule.point == DAM && rule.is_of_temperature() && !rule.soft;
        let rules = || held.iter().filter_map(|s| site.targets.get(s.target)).filter(of_release);
        Self {
            system,
            mixes: answer.mixes.iter().map(point).collect(),
            unbeaten,
            now: answer.now.as_ref().map(point),
            selected,
            low_c: rules().filter_map(Target::low_kept_c).reduce(f64::max),
            high_c: rules().filter_map(Target::high_kept_c).reduce(f64::min),
            preferred_c: rules().find_map(|t| t.preferred_c),
            floor_mg_l: rules().filter_map(|t| t.oxygen_min_mg_l).reduce(f64::max),
            of_day: answer.blocks.len() > 1,
        }
    }
}
