//! A plan read from its files.

use std::path::{Path, PathBuf};

use sha2::{Digest, Sha256};

use super::activities::ActivitiesTable;
use super::faults::Diagnostics;
use super::header::ExtraColumn;
use super::notes::Note;
use super::place::Place;
use super::plan_file::{PlanFile, read_plan_file};
use super::points::PointsTable;
use super::scale::warn_of_scale;
use crate::model::{Aim, Constraint, Labels, Problem};

/// Which plan is asked for. What is given here comes before what a plan file says.
#[derive(Debug, Clone, Default)]
pub struct PlanRequest {
    /// A plan file (its name ends in `.toml`) or an activities table.
    pub path: PathBuf,
    /// The points table.
    pub points: Option<PathBuf>,
    /// All spend together at most this, units of money.
    pub budget: Option<f64>,
    /// All spend together at least this.
    pub require: Option<f64>,
    /// What is done with the total.
    pub aim: Option<Aim>,
}

/// A file that was read.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Source {
    /// The file, as it was named.
    pub path: PathBuf,
    /// SHA-256 of its bytes, in hexadecimal.
    pub sha256: String,
}

/// A plan that was read without fault.
#[derive(Debug, Clone)]
pub struct Plan {
    /// The mathematics. Without a budget or a requirement it has no constraint.
    pub problem: Problem,
    /// The words and units.
    pub labels: Labels,
    /// What was read leniently, and what looks odd.
    pub notes: Vec<Note>,
    /// The files, in the order in which they were read.
    pub sources: Vec<Source>,
    /// Tags and resources beside the known columns.
    pub columns: Vec<ExtraColumn>,
}

/// Reads a plan.
///
/// # Errors
/// Every fault of its files at once.
pub fn read_plan(request: &PlanRequest) -> Result<Plan, Diagnostics> {
    let mut sources = Vec::new();
    let is_plan_file = request
        .path
        .extension()
        .is_some_and(|ending| ending.eq_ignore_ascii_case("toml"));
    let mut plan = if is_plan_file {
        let bytes = read_bytes(&request.path)?;
        sources.push(Source {
            path: request.path.clone(),
            sha256: digest(&bytes),
        });
        read_plan_file(&request.path, &shown(&request.path), &bytes)?
    } else {
        PlanFile {
            activities: request.path.clone(),
            ..PlanFile::default()
        }
    };
    // A limit on the command line replaces whichever the plan file has.
    if request.budget.is_some() || request.require.is_some() {
        (plan.budget, plan.require, plan.limit_place) = (request.budget, request.require, None);
    }
    plan.aim = request.aim.or(plan.aim);
    plan.points = request.points.clone().or(plan.points);
    let aim = plan.aim.unwrap_or(Aim::Maximise);
    let constraint = limit_of(&plan, aim)?;

    let points_bytes = plan.points.as_deref().map(read_bytes).transpose()?;
    let points = match (&plan.points, &points_bytes) {
        (Some(path), Some(bytes)) => Some(PointsTable::read(&shown(path), bytes)?),
        _ => None,
    };
    let bytes = read_bytes(&plan.activities)?;
    let (sha256, read) = rayon::join(
        || digest(&bytes),
        || ActivitiesTable::read(&shown(&plan.activities), &bytes, points.as_ref()),
    );
    let (mut table, mut faults) = read?;
    sources.push(Source {
        path: plan.activities.clone(),
        sha256,
    });
    if let (Some(path), Some(bytes)) = (&plan.points, &points_bytes) {
        sources.push(Source {
            path: path.clone(),
            sha256: digest(bytes),
        });
    }

    let mut notes = plan.notes;
    notes.append(&mut table.table.notes);
    if let Some(mut points) = points {
        notes.append(&mut points.table.notes);
        refuse_unknown_names(&points, &table, &mut faults);
    }
    if let Some(constraint) = &constraint {
        notes.extend(warn_of_scale(
            &table.activities,
            constraint.sense,
            constraint.limit,
        ));
    }
    let constraints = constraint.into_iter().collect();
    let Some((problem, columns)) = table.into_problem(aim, constraints, &mut faults) else {
        return Err(faults);
    };
    if !faults.is_empty() {
        return Err(faults);
    }
    Ok(Plan {
        problem,
        labels: plan.labels,
        notes,
        sources,
        columns,
    })
}

/// The plan's one constraint.
fn limit_of(plan: &PlanFile, aim: Aim) -> Result<Option<Constraint>, Diagnostics> {
    let place = || {
        plan.limit_place
            .clone()
            .unwrap_or_else(|| Place::file("the command line"))
    };
    let refuse =
        |what: &str, mend: &str| Err(Diagnostics::of("a limit at fault", place(), what, mend));
    if plan.budget.is_some() && plan.require.is_some() {
        return refuse(
            "a plan has a budget or a requirement, not both",
            "leave one of them out",
        );
    }
    match (plan.budget, plan.require) {
        (Some(limit), _) | (_, Some(limit)) if !(0.0 <= limit && limit.is_finite()) => refuse(
            &format!("the limit must be at least 0, not {limit}"),
            "write an amount of money",
        ),
        (_, Some(_)) if aim == Aim::Maximise => refuse(
            "a requirement asks for a least cost, and this plan maximises a return",
            "set the aim to minimise, or give a budget instead",
        ),
        (Some(limit), _) => Ok(Some(Constraint::budget(limit))),
        (_, Some(limit)) => Ok(Some(Constraint::requirement(limit))),
        (None, None) => Ok(None),
    }
}

/// Rows of points for an activity that the plan does not have would be ignored.
fn refuse_unknown_names(points: &PointsTable, table: &ActivitiesTable, faults: &mut Diagnostics) {
    // Where rows of the activities table were refused, their names are not known.
    if !faults.is_empty() {
        return;
    }
    let mut unknown: Vec<_> = points
        .curves
        .iter()
        .filter(|(name, _)| {
            !table
                .activities
                .iter()
                .any(|activity| activity.name == name.as_str())
        })
        .collect();
    unknown.sort_by_key(|(_, knots)| knots.starts.first().copied());
    for (name, knots) in unknown {
        let start = knots.starts.first().copied().unwrap_or(0);
        let column = points.table.column(super::header::ACTIVITY).unwrap_or(0);
        faults.add(
            "points of an unknown activity",
            || {
                points
                    .table
                    .place(start, column, Some(super::header::ACTIVITY))
            },
            format!("{} has no activity named \"{name}\"", table.table.file),
            "correct the name to the letter, or delete the rows",
        );
    }
}

/// The whole file.
fn read_bytes(path: &Path) -> Result<Vec<u8>, Diagnostics> {
    let refuse = |what: String, mend: &str| {
        Err(Diagnostics::of(
            "a file that cannot be read",
            Place::file(&shown(path)),
            what,
            mend,
        ))
    };
    if path.is_dir() {
        return refuse(
            format!("{} is a folder", shown(path)),
            "name a file: a plan.toml or an activities table",
        );
    }
    std::fs::read(path).or_else(|fault| {
        let what = match fault.kind() {
            std::io::ErrorKind::NotFound => format!("there is no file {}", shown(path)),
            std::io::ErrorKind::PermissionDenied => format!("{} may not be read", shown(path)),
            _ => format!("{} cannot be read: {fault}", shown(path)),
        };
        refuse(what, "check the name and the folder")
    })
}

fn shown(path: &Path) -> String {
    path.display().to_string()
}

fn digest(bytes: &[u8]) -> String {
    Sha256::digest(bytes)
        .iter()
        .map(|byte| format!("{byte:02x}"))
        .collect()
}
