//! One activity's marginal curve, with its bounds and where the plan and today stand on it.

use plotters::backend::DrawingBackend;

use super::axis::Axis;
use super::canvas::{Align, Canvas, Mark};
use super::palette::{BLUE, GREY, VERMILLION};
use super::wording::{PLAIN, SMALL, money};
use super::{ChartError, PlanView};
use crate::curves::{Curve, ReturnCurve};
use crate::model::{ObservedRange, Position};
use crate::numeric::figures::figure;

/// Spends at which a smooth curve is sampled.
const SAMPLES: usize = 120;

/// A cap or an end of the evidence is drawn where it lies within so many times the spends.
const NEARBY: f64 = 2.5;

/// Digits of the planned amount.
const AMOUNT_DIGITS: usize = 6;

/// A point of a curve: spend, and marginal return there.
type Point = (f64, f64);

/// One panel's data.
pub(super) struct Panel {
    pub name: String,
    /// `2,400,000 EUR, at cap`.
    pub standing: String,
    /// Greatest spend of the panel.
    pub reach: f64,
    /// Spends rising; a tabulated curve falls straight at its knots.
    pub curve: Vec<Point>,
    pub planned: Point,
    pub today: Option<Point>,
    pub observed: Option<ObservedRange>,
    floor: f64,
    cap: f64,
}

impl Panel {
    pub(super) fn of(view: &PlanView, i: usize) -> Self {
        let activity = &view.problem.activities()[i];
        let spend = view.solution.spends[i];
        let height = |spend: f64| view.problem.marginal_return_at(i, spend);
        let position = activity.position(spend);
        let amount = format!("{} {}", figure(spend, AMOUNT_DIGITS), money(view.labels));
        let standing = match position {
            Position::Between => amount.trim().to_owned(),
            Position::Unfunded => "unfunded".to_owned(),
            bound => format!("{}, {}", amount.trim(), bound.name()),
        };
        let reach = reach_of(view, i);
        Self {
            name: activity.name.to_string(),
            standing,
            reach,
            curve: curve_points(&activity.curve, reach, height),
            planned: (spend, height_at_price(view, i, spend)),
            today: activity.current.map(|today| (today, height(today))),
            observed: activity.observed,
            floor: activity.floor,
            cap: activity.cap,
        }
    }

    /// Draws the panel's head, bounds, curve and marks.
    pub(super) fn draw<DB: DrawingBackend>(
        &self,
        canvas: &Canvas<DB>,
        across: &Axis,
        up: &Axis,
    ) -> Result<(), ChartError> {
        let (left, right) = (across.at(0.0), across.at(self.reach));
        let top = up.at(up.to());
        let name = canvas.fitted(&self.name, right - left, PLAIN);
        canvas.text(&name, (left, top - 44.0), Align::Left, PLAIN)?;
        let standing = canvas.fitted(&self.standing, right - left, SMALL);
        canvas.text(&standing, (left, top - 22.0), Align::Left, SMALL)?;
        for (bound, label) in [(self.floor, "floor"), (self.cap, "cap")] {
            if 0.0 < bound && bound < self.reach {
                let x = across.at(bound);
                canvas.line(&[(x, top), (x, up.at(up.from()))], GREY, 1.5)?;
                let align = if label == "cap" && x + 40.0 > right {
                    Align::Right
                } else {
                    Align::Left
                };
                let aside = if align == Align::Right { -5.0 } else { 5.0 };
                canvas.text(label, (x + aside, top + 8.0), align, SMALL)?;
            }
        }
        for (points, evidenced) in self.stretches() {
            for inside in within(&points, up) {
                let on_canvas: Vec<Point> = inside
                    .iter()
                    .map(|&(x, y)| (across.at(x), up.at(y)))
                    .collect();
                if evidenced {
                    canvas.line(&on_canvas, BLUE, 2.5)?;
                } else {
                    canvas.dashes(&on_canvas, BLUE, 2.5, (5.0, 5.0))?;
                }
            }
        }
        // A mark beyond the axis stands at its edge.
        let (lowest, highest) = (up.at(up.from()), up.at(up.to()));
        let at = |(x, y): Point| (across.at(x), up.at(y).clamp(highest, lowest));
        if let Some(today) = self.today {
            canvas.mark(Mark::Diamond, at(today), 7.0, VERMILLION)?;
        }
        canvas.mark(Mark::Disc, at(self.planned), 6.5, BLUE)
    }

    /// The curve cut at the ends of the evidence; whether each piece lies within it.
    fn stretches(&self) -> Vec<(Vec<Point>, bool)> {
        let Some(observed) = self.observed else {
            return vec![(self.curve.clone(), true)];
        };
        let mut stretches: Vec<(Vec<Point>, bool)> = Vec::new();
        for ends in self.curve.windows(2) {
            let evidenced = !observed.excludes(f64::midpoint(ends[0].0, ends[1].0));
            match stretches.last_mut() {
                Some((points, same)) if *same == evidenced => points.push(ends[1]),
                _ => stretches.push((ends.to_vec(), evidenced)),
            }
        }
        stretches
    }
}

/// The marginal return at a spend; at a knot, where it falls from one value to the next, as near
/// to the price as the fall reaches.
fn height_at_price(view: &PlanView, i: usize, spend: f64) -> f64 {
    let activity = &view.problem.activities()[i];
    let next = view.problem.marginal_return_at(i, spend);
    let last = activity.weight * activity.curve.marginal_before(spend);
    let within = spend > activity.floor && spend < activity.cap;
    match view.solution.shadow_prices.first() {
        Some(&price) if within && next != last => price.max(next.min(last)).min(next.max(last)),
        _ => next,
    }
}

/// The greatest spend that the panel shows.
fn reach_of(view: &PlanView, i: usize) -> f64 {
    let activity = &view.problem.activities()[i];
    let finite = |spend: f64| if spend.is_finite() { spend } else { 0.0 };
    let spends = [
        finite(view.solution.spends[i]),
        activity.current.unwrap_or(0.0),
        activity.floor,
    ];
    let mut reach = spends.into_iter().fold(0.0, f64::max);
    if reach == 0.0 {
        // Nothing is spent: as far as the cap, or an equal share.
        let total: f64 = view
            .solution
            .spends
            .iter()
            .map(|&spend| finite(spend))
            .sum();
        reach = finite(activity.cap).max(total / view.solution.spends.len() as f64);
    }
    let ends = [
        activity.cap,
        activity
            .observed
            .map_or(f64::INFINITY, |observed| observed.to),
    ];
    let near = ends.into_iter().filter(|end| *end <= NEARBY * reach);
    let reach = 1.08 * near.fold(reach, f64::max);
    if reach > 0.0 && reach.is_finite() {
        reach
    } else {
        1.0
    }
}

/// The curve up to `reach`: every step of a tabulated one, samples of a smooth one, closer
/// together near zero, where curves are steep.
fn curve_points(curve: &Curve, reach: f64, height: impl Fn(f64) -> f64) -> Vec<Point> {
    if let Curve::Points(points) = curve {
        let pieces = points.pieces().filter(|piece| piece.from < reach);
        return pieces
            .flat_map(|piece| {
                let rate = height(piece.from);
                [(piece.from, rate), (piece.to.min(reach), rate)]
            })
            .collect();
    }
    (0..=SAMPLES)
        .map(|i| {
            let share = i as f64 / SAMPLES as f64;
            let spend = reach * share * share;
            (spend, height(spend))
        })
        .filter(|(_, height)| height.is_finite())
        .collect()
}

/// The parts of a line that lie on the upright axis, cut where they leave it.
fn within(points: &[Point], up: &Axis) -> Vec<Vec<Point>> {
    let mut parts: Vec<Vec<Point>> = Vec::new();
    let mut part: Vec<Point> = Vec::new();
    for ends in points.windows(2) {
        let (a, b) = (ends[0], ends[1]);
        let on_axis = |(x, y): Point| {
            let edge = if y > up.to() { up.to() } else { up.from() };
            let share = (edge - a.1) / (b.1 - a.1);
            let crosses = (0.0..=1.0).contains(&share);
            if up.holds(y) || !crosses {
                (x, y)
            } else {
                (a.0 + share * (b.0 - a.0), edge)
            }
        };
        let inside = [on_axis(a), on_axis(b)];
        if !inside.iter().all(|&(_, y)| up.holds(y)) {
            parts.push(std::mem::take(&mut part));
            continue;
        }
        if part.last() != Some(&inside[0]) {
            parts.push(std::mem::take(&mut part));
            part.push(inside[0]);
        }
        part.push(inside[1]);
    }
    parts.push(part);
    parts.retain(|part| part.len() > 1);
    parts
}
