//! The price of the mixes of a ranking by the end of the season.

use crate::problem::harmless;
use crate::season::{Change, Price};
use crate::tasks::season::Prices;

use super::super::{days, labelled, wrapped};

/// The block below a ranking.
pub(in crate::report::text) fn block(prices: &Prices) -> String {
    let mut out = labelled("Season", &asked(prices));
    for line in lines(prices) {
        out.push_str(&wrapped(&format!("  {line}"), 6));
    }
    out.push('\n');
    out
}

/// What the prices are of.
pub fn asked(prices: &Prices) -> String {
    let against = if prices.against_now { "holding what is set now as long" } else { "no. 1" };
    format!(
        "each mix held until {}, then the best mix of the day: plan {}, case {}; against {against}, in brackets the range \
         over {} of the same perturbed casts",
        prices.until,
        harmless(&prices.plan),
        harmless(&prices.case),
        prices.members
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
    price.exhausted.map_or_else(
        || "when it runs out is not known".to_owned(),
        |change| format!("runs out {}", told(change, ("later", "sooner"), "no sooner or later")),
    )
}

fn outside(change: Change) -> String {
    let what = told(change, ("more", "fewer"), "no more or fewer");
    format!("days outside: {what}")
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
