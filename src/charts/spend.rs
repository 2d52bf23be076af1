//! Spend today and planned, an activity a row.

use plotters::backend::DrawingBackend;

use super::axis::{Axis, Magnitude};
use super::canvas::{Align, Canvas, Mark, Picture, render};
use super::palette::{BLUE, GREY, PALE, VERMILLION};
use super::wording::{HEADING, PLAIN, SMALL, SUBHEADING, by_planned_spend, heading, money};
use super::{ChartError, Drawing, PlanView};
use crate::numeric::figures::{figure, signed};

const WIDTH: f64 = 1600.0;
const ROW: f64 = 34.0;
const TOP: f64 = 150.0;
const BOTTOM: f64 = 80.0;
const NAMES_END: f64 = 430.0;
const PLOT_END: f64 = 1180.0;
const PLANNED_END: f64 = 1370.0;
const CHANGE_END: f64 = 1560.0;

/// Rows that stand for one activity each; beyond them the rest shares one.
const MOST_ROWS: usize = 48;

/// Digits of the amounts beside the rows.
const AMOUNT_DIGITS: usize = 6;

struct Row {
    name: String,
    today: Option<f64>,
    planned: f64,
}

struct SpendPicture {
    title: String,
    subtitle: String,
    /// Unit of the amounts beside the rows.
    money: String,
    magnitude: Magnitude,
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
        magnitude,
        longest,
        rows,
    };
    let alt = picture.alt(view);
    let (png, svg) = render(&picture)?;
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
    let total: f64 = view.solution.spends.iter().sum();
    let activities = if count == 1 { "activity" } else { "activities" };
    let amount = format!("{} {}", figure(total, AMOUNT_DIGITS), money(view.labels));
    let shown = if rows.len() < count {
        format!(", the {MOST_ROWS} with most spend in rows of their own")
    } else {
        ", most spend first".to_owned()
    };
    format!("{count} {activities}, {} planned{shown}", amount.trim())
}

impl SpendPicture {
    fn alt(&self, view: &PlanView) -> String {
        let mut alt = format!("{}. {}.", self.title, self.subtitle);
        for row in self.rows.iter().take(5) {
            let today = match row.today {
                Some(today) => format!(", today {}", figure(today, AMOUNT_DIGITS)),
                None => String::new(),
            };
            let planned = format!(
                "{} {}",
                figure(row.planned, AMOUNT_DIGITS),
                money(view.labels)
            );
            alt.push_str(&format!(" {}: {}{today}.", row.name, planned.trim()));
        }
        alt
    }

    fn draw_key<DB: DrawingBackend>(&self, canvas: &Canvas<DB>) -> Result<(), ChartError> {
        let y = 112.0;
        let mut x = NAMES_END + 10.0;
        if self.rows.iter().any(|row| row.today.is_some()) {
            canvas.mark(Mark::Ring, (x, y), 7.0, VERMILLION)?;
            canvas.text("today", (x + 16.0, y), Align::Left, SMALL)?;
            x += 110.0;
        }
        canvas.mark(Mark::Disc, (x, y), 7.0, BLUE)?;
        canvas.text("planned", (x + 16.0, y), Align::Left, SMALL)?;
        let unit = if self.money.is_empty() {
            String::new()
        } else {
            format!(", {}", self.money)
        };
        canvas.text(
            &format!("planned{unit}"),
            (PLANNED_END, y),
            Align::Right,
            SMALL,
        )?;
        if self.rows.iter().any(|row| row.today.is_some()) {
            canvas.text(
                &format!("change{unit}"),
                (CHANGE_END, y),
                Align::Right,
                SMALL,
            )?;
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
        let name = canvas.fitted(&row.name, NAMES_END - 50.0, PLAIN);
        canvas.text(&name, (NAMES_END - 14.0, y), Align::Right, PLAIN)?;
        let planned = axis.at(row.planned);
        if let Some(today) = row.today {
            let today = axis.at(today);
            canvas.line(&[(today, y), (planned, y)], GREY, 3.0)?;
            canvas.mark(Mark::Ring, (today, y), 7.5, VERMILLION)?;
        } else {
            canvas.line(&[(axis.at(0.0), y), (planned, y)], GREY, 3.0)?;
        }
        canvas.mark(Mark::Disc, (planned, y), 6.5, BLUE)?;
        let amount = figure(row.planned, AMOUNT_DIGITS);
        canvas.text(&amount, (PLANNED_END, y), Align::Right, PLAIN)?;
        if let Some(today) = row.today {
            let change = signed(row.planned - today, AMOUNT_DIGITS);
            canvas.text(&change, (CHANGE_END, y), Align::Right, PLAIN)?;
        }
        Ok(())
    }
}

impl Picture for SpendPicture {
    fn size(&self) -> (u32, u32) {
        let rows = ROW * self.rows.len() as f64;
        (WIDTH as u32, (TOP + rows + BOTTOM) as u32)
    }

    fn draw<DB: DrawingBackend>(&self, canvas: &Canvas<DB>) -> Result<(), ChartError> {
        let title = canvas.fitted(&self.title, WIDTH - 80.0, HEADING);
        canvas.text(&title, (40.0, 40.0), Align::Left, HEADING)?;
        let subtitle = canvas.fitted(&self.subtitle, WIDTH - 80.0, SUBHEADING);
        canvas.text(&subtitle, (40.0, 76.0), Align::Left, SUBHEADING)?;
        self.draw_key(canvas)?;

        let bottom = TOP + ROW * self.rows.len() as f64;
        let axis = Axis::new((0.0, 1.03 * self.longest), (NAMES_END + 10.0, PLOT_END));
        for tick in axis.ticks(6) {
            let x = axis.at(tick);
            canvas.line(&[(x, TOP - 14.0), (x, bottom)], PALE, 1.0)?;
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
        let middle = f64::midpoint(NAMES_END + 10.0, PLOT_END);
        canvas.text(&caption, (middle, bottom + 44.0), Align::Centre, SMALL)?;
        for (i, row) in self.rows.iter().enumerate() {
            self.draw_row(canvas, &axis, row, TOP + ROW * (i as f64 + 0.5))?;
        }
        Ok(())
    }
}
