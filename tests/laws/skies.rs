//! The air of a case and of a year, over the pool and over the river.

use chrono::{Datelike, NaiveDate};
use gatemix::files::site::site;
use gatemix::river::Conditions;
use gatemix::season::{Skies, Sky};
use gatemix::site::{Case, Site, Surface};
use gatemix::weather::{Air, Weather};
use proptest::prelude::*;

const SITE: &str = "name: Bare
units: {}
utc_offset: \"-08:00\"
place: { altitude: 0, latitude: 44 }
pool: { bed: 0, full: 20, table: [[0, 1.0e6], [20, 1.0e6]] }
outlets: [ { name: A, centre: 3, height: 1, width: 1 } ]
";
const RIVER: &str = "  reaches: [ { name: R, length_km: 5, width: 20, depth: 1, slope: 0.001 } ]\n";
const MONTHS: &str = "  monthly: { air: [1,2,3,4,5,6,7,8,9,10,11,12], humidity: 60, wind: 2, cloud: 40 }\n";
const GIVEN: &str = "  equilibrium: [1,2,3,4,5,6,7,8,9,10,11,12]\n  exchange_w_m2_c: 30\n";

fn dam(river: &str) -> Site {
    let text = if river.is_empty() { SITE.to_owned() } else { format!("{SITE}river:\n{river}{RIVER}") };
    let read = site(&text, "site.yaml");
    read.site.unwrap_or_else(|| panic!("{:#?}", read.problems))
}

fn day(text: &str) -> NaiveDate {
    text.parse().unwrap()
}

fn air(temperature_c: f64) -> Air {
    Air { temperature_c, dew_point_c: temperature_c - 6.0, wind_m_s: 3.0, cloud: 0.3, solar_w_m2: 200.0 }
}

fn of(skies: &Skies, date: &str) -> Air {
    match skies.days[&day(date)] {
        Sky::Air(air) => air,
        given @ Sky::Given { .. } => panic!("{given:?}"),
    }
}

fn case(air_c: f64, wind: f64) -> Case {
    Case { name: "c".into(), air_c, wind, inflow: 1.0, inflow_c: 0.0 }
}

/// Weather of days on which the air has the number of the day of the year.
fn record(from: &str, to: &str, gone: &str) -> Weather {
    let dates = day(from).iter_days().take_while(|date| *date <= day(to) && date.to_string() != gone);
    Weather {
        days: dates.map(|date| (date, air(f64::from(date.ordinal()) / 10.0))).collect(),
        ..Weather::default()
    }
}

#[test]
fn law_without_a_shift_the_air_is_that_of_the_file_then_of_the_months() {
    let conditions = Conditions { weather: record("2026-08-01", "2026-08-05", ""), ..Conditions::default() };
    let dam = dam(MONTHS);
    let skies =
        Skies::of_case(&dam, &conditions, &case(0.0, 1.0), day("2026-08-02"), day("2026-10-31")).unwrap();
    assert_eq!(of(&skies, "2026-08-05"), conditions.weather.days[&day("2026-08-05")]);
    let months = dam.river.as_ref().unwrap().surface.clone();
    let Some(Surface::Monthly(months)) = months else { panic!() };
    assert_eq!((of(&skies, "2026-08-06"), of(&skies, "2026-10-31")), (months[7], months[9]));
    // the river has the same air, on every day and while the last water is on its way
    for date in day("2026-08-02").iter_days().take(91 + 7) {
        let Sky::Air(air) = skies.days[&date] else { panic!() };
        assert_eq!(
            skies.conditions.weather.at(date.and_hms_opt(15, 0, 0).unwrap().and_utc().fixed_offset()),
            Some(air)
        );
    }
    assert!(matches!(skies.site.river.as_ref().unwrap().surface, Some(Surface::File(_))));
    let words = "the weather file on 4 of 91 days, on the others the figures of the months";
    assert_eq!(skies.from, words);
    // a season that ends before it begins has no air, and stops nothing
    let over = Skies::of_case(&dam, &conditions, &case(0.0, 1.0), day("2026-08-02"), day("2026-07-31"));
    assert!(over.unwrap_err().contains("ends on 2026-07-31"));
}

#[test]
fn law_a_given_equilibrium_is_shifted_for_pool_and_river_and_never_below_freezing() {
    let dam = dam(GIVEN);
    let skies = |shift| {
        Skies::of_case(&dam, &Conditions::default(), &case(shift, 1.3), day("2026-08-02"), day("2027-01-10"))
            .unwrap()
    };
    for (shift, august, january) in [(0.0, 8.0, 1.0), (2.0, 10.0, 3.0), (-2.0, 6.0, 0.0)] {
        let skies = skies(shift);
        let at = |date| skies.days[&day(date)];
        let of = |equilibrium_c| Sky::Given { equilibrium_c, exchange_w_m2_c: 30.0 };
        assert_eq!((at("2026-08-31"), at("2027-01-10")), (of(august), of(january)));
        let Some(Surface::Given { equilibrium_c, exchange_w_m2_c }) =
            &skies.site.river.as_ref().unwrap().surface
        else {
            panic!()
        };
        assert_eq!((equilibrium_c.in_month(8), equilibrium_c.in_month(1)), (august, january));
        assert_eq!(exchange_w_m2_c.in_month(8), 30.0);
    }
}

#[test]
fn law_a_day_without_air_is_named() {
    let conditions = Conditions { weather: record("2026-08-01", "2026-08-05", ""), ..Conditions::default() };
    let found = Skies::of_case(&dam(""), &conditions, &case(0.0, 1.0), day("2026-08-02"), day("2026-08-09"));
    assert_eq!(
        found.unwrap_err(),
        "nothing tells the air of 2026-08-06: give season.monthly in site.yaml, or more weather"
    );
    // a file that ends early does not mix with a given equilibrium
    let skies =
        Skies::of_case(&dam(GIVEN), &conditions, &case(0.0, 1.0), day("2026-08-02"), day("2026-08-09"));
    assert!(skies.unwrap().days.values().all(|sky| matches!(sky, Sky::Given { .. })));
}

#[test]
fn law_a_gap_in_the_weather_is_told_and_a_season_of_no_day_has_no_year() {
    let (from, to) = (day("2026-08-02"), day("2026-08-09"));
    let told = |gone: &str| {
        let mut weather = record("2026-08-01", "2026-08-09", "");
        weather.days.retain(|date, _| date.to_string() != gone);
        let conditions = Conditions { weather, ..Conditions::default() };
        Skies::of_case(&dam(MONTHS), &conditions, &case(0.0, 1.0), from, to).unwrap().from
    };
    assert_eq!(told(""), "the weather file");
    let gap = "the weather file on 7 of 8 days, on the others the figures of the months";
    assert_eq!(told("2026-08-04"), gap);
    let weather = record("2026-08-01", "2026-08-09", "");
    assert!(Skies::of_years(&dam(MONTHS), &Conditions::default(), &weather, to, from).is_empty());
}

#[test]
fn law_years_that_hold_all_the_days_of_the_season_make_a_case_each() {
    let (from, to) = (day("2028-02-20"), day("2028-03-10"));
    let of_years = |weather: &Weather| Skies::of_years(&dam(""), &Conditions::default(), weather, from, to);
    let years = of_years(&record("1998-03-01", "2003-02-25", ""));
    let named: Vec<(Option<i32>, &str)> = years.iter().map(|s| (s.year, s.case.name.as_str())).collect();
    assert_eq!(
        named,
        [(Some(1999), "1999"), (Some(2000), "2000"), (Some(2001), "2001"), (Some(2002), "2002")]
    );
    let [of_1999, of_2000, ..] = &years[..] else { panic!() };
    // 28 February stands for the 29th that 1999 lacks
    assert_eq!(of(of_1999, "2028-02-29"), air(5.9));
    assert_eq!((of(of_1999, "2028-03-01"), of(of_2000, "2028-02-29")), (air(6.0), air(6.0)));
    // over New Year the days after it are those of the next year
    let weather = record("2010-12-01", "2012-01-31", "");
    let winter =
        Skies::of_years(&dam(""), &Conditions::default(), &weather, day("2026-12-15"), day("2027-01-20"));
    assert_eq!(winter.iter().map(|s| s.year).collect::<Vec<_>>(), [Some(2010), Some(2011)]);
    assert_eq!(of(&winter[0], "2027-01-20"), air(2.0));
    // a year with a gap is none
    assert_eq!(of_years(&record("1999-01-01", "2000-12-31", "2000-03-05")).len(), 1);
    assert_eq!(of_years(&Weather::default()).len(), 0);
}

proptest! {
    #![proptest_config(super::columns::config(64))]

    #[test]
    fn law_a_shift_of_the_air_moves_its_dew_point_too_and_leaves_the_sky(shift in -5.0..5.0f64, wind in 0.2..3.0f64) {
        let conditions = Conditions { weather: record("2026-08-01", "2026-08-09", ""), ..Conditions::default() };
        let skies = |case| Skies::of_case(&dam(""), &conditions, &case, day("2026-08-01"), day("2026-08-09")).unwrap();
        let (base, moved) = (skies(case(0.0, 1.0)), skies(case(shift, wind)));
        for (date, sky) in &base.days {
            let (Sky::Air(a), Sky::Air(b)) = (*sky, moved.days[date]) else { panic!() };
            prop_assert_eq!(b.temperature_c, a.temperature_c + shift);
            prop_assert_eq!(b.dew_point_c, a.dew_point_c + shift);
            prop_assert_eq!((b.wind_m_s, b.cloud, b.solar_w_m2), (a.wind_m_s * wind, a.cloud, a.solar_w_m2));
        }
        prop_assert!(moved.conditions.observed.is_empty());
    }
}
