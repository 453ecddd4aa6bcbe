//! Rules of the whole mix: what the search tries each mix by, and how a miss is told.
//!
//! Methods: `docs/methods.md`, section 10.

use crate::mix::limits::{self, Before, Check, Of, Rule, Whole};

use super::Question;

/// A rule of the whole mix.
#[derive(Debug, Clone, Copy)]
pub(super) enum WholeRule {
    /// No more solids in any block, mg/L.
    Solids(f64),
    /// No less in any block, leaks and spill counted in, m3/s.
    ReleaseMin(f64),
    /// No more in any block.
    ReleaseMax(f64),
    /// A share of the release, at least.
    ShareMin(usize, f64),
    /// A share of the release, at most.
    ShareMax(usize, f64),
    /// A change of temperature from what is released now (C), at most.
    TemperatureChange {
        /// Temperature now, C.
        from_c: f64,
        /// Greatest change, C.
        most_c: f64,
    },
    /// No more moves.
    Moves(f64),
    /// No more crew hours.
    CrewHours(f64),
    /// A layer not to be drawn through a shared level; its index among such layers.
    Undrawn(usize),
}

/// What a rule of the whole is called and how a miss of it is told.
pub(super) struct Told {
    pub(super) rule: Rule,
    of: Of,
    item: usize,
    bound: f64,
    /// 1 where too much is a miss, -1 where too little is.
    side: f64,
}

impl Told {
    fn whole(rule: Rule, bound: f64) -> Self {
        Self { rule, of: Of::Whole, item: 0, bound, side: 1.0 }
    }

    pub(super) fn check(&self, miss: f64) -> Check {
        let Self { rule, of, item, bound, side } = *self;
        Check { rule, of, item, found: bound + side * miss, bound, room: -miss }
    }
}

/// Rules of the whole mix that depend on which mix it is, each with how it is told. `shared` where several units draw
/// through one level, `beside` where more may leave the dam than is asked for: leaks, or spill.
pub(super) fn whole_rules(question: &Question, shared: bool, beside: bool) -> (Vec<WholeRule>, Vec<Told>) {
    let l = &question.site.limits;
    let mut rules: Vec<(WholeRule, Told)> = Vec::new();
    if let Some(most) = l.solids_max_mg_l {
        rules.push((WholeRule::Solids(most), Told::whole(Rule::SolidsMax, most)));
    }
    if beside {
        if let Some(least) = question.site.release.min_m3s {
            let told = Told { side: -1.0, ..Told::whole(Rule::ReleaseMin, least) };
            rules.push((WholeRule::ReleaseMin(least), told));
        }
        if let Some(most) = question.site.release.max_m3s {
            rules.push((WholeRule::ReleaseMax(most), Told::whole(Rule::ReleaseMax, most)));
        }
    }
    for (i, share) in l.shares.iter().enumerate() {
        let of = Of::Share(i);
        if let Some(least) = share.min {
            let told = Told { of, side: -1.0, ..Told::whole(Rule::ShareMin, least) };
            rules.push((WholeRule::ShareMin(i, least), told));
        }
        if let Some(most) = share.max {
            rules.push((WholeRule::ShareMax(i, most), Told { of, ..Told::whole(Rule::ShareMax, most) }));
        }
    }
    let (per_hour, per_day) = limits::change_times(question.site);
    let changes = [
        (Rule::TemperatureChangePerHour, l.temperature_change_c_per_hour, per_hour),
        (Rule::TemperatureChangePerDay, l.temperature_change_c_per_day, per_day),
    ];
    for (rule, rate, times) in changes {
        if let (Some(from_c), Some(rate)) = (question.before.temperature_c, rate) {
            let most_c = rate * times;
            rules.push((WholeRule::TemperatureChange { from_c, most_c }, Told::whole(rule, most_c)));
        }
    }
    if question.now.is_some() {
        if let Some(most) = l.max_moves {
            rules.push((WholeRule::Moves(most as f64), Told::whole(Rule::MaxMoves, most as f64)));
        }
        if let Some(most) = l.max_crew_hours {
            rules.push((WholeRule::CrewHours(most), Told::whole(Rule::MaxCrewHours, most)));
        }
    }
    if shared {
        for item in 0..l.undrawn.len() {
            let told = Told { item, ..Told::whole(Rule::Undrawn, 0.0) };
            rules.push((WholeRule::Undrawn(item), told));
        }
    }
    rules.into_iter().unzip()
}

/// Limits that the release asked for breaks, whatever the mix.
pub(super) fn hopeless(question: &Question) -> Vec<Check> {
    let Question { site, profile, blocks, .. } = *question;
    let mean = blocks.iter().map(|b| b.0 * b.1).sum();
    let mut out: Vec<Check> = Vec::new();
    let mut against = |flow_m3s: f64, of_a_day: bool| {
        let before = Before { temperature_c: None, ..question.before };
        let release = Whole { flow_m3s, before: Some(before), ..Whole::default() };
        let mut checks = Vec::new();
        limits::whole(site, profile.pool_m, &release, &mut checks);
        out.extend(checks.into_iter().filter(|c| c.broken() && (c.rule == Rule::Drawdown) == of_a_day));
    };
    against(mean, true);
    for block in blocks {
        against(block.1, false);
    }
    out.sort_by(|a, b| a.rule.cmp(&b.rule).then(a.room.total_cmp(&b.room)));
    out.dedup_by_key(|c| c.rule);
    out
}
