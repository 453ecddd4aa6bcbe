//! Which columns a weather file has, and which it lacks or has twice.

use crate::problem::Problem;

use super::super::table::Table;
use super::columns::{Column, Told};

/// The columns of a table as found, with what is to be said of them.
pub(super) fn columns(table: &Table, problems: &mut Vec<Problem>) -> Vec<Option<Column>> {
    let columns: Vec<Option<Column>> = table.columns.iter().map(|c| Column::parse(c)).collect();
    let mut say = |problem: Problem| problems.push(problem.on_line(table.header_line));
    let found: Vec<Column> = columns.iter().flatten().copied().collect();
    for (at, column) in found.iter().enumerate() {
        let before = found.iter().take(at).find(|b| b.told() == column.told());
        if let Some(before) = before {
            let words = format!("both {} and {} are given", before.name(), column.name());
            say(Problem::refused("column-twice", words, "keep one of the two columns"));
        }
    }
    let has = |told: &[Told]| found.iter().any(|c| told.contains(&c.told()));
    let needed: [(&[Told], &str, &str); 3] = [
        (
            &[Told::Humidity, Told::DewPoint, Told::WetBulb],
            "no column tells the water in the air",
            "add humidity_percent, dew_point_C, dew_point_F, wet_bulb_C or wet_bulb_F",
        ),
        (&[Told::Wind], "no column tells the wind", "add wind_m_s, wind_mph or wind_ft_s"),
        (
            &[Told::Cloud, Told::Sunshine, Told::Radiation],
            "no column tells the sky",
            "add cloud_percent, cloud_tenths, sunshine_h, radiation_w_m2 or radiation_mj_m2",
        ),
    ];
    for (told, words, cure) in needed {
        if !has(told) {
            say(Problem::refused("no-column", words, cure));
        }
    }
    if found.contains(&Column::Time) {
        for column in [Column::Sunshine, Column::RadiationMj] {
            if found.contains(&column) {
                let words = format!("{} is that of a day, and this file goes by `time`", column.name());
                let cure = "give the day in a column `date`, or cloud or radiation_w_m2 by the hour";
                say(Problem::refused("daily-column", words, cure));
            }
        }
    }
    let damp = [Told::DewPoint, Told::Humidity, Told::WetBulb];
    let damp: Vec<&str> = damp.iter().filter(|told| has(&[**told])).map(|told| told.words()).collect();
    if let [first, rest @ ..] = damp.as_slice()
        && !rest.is_empty()
    {
        let words = format!("{first} is taken, not {}, where a row has both", rest.join(" or "));
        say(Problem::note("damp-twice", words));
    }
    let unused: Vec<&str> = table
        .columns
        .iter()
        .zip(&columns)
        .filter(|(name, column)| column.is_none() && !name.is_empty())
        .map(|(name, _)| name.as_str())
        .collect();
    if !unused.is_empty() {
        say(Problem::note("column-unused", format!("columns not used: {}", unused.join(", "))));
    }
    columns
}
