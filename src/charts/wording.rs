//! The words that the pictures share.

use super::PlanView;
use super::axis::Magnitude;
use super::canvas::Type;
use super::palette::{GREY_INK, INK};
use crate::model::Labels;

/// Heading of a picture.
pub(super) const HEADING: Type = Type {
    size: 26.0,
    bold: true,
    colour: INK,
};
/// What the heading's line does not say.
pub(super) const SUBHEADING: Type = Type {
    size: 18.0,
    bold: false,
    colour: GREY_INK,
};
/// Names and amounts.
pub(super) const PLAIN: Type = Type {
    size: 17.0,
    bold: false,
    colour: INK,
};
/// Heading of a panel.
pub(super) const NAME: Type = Type {
    size: 17.0,
    bold: true,
    colour: INK,
};
/// The price on its axis.
pub(super) const SMALL_BOLD: Type = Type {
    size: 14.0,
    bold: true,
    colour: INK,
};
/// Numbers on axes.
pub(super) const SMALL: Type = Type {
    size: 14.0,
    bold: false,
    colour: GREY_INK,
};

/// The unit of spend, or nothing.
pub(super) fn money(labels: &Labels) -> &str {
    labels.money.as_deref().unwrap_or("")
}

/// The plan's title before what the picture shows, if it has one.
pub(super) fn heading(labels: &Labels, shows: &str) -> String {
    match (&labels.title, &labels.period) {
        (Some(title), Some(period)) if !title.contains(period.as_str()) => {
            format!("{title}, {period}: {shows}")
        }
        (Some(title), _) => format!("{title}: {shows}"),
        (None, _) => {
            let mut letters = shows.chars();
            let first = letters
                .next()
                .map(|letter| letter.to_uppercase().to_string());
            first.unwrap_or_default() + letters.as_str()
        }
    }
}

/// `homes protected per million EUR`.
pub(super) fn rate_unit(labels: &Labels, per: Magnitude) -> String {
    let unit = labels.return_unit.as_deref().unwrap_or("total");
    let money = money(labels);
    match (per.unit, money) {
        (1.0, "") => format!("{unit} per unit of spend"),
        (_, "") => format!("{unit} per {} of spend", per.name),
        _ => format!("{unit} per {}", per.before(money)),
    }
}

/// The activities in the order of their planned spend, greatest first; equal ones in the order
/// of the file.
pub(super) fn by_planned_spend(view: &PlanView) -> Vec<usize> {
    let spends = &view.solution.spends;
    let mut order: Vec<usize> = (0..spends.len()).collect();
    order.sort_by(|&i, &j| spends[j].total_cmp(&spends[i]));
    order
}

/// What a unit of an activity's spend uses of what is limited, at the shadow prices, Σ λ_k a_ki:
/// the marginal return that its curve meets at the optimum.
pub(super) fn price_of_spend(view: &PlanView, i: usize) -> f64 {
    let constraints = view.problem.constraints().iter();
    constraints
        .zip(&view.solution.shadow_prices)
        .map(|(constraint, price)| (constraint.use_per_unit(i), price))
        .filter(|(use_per_unit, _)| *use_per_unit != 0.0)
        .map(|(use_per_unit, price)| use_per_unit * price)
        .sum()
}
