//! A river made ready for a day: its legs, its air, its streams; and parcels sent down it.
//!
//! Methods: `docs/methods.md`, section 6.

use std::collections::BTreeMap;

use chrono::{DateTime, Datelike, FixedOffset, NaiveDate, NaiveTime, TimeDelta};

use crate::problem::Problem;
use crate::site::{Reach, River, Site, Surface};
use crate::units::say;

use super::Conditions;
use super::afterbay;
use super::course::By;
use super::hours::{Hours, hours};
use super::legs::{Leg, Then, legs};
use super::sky::Sky;
use super::slices::Slice;
use super::stream::{HELD_DAYS, brought, seeping_into};
use super::water::{Stretch, Told, Water};

/// Hours of a day (standard).
const DAY_H: f64 = 24.0;
/// Seconds of an hour (standard).
const HOUR_S: f64 = 3600.0;

/// What a parcel was like at a place.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Seen {
    /// From the dam, m.
    pub(super) at_m: f64,
    pub(super) point: Option<usize>,
    pub(super) water: Water,
}

/// What parcels met on their way.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct Met {
    /// By reach.
    told: Vec<Told>,
    /// Streams, by reach and place in it, whose series ended, with the day of the reading that is held.
    held: BTreeMap<(usize, usize), NaiveDate>,
    /// Those that are not known.
    unknown: Vec<(usize, usize)>,
    /// Streams and seepage without oxygen.
    no_oxygen: bool,
}

/// A river on a day.
#[derive(Debug, Clone)]
pub(super) struct Run<'a> {
    river: &'a River,
    conditions: &'a Conditions,
    midnight: DateTime<FixedOffset>,
    sky: Sky,
    repeated: bool,
    pub(super) by: By,
    pub(super) pressure_atm: f64,
    legs: Vec<Leg>,
    looks: bool,
    /// Pieces of the way over their usual length.
    pub(super) stride: f64,
}

impl<'a> Run<'a> {
    /// `flows` are the parts of the day, hours and m3/s; `looks` how many places a picture wants. `None` where there
    /// is no river or what it trades with the air is not known.
    pub(super) fn new(
        site: &'a Site,
        conditions: &'a Conditions,
        date: NaiveDate,
        flows: &[(f64, f64)],
        looks: usize,
    ) -> Option<Self> {
        let river = site.river.as_ref()?;
        let midnight = date.and_time(NaiveTime::MIN).and_local_timezone(site.offset).single()?;
        let least = flows.iter().map(|f| f.1).reduce(f64::min)?;
        let way_h: f64 = river.reaches.iter().map(|r| r.water_h(least).0).sum();
        let surface = river.surface.as_ref()?;
        let (sky, repeated) = Sky::over(surface, &conditions.weather, midnight, DAY_H + way_h)?;
        let hourly_weather = matches!(surface, Surface::File(_)) && conditions.weather.is_hourly();
        let by = match (hourly_weather, flows.len()) {
            (true, _) => By::Hours,
            (false, 0 | 1) => By::Day,
            (false, _) => By::Blocks,
        };
        Some(Self {
            river,
            conditions,
            midnight,
            sky,
            repeated,
            by,
            // the river runs about as high as the bed of the pool (choice)
            pressure_atm: site.surface_pressure_atm(site.pool.bed_m),
            legs: legs(river, looks),
            looks: looks > 0,
            stride: 1.0,
        })
    }

    /// Whether each hour goes down by itself.
    pub(super) fn by_hour(&self) -> bool {
        self.by != By::Day
    }

    pub(super) fn river(&self) -> &'a River {
        self.river
    }

    /// Each slice of the day's release at each place, and what was met.
    pub(super) fn carry(&self, slices: &[Slice]) -> (Vec<Vec<Seen>>, Met) {
        let mut met = Met { told: vec![Told::default(); self.river.reaches.len()], ..Met::default() };
        let through = self
            .river
            .afterbay
            .as_ref()
            .map(|bay| afterbay::through(bay, slices, &self.sky, self.river.decay, self.pressure_atm));
        let rows = slices.iter().enumerate().map(|(i, slice)| {
            let mut row = Vec::with_capacity(self.legs.len() + 2);
            let mut see = |at_m: f64, point, water| row.push(Seen { at_m, point, water });
            let mut water = slice.water;
            if self.looks {
                see(0.0, None, water);
            }
            if let Some(out) = through.as_ref().and_then(|t| t.get(i)) {
                water = out.water;
                if self.looks {
                    see(0.0, None, water);
                }
            }
            self.down(water, slice.leaves_h(), &mut see, &mut met);
            row
        });
        (rows.collect(), met)
    }

    fn down(
        &self,
        mut water: Water,
        mut clock_h: f64,
        see: &mut impl FnMut(f64, Option<usize>, Water),
        met: &mut Met,
    ) {
        for leg in &self.legs {
            let Some(reach) = self.river.reaches.get(leg.reach) else { continue };
            if leg.length_m > 0.0 {
                let stretch = Stretch {
                    reach,
                    length_m: leg.length_m,
                    sky: &self.sky,
                    seeping: seeping_into(reach, self.midnight.month()),
                    decay: self.river.decay,
                    pressure_atm: self.pressure_atm,
                    stride: self.stride,
                };
                met.no_oxygen |= stretch.seeping.is_some_and(|s| s.water.oxygen_mg_l.is_none());
                if let Some(told) = met.told.get_mut(leg.reach) {
                    stretch.go(&mut water, &mut clock_h, told);
                }
            }
            match leg.then {
                Then::Look => {
                    if self.looks {
                        see(leg.to_m, None, water);
                    }
                }
                Then::Point(point) => see(leg.to_m, Some(point), water),
                Then::Join(i) => {
                    if self.looks {
                        see(leg.to_m, None, water);
                    }
                    water = self.joined(water, reach, (leg.reach, i), clock_h, met);
                    if self.looks {
                        see(leg.to_m, None, water);
                    }
                }
            }
        }
    }

    fn joined(
        &self,
        water: Water,
        reach: &Reach,
        place: (usize, usize),
        clock_h: f64,
        met: &mut Met,
    ) -> Water {
        let Some(stream) = reach.inflows.get(place.1) else { return water };
        let Some(at) = self.time(clock_h) else { return water };
        let record = self.conditions.streams.get(&stream.name);
        let Some(brought) = brought(stream, record, at, self.by_hour()) else {
            if !met.unknown.contains(&place) {
                met.unknown.push(place);
            }
            return water;
        };
        if let Some(day) = brought.held {
            met.held.entry(place).and_modify(|first| *first = day.min(*first)).or_insert(day);
        }
        met.no_oxygen |= brought.water.oxygen_mg_l.is_none();
        water.with(brought.water)
    }

    fn time(&self, clock_h: f64) -> Option<DateTime<FixedOffset>> {
        let seconds = TimeDelta::try_milliseconds(round(clock_h * HOUR_S * 1000.0)?)?;
        self.midnight.checked_add_signed(seconds)
    }

    /// Hours to each point by a flow at the dam: see [`hours`].
    pub(super) fn hours(&self, flow_m3s: f64) -> Vec<Hours> {
        let noon = self.time(DAY_H / 2.0).unwrap_or(self.midnight);
        hours(self.river, self.conditions, noon, &legs(self.river, 0), flow_m3s)
    }

    /// What is to be told of the way.
    pub(super) fn flags(&self, met: &Met) -> Vec<Problem> {
        let mut out = Vec::new();
        if self.by == By::Blocks {
            out.push(Problem::flag(
                "no-daily-cycle",
                "the air is not known by the hour: greatest, least and change within the day come from the blocks alone, \
                 without the day's cycle of the air",
                "give weather by the hour, with which they lie farther apart",
            ));
        }
        if self.repeated {
            out.push(Problem::flag(
                "weather-repeated",
                "the weather ends or has gaps on the way of this water: the day before is taken again",
                "add the missing hours or days to the weather file",
            ));
        }
        for (reach, told) in self.river.reaches.iter().zip(&met.told) {
            if told.held
                && let (Some(first), Some(last)) = (reach.travel_h.first(), reach.travel_h.last())
            {
                out.push(Problem::flag(
                    "travel-held",
                    format!(
                        "the flow in reach `{}` lies outside its travel_hours, {} to {}: the nearest row is held",
                        reach.name,
                        say::m3s(first.0, 1),
                        say::m3s(last.0, 1)
                    ),
                    "add a row for such flows",
                ));
            }
            if told.beyond {
                out.push(Problem::flag(
                    "reaeration-range",
                    format!(
                        "velocity or depth of reach `{}` lies outside what reaeration was measured in: the nearest form is taken",
                        reach.name
                    ),
                    "give reaeration_per_day where it is known",
                ));
            }
            if told.ice {
                out.push(Problem::flag(
                    "ice",
                    format!(
                        "water would freeze in reach `{}`: it is held at freezing, and no ice is computed",
                        reach.name
                    ),
                    "",
                ));
            }
        }
        let name = |place: &(usize, usize)| {
            let stream = self.river.reaches.get(place.0).and_then(|r| r.inflows.get(place.1));
            stream.map_or_else(String::new, |s| format!("{} `{}`", s.what(), s.name))
        };
        for (place, day) in &met.held {
            let words = format!(
                "the readings of the {} end before this water passes: what was read on {} is held",
                name(place),
                day.format("%Y-%m-%d")
            );
            out.push(Problem::flag(
                "stream-held",
                words,
                "add newer readings, or its figures in the site file",
            ));
        }
        for place in &met.unknown {
            let words = format!(
                "nothing tells what the {} brings, neither figures nor a reading of the {HELD_DAYS} days before: it is \
                 left out",
                name(place)
            );
            out.push(Problem::flag("stream-unknown", words, "add readings, or its figures in the site file"));
        }
        if met.no_oxygen {
            out.push(Problem::flag(
                "stream-oxygen",
                "the oxygen of water that joins is not known, so below it the river's is not",
                "give oxygen of every side stream and of seepage",
            ));
        }
        out
    }
}

#[expect(clippy::cast_possible_truncation, reason = "held within what a time can be")]
pub(super) fn round(value: f64) -> Option<i64> {
    (value.abs() < 1e15).then_some(value.round() as i64)
}
