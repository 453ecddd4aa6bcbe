//! Pictures of a note: the pool with what draws from it, the release beside the ranked mixes, the season in its cases.

use chrono::NaiveDate;

use crate::mix::Drawn;
use crate::report::page::{Block, DaysPicture, Picture, RangesPicture, Shows};
use crate::report::pooled::pooled;
use crate::season::{Reached, SeasonDay};
use crate::target::DAM;
use crate::tasks::Context;
use crate::tasks::note::NoteAnswer;
use crate::tasks::rank::Shown;
use crate::tasks::season::{SeasonAnswer, SeasonRun};
use crate::units::{Dimension, say};

use super::ranked::{MIXES, is_chosen};
use super::words::{banded, named, warmth};

pub(super) fn pictures(context: &Context, answer: &NoteAnswer) -> Vec<Block> {
    [pool(context, answer), ranges(context, answer)].map(|one| Block::Picture(Box::new(one))).into()
}

/// The pool from bed to surface with its outlets, and the zones now and to be.
fn pool(context: &Context, answer: &NoteAnswer) -> Picture {
    let (site, column) = (context.site(), &context.profile.column);
    let length = context.system.unit(Dimension::Length);
    let (bed_m, surface_m) = (column.bed_m(), column.surface_m());
    let opening = |outlet: usize| {
        let gate =
            answer.mix.setting.gates.iter().find(|gate| gate.outlet == outlet && gate.flow_m3s > 0.0)?;
        Some(gate.opening)
    };
    let zones_of = |levels: &[Drawn], when: &str| -> Vec<(String, f64, f64)> {
        let of = |drawn: &Drawn| {
            let zone = drawn.zone?;
            let names: Vec<&str> = drawn
                .level
                .outlets
                .iter()
                .filter_map(|i| Some(site.outlets.get(*i)?.name.as_str()))
                .collect();
            let ends = [zone.lower.limit_m, zone.upper.limit_m].map(|z| length.from_si(z));
            Some((format!("{} {when}", names.join(" ")), ends[0], ends[1]))
        };
        levels.iter().filter_map(of).collect()
    };
    let now = answer.mix.now.as_ref().map(|(_, now)| &now.levels[..]);
    let mut zones = now.map_or_else(Vec::new, |levels| zones_of(levels, "now"));
    let wanted = &answer.mix.mix.levels;
    zones.extend(zones_of(wanted, if answer.stands { "now" } else { "then" }));
    let words = |levels: &[Drawn]| {
        let of = |drawn: &Drawn| {
            let (zone, draw) = (drawn.zone?, drawn.draw?);
            let names: Vec<&str> = drawn
                .level
                .outlets
                .iter()
                .filter_map(|i| Some(site.outlets.get(*i)?.name.as_str()))
                .collect();
            Some(format!(
                "{} from {} to {}: {}",
                names.join(" "),
                say::m(zone.lower.limit_m, 2),
                say::m(zone.upper.limit_m, 2),
                warmth(draw.temperature_c)
            ))
        };
        levels.iter().filter_map(of).collect::<Vec<_>>().join("; ")
    };
    let before = now.map_or_else(String::new, |levels| format!(" Now draw {}.", words(levels)));
    Picture {
        title: "The pool and what draws from it".to_owned(),
        words: format!(
            "Bed at {}, surface at {}; surface water {}, deepest water {}. As to be set draw {}.{before}",
            say::m(bed_m, 2),
            say::m(surface_m, 2),
            warmth(column.reading(surface_m).temperature_c),
            warmth(column.reading(bed_m).temperature_c),
            words(wanted)
        ),
        shows: Shows::Pool(pooled(context, opening, zones)),
    }
}

/// A release with its label and band, C.
type Told = (String, f64, Option<(f64, f64)>);

/// The release now, to be, and of the ranked mixes, against what the governing rule at the dam asks.
fn ranges(context: &Context, answer: &NoteAnswer) -> Picture {
    let site = context.site();
    let degree = context.system.unit(Dimension::Temperature);
    let at_dam = answer.mix.mix.targets.iter().filter_map(|standing| {
        let rule = site.targets.get(standing.target)?;
        (rule.point == DAM && rule.is_of_temperature() && rule.has_range()).then_some((standing.wish, rule))
    });
    let rule = at_dam.min_by_key(|(wish, rule)| (*wish, rule.priority)).map(|(_, rule)| rule);
    let mut told: Vec<Told> = Vec::new();
    if let Some((_, now)) = &answer.mix.now {
        told.push(("now".to_owned(), now.release.temperature_c, now.spread.band_c()));
    }
    let mix = &answer.mix.mix;
    let label = if answer.stands { "as set" } else { "to be set" };
    told.push((label.to_owned(), mix.release.temperature_c, mix.spread.band_c()));
    let words: Vec<String> =
        told.iter().map(|(label, c, band)| format!("{label} {}", banded(*c, *band))).collect();
    // the ranked ones stand in a table too; that of the note is drawn already
    let ranked = answer.ranked.mixes.iter().take(MIXES).enumerate();
    let others = ranked.filter(|(_, shown)| !is_chosen(site, answer, shown));
    told.extend(others.map(|(at, shown): (usize, &Shown)| {
        (format!("no. {}", at + 1), shown.temperature_c, shown.spread.band_c())
    }));
    let asked =
        rule.map_or_else(String::new, |rule| format!(" {} asks {}.", named(rule), super::words::asks(rule)));
    let shown = |c: f64| degree.from_si(c);
    Picture {
        title: "The release against its target, beside the first ranked mixes".to_owned(),
        words: format!("Release: {}.{asked}", words.join("; ")),
        shows: Shows::Ranges(RangesPicture {
            unit: degree.symbol().to_owned(),
            asked: rule.map_or((None, None, None), |rule| {
                (rule.low_c.map(shown), rule.preferred_c.map(shown), rule.high_c.map(shown))
            }),
            rows: told
                .into_iter()
                .map(|(label, c, band)| {
                    (label, Some(shown(c)), band.map(|(low, high)| (shown(low), shown(high))))
                })
                .collect(),
        }),
    }
}

/// The release of every case over the season, with what the rules at the dam ask.
pub(super) fn days(context: &Context, season: &SeasonAnswer) -> Option<Picture> {
    let degree = context.system.unit(Dimension::Temperature);
    let of = |day: &SeasonDay| Some((day.date, degree.from_si(day.release.as_ref()?.temperature_c)));
    let cases = season.cases();
    let line = |case: &&SeasonRun| (case.run.case.clone(), case.run.days.iter().filter_map(of).collect());
    let reached = &season.main.outcome.reached;
    let ends = |end: fn(&Reached) -> Option<f64>| -> Vec<(NaiveDate, f64)> {
        reached.iter().filter_map(|r| Some((r.date, degree.from_si(end(r)?)))).collect()
    };
    let last = season.main.run.days.last()?.date;
    let mut limits = spans("greatest asked", &ends(|r| r.range_c().1), last);
    limits.extend(spans("least asked", &ends(|r| r.range_c().0), last));
    let told = cases.iter().filter_map(|case| {
        let days =
            case.run.days.iter().filter_map(|day| Some((day.release.as_ref()?.temperature_c, day.date)));
        let (warmest, on) = days.max_by(|a, b| a.0.total_cmp(&b.0))?;
        Some(format!("{}: warmest release {} on {on}", case.run.case, warmth(warmest)))
    });
    Some(Picture {
        title: "The release through the season in its cases".to_owned(),
        words: format!("{}.", told.collect::<Vec<_>>().join("; ")),
        shows: Shows::Days(DaysPicture {
            axis: format!("release, {}", degree.symbol()),
            bands: Vec::new(),
            lines: cases.iter().map(line).collect(),
            limits,
            marks: vec![(season.decides, "change".to_owned())],
        }),
    })
}

/// Values that stay the same from one day of decision to the next, as spans.
fn spans(
    name: &str,
    values: &[(NaiveDate, f64)],
    last: NaiveDate,
) -> Vec<(String, NaiveDate, NaiveDate, f64)> {
    let mut out: Vec<(String, NaiveDate, NaiveDate, f64)> = Vec::new();
    for (at, (from, value)) in values.iter().enumerate() {
        let to = values.get(at + 1).map_or(last, |next| next.0);
        match out.last_mut() {
            Some(span) if span.3.total_cmp(value).is_eq() => span.2 = to,
            _ => out.push((name.to_owned(), *from, to, *value)),
        }
    }
    out
}
