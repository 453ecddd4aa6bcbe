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
pub(super) type Progress<'a> = &'a (dyn Fn(f64) -> ControlFlow<()> + Sync);

/// One season to run: its plan, its air, how its gates are chosen.
type Job = (Arc<Plan>, Arc<Skies>, Choosing);

/// Seasons that go on beside each other, told as one: how much is done of all of them, from a share of the whole on.
pub(super) struct Beside<'a> {
    done: Mutex<Vec<f64>>,
    from: f64,
    progress: Progress<'a>,
}

impl<'a> Beside<'a> {
    pub(super) fn new(count: usize, from: f64, progress: Progress<'a>) -> Self {
        Self { done: Mutex::new(vec![0.0; count]), from, progress }
    }

    /// Tells how much is done of one of them.
    pub(super) fn tell(&self, job: usize, share: f64) -> ControlFlow<()> {
        let all = self.done.lock().map_or(0.0, |mut all| {
            if let Some(one) = all.get_mut(job) {
                *one = share;
            }
            all.iter().sum::<f64>() / all.len() as f64
        });
        (self.progress)(self.from + (1.0 - self.from) * all)
    }
}

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
    /// strategies; a case without air for all the days is left out with a flag. Beside them the season spoken of with
    /// nothing learned, where something is.
    pub(super) fn others(
        &self,
        main: &SeasonRun,
        progress: Progress,
        notes: &mut Vec<Problem>,
    ) -> Result<(Vec<SeasonRun>, Option<SeasonRun>), Failure> {
        let of = self.understood;
        // what was solved on one case is scored on the others, not solved again
        let again = main.run.again(&of.choosing);
        let mut jobs: Vec<Job> = Vec::new();
        let mut put = |plan: &Arc<Plan>, case: &Case, choosing: Choosing| match self.skies(plan, case) {
            Ok(skies) => jobs.push((plan.clone(), skies, choosing)),
            Err(problem) => notes.push(left_out(problem)),
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
        let plain = main.skies.site.without_learned();
        let is_plain = plain.is_some();
        jobs.extend(plain.map(|site| {
            let skies = Skies { site: Arc::new(site), ..(*main.skies).clone() };
            (main.plan.clone(), Arc::new(skies), again.clone())
        }));
        let beside = Beside::new(jobs.len(), self.main_share(), progress);
        let mut runs: Vec<SeasonRun> = jobs
            .par_iter()
            .enumerate()
            .map(|(i, job)| self.run(job, &|share| beside.tell(i, share)))
            .collect::<Result<_, _>>()?;
        let without = if is_plain { runs.pop() } else { None };
        Ok((runs, without))
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
        let setup = self.setup(plan, skies, choosing.clone());
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
            order: if is_chosen { self.understood.order.clone() } else { Vec::new() },
        })
    }

    /// What a season is made from.
    pub(super) fn setup<'a>(&'a self, plan: &'a Plan, skies: &'a Skies, choosing: Choosing) -> Setup<'a> {
        let of = self.understood;
        Setup {
            start: &self.context.profile,
            begins: of.begins,
            decides: of.decides,
            now: self.now,
            plan,
            skies,
            choosing,
            decide_days: of.decide_days,
            order: &of.order,
        }
    }

    /// The air of a case over the days of a plan.
    pub(super) fn skies(&self, plan: &Plan, case: &Case) -> Result<Arc<Skies>, Problem> {
        case.skies(self.context, self.understood.begins, plan)
    }

    pub(super) fn refused(&self, problem: Problem) -> Failure {
        Failure::Refused(vec![problem], self.context.system)
    }
}

/// A season that is left out, and why.
pub(super) fn left_out(problem: Problem) -> Problem {
    Problem::flag("season-left-out", problem.words, problem.cure)
}
