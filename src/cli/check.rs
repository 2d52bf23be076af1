//! `check`: read a plan and say what was understood.

use std::io::Write;

use super::arguments::CheckArguments;
use super::status::{Failure, Status};
use super::terminal::Terminal;
use super::{Noticed, provenance_of, read};
use crate::input::ExtraKind;
use crate::report::{OtherColumn, Reading, Understood, render_understood};

/// Reads a plan and reports what it says, without solving it.
pub(super) fn check(
    arguments: &CheckArguments,
    command: &str,
    terminal: &Terminal,
) -> Result<Status, Failure> {
    let plan = read(&arguments.plan, terminal)?;
    let noticed = Noticed::of(&arguments.plan, &plan);
    let notes = noticed.in_report();
    let other_columns = plan.columns.iter().map(|column| OtherColumn {
        name: column.name.clone(),
        is_resource: column.kind() == ExtraKind::Resource,
    });
    let other_columns: Vec<OtherColumn> = other_columns.collect();
    let provenance = provenance_of(&plan, command);
    let understood = Understood::build(&Reading {
        labels: &plan.labels,
        problem: &plan.problem,
        other_columns: &other_columns,
        notes: &notes,
        provenance: &provenance,
    });
    if !terminal.is_terminal() {
        noticed.narrate(terminal);
    }
    let options = terminal.text_options(false);
    terminal.print(|out| out.write_all(render_understood(&understood, &options).as_bytes()))?;
    Ok(match understood.no_plan {
        Some(_) => Status::NoPlan,
        None => Status::Done,
    })
}
