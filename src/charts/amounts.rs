//! Amounts in a column: one unit, the same decimals.

use super::axis::Magnitude;
use crate::numeric::figures::{TABLE_DIGITS, figure, fixed, signed};

/// Digits that the greatest amount beside the rows has at least; the others have as many
/// decimals.
const AMOUNT_DIGITS: i32 = 5;

/// Amounts from here on are written in billions, so that their column stays narrow.
const LONG: f64 = 1e11;

/// Greatest amounts outside this range are written in powers of ten.
const READABLE: std::ops::Range<f64> = 1e-3..1e18;

/// How the amounts beside the rows are written: with the same decimals, so that they align.
#[derive(Clone, Copy)]
pub(super) struct Amounts {
    /// The unit of what is written.
    pub magnitude: Magnitude,
    /// None for powers of ten.
    decimals: Option<usize>,
}

impl Amounts {
    /// For a column whose greatest amount is `longest`.
    pub(super) fn of(longest: f64) -> Self {
        let readable = longest == 0.0 || READABLE.contains(&longest);
        let magnitude = Magnitude::of(if readable && longest >= LONG {
            longest
        } else {
            0.0
        });
        let greatest = longest / magnitude.unit;
        let digits = if greatest > 0.0 {
            greatest.log10().floor() as i32 + 1
        } else {
            AMOUNT_DIGITS
        };
        let decimals = readable.then(|| usize::try_from(AMOUNT_DIGITS - digits).unwrap_or(0));
        Self {
            magnitude,
            decimals,
        }
    }

    /// An amount; one that rounds to nothing is written as less than the last digit.
    pub(super) fn written(&self, amount: f64) -> String {
        let rounded = self.rounded(amount);
        match self.decimals {
            Some(decimals) if amount > 0.0 && rounded == self.rounded(0.0) => {
                format!("<{}", fixed(0.1_f64.powi(decimals as i32), decimals))
            }
            _ => rounded,
        }
    }

    fn rounded(&self, amount: f64) -> String {
        match self.decimals {
            Some(decimals) if amount.is_finite() => fixed(amount / self.magnitude.unit, decimals),
            _ => figure(amount, TABLE_DIGITS),
        }
    }

    /// A change with its sign; `±0` where it rounds to nothing.
    pub(super) fn change_written(&self, change: f64) -> String {
        let size = self.rounded(change.abs());
        if size == self.rounded(0.0) {
            signed(0.0, TABLE_DIGITS)
        } else if change < 0.0 {
            format!("−{size}")
        } else {
            format!("+{size}")
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_written_times_its_unit_is_the_amount() {
        for power in -12..=18 {
            let longest = 3.25 * 10_f64.powi(power);
            let amounts = Amounts::of(longest);
            let written = amounts.written(longest).replace(',', "");
            let read = written.parse::<f64>().unwrap() * amounts.magnitude.unit;
            assert!((read / longest - 1.0).abs() < 1e-3, "{longest}: {written}");
        }
    }

    #[test]
    fn a_small_amount_is_not_written_as_nothing() {
        let amounts = Amounts::of(4e6);
        assert_eq!(amounts.written(0.3), "<1");
        assert_eq!(amounts.written(0.0), "0");
        assert_eq!(Amounts::of(300.0).written(1e-4), "<0.01");
        // The solver's last digits are no change.
        assert_eq!(amounts.change_written(-1e-9), "±0");
    }
}
