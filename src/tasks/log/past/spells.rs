//! Spells on which the gauge left the band, with all that is known of their days.
//!
//! Methods: `docs/methods.md`, section 9.

use std::collections::BTreeMap;
use std::sync::Arc;
use std::time::Duration;

use chrono::{NaiveDate, TimeDelta, Timelike};

use crate::mix::{Gate, Perturbed, Setting, draw_levels, groups, levels, quantile, release};
use crate::profile::Profile;
use crate::record::{Clue, Clues, Pair, Sensor, Step, Suspect, causes, otherwise, range, swing_h};
use crate::series::{LONGEST_GAP_H, Series};
use crate::site::{BandInputs, Site};
use crate::target::DAM;
use crate::tasks::Context;
use crate::tasks::setting::as_it_was;
use crate::withdrawal::CrestForm;

use super::days::Known;
use super::stood::differ;
use super::{PastDay, Spell};

/// Days in a row that are a spell (choice).
const LEAST_DAYS: usize = 2;
/// A single day is one where it lies outside by more than so many times half the width of its band (choice).
const FAR: f64 = 1.0;
/// Days without a figure that a spell goes on over (choice).
const BRIDGED: i64 = 2;
/// Most days of a spell that are looked into, evenly spread (choice).
const LOOKED_INTO: usize = 7;
/// Days before and after a spell on which the same gates are looked for (choice: a week).
const AROUND: i64 = 7;
/// Members that show how far the layers heave (choice: about two and a half standard deviations either way).
const HEAVED: usize = 60;

/// Everything that the days were made from.
pub(super) struct From<'a> {
    pub(super) context: &'a Context,
    /// The site as if nothing were learned, as the pairs are computed.
    pub(super) plain: &'a Site,
    pub(super) days: &'a [PastDay],
    pub(super) known: &'a [Known],
    pub(super) pairs: &'a [Pair],
    pub(super) casts: &'a [Arc<Profile>],
    pub(super) suspect: Option<&'a Suspect>,
}

/// Readings by day, their time in hours.
type Readings = BTreeMap<NaiveDate, Vec<(f64, f64)>>;

/// A day that is held against its band.
struct Held<'a> {
    day: &'a PastDay,
    known: &'a Known,
    pair: &'a Pair,
    expected_c: f64,
    band_c: (f64, f64),
    measured_c: f64,
}

impl Held<'_> {
    /// How far outside its band, C; 0 inside.
    fn beyond_c(&self) -> f64 {
        (self.band_c.0 - self.measured_c).max(self.measured_c - self.band_c.1).max(0.0)
    }

    fn is_far(&self) -> bool {
        self.beyond_c() > FAR * 0.5 * (self.band_c.1 - self.band_c.0)
    }
}

/// A figure of the readings of a day, each with its hour.
type OfDay = dyn Fn(&[(f64, f64)]) -> Option<f64>;

/// Every spell, by date.
pub(super) fn spells(from: &From) -> Vec<Spell> {
    let held = held(from);
    let record = from.context.conditions.observed.get(DAM);
    let readings =
        record.map(|record| by_day(from.context.site(), &record.temperature_c)).unwrap_or_default();
    let flows = record.map(|record| by_day(from.context.site(), &record.flow_m3s)).unwrap_or_default();
    let inside: Vec<&Held> = held.iter().filter(|held| held.beyond_c() <= 0.0).collect();
    let usual = |of: &OfDay| {
        let mut values: Vec<f64> =
            inside.iter().filter_map(|held| of(readings.get(&held.day.date)?)).collect();
        values.sort_by(f64::total_cmp);
        quantile(&values, 0.5)
    };
    let (usual_range_c, usual_step_c) =
        (usual(&range), usual(&|day| jumps(day).map(|jump| jump.1.abs()).reduce(f64::max)));
    let one = |run: &[&Held]| {
        let (first, last) = (run.first()?, run.last()?);
        let off_c = run.iter().map(|held| held.measured_c - held.expected_c).sum::<f64>() / run.len() as f64;
        let every = run.len().div_ceil(LOOKED_INTO).max(1);
        let clues = Clues {
            days: run.iter().step_by(every).map(|held| clue(from, held, &readings, &flows)).collect(),
            usual_range_c,
            usual_step_c,
            step: step(from, first, off_c, &readings),
            same_inside: inside.iter().filter(|held| is_same(held, first, last)).count(),
            suspect: from.suspect.is_some_and(|suspect| speaks_of(suspect, &first.pair.cast)),
            period_h: first
                .known
                .profile
                .as_ref()
                .and_then(|p| swing_h(&from.context.site().pool, &p.column)),
            blocks_m3s: blocks_m3s(from.context.site()),
        };
        Some(Spell {
            days: (first.day.date, last.day.date),
            outside: run.len(),
            off_c,
            causes: causes(&clues),
        })
    };
    runs(&held).iter().filter_map(|run| one(run)).collect()
}

fn held<'a>(from: &From<'a>) -> Vec<Held<'a>> {
    let pairs: BTreeMap<NaiveDate, &Pair> = from.pairs.iter().map(|pair| (pair.date, pair)).collect();
    let one = |(day, known): (&'a PastDay, &'a Known)| {
        Some(Held {
            day,
            known,
            pair: pairs.get(&day.date).copied()?,
            expected_c: day.expected_c?,
            band_c: day.band_c?,
            measured_c: day.measured_c?,
        })
    };
    let both = from.days.iter().zip(from.known).filter(|(day, _)| day.left_out.is_none());
    both.filter_map(one).collect()
}

/// Days outside one after the other; days that are not held do not end them, a day inside does.
fn runs<'h, 'a>(held: &'h [Held<'a>]) -> Vec<Vec<&'h Held<'a>>> {
    let mut out: Vec<Vec<&Held>> = Vec::new();
    let mut open = false;
    for held in held {
        if held.beyond_c() <= 0.0 {
            open = false;
            continue;
        }
        let near = |run: &Vec<&Held>| {
            run.last().is_some_and(|last| (held.day.date - last.day.date).num_days() <= 1 + BRIDGED)
        };
        match out.last_mut().filter(|run| open && near(run)) {
            Some(run) => run.push(held),
            None => out.push(vec![held]),
        }
        open = true;
    }
    out.retain(|run| run.len() >= LEAST_DAYS || run.iter().any(|held| held.is_far()));
    out
}

fn clue(from: &From, held: &Held, readings: &Readings, flows: &Readings) -> Clue {
    let site = from.plain;
    let (pair, groups) = (held.pair, groups(site));
    // what is applied of the learned stands on every figure alike
    let shift_c = held.expected_c - pair.computed_c;
    let gates: &[Gate] = held.known.stood.as_ref().map_or(&[], |stood| stood.gates.as_slice());
    let profile = held.known.profile.as_deref();
    let others = profile.map_or_else(Vec::new, |profile| otherwise(site, &groups, profile, gates));
    let names = |level: usize| {
        let outlets = groups.get(level).into_iter().flatten().filter_map(|&i| site.outlets.get(i));
        outlets.map(|outlet| outlet.name.as_str()).collect::<Vec<_>>().join("/")
    };
    let is_shut = |level: usize| !pair.shares.iter().any(|share| share.0 == level);
    let shut = pair.before_c.iter().filter(|before| is_shut(before.0));
    let inside = |(value, (low, high)): (f64, (f64, f64))| (low..=high).contains(&value);
    Clue {
        date: pair.date,
        expected_c: held.expected_c,
        band_c: held.band_c,
        measured_c: held.measured_c,
        flow_m3s: pair.flow_m3s,
        age_days: pair.age_days,
        cast: pair.cast.clone(),
        cast_range_c: pair.cast_c.1 - pair.cast_c.0,
        readings: readings.get(&pair.date).cloned().unwrap_or_default(),
        gauge_flow_m3s: flows.get(&pair.date).and_then(|flows| {
            let values = || flows.iter().map(|flow| flow.1);
            let mean = values().sum::<f64>() / flows.len() as f64;
            (flows.len() > 2).then_some((mean, values().reduce(f64::min)?, values().reduce(f64::max)?))
        }),
        otherwise_c: others.into_iter().map(|(words, c)| (words, c + shift_c)).collect(),
        shut_c: shut.map(|(level, c)| (names(*level), c + shift_c)).collect(),
        heave_c: profile
            .and_then(|profile| heave_c(site, &groups, profile, held))
            .map(|(low, high)| (low + shift_c, high + shift_c)),
        next_c: next_c(from, &groups, held, gates).map(|(days, c)| (days, c + shift_c)),
        oxygen_inside: held.day.measured_mg_l.zip(held.day.band_mg_l).map(inside),
    }
}

/// Least and greatest release as the layers heave and nothing else is in doubt, C.
fn heave_c(site: &Site, groups: &[Vec<usize>], profile: &Profile, held: &Held) -> Option<(f64, f64)> {
    let only = BandInputs {
        members: HEAVED,
        cast_c: 0.0,
        cast_mg_l: 0.0,
        flow_share: 0.0,
        zone_low: 1.0,
        zone_high: 1.0,
        release_c: 0.0,
        release_mg_l: 0.0,
        ..site.band
    };
    let mut site = site.clone();
    site.band = only;
    let setting = held.known.setting.as_ref()?;
    let levels = levels(&site, groups, setting, profile.pool_m, 0.5, CrestForm::Overflow);
    let centre = release(&draw_levels(&profile.column, &levels, 1.0))?;
    let spread = Perturbed::new(&site, profile, Some(held.pair.age_days as f64))
        .spread(&site, groups, setting, &centre);
    let cases = || spread.cases.iter().map(|case| case.0);
    cases().reduce(f64::min).zip(cases().reduce(f64::max))
}

/// Days to the next cast, and the release on its water under the pool of the day, C.
fn next_c(from: &From, groups: &[Vec<usize>], held: &Held, gates: &[Gate]) -> Option<(i64, f64)> {
    let site = from.plain;
    let profile = held.known.profile.as_deref()?;
    let next = from.casts.iter().find(|cast| cast.taken > profile.taken)?;
    let days = (next.taken?.with_timezone(&site.offset).date_naive() - held.day.date).num_days();
    if days as f64 > site.checks.stale_days {
        return None;
    }
    let there = next.at_pool(site, profile.pool_m).ok()?;
    let setting: Setting = as_it_was(site, &there, gates);
    let levels = levels(site, groups, &setting, there.pool_m, 0.5, CrestForm::Overflow);
    Some((days, release(&draw_levels(&there.column, &levels, 1.0))?.temperature_c))
}

/// The greatest jump towards the spell as it begins, on its first day or the one before.
fn step(from: &From, first: &Held, off_c: f64, readings: &Readings) -> Option<Step> {
    let date = first.day.date;
    let eve = date.pred_opt()?;
    let hours = |date: NaiveDate, by: f64| {
        readings.get(&date).into_iter().flatten().map(move |(hour, value)| (hour + by, *value))
    };
    let both: Vec<(f64, f64)> = hours(eve, 0.0).chain(hours(date, 24.0)).collect();
    let towards = jumps(&both).filter(|jump| jump.1 * off_c > 0.0);
    let (hour, by_c) = towards.reduce(|a, b| if b.1.abs() > a.1.abs() { b } else { a })?;
    let after = Duration::try_from_secs_f64(60.0 * (60.0 * hour).round()).ok()?;
    let at = eve.and_hms_opt(0, 0, 0)?.checked_add_signed(TimeDelta::from_std(after).ok()?)?;
    let decided = from.known.iter().any(|known| known.date == at.date() && known.changed);
    Some(Step { at: at.format("%Y-%m-%d %H:%M").to_string(), by_c, decided })
}

/// Changes between readings that lie near, by the hour of the later.
fn jumps(readings: &[(f64, f64)]) -> impl Iterator<Item = (f64, f64)> + '_ {
    readings.windows(2).filter_map(|two| match two {
        [a, b] if b.0 - a.0 <= LONGEST_GAP_H as f64 => Some((b.0, b.1 - a.1)),
        _ => None,
    })
}

/// Whether a day stands near a spell with the gates of its first day.
fn is_same(held: &Held, first: &Held, last: &Held) -> bool {
    let (before, after) =
        ((first.day.date - held.day.date).num_days(), (held.day.date - last.day.date).num_days());
    let is_near = (1..=AROUND).contains(&before) || (1..=AROUND).contains(&after);
    is_near && !differ(held.known.stood.as_ref(), first.known.stood.as_ref())
}

fn speaks_of(suspect: &Suspect, cast: &str) -> bool {
    match &suspect.sensor {
        Sensor::Casts(casts) => casts.iter().any(|other| other == cast),
        Sensor::Common | Sensor::Either => true,
    }
}

/// Least and greatest release of the parts of the day that the site tells, where they differ, m3/s.
fn blocks_m3s(site: &Site) -> Option<(f64, f64)> {
    let flows = || site.blocks.iter().map(|block| block.flow_m3s);
    let (least, greatest) = (flows().reduce(f64::min)?, flows().reduce(f64::max)?);
    (greatest > least).then_some((least, greatest))
}

fn by_day(site: &Site, series: &Series) -> Readings {
    let mut out = Readings::new();
    for (time, value) in series.readings() {
        let local = time.with_timezone(&site.offset);
        let hour = f64::from(local.num_seconds_from_midnight()) / 3600.0;
        out.entry(local.date_naive()).or_default().push((hour, *value));
    }
    out
}
