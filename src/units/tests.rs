//! Laws of conversion, and what is read, refused and shown.

use super::{Datum, Dimension, Folder, System, Unit, UnitError, figure, parse, show};
use approx::assert_relative_eq;
use proptest::prelude::*;

fn any_unit() -> impl Strategy<Value = Unit> {
    proptest::sample::select(Unit::ALL)
}

fn any_dimension() -> impl Strategy<Value = Dimension> {
    any_unit().prop_map(Unit::dimension)
}

/// Text made of pieces that quantities are made of, so that most of it is nearly right.
fn nearly_a_quantity() -> impl Strategy<Value = String> {
    let piece = proptest::sample::select(
        &[
            "1",
            "12",
            "0.5",
            "-",
            "+",
            ".",
            ",",
            "e",
            "e9",
            "E-3",
            "e999",
            "inf",
            "NaN",
            " ",
            "\u{a0}",
            "m",
            "ft",
            "m³/s",
            "cfs",
            "acre-ft",
            "°",
            "F",
            "deg C",
            "%",
            "^",
            "/",
            "d",
            "\u{1b}[2J",
            "\u{202e}",
            "é",
            "水",
        ][..],
    );
    proptest::collection::vec(piece, 0..8).prop_map(|pieces| pieces.concat())
}

fn check_text(text: &str, dimension: Dimension) -> Result<(), TestCaseError> {
    match Folder::default().parse(text, dimension) {
        Ok(si) => prop_assert!(si.is_finite()),
        Err(error) => {
            let sentence = error.to_string();
            let helps = sentence.contains(&dimension.accepted()) || matches!(error, UnitError::Comma { .. });
            prop_assert!(helps, "{sentence}");
            prop_assert!(!sentence.contains(|c: char| c.is_control() || c == '\u{202e}'), "{sentence}");
        }
    }
    Ok(())
}

proptest! {

    #![proptest_config(crate::units::law_config())]
    #[test]
    fn law_round_trip(unit in any_unit(), value in -1e9..1e9_f64) {
        let back = unit.from_si(unit.to_si(value));
        // on a scale with an offset the digits below one degree are those of the offset
        let offset = if unit.dimension() == Dimension::Temperature { 1.0 } else { 0.0 };
        prop_assert!((back - value).abs() <= 1e-12 * value.abs().max(offset), "{value} {unit} came back {back}");
    }

    #[test]
    fn law_differences_have_no_offset(a in -5.0..120.0_f64, step in -50.0..50.0_f64) {
        let absolute = Unit::Fahrenheit.to_si(a + step) - Unit::Fahrenheit.to_si(a);
        prop_assert!((absolute - Unit::FahrenheitDifference.to_si(step)).abs() < 1e-12);
        prop_assert!((step / 1.8 - Unit::FahrenheitDifference.to_si(step)).abs() < 1e-12);
    }

    #[test]
    fn law_every_spelling_of_a_number_and_unit(unit in any_unit(), value in -1e6..1e6_f64) {
        for text in [format!("{value}{unit}"), format!(" {value:e}  {unit} "), format!("{value:+} {unit}")] {
            let read = parse(&text, unit.dimension(), unit);
            prop_assert_eq!(read, Ok(unit.to_si(value)), "{}", text);
        }
        prop_assert_eq!(parse(&value.to_string(), unit.dimension(), unit), Ok(unit.to_si(value)));
    }

    #[test]
    fn law_any_text_is_answered(text in ".*", near in nearly_a_quantity(), dimension in any_dimension()) {
        check_text(&text, dimension)?;
        check_text(&near, dimension)?;
    }

    #[test]
    fn law_any_number_is_shown(value in any::<f64>(), dimension in any_dimension(), decimals in any::<u8>()) {
        for system in [System::Us, System::Si] {
            prop_assert!(show(value, dimension, system, decimals).ends_with(system.unit(dimension).symbol()));
        }
    }

    #[test]
    fn law_what_is_shown_reads_back(value in -1e8..1e8_f64, dimension in any_dimension(), decimals in 0..6_u8) {
        for system in [System::Us, System::Si] {
            let text = show(value, dimension, system, decimals).replace(',', "");
            let unit = system.unit(dimension);
            let shown = unit.from_si(parse(&text, dimension, unit).unwrap());
            let rounding = 0.5 * 10_f64.powi(-i32::from(decimals)) + 1e-12 * shown.abs() + 1e-12;
            prop_assert!((shown - unit.from_si(value)).abs() <= rounding, "{value} shown as {text}");
        }
    }
}

#[test]
fn law_a_day_of_cfs_is_that_many_acre_feet() {
    // 86 400 cubic feet over 43 560 square feet, whatever the foot
    let day_m3 = Unit::CubicFootPerSecond.to_si(1.0) * 86_400.0;
    assert_relative_eq!(Unit::AcreFoot.from_si(day_m3), 86_400.0 / 43_560.0, max_relative = 1e-14);
}

#[test]
fn law_no_word_names_two_units_of_one_dimension() {
    for unit in Unit::ALL {
        assert_eq!(Unit::parse(unit.symbol(), unit.dimension()), Ok(*unit));
    }
}

#[test]
fn scenario_usual_spellings() {
    let flow = [
        ("m3/s", Unit::CubicMetrePerSecond),
        ("m^3/s", Unit::CubicMetrePerSecond),
        ("m³/s", Unit::CubicMetrePerSecond),
        ("cms", Unit::CubicMetrePerSecond),
        ("CFS", Unit::CubicFootPerSecond),
        ("ft3/s", Unit::CubicFootPerSecond),
        ("ft^3/s", Unit::CubicFootPerSecond),
        ("ML/d", Unit::MegalitrePerDay),
        ("MGD", Unit::MillionGallonsPerDay),
    ];
    for (word, unit) in flow {
        assert_eq!(Unit::parse(word, Dimension::Flow), Ok(unit));
    }
    for word in ["acre-ft", "acre-feet", "acre ft", "ac-ft", "AF", "af"] {
        assert_eq!(Unit::parse(word, Dimension::Volume), Ok(Unit::AcreFoot), "{word}");
    }
    for word in ["F", "degF", "deg F", "°F", "ºF", "fahrenheit"] {
        assert_eq!(Unit::parse(word, Dimension::Temperature), Ok(Unit::Fahrenheit), "{word}");
        assert_eq!(
            Unit::parse(word, Dimension::TemperatureDifference),
            Ok(Unit::FahrenheitDifference),
            "{word}"
        );
    }
    // millilitres a day are no flow of a river
    assert!(Unit::parse("ml/d", Dimension::Flow).is_err());
}

#[test]
fn scenario_numbers_with_and_without_units() {
    let metric = Folder::default();
    let mut customary = Folder::default();
    for (dimension, word) in [
        (Dimension::Length, "ft"),
        (Dimension::Area, "acres"),
        (Dimension::Volume, "acre-ft"),
        (Dimension::Flow, "cfs"),
        (Dimension::Temperature, "F"),
    ] {
        customary.set(dimension, word).unwrap();
    }
    let read = |folder: &Folder, text, dimension| folder.parse(text, dimension).unwrap();
    assert_relative_eq!(read(&metric, "1250cfs", Dimension::Flow), 35.39605824, max_relative = 1e-14);
    // the unit of a bare velocity is the length's in a second
    assert_relative_eq!(read(&customary, "4", Dimension::Velocity), 1.2192, max_relative = 1e-14);
    assert_relative_eq!(read(&metric, "4 fps", Dimension::Velocity), 1.2192, max_relative = 1e-14);
    assert_relative_eq!(read(&metric, "1.2", Dimension::Velocity), 1.2);
    assert_relative_eq!(read(&customary, "1250", Dimension::Flow), 35.39605824, max_relative = 1e-14);
    assert_relative_eq!(read(&metric, "58 F", Dimension::Temperature), 26.0 / 1.8, max_relative = 1e-14);
    assert_relative_eq!(read(&customary, "58", Dimension::Temperature), 26.0 / 1.8, max_relative = 1e-14);
    assert_relative_eq!(read(&customary, "1.8", Dimension::TemperatureDifference), 1.0, max_relative = 1e-14);
    assert_relative_eq!(read(&customary, "-1.5e3 m", Dimension::Length), -1500.0);
    assert_relative_eq!(read(&customary, "100", Dimension::Length), 30.48, max_relative = 1e-14);
    assert_relative_eq!(read(&customary, "2", Dimension::Area), 8093.7128448, max_relative = 1e-14);
    assert_relative_eq!(read(&customary, "1", Dimension::Volume), 1233.48183754752, max_relative = 1e-14);
    assert_relative_eq!(read(&metric, "50%", Dimension::Percent), 50.0);
    assert_relative_eq!(read(&metric, "7", Dimension::Concentration), 7.0);
    assert_relative_eq!(customary.to_si(212.0, Dimension::Temperature), 100.0, max_relative = 1e-14);
}

#[test]
fn scenario_refusals_say_what_is_accepted() {
    let said = |text, dimension| Folder::default().parse(text, dimension).unwrap_err().to_string();
    for (text, dimension, sentence) in [
        (
            "deep",
            Dimension::Length,
            r#""deep" is not a number; write the length as a plain number, or with m or ft after it"#,
        ),
        (
            "",
            Dimension::Temperature,
            r#""" is not a number; write the temperature as a plain number, or with C or F after it"#,
        ),
        (
            "inf",
            Dimension::Length,
            r#""inf" is not a number; write the length as a plain number, or with m or ft after it"#,
        ),
        ("12,5", Dimension::Length, r#""12,5" has a comma; write 1250 for thousands and 12.5 for tenths"#),
        ("1e999", Dimension::Length, r#""1e999" is too large; the length must be finite, in m or ft"#),
        (
            "1e308 hm3",
            Dimension::Volume,
            r#""1e308 hm3" is too large; the volume must be finite, in m3, hm3, acre-ft or kaf"#,
        ),
        ("12 fathoms", Dimension::Length, r#""fathoms" is not a unit of length; accepted: m or ft"#),
        ("12 m deep", Dimension::Length, r#""m deep" is not a unit of length; accepted: m or ft"#),
        ("1.2.3", Dimension::Length, r#"".3" is not a unit of length; accepted: m or ft"#),
        ("30 cfs", Dimension::Length, r#""cfs" is a unit of flow, not of length; accepted: m or ft"#),
        (
            "30 ft",
            Dimension::Flow,
            r#""ft" is a unit of length, not of flow; accepted: m3/s, cfs, kcfs, ML/d or mgd"#,
        ),
        ("5 \u{1b}[2J", Dimension::Percent, r#""\u{1b}[2J" is not a unit of percentage; accepted: %"#),
    ] {
        assert_eq!(said(text, dimension), sentence);
    }
    let long = said(&"9 x".repeat(1000), Dimension::Area);
    assert!(long.len() < 120, "{long}");
    assert_eq!(
        parse("12", Dimension::Length, Unit::CubicFootPerSecond).unwrap_err().to_string(),
        r#""cfs" is a unit of flow, not of length; accepted: m or ft"#
    );
    assert_eq!(
        Folder::default().set(Dimension::Volume, "gallon").unwrap_err().to_string(),
        r#""gallon" is not a unit of volume; accepted: m3, hm3, acre-ft or kaf"#
    );
}

#[test]
fn scenario_shown_values() {
    let flow = Unit::CubicFootPerSecond.to_si(1250.0);
    assert_eq!(show(flow, Dimension::Flow, System::Us, 0), "1,250 cfs");
    assert_eq!(show(flow, Dimension::Flow, System::Si, 1), "35.4 m3/s");
    assert_eq!(show(14.5, Dimension::Temperature, System::Us, 1), "58.1 F");
    assert_eq!(show(14.5, Dimension::Temperature, System::Si, 1), "14.5 C");
    assert_eq!(show(1.0, Dimension::TemperatureDifference, System::Us, 1), "1.8 F");
    assert_eq!(show(-0.04, Dimension::TemperatureDifference, System::Si, 1), "0.0 C");
    assert_eq!(show(50.0, Dimension::Percent, System::Us, 0), "50%");
    assert_eq!(show(7.05, Dimension::Concentration, System::Us, 2), "7.05 mg/L");
    assert_eq!(show(2.44e8, Dimension::Volume, System::Si, 0), "244,000,000 m3");
    assert_eq!(figure(-123_456.78, Unit::Metre, 1), "-123,456.8");
    assert_eq!(figure(-999.6, Unit::Metre, 0), "-1,000");
    assert_eq!(figure(999.4, Unit::Metre, 0), "999");
}

#[test]
fn law_two_datums_are_never_mixed() {
    let named = |name| Datum::new(name).unwrap();
    assert_eq!(named("NAVD 88").agree(&named(" navd88 ")), Ok(()));
    assert_eq!(Datum::default().agree(&named("local")), Ok(()));
    assert_eq!(
        named("NAVD88").agree(&named("NGVD29")).unwrap_err().to_string(),
        r#"elevations above "NAVD88" and above "NGVD29" cannot be mixed; give both in one datum, under one name"#
    );
    assert!(Datum::default().agree(&named("NAVD88")).is_err());
    assert_eq!(
        Datum::new("  ").unwrap_err().to_string(),
        r#"the datum has no name; write its name, or leave it out for "local""#
    );
    assert_eq!(named(" NAVD88 ").to_string(), "NAVD88");
}
