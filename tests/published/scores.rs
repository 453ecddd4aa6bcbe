//! Scores of days worked by hand.

use approx::assert_abs_diff_eq;
use chrono::NaiveDate;
use gatemix::record::{Row, Score, scores};

/// A row by month, expected, band, measured, level and flow.
fn row(
    month: u32,
    expected: Option<f64>,
    band: Option<(f64, f64)>,
    measured: Option<f64>,
    level: usize,
    flow_m3s: f64,
) -> Row {
    let date = NaiveDate::from_ymd_opt(2025, month, 15).unwrap();
    Row { date, expected, band, measured, level: Some(level), flow_m3s: Some(flow_m3s) }
}

/// Errors +1, -1, +2 and 0, two of three bands missed, one day not measured, one not computed.
fn rows() -> Vec<Row> {
    vec![
        row(5, Some(10.0), Some((9.5, 10.5)), Some(11.0), 0, 10.0),
        row(5, Some(10.0), Some((9.0, 11.0)), Some(9.0), 0, 20.0),
        row(6, Some(10.0), Some((9.0, 11.0)), Some(12.0), 2, 30.0),
        row(6, Some(10.0), None, Some(10.0), 2, 40.0),
        row(6, Some(10.0), Some((9.0, 11.0)), None, 2, 50.0),
        row(7, None, None, Some(10.0), 2, 60.0),
    ]
}

#[test]
fn published_scores_of_days_by_hand() {
    let scores = scores(&rows());
    let misfit = scores.all.misfit.unwrap();
    assert_abs_diff_eq!(misfit.bias, 0.5);
    assert_abs_diff_eq!(misfit.rmse, 1.5_f64.sqrt(), epsilon = 1e-12);
    // sizes 0 1 1 2: the 75th lies a quarter from the third to the fourth, the 99th 0.97 of the way
    assert_abs_diff_eq!(misfit.percentiles[0], 1.25, epsilon = 1e-12);
    assert_abs_diff_eq!(misfit.percentiles[1], 1.97, epsilon = 1e-12);
    assert_abs_diff_eq!(misfit.greatest, 2.0);
    let Score { n, not_computed, not_measured, with_band, inside, .. } = scores.all;
    // a reading on the edge of its band is inside
    assert_eq!((n, not_computed, not_measured, with_band, inside), (4, 1, 1, 3, 1));
}

#[test]
fn published_scores_by_level_flow_and_month() {
    let scores = scores(&rows());
    let counts = |score: &Score| (score.n, score.not_computed, score.not_measured);
    let levels: Vec<_> = scores.by_level.iter().map(|(level, score)| (*level, counts(score))).collect();
    assert_eq!(levels, [(0, (2, 0, 0)), (2, (2, 1, 1))]);
    let months: Vec<_> = scores.by_month.iter().map(|(month, score)| (*month, counts(score))).collect();
    assert_eq!(months, [(5, (2, 0, 0)), (6, (2, 0, 1)), (7, (0, 1, 0))]);
    assert!(scores.by_month[2].1.misfit.is_none());
    // 10 20 | 30 40 | 50 60
    let flows: Vec<_> = scores.by_flow.iter().map(|c| (c.flow_m3s, c.score.n)).collect();
    assert_eq!(flows, [((10.0, 20.0), 2), ((30.0, 40.0), 2), ((50.0, 60.0), 0)]);
}

#[test]
fn published_scores_of_nothing() {
    let scores = scores(&[]);
    assert_eq!(scores, gatemix::record::Scores::default());
    assert!(scores.all.misfit.is_none() && scores.all.share_inside().is_none());
    // one flow is one class
    let same: Vec<Row> = rows().iter().map(|row| Row { flow_m3s: Some(20.0), ..*row }).collect();
    assert_eq!(gatemix::record::scores(&same).by_flow.len(), 1);
}
