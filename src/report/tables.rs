//! The report as CSV tables. Numbers are written so that they read back to the same bits.

use std::io::{self, Write};

use rayon::prelude::*;

use super::activities::{ActivityRow, ActivityRows};
use super::build::Report;
use super::json::verdict_name;
use crate::certificate::LpCheck;

/// Rows that one thread formats at a time: a third of a megabyte of text, which a second-level
/// cache holds.
const ROWS_A_BLOCK: usize = 4096;

/// Blocks that are formatted while as many are written.
const BLOCKS_A_WAVE: usize = 8;

/// Writes the table of spends: `activity,spend,return,marginal_return,position`.
///
/// Blocks of rows are formatted in parallel and written in their order, the next ones while the
/// last are on their way, so a million rows take little memory.
///
/// # Errors
/// What the writer says.
pub fn render_allocation(rows: &ActivityRows, out: &mut (impl Write + Send)) -> io::Result<()> {
    out.write_all(b"activity,spend,return,marginal_return,position\n")?;
    let fill = |wave: &mut [Vec<u8>], first_row: usize| {
        wave.par_iter_mut().enumerate().for_each(|(block, text)| {
            let start = first_row + block * ROWS_A_BLOCK;
            text.clear();
            for i in start..rows.len().min(start + ROWS_A_BLOCK) {
                push_row(text, &rows.row(i));
            }
        });
    };
    let mut write = |wave: &[Vec<u8>]| wave.iter().try_for_each(|text| out.write_all(text));
    let mut ready = vec![Vec::new(); BLOCKS_A_WAVE];
    let mut next = ready.clone();
    let wave_rows = ROWS_A_BLOCK * BLOCKS_A_WAVE;
    for first_row in (0..rows.len()).step_by(wave_rows) {
        let ((), written) = rayon::join(|| fill(&mut next, first_row), || write(&ready));
        written?;
        std::mem::swap(&mut ready, &mut next);
    }
    write(&ready)
}

fn push_row(text: &mut Vec<u8>, row: &ActivityRow) {
    push_text(text, row.activity);
    for number in [row.spend, row.return_, row.marginal_return] {
        text.push(b',');
        push_number(text, number);
    }
    text.push(b',');
    text.extend_from_slice(row.position.name().as_bytes());
    text.push(b'\n');
}

/// A cell of text, in quotes where RFC 4180 asks for them.
fn push_text(text: &mut Vec<u8>, cell: &str) {
    let bytes = cell.as_bytes();
    let special = |byte: &u8| matches!(byte, b',' | b'"' | b'\n' | b'\r');
    if !bytes.iter().any(special) {
        text.extend_from_slice(bytes);
        return;
    }
    text.push(b'"');
    for &byte in bytes {
        if byte == b'"' {
            text.push(b'"');
        }
        text.push(byte);
    }
    text.push(b'"');
}

/// The shortest decimal that reads back to the same bits; whole numbers without a point.
fn push_number(text: &mut Vec<u8>, number: f64) {
    if !number.is_finite() {
        text.extend_from_slice(match number {
            _ if number.is_nan() => b"",
            _ if number > 0.0 => b"inf",
            _ => b"-inf",
        });
        return;
    }
    let mut buffer = zmij::Buffer::new();
    let written = buffer.format_finite(number);
    text.extend_from_slice(written.strip_suffix(".0").unwrap_or(written).as_bytes());
}

fn number(value: f64) -> String {
    let mut text = Vec::new();
    push_number(&mut text, value);
    String::from_utf8(text).unwrap_or_default()
}

/// A number, or a blank cell where there is none.
fn optional(value: Option<f64>) -> String {
    value.map(number).unwrap_or_default()
}

/// Writes the table of activities with all that the report knows of each.
///
/// # Errors
/// What the writer says.
pub fn render_activities_table(report: &Report, out: &mut impl Write) -> io::Result<()> {
    let mut table = csv::Writer::from_writer(out);
    table.write_record([
        "activity",
        "spend",
        "current",
        "change",
        "return",
        "marginal_return",
        "position",
        "why",
        "floor",
        "cap",
        "extrapolated",
        "exact_spend",
    ])?;
    for i in 0..report.rows.len() {
        let row = report.rows.row(i);
        let activity = report.rows.activity(i);
        table.write_record([
            row.activity,
            &number(row.spend),
            &optional(activity.current),
            &optional(report.rows.change(i)),
            &number(row.return_),
            &number(row.marginal_return),
            row.position.name(),
            &report.rows.why(i).to_string(),
            &number(activity.floor),
            &optional(Some(activity.cap).filter(|cap| cap.is_finite())),
            yes_or_no(report.rows.is_extrapolated(i)),
            &number(report.solution.spends[i]),
        ])?;
    }
    table.flush()
}

fn yes_or_no(holds: bool) -> &'static str {
    if holds { "yes" } else { "no" }
}

/// Writes the table of constraints.
///
/// # Errors
/// What the writer says.
pub fn render_constraints_table(report: &Report, out: &mut impl Write) -> io::Result<()> {
    let mut table = csv::Writer::from_writer(out);
    table.write_record([
        "constraint",
        "sense",
        "limit",
        "used",
        "slack",
        "binding",
        "shadow_price",
        "price_of_one_more",
        "price_of_one_less",
        "holds_from",
        "holds_to",
    ])?;
    for row in &report.constraints {
        let price = row.price;
        table.write_record([
            row.constraint.name.as_str(),
            row.constraint.sense.sign(),
            &number(row.constraint.limit),
            &number(price.used),
            &number(price.slack),
            yes_or_no(price.binding),
            &number(price.shadow_price),
            &optional(price.one_more),
            &optional(price.one_less),
            &optional(price.holds_from),
            &optional(price.holds_to),
        ])?;
    }
    table.flush()
}

/// Writes the table of other splits.
///
/// # Errors
/// What the writer says.
pub fn render_comparison_table(report: &Report, out: &mut impl Write) -> io::Result<()> {
    let mut table = csv::Writer::from_writer(out);
    table.write_record([
        "split",
        "used",
        "total",
        "gain",
        "outside_bounds",
        "not_made",
    ])?;
    for split in &report.comparison {
        let made = split.outcome.ok();
        table.write_record([
            split.kind.key(),
            &optional(made.map(|outcome| outcome.used)),
            &optional(made.map(|outcome| outcome.total)),
            &optional(made.map(|outcome| outcome.gain)),
            &made
                .map(|outcome| outcome.outside_bounds.to_string())
                .unwrap_or_default(),
            split
                .outcome
                .err()
                .map(|fault| fault.name())
                .unwrap_or_default(),
        ])?;
    }
    table.flush()
}

/// Writes the certificate, one row a number.
///
/// # Errors
/// What the writer says.
pub fn render_certificate_table(report: &Report, out: &mut impl Write) -> io::Result<()> {
    let certificate = report.certificate;
    let bracket = match &certificate.lp {
        LpCheck::Bracketed(bracket) => Some(bracket),
        LpCheck::LeftOut { .. } | LpCheck::Failed { .. } => None,
    };
    let mut table = csv::Writer::from_writer(out);
    table.write_record(["name", "value"])?;
    table.write_record(["verdict", verdict_name(certificate.verdict)])?;
    let numbers = [
        ("lower_bound", Some(certificate.lower_bound)),
        ("upper_bound", Some(certificate.upper_bound)),
        ("gap", Some(certificate.gap)),
        ("primal_residual", Some(certificate.primal_residual)),
        (
            "stationarity_residual",
            Some(certificate.stationarity_residual),
        ),
        (
            "complementarity_residual",
            Some(certificate.complementarity_residual),
        ),
        ("lp_lower", bracket.map(|bracket| bracket.lower)),
        ("lp_upper", bracket.map(|bracket| bracket.upper)),
    ];
    for (name, value) in numbers {
        table.write_record([name, &optional(value)])?;
    }
    for price in bracket.iter().flat_map(|bracket| &bracket.prices) {
        table.write_record(["lp_price", &number(*price)])?;
    }
    table.flush()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_read_back_to_the_same_bits() {
        for value in [
            0.1,
            24e6,
            1.0 / 3.0,
            5e-324,
            1.7976931348623157e308,
            -0.0,
            1e22,
        ] {
            assert_eq!(
                number(value).parse::<f64>().map(f64::to_bits),
                Ok(value.to_bits())
            );
        }
        assert_eq!(number(24e6), "24000000");
        assert_eq!(number(f64::INFINITY), "inf");
    }

    #[test]
    fn names_with_commas_and_quotes_are_quoted() {
        let mut text = Vec::new();
        push_text(&mut text, "Pumps, \"large\"");
        assert_eq!(text, b"\"Pumps, \"\"large\"\"\"");
    }
}
