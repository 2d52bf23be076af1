//! What was read, as plain text.

use super::tables::in_millions;
use super::{Page, TextOptions};
use crate::numeric::figures::{self, ColumnFormat};
use crate::report::layout::{Side, Table};
use crate::report::understood::{ReadActivity, Understood};

/// Digits of a spend in the table.
const SPEND_DIGITS: usize = 5;

/// Digits of a curve's parameter: enough to recognise what stands in the file.
const PARAMETER_DIGITS: usize = 6;

/// What was read, for people.
pub fn render_understood(understood: &Understood, options: &TextOptions) -> String {
    let mut page = Page::new(options);
    if let Some(title) = &understood.title {
        page.paragraph(title, 0);
        page.blank();
    }
    page.headline(&understood.headline);
    if let Some(no_plan) = &understood.no_plan {
        page.paragraph(&no_plan.headline, 0);
        page.paragraph(&no_plan.mend, 0);
    }
    page.section("Curves");
    let mut families = Table::new(&[("family", Side::Left), ("activities", Side::Right)]);
    for (family, count) in &understood.families {
        families.row(vec![
            family.name().to_owned(),
            figures::fixed(*count as f64, 0),
        ]);
    }
    page.table(&families);
    page.section("Numbers");
    page.facts(&understood.facts);
    if !understood.listed.is_empty() {
        page.section("Activities");
        page.table(&activities_table(&understood.listed));
    }
    page.notes(understood.notes);
    page.made_with(understood.provenance);
    page.out
}

fn activities_table(listed: &[ReadActivity]) -> Table {
    let spends = ColumnFormat::of(
        listed.iter().flat_map(|activity| {
            [
                activity.floor,
                activity.cap,
                activity.current.unwrap_or(0.0),
            ]
        }),
        SPEND_DIGITS,
    );
    let mut table = Table::new(&[
        ("activity", Side::Left),
        (&in_millions("floor", &spends), Side::Right),
        (&in_millions("cap", &spends), Side::Right),
        (&in_millions("today", &spends), Side::Right),
        ("curve", Side::Left),
    ]);
    let blank = || "–".to_owned();
    for activity in listed {
        table.row(vec![
            activity.activity.to_owned(),
            spends.cell(activity.floor),
            if activity.cap.is_finite() {
                spends.cell(activity.cap)
            } else {
                blank()
            },
            activity
                .current
                .map_or_else(blank, |current| spends.cell(current)),
            activity.family.name().to_owned(),
        ]);
        let parameters: Vec<String> = activity
            .parameters
            .iter()
            .map(|(parameter, value)| {
                format!("{parameter} {}", figures::figure(value, PARAMETER_DIGITS))
            })
            .chain(activity.knots.map(|knots| format!("{knots} knots")))
            .collect();
        table.line_below(parameters.join(", "));
    }
    table
}
