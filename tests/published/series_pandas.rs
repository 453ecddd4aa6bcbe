//! A season with gaps, bursts and a clock change, against pandas: `tests/peer/series.py` and what it printed.

use chrono::NaiveDate;
use gatemix::files::site::site;
use gatemix::files::station::station;
use gatemix::files::text::{Format, read_from};
use gatemix::problem::any_refused;
use gatemix::series::{Coverage, Daily};
use gatemix::target::{Statistic, Target, observed};

use super::series::date;
use super::table::rows;

const RECORD: &str = include_str!("../data/series_record.csv");
const PANDAS: &str = include_str!("../data/series_pandas.csv");

/// As the head of the data file says.
const TOLERANCE: f64 = 1e-9;
const HIGH_C: f64 = 14.0;

fn daily() -> Daily {
    let text = "
name: Bare
units: {}
utc_offset: \"-08:00\"
place: { altitude: 0 }
pool: { bed: 0, full: 10, table: [[0, 0], [10, 1000]] }
outlets: [ { name: A, centre: 3, height: 1, width: 1 } ]
";
    let site = site(text, "site.yaml").site.unwrap();
    let source = read_from("series_record.csv", RECORD.as_bytes(), Format::Csv).unwrap();
    let (record, problems) = station(&source, &site);
    assert!(!any_refused(&problems) && problems.is_empty(), "{problems:?}");
    record.unwrap().daily(site.offset, Coverage::default())
}

#[test]
fn published_a_season_comes_out_as_pandas_has_it() {
    let daily = daily();
    let (water, oxygen) = (&daily.temperature_c, &daily.oxygen_mg_l);
    let (first, _) = daily.recorded.unwrap();
    let coverage = Coverage::default();
    let of_day = |column: &str, day: NaiveDate| -> Option<f64> {
        match column {
            "mean" => Some(water.on(day)?.mean),
            "max" => Some(water.on(day)?.max),
            "min" => Some(water.on(day)?.min),
            "change" => water.on(day)?.hourly_change,
            "daily_change" => water.daily_change(day),
            "7dadm" => water.mean_over(day, 7, coverage, |d| d.max),
            "mean_3" => water.mean_over(day, 3, coverage, |d| d.mean),
            "mean_14" => water.mean_over(day, 14, coverage, |d| d.mean),
            "row_above" => water.on(day).map(|_| f64::from(water.run_above(day, HIGH_C))),
            "days_above" => Some(f64::from(water.count_above(first, day, HIGH_C).above)),
            "degree_days" => water.degree_days(first, day, 4.0, coverage),
            "oxygen_mean" => Some(oxygen.on(day)?.mean),
            "oxygen_min" => Some(oxygen.on(day)?.min),
            "oxygen_7dmin" => oxygen.mean_over(day, 7, coverage, |d| d.min),
            _ => panic!("{column}"),
        }
    };
    let columns: Vec<&str> =
        PANDAS.lines().find(|l| l.starts_with("date,")).unwrap().split(',').skip(1).collect();
    assert_eq!(columns.len(), 14);
    let mut wrong = Vec::new();
    let (mut told, mut blank) = (0, 0);
    for row in rows("series_pandas.csv", 101) {
        let day = date(row.text("date"));
        for column in &columns {
            let (here, there) = (of_day(column, day), row.maybe(column));
            told += usize::from(there.is_some());
            blank += usize::from(there.is_none());
            let same = match (here, there) {
                (Some(here), Some(there)) => (here - there).abs() <= TOLERANCE,
                (here, there) => here.is_none() && there.is_none(),
            };
            if !same {
                wrong.push(format!("{day} {column}: {here:?} for {there:?}"));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    assert!(told > 1000 && blank > 100, "{told} {blank}");
}

/// The numbers of a line of the head, in order.
fn head(begins: &str) -> Vec<f64> {
    let line = PANDAS.lines().find_map(|l| l.strip_prefix(begins)).unwrap();
    let words = line.split([' ', ',', ':']).filter(|w| !w.is_empty());
    words.filter_map(|w| w.parse().ok()).collect()
}

#[test]
fn published_days_over_longest_run_and_worst_come_out_as_pandas_has_them() {
    let rule = Target {
        statistic: Statistic::DailyMax,
        high_c: Some(HIGH_C),
        oxygen_min_mg_l: Some(8.4),
        oxygen_statistic: Some(gatemix::target::OxygenStatistic::DailyMean),
        ..Target::default()
    };
    let of = observed(&rule, &daily(), None, Coverage::default(), |_| true);
    let (held, oxygen) = (of.temperature.unwrap(), of.oxygen.unwrap());
    let [days, run, worst, sum, floor, short, farthest] = head("# season:")[..] else { panic!("the head") };
    let same = |a: f64, b: f64| (a - b).abs() <= TOLERANCE;
    assert!(same(f64::from(held.all.over), days) && same(f64::from(held.all.longest_run), run));
    assert!(same(held.all.worst.unwrap().0, worst) && same(held.all.sum_outside, sum));
    assert!(same(floor, 8.4) && same(f64::from(oxygen.all.under), short));
    assert!(same(oxygen.all.worst.unwrap().0, farthest) && short > 0.0);
    let months: Vec<f64> = held.months.values().map(|t| f64::from(t.over)).collect();
    assert_eq!(months, head("# months:"));
}
