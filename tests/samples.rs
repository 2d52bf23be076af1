//! The sample budgets: each report as a person sees it, and the facts that can be checked by hand.

use std::path::Path;

use assert_cmd::Command;
use serde_json::Value;

/// Spends add up to the limit to this share of it: a few roundings of a sum.
const ROUNDING: f64 = 1e-14;

/// Equal margins and prices agree to this share.
const AGREEMENT: f64 = 1e-12;

/// Runs `allocate` on the plan of a sample and gives what it wrote to stdout.
fn allocate(sample: &str, options: &[&str]) -> String {
    let plan = format!("sample-budgets/{sample}/plan.toml");
    let output = Command::cargo_bin("isomargin")
        .unwrap()
        .current_dir(Path::new(env!("CARGO_MANIFEST_DIR")))
        .args(["allocate", &plan])
        .args(options)
        .output()
        .unwrap();
    let narration = String::from_utf8(output.stderr).unwrap();
    assert_eq!(output.status.code(), Some(0), "{narration}");
    assert_eq!(narration, "", "a sample leaves nothing to be said");
    String::from_utf8(output.stdout).unwrap()
}

/// The report without what changes with the version and with the bytes of the files.
fn report(sample: &str) -> String {
    let text = allocate(sample, &[]);
    let version = format!("isomargin {}", env!("CARGO_PKG_VERSION"));
    let kept: Vec<String> = text
        .lines()
        .map(|line| {
            let is_digest =
                line.trim().len() == 64 && line.trim().bytes().all(|b| b.is_ascii_hexdigit());
            if is_digest {
                "    (digest)".to_owned()
            } else {
                line.replace(&version, "isomargin (version)")
            }
        })
        .collect();
    kept.join("\n")
}

fn in_one_line(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

fn result(sample: &str) -> Value {
    serde_json::from_str(&allocate(sample, &["--json"])).unwrap()
}

fn number(value: &Value) -> f64 {
    value
        .as_f64()
        .unwrap_or_else(|| panic!("{value} is no number"))
}

fn price(result: &Value) -> f64 {
    number(&result["constraints"][0]["shadow_price"])
}

fn activity<'a>(result: &'a Value, name: &str) -> &'a Value {
    result["activities"]
        .as_array()
        .unwrap()
        .iter()
        .find(|activity| activity["activity"] == name)
        .unwrap_or_else(|| panic!("no activity named {name}"))
}

fn position<'a>(result: &'a Value, name: &str) -> &'a str {
    activity(result, name)["position"].as_str().unwrap()
}

fn extrapolated(result: &Value) -> Vec<&str> {
    result["activities"]
        .as_array()
        .unwrap()
        .iter()
        .filter(|activity| activity["extrapolated"] == true)
        .map(|activity| activity["activity"].as_str().unwrap())
        .collect()
}

fn assert_close(found: f64, expected: f64, tolerance: f64) {
    assert!(
        (found - expected).abs() <= tolerance * expected.abs(),
        "found {found}, expected {expected}"
    );
}

/// What holds for every sample: proven, spent to the last unit, and today's split beaten with
/// the same money.
fn assert_proven_and_spent(result: &Value, limit: f64) {
    assert_eq!(result["status"], "proven");
    let spends = result["activities"].as_array().unwrap();
    let sum: f64 = spends
        .iter()
        .map(|activity| number(&activity["spend"]))
        .sum();
    assert_close(sum, limit, ROUNDING);
    let today: f64 = spends
        .iter()
        .map(|activity| number(&activity["current"]))
        .sum();
    assert_eq!(today, limit);
    let split = &result["comparison"][0];
    assert_eq!(split["split"], "current");
    assert!(number(&split["gain"]) > 0.0);
}

#[test]
fn the_flood_report_reads_as_kept() {
    insta::assert_snapshot!("coastal_flood", report("coastal-flood"));
}

#[test]
fn the_library_report_reads_as_kept() {
    insta::assert_snapshot!("library_reading", report("library-reading"));
}

#[test]
fn the_pollution_report_reads_as_kept() {
    insta::assert_snapshot!("pollution_cut", report("pollution-cut"));
}

#[test]
fn flood_measures_between_their_bounds_earn_the_price() {
    let result = result("coastal-flood");
    assert_proven_and_spent(&result, 24_000_000.0);
    let price = price(&result);
    for activity in result["activities"].as_array().unwrap() {
        if activity["position"] == "between" {
            assert_close(number(&activity["marginal_return"]), price, AGREEMENT);
        }
    }
    // By the formulas of docs/files.md with the parameters of the table, from the price alone.
    let by_hand = [
        ("Dune nourishment", 2.4e6 * (480.0 / (2.4e6 * price)).ln()),
        ("River bank raising", 150.0 / price - 8e5),
        ("Pumping stations", (640.0 * 2.9e6 / price).sqrt() - 2.9e6),
        ("Doorstep barriers", (0.018 * 0.6 / price).powf(1.0 / 0.4)),
        ("Raised access roads", (0.00004 - price) / 8e-12),
    ];
    for (name, spend) in by_hand {
        assert_close(number(&activity(&result, name)["spend"]), spend, AGREEMENT);
    }
}

#[test]
fn flood_measures_stand_where_their_bounds_hold_them() {
    let result = result("coastal-flood");
    let price = price(&result);
    // 0.000054 − 1e-11·2,400,000 = 0.00003 homes for the next EUR, below the price.
    assert_eq!(position(&result, "Sea wall upkeep"), "at floor");
    assert!(price > 0.00003);
    assert_eq!(position(&result, "Storm drains"), "at cap");
    assert!(price < 0.000095);
    assert_eq!(position(&result, "Relocation grants"), "unfunded");
    assert!(price > 0.000022);
    assert_eq!(extrapolated(&result), ["Salt marshes"]);
}

#[test]
fn a_library_step_that_is_taken_in_part_sets_the_price() {
    let result = result("library-reading");
    assert_proven_and_spent(&result, 3_540_000.0);
    // (22,110 − 20,950) readers for (2,100,000 − 1,900,000) GBP.
    let slope = 1_160.0 / 200_000.0;
    assert_close(price(&result), slope, AGREEMENT);
    let constraint = &result["constraints"][0];
    assert_close(number(&constraint["price_of_one_more"]), slope, AGREEMENT);
    assert_close(number(&constraint["price_of_one_less"]), slope, AGREEMENT);
    // The price stays for as many GBP as the step has left: it is 200,000 GBP wide.
    let width = number(&constraint["holds_to"]) - number(&constraint["holds_from"]);
    assert_close(width, 200_000.0, AGREEMENT);
}

#[test]
fn library_steps_end_at_their_knots() {
    let result = result("library-reading");
    for (name, knot) in [
        ("Mobile library", 160_000.0),
        ("Homework clubs", 180_000.0),
        ("Book packs for babies", 120_000.0),
    ] {
        assert_eq!(number(&activity(&result, name)["spend"]), knot, "{name}");
    }
    assert_eq!(position(&result, "Author visits"), "unfunded");
    assert_eq!(extrapolated(&result), ["Reading tutors"]);
}

#[test]
fn plants_between_their_bounds_pay_the_same_for_their_last_tonne() {
    let result = result("pollution-cut");
    assert_proven_and_spent(&result, 850.0);
    let price = price(&result);
    // Marginal cost slope + curvature·x, from the table.
    for (name, slope, curvature) in [
        ("North treatment works", 620.0, 9.5),
        ("Estuary treatment works", 1350.0, 14.0),
        ("Paper mill", 880.0, 16.0),
        ("Dairy", 1240.0, 38.0),
        ("Landfill drainage", 1650.0, 60.0),
    ] {
        let spend = number(&activity(&result, name)["spend"]);
        assert_close(slope + curvature * spend, price, AGREEMENT);
    }
    assert_eq!(position(&result, "Fertiliser plant"), "at cap");
    assert_eq!(position(&result, "South treatment works"), "at cap");
    assert_eq!(position(&result, "Fish cannery"), "at floor");
    assert_eq!(position(&result, "Tannery"), "unfunded");
}

/// The blocks of a page that show output.
fn shown_blocks(page: &str) -> Vec<String> {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join(page);
    let text = std::fs::read_to_string(path).unwrap();
    let blocks: Vec<String> = text
        .split("```text\n")
        .skip(1)
        .map(|rest| rest.split("```").next().unwrap_or_default().to_owned())
        .collect();
    assert!(!blocks.is_empty(), "{page} shows no output");
    blocks
}

#[test]
fn the_readme_shows_what_the_tool_prints() {
    let printed = allocate("coastal-flood", &[]);
    assert_eq!(shown_blocks("README.md")[0], printed);
}

#[test]
fn the_guide_to_the_report_quotes_the_tool() {
    let printed = in_one_line(&allocate("coastal-flood", &[]));
    for block in shown_blocks("docs/reading-a-report.md") {
        for line in block.lines() {
            let line = in_one_line(line);
            assert!(printed.contains(&line), "not printed: {line}");
        }
    }
}
