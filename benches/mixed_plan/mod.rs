//! A seeded plan of mixed families, for benches of any size.

use isomargin::curves::{
    Curve, Exponential, ExponentialParams, Hyperbolic, HyperbolicParams, Linear, LinearParams, Log,
    LogParams, Power, PowerParams, Quadratic, QuadraticParams,
};
use isomargin::model::{Activity, Aim, Constraint, Problem};
use rand::{Rng, SeedableRng};
use rand_chacha::ChaCha8Rng;

/// A plan of `count` activities under a budget that funds about 60 % of them: 20 % power, 20 %
/// log, 18 % exponential, 15 % hyperbolic, 12 % quadratic, 5 % sampling variance (exponent −1),
/// 10 % linear. Spends are of the order of 1.
pub fn mixed_plan(count: usize) -> Problem {
    let mut random = ChaCha8Rng::seed_from_u64(20_270_101);
    let activities = (0..count).map(|i| mixed_activity(&mut random, i)).collect();
    let budget = Constraint::budget(0.4 * count as f64);
    Problem::new(Aim::Maximise, activities, vec![budget]).expect("a generated plan is valid")
}

fn mixed_activity(random: &mut ChaCha8Rng, i: usize) -> Activity {
    let mut between = |from: f64, to: f64| random.random_range(from..to);
    let (marginal, scale) = (between(0.3, 3.0), between(0.2, 2.0));
    let curve = match between(0.0, 100.0) {
        family if family < 20.0 => power(marginal, between(0.2, 0.8)),
        family if family < 40.0 => Log::new(LogParams {
            gain: marginal * scale,
            scale,
        })
        .map(Curve::Log),
        family if family < 58.0 => Exponential::new(ExponentialParams {
            ceiling: marginal * scale,
            scale,
        })
        .map(Curve::Exponential),
        family if family < 73.0 => Hyperbolic::new(HyperbolicParams {
            ceiling: marginal * scale,
            scale,
        })
        .map(Curve::Hyperbolic),
        family if family < 85.0 => Quadratic::new(QuadraticParams {
            slope: marginal,
            curvature: -marginal / scale,
        })
        .map(Curve::Quadratic),
        family if family < 90.0 => power(-0.1 * marginal, -1.0),
        _ => Linear::new(LinearParams { slope: marginal }).map(Curve::Linear),
    };
    let mut activity = Activity::new(format!("activity {i}"), curve.expect("in its domain"));
    activity.floor = if between(0.0, 1.0) < 0.3 {
        between(0.0, 0.1)
    } else {
        0.0
    };
    activity.cap = between(0.5, 3.0);
    activity
}

fn power(gain: f64, exponent: f64) -> Result<Curve, isomargin::curves::CurveError> {
    Power::new(PowerParams { gain, exponent }).map(Curve::Power)
}
