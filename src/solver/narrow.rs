//! The demand for prices between two, with everything decided that no longer depends on them.

use rayon::prelude::*;

use super::demand::{Demand, Line, LogPrices, PowerLine, PriceScale};
use crate::numeric::{BLOCK, CompensatedSum};

/// What a block of lines comes to between two prices.
#[derive(Default)]
struct Decided {
    /// Use of those that stay at a bound.
    fixed: CompensatedSum,
    /// Sums over those that stay between their bounds.
    intercept: CompensatedSum,
    slope: CompensatedSum,
    /// The others.
    undecided: Vec<Line>,
}

/// The same demand for prices in [`from`, `to`] alone: what stays at a bound over the whole
/// interval becomes a constant, and the lines that stay between their bounds become one.
pub(super) fn narrowed(demand: &Demand, from: f64, to: f64) -> Demand {
    let mut narrow = Demand {
        fixed: demand.fixed,
        ..Demand::default()
    };
    for (group, scale) in PriceScale::ALL.into_iter().enumerate() {
        let (at_from, at_to) = (scale.of(from), scale.of(to));
        let blocks: Vec<Decided> = demand.lines[group]
            .par_chunks(BLOCK)
            .map(|lines| Decided::between(lines, at_from, at_to))
            .collect();
        let mut intercept = CompensatedSum::default();
        let mut slope = CompensatedSum::default();
        for mut block in blocks {
            narrow.fixed.join(block.fixed);
            intercept.join(block.intercept);
            slope.join(block.slope);
            narrow.lines[group].append(&mut block.undecided);
        }
        if slope.total() != 0.0 {
            narrow.lines[group].push(Line {
                intercept: intercept.total(),
                slope: slope.total(),
                least: f64::NEG_INFINITY,
                greatest: f64::INFINITY,
            });
        }
    }
    let (logs_from, logs_to) = (LogPrices::of(from), LogPrices::of(to));
    let blocks: Vec<(CompensatedSum, Vec<PowerLine>)> = demand
        .powers
        .par_chunks(BLOCK)
        .map(|powers| {
            let mut fixed = CompensatedSum::default();
            let mut undecided = Vec::new();
            for power in powers {
                let (most, least) = (power.at(logs_from), power.at(logs_to));
                if most == least {
                    fixed.add(most);
                } else {
                    undecided.push(*power);
                }
            }
            (fixed, undecided)
        })
        .collect();
    for (fixed, mut undecided) in blocks {
        narrow.fixed.join(fixed);
        narrow.powers.append(&mut undecided);
    }
    for piece in &demand.pieces {
        if piece.price > to {
            narrow.fixed.add(piece.width);
        } else if piece.price >= from {
            narrow.pieces.push(*piece);
        }
    }
    for numeric in &demand.numeric {
        let (most, least) = (numeric.at(from).greatest, numeric.at(to).least);
        if most == least {
            narrow.fixed.add(most);
        } else {
            narrow.numeric.push(numeric.clone());
        }
    }
    narrow
}

impl Decided {
    fn between(lines: &[Line], at_from: f64, at_to: f64) -> Self {
        let mut decided = Self::default();
        for line in lines {
            let (most, least) = (line.at(at_from), line.at(at_to));
            let inside =
                line.least <= line.unbounded(at_to) && line.unbounded(at_from) <= line.greatest;
            if most == least {
                decided.fixed.add(most);
            } else if inside {
                decided.intercept.add(line.intercept);
                decided.slope.add(line.slope);
            } else {
                decided.undecided.push(*line);
            }
        }
        decided
    }
}
