//! A limit that looks a thousandfold off the curves.

use super::notes::Note;
use crate::curves::{Curve, Parameter, ReturnCurve};
use crate::model::{Activity, Sense};
use crate::numeric::block_sums;
use crate::numeric::figures::{TABLE_DIGITS, figure};

/// Factor between a limit and everything it could be compared with from which on it looks like a
/// slip of units: well below a thousand, and beyond any plan that makes sense.
const SUSPICIOUS: f64 = 200.0;

/// A warning if the limit is far off the sums of today's spends, of the caps, and of the spends over
/// which the curves bend: all of those that are known, and all on the same side.
pub(super) fn warn_of_scale(activities: &[Activity], sense: Sense, limit: f64) -> Option<Note> {
    // A spend that is not known makes the sum NaN, which is no sum.
    let [current, caps, reach] = block_sums(activities.len(), |i| {
        let activity = &activities[i];
        [
            activity.current.unwrap_or(f64::NAN),
            activity.cap,
            reach_of_curve(&activity.curve).unwrap_or(f64::NAN),
        ]
    });
    let known = [
        ("today's spends", current),
        ("the caps", caps),
        ("the spends over which the curves bend", reach),
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
        "the {name} of {} is {side} {what}, {} together: are both in the same unit?",
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
