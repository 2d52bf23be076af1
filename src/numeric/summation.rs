//! Sums that neither lose small terms nor depend on the number of threads.

use rayon::prelude::*;

/// Items that one block of a parallel pass holds. A block of `f64` fills half of a first-level
/// cache, and blocks are joined in their order, so a sum has the same bits on any number of
/// threads.
pub const BLOCK: usize = 2048;

/// A running sum with the rounding error carried along.
///
/// A. Neumaier, *Rundungsfehleranalyse einiger Verfahren zur Summation endlicher Summen*,
/// ZAMM 54 (1974), 39–51: the error of n terms is one rounding of the result plus a term of
/// order n·ε², whatever the signs.
#[derive(Debug, Clone, Copy, Default)]
pub struct CompensatedSum {
    sum: f64,
    carried: f64,
}

impl CompensatedSum {
    /// Adds one term.
    #[inline]
    pub fn add(&mut self, term: f64) {
        let sum = self.sum + term;
        self.carried += if self.sum.abs() >= term.abs() {
            (self.sum - sum) + term
        } else {
            (term - sum) + self.sum
        };
        self.sum = sum;
    }

    /// Joins the sum of a later block.
    #[inline]
    pub fn join(&mut self, later: Self) {
        self.add(later.sum);
        self.carried += later.carried;
    }

    /// The sum, rounded once. An infinite term makes it infinite (not NaN, although the carried
    /// error of an infinite sum has no meaning).
    #[inline]
    pub fn total(self) -> f64 {
        if self.sum.is_finite() {
            self.sum + self.carried
        } else {
            self.sum
        }
    }
}

impl FromIterator<f64> for CompensatedSum {
    fn from_iter<I: IntoIterator<Item = f64>>(terms: I) -> Self {
        let mut sum = Self::default();
        for term in terms {
            sum.add(term);
        }
        sum
    }
}

/// `N` sums over `0..len` in one pass: `terms(i)` gives the i-th term of each. Blocks run in
/// parallel and are joined in their order.
pub fn block_sums<const N: usize>(
    len: usize,
    terms: impl Fn(usize) -> [f64; N] + Sync,
) -> [f64; N] {
    let of_block = |block: usize| {
        let mut sums = [CompensatedSum::default(); N];
        for i in block * BLOCK..len.min((block + 1) * BLOCK) {
            for (sum, term) in sums.iter_mut().zip(terms(i)) {
                sum.add(term);
            }
        }
        sums
    };
    let blocks = len.div_ceil(BLOCK);
    let mut joined = [CompensatedSum::default(); N];
    let mut join = |sums: [CompensatedSum; N]| {
        for (whole, part) in joined.iter_mut().zip(sums) {
            whole.join(part);
        }
    };
    if blocks <= 1 {
        (0..blocks).map(of_block).for_each(&mut join);
    } else {
        let parts: Vec<_> = (0..blocks).into_par_iter().map(of_block).collect();
        parts.into_iter().for_each(&mut join);
    }
    joined.map(CompensatedSum::total)
}

/// Partial sums that run side by side in [`lane_sum`], so that the processor need not wait for
/// one addition before it begins the next.
const LANES: usize = 8;

/// Σ term(item), quick: lanes of plain sums within a block, blocks joined with compensation in
/// their order. The error is that of a plain sum of `BLOCK`/8 terms. No term may be NaN.
pub fn lane_sum<T: Sync>(items: &[T], term: impl Fn(&T) -> f64 + Sync) -> CompensatedSum {
    let of_block = |block: &[T]| {
        let mut lanes = [0.0; LANES];
        let mut chunks = block.chunks_exact(LANES);
        for chunk in &mut chunks {
            for (lane, item) in lanes.iter_mut().zip(chunk) {
                *lane += term(item);
            }
        }
        let mut sum: CompensatedSum = lanes.into_iter().collect();
        for item in chunks.remainder() {
            sum.add(term(item));
        }
        sum
    };
    let mut joined = CompensatedSum::default();
    if items.len() <= BLOCK {
        joined.join(of_block(items));
    } else {
        let parts: Vec<CompensatedSum> = items.par_chunks(BLOCK).map(of_block).collect();
        parts.into_iter().for_each(|part| joined.join(part));
    }
    joined
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn small_terms_survive_large_ones_that_cancel() {
        // 1 + 1e100 + 1 − 1e100 is 2; a plain sum gives 0 (Neumaier's own example of the case
        // in which the term is larger than the sum).
        let sum: CompensatedSum = [1.0, 1e100, 1.0, -1e100].into_iter().collect();
        assert_eq!(sum.total(), 2.0);
    }

    #[test]
    fn block_sums_have_the_same_bits_on_any_number_of_threads() {
        let term = |i: usize| [((i * 7919) % 1013) as f64 * 0.1 - 50.0];
        let on = |threads| {
            let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build();
            pool.map(|pool| pool.install(|| block_sums(1_000_003, term)[0].to_bits()))
                .unwrap_or_default()
        };
        assert_ne!(on(1), 0);
        assert_eq!(on(1), on(2));
        assert_eq!(on(1), on(4));
    }

    #[test]
    fn an_infinite_term_gives_an_infinite_sum() {
        assert_eq!(
            block_sums(3, |i| [if i == 1 { f64::INFINITY } else { 1.0 }])[0],
            f64::INFINITY
        );
    }
}
