//! Axes: ranges that are safe to draw, round ticks, and amounts in a unit that keeps them short.

use crate::numeric::figures::figure;

/// Ticks that an axis has at about the most.
const MOST_TICKS: usize = 6;

/// Ends from here on are replaced: far enough from the greatest `f64` that lengths and ticks stay
/// finite.
const FARTHEST: f64 = 1e300;

/// A straight axis from a value to a greater one, laid over pixels.
#[derive(Debug, Clone, Copy)]
pub(super) struct Axis {
    from: f64,
    to: f64,
    start: f64,
    end: f64,
}

impl Axis {
    /// An axis over the values `from` … `to`, drawn from pixel `start` to pixel `end`. Ends that
    /// are not finite or leave no room between them are replaced, so that something can always
    /// be drawn.
    pub(super) fn new((from, to): (f64, f64), (start, end): (f64, f64)) -> Self {
        let [from, to] = [from, to].map(|end| end.clamp(-FARTHEST, FARTHEST));
        let from = if from.abs() < FARTHEST { from } else { 0.0 };
        let room = f64::EPSILON * from.abs() * 16.0;
        let to = if to < FARTHEST && to - from > room {
            to
        } else {
            from + from.abs().max(1.0)
        };
        Self {
            from,
            to,
            start,
            end,
        }
    }

    /// The pixel of a value; values beyond the axis lie beyond its ends.
    pub(super) fn at(&self, value: f64) -> f64 {
        let share = (value - self.from) / (self.to - self.from);
        self.start + share.clamp(-1.0, 2.0) * (self.end - self.start)
    }

    /// Whether a value lies on the axis.
    pub(super) fn holds(&self, value: f64) -> bool {
        self.from <= value && value <= self.to
    }

    /// The first value.
    pub(super) fn from(&self) -> f64 {
        self.from
    }

    /// The last value.
    pub(super) fn to(&self) -> f64 {
        self.to
    }

    /// Round values on the axis, at most about `most`, 1, 2, 2.5 or 5 times a power of ten
    /// apart.
    pub(super) fn ticks(&self, most: usize) -> Vec<f64> {
        let step = round_step((self.to - self.from) / most.clamp(1, MOST_TICKS) as f64);
        let first = (self.from / step).ceil();
        (0..=2 * MOST_TICKS)
            .map(|i| (first + i as f64) * step)
            .take_while(|tick| *tick <= self.to + 1e-9 * step)
            .collect()
    }
}

/// The least of 1, 2, 2.5, 5 times a power of ten that is not below `step`.
fn round_step(step: f64) -> f64 {
    let power = 10_f64.powi(step.log10().floor().clamp(-300.0, 300.0) as i32);
    [1.0, 2.0, 2.5, 5.0, 10.0]
        .into_iter()
        .map(|factor| factor * power)
        .find(|round| *round >= step * (1.0 - 1e-9))
        .unwrap_or(10.0 * power)
}

/// A power of a thousand in which amounts are written.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Magnitude {
    /// What one written unit is, in plain units.
    pub unit: f64,
    /// Its name; empty for plain units.
    pub name: &'static str,
}

impl Magnitude {
    /// The magnitude in which `largest` is written with one to five digits before its point.
    pub(super) fn of(largest: f64) -> Self {
        let named = [(1e9, "billion"), (1e6, "million"), (1e3, "thousand")];
        let found = named
            .into_iter()
            .find(|(unit, _)| largest >= 2.0 * unit && largest >= 1e4);
        let (unit, name) = found.unwrap_or((1.0, ""));
        Self { unit, name }
    }

    /// `million EUR`, `EUR`, `million`, or nothing.
    pub(super) fn before(self, money: &str) -> String {
        [self.name, money]
            .iter()
            .filter(|word| !word.is_empty())
            .copied()
            .collect::<Vec<_>>()
            .join(" ")
    }

    /// An amount in this magnitude.
    pub(super) fn written(self, amount: f64) -> String {
        // A tick such as 3 × 0.1 carries the rounding of its product.
        figure(amount / self.unit, 4)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ticks_are_round_and_few_at_any_scale() {
        for (to, expected) in [(1.0, 5), (24e6, 5), (7e-12, 4), (3e12, 3)] {
            let ticks = Axis::new((0.0, to), (0.0, 100.0)).ticks(6);
            assert!((expected..=7).contains(&ticks.len()), "{to}: {ticks:?}");
            assert!(ticks.iter().all(|tick| (0.0..=to * 1.001).contains(tick)));
        }
    }

    #[test]
    fn no_range_is_infinite_or_empty() {
        for to in [0.0, f64::INFINITY, f64::NAN, -1.0] {
            let axis = Axis::new((0.0, to), (0.0, 100.0));
            assert!(axis.to() > 0.0 && axis.to().is_finite());
            assert!(!axis.ticks(5).is_empty());
        }
    }
}
