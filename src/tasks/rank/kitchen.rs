//! Mixes computed in full: the wells shared out, the release judged, the change from now counted.

use crate::mix::limits::{self, Before, Check, Rule, Whole};
use crate::mix::{
    Asked, Blend, Day, Drawn, Gate, Held, Perturbed, Setting, Spread, draw_levels, held, judge, levels,
    release, resolve,
};
use crate::rank::Ranked;
use crate::tasks::Context;
use crate::tasks::change::{Change, change};
use crate::tasks::learned::Without;
use crate::units::DAY_S;
use crate::withdrawal::CrestForm;

use super::shown::{Shown, ShownPart, Unsure};

/// What shown mixes are made with.
pub(super) struct Kitchen<'a> {
    pub(super) context: &'a Context,
    pub(super) perturbed: &'a Perturbed,
    pub(super) groups: &'a [Vec<usize>],
    pub(super) day: &'a Day,
    pub(super) now: Option<&'a Setting>,
    pub(super) before: Before,
}

impl Kitchen<'_> {
    /// What is asked, its wells shared out in full.
    pub(super) fn resolved(&self, asked: &Asked) -> Setting {
        let profile = &self.context.profile;
        resolve(self.context.site(), &profile.column, self.groups, asked, profile.pool_m)
    }

    /// The release of a setting. `None` when nothing flows.
    pub(super) fn blend(&self, setting: &Setting) -> Option<Blend> {
        let (site, profile) = (self.context.site(), &self.context.profile);
        let levels = levels(site, self.groups, setting, profile.pool_m, 0.5, CrestForm::Overflow);
        let drawn = draw_levels(&profile.column, &levels, site.zone_factor());
        Some(release(&drawn)?.aerated(site, &drawn, 0.5))
    }

    /// Its temperature (C) and oxygen below the dam (mg/L).
    pub(super) fn water(&self, setting: &Setting) -> Option<(f64, Option<f64>)> {
        self.blend(setting).map(|b| (b.temperature_c, b.oxygen_below_mg_l))
    }

    /// What a ranked mix sets, flows as their time means.
    pub(super) fn gates(&self, mix: &Ranked) -> Vec<Gate> {
        let settings: Vec<Setting> = mix.asked.iter().map(|asked| self.resolved(asked)).collect();
        let parts: Vec<(f64, &Setting)> = self.shares(settings.len()).into_iter().zip(&settings).collect();
        day(&parts).gates
    }

    /// Time means of temperature (C) and oxygen (mg/L) of a ranked mix, computed in full.
    pub(super) fn release(&self, mix: &Ranked) -> Option<(f64, Option<f64>)> {
        self.water_over_day(&mix.asked)
    }

    /// The same of what is asked in each part of the day.
    fn water_over_day(&self, asked: &[Asked]) -> Option<(f64, Option<f64>)> {
        let shares = self.shares(asked.len());
        let parts: Vec<(f64, f64, Option<f64>)> = asked
            .iter()
            .zip(&shares)
            .map(|(asked, share)| {
                let (t, o) = self.water(&self.resolved(asked))?;
                Some((*share, t, o))
            })
            .collect::<Option<_>>()?;
        let oxygen: Option<f64> = parts.iter().map(|p| Some(p.0 * p.2?)).sum();
        Some((parts.iter().map(|p| p.0 * p.1).sum(), oxygen))
    }

    /// Shares of the day of so many parts.
    fn shares(&self, parts: usize) -> Vec<f64> {
        let blocks = &self.context.site().blocks;
        if parts == blocks.len() && parts > 1 {
            blocks.iter().map(|b| b.hours / 24.0).collect()
        } else {
            vec![1.0 / parts.max(1) as f64; parts]
        }
    }

    /// The setting now as it is, with what it gives today.
    pub(super) fn now(&self, setting: &Setting) -> Option<Shown> {
        self.shown(vec![(1.0, setting.clone())], 0)
    }

    /// A ranked mix computed in full.
    pub(super) fn ranked(&self, mix: &Ranked, alike: usize) -> Option<Shown> {
        let settings = mix.asked.iter().map(|asked| self.resolved(asked));
        let mut shown =
            self.shown(self.shares(mix.asked.len()).into_iter().zip(settings).collect(), alike)?;
        shown.unsure = self.unsure(&mix.asked);
        Some(shown)
    }

    fn shown(&self, settings: Vec<(f64, Setting)>, alike: usize) -> Option<Shown> {
        let (site, profile) = (self.context.site(), &self.context.profile);
        let mut parts: Vec<ShownPart> = settings
            .into_iter()
            .map(|(share, setting)| {
                let mix = judge(site, profile, self.perturbed, &setting, self.day)?;
                Some(ShownPart { share, setting, mix })
            })
            .collect::<Option<_>>()?;
        let over = |read: &dyn Fn(&ShownPart) -> Option<f64>| -> Option<f64> {
            parts.iter().map(|p| Some(p.share * read(p)?)).sum()
        };
        let temperature_c = over(&|p| Some(p.mix.release.temperature_c))?;
        let flow_m3s = over(&|p| Some(p.mix.release.flow_m3s))?;
        let by_flow_c = over(&|p| Some(p.mix.release.flow_m3s * p.mix.release.temperature_c))? / flow_m3s;
        let oxygen_mg_l = over(&|p| p.mix.release.oxygen_below_mg_l);
        let oxygen_pool_mg_l = over(&|p| p.mix.release.oxygen_mg_l);
        let cold_m3_per_day = match site.cold_water_c.first() {
            Some(&threshold) => over(&|p| Some(DAY_S * self.colder_m3s(p, threshold))),
            None => None,
        };
        let lost = |p: &ShownPart| {
            let flows = p.setting.gates.iter().map(|g| (g.outlet, g.flow_m3s));
            site.generation_lost_mw(flows)
        };
        let generation_lost_mw = over(&lost);
        let spread = over_day(&parts);
        let without = Without::of(parts.iter().map(|p| (p.share, &p.mix)));
        let of_day: Vec<_> = parts.iter().map(|p| (p.share, &p.mix.release, &p.mix.spread)).collect();
        let Held { targets, conflicts, points, .. } = held(site, &of_day, self.day);
        let set: Vec<(f64, &Setting)> = parts.iter().map(|p| (p.share, &p.setting)).collect();
        let day = day(&set);
        let change = self.add_limits(&mut parts, &day, flow_m3s);
        Some(Shown {
            day,
            flow_m3s,
            temperature_c,
            oxygen_mg_l,
            oxygen_pool_mg_l,
            by_flow_c,
            spread,
            without,
            targets,
            conflicts,
            points,
            cold_m3_per_day,
            change,
            generation_lost_mw,
            limits: tightest(&parts),
            not_checked: once(&parts, |p| &p.mix.not_checked),
            warnings: once(&parts, |p| &p.mix.warnings),
            unsure: Vec::new(),
            alike,
            reasons: Vec::new(),
            parts,
        })
    }

    /// Flow of a part of the day from water colder than a threshold (C), m3/s.
    fn colder_m3s(&self, part: &ShownPart, threshold_c: f64) -> f64 {
        let column = &self.context.profile.column;
        let share = |d: &Drawn| d.zone.map_or(0.0, |z| z.colder_share(column, threshold_c));
        part.mix.levels.iter().map(|d| d.level.sink.flow_m3s * share(d)).sum()
    }

    /// Adds the limits that the setting now and the day as a whole bring; the change that is to be made, where the
    /// setting now is known.
    fn add_limits(&self, parts: &mut [ShownPart], day: &Setting, flow_m3s: f64) -> Option<Change> {
        let (site, profile) = (self.context.site(), &self.context.profile);
        let mut more = Vec::new();
        let releases: Vec<_> = parts.iter().map(|p| p.mix.release).collect();
        let change =
            self.now.map(|now| change(site, (now, self.before), day, &releases, self.day.date, &mut more));
        if parts.len() > 1 {
            // the pool falls by what the whole day takes, not by what one part of it would
            let mut whole = Vec::new();
            limits::whole(site, profile.pool_m, &Whole { flow_m3s, ..Whole::default() }, &mut whole);
            more.extend(whole.into_iter().filter(|c| c.rule == Rule::Drawdown));
            for part in &mut *parts {
                part.mix.drop_limits(site, Rule::Drawdown);
            }
        }
        for part in parts {
            part.mix.add_limits(site, &profile.column, &part.setting, more.clone());
        }
        change
    }

    /// What comes out if gates not confirmed in position stand otherwise: shut instead of open, or fully open instead
    /// of shut. Of an outlet on no well that is taken as shut nothing is told, since nobody knows its flow.
    fn unsure(&self, asked: &[Asked]) -> Vec<Unsure> {
        let outlets = self.context.site().outlets.iter().enumerate();
        let uncertain = outlets.filter(|(_, o)| o.uncertain);
        uncertain
            .filter_map(|(outlet, _)| {
                let is_open = |a: &Asked| {
                    a.direct.iter().any(|g| g.outlet == outlet) || a.open.iter().any(|g| g.0 == outlet)
                };
                let open = asked.iter().any(is_open);
                let others: Option<Vec<Asked>> = asked.iter().map(|a| self.other(a, outlet, open)).collect();
                Some(Unsure { outlet, open, otherwise: self.water_over_day(&others?) })
            })
            .collect()
    }

    /// What is asked with a gate shut instead of open, or open instead of shut.
    fn other(&self, asked: &Asked, outlet: usize, open: bool) -> Option<Asked> {
        let site = self.context.site();
        let well = site.outlets[outlet].well;
        let mut other = asked.clone();
        if open {
            other.direct.retain(|g| g.outlet != outlet);
            other.open.retain(|g| g.0 != outlet);
            let still = |w: usize| other.open.iter().any(|g| site.outlets[g.0].well == Some(w));
            let emptied = well.filter(|&w| !still(w));
            other.totals.retain(|t| Some(t.0) != emptied);
        } else {
            well.filter(|&w| other.totals.iter().any(|t| t.0 == w))?;
            other.open.push((outlet, 1.0));
        }
        Some(other)
    }
}

/// What is set over the parts of a day, flows as their time means.
fn day(parts: &[(f64, &Setting)]) -> Setting {
    let mut day = parts.first().map_or_else(Setting::default, |p| p.1.clone());
    let mean = |gates: &mut [Gate], of: fn(&Setting) -> &[Gate]| {
        for gate in gates {
            let same =
                |s: &Setting| of(s).iter().find(|g| g.outlet == gate.outlet).map_or(0.0, |g| g.flow_m3s);
            gate.flow_m3s = parts.iter().map(|(share, setting)| share * same(setting)).sum();
        }
    };
    mean(&mut day.gates, |s| &s.gates);
    mean(&mut day.leaks, |s| &s.leaks);
    day
}

/// Time means of the perturbed cases; the same members stand behind every part.
fn over_day(parts: &[ShownPart]) -> Spread {
    let count = parts.iter().map(|p| p.mix.spread.cases.len()).min().unwrap_or(0);
    let case = |i: usize| {
        let of = |p: &ShownPart| p.mix.spread.cases[i];
        let oxygen = parts.iter().map(|p| Some(p.share * of(p).1?)).sum();
        (parts.iter().map(|p| p.share * of(p).0).sum(), oxygen)
    };
    Spread { cases: (0..count).map(case).collect() }
}

/// Each limit once, with its least room over the parts of the day.
fn tightest(parts: &[ShownPart]) -> Vec<Check> {
    let which = |c: &Check| (c.rule, c.of, c.item);
    let mut out: Vec<Check> = parts.iter().flat_map(|p| &p.mix.limits).copied().collect();
    out.sort_by(|a, b| which(a).cmp(&which(b)).then(a.room.total_cmp(&b.room)));
    out.dedup_by_key(|c| which(c));
    out
}

/// What is told of any part, each once.
fn once<T: Clone + PartialEq>(parts: &[ShownPart], of: fn(&ShownPart) -> &Vec<T>) -> Vec<T> {
    let mut out: Vec<T> = Vec::new();
    for told in parts.iter().flat_map(of) {
        if !out.contains(told) {
            out.push(told.clone());
        }
    }
    out
}
