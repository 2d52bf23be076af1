//! How far up the marginal curves' common axis goes, and the unit of its numbers.

use super::axis::Magnitude;
use super::panel::Panel;

/// How many times the price the upright axis reaches at the most: marginal returns of first
/// units may be without bound, and what matters is near the price.
const REACH: f64 = 3.2;

/// Share of the axis that returns of the other sign may take.
const OTHER_SIDE: f64 = 0.25;

/// Share of the highest marginal return above which the lowest counts as far from zero.
const FAR_FROM_ZERO: f64 = 0.4;

/// Times its reach that the axis may grow so that no planned point lies beyond it.
const OUTLYING: f64 = 2.0;

/// The least rate for which a unit of money is large enough, and the least for which the largest
/// is not given up for plain money.
const READABLE_RATE: f64 = 0.5;
const READABLE_IN_BILLIONS: f64 = 1e-3;

/// The upright axis: from zero to where the curves go, but not far beyond the price.
pub(super) fn range_of(panels: &[Panel], price: f64) -> (f64, f64) {
    let finite = |value: &f64| value.is_finite();
    let heights = || {
        let curves = panels
            .iter()
            .flat_map(|panel| panel.curve.iter().map(|&(_, height)| height));
        curves
            .chain(panels.iter().map(|panel| panel.planned.1))
            .filter(finite)
    };
    let steepest = heights().fold(0.0, greater).abs();
    let price = if price.is_finite() { price } else { 0.0 };
    let least_reach = (REACH * price.abs()).max(typical_height(panels, price));
    let planned = panels.iter().map(|panel| 1.1 * panel.planned.1.abs());
    let reach = planned
        .filter(|height| *height <= OUTLYING * least_reach)
        .fold(least_reach, f64::max);
    let reach = steepest.min(reach).max(1.2 * price.abs());
    let lowest = heights().fold(0.0, f64::min).max(-reach);
    let highest = heights().fold(0.0, f64::max).min(reach);
    let (lowest, highest) = (
        lowest.min(1.2 * price.min(0.0)),
        highest.max(1.2 * price.max(0.0)),
    );
    let least = heights().fold(price, f64::min);
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

/// Whichever is farther from zero.
pub(super) fn greater(most: f64, value: f64) -> f64 {
    if value.abs() > most.abs() {
        value
    } else {
        most
    }
}

/// A height that the axis should reach where the price says little: a little above the middle one
/// of the planned points, which bounds may hold far from the price, and, at a price of zero, of
/// the curves' middles.
fn typical_height(panels: &[Panel], price: f64) -> f64 {
    let mut heights: Vec<f64> = panels
        .iter()
        .flat_map(|panel| {
            let middle = panel.curve.get(panel.curve.len() / 2);
            let middle = middle.filter(|_| price == 0.0).map(|point| point.1);
            [Some(panel.planned.1), middle]
        })
        .flatten()
        .map(f64::abs)
        .filter(|height| height.is_finite())
        .collect();
    heights.sort_by(f64::total_cmp);
    1.6 * heights.get(heights.len() / 2).copied().unwrap_or(0.0)
}

/// The power of a thousand of money for which the rate has few zeros after its point.
pub(super) fn rate_magnitude(rate: f64) -> Magnitude {
    let named = [
        (1.0, "", READABLE_RATE),
        (1e3, "thousand", READABLE_RATE),
        (1e6, "million", READABLE_RATE),
        (1e9, "billion", READABLE_IN_BILLIONS),
    ];
    named
        .into_iter()
        .find(|(unit, _, least)| rate.abs() * unit >= *least)
        .map_or(Magnitude::of(0.0), |(unit, name, _)| Magnitude {
            unit,
            name,
        })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::charts::PlanView;
    use crate::curves::{Curve, Power, PowerParams};
    use crate::model::{Activity, Aim, Constraint, Labels, Problem, Solution};

    #[test]
    fn steep_curves_do_not_press_the_price_to_the_foot() {
        // From gain / spend² = price: spend = √(gain / price).
        let (gains, price) = ([10.0, 11.0, 12.0], 0.02);
        let activities = gains.map(|gain: f64| {
            let power = PowerParams {
                gain: -gain,
                exponent: -1.0,
            };
            Activity::new(
                format!("Stratum {gain}"),
                Curve::Power(Power::new(power).unwrap()),
            )
        });
        let spends: Vec<f64> = gains.map(|gain| (gain / price).sqrt()).to_vec();
        let budget = Constraint::budget(spends.iter().sum());
        let view = PlanView {
            labels: &Labels::default(),
            problem: &Problem::new(Aim::Maximise, activities.to_vec(), vec![budget]).unwrap(),
            solution: &Solution {
                spends,
                shadow_prices: vec![price],
            },
        };
        let panels: Vec<Panel> = (0..3).map(|i| Panel::of(&view, i)).collect();
        let (lowest, highest) = range_of(&panels, price);
        assert!(lowest == 0.0 && price < highest && highest < 4.0 * price);
    }

    #[test]
    fn rates_are_written_without_many_zeros() {
        for (rate, name) in [
            (9.1, ""),
            (0.0031, "thousand"),
            (2.8e-5, "million"),
            (8e-11, "billion"),
            (1e-20, ""),
        ] {
            assert_eq!(rate_magnitude(rate).name, name, "{rate}");
        }
    }
}
