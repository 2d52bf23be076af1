//! The certificate in one line, and its numbers.

use super::price::Fact;
use super::wording::Units;
use crate::certificate::{Certificate, LpCheck, Verdict};
use crate::model::Aim;
use crate::numeric::figures;

/// Digits of a bound: enough to tell it from the total.
const BOUND_DIGITS: usize = 8;

/// Digits of a residual; its size is what matters.
const RESIDUAL_DIGITS: usize = 2;

/// Relative rounding that a total itself may carry; a smaller gap says no more than this.
const ROUNDING_OF_TOTAL: f64 = 1e-15;

/// The certificate as one or two sentences.
pub(super) fn certificate_line(aim: Aim, certificate: &Certificate, units: Units) -> String {
    let bound = |value: f64| units.total(value, BOUND_DIGITS);
    let gap = if certificate.gap < ROUNDING_OF_TOTAL {
        format!("below {ROUNDING_OF_TOTAL:e}")
    } else {
        figures::figure(certificate.gap, RESIDUAL_DIGITS)
    };
    let verdict = match (certificate.verdict, aim) {
        (Verdict::Proven, Aim::Maximise) => format!(
            "Proven: no split within these limits can bring more than {} (relative gap {gap}).",
            bound(certificate.upper_bound)
        ),
        (Verdict::Proven, Aim::Minimise) => format!(
            "Proven: no split within these limits can cost less than {} (relative gap {gap}).",
            bound(certificate.lower_bound)
        ),
        (Verdict::NotProven, _) => format!(
            "Not proven: the best total lies between {} and {} (relative gap {gap}).",
            figures::figure(certificate.lower_bound, BOUND_DIGITS),
            bound(certificate.upper_bound)
        ),
    };
    format!("{verdict} {}", cross_check_line(&certificate.lp, units))
}

fn cross_check_line(lp: &LpCheck, units: Units) -> String {
    match lp {
        LpCheck::Bracketed(bracket) => {
            let lower = figures::figure(bracket.lower, BOUND_DIGITS);
            let upper = figures::figure(bracket.upper, BOUND_DIGITS);
            if !bracket.encloses {
                let upper = units.total(bracket.upper, BOUND_DIGITS);
                format!(
                    "Linear programming, on its own, contradicts it: it puts the best between \
                     {lower} and {upper}."
                )
            } else if lower == upper {
                "Linear programming, on its own, comes to the same.".to_owned()
            } else {
                let upper = units.total(bracket.upper, BOUND_DIGITS);
                format!(
                    "Linear programming, on its own, puts the best between {lower} and {upper}."
                )
            }
        }
        LpCheck::LeftOut { limit, .. } => format!(
            "The cross-check by linear programming is left out above {} activities and \
             straight pieces (--cross-check runs it).",
            figures::fixed(*limit as f64, 0)
        ),
        LpCheck::Failed { reason } => {
            format!(
                "The cross-check by linear programming could not be made, and says nothing for \
                 or against the plan: {reason}."
            )
        }
    }
}

/// Every number of the certificate, for those who want to check it.
pub(super) fn certificate_facts(
    certificate: &Certificate,
    shadow_prices: &[f64],
    units: Units,
) -> Vec<Fact> {
    let bound = |value: f64| units.total(value, 15);
    let residual = |value: f64| figures::figure(value, RESIDUAL_DIGITS);
    let mut facts = vec![
        Fact::new("Lower bound", bound(certificate.lower_bound)),
        Fact::new("Upper bound", bound(certificate.upper_bound)),
        Fact::new(
            "Gap",
            format!("{} of the plan's scale", residual(certificate.gap)),
        ),
        Fact::new(
            "Limits and bounds",
            format!(
                "broken by at most {}",
                residual(certificate.primal_residual)
            ),
        ),
        Fact::new(
            "Equal margins",
            format!(
                "missed by at most {} of the price",
                residual(certificate.stationarity_residual)
            ),
        ),
        Fact::new(
            "Price × slack",
            format!(
                "at most {} of the total",
                residual(certificate.complementarity_residual)
            ),
        ),
    ];
    let written = |prices: &[f64]| {
        let prices: Vec<String> = prices
            .iter()
            .map(|price| figures::figure(*price, 12))
            .collect();
        prices.join(", ")
    };
    facts.push(Fact::new("Shadow price", written(shadow_prices)));
    if let LpCheck::Bracketed(bracket) = &certificate.lp {
        let rounds = match bracket.rounds {
            1 => "1 round".to_owned(),
            rounds => format!("{rounds} rounds"),
        };
        facts.push(Fact::new(
            "LP bracket",
            format!(
                "{} to {}, after {rounds} of refinement",
                figures::figure(bracket.lower, 15),
                bound(bracket.upper)
            ),
        ));
        facts.push(Fact::new("LP price", written(&bracket.prices)));
    }
    facts
}
