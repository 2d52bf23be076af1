//! A plan read from its files.

use std::fs::File;
use std::io::{self, Read};
use std::path::{Path, PathBuf};

use rustc_hash::FxHashSet;
use sha2::{Digest, Sha256};

use super::activities::ActivitiesTable;
use super::faults::{COMMAND_LINE, Diagnostics, Spot};
use super::header::{ACTIVITY, ExtraColumn, nearest};
use super::notes::Note;
use super::place::Place;
use super::plan_file::{PlanFile, TableFile, read_plan_file};
use super::points::{PointsState, PointsTable};
use super::rows::{NAMELESS_ROW, RAGGED_ROW};
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
    let mut faults = Diagnostics::default();
    let mut plan = plan_of(request, &mut sources, &mut faults)?;
    // A limit on the command line replaces whichever the plan file has.
    if request.budget.is_some() || request.require.is_some() {
        (plan.budget, plan.require, plan.limit_place) = (request.budget, request.require, None);
    }
    if let Some(path) = &request.points {
        plan.points = Some(TableFile::named(path));
    }
    let aim = request.aim.or(plan.aim).unwrap_or(Aim::Maximise);
    let constraint = limit_of(&plan, aim, &mut faults);

    let mut read_table = |table: &Option<TableFile>| {
        let table = table.as_ref()?;
        match read_bytes(&table.path, table.place.clone()) {
            Ok(bytes) => Some((shown(&table.path), bytes)),
            Err(fault) => {
                faults.append(fault);
                None
            }
        }
    };
    let points_bytes = read_table(&plan.points);
    let bytes = read_table(&plan.activities);
    let points = points_bytes
        .as_ref()
        .map(|(file, bytes)| PointsTable::read(file, bytes));
    let points = match points {
        Some(Ok((points, found))) => {
            faults.append(found);
            Some(points)
        }
        Some(Err(found)) => {
            faults.append(found);
            None
        }
        None => None,
    };
    let Some((file, bytes)) = bytes else {
        return Err(faults);
    };
    // A points table that cannot be read at all has been reported, and is not missing.
    let points_state = match (&points, &plan.points) {
        (Some(points), _) => PointsState::Read(points),
        (None, Some(_)) => PointsState::Unreadable,
        (None, None) => PointsState::None,
    };
    let (sha256, read) = rayon::join(
        || digest(&bytes),
        || ActivitiesTable::read(&file, &bytes, points_state),
    );
    let (mut table, found) = match read {
        Ok(read) => read,
        Err(found) => {
            faults.append(found);
            return Err(faults);
        }
    };
    let names_are_known = !found.has(RAGGED_ROW) && !found.has(NAMELESS_ROW);
    faults.append(found);
    sources.extend(plan.activities.map(|table| Source {
        path: table.path,
        sha256,
    }));
    if let (Some(table), Some((_, bytes))) = (plan.points, &points_bytes) {
        sources.push(Source {
            path: table.path,
            sha256: digest(bytes),
        });
    }

    let (mut notes, mut currencies) = (plan.notes, plan.currencies);
    notes.append(&mut table.table.notes);
    currencies.append(&table.currencies);
    if let Some(mut points) = points {
        currencies.append(&points.currencies);
        notes.append(&mut points.table.notes);
        // The name that a ragged row was meant to have is not known.
        if names_are_known {
            refuse_unknown_names(&points, &table, &mut faults);
        }
    }
    notes.extend(currencies.warning());
    if let Some(constraint) = &constraint {
        notes.extend(warn_of_scale(
            &table.activities,
            constraint.sense,
            constraint.limit,
        ));
    }
    let constraints = constraint.into_iter().collect();
    match table.into_problem(aim, constraints, &mut faults) {
        Some((problem, columns)) if faults.is_empty() => Ok(Plan {
            problem,
            labels: plan.labels,
            notes,
            sources,
            columns,
        }),
        _ => Err(faults),
    }
}

/// What the plan file says, or a plan of one table; the faults of its keys come along.
fn plan_of(
    request: &PlanRequest,
    sources: &mut Vec<Source>,
    faults: &mut Diagnostics,
) -> Result<PlanFile, Diagnostics> {
    let is_plan_file = request
        .path
        .extension()
        .is_some_and(|ending| ending.eq_ignore_ascii_case("toml"));
    if !is_plan_file {
        return Ok(PlanFile {
            activities: Some(TableFile::named(&request.path)),
            ..PlanFile::default()
        });
    }
    let bytes = read_bytes(&request.path, None)?;
    sources.push(Source {
        path: request.path.clone(),
        sha256: digest(&bytes),
    });
    let (plan, found) = read_plan_file(&request.path, &shown(&request.path), &bytes)?;
    faults.append(found);
    Ok(plan)
}

/// The plan's one constraint.
fn limit_of(plan: &PlanFile, aim: Aim, faults: &mut Diagnostics) -> Option<Constraint> {
    let (limit, what, mend) = match (plan.budget, plan.require) {
        (Some(_), Some(_)) => (
            None,
            "a plan has a budget or a requirement, not both".to_owned(),
            "leave one of them out",
        ),
        (Some(limit), _) | (_, Some(limit)) if !(0.0 <= limit && limit.is_finite()) => (
            None,
            format!("the limit must be at least 0, not {limit}"),
            "write an amount of money",
        ),
        (_, Some(_)) if aim == Aim::Maximise => (
            None,
            "a requirement asks for a least cost, and this plan maximises a return".to_owned(),
            "set the aim to minimise, or give a budget instead",
        ),
        (Some(limit), _) => (Some(Constraint::budget(limit)), String::new(), ""),
        (_, Some(limit)) => (Some(Constraint::requirement(limit)), String::new(), ""),
        (None, None) => return None,
    };
    if limit.is_none() {
        let place = || {
            let given = plan.limit_place.clone();
            given.unwrap_or_else(|| Place::file(COMMAND_LINE))
        };
        faults.add("a limit at fault", place, what, mend);
    }
    limit
}

/// Rows of points for an activity that the plan does not have would be ignored.
fn refuse_unknown_names(points: &PointsTable, table: &ActivitiesTable, faults: &mut Diagnostics) {
    const UNKNOWN: &str = "points of an unknown activity";
    let known: FxHashSet<&str> = table
        .activities
        .iter()
        .map(|activity| activity.name.as_str())
        .chain(table.refused.iter().map(|(name, _)| name.as_str()))
        .collect();
    let mut unknown: Vec<_> = points
        .curves
        .iter()
        .filter(|(name, _)| !known.contains(name.as_str()))
        .collect();
    unknown.sort_by_key(|(_, knots)| knots.starts.first().copied());
    for (name, knots) in unknown {
        let spot = Spot {
            start: knots.starts.first().copied().unwrap_or(0),
            column: points.table.column(ACTIVITY),
        };
        if !faults.keeps(UNKNOWN) {
            faults.count_one(UNKNOWN);
            continue;
        }
        let near = nearest(name, known.iter().copied());
        let mend = match near {
            Some(near) => format!("did you mean \"{near}\"? Names must agree to the letter"),
            None => "correct the name to the letter, or delete its rows".to_owned(),
        };
        faults.add(
            UNKNOWN,
            || points.table.place_of(spot),
            format!("{} has no activity named \"{name}\"", table.table.file),
            mend,
        );
    }
}

/// Bytes beyond which a file is no plan of a person's making; whatever goes on without end, such as
/// a device, is left there.
const LARGEST: u64 = 1 << 30;

/// The whole file; `named_at` is where a plan file names it.
fn read_bytes(path: &Path, named_at: Option<Place>) -> Result<Vec<u8>, Diagnostics> {
    let refuse = |what: String, mend: &str| {
        let place = named_at.unwrap_or_else(|| Place::file(&shown(path)));
        Diagnostics::of("a file that cannot be read", place, what, mend)
    };
    if path.is_dir() {
        return Err(refuse(
            format!("{} is a folder", shown(path)),
            "name a file: a plan.toml or an activities table",
        ));
    }
    let read = || {
        let file = File::open(path)?;
        let size = file.metadata()?.len().min(LARGEST);
        let mut bytes = Vec::with_capacity(usize::try_from(size).unwrap_or(0) + 1);
        file.take(LARGEST + 1).read_to_end(&mut bytes)?;
        Ok(bytes)
    };
    match read() {
        Ok(bytes) if bytes.len() as u64 > LARGEST => Err(refuse(
            format!("{} is larger than {} MB", shown(path), LARGEST >> 20),
            "name the right file, or split the plan",
        )),
        Ok(bytes) => Ok(bytes),
        Err(fault) => {
            let fault: io::Error = fault;
            let what = match fault.kind() {
                io::ErrorKind::NotFound => format!("there is no file {}", shown(path)),
                io::ErrorKind::PermissionDenied => format!("{} may not be read", shown(path)),
                _ => format!("{} cannot be read: {fault}", shown(path)),
            };
            Err(refuse(what, "check the name and the folder"))
        }
    }
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
