//! What was considered and rejected, and why.

use crate::mix::Setting;
use crate::mix::limits::Rule;
use crate::rank::Rejected;
use crate::report::page::{Block, Table};
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::note::NoteAnswer;
use crate::tasks::rank::Shown;

use super::words::{aired, flow, opening, percent, sorted, warmth};

/// Ranked mixes told (choice: the note is to fit a page).
pub(super) const MIXES: usize = 3;
/// Limits told that reject mixes (choice).
const LIMITS: usize = 3;
/// Flows nearer than this share of the whole are one (choice).
const SAME_FLOW: f64 = 0.005;

pub(super) fn blocks(context: &Context, answer: &NoteAnswer) -> Vec<Block> {
    let site = context.site();
    let mut out = vec![Block::Heading(2, "Considered and rejected".to_owned())];
    let mixes = &answer.ranked.mixes;
    let chosen = mixes.iter().position(|shown| is_chosen(site, answer, shown));
    out.extend(place(answer, chosen).map(Block::Words));
    if let Some(none) = answer.ranked.nothing_fits() {
        out.push(Block::Warning(format!("{}.", sentence(none.words()))));
    }
    let rows: Vec<Vec<String>> =
        mixes.iter().enumerate().take(MIXES).map(|(i, shown)| row(site, answer, (i, shown))).collect();
    if !rows.is_empty() {
        let of = answer.ranked.blocks.iter().map(|(share, flow)| share * flow).sum();
        out.push(Block::Table(Table {
            caption: format!(
                "First ranked mixes of {}, by {}{}",
                flow(of),
                order(answer),
                if chosen.is_some_and(|at| at < MIXES) { "; * is that of this note" } else { "" }
            ),
            head: ["No.", "Gates", "Temperature", "Oxygen", "Inside", "Moves", "Behind the one before by"]
                .map(str::to_owned)
                .to_vec(),
            rows,
            right: vec![0, 4, 5],
        }));
    }
    let rejected = rejected(site, &answer.ranked.ranking.rejected);
    if !rejected.is_empty() {
        out.push(Block::Words(format!("Rejected by, with the nearest miss: {}.", rejected.join("; "))));
    }
    out
}

/// Words as they begin a sentence.
fn sentence(words: &str) -> String {
    let mut letters = words.chars();
    letters.next().map_or_else(String::new, |first| first.to_uppercase().chain(letters).collect())
}

/// What the ranking counts, first to last.
fn order(answer: &NoteAnswer) -> String {
    let order: Vec<&str> = answer.ranked.order.iter().map(|criterion| criterion.name()).collect();
    format!("{} in this order", order.join(", ").replace('_', " "))
}

/// Where the mix of the note stands in the ranking; `None` where the table marks it.
fn place(answer: &NoteAnswer, chosen: Option<usize>) -> Option<String> {
    match chosen {
        _ if answer.ranked.mixes.is_empty() => Some("Every mix examined breaks a limit.".to_owned()),
        Some(at) if at < MIXES => None,
        Some(at) => Some(format!("The mix of this note is no. {} of the ranking.", at + 1)),
        None => Some("The mix of this note is none of those ranked first.".to_owned()),
    }
}

fn row(site: &Site, answer: &NoteAnswer, (at, shown): (usize, &Shown)) -> Vec<String> {
    let why = match shown.reasons.last() {
        Some(why) if at > 0 => why.strip_prefix("behind the one before by ").unwrap_or(why).to_owned(),
        _ => "first".to_owned(),
    };
    let mark = if is_chosen(site, answer, shown) { " *" } else { "" };
    vec![
        format!("{}{mark}", at + 1),
        gates(site, &shown.day),
        // their bands stand in the picture
        warmth(shown.temperature_c),
        aired(shown.oxygen_mg_l, None),
        percent(shown.governing().and_then(|standing| standing.share_inside_both)),
        shown.change.as_ref().map_or_else(|| "-".to_owned(), |change| change.moves.count.to_string()),
        why,
    ]
}

/// The gates in short: openings where there are any, else flows.
fn gates(site: &Site, setting: &Setting) -> String {
    let one = |(outlet, gate): &(&crate::site::Outlet, &crate::mix::Gate)| {
        if outlet.well.is_some() || !outlet.positions.is_empty() {
            format!("{} {}", outlet.name, opening(outlet, gate.opening).trim_start_matches("open "))
        } else {
            format!("{} {}", outlet.name, flow(gate.flow_m3s))
        }
    };
    sorted(site, setting).iter().map(one).collect::<Vec<_>>().join(", ")
}

/// Whether a ranked mix is that of the note.
pub(super) fn is_chosen(site: &Site, answer: &NoteAnswer, shown: &Shown) -> bool {
    let of = |setting: &Setting, outlet: usize| {
        let gate = setting.gates.iter().find(|g| g.outlet == outlet && setting.stands_open(site, g));
        gate.map_or((0.0, 0.0), |gate| (gate.opening, gate.flow_m3s))
    };
    let slack = SAME_FLOW * shown.flow_m3s;
    (0..site.outlets.len()).all(|outlet| {
        let ((open, flow), (opening, wanted)) = (of(&shown.day, outlet), of(&answer.mix.setting, outlet));
        (open - opening).abs() < crate::site::SAME_OPENING && (flow - wanted).abs() <= slack
    })
}

/// Limits that reject, each by its smallest miss, the weightiest first.
fn rejected(site: &Site, all: &[Rejected]) -> Vec<String> {
    let mut nearest: Vec<(Rule, &Rejected)> = Vec::new();
    for one in all {
        match nearest.iter_mut().find(|known| known.0 == one.check.rule) {
            Some(known) if known.1.check.room >= one.check.room => {}
            Some(known) => known.1 = one,
            None => nearest.push((one.check.rule, one)),
        }
    }
    nearest.sort_by_key(|(rule, _)| *rule);
    let more = nearest.len().saturating_sub(LIMITS);
    let mut out: Vec<String> = nearest.iter().take(LIMITS).map(|(_, one)| one.check.words(site)).collect();
    if more > 0 {
        out.push(format!("and {more} more"));
    }
    out
}
