//! The seasons of an answer: which are run, beside each other.

use std::ops::ControlFlow;
use std::sync::{Arc, Mutex};

use rayon::prelude::*;

use crate::mix::Setting;
use crate::problem::Problem;
use crate::season::{Choosing, Plan, Setup, Skies, outcome, run};
use crate::site::Strategy;
use crate::tasks::{Context, Failure};

use super::SeasonRun;
use super::asked::{Case, Understood};

/// Seasons that solving a schedule counts for (choice: it is solved over some forty).
const SOLVED: f64 = 40.0;

/// Whoever is told how much is done.
type Progress<'a> = &'a (dyn Fn(f64) -> ControlFlow<()> + Sync);

/// One season to run: its plan, its air, how its gates are chosen.
type Job = (Arc<Plan>, Arc<Skies>, Choosing);

/// What the seasons of an answer have in common.
pub(super) struct Table<'a> {
    pub(super) context: &'a Context,
    pub(super) understood: &'a Understood,
    pub(super) now: Option<&'a Setting>,
}

impl Table<'_> {
    /// The season spoken of.
    pub(super) fn main(&self, progress: Progress) -> Result<SeasonRun, Failure> {
        let of = self.understood;
        let skies = self.skies(&of.plan, &of.case).map_err(|problem| self.refused(problem))?;
        let mut main = self.run(&(of.plan.clone(), skies, of.choosing.clone()), &|done| {
            progress(self.main_share() * done)
        })?;
        main.foresight = matches!(of.choosing, Choosing::By(Strategy::Thrift));
        Ok(main)
    }

    /// The same plan in the other cases, the other plans in the same case (in every case where that is asked), the other
    /// strategies; a case without air for all the days is left out with a flag.
    pub(super) fn others(
        &self,
        main: &SeasonRun,
        progress: Progress,
        notes: &mut Vec<Problem>,
    ) -> Result<Vec<SeasonRun>, Failure> {
        let of = self.understood;
        // what was solved on one case is scored on the others, not solved again
        let again = main.run.again(&of.choosing);
        let mut jobs: Vec<Job> = Vec::new();
        let mut put = |plan: &Arc<Plan>, case: &Case, choosing: Choosing| match self.skies(plan, case) {
            Ok(skies) => jobs.push((plan.clone(), skies, choosing)),
            Err(problem) => notes.push(Problem::flag("season-left-out", problem.words, problem.cure)),
        };
        for case in of.cases.iter().filter(|case| !case.is(&of.case)) {
            put(&of.plan, case, again.clone());
        }
        for plan in &of.other_plans {
            put(plan, &of.case, again.clone());
            for case in of.cases.iter().filter(|case| of.every_case && !case.is(&of.case)) {
                put(plan, case, again.clone());
            }
        }
        for strategy in [Strategy::Hold, Strategy::Best] {
            let known = matches!(of.choosing, Choosing::By(main) if main == strategy);
            if !known {
                put(&of.plan, &of.case, Choosing::By(strategy));
            }
        }
        let main_share = self.main_share();
        let done = Mutex::new(vec![0.0; jobs.len()]);
        let tell = |job: usize, share: f64| {
            let all = done.lock().map_or(0.0, |mut all| {
                if let Some(one) = all.get_mut(job) {
                    *one = share;
                }
                all.iter().sum::<f64>() / all.len() as f64
            });
            progress(main_share + (1.0 - main_share) * all)
        };
        jobs.par_iter().enumerate().map(|(i, job)| self.run(job, &|share| tell(i, share))).collect()
    }

    /// Share of the work that the season spoken of is.
    fn main_share(&self) -> f64 {
        let of = self.understood;
        let main = if matches!(of.choosing, Choosing::By(Strategy::Thrift)) { SOLVED } else { 1.0 };
        let each = if of.every_case { of.cases.len() } else { 1 };
        // the other cases and plans, and the other one or two strategies
        main / (main + (of.cases.len() + each * of.other_plans.len() + 1) as f64)
    }

    fn run(&self, (plan, skies, choosing): &Job, progress: Progress) -> Result<SeasonRun, Failure> {
        let of = self.understood;
        let setup = Setup {
            start: &self.context.profile,
            begins: of.begins,
            decides: of.decides,
            now: self.now,
            plan,
            skies,
            choosing: choosing.clone(),
            decide_days: of.decide_days,
            order: &of.order,
        };
        let run = run(&setup, progress).ok_or(Failure::Stopped)?;
        let outcome = outcome(&setup, &run);
        let is_chosen =
            !matches!(choosing, Choosing::By(Strategy::Hold) | Choosing::Schedule(_) | Choosing::Found(_));
        Ok(SeasonRun {
            plan: plan.clone(),
            skies: skies.clone(),
            run,
            outcome,
            foresight: false,
            order: if is_chosen { of.order.clone() } else { Vec::new() },
        })
    }

    /// The air of a case over the days of a plan.
    fn skies(&self, plan: &Plan, case: &Case) -> Result<Arc<Skies>, Problem> {
        case.skies(self.context, self.understood.begins, plan)
    }

    fn refused(&self, problem: Problem) -> Failure {
        Failure::Refused(vec![problem], self.context.system)
    }
}
