//! Every activity's marginal return against its spend, meeting the shadow price.
//!
//! One panel an activity, all with the same upright axis, so that the price is one straight line
//! through them and "the last unit earns the same everywhere" can be seen.

use plotters::backend::DrawingBackend;

use super::axis::{Axis, Magnitude};
use super::canvas::{Align, Canvas, Mark, Picture};
use super::heights::{greater, range_of, rate_magnitude};
use super::palette::{BLUE, GREEN, GREY, PALE, VERMILLION};
use super::panel::Panel;
use super::rendering::render;
use super::wording::{
    HEADING, SMALL, SMALL_BOLD, SUBHEADING, by_planned_spend, heading, money, rate_unit,
};
use super::{ChartError, Drawing, PlanView};
use crate::model::Aim;
use crate::numeric::figures::{TABLE_DIGITS, figure};

const WIDTH: f64 = 1600.0;
const TOP: f64 = 150.0;
/// Margin at both sides.
const MARGIN: f64 = 40.0;
const BOTTOM: f64 = 60.0;
/// Heights in a panel beside the curves: its name and amount, and its numbers.
const PANEL_HEAD: f64 = 64.0;
const PANEL_FOOT: f64 = 40.0;
/// Between two panels side by side.
const GAP: f64 = 34.0;

/// Share of the unit of spend that a panel must reach; below it ticks have too many zeros.
const LEAST_SHARE: f64 = 0.01;

/// Panels that are drawn at the most.
const MOST_PANELS: usize = 20;

struct MarginalPicture {
    title: String,
    subtitle: String,
    /// The price, where it is the same in every panel.
    shared_price: Option<f64>,
    price_label: String,
    minimised: bool,
    rate: Magnitude,
    rate_unit: String,
    spend_unit: String,
    /// The unit of every panel's spends; none where they differ too much for one.
    spend: Option<Magnitude>,
    money: String,
    /// Lowest and highest marginal return of the axis.
    range: (f64, f64),
    panels: Vec<Panel>,
}

/// Draws the marginal return of every activity and where the plan and today stand on it.
///
/// # Errors
/// [`ChartError`], whatever the plan, only where the drawing library fails.
pub fn draw_marginal_curves(view: &PlanView) -> Result<Drawing, ChartError> {
    let order = by_planned_spend(view);
    let shown = &order[..order.len().min(MOST_PANELS)];
    let mut panels: Vec<Panel> = shown.iter().map(|&i| Panel::of(view, i)).collect();
    let price = panels.iter().map(|panel| panel.price).fold(0.0, greater);
    let shared_price = panels
        .iter()
        .all(|panel| panel.price == price)
        .then_some(price);
    let range = range_of(&panels, price);
    let spend = shared_magnitude(&panels);
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
    let whose = if panels.len() < order.len() {
        "the largest activities"
    } else {
        "every activity"
    };
    let price_label = match shared_price {
        Some(price) if !price.is_finite() => {
            format!("shadow price {}", figure(price, TABLE_DIGITS))
        }
        Some(price) => format!(
            "shadow price {} {unit}",
            figure(price * rate.unit, TABLE_DIGITS)
        ),
        None => {
            for panel in &mut panels {
                let price = figure(panel.price * rate.unit, TABLE_DIGITS);
                panel.standing.push_str(&format!(", price {price}"));
            }
            "shadow price of what a unit of spend uses".to_owned()
        }
    };
    let picture = MarginalPicture {
        title: heading(view.labels, &format!("{what} of {whose}")),
        subtitle: subtitle(order.len(), panels.len()),
        shared_price,
        price_label,
        minimised,
        rate,
        rate_unit: unit,
        spend_unit: match spend.map(|spend| spend.before(money(view.labels))) {
            None => "spend, in the unit under each panel".to_owned(),
            Some(unit) if unit.is_empty() => "spend".to_owned(),
            Some(unit) => format!("spend, {unit}"),
        },
        spend,
        money: money(view.labels).to_owned(),
        range,
        panels,
    };
    let alt = picture.alt();
    let (png, svg) = render(&picture, &picture.title, &alt)?;
    Ok(Drawing {
        stem: "marginal-curves",
        title: picture.title,
        alt,
        png,
        svg,
    })
}

/// The unit in which the greatest spends are short, if the least are not long in it.
fn shared_magnitude(panels: &[Panel]) -> Option<Magnitude> {
    let reaches = || panels.iter().map(|panel| panel.reach);
    let magnitude = Magnitude::of(reaches().fold(0.0, f64::max));
    let plain = magnitude == Magnitude::of(0.0);
    (plain || reaches().all(|reach| reach >= LEAST_SHARE * magnitude.unit)).then_some(magnitude)
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
            let height = self.height_written(panel.planned.1);
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
            3 | 5 | 6 | 9 => 3,
            7..=12 | 16 => 4,
            _ => 5,
        }
    }

    /// Height of a panel; few panels have room to be tall.
    fn panel_height(&self) -> f64 {
        match self.rows() {
            0 | 1 => 460.0,
            2 => 385.0,
            _ => 285.0,
        }
    }

    /// Where the panels begin: right of the widest number on the upright axis.
    fn left<DB: DrawingBackend>(&self, canvas: &Canvas<DB>) -> f64 {
        let up = Axis::new(self.range, (1.0, 0.0));
        let ticks = up.ticks(6).into_iter().map(|tick| (tick, SMALL));
        let price = self.shared_price.map(|price| (price, SMALL_BOLD));
        let widest = ticks
            .chain(price)
            .map(|(value, written)| canvas.width_of(&self.height_written(value), written))
            .fold(0.0, f64::max);
        MARGIN + 24.0 + widest + 10.0
    }

    /// Where the panels end.
    fn bottom(&self) -> f64 {
        TOP + self.panel_height() * self.rows() as f64
    }

    /// A number on the upright axis.
    fn height_written(&self, height: f64) -> String {
        figure(height * self.rate.unit, TABLE_DIGITS)
    }

    fn rows(&self) -> usize {
        self.panels.len().div_ceil(self.columns())
    }

    /// What the lines and marks mean, above the panels.
    fn draw_key<DB: DrawingBackend>(&self, canvas: &Canvas<DB>) -> Result<(), ChartError> {
        let y = 112.0;
        let mut x = MARGIN;
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
        let price_label = canvas.fitted(&self.price_label, WIDTH / 2.0, SMALL);
        next(&price_label, &|x| {
            canvas.dashes(&[(x, y), (x + 36.0, y)], GREEN, 2.5, (14.0, 5.0))
        })?;
        next("planned", &|x| {
            canvas.mark(Mark::Disc, (x + 28.0, y), 5.5, BLUE)
        })?;
        if self.panels.iter().any(|panel| panel.today.is_some()) {
            next("today", &|x| {
                canvas.mark(Mark::Diamond, (x + 26.0, y), 9.0, VERMILLION)
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
        let (above, below) = (top + PANEL_HEAD, top + self.panel_height() - PANEL_FOOT);
        let across = Axis::new((0.0, panel.reach), (left, left + width));
        let up = Axis::new(self.range, (below, above));
        panel.draw_bounds(canvas, &across, &up)?;
        let price_at = self
            .shared_price
            .filter(|price| up.holds(*price))
            .map(|price| (up.at(price), self.height_written(price)));
        for tick in up.ticks(6) {
            let y = up.at(tick);
            canvas.line(&[(left, y), (left + width, y)], PALE, 1.0)?;
            let free = price_at
                .as_ref()
                .is_none_or(|(at, _)| (at - y).abs() > 15.0);
            if first && free {
                let label = self.height_written(tick);
                canvas.text(&label, (left - 10.0, y), Align::Right, SMALL)?;
            }
        }
        if let (true, Some((y, label))) = (first, price_at) {
            canvas.text(&label, (left - 10.0, y), Align::Right, SMALL_BOLD)?;
        }
        let foot = if up.holds(0.0) { up.at(0.0) } else { below };
        canvas.line(&[(left, foot), (left + width, foot)], GREY, 1.0)?;
        canvas.line(&[(left, below), (left, above)], GREY, 1.0)?;
        let spend = self.spend.unwrap_or(Magnitude::of(panel.reach));
        if self.spend.is_none() {
            let unit = canvas.fitted(&spend.before(&self.money), width, SMALL);
            canvas.text(&unit, (left + width, below + 36.0), Align::Right, SMALL)?;
        }
        let mut written_to = f64::NEG_INFINITY;
        for tick in across.ticks(((width / 55.0) as usize).max(1)) {
            let x = across.at(tick);
            canvas.line(&[(x, below), (x, below + 5.0)], GREY, 1.0)?;
            let label = spend.written(tick);
            let half = canvas.width_of(&label, SMALL) / 2.0;
            if x - half > written_to + 8.0 && x + half < left + width + GAP / 2.0 {
                canvas.text(&label, (x, below + 18.0), Align::Centre, SMALL)?;
                written_to = x + half;
            }
        }
        panel.draw(canvas, (&across, &up), &|height| {
            self.height_written(height)
        })
    }
}

impl Picture for MarginalPicture {
    fn size(&self) -> (u32, u32) {
        (WIDTH as u32, (self.bottom() + BOTTOM) as u32)
    }

    fn draw<DB: DrawingBackend>(&self, canvas: &Canvas<DB>) -> Result<(), ChartError> {
        let title = canvas.fitted(&self.title, WIDTH - 2.0 * MARGIN, HEADING);
        canvas.text(&title, (MARGIN, 40.0), Align::Left, HEADING)?;
        canvas.text(&self.subtitle, (MARGIN, 76.0), Align::Left, SUBHEADING)?;
        self.draw_key(canvas)?;
        let columns = self.columns();
        let left = self.left(canvas);
        let room = WIDTH - left - MARGIN;
        let width = (room - GAP * (columns - 1) as f64) / columns as f64;
        for (i, panel) in self.panels.iter().enumerate() {
            let (row, column) = (i / columns, i % columns);
            let corner = (
                left + column as f64 * (width + GAP),
                TOP + row as f64 * self.panel_height(),
            );
            self.draw_panel(canvas, panel, corner, width, column == 0)?;
        }
        let middle = f64::midpoint(TOP, self.bottom());
        let upright = canvas.fitted(&self.rate_unit, self.bottom() - TOP, SMALL);
        canvas.upright_text(&upright, (MARGIN + 6.0, middle), SMALL)?;
        let spend_unit = canvas.fitted(&self.spend_unit, room, SMALL);
        canvas.text(
            &spend_unit,
            (left + room / 2.0, self.bottom() + 14.0),
            Align::Centre,
            SMALL,
        )
    }
}
