//! Why the spends are what they are, in sentences that group the activities.

use super::activities::{ActivityRows, Reason};
use super::wording::{Units, names};
use crate::model::Aim;
use crate::numeric::figures;

/// Activities that a sentence names before it counts.
const NAMED: usize = 3;

/// One sentence for every reason that needs one. Activities that simply earn the price need none.
pub(super) fn reasons(rows: &ActivityRows, units: Units) -> Vec<String> {
    let mut groups: [Vec<(f64, usize)>; 7] = Default::default();
    let mut aim = Aim::Maximise;
    for i in 0..rows.len() {
        let why = rows.why(i);
        aim = why.aim();
        let (group, share) = match why.reason {
            Reason::AtPrice | Reason::Rounded | Reason::Saturated => continue,
            Reason::AtCap(share) => (0, share),
            Reason::AtFloor(share) => (1, share),
            Reason::Unfunded(share) => (2, share),
            Reason::Straight => (3, None),
            Reason::AtKnot(share) => (4, Some(share)),
            Reason::Fixed => (5, None),
            Reason::NothingLeft => (6, None),
        };
        groups[group].push((share.unwrap_or(f64::NAN), i));
    }
    let unit = units.money_name().unwrap_or("unit");
    let starts = starts(aim, unit, &groups);
    let mut sentences = Vec::new();
    for (group, start) in groups.iter_mut().zip(starts) {
        if group.is_empty() {
            continue;
        }
        // The strongest reason first: farthest from the price.
        group.sort_by(|a, b| distance(b.0).total_cmp(&distance(a.0)).then(a.1.cmp(&b.1)));
        let listed: Vec<String> = group
            .iter()
            .take(NAMED)
            .map(|&(share, i)| match share.is_finite() {
                true => format!("{} ({})", rows.activity(i).name, figures::times(share)),
                false => rows.activity(i).name.to_string(),
            })
            .collect();
        sentences.push(format!("{start}: {}.", names(&listed, group.len())));
    }
    sentences
}

fn distance(share: f64) -> f64 {
    if share.is_finite() {
        (share - 1.0).abs()
    } else {
        -1.0
    }
}

/// Distance of a share from one that is rounding alone: the next unit earns the price itself.
const ROUNDING: f64 = 1e-9;

fn starts(aim: Aim, unit: &str, groups: &[Vec<(f64, usize)>; 7]) -> [String; 7] {
    let (earn, beyond, below) = match aim {
        Aim::Maximise => ("earn", "more", "less"),
        Aim::Minimise => ("cost", "less", "more"),
    };
    let than_price = |group: &[(f64, usize)], direction: &str| {
        let close = |&(share, _): &(f64, usize)| distance(share) < ROUNDING;
        if group
            .iter()
            .any(|member| member.0.is_finite() && close(member))
        {
            format!("would {earn} the price or {direction}")
        } else {
            format!("would {earn} {direction} than the price")
        }
    };
    let [caps, floors, unfunded, straight, knots, ..] = groups;
    let tie = if straight.len() > 1 {
        format!("Straight at the price, so that any division among them {earn}s the same")
    } else {
        "Straight at the price, taking what the others leave".to_owned()
    };
    [
        format!(
            "At the cap, where the next {unit} {}",
            than_price(caps, beyond)
        ),
        format!(
            "At the floor, where the next {unit} {}",
            than_price(floors, below)
        ),
        format!(
            "Unfunded, since already the first {unit} {}",
            than_price(unfunded, below)
        ),
        tie,
        format!(
            "At a knot of its table, where the next {unit} {}",
            than_price(knots, below)
        ),
        "Fixed, since floor and cap are the same".to_owned(),
        "Kept at the floor, since the limit leaves nothing above the floors".to_owned(),
    ]
}

/// Which spends lie outside the range that their curve was fitted on.
pub(super) fn extrapolation(rows: &ActivityRows, units: Units) -> Option<String> {
    let mut listed = Vec::new();
    let mut count = 0;
    for i in (0..rows.len()).filter(|&i| rows.is_extrapolated(i)) {
        count += 1;
        if let (Some(observed), true) = (rows.activity(i).observed, count <= NAMED) {
            let seen = if observed.to.is_finite() {
                format!(
                    "{} to {}",
                    figures::amount(observed.from),
                    figures::amount(observed.to)
                )
            } else {
                format!("{} and more", figures::amount(observed.from))
            };
            listed.push(format!("{} (seen: {seen})", rows.activity(i).name));
        }
    }
    let unit = units
        .money_name()
        .map(|unit| format!(" in {unit}"))
        .unwrap_or_default();
    (count > 0).then(|| {
        format!(
            "* Extrapolated, since the curve was fitted on other spends{unit}: {}.",
            names(&listed, count)
        )
    })
}
