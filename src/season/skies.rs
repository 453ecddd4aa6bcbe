//! The air over the pool and the river, day by day, in one case.
//!
//! Methods: `docs/methods.md`, section 8.

use std::collections::BTreeMap;
use std::sync::Arc;

use chrono::{Datelike, NaiveDate};

use crate::river::Conditions;
use crate::site::{Case, Site, Surface, Yearly};
use crate::weather::{Air, Weather};

/// What the surface trades with on a day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Sky {
    /// The air.
    Air(Air),
    /// A given equilibrium temperature, C, and exchange, W/m2/C: light then warms the surface alone.
    Given {
        /// Equilibrium temperature, C.
        equilibrium_c: f64,
        /// Exchange, W/m2/C.
        exchange_w_m2_c: f64,
    },
}

/// A case of the season: its air by day, and what it does to the inflow.
#[derive(Debug, Clone)]
pub struct Skies {
    /// The case and its shifts; a year of weather is a case without any.
    pub case: Case,
    /// The year whose weather it is, where it is one of several.
    pub year: Option<i32>,
    /// The air by day.
    pub days: BTreeMap<NaiveDate, Sky>,
    /// The site with the river under the same air.
    pub site: Arc<Site>,
    /// What is known around the river, with the same air; no station has recorded a day ahead.
    pub conditions: Arc<Conditions>,
    /// Where its air comes from, in words.
    pub from: String,
}

/// Days beyond the season for which the air is kept: water that leaves on its last day is then still on its way
/// (choice).
const AFTER_DAYS: usize = 7;

impl Skies {
    /// The case of a site between two dates, made from the weather of the folder, the months of the site file and the
    /// case's shifts; a reason where a day has no air.
    ///
    /// A day of the weather file is its mean; where the file does not tell a day the figures of its month stand for it.
    /// Where neither tells every day, and the river has a given equilibrium and exchange, those hold on all days.
    ///
    /// # Errors
    /// The first day without air, in words.
    pub fn of_case(
        site: &Site,
        conditions: &Conditions,
        case: &Case,
        from: NaiveDate,
        to: NaiveDate,
    ) -> Result<Self, String> {
        if to < from {
            return Err(format!("it ends on {to}, before the season begins on {from}"));
        }
        let base = |date| base(site, conditions, date);
        let airs: Option<BTreeMap<NaiveDate, Air>> =
            season(from, to).map(|date| Some((date, shifted(&base(date)?, case)))).collect();
        if let Some(mut days) = airs {
            let after = to.iter_days().skip(1).take(AFTER_DAYS);
            days.extend(after.map_while(|date| Some((date, shifted(&base(date)?, case)))));
            let told = season(from, to).filter(|date| conditions.weather.day(*date).is_some()).count();
            let all = season(from, to).count();
            let from = match told {
                0 => "the figures of the months".to_owned(),
                told if told == all => "the weather file".to_owned(),
                told => format!(
                    "the weather file on {told} of {all} days, on the others the figures of the months"
                ),
            };
            return Ok(Self::under(site, conditions, case.clone(), days, from));
        }
        if let Some(Surface::Given { equilibrium_c, exchange_w_m2_c }) =
            site.river.as_ref().and_then(|river| river.surface.as_ref())
        {
            return Ok(Self::given(site, conditions, case, (from, to), equilibrium_c, exchange_w_m2_c));
        }
        let missing = season(from, to).find(|date| base(*date).is_none()).unwrap_or(from);
        Err(format!("nothing tells the air of {missing}: give season.monthly in site.yaml, or more weather"))
    }

    /// One case for each year of a weather record that holds all the days of the season. A day of a year stands for the
    /// same day of the season's year, 28 February for a 29th that it lacks.
    pub fn of_years(
        site: &Site,
        conditions: &Conditions,
        years: &Weather,
        from: NaiveDate,
        to: NaiveDate,
    ) -> Vec<Self> {
        let (Some((first, _)), Some((last, _))) = (years.days.first_key_value(), years.days.last_key_value())
        else {
            return Vec::new();
        };
        if to < from {
            return Vec::new();
        }
        let of_year = |year: i32| {
            let of = |date: NaiveDate| {
                let there = date.year() - from.year() + year;
                let same = date.with_year(there).or_else(|| NaiveDate::from_ymd_opt(there, 2, 28))?;
                Some((date, years.day(same)?))
            };
            let days = season(from, to).map(of).collect::<Option<BTreeMap<NaiveDate, Air>>>()?;
            let after = to.iter_days().skip(1).take(AFTER_DAYS).map_while(of);
            let days = days.into_iter().chain(after).collect();
            let case = Case { name: year.to_string(), air_c: 0.0, wind: 1.0, inflow: 1.0, inflow_c: 0.0 };
            let from = format!("the weather of {year}");
            Some(Self { year: Some(year), ..Self::under(site, conditions, case, days, from) })
        };
        (first.year()..=last.year()).filter_map(of_year).collect()
    }

    /// A case under the air of days, for pool and river alike.
    fn under(
        site: &Site,
        conditions: &Conditions,
        case: Case,
        airs: BTreeMap<NaiveDate, Air>,
        from: String,
    ) -> Self {
        let mut site = site.clone();
        if let Some(river) = &mut site.river
            && !matches!(river.surface, Some(Surface::File(_)))
        {
            river.surface = Some(Surface::File(from.clone()));
        }
        let days = airs.iter().map(|(date, air)| (*date, Sky::Air(*air))).collect();
        let weather = Weather { days: airs, ..Weather::default() };
        Self { case, year: None, days, site: Arc::new(site), conditions: ahead(conditions, weather), from }
    }

    /// A case under the given equilibrium of the river, shifted.
    fn given(
        site: &Site,
        conditions: &Conditions,
        case: &Case,
        (from, to): (NaiveDate, NaiveDate),
        equilibrium_c: &Yearly,
        exchange_w_m2_c: &Yearly,
    ) -> Self {
        let mut site = site.clone();
        // no ice is computed
        let months: [u32; 12] = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12];
        let equilibrium_c =
            Yearly::Monthly(months.map(|month| (equilibrium_c.in_month(month) + case.air_c).max(0.0)));
        let sky = |date: NaiveDate| Sky::Given {
            equilibrium_c: equilibrium_c.in_month(date.month()),
            exchange_w_m2_c: exchange_w_m2_c.in_month(date.month()),
        };
        let days = season(from, to).map(|date| (date, sky(date))).collect();
        if let Some(river) = &mut site.river {
            let exchange_w_m2_c = exchange_w_m2_c.clone();
            river.surface = Some(Surface::Given { equilibrium_c, exchange_w_m2_c });
        }
        Self {
            case: case.clone(),
            year: None,
            days,
            site: Arc::new(site),
            conditions: ahead(conditions, Weather::default()),
            from: "the equilibrium and exchange given for the river".to_owned(),
        }
    }
}

fn season(from: NaiveDate, to: NaiveDate) -> impl Iterator<Item = NaiveDate> {
    from.iter_days().take_while(move |date| *date <= to)
}

/// The air of a day before any shift.
fn base(site: &Site, conditions: &Conditions, date: NaiveDate) -> Option<Air> {
    let months = site.season.monthly.as_deref();
    let month = || months.and_then(|airs| airs.get(date.month0() as usize)).copied();
    conditions.weather.day(date).or_else(month)
}

/// An air under the shifts of a case: the dew point goes with the air, so that its humidity stays about the same.
fn shifted(air: &Air, case: &Case) -> Air {
    Air {
        temperature_c: air.temperature_c + case.air_c,
        dew_point_c: air.dew_point_c + case.air_c,
        wind_m_s: air.wind_m_s * case.wind,
        ..*air
    }
}

/// What is known of days to come: the weather of the case, what streams tell, and no record.
fn ahead(conditions: &Conditions, weather: Weather) -> Arc<Conditions> {
    Arc::new(Conditions { weather, streams: conditions.streams.clone(), observed: BTreeMap::new() })
}
