//! The linear programme over polylines, and its dual written out.
//!
//! Every segment is a variable between 0 and 1, the share of it that is taken, and every row is
//! divided by its own size, so that the numbers the LP solver sees are of the order of 1
//! whatever the units of the plan.

use good_lp::{
    Expression, ProblemVariables, Solution as _, SolverModel, Variable, constraint, microlp,
    variable,
};

use super::polyline::{Polyline, Segment};
use crate::model::{Problem, Sense};
use crate::numeric::CompensatedSum;

/// One share-of-a-segment variable.
struct Column {
    activity: usize,
    /// Units of spend that a share of 1 takes.
    width: f64,
    /// Whether the share ends at 1.
    ends: bool,
    /// Objective of a share of 1, in units of `Programme::unit`.
    gain: f64,
}

/// max Σ gain_v·v subject to Σ use_kv·v ≤ = ≥ left_k, 0 ≤ v ≤ 1.
pub(super) struct Programme<'a> {
    problem: &'a Problem,
    polylines: &'a [Polyline],
    columns: Vec<Column>,
    /// What the rows leave beyond the polylines' starts, and the size by which each is divided.
    left: Vec<f64>,
    row_size: Vec<f64>,
    /// The unit of the objective, in units of worth.
    unit: f64,
}

/// The solution of a programme.
pub(super) struct Optimum {
    /// Its objective, units of worth.
    pub worth: f64,
    /// Σ of what every activity contributes to it, signs aside; units of worth.
    pub scale: f64,
    /// The spend of every activity.
    pub spends: Vec<f64>,
}

/// Which side of the curves the polylines lie on.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Side {
    /// Chords: what the programme leaves out, it may leave out.
    Below,
    /// Tangents: what the programme adds, it may add.
    Above,
}

/// A segment is at most this many times as wide as what the rows could ask of its activity. A
/// wider one would put numbers into a row that differ by more than the LP solver's tolerance bears.
const WIDEST: f64 = 4.0;

/// A row that its starts exceed by no more than this, relative to the numbers that are summed, is
/// met by them: their rounding.
const START_ROUNDING: f64 = 1e-12;

impl<'a> Programme<'a> {
    pub(super) fn new(
        problem: &'a Problem,
        polylines: &'a [Polyline],
        side: Side,
    ) -> Result<Self, String> {
        let constraints = problem.constraints();
        let starts: Vec<f64> = polylines.iter().map(|line| line.start).collect();
        let left: Vec<f64> = constraints
            .iter()
            .enumerate()
            .map(|(k, constraint)| {
                let used = problem.used(k, &starts);
                let left = constraint.limit - used;
                let rounding = START_ROUNDING * constraint.limit.abs().max(used.abs());
                if -rounding <= left && left < 0.0 {
                    0.0
                } else {
                    left
                }
            })
            .collect();
        let row_size: Vec<f64> = constraints
            .iter()
            .zip(&left)
            .map(|(constraint, left)| {
                let widest = |rising: bool| {
                    let used = polylines.iter().enumerate().flat_map(|(i, line)| {
                        let per_unit = constraint.use_per_unit(i).abs();
                        let counted = move |segment: &&Segment| !rising || segment.slope > 0.0;
                        let segments = line.segments.iter().filter(counted);
                        segments.map(move |segment| per_unit * segment.width)
                    });
                    used.filter(|used| used.is_finite()).fold(0.0, f64::max)
                };
                // What would be spent even without the row is of its size too.
                let size = left.abs().max(widest(true));
                let size = if size > 0.0 { size } else { widest(false) };
                if size > 0.0 { size } else { 1.0 }
            })
            .collect();
        let mut columns = Vec::new();
        for (activity, line) in polylines.iter().enumerate() {
            // What the rows could ask of the activity alone.
            let asked = constraints
                .iter()
                .zip(&row_size)
                .map(|(constraint, size)| size / constraint.use_per_unit(activity).abs())
                .filter(|asked| asked.is_finite())
                .reduce(f64::max);
            for segment in &line.segments {
                let (width, ends) = match asked {
                    Some(asked) if segment.width > WIDEST * asked => {
                        if side == Side::Above || segment.width.is_infinite() {
                            (asked, false)
                        } else {
                            (WIDEST * asked, true)
                        }
                    }
                    None if segment.width.is_infinite() => (1.0, false),
                    _ => (segment.width, true),
                };
                columns.push(Column {
                    activity,
                    width,
                    ends,
                    gain: width * segment.slope,
                });
            }
        }
        let unit = columns
            .iter()
            .map(|column| column.gain.abs())
            .fold(0.0, f64::max);
        let unit = if unit > 0.0 { unit } else { 1.0 };
        for column in &mut columns {
            column.gain /= unit;
        }
        let programme = Self {
            problem,
            polylines,
            columns,
            left,
            row_size,
            unit,
        };
        programme
            .is_finite()
            .then_some(programme)
            .ok_or_else(|| "the plan's numbers are too large for a linear programme".to_owned())
    }

    /// The LP solver would take a NaN for a zero.
    fn is_finite(&self) -> bool {
        self.unit.is_finite()
            && self.polylines.iter().all(|line| line.worth.is_finite())
            && self.left.iter().all(|left| left.is_finite())
            && self.columns.iter().enumerate().all(|(v, column)| {
                column.gain.is_finite()
                    && (0..self.left.len()).all(|k| self.row_use(k, v).is_finite())
            })
    }

    /// Use of row k by a share of 1 of column v, in units of the row's size.
    fn row_use(&self, k: usize, v: usize) -> f64 {
        let column = &self.columns[v];
        let per_unit = self.problem.constraints()[k].use_per_unit(column.activity);
        per_unit * column.width / self.row_size[k]
    }

    /// Solves the programme.
    pub(super) fn solve(&self) -> Result<Optimum, String> {
        let mut variables = ProblemVariables::new();
        let shares: Vec<Variable> = self
            .columns
            .iter()
            .map(|column| {
                let share = variable().min(0.0);
                variables.add(if column.ends { share.max(1.0) } else { share })
            })
            .collect();
        let objective: Expression = self
            .columns
            .iter()
            .zip(&shares)
            .map(|(column, &share)| column.gain * share)
            .sum();
        let mut model = variables.maximise(objective).using(microlp);
        for (k, row) in self.problem.constraints().iter().enumerate() {
            let used: Expression = shares
                .iter()
                .enumerate()
                .map(|(v, &share)| self.row_use(k, v) * share)
                .sum();
            let left = self.left[k] / self.row_size[k];
            model.add_constraint(match row.sense {
                Sense::AtMost => constraint!(used <= left),
                Sense::Equal => constraint!(used == left),
                Sense::AtLeast => constraint!(used >= left),
            });
        }
        let solved = model.solve().map_err(|fault| fault.to_string())?;
        let mut spends: Vec<f64> = self.polylines.iter().map(|line| line.start).collect();
        let mut worths: Vec<f64> = self.polylines.iter().map(|line| line.worth).collect();
        for (column, &share) in self.columns.iter().zip(&shares) {
            spends[column.activity] += column.width * solved.value(share);
            worths[column.activity] += self.unit * column.gain * solved.value(share);
        }
        Ok(Optimum {
            worth: worths.iter().copied().collect::<CompensatedSum>().total(),
            scale: worths.iter().map(|worth| worth.abs()).sum(),
            spends,
        })
    }

    /// Solves the dual, min Σ left_k·y_k + Σ size_v·z_v subject to
    /// Σ use_kv/size_v·y_k + z_v ≥ gain_v/size_v, and gives the y: the price of every row, units of worth
    /// per unit of its limit. Every row of the dual is divided by the size of its uses, so that a short
    /// segment is not mistaken for none.
    pub(super) fn prices(&self) -> Result<Vec<f64>, String> {
        let sizes: Vec<f64> = (0..self.columns.len())
            .map(|v| {
                let uses = (0..self.left.len()).map(|k| self.row_use(k, v).abs());
                let size = uses.fold(0.0, f64::max);
                if size > 0.0 { size } else { 1.0 }
            })
            .collect();
        let mut variables = ProblemVariables::new();
        let prices: Vec<Variable> = self
            .problem
            .constraints()
            .iter()
            .map(|row| {
                variables.add(match row.sense {
                    Sense::AtMost => variable().min(0.0),
                    Sense::Equal => variable(),
                    Sense::AtLeast => variable().max(0.0),
                })
            })
            .collect();
        let rents: Vec<Option<Variable>> = self
            .columns
            .iter()
            .map(|column| column.ends.then(|| variables.add(variable().min(0.0))))
            .collect();
        let limits = self.left.iter().zip(&self.row_size).zip(&prices);
        let objective: Expression = limits
            .map(|((left, size), &price)| left / size * price)
            .sum::<Expression>()
            + rents
                .iter()
                .zip(&sizes)
                .filter_map(|(rent, &size)| rent.map(|rent| size * rent))
                .sum::<Expression>();
        let mut model = variables.minimise(objective).using(microlp);
        for (v, (column, rent)) in self.columns.iter().zip(&rents).enumerate() {
            let paid: Expression = prices
                .iter()
                .enumerate()
                .map(|(k, &price)| self.row_use(k, v) / sizes[v] * price)
                .sum();
            let paid = rent.map_or(paid.clone(), |rent| paid + rent);
            model.add_constraint(constraint!(paid >= column.gain / sizes[v]));
        }
        let solved = model.solve().map_err(|fault| fault.to_string())?;
        Ok(prices
            .iter()
            .zip(&self.row_size)
            .map(|(&price, size)| solved.value(price) * self.unit / size)
            .collect())
    }
}
