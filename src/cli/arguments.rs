//! The command line.

use std::path::PathBuf;

use clap::{Args, Parser, Subcommand, ValueEnum};

use crate::input::{PlanRequest, parse_amount};
use crate::model::Aim;
use crate::numeric::figures;

/// What stands before the options.
const EXAMPLE: &str = "Example:
  isomargin allocate activities.csv --budget 24000000
      splits 24,000,000 across the activities of the table, proves the split
      and prints a report; add --out DIR for tables and pictures";

/// What stands after them.
const EXIT_STATUS: &str = "Exit status:
  0  done and proven
  1  anything else, such as a disk error
  2  wrong usage
  3  bad data: every fault is listed with its file, line and column
  4  no plan can meet the limit
  5  solved, but the certificate does not hold";

/// Splits one budget across activities so that the last unit earns the same everywhere, and
/// proves it.
#[derive(Debug, Parser)]
#[command(name = "isomargin", version, before_help = EXAMPLE, after_help = EXIT_STATUS)]
pub(super) struct Arguments {
    #[command(subcommand)]
    pub command: Command,
}

#[derive(Debug, Subcommand)]
pub(super) enum Command {
    /// Split the budget, prove the split and report it
    #[command(before_help = ALLOCATE_EXAMPLES, after_help = EXIT_STATUS)]
    Allocate(AllocateArguments),
    /// Read a plan and say what was understood, without solving it
    #[command(before_help = CHECK_EXAMPLE)]
    Check(CheckArguments),
}

const ALLOCATE_EXAMPLES: &str = "Examples:
  isomargin allocate plan.toml
  isomargin allocate activities.csv --budget 24,000,000 --round 1000 --out report
  isomargin allocate plants.csv --aim minimise --require 850 --json";

const CHECK_EXAMPLE: &str = "Example:
  isomargin check activities.csv --budget 24000000";

/// Where the plan stands, and what is said beside its files.
#[derive(Debug, Args)]
pub(super) struct PlanArguments {
    /// A plan (plan.toml) or a table of activities (CSV)
    #[arg(value_name = "PLAN")]
    plan: PathBuf,

    /// The most that may be spent in all, such as 24000000 or 24,000,000
    #[arg(long, value_name = "AMOUNT", value_parser = amount, conflicts_with = "require")]
    budget: Option<GivenAmount>,

    /// The least that must be provided in all, with --aim minimise
    #[arg(long, value_name = "AMOUNT", value_parser = amount)]
    require: Option<GivenAmount>,

    /// Maximise the return of a budget, or minimise the cost of a requirement
    #[arg(long, value_name = "AIM")]
    aim: Option<AimName>,

    /// The table of tabulated curves
    #[arg(long, value_name = "FILE")]
    points: Option<PathBuf>,
}

impl PlanArguments {
    /// What `input` reads.
    pub(super) fn request(&self) -> PlanRequest {
        PlanRequest {
            path: self.plan.clone(),
            points: self.points.clone(),
            budget: self.budget.as_ref().map(|amount| amount.value),
            require: self.require.as_ref().map(|amount| amount.value),
            aim: self.aim.map(|aim| match aim {
                AimName::Maximise => Aim::Maximise,
                AimName::Minimise => Aim::Minimise,
            }),
        }
    }

    /// How the amounts were read, where they were not plain digits.
    pub(super) fn notes(&self) -> impl Iterator<Item = String> + '_ {
        let amounts = [&self.budget, &self.require].into_iter().flatten();
        amounts.filter_map(|amount| amount.note.clone())
    }
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum AimName {
    Maximise,
    Minimise,
}

#[derive(Debug, Args)]
pub(super) struct AllocateArguments {
    #[command(flatten)]
    pub plan: PlanArguments,

    /// Print the result as one JSON document instead of the report
    #[arg(long)]
    pub json: bool,

    /// Write the report, result.json, tables as CSV and pictures as PNG and SVG to a folder
    #[arg(long, value_name = "DIR")]
    pub out: Option<PathBuf>,

    /// Write the table of spends alone, and print the headline: the quick way for large plans
    #[arg(long, value_name = "FILE")]
    pub allocation: Option<PathBuf>,

    /// Round every spend to a multiple of STEP; they still add up to the budget
    #[arg(long, value_name = "STEP", value_parser = step)]
    pub round: Option<GivenAmount>,

    /// Check the total by linear programming whatever the size of the plan
    #[arg(long)]
    pub cross_check: bool,

    /// Show the numbers of the certificate in the report
    #[arg(long)]
    pub proof: bool,
}

#[derive(Debug, Args)]
pub(super) struct CheckArguments {
    #[command(flatten)]
    pub plan: PlanArguments,
}

/// An amount on the command line.
#[derive(Debug, Clone)]
pub(super) struct GivenAmount {
    pub value: f64,
    /// How it was read, where it was not plain digits.
    pub note: Option<String>,
}

fn amount(text: &str) -> Result<GivenAmount, String> {
    match parse_amount(text) {
        Ok(amount) => Ok(GivenAmount {
            value: amount.value,
            note: amount.written.map(|how| {
                let value = figures::amount(amount.value);
                format!("the command line: read {how} in \"{text}\", which is {value}")
            }),
        }),
        Err(fault) => Err(format!("{fault}; {}", fault.mend())),
    }
}

fn step(text: &str) -> Result<GivenAmount, String> {
    let step = amount(text)?;
    if 0.0 < step.value {
        Ok(step)
    } else {
        Err("a step must be above 0".to_owned())
    }
}
