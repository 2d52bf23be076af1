//! One budget or requirement against answers that others have published.
//!
//! Every case goes through the whole main job: solve, certify, price. A number with more digits
//! than its source prints was recomputed from the printed data by a quadratic programme.

use isomargin::certificate::{CrossCheck, Verdict, certify};
use isomargin::curves::{
    Curve, Exponential, ExponentialParams, Hyperbolic, HyperbolicParams, Log, LogParams, Power,
    PowerParams, Quadratic, QuadraticParams,
};
use isomargin::model::{Activity, Aim, Constraint, Problem, Solution, UsePerUnit};
use isomargin::solver::solve;

fn quadratic(slope: f64, curvature: f64) -> Activity {
    let curve = Quadratic::new(QuadraticParams { slope, curvature }).unwrap();
    Activity::new("quadratic", Curve::Quadratic(curve))
}

/// A generating unit of cost a + bP + cP² between two loads.
fn unit([a, b, c]: [f64; 3], [floor, cap]: [f64; 2]) -> Activity {
    Activity {
        base: a,
        floor,
        cap,
        ..quadratic(b, 2.0 * c)
    }
}

fn log(gain: f64, scale: f64) -> Activity {
    Activity::new(
        "log",
        Curve::Log(Log::new(LogParams { gain, scale }).unwrap()),
    )
}

fn power(gain: f64, exponent: f64) -> Activity {
    let curve = Power::new(PowerParams { gain, exponent }).unwrap();
    Activity::new("power", Curve::Power(curve))
}

/// The plan's answer, proven.
fn proven(aim: Aim, activities: Vec<Activity>, constraint: Constraint) -> (Problem, Solution) {
    let plan = Problem::new(aim, activities, vec![constraint]).unwrap();
    let solution = solve(&plan).unwrap();
    let certificate = certify(&plan, &solution, CrossCheck::WhenQuick);
    assert_eq!(certificate.verdict, Verdict::Proven, "{certificate:?}");
    assert!(certificate.gap <= 1e-9);
    (plan, solution)
}

#[track_caller]
fn assert_close(found: &[f64], published: &[f64], tolerance: f64) {
    assert_eq!(found.len(), published.len());
    for (found, published) in found.iter().zip(published) {
        let near = (found - published).abs() <= tolerance;
        assert!(near, "{found} is not {published} to {tolerance}");
    }
}

/// Least-cost dispatch of units to a total load.
fn dispatched(units: Vec<Activity>, load: f64) -> (f64, Vec<f64>, f64) {
    let (plan, solution) = proven(Aim::Minimise, units, Constraint::requirement(load));
    (
        plan.total(&solution.spends),
        solution.spends,
        solution.shadow_prices[0],
    )
}

#[test]
fn three_units_share_a_load_as_wood_and_wollenberg_print_it() {
    // A. J. Wood and B. F. Wollenberg, Power Generation, Operation and Control, 2nd ed. 1996,
    // Example 3A: 393.2, 334.6 and 122.2, cost 8194.356; the price 9.148 from memory.
    let units = || {
        vec![
            unit([561.0, 7.92, 0.001562], [150.0, 600.0]),
            unit([310.0, 7.85, 0.00194], [100.0, 400.0]),
            unit([78.0, 7.97, 0.00482], [50.0, 200.0]),
        ]
    };
    let (cost, loads, price) = dispatched(units(), 850.0);
    assert_close(&loads, &[393.2, 334.6, 122.2], 0.05);
    assert_close(&[cost], &[8194.356], 5e-4);
    assert_close(&[price], &[9.148], 5e-4);
    // Recomputed.
    assert_close(
        &loads,
        &[393.169_836_945_6, 334.603_755_313_9, 122.226_407_740_5],
        1e-7,
    );
    assert_close(&[price], &[9.148_262_570_618], 1e-9);

    // Example 3B, cheaper fuel for unit 1 and limits on (from memory): 600, 187.1, 62.9 at a
    // price of 8.576, while unit 1 at its cap costs 8.016 at the margin.
    let mut cheaper = units();
    cheaper[0] = unit([459.0, 6.48, 0.001278], [150.0, 600.0]);
    let (_, loads, price) = dispatched(cheaper, 850.0);
    assert_close(&loads, &[600.0, 187.1, 62.9], 0.05);
    assert_close(&[price], &[8.576], 5e-4);
    assert_close(&[price], &[8.576_065_088_757], 1e-9); // recomputed
    assert_close(&[6.48 + 2.0 * 0.001278 * 600.0], &[8.016], 5e-3);
}

#[test]
fn units_at_both_bounds_leave_one_to_set_the_price() {
    // Gupta, Power System Operation and Control, Example 2.17: 600, 150 and 50 at 8.37.
    let units = vec![
        unit([450.0, 6.5, 0.0013], [100.0, 600.0]),
        unit([300.0, 7.8, 0.0019], [50.0, 400.0]),
        unit([80.0, 8.1, 0.005], [50.0, 200.0]),
    ];
    let (cost, loads, price) = dispatched(units, 800.0);
    assert_close(&loads, &[600.0, 150.0, 50.0], 1e-9);
    assert_close(&[price], &[8.37], 1e-12);
    assert_close(&[cost], &[6828.25], 1e-8); // recomputed
}

#[test]
fn two_units_without_caps_share_as_recomputed_from_gupta() {
    // The same, Example 2.13: 2000 + 20P + 0.05P² and 2750 + 26P + 0.03091P², load 900;
    // loads and price recomputed from the printed data.
    let free = [0.0, f64::INFINITY];
    let units = vec![
        unit([2000.0, 20.0, 0.05], free),
        unit([2750.0, 26.0, 0.03091], free),
    ];
    let (_, loads, price) = dispatched(units, 900.0);
    assert_close(&loads, &[380.904_708_935_5, 519.095_291_064_1], 1e-7);
    assert_close(&[price], &[58.090_470_893_55], 1e-9);
}

#[test]
fn saadats_units_share_to_whole_numbers() {
    // H. Saadat, Power System Analysis, 1999, Examples 7.4 and 7.5 (from memory): 400, 250, 150
    // at a price of 8.5 and a cost of 6682.5, without limits and with limits that do not bind.
    for bounds in [
        [[0.0, f64::INFINITY]; 3],
        [[200.0, 450.0], [150.0, 350.0], [100.0, 225.0]],
    ] {
        let units = vec![
            unit([500.0, 5.3, 0.004], bounds[0]),
            unit([400.0, 5.5, 0.006], bounds[1]),
            unit([200.0, 5.8, 0.009], bounds[2]),
        ];
        let (cost, loads, price) = dispatched(units, 800.0);
        assert_close(&loads, &[400.0, 250.0, 150.0], 1e-9);
        assert_close(&[price, cost], &[8.5, 6682.5], 1e-9);
    }
}

#[test]
fn the_price_turns_at_the_published_corner_loads() {
    // Manhire, Ohio University, course slides on economic dispatch: unit 2 leaves its floor at a
    // load of 72 (price 2.84) and meets its cap at 310 (price 4.20).
    let units = || {
        vec![
            unit([100.0, 2.0, 0.01], [25.0, 150.0]),
            unit([80.0, 2.6, 0.004], [30.0, 200.0]),
        ]
    };
    let (_, loads, price) = dispatched(units(), 72.0);
    assert_close(&loads, &[42.0, 30.0], 1e-9);
    assert_close(&[price], &[2.84], 1e-12);
    let (_, loads, price) = dispatched(units(), 310.0);
    assert_close(&loads, &[110.0, 200.0], 1e-9);
    assert_close(&[price], &[4.20], 1e-12);
    // Between them, recomputed.
    let (_, loads, _) = dispatched(units(), 125.0);
    assert_close(&loads, &[57.142_857_142_86, 67.857_142_857_14], 1e-9);
}

#[test]
fn two_quadratic_units_have_a_price_linear_in_the_load() {
    // J. D. Glover, M. S. Sarma and T. J. Overbye, Power System Analysis and Design, 5th ed.,
    // Example 12.6: 10P + 0.008P² and 8P + 0.009P². The slope .0084705882 follows from the data.
    let free = [0.0, f64::INFINITY];
    let price_at = |load: f64| {
        dispatched(
            vec![
                unit([0.0, 10.0, 0.008], free),
                unit([0.0, 8.0, 0.009], free),
            ],
            load,
        )
        .2
    };
    assert_close(&[price_at(500.0)], &[13.294_117_647_058_8], 1e-11);
    for load in [600.0, 900.0, 1300.0, 1500.0] {
        let slope = (price_at(load) - price_at(500.0)) / (load - 500.0);
        assert_close(&[slope], &[0.008_470_588_2], 5e-11);
    }
}

/// Least variance Σ A²/x of a sample of a given size, once as a cost and once as a return.
fn sampled(sizes_by_deviation: &[f64], bounds: &[[f64; 2]], total: f64) -> Vec<f64> {
    let strata = |sign: f64| -> Vec<Activity> {
        sizes_by_deviation
            .iter()
            .zip(bounds)
            .map(|(a, &[floor, cap])| Activity {
                floor,
                cap,
                ..power(sign * a * a, -1.0)
            })
            .collect()
    };
    let (_, as_cost) = proven(Aim::Minimise, strata(1.0), Constraint::budget(total));
    let (_, as_return) = proven(Aim::Maximise, strata(-1.0), Constraint::budget(total));
    assert_close(&as_cost.spends, &as_return.spends, 1e-9 * total);
    assert_close(
        &[as_cost.shadow_prices[0]],
        &[-as_return.shadow_prices[0]],
        1e-9 * as_return.shadow_prices[0],
    );
    assert!(as_cost.shadow_prices[0] < 0.0);
    as_cost.spends
}

const FREE: [f64; 2] = [0.0, f64::INFINITY];

#[test]
fn samples_are_allocated_as_neyman_with_and_without_bounds() {
    // Documentation of the R package stratallo (J. Wesołowski, R. Wieczorkowski, W. Wójciak):
    // N = (3000, 4000, 5000, 2000), S = (48, 79, 76, 16), 190 in all.
    let a = [3000.0 * 48.0, 4000.0 * 79.0, 5000.0 * 76.0, 2000.0 * 16.0];
    assert_close(
        &sampled(&a, &[FREE; 4], 190.0),
        &[31.376147, 68.853211, 82.798165, 6.972477],
        5e-7,
    );
    let capped = [100.0, 90.0, 70.0, 80.0].map(|cap| [0.0, cap]);
    assert_close(
        &sampled(&a, &capped, 190.0),
        &[35.121951, 77.073171, 70.0, 7.804878],
        5e-7,
    );
    let floored = [50.0, 120.0, 1.0, 2.0].map(|floor| [floor, f64::INFINITY]);
    assert_close(
        &sampled(&a, &floored, 190.0),
        &[50.0, 120.0, 18.0, 2.0],
        1e-9,
    );

    // The same source, both bounds.
    let a = [3000.0, 4000.0, 5000.0, 2000.0];
    let both = [[100.0, 300.0], [90.0, 400.0], [70.0, 200.0], [50.0, 90.0]];
    assert_close(
        &sampled(&a, &both, 553.0),
        &[118.5, 158.0, 197.5, 79.0],
        1e-9,
    );
    assert_close(
        &sampled(&a, &both, 463.0),
        &[100.0, 132.0, 165.0, 66.0],
        1e-9,
    );
    assert_close(
        &sampled(&a, &both, 596.0),
        &[132.0, 176.0, 200.0, 88.0],
        1e-9,
    );
    let a = [1040.0, 180.0, 30.0, 90.0];
    let found = sampled(&a, &[[10.0, 30.0]; 4], 80.0);
    assert_close(&found, &[30.0, 26.6667, 10.0, 13.3333], 5e-5);
}

#[test]
fn hospitals_are_sampled_as_valliant_dever_and_kreuter_print_it() {
    // R. Valliant, J. A. Dever and F. Kreuter, Practical Tools for Designing and Weighting Survey
    // Samples, 2nd ed. 2018, ch. 3: 100 units over six strata.
    let strata = [
        (215.0, 26_787_207.0),
        (65.0, 10_645_109.0),
        (252.0, 6_909_676.0),
        (50.0, 11_085_034.0),
        (149.0, 9_817_762.0),
        (144.0, 44_553_355.0),
    ];
    assert_close(
        &sampled(
            &strata.map(|(size, deviation)| size * deviation),
            &[FREE; 6],
            100.0,
        ),
        &[
            34.641683, 4.161947, 10.473487, 3.333804, 8.798970, 38.590108,
        ],
        5e-7,
    );
}

#[test]
fn cities_are_sampled_as_cochran_prints_it() {
    // W. G. Cochran, Sampling Techniques, 3rd ed. 1977, sec. 5.6 (from memory): 16 and 48 cities
    // with variances 53,843 and 5,581; 12.21 and 11.79 of 24.
    let a = [16.0 * 53_843_f64.sqrt(), 48.0 * 5_581_f64.sqrt()];
    assert_close(&sampled(&a, &[FREE; 2], 24.0), &[12.21, 11.79], 5e-3);
}

#[test]
fn dearer_interviews_are_made_less_often() {
    // R. L. Scheaffer, W. Mendenhall and R. L. Ott, Elementary Survey Sampling, the television
    // example: N = (1550, 620, 930), S = (5, 15, 10), costs 9, 9, 16 an interview; shares of the
    // sample .32, .39, .29.
    let a = [1550.0 * 5.0, 620.0 * 15.0, 930.0 * 10.0];
    let costs = vec![9.0, 9.0, 16.0];
    let strata = a.iter().map(|a| power(a * a, -1.0)).collect();
    let money = Constraint {
        use_per_unit: UsePerUnit::PerActivity(costs),
        ..Constraint::budget(500.0)
    };
    let (plan, solution) = proven(Aim::Minimise, strata, money);
    assert!((plan.used(0, &solution.spends) - 500.0).abs() < 1e-12 * 500.0);
    let sample: f64 = solution.spends.iter().sum();
    let shares: Vec<f64> = solution.spends.iter().map(|size| size / sample).collect();
    assert_close(&shares, &[0.32, 0.39, 0.29], 5e-3);
}

#[test]
fn power_fills_channels_like_water() {
    // Water-filling, max Σ ln(1 + p/N) with 10 in all: two worked examples of communications
    // handbooks, whole-number answers.
    let fill = |noise: [f64; 4]| {
        let channels = noise.map(|noise| log(1.0, noise)).into();
        proven(Aim::Maximise, channels, Constraint::budget(10.0)).1
    };
    assert_close(
        &fill([1.0, 4.0, 6.0, 3.0]).spends,
        &[5.0, 2.0, 0.0, 3.0],
        1e-12,
    );
    assert_close(
        &fill([5.0, 4.0, 3.0, 6.0]).spends,
        &[2.0, 3.0, 4.0, 1.0],
        1e-12,
    );

    // S. Boyd and L. Vandenberghe, Convex Optimization, 2004, Example 5.2: max Σ ln(α + x) with
    // α = (.8, 1, 1.2) and 1 in all: .533, .333, .133; exactly 8/15, 1/3, 2/15 at a price of 3/4.
    let channels = vec![log(1.0, 0.8), log(1.0, 1.0), log(1.0, 1.2)];
    let (_, solution) = proven(Aim::Maximise, channels, Constraint::budget(1.0));
    assert_close(
        &solution.spends,
        &[8.0 / 15.0, 1.0 / 3.0, 2.0 / 15.0],
        1e-14,
    );
    assert_close(&solution.shadow_prices, &[0.75], 1e-15);
}

#[test]
fn water_users_share_and_leave_what_none_can_use() {
    // D. P. Loucks and E. van Beek, Water Resource Systems Planning and Management, ch. 4 (from
    // memory): benefits 6x − x², 7x − 1.5x², 8x − 0.5x².
    let share = |total: f64| {
        let users = vec![
            quadratic(6.0, -2.0),
            quadratic(7.0, -3.0),
            quadratic(8.0, -1.0),
        ];
        let (plan, solution) = proven(Aim::Maximise, users, Constraint::budget(total));
        (
            plan.total(&solution.spends),
            solution.spends,
            solution.shadow_prices[0],
        )
    };
    // 6 in all: (1, 1, 4) at a price of 4, worth 34.5, exactly.
    let (value, water, price) = share(6.0);
    assert_close(&water, &[1.0, 1.0, 4.0], 1e-14);
    assert_close(&[price, value], &[4.0, 34.5], 1e-14);
    // User 1 gets nothing up to a total of 2⅓: at 2, 7 − 3x = 8 − y with x + y = 2.
    let (_, water, price) = share(2.0);
    assert_close(&water, &[0.0, 0.25, 1.75], 1e-14);
    assert_close(&[price], &[6.25], 1e-14);
    // All are satisfied at 3, 7/3 and 8; more is left unspent at price 0.
    for total in [40.0 / 3.0, 20.0] {
        let (_, water, price) = share(total);
        assert_close(&water, &[3.0, 7.0 / 3.0, 8.0], 1e-7);
        assert!(price.abs() < 1e-7);
    }
    assert_eq!(share(20.0).2, 0.0);
}

#[test]
fn a_consumer_spends_shares_of_income() {
    // Cobb–Douglas demand, H. R. Varian, Microeconomic Analysis, 3rd ed. 1992, ch. 7: of
    // U = x^.6·y^.4 at prices 2 and 4 and income 120, x = 36 and y = 12; dU/dM = .19331820449.
    // In logarithms .6 ln x + .4 ln y, whose marginals .6/x and .4/y are those of a log curve with a
    // scale far below any spend.
    let tiny = 1e-9;
    let prices = Constraint {
        use_per_unit: UsePerUnit::PerActivity(vec![2.0, 4.0]),
        ..Constraint::budget(120.0)
    };
    let goods = vec![log(0.6, tiny), log(0.4, tiny)];
    let (_, solution) = proven(Aim::Maximise, goods, prices);
    assert_close(&solution.spends, &[36.0, 12.0], 1e-7);
    // d ln U/dM = 1/M, and dU/dM = U/M.
    assert_close(&solution.shadow_prices, &[1.0 / 120.0], 1e-12);
    let utility = solution.spends[0].powf(0.6) * solution.spends[1].powf(0.4);
    assert_close(
        &[utility * solution.shadow_prices[0]],
        &[0.193_318_204_49],
        1e-10,
    );
}

#[test]
fn two_certified_curves_share_to_ten_digits() {
    // NIST/ITL Statistical Reference Datasets: Misra1a (saturating exponential) and Misra1d
    // (hyperbola) at their certified parameters. Splits, prices and values recomputed to twelve
    // digits from those.
    let curves = || {
        let (ceiling, rate) = (2.3894212918e2, 5.5015643181e-4);
        let given = ExponentialParams {
            ceiling,
            scale: 1.0 / rate,
        };
        let misra1a = Activity::new("a", Curve::Exponential(Exponential::new(given).unwrap()));
        let (ceiling, rate) = (4.3736970754e2, 3.0227324449e-4);
        let given = HyperbolicParams {
            ceiling,
            scale: 1.0 / rate,
        };
        let misra1d = Activity::new("d", Curve::Hyperbolic(Hyperbolic::new(given).unwrap()));
        vec![misra1a, misra1d]
    };
    for (budget, price, split, value) in [
        (
            50.0,
            0.129_932_113_828_83,
            [21.187_887_931_592, 28.812_112_068_408],
            6.545_317_189_141,
        ),
        (
            1000.0,
            0.099_804_613_572_396,
            [500.683_695_055_35, 499.316_304_944_65],
            114.886_317_855_45,
        ),
        (
            2000.0,
            0.076_977_547_835_361,
            [972.732_375_454_37, 1_027.267_624_545_6],
            202.653_783_689_65,
        ),
    ] {
        let (plan, solution) = proven(Aim::Maximise, curves(), Constraint::budget(budget));
        assert_close(&solution.shadow_prices, &[price], 1e-10 * price);
        assert_close(&solution.spends, &split, 1e-10 * budget);
        assert_close(&[plan.total(&solution.spends)], &[value], 1e-10 * value);
    }
}
