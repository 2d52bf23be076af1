//! What one price evaluation, one solve and its prices cost, beside one pass over memory.

mod mixed_plan;

use divan::{Bencher, counter::ItemsCount};
use isomargin::sensitivity::price_constraints;
use isomargin::solver::{demand_of, solve};
use mixed_plan::mixed_plan;

const SIZES: [usize; 4] = [12, 1_000, 100_000, 1_000_000];

fn main() {
    divan::main();
}

/// The yardstick: one sum over as many bytes as one price evaluation reads (32 an activity).
#[divan::bench(args = SIZES)]
fn pass_over_memory(bencher: Bencher, count: usize) {
    let numbers = vec![1.0_f64; 4 * count];
    bencher
        .counter(ItemsCount::new(count))
        .bench(|| isomargin::numeric::lane_sum(&numbers, |x| *x));
}

#[divan::bench(args = SIZES)]
fn one_price(bencher: Bencher, count: usize) {
    let demand = demand_of(&mixed_plan(count)).expect("one budget");
    bencher
        .counter(ItemsCount::new(count))
        .bench(|| demand.at(divan::black_box(0.9)));
}

#[divan::bench(args = SIZES)]
fn compile_demand(bencher: Bencher, count: usize) {
    let plan = mixed_plan(count);
    bencher
        .counter(ItemsCount::new(count))
        .bench(|| demand_of(&plan));
}

#[divan::bench(args = SIZES)]
fn whole_solve(bencher: Bencher, count: usize) {
    let plan = mixed_plan(count);
    bencher
        .counter(ItemsCount::new(count))
        .bench(|| solve(&plan));
}

#[divan::bench(args = SIZES)]
fn prices_on_both_sides(bencher: Bencher, count: usize) {
    let plan = mixed_plan(count);
    let solution = solve(&plan).expect("the budget covers the floors");
    let demand = demand_of(&plan).expect("one budget");
    bencher
        .counter(ItemsCount::new(count))
        .bench(|| price_constraints(&plan, &solution, &demand));
}
