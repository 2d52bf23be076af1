//! The certificate: right answers are proven, wrong ones are not.

use isomargin::certificate::{
    BRACKET_WIDTH, Certificate, CrossCheck, LpBracket, LpCheck, Verdict, certify,
};
use isomargin::curves::{
    Curve, Exponential, ExponentialParams, Knot, Linear, LinearParams, Log, LogParams, Points,
    Power, PowerParams, Quadratic, QuadraticParams,
};
use isomargin::model::{Activity, Aim, Constraint, Problem, Sense, Solution, UsePerUnit};
use isomargin::solver::solve;

fn activity(name: &str, curve: Curve) -> Activity {
    Activity::new(name, curve)
}

fn quadratic(name: &str, slope: f64, curvature: f64) -> Activity {
    activity(
        name,
        Curve::Quadratic(Quadratic::new(QuadraticParams { slope, curvature }).unwrap()),
    )
}

fn log(name: &str, gain: f64, scale: f64) -> Activity {
    activity(
        name,
        Curve::Log(Log::new(LogParams { gain, scale }).unwrap()),
    )
}

fn linear(name: &str, slope: f64) -> Activity {
    activity(
        name,
        Curve::Linear(Linear::new(LinearParams { slope }).unwrap()),
    )
}

fn within(floor: f64, cap: f64, activity: Activity) -> Activity {
    Activity {
        floor,
        cap,
        ..activity
    }
}

/// Wood and Wollenberg, Power Generation, Operation and Control, 2nd ed. 1996, Example 3A: least
/// cost of 850 from three units.
fn dispatch() -> Problem {
    let units = vec![
        within(
            150.0,
            600.0,
            Activity {
                base: 561.0,
                ..quadratic("unit 1", 7.92, 0.003124)
            },
        ),
        within(
            100.0,
            400.0,
            Activity {
                base: 310.0,
                ..quadratic("unit 2", 7.85, 0.00388)
            },
        ),
        within(
            50.0,
            200.0,
            Activity {
                base: 78.0,
                ..quadratic("unit 3", 7.97, 0.00964)
            },
        ),
    ];
    Problem::new(Aim::Minimise, units, vec![Constraint::requirement(850.0)]).unwrap()
}

/// A plan with a bound of every kind, a line at the margin and a knot.
fn mixed() -> Problem {
    let knots = [(0.0, 0.0), (2.0, 8.0), (4.0, 11.0)].map(|(spend, value)| Knot { spend, value });
    let table = activity("table", Curve::Points(Points::new(&knots).unwrap()));
    let saturating = Exponential::new(ExponentialParams {
        ceiling: 9.0,
        scale: 2.0,
    })
    .unwrap();
    let activities = vec![
        within(1.0, 10.0, log("log", 6.0, 2.0)),
        within(0.0, 3.0, linear("line", 2.0)),
        within(0.0, 4.0, table),
        within(2.5, 9.0, log("floored", 1.0, 1.0)),
        within(0.0, 0.5, activity("capped", Curve::Exponential(saturating))),
        within(0.0, 5.0, linear("poor", 0.1)),
    ];
    Problem::new(Aim::Maximise, activities, vec![Constraint::budget(8.0)]).unwrap()
}

fn certified(plan: &Problem, solution: &Solution) -> Certificate {
    certify(plan, solution, CrossCheck::Always)
}

fn bracket(certificate: &Certificate) -> &LpBracket {
    match &certificate.lp {
        LpCheck::Bracketed(bracket) => bracket,
        other => panic!("no bracket: {other:?}"),
    }
}

#[test]
fn published_answers_are_proven_within_a_closed_bracket() {
    let plan = dispatch();
    let solution = solve(&plan).unwrap();
    let certificate = certified(&plan, &solution);
    assert_eq!(certificate.verdict, Verdict::Proven, "{certificate:?}");
    assert!(certificate.gap <= 1e-14);
    let found = bracket(&certificate);
    // The book prints a cost of 8194.35612 (as read) and a price of 9.148 (from memory).
    assert!((found.lower - 8194.35612).abs() < 1e-5 * 8.0 && found.lower <= found.upper);
    assert!(found.upper - found.lower <= BRACKET_WIDTH * 8194.0);
    assert!((found.prices[0] - 9.148).abs() < 5e-4);
    assert!(certificate.lower_bound <= 8194.35613 && 8194.35611 <= certificate.upper_bound);
}

#[test]
fn a_bracket_from_the_wrong_spends_encloses_the_published_cost_and_not_the_claim() {
    let plan = dispatch();
    let wrong = Solution {
        spends: vec![450.0, 250.0, 150.0],
        shadow_prices: vec![9.2],
    };
    let certificate = certified(&plan, &wrong);
    assert_eq!(certificate.verdict, Verdict::NotProven);
    let found = bracket(&certificate);
    assert!(found.lower <= 8194.35612 && 8194.35612 <= found.upper);
    assert!(!found.encloses);
    assert!(plan.total(&wrong.spends) > found.upper);
}

#[test]
fn every_kind_of_bound_kink_and_tie_is_proven() {
    let plan = mixed();
    for limit in [3.5, 4.0, 5.5, 7.0, 8.0, 9.3, 12.0, 19.0, 31.5, 40.0] {
        let plan = plan.with_limit(0, limit).unwrap();
        let certificate = certified(&plan, &solve(&plan).unwrap());
        assert_eq!(
            certificate.verdict,
            Verdict::Proven,
            "{limit}: {certificate:?}"
        );
        let found = bracket(&certificate);
        assert!(
            found.upper - found.lower <= 1e-6 * found.upper.abs(),
            "{limit}: {found:?}"
        );
    }
}

#[test]
fn money_moved_between_two_activities_is_found() {
    for plan in [dispatch(), mixed()] {
        let solution = solve(&plan).unwrap();
        for (from, to) in [(0, 1), (1, 0), (0, 2)] {
            let mut moved = solution.clone();
            let amount = 1e-5 * moved.spends[from].max(moved.spends[to]);
            moved.spends[from] -= amount;
            moved.spends[to] += amount;
            if plan.activities()[from].floor > moved.spends[from] {
                continue;
            }
            let certificate = certified(&plan, &moved);
            assert_eq!(
                certificate.verdict,
                Verdict::NotProven,
                "{from} {to} {certificate:?}"
            );
        }
    }
}

#[test]
fn a_price_that_is_a_hundred_thousandth_off_is_found() {
    for plan in [dispatch(), mixed()] {
        let solution = solve(&plan).unwrap();
        for factor in [1.0 - 1e-5, 1.0 + 1e-5, -1.0, 0.0, f64::NAN, f64::INFINITY] {
            let mut changed = solution.clone();
            changed.shadow_prices[0] *= factor;
            assert_eq!(
                certified(&plan, &changed).verdict,
                Verdict::NotProven,
                "{factor}"
            );
        }
    }
}

#[test]
fn a_spend_beyond_a_bound_or_the_limit_is_found() {
    let plan = mixed();
    let solution = solve(&plan).unwrap();
    for i in 0..plan.activities().len() {
        for spend in [
            plan.activities()[i].cap * (1.0 + 1e-9),
            plan.activities()[i].floor - 1e-9,
            f64::NAN,
            f64::INFINITY,
        ] {
            let mut changed = solution.clone();
            changed.spends[i] = spend;
            let certificate = certified(&plan, &changed);
            assert_eq!(certificate.verdict, Verdict::NotProven, "{i} {spend}");
            assert!(certificate.primal_residual > 1e-10);
            assert_eq!(certificate.lower_bound, f64::NEG_INFINITY);
        }
    }
    // The line at the margin takes a little more than the budget has.
    let mut over = solution.clone();
    over.spends[1] += 8.0 * 1e-9;
    assert_eq!(certified(&plan, &over).verdict, Verdict::NotProven);
    // Money left unspent although it would earn something.
    let mut under = solution;
    under.spends[1] -= 8.0 * 1e-6;
    assert_eq!(certified(&plan, &under).verdict, Verdict::NotProven);
}

#[test]
fn a_vector_of_the_wrong_length_proves_nothing() {
    let plan = dispatch();
    let short = Solution {
        spends: vec![425.0, 425.0],
        shadow_prices: vec![9.0],
    };
    assert_eq!(certified(&plan, &short).verdict, Verdict::NotProven);
}

#[test]
fn ends_of_the_range_are_proven() {
    let sampling = |name: &str, variance: f64| {
        let curve = Power::new(PowerParams {
            gain: variance,
            exponent: -1.0,
        })
        .unwrap();
        activity(name, Curve::Power(curve))
    };
    let root = |name: &str, gain: f64| {
        activity(
            name,
            Curve::Power(
                Power::new(PowerParams {
                    gain,
                    exponent: 0.5,
                })
                .unwrap(),
            ),
        )
    };
    let cases = [
        // At the sum of the floors the price may be anything from the best first unit on; with
        // vertical curves it is without bound.
        (
            Aim::Maximise,
            vec![root("a", 2.0), root("b", 1.0)],
            Constraint::budget(0.0),
        ),
        (
            Aim::Maximise,
            vec![
                within(1.0, 4.0, root("a", 2.0)),
                within(2.0, 3.0, root("b", 1.0)),
            ],
            Constraint::budget(3.0),
        ),
        (
            Aim::Maximise,
            vec![
                within(1.0, 4.0, root("a", 2.0)),
                within(2.0, 3.0, root("b", 1.0)),
            ],
            Constraint::budget(7.0),
        ),
        (
            Aim::Maximise,
            vec![quadratic("a", 3.0, -1.0)],
            Constraint::budget(10.0),
        ),
        (
            Aim::Minimise,
            vec![sampling("a", 4.0), sampling("b", 9.0)],
            Constraint::budget(5.0),
        ),
        (
            Aim::Minimise,
            vec![quadratic("a", 3.0, 1.0)],
            Constraint::requirement(10.0),
        ),
        (
            Aim::Minimise,
            vec![quadratic("a", -3.0, 1.0)],
            Constraint::requirement(1.0),
        ),
        (
            Aim::Maximise,
            vec![quadratic("a", 3.0, -1.0), quadratic("b", 1.0, -1.0)],
            Constraint {
                sense: Sense::Equal,
                ..Constraint::budget(9.0)
            },
        ),
    ];
    for (aim, activities, constraint) in cases {
        let plan = Problem::new(aim, activities, vec![constraint]).unwrap();
        let solution = solve(&plan).unwrap();
        let certificate = certified(&plan, &solution);
        assert_eq!(
            certificate.verdict,
            Verdict::Proven,
            "{solution:?} {certificate:?}"
        );
    }
}

#[test]
fn a_linear_programme_with_three_rows_is_proven_at_its_published_prices() {
    // Hillier and Lieberman, Introduction to Operations Research, sec. 3.1 and 4.7: 3x + 5y under
    // x ≤ 4, 2y ≤ 12, 3x + 2y ≤ 18; optimum 36 at (2, 6), prices 0, 3/2, 1.
    let row = |name: &str, uses: [f64; 2], limit: f64| Constraint {
        name: name.to_owned(),
        sense: Sense::AtMost,
        limit,
        use_per_unit: UsePerUnit::PerActivity(uses.to_vec()),
    };
    let rows = vec![
        row("plant 1", [1.0, 0.0], 4.0),
        row("plant 2", [0.0, 2.0], 12.0),
        row("plant 3", [3.0, 2.0], 18.0),
    ];
    let plan = Problem::new(
        Aim::Maximise,
        vec![linear("x", 3.0), linear("y", 5.0)],
        rows,
    )
    .unwrap();
    let published = Solution {
        spends: vec![2.0, 6.0],
        shadow_prices: vec![0.0, 1.5, 1.0],
    };
    let certificate = certified(&plan, &published);
    assert_eq!(certificate.verdict, Verdict::Proven, "{certificate:?}");
    assert_eq!(
        (certificate.lower_bound, certificate.upper_bound),
        (36.0, 36.0)
    );
    let found = bracket(&certificate);
    for (price, printed) in found.prices.iter().zip([0.0, 1.5, 1.0]) {
        assert!((price - printed).abs() < 1e-12, "{found:?}");
    }
    let dearer = Solution {
        shadow_prices: vec![0.0, 1.5, 1.01],
        ..published
    };
    assert_eq!(certified(&plan, &dearer).verdict, Verdict::NotProven);
}

#[test]
fn extremes_of_scale_are_proven() {
    for money in [1e-12, 1e-6, 1.0, 1e6, 1e12] {
        for worth in [1e-12, 1.0, 1e12] {
            let activities = vec![
                log("a", 2.0 * worth, money),
                log("b", worth, 0.5 * money),
                quadratic("c", 3.0 * worth / money, -worth / money / money),
                within(0.0, money, linear("d", 1.1 * worth / money)),
            ];
            let plan = Problem::new(
                Aim::Maximise,
                activities,
                vec![Constraint::budget(3.0 * money)],
            )
            .unwrap();
            let certificate = certified(&plan, &solve(&plan).unwrap());
            assert_eq!(
                certificate.verdict,
                Verdict::Proven,
                "{money} {worth} {certificate:?}"
            );
        }
    }
}

#[test]
fn a_large_plan_is_proven_without_the_cross_check_and_says_so() {
    let activities: Vec<Activity> = (0..5_000)
        .map(|i| log(&format!("{i}"), 1.0 + i as f64 / 100.0, 1.0))
        .collect();
    let plan = Problem::new(Aim::Maximise, activities, vec![Constraint::budget(2_000.0)]).unwrap();
    let certificate = certify(&plan, &solve(&plan).unwrap(), CrossCheck::WhenQuick);
    assert_eq!(certificate.verdict, Verdict::Proven);
    assert!(matches!(
        certificate.lp,
        LpCheck::LeftOut {
            activities: 5_000,
            ..
        }
    ));
}
