//! Where labels go so that none covers another.

/// Labels along an axis of `cells` cells, each given as the cell it belongs to and its width, in order. Where they
/// would touch, only every second is kept, or every third, so that what is left is evenly spaced. Yields index and
/// first cell of those kept; one at an end is moved inward until it is whole.
pub fn along(labels: &[(usize, usize)], cells: usize) -> Vec<(usize, usize)> {
    let start = |&(at, width): &(usize, usize)| {
        let most = cells.checked_sub(width)?;
        Some(at.saturating_sub(width / 2).min(most))
    };
    for stride in 1..=labels.len() {
        let mut free = 0;
        let mut kept = Vec::new();
        for (i, label) in labels.iter().enumerate().step_by(stride) {
            match start(label) {
                Some(first) if first >= free => {
                    free = first + label.1 + 1;
                    kept.push((i, first));
                }
                _ => break,
            }
        }
        if kept.len() == labels.len().div_ceil(stride) {
            return kept;
        }
    }
    Vec::new()
}

/// Rows for labels that each want one, `wants` in falling order of what they label, so rising. One that finds its
/// row taken gives or gets the next one beside it, if that is free; else both share the row. The order is kept.
pub fn on_rows(wants: &[usize], rows: usize) -> Vec<usize> {
    let mut out = wants.to_vec();
    for i in 1..out.len() {
        if out[i] > out[i - 1] {
            continue;
        }
        let above = out[i - 1];
        let free_above = above == wants[i - 1] && above > 0 && (i < 2 || out[i - 2] + 1 < above);
        let free_below = above + 1 < rows && wants.get(i + 1).is_none_or(|&next| next > above + 1);
        if free_above {
            out[i - 1] = above - 1;
            out[i] = above;
        } else if free_below && wants[i] == above {
            out[i] = above + 1;
        } else {
            out[i] = above;
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn scenario_labels_that_touch_are_thinned_evenly() {
        assert_eq!(along(&[(0, 2), (10, 2), (19, 2)], 20), [(0, 0), (1, 9), (2, 18)]);
        assert_eq!(along(&[(0, 4), (4, 4), (8, 4), (12, 4)], 16), [(0, 0), (2, 6)]);
        assert_eq!(along(&[(0, 9)], 4), []);
        assert_eq!(along(&[], 4), []);
    }

    #[test]
    fn scenario_a_name_gets_the_nearest_free_row_or_shares() {
        assert_eq!(on_rows(&[2, 2, 5], 9), [1, 2, 5]);
        assert_eq!(on_rows(&[0, 0, 5], 9), [0, 1, 5]);
        assert_eq!(on_rows(&[0, 0, 1], 9), [0, 0, 1]);
        assert_eq!(on_rows(&[0, 0], 1), [0, 0]);
        assert_eq!(on_rows(&[3, 3, 3], 9), [2, 3, 4]);
    }

    #[test]
    fn law_names_keep_their_order_and_stay_within_one_row() {
        for code in 0..5_usize.pow(5) {
            let mut wants: Vec<usize> = (0..5).map(|k| code / 5_usize.pow(k) % 5).collect();
            wants.sort_unstable();
            let rows = on_rows(&wants, 5);
            assert!(rows.is_sorted(), "{wants:?} {rows:?}");
            assert!(
                rows.iter().zip(&wants).all(|(r, w)| r.abs_diff(*w) <= 1 && *r < 5),
                "{wants:?} {rows:?}"
            );
        }
    }
}
