//! One activity's marginal curve, with its bounds and where the plan and today stand on it.

use plotters::backend::DrawingBackend;

use super::axis::Axis;
use super::canvas::{Align, Canvas, Mark, straightened};
use super::palette::{BLUE, GREEN, GREY, SHADE, VERMILLION};
use super::wording::{NAME, SMALL, money, price_of_spend};
use super::{ChartError, PlanView};
use crate::curves::{Curve, ReturnCurve};
use crate::model::{ObservedRange, Position};
use crate::numeric::figures::{TABLE_DIGITS, figure};

/// Spends at which a smooth curve is sampled.
const SAMPLES: usize = 120;

/// A cap or an end of the evidence is drawn where it lies within so many times the spends.
const NEARBY: f64 = 2.5;

/// A point of a curve: spend, and marginal return there.
type Point = (f64, f64);

/// One panel's data.
pub(super) struct Panel {
    pub name: String,
    /// `2,400,000 EUR, at cap`.
    pub standing: String,
    /// The marginal return that the curve meets at the optimum.
    pub price: f64,
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
        let amount = format!("{} {}", figure(spend, TABLE_DIGITS), money(view.labels));
        let standing = match position {
            Position::Between => amount.trim().to_owned(),
            Position::Unfunded => "unfunded".to_owned(),
            bound => format!("{}, {}", amount.trim(), bound.name()),
        };
        let reach = reach_of(view, i);
        let price = price_of_spend(view, i);
        Self {
            name: activity.name.to_string(),
            standing,
            price,
            reach,
            curve: curve_points(&activity.curve, reach, height),
            planned: (spend, height_at_price(view, i, spend, price)),
            today: activity.current.map(|today| (today, height(today))),
            observed: activity.observed,
            floor: activity.floor,
            cap: activity.cap,
        }
    }

    /// Draws what lies behind grid and curve: the spends that the bounds shut out, each bound
    /// named above its line.
    pub(super) fn draw_bounds<DB: DrawingBackend>(
        &self,
        canvas: &Canvas<DB>,
        across: &Axis,
        up: &Axis,
    ) -> Result<(), ChartError> {
        let (top, foot) = (up.at(up.to()), up.at(up.from()));
        let (left, right) = (across.at(0.0), across.at(self.reach));
        let within = |bound: f64| 0.0 < bound && bound < self.reach;
        let mut named_to = left;
        for (bound, edge, label) in [(self.floor, left, "floor"), (self.cap, right, "cap")] {
            if !within(bound) {
                continue;
            }
            let x = across.at(bound);
            canvas.band((x.min(edge), top), (x.max(edge), foot), SHADE)?;
            canvas.line(&[(x, top), (x, foot)], GREY, 1.0)?;
            let half = canvas.width_of(label, SMALL) / 2.0;
            let at = x.min(right - half).max(left + half);
            // Where the bounds are too close for two names, their shades must do.
            if at - half >= named_to {
                canvas.text(label, (at, top - 8.0), Align::Centre, SMALL)?;
                named_to = at + half + 8.0;
            }
        }
        Ok(())
    }

    /// Draws the panel's head, price, curve and marks.
    pub(super) fn draw<DB: DrawingBackend>(
        &self,
        canvas: &Canvas<DB>,
        axes: (&Axis, &Axis),
        height_written: &dyn Fn(f64) -> String,
    ) -> Result<(), ChartError> {
        let (across, up) = axes;
        let (left, right) = (across.at(0.0), across.at(self.reach));
        let top = up.at(up.to());
        let name = canvas.fitted(&self.name, right - left, NAME);
        canvas.text(&name, (left, top - 50.0), Align::Left, NAME)?;
        let standing = canvas.fitted(&self.standing, right - left, SMALL);
        canvas.text(&standing, (left, top - 28.0), Align::Left, SMALL)?;
        for (points, evidenced) in self.stretches() {
            for inside in within(&points, up) {
                let on_canvas: Vec<Point> = inside
                    .iter()
                    .map(|&(x, y)| (across.at(x), up.at(y)))
                    .collect();
                let on_canvas = straightened(&on_canvas);
                if evidenced {
                    canvas.line(&on_canvas, BLUE, 2.5)?;
                } else {
                    canvas.dashes(&on_canvas, BLUE, 2.5, (5.0, 5.0))?;
                }
            }
        }
        // Over the curve: on a straight one that earns the price, both can be seen.
        if up.holds(self.price) {
            let y = up.at(self.price);
            canvas.dashes(&[(left, y), (right, y)], GREEN, 2.0, (14.0, 5.0))?;
        }
        if let Some(today) = self.today {
            draw_mark(canvas, Mark::Diamond, axes, today, height_written)?;
        }
        draw_mark(canvas, Mark::Disc, axes, self.planned, height_written)
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

/// A mark on the curve. Where the curve leaves the axis it stands at the edge, with an arrow
/// toward where it belongs and the height there.
fn draw_mark<DB: DrawingBackend>(
    canvas: &Canvas<DB>,
    mark: Mark,
    (across, up): (&Axis, &Axis),
    (spend, height): Point,
    height_written: &dyn Fn(f64) -> String,
) -> Result<(), ChartError> {
    let (lowest, highest) = (up.at(up.from()), up.at(up.to()));
    let at = (across.at(spend), up.at(height).clamp(highest, lowest));
    let (radius, colour) = match mark {
        Mark::Disc => (5.5, BLUE),
        Mark::Diamond => (9.0, VERMILLION),
    };
    canvas.mark(mark, at, radius, colour)?;
    if up.holds(height) || height.is_nan() {
        return Ok(());
    }
    let (arrow, inward) = if height > up.to() {
        ("↑", 26.0)
    } else {
        ("↓", -26.0)
    };
    let label = format!("{arrow} {}", height_written(height));
    let beyond_right = at.0 + canvas.width_of(&label, SMALL) > across.at(across.to());
    let align = if beyond_right {
        Align::Right
    } else {
        Align::Left
    };
    let aside = if beyond_right { -6.0 } else { 6.0 };
    canvas.text(&label, (at.0 + aside, at.1 + inward), align, SMALL)
}

/// The marginal return at a spend; at a knot, where it falls from one value to the next, as near
/// to the price as the fall reaches.
fn height_at_price(view: &PlanView, i: usize, spend: f64, price: f64) -> f64 {
    let activity = &view.problem.activities()[i];
    let next = view.problem.marginal_return_at(i, spend);
    let last = activity.weight * activity.curve.marginal_before(spend);
    let within = spend > activity.floor && spend < activity.cap;
    if within && next != last {
        price.max(next.min(last)).min(next.max(last))
    } else {
        next
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
        if inside[1] != inside[0] {
            part.push(inside[1]);
        }
    }
    parts.push(part);
    parts.retain(|part| part.len() > 1);
    parts
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_curve_is_cut_where_it_leaves_the_axis() {
        let up = Axis::new((0.0, 10.0), (100.0, 0.0));
        let cut = within(&[(0.0, 30.0), (1.0, 10.0), (2.0, 0.0), (3.0, -10.0)], &up);
        assert_eq!(cut, vec![vec![(1.0, 10.0), (2.0, 0.0)]]);
        let crossing = within(&[(0.0, 20.0), (2.0, 0.0)], &up);
        assert_eq!(crossing, vec![vec![(1.0, 10.0), (2.0, 0.0)]]);
    }
}
