//! The price of the mixes of a ranking by the end of the season.

use crate::problem::{Problem, harmless};
use crate::season::{Change, Price};
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

/// What the prices are of.
pub fn asked(prices: &Prices) -> String {
    let against = if prices.against_now { "holding what is set now as long" } else { "no. 1" };
    format!(
        "each mix held from {} to {} as long as no limit stands against it, then the best mix of the day: plan {}, case \
         {}; against {against}, in brackets the range over {} of the same perturbed casts. When cold water runs out is \
         seen on days of decision, {} apart: its change is told to those",
        prices.from,
        prices.until,
        harmless(&prices.plan),
        harmless(&prices.case),
        prices.members,
        days((prices.until - prices.from).num_days() as f64)
    )
}

/// A line for each mix shown.
pub fn lines(prices: &Prices) -> Vec<String> {
    let line = |(i, price): (usize, &Price)| {
        format!("{:>2}  {}; {}", i + 1, runs_out(price), outside(price.outside))
    };
    prices.mixes.iter().enumerate().map(line).collect()
}

fn runs_out(price: &Price) -> String {
    let Some(change) = price.exhausted else { return "when it runs out is not known".to_owned() };
    let (low, high) = change.range;
    // a season in which it lasts has no day on which it runs out: by how much later nobody can say
    match price.lasts {
        [true, true] if (low, high) == (0, 0) => "does not run out, no more than without it".to_owned(),
        [false, true] if change.is_told() => "no longer runs out".to_owned(),
        [true, false] if change.is_told() => {
            format!("runs out, which it else does not, {} before the end", days(-change.days as f64 - 1.0))
        }
        _ => {
            let colon = if change.is_told() || (low, high) == (0, 0) { "" } else { ":" };
            format!("runs out{colon} {}", told(change, ("later", "sooner"), "no sooner or later"))
        }
    }
}

fn outside(change: Option<Change>) -> String {
    change.map_or_else(
        || "days outside: not known, a season stops before its plan".to_owned(),
        |change| format!("days outside: {}", told(change, ("more", "fewer"), "no more or fewer")),
    )
}

/// `3 days later (1 to 6)`; said to be less than can be told where the range holds no change.
fn told(change: Change, (up, down): (&str, &str), none: &str) -> String {
    let (low, high) = change.range;
    if low == 0 && high == 0 {
        return none.to_owned();
    }
    let range = format!("{low:+} to {high:+} days");
    if !change.is_told() {
        return format!("less than we can tell ({range})");
    }
    let way = if change.days > 0 { up } else { down };
    format!("{} {way} ({range})", days(change.days.unsigned_abs() as f64))
}
