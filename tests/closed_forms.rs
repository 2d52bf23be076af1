//! Answers that a formula gives, corners, and the ends of what can be asked.

use isomargin::certificate::{CrossCheck, Verdict, certify};
use isomargin::curves::{
    Curve, Exponential, ExponentialParams, Hill, HillParams, Knot, Linear, LinearParams, Log,
    LogParams, Logistic, LogisticParams, Points, Power, PowerParams, Quadratic, QuadraticParams,
    ReturnCurve,
};
use isomargin::model::{Activity, Aim, Constraint, Problem, Sense, Solution};
use isomargin::solver::{SolveError, solve};
use rand::{Rng, SeedableRng};
use rand_chacha::ChaCha8Rng;

#[path = "../benches/mixed_plan/mod.rs"]
mod mixed_plan;

fn log(gain: f64, scale: f64) -> Activity {
    Activity::new(
        "log",
        Curve::Log(Log::new(LogParams { gain, scale }).unwrap()),
    )
}

fn linear(slope: f64, cap: f64) -> Activity {
    let curve = Curve::Linear(Linear::new(LinearParams { slope }).unwrap());
    Activity {
        cap,
        ..Activity::new("linear", curve)
    }
}

fn quadratic(slope: f64, curvature: f64) -> Activity {
    let curve = Quadratic::new(QuadraticParams { slope, curvature }).unwrap();
    Activity::new("quadratic", Curve::Quadratic(curve))
}

fn answered(aim: Aim, activities: Vec<Activity>, constraint: Constraint) -> (Problem, Solution) {
    let plan = Problem::new(aim, activities, vec![constraint]).unwrap();
    let solution = solve(&plan).unwrap();
    let certificate = certify(&plan, &solution, CrossCheck::WhenQuick);
    assert_eq!(certificate.verdict, Verdict::Proven, "{certificate:?}");
    (plan, solution)
}

fn budget(limit: f64) -> Constraint {
    Constraint::budget(limit)
}

#[test]
fn a_chosen_price_is_recovered_from_the_budget_that_it_asks_for() {
    for count in [1, 2, 12, 300, 20_000] {
        let plan = mixed_plan::mixed_plan(count);
        for price in [0.2, 0.6, 0.9, 1.4, 2.5] {
            // Linear activities take all or nothing at this price, so the demand is one number.
            let spend = |i: usize| {
                let activity = &plan.activities()[i];
                activity
                    .curve
                    .inverse_marginal(price)
                    .clipped(activity.floor, activity.cap)
                    .least
            };
            let spends: Vec<f64> = (0..count).map(spend).collect();
            let limit = plan.used(0, &spends);
            let free = |i: &usize| {
                let activity = &plan.activities()[*i];
                activity.floor < spends[*i] && spends[*i] < activity.cap
            };
            if !(0..count).any(|i| free(&i)) {
                continue;
            }
            let solution = solve(&plan.with_limit(0, limit).unwrap()).unwrap();
            let found = solution.shadow_prices[0];
            assert!(
                (found / price - 1.0).abs() <= 1e-12,
                "{count}: {found} {price}"
            );
            for (found, spend) in solution.spends.iter().zip(&spends) {
                assert!(
                    (found - spend).abs() <= 1e-9 * spend.max(1.0),
                    "{count} {price}"
                );
            }
        }
    }
}

#[test]
fn effort_in_a_plane_search_follows_the_closed_form() {
    // L. D. Stone, Theory of Optimal Search, 1975, example 2.2.7 (formula from memory): a target
    // with a circular normal distribution of deviation σ, exponential detection. The density of
    // effort at distance r from the centre is (R² − r²)/2σ² within R and nothing beyond, where
    // R⁴ = 4σ²·K/π for an effort of K (search rate 1).
    let (sigma, effort, half, side) = (1.0, 6.0, 6.0, 241_usize);
    let step = 2.0 * half / side as f64;
    let area = step * step;
    let distance_squared = |i: usize| {
        let coordinate = |at: usize| -half + (at as f64 + 0.5) * step;
        coordinate(i % side).powi(2) + coordinate(i / side).powi(2)
    };
    let cells: Vec<Activity> = (0..side * side)
        .map(|i| {
            let density = (-distance_squared(i) / (2.0 * sigma * sigma)).exp()
                / (2.0 * std::f64::consts::PI * sigma * sigma);
            // Effort spread over a cell detects with 1 − e^(−effort/area).
            let given = ExponentialParams {
                ceiling: density * area,
                scale: area,
            };
            Activity::new("cell", Curve::Exponential(Exponential::new(given).unwrap()))
        })
        .collect();
    let (_, solution) = answered(Aim::Maximise, cells, budget(effort));
    let radius_squared = (4.0 * sigma * sigma * effort / std::f64::consts::PI).sqrt();
    let mut searched = 0;
    for (i, &spend) in solution.spends.iter().enumerate() {
        let expected = (radius_squared - distance_squared(i)).max(0.0) / (2.0 * sigma * sigma);
        // The grid's own error: a band of cells along the rim.
        assert!(
            (spend / area - expected).abs() <= 0.02,
            "{i}: {} {expected}",
            spend / area
        );
        searched += usize::from(spend > 0.0);
    }
    let share = searched as f64 * area / (std::f64::consts::PI * radius_squared);
    assert!((share - 1.0).abs() < 0.01, "{share}");
}

#[test]
fn ties_meet_the_budget_to_the_last_unit() {
    let mut random = ChaCha8Rng::seed_from_u64(5);
    for _ in 0..500 {
        let count = random.random_range(1..30);
        let lines: Vec<Activity> = (0..count)
            .map(|_| {
                linear(
                    f64::from(random.random_range(1..4)),
                    random.random_range(0.1..7.0),
                )
            })
            .collect();
        let caps: f64 = lines.iter().map(|line| line.cap).sum();
        let limit = random.random_range(0.0..1.0) * caps;
        let (plan, solution) = answered(Aim::Maximise, lines, budget(limit));
        let used = plan.used(0, &solution.spends);
        assert!(
            used <= limit && used >= limit * (1.0 - 2.0 * f64::EPSILON),
            "{used} {limit}"
        );
        assert_eq!(
            solution.shadow_prices[0].fract(),
            0.0,
            "a line's slope is the price"
        );
    }
}

#[test]
fn tied_activities_share_what_is_left_in_proportion_to_their_room() {
    let (_, solution) = answered(
        Aim::Maximise,
        vec![linear(2.0, 6.0), linear(2.0, 3.0), linear(1.0, 9.0)],
        budget(6.0),
    );
    assert_eq!(solution.spends, [4.0, 2.0, 0.0]);
    assert_eq!(solution.shadow_prices, [2.0]);
    // Lines without a cap could each take all that is left.
    let without = f64::INFINITY;
    let (_, solution) = answered(
        Aim::Maximise,
        vec![linear(2.0, without), linear(2.0, without)],
        budget(6.0),
    );
    assert_eq!(solution.spends, [3.0, 3.0]);
}

#[test]
fn a_line_among_thousands_sets_the_price() {
    // So many activities are priced from a sample first. An uncapped line that is not in it asks
    // for everything below its price, and nothing on the way there tells how far it is.
    for (slope, cap) in [(1.5, f64::INFINITY), (1.5, 1e9), (0.1, f64::INFINITY)] {
        let mut activities: Vec<Activity> = (0..10_000)
            .map(|i| {
                log(
                    1.0 + f64::from(i % 101) / 50.0,
                    1.0 + f64::from(i % 89) / 44.0,
                )
            })
            .collect();
        activities.insert(77, linear(slope, cap));
        let asked_by_others: f64 = activities
            .iter()
            .map(|activity| activity.curve.inverse_marginal(slope).least)
            .filter(|spend| spend.is_finite())
            .sum();
        let limit = asked_by_others + 100.0;
        let (plan, solution) = answered(Aim::Maximise, activities, budget(limit));
        assert_eq!(solution.shadow_prices, [slope]);
        assert!((solution.spends[77] - 100.0).abs() < 1e-6);
        assert!((plan.used(0, &solution.spends) / limit - 1.0).abs() < 1e-15);
    }
}

#[test]
fn a_budget_that_ends_on_a_knot_leaves_the_spend_on_it() {
    let knots = [(0.0, 0.0), (1.1, 5.0), (2.3, 8.0), (4.0, 9.0)]
        .map(|(spend, value)| Knot { spend, value });
    let curve = Points::new(&knots).unwrap();
    let table = Activity {
        cap: 4.0,
        ..Activity::new("table", Curve::Points(curve))
    };
    for limit in [1.1, 2.3, 4.0] {
        let (_, solution) = answered(Aim::Maximise, vec![table.clone()], budget(limit));
        assert_eq!(solution.spends, [limit]);
    }
}

#[test]
fn a_straight_table_spends_no_more_than_the_budget() {
    // Rounding makes some slopes of such a table rise.
    let knots: Vec<Knot> = (0..=10)
        .map(|i| Knot {
            spend: f64::from(i) / 10.0,
            value: f64::from(3 * i) / 10.0,
        })
        .collect();
    let curve = Points::new(&knots).unwrap();
    let table = Activity {
        cap: 1.0,
        ..Activity::new("table", Curve::Points(curve))
    };
    for limit in [0.05, 0.25, 0.3, 0.7, 0.99] {
        let rival = Activity {
            floor: 0.0,
            ..linear(2.0, 5.0)
        };
        let (_, solution) = answered(Aim::Maximise, vec![table.clone(), rival], budget(limit));
        assert_eq!(solution.spends, [limit, 0.0]);
        assert!((solution.shadow_prices[0] - 3.0).abs() < 1e-14);
    }
}

#[test]
fn decimal_bounds_that_add_up_to_the_limit_leave_everyone_at_a_bound() {
    // 0.1 + 0.2 exceeds 0.3 in binary numbers, and 0.1 + 0.7 falls short of 0.8.
    let mut random = ChaCha8Rng::seed_from_u64(8);
    let cents = |cents: i32| f64::from(cents) / 100.0;
    let mut inexact = 0;
    for round in 0..600 {
        let floors: Vec<i32> = (0..random.random_range(2..9))
            .map(|_| random.random_range(1..100_000))
            .collect();
        let limit = cents(floors.iter().sum());
        let sum: f64 = floors.iter().map(|&floor| cents(floor)).sum();
        inexact += usize::from(sum != limit);
        let sense = [Sense::AtMost, Sense::Equal][round % 2];
        let mut activities: Vec<Activity> = floors
            .iter()
            .map(|&floor| Activity {
                floor: cents(floor),
                ..log(2.0, 1.0)
            })
            .collect();
        if round % 3 == 0 {
            let steep = PowerParams {
                gain: 1.0,
                exponent: 0.5,
            };
            let curve = Curve::Power(Power::new(steep).unwrap());
            activities.push(Activity::new("steep", curve));
        }
        let floors: Vec<f64> = activities.iter().map(|activity| activity.floor).collect();
        let constraint = Constraint {
            sense,
            ..budget(limit)
        };
        let (_, solution) = answered(Aim::Maximise, activities, constraint);
        assert_eq!(solution.spends, floors);

        let caps: Vec<f64> = floors.into_iter().filter(|&cap| cap > 0.0).collect();
        for (aim, sense, sign) in [
            (Aim::Maximise, Sense::AtMost, -1.0),
            (Aim::Maximise, Sense::Equal, -1.0),
            (Aim::Minimise, Sense::AtLeast, 1.0),
        ] {
            let capped = caps.iter().map(|&cap| Activity {
                cap,
                ..quadratic(3000.0, sign)
            });
            let constraint = Constraint {
                sense,
                ..budget(limit)
            };
            let (_, solution) = answered(aim, capped.collect(), constraint);
            assert_eq!(solution.spends, caps);
        }
    }
    assert!(inexact > 60, "{inexact}");
}

#[test]
fn a_saturated_curve_takes_what_others_need_not() {
    // The equation leaves the logistic a spend at which its next unit earns nothing that can be
    // told from zero; at that price the hill takes all that its cap allows, 90 % of its ceiling.
    let hill = HillParams {
        ceiling: 100.0,
        scale: 1.0,
        steepness: 2.0,
    };
    let logistic = LogisticParams {
        ceiling: 1.0,
        scale: 0.01,
        midpoint: 0.0,
    };
    let activities = vec![
        Activity {
            floor: 1.0,
            cap: 3.0,
            ..Activity::new("hill", Curve::Hill(Hill::new(hill).unwrap()))
        },
        Activity::new(
            "logistic",
            Curve::Logistic(Logistic::new(logistic).unwrap()),
        ),
    ];
    let (plan, solution) = answered(
        Aim::Maximise,
        activities,
        Constraint {
            sense: Sense::Equal,
            ..budget(1000.0)
        },
    );
    assert_eq!(solution.spends, [3.0, 997.0]);
    assert!((plan.total(&solution.spends) - 90.5).abs() < 1e-12);
}

#[test]
fn one_activity_takes_what_it_may() {
    for (cap, limit, spend) in [(f64::INFINITY, 7.0, 7.0), (3.0, 7.0, 3.0), (7.0, 7.0, 7.0)] {
        let (_, solution) = answered(
            Aim::Maximise,
            vec![Activity {
                cap,
                ..log(2.0, 1.0)
            }],
            budget(limit),
        );
        assert_eq!(solution.spends, [spend]);
        assert_eq!(solution.shadow_prices[0] == 0.0, cap <= limit);
    }
}

#[test]
fn budgets_at_the_sum_of_floors_and_of_caps_leave_everyone_at_a_bound() {
    let activities = || {
        vec![
            Activity {
                floor: 0.1,
                cap: 0.3,
                ..log(2.0, 1.0)
            },
            Activity {
                floor: 0.2,
                cap: 0.7,
                ..log(1.0, 3.0)
            },
            Activity {
                floor: 0.7,
                cap: 1.1,
                ..quadratic(3.0, -1.0)
            },
        ]
    };
    let sum = |bound: &dyn Fn(&Activity) -> f64| activities().iter().map(bound).sum::<f64>();
    let floors = sum(&|activity| activity.floor);
    let (_, solution) = answered(Aim::Maximise, activities(), budget(floors));
    assert_eq!(solution.spends, [0.1, 0.2, 0.7]);
    // The best first unit: 3 − 0.7 of the quadratic against 2/1.1 and 1/3.2.
    assert!((solution.shadow_prices[0] - 2.3).abs() < 1e-14);
    let caps = sum(&|activity| activity.cap);
    for sense in [Sense::AtMost, Sense::Equal] {
        let (_, solution) = answered(
            Aim::Maximise,
            activities(),
            Constraint {
                sense,
                ..budget(caps)
            },
        );
        assert_eq!(solution.spends, [0.3, 0.7, 1.1]);
    }
}

#[test]
fn money_that_none_can_use_is_left_at_price_zero() {
    let (plan, solution) = answered(
        Aim::Maximise,
        vec![quadratic(4.0, -2.0), linear(0.0, 5.0)],
        budget(10.0),
    );
    assert_eq!(solution.spends, [2.0, 0.0]);
    assert_eq!(solution.shadow_prices, [0.0]);
    assert_eq!(plan.used(0, &solution.spends), 2.0);
    // An exponential never saturates on paper; in numbers it earns nothing from some spend on.
    let given = ExponentialParams {
        ceiling: 1.0,
        scale: 1.0,
    };
    let curve = Curve::Exponential(Exponential::new(given).unwrap());
    let (_, solution) = answered(Aim::Maximise, vec![Activity::new("e", curve)], budget(1e6));
    assert_eq!(solution.shadow_prices, [0.0]);
}

#[test]
fn limits_that_the_bounds_forbid_are_refused_with_what_would_work() {
    let activities = || {
        vec![
            Activity {
                floor: 2.0,
                cap: 5.0,
                ..quadratic(1.0, 1.0)
            },
            Activity {
                floor: 1.0,
                cap: 4.0,
                ..quadratic(2.0, 1.0)
            },
        ]
    };
    let refused = |sense, limit| {
        let constraint = Constraint {
            sense,
            ..budget(limit)
        };
        solve(&Problem::new(Aim::Minimise, activities(), vec![constraint]).unwrap()).unwrap_err()
    };
    for (sense, limit) in [
        (Sense::AtMost, 2.9),
        (Sense::Equal, 2.9),
        (Sense::Equal, 9.1),
        (Sense::AtLeast, 9.1),
    ] {
        let expected = SolveError::Infeasible {
            constraint: 0,
            limit,
            least_use: 3.0,
            greatest_use: 9.0,
        };
        assert_eq!(refused(sense, limit), expected);
    }
}

#[test]
fn a_curve_without_a_value_at_zero_is_not_left_there() {
    let sampling = Power::new(PowerParams {
        gain: -4.0,
        exponent: -1.0,
    })
    .unwrap();
    let activity = || Activity::new("stratum", Curve::Power(sampling));
    let (_, solution) = answered(
        Aim::Maximise,
        vec![activity(), log(100.0, 1.0)],
        budget(0.5),
    );
    assert!(solution.spends[0] > 0.0);
    let plan = Problem::new(Aim::Maximise, vec![activity()], vec![budget(0.0)]).unwrap();
    assert_eq!(solve(&plan), Err(SolveError::NoFiniteTotal { activity: 0 }));
}

#[test]
fn a_cost_that_falls_without_end_is_refused() {
    let plan = Problem::new(
        Aim::Minimise,
        vec![linear(-1.0, f64::INFINITY)],
        vec![Constraint::requirement(1.0)],
    )
    .unwrap();
    assert_eq!(solve(&plan), Err(SolveError::Unbounded { activity: 0 }));
}

#[test]
fn parameters_of_any_size_are_proven() {
    let mut random = ChaCha8Rng::seed_from_u64(12);
    let mut size = || 10_f64.powf(random.random_range(-12.0..12.0));
    for _ in 0..300 {
        let exponential = ExponentialParams {
            ceiling: size(),
            scale: size(),
        };
        let activities = vec![
            log(size(), size()),
            quadratic(size(), -size()),
            Activity::new(
                "e",
                Curve::Exponential(Exponential::new(exponential).unwrap()),
            ),
            linear(size(), size()),
            Activity::new(
                "p",
                Curve::Power(
                    Power::new(PowerParams {
                        gain: size(),
                        exponent: 0.4,
                    })
                    .unwrap(),
                ),
            ),
        ];
        let limit = size();
        let (plan, solution) = answered(Aim::Maximise, activities, budget(limit));
        assert!(plan.used(0, &solution.spends) <= limit);
    }
}

#[test]
fn no_price_however_wild_proves_money_left_unspent() {
    // The first unit of a power curve is worth without bound, and 4e-10 of the budget is left.
    for count in [1, 2500] {
        let mut activities: Vec<Activity> = (0..count)
            .map(|_| Activity {
                floor: 1.0,
                ..linear(1.0, 2.0)
            })
            .collect();
        let steep = PowerParams {
            gain: f64::from(count),
            exponent: 0.05,
        };
        let steep = Power::new(steep).unwrap();
        activities.push(Activity::new("steep", Curve::Power(steep)));
        let mut spends = vec![1.0; activities.len()];
        spends[activities.len() - 1] = 0.0;
        let limit = f64::from(count) * (1.0 + 4e-10);
        let plan = Problem::new(Aim::Maximise, activities, vec![budget(limit)]).unwrap();
        let best = plan.total(&solve(&plan).unwrap().spends);
        assert!(best > 1.3 * plan.total(&spends));
        for price in [1.0, 1e8, 1e100, 1e300, f64::INFINITY] {
            let claim = Solution {
                spends: spends.clone(),
                shadow_prices: vec![price],
            };
            let certificate = certify(&plan, &claim, CrossCheck::WhenQuick);
            assert_eq!(certificate.verdict, Verdict::NotProven, "{certificate:?}");
        }
    }
}
