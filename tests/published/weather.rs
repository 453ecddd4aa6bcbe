//! Humidity, sun, the heat through a water surface, and what a reading of the air becomes.

use std::f64::consts::PI;

use approx::{assert_abs_diff_eq, assert_relative_eq};
use gatemix::weather::{
    Air, Budget, CLOUD_UNKNOWN, Damp, REFLECTED, Reading, Sky, Stand, budget, equilibrium_c, exchange_w_m2_c,
    humidity, sun, vapour_slope_mmhg_c, wind_function,
};

use crate::table::{Row, hold, rows, spread};

/// W/m2 of a mean day in MJ/m2 of that day.
const MJ_PER_DAY: f64 = 86_400.0 / 1e6;

/// The air of a row, its sun before reflection: the row tells what gets into the water.
fn air(row: &Row) -> Air {
    let temperature_c = row.maybe("t_c").unwrap_or(20.0);
    Air {
        temperature_c,
        dew_point_c: row
            .maybe("humidity")
            .map_or(temperature_c, |share| humidity::dew_point_of_humidity_c(temperature_c, share)),
        wind_m_s: row.maybe("wind_m_s").unwrap_or(0.0),
        cloud: row.maybe("cloud").unwrap_or(0.0),
        solar_w_m2: row.maybe("solar_w_m2").unwrap_or(0.0) / (1.0 - REFLECTED),
    }
}

fn computed(row: &Row) -> f64 {
    let t = || row.number("t_c");
    let latitude = || row.number("lat_deg").to_radians();
    let day = || format!("{}", row.number("day")).parse().unwrap_or(0_u32);
    let parts = || budget(&air(row), row.maybe("t2_c").unwrap_or(t()), 0.0);
    match row.text("formula") {
        "wet_bulb_kpa" => {
            humidity::vapour_of_wet_bulb_kpa(t(), row.number("t2_c"), row.number("pressure_kpa"))
        }
        "saturation_kpa" => humidity::saturation_kpa(t()),
        "dew_point" => humidity::dew_point_of_humidity_c(t(), row.number("humidity")),
        "vapour_mmhg" => humidity::saturation_mmhg(air(row).dew_point_c),
        "nearness" => sun::nearness(day()),
        "sunset" => sun::sunset_rad(latitude(), row.number("angle_rad")),
        "daylight" => sun::daylight_h(row.number("angle_rad")),
        "ra_declination" => {
            MJ_PER_DAY * sun::above_air_w_m2(latitude(), row.number("angle_rad"), row.number("nearness"))
        }
        "ra" => MJ_PER_DAY * sun::overhead_w_m2(row.number("lat_deg"), day(), None),
        "wind_function" => wind_function(row.number("wind_m_s")),
        "slope" => vapour_slope_mmhg_c(t()),
        "exchange" => exchange_w_m2_c(&Air { dew_point_c: row.number("t2_c"), ..air(row) }, t()),
        "long_waves_air" => parts().air,
        "long_waves_back" => -parts().back,
        // the rows count what leaves the water
        "evaporation" => -parts().evaporation,
        "contact" => -parts().contact,
        "net" => parts().net_w_m2(),
        "equilibrium" => equilibrium_c(&air(row), 0.0).unwrap_or(f64::NAN),
        other => panic!("no formula {other}"),
    }
}

#[test]
fn published_single_values_of_weather() {
    hold("checks_weather.csv", 40, computed);
}

#[test]
fn published_pressure_of_vapour() {
    let rows = rows("vapour_pressure.csv", 41);
    let against = |column: &'static str, computed: &dyn Fn(f64) -> f64| {
        let pairs = rows.iter().map(|row| (computed(row.number("T_C")) / row.number(column), 1.0));
        spread(column, pairs)
    };
    assert!(against("Tetens_FAO56_kPa", &humidity::saturation_kpa).max < 2e-6);
    assert!(against("es_4.596form_mmHg", &humidity::saturation_mmhg).max < 2e-6);
    // the form itself against better ones
    for column in ["psychrolib_kPa", "IAPWS97_psat_kPa"] {
        assert!(against(column, &humidity::saturation_kpa).max < 1.3e-3, "{column}");
    }
    assert!(against("beta_Brady_mmHg_C", &|t| vapour_slope_mmhg_c(t)).max < 1e-5);
}

#[test]
fn published_sun_by_latitude_and_day() {
    let rows = rows("solar_daily.csv", 98);
    let day = |row: &Row| format!("{}", row.number("J")).parse().unwrap_or(0_u32);
    let declinations =
        rows.iter().map(|r| (sun::declination_rad(day(r)), r.number("decl_spencer71_pvlib_rad")));
    assert!(spread("declination", declinations).max < 6e-6);
    // the column took a solar constant of 1366.1 W/m2, we that of FAO-56, 1366.67
    let ra = rows.iter().map(|r| {
        let computed = MJ_PER_DAY * sun::overhead_w_m2(r.number("lat_deg"), day(r), None);
        (computed * 1366.1 / sun::SOLAR_CONSTANT_W_M2, r.number("Ra_pvlib_spencer_MJ"))
    });
    assert!(spread("sun above the air", ra).max < 4e-4);
    let daylight = rows.iter().map(|r| {
        let sunset = sun::sunset_rad(r.number("lat_deg").to_radians(), r.number("decl_FAO24_rad"));
        (sun::daylight_h(sunset), r.number("daylight_h_FAO34"))
    });
    assert!(spread("daylight", daylight).max < 1e-3);
}

/// A day of sun at 45 N in the middle of June.
const JUNE: Stand = Stand { latitude_deg: Some(45.0), altitude_m: None, day: 166, hours: None };

fn reading(sky: Sky) -> Reading {
    Reading { temperature_c: 20.0, damp: Damp::Humidity(0.6), wind_m_s: 3.0, wind_height_m: 10.0, sky }
}

#[test]
fn law_the_hours_of_a_day_of_sun_are_that_day() {
    for (latitude, day) in [(45.0, 166), (-20.0, 10), (70.0, 172), (70.0, 350), (0.0, 80)] {
        let hour = |h: u32| sun::overhead_w_m2(latitude, day, Some((f64::from(h), f64::from(h + 1))));
        let mean = (0..24).map(hour).sum::<f64>() / 24.0;
        assert_abs_diff_eq!(mean, sun::overhead_w_m2(latitude, day, None), epsilon = 1e-9);
        assert!((0..24).all(|h| hour(h) >= 0.0));
    }
    // no night in the far north: the whole day counts
    assert_abs_diff_eq!(sun::sunset_rad(70_f64.to_radians(), sun::declination_rad(172)), PI);
}

#[test]
fn scenario_the_sky_by_what_is_told_of_it() {
    let air = |sky| reading(sky).air(&JUNE).unwrap();
    let sky = Sky::default();
    let above = sun::overhead_w_m2(45.0, 166, None);
    // clear by cloud and by sunshine is the same sky
    let daylight = sun::daylight_h(sun::sunset_rad(45_f64.to_radians(), sun::declination_rad(166)));
    let clear = air(Sky { cloud: Some(0.0), ..sky }).0;
    let sunny = air(Sky { sunshine_h: Some(daylight), ..sky }).0;
    assert_relative_eq!(clear.solar_w_m2, 0.75 * above, max_relative = 1e-12);
    assert_relative_eq!(sunny.solar_w_m2, clear.solar_w_m2, max_relative = 1e-12);
    assert_abs_diff_eq!(sunny.cloud, 0.0, epsilon = 1e-12);
    // radiation that cloud gave gives the cloud back, and is kept itself
    let cloudy = air(Sky { cloud: Some(0.7), ..sky }).0;
    let (back, assumed) = air(Sky { solar_w_m2: Some(cloudy.solar_w_m2), ..sky });
    assert_abs_diff_eq!(back.cloud, 0.7, epsilon = 1e-12);
    assert!(!assumed);
    assert_relative_eq!(back.solar_w_m2, cloudy.solar_w_m2);
    // measured radiation beside cloud that was seen: both are kept
    let both = air(Sky { cloud: Some(0.2), solar_w_m2: Some(123.0), ..sky }).0;
    assert_eq!((both.cloud, both.solar_w_m2), (0.2, 123.0));
    // without a latitude nothing can be computed, and radiation leaves the cloud open
    let nowhere = Stand { latitude_deg: None, ..JUNE };
    let open = reading(Sky { solar_w_m2: Some(200.0), ..sky }).air(&nowhere).unwrap();
    assert_eq!((open.0.cloud, open.1), (CLOUD_UNKNOWN, true));
    let kind = |sky, stand: &Stand| reading(sky).air(stand).unwrap_err().kind;
    assert_eq!(kind(Sky { cloud: Some(0.2), ..sky }, &nowhere), "no-latitude");
    assert_eq!(kind(Sky { sunshine_h: Some(8.0), ..sky }, &nowhere), "no-latitude");
    assert_eq!(kind(sky, &JUNE), "no-sky");
}

#[test]
fn scenario_water_in_the_air_by_three_readings() {
    let sky = Sky { cloud: Some(0.5), ..Sky::default() };
    let dew = |damp| Reading { damp, ..reading(sky) }.air(&JUNE).map(|(air, _)| air.dew_point_c);
    assert_eq!(dew(Damp::DewPoint(11.0)), Ok(11.0));
    assert_abs_diff_eq!(dew(Damp::Humidity(1.0)).unwrap(), 20.0, epsilon = 1e-12);
    assert_abs_diff_eq!(dew(Damp::WetBulb(20.0)).unwrap(), 20.0, epsilon = 1e-12);
    assert_eq!(dew(Damp::Humidity(0.0)).unwrap_err().kind, "humidity");
    assert_eq!(dew(Damp::WetBulb(2.0)).unwrap_err().kind, "humidity");
}

#[test]
fn scenario_the_mean_of_a_day_averages_vapour_not_dew_point() {
    let air = |dew_point_c: f64| Air {
        temperature_c: 20.0,
        dew_point_c,
        wind_m_s: 2.0,
        cloud: 0.5,
        solar_w_m2: 100.0,
    };
    let mean = Air::mean(&[air(0.0), air(20.0)]).unwrap();
    let vapour = 0.5 * (humidity::saturation_kpa(0.0) + humidity::saturation_kpa(20.0));
    assert_relative_eq!(humidity::saturation_kpa(mean.dew_point_c), vapour, max_relative = 1e-12);
    assert!(mean.dew_point_c > 12.0);
    assert_eq!(Air::mean(&[]), None);
}

#[test]
fn scenario_shade_keeps_the_sun_off_and_nothing_else() {
    let (air, _) = reading(Sky { cloud: Some(0.3), ..Sky::default() }).air(&JUNE).unwrap();
    let (open, shaded) = (budget(&air, 15.0, 0.0), budget(&air, 15.0, 0.4));
    assert_relative_eq!(shaded.solar, 0.6 * open.solar, max_relative = 1e-12);
    assert_eq!(Budget { solar: open.solar, ..shaded }, open);
}
