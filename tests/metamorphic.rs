//! What must not change when the same plan is written differently.

#[path = "../benches/mixed_plan/mod.rs"]
mod mixed_plan;

use isomargin::curves::{Curve, Family, Linear, LinearParams, Log, LogParams, Parameter};
use isomargin::model::{Activity, Aim, Constraint, Problem, Solution};
use isomargin::solver::solve;
use mixed_plan::mixed_plan;
use rand::SeedableRng;
use rand::seq::SliceRandom;
use rand_chacha::ChaCha8Rng;

const SIZES: [usize; 4] = [2, 12, 60, 500];

fn solved(activities: Vec<Activity>, limit: f64) -> (Problem, Solution) {
    let plan = Problem::new(Aim::Maximise, activities, vec![Constraint::budget(limit)]).unwrap();
    let solution = solve(&plan).unwrap();
    (plan, solution)
}

#[track_caller]
fn assert_same(found: &[f64], expected: &[f64], tolerance: f64) {
    for (found, expected) in found.iter().zip(expected) {
        let near = (found - expected).abs() <= tolerance * expected.abs().max(1e-3);
        assert!(near, "{found} is not {expected}");
    }
}

/// The same curve with spend in another currency, `unit` of it to one of the old.
fn in_currency(activity: &Activity, unit: f64) -> Activity {
    let old = activity.curve.parameters();
    let mut new = old;
    for (parameter, value) in old.iter() {
        let factor = match parameter {
            Parameter::Slope => 1.0 / unit,
            Parameter::Curvature => 1.0 / unit / unit,
            Parameter::Scale | Parameter::Midpoint => unit,
            Parameter::Gain if activity.curve.family() == Family::Power => {
                unit.powf(-old.get(Parameter::Exponent).unwrap())
            }
            _ => 1.0,
        };
        new = new.with(parameter, value * factor);
    }
    Activity {
        curve: Curve::from_parameters(activity.curve.family(), &new).unwrap(),
        floor: activity.floor * unit,
        cap: activity.cap * unit,
        ..activity.clone()
    }
}

#[test]
fn money_in_millions_gives_the_same_plan() {
    for size in SIZES {
        let plan = mixed_plan(size);
        let limit = plan.constraints()[0].limit;
        let before = solve(&plan).unwrap();
        for unit in [1e-6, 1e6] {
            let activities = plan
                .activities()
                .iter()
                .map(|a| in_currency(a, unit))
                .collect();
            let (_, after) = solved(activities, limit * unit);
            let back: Vec<f64> = after.spends.iter().map(|spend| spend / unit).collect();
            assert_same(&back, &before.spends, 1e-12);
            assert_same(
                &[after.shadow_prices[0] * unit],
                &before.shadow_prices,
                1e-12,
            );
        }
    }
}

#[test]
fn returns_in_another_unit_change_the_price_and_no_spend() {
    for size in SIZES {
        let plan = mixed_plan(size);
        let limit = plan.constraints()[0].limit;
        let before = solve(&plan).unwrap();
        let in_unit = |factor: f64, by_weight: bool| -> Vec<Activity> {
            let change = |activity: &Activity| match by_weight {
                true => Activity {
                    weight: factor,
                    ..activity.clone()
                },
                false => Activity {
                    curve: activity.curve.scaled(factor),
                    ..activity.clone()
                },
            };
            plan.activities().iter().map(change).collect()
        };
        for by_weight in [true, false] {
            let (_, after) = solved(in_unit(1000.0, by_weight), limit);
            assert_same(&after.spends, &before.spends, 1e-12);
            assert_same(
                &[after.shadow_prices[0] / 1000.0],
                &before.shadow_prices,
                1e-12,
            );
        }
    }
}

#[test]
fn a_base_moves_the_total_and_no_spend() {
    let plan = mixed_plan(60);
    let limit = plan.constraints()[0].limit;
    let before = solve(&plan).unwrap();
    let raised = plan
        .activities()
        .iter()
        .map(|a| Activity {
            base: 7.0,
            ..a.clone()
        })
        .collect();
    let (after_plan, after) = solved(raised, limit);
    assert_eq!(after, before);
    assert_same(
        &[after_plan.total(&after.spends) - plan.total(&before.spends)],
        &[7.0 * 60.0],
        1e-12,
    );
}

#[test]
fn the_order_of_the_rows_does_not_matter() {
    let mut random = ChaCha8Rng::seed_from_u64(3);
    for size in SIZES {
        let plan = mixed_plan(size);
        let before = solve(&plan).unwrap();
        let mut order: Vec<usize> = (0..size).collect();
        order.shuffle(&mut random);
        let activities = order
            .iter()
            .map(|&i| plan.activities()[i].clone())
            .collect();
        let (_, after) = solved(activities, plan.constraints()[0].limit);
        let expected: Vec<f64> = order.iter().map(|&i| before.spends[i]).collect();
        assert_same(&after.spends, &expected, 1e-12);
        assert_same(&after.shadow_prices, &before.shadow_prices, 1e-14);
    }
}

#[test]
fn an_activity_split_in_two_halves_gets_the_same_together() {
    let log = |gain: f64, scale: f64| {
        Activity::new(
            "log",
            Curve::Log(Log::new(LogParams { gain, scale }).unwrap()),
        )
    };
    // gain·ln(1 + x/scale) on x is what two of half the gain and half the scale give on x/2 each.
    let (_, whole) = solved(vec![log(6.0, 2.0), log(3.0, 1.0)], 5.0);
    let (_, halves) = solved(vec![log(3.0, 1.0), log(3.0, 1.0), log(3.0, 1.0)], 5.0);
    assert_same(
        &[halves.spends[0] + halves.spends[1]],
        &[whole.spends[0]],
        1e-14,
    );
    assert_same(&halves.shadow_prices, &whole.shadow_prices, 1e-14);
    assert_eq!(halves.spends[0], halves.spends[1]);
}

/// One of two activities that together return what this one does, each at half the spend.
fn half_of(activity: &Activity) -> Activity {
    let old = activity.curve.parameters();
    let family = activity.curve.family();
    let mut new = old;
    for (parameter, value) in old.iter() {
        let factor = match (family, parameter) {
            (Family::Power, Parameter::Gain) => {
                2_f64.powf(old.get(Parameter::Exponent).unwrap() - 1.0)
            }
            (_, Parameter::Curvature) => 2.0,
            (_, Parameter::Gain | Parameter::Ceiling | Parameter::Scale) => 0.5,
            _ => 1.0,
        };
        new = new.with(parameter, value * factor);
    }
    Activity {
        curve: Curve::from_parameters(family, &new).unwrap(),
        floor: activity.floor / 2.0,
        cap: activity.cap / 2.0,
        ..activity.clone()
    }
}

#[test]
fn every_activity_may_be_split_in_two_halves() {
    for size in SIZES {
        let plan = mixed_plan(size);
        let before = solve(&plan).unwrap();
        let halves = plan
            .activities()
            .iter()
            .flat_map(|a| [half_of(a), half_of(a)]);
        let (split, after) = solved(halves.collect(), plan.constraints()[0].limit);
        let joined: Vec<f64> = after
            .spends
            .chunks(2)
            .map(|pair| pair[0] + pair[1])
            .collect();
        assert_same(&joined, &before.spends, 1e-12);
        assert_same(&after.shadow_prices, &before.shadow_prices, 1e-12);
        let totals = [split.total(&after.spends), plan.total(&before.spends)];
        assert_same(&totals[..1], &totals[1..], 1e-12);
    }
}

#[test]
fn an_activity_that_earns_less_than_the_price_changes_nothing() {
    for size in SIZES {
        let plan = mixed_plan(size);
        let before = solve(&plan).unwrap();
        let slope = 0.99 * before.shadow_prices[0];
        let mut activities = plan.activities().to_vec();
        let curve = Curve::Linear(Linear::new(LinearParams { slope }).unwrap());
        activities.push(Activity::new("useless", curve));
        let (_, after) = solved(activities, plan.constraints()[0].limit);
        assert_same(&after.spends[..size], &before.spends, 1e-12);
        assert_eq!(after.spends[size], 0.0);
    }
}

#[test]
fn a_larger_budget_takes_from_no_one() {
    for size in SIZES {
        let plan = mixed_plan(size);
        let limit = plan.constraints()[0].limit;
        let before = solve(&plan).unwrap();
        let more = solve(&plan.with_limit(0, 1.1 * limit).unwrap()).unwrap();
        assert!(more.shadow_prices[0] <= before.shadow_prices[0]);
        for (more, before) in more.spends.iter().zip(&before.spends) {
            assert!(*more >= before - 1e-12 * before.max(1.0));
        }
    }
}
