//! How errors scatter: days that share a cast share its error, so they are taken together as one stretch.
//!
//! Methods: `docs/methods.md`, section 9.

use chrono::NaiveDate;

/// Shortest stretch, days, where casts follow each other faster (choice): in two weeks the errors of gauges and the
/// heave of layers have mostly forgotten where they were.
const LEAST_STRETCH_DAYS: i64 = 14;
/// The 90 % point of the normal distribution (standard).
pub(super) const NORMAL_90: f64 = 1.281_551_565_545;

/// The stretch of each day, counted from 0, by dates in order and their casts: a new one begins with another cast,
/// two weeks or more after the last one began.
pub(super) fn stretches<'a>(days: impl Iterator<Item = (NaiveDate, &'a str)>) -> Vec<usize> {
    let mut last: Option<(NaiveDate, &str, usize)> = None;
    let one = |(date, cast): (NaiveDate, &'a str)| {
        let (began, stretch) = match last {
            None => (date, 0),
            Some((began, before, stretch))
                if cast == before || (date - began).num_days() < LEAST_STRETCH_DAYS =>
            {
                (began, stretch)
            }
            Some((_, _, stretch)) => (date, stretch + 1),
        };
        last = Some((began, cast, stretch));
        stretch
    };
    days.map(one).collect()
}

/// To how many equal stretches those of unequal weight come: (sum w)^2 / sum w^2.
///
/// # References
/// Kish 1965, Survey sampling (recalled).
pub(super) fn effective(weights: &[f64]) -> f64 {
    let (sum, squares) = weights.iter().fold((0.0, 0.0), |(sum, squares), w| (sum + w, squares + w * w));
    if squares > 0.0 { sum * sum / squares } else { 0.0 }
}

/// The 90 % point of Student's distribution, of degrees of freedom from 1 up, whole or not: the normal one and its
/// first three corrections, within 4 % at 1 and 0.4 % from 2 up.
///
/// # References
/// Cornish-Fisher expansion, Abramowitz & Stegun 1964, 26.7.5 (recalled; held against the table).
pub(super) fn student_90(freedom: f64) -> f64 {
    let (z, v) = (NORMAL_90, freedom.max(1.0));
    let odd =
        |powers: [f64; 4]| z * (powers[0] + z * z * (powers[1] + z * z * (powers[2] + z * z * powers[3])));
    z + odd([1.0, 1.0, 0.0, 0.0]) / (4.0 * v)
        + odd([3.0, 16.0, 5.0, 0.0]) / (96.0 * v * v)
        + odd([-15.0, 17.0, 19.0, 3.0]) / (384.0 * v * v * v)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn published_student() {
        // the 0.90 column of the usual table
        for (freedom, told) in [(2.0, 1.886), (3.0, 1.638), (5.0, 1.476), (10.0, 1.372), (30.0, 1.310)] {
            assert!((student_90(freedom) / told - 1.0).abs() < 0.004, "{freedom}: {}", student_90(freedom));
        }
        assert!((student_90(1.0) / 3.078 - 1.0).abs() < 0.04);
    }

    #[test]
    fn law_stretches_hold_casts_together() {
        let date = |day| NaiveDate::from_ymd_opt(2025, 6, day).unwrap();
        let of = |days: &[(u32, &str)]| stretches(days.iter().map(|(day, cast)| (date(*day), *cast)));
        // one cast is one stretch however long; a cast each day does not make each day one
        assert_eq!(of(&[(1, "a"), (9, "a"), (20, "a"), (21, "b"), (22, "b")]), [0, 0, 0, 1, 1]);
        assert_eq!(of(&[(1, "a"), (7, "b"), (14, "c"), (15, "d"), (20, "e"), (29, "f")]), [0, 0, 0, 1, 1, 2]);
        assert!(of(&[]).is_empty());
    }

    #[test]
    fn law_equal_stretches_count_in_full() {
        assert!((effective(&[3.0; 7]) - 7.0).abs() < 1e-12);
        assert!((effective(&[1.0, 0.0, 0.0]) - 1.0).abs() < 1e-12);
        assert!(effective(&[]).abs() < 1e-12);
    }
}
