//! The knobs that come nearest, by least squares, and which of them the casts tell at all.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::site::Knobs;

use super::knob::Knob;
use super::stretch::root_mean_square;

/// Most rounds of the search (choice).
const ROUNDS: usize = 12;
/// Rounds in which the others follow a knob that is held at an end of its range (choice).
const FOLLOWING: usize = 3;
/// Tries of a round to find a shorter step that comes nearer (choice).
const TRIES: usize = 5;
/// How far the first round looks to either side for the slope, in the logarithm of a knob; each looks half as far, down
/// to the second figure (choice: the pool answers by fits and starts where layers join).
const LOOKS: [f64; 2] = [0.2, 0.02];
/// How much a step is shortened where it led away, and less where it led on (choice).
const DAMPED: f64 = 6.0;
/// A gain of less than this share ends the search (choice).
const GAIN: f64 = 1e-4;
/// What misses no more than this beside the best comes about as near, C or mg/L (choice: a sensor's noise) ...
pub const AS_NEAR: f64 = 0.05;
/// ... or no more than this share of what the best itself misses (choice).
const AS_NEAR_SHARE: f64 = 0.1;
/// Halvings that find how far a knob comes about as near (choice).
const HALVINGS: usize = 3;

/// What a trial of knobs misses, sample by sample: `None` where the caller stops, no values where the pool cannot go.
pub(super) type Far<'a> = &'a mut dyn FnMut(Knobs) -> Option<Option<Vec<f64>>>;

/// A place of the search.
#[derive(Clone)]
struct Place {
    /// Logarithms of the knobs.
    at: Vec<f64>,
    off: Vec<f64>,
    /// Root of the mean square.
    misses: f64,
}

/// What was found.
pub(super) struct Nearest {
    /// The knobs.
    pub(super) knobs: Knobs,
    /// Those that the casts tell, and how far each can go while, the others following, the pool comes about as near.
    pub(super) near: Vec<(&'static str, [f64; 2])>,
    /// Those that the casts do not tell, since it does at either end of their range: they stay as they were.
    pub(super) untold: Vec<&'static str>,
}

/// Fits knobs and lets go, one after the other, of those that the casts do not tell. `None` where `far` stops it.
pub(super) fn nearest(knobs: &[Knob], before: Knobs, far: Far) -> Option<Nearest> {
    let mut free: Vec<&Knob> = knobs.iter().collect();
    let mut untold = Vec::new();
    let mut from = before;
    loop {
        let Some(best) = sought(&free, from, ROUNDS, 0.0, far)? else {
            return Some(Nearest { knobs: before, near: Vec::new(), untold });
        };
        from = put(&free, from, &best.at);
        let most = best.misses + AS_NEAR.max(AS_NEAR_SHARE * best.misses);
        let mut ends = Vec::new();
        for i in 0..free.len() {
            let [low, high] = free[i].range;
            ends.push([held(&free, i, low, from, most, far)?, held(&free, i, high, from, most, far)?]);
        }
        let flat = ends.iter().enumerate().map(|(i, ends)| (i, ends[0].max(ends[1])));
        let flattest = flat.filter(|flat| flat.1 <= most).min_by(|a, b| a.1.total_cmp(&b.1));
        let Some((i, _)) = flattest else {
            let mut near = Vec::new();
            for (i, missed) in ends.iter().enumerate() {
                let mut as_near = free[i].range;
                for (end, missed) in as_near.iter_mut().zip(missed) {
                    if *missed > most {
                        *end = as_near_to(&free, i, *end, most, from, far)?;
                    }
                }
                near.push((free[i].name, as_near));
            }
            return Some(Nearest { knobs: from, near, untold });
        };
        let knob = free.remove(i);
        untold.push(knob.name);
        *(knob.of)(&mut from) = *(knob.of)(&mut before.clone());
    }
}

/// What is missed with one knob held, the others following until no more than `enough` is.
fn held(free: &[&Knob], i: usize, value: f64, mut from: Knobs, enough: f64, far: Far) -> Option<f64> {
    *(free[i].of)(&mut from) = value;
    let others: Vec<&Knob> = free.iter().filter(|other| other.name != free[i].name).copied().collect();
    Some(sought(&others, from, FOLLOWING, enough, far)?.map_or(f64::INFINITY, |place| place.misses))
}

/// The value of a knob on the way to an end up to which no more than `most` is missed.
fn as_near_to(free: &[&Knob], i: usize, end: f64, most: f64, mut from: Knobs, far: Far) -> Option<f64> {
    let (mut near, mut end) = ((free[i].of)(&mut from).ln(), end.ln());
    for _ in 0..HALVINGS {
        let middle = f64::midpoint(near, end);
        if held(free, i, middle.exp(), from, most, far)? <= most {
            near = middle;
        } else {
            end = middle;
        }
    }
    Some(near.exp())
}

fn put(some: &[&Knob], mut knobs: Knobs, at: &[f64]) -> Knobs {
    for (knob, x) in some.iter().zip(at) {
        *(knob.of)(&mut knobs) = x.exp();
    }
    knobs
}

/// The place from which no step leads nearer, by damped least squares (Levenberg 1944, Marquardt 1963) on the logarithms
/// of the knobs inside their ranges, or that misses no more than `enough`. No place where the pool cannot go from the
/// start; `None` where `far` stops it.
fn sought(some: &[&Knob], from: Knobs, rounds: usize, enough: f64, far: Far) -> Option<Option<Place>> {
    let ends: Vec<[f64; 2]> = some.iter().map(|knob| knob.range.map(f64::ln)).collect();
    let mut place = |at: Vec<f64>| -> Option<Option<Place>> {
        let off = far(put(some, from, &at))?;
        Some(off.map(|off| Place { misses: root_mean_square(&off), at, off }))
    };
    let mut was = from;
    let start = some.iter().zip(&ends).map(|(knob, e)| (knob.of)(&mut was).ln().clamp(e[0], e[1])).collect();
    let Some(mut best) = place(start)? else { return Some(None) };
    let (mut damping, [mut look, least_look]) = (0.01, LOOKS);
    for _ in 0..rounds {
        if some.is_empty() || best.misses <= enough {
            break;
        }
        let mut slopes = Vec::new();
        for (i, [least, most]) in ends.iter().enumerate() {
            let by = if best.at[i] + look > *most { -look.min(best.at[i] - least) } else { look };
            let mut aside = best.at.clone();
            aside[i] += by;
            let looked = place(aside)?;
            let slope = |p: Place| p.off.iter().zip(&best.off).map(|(a, b)| (a - b) / by).collect::<Vec<_>>();
            slopes.push(looked.map(slope).unwrap_or_default());
        }
        let before = best.misses;
        for _ in 0..TRIES {
            let at = stepped(&best, &slopes, &ends, damping);
            match place(at)?.filter(|tried| tried.misses < best.misses) {
                Some(nearer) => {
                    best = nearer;
                    damping /= DAMPED;
                    break;
                }
                None => damping *= DAMPED,
            }
        }
        if best.misses > before * (1.0 - GAIN) && look <= least_look {
            break;
        }
        look = (0.5 * look).max(least_look);
    }
    Some(Some(best))
}

/// Where a damped step leads; a knob at an end that the step would leave its range by stays there.
fn stepped(best: &Place, slopes: &[Vec<f64>], ends: &[[f64; 2]], damping: f64) -> Vec<f64> {
    let dot = |a: &[f64], b: &[f64]| a.iter().zip(b).map(|(a, b)| a * b).sum::<f64>();
    let outward = |i: usize| {
        let down = dot(&slopes[i], &best.off);
        (best.at[i] <= ends[i][0] && down > 0.0) || (best.at[i] >= ends[i][1] && down < 0.0)
    };
    let free: Vec<usize> = (0..slopes.len()).filter(|&i| !outward(i)).collect();
    let row = |&i: &usize| {
        let mut row: Vec<f64> = free.iter().map(|&j| dot(&slopes[i], &slopes[j])).collect();
        row.push(-dot(&slopes[i], &best.off));
        row
    };
    let mut rows: Vec<Vec<f64>> = free.iter().map(row).collect();
    for (k, row) in rows.iter_mut().enumerate() {
        row[k] += damping * row[k] + f64::MIN_POSITIVE;
    }
    let mut at = best.at.clone();
    for (&i, by) in free.iter().zip(solved(rows)) {
        at[i] = (at[i] + by).clamp(ends[i][0], ends[i][1]);
    }
    at
}

/// Solves a small positive system given by its rows, the right-hand side last in each (Gauss).
fn solved(mut rows: Vec<Vec<f64>>) -> Vec<f64> {
    let count = rows.len();
    for k in 0..count {
        let pivot = rows[k].clone();
        for (i, row) in rows.iter_mut().enumerate() {
            let share = row[k] / pivot[k];
            if i != k && share.is_finite() {
                for (value, of) in row.iter_mut().zip(&pivot) {
                    *value -= share * of;
                }
            }
        }
    }
    rows.iter()
        .enumerate()
        .map(|(k, row)| row[count] / row[k])
        .map(|x| if x.is_finite() { x } else { 0.0 })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::super::knob::WARMTH;
    use super::*;

    const BEFORE: Knobs = Knobs {
        wind: 0.2,
        light_per_m: 0.5,
        diffusion: 1.0,
        water_demand_mg_l_day: 0.05,
        bed_demand_g_m2_day: 0.5,
    };

    fn found(far: &dyn Fn(Knobs) -> Vec<f64>) -> Nearest {
        nearest(&WARMTH, BEFORE, &mut |knobs| Some(Some(far(knobs)))).unwrap()
    }

    /// Bent, yet zero at one place alone.
    fn bent(share: f64) -> f64 {
        share.ln() + 0.2 * share.ln().powi(2)
    }

    #[test]
    fn law_knobs_that_are_told_are_found() {
        let found = found(&|k| {
            vec![bent(k.wind / 0.7), bent(k.light_per_m / 0.3 * k.wind / 0.7), bent(k.diffusion / 2.0)]
        });
        assert!(found.untold.is_empty(), "{:?}", found.untold);
        for (is, was) in
            [(found.knobs.wind, 0.7), (found.knobs.light_per_m, 0.3), (found.knobs.diffusion, 2.0)]
        {
            assert!((is / was - 1.0).abs() < 1e-3, "{is} for {was}");
        }
    }

    /// Two that show as one number only: one stays as it was, the other makes up for it.
    #[test]
    fn law_of_two_that_cannot_be_told_apart_one_stays() {
        let found = found(&|k| vec![bent(k.wind * k.diffusion / 0.4), bent(k.light_per_m / 0.3)]);
        let [stays] = found.untold[..] else { panic!("{:?}", found.untold) };
        assert!(stays == "wind" || stays == "diffusion", "{stays}");
        let knob = WARMTH.iter().find(|knob| knob.name == stays).unwrap();
        let mut knobs = found.knobs;
        assert_eq!(*(knob.of)(&mut knobs), *(knob.of)(&mut BEFORE.clone()));
        assert!((found.knobs.wind * found.knobs.diffusion / 0.4 - 1.0).abs() < 1e-3, "{:?}", found.knobs);
        // what is left is told: 0.05 of the root of the mean square of two
        let light = found.near.iter().find(|near| near.0 == "light").unwrap().1;
        assert!(light[0] <= 0.3 && light[0] > 0.25 && light[1] >= 0.3 && light[1] < 0.36, "{light:?}");
    }

    #[test]
    fn law_what_tells_nothing_moves_nothing() {
        let found = found(&|_| vec![0.4, -0.3]);
        assert_eq!((found.knobs, found.untold.len()), (BEFORE, 3));
    }
}
