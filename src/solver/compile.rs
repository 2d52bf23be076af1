//! From an activity to the form of its demand.

use rayon::prelude::*;

use super::demand::{Demand, Line, LogPrices, NumericDemand, PowerLine, PriceScale, StraightPiece};
use crate::curves::{Curve, Points, Power, SpendRange};
use crate::model::Problem;
use crate::numeric::BLOCK;

/// One activity's answer to a price.
pub(super) enum Answer {
    /// Its bounds are equal.
    Fixed,
    /// A straight line in one of the price scales.
    Line(PriceScale, Line),
    /// A power of the price.
    Power(PowerLine),
    /// One straight line from floor to cap, of this marginal worth per unit of use.
    Straight(f64),
    /// Straight pieces.
    Pieces(Points),
    /// Found by iteration.
    Numeric(NumericDemand),
}

impl Answer {
    /// The answer of activity `i` to the price of the plan's one constraint. The same bits at
    /// every call, so that a price meets a piece's own price exactly.
    pub(super) fn of(problem: &Problem, i: usize) -> Self {
        let activity = &problem.activities()[i];
        let a = problem.constraints()[0].use_per_unit(i);
        if activity.floor == activity.cap {
            return Self::Fixed;
        }
        let (least, greatest) = (a * activity.floor, a * activity.cap);
        let line = |scale, intercept, slope| {
            Self::Line(
                scale,
                Line {
                    intercept,
                    slope,
                    least,
                    greatest,
                },
            )
        };
        let worth = problem.worth(i);
        match &worth {
            Curve::Linear(curve) => Self::Straight(curve.slope() / a),
            Curve::Quadratic(curve) => {
                let given = curve.params();
                if given.curvature == 0.0 {
                    return Self::Straight(given.slope / a);
                }
                // slope + curvature·x = a·λ
                line(
                    PriceScale::Price,
                    -a * given.slope / given.curvature,
                    a * a / given.curvature,
                )
            }
            Curve::Power(curve) => Self::of_power(curve, a, least, greatest),
            Curve::Log(curve) => {
                let given = curve.params();
                if given.gain == 0.0 {
                    return Self::Straight(0.0);
                }
                // gain/(scale + x) = a·λ
                line(PriceScale::Reciprocal, -a * given.scale, given.gain)
            }
            Curve::Exponential(curve) => {
                let given = curve.params();
                if given.ceiling == 0.0 {
                    return Self::Straight(0.0);
                }
                // ceiling/scale·e^(−x/scale) = a·λ
                let reach = a * given.scale;
                line(
                    PriceScale::Logarithm,
                    reach * (given.ceiling / reach).ln(),
                    -reach,
                )
            }
            Curve::Hyperbolic(curve) => {
                let given = curve.params();
                if given.ceiling == 0.0 {
                    return Self::Straight(0.0);
                }
                // ceiling·scale/(scale + x)² = a·λ
                let reach = a * given.scale;
                line(
                    PriceScale::InverseRoot,
                    -reach,
                    (given.ceiling * reach).sqrt(),
                )
            }
            Curve::Points(points) => Self::Pieces(points.clone()),
            Curve::Hill(_) | Curve::Logistic(_) => Self::Numeric(NumericDemand {
                worth,
                use_per_unit: a,
                floor: activity.floor,
                cap: activity.cap,
            }),
        }
    }

    fn of_power(curve: &Power, a: f64, least: f64, greatest: f64) -> Self {
        let given = curve.params();
        let steepness = given.gain * given.exponent;
        if steepness == 0.0 || given.exponent == 1.0 {
            return Self::Straight(steepness / a);
        }
        if given.exponent == -1.0 {
            // steepness/x² = a·λ
            let slope = (steepness * a).sqrt();
            return Self::Line(
                PriceScale::InverseRoot,
                Line {
                    intercept: 0.0,
                    slope,
                    least,
                    greatest,
                },
            );
        }
        // steepness·x^(exponent − 1) = a·λ, in logarithms
        let slope = 1.0 / (given.exponent - 1.0);
        let intercept = a.ln() + slope * (a / steepness.abs()).ln();
        Self::Power(PowerLine {
            intercept,
            slope,
            least,
            greatest,
        })
    }

    /// The spends that activity `i` asks for at a price: the least and the greatest. Exactly the
    /// bound or the knot where the use stands at one.
    pub(super) fn spends_at(&self, problem: &Problem, i: usize, price: f64) -> SpendRange {
        let activity = &problem.activities()[i];
        let a = problem.constraints()[0].use_per_unit(i);
        let (floor, cap) = (activity.floor, activity.cap);
        let spend_for = |used: f64, least: f64, greatest: f64| {
            SpendRange::at(if used <= least {
                floor
            } else if used >= greatest {
                cap
            } else {
                (used / a).max(floor).min(cap)
            })
        };
        match self {
            Self::Fixed => SpendRange::at(floor),
            Self::Line(scale, line) => {
                spend_for(line.at(scale.of(price)), line.least, line.greatest)
            }
            Self::Power(power) => {
                spend_for(power.at(LogPrices::of(price)), power.least, power.greatest)
            }
            Self::Straight(own) => SpendRange {
                least: if *own > price { cap } else { floor },
                greatest: if *own >= price { cap } else { floor },
            },
            Self::Pieces(points) => {
                let taken = |taken: &dyn Fn(f64) -> bool| {
                    points
                        .pieces()
                        .filter(|piece| taken(piece.slope / a))
                        .map(|piece| piece.to)
                        .fold(floor, f64::max)
                        .min(cap)
                };
                SpendRange {
                    least: taken(&|own| own > price),
                    greatest: taken(&|own| own >= price),
                }
            }
            Self::Numeric(numeric) => numeric.spends_at(price),
        }
    }
}

/// The demand of all activities for what the plan's one constraint limits.
pub(super) fn compile(problem: &Problem) -> Demand {
    let count = problem.activities().len();
    let blocks: Vec<Demand> = (0..count.div_ceil(BLOCK))
        .into_par_iter()
        .map(|block| {
            let mut demand = Demand::default();
            for i in block * BLOCK..count.min((block + 1) * BLOCK) {
                push(&mut demand, problem, i);
            }
            demand
        })
        .collect();
    let mut whole = Demand::default();
    for (group, lines) in whole.lines.iter_mut().enumerate() {
        lines.reserve(blocks.iter().map(|block| block.lines[group].len()).sum());
    }
    for mut block in blocks {
        whole.floors.join(block.floors);
        whole.caps.join(block.caps);
        whole.fixed.join(block.fixed);
        for (lines, more) in whole.lines.iter_mut().zip(&mut block.lines) {
            lines.append(more);
        }
        whole.powers.append(&mut block.powers);
        whole.pieces.append(&mut block.pieces);
        whole.numeric.append(&mut block.numeric);
    }
    whole
}

/// Adds activity `i` to a demand.
fn push(demand: &mut Demand, problem: &Problem, i: usize) {
    let activity = &problem.activities()[i];
    let a = problem.constraints()[0].use_per_unit(i);
    demand.floors.add(a * activity.floor);
    demand.caps.add(a * activity.cap);
    match Answer::of(problem, i) {
        Answer::Fixed => demand.fixed.add(a * activity.floor),
        Answer::Line(scale, line) => demand.lines[scale as usize].push(line),
        Answer::Power(power) => demand.powers.push(power),
        Answer::Straight(price) => {
            demand.fixed.add(a * activity.floor);
            demand.pieces.push(StraightPiece {
                price,
                width: a * (activity.cap - activity.floor),
            });
        }
        Answer::Pieces(points) => {
            demand.fixed.add(a * activity.floor);
            for piece in points.pieces() {
                let from = piece.from.max(activity.floor);
                let to = piece.to.min(activity.cap);
                if from < to {
                    demand.pieces.push(StraightPiece {
                        price: piece.slope / a,
                        width: a * (to - from),
                    });
                }
            }
        }
        Answer::Numeric(numeric) => demand.numeric.push(numeric),
    }
}
