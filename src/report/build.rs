//! From a solved and certified plan to the report, once.

use super::activities::ActivityRows;
use super::comparison::{NoSplit, Planned, Split, compare_splits};
use super::headline::{HeadlineFacts, headline, step_of};
use super::price::{ConstraintRow, Fact, price_facts};
use super::proof::{certificate_facts, certificate_line};
use super::reasons::{extrapolation, reasons};
use super::rounding::Rounding;
use super::wording::Units;
use crate::certificate::{Certificate, Verdict};
use crate::model::{Aim, Labels, Problem, Solution};
use crate::numeric::block_sums;
use crate::sensitivity::ConstraintPrice;

/// Activities up to which the text shows every one.
const SHOWN_WHOLE: usize = 60;

/// Activities that the text shows of a larger plan, those with the largest spends.
const SHOWN_OF_MANY: usize = 40;

/// What every report ends with: a plan can hurt someone.
const CAUTION: &str = "For decision support only: the curves are estimates, and local rules and \
                       licensed practice decide.";

/// A file that the plan was read from.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Input {
    /// Its path, as it was given.
    pub path: String,
    /// SHA-256 of its bytes, 64 hexadecimal digits.
    pub sha256: String,
}

/// Where a report comes from.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Provenance {
    /// Version of this program.
    pub version: String,
    /// The command line, without the program's own path.
    pub command: String,
    /// Every file that was read.
    pub inputs: Vec<Input>,
}

/// All that a report is built from.
#[derive(Debug, Clone, Copy)]
pub struct Findings<'a> {
    /// Words and units.
    pub labels: &'a Labels,
    /// The plan as mathematics.
    pub problem: &'a Problem,
    /// The exact plan.
    pub solution: &'a Solution,
    /// Its proof.
    pub certificate: &'a Certificate,
    /// The price of every constraint, in their order.
    pub prices: &'a [ConstraintPrice],
    /// Rounded spends, to be shown instead of the exact ones.
    pub rounding: Option<&'a Rounding>,
    /// What was noticed on the way, one sentence each.
    pub notes: &'a [String],
    /// Where it all comes from.
    pub provenance: &'a Provenance,
}

/// The finding in a few sentences, quick to make for a plan of any size.
#[derive(Debug, Clone, PartialEq)]
pub struct Summary {
    /// The finding in one sentence.
    pub headline: String,
    /// What rounding costs, where spends were rounded.
    pub rounding: Option<String>,
    /// The certificate in one or two sentences.
    pub certificate: String,
    /// Total of the spends that are shown, in the common unit.
    pub total: f64,
}

/// What the activities that a text leaves out come to.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Rest {
    /// How many.
    pub count: usize,
    /// Their spend together.
    pub spend: f64,
    /// Their change from today together; `None` where today's spend is not known for all.
    pub change: Option<f64>,
    /// Their weighted return together, in the common unit.
    pub total: f64,
}

/// The report.
#[derive(Debug, Clone)]
pub struct Report<'a> {
    /// Title and period of the plan.
    pub title: Option<String>,
    /// Units of its numbers.
    pub units: Units<'a>,
    /// What is done with the total.
    pub aim: Aim,
    /// The finding in short.
    pub summary: Summary,
    /// The table of activities, all of them.
    pub rows: ActivityRows<'a>,
    /// The activities that a text shows, by index, in its order.
    pub shown: Vec<usize>,
    /// The others together.
    pub rest: Option<Rest>,
    /// All activities together.
    pub all: Rest,
    /// Whether returns are in one unit, so that they add up to the total.
    pub one_unit: bool,
    /// Amount of spend that marginal returns are shown for in the text.
    pub step: f64,
    /// Marginal return times that amount, for every activity shown.
    pub shown_margins: Vec<f64>,
    /// Why the spends are what they are, in sentences.
    pub reasons: Vec<String>,
    /// Spends outside the range that their curve was fitted on, in a sentence.
    pub extrapolation: Option<String>,
    /// The constraints, what they use and what they are worth.
    pub constraints: Vec<ConstraintRow<'a>>,
    /// The price of the first constraint, in sentences.
    pub price: Vec<Fact>,
    /// Other splits beside the plan.
    pub comparison: Vec<Split>,
    /// The proof.
    pub certificate: &'a Certificate,
    /// The numbers of the proof, worded.
    pub proof: Vec<Fact>,
    /// The spends were rounded.
    pub rounding: Option<&'a Rounding>,
    /// The exact plan.
    pub solution: &'a Solution,
    /// What was noticed on the way.
    pub notes: &'a [String],
    /// Where it all comes from.
    pub provenance: &'a Provenance,
    /// What must be said of every plan.
    pub caution: &'static str,
}

impl Summary {
    /// The finding in short.
    pub fn build(findings: &Findings) -> Self {
        let problem = findings.problem;
        let exact_total = match findings.rounding {
            Some(rounding) => rounding.exact_total,
            None => findings.certificate.total,
        };
        let total = findings
            .rounding
            .map_or(exact_total, |rounded| rounded.total);
        let units = Units::of(findings.labels);
        let headline = match findings.prices.first() {
            Some(price) => headline(&HeadlineFacts {
                units,
                problem,
                total,
                exact_total,
                price,
                verdict: findings.certificate.verdict,
            }),
            None => String::new(),
        };
        Self {
            headline,
            rounding: findings
                .rounding
                .map(|rounding| rounding.in_words(problem, units)),
            certificate: certificate_line(problem.aim(), findings.certificate, units),
            total,
        }
    }
}

impl<'a> Report<'a> {
    /// Builds the whole report.
    pub fn build(findings: &Findings<'a>) -> Self {
        let problem = findings.problem;
        let units = Units::of(findings.labels);
        let spends = match findings.rounding {
            Some(rounding) => &rounding.spends,
            None => &findings.solution.spends,
        };
        let rows = ActivityRows::new(problem, findings.solution, spends);
        let shown = shown_of(spends);
        let step = problem
            .constraints()
            .first()
            .map_or(1.0, |first| step_of(first.limit));
        let summary = Summary::build(findings);
        let price = match findings.prices.first() {
            Some(price) => price_facts(problem, 0, price, units),
            None => Vec::new(),
        };
        Self {
            title: title_of(findings.labels),
            units,
            aim: problem.aim(),
            rest: rest_of(problem, spends, &shown),
            all: together(problem, spends, |_| true),
            one_unit: problem
                .activities()
                .iter()
                .all(|activity| activity.weight == 1.0),
            step,
            shown_margins: shown
                .iter()
                .map(|&i| rows.row(i).marginal_return * step)
                .collect(),
            shown,
            reasons: reasons(&rows, units),
            extrapolation: extrapolation(&rows, units),
            constraints: problem
                .constraints()
                .iter()
                .zip(findings.prices)
                .map(|(constraint, price)| ConstraintRow { constraint, price })
                .collect(),
            price,
            comparison: compare_splits(
                problem,
                Planned {
                    total: summary.total,
                    used: findings.prices.first().map_or(0.0, |price| price.used),
                },
            ),
            certificate: findings.certificate,
            proof: certificate_facts(
                findings.certificate,
                &findings.solution.shadow_prices,
                units,
            ),
            rounding: findings.rounding,
            solution: findings.solution,
            notes: findings.notes,
            provenance: findings.provenance,
            caution: CAUTION,
            summary,
            rows,
        }
    }

    /// Whether the certificate holds.
    pub fn is_proven(&self) -> bool {
        self.certificate.verdict == Verdict::Proven
    }

    /// Whether today's spend is known for any activity.
    pub fn knows_today(&self) -> bool {
        self.comparison
            .iter()
            .all(|split| split.outcome != Err(NoSplit::CurrentUnknown))
    }
}

/// Title and period of a plan, as far as they are known.
pub(super) fn title_of(labels: &Labels) -> Option<String> {
    match (&labels.title, &labels.period) {
        (Some(title), Some(period)) => Some(format!("{title}, {period}")),
        (Some(title), None) => Some(title.clone()),
        (None, period) => period.clone(),
    }
}

/// All in the order of the file, or the largest spends first.
fn shown_of(spends: &[f64]) -> Vec<usize> {
    let mut order: Vec<usize> = (0..spends.len()).collect();
    if spends.len() > SHOWN_WHOLE {
        let by_spend = |a: &usize, b: &usize| spends[*b].total_cmp(&spends[*a]).then(a.cmp(b));
        order.select_nth_unstable_by(SHOWN_OF_MANY, by_spend);
        order.truncate(SHOWN_OF_MANY);
        order.sort_unstable_by(by_spend);
    }
    order
}

fn rest_of(problem: &Problem, spends: &[f64], shown: &[usize]) -> Option<Rest> {
    let left_out = spends.len() - shown.len();
    let mut is_shown = vec![false; spends.len()];
    for &i in shown {
        is_shown[i] = true;
    }
    (left_out > 0).then(|| together(problem, spends, |i| !is_shown[i]))
}

fn together(problem: &Problem, spends: &[f64], counts: impl Fn(usize) -> bool + Sync) -> Rest {
    let [count, spend, known, current, total] = block_sums(spends.len(), |i| {
        if !counts(i) {
            return [0.0; 5];
        }
        let activity = &problem.activities()[i];
        let worth = match activity.weight {
            0.0 => 0.0,
            weight => weight * problem.return_at(i, spends[i]),
        };
        let known = f64::from(u8::from(activity.current.is_some()));
        [
            1.0,
            spends[i],
            known,
            activity.current.unwrap_or(0.0),
            worth,
        ]
    });
    Rest {
        count: count as usize,
        spend,
        change: (known == count).then_some(spend - current),
        total,
    }
}
