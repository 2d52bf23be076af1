//! Plans large enough for sampling, narrowing and threads, against plain bisection.

#[path = "../benches/mixed_plan/mod.rs"]
mod mixed_plan;

use isomargin::curves::{Curve, Linear, LinearParams};
use isomargin::model::{Activity, Aim, Constraint, Problem};
use isomargin::solver::{demand_of, solve};
use mixed_plan::mixed_plan;

/// The textbook method, and nothing else: halve an interval of prices until it has no inside.
fn plainly_bisected_price(plan: &Problem) -> f64 {
    let demand = demand_of(plan).unwrap();
    let limit = plan.constraints()[0].limit;
    let (mut low, mut high) = (1e-9, 1e9);
    loop {
        let middle = f64::midpoint(low, high);
        if middle <= low || high <= middle {
            return middle;
        }
        if demand.at(middle).greatest >= limit {
            low = middle
        } else {
            high = middle
        }
    }
}

#[test]
fn the_quick_search_ends_at_the_plainly_bisected_price() {
    for count in [5_000, 20_000, 100_000, 700_000] {
        let plan = mixed_plan(count);
        let price = solve(&plan).unwrap().shadow_prices[0];
        let plain = plainly_bisected_price(&plan);
        assert!(
            (price / plain - 1.0).abs() <= 4.0 * f64::EPSILON,
            "{count}: {price} {plain}"
        );
    }
}

#[test]
fn the_budget_is_met_to_two_units_in_the_last_place_and_never_exceeded() {
    for count in [12, 1_000, 20_000, 300_000] {
        let plan = mixed_plan(count);
        let limit = plan.constraints()[0].limit;
        let used = plan.used(0, &solve(&plan).unwrap().spends);
        assert!(
            used <= limit && used >= limit * (1.0 - 2.0 * f64::EPSILON),
            "{used} {limit}"
        );
    }
}

#[test]
fn the_answer_has_the_same_bits_on_any_number_of_threads() {
    let plan = mixed_plan(100_000);
    let on = |threads| {
        let pool = rayon::ThreadPoolBuilder::new()
            .num_threads(threads)
            .build()
            .unwrap();
        pool.install(|| solve(&plan).unwrap())
    };
    let alone = on(1);
    assert_eq!(alone, on(2));
    assert_eq!(alone, on(4));
}

#[test]
fn a_hundred_thousand_tied_lines_share_evenly() {
    let line = |i: usize| {
        let curve = Curve::Linear(Linear::new(LinearParams { slope: 0.3 }).unwrap());
        let mut activity = Activity::new(format!("line {i}"), curve);
        activity.cap = 2.0;
        activity
    };
    let activities: Vec<Activity> = (0..100_000).map(line).collect();
    let plan = Problem::new(
        Aim::Maximise,
        activities,
        vec![Constraint::budget(50_000.0)],
    )
    .unwrap();
    let solution = solve(&plan).unwrap();
    assert_eq!(solution.shadow_prices, [0.3]);
    assert!(
        solution
            .spends
            .iter()
            .all(|&spend| (spend - 0.5).abs() < 1e-9)
    );
    assert_eq!(plan.used(0, &solution.spends), 50_000.0);
}
