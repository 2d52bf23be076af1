//! `allocate`: read, solve, certify, report.

use std::mem::ManuallyDrop;
use std::path::PathBuf;

use super::arguments::AllocateArguments;
use super::output::{refuse_inputs, write_whole};
use super::pack::write_pack;
use super::status::{Failure, Status};
use super::terminal::Terminal;
use super::{Noticed, provenance_of, read};
use crate::certificate::{CrossCheck, Verdict, certify};
use crate::charts::PlanView;
use crate::input::Plan;
use crate::model::{Problem, Solution};
use crate::report::{
    ActivityRows, Findings, NoPlan, Report, Rounding, Summary, render_allocation, render_json,
    render_no_plan_json, render_summary, render_text,
};
use crate::sensitivity::price_constraints;
use crate::solver::{RoundError, SolveError, demand_of, round_spends, solve_from};

/// Splits the budget of a plan and reports it.
pub(super) fn allocate(
    arguments: &AllocateArguments,
    command: &str,
    terminal: &Terminal,
) -> Result<Status, Failure> {
    // The process ends with the report, and gives a large plan's memory back faster as a whole.
    let plan = ManuallyDrop::new(read(&arguments.plan, terminal)?);
    let noticed = Noticed::of(&arguments.plan, &plan);
    let notes = noticed.in_report();
    let problem = &plan.problem;
    let inputs: Vec<PathBuf> = plan
        .sources
        .iter()
        .map(|source| source.path.clone())
        .collect();
    refuse_inputs(&arguments.allocation, &inputs)?;

    let solved = demand_of(problem)
        .and_then(|demand| solve_from(problem, &demand).map(|solution| (solution, demand)));
    let (solution, demand) = match solved {
        Ok(solved) => solved,
        Err(fault) => {
            noticed.narrate(terminal);
            return refuse(arguments, &plan, &fault, terminal);
        }
    };
    let cross_check = if arguments.cross_check {
        CrossCheck::Always
    } else {
        CrossCheck::WhenQuick
    };
    let certificate = certify(problem, &solution, cross_check);
    let prices = price_constraints(problem, &solution, &demand);
    let rounding = match &arguments.round {
        Some(step) => Some(rounded(problem, &solution, step.value)?),
        None => None,
    };
    let provenance = provenance_of(&plan, command);
    let findings = Findings {
        labels: &plan.labels,
        problem,
        solution: &solution,
        certificate: &certificate,
        prices: &prices,
        rounding: rounding.as_ref(),
        notes: &notes,
        provenance: &provenance,
    };

    let only_spends = arguments.allocation.is_some() && arguments.out.is_none() && !arguments.json;
    let report = (!only_spends).then(|| Report::build(&findings));
    let shows_notes = report.is_some() && !arguments.json && terminal.is_terminal();
    if !shows_notes {
        noticed.narrate(terminal);
    }
    if let Some(path) = &arguments.allocation {
        let spends = rounding
            .as_ref()
            .map_or(&solution.spends, |rounded| &rounded.spends);
        let rows = ActivityRows::new(problem, &solution, spends);
        write_whole(path, |mut out| render_allocation(&rows, &mut out))?;
        terminal.narrate(&format!("spends written to {}", path.display()));
    }
    if let (Some(folder), Some(report)) = (&arguments.out, &report) {
        let shown = rounding.as_ref().map(|rounded| Solution {
            spends: rounded.spends.clone(),
            shadow_prices: solution.shadow_prices.clone(),
        });
        let view = PlanView {
            labels: &plan.labels,
            problem,
            solution: shown.as_ref().unwrap_or(&solution),
        };
        write_pack(folder, report, &view, &inputs, terminal)?;
    }
    let options = terminal.text_options(arguments.proof);
    terminal.print(|out| {
        use std::io::Write;
        match &report {
            Some(report) if arguments.json => render_json(report, out),
            Some(report) => out.write_all(render_text(report, &options).as_bytes()),
            None => out.write_all(render_summary(&Summary::build(&findings), &options).as_bytes()),
        }
    })?;
    Ok(match certificate.verdict {
        Verdict::Proven => Status::Done,
        Verdict::NotProven => Status::NotProven,
    })
}

/// Rounds the spends, and says why not where that cannot be.
fn rounded(problem: &Problem, solution: &Solution, step: f64) -> Result<Rounding, Failure> {
    let rounded = round_spends(problem, &solution.spends, step)
        .map_err(|fault: RoundError| Failure::Usage(format!("--round: {fault}")))?;
    Ok(Rounding {
        step,
        exact_total: problem.total(&solution.spends),
        spends: rounded.spends,
        total: rounded.total,
        odd: rounded.odd,
        kept: rounded.kept,
    })
}

/// What is said where there is no plan.
fn refuse(
    arguments: &AllocateArguments,
    plan: &Plan,
    fault: &SolveError,
    terminal: &Terminal,
) -> Result<Status, Failure> {
    let SolveError::Infeasible {
        constraint,
        least_use,
        greatest_use,
        ..
    } = *fault
    else {
        let message = worded(fault, &plan.problem);
        return Err(match fault {
            SolveError::NoFiniteTotal { .. } => Failure::NoPlan(message),
            SolveError::NotOneConstraint { found: 0 } => Failure::Usage(
                "the plan has no limit; give --budget AMOUNT, or --aim minimise and --require AMOUNT"
                    .to_owned(),
            ),
            _ => Failure::Data(message),
        });
    };
    let problem = &plan.problem;
    let no_plan = NoPlan::new(&plan.labels, problem, constraint, least_use, greatest_use);
    if arguments.json {
        let version = env!("CARGO_PKG_VERSION");
        terminal.print(|out| render_no_plan_json(&no_plan, problem, version, out))?;
    }
    Err(Failure::NoPlan(format!(
        "{}\n{}",
        no_plan.headline, no_plan.mend
    )))
}

/// A fault of the solver with the activity's name.
fn worded(fault: &SolveError, problem: &Problem) -> String {
    let named = |i: usize| problem.activities()[i].name.as_str();
    match *fault {
        SolveError::Unbounded { activity } => format!(
            "error: {fault} as the spend on {} grows; give it a cap, or the plan a budget",
            named(activity)
        ),
        SolveError::NoFiniteTotal { activity } => {
            format!(
                "No plan: {fault}: {}; raise its cap or the budget",
                named(activity)
            )
        }
        SolveError::UseNotPositive { activity } => format!("error: {fault}: {}", named(activity)),
        _ => format!("error: {fault}"),
    }
}
