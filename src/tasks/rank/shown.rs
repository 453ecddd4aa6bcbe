//! A mix as it is shown: computed in full, with what it takes and why it stands where it does.

use chrono::{Days, NaiveDate};

use crate::mix::limits::{self, Before, Check, Moves};
use crate::mix::{
    Asked, Mix, Perturbed, Setting, TargetStanding, draw_levels, judge, levels, release, resolve, standings,
};
use crate::rank::Ranked;
use crate::tasks::Context;
use crate::withdrawal::CrestForm;

/// Seconds of a day.
const DAY_S: f64 = 86_400.0;

/// A part of the day.
#[derive(Debug, Clone)]
pub struct ShownPart {
    /// Its share of the day.
    pub share: f64,
    /// What is set.
    pub setting: Setting,
    /// What comes out.
    pub mix: Mix,
}

/// One gate that is to be moved.
#[derive(Debug, Clone, PartialEq)]
pub struct Move {
    /// Index of the outlet.
    pub outlet: usize,
    /// Opening now, 0 to 1.
    pub from: f64,
    /// Opening then.
    pub to: f64,
    /// Flow now, m3/s.
    pub from_m3s: f64,
    /// Flow then.
    pub to_m3s: f64,
}

/// What comes out if a gate whose position is not confirmed stands otherwise.
#[derive(Debug, Clone, PartialEq)]
pub struct Unsure {
    /// Index of the outlet.
    pub outlet: usize,
    /// Whether it is taken as open.
    pub open: bool,
    /// Temperature (C) and oxygen (mg/L) if it is not; `None` where nothing would flow.
    pub otherwise: Option<(f64, Option<f64>)>,
}

/// A mix as it is shown.
#[derive(Debug, Clone)]
pub struct Shown {
    /// The parts of the day; one for a steady day.
    pub parts: Vec<ShownPart>,
    /// Time mean of the temperature, C: what a gauge sees.
    pub temperature_c: f64,
    /// Time mean of the oxygen, mg/L.
    pub oxygen_mg_l: Option<f64>,
    /// Temperature weighted with the flow, C: what heat balances use.
    pub by_flow_c: f64,
    /// Standing against every target valid on the date, over the day.
    pub targets: Vec<TargetStanding>,
    /// Water colder than the site's first threshold that it takes in a day, m3; `None` without a threshold.
    pub cold_m3_per_day: Option<f64>,
    /// What the change from the setting now takes; `None` where that is not known.
    pub moves: Option<Moves>,
    /// Which gates move.
    pub moved: Vec<Move>,
    /// First day on which the crew can make it, by the notice it needs.
    pub earliest: Option<NaiveDate>,
    /// Power not made, MW, over the day.
    pub generation_lost_mw: Option<f64>,
    /// Limits of the change itself, and of the day as a whole.
    pub limits: Vec<Check>,
    /// Gates not confirmed in position.
    pub unsure: Vec<Unsure>,
    /// Number of other sets of outlets that draw through the same levels.
    pub alike: usize,
    /// Outlets open.
    pub open: Vec<usize>,
    /// Why it stands where it does, in words; quantities as [`say`](crate::units::say) marks them.
    pub reasons: Vec<String>,
}

/// What shown mixes are made with.
pub(super) struct Kitchen<'a> {
    pub(super) context: &'a Context,
    pub(super) perturbed: &'a Perturbed,
    pub(super) groups: &'a [Vec<usize>],
    pub(super) date: NaiveDate,
    pub(super) now: Option<&'a Setting>,
    pub(super) before: Before,
}

impl Kitchen<'_> {
    /// What is asked, its wells shared out in full.
    pub(super) fn resolved(&self, asked: &Asked) -> Setting {
        let profile = &self.context.profile;
        resolve(self.context.site(), &profile.column, self.groups, asked, profile.pool_m)
    }

    /// Temperature (C) and oxygen (mg/L) of a setting. `None` when nothing flows.
    pub(super) fn water(&self, setting: &Setting) -> Option<(f64, Option<f64>)> {
        let (site, profile) = (self.context.site(), &self.context.profile);
        let levels = levels(site, self.groups, setting, profile.pool_m, 0.5, CrestForm::Overflow);
        let blend = release(&draw_levels(&profile.column, &levels, 1.0))?;
        Some((blend.temperature_c, blend.oxygen_mg_l))
    }

    /// Time means of temperature (C) and oxygen (mg/L) of a ranked mix, computed in full.
    pub(super) fn release(&self, mix: &Ranked) -> Option<(f64, Option<f64>)> {
        let shares = self.shares(mix.asked.len());
        let parts: Vec<(f64, f64, Option<f64>)> = mix
            .asked
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
        shown.unsure = self.unsure(mix.asked.first()?);
        Some(shown)
    }

    fn shown(&self, settings: Vec<(f64, Setting)>, alike: usize) -> Option<Shown> {
        let (site, profile) = (self.context.site(), &self.context.profile);
        let parts: Vec<ShownPart> = settings
            .into_iter()
            .map(|(share, setting)| {
                let mix = judge(site, profile, self.perturbed, &setting, self.date)?;
                Some(ShownPart { share, setting, mix })
            })
            .collect::<Option<_>>()?;
        let of_day: Vec<_> = parts.iter().map(|p| (p.share, &p.mix.release, &p.mix.spread)).collect();
        let targets = standings(site, &of_day, self.date);
        let over = |read: &dyn Fn(&ShownPart) -> Option<f64>| -> Option<f64> {
            parts.iter().map(|p| Some(p.share * read(p)?)).sum()
        };
        let temperature_c = over(&|p| Some(p.mix.release.temperature_c))?;
        let flow_m3s = over(&|p| Some(p.mix.release.flow_m3s))?;
        let by_flow_c = over(&|p| Some(p.mix.release.flow_m3s * p.mix.release.temperature_c))? / flow_m3s;
        let cold_c = site.cold_water_c.first().copied();
        let cold = |p: &ShownPart, threshold: f64| -> f64 {
            let share =
                |d: &crate::mix::Drawn| d.zone.map_or(0.0, |z| z.colder_share(&profile.column, threshold));
            p.mix.levels.iter().map(|d| d.level.sink.flow_m3s * share(d)).sum()
        };
        let lost: Vec<(usize, f64)> = site
            .outlets
            .iter()
            .enumerate()
            .filter_map(|(i, o)| Some((i, o.generation_lost.map(|g| g.power_mw / g.flow_m3s)?)))
            .collect();
        let through = |p: &ShownPart, outlet: usize| -> f64 {
            p.setting.gates.iter().filter(|g| g.outlet == outlet).map(|g| g.flow_m3s).sum()
        };
        let mut checks = Vec::new();
        let first = &parts.first()?.setting;
        let moves = self.now.map(|now| limits::moves(site, now, first, &mut checks));
        if let Some(now) = self.now {
            let mut release = parts.first()?.mix.release;
            release.temperature_c = temperature_c;
            release.flow_m3s = flow_m3s;
            checks.clear();
            limits::change(site, now, self.before, first, &release, &mut checks);
        }
        let notice = moves.map(|m| m.lead_days).filter(|d| *d > 0.0);
        let mut open: Vec<usize> = first.gates.iter().map(|g| g.outlet).collect();
        open.sort_unstable();
        Some(Shown {
            temperature_c,
            oxygen_mg_l: over(&|p| p.mix.release.oxygen_mg_l),
            by_flow_c,
            targets,
            cold_m3_per_day: cold_c.and_then(|c| Some(DAY_S * over(&|p| Some(cold(p, c)))?)),
            moves,
            moved: self.now.map_or_else(Vec::new, |now| self.moved(now, first)),
            earliest: notice.and_then(|days| self.after(days)),
            generation_lost_mw: if lost.is_empty() {
                None
            } else {
                over(&|p| Some(lost.iter().map(|(outlet, per)| per * through(p, *outlet)).sum()))
            },
            limits: checks,
            unsure: Vec::new(),
            alike,
            open,
            reasons: Vec::new(),
            parts,
        })
    }

    /// The day so many days after the decision, a part of one counted as one.
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a whole number of days, capped"
    )]
    fn after(&self, days: f64) -> Option<NaiveDate> {
        self.date.checked_add_days(Days::new(days.ceil().clamp(0.0, 36_500.0) as u64))
    }

    fn moved(&self, now: &Setting, to: &Setting) -> Vec<Move> {
        let site = self.context.site();
        let at = |setting: &Setting, outlet: usize| {
            let gate = setting.gates.iter().find(|g| g.outlet == outlet && setting.stands_open(site, g));
            gate.map_or((0.0, 0.0), |g| (g.opening, g.flow_m3s))
        };
        (0..site.outlets.len())
            .filter_map(|outlet| {
                let ((from, from_m3s), (to, to_m3s)) = (at(now, outlet), at(to, outlet));
                limits::is_moved(&site.outlets[outlet], (from, from_m3s), (to, to_m3s)).then_some(Move {
                    outlet,
                    from,
                    to,
                    from_m3s,
                    to_m3s,
                })
            })
            .collect()
    }

    /// What comes out if gates not confirmed in position stand otherwise: shut instead of open, or fully open instead
    /// of shut. Of an outlet on no well that is taken as shut nothing is told, since nobody knows its flow.
    fn unsure(&self, asked: &Asked) -> Vec<Unsure> {
        let site = self.context.site();
        let uncertain = site.outlets.iter().enumerate().filter(|(_, o)| o.uncertain);
        uncertain
            .filter_map(|(outlet, o)| {
                let mut other = asked.clone();
                let direct = other.direct.iter().any(|g| g.outlet == outlet);
                let on_well = other.open.iter().any(|g| g.0 == outlet);
                let carries = o.well.is_some_and(|w| other.totals.iter().any(|t| t.0 == w));
                if direct || on_well {
                    other.direct.retain(|g| g.outlet != outlet);
                    other.open.retain(|g| g.0 != outlet);
                    if let Some(well) = o.well
                        && !other.open.iter().any(|g| site.outlets[g.0].well == Some(well))
                    {
                        other.totals.retain(|t| t.0 != well);
                    }
                } else if carries {
                    other.open.push((outlet, 1.0));
                } else {
                    return None;
                }
                let otherwise = self.water(&self.resolved(&other));
                Some(Unsure { outlet, open: direct || on_well, otherwise })
            })
            .collect()
    }
}
