//! The band: seeded perturbed cases, the same for every mix.
//!
//! Methods: `docs/methods.md`, section 9.

use std::borrow::Cow;

use rand_distr::{Distribution, StandardNormal, Uniform};
use rand_pcg::Pcg64Mcg;
use rand_pcg::rand_core::SeedableRng;

use crate::intake::ASSUMED_LOSS;
use crate::profile::{Column, OxygenSample, Profile, Sample, greatest_buoyancy, mixed_base_m};
use crate::site::{BandInputs, Site};
use crate::withdrawal::CrestForm;

use super::blend::{Blend, Drawn, draw_levels, overlapping, release, release_joined};
use super::gain;
use super::levels::{Setting, levels};

/// Least and greatest loss where one is assumed (choice, methods section 4).
pub const LEAST_LOSS: f64 = 0.5;
/// See [`LEAST_LOSS`].
pub const GREATEST_LOSS: f64 = 3.0;
/// Steps of this, their whole part dropped, spread evenly over 0 to 1 (derived; the golden section). Drawn so, the
/// losses leave every other draw as it was.
const GOLDEN: f64 = 0.618_033_988_749_894_9;
/// The same for gains of oxygen (derived; the plastic number to the power of -2), so that they and the losses fill
/// their square evenly.
const PLASTIC: f64 = 0.569_840_290_998_053_3;

/// One member: one draw of each source of doubt, the same for every mix.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Member {
    /// Common offset of the cast, C.
    pub cast_c: f64,
    /// Common offset of the oxygen readings, mg/L.
    pub cast_mg_l: f64,
    /// Heave in standard deviations.
    pub heave: f64,
    /// Factor on every flow as it enters the zones.
    pub flow: f64,
    /// Zone factor f.
    pub zone_factor: f64,
    /// Place within the range of each leak, 0 to 1.
    pub leak: f64,
    /// Share taken from overlapping levels computed as one sink, 0 to 1.
    pub joined: f64,
    /// Place of an assumed loss between its least and greatest, 0 to 1, even in its logarithm.
    pub loss: f64,
    /// Place within the range of each gain of oxygen, 0 to 1.
    pub gain: f64,
    /// Relation the crests use.
    pub crest: CrestForm,
    /// What the method misses, C.
    pub release_c: f64,
    /// What the method misses, mg/L.
    pub release_mg_l: f64,
}

/// Draws the members: fixed seed, so the same inputs give the same band.
pub fn members(inputs: &BandInputs) -> Vec<Member> {
    let mut random = Pcg64Mcg::seed_from_u64(inputs.seed);
    let middle = inputs.zone_middle;
    let low = Uniform::new_inclusive(inputs.zone_low, middle);
    let high = Uniform::new_inclusive(middle, inputs.zone_high);
    let unit = Uniform::new_inclusive(0.0, 1.0);
    (0..inputs.members)
        .map(|i| {
            let mut normal = || -> f64 { StandardNormal.sample(&mut random) };
            let (cast_c, cast_mg_l, heave) =
                (inputs.cast_c * normal(), inputs.cast_mg_l * normal(), normal());
            let flow = 1.0 + inputs.flow_share * normal();
            let (release_c, release_mg_l) = (inputs.release_c * normal(), inputs.release_mg_l * normal());
            let mut between = |range: &Result<Uniform<f64>, _>, fallback: f64| {
                range.as_ref().map_or(fallback, |range: &Uniform<f64>| range.sample(&mut random))
            };
            // half of the members thinner than the middle, half thicker
            let zone_factor = if i % 2 == 0 { between(&low, middle) } else { between(&high, middle) };
            let (leak, joined) = (between(&unit, 0.5), between(&unit, 0.5));
            let crest = match i / 2 % 4 {
                1 => CrestForm::Control,
                3 => CrestForm::Larger,
                _ => CrestForm::Overflow,
            };
            Member {
                cast_c,
                cast_mg_l,
                heave,
                flow: flow.max(0.0),
                zone_factor,
                leak,
                joined,
                loss: (GOLDEN * i as f64).fract(),
                gain: (PLASTIC * i as f64).fract(),
                crest,
                release_c,
                release_mg_l,
            }
        })
        .collect()
}

/// A member with the column it makes, and what the same draws make of it with nothing learned.
struct Case {
    member: Member,
    plain: Member,
    column: Column,
}

/// What a setting gives with nothing learned, its flows the same.
#[derive(Debug, Clone, PartialEq)]
pub struct Plain {
    /// The release.
    pub release: Blend,
    /// The perturbed cases.
    pub spread: Spread,
}

/// The members with the columns they make of a profile; prepared once, used for every mix.
pub struct Perturbed {
    cases: Vec<Case>,
    /// The site with nothing learned, where something is.
    plain: Option<Site>,
    /// 2 where the profile holds a large inversion, else 1.
    widening: f64,
}

/// Release of every member: temperature (C) and oxygen below the dam (mg/L).
#[derive(Debug, Clone, PartialEq)]
pub struct Spread {
    /// Temperature and oxygen below the dam of each member, in the order of the members.
    pub cases: Vec<(f64, Option<f64>)>,
}

impl Perturbed {
    /// Prepares the members' columns for a profile of some age in days; of unknown age it heaves the most. The
    /// layers heave as far after a cast as before it, so a cast later than the decision counts by its distance.
    pub fn new(site: &Site, profile: &Profile, age_days: Option<f64>) -> Self {
        let b = &site.band;
        let sd = age_days.map_or_else(
            || if b.heave_m_per_day > 0.0 { b.heave_max_m } else { b.heave_m.min(b.heave_max_m) },
            |age| (b.heave_m + b.heave_m_per_day * age.abs()).min(b.heave_max_m),
        );
        // without oxygen, so that where that was read does not move the layers
        let water = Profile::column_of(site, profile.pool_m, &profile.samples, &[]);
        let knee = knee_m(water.as_ref().unwrap_or(&profile.column));
        let drawn = members(&site.spreading()).into_iter().zip(members(&site.band));
        let cases = drawn
            .filter_map(|(m, plain)| {
                let lift = heaved(profile, knee, m.heave * sd);
                let samples: Vec<Sample> = profile
                    .samples
                    .iter()
                    .map(|s| Sample {
                        elevation_m: lift(s.elevation_m),
                        temperature_c: s.temperature_c + m.cast_c,
                        ..*s
                    })
                    .collect();
                let oxygen: Vec<OxygenSample> = profile
                    .oxygen
                    .iter()
                    .map(|o| OxygenSample {
                        elevation_m: lift(o.elevation_m),
                        oxygen_mg_l: (o.oxygen_mg_l + m.cast_mg_l).max(0.0),
                    })
                    .collect();
                let column = Profile::column_of(site, profile.pool_m, &samples, &oxygen)?;
                Some(Case { member: m, plain, column })
            })
            .collect();
        let widening = if profile.large_inversion { 2.0 } else { 1.0 };
        Self { cases, plain: site.without_learned(), widening }
    }

    /// The column of every member, in the order of the members.
    pub fn columns(&self) -> impl Iterator<Item = &Column> {
        self.cases.iter().map(|case| &case.column)
    }

    /// The release of a setting in every member; `centre` is the unperturbed release, about which the spread
    /// widens where the profile is doubtful.
    pub fn spread(&self, site: &Site, groups: &[Vec<usize>], setting: &Setting, centre: &Blend) -> Spread {
        self.spread_of(site, groups, setting, centre, |case| &case.member)
    }

    /// What a setting gives with nothing learned; `None` where nothing is, or nothing flows.
    pub fn plain(&self, column: &Column, groups: &[Vec<usize>], setting: &Setting) -> Option<Plain> {
        let site = self.plain.as_ref()?;
        let levels = levels(site, groups, setting, column.surface_m(), 0.5, CrestForm::Overflow);
        let drawn = draw_levels(column, &levels, 1.0);
        let release = release(&drawn)?.aerated(site, &drawn, 0.5);
        let spread = self.spread_of(site, groups, setting, &release, |case| &case.plain);
        Some(Plain { release, spread })
    }

    fn spread_of(
        &self,
        site: &Site,
        groups: &[Vec<usize>],
        setting: &Setting,
        centre: &Blend,
        member: fn(&Case) -> &Member,
    ) -> Spread {
        let widen = |value: f64, middle: f64| middle + self.widening * (value - middle);
        let cases = self
            .cases
            .iter()
            .filter_map(|case| {
                let (m, column) = (member(case), &case.column);
                let setting = &at_loss(setting, m.loss);
                let mut levels = levels(site, groups, setting, column.surface_m(), m.leak, m.crest);
                for level in &mut levels {
                    level.sink.flow_m3s *= m.flow;
                }
                let drawn = draw_levels(column, &levels, m.zone_factor);
                let aired = |blend: Blend, drawn: &[Drawn]| blend.aerated(site, drawn, m.gain);
                let apart = aired(release(&drawn)?, &drawn);
                let overlaps = overlapping(&drawn);
                let joined = if overlaps.is_empty() {
                    apart
                } else {
                    let one = release_joined(column, &drawn, &overlaps, m.zone_factor);
                    let drawn_as_one = || gain::joined(column, &drawn, &overlaps, m.zone_factor);
                    match one {
                        // the water of each conduit is needed only where some conduit changes it
                        Some(one) if gain::gains(site) => {
                            drawn_as_one().map_or(one, |drawn| aired(one, &drawn))
                        }
                        Some(one) if site.learned().is_some() => aired(one, &drawn),
                        Some(one) => one,
                        None => apart,
                    }
                };
                let between = |a: f64, b: f64| a + m.joined * (b - a);
                let temperature = widen(
                    between(apart.temperature_c, joined.temperature_c) + m.release_c,
                    centre.temperature_c,
                );
                let oxygen = apart.oxygen_below_mg_l.zip(joined.oxygen_below_mg_l).map(|(a, b)| {
                    let value = between(a, b);
                    widen(value + m.release_mg_l, centre.oxygen_below_mg_l.unwrap_or(value)).max(0.0)
                });
                Some((temperature, oxygen))
            })
            .collect();
        Spread { cases }
    }
}

/// Flows of a setting whose loss is assumed at a place between the least and the greatest, straight between those
/// and the middle one (choice).
fn at_loss(setting: &Setting, place: f64) -> Cow<'_, Setting> {
    let [low, high] = setting.at_losses.as_slice() else { return Cow::Borrowed(setting) };
    let middle = (ASSUMED_LOSS / LEAST_LOSS).ln() / (GREATEST_LOSS / LEAST_LOSS).ln();
    let (other, share) =
        if place < middle { (low, 1.0 - place / middle) } else { (high, (place - middle) / (1.0 - middle)) };
    let mut out = setting.clone();
    for (gates, others) in [(&mut out.gates, &other.gates), (&mut out.leaks, &other.leaks)] {
        for gate in gates {
            if let Some(there) = others.iter().find(|g| g.outlet == gate.outlet) {
                gate.flow_m3s += share * (there.flow_m3s - gate.flow_m3s);
            }
        }
    }
    Cow::Owned(out)
}

/// Elevation whose water heaves most: where density changes fastest, else the base of the mixed layer, m.
fn knee_m(column: &Column) -> f64 {
    greatest_buoyancy(column).filter(|b| b.0 > 0.0).map_or_else(|| mixed_base_m(column), |b| b.1)
}

/// Heave: the knee moves by `by`, surface and bed stay, between them the movement falls off linearly. Held to
/// half the water on either side of the knee, so that the column never folds.
fn heaved(profile: &Profile, knee: f64, by: f64) -> impl Fn(f64) -> f64 {
    let (bed, surface) = (profile.column.bed_m(), profile.column.surface_m());
    let by = by.clamp(-0.5 * (knee - bed).max(0.0), 0.5 * (surface - knee).max(0.0));
    move |z: f64| {
        let share = if z >= knee {
            if surface > knee { (surface - z) / (surface - knee) } else { 0.0 }
        } else if knee > bed {
            ((z - bed) / (knee - bed)).max(0.0)
        } else {
            0.0
        };
        z + by * share
    }
}

impl Spread {
    /// 10-90 % band of the temperature, C.
    pub fn band_c(&self) -> Option<(f64, f64)> {
        band(self.cases.iter().map(|c| c.0).collect())
    }

    /// 10-90 % band of the oxygen below the dam, mg/L; `None` where any member's is missing.
    pub fn band_oxygen_mg_l(&self) -> Option<(f64, f64)> {
        band(self.cases.iter().map(|c| c.1).collect::<Option<_>>()?)
    }
}

fn band(mut values: Vec<f64>) -> Option<(f64, f64)> {
    values.sort_by(f64::total_cmp);
    Some((quantile(&values, 0.1)?, quantile(&values, 0.9)?))
}

/// Quantile of sorted values, linear between order statistics; `None` of none.
pub fn quantile(sorted: &[f64], share: f64) -> Option<f64> {
    let last = sorted.len().checked_sub(1)?;
    let place = share * last as f64;
    let below = (0..=last).take_while(|&i| i as f64 <= place).last()?;
    let above = (below + 1).min(last);
    Some(sorted[below] + (place - below as f64) * (sorted[above] - sorted[below]))
}
