//! Invented records: a pool that heaves, casts that miss it a little, a gauge that errs, and an effect to be found.

use chrono::NaiveDate;
use gatemix::mix::{Gate, Setting, draw_levels, groups, levels, release};
use gatemix::profile::{Profile, Raw, RawRow};
use gatemix::record::{Day, Pair, pairs};
use gatemix::series::{self, Daily, Days};
use gatemix::site::{self, RawOutlet, RawPool, Site};
use gatemix::withdrawal::CrestForm;
use rand_distr::{Distribution, StandardNormal};
use rand_pcg::Pcg64Mcg;
use rand_pcg::rand_core::{Rng, SeedableRng};

use std::ops::ControlFlow;

const BED_M: f64 = 0.0;
const POOL_M: f64 = 58.0;
/// Outlets from the lowest; the pool's thermocline lies between the upper two.
const OUTLETS: [(&str, f64); 3] = [("low", 14.0), ("middle", 22.0), ("high", 44.0)];
/// Every third day of a season is held against the gauge.
const EVERY: u64 = 3;
/// How far the layers stand from their mean, m, and how much of it is left after a day.
const HEAVE: (f64, f64) = (0.7, 0.8);
/// Offset of a cast, standard deviation, C.
const CAST_C: f64 = 0.2;
/// How much of an error of the gauge is left after a day.
const GAUGE_KEEPS: f64 = 0.7;

/// What is hidden in a record.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Hidden {
    Nothing,
    Bias(f64),
    /// Share of the release through an outlet that should be shut.
    Leak(usize, f64),
    Zone(f64),
}

impl Hidden {
    pub(super) fn name(self) -> &'static str {
        match self {
            Self::Nothing => "nothing",
            Self::Bias(_) => "bias",
            Self::Leak(..) => "leak",
            Self::Zone(_) => "zone factor",
        }
    }
}

/// Draws from the usual distributions.
pub(super) struct Luck(Pcg64Mcg);

impl Luck {
    pub(super) fn new(seed: u64) -> Self {
        Self(Pcg64Mcg::seed_from_u64(seed))
    }

    pub(super) fn normal(&mut self) -> f64 {
        StandardNormal.sample(&mut self.0)
    }

    pub(super) fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * f64::from(self.0.next_u32()) / f64::from(u32::MAX)
    }

    pub(super) fn below(&mut self, count: u32) -> u32 {
        self.0.next_u32() % count
    }
}

/// An error that forgets itself: its next value.
fn next(luck: &mut Luck, last: f64, deviation: f64, keeps: f64) -> f64 {
    keeps * last + (1.0 - keeps * keeps).sqrt() * deviation * luck.normal()
}

pub(super) fn site() -> Site {
    let row = |elevation_m, area_m2| site::RawRow { elevation_m, area_m2, volume_m3: None, width_m: None };
    let outlet = |(name, centre_m): (&str, f64)| RawOutlet {
        name: Some(name.into()),
        centre_m: Some(centre_m),
        height_m: Some(3.0),
        width_m: Some(4.0),
        angle_deg: Some(180.0),
        ..RawOutlet::default()
    };
    let raw = site::Raw {
        name: Some("an invented dam".into()),
        utc_offset: Some("+00:00".into()),
        altitude_m: Some(0.0),
        pool: RawPool {
            bed_m: Some(BED_M),
            full_m: Some(60.0),
            table: vec![row(0.0, 1e6), row(60.0, 4e6)],
            ..RawPool::default()
        },
        outlets: OUTLETS.into_iter().map(outlet).collect(),
        ..site::Raw::default()
    };
    let mut site = Site::check(&raw).0.unwrap();
    // few, for speed
    site.band.members = 12;
    site
}

/// The water of a season.
struct Pool {
    bed_c: f64,
    surface_c: f64,
    middle_m: f64,
    thick_m: f64,
    /// Which way the thermocline wanders, m per day.
    drift_m: f64,
}

impl Pool {
    fn new(luck: &mut Luck) -> Self {
        Self {
            bed_c: luck.between(5.0, 8.0),
            surface_c: luck.between(17.0, 25.0),
            middle_m: luck.between(33.0, 37.0),
            thick_m: luck.between(1.5, 4.0),
            drift_m: luck.between(-0.01, 0.01),
        }
    }

    /// The pool as samples would show it, its layers moved up by `heave_m`.
    fn profile(
        &self,
        site: &Site,
        name: &str,
        date: NaiveDate,
        day: u64,
        heave_m: f64,
        off_c: f64,
    ) -> Profile {
        let middle_m = self.middle_m + heave_m + self.drift_m * day as f64;
        let row = |i: usize| {
            let z = 1.0 + 2.0 * i as f64;
            let warmth = 1.0 / (1.0 + ((middle_m - z) / self.thick_m).exp());
            // a little slope everywhere, as pools have
            let temperature_c = self.bed_c + 0.01 * z + (self.surface_c - self.bed_c) * warmth + off_c;
            RawRow {
                line: i + 1,
                elevation_m: Some(z),
                temperature_c: Some(temperature_c),
                ..RawRow::default()
            }
        };
        let raw = Raw {
            file: name.into(),
            taken: Some(date.and_hms_opt(12, 0, 0).unwrap().and_utc().fixed_offset()),
            pool_m: Some(POOL_M),
            rows: (0..29).map(row).collect(),
        };
        Profile::build(&raw, site, None).0.unwrap()
    }
}

/// A cast of a layered pool at rest.
pub(super) fn still(site: &Site, date: NaiveDate) -> Profile {
    Pool { bed_c: 6.0, surface_c: 20.0, middle_m: 38.0, thick_m: 3.0, drift_m: 0.0 }.profile(
        site,
        "still.csv",
        date,
        0,
        0.0,
        0.0,
    )
}

/// A season: its true water and settings by day, and the pairs computed from its casts.
pub(super) struct Season {
    site: Site,
    days: Vec<(NaiveDate, Setting, Profile)>,
    /// Computed from the casts; the gauge as if nothing were hidden.
    pairs: Vec<Pair>,
}

impl Season {
    /// One of `count` pairs at most; days with a cast too old are left out. With `blends` half of the settings draw
    /// from two levels.
    pub(super) fn new(luck: &mut Luck, count: u64, blends: bool) -> Self {
        let site = site();
        let pool = Pool::new(luck);
        let first = NaiveDate::from_ymd_opt(2025, 4, 1).unwrap();
        let (mut heave_m, mut next_cast, mut next_change) = (HEAVE.0 * luck.normal(), 0, 0);
        let mut setting = Setting::default();
        let (mut days, mut casts) = (Vec::new(), Vec::new());
        let mut newest = Vec::new();
        for (day, date) in (0..count * EVERY).zip(first.iter_days()) {
            if day == next_cast {
                let off_c = CAST_C * luck.normal();
                casts.push(pool.profile(&site, &format!("cast-{day}.csv"), date, day, heave_m, off_c));
                next_cast += 7 + u64::from(luck.below(15));
            }
            if day == next_change {
                setting = some_setting(luck, blends);
                next_change += EVERY * (3 + u64::from(luck.below(5)));
            }
            if day % EVERY == 0 {
                newest.push(casts.len() - 1);
                days.push((date, setting.clone(), pool.profile(&site, "truth", date, day, heave_m, 0.0)));
            }
            heave_m = next(luck, heave_m, HEAVE.0, HEAVE.1);
        }
        let mut season = Self { site, days, pairs: Vec::new() };
        let gauge = season.gauge(season.truth(Hidden::Nothing));
        let given = season.days.iter().zip(&newest).map(|((date, setting, _), cast)| Day {
            date: *date,
            setting: Some(setting),
            profile: casts.get(*cast),
            changed: false,
            event: None,
        });
        let given: Vec<Day> = given.collect();
        season.pairs = pairs(&season.site, &given, &gauge, &|_| ControlFlow::Continue(())).unwrap().pairs;
        season
    }

    pub(super) fn site(&self) -> &Site {
        &self.site
    }

    fn gauge(&self, measured_c: Vec<f64>) -> Daily {
        let day = |mean| series::Day { mean, max: mean, min: mean, hourly_change: None };
        let days = self.days.iter().zip(measured_c).map(|((date, ..), mean)| (*date, day(mean))).collect();
        Daily { temperature_c: Days { days }, ..Daily::default() }
    }

    /// What truly came out on each day, C.
    fn truth(&self, hidden: Hidden) -> Vec<f64> {
        let groups = groups(&self.site);
        let one = |(_, setting, profile): &(NaiveDate, Setting, Profile)| {
            let mut setting = setting.clone();
            if let Hidden::Leak(outlet, share) = hidden
                && setting.gates.iter().all(|gate| gate.outlet != outlet)
            {
                let flow_m3s = share * setting.gates.iter().map(|g| g.flow_m3s).sum::<f64>();
                setting.gates.iter_mut().for_each(|gate| gate.flow_m3s *= 1.0 - share);
                setting.gates.push(Gate { outlet, opening: 1.0, flow_m3s });
            }
            let (factor, bias_c) = match hidden {
                Hidden::Zone(factor) => (factor, 0.0),
                Hidden::Bias(bias_c) => (1.0, bias_c),
                Hidden::Nothing | Hidden::Leak(..) => (1.0, 0.0),
            };
            let levels = levels(&self.site, &groups, &setting, POOL_M, 0.5, CrestForm::Overflow);
            release(&draw_levels(&profile.column, &levels, factor)).unwrap().temperature_c + bias_c
        };
        self.days.iter().map(one).collect()
    }

    /// The pairs as a gauge shows them that errs by so much, with something hidden; and the mean effect of that on
    /// the days drawn from each level alone, C.
    pub(super) fn record(
        &self,
        luck: &mut Luck,
        hidden: Hidden,
        gauge_c: f64,
    ) -> (Vec<Pair>, [Option<f64>; 3]) {
        let (truth, plain) = (self.truth(hidden), self.truth(Hidden::Nothing));
        let mut error = gauge_c * luck.normal();
        let mut pairs = self.pairs.clone();
        let mut effect = [(0.0, 0.0); 3];
        for (((date, ..), truth), plain) in self.days.iter().zip(truth).zip(plain) {
            for _ in 0..EVERY {
                error = next(luck, error, gauge_c, GAUGE_KEEPS);
            }
            if let Some(pair) = pairs.iter_mut().find(|pair| pair.date == *date) {
                pair.measured_c = Some(truth + error);
                if let [(level, _)] = pair.shares[..] {
                    effect[level].0 += truth - plain;
                    effect[level].1 += 1.0;
                }
            }
        }
        (pairs, effect.map(|(sum, days)| (days > 0.0).then(|| sum / days)))
    }
}

fn some_setting(luck: &mut Luck, blends: bool) -> Setting {
    let level = luck.below(3) as usize;
    let flow_m3s = luck.between(200.0, 400.0);
    let gate = |outlet, share: f64| Gate { outlet, opening: 1.0, flow_m3s: share * flow_m3s };
    if blends && luck.below(2) == 0 {
        let share = luck.between(0.3, 0.7);
        return Setting::of(vec![gate(level, share), gate((level + 1) % 3, 1.0 - share)]);
    }
    Setting::of(vec![gate(level, 1.0)])
}
