//! Honest plans of any scale are proven with the cross-check, and wrong ones are not.

use isomargin::certificate::{CrossCheck, LpCheck, Verdict, certify};
use isomargin::curves::{
    Curve, Exponential, ExponentialParams, Hill, HillParams, Hyperbolic, HyperbolicParams, Knot,
    Linear, LinearParams, Log, LogParams, Points, Power, PowerParams, Quadratic, QuadraticParams,
    ReturnCurve,
};
use isomargin::model::{Activity, Aim, Constraint, Problem};
use isomargin::solver::solve;
use rand::{Rng, SeedableRng};
use rand_chacha::ChaCha8Rng;

/// A concave return that has its bend at `scale` and is worth about `size` there.
fn some_return(random: &mut ChaCha8Rng, size: f64, scale: f64) -> Curve {
    let slope = size / scale;
    let exponent = random.random_range(0.05..0.95);
    let knots = [(0.0, 0.0), (1.0, 1.0), (3.0, 2.0), (9.0, 2.0)].map(|(x, y)| Knot {
        spend: x * scale,
        value: y * size,
    });
    let curve = match random.random_range(0..9) {
        0 => Power::new(PowerParams {
            gain: size / scale.powf(exponent),
            exponent,
        })
        .map(Curve::Power),
        1 => Power::new(PowerParams {
            gain: -size * scale,
            exponent: -1.0,
        })
        .map(Curve::Power),
        2 => Log::new(LogParams { gain: size, scale }).map(Curve::Log),
        3 => Exponential::new(ExponentialParams {
            ceiling: size,
            scale,
        })
        .map(Curve::Exponential),
        4 => Hyperbolic::new(HyperbolicParams {
            ceiling: size,
            scale,
        })
        .map(Curve::Hyperbolic),
        5 => Hill::new(HillParams {
            ceiling: size,
            scale,
            steepness: exponent,
        })
        .map(Curve::Hill),
        6 => Quadratic::new(QuadraticParams {
            slope,
            curvature: -slope / scale,
        })
        .map(Curve::Quadratic),
        7 => Linear::new(LinearParams { slope }).map(Curve::Linear),
        _ => Points::new(&knots).map(Curve::Points),
    };
    curve.unwrap()
}

/// A convex cost of the same kind; one in six falls at first.
fn some_cost(random: &mut ChaCha8Rng, size: f64, scale: f64) -> Curve {
    let slope = size / scale;
    let exponent = random.random_range(1.05..2.9);
    let knots = [(0.0, 0.0), (1.0, 1.0), (3.0, 4.0), (9.0, 20.0)].map(|(x, y)| Knot {
        spend: x * scale,
        value: y * size,
    });
    let curve = match random.random_range(0..6) {
        0 => Power::new(PowerParams {
            gain: size / scale.powf(exponent),
            exponent,
        })
        .map(Curve::Power),
        1 => Linear::new(LinearParams { slope }).map(Curve::Linear),
        2 => Points::new(&knots).map(Curve::Points),
        other => Quadratic::new(QuadraticParams {
            slope: if other == 3 { -slope } else { slope },
            curvature: slope / scale,
        })
        .map(Curve::Quadratic),
    };
    curve.unwrap()
}

/// A plan whose curves differ from each other by factors of up to 10^(2·`spread`), with the limit
/// anywhere from the sum of the floors to the sum of the caps, or beyond what is wanted.
fn some_plan(random: &mut ChaCha8Rng, case: usize, spread: f64) -> Problem {
    let aim = [Aim::Maximise, Aim::Maximise, Aim::Minimise][case % 3];
    let money = [1.0, 1e-12, 1e12, 1e6][case % 4];
    let worth = [1.0, 1e6, 1e-9][case / 3 % 3];
    let count = random.random_range(1..12);
    let activities: Vec<Activity> = (0..count)
        .map(|_| {
            let mut around = |unit: f64| unit * 10_f64.powf(random.random_range(-spread..=spread));
            let (size, scale) = (around(worth), around(money));
            let curve = match aim {
                Aim::Maximise => some_return(random, size, scale),
                Aim::Minimise => some_cost(random, size, scale),
            };
            let tabulated = matches!(curve, Curve::Points(_));
            let mut activity = Activity::new("activity", curve);
            if random.random_bool(0.3) {
                activity.floor = scale * random.random_range(0.0..1.0);
            }
            if tabulated || random.random_bool(0.4) {
                activity.cap = scale * random.random_range(1.0..8.0);
            }
            if random.random_bool(0.2) {
                activity.weight = random.random_range(0.1..10.0);
            }
            activity
        })
        .collect();
    let least: f64 = activities.iter().map(|activity| activity.floor).sum();
    let caps: f64 = activities.iter().map(|activity| activity.cap).sum();
    let most = if caps.is_finite() {
        caps
    } else {
        least + money * 10_f64.powf(random.random_range(-spread..=spread))
    };
    let share = random.random_range(-0.1..1.1_f64).clamp(0.0, 1.0);
    let limit = least + share * (most - least);
    let constraint = match aim {
        Aim::Maximise => Constraint::budget(limit),
        Aim::Minimise => Constraint::requirement(limit),
    };
    Problem::new(aim, activities, vec![constraint]).unwrap()
}

#[test]
fn honest_plans_are_proven_whatever_their_scale() {
    let mut random = ChaCha8Rng::seed_from_u64(5);
    for spread in [0.5, 1.0, 3.0] {
        let mut proven = 0;
        for case in 0..300 {
            let plan = some_plan(&mut random, case, spread);
            let Ok(solution) = solve(&plan) else {
                continue;
            };
            let certificate = certify(&plan, &solution, CrossCheck::WhenQuick);
            assert_eq!(
                certificate.verdict,
                Verdict::Proven,
                "{spread} {case}: {plan:?} {solution:?} {certificate:?}"
            );
            assert!(certificate.gap <= 1e-13);
            let LpCheck::Bracketed(bracket) = &certificate.lp else {
                panic!("{certificate:?}");
            };
            assert!(bracket.lower <= bracket.upper);
            proven += 1;
        }
        assert!(proven > 250, "{spread}: {proven}");
    }
}

#[test]
fn spends_that_could_earn_more_elsewhere_are_never_proven() {
    let mut random = ChaCha8Rng::seed_from_u64(6);
    let mut refused = 0;
    for case in 0..600 {
        let plan = some_plan(&mut random, case, 0.5);
        let Ok(solution) = solve(&plan) else {
            continue;
        };
        let count = solution.spends.len();
        let (from, to) = (random.random_range(0..count), random.random_range(0..count));
        let mut moved = solution.clone();
        let amount = 1e-3 * moved.spends[from];
        moved.spends[from] -= amount;
        moved.spends[to] += amount;
        let sign = plan.aim().sign();
        let loss = sign * (plan.total(&solution.spends) - plan.total(&moved.spends));
        let size = plan.total(&solution.spends).abs();
        if loss.is_finite() && loss <= 1e-9 * size {
            continue;
        }
        let certificate = certify(&plan, &moved, CrossCheck::Always);
        assert_eq!(certificate.verdict, Verdict::NotProven, "{certificate:?}");
        refused += 1;
    }
    assert!(refused > 150, "{refused}");
}

#[test]
fn the_bracket_encloses_the_best_total_whatever_was_claimed() {
    let mut random = ChaCha8Rng::seed_from_u64(7);
    let mut bracketed = 0;
    for case in 0..600 {
        let plan = some_plan(&mut random, case, 0.5);
        let Ok(mut claim) = solve(&plan) else {
            continue;
        };
        let best = plan.total(&claim.spends);
        let worth_of = |(i, &spend): (usize, &f64)| plan.worth(i).value(spend).abs();
        let size: f64 = claim.spends.iter().enumerate().map(worth_of).sum();
        for spend in &mut claim.spends {
            *spend *= random.random_range(0.0..3.0);
        }
        claim.shadow_prices[0] *= [0.0, 0.1, 0.9, 1.5, 30.0, f64::NAN][case % 6];
        let certificate = certify(&plan, &claim, CrossCheck::Always);
        let LpCheck::Bracketed(bracket) = &certificate.lp else {
            continue;
        };
        let room = 1e-7 * size;
        assert!(
            bracket.lower - room <= best && best <= bracket.upper + room,
            "{case}: {best} {bracket:?} {plan:?} {claim:?}"
        );
        bracketed += 1;
    }
    assert!(bracketed > 500, "{bracketed}");
}
