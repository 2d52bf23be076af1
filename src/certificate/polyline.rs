//! A concave worth between two polylines: chords below it, tangents above it.

use crate::curves::{Curve, ReturnCurve};

/// A straight piece of a polyline.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Segment {
    /// Units of spend; +∞ for the last piece of an uncapped activity.
    pub width: f64,
    /// Worth per unit of spend.
    pub slope: f64,
}

/// A concave polyline: slopes fall from one segment to the next.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Polyline {
    /// Spend at which it begins.
    pub start: f64,
    /// Worth there.
    pub worth: f64,
    /// Its segments in the order of spend.
    pub segments: Vec<Segment>,
}

/// The spends at which one activity's worth is looked at, rising, within its bounds.
#[derive(Debug, Clone)]
pub(super) struct Breakpoints {
    worth: Curve,
    range: SpendBounds,
    spends: Vec<f64>,
    /// Slope, as an amount, beyond which a falling piece is not drawn as steep as it is.
    steepest: f64,
}

/// Where the spend of one activity may lie.
#[derive(Debug, Clone, Copy)]
pub(super) struct SpendBounds {
    pub floor: f64,
    /// The cap, or less where no plan can exceed it; +∞ where there is no end.
    pub cap: f64,
    /// A finite spend that no plan worth looking at exceeds.
    pub reach: f64,
}

/// Multiples of the claimed price at which an activity's worth is looked at: close enough that
/// every slope the LP solver sees is of the price's own order, wide enough to contain the answer where
/// the claim is a little off.
const LOOKED_AT: [f64; 4] = [8.0, 2.0, 0.5, 0.125];

/// A falling piece may be this many times steeper than the price. A steeper one would not be taken, and
/// its size would drown the others in the LP solver's absolute tolerance of 1e-10.
const STEEPEST: f64 = 16.0;

/// Relative distance below which two breakpoints are one: what lies between them is of the
/// second order in it.
const ONE_SPEND: f64 = 1e-12;

impl Breakpoints {
    /// The floor, the claimed spend, and those whose last unit earns a multiple of the claimed
    /// price; where that price says nothing, the middles of the range.
    pub(super) fn around(worth: Curve, range: SpendBounds, trial: f64, price: f64) -> Self {
        let SpendBounds { floor, reach, .. } = range;
        let trial = if trial.is_finite() {
            trial.clamp(floor, reach)
        } else {
            reach
        };
        let tells = price.is_finite();
        let mut around = Self {
            worth,
            range,
            spends: Vec::new(),
            steepest: if tells {
                STEEPEST * price.abs()
            } else {
                f64::INFINITY
            },
        };
        around.insert(&[floor, trial]);
        if tells && price != 0.0 {
            let earning = LOOKED_AT.map(|multiple| around.worth.inverse_marginal(multiple * price));
            for spends in earning {
                let spends = spends.clipped(floor, reach);
                around.insert(&[spends.least, spends.greatest]);
            }
        }
        let lowest = around.spends[0];
        let highest = around.spends[around.spends.len() - 1];
        if !tells || around.touching().next().is_none() {
            around.insert(&[
                f64::midpoint(floor, trial),
                f64::midpoint(trial, reach),
                reach,
            ]);
        }
        around.insert_knots(lowest, highest);
        let top = around.worth.inverse_marginal(0.0).least;
        around.insert(&[top]);
        around
    }

    /// Adds spends, and the middles to their neighbours, as far as they lie within the bounds.
    pub(super) fn refine(&mut self, spends: &[f64]) {
        for &spend in spends {
            let after = self.spends.partition_point(|&known| known < spend);
            let mut more = vec![spend];
            if after > 0 {
                more.push(f64::midpoint(self.spends[after - 1], spend));
            }
            if let Some(&next) = self.spends.get(after) {
                more.push(f64::midpoint(spend, next));
            }
            self.insert(&more);
            let slope = self.worth.marginal(spend).abs();
            if slope.is_finite() {
                self.steepest = self.steepest.max(STEEPEST * slope);
            }
        }
        self.insert_knots(self.range.floor, self.range.reach);
    }

    /// Looks at the whole range, for a claim that leaves the chords without a plan.
    pub(super) fn widen(&mut self) {
        let SpendBounds { floor, reach, .. } = self.range;
        let lowest = self.finite().next().map_or(reach, |(spend, _)| spend);
        self.insert(&[floor + (lowest - floor) / 1024.0, reach]);
        self.insert_knots(floor, reach);
        self.steepest = f64::INFINITY;
    }

    fn insert(&mut self, spends: &[f64]) {
        let SpendBounds { floor, cap, .. } = self.range;
        let within = |spend: &f64| floor <= *spend && *spend <= cap && spend.is_finite();
        self.spends.extend(spends.iter().copied().filter(within));
        self.spends.sort_by(f64::total_cmp);
        self.spends
            .dedup_by(|later, earlier| *later - *earlier <= ONE_SPEND * *later);
    }

    fn insert_knots(&mut self, from: f64, to: f64) {
        if let Curve::Points(points) = &self.worth {
            let knots: Vec<f64> = points.knots().map(|knot| knot.spend).collect();
            let between = |knot: &f64| from <= *knot && *knot <= to;
            self.insert(&knots.into_iter().filter(between).collect::<Vec<_>>());
        }
    }

    /// The breakpoints with a finite worth.
    fn finite(&self) -> impl Iterator<Item = (f64, f64)> + '_ {
        let worth_at = |&spend: &f64| (spend, self.worth.value(spend));
        self.spends
            .iter()
            .map(worth_at)
            .filter(|(_, worth)| worth.is_finite())
    }

    /// The tangents at the breakpoints, on both sides of a knot.
    fn touching(&self) -> impl Iterator<Item = Tangent> + '_ {
        // Past its top no curve rises, and a rounding must not promise an unbounded total.
        let top = self.worth.inverse_marginal(0.0).least * (1.0 - ONE_SPEND);
        self.finite()
            .flat_map(move |(at, worth)| {
                let after = self.worth.marginal(at);
                let after = if at >= top { after.min(0.0) } else { after };
                [self.worth.marginal_before(at), after].map(|slope| Tangent { at, worth, slope })
            })
            .filter(|tangent| tangent.slope.is_finite())
    }

    /// Straight lines between the breakpoints, never above the curve. It begins where the worth
    /// is finite; a plan on it can be carried out, and is worth at least what the polyline says.
    pub(super) fn chords(&self) -> Polyline {
        let finite: Vec<(f64, f64)> = self.finite().collect();
        let mut segments: Vec<Segment> = finite
            .windows(2)
            .map(|ends| Segment {
                width: ends[1].0 - ends[0].0,
                slope: (ends[1].1 - ends[0].1) / (ends[1].0 - ends[0].0),
            })
            .collect();
        // Without a cap a straight line goes on as it is; the chords of a curve end with the
        // last breakpoint.
        let slope = self.worth.marginal_at_infinity();
        if self.range.cap == f64::INFINITY && slope == self.worth.marginal(self.range.floor) {
            segments.push(Segment {
                width: f64::INFINITY,
                slope,
            });
        }
        segments.retain(|segment| segment.slope >= -self.steepest);
        let (start, worth) = finite
            .first()
            .copied()
            .unwrap_or((self.range.floor, f64::NEG_INFINITY));
        Polyline {
            start,
            worth,
            segments,
        }
    }

    /// Tangents at the breakpoints, cut where they cross: never below the curve, from floor to
    /// cap. A piece that falls more steeply than the steepest is drawn as the steepest, which is
    /// above it.
    pub(super) fn tangents(&self) -> Polyline {
        let SpendBounds { floor, cap, .. } = self.range;
        if floor == cap {
            return Polyline {
                start: floor,
                worth: self.worth.value(floor),
                segments: Vec::new(),
            };
        }
        let touching: Vec<Tangent> = self.touching().collect();
        let Some(first) = touching.first() else {
            return Polyline {
                start: floor,
                worth: f64::INFINITY,
                segments: Vec::new(),
            };
        };
        let worth = first.worth + first.slope * (floor - first.at);
        let mut segments: Vec<Segment> = Vec::with_capacity(touching.len());
        let mut from = floor;
        let mut draw = |slope: f64, to: f64| {
            if to > from {
                let (width, slope) = (to - from, slope.max(-self.steepest));
                match segments.last_mut() {
                    Some(Segment {
                        width: drawn,
                        slope: same,
                    }) if *same == slope => {
                        *drawn += width;
                    }
                    _ => segments.push(Segment { width, slope }),
                }
                from = to;
            }
        };
        for pair in touching.windows(2) {
            draw(pair[0].slope, pair[0].crossing(&pair[1]).min(cap));
        }
        if let Some(last) = touching.last() {
            draw(last.slope, cap);
        }
        Polyline {
            start: floor,
            worth,
            segments,
        }
    }
}

/// A straight line that touches the curve.
struct Tangent {
    at: f64,
    worth: f64,
    slope: f64,
}

impl Tangent {
    /// Where this tangent crosses a later one: between the two points of contact.
    fn crossing(&self, later: &Self) -> f64 {
        let apart = later.at - self.at;
        let rise = later.worth - self.worth;
        let step = (rise - later.slope * apart) / (self.slope - later.slope);
        if step.is_finite() {
            self.at + step.clamp(0.0, apart)
        } else {
            later.at
        }
    }
}
