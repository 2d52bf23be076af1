//! The price of a limit on both sides and the range over which it holds.

use isomargin::curves::{
    Curve, Exponential, ExponentialParams, Knot, Linear, LinearParams, Log, LogParams, Points,
    Power, PowerParams, Quadratic, QuadraticParams,
};
use isomargin::model::{Activity, Aim, Constraint, Position, Problem};
use isomargin::sensitivity::{ConstraintPrice, price_constraints};
use isomargin::solver::{demand_of, solve};
use rand::{Rng, SeedableRng};
use rand_chacha::ChaCha8Rng;

fn quadratic(slope: f64, curvature: f64, floor: f64, cap: f64) -> Activity {
    let curve = Quadratic::new(QuadraticParams { slope, curvature }).unwrap();
    bounded(Curve::Quadratic(curve), floor, cap)
}

fn linear(slope: f64, cap: f64) -> Activity {
    bounded(
        Curve::Linear(Linear::new(LinearParams { slope }).unwrap()),
        0.0,
        cap,
    )
}

fn bounded(curve: Curve, floor: f64, cap: f64) -> Activity {
    Activity {
        floor,
        cap,
        ..Activity::new("activity", curve)
    }
}

fn price_at(aim: Aim, activities: &[Activity], constraint: Constraint) -> ConstraintPrice {
    let plan = Problem::new(aim, activities.to_vec(), vec![constraint]).unwrap();
    let solution = solve(&plan).unwrap();
    price_constraints(&plan, &solution, &demand_of(&plan).unwrap())[0]
}

#[test]
fn a_dispatch_price_holds_between_the_published_corner_loads() {
    // Two generating units, course slides on economic dispatch by B. Manhire, Ohio University:
    // 0.01P² + 2P + 100 on [25, 150] and 0.004P² + 2.6P + 80 on [30, 200]. Unit 2 leaves its
    // floor at a total of 72 (price 2.84) and meets its cap at 310 (price 4.20).
    let units = [
        quadratic(2.0, 0.02, 25.0, 150.0),
        quadratic(2.6, 0.008, 30.0, 200.0),
    ];
    let price = price_at(Aim::Minimise, &units, Constraint::requirement(125.0));
    assert!((price.shadow_price - 3.142_857_142_857_143).abs() < 1e-12); // recomputed
    assert!((price.holds_from.unwrap() - 72.0).abs() < 1e-9);
    assert!((price.holds_to.unwrap() - 310.0).abs() < 1e-9);
    assert_eq!(price.one_more, Some(price.shadow_price));

    // Beyond 310 only unit 1 moves, up to 350, where no plan meets more.
    let price = price_at(Aim::Minimise, &units, Constraint::requirement(320.0));
    assert!((price.holds_from.unwrap() - 310.0).abs() < 1e-9);
    assert!((price.holds_to.unwrap() - 350.0).abs() < 1e-9);
    let price = price_at(Aim::Minimise, &units, Constraint::requirement(350.0));
    assert_eq!(price.one_more, None);
    assert!((price.one_less.unwrap() - 5.0).abs() < 1e-12); // unit 1 at its cap: 2 + 0.02·150
}

#[test]
fn a_water_user_enters_at_the_published_total() {
    // Loucks and van Beek, Water Resource Systems Planning and Management, ch. 4 (from memory):
    // benefits 6x − x², 7x − 1.5x², 8x − 0.5x²; user 1 gets nothing up to a total of 2⅓.
    let users = [
        quadratic(6.0, -2.0, 0.0, f64::INFINITY),
        quadratic(7.0, -3.0, 0.0, f64::INFINITY),
        quadratic(8.0, -1.0, 0.0, f64::INFINITY),
    ];
    let price = price_at(Aim::Maximise, &users, Constraint::budget(2.0));
    assert!((price.holds_to.unwrap() - 7.0 / 3.0).abs() < 1e-12);
    // From there on everybody takes part until all are satisfied at 3 + 7/3 + 8.
    let price = price_at(Aim::Maximise, &users, Constraint::budget(6.0));
    assert!((price.holds_from.unwrap() - 7.0 / 3.0).abs() < 1e-12);
    assert!((price.holds_to.unwrap() - 40.0 / 3.0).abs() < 1e-12);
    let price = price_at(Aim::Maximise, &users, Constraint::budget(20.0));
    assert_eq!((price.shadow_price, price.binding), (0.0, false));
    assert!((price.holds_from.unwrap() - 40.0 / 3.0).abs() < 1e-12);
    assert_eq!(price.holds_to, None);
}

#[test]
fn a_straight_piece_keeps_its_price_from_empty_to_full() {
    let lines = [linear(3.0, 4.0), linear(2.0, 5.0), linear(1.0, 9.0)];
    let price = price_at(Aim::Maximise, &lines, Constraint::budget(6.0));
    assert_eq!((price.one_more, price.one_less), (Some(2.0), Some(2.0)));
    assert_eq!((price.holds_from, price.holds_to), (Some(4.0), Some(9.0)));
    // At a corner one more unit goes to the next line and one less is taken from the last.
    let price = price_at(Aim::Maximise, &lines, Constraint::budget(9.0));
    assert_eq!((price.one_more, price.one_less), (Some(1.0), Some(2.0)));
    assert_eq!((price.holds_from, price.holds_to), (Some(9.0), Some(9.0)));
    // With everything full one more unit is left over; with nothing to take, no plan has less.
    let price = price_at(Aim::Maximise, &lines, Constraint::budget(18.0));
    assert_eq!((price.one_more, price.one_less), (Some(0.0), Some(1.0)));
    let price = price_at(Aim::Maximise, &lines, Constraint::budget(0.0));
    assert_eq!((price.one_more, price.one_less), (Some(3.0), None));
}

#[test]
fn the_first_unit_of_a_vertical_curve_is_worth_without_bound() {
    let power = Power::new(PowerParams {
        gain: 1.0,
        exponent: 0.5,
    })
    .unwrap();
    let activities = [bounded(Curve::Power(power), 0.0, f64::INFINITY)];
    let price = price_at(Aim::Maximise, &activities, Constraint::budget(0.0));
    assert_eq!(
        (price.one_more, price.one_less),
        (Some(f64::INFINITY), None)
    );
}

fn random_activities(random: &mut ChaCha8Rng) -> Vec<Activity> {
    (0..random.random_range(1..12))
        .map(|i| {
            let marginal = random.random_range(0.5..4.0);
            let scale = random.random_range(0.5..4.0);
            let cap = random.random_range(1.0..5.0);
            let floor = if random.random_bool(0.3) {
                random.random_range(0.0..0.8)
            } else {
                0.0
            };
            match i % 4 {
                0 => linear(f64::from(random.random_range(1..4)), cap),
                1 => {
                    let given = LogParams {
                        gain: marginal * scale,
                        scale,
                    };
                    bounded(Curve::Log(Log::new(given).unwrap()), floor, cap)
                }
                2 => {
                    let given = ExponentialParams {
                        ceiling: marginal * scale,
                        scale,
                    };
                    bounded(
                        Curve::Exponential(Exponential::new(given).unwrap()),
                        floor,
                        f64::INFINITY,
                    )
                }
                _ => {
                    let knots = [(0.0, 0.0), (1.0, 3.0), (2.0, 5.0), (4.0, 7.0)]
                        .map(|(spend, value)| Knot { spend, value });
                    bounded(Curve::Points(Points::new(&knots).unwrap()), 0.0, 4.0)
                }
            }
        })
        .collect()
}

/// Where every activity stands, a knot counting as a place of its own.
fn places(plan: &Problem) -> Vec<(Position, Option<u64>)> {
    let spends = solve(plan).unwrap().spends;
    (0..spends.len())
        .map(|i| {
            let knot = match &plan.activities()[i].curve {
                Curve::Points(points) => points
                    .knots()
                    .find(|knot| (knot.spend - spends[i]).abs() < 1e-9),
                _ => None,
            };
            (
                plan.activities()[i].position(spends[i]),
                knot.map(|knot| knot.spend.to_bits()),
            )
        })
        .collect()
}

#[test]
fn prices_are_the_slopes_of_re_solved_totals() {
    let mut random = ChaCha8Rng::seed_from_u64(41);
    for _ in 0..300 {
        let activities = random_activities(&mut random);
        let floors: f64 = activities.iter().map(|activity| activity.floor).sum();
        // Whole budgets beside whole knots and caps meet corners often.
        let limit = floors + f64::from(random.random_range(1..12));
        let total_at = |limit: f64| {
            let plan = Problem::new(
                Aim::Maximise,
                activities.clone(),
                vec![Constraint::budget(limit)],
            )
            .unwrap();
            plan.total(&solve(&plan).unwrap().spends)
        };
        let price = price_at(Aim::Maximise, &activities, Constraint::budget(limit));
        let step = 1e-6;
        let rise = (total_at(limit + step) - total_at(limit)) / step;
        let fall = (total_at(limit) - total_at(limit - step)) / step;
        assert!(
            (rise - price.one_more.unwrap()).abs() < 1e-5,
            "{rise} {price:?}"
        );
        assert!(
            (fall - price.one_less.unwrap()).abs() < 1e-5,
            "{fall} {price:?}"
        );
        assert!(price.one_more.unwrap() <= price.shadow_price);
        assert!(price.shadow_price <= price.one_less.unwrap());
    }
}

#[test]
fn the_same_bounds_bind_within_the_range_and_others_beyond_it() {
    let mut random = ChaCha8Rng::seed_from_u64(43);
    let mut looked_beyond = 0;
    for _ in 0..300 {
        let activities = random_activities(&mut random);
        let floors: f64 = activities.iter().map(|activity| activity.floor).sum();
        let limit = floors + random.random_range(0.1..15.0);
        let plan_at = |limit: f64| {
            Problem::new(
                Aim::Maximise,
                activities.clone(),
                vec![Constraint::budget(limit)],
            )
            .unwrap()
        };
        let price = price_at(Aim::Maximise, &activities, Constraint::budget(limit));
        if !price.binding || price.holds_from == price.holds_to {
            continue;
        }
        let here = places(&plan_at(limit));
        let from = price.holds_from.unwrap();
        let to = price.holds_to.unwrap_or(limit + 50.0);
        for inside in [from + 0.01 * (limit - from), to - 0.01 * (to - limit)] {
            assert_eq!(places(&plan_at(inside)), here, "{inside} in {price:?}");
        }
        let below = from - 1e-6;
        if below > floors {
            assert_ne!(places(&plan_at(below)), here, "{below} under {price:?}");
            looked_beyond += 1;
        }
        if price.holds_to.is_some() {
            let above = to + 1e-6;
            let others = places(&plan_at(above)) != here;
            assert!(others || solve(&plan_at(above)).unwrap().shadow_prices[0] == 0.0);
            looked_beyond += 1;
        }
    }
    assert!(looked_beyond > 200);
}
