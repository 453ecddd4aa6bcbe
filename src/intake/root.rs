//! A bracketed root, for relations that may have kinks where a port begins to flow.
//!
//! Methods: `docs/methods.md`, section 4.

/// Most steps; halving alone would tell neighbouring numbers apart in about as many.
const STEPS: usize = 120;

/// Where a function passes zero between `a` and `b`, at whose values `at_a` and `at_b` it has not one sign.
/// Returns when the value is within `enough` of zero or the bracket is down to round-off.
///
/// The first step is the secant, which is exact where the relation is straight.
///
/// # References
/// Chandrupatla 1997, Advances in Engineering Software 28:145-149 (recalled): inverse quadratic where it can be
/// trusted, else halving.
pub(super) fn root(
    mut value: impl FnMut(f64) -> f64,
    [mut a, mut b]: [f64; 2],
    [mut at_a, mut at_b]: [f64; 2],
    enough: f64,
) -> f64 {
    let mut share = at_a / (at_a - at_b);
    for _ in 0..STEPS {
        let best = if at_a.abs() < at_b.abs() { a } else { b };
        let least = f64::EPSILON * best.abs() / (b - a).abs();
        if at_a.abs().min(at_b.abs()) <= enough || least > 0.5 {
            return best;
        }
        let x = a + share.clamp(least, 1.0 - least) * (b - a);
        let at_x = value(x);
        let (c, at_c);
        if (at_x > 0.0) == (at_a > 0.0) {
            (c, at_c) = (a, at_a);
        } else {
            (c, at_c) = (b, at_b);
            (b, at_b) = (a, at_a);
        }
        (a, at_a) = (x, at_x);
        let (xi, phi) = ((a - b) / (c - b), (at_a - at_b) / (at_c - at_b));
        share = if phi * phi < xi && (1.0 - phi).powi(2) < 1.0 - xi {
            at_a / (at_b - at_a) * at_c / (at_b - at_c)
                + (c - a) / (b - a) * at_a / (at_c - at_a) * at_b / (at_c - at_b)
        } else {
            0.5
        };
    }
    if at_a.abs() < at_b.abs() { a } else { b }
}
