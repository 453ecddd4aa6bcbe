//! Seasons small enough to be followed many times: a box of a pool, a few gates, cold water that does not last.

use std::collections::BTreeMap;
use std::fmt::Write as _;
use std::sync::Arc;

use chrono::{Days, NaiveDate};
use gatemix::files::site::site;
use gatemix::profile::{Profile, Raw, RawRow};
use gatemix::river::Conditions;
use gatemix::season::{Choosing, Plan, PlanDay, Run, Setup, Skies, Sky, run};
use gatemix::site::{Case, Site, Strategy};
use std::ops::ControlFlow;

/// What makes one season differ from another.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Of {
    /// Gates, the lowest first; on one well that opens one at a time, or each free.
    pub gates: usize,
    pub on_a_well: bool,
    pub days: u32,
    pub every: u32,
    /// Elevation of the thermocline, m, and water above and below it, C.
    pub thermocline_m: f64,
    pub warm_c: f64,
    pub cold_c: f64,
    pub release_m3s: f64,
    /// Top of the range before and after the turn.
    pub early_high_c: f64,
    pub late_high_c: f64,
    pub equilibrium_c: f64,
}

/// A season with all that it borrows.
pub(crate) struct Tiny {
    pub of: Of,
    site: Site,
    start: Profile,
    pub plan: Plan,
}

pub(crate) const SURFACE_M: f64 = 24.0;
pub(crate) const AREA_M2: f64 = 1.0e5;
const LAYER_M: f64 = 2.0;

pub(crate) fn begins() -> NaiveDate {
    NaiveDate::from_ymd_opt(2026, 7, 1).unwrap()
}

impl Tiny {
    pub(crate) fn new(of: Of) -> Self {
        Self::with(of, &[])
    }

    /// The same season at a dam whose file goes on with more lines.
    pub(crate) fn with(of: Of, more: &[&str]) -> Self {
        Self::edited(of, &|text| text + &more.join("\n"))
    }

    /// The same season at a dam whose file is changed.
    pub(crate) fn edited(of: Of, edit: &dyn Fn(String) -> String) -> Self {
        let site = dam(&of, edit);
        Self::at(of, site)
    }

    /// The same by the pool: from a pool of the day before it begins (m) so far down each day (m), to the end.
    pub(crate) fn by_pool(mut self, pool_m: f64, fall_m: f64) -> Self {
        let inflow_m3s = 0.8 * self.of.release_m3s;
        for (day, days) in self.plan.days.iter_mut().zip(1..) {
            (day.pool_m, day.release_m3s) = (Some(pool_m - fall_m * f64::from(days)), None);
            day.inflow_m3s = inflow_m3s;
        }
        self
    }

    fn at(of: Of, site: Site) -> Self {
        let step = |z: f64| 1.0 / (1.0 + ((of.thermocline_m - z) / 1.0).exp());
        let rows = (0..=24).map(|i| {
            let z = f64::from(i) * SURFACE_M / 24.0;
            RawRow {
                line: 1,
                elevation_m: Some(z),
                temperature_c: Some(of.cold_c + 0.01 * z + (of.warm_c - of.cold_c) * step(z)),
                ..RawRow::default()
            }
        });
        let raw = Raw {
            file: "invented.csv".into(),
            taken: "2026-07-01T10:00:00Z".parse().ok(),
            pool_m: Some(SURFACE_M),
            rows: rows.collect(),
        };
        let start = Profile::build(&raw, &site, None).0.unwrap();
        let day = |i: u32| PlanDay {
            date: begins() + Days::new(u64::from(i)),
            pool_m: None,
            release_m3s: Some(of.release_m3s),
            inflow_m3s: 0.8 * of.release_m3s,
            inflow_c: of.warm_c,
            inflow_mg_l: None,
            inflow_salt_g_per_kg: None,
            inflow_suspended_mg_l: None,
        };
        let plan = Plan {
            name: "tiny".into(),
            file: "tiny.csv".into(),
            days: (0..of.days).map(day).collect(),
            outages: Vec::new(),
            notes: Vec::new(),
        };
        Self { of, site, start, plan }
    }

    /// The same with its outlets told in the opposite order.
    pub(crate) fn reversed(mut self) -> Self {
        self.site.outlets.reverse();
        self
    }

    /// The air of a case that differs by so much, C.
    pub(crate) fn skies(&self, air_c: f64) -> Skies {
        let sky = Sky::Given { equilibrium_c: self.of.equilibrium_c + air_c, exchange_w_m2_c: 25.0 };
        let days: BTreeMap<NaiveDate, Sky> = self.plan.days.iter().map(|d| (d.date, sky)).collect();
        Skies {
            case: Case { name: format!("{air_c}"), air_c, wind: 1.0, inflow: 1.0, inflow_c: 0.5 * air_c },
            year: None,
            days,
            site: Arc::new(self.site.clone()),
            conditions: Arc::new(Conditions::default()),
            from: "invented".into(),
        }
    }

    pub(crate) fn setup<'a>(&'a self, skies: &'a Skies, choosing: Choosing) -> Setup<'a> {
        Setup {
            start: &self.start,
            begins: begins(),
            decides: begins(),
            now: None,
            plan: &self.plan,
            skies,
            choosing,
            decide_days: self.of.every,
            order: &gatemix::rank::Criterion::USUAL,
        }
    }

    pub(crate) fn run(&self, skies: &Skies, choosing: Choosing) -> Run {
        run(&self.setup(skies, choosing), &|_| ControlFlow::Continue(())).unwrap()
    }

    pub(crate) fn by(&self, skies: &Skies, strategy: Strategy) -> Run {
        self.run(skies, Choosing::By(strategy))
    }
}

fn dam(of: &Of, edit: &dyn Fn(String) -> String) -> Site {
    let turn = begins() + Days::new(u64::from(of.days / 2));
    let mut text = String::from(
        "name: Tiny Dam (invented)\nunits: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }\n\
         utc_offset: \"+00:00\"\nplace: { altitude: 100 }\n",
    );
    let volume = AREA_M2 * 30.0;
    let _ = write!(
        text,
        "pool:\n  bed: 0\n  full: 29\n  table: [[0, {AREA_M2}, 0], [30, {AREA_M2}, {volume}]]\n"
    );
    if of.on_a_well {
        text += "wells:\n  - { name: Tower, conduit: 1, max_open: 1 }\n";
    }
    text += "outlets:\n";
    for i in 0..of.gates {
        let centre = 3.0 + 16.0 * i as f64 / (of.gates as f64 - 1.0);
        let kind = if of.on_a_well { "well: Tower, loss: 1.5, positions: [0, 100]," } else { "" };
        let _ = writeln!(text, "  - {{ name: G{i}, {kind} centre: {centre}, height: 1.5, width: 2 }}");
    }
    let _ = write!(
        text,
        "targets:\n  - {{ name: early, from: 07-01, to: {}, high: {}, preferred: {} }}\n  \
         - {{ name: late, from: {}, to: 12-31, high: {} }}\ncold_water: [12]\n",
        turn.pred_opt().unwrap().format("%m-%d"),
        of.early_high_c,
        0.5 * (of.early_high_c + of.cold_c),
        turn.format("%m-%d"),
        of.late_high_c,
    );
    let read = site(&edit(text), "site.yaml");
    let mut site = read.site.unwrap_or_else(|| panic!("{:?}", read.problems));
    site.season.layer_m = LAYER_M;
    site
}
