//! The levels of a site under every opening of their outlets, so that a level is solved once however often it is
//! met.
//!
//! Methods: `docs/methods.md`, section 10.

use crate::intake;
use crate::mix::seat;
use crate::problem::Problem;
use crate::site::Site;
use crate::withdrawal::CrestForm;

use super::curve::Curves;
use super::units::{Unit, openings};

/// Most openings of the outlets of one level, all taken together (choice).
const MOST_CODES: usize = 100_000;

/// Most levels that several units draw through: each is a bit.
const MOST_SLOTS: usize = 64;

/// What an outlet that draws is to its level.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Member {
    /// Shut, and leaking.
    Leak,
    /// Open so far, 0 to 1.
    Open(f64),
}

/// A level of the site.
#[derive(Debug, Clone)]
pub(super) struct Level {
    /// Its outlets, by elevation and name.
    pub(super) outlets: Vec<usize>,
    /// Openings of each beside shut.
    openings: Vec<Vec<f64>>,
    /// Curve of each code.
    pub(super) curves: Vec<Option<usize>>,
    /// Index among the levels several units draw through.
    pub(super) slot: Option<usize>,
}

impl Level {
    /// Digit of an outlet times its place in the code; codes of the outlets add up.
    pub(super) fn code(&self, outlet: usize, member: Member) -> usize {
        let mut place = 1;
        for (o, openings) in self.outlets.iter().zip(&self.openings) {
            if *o == outlet {
                let nearest = |opening: f64| {
                    let off = |i: &usize| (openings[*i] - opening).abs();
                    (0..openings.len()).min_by(|a, b| off(a).total_cmp(&off(b))).unwrap_or(0)
                };
                return place
                    * match member {
                        Member::Leak => 1,
                        Member::Open(opening) => 2 + nearest(opening),
                    };
            }
            place *= openings.len() + 2;
        }
        0
    }

    /// Outlets and openings of a code, 0 for a leak.
    pub(super) fn members(&self, mut code: usize) -> Vec<(usize, f64)> {
        let mut out = Vec::new();
        for (outlet, openings) in self.outlets.iter().zip(&self.openings) {
            let digit = code % (openings.len() + 2);
            code /= openings.len() + 2;
            match digit {
                0 => {}
                1 => out.push((*outlet, 0.0)),
                _ => out.push((*outlet, openings[digit - 2])),
            }
        }
        out
    }
}

/// Every level with the curve of each of its codes asked for.
///
/// # Errors
/// A level with more openings than can be solved.
pub(super) fn levels(
    site: &Site,
    groups: &[Vec<usize>],
    units: &[Unit],
    pool_m: f64,
    curves: &mut Curves,
) -> Result<Vec<Level>, Problem> {
    let mut slots = 0;
    groups
        .iter()
        .map(|outlets| {
            let openings: Vec<Vec<f64>> = outlets.iter().map(|&o| openings(site, o)).collect();
            let count = openings.iter().try_fold(1_usize, |n, o| n.checked_mul(o.len() + 2));
            let Some(count) = count.filter(|n| *n <= MOST_CODES) else {
                let names: Vec<&str> = outlets.iter().map(|&o| site.outlets[o].name.as_str()).collect();
                return Err(Problem::refused(
                    "too-many",
                    format!("{} at one elevation can stand in too many ways", names.join(", ")),
                    "give fewer positions",
                ));
            };
            let drawing = units.iter().filter(|u| u.outlets.iter().any(|o| outlets.contains(o))).count();
            let bias_c = outlets.first().and_then(|&o| site.bias_c(o)).unwrap_or(0.0);
            let slot = (drawing > 1).then(|| {
                slots += 1;
                slots - 1
            });
            if slots > MOST_SLOTS {
                return Err(Problem::refused(
                    "too-many",
                    format!("more than {MOST_SLOTS} levels are shared by wells and outlets"),
                    "leave gates out with --without",
                ));
            }
            let mut level = Level { outlets: outlets.clone(), openings, curves: Vec::new(), slot };
            level.curves = (0..count)
                .map(|code| {
                    let members = level.members(code);
                    let real = members.iter().all(|&(outlet, opening)| {
                        let o = &site.outlets[outlet];
                        let leaks = opening > 0.0 || o.leakage.is_some();
                        leaks && intake::is_wet(o, if opening > 0.0 { opening } else { 1.0 }, pool_m)
                    });
                    let seat = real.then(|| seat(site, &members, 0.5, CrestForm::default())).flatten()?;
                    Some(curves.ask(seat.centre_m, seat.opening, bias_c))
                })
                .collect();
            Ok(level)
        })
        .collect()
}
