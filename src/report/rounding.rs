//! What it costs to round the spends.

use super::wording::{Units, names};
use crate::model::Problem;
use crate::numeric::figures;

/// Activities that are named before they are counted.
const NAMED: usize = 3;

/// Spends rounded to a step, and what that costs.
#[derive(Debug, Clone, PartialEq)]
pub struct Rounding {
    /// Spends are multiples of this, in units of spend.
    pub step: f64,
    /// The rounded spends, in the order of the activities.
    pub spends: Vec<f64>,
    /// Total of the exact plan, in the common unit.
    pub exact_total: f64,
    /// Total of the rounded plan.
    pub total: f64,
    /// The activity that takes the rest of a limit that is no whole number of steps, by index.
    pub odd: Option<usize>,
    /// Activities, by index, that keep their exact spend, since no whole number of steps lies
    /// between their floor and their cap.
    pub kept: Vec<usize>,
}

impl Rounding {
    /// What rounding moves the total by, ≥ 0.
    pub fn cost(&self) -> f64 {
        (self.total - self.exact_total).abs()
    }

    /// `Rounded to multiples of 1,000 EUR: costs 0.02 homes protected (0.001 %).`
    pub(super) fn in_words(&self, problem: &Problem, units: Units) -> String {
        let name = |i: usize| problem.activities()[i].name.to_string();
        let mut words = self.cost_in_words(units);
        if let Some(odd) = self.odd {
            words.push_str(&format!(" {} takes the odd amount.", name(odd)));
        }
        if !self.kept.is_empty() {
            let listed: Vec<String> = self.kept.iter().take(NAMED).map(|&i| name(i)).collect();
            words.push_str(&format!(
                " Kept exact, since no multiple lies within the bounds: {}.",
                names(&listed, self.kept.len())
            ));
        }
        words
    }

    fn cost_in_words(&self, units: Units) -> String {
        let step = units.money(self.step);
        let change = self.cost();
        if change == 0.0 {
            return format!("Rounded to multiples of {step}, at no cost.");
        }
        let cost = units.total(change, 2);
        let share = match self.exact_total {
            0.0 => String::new(),
            exact => format!(" ({})", figures::percent(change / exact.abs())),
        };
        format!("Rounded to multiples of {step}; against the exact plan that costs {cost}{share}.")
    }
}
