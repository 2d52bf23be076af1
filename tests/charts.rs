//! The pictures: both renderings of everything, readable by anyone, harmless with any plan.

use isomargin::charts::{Drawing, PlanView, draw_marginal_curves, draw_spend};
use isomargin::curves::{
    Curve, Exponential, ExponentialParams, Hill, HillParams, Hyperbolic, HyperbolicParams, Knot,
    Linear, LinearParams, Log, LogParams, Points, Power, PowerParams, Quadratic, QuadraticParams,
};
use isomargin::model::{Activity, Aim, Constraint, Labels, ObservedRange, Problem, Solution};
use isomargin::solver::solve;

const NAMES: [&str; 12] = [
    "Dune repair",
    "Reading rooms",
    "Night buses",
    "Street trees",
    "Wetland restoration and tidal channel works",
    "Home visits",
    "Pump renewal",
    "Path lighting",
    "School gardens",
    "Drain clearing",
    "Bridge checks",
    "Tool library",
];

fn curve(i: usize, spend: f64, marginal: f64) -> Curve {
    match i % 7 {
        0 => Curve::Log(
            Log::new(LogParams {
                gain: marginal * spend,
                scale: spend,
            })
            .unwrap(),
        ),
        1 => Curve::Exponential(
            Exponential::new(ExponentialParams {
                ceiling: marginal * spend,
                scale: spend,
            })
            .unwrap(),
        ),
        2 => {
            let given = HyperbolicParams {
                ceiling: 1.5 * marginal * spend,
                scale: spend,
            };
            Curve::Hyperbolic(Hyperbolic::new(given).unwrap())
        }
        3 => {
            let gain = marginal * spend.sqrt();
            Curve::Power(
                Power::new(PowerParams {
                    gain,
                    exponent: 0.5,
                })
                .unwrap(),
            )
        }
        4 => {
            let given = QuadraticParams {
                slope: 1.4 * marginal,
                curvature: -marginal / spend,
            };
            Curve::Quadratic(Quadratic::new(given).unwrap())
        }
        5 => {
            let knots = [(0.0, 0.0), (0.5, 0.8), (1.0, 1.3), (2.0, 1.7)].map(|(x, y)| Knot {
                spend: x * spend,
                value: y * marginal * spend,
            });
            Curve::Points(Points::new(&knots).unwrap())
        }
        _ => {
            let given = HillParams {
                ceiling: 2.0 * marginal * spend,
                scale: spend,
                steepness: 0.8,
            };
            Curve::Hill(Hill::new(given).unwrap())
        }
    }
}

fn returns(count: usize, money: f64) -> Problem {
    let activities: Vec<Activity> = (0..count)
        .map(|i| {
            let spend = money * (0.4 + (i * 37 % 17) as f64 / 10.0);
            let marginal = (0.6 + (i * 23 % 11) as f64 / 8.0) * 80.0 / money;
            let name = match i / NAMES.len() {
                0 => NAMES[i].to_owned(),
                more => format!("{} {}", NAMES[i % NAMES.len()], more + 1),
            };
            let mut activity = Activity::new(name, curve(i, spend, marginal));
            activity.current = (i % 5 != 4).then_some(0.8 * spend);
            activity.cap = if i % 3 == 0 || i % 7 == 5 {
                1.2 * spend
            } else {
                f64::INFINITY
            };
            activity.floor = if i % 4 == 1 { 0.2 * spend } else { 0.0 };
            let range = ObservedRange {
                from: 0.3 * spend,
                to: 1.1 * spend,
            };
            activity.observed = (i % 2 == 0).then_some(range);
            activity
        })
        .collect();
    let budget = Constraint::budget(0.9 * money * count as f64);
    Problem::new(Aim::Maximise, activities, vec![budget]).unwrap()
}

fn costs() -> Problem {
    let units = [
        (7.92, 0.003124, 600.0),
        (7.85, 0.00388, 400.0),
        (7.97, 0.00964, 200.0),
    ];
    let activities = units
        .iter()
        .enumerate()
        .map(|(i, &(slope, curvature, cap))| {
            let given = QuadraticParams { slope, curvature };
            let curve = Curve::Quadratic(Quadratic::new(given).unwrap());
            Activity {
                cap,
                floor: 50.0,
                ..Activity::new(format!("Plant {}", i + 1), curve)
            }
        })
        .collect();
    Problem::new(
        Aim::Minimise,
        activities,
        vec![Constraint::requirement(850.0)],
    )
    .unwrap()
}

fn labels() -> Labels {
    Labels {
        title: Some("Works programme".to_owned()),
        money: Some("EUR".to_owned()),
        return_unit: Some("homes protected".to_owned()),
        period: Some("2027".to_owned()),
    }
}

fn drawn(problem: &Problem, labels: &Labels) -> Vec<Drawing> {
    drawn_with(problem, labels, &solve(problem).unwrap())
}

fn drawn_with(problem: &Problem, labels: &Labels, solution: &Solution) -> Vec<Drawing> {
    let view = PlanView {
        labels,
        problem,
        solution,
    };
    vec![
        draw_marginal_curves(&view).unwrap(),
        draw_spend(&view).unwrap(),
    ]
}

#[test]
#[ignore = "writes pictures to look at into target/pictures"]
fn pictures_to_look_at() {
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("target/pictures");
    std::fs::create_dir_all(&folder).unwrap();
    let mut plans: Vec<(String, Problem, Labels)> = [1, 3, 12, 60]
        .map(|count| (format!("returns-{count}"), returns(count, 2e6), labels()))
        .into();
    plans.push(("small".to_owned(), returns(5, 1e-9), Labels::default()));
    plans.push((
        "costs".to_owned(),
        costs(),
        Labels {
            return_unit: Some("EUR/h".to_owned()),
            money: Some("MW".to_owned()),
            ..labels()
        },
    ));
    for (name, problem, labels) in plans {
        for drawing in drawn(&problem, &labels) {
            let file = folder.join(format!("{name}-{}", drawing.stem));
            std::fs::write(file.with_extension("png"), &drawing.png).unwrap();
            std::fs::write(file.with_extension("svg"), &drawing.svg).unwrap();
        }
    }
}

#[test]
fn every_drawing_has_both_renderings_and_an_alternative_text() {
    for problem in [returns(12, 2e6), costs()] {
        for drawing in drawn(&problem, &labels()) {
            // The signature of PNG: ISO/IEC 15948, 5.2.
            assert!(
                drawing
                    .png
                    .starts_with(&[0x89, b'P', b'N', b'G', 0x0d, 0x0a, 0x1a, 0x0a])
            );
            assert!(drawing.svg.starts_with("<svg") && drawing.svg.trim_end().ends_with("</svg>"));
            assert!(drawing.alt.len() > 80 && drawing.alt.contains("Works programme"));
        }
    }
}

#[test]
fn the_same_plan_gives_the_same_bytes() {
    let problem = returns(5, 1e3);
    assert_eq!(drawn(&problem, &labels()), drawn(&problem, &labels()));
}

/// The value of an attribute in a tag.
fn attribute(tag: &str, name: &str) -> Option<f64> {
    let start = tag.find(&format!(" {name}=\""))? + name.len() + 3;
    tag[start..].split('"').next()?.parse().ok()
}

#[test]
fn no_text_begins_outside_the_sheet() {
    for count in [1, 3, 12, 60] {
        for drawing in drawn(&returns(count, 2e6), &labels()) {
            let head = drawing.svg.split('>').next().unwrap();
            let sheet: Vec<f64> = head
                .split("viewBox=\"")
                .nth(1)
                .and_then(|rest| rest.split('"').next())
                .unwrap()
                .split(' ')
                .map(|number| number.parse().unwrap())
                .collect();
            for tag in drawing.svg.split("<text").skip(1) {
                let tag = tag.split('>').next().unwrap();
                let (x, y) = (attribute(tag, "x").unwrap(), attribute(tag, "y").unwrap());
                assert!(
                    (0.0..=sheet[2]).contains(&x) && (0.0..=sheet[3]).contains(&y),
                    "{tag}"
                );
            }
        }
    }
}

#[test]
fn hostile_names_do_no_harm() {
    let mut problem_names = [
        "<script>alert(1)</script>",
        "\u{202e}abc\u{0}\n\t",
        "",
        "&\"'",
        "名前 اسم",
    ];
    problem_names.sort_unstable();
    let activities: Vec<Activity> = problem_names
        .iter()
        .enumerate()
        .map(|(i, name)| Activity::new(name.repeat(1 + 40 * (i % 2)), curve(i, 1.0, 1.0)))
        .map(|activity| match &activity.curve {
            Curve::Points(points) => Activity {
                cap: points.last_spend(),
                ..activity
            },
            _ => activity,
        })
        .collect();
    let problem = Problem::new(Aim::Maximise, activities, vec![Constraint::budget(3.0)]).unwrap();
    for drawing in drawn(
        &problem,
        &Labels {
            title: Some("<b>&".to_owned()),
            ..labels()
        },
    ) {
        assert!(!drawing.svg.contains("<script") && !drawing.svg.contains("<b>"));
        assert!(!drawing.svg.contains(['\u{0}', '\u{202e}']));
    }
}

#[test]
fn extremes_are_drawn_without_end_or_panic() {
    let line = |slope: f64| {
        let curve = Curve::Linear(Linear::new(LinearParams { slope }).unwrap());
        Activity::new(format!("line {slope}"), curve)
    };
    for money in [1e-12, 1.0, 1e12] {
        drawn(&returns(5, money), &Labels::default());
    }
    let nothing = Problem::new(
        Aim::Maximise,
        vec![line(0.0), line(0.0)],
        vec![Constraint::budget(0.0)],
    )
    .unwrap();
    drawn(&nothing, &labels());
    let power = Power::new(PowerParams {
        gain: 2.0,
        exponent: 0.5,
    })
    .unwrap();
    let vertical = Problem::new(
        Aim::Maximise,
        vec![Activity::new("vertical", Curve::Power(power))],
        vec![Constraint::budget(0.0)],
    )
    .unwrap();
    drawn(&vertical, &labels());
    // A plan that no solver made: the pictures must still end.
    let odd = Solution {
        spends: vec![f64::INFINITY, f64::NAN],
        shadow_prices: vec![f64::NAN],
    };
    drawn_with(&nothing, &labels(), &odd);
}
