//! Names that must differ from one another, whatever their case and spaces.

use std::borrow::Cow;
use std::collections::{HashMap, HashSet};
use std::hash::{BuildHasher, Hasher};

use rayon::prelude::*;
use rustc_hash::{FxBuildHasher, FxHasher};

use super::place::is_unseen;

/// Names of a row that adds up the others.
const TOTALS: [&str; 8] = [
    "total",
    "totals",
    "sum",
    "subtotal",
    "sub-total",
    "grand total",
    "overall",
    "all activities",
];

/// The name without the spaces round it, no-break and zero-width ones among them.
pub(super) fn trimmed(name: &str) -> &str {
    name.trim_matches(|character: char| {
        character.is_whitespace() || matches!(character, '\u{200b}' | '\u{feff}')
    })
}

/// Whether a name holds what cannot be seen in it.
pub(super) fn is_unprintable(name: &str) -> bool {
    if name.is_ascii() {
        return name.bytes().any(|byte| byte.is_ascii_control());
    }
    name.contains(is_unseen)
}

/// Whether a row of this name adds up the others.
pub(super) fn is_total(name: &str) -> bool {
    // Most names are told by two letters that none of these words begins with.
    let begins_so = name
        .as_bytes()
        .first_chunk()
        .is_some_and(|letters: &[u8; 2]| {
            let letters = letters.map(|letter| letter.to_ascii_lowercase());
            TOTALS
                .iter()
                .any(|word| word.as_bytes().starts_with(&letters))
        });
    if !begins_so {
        return false;
    }
    TOTALS.contains(&folded(name).trim_end_matches([':', '.']))
}

/// The name as it is compared: small letters, every run of spaces one space.
fn folded(name: &str) -> Cow<'_, str> {
    let plain = name
        .bytes()
        .all(|byte| byte.is_ascii_graphic() && !byte.is_ascii_uppercase());
    if plain {
        return Cow::Borrowed(name);
    }
    Cow::Owned(
        name.split_whitespace()
            .collect::<Vec<_>>()
            .join(" ")
            .to_lowercase(),
    )
}

fn hash_of(name: &str) -> u64 {
    let mut hasher: FxHasher = FxBuildHasher.build_hasher();
    let single_spaced = !name.as_bytes().windows(2).any(|pair| pair == b"  ");
    if name.is_ascii() && single_spaced && !name.bytes().any(|byte| byte.is_ascii_control()) {
        // The same as below without the copy. Eight bytes a step.
        let mut lower = [0; 8];
        for chunk in name.as_bytes().chunks(8) {
            let lower = &mut lower[..chunk.len()];
            lower.copy_from_slice(chunk);
            lower.make_ascii_lowercase();
            hasher.write(lower);
        }
    } else {
        for chunk in folded(name).as_bytes().chunks(8) {
            hasher.write(chunk);
        }
    }
    hasher.finish()
}

/// Pairs of equal names: the index of the first and of each later one, in order. Names of nothing
/// are no names.
pub(super) fn repeated<'n>(
    count: usize,
    name: impl Fn(usize) -> &'n str + Sync,
) -> Vec<(usize, usize)> {
    let hashes: Vec<u64> = (0..count)
        .into_par_iter()
        .map(|i| hash_of(name(i)))
        .collect();
    let suspects = met_twice(&hashes);
    let mut alike: HashMap<u64, Vec<usize>, FxBuildHasher> = HashMap::default();
    for (i, hash) in hashes.iter().enumerate() {
        if suspects.contains(hash) && !name(i).is_empty() {
            alike.entry(*hash).or_default().push(i);
        }
    }
    let mut repeated = Vec::new();
    for alike in alike.into_values() {
        // Names that share a hash by chance are told apart here.
        let mut first: Vec<usize> = Vec::new();
        for i in alike {
            match first
                .iter()
                .find(|&&earlier| folded(name(earlier)) == folded(name(i)))
            {
                Some(&earlier) => repeated.push((earlier, i)),
                None => first.push(i),
            }
        }
    }
    repeated.sort_unstable_by_key(|&(_, again)| again);
    repeated
}

/// Every hash that stands twice, and a few that only share their place in a table of bits with
/// another: a table that fits the cache tells most of them apart at one look each.
fn met_twice(hashes: &[u64]) -> HashSet<u64, FxBuildHasher> {
    // A word of bits for each name: about one name in a hundred is suspected by chance.
    let mut met = vec![0_u64; hashes.len().next_power_of_two()];
    let mut twice = HashSet::default();
    for &hash in hashes {
        let word = (hash >> 6) as usize & (met.len() - 1);
        let bit = 1 << (hash & 63);
        if met[word] & bit != 0 {
            twice.insert(hash);
        }
        met[word] |= bit;
    }
    twice
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_that_differ_in_case_and_spaces_alone_are_the_same() {
        let names = [
            "Dune repair",
            "dune  repair",
            "Dune\u{a0}repair",
            "Dunes",
            "DUNE REPAIR",
            "Über",
            "über",
        ];
        assert_eq!(
            repeated(names.len(), |i| names[i]),
            [(0, 1), (0, 2), (0, 4), (5, 6)]
        );
    }

    #[test]
    fn names_with_what_cannot_be_seen_are_told() {
        let hidden = ["dune\u{200b}s", "\u{202e}enud", "du\u{ad}ne", "two\nlines"];
        assert!(hidden.into_iter().all(is_unprintable));
        // A joiner is a letter's part in Persian, and the dash and the space are seen.
        let seen = ["dunes", "می\u{200c}روم", "dune\u{a0}– south"];
        assert!(!seen.into_iter().any(is_unprintable));
    }

    #[test]
    fn rows_of_sums_are_told_by_their_names() {
        assert!(["Total", "SUM:", "Grand  total"].into_iter().all(is_total));
        assert!(
            !["Total flood wall", "summit path", "garden"]
                .into_iter()
                .any(is_total)
        );
    }
}
