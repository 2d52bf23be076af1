//! What was read, before anything is solved.

use super::build::{Provenance, title_of};
use super::no_plan::NoPlan;
use super::price::Fact;
use super::wording::{Units, activities, limit_noun, names};
use crate::curves::{Curve, Family, ParameterSet};
use crate::model::{Activity, Aim, Labels, ObservedRange, Problem, Sense};
use crate::numeric::{block_sums, figures};

/// Activities up to which every one is listed.
const LISTED: usize = 60;

/// A column of the activities table beyond those of the format.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct OtherColumn {
    /// Its name.
    pub name: String,
    /// Whether it holds a number for every activity, so that a constraint can use it.
    pub is_resource: bool,
}

/// What a plan's files were understood to say.
#[derive(Debug, Clone, Copy)]
pub struct Reading<'a> {
    /// Words and units.
    pub labels: &'a Labels,
    /// The plan as mathematics.
    pub problem: &'a Problem,
    /// Further columns.
    pub other_columns: &'a [OtherColumn],
    /// What was noticed on the way, one sentence each.
    pub notes: &'a [String],
    /// Where it all comes from.
    pub provenance: &'a Provenance,
}

/// One activity as it was read.
#[derive(Debug, Clone, PartialEq)]
pub struct ReadActivity<'a> {
    /// The activity's name.
    pub activity: &'a str,
    /// The family of its curve.
    pub family: Family,
    /// The curve's parameters; none for a tabulated curve.
    pub parameters: ParameterSet,
    /// Knots of a tabulated curve.
    pub knots: Option<usize>,
    /// Least spend.
    pub floor: f64,
    /// Greatest spend; +∞ for none.
    pub cap: f64,
    /// Today's spend.
    pub current: Option<f64>,
    /// Range that the curve was fitted on.
    pub observed: Option<ObservedRange>,
}

/// What a plan's files say, as plain data.
#[derive(Debug, Clone)]
pub struct Understood<'a> {
    /// Title and period of the plan.
    pub title: Option<String>,
    /// Units of its numbers.
    pub units: Units<'a>,
    /// How many activities, for which aim, within which limit, in one sentence.
    pub headline: String,
    /// How many activities have a curve of each family, in the order of the handbook.
    pub families: Vec<(Family, usize)>,
    /// Floors, caps, today's spends, weights and what else was read, in words.
    pub facts: Vec<Fact>,
    /// Every activity, for a plan that is not too long to list.
    pub listed: Vec<ReadActivity<'a>>,
    /// Why no plan can meet the limit, where the bounds alone show it.
    pub no_plan: Option<NoPlan>,
    /// What was noticed on the way.
    pub notes: &'a [String],
    /// Where it all comes from.
    pub provenance: &'a Provenance,
}

impl<'a> Understood<'a> {
    /// Counts and sums what was read.
    pub fn build(reading: &Reading<'a>) -> Self {
        let problem = reading.problem;
        let units = Units::of(reading.labels);
        let count = |family| {
            let of_family = |activity: &&Activity| activity.curve.family() == family;
            problem.activities().iter().filter(of_family).count()
        };
        let families = Family::ALL.map(|family| (family, count(family)));
        let listed = match problem.activities().len() {
            0..=LISTED => problem.activities().iter().map(read_activity).collect(),
            _ => Vec::new(),
        };
        Self {
            title: title_of(reading.labels),
            units,
            headline: headline(problem, units),
            families: families
                .into_iter()
                .filter(|(_, count)| *count > 0)
                .collect(),
            facts: facts(reading, units),
            listed,
            no_plan: no_plan(reading),
            notes: reading.notes,
            provenance: reading.provenance,
        }
    }
}

fn read_activity(activity: &Activity) -> ReadActivity<'_> {
    let knots = match &activity.curve {
        Curve::Points(points) => Some(points.knots().len()),
        _ => None,
    };
    ReadActivity {
        activity: &activity.name,
        family: activity.curve.family(),
        parameters: activity.curve.parameters(),
        knots,
        floor: activity.floor,
        cap: activity.cap,
        current: activity.current,
        observed: activity.observed,
    }
}

fn headline(problem: &Problem, units: Units) -> String {
    let who = activities(problem.activities().len());
    let what = match (problem.aim(), units.total_name()) {
        (Aim::Maximise, Some(unit)) => format!("the most {unit}"),
        (Aim::Maximise, None) => "the greatest return".to_owned(),
        (Aim::Minimise, Some(unit)) => format!("the least cost in {unit}"),
        (Aim::Minimise, None) => "the least cost".to_owned(),
    };
    let limits: Vec<String> = problem
        .constraints()
        .iter()
        .map(|constraint| {
            let sense = match constraint.sense {
                Sense::AtMost => "at most",
                Sense::Equal => "exactly",
                Sense::AtLeast => "at least",
            };
            let noun = limit_noun(constraint.sense);
            let name = if constraint.name == noun {
                String::new()
            } else {
                format!(" ({})", constraint.name)
            };
            format!(
                "a {noun}{name} of {sense} {}",
                units.money(constraint.limit)
            )
        })
        .collect();
    if limits.is_empty() {
        return format!("{who}, for {what}; no limit is given yet.");
    }
    format!(
        "{who}, for {what}, within {}.",
        names(&limits, limits.len())
    )
}

fn facts(reading: &Reading, units: Units) -> Vec<Fact> {
    let given = reading.problem.activities();
    let count = given.len();
    let [
        floors,
        floored,
        caps,
        uncapped,
        today,
        known,
        weighted,
        observed,
    ] = block_sums(count, |i| {
        let activity = &given[i];
        let is = |holds: bool| f64::from(u8::from(holds));
        let capped = activity.cap.is_finite();
        [
            activity.floor,
            is(activity.floor > 0.0),
            if capped { activity.cap } else { 0.0 },
            is(!capped),
            activity.current.unwrap_or(0.0),
            is(activity.current.is_some()),
            is(activity.weight != 1.0),
            is(activity.observed.is_some()),
        ]
    });
    let of = |part: f64| match part as usize {
        part if part == count => format!("all {}", activities(count)),
        part => activities(part),
    };
    let mut facts = Vec::new();
    facts.push(Fact::new(
        "Floors",
        match floored {
            0.0 => "none".to_owned(),
            _ => format!("{} together, {}", units.money(floors), of(floored)),
        },
    ));
    let capped = count as f64 - uncapped;
    facts.push(Fact::new(
        "Caps",
        match capped {
            0.0 => "none".to_owned(),
            _ if uncapped > 0.0 => {
                format!(
                    "{} together, {}; {} without",
                    units.money(caps),
                    of(capped),
                    figures::fixed(uncapped, 0)
                )
            }
            _ => format!("{} together, {}", units.money(caps), of(capped)),
        },
    ));
    facts.push(Fact::new(
        "Today",
        match known {
            0.0 => "not known".to_owned(),
            _ => format!("{} together, {}", units.money(today), of(known)),
        },
    ));
    if weighted > 0.0 {
        facts.push(Fact::new(
            "Weights",
            format!("other than 1 for {}", of(weighted)),
        ));
    }
    facts.push(Fact::new(
        "Observed range",
        match observed {
            0.0 => "not known, so nothing can be flagged as extrapolated".to_owned(),
            _ => of(observed),
        },
    ));
    for column in reading.other_columns {
        let kind = if column.is_resource {
            "numbers"
        } else {
            "a tag"
        };
        facts.push(Fact::new(
            "Other column",
            format!("{}: {kind}", column.name),
        ));
    }
    let unit = |name: Option<&str>| name.unwrap_or("not named").to_owned();
    facts.push(Fact::new(
        "Units",
        format!(
            "spend: {}; total: {}",
            unit(units.money_name()),
            unit(units.total_name())
        ),
    ));
    facts
}

/// What the bounds alone say of the limits, without a solver.
fn no_plan(reading: &Reading) -> Option<NoPlan> {
    let problem = reading.problem;
    let activities = problem.activities();
    (0..problem.constraints().len()).find_map(|k| {
        let constraint = &problem.constraints()[k];
        let [least, greatest] = block_sums(activities.len(), |i| {
            let use_per_unit = constraint.use_per_unit(i);
            let used = |spend: f64| {
                if spend == 0.0 {
                    0.0
                } else {
                    use_per_unit * spend
                }
            };
            let ends = [used(activities[i].floor), used(activities[i].cap)];
            [ends[0].min(ends[1]), ends[0].max(ends[1])]
        });
        if constraint.is_filled_by(least) || constraint.is_filled_by(greatest) {
            return None;
        }
        let short = constraint.limit < least && constraint.sense != Sense::AtLeast
            || constraint.limit > greatest && constraint.sense != Sense::AtMost;
        short.then(|| NoPlan::new(reading.labels, problem, k, least, greatest))
    })
}
