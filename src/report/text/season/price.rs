//! The price of the mixes of a ranking by the end of the season.

use crate::problem::{Problem, harmless};
use crate::season::{Change, Difference, Price};
use crate::tasks::Context;
use crate::tasks::season::Prices;

use super::super::{days, labelled, list, wrapped};

/// The block below a ranking.
pub(in crate::report::text) fn block(context: &Context, prices: &Prices) -> String {
    let mut out = labelled("Season", &asked(prices));
    for line in lines(prices) {
        out.push_str(&wrapped(&format!("  {line}"), 6));
    }
    out.push('\n');
    let notes: Vec<&Problem> = prices.notes.iter().collect();
    out.push_str(&list("The season", &notes, false, context.system));
    out
}

/// What a mix is held against.
const NOW: &str = "what is set now";
const FIRST: &str = "no. 1";

/// What the prices are of; where nothing can be told between the mixes, that.
pub fn asked(prices: &Prices) -> String {
    let against = if prices.against_now { "holding what is set now as long" } else { "no. 1" };
    let casts = prices.mixes.first().map_or(prices.members + 1, |price| price.casts);
    let level = if is_level(prices) {
        ". BETWEEN THE MIXES OF THIS LIST NOTHING CAN BE TOLD for the season: over these casts none is always sooner or \
         later, better or worse than no. 1"
    } else {
        ""
    };
    format!(
        "each mix held from {} to {} as long as no limit stands against it, then the best mix of the day: plan {}, case \
         {}; against {against}, in brackets the change from the cast as it is and the range over {casts} casts, it and \
         {} perturbed ones, the same for every mix. When cold water runs out is seen on days of decision, {} apart: its \
         change is told to those{level}",
        prices.from,
        prices.until,
        harmless(&prices.plan),
        harmless(&prices.case),
        prices.members,
        days((prices.until - prices.from).num_days() as f64)
    )
}

/// Whether no mix differs from the first by more than can be told.
fn is_level(prices: &Prices) -> bool {
    prices.mixes.len() > 1 && prices.mixes.iter().skip(1).all(|price| !price.than_first.is_told())
}

/// A line for each mix shown.
pub fn lines(prices: &Prices) -> Vec<String> {
    let line = |(i, price): (usize, &Price)| {
        let words = difference(&price.against, price.casts, if prices.against_now { NOW } else { FIRST });
        // where prices are told against no. 1 there is nothing to add
        let first = if i > 0 && prices.against_now {
            format!("; against no. 1: {}", difference(&price.than_first, price.casts, FIRST))
        } else {
            String::new()
        };
        format!("{:>2}  {words}{first}", i + 1)
    };
    prices.mixes.iter().enumerate().map(line).collect()
}

fn difference(of: &Difference, casts: usize, other: &str) -> String {
    format!("{}; {}", runs_out(of, casts, other), outside(of.outside))
}

fn runs_out(of: &Difference, casts: usize, other: &str) -> String {
    let Some(change) = of.exhausted else { return "when it runs out is not known".to_owned() };
    // a season in which it lasts has no day on which it runs out: by how much later nobody can say
    match of.runs_out {
        [0, 0] => format!("does not run out, no more than with {other}"),
        [base, this] if base == casts && this == casts => {
            let colon = if change.is_told() || change.range == (0, 0) { "" } else { ":" };
            format!("runs out{colon} {}", told(change, ("later", "sooner"), "no sooner or later"))
        }
        [base, this] => {
            let what = match of.lasts {
                _ if !change.is_told() => ": less than we can tell",
                [false, true] => ": no longer",
                [true, false] => ": it else does not",
                _ if change.days > 0 => ": later",
                _ => ": sooner",
            };
            format!("runs out in {this} of {casts} casts, in {base} with {other}{what}")
        }
    }
}

fn outside(change: Option<Change>) -> String {
    change.map_or_else(
        || "days outside: not known, a season stops before its plan".to_owned(),
        |change| format!("days outside: {}", told(change, ("more", "fewer"), "no more or fewer")),
    )
}

/// `3 days later (+3; +1 to +6 days)`; said to be less than can be told where the range holds no change.
fn told(change: Change, (up, down): (&str, &str), none: &str) -> String {
    let (low, high) = change.range;
    if low == 0 && high == 0 {
        return none.to_owned();
    }
    if !change.is_told() {
        return format!("less than we can tell ({:+}; {low:+} to {high:+} days)", change.days);
    }
    let way = if change.days > 0 { up } else { down };
    format!("{} {way} ({low:+} to {high:+} days)", days(change.days.unsigned_abs() as f64))
}
