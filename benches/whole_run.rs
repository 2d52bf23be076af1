//! A whole run from a file to the table of spends, beside the csv crate reading the same file.

mod mixed_plan;

use std::fmt::Write;
use std::path::{Path, PathBuf};

use divan::{Bencher, counter::ItemsCount};
use isomargin::certificate::{CrossCheck, certify};
use isomargin::curves::Parameter;
use isomargin::input::{PlanRequest, read_plan};
use isomargin::model::Problem;
use isomargin::report::{ActivityRows, render_allocation};
use isomargin::sensitivity::price_constraints;
use isomargin::solver::{demand_of, solve_from};
use mixed_plan::mixed_plan;

const SIZES: [usize; 4] = [12, 1_000, 100_000, 1_000_000];

fn main() {
    divan::main();
}

/// The parameters that the generated families need, as columns.
const PARAMETERS: [Parameter; 6] = [
    Parameter::Slope,
    Parameter::Curvature,
    Parameter::Gain,
    Parameter::Exponent,
    Parameter::Ceiling,
    Parameter::Scale,
];

/// A plan as an activities table of 10 columns.
fn table_of(plan: &Problem) -> String {
    let mut text =
        "activity,curve,slope,curvature,gain,exponent,ceiling,scale,floor,cap\n".to_owned();
    for activity in plan.activities() {
        let given = activity.curve.parameters();
        let _ = write!(text, "{},{}", activity.name, activity.curve.family());
        for parameter in PARAMETERS {
            let _ = match given.get(parameter) {
                Some(value) => write!(text, ",{value:.7}"),
                None => write!(text, ","),
            };
        }
        let _ = writeln!(text, ",{:.4},{:.4}", activity.floor, activity.cap);
    }
    text
}

/// A file with the plan of that size, and its budget. The folder goes with the first value.
fn file_of(count: usize) -> (tempfile::TempDir, PathBuf, f64) {
    let plan = mixed_plan(count);
    let folder = tempfile::tempdir().expect("a folder for the bench");
    let path = folder.path().join("activities.csv");
    std::fs::write(&path, table_of(&plan)).expect("a file for the bench");
    (folder, path, plan.constraints()[0].limit)
}

/// The yardstick: the csv crate with fast-float2 into columns of text and numbers.
fn columns_of(path: &Path) -> (Vec<String>, Vec<Vec<f64>>) {
    let mut reader = csv::Reader::from_path(path).expect("the bench's own file");
    let mut names = Vec::new();
    let mut columns = vec![Vec::new(); 8];
    let mut record = csv::ByteRecord::new();
    while reader
        .read_byte_record(&mut record)
        .expect("the bench's own file")
    {
        names.push(String::from_utf8_lossy(&record[0]).into_owned());
        for (column, cell) in columns.iter_mut().zip(record.iter().skip(2)) {
            column.push(fast_float2::parse(cell).unwrap_or(f64::NAN));
        }
    }
    (names, columns)
}

#[divan::bench(args = SIZES)]
fn csv_crate_into_columns(bencher: Bencher, count: usize) {
    let (_folder, path, _) = file_of(count);
    bencher
        .counter(ItemsCount::new(count))
        .bench(|| columns_of(&path));
}

#[divan::bench(args = SIZES)]
fn read_only(bencher: Bencher, count: usize) {
    let (_folder, path, budget) = file_of(count);
    let request = PlanRequest {
        path,
        budget: Some(budget),
        ..PlanRequest::default()
    };
    bencher
        .counter(ItemsCount::new(count))
        .bench(|| read_plan(&request));
}

#[divan::bench(args = SIZES)]
fn read_solve_certify_price_and_write(bencher: Bencher, count: usize) {
    let (folder, path, budget) = file_of(count);
    let request = PlanRequest {
        path,
        budget: Some(budget),
        ..PlanRequest::default()
    };
    let spends = folder.path().join("spends.csv");
    bencher.counter(ItemsCount::new(count)).bench(|| {
        let plan = read_plan(&request).expect("the bench's own plan");
        let demand = demand_of(&plan.problem).expect("one budget");
        let solution = solve_from(&plan.problem, &demand).expect("a budget above the floors");
        let certificate = certify(&plan.problem, &solution, CrossCheck::WhenQuick);
        let prices = price_constraints(&plan.problem, &solution, &demand);
        let mut file = std::fs::File::create(&spends).expect("a file for the bench");
        let rows = ActivityRows::new(&plan.problem, &solution, &solution.spends);
        render_allocation(&rows, &mut file).expect("room on the disk");
        (certificate, prices)
    });
}
