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
    floor: f64,
    cap: f64,
    spends: Vec<f64>,
}

impl Breakpoints {
    /// The floor, the reach, a trial spend and the middles between them. The reach is the cap, or
    /// where there is none a finite spend that no plan worth looking at exceeds; of a tabulated
    /// curve every knot is taken.
    pub(super) fn around(worth: Curve, floor: f64, cap: f64, reach: f64, trial: f64) -> Self {
        let reach = reach.min(cap).max(floor);
        let trial = if trial.is_finite() {
            trial.clamp(floor, reach)
        } else {
            reach
        };
        let mut around = Self {
            worth,
            floor,
            cap,
            spends: Vec::new(),
        };
        around.insert(&[
            floor,
            f64::midpoint(floor, trial),
            trial,
            f64::midpoint(trial, reach),
            reach,
        ]);
        if let Curve::Points(points) = around.worth.clone() {
            let knots: Vec<f64> = points.knots().map(|knot| knot.spend).collect();
            around.insert(&knots);
        }
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
        }
    }

    fn insert(&mut self, spends: &[f64]) {
        let within = |spend: &f64| self.floor <= *spend && *spend <= self.cap && spend.is_finite();
        self.spends.extend(spends.iter().copied().filter(within));
        self.spends.sort_by(f64::total_cmp);
        self.spends.dedup();
    }

    /// Straight lines between the breakpoints, never above the curve. It begins where the worth is finite;
    /// a plan on it can be carried out, and is worth at least what the polyline says.
    pub(super) fn chords(&self) -> Polyline {
        let finite: Vec<(f64, f64)> = self
            .spends
            .iter()
            .map(|&spend| (spend, self.worth.value(spend)))
            .filter(|(_, worth)| worth.is_finite())
            .collect();
        let mut segments: Vec<Segment> = finite
            .windows(2)
            .map(|ends| Segment {
                width: ends[1].0 - ends[0].0,
                slope: (ends[1].1 - ends[0].1) / (ends[1].0 - ends[0].0),
            })
            .collect();
        // Without a cap a straight line goes on as it is; the chords of a curve end at the reach.
        if self.cap.is_infinite()
            && self.worth.marginal_at_infinity() == self.worth.marginal(self.floor)
        {
            segments.push(Segment {
                width: f64::INFINITY,
                slope: self.worth.marginal_at_infinity(),
            });
        }
        let (start, worth) = finite
            .first()
            .copied()
            .unwrap_or((self.floor, f64::NEG_INFINITY));
        Polyline {
            start,
            worth,
            segments,
        }
    }

    /// Tangents at the breakpoints, cut where they cross: never below the curve, from floor to
    /// cap.
    pub(super) fn tangents(&self) -> Polyline {
        if self.floor == self.cap {
            let worth = self.worth.value(self.floor);
            return Polyline {
                start: self.floor,
                worth,
                segments: Vec::new(),
            };
        }
        let touching: Vec<Tangent> = self
            .spends
            .iter()
            .map(|&at| Tangent {
                at,
                worth: self.worth.value(at),
                slope: self.worth.marginal(at),
            })
            .filter(|tangent| tangent.worth.is_finite() && tangent.slope.is_finite())
            .collect();
        let Some(first) = touching.first() else {
            return Polyline {
                start: self.floor,
                worth: f64::INFINITY,
                segments: Vec::new(),
            };
        };
        let worth = first.worth + first.slope * (self.floor - first.at);
        let mut segments = Vec::with_capacity(touching.len());
        let mut from = self.floor;
        for pair in touching.windows(2) {
            let to = pair[0].crossing(&pair[1]).max(from).min(self.cap);
            if to > from {
                segments.push(Segment {
                    width: to - from,
                    slope: pair[0].slope,
                });
                from = to;
            }
        }
        if let Some(last) = touching.last().filter(|_| from < self.cap) {
            segments.push(Segment {
                width: self.cap - from,
                slope: last.slope,
            });
        }
        Polyline {
            start: self.floor,
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
