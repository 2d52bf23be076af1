//! Every activity's marginal return against its spend, meeting the shadow price.
//!
//! One panel an activity, all with the same upright axis, so that the price is one straight line
//! through them and "the last unit earns the same everywhere" can be seen.

use plotters::backend::DrawingBackend;

use super::axis::{Axis, Magnitude};
use super::canvas::{Align, Canvas, Mark, Picture, render};
use super::palette::{BLUE, GREEN, GREY, PALE, VERMILLION};
use super::panel::Panel;
use super::wording::{HEADING, SMALL, SUBHEADING, by_planned_spend, heading, money, rate_unit};
use super::{ChartError, Drawing, PlanView};
use crate::model::Aim;
use crate::numeric::figures::{TABLE_DIGITS, figure};

const WIDTH: f64 = 1600.0;
const TOP: f64 = 150.0;
const LEFT: f64 = 120.0;
const RIGHT: f64 = 40.0;
const BOTTOM: f64 = 60.0;
/// Height of a panel with its name and its numbers, and of the curves in it.
const PANEL: f64 = 290.0;
const PANEL_HEAD: f64 = 58.0;
const PANEL_FOOT: f64 = 40.0;
/// Between two panels side by side.
const GAP: f64 = 34.0;

/// Panels that are drawn at the most.
const MOST_PANELS: usize = 24;

/// How many times the price the upright axis reaches at the most: marginal returns of first
/// units may be without bound, and what matters is near the price.
const REACH: f64 = 3.2;

/// Share of the axis that returns of the other sign may take.
const OTHER_SIDE: f64 = 0.25;

/// Share of the highest marginal return above which the lowest counts as far from zero.
const FAR_FROM_ZERO: f64 = 0.4;

struct MarginalPicture {
    title: String,
    subtitle: String,
    price: f64,
    price_label: String,
    minimised: bool,
    rate: Magnitude,
    rate_unit: String,
    spend_unit: String,
    spend: Magnitude,
    /// Lowest and highest marginal return of the axis.
    range: (f64, f64),
    panels: Vec<Panel>,
}

/// Draws the marginal return of every activity and where the plan and today stand on it.
///
/// # Errors
/// [`ChartError`], whatever the plan, only where the drawing library fails.
pub fn draw_marginal_curves(view: &PlanView) -> Result<Drawing, ChartError> {
    let price = view.solution.shadow_prices.first().copied().unwrap_or(0.0);
    let order = by_planned_spend(view);
    let shown = &order[..order.len().min(MOST_PANELS)];
    let panels: Vec<Panel> = shown.iter().map(|&i| Panel::of(view, i)).collect();
    let range = range_of(&panels, price);
    let largest = panels.iter().map(|panel| panel.reach).fold(0.0, f64::max);
    let spend = Magnitude::of(largest);
    let rate = rate_magnitude(if price == 0.0 || !price.is_finite() {
        range.1
    } else {
        price
    });
    let minimised = view.problem.aim() == Aim::Minimise;
    let unit = rate_unit(view.labels, rate);
    let what = if minimised {
        "marginal cost"
    } else {
        "marginal return"
    };
    let picture = MarginalPicture {
        title: heading(view.labels, &format!("{what} of every activity")),
        subtitle: subtitle(order.len(), panels.len()),
        price,
        price_label: format!(
            "shadow price {} {unit}",
            figure(price * rate.unit, TABLE_DIGITS)
        ),
        minimised,
        rate,
        rate_unit: unit,
        spend_unit: match spend.before(money(view.labels)) {
            unit if unit.is_empty() => "spend".to_owned(),
            unit => format!("spend, {unit}"),
        },
        spend,
        range,
        panels,
    };
    let alt = picture.alt();
    let (png, svg) = render(&picture)?;
    Ok(Drawing {
        stem: "marginal-curves",
        title: picture.title,
        alt,
        png,
        svg,
    })
}

fn subtitle(count: usize, shown: usize) -> String {
    if shown < count {
        format!("the {shown} with most spend of {count} activities")
    } else if count == 1 {
        "1 activity".to_owned()
    } else {
        format!("{count} activities, most spend first")
    }
}

/// The upright axis: from zero to where the curves go, but not far beyond the price.
fn range_of(panels: &[Panel], price: f64) -> (f64, f64) {
    let finite = |value: &f64| value.is_finite();
    let heights = || {
        let curves = panels
            .iter()
            .flat_map(|panel| panel.curve.iter().map(|&(_, height)| height));
        curves
            .chain(panels.iter().map(|panel| panel.planned.1))
            .filter(finite)
    };
    let steepest = heights().fold(0.0, |most: f64, height| most.max(height.abs()));
    let reach = if price != 0.0 && price.is_finite() {
        steepest.min(REACH * price.abs()).max(1.2 * price.abs())
    } else {
        steepest
    };
    let lowest = heights().fold(0.0, f64::min).max(-reach);
    let highest = heights().fold(0.0, f64::max).min(reach);
    let (lowest, highest) = (
        lowest.min(1.2 * price.min(0.0)),
        highest.max(1.2 * price.max(0.0)),
    );
    let least = heights().fold(f64::INFINITY, f64::min);
    if least > FAR_FROM_ZERO * highest {
        // A zero on the axis would flatten curves that all lie far from it.
        let margin = 0.15 * (highest - least);
        (least - margin, highest + margin)
    } else if highest >= -lowest {
        (lowest.max(-OTHER_SIDE * highest), 1.04 * highest)
    } else {
        (1.04 * lowest, highest.min(-OTHER_SIDE * lowest))
    }
}

/// The power of a thousand of money for which the rate is at least a tenth.
fn rate_magnitude(rate: f64) -> Magnitude {
    [
        (1.0, ""),
        (1e3, "thousand"),
        (1e6, "million"),
        (1e9, "billion"),
    ]
    .into_iter()
    .map(|(unit, name)| Magnitude { unit, name })
    .find(|per| rate.abs() * per.unit >= 0.1)
    .unwrap_or(Magnitude {
        unit: 1.0,
        name: "",
    })
}

impl MarginalPicture {
    fn alt(&self) -> String {
        let line = if self.minimised {
            "marginal cost"
        } else {
            "marginal return"
        };
        let mut alt = format!(
            "{}: {}. A panel for each shows its {line} in {} against its spend, and the {}.",
            self.title, self.subtitle, self.rate_unit, self.price_label
        );
        for panel in self.panels.iter().take(5) {
            let height = figure(panel.planned.1 * self.rate.unit, TABLE_DIGITS);
            alt.push_str(&format!(
                " {}: {}, where it is {height}.",
                panel.name, panel.standing
            ));
        }
        alt
    }

    fn columns(&self) -> usize {
        match self.panels.len() {
            0 | 1 => 1,
            2 | 4 => 2,
            3 | 5 | 6 => 3,
            7..=12 => 4,
            13..=20 => 5,
            _ => 6,
        }
    }

    fn rows(&self) -> usize {
        self.panels.len().div_ceil(self.columns())
    }

    /// What the lines and marks mean, above the panels.
    fn draw_key<DB: DrawingBackend>(&self, canvas: &Canvas<DB>) -> Result<(), ChartError> {
        let y = 112.0;
        let mut x = LEFT;
        let mut next = |label: &str, mark: &dyn Fn(f64) -> Result<(), ChartError>| {
            mark(x)?;
            canvas.text(label, (x + 46.0, y), Align::Left, SMALL)?;
            x += 46.0 + canvas.width_of(label, SMALL) + 40.0;
            Ok::<(), ChartError>(())
        };
        let line = if self.minimised {
            "marginal cost"
        } else {
            "marginal return"
        };
        next(line, &|x| canvas.line(&[(x, y), (x + 36.0, y)], BLUE, 2.5))?;
        if self.panels.iter().any(|panel| panel.observed.is_some()) {
            next("outside the evidence", &|x| {
                canvas.dashes(&[(x, y), (x + 36.0, y)], BLUE, 2.5, (5.0, 5.0))
            })?;
        }
        next(&self.price_label, &|x| {
            canvas.dashes(&[(x, y), (x + 36.0, y)], GREEN, 2.5, (14.0, 5.0))
        })?;
        next("planned", &|x| {
            canvas.mark(Mark::Disc, (x + 24.0, y), 7.0, BLUE)
        })?;
        if self.panels.iter().any(|panel| panel.today.is_some()) {
            next("today", &|x| {
                canvas.mark(Mark::Diamond, (x + 24.0, y), 7.0, VERMILLION)
            })?;
        }
        Ok(())
    }

    fn draw_panel<DB: DrawingBackend>(
        &self,
        canvas: &Canvas<DB>,
        panel: &Panel,
        (left, top): (f64, f64),
        width: f64,
        first: bool,
    ) -> Result<(), ChartError> {
        let (above, below) = (top + PANEL_HEAD, top + PANEL - PANEL_FOOT);
        let across = Axis::new((0.0, panel.reach), (left, left + width));
        let up = Axis::new(self.range, (below, above));
        for tick in up.ticks(6) {
            let y = up.at(tick);
            canvas.line(&[(left, y), (left + width, y)], PALE, 1.0)?;
            if first {
                let label = figure(tick * self.rate.unit, TABLE_DIGITS);
                canvas.text(&label, (left - 10.0, y), Align::Right, SMALL)?;
            }
        }
        let foot = if up.holds(0.0) { up.at(0.0) } else { below };
        canvas.line(&[(left, foot), (left + width, foot)], GREY, 1.0)?;
        canvas.line(&[(left, below), (left, above)], GREY, 1.0)?;
        let most_ticks = ((width / 70.0) as usize).max(1);
        for tick in across.ticks(most_ticks) {
            let x = across.at(tick);
            canvas.line(&[(x, below), (x, below + 5.0)], GREY, 1.0)?;
            canvas.text(
                &self.spend.written(tick),
                (x, below + 18.0),
                Align::Centre,
                SMALL,
            )?;
        }
        if up.holds(self.price) {
            let y = up.at(self.price);
            canvas.dashes(&[(left, y), (left + width, y)], GREEN, 2.0, (14.0, 5.0))?;
        }
        panel.draw(canvas, &across, &up)
    }
}

impl Picture for MarginalPicture {
    fn size(&self) -> (u32, u32) {
        (
            WIDTH as u32,
            (TOP + PANEL * self.rows() as f64 + BOTTOM) as u32,
        )
    }

    fn draw<DB: DrawingBackend>(&self, canvas: &Canvas<DB>) -> Result<(), ChartError> {
        let title = canvas.fitted(&self.title, WIDTH - 80.0, HEADING);
        canvas.text(&title, (40.0, 40.0), Align::Left, HEADING)?;
        canvas.text(&self.subtitle, (40.0, 76.0), Align::Left, SUBHEADING)?;
        self.draw_key(canvas)?;
        let columns = self.columns();
        let room = WIDTH - LEFT - RIGHT;
        let width = (room - GAP * (columns - 1) as f64) / columns as f64;
        for (i, panel) in self.panels.iter().enumerate() {
            let (row, column) = (i / columns, i % columns);
            let corner = (
                LEFT + column as f64 * (width + GAP),
                TOP + row as f64 * PANEL,
            );
            self.draw_panel(canvas, panel, corner, width, column == 0)?;
        }
        let middle = f64::midpoint(TOP, TOP + PANEL * self.rows() as f64);
        let upright = canvas.fitted(&self.rate_unit, PANEL * self.rows() as f64, SMALL);
        canvas.upright_text(&upright, (34.0, middle), SMALL)?;
        let bottom = TOP + PANEL * self.rows() as f64 + 14.0;
        canvas.text(
            &self.spend_unit,
            (LEFT + room / 2.0, bottom),
            Align::Centre,
            SMALL,
        )
    }
}
