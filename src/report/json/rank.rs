//! The answer of `rank` as JSON.

use crate::mix::limits::{Check, Group, Of, Rule};
use crate::mix::{Gate, Setting};
use crate::rank::{Criterion, Rejected};
use crate::season::{Change, Price};
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::rank::{Lost, Part, PreferredSplit, RankAnswer, Shown, ShownPart, Unsure};
use crate::tasks::season::Prices;
use crate::units::{System, in_system};

use super::applied::without;
use super::rank_shape::{
    AskedJson, BinsJson, BlockAskedJson, BlockJson, ChangeJson, LeastJson, LostJson, MixedJson, NearestJson,
    NothingFitsJson, PocketJson, PriceJson, PricedJson, PricesJson, RankJson, RankedJson, RejectedJson,
    RootJson, SplitJson, ThanFirstJson, UnsureJson, WholeDayJson,
};
use super::shape::SettingJson;
use super::targets::{conflicts, points, targets};
use super::{by_gate, checks, ends, head, moved, setting, warnings, well, written};
use crate::report::sentence::{caution, unsure_words};

/// The answer of `rank`.
pub fn rank(context: &Context, answer: &RankAnswer) -> String {
    written(&shape(context, answer, &context.fingerprint))
}

/// The answer of `rank` with what its mixes cost by the end of the season.
pub fn rank_priced(context: &Context, answer: &RankAnswer, prices: &Prices) -> String {
    let change = |c: Change| ChangeJson { days: c.days, range: [c.range.0, c.range.1], told: c.is_told() };
    let one = |price: &Price| {
        let (against, first) = (&price.against, &price.than_first);
        PriceJson {
            exhausted_later: against.exhausted.map(change),
            days_outside_more: against.outside.map(change),
            lasts: against.lasts[1],
            runs_out_in: against.runs_out[1],
            runs_out_in_against: against.runs_out[0],
            casts: price.casts,
            than_first: ThanFirstJson {
                exhausted_later: first.exhausted.map(change),
                days_outside_more: first.outside.map(change),
            },
        }
    };
    let season = PricesJson {
        plan: prices.plan.clone(),
        case: prices.case.clone(),
        held_from: prices.from.to_string(),
        held_until: prices.until.to_string(),
        against: if prices.against_now { "now" } else { "first" },
        members: prices.members,
        mixes: prices.mixes.iter().map(one).collect(),
        warnings: warnings(&prices.notes),
    };
    written(&PricedJson { rank: shape(context, answer, &prices.fingerprint), season })
}

fn shape(context: &Context, answer: &RankAnswer, fingerprint: &str) -> RankJson {
    let site = context.site();
    let one = |shown: &Shown| ranked(site, shown);
    RankJson {
        head: head(context, fingerprint, &[]),
        release_asked: asked(answer),
        step: 1.0 / answer.steps as f64,
        order: answer.order.iter().map(|c: &Criterion| c.name()).collect(),
        bins: BinsJson {
            temperature_c: site.bins.temperature_c,
            oxygen_mg_l: site.bins.oxygen_mg_l,
            cold_share: site.bins.cold_share,
        },
        without: answer.without.iter().map(|&o| site.outlets[o].name.clone()).collect(),
        mixes: answer.mixes.iter().map(one).collect(),
        now: answer.now.as_ref().map(one),
        rejected: answer.ranking.rejected.iter().map(|r| rejected(context, r)).collect(),
        examined: answer.ranking.examined,
        judged: answer.ranking.judged,
        skipped: answer.ranking.skipped,
        allowed: answer.ranking.allowed,
        attainable_c: answer.attainable_c,
        attainable_oxygen_mg_l: answer.attainable_oxygen_mg_l,
        largest_difference_c: (!answer.mixes.is_empty()).then_some(answer.apart.0),
        largest_difference_mg_l: answer.apart.1,
        trade: answer
            .trade
            .iter()
            .map(|t| MixedJson {
                setting: gates(site, &t.gates),
                temperature_c: t.temperature_c,
                oxygen_mg_l: t.oxygen_mg_l,
            })
            .collect(),
        lost: answer.lost.iter().map(|l| lost(site, l)).collect(),
        preferred_split: answer.split.as_ref().map(|s| split(site, s)),
        least_release: answer.least.as_ref().map(|least| LeastJson {
            flow_m3s: least.flow_m3s,
            tried_m3s: least.tried_m3s,
            setting: least.flow_m3s.map(|_| gates(site, &least.gates)),
        }),
        pocket: answer.pocket.map(|p| PocketJson {
            c_per_m3s: p.c_per_m3s,
            from_m3s: p.from_m3s,
            to_m3s: p.to_m3s,
        }),
        nothing_fits: nothing_fits(context, answer),
        notes: warnings(&answer.notes),
        caution: caution(),
    }
}

fn asked(answer: &RankAnswer) -> AskedJson {
    let steady = answer.blocks.len() == 1;
    let block = |&(share, flow_m3s): &(f64, f64)| BlockAskedJson { share, flow_m3s };
    AskedJson {
        flow_m3s: answer.blocks.first().filter(|_| steady).map(|b| b.1),
        blocks: (!steady).then(|| answer.blocks.iter().map(block).collect()),
        from: answer.release_from.words(),
    }
}

fn ranked(site: &Site, shown: &Shown) -> RankedJson {
    let moves = shown.change.as_ref().map(|c| c.moves);
    RankedJson {
        setting: setting(site, &shown.day),
        blocks: (shown.parts.len() > 1).then(|| shown.parts.iter().map(|p| block(site, p)).collect()),
        release: WholeDayJson {
            flow_m3s: shown.flow_m3s,
            temperature_c: shown.temperature_c,
            oxygen_mg_l: shown.oxygen_pool_mg_l,
            oxygen_below_mg_l: shown.oxygen_mg_l,
            band_c: ends(shown.spread.band_c()),
            band_oxygen_mg_l: ends(shown.spread.band_oxygen_mg_l()),
            time_mean_c: shown.temperature_c,
            by_flow_c: shown.by_flow_c,
            plain: shown.without.as_ref().map(without),
        },
        targets: targets(site, &shown.targets),
        conflicts: conflicts(site, &shown.conflicts),
        points: points(site, &shown.points),
        cold_water_m3_per_day: shown.cold_m3_per_day,
        moves: moves.map(|m| m.count),
        moved: shown.change.as_ref().map(|c| moved(site, c)),
        crew_hours: moves.map(|m| m.crew_hours),
        move_cost: moves.map(|m| m.cost),
        lead_days: moves.map(|m| m.lead_days),
        earliest: shown.change.as_ref().and_then(|c| c.earliest).map(|d| d.to_string()),
        generation_lost_mw: shown.generation_lost_mw,
        share_inside_both: shown.governing().and_then(|s| s.share_inside_both),
        governs: shown.governing().map(|s| site.targets[s.target].name.clone()),
        limits: checks(site, &shown.limits),
        warnings: warnings(&shown.warnings),
        not_checked: shown.not_checked.clone(),
        unsure: shown.unsure.iter().map(|u| unsure(site, u)).collect(),
        reasons: shown.reasons.iter().map(|r| in_system(r, System::Si)).collect(),
        alike: shown.alike,
        wells: shown.day.wells.iter().map(|w| well(site, &shown.day, w)).collect(),
    }
}

fn block(site: &Site, part: &ShownPart) -> BlockJson {
    BlockJson {
        share: part.share,
        setting: setting(site, &part.setting),
        release: super::release(&part.mix),
        wells: part.setting.wells.iter().map(|w| well(site, &part.setting, w)).collect(),
    }
}

fn unsure(site: &Site, unsure: &Unsure) -> UnsureJson {
    UnsureJson {
        outlet: site.outlets[unsure.outlet].name.clone(),
        taken: if unsure.open { "open" } else { "shut" },
        temperature_c: unsure.otherwise.map(|o| o.0),
        oxygen_mg_l: unsure.otherwise.and_then(|o| o.1),
        text: in_system(&unsure_words(site, unsure), System::Si),
    }
}

fn rejected(context: &Context, rejected: &Rejected) -> RejectedJson {
    let site = context.site();
    let Check { rule, of, .. } = rejected.check;
    let named = |is: bool| of.name(site).filter(|_| is).map(str::to_owned);
    let ends = |outlet: usize| site.limits.in_use_from(outlet, context.on.date_naive());
    RejectedJson {
        rule: rule.name(),
        group: rule.group().words(),
        outlet: named(matches!(of, Of::Outlet(_))),
        well: named(matches!(of, Of::Well(_))),
        share: named(matches!(of, Of::Share(_))),
        margin: rejected.check.margin(),
        unit: rule.unit().symbol(),
        count: rejected.count,
        open: rejected
            .open
            .iter()
            .map(|&(outlet, opening)| (site.outlets[outlet].name.clone(), 100.0 * opening))
            .collect(),
        text: in_system(&rejected.check.words(site), System::Si),
        possible_from: match of {
            Of::Outlet(outlet) if rule == Rule::Outage => ends(outlet).map(|d| d.to_string()),
            _ => None,
        },
    }
}

fn gates(site: &Site, gates: &[Gate]) -> SettingJson {
    setting(site, &Setting::of(gates.to_vec()))
}

fn lost(site: &Site, lost: &Lost) -> LostJson {
    LostJson {
        outlet: site.outlets[lost.outlet].name.clone(),
        fallback: lost.fallback.as_ref().map(|shown| MixedJson {
            setting: setting(site, &shown.day),
            temperature_c: shown.temperature_c,
            oxygen_mg_l: shown.oxygen_mg_l,
        }),
    }
}

fn split(site: &Site, split: &PreferredSplit) -> SplitJson {
    let name = |part: &Part| match *part {
        Part::Outlet(i) => site.outlets[i].name.clone(),
        Part::Well(i) => site.wells[i].name.clone(),
    };
    SplitJson {
        between: split.between.each_ref().map(name),
        open: by_gate(site, &split.gates, |g| 100.0 * g.opening),
        preferred_c: split.preferred_c,
        roots: split
            .roots
            .iter()
            .map(|r| RootJson {
                share: r.share,
                flows_m3s: r.flows_m3s,
                temperature_c: r.temperature_c,
                oxygen_mg_l: r.oxygen_mg_l,
                breaks: r.breaks.iter().map(|c| c.rule.name()).collect(),
            })
            .collect(),
        bracket_c: split.bracket_c,
    }
}

/// Which limits bind and what comes nearest, where no mix is allowed or none reaches the targets.
fn nothing_fits(context: &Context, answer: &RankAnswer) -> Option<NothingFitsJson> {
    let why = answer.nothing_fits()?;
    let groups = [Group::Structure, Group::WaterControlPlan, Group::Environment, Group::Convenience];
    let of_group = |group: Group| {
        let of = |r: &&Rejected| r.check.rule.group() == group;
        answer.ranking.rejected.iter().filter(of).map(|r| rejected(context, r)).collect()
    };
    Some(NothingFitsJson {
        why: why.words(),
        limits: groups.map(|group| (group.words(), of_group(group))).into(),
        nearest: answer.nearest.as_ref().map(|shown| NearestJson {
            setting: setting(context.site(), &shown.day),
            temperature_c: shown.temperature_c,
            oxygen_mg_l: shown.oxygen_mg_l,
            by_c: most(shown.targets.iter().filter(|s| !s.wish).map(|s| s.by_c(context.site()))),
            by_mg_l: most(shown.targets.iter().filter(|s| !s.wish).map(|s| s.oxygen.1)),
        }),
    })
}

/// The greatest miss known.
fn most(misses: impl Iterator<Item = Option<f64>>) -> Option<f64> {
    misses.flatten().reduce(f64::max)
}
