//! The price at which the demand meets the limit, enclosed and bisected.
//!
//! The bracket is the guarantee: the demand exceeds the limit at its lower price and falls short
//! of it at its upper price, always. Interpolation only proposes where to look next, and is
//! overruled by halving whenever it does not shrink the bracket fast enough. The bracket is
//! halved in the order of the `f64` numbers themselves, so that 64 halvings end at two
//! neighbouring prices, whatever the scale of the plan.

use super::demand::{Demand, UseRange};
use super::narrow::narrowed;
use crate::model::Sense;

/// Terms from which on a sampled guess and narrowing pay; below, a pass costs less than either.
const WORTH_SAMPLING: usize = 8192;

/// One activity in this many is sampled.
const SAMPLE_STRIDE: usize = 64;

/// First step away from a sampled guess, in ranks: about 0.4 % of the price, a few standard
/// errors of the sample.
const FIRST_STEP: i64 = 1 << 44;

/// The bracket shrinks by this many powers of two between two narrowings of the demand.
const NARROWING_BITS: u32 = 10;

/// Proposals in a row that may fail to halve the bracket before it is halved by force.
const PATIENCE: usize = 2;

/// Two prices between which, or one at which, the demand meets the limit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct PriceBracket {
    /// The demand at this price is at least the limit.
    pub from: f64,
    /// The demand at this price is at most the limit. Equal to `from`, or its neighbour.
    pub to: f64,
}

impl PriceBracket {
    /// One price at which the least and the greatest demand enclose the limit.
    pub(super) fn exactly(price: f64) -> Self {
        Self {
            from: price,
            to: price,
        }
    }

    /// The price that is reported.
    pub(super) fn price(&self) -> f64 {
        self.to
    }
}

/// The bracket during the search, prices as ranks in the order of the `f64` numbers.
#[derive(Clone, Copy)]
struct Search<'a> {
    demand: &'a Demand,
    limit: f64,
    low: i64,
    high: i64,
    /// ln(use/limit) at `low`, ≥ 0, and at `high`, ≤ 0; `None` where not known.
    above: Option<f64>,
    below: Option<f64>,
}

/// The prices at which the demand meets the limit. The caller has made sure that such prices
/// exist: the limit lies strictly between the use of all floors and of all caps, and binds.
pub(super) fn enclose(demand: &Demand, sense: Sense, limit: f64) -> PriceBracket {
    let (low, high) = match sense {
        Sense::AtMost => (rank(0.0), rank(f64::MAX)),
        Sense::AtLeast => (rank(f64::MIN), rank(-0.0)),
        Sense::Equal => (rank(f64::MIN), rank(f64::MAX)),
    };
    enclose_between(demand, limit, low, high)
}

fn enclose_between(demand: &Demand, limit: f64, low: i64, high: i64) -> PriceBracket {
    let mut search = Search {
        demand,
        limit,
        low,
        high,
        above: None,
        below: None,
    };
    if demand.terms() < WORTH_SAMPLING {
        return search.run(0).unwrap_or_else(|| search.bracket());
    }
    let sample = demand.sample(SAMPLE_STRIDE);
    let guess = rank(enclose_between(&sample, limit / SAMPLE_STRIDE as f64, low, high).price());
    if let Some(found) = search.step_out(guess) {
        return found;
    }
    // Narrow, bisect a while, narrow again: each time fewer activities are undecided.
    let mut narrow: Option<Demand> = None;
    loop {
        let width = search.high.abs_diff(search.low);
        let widest = narrow.as_ref().unwrap_or(demand);
        let narrower = narrowed(widest, price_at(search.low), price_at(search.high));
        let mut inner = Search {
            demand: &narrower,
            ..search
        };
        let found = inner.run(width >> NARROWING_BITS);
        search = Search { demand, ..inner };
        narrow = Some(narrower);
        match found {
            Some(found) => return found,
            None if search.high.abs_diff(search.low) <= 1 => return search.bracket(),
            None => {}
        }
    }
}

impl Search<'_> {
    fn bracket(&self) -> PriceBracket {
        PriceBracket {
            from: price_at(self.low),
            to: price_at(self.high),
        }
    }

    /// Moves away from a guess, in growing steps, until both ends have been looked at. Their
    /// heights do not count: a demand of nothing or without end has none.
    fn step_out(&mut self, guess: i64) -> Option<PriceBracket> {
        let mut trial = guess.clamp(self.low + 1, self.high - 1);
        let mut step = FIRST_STEP;
        let (lowest, highest) = (self.low, self.high);
        while self.low == lowest || self.high == highest {
            if let Some(found) = self.look_at(trial) {
                return Some(found);
            }
            if self.high.abs_diff(self.low) <= 1 {
                return None;
            }
            trial = if self.high == highest {
                self.low.saturating_add(step)
            } else {
                self.high.saturating_sub(step)
            }
            .clamp(self.low + 1, self.high - 1);
            step = step.saturating_mul(8);
        }
        None
    }

    /// Shrinks the bracket to `width` ranks or to two neighbours, or finds a price that meets
    /// the limit exactly.
    fn run(&mut self, width: u64) -> Option<PriceBracket> {
        let mut slow = 0;
        let mut kept = None;
        while self.high.abs_diff(self.low) > width.max(1) {
            let before = self.high.abs_diff(self.low);
            let halfway = midpoint(self.low, self.high);
            let trial = match self.proposal() {
                Some(proposal) if slow < PATIENCE => proposal,
                _ => halfway,
            };
            let low = self.low;
            if let Some(found) = self.look_at(trial) {
                return Some(found);
            }
            // An end that stays twice keeps interpolation from creeping: its height is halved
            // (the Illinois rule: M. Dowell and P. Jarratt, BIT 11 (1971), 168–174).
            let moved_low = self.low != low;
            if kept == Some(moved_low) {
                let stale = if moved_low {
                    &mut self.below
                } else {
                    &mut self.above
                };
                *stale = stale.map(|height| height / 2.0);
            }
            kept = Some(moved_low);
            slow = if self.high.abs_diff(self.low) > before / 2 {
                slow + 1
            } else {
                0
            };
        }
        None
    }

    /// Where the straight line through both ends crosses the limit.
    fn proposal(&self) -> Option<i64> {
        let (above, below) = (self.above?, self.below?);
        let share = above / (above - below);
        if !(0.0..=1.0).contains(&share) {
            return None;
        }
        let step = (self.high.abs_diff(self.low) as f64 * share) as u64;
        Some(
            self.low
                .saturating_add_unsigned(step)
                .clamp(self.low + 1, self.high - 1),
        )
    }

    /// Evaluates the demand at a trial price and moves one end of the bracket there.
    fn look_at(&mut self, trial: i64) -> Option<PriceBracket> {
        let price = price_at(trial);
        let UseRange { least, greatest } = self.demand.at(price);
        if least <= self.limit && self.limit <= greatest {
            return Some(PriceBracket::exactly(price));
        }
        let height = |used: f64| Some((used / self.limit).ln()).filter(|height| height.is_finite());
        if least > self.limit {
            self.low = trial;
            self.above = height(least);
        } else {
            self.high = trial;
            self.below = height(greatest);
        }
        None
    }
}

/// The place of a number in the order of all `f64` numbers. Neighbouring numbers have
/// neighbouring ranks, and between two powers of two ranks are evenly spaced.
fn rank(number: f64) -> i64 {
    let bits = number.to_bits() as i64;
    if bits < 0 { i64::MIN - bits - 1 } else { bits }
}

/// The number at a rank.
fn price_at(rank: i64) -> f64 {
    f64::from_bits(if rank < 0 { i64::MIN - rank - 1 } else { rank } as u64)
}

/// Between two ranks, without overflow.
fn midpoint(low: i64, high: i64) -> i64 {
    low.saturating_add_unsigned(high.abs_diff(low) / 2)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ranks_follow_the_order_of_the_numbers() {
        let numbers = [
            f64::MIN,
            -1.0,
            -f64::MIN_POSITIVE,
            -0.0,
            0.0,
            5e-324,
            1.0,
            2.0,
            f64::MAX,
        ];
        for pair in numbers.windows(2) {
            assert!(rank(pair[0]) < rank(pair[1]), "{pair:?}");
            assert_eq!(price_at(rank(pair[0])).to_bits(), pair[0].to_bits());
        }
        assert_eq!(rank(1.0) + 1, rank(1.0 + f64::EPSILON));
        assert_eq!(rank(-0.0) + 1, rank(0.0));
    }
}
