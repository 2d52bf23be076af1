//! The report as one JSON document, schema 1.

use std::io::{self, Write};

use serde::Serialize;
use serde::ser::{SerializeSeq, Serializer};

use super::activities::ActivityRows;
use super::build::Report;
use super::comparison::{NoSplit, Split};
use super::price::ConstraintRow;
use crate::certificate::{LpCheck, Verdict};

/// Version of the document's names.
pub(super) const SCHEMA: u32 = 1;

/// Writes the document, with a line end. A number without end is `null`.
///
/// # Errors
/// What the writer says.
pub fn render_json(report: &Report, out: &mut impl Write) -> io::Result<()> {
    serde_json::to_writer_pretty(&mut *out, &Document::of(report))?;
    out.write_all(b"\n")
}

#[derive(Serialize)]
struct Document<'a> {
    schema: u32,
    version: &'a str,
    status: &'static str,
    aim: &'static str,
    total: f64,
    headline: &'a str,
    title: Option<&'a str>,
    money: Option<&'a str>,
    return_unit: Option<&'a str>,
    #[serde(serialize_with = "each_activity")]
    activities: ActivityRows<'a>,
    constraints: Vec<ConstraintItem<'a>>,
    certificate: CertificateItem<'a>,
    comparison: Vec<SplitItem>,
    rounding: Option<RoundingItem>,
    notes: &'a [String],
    provenance: ProvenanceItem<'a>,
    caution: &'a str,
}

#[derive(Serialize)]
struct ActivityItem<'a> {
    activity: &'a str,
    spend: f64,
    #[serde(rename = "return")]
    return_: f64,
    marginal_return: f64,
    position: &'static str,
    why: String,
    current: Option<f64>,
    change: Option<f64>,
    extrapolated: bool,
}

#[derive(Serialize)]
struct ConstraintItem<'a> {
    constraint: &'a str,
    sense: &'static str,
    limit: f64,
    used: f64,
    slack: f64,
    binding: bool,
    shadow_price: f64,
    price_of_one_more: Option<f64>,
    price_of_one_less: Option<f64>,
    holds_from: Option<f64>,
    holds_to: Option<f64>,
}

#[derive(Serialize)]
struct CertificateItem<'a> {
    verdict: &'static str,
    lower_bound: f64,
    upper_bound: f64,
    gap: f64,
    primal_residual: f64,
    stationarity_residual: f64,
    complementarity_residual: f64,
    lp: &'static str,
    lp_lower: Option<f64>,
    lp_upper: Option<f64>,
    lp_prices: Option<&'a [f64]>,
}

#[derive(Serialize)]
struct SplitItem {
    split: &'static str,
    used: Option<f64>,
    total: Option<f64>,
    gain: Option<f64>,
    outside_bounds: Option<usize>,
    not_made: Option<&'static str>,
}

#[derive(Serialize)]
struct RoundingItem {
    step: f64,
    exact_total: f64,
    cost: f64,
}

#[derive(Serialize)]
struct ProvenanceItem<'a> {
    command: &'a str,
    inputs: Vec<InputItem<'a>>,
}

#[derive(Serialize)]
struct InputItem<'a> {
    path: &'a str,
    sha256: &'a str,
}

impl<'a> Document<'a> {
    fn of(report: &'a Report) -> Self {
        Self {
            schema: SCHEMA,
            version: &report.provenance.version,
            status: verdict_name(report.certificate.verdict),
            aim: report.aim.name(),
            total: report.summary.total,
            headline: &report.summary.headline,
            title: report.title.as_deref(),
            money: report.units.money_name(),
            return_unit: report.units.total_name(),
            activities: report.rows,
            constraints: report.constraints.iter().map(constraint_item).collect(),
            certificate: certificate_item(report),
            comparison: report.comparison.iter().map(split_item).collect(),
            rounding: report.rounding.map(|rounding| RoundingItem {
                step: rounding.step,
                exact_total: rounding.exact_total,
                cost: rounding.cost(),
            }),
            notes: report.notes,
            provenance: ProvenanceItem {
                command: &report.provenance.command,
                inputs: report
                    .provenance
                    .inputs
                    .iter()
                    .map(|input| InputItem {
                        path: &input.path,
                        sha256: &input.sha256,
                    })
                    .collect(),
            },
            caution: report.caution,
        }
    }
}

pub(super) fn verdict_name(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Proven => "proven",
        Verdict::NotProven => "not proven",
    }
}

fn each_activity<S: Serializer>(rows: &ActivityRows, serializer: S) -> Result<S::Ok, S::Error> {
    let mut items = serializer.serialize_seq(Some(rows.len()))?;
    for i in 0..rows.len() {
        let row = rows.row(i);
        items.serialize_element(&ActivityItem {
            activity: row.activity,
            spend: row.spend,
            return_: row.return_,
            marginal_return: row.marginal_return,
            position: row.position.name(),
            why: rows.why(i).to_string(),
            current: rows.activity(i).current,
            change: rows.change(i),
            extrapolated: rows.is_extrapolated(i),
        })?;
    }
    items.end()
}

fn constraint_item<'a>(row: &ConstraintRow<'a>) -> ConstraintItem<'a> {
    ConstraintItem {
        constraint: &row.constraint.name,
        sense: row.constraint.sense.sign(),
        limit: row.constraint.limit,
        used: row.price.used,
        slack: row.price.slack,
        binding: row.price.binding,
        shadow_price: row.price.shadow_price,
        price_of_one_more: row.price.one_more,
        price_of_one_less: row.price.one_less,
        holds_from: row.price.holds_from,
        holds_to: row.price.holds_to,
    }
}

fn certificate_item<'a>(report: &Report<'a>) -> CertificateItem<'a> {
    let certificate = report.certificate;
    let (lp, bracket) = match &certificate.lp {
        LpCheck::Bracketed(bracket) => ("bracketed", Some(bracket)),
        LpCheck::LeftOut { .. } => ("left out", None),
        LpCheck::Failed { .. } => ("failed", None),
    };
    CertificateItem {
        verdict: verdict_name(certificate.verdict),
        lower_bound: certificate.lower_bound,
        upper_bound: certificate.upper_bound,
        gap: certificate.gap,
        primal_residual: certificate.primal_residual,
        stationarity_residual: certificate.stationarity_residual,
        complementarity_residual: certificate.complementarity_residual,
        lp,
        lp_lower: bracket.map(|bracket| bracket.lower),
        lp_upper: bracket.map(|bracket| bracket.upper),
        lp_prices: bracket.map(|bracket| bracket.prices.as_slice()),
    }
}

fn split_item(split: &Split) -> SplitItem {
    let made = split.outcome.ok();
    SplitItem {
        split: split.kind.key(),
        used: made.map(|outcome| outcome.used),
        total: made.map(|outcome| outcome.total),
        gain: made.map(|outcome| outcome.gain),
        outside_bounds: made.map(|outcome| outcome.outside_bounds),
        not_made: split.outcome.err().map(NoSplit::name),
    }
}
