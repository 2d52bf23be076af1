//! Spend today and planned, an activity a row.

use plotters::backend::DrawingBackend;

use super::amounts::Amounts;
use super::axis::{Axis, Magnitude};
use super::canvas::{Align, Canvas, Mark, Picture};
use super::palette::{BLUE, PALE, VERMILLION};
use super::rendering::render;
use super::wording::{HEADING, PLAIN, SMALL, SUBHEADING, by_planned_spend, heading, money};
use super::{ChartError, Drawing, PlanView};
use crate::numeric::figures::figure;

const WIDTH: f64 = 1600.0;
const ROW: f64 = 34.0;
const TOP: f64 = 150.0;
const BOTTOM: f64 = 80.0;
const MARGIN: f64 = 40.0;
const NAMES_END: f64 = 430.0;
/// Width of a column of amounts, the space before it included.
const COLUMN: f64 = 160.0;

/// Rows that stand for one activity each; beyond them the rest shares one.
const MOST_ROWS: usize = 48;

/// Digits of the total.
const TOTAL_DIGITS: usize = 6;

struct Row {
    name: String,
    today: Option<f64>,
    planned: f64,
}

struct SpendPicture {
    title: String,
    subtitle: String,
    money: String,
    /// Whether any activity's spend of today is known.
    knows_today: bool,
    magnitude: Magnitude,
    amounts: Amounts,
    rows: Vec<Row>,
    longest: f64,
}

/// Draws what every activity has today and what it would have.
///
/// # Errors
/// [`ChartError`], whatever the plan, only where the drawing library fails.
pub fn draw_spend(view: &PlanView) -> Result<Drawing, ChartError> {
    let rows = rows_of(view);
    let knows_today = rows.iter().any(|row| row.today.is_some());
    let shows = if knows_today {
        "spend today and planned"
    } else {
        "planned spend"
    };
    let longest = rows
        .iter()
        .flat_map(|row| [row.planned, row.today.unwrap_or(0.0)])
        .filter(|spend| spend.is_finite())
        .fold(0.0, f64::max);
    let magnitude = Magnitude::of(longest);
    let picture = SpendPicture {
        title: heading(view.labels, shows),
        subtitle: subtitle(view, &rows),
        money: money(view.labels).to_owned(),
        knows_today,
        magnitude,
        amounts: Amounts::of(longest),
        longest,
        rows,
    };
    let alt = picture.alt();
    let (png, svg) = render(&picture, &picture.title, &alt)?;
    Ok(Drawing {
        stem: "spend",
        title: picture.title,
        alt,
        png,
        svg,
    })
}

fn rows_of(view: &PlanView) -> Vec<Row> {
    let activities = view.problem.activities();
    let spends = &view.solution.spends;
    let order = by_planned_spend(view);
    let alone = if order.len() > MOST_ROWS {
        MOST_ROWS
    } else {
        order.len()
    };
    let mut rows: Vec<Row> = order[..alone]
        .iter()
        .map(|&i| Row {
            name: activities[i].name.to_string(),
            today: activities[i].current,
            planned: spends[i],
        })
        .collect();
    let rest = &order[alone..];
    if !rest.is_empty() {
        rows.push(Row {
            name: format!("the other {} together", rest.len()),
            today: rest.iter().map(|&i| activities[i].current).sum(),
            planned: rest.iter().map(|&i| spends[i]).sum(),
        });
    }
    rows
}

fn subtitle(view: &PlanView, rows: &[Row]) -> String {
    let count = view.problem.activities().len();
    let activities = if count == 1 { "activity" } else { "activities" };
    let total: f64 = view.solution.spends.iter().sum();
    let amount = format!("{} {}", figure(total, TOTAL_DIGITS), money(view.labels));
    let today: Option<f64> = rows.iter().map(|row| row.today).sum();
    let today = today.map_or(String::new(), |today| {
        format!(" ({} today)", figure(today, TOTAL_DIGITS))
    });
    let shown = if rows.len() < count {
        format!(", the {MOST_ROWS} with most spend in rows of their own")
    } else {
        String::new()
    };
    format!(
        "{count} {activities}, {} planned{today}{shown}",
        amount.trim()
    )
}

impl SpendPicture {
    fn alt(&self) -> String {
        let mut alt = format!("{}. {}.", self.title, self.subtitle);
        for row in self.rows.iter().take(5) {
            let unit = self.amounts.magnitude.before(&self.money);
            let planned = format!("{} {unit}", self.amounts.written(row.planned));
            let today = row.today.map_or(String::new(), |today| {
                format!(", today {}", self.amounts.written(today))
            });
            alt.push_str(&format!(" {}: {}{today}.", row.name, planned.trim()));
        }
        alt
    }

    fn columns(&self) -> &'static [&'static str] {
        if self.knows_today {
            &["today", "planned", "change"]
        } else {
            &["planned"]
        }
    }

    fn plot_end(&self) -> f64 {
        WIDTH - MARGIN - COLUMN * self.columns().len() as f64 - 20.0
    }

    /// The right edge of a column of amounts, counted from the right.
    fn column_end(from_right: usize) -> f64 {
        WIDTH - MARGIN - COLUMN * from_right as f64
    }

    fn draw_key<DB: DrawingBackend>(&self, canvas: &Canvas<DB>) -> Result<(), ChartError> {
        let y = 116.0;
        let mut x = NAMES_END + 10.0;
        if self.knows_today {
            canvas.mark(Mark::Diamond, (x, y), 9.0, VERMILLION)?;
            canvas.text("today", (x + 18.0, y), Align::Left, SMALL)?;
            x += 100.0;
        }
        canvas.mark(Mark::Disc, (x, y), 5.5, BLUE)?;
        canvas.text("planned", (x + 14.0, y), Align::Left, SMALL)?;
        x += 110.0;
        if self.knows_today {
            for (label, more) in [("more", true), ("less", false)] {
                draw_change(canvas, (x, x + 36.0), y, more)?;
                canvas.text(label, (x + 46.0, y), Align::Left, SMALL)?;
                x += 110.0;
            }
        }
        let unit = self.amounts.magnitude.before(&self.money);
        for (i, column) in self.columns().iter().rev().enumerate() {
            let heading = match unit.as_str() {
                "" => (*column).to_owned(),
                unit => canvas.fitted(&format!("{column}, {unit}"), COLUMN - 12.0, SMALL),
            };
            let at = (Self::column_end(i), y);
            canvas.text(&heading, at, Align::Right, SMALL)?;
        }
        Ok(())
    }

    fn draw_row<DB: DrawingBackend>(
        &self,
        canvas: &Canvas<DB>,
        axis: &Axis,
        row: &Row,
        y: f64,
    ) -> Result<(), ChartError> {
        let name = canvas.fitted(&row.name, NAMES_END - MARGIN - 14.0, PLAIN);
        canvas.text(&name, (NAMES_END - 14.0, y), Align::Right, PLAIN)?;
        canvas.line(&[(axis.at(0.0), y), (self.plot_end(), y)], PALE, 1.0)?;
        let planned = axis.at(row.planned);
        if let Some(today) = row.today {
            draw_change(canvas, (axis.at(today), planned), y, row.planned > today)?;
            canvas.mark(Mark::Diamond, (axis.at(today), y), 9.0, VERMILLION)?;
        }
        canvas.mark(Mark::Disc, (planned, y), 5.5, BLUE)?;
        let dash = || "–".to_owned();
        let today = row.today.map(|today| self.amounts.written(today));
        let change = row
            .today
            .map(|today| self.amounts.change_written(row.planned - today));
        let planned = self.amounts.written(row.planned);
        let cells = if self.knows_today {
            vec![
                change.unwrap_or_else(dash),
                planned,
                today.unwrap_or_else(dash),
            ]
        } else {
            vec![planned]
        };
        for (i, cell) in cells.iter().enumerate() {
            canvas.text(cell, (Self::column_end(i), y), Align::Right, PLAIN)?;
        }
        Ok(())
    }
}

/// The way from today to the plan: a line to more, dashes to less.
fn draw_change<DB: DrawingBackend>(
    canvas: &Canvas<DB>,
    (today, planned): (f64, f64),
    y: f64,
    more: bool,
) -> Result<(), ChartError> {
    let way = [(today, y), (planned, y)];
    if more {
        canvas.line(&way, BLUE, 3.0)
    } else {
        canvas.dashes(&way, VERMILLION, 3.0, (6.0, 5.0))
    }
}

impl Picture for SpendPicture {
    fn size(&self) -> (u32, u32) {
        let rows = ROW * self.rows.len() as f64;
        (WIDTH as u32, (TOP + rows + BOTTOM) as u32)
    }

    fn draw<DB: DrawingBackend>(&self, canvas: &Canvas<DB>) -> Result<(), ChartError> {
        let title = canvas.fitted(&self.title, WIDTH - 2.0 * MARGIN, HEADING);
        canvas.text(&title, (MARGIN, 40.0), Align::Left, HEADING)?;
        let subtitle = canvas.fitted(&self.subtitle, WIDTH - 2.0 * MARGIN, SUBHEADING);
        canvas.text(&subtitle, (MARGIN, 76.0), Align::Left, SUBHEADING)?;
        self.draw_key(canvas)?;

        let bottom = TOP + ROW * self.rows.len() as f64;
        let axis = Axis::new(
            (0.0, 1.03 * self.longest),
            (NAMES_END + 10.0, self.plot_end()),
        );
        for tick in axis.ticks(6) {
            let x = axis.at(tick);
            canvas.line(&[(x, TOP - 8.0), (x, bottom)], PALE, 1.0)?;
            canvas.text(
                &self.magnitude.written(tick),
                (x, bottom + 16.0),
                Align::Centre,
                SMALL,
            )?;
        }
        let unit = self.magnitude.before(&self.money);
        let caption = if unit.is_empty() {
            "spend".to_owned()
        } else {
            format!("spend, {unit}")
        };
        let caption = canvas.fitted(&caption, self.plot_end() - NAMES_END, SMALL);
        let middle = f64::midpoint(NAMES_END + 10.0, self.plot_end());
        canvas.text(&caption, (middle, bottom + 44.0), Align::Centre, SMALL)?;
        for (i, row) in self.rows.iter().enumerate() {
            self.draw_row(canvas, &axis, row, TOP + ROW * (i as f64 + 0.5))?;
        }
        Ok(())
    }
}
