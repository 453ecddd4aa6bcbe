//! The trade curve of a ranking.

use crate::site::Site;
use crate::target::Target;
use crate::tasks::rank::Shown;

use super::super::super::draw::trade::{TradePicture, TradePoint};
use super::Screen;

/// The picture of a ranking, the mix chosen marked.
pub(super) fn picture(screen: &Screen) -> TradePicture {
    let (context, answer) = (&screen.ranked.context, &screen.ranked.answer);
    let site: &Site = context.site();
    let date = context.on.date_naive();
    let valid: Vec<&Target> = site.targets.iter().filter(|t| t.span.contains(date)).collect();
    let point =
        |shown: &Shown| TradePoint { temperature_c: shown.temperature_c, oxygen_mg_l: shown.oxygen_mg_l };
    let unbeaten = answer
        .trade
        .iter()
        .map(|t| TradePoint { temperature_c: t.temperature_c, oxygen_mg_l: t.oxygen_mg_l });
    TradePicture {
        system: screen.model.system(),
        mixes: answer.mixes.iter().map(point).collect(),
        unbeaten: unbeaten.collect(),
        now: answer.now.as_ref().map(point),
        selected: Some(screen.session.rank.at),
        // where several targets are valid, what keeps them all
        low_c: valid.iter().filter_map(|t| t.low_kept_c()).max_by(f64::total_cmp),
        high_c: valid.iter().filter_map(|t| t.high_kept_c()).min_by(f64::total_cmp),
        preferred_c: crate::tasks::preferred_c(context),
        floor_mg_l: valid.iter().filter_map(|t| t.oxygen_min_mg_l).max_by(f64::total_cmp),
        of_day: answer.blocks.len() > 1,
    }
}
