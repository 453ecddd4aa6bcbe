//! Causes at the dam: a gate elsewhere than logged, flow in pulses, leaks.
//!
//! Methods: `docs/methods.md`, section 9.

use crate::units::say;

use super::clues::Clues;
use super::{Weighed, days, mean, most, root_mean_square};

/// A jump of the gauge is a step where it is at least this, C (choice), and so many times what is usual (choice).
const STEP_C: f64 = 0.4;
const STEP_TIMES: f64 = 3.0;
/// A day moves more than usual by so many times (choice), and by this, C (choice).
const MOVES_TIMES: f64 = 2.0;
const MOVES_C: f64 = 0.4;
/// Flow that swings by this share of its mean comes in pulses (choice).
const PULSES: f64 = 0.5;
/// The gauge tells another flow than was set beyond this share (choice: twice what gauges of flow are good for).
const OTHER_FLOW: f64 = 0.25;
/// A leak of up to this share of the release is likely, of more than the second it is not (choice).
const LEAK_SHARES: [f64; 2] = [0.10, 0.30];
/// A leak is steady where it scatters by no more than this share (choice).
const STEADY: f64 = 0.3;

/// What another position of one gate comes to, over the days.
struct Other<'a> {
    words: &'a str,
    off_c: f64,
    release_c: f64,
    fits: usize,
}

/// The single gate that, standing otherwise, brings the release nearest to the gauge.
fn nearest(clues: &Clues) -> Option<Other<'_>> {
    let first = clues.days.first()?;
    let of = |words| {
        let each = clues.days.iter().map(|day| {
            let other = day.otherwise_c.iter().find(|other| other.0 == words)?.1;
            Some((day, other))
        });
        let each: Vec<_> = each.collect::<Option<_>>()?;
        Some(Other {
            words,
            off_c: root_mean_square(each.iter().map(|(day, other)| day.measured_c - other))?,
            release_c: mean(each.iter().map(|(_, other)| *other))?,
            fits: each.iter().filter(|(day, other)| (day.measured_c - other).abs() <= day.half_c()).count(),
        })
    };
    let all = first.otherwise_c.iter().filter_map(|(words, _)| of(words));
    all.min_by(|a, b| a.off_c.total_cmp(&b.off_c))
}

/// Whether the single gate that comes nearest explains most of the days.
fn explained(clues: &Clues) -> bool {
    nearest(clues).is_some_and(|other| most(other.fits, clues.days.len()))
}

/// A step as the spell began on a day when the log has no change of gates.
pub(super) fn unlogged_step(clues: &Clues) -> Option<String> {
    let step = clues.step.as_ref().filter(|step| !step.decided)?;
    let off = mean(clues.days.iter().map(super::Clue::off_c))?;
    let least = STEP_C.max(STEP_TIMES * clues.usual_step_c.unwrap_or(0.0)).max(0.5 * off.abs());
    (step.by_c.abs() >= least && step.by_c * off > 0.0).then(|| {
        format!(
            "the gauge stepped by {} from one reading to the next at {}, a day on which no change of gates is logged",
            say::dc(step.by_c, 1).signed(),
            step.at
        )
    })
}

/// Whether a step was seen that no position of a single gate explains.
pub(super) fn unexplained_step(clues: &Clues) -> Option<String> {
    unlogged_step(clues).filter(|_| !explained(clues))
}

/// A gate that does not stand where the log says.
pub(super) fn gate(clues: &Clues) -> Weighed {
    let mut out = Weighed::new(
        "gate not where the log says",
        "read the positions of the gates at the dam and hold them against the log of these days",
    );
    let n = clues.days.len();
    if let (Some(other), Some(gauge)) = (nearest(clues), mean(clues.days.iter().map(|day| day.measured_c))) {
        let (release, gauge) = (say::c(other.release_c, 1), say::c(gauge, 1));
        if most(other.fits, n) {
            let share = other.fits as f64 / n as f64;
            out.pro(
                2.0 * share,
                format!(
                    "with {} the release comes to {release} on the mean and the gauge read {gauge}: as near as the band \
                     is wide on {} of {}",
                    other.words,
                    other.fits,
                    days(n)
                ),
            );
        } else {
            out.con(
                1.0,
                format!(
                    "no single gate shut, opened or in the place of another gives what the gauge read: the nearest is {}, \
                     off by {}",
                    other.words,
                    say::dc(other.off_c, 1)
                ),
            );
        }
    }
    if let Some(words) = unlogged_step(clues) {
        out.pro(1.5, words);
    } else if let Some(step) = clues.step.as_ref().filter(|step| step.by_c.abs() < STEP_C) {
        let words = "as the spell begins the gauge moves no faster than";
        out.con(0.5, format!("{words} {} from one reading to the next", say::dc(step.by_c.abs(), 1)));
    }
    if clues.same_inside > 0 && explained(clues) {
        let words = "with the same gates logged the gauge lay inside the band on";
        out.pro(0.5, format!("{words} {} just before or after", days(clues.same_inside)));
    }
    out
}

/// Flow that comes in pulses through the day.
pub(super) fn peaking(clues: &Clues) -> Weighed {
    let mut out =
        Weighed::new("peaking", "read the flow of these days hour by hour, at the turbines or at the gauge");
    let ranges = mean(clues.days.iter().filter_map(super::Clue::range_c));
    if let (Some(range), Some(usual)) = (ranges, clues.usual_range_c) {
        let (told, usually) = (say::dc(range, 1), say::dc(usual, 1));
        if range > MOVES_TIMES * usual && range > usual + MOVES_C {
            out.pro(
                2.0,
                format!("the gauge moved by {told} in the course of a day, where {usually} is usual"),
            );
        } else {
            out.con(1.0, format!("the gauge moved by {told} in the course of a day, and {usually} is usual"));
        }
    }
    let flows: Vec<_> =
        clues.days.iter().filter_map(|day| Some((day.flow_m3s, day.gauge_flow_m3s?))).collect();
    let told = |pick: fn(&(f64, f64, f64)) -> f64| mean(flows.iter().map(|flow| pick(&flow.1)));
    if let (Some(set), Some(told), Some(least), Some(greatest)) =
        (mean(flows.iter().map(|flow| flow.0)), told(|f| f.0), told(|f| f.1), told(|f| f.2))
    {
        let range = format!("from {} to {}", say::m3s(least, 1), say::m3s(greatest, 1));
        if greatest - least > PULSES * told {
            out.pro(1.5, format!("the flow at the gauge ran {range} in the course of a day"));
        } else {
            out.con(1.0, format!("the flow at the gauge stayed {range} in the course of a day"));
        }
        if (told - set).abs() > OTHER_FLOW * set {
            let (told, set) = (say::m3s(told, 1), say::m3s(set, 1));
            out.pro(0.5, format!("the gauge tells {told} on the mean, and {set} was set"));
        }
    }
    out
}

/// Water through gates that are shut.
pub(super) fn leakage(clues: &Clues) -> Weighed {
    let mut out = Weighed::new("leakage", "at low flow, measure what runs through the gates that are shut");
    let first = clues.days.first();
    // the share of the release from before a shut level that would make the difference, day by day
    let shares = |words: &str| -> Option<Vec<(f64, f64)>> {
        let one = |day: &super::Clue| {
            let water = day.shut_c.iter().find(|shut| shut.0 == words)?.1;
            let share = day.off_c() / (water - day.expected_c);
            (share.is_finite() && share > 0.0).then_some((share, share * day.flow_m3s))
        };
        clues.days.iter().map(one).collect()
    };
    let levels = first.into_iter().flat_map(|day| &day.shut_c);
    let found = levels.filter_map(|(words, _)| {
        let shares = shares(words)?;
        Some((words, mean(shares.iter().map(|s| s.0))?, shares))
    });
    if let Some((words, share, each)) = found.min_by(|a, b| a.1.total_cmp(&b.1)) {
        let flow = mean(each.iter().map(|s| s.1)).unwrap_or_default();
        let told = format!(
            "it takes {} through {words}, {:.0}% of the release, to make the difference",
            say::m3s(flow, 2),
            100.0 * share
        );
        if share <= LEAK_SHARES[0] {
            out.pro(1.0, told);
            let scatter = root_mean_square(each.iter().map(|s| s.1 - flow)).unwrap_or_default();
            if each.len() >= 4 && scatter <= STEADY * flow {
                out.pro(0.8, format!("on each of {} it is about the same flow", days(each.len())));
            }
        } else if share > LEAK_SHARES[1] {
            out.con(1.0, told);
        } else {
            out.con(0.3, told);
        }
    } else {
        let side = if first.is_some_and(|day| day.off_c() > 0.0) { "warmer" } else { "colder" };
        out.con(1.0, format!("no gate that is shut stands in water so much {side} on all of these days"));
    }
    if clues.same_inside > 1 {
        let words = "a leak does not come and go: with the same gates the gauge lay inside the band on";
        out.con(0.8, format!("{words} {} just before or after", days(clues.same_inside)));
    }
    out
}
