//! Random plans against the conic interior-point solver Clarabel (P. J. Goulart and Y. Chen,
//! *Clarabel: An interior-point solver for conic programs with quadratic objectives*, 2024).

use clarabel::algebra::CscMatrix;
use clarabel::solver::{
    DefaultSettingsBuilder, DefaultSolver, IPSolver, SolverStatus, SupportedConeT,
};
use isomargin::certificate::{CrossCheck, Verdict, certify};
use isomargin::curves::{
    Curve, Exponential, ExponentialParams, Hyperbolic, HyperbolicParams, Knot, Linear,
    LinearParams, Log, LogParams, Points, Power, PowerParams, Quadratic, QuadraticParams,
};
use isomargin::model::{Activity, Aim, Constraint, Problem, Sense, UsePerUnit};
use isomargin::solver::solve;
use rand::{Rng, SeedableRng};
use rand_chacha::ChaCha8Rng;

/// Relative difference of two totals: Clarabel is asked for 1e-11, and power cones cost it digits.
const SAME_TOTAL: f64 = 1e-8;

/// Difference of two spends of the order of 1. Near its best a total is flat: an error of 1e-11 in
/// it is one of the root of that in a spend.
const SAME_SPEND: f64 = 1e-4;

/// Relative difference of two prices, which an interior-point method finds less exactly.
const SAME_PRICE: f64 = 1e-4;

/// A conic programme that is being written: min ½x'Px + q'x with Ax + s = b, s in the cones.
#[derive(Default)]
struct Conic {
    diagonal: Vec<f64>,
    cost: Vec<f64>,
    entries: Vec<(usize, usize, f64)>,
    right: Vec<f64>,
    cones: Vec<SupportedConeT<f64>>,
}

impl Conic {
    fn variable(&mut self, cost: f64, curvature: f64) -> usize {
        self.cost.push(cost);
        self.diagonal.push(curvature);
        self.cost.len() - 1
    }

    /// Rows constant + Σ factor·variable that must lie in a cone together.
    fn within(&mut self, cone: SupportedConeT<f64>, rows: &[(f64, &[(usize, f64)])]) {
        for (constant, terms) in rows {
            let row = self.right.len();
            self.right.push(*constant);
            self.entries
                .extend(terms.iter().map(|&(column, factor)| (row, column, -factor)));
        }
        self.cones.push(cone);
    }

    /// A variable with the worth of an activity of this concave curve at spend `x`.
    fn worth(&mut self, curve: &Curve, x: usize) {
        match curve {
            Curve::Linear(line) => self.cost[x] -= line.slope(),
            Curve::Quadratic(curve) => {
                self.cost[x] -= curve.params().slope;
                self.diagonal[x] -= curve.params().curvature;
            }
            Curve::Log(curve) => {
                let LogParams { gain, scale } = curve.params();
                let t = self.variable(-gain, 0.0);
                let rows: [(f64, &[_]); 3] =
                    [(0.0, &[(t, 1.0)]), (1.0, &[]), (1.0, &[(x, 1.0 / scale)])];
                self.within(SupportedConeT::ExponentialConeT(), &rows);
            }
            Curve::Exponential(curve) => {
                let ExponentialParams { ceiling, scale } = curve.params();
                let t = self.variable(-ceiling, 0.0);
                let rows: [(f64, &[_]); 3] =
                    [(0.0, &[(x, -1.0 / scale)]), (1.0, &[]), (1.0, &[(t, -1.0)])];
                self.within(SupportedConeT::ExponentialConeT(), &rows);
            }
            Curve::Power(curve) if curve.params().exponent == -1.0 => {
                // u·x ≥ 1, and the worth is gain·u with a negative gain.
                let u = self.variable(-curve.params().gain, 0.0);
                let rows: [(f64, &[_]); 3] = [
                    (0.0, &[(u, 1.0), (x, 1.0)]),
                    (2.0, &[]),
                    (0.0, &[(u, 1.0), (x, -1.0)]),
                ];
                self.within(SupportedConeT::SecondOrderConeT(3), &rows);
            }
            Curve::Power(curve) => {
                let PowerParams { gain, exponent } = curve.params();
                let t = self.variable(-gain, 0.0);
                let rows: [(f64, &[_]); 3] = [(0.0, &[(x, 1.0)]), (1.0, &[]), (0.0, &[(t, 1.0)])];
                self.within(SupportedConeT::PowerConeT(exponent), &rows);
            }
            Curve::Hyperbolic(curve) => {
                // ceiling·(1 − u), u·(scale + x) ≥ scale
                let HyperbolicParams { ceiling, scale } = curve.params();
                let u = self.variable(ceiling, 0.0);
                let rows: [(f64, &[_]); 3] = [
                    (scale, &[(u, 1.0), (x, 1.0)]),
                    (2.0 * scale.sqrt(), &[]),
                    (-scale, &[(u, 1.0), (x, -1.0)]),
                ];
                self.within(SupportedConeT::SecondOrderConeT(3), &rows);
            }
            Curve::Points(points) => {
                // x is the sum of its pieces; concave slopes fill them in order.
                let pieces: Vec<(usize, f64)> = points
                    .pieces()
                    .map(|piece| (self.variable(-piece.slope, 0.0), piece.to - piece.from))
                    .collect();
                for &(piece, width) in &pieces {
                    let rows: [(f64, &[_]); 2] =
                        [(0.0, &[(piece, 1.0)]), (width, &[(piece, -1.0)])];
                    self.within(SupportedConeT::NonnegativeConeT(2), &rows);
                }
                let mut terms: Vec<(usize, f64)> =
                    pieces.iter().map(|&(piece, _)| (piece, -1.0)).collect();
                terms.push((x, 1.0));
                self.within(
                    SupportedConeT::ZeroConeT(1),
                    &[(-points.first_spend(), &terms)],
                );
            }
            other => panic!("no cone for {other:?}"),
        }
    }

    /// Objective, the dual of `row` and the variables, if the solver is sure of them.
    fn solve(&self, row: usize) -> Option<(f64, f64, Vec<f64>)> {
        let n = self.cost.len();
        let diagonal: Vec<usize> = (0..n).collect();
        let quadratic =
            CscMatrix::new_from_triplets(n, n, diagonal.clone(), diagonal, self.diagonal.clone());
        let (rows, columns, values) = self.entries.iter().fold(
            (Vec::new(), Vec::new(), Vec::new()),
            |(mut rows, mut columns, mut values), &(row, column, value)| {
                rows.push(row);
                columns.push(column);
                values.push(value);
                (rows, columns, values)
            },
        );
        let matrix = CscMatrix::new_from_triplets(self.right.len(), n, rows, columns, values);
        let settings = DefaultSettingsBuilder::default()
            .verbose(false)
            .tol_gap_abs(1e-11)
            .tol_gap_rel(1e-11)
            .tol_feas(1e-11)
            .build()
            .unwrap();
        let mut solver = DefaultSolver::new(
            &quadratic,
            &self.cost,
            &matrix,
            &self.right,
            &self.cones,
            settings,
        )
        .unwrap();
        solver.solve();
        let sure = solver.solution.status == SolverStatus::Solved;
        sure.then(|| {
            let found = &solver.solution;
            (found.obj_val, found.z[row], found.x.clone())
        })
    }
}

/// The same plan as a conic programme; its limit is the last row.
fn conic_of(plan: &Problem) -> (Conic, usize) {
    let mut conic = Conic::default();
    let count = plan.activities().len();
    let spends: Vec<usize> = (0..count).map(|_| conic.variable(0.0, 0.0)).collect();
    for (i, activity) in plan.activities().iter().enumerate() {
        conic.worth(&plan.worth(i), spends[i]);
        let at_least: (f64, &[_]) = (-activity.floor, &[(spends[i], 1.0)]);
        conic.within(SupportedConeT::NonnegativeConeT(1), &[at_least]);
        if activity.cap.is_finite() {
            let at_most: (f64, &[_]) = (activity.cap, &[(spends[i], -1.0)]);
            conic.within(SupportedConeT::NonnegativeConeT(1), &[at_most]);
        }
    }
    let constraint = &plan.constraints()[0];
    let sign = if constraint.sense == Sense::AtLeast {
        1.0
    } else {
        -1.0
    };
    let terms: Vec<(usize, f64)> = (0..count)
        .map(|i| (spends[i], sign * constraint.use_per_unit(i)))
        .collect();
    let cone = match constraint.sense {
        Sense::Equal => SupportedConeT::ZeroConeT(1),
        _ => SupportedConeT::NonnegativeConeT(1),
    };
    let row = conic.right.len();
    conic.within(cone, &[(-sign * constraint.limit, &terms)]);
    (conic, row)
}

fn random_return(random: &mut ChaCha8Rng) -> Activity {
    let marginal: f64 = random.random_range(0.3..3.0);
    let scale: f64 = random.random_range(0.3..3.0);
    let gain = marginal * scale;
    let curve = match random.random_range(0..8) {
        0 => Curve::Linear(Linear::new(LinearParams { slope: marginal }).unwrap()),
        1 => {
            let given = QuadraticParams {
                slope: marginal,
                curvature: -marginal / scale,
            };
            Curve::Quadratic(Quadratic::new(given).unwrap())
        }
        2 => {
            let exponent = random.random_range(0.2..0.8);
            Curve::Power(Power::new(PowerParams { gain, exponent }).unwrap())
        }
        3 => Curve::Power(
            Power::new(PowerParams {
                gain: -0.2 * gain,
                exponent: -1.0,
            })
            .unwrap(),
        ),
        4 => Curve::Log(Log::new(LogParams { gain, scale }).unwrap()),
        5 => {
            let given = ExponentialParams {
                ceiling: gain,
                scale,
            };
            Curve::Exponential(Exponential::new(given).unwrap())
        }
        6 => {
            let given = HyperbolicParams {
                ceiling: gain,
                scale,
            };
            Curve::Hyperbolic(Hyperbolic::new(given).unwrap())
        }
        _ => {
            let knots = [(0.0, 0.0), (0.5, 0.7), (1.2, 1.2), (2.0, 1.4)].map(|(x, y)| Knot {
                spend: x * scale,
                value: y * gain,
            });
            let curve = Points::new(&knots).unwrap();
            let cap = curve.last_spend();
            return Activity {
                cap,
                ..Activity::new("points", Curve::Points(curve))
            };
        }
    };
    let mut activity = Activity::new("return", curve);
    if random.random_bool(0.4) {
        activity.floor = random.random_range(0.0..0.3);
    }
    if random.random_bool(0.5) {
        activity.cap = activity.floor + random.random_range(0.2..3.0);
    }
    activity
}

fn random_cost(random: &mut ChaCha8Rng) -> Activity {
    let slope: f64 = random.random_range(0.5..3.0);
    let curve = match random.random_range(0..5) {
        0 => Curve::Linear(Linear::new(LinearParams { slope }).unwrap()),
        // What falls with spend is convex turned upside down: a cost of what is not reached.
        1 => Curve::Log(
            Log::new(LogParams {
                gain: -slope,
                scale: 1.5,
            })
            .unwrap(),
        ),
        2 => {
            let given = ExponentialParams {
                ceiling: -slope,
                scale: 1.5,
            };
            Curve::Exponential(Exponential::new(given).unwrap())
        }
        3 => {
            let knots = [(0.0, 0.0), (0.5, 0.4), (1.2, 1.2), (4.0, 6.0)].map(|(x, y)| Knot {
                spend: x,
                value: y * slope,
            });
            Curve::Points(Points::new(&knots).unwrap())
        }
        _ => {
            let given = QuadraticParams {
                slope,
                curvature: random.random_range(0.1..2.0),
            };
            Curve::Quadratic(Quadratic::new(given).unwrap())
        }
    };
    let floor = random.random_range(0.0..0.3);
    Activity {
        floor,
        cap: floor + random.random_range(0.5..3.0),
        ..Activity::new("cost", curve)
    }
}

fn random_plan(random: &mut ChaCha8Rng, kind: usize) -> Problem {
    let count = random.random_range(2..=60);
    let costs = kind == 1;
    let activities: Vec<Activity> = (0..count)
        .map(|_| {
            if costs {
                random_cost(random)
            } else {
                random_return(random)
            }
        })
        .collect();
    let uses: Vec<f64> = match random.random_bool(0.3) {
        true => (0..count).map(|_| random.random_range(0.5..2.0)).collect(),
        false => vec![1.0; count],
    };
    let used = |spend: &dyn Fn(&Activity) -> f64| -> f64 {
        activities
            .iter()
            .zip(&uses)
            .map(|(activity, use_per_unit)| spend(activity) * use_per_unit)
            .sum()
    };
    let least = used(&|activity| activity.floor);
    let most = used(&|activity| activity.cap.min(activity.floor + 2.0));
    let limit = least + random.random_range(0.05..0.95) * (most - least);
    let constraint = Constraint {
        name: "limit".to_owned(),
        sense: match kind {
            0 => Sense::AtMost,
            1 => Sense::AtLeast,
            _ => Sense::Equal,
        },
        limit,
        use_per_unit: UsePerUnit::PerActivity(uses),
    };
    let aim = if costs { Aim::Minimise } else { Aim::Maximise };
    Problem::new(aim, activities, vec![constraint]).unwrap()
}

#[test]
fn random_plans_agree_with_a_conic_solver() {
    let mut random = ChaCha8Rng::seed_from_u64(2027);
    let (mut compared, mut smooth) = (0, 0);
    for round in 0..260 {
        let plan = random_plan(&mut random, round % 3);
        let solution = solve(&plan).unwrap();
        let certificate = certify(&plan, &solution, CrossCheck::WhenQuick);
        assert_eq!(
            certificate.verdict,
            Verdict::Proven,
            "{round}: {certificate:?}"
        );
        let (conic, row) = conic_of(&plan);
        let Some((objective, dual, variables)) = conic.solve(row) else {
            continue;
        };
        // Hyperbolas enter as ceiling·(1 − u), without the constant.
        let constants: f64 = (0..plan.activities().len())
            .map(|i| match plan.worth(i) {
                Curve::Hyperbolic(curve) => curve.params().ceiling,
                Curve::Points(points) => points.knots().next().map_or(0.0, |knot| knot.value),
                _ => 0.0,
            })
            .sum();
        let sign = plan.aim().sign();
        let theirs = sign * (constants - objective);
        let ours = plan.total(&solution.spends);
        let scale = ours.abs().max(1.0);
        assert!(
            (ours - theirs).abs() <= SAME_TOTAL * scale,
            "{round}: {ours} {theirs}"
        );
        compared += 1;
        for (i, activity) in plan.activities().iter().enumerate() {
            // Straight pieces of one slope may be shared otherwise.
            if !matches!(activity.curve, Curve::Linear(_) | Curve::Points(_)) {
                let (ours, theirs) = (solution.spends[i], variables[i]);
                assert!(
                    (ours - theirs).abs() <= SAME_SPEND * ours.max(1.0),
                    "{round}: {ours} {theirs} of {activity:?}"
                );
            }
        }
        let prices = isomargin::sensitivity::price_constraints(
            &plan,
            &solution,
            &isomargin::solver::demand_of(&plan).unwrap(),
        );
        if prices[0].one_more == prices[0].one_less {
            let theirs = if plan.constraints()[0].sense == Sense::AtLeast {
                -dual
            } else {
                dual
            };
            let ours = sign * solution.shadow_prices[0];
            assert!(
                (ours - theirs).abs() <= SAME_PRICE * ours.abs().max(1.0),
                "{round}: {ours} {theirs}"
            );
            smooth += 1;
        }
    }
    assert!(compared >= 200 && smooth >= 150, "{compared} {smooth}");
}

#[test]
fn prices_on_both_sides_are_the_slopes_of_re_solved_totals() {
    let mut random = ChaCha8Rng::seed_from_u64(2028);
    let mut compared = 0;
    for round in 0..300 {
        let plan = random_plan(&mut random, round % 3);
        let solution = solve(&plan).unwrap();
        let demand = isomargin::solver::demand_of(&plan).unwrap();
        let price = isomargin::sensitivity::price_constraints(&plan, &solution, &demand)[0];
        let (limit, total) = (plan.constraints()[0].limit, plan.total(&solution.spends));
        let step = 1e-6 * limit;
        for (side, price) in [(1.0, price.one_more), (-1.0, price.one_less)] {
            let moved = plan.with_limit(0, limit + side * step).unwrap();
            let Ok(again) = solve(&moved) else { continue };
            let slope = side * (moved.total(&again.spends) - total) / step;
            let price = price.unwrap();
            assert!(
                (slope - price).abs() <= 1e-4 * price.abs().max(1.0),
                "{round}: {slope} {price}"
            );
            compared += 1;
        }
    }
    assert!(compared > 500, "{compared}");
}
