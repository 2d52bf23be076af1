//! Spends in whole steps: against a published whole-unit answer and against all combinations.

use isomargin::curves::{Curve, Linear, LinearParams, Log, LogParams, Quadratic, QuadraticParams};
use isomargin::model::{Activity, Aim, Constraint, Problem, UsePerUnit};
use isomargin::solver::{RoundError, round_spends, solve};
use rand::{Rng, SeedableRng};
use rand_chacha::ChaCha8Rng;

fn quadratic(name: &str, slope: f64, curvature: f64) -> Activity {
    let curve = Quadratic::new(QuadraticParams { slope, curvature }).unwrap();
    Activity::new(name, Curve::Quadratic(curve))
}

fn log(name: &str, gain: f64, scale: f64) -> Activity {
    Activity::new(
        name,
        Curve::Log(Log::new(LogParams { gain, scale }).unwrap()),
    )
}

fn budget(activities: Vec<Activity>, limit: f64) -> Problem {
    Problem::new(Aim::Maximise, activities, vec![Constraint::budget(limit)]).unwrap()
}

#[test]
fn three_water_users_get_the_published_whole_units() {
    // Water resources course notes of the Indian Institute of Science, modules 4 and 6: benefits
    // 5x − 0.5x², 8x − 1.5x², 7x − x² and 4 units, whole units (1, 1, 2) with a benefit of 21.
    let plan = budget(
        vec![
            quadratic("1", 5.0, -1.0),
            quadratic("2", 8.0, -3.0),
            quadratic("3", 7.0, -2.0),
        ],
        4.0,
    );
    let exact = solve(&plan).unwrap();
    let rounded = round_spends(&plan, &exact.spends, 1.0).unwrap();
    assert_eq!(rounded.spends, [1.0, 1.0, 2.0]);
    assert_eq!(rounded.total, 21.0);
    assert_eq!(rounded.odd, None);
    // The same source's continuous answer: 21.4091 (printed digits).
    assert!((plan.total(&exact.spends) - 21.4091).abs() < 5e-5);
}

#[test]
fn no_other_whole_steps_are_better() {
    let mut random = ChaCha8Rng::seed_from_u64(7);
    for _ in 0..200 {
        let activities: Vec<Activity> = (0..4)
            .map(|i| {
                let mut activity = match i {
                    0 => quadratic(
                        "a",
                        random.random_range(1.0..5.0),
                        -random.random_range(0.1..1.0),
                    ),
                    1 => Activity::new(
                        "b",
                        Curve::Linear(
                            Linear::new(LinearParams {
                                slope: random.random_range(0.5..3.0),
                            })
                            .unwrap(),
                        ),
                    ),
                    2 => log(
                        "c",
                        random.random_range(1.0..9.0),
                        random.random_range(0.5..4.0),
                    ),
                    _ => log(
                        "d",
                        random.random_range(1.0..9.0),
                        random.random_range(0.5..4.0),
                    ),
                };
                activity.floor = f64::from(random.random_range(0..2));
                activity.cap = activity.floor + f64::from(random.random_range(2..6));
                activity
            })
            .collect();
        let floors: f64 = activities.iter().map(|activity| activity.floor).sum();
        let caps: f64 = activities.iter().map(|activity| activity.cap).sum();
        let limit = floors + f64::from(random.random_range(0..=(caps - floors) as u32));
        // All combinations of whole units that add up to what the exact plan spends.
        let plan = budget(activities, limit);
        let exact = solve(&plan).unwrap();
        let rounded = round_spends(&plan, &exact.spends, 1.0).unwrap();
        let spent: f64 = rounded.spends.iter().sum();
        let mut best = f64::NEG_INFINITY;
        let range = |i: usize| plan.activities()[i].floor as u32..=plan.activities()[i].cap as u32;
        for a in range(0) {
            for b in range(1) {
                for c in range(2) {
                    for d in range(3) {
                        if f64::from(a + b + c + d) == spent {
                            best = best.max(plan.total(&[a, b, c, d].map(f64::from)));
                        }
                    }
                }
            }
        }
        if exact.shadow_prices[0] > 0.0 {
            assert_eq!(spent, limit);
            assert!(
                (rounded.total - best).abs() <= 1e-12 * best.abs(),
                "{} {best}",
                rounded.total
            );
        }
        assert!(rounded.total <= plan.total(&exact.spends) * (1.0 + 1e-14));
    }
}

#[test]
fn an_odd_budget_is_still_met_to_the_last_unit() {
    let plan = budget(vec![log("a", 2.0, 1.0), log("b", 1.0, 1.0)], 10_250.0);
    let exact = solve(&plan).unwrap();
    let rounded = round_spends(&plan, &exact.spends, 1_000.0).unwrap();
    assert_eq!(rounded.spends.iter().sum::<f64>(), 10_250.0);
    let odd = rounded.odd.unwrap();
    assert_eq!(rounded.spends[odd] % 1_000.0, 250.0);
    assert_eq!(rounded.spends[1 - odd] % 1_000.0, 0.0);
}

#[test]
fn an_activity_without_a_whole_step_keeps_its_spend() {
    let mut narrow = log("narrow", 5.0, 1.0);
    (narrow.floor, narrow.cap) = (1_200.0, 1_700.0);
    let plan = budget(
        vec![narrow, log("b", 1.0, 1.0), log("c", 1.0, 1.0)],
        9_000.0,
    );
    let exact = solve(&plan).unwrap();
    let rounded = round_spends(&plan, &exact.spends, 1_000.0).unwrap();
    assert_eq!(rounded.kept, [0]);
    assert_eq!(rounded.spends[0], exact.spends[0]);
    assert_eq!(rounded.spends.iter().sum::<f64>(), 9_000.0);
}

#[test]
fn what_cannot_be_rounded_is_refused() {
    let plan = budget(vec![log("a", 1.0, 1.0)], 10.0);
    let spends = solve(&plan).unwrap().spends;
    for step in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        assert!(matches!(
            round_spends(&plan, &spends, step),
            Err(RoundError::Step { .. })
        ));
    }
    assert!(matches!(
        round_spends(&plan, &spends, 1e-300),
        Err(RoundError::TooFine { .. })
    ));
    let hours = Constraint {
        use_per_unit: UsePerUnit::PerActivity(vec![2.0]),
        ..Constraint::budget(10.0)
    };
    let plan = Problem::new(Aim::Maximise, vec![log("a", 1.0, 1.0)], vec![hours]).unwrap();
    let spends = solve(&plan).unwrap().spends;
    assert_eq!(
        round_spends(&plan, &spends, 1.0),
        Err(RoundError::NotOnSpend)
    );
}
