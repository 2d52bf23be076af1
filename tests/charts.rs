//! The pictures: both renderings of everything, readable by anyone, harmless with any plan.

use isomargin::charts::{Drawing, PlanView, draw_marginal_curves, draw_spend};
use isomargin::curves::{
    Curve, Exponential, ExponentialParams, Hill, HillParams, Hyperbolic, HyperbolicParams, Knot,
    Linear, LinearParams, Log, LogParams, Points, Power, PowerParams, Quadratic, QuadraticParams,
};
use isomargin::model::{
    Activity, Aim, Constraint, Labels, ObservedRange, Problem, Solution, UsePerUnit,
};
use isomargin::solver::solve;
use plotters::style::{FontStyle, IntoFont};

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

/// A budget that the caps leave unspent: its price is zero.
fn slack() -> Problem {
    let plan = returns(9, 2e6);
    let activities = plan.activities().iter().enumerate().map(|(i, activity)| {
        let cap = activity.cap.min(3e6 + 1e5 * i as f64);
        Activity {
            current: None,
            cap,
            ..activity.clone()
        }
    });
    let budget = Constraint::budget(1e9);
    Problem::new(Aim::Maximise, activities.collect(), vec![budget]).unwrap()
}

/// Activities whose unit of spend uses different amounts of what is limited.
fn uses() -> Problem {
    let plan = returns(6, 2e6);
    let hours = Constraint {
        use_per_unit: UsePerUnit::PerActivity(vec![1.0, 0.5, 2.0, 1.0, 1.5, 0.8]),
        ..Constraint::budget(9e6)
    };
    Problem::new(Aim::Maximise, plan.activities().to_vec(), vec![hours]).unwrap()
}

fn labels() -> Labels {
    Labels {
        title: Some("Works programme".to_owned()),
        money: Some("EUR".to_owned()),
        return_unit: Some("homes protected".to_owned()),
        period: Some("2027".to_owned()),
    }
}

fn long_labels() -> Labels {
    Labels {
        title: Some("Works programme of the whole valley ".repeat(9)),
        money: Some("thousand coins of the old mint, at prices of the first year".to_owned()),
        return_unit: Some("households within a quarter of an hour of a stop".to_owned()),
        ..labels()
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
    plans.push(("large".to_owned(), returns(4, 3e11), labels()));
    plans.push(("long".to_owned(), returns(7, 1e12), long_labels()));
    plans.push(("slack".to_owned(), slack(), labels()));
    plans.push(("uses".to_owned(), uses(), labels()));
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
        let begun = std::time::Instant::now();
        let drawings = drawn(&problem, &labels);
        println!("{name}: {:?}", begun.elapsed());
        for drawing in drawings {
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
fn no_text_leaves_the_sheet() {
    let plans = [1, 3, 12, 60].map(|count| returns(count, 2e6));
    let plans = plans
        .into_iter()
        .chain([1e-9, 1e12].map(|money| returns(7, money)));
    for (problem, labels) in
        plans.flat_map(|plan| [(plan.clone(), labels()), (plan, long_labels())])
    {
        for drawing in drawn(&problem, &labels) {
            let head = drawing.svg.split('>').next().unwrap();
            let sheet: Vec<f64> = head
                .split("viewBox=\"")
                .nth(1)
                .and_then(|rest| rest.split('"').next())
                .unwrap()
                .split(' ')
                .map(|number| number.parse().unwrap())
                .collect();
            for element in drawing.svg.split("<text").skip(1) {
                let (tag, rest) = element.split_once('>').unwrap();
                let letters = rest.split('<').next().unwrap().trim().chars().count() as f64;
                let (x, y) = (attribute(tag, "x").unwrap(), attribute(tag, "y").unwrap());
                // A letter of a sans-serif face is about half as wide as the face is high.
                let length = 0.5 * letters * attribute(tag, "font-size").unwrap();
                let before = match tag {
                    tag if tag.contains("\"end\"") => length,
                    tag if tag.contains("\"middle\"") => length / 2.0,
                    _ => 0.0,
                };
                let upright = tag.contains("rotate(270");
                let (along, end) = if upright {
                    (sheet[3] - y, sheet[3])
                } else {
                    (x, sheet[2])
                };
                assert!((0.0..=sheet[2]).contains(&x), "{tag}");
                assert!((0.0..=sheet[3]).contains(&y), "{tag}");
                assert!(before <= along, "{element}");
                assert!(along - before + length <= end, "{element}");
            }
        }
    }
}

/// A text of a picture and what it covers: left, right, top, bottom.
struct Written {
    text: String,
    covers: [f64; 4],
}

/// The level texts of a picture, measured with the embedded font, which drawing has registered.
fn level_texts(svg: &str) -> Vec<Written> {
    /// The drawing library divides the size of a font by this before it writes it.
    const EM_SHARE: f64 = 1.24;
    let elements = svg.split("<text").skip(1).map(|element| {
        let (tag, rest) = element.split_once('>').unwrap();
        (tag, rest.split('<').next().unwrap().trim())
    });
    elements
        .filter(|(tag, text)| !tag.contains("rotate(") && !text.is_empty())
        .map(|(tag, text)| {
            let text = text.replace("&lt;", "<").replace("&gt;", ">");
            let [x, y, size] = ["x", "y", "font-size"].map(|name| attribute(tag, name).unwrap());
            let style = if tag.contains("bold") {
                FontStyle::Bold
            } else {
                FontStyle::Normal
            };
            let font = ("sans-serif", EM_SHARE * size, style).into_font();
            let ((from, _), (to, _)) = font.layout_box(&text).unwrap();
            let width = f64::from(to - from);
            let left = match tag {
                tag if tag.contains("\"end\"") => x - width,
                tag if tag.contains("\"middle\"") => x - width / 2.0,
                _ => x,
            };
            // Letters without ascenders or descenders are about half as high as the face.
            let covers = [left, left + width, y - 0.4 * size, y + 0.4 * size];
            Written { text, covers }
        })
        .collect()
}

/// Logarithmic curves that start at these marginal returns and halve them at these spends.
fn halving(halves: &[(f64, f64)]) -> Vec<Activity> {
    let activities = halves.iter().enumerate().map(|(i, &(marginal, scale))| {
        let given = LogParams {
            gain: marginal * scale,
            scale,
        };
        Activity {
            current: Some(0.5 * scale),
            ..Activity::new(
                format!("Work {}", i + 1),
                Curve::Log(Log::new(given).unwrap()),
            )
        }
    });
    activities.collect()
}

fn with_budget(activities: Vec<Activity>, budget: f64) -> Problem {
    Problem::new(Aim::Maximise, activities, vec![Constraint::budget(budget)]).unwrap()
}

/// Spends from one to ten thousand million.
fn orders_of_spend() -> Problem {
    let halves: Vec<(f64, f64)> = (0..6).map(|i| (2.0, 100_f64.powi(i))).collect();
    with_budget(halving(&halves), 1e10)
}

#[test]
fn no_text_covers_another() {
    let short = [
        returns(60, 2e6),
        returns(5, 1e-12),
        returns(5, 1e3),
        returns(5, 1e15),
        slack(),
        uses(),
        orders_of_spend(),
    ];
    let long = [returns(12, 2e6), costs()];
    let short = short.into_iter().map(|plan| (plan, labels()));
    for (problem, labels) in short.chain(long.into_iter().map(|plan| (plan, long_labels()))) {
        for drawing in drawn(&problem, &labels) {
            let texts = level_texts(&drawing.svg);
            for (i, one) in texts.iter().enumerate() {
                for other in &texts[i + 1..] {
                    let [left, right, top, bottom] = one.covers;
                    let [other_left, other_right, other_top, other_bottom] = other.covers;
                    let apart = right <= other_left
                        || other_right <= left
                        || bottom <= other_top
                        || other_bottom <= top;
                    assert!(apart, "{:?} and {:?}", one.text, other.text);
                }
            }
        }
    }
}

#[test]
fn names_that_begin_alike_stay_apart() {
    let mut activities = halving(&[(2.0, 1.0); 12]);
    for (i, activity) in activities.iter_mut().enumerate() {
        let name = format!(
            "Renewal of the pumps along the northern canal, lot {}",
            i + 1
        );
        activity.name = name.into();
    }
    for drawing in drawn(&with_budget(activities, 20.0), &labels()) {
        let texts = level_texts(&drawing.svg);
        let names = texts
            .iter()
            .filter(|written| written.text.starts_with("Renewal"));
        let mut names: Vec<&str> = names.map(|written| written.text.as_str()).collect();
        names.sort_unstable();
        names.dedup();
        assert_eq!(names.len(), 12, "{names:?}");
    }
}

#[test]
fn panels_whose_spends_differ_much_have_units_of_their_own() {
    let drawing = drawn(&orders_of_spend(), &labels()).remove(0);
    let texts = level_texts(&drawing.svg);
    for unit in ["billion EUR", "million EUR", "thousand EUR", "EUR"] {
        assert!(texts.iter().any(|written| written.text == unit), "{unit}");
    }
    assert!(!texts.iter().any(|written| written.text.contains("e-")));
}

#[test]
fn a_picture_that_leaves_activities_out_does_not_claim_them() {
    let drawing = drawn(&returns(60, 2e6), &labels()).remove(0);
    assert!(!drawing.title.contains("every activity"));
    assert!(
        drawing
            .svg
            .contains("the 20 with most spend of 60 activities")
    );
}

#[test]
fn an_infinite_price_is_said_without_a_unit() {
    let power = PowerParams {
        gain: 2.0,
        exponent: 0.5,
    };
    let vertical = Activity::new("vertical", Curve::Power(Power::new(power).unwrap()));
    let nothing = Solution {
        spends: vec![0.0],
        shadow_prices: vec![f64::INFINITY],
    };
    let drawing = drawn_with(&with_budget(vec![vertical], 0.0), &labels(), &nothing).remove(0);
    let said = level_texts(&drawing.svg);
    assert!(
        said.iter()
            .any(|written| written.text == "shadow price without end")
    );
}

#[test]
fn where_uses_differ_every_panel_states_its_own_price() {
    let problem = uses();
    let solution = solve(&problem).unwrap();
    let drawing = drawn_with(&problem, &labels(), &solution).remove(0);
    for i in 0..problem.activities().len() {
        // The first-order condition of the optimum: w r' = λ a, here per million.
        let use_per_unit = problem.constraints()[0].use_per_unit(i);
        let price = 1e6 * solution.shadow_prices[0] * use_per_unit;
        assert!(
            drawing.svg.contains(&format!("price {price:.2}")),
            "{price}"
        );
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
        assert!(drawing.svg.contains("<title>&lt;b&gt;&amp;"));
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
    let huge = Activity {
        cap: 1e308,
        current: Some(1e307),
        ..line(1e-308)
    };
    let huge = Problem::new(
        Aim::Maximise,
        vec![huge, line(1e100)],
        vec![Constraint::budget(1e308)],
    )
    .unwrap();
    for price in [f64::INFINITY, f64::NEG_INFINITY, 1e100, -1e-300] {
        let odd = Solution {
            spends: vec![1e308, 0.0],
            shadow_prices: vec![price],
        };
        drawn_with(&huge, &labels(), &odd);
    }
    // A plan that no solver made: the pictures must still end.
    let odd = Solution {
        spends: vec![f64::INFINITY, f64::NAN],
        shadow_prices: vec![f64::NAN],
    };
    drawn_with(&nothing, &labels(), &odd);
}
