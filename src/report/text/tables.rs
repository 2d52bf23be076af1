//! The tables of activities and of other splits, as text.

use crate::model::Aim;
use crate::numeric::figures::{self, ColumnFormat, TABLE_DIGITS};
use crate::report::build::{Report, Rest};
use crate::report::comparison::SplitOutcome;
use crate::report::layout::{Side, Table};

/// Digits of a spend in the table.
const SPEND_DIGITS: usize = 5;

/// Digits of a share in percent.
const SHARE_DIGITS: usize = 3;

/// What the curves give is called.
pub(super) fn return_name(aim: Aim) -> &'static str {
    match aim {
        Aim::Maximise => "return",
        Aim::Minimise => "cost",
    }
}

/// A column's name, with the millions that it is in.
pub(super) fn in_millions(name: &str, format: &ColumnFormat) -> String {
    if format.is_in_millions() {
        format!("{name}, million")
    } else {
        name.to_owned()
    }
}

/// Every activity that is shown, the others together, and all together.
pub(super) fn activities_table(report: &Report) -> Table {
    let rows = report.rows;
    let shown = || report.shown.iter().map(|&i| rows.row(i));
    let spends = ColumnFormat::of(
        shown().map(|row| row.spend).chain([report.all.spend]),
        SPEND_DIGITS,
    );
    let returns = ColumnFormat::of(shown().map(|row| row.return_), TABLE_DIGITS);
    let margins = ColumnFormat::of(report.shown_margins.iter().copied(), TABLE_DIGITS);
    let (spend_column, return_column) = (
        in_millions("spend", &spends),
        in_millions(return_name(report.aim), &returns),
    );
    let knows_today = report.knows_today();
    let mut columns = vec![
        ("activity", Side::Left),
        (spend_column.as_str(), Side::Right),
    ];
    if knows_today {
        columns.push(("change", Side::Right));
    }
    columns.extend([
        (return_column.as_str(), Side::Right),
        ("margin", Side::Right),
        ("why", Side::Left),
    ]);
    let mut table = Table::new(&columns);
    let change = |change: Option<f64>| match change {
        Some(change) => spends.signed_cell(change),
        None => "–".to_owned(),
    };
    for (&i, margin) in report.shown.iter().zip(&report.shown_margins) {
        let row = rows.row(i);
        let star = if rows.is_extrapolated(i) { " *" } else { "" };
        let mut cells = vec![format!("{}{star}", row.activity), spends.cell(row.spend)];
        if knows_today {
            cells.push(change(rows.change(i)));
        }
        cells.extend([
            returns.cell(row.return_),
            margins.cell(*margin),
            rows.why(i).short(),
        ]);
        table.row(cells);
    }
    let together = |name: String, rest: &Rest| {
        let mut cells = vec![name, spends.cell(rest.spend)];
        if knows_today {
            cells.push(change(rest.change));
        }
        cells.push(if report.one_unit {
            returns.cell(rest.total)
        } else {
            "–".to_owned()
        });
        cells
    };
    if let Some(rest) = &report.rest {
        let count = figures::fixed(rest.count as f64, 0);
        table.row(together(format!("{count} smaller ones"), rest));
    }
    if report.rows.len() > 1 {
        table.rule();
        table.row(together("all".to_owned(), &report.all));
    }
    table
}

/// The splits that could be made, and the plan.
pub(super) fn comparison_table(report: &Report, outcomes: &[SplitOutcome]) -> Table {
    let gain_name = match report.aim {
        Aim::Maximise => "plan adds",
        Aim::Minimise => "plan saves",
    };
    let spends = ColumnFormat::of(
        outcomes
            .iter()
            .map(|outcome| outcome.used)
            .chain([report.all.spend]),
        SPEND_DIGITS,
    );
    let totals = ColumnFormat::of(
        outcomes
            .iter()
            .map(|outcome| outcome.total)
            .chain([report.summary.total]),
        TABLE_DIGITS,
    );
    let gains = if totals.is_in_millions() {
        totals
    } else {
        ColumnFormat::of(outcomes.iter().map(|outcome| outcome.gain), TABLE_DIGITS)
    };
    let mut table = Table::new(&[
        ("split", Side::Left),
        (&in_millions("uses", &spends), Side::Right),
        (&in_millions(return_name(report.aim), &totals), Side::Right),
        (&in_millions(gain_name, &totals), Side::Right),
        ("", Side::Right),
    ]);
    let shares = outcomes.iter().filter_map(|outcome| outcome.gain_share);
    let shares = ColumnFormat::of(shares.map(figures::in_percent), SHARE_DIGITS);
    for split in &report.comparison {
        let Ok(outcome) = &split.outcome else {
            continue;
        };
        table.row(vec![
            split.kind.name().to_owned(),
            spends.cell(outcome.used),
            totals.cell(outcome.total),
            gains.signed_cell(outcome.gain),
            match outcome.gain_share {
                Some(share) => format!("{} %", shares.signed_cell(figures::in_percent(share))),
                None => String::new(),
            },
        ]);
    }
    table.rule();
    let used = report
        .constraints
        .first()
        .map_or(report.all.spend, |row| row.price.used);
    table.row(vec![
        "the plan".to_owned(),
        spends.cell(used),
        totals.cell(report.summary.total),
        String::new(),
        String::new(),
    ]);
    table
}
