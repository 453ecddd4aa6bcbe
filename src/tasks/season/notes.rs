//! What a season assumes, and what it does not look at.

use crate::problem::Problem;
use crate::tasks::Context;
use crate::units::say;

use super::asked::{Case, Understood};

/// Notes on the plans, the cases and the model.
pub(super) fn notes(context: &Context, of: &Understood) -> Vec<Problem> {
    let mut out: Vec<Problem> = of.plan.notes.clone();
    out.extend(of.refused.iter().map(left_out));
    out.extend(of.over.iter().map(|plan| {
        let words = format!("the plan {} tells days that are over, and is not among the others", plan.file);
        Problem::note("plan-past", words)
    }));
    out.extend(context.rules_off());
    out.push(Problem::note("cases", cases(&of.cases)));
    if !context.site().blocks.is_empty() {
        let words = "the blocks of the day are not looked at: every day releases evenly what the plan asks";
        out.push(Problem::note("season-blocks", words));
    }
    let words = "flow changes that the plan itself asks for are not held against their limits, and no perturbed cases \
                 stand behind a season: its figures are those of one pool under one weather";
    out.push(Problem::note("season-not-checked", words));
    out
}

/// A plan beside the one spoken of that is refused, by its first problem.
fn left_out(problem: &Problem) -> Problem {
    let file = problem.place.file.as_deref().unwrap_or_default();
    let line = problem.place.line.map_or_else(String::new, |line| format!(", line {line}"));
    let words = format!("the plan {file} is left out{line}: {}", problem.words);
    Problem::flag("plan-left-out", words, problem.cure.clone())
}

/// The cases by their shifts.
fn cases(cases: &[Case]) -> String {
    let shifts = |case: &Case| match case {
        Case::Year(skies) => skies.case.name.clone(),
        Case::Shifted(case) => {
            let mut parts = Vec::new();
            if case.air_c.abs() > 0.0 {
                parts.push(format!("air {}", say::dc(case.air_c, 1).signed()));
            }
            if (case.wind - 1.0).abs() > 0.0 {
                parts.push(format!("wind {:.0} %", 100.0 * case.wind));
            }
            if (case.inflow - 1.0).abs() > 0.0 {
                parts.push(format!("inflow {:.0} %", 100.0 * case.inflow));
            }
            if case.inflow_c.abs() > 0.0 {
                parts.push(format!("its water {}", say::dc(case.inflow_c, 1).signed()));
            }
            let shifts = if parts.is_empty() { "as given".to_owned() } else { parts.join(", ") };
            format!("{} ({shifts})", case.name)
        }
    };
    cases.iter().map(shifts).collect::<Vec<_>>().join("; ")
}
