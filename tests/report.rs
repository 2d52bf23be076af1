//! The report as people and programmes read it, from plans with a certificate written by hand.

use isomargin::certificate::{Certificate, LpBracket, LpCheck, Verdict};
use isomargin::curves::{
    Curve, Exponential, ExponentialParams, Hyperbolic, HyperbolicParams, Knot, Linear,
    LinearParams, Log, LogParams, Points, Power, PowerParams, Quadratic, QuadraticParams,
};
use isomargin::model::{Activity, Aim, Constraint, Labels, ObservedRange, Problem, Solution};
use isomargin::report::{
    Findings, Input, NoPlan, OtherColumn, Provenance, Reading, Report, Rounding, TextOptions,
    Understood, render_activities_table, render_allocation, render_certificate_table,
    render_comparison_table, render_constraints_table, render_json, render_no_plan_json,
    render_text, render_understood,
};
use isomargin::sensitivity::{ConstraintPrice, price_constraints};
use isomargin::solver::{demand_of, round_spends, solve};

const PIPED: TextOptions = TextOptions {
    width: 80,
    bold: false,
    proof: false,
};

fn log(gain: f64, scale: f64) -> Curve {
    Curve::Log(Log::new(LogParams { gain, scale }).unwrap())
}

fn exponential(ceiling: f64, scale: f64) -> Curve {
    Curve::Exponential(Exponential::new(ExponentialParams { ceiling, scale }).unwrap())
}

fn hyperbolic(ceiling: f64, scale: f64) -> Curve {
    Curve::Hyperbolic(Hyperbolic::new(HyperbolicParams { ceiling, scale }).unwrap())
}

fn power(gain: f64, exponent: f64) -> Curve {
    Curve::Power(Power::new(PowerParams { gain, exponent }).unwrap())
}

fn linear(slope: f64) -> Curve {
    Curve::Linear(Linear::new(LinearParams { slope }).unwrap())
}

fn quadratic(slope: f64, curvature: f64) -> Curve {
    Curve::Quadratic(Quadratic::new(QuadraticParams { slope, curvature }).unwrap())
}

fn points(table: &[(f64, f64)]) -> Curve {
    let knots: Vec<Knot> = table
        .iter()
        .map(|&(spend, value)| Knot { spend, value })
        .collect();
    Curve::Points(Points::new(&knots).unwrap())
}

/// An activity between bounds, with today's spend.
fn activity(name: &str, curve: Curve, floor: f64, cap: f64, current: f64) -> Activity {
    let mut activity = Activity::new(name, curve);
    (activity.floor, activity.cap, activity.current) = (floor, cap, Some(current));
    activity
}

fn labels(title: &str, money: &str, return_unit: &str) -> Labels {
    let named = |unit: &str| (!unit.is_empty()).then(|| unit.to_owned());
    Labels {
        title: named(title),
        money: named(money),
        return_unit: named(return_unit),
        period: None,
    }
}

/// A plan, solved, with what a report needs besides.
struct Solved {
    labels: Labels,
    problem: Problem,
    solution: Solution,
    certificate: Certificate,
    prices: Vec<ConstraintPrice>,
    rounding: Option<Rounding>,
    notes: Vec<String>,
    provenance: Provenance,
}

impl Solved {
    fn new(labels: Labels, aim: Aim, activities: Vec<Activity>, constraint: Constraint) -> Self {
        let problem = Problem::new(aim, activities, vec![constraint]).unwrap();
        let solution = solve(&problem).unwrap();
        let total = problem.total(&solution.spends);
        let certificate = Certificate {
            verdict: Verdict::Proven,
            total,
            lower_bound: total,
            upper_bound: total,
            gap: 2e-16,
            primal_residual: 0.0,
            stationarity_residual: 3e-16,
            complementarity_residual: 1e-17,
            lp: LpCheck::Bracketed(LpBracket {
                lower: total * (1.0 - 4e-7),
                upper: total * (1.0 + 4e-7),
                prices: solution.shadow_prices.clone(),
                rounds: 3,
                encloses: true,
            }),
        };
        let prices = price_constraints(&problem, &solution, &demand_of(&problem).unwrap());
        Self {
            labels,
            problem,
            solution,
            certificate,
            prices,
            rounding: None,
            notes: Vec::new(),
            provenance: Provenance {
                version: "0.0.0".to_owned(),
                command: "allocate plan.toml".to_owned(),
                inputs: vec![Input {
                    path: "plan.toml".to_owned(),
                    sha256: "0".repeat(64),
                }],
            },
        }
    }

    fn rounded_to(mut self, step: f64) -> Self {
        let rounded = round_spends(&self.problem, &self.solution.spends, step).unwrap();
        self.rounding = Some(Rounding {
            step,
            exact_total: self.problem.total(&self.solution.spends),
            spends: rounded.spends,
            total: rounded.total,
            odd: rounded.odd,
            kept: rounded.kept,
        });
        self
    }

    fn report(&self) -> Report<'_> {
        Report::build(&Findings {
            labels: &self.labels,
            problem: &self.problem,
            solution: &self.solution,
            certificate: &self.certificate,
            prices: &self.prices,
            rounding: self.rounding.as_ref(),
            notes: &self.notes,
            provenance: &self.provenance,
        })
    }

    fn text(&self) -> String {
        render_text(&self.report(), &PIPED)
    }
}

/// Twelve measures of an invented coast.
fn coast(budget: f64) -> Solved {
    let activities = vec![
        activity("Dune restoration", log(310.0, 1.9e6), 0.0, 5e6, 1.5e6),
        activity("Tide gates", exponential(520.0, 3.1e6), 1e6, 3.5e6, 3.0e6),
        activity(
            "Pumping stations",
            hyperbolic(480.0, 4.2e6),
            1.2e6,
            9e6,
            4.0e6,
        ),
        activity(
            "House raising grants",
            power(0.094, 0.52),
            0.0,
            f64::INFINITY,
            2.0e6,
        ),
        activity("Salt marsh renewal", log(96.0, 2.4e6), 0.0, 3e6, 0.4e6),
        activity(
            "Drain cleaning",
            quadratic(9.0e-5, -6.0e-11),
            2e5,
            1.4e6,
            0.9e6,
        ),
        activity(
            "Flood warning sirens",
            exponential(60.0, 4e5),
            1e5,
            2e6,
            0.5e6,
        ),
        activity("Breakwater repair", hyperbolic(210.0, 6e6), 2e6, 8e6, 4.5e6),
        activity("Culvert widening", linear(3.1e-5), 0.0, 2e6, 1.2e6),
        activity(
            "Property flood doors",
            points(&[(0.0, 0.0), (1e6, 90.0), (2e6, 150.0), (4e6, 200.0)]),
            0.0,
            4e6,
            1.5e6,
        ),
        activity("Road embankment", linear(2.2e-5), 0.0, 6e6, 3.5e6),
        activity("Community training", power(0.31, 0.31), 5e4, 5e5, 0.2e6),
    ];
    let mut solved = Solved::new(
        labels("Coastal flood resilience", "EUR", "homes protected"),
        Aim::Maximise,
        activities,
        Constraint::budget(budget),
    );
    solved.labels.period = Some("2027".to_owned());
    solved
}

/// Three units of Wood and Wollenberg, Power Generation, Operation and Control, 2nd ed. 1996,
/// Example 3A: incremental costs 7.92 + 2·0.001562 P and so on, 850 MW to meet.
fn dispatch() -> Solved {
    let unit = |name: &str, [base, slope, half]: [f64; 3], floor: f64, cap: f64| {
        let mut unit = Activity::new(name, quadratic(slope, 2.0 * half));
        (unit.base, unit.floor, unit.cap) = (base, floor, cap);
        unit
    };
    Solved::new(
        labels("", "MW", "R/h"),
        Aim::Minimise,
        vec![
            unit("Unit 1", [561.0, 7.92, 0.001562], 150.0, 600.0),
            unit("Unit 2", [310.0, 7.85, 0.00194], 100.0, 400.0),
            unit("Unit 3", [78.0, 7.97, 0.00482], 50.0, 200.0),
        ],
        Constraint::requirement(850.0),
    )
}

/// Many activities without units or history, spends from tiny to large.
fn many(count: usize) -> Solved {
    let activities = (0..count)
        .map(|i| {
            let size = 1.0 + ((i * 7919) % 101) as f64;
            let mut activity = Activity::new(
                format!("Activity {}", i + 1),
                log(size, 0.5 * size * (1.0 + (i % 7) as f64)),
            );
            activity.cap = 60.0;
            activity
        })
        .collect();
    Solved::new(
        labels("", "", ""),
        Aim::Maximise,
        activities,
        Constraint::budget(20.0 * count as f64),
    )
}

/// Names that are long, without spaces, or in wide characters, and an activity seen elsewhere.
fn long_names() -> Solved {
    let mut activities = vec![
        activity(
            "Refurbishment of the reading rooms on both floors of the central building",
            log(40.0, 3e4),
            0.0,
            9e4,
            2e4,
        ),
        activity(
            "Donaudampfschifffahrtsgesellschaft",
            log(30.0, 2e4),
            0.0,
            9e4,
            0.0,
        ),
        activity("移動図書館と読み聞かせの会", log(20.0, 1e4), 1e4, 9e4, 3e4),
    ];
    activities[0].observed = Some(ObservedRange { from: 1e4, to: 4e4 });
    activities[1].current = None;
    let mut solved = Solved::new(
        labels("", "€", "loans per week"),
        Aim::Maximise,
        activities,
        Constraint::budget(12e4),
    );
    solved.notes.push(
        "activities.csv was read with ; between the cells and a comma before the decimals."
            .to_owned(),
    );
    solved
}

/// A national budget in full units: twelve digits.
fn billions() -> Solved {
    let activities = ["North", "South", "East"]
        .iter()
        .zip([4e10, 7e10, 2e10])
        .map(|(name, scale)| activity(name, exponential(scale / 50.0, scale), 0.0, 9e11, scale))
        .collect();
    Solved::new(
        labels("", "EUR", "EUR a year saved"),
        Aim::Maximise,
        activities,
        Constraint::budget(240e9),
    )
}

#[test]
fn a_report_of_twelve_activities_reads_well() {
    insta::assert_snapshot!("coast", coast(24e6).text());
}

#[test]
fn a_report_of_a_least_cost_plan_reads_well() {
    insta::assert_snapshot!("dispatch", dispatch().text());
}

#[test]
fn a_report_without_units_reads_well() {
    insta::assert_snapshot!("sixty", many(60).text());
}

#[test]
fn a_report_of_many_activities_shows_the_largest_and_sums_the_rest() {
    insta::assert_snapshot!("hundred", many(100).text());
}

#[test]
fn long_names_wrap_and_numbers_stay_aligned() {
    insta::assert_snapshot!("long_names", long_names().text());
}

#[test]
fn large_amounts_are_shown_in_millions() {
    insta::assert_snapshot!("billions", billions().text());
}

#[test]
fn a_rounded_plan_says_what_rounding_costs() {
    insta::assert_snapshot!("rounded", coast(24e6).rounded_to(50_000.0).text());
}

#[test]
fn money_that_earns_nothing_is_said_to_be_left() {
    let mut caps = coast(24e6);
    let capped: Vec<Activity> = caps
        .problem
        .activities()
        .iter()
        .cloned()
        .map(|mut activity| {
            activity.cap = activity.cap.min(3e6);
            activity
        })
        .collect();
    caps = Solved::new(caps.labels, Aim::Maximise, capped, Constraint::budget(60e6));
    insta::assert_snapshot!("unspent", caps.text());
}

#[test]
fn every_line_fits_eighty_columns() {
    use unicode_width::UnicodeWidthStr;
    let plans = [
        coast(24e6),
        coast(24e6).rounded_to(1000.0),
        dispatch(),
        many(60),
        many(100),
        long_names(),
        billions(),
    ];
    for plan in plans {
        for line in plan.text().lines() {
            assert!(line.width() <= 80, "{} columns: {line}", line.width());
        }
    }
}

#[test]
fn a_plan_whose_certificate_fails_is_not_called_best() {
    let mut plan = dispatch();
    plan.certificate.verdict = Verdict::NotProven;
    plan.certificate.upper_bound *= 1.0001;
    plan.certificate.gap = 1e-4;
    let text = plan.text();
    let headline = text.lines().take(2).collect::<Vec<_>>().join(" ");
    assert!(headline.starts_with("Not proven."), "{headline}");
    assert!(!headline.contains("the least"), "{headline}");
    insta::assert_snapshot!("not_proven", text);
}

/// Three users of Loucks and van Beek, Water Resource Systems Planning and Management, ch. 4 (from
/// memory): benefits 6x − x², 7x − 1.5x², 8x − 0.5x². Six units go (1, 1, 4) at a price of 4 and
/// give 34.5.
fn water_users(limit: f64) -> Solved {
    Solved::new(
        labels("", "", ""),
        Aim::Maximise,
        vec![
            Activity::new("User 1", quadratic(6.0, -2.0)),
            Activity::new("User 2", quadratic(7.0, -3.0)),
            Activity::new("User 3", quadratic(8.0, -1.0)),
        ],
        Constraint::budget(limit),
    )
}

fn json_of(solved: &Solved) -> serde_json::Value {
    let mut document = Vec::new();
    render_json(&solved.report(), &mut document).unwrap();
    serde_json::from_slice(&document).unwrap()
}

#[test]
fn json_has_the_published_answer_under_the_names_of_schema_one() {
    let document = json_of(&water_users(6.0));
    assert_eq!(document["schema"], 1);
    assert_eq!(document["status"], "proven");
    assert_eq!(document["aim"], "maximise");
    assert!((document["total"].as_f64().unwrap() - 34.5).abs() < 1e-12);
    for (i, spend) in [1.0, 1.0, 4.0].into_iter().enumerate() {
        let activity = &document["activities"][i];
        let close =
            |name: &str, value: f64| (activity[name].as_f64().unwrap() - value).abs() < 1e-12;
        assert!(close("spend", spend), "{activity}");
        assert!(close("marginal_return", 4.0), "{activity}");
        assert_eq!(activity["position"], "between");
        assert!(activity["return"].is_number());
    }
    let budget = &document["constraints"][0];
    assert_eq!(budget["constraint"], "budget");
    assert_eq!(budget["sense"], "<=");
    assert_eq!(budget["limit"], 6.0);
    assert!((budget["used"].as_f64().unwrap() - 6.0).abs() < 1e-12);
    assert!(budget["slack"].as_f64().unwrap().abs() < 1e-12);
    assert_eq!(budget["binding"], true);
    for price in ["shadow_price", "price_of_one_more", "price_of_one_less"] {
        assert!(
            (budget[price].as_f64().unwrap() - 4.0).abs() < 1e-12,
            "{price}"
        );
    }
    // User 1 gets nothing up to a total of 2⅓ (the same chapter); beyond 13⅓, where every user
    // has all that is worth having, money is left.
    let end = |name: &str| budget[name].as_f64().unwrap();
    assert!((end("holds_from") - 7.0 / 3.0).abs() < 1e-12);
    assert!((end("holds_to") - 40.0 / 3.0).abs() < 1e-12);
    let certificate = &document["certificate"];
    assert_eq!(certificate["verdict"], "proven");
    for name in [
        "lower_bound",
        "upper_bound",
        "gap",
        "primal_residual",
        "stationarity_residual",
        "complementarity_residual",
        "lp_lower",
        "lp_upper",
    ] {
        assert!(certificate[name].is_number(), "{name}");
    }
    assert!(certificate["lp_prices"][0].is_number());
}

#[test]
fn a_limit_without_end_is_null() {
    // With 20 units 6⅔ are left (the same chapter).
    let document = json_of(&water_users(20.0));
    assert_eq!(
        document["constraints"][0]["holds_to"],
        serde_json::Value::Null
    );
    assert_eq!(document["constraints"][0]["binding"], false);
    assert_eq!(document["constraints"][0]["shadow_price"], 0.0);
}

#[test]
fn an_unproven_plan_says_so_in_json() {
    let mut plan = water_users(6.0);
    plan.certificate.verdict = Verdict::NotProven;
    plan.certificate.lp = LpCheck::LeftOut {
        activities: 3,
        limit: 2,
    };
    let document = json_of(&plan);
    assert_eq!(document["status"], "not proven");
    assert_eq!(document["certificate"]["verdict"], "not proven");
    assert_eq!(document["certificate"]["lp_lower"], serde_json::Value::Null);
}

#[test]
fn the_table_of_spends_has_the_five_columns_of_the_contract() {
    let mut plan = water_users(6.0);
    plan.solution.spends = vec![1.0, 1.0, 4.0];
    let mut table = Vec::new();
    let report = plan.report();
    render_allocation(&report.rows, &mut table).unwrap();
    assert_eq!(
        String::from_utf8(table).unwrap(),
        "activity,spend,return,marginal_return,position\n\
         User 1,1,5,4,between\n\
         User 2,1,5.5,4,between\n\
         User 3,4,24,4,between\n"
    );
}

#[test]
fn blocks_of_a_large_table_keep_the_order_of_the_file() {
    let plan = many(20_000);
    let mut table = Vec::new();
    render_allocation(&plan.report().rows, &mut table).unwrap();
    let table = String::from_utf8(table).unwrap();
    let names = table
        .lines()
        .skip(1)
        .map(|line| line.split(',').next().unwrap());
    let mut count = 0;
    for (i, name) in names.enumerate() {
        assert_eq!(name, format!("Activity {}", i + 1));
        count += 1;
    }
    assert_eq!(count, 20_000);
}

#[test]
fn the_other_tables_are_whole() {
    let plan = coast(24e6).rounded_to(1000.0);
    let report = plan.report();
    let mut tables = String::new();
    type Render = fn(&Report, &mut Vec<u8>) -> std::io::Result<()>;
    let renders: [(&str, Render); 3] = [
        ("constraints", render_constraints_table),
        ("comparison", render_comparison_table),
        ("certificate", render_certificate_table),
    ];
    for (name, render) in renders {
        let mut table = Vec::new();
        render(&report, &mut table).unwrap();
        let table = String::from_utf8(table).unwrap();
        let mut columns = table.lines().map(|line| line.split(',').count());
        let first = columns.next();
        assert!(columns.all(|count| Some(count) == first), "{table}");
        let header = table.lines().next().unwrap();
        tables.push_str(&format!(
            "{name}: {header}, {} rows\n",
            table.lines().count() - 1
        ));
    }
    insta::assert_snapshot!("tables", tables);
    let mut activities = Vec::new();
    render_activities_table(&report, &mut activities).unwrap();
    let mut table = csv::Reader::from_reader(activities.as_slice());
    let spend: f64 = table
        .records()
        .map(|record| record.unwrap()[1].parse::<f64>().unwrap())
        .sum();
    assert_eq!(spend, 24e6);
}

#[test]
fn floors_above_the_budget_are_said_with_the_budget_that_works() {
    let plan = coast(24e6);
    let problem = plan.problem.with_limit(0, 3e6).unwrap();
    let no_plan = NoPlan::new(&plan.labels, &problem, 0, 4.55e6, f64::INFINITY);
    assert_eq!(
        no_plan.headline,
        "No plan: the floors of 12 activities need 4,550,000 EUR, 1,550,000 EUR more than the \
         budget of 3,000,000 EUR."
    );
    assert_eq!(
        no_plan.mend,
        "The least budget that works is 4,550,000 EUR; or lower the floors by 1,550,000 EUR in \
         all."
    );
    let mut document = Vec::new();
    render_no_plan_json(&no_plan, &problem, "0.0.0", &mut document).unwrap();
    let document: serde_json::Value = serde_json::from_slice(&document).unwrap();
    assert_eq!(document["status"], "infeasible");
    assert_eq!(document["shortfall"], 1.55e6);
    assert_eq!(document["nearest_limit"], 4.55e6);
}

#[test]
fn what_was_read_can_be_checked_line_by_line() {
    let plan = coast(24e6);
    let columns = [
        OtherColumn {
            name: "district".to_owned(),
            is_resource: false,
        },
        OtherColumn {
            name: "staff_hours".to_owned(),
            is_resource: true,
        },
    ];
    let understood = Understood::build(&Reading {
        labels: &plan.labels,
        problem: &plan.problem,
        other_columns: &columns,
        notes: &plan.notes,
        provenance: &plan.provenance,
    });
    insta::assert_snapshot!("understood", render_understood(&understood, &PIPED));
}

#[test]
fn bold_changes_nothing_but_the_weight() {
    let plan = coast(24e6);
    let bold = TextOptions {
        bold: true,
        ..PIPED
    };
    let text = render_text(&plan.report(), &bold);
    assert!(text.contains("\x1b[1m"));
    assert_eq!(
        text.replace("\x1b[1m", "").replace("\x1b[0m", ""),
        plan.text()
    );
}
