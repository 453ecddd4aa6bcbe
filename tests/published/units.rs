//! Conversion factors.

use crate::table::rows;
use gatemix::units::{Dimension, Unit};

const DIMENSIONS: [Dimension; 10] = [
    Dimension::Length,
    Dimension::Distance,
    Dimension::Area,
    Dimension::Volume,
    Dimension::Flow,
    Dimension::Velocity,
    Dimension::Temperature,
    Dimension::TemperatureDifference,
    Dimension::Concentration,
    Dimension::Percent,
];

#[test]
fn published_unit_factors() {
    let rows = rows("unit_factors.csv", 20);
    for row in &rows {
        let named = |name: &str| DIMENSIONS.into_iter().find(|dimension| dimension.to_string() == name);
        let dimension = named(row.text("dimension")).unwrap();
        let unit = Unit::parse(row.text("unit"), dimension).unwrap();
        let (value, expected) = (unit.to_si(row.number("value")), row.number("si"));
        let off = (value - expected).abs();
        assert!(off <= row.number("tolerance"), "{unit} of {dimension}: {value} for {expected}");
    }
    for unit in
        Unit::ALL.iter().filter(|unit| unit.symbol() != unit.dimension().units().next().unwrap().symbol())
    {
        assert!(rows.iter().any(|row| row.text("unit") == unit.symbol()), "{unit} is not in the file");
    }
}
