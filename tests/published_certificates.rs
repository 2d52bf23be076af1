//! Published plans are proven, enclosed and priced as printed; the same plans changed a little are not.

use isomargin::certificate::{CrossCheck, LpCheck, Verdict, certify};
use isomargin::curves::{
    Curve, Linear, LinearParams, Log, LogParams, Power, PowerParams, Quadratic, QuadraticParams,
};
use isomargin::model::{Activity, Aim, Constraint, Problem, Sense, Solution, UsePerUnit};
use isomargin::solver::solve;

fn quadratic(slope: f64, curvature: f64) -> Activity {
    let curve = Quadratic::new(QuadraticParams { slope, curvature }).unwrap();
    Activity::new("activity", Curve::Quadratic(curve))
}

fn within(activity: Activity, floor: f64, cap: f64) -> Activity {
    Activity {
        floor,
        cap,
        ..activity
    }
}

/// A generating unit with the cost slope·P + half·P² between its limits.
fn unit(slope: f64, half: f64, [floor, cap]: [f64; 2]) -> Activity {
    within(quadratic(slope, 2.0 * half), floor, cap)
}

fn log(gain: f64, scale: f64) -> Activity {
    let curve = Log::new(LogParams { gain, scale }).unwrap();
    Activity::new("channel", Curve::Log(curve))
}

/// A stratum's variance A²/x, A = size × spread.
fn stratum(size: f64, spread: f64) -> Activity {
    let gain = (size * spread).powi(2);
    let exponent = -1.0;
    let curve = Power::new(PowerParams { gain, exponent }).unwrap();
    Activity::new("stratum", Curve::Power(curve))
}

struct Published {
    plan: Problem,
    spends: Vec<f64>,
    price: f64,
    /// Relative error that the print leaves.
    printed_to: f64,
}

fn published(
    aim: Aim,
    activities: Vec<Activity>,
    limit: f64,
    spends: &[f64],
    price: f64,
    printed_to: f64,
) -> Published {
    let constraint = match (aim, spends.len()) {
        (Aim::Minimise, 3) => Constraint::requirement(limit),
        _ => Constraint::budget(limit),
    };
    Published {
        plan: Problem::new(aim, activities, vec![constraint]).unwrap(),
        spends: spends.to_vec(),
        price,
        printed_to,
    }
}

fn cases() -> Vec<Published> {
    let strata = || {
        vec![
            stratum(3000.0, 48.0),
            stratum(4000.0, 79.0),
            stratum(5000.0, 76.0),
            stratum(2000.0, 16.0),
        ]
    };
    let bounded = |bounds: [[f64; 2]; 4]| {
        let pairs = strata().into_iter().zip(bounds);
        pairs
            .map(|(stratum, [floor, cap])| within(stratum, floor, cap))
            .collect()
    };
    let users = || {
        vec![
            quadratic(6.0, -2.0),
            quadratic(7.0, -3.0),
            quadratic(8.0, -1.0),
        ]
    };
    vec![
        // Wood and Wollenberg, Power Generation, Operation and Control, Example 3A (393.2, 334.6,
        // 122.2 at 9.148 from memory; more digits recomputed from the data).
        published(
            Aim::Minimise,
            vec![
                unit(7.92, 0.001562, [150.0, 600.0]),
                unit(7.85, 0.00194, [100.0, 400.0]),
                unit(7.97, 0.00482, [50.0, 200.0]),
            ],
            850.0,
            &[393.169_836_945_6, 334.603_755_313_9, 122.226_407_740_5],
            9.148_262_570_618,
            1e-9,
        ),
        // The same, Example 3B: cheaper fuel for unit 1, limits on (from memory: 600, 187.1, 62.9
        // at 8.576; more digits recomputed).
        published(
            Aim::Minimise,
            vec![
                unit(6.48, 0.001278, [150.0, 600.0]),
                unit(7.85, 0.00194, [100.0, 400.0]),
                unit(7.97, 0.00482, [50.0, 200.0]),
            ],
            850.0,
            &[600.0, 187.130_177_514_8, 62.869_822_485_2],
            8.576_065_088_757,
            1e-9,
        ),
        // Gupta, Power System Operation and Control, Example 2.17: one upper and one lower bound
        // hold; 600, 150, 50 at 8.37.
        published(
            Aim::Minimise,
            vec![
                unit(6.5, 0.0013, [100.0, 600.0]),
                unit(7.8, 0.0019, [50.0, 400.0]),
                unit(8.1, 0.005, [50.0, 200.0]),
            ],
            800.0,
            &[600.0, 150.0, 50.0],
            8.37,
            1e-12,
        ),
        // Boyd and Vandenberghe, Convex Optimization (2004), Example 5.2: .533, .333, .133, exactly
        // 8/15, 1/3, 2/15 at 3/4. ln(α + x) is ln α + ln(1 + x/α).
        published(
            Aim::Maximise,
            vec![log(1.0, 0.8), log(1.0, 1.0), log(1.0, 1.2)],
            1.0,
            &[8.0 / 15.0, 1.0 / 3.0, 2.0 / 15.0],
            0.75,
            1e-12,
        ),
        // Water-filling, course slides: noise 1, 4, 6, 3 and power 10 give 5, 2, 0, 3; the level is 6,
        // so the price is 1/6.
        published(
            Aim::Maximise,
            vec![log(1.0, 1.0), log(1.0, 4.0), log(1.0, 6.0), log(1.0, 3.0)],
            10.0,
            &[5.0, 2.0, 0.0, 3.0],
            1.0 / 6.0,
            1e-12,
        ),
        // Neyman's allocation as in the documentation of the R package stratallo (Wesołowski,
        // Wieczorkowski, Wójciak); prices are minus the printed data's (ΣA/n)².
        published(
            Aim::Minimise,
            strata(),
            190.0,
            &[31.376147, 68.853211, 82.798165, 6.972477],
            -21_063_268.698_06,
            1e-7,
        ),
        // The same with caps, and with floors.
        published(
            Aim::Minimise,
            bounded([[0.0, 100.0], [0.0, 90.0], [0.0, 70.0], [0.0, 80.0]]),
            190.0,
            &[35.121951, 77.073171, 70.0, 7.804878],
            -16_810_000.0,
            1e-7,
        ),
        published(
            Aim::Minimise,
            bounded([50.0, 120.0, 1.0, 2.0].map(|floor| [floor, f64::INFINITY])),
            190.0,
            &[50.0, 120.0, 18.0, 2.0],
            -445_679_012.345_68,
            1e-9,
        ),
        // Loucks and van Beek, Water Resource Systems Planning and Management, ch. 4 (from memory):
        // 6x − x², 7x − 1.5x², 8x − .5x² with a total of 6 give 1, 1, 4 at 4.
        published(Aim::Maximise, users(), 6.0, &[1.0, 1.0, 4.0], 4.0, 1e-12),
        // With 20 there is more than the 13⅓ that they want: 3, 7/3, 8 and the rest unspent.
        published(
            Aim::Maximise,
            users(),
            20.0,
            &[3.0, 7.0 / 3.0, 8.0],
            0.0,
            1e-12,
        ),
    ]
}

fn verdict(plan: &Problem, solution: &Solution) -> Verdict {
    certify(plan, solution, CrossCheck::Always).verdict
}

#[test]
fn published_plans_are_proven_enclosed_and_priced() {
    for (case, published) in cases().iter().enumerate() {
        let Published {
            plan,
            spends,
            price,
            printed_to,
        } = published;
        let solution = solve(plan).unwrap();
        for (found, printed) in solution.spends.iter().zip(spends) {
            assert!(
                (found - printed).abs() <= printed_to * printed.abs(),
                "{case}: {solution:?}"
            );
        }
        let certificate = certify(plan, &solution, CrossCheck::WhenQuick);
        assert_eq!(
            certificate.verdict,
            Verdict::Proven,
            "{case}: {certificate:?}"
        );
        assert!(certificate.gap <= 1e-14, "{case}: {certificate:?}");
        let LpCheck::Bracketed(bracket) = &certificate.lp else {
            panic!("{case}: {certificate:?}");
        };
        let total = plan.total(spends);
        let room = 1e-6 * total.abs();
        assert!(bracket.lower - room <= total && total <= bracket.upper + room);
        assert!(bracket.upper - bracket.lower <= room, "{case}: {bracket:?}");
        assert!(
            (bracket.prices[0] - price).abs() <= 1e-6 * price.abs().max(1e-6),
            "{case}: {bracket:?}"
        );
    }
}

#[test]
fn published_plans_that_are_changed_a_little_are_not_proven() {
    for (case, Published { plan, .. }) in cases().iter().enumerate() {
        let solution = solve(plan).unwrap();
        let free: Vec<usize> = (0..solution.spends.len())
            .filter(|&i| {
                let activity = &plan.activities()[i];
                activity.floor < solution.spends[i] && solution.spends[i] < activity.cap
            })
            .collect();
        for (&from, &to) in free.iter().zip(free.iter().skip(1)) {
            let mut moved = solution.clone();
            let amount = 1e-5 * moved.spends[from];
            moved.spends[from] -= amount;
            moved.spends[to] += amount;
            assert_eq!(verdict(plan, &moved), Verdict::NotProven, "{case}: moved");
        }
        if solution.shadow_prices[0] != 0.0 {
            for factor in [1.0 - 1e-5, 1.0 + 1e-5] {
                let mut changed = solution.clone();
                changed.shadow_prices[0] *= factor;
                assert_eq!(verdict(plan, &changed), Verdict::NotProven, "{case}: price");
            }
            let mut beyond = solution.clone();
            let wrong_way = match plan.constraints()[0].sense {
                Sense::AtLeast => -1.0,
                _ => 1.0,
            };
            beyond.spends[free[0]] += wrong_way * 1e-9 * plan.constraints()[0].limit;
            assert_eq!(verdict(plan, &beyond), Verdict::NotProven, "{case}: limit");
        }
        for (i, activity) in plan.activities().iter().enumerate() {
            let outside = [
                activity.cap * (1.0 + 1e-9),
                activity.floor * (1.0 - 1e-9) - 1e-300,
            ];
            for spend in outside.into_iter().filter(|spend| spend.is_finite()) {
                let mut changed = solution.clone();
                changed.spends[i] = spend;
                assert_eq!(verdict(plan, &changed), Verdict::NotProven, "{case}: bound");
            }
        }
    }
}

#[test]
fn linear_programmes_with_several_rows_are_proven_at_their_published_prices_alone() {
    let plan_of = |gains: &[f64], rows: &[(&[f64], f64)]| {
        let activities = gains.iter().map(|&slope| {
            let line = Linear::new(LinearParams { slope }).unwrap();
            Activity::new("product", Curve::Linear(line))
        });
        let rows = rows.iter().map(|(uses, limit)| Constraint {
            name: "row".to_owned(),
            sense: Sense::AtMost,
            limit: *limit,
            use_per_unit: UsePerUnit::PerActivity(uses.to_vec()),
        });
        Problem::new(Aim::Maximise, activities.collect(), rows.collect()).unwrap()
    };
    let cases = [
        // Hillier and Lieberman, Introduction to Operations Research, sec. 3.1 and 4.7: 36 at (2, 6),
        // prices 0, 3/2, 1.
        (
            plan_of(
                &[3.0, 5.0],
                &[(&[1.0, 0.0], 4.0), (&[0.0, 2.0], 12.0), (&[3.0, 2.0], 18.0)],
            ),
            vec![2.0, 6.0],
            vec![0.0, 1.5, 1.0],
            36.0,
        ),
        // Chvátal, Linear Programming (1983), ch. 2 (from memory): 13 at (2, 0, 1), prices 1, 0, 1.
        (
            plan_of(
                &[5.0, 4.0, 3.0],
                &[
                    (&[2.0, 3.0, 1.0], 5.0),
                    (&[4.0, 1.0, 2.0], 11.0),
                    (&[3.0, 4.0, 2.0], 8.0),
                ],
            ),
            vec![2.0, 0.0, 1.0],
            vec![1.0, 0.0, 1.0],
            13.0,
        ),
        // Taha, Operations Research, 8th ed., sec. 2.2 and 3.6 (from memory): 21 at (3, 1.5), prices
        // 3/4, 1/2, 0, 0; one use is negative.
        (
            plan_of(
                &[5.0, 4.0],
                &[
                    (&[6.0, 4.0], 24.0),
                    (&[1.0, 2.0], 6.0),
                    (&[-1.0, 1.0], 1.0),
                    (&[0.0, 1.0], 2.0),
                ],
            ),
            vec![3.0, 1.5],
            vec![0.75, 0.5, 0.0, 0.0],
            21.0,
        ),
    ];
    for (plan, spends, shadow_prices, best) in cases {
        let solution = Solution {
            spends,
            shadow_prices,
        };
        let certificate = certify(&plan, &solution, CrossCheck::WhenQuick);
        assert_eq!(certificate.verdict, Verdict::Proven, "{certificate:?}");
        assert_eq!(certificate.upper_bound, best);
        let LpCheck::Bracketed(bracket) = &certificate.lp else {
            panic!("{certificate:?}");
        };
        for (found, printed) in bracket.prices.iter().zip(&solution.shadow_prices) {
            assert!((found - printed).abs() <= 1e-9, "{bracket:?}");
        }
        for k in 0..solution.shadow_prices.len() {
            let mut changed = solution.clone();
            changed.shadow_prices[k] += 1e-5;
            assert_eq!(verdict(&plan, &changed), Verdict::NotProven, "{k}");
        }
    }
}
