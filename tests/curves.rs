//! The contract of the return curves, for every family and any parameters.

use isomargin::curves::{
    Curve, CurveError, Exponential, ExponentialParams, Family, Hill, HillParams, Hyperbolic,
    HyperbolicParams, Knot, Linear, LinearParams, Log, LogParams, Logistic, LogisticParams,
    Parameter, ParameterSet, Points, Power, PowerParams, Quadratic, QuadraticParams, ReturnCurve,
    Shape,
};
use isomargin::model::{Activity, Aim, ModelError, Problem};
use proptest::prelude::*;
use proptest::test_runner::{Config, RngAlgorithm, TestRng, TestRunner};

/// Runs a property on seeded cases, the same at every run.
fn always(
    curves: impl Strategy<Value = Curve>,
    holds: impl Fn(&Curve, f64) -> Result<(), TestCaseError>,
) {
    let config = Config {
        cases: 2_000,
        failure_persistence: None,
        ..Config::default()
    };
    let random = TestRng::deterministic_rng(RngAlgorithm::ChaCha);
    TestRunner::new_with_rng(config, random)
        .run(&(curves, 0.001..1.0_f64), |(curve, share)| {
            holds(&curve, share)
        })
        .unwrap();
}

/// 1e-12 … 1e12, evenly over the powers of ten.
fn any_size() -> impl Strategy<Value = f64> {
    (-12.0..12.0_f64).prop_map(|power| 10_f64.powf(power))
}

/// Smooth concave curves of every family.
fn concave() -> impl Strategy<Value = Curve> {
    let size = any_size;
    prop_oneof![
        (size(), size()).prop_map(|(slope, scale)| {
            let given = QuadraticParams {
                slope,
                curvature: -slope / scale,
            };
            Curve::Quadratic(Quadratic::new(given).unwrap())
        }),
        (size(), 0.05..0.95_f64).prop_map(|(gain, exponent)| {
            Curve::Power(Power::new(PowerParams { gain, exponent }).unwrap())
        }),
        (size(), 0.1..3.0_f64).prop_map(|(gain, exponent)| {
            let given = PowerParams {
                gain: -gain,
                exponent: -exponent,
            };
            Curve::Power(Power::new(given).unwrap())
        }),
        (size(), size())
            .prop_map(|(gain, scale)| { Curve::Log(Log::new(LogParams { gain, scale }).unwrap()) }),
        (size(), size()).prop_map(|(ceiling, scale)| {
            Curve::Exponential(Exponential::new(ExponentialParams { ceiling, scale }).unwrap())
        }),
        (size(), size()).prop_map(|(ceiling, scale)| {
            Curve::Hyperbolic(Hyperbolic::new(HyperbolicParams { ceiling, scale }).unwrap())
        }),
        (size(), size(), 0.05..1.0_f64).prop_map(|(ceiling, scale, steepness)| {
            Curve::Hill(
                Hill::new(HillParams {
                    ceiling,
                    scale,
                    steepness,
                })
                .unwrap(),
            )
        }),
    ]
}

/// S-shaped curves of both families, and the spend from which on each is concave.
fn s_shaped() -> impl Strategy<Value = Curve> {
    let size = any_size;
    prop_oneof![
        (size(), size(), 1.01..8.0_f64).prop_map(|(ceiling, scale, steepness)| {
            let given = HillParams {
                ceiling,
                scale,
                steepness,
            };
            Curve::Hill(Hill::new(given).unwrap())
        }),
        (size(), size(), -4.0..4.0_f64).prop_map(|(ceiling, scale, place)| {
            let given = LogisticParams {
                ceiling,
                scale,
                midpoint: place * scale,
            };
            Curve::Logistic(Logistic::new(given).unwrap())
        }),
    ]
}

/// Where the concave stretch of a curve begins.
fn concave_from(curve: &Curve) -> f64 {
    match curve.shape(0.0, f64::INFINITY) {
        Shape::TurnsAt(turning) => turning,
        _ => 0.0,
    }
}

/// The spend over which a curve bends: where to look at it.
fn reach_of(curve: &Curve) -> f64 {
    match curve {
        Curve::Quadratic(curve) => -curve.params().slope / curve.params().curvature,
        Curve::Power(_) => 1.0,
        other => other.parameters().get(Parameter::Scale).unwrap(),
    }
}

#[test]
fn marginals_are_the_slopes_of_values() {
    always(concave(), |curve, share| {
        let spend = reach_of(curve) * (0.05 + share);
        let step = 1e-4 * spend;
        let slope = (curve.value(spend + step) - curve.value(spend - step)) / (2.0 * step);
        let scale = curve
            .marginal(spend)
            .abs()
            .max(curve.value(spend).abs() / spend * 1e-3);
        prop_assert!(
            (slope - curve.marginal(spend)).abs() <= 1e-6 * scale,
            "{slope}"
        );
        Ok(())
    });
}

#[test]
fn curvatures_are_the_slopes_of_marginals() {
    always(concave(), |curve, share| {
        let spend = reach_of(curve) * (0.05 + share);
        let step = 1e-4 * spend;
        let slope = (curve.marginal(spend + step) - curve.marginal(spend - step)) / (2.0 * step);
        let scale = curve
            .curvature(spend)
            .abs()
            .max(curve.marginal(spend).abs() / spend * 1e-3);
        prop_assert!(
            (slope - curve.curvature(spend)).abs() <= 1e-5 * scale,
            "{slope}"
        );
        Ok(())
    });
}

#[test]
fn s_curves_have_the_slopes_and_bends_that_they_say() {
    always(s_shaped(), |curve, share| {
        let spend = reach_of(curve) * (0.05 + 3.0 * share);
        let step = 1e-4 * spend;
        let slope_of = |height: &dyn Fn(f64) -> f64| {
            (height(spend + step) - height(spend - step)) / (2.0 * step)
        };
        let (marginal, curvature) = (curve.marginal(spend), curve.curvature(spend));
        let slope = slope_of(&|spend| curve.value(spend));
        let noise = 1e-10 * curve.value(spend).abs() / spend;
        prop_assert!(
            (slope - marginal).abs() <= 1e-5 * marginal + noise,
            "{slope}"
        );
        let bend = slope_of(&|spend| curve.marginal(spend));
        // Near the turning point the curvature is small beside its own change.
        let noise = 1e-4 * marginal / spend;
        prop_assert!(
            (bend - curvature).abs() <= 1e-4 * curvature.abs() + noise,
            "{bend}"
        );
        let turning = concave_from(curve);
        prop_assert_eq!(spend < turning, curvature > 0.0);
        Ok(())
    });
}

#[test]
fn s_curves_are_inverted_back_to_spends_above_the_turning_point() {
    always(s_shaped(), |curve, share| {
        let spend = concave_from(curve) + reach_of(curve) * (0.2 + 3.0 * share);
        let price = curve.marginal(spend);
        let back = curve.inverse_marginal(price).least;
        let room = 1e-11 * (spend + (price / curve.curvature(spend)).abs());
        prop_assert!((back - spend).abs() <= room, "{back} {spend}");
        Ok(())
    });
}

#[test]
fn a_lower_price_never_asks_for_less() {
    // Down to the smallest number there is: 5e-324.
    always(prop_oneof![concave(), s_shaped()], |curve, share| {
        let prices = (-323..=250)
            .rev()
            .map(|power| 10_f64.powf(f64::from(power)) * (1.0 + share));
        let mut asked = concave_from(curve);
        for price in prices.chain([5e-324]) {
            let spend = curve.inverse_marginal(price).least;
            prop_assert!(
                !spend.is_nan() && spend >= asked * (1.0 - 1e-12),
                "{price} {spend}"
            );
            asked = spend;
        }
        Ok(())
    });
}

#[test]
fn inverse_marginals_lead_back_to_the_spend_and_to_the_price() {
    always(concave(), |curve, share| {
        let spend = reach_of(curve) * (0.01 + 0.98 * share);
        let price = curve.marginal(spend);
        let back = curve.inverse_marginal(price);
        prop_assert_eq!(back.least, back.greatest);
        // A relative rounding of the price moves the spend by price/|curvature|.
        let room = 1e-13 * (spend + (price / curve.curvature(spend)).abs());
        prop_assert!(
            (back.least - spend).abs() <= 100.0 * room,
            "{} {spend}",
            back.least
        );
        let again = curve.marginal(back.least);
        prop_assert!(
            (again - price).abs()
                <= 1e-11 * price.abs().max(curve.marginal(spend * 0.5).abs() * 1e-3)
        );
        Ok(())
    });
}

#[test]
fn concave_curves_earn_less_with_every_unit() {
    always(concave(), |curve, share| {
        let reach = reach_of(curve);
        let (near, far) = (reach * share * 0.9, reach * share);
        prop_assert_eq!(curve.shape(0.0, f64::INFINITY), Shape::Concave);
        prop_assert!(curve.marginal(near) >= curve.marginal(far));
        prop_assert!(curve.curvature(far) < 0.0);
        let chord = f64::midpoint(curve.value(near), curve.value(far));
        let size = curve.value(near).abs().max(curve.value(far).abs());
        prop_assert!(curve.value(f64::midpoint(near, far)) >= chord - 1e-15 * size);
        Ok(())
    });
}

#[test]
fn turning_a_curve_by_minus_one_turns_its_shape() {
    always(concave(), |curve, share| {
        let turned = curve.scaled(-1.0);
        let spend = reach_of(curve) * share;
        prop_assert_eq!(turned.shape(0.0, f64::INFINITY), Shape::Convex);
        prop_assert_eq!(turned.value(spend), -curve.value(spend));
        prop_assert_eq!(turned.marginal(spend), -curve.marginal(spend));
        prop_assert_eq!(turned.scaled(-1.0), curve.clone());
        Ok(())
    });
}

#[test]
fn a_curve_is_rebuilt_from_its_named_parameters() {
    always(concave(), |curve, _| {
        let rebuilt = Curve::from_parameters(curve.family(), &curve.parameters()).unwrap();
        prop_assert_eq!(&rebuilt, curve);
        Ok(())
    });
}

#[test]
fn prices_beyond_the_ends_ask_for_nothing_or_everything() {
    always(concave(), |curve, share| {
        let first = curve.marginal(0.0);
        if first.is_finite() {
            prop_assert_eq!(curve.inverse_marginal(first * (1.0 + share)).greatest, 0.0);
        } else {
            prop_assert_eq!(first, f64::INFINITY);
            prop_assert_eq!(curve.inverse_marginal(f64::INFINITY).greatest, 0.0);
        }
        let last = curve.marginal_at_infinity();
        if last == 0.0 {
            prop_assert_eq!(curve.inverse_marginal(-share).least, f64::INFINITY);
            prop_assert_eq!(curve.inverse_marginal(0.0).greatest, f64::INFINITY);
        } else {
            prop_assert_eq!(last, f64::NEG_INFINITY);
        }
        Ok(())
    });
}

#[test]
fn curves_start_at_zero_or_without_bound() {
    always(concave(), |curve, _| {
        let sinks = matches!(curve, Curve::Power(power) if power.params().exponent < 0.0);
        prop_assert_eq!(
            curve.value(0.0),
            if sinks { f64::NEG_INFINITY } else { 0.0 }
        );
        Ok(())
    });
}

#[test]
fn saturating_curves_have_the_value_of_their_definition_at_the_scale() {
    // Definitions: half of the ceiling at the half-saturation constant (L. Michaelis and
    // M. L. Menten 1913; A. V. Hill 1910), 1 − 1/e at one scale (E. A. Mitscherlich 1909).
    let (ceiling, scale) = (8.0, 3.0);
    let hyperbolic = Hyperbolic::new(HyperbolicParams { ceiling, scale }).unwrap();
    assert_eq!(hyperbolic.value(scale), 4.0);
    for steepness in [0.3, 1.0, 2.5] {
        let hill = Hill::new(HillParams {
            ceiling,
            scale,
            steepness,
        })
        .unwrap();
        assert!((hill.value(scale) - 4.0).abs() < 1e-15);
    }
    let exponential = Exponential::new(ExponentialParams { ceiling, scale }).unwrap();
    assert!((exponential.value(scale) - 8.0 * (1.0 - (-1.0_f64).exp())).abs() < 1e-14);
}

#[test]
fn a_hill_of_steepness_one_is_the_hyperbola() {
    let (ceiling, scale) = (5.0, 2.0);
    let hill = Hill::new(HillParams {
        ceiling,
        scale,
        steepness: 1.0,
    })
    .unwrap();
    let hyperbola = Hyperbolic::new(HyperbolicParams { ceiling, scale }).unwrap();
    for spend in [0.0, 1e-6, 0.3, 2.0, 50.0, 1e9] {
        let near = |one: f64, other: f64| (one - other).abs() <= 1e-13 * other.abs();
        assert!(near(hill.value(spend), hyperbola.value(spend)), "{spend}");
        assert!(
            near(hill.marginal(spend), hyperbola.marginal(spend)),
            "{spend}"
        );
        let price = hyperbola.marginal(spend);
        let (ours, theirs) = (
            hill.inverse_marginal(price),
            hyperbola.inverse_marginal(price),
        );
        assert!(
            (ours.least - theirs.least).abs() <= 1e-9 * (1.0 + theirs.least),
            "{spend}"
        );
    }
}

#[test]
fn s_curves_are_inverted_on_their_upper_branch() {
    for steepness in [1.5, 2.0, 4.0, 9.0] {
        let hill = Hill::new(HillParams {
            ceiling: 10.0,
            scale: 4.0,
            steepness,
        })
        .unwrap();
        let Shape::TurnsAt(turning) = hill.shape(0.0, f64::INFINITY) else {
            panic!()
        };
        assert_eq!(hill.shape(turning, f64::INFINITY), Shape::Concave);
        assert!(hill.curvature(turning * 0.99) > 0.0 && hill.curvature(turning * 1.01) < 0.0);
        for spend in [1.01 * turning, 2.0 * turning, 30.0 * turning] {
            let back = hill.inverse_marginal(hill.marginal(spend)).least;
            assert!(
                (back / spend - 1.0).abs() < 1e-9,
                "{steepness} {spend} {back}"
            );
        }
    }
    for midpoint in [-3.0, 0.0, 5.0] {
        let given = LogisticParams {
            ceiling: 10.0,
            scale: 2.0,
            midpoint,
        };
        let logistic = Logistic::new(given).unwrap();
        assert_eq!(logistic.value(0.0), 0.0);
        let start = f64::max(midpoint, 0.0);
        assert_eq!(logistic.shape(start, 100.0), Shape::Concave);
        for spend in [start + 0.1, start + 3.0, start + 40.0] {
            let back = logistic.inverse_marginal(logistic.marginal(spend)).least;
            assert!(
                (back - spend).abs() < 1e-9 * spend.max(1.0),
                "{midpoint} {spend} {back}"
            );
        }
    }
}

#[test]
fn a_table_is_straight_between_its_knots_and_an_interval_at_them() {
    let knots = [(4.0, 10.0), (0.0, 0.0), (1.0, 4.0), (2.0, 7.0)]
        .map(|(spend, value)| Knot { spend, value });
    let points = Points::new(&knots).unwrap();
    assert_eq!((points.first_spend(), points.last_spend()), (0.0, 4.0));
    assert_eq!(points.value(1.5), 5.5);
    assert_eq!(
        (points.marginal_before(1.0), points.marginal(1.0)),
        (4.0, 3.0)
    );
    assert_eq!(points.shape(0.0, 4.0), Shape::Concave);
    let range = points.inverse_marginal(3.0);
    assert_eq!((range.least, range.greatest), (1.0, 2.0));
    let range = points.inverse_marginal(3.5);
    assert_eq!((range.least, range.greatest), (1.0, 1.0));
    let range = points.inverse_marginal(0.0);
    assert_eq!((range.least, range.greatest), (4.0, 4.0));
    assert_eq!(points.inverse_marginal(9.0).greatest, 0.0);
}

#[test]
fn a_table_printed_to_twelve_digits_of_a_line_counts_as_straight() {
    let knots: Vec<Knot> = (0..20)
        .map(|i| Knot {
            spend: f64::from(i),
            value: format!("{:.12}", f64::from(i) / 3.0).parse().unwrap(),
        })
        .collect();
    assert_eq!(
        Points::new(&knots).unwrap().shape(0.0, 19.0),
        Shape::Straight
    );
}

#[test]
fn knots_on_one_line_belong_to_one_piece() {
    // In binary numbers the slopes of such tables differ in the last places, and rise at some
    // knots: a price between them must not take the end of the line without its beginning.
    for (step, start, rise) in [(0.1, 0.0, 0.3), (0.01, 0.0, 0.07), (1.0, 12_345_678.0, 0.1)] {
        let knots: Vec<Knot> = (0..=12)
            .map(|i| Knot {
                spend: f64::from(i) * step,
                value: start + f64::from(i) * rise,
            })
            .collect();
        let points = Points::new(&knots).unwrap();
        assert_eq!(points.pieces().len(), 1, "{step}");
        assert_eq!(points.knots().len(), 13);
        let slope = points.marginal(0.0);
        assert!((slope / (rise / step) - 1.0).abs() < 1e-8);
        assert_eq!(points.marginal_before(5.0 * step), slope);
        let range = points.inverse_marginal(slope);
        assert_eq!((range.least, range.greatest), (0.0, points.last_spend()));
        for knot in &knots {
            assert_eq!(points.value(knot.spend), knot.value);
        }
    }
}

#[test]
fn a_line_asks_for_all_or_nothing() {
    let line = Linear::new(LinearParams { slope: 2.0 }).unwrap();
    let asked = |price: f64| {
        (
            line.inverse_marginal(price).least,
            line.inverse_marginal(price).greatest,
        )
    };
    assert_eq!(asked(2.0), (0.0, f64::INFINITY));
    assert_eq!(asked(2.1), (0.0, 0.0));
    assert_eq!(asked(1.9), (f64::INFINITY, f64::INFINITY));
}

#[test]
fn parameters_outside_their_domain_are_refused_by_name() {
    let parameter_at_fault = |result: Result<Curve, CurveError>| result.unwrap_err().parameter();
    let build = |family: Family, given: &[(Parameter, f64)]| {
        let set = given
            .iter()
            .fold(ParameterSet::default(), |set, &(parameter, value)| {
                set.with(parameter, value)
            });
        Curve::from_parameters(family, &set)
    };
    use Parameter::{Ceiling, Curvature, Exponent, Gain, Midpoint, Scale, Slope, Steepness};
    for (family, good) in [
        (Family::Linear, vec![(Slope, 1.0)]),
        (Family::Quadratic, vec![(Slope, 1.0), (Curvature, -1.0)]),
        (Family::Power, vec![(Gain, 1.0), (Exponent, 0.5)]),
        (Family::Log, vec![(Gain, 1.0), (Scale, 1.0)]),
        (Family::Exponential, vec![(Ceiling, 1.0), (Scale, 1.0)]),
        (Family::Hyperbolic, vec![(Ceiling, 1.0), (Scale, 1.0)]),
        (
            Family::Hill,
            vec![(Ceiling, 1.0), (Scale, 1.0), (Steepness, 0.5)],
        ),
        (
            Family::Logistic,
            vec![(Ceiling, 1.0), (Scale, 1.0), (Midpoint, 0.5)],
        ),
    ] {
        assert!(build(family, &good).is_ok(), "{family}");
        for at in 0..good.len() {
            let parameter = good[at].0;
            for bad in [f64::NAN, f64::INFINITY] {
                let mut given = good.clone();
                given[at].1 = bad;
                assert_eq!(parameter_at_fault(build(family, &given)), Some(parameter));
            }
            let mut missing = good.clone();
            missing.remove(at);
            let fault = build(family, &missing).unwrap_err();
            assert_eq!(fault, CurveError::Missing { family, parameter });
            if matches!(parameter, Scale | Steepness) || parameter == Exponent {
                let mut given = good.clone();
                given[at].1 = 0.0;
                assert_eq!(parameter_at_fault(build(family, &given)), Some(parameter));
            }
        }
        let alien = if family == Family::Logistic {
            Slope
        } else {
            Midpoint
        };
        let mut superfluous = good.clone();
        superfluous.push((alien, 1.0));
        let fault = build(family, &superfluous).unwrap_err();
        assert_eq!(
            fault,
            CurveError::NotUsed {
                family,
                parameter: alien
            }
        );
    }
    assert_eq!(build(Family::Points, &[]), Err(CurveError::NoTable));
    let knot = |spend, value| Knot { spend, value };
    assert!(matches!(
        Points::new(&[knot(0.0, 1.0)]),
        Err(CurveError::TooFewKnots { found: 1 })
    ));
    assert!(matches!(
        Points::new(&[knot(0.0, 1.0), knot(-1.0, 2.0)]),
        Err(CurveError::BadKnot { row: 1 })
    ));
    assert!(matches!(
        Points::new(&[knot(2.0, 1.0), knot(0.0, 0.0), knot(2.0, 2.0)]),
        Err(CurveError::RepeatedKnot { row: 2, .. })
    ));
}

/// What the model says of a curve between bounds, if it refuses it.
fn refusal(aim: Aim, floor: f64, cap: f64, curve: Curve) -> Option<String> {
    let activity = Activity {
        floor,
        cap,
        ..Activity::new("x", curve)
    };
    match Problem::new(aim, vec![activity], vec![]) {
        Ok(_) => None,
        Err(faults) => {
            assert!(matches!(faults[..], [ModelError::Shape(_)]), "{faults:?}");
            Some(faults[0].to_string())
        }
    }
}

#[test]
fn curves_of_the_wrong_shape_are_refused_with_the_reason_and_a_mend() {
    let hill = |steepness| {
        Curve::Hill(
            Hill::new(HillParams {
                ceiling: 9.0,
                scale: 2.0,
                steepness,
            })
            .unwrap(),
        )
    };
    let power = |gain, exponent| Curve::Power(Power::new(PowerParams { gain, exponent }).unwrap());
    let quadratic = |curvature| {
        Curve::Quadratic(
            Quadratic::new(QuadraticParams {
                slope: 1.0,
                curvature,
            })
            .unwrap(),
        )
    };
    let logistic = || {
        let given = LogisticParams {
            ceiling: 9.0,
            scale: 1.0,
            midpoint: 4.0,
        };
        Curve::Logistic(Logistic::new(given).unwrap())
    };
    let rising = || {
        let knots =
            [(0.0, 0.0), (1.0, 1.0), (2.0, 3.0)].map(|(spend, value)| Knot { spend, value });
        Curve::Points(Points::new(&knots).unwrap())
    };
    let (any, max, min) = (f64::INFINITY, Aim::Maximise, Aim::Minimise);
    for (aim, cap, curve, reason, mend) in [
        (max, any, hill(2.0), "S-shaped", "floor of at least"),
        (max, any, logistic(), "S-shaped", "floor of at least 4"),
        (
            max,
            any,
            power(1.0, 1.5),
            "not concave",
            "exponent between 0 and 1",
        ),
        (
            max,
            any,
            power(1.0, -1.0),
            "not concave",
            "exponent between 0 and 1",
        ),
        (
            max,
            any,
            quadratic(0.5),
            "not concave",
            "curvature of at most 0",
        ),
        (
            max,
            2.0,
            rising(),
            "at a spend of 1 the next unit",
            "smooth the table",
        ),
        (
            min,
            any,
            quadratic(-0.5),
            "not convex",
            "curvature of at least 0",
        ),
        (min, any, power(1.0, 0.5), "not convex", "exponent above 1"),
    ] {
        let said = refusal(aim, 0.0, cap, curve).expect(reason);
        assert!(said.contains(reason) && said.contains(mend), "{said}");
    }
    // Where the bounds keep to a stretch that bends the right way, the curve is taken.
    assert_eq!(refusal(max, 4.0, any, logistic()), None);
    assert_eq!(refusal(max, 2.0, any, hill(2.0)), None);
    assert_eq!(refusal(max, 0.0, 1.0, rising()), None);
    assert_eq!(refusal(min, 0.0, 2.0, rising()), None);
    assert_eq!(refusal(min, 0.0, any, power(1.0, -1.0)), None);
}

#[test]
fn the_floor_that_a_refusal_names_is_accepted() {
    let mends = |curve: &Curve| refusal(Aim::Maximise, 0.0, f64::INFINITY, curve.clone());
    always(s_shaped(), |curve, _| {
        let Some(said) = mends(curve) else {
            return Ok(()); // its midpoint is below zero
        };
        let (_, rest) = said.split_once("floor of at least ").unwrap();
        let floor: f64 = rest.split(',').next().unwrap().parse().unwrap();
        prop_assert!(floor <= concave_from(curve) * 1.00001, "{said}");
        prop_assert_eq!(
            refusal(Aim::Maximise, floor, f64::INFINITY, curve.clone()),
            None
        );
        // Turned upside down it is a falling return, which no floor mends, and a cost that one does.
        let turned = curve.scaled(-1.0);
        prop_assert!(!mends(&turned).unwrap().contains("floor of at least"));
        let as_cost = refusal(Aim::Minimise, 0.0, f64::INFINITY, turned.clone()).unwrap();
        prop_assert!(as_cost.contains("floor of at least"));
        prop_assert_eq!(refusal(Aim::Minimise, floor, f64::INFINITY, turned), None);
        Ok(())
    });
}
