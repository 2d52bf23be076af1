//! A limit that looks a thousandfold off the curves.

use super::notes::Note;
use crate::curves::{Curve, Parameter, ReturnCurve};
use crate::model::{Activity, Sense};
use crate::numeric::block_sums;
use crate::numeric::figures::{TABLE_DIGITS, figure};

/// Factor between a limit and everything it could be compared with from which on it looks like a
/// slip of units: well below a thousand, and beyond any plan that makes sense.
const SUSPICIOUS: f64 = 200.0;

/// A warning if the limit is far off today's spends, the caps, and the spends over which the curves
/// bend, together: all of those that are known, and all on the same side. Today's spends and the
/// bends are known where half of the activities have them, and taken for all in proportion.
pub(super) fn warn_of_scale(activities: &[Activity], sense: Sense, limit: f64) -> Option<Note> {
    let counted = |value: Option<f64>| value.map_or([0.0, 0.0], |value| [value, 1.0]);
    let [current, currents, reach, reaches, caps] = block_sums(activities.len(), |i| {
        let activity = &activities[i];
        let [current, currents] = counted(activity.current);
        let [reach, reaches] = counted(reach_of_curve(&activity.curve));
        [current, currents, reach, reaches, activity.cap]
    });
    let of_all = |sum: f64, known: f64| {
        let all = activities.len() as f64;
        if known * 2.0 >= all {
            sum / known * all
        } else {
            f64::NAN
        }
    };
    let known = [
        ("today's spends", of_all(current, currents)),
        ("the caps", caps),
        (
            "the spends over which the curves bend",
            of_all(reach, reaches),
        ),
    ];
    let ratios: Vec<(&str, f64, f64)> = known
        .into_iter()
        .filter(|(_, sum)| 0.0 < *sum && sum.is_finite())
        .map(|(what, sum)| (what, sum, limit / sum))
        .collect();
    let far_above = ratios.iter().all(|(_, _, ratio)| *ratio > SUSPICIOUS);
    let far_below = ratios.iter().all(|(_, _, ratio)| *ratio < 1.0 / SUSPICIOUS);
    let (what, sum, _) = ratios
        .first()
        .filter(|_| limit > 0.0 && (far_above || far_below))?;
    let name = if sense == Sense::AtLeast {
        "requirement"
    } else {
        "budget"
    };
    let side = if far_above { "far above" } else { "far below" };
    Some(Note::warning(format!(
        "the {name} of {} is {side} {what}, about {} together: are both in the same unit?",
        figure(limit, TABLE_DIGITS),
        figure(*sum, TABLE_DIGITS)
    )))
}

/// A spend of the order at which the curve has bent: its scale, its top, its last knot.
fn reach_of_curve(curve: &Curve) -> Option<f64> {
    match curve {
        Curve::Log(curve) => Some(curve.params().scale),
        Curve::Exponential(curve) => Some(curve.params().scale),
        Curve::Hyperbolic(curve) => Some(curve.params().scale),
        Curve::Points(points) => Some(points.last_spend()),
        Curve::Quadratic(curve) => {
            Some(curve.inverse_marginal(0.0).least).filter(|top| 0.0 < *top && top.is_finite())
        }
        Curve::Hill(_) | Curve::Logistic(_) => {
            let parameters = curve.parameters();
            let midpoint = parameters.get(Parameter::Midpoint).unwrap_or(0.0);
            Some(parameters.get(Parameter::Scale)?.max(midpoint))
        }
        Curve::Linear(_) | Curve::Power(_) => None,
    }
}
