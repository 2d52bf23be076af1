//! The report as plain text for a terminal or a file.

use super::build::{Report, Rest, Summary};
use super::comparison::{NoSplit, Split, SplitOutcome};
use super::layout::{Side, Table, wrapped};
use super::price::Fact;
use crate::model::Aim;
use crate::numeric::figures::{self, ColumnFormat, TABLE_DIGITS};

/// Digits of a spend in the table.
const SPEND_DIGITS: usize = 5;

/// Indent of a section's body.
const INDENT: usize = 2;

/// How the text is laid out.
#[derive(Debug, Clone, Copy)]
pub struct TextOptions {
    /// Columns of the terminal.
    pub width: usize,
    /// Whether the headline and the section names may be bold.
    pub bold: bool,
    /// Whether the numbers of the certificate are shown. They always are where it does not hold.
    pub proof: bool,
}

/// The finding in a few lines.
pub fn render_summary(summary: &Summary, options: &TextOptions) -> String {
    let mut page = Page::new(options);
    page.headline(&summary.headline);
    if let Some(rounding) = &summary.rounding {
        page.paragraph(rounding, 0);
    }
    page.paragraph(&summary.certificate, 0);
    page.out
}

/// The whole report.
pub fn render_text(report: &Report, options: &TextOptions) -> String {
    let mut page = Page::new(options);
    if let Some(title) = &report.title {
        page.paragraph(title, 0);
        page.blank();
    }
    page.headline(&report.summary.headline);
    if let Some(rounding) = &report.summary.rounding {
        page.paragraph(rounding, 0);
    }

    page.section("The plan");
    page.paragraph(&caption(report), INDENT);
    page.blank();
    page.table(&activities_table(report));
    if let Some(extrapolation) = &report.extrapolation {
        page.blank();
        page.paragraph(extrapolation, INDENT);
    }
    if !report.reasons.is_empty() {
        page.section("Why");
        for reason in &report.reasons {
            page.item(reason);
        }
    }

    page.section(match report.constraints.first() {
        Some(row) if row.constraint.name == "budget" => "What the budget is worth",
        Some(row) if row.constraint.name == "requirement" => "What the requirement costs",
        _ => "What the limit is worth",
    });
    page.facts(&report.price);

    page.section("Beside other splits");
    page.comparison(report);

    page.section("Proof");
    page.paragraph(&report.summary.certificate, INDENT);
    if options.proof || !report.is_proven() {
        page.blank();
        page.facts(&report.proof);
    }

    if !report.notes.is_empty() {
        page.section("Notes");
        for note in report.notes {
            page.item(note);
        }
    }

    page.section("Made by");
    let provenance = report.provenance;
    page.paragraph(
        &format!("isomargin {}: {}", provenance.version, provenance.command),
        INDENT,
    );
    for input in &provenance.inputs {
        page.paragraph(&format!("{}, SHA-256", input.path), INDENT);
        page.paragraph(&input.sha256, INDENT + INDENT);
    }
    page.blank();
    page.paragraph(report.caution, 0);
    page.out
}

fn caption(report: &Report) -> String {
    let verb = match report.aim {
        Aim::Maximise => "adds",
        Aim::Minimise => "costs",
    };
    let mut said = Vec::new();
    if let Some(money) = report.units.money_name() {
        said.push(format!("Spend in {money}."));
    }
    if let (Some(total), true) = (report.units.total_name(), report.one_unit) {
        said.push(format!("Return in {total}."));
    }
    if !report.one_unit {
        said.push("Returns are each in their own unit; the total weighs them.".to_owned());
    }
    said.push(format!(
        "Margin: what the next {} {verb}.",
        report.units.money(report.step)
    ));
    let shares = report
        .shown
        .iter()
        .any(|&i| report.rows.why(i).short().ends_with('×'));
    if shares {
        said.push(format!(
            "0.80×: the next unit {} 0.80 times the price.",
            match report.aim {
                Aim::Maximise => "would earn",
                Aim::Minimise => "would cost",
            }
        ));
    }
    said.join(" ")
}

fn activities_table(report: &Report) -> Table {
    let rows = report.rows;
    let shown = || report.shown.iter().map(|&i| rows.row(i));
    let spends = ColumnFormat::of(
        shown().map(|row| row.spend).chain([report.all.spend]),
        SPEND_DIGITS,
    );
    let returns = ColumnFormat::of(shown().map(|row| row.return_), TABLE_DIGITS);
    let margins = ColumnFormat::of(report.shown_margins.iter().copied(), TABLE_DIGITS);
    let in_millions = |name: &str, format: &ColumnFormat| {
        if format.is_in_millions() {
            format!("{name}, million")
        } else {
            name.to_owned()
        }
    };
    let (spend_name, return_name) = (
        in_millions("spend", &spends),
        in_millions("return", &returns),
    );
    let knows_today = report.knows_today();
    let mut columns = vec![("activity", Side::Left), (spend_name.as_str(), Side::Right)];
    if knows_today {
        columns.push(("change", Side::Right));
    }
    columns.extend([
        (return_name.as_str(), Side::Right),
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

/// The text as it grows.
struct Page<'o> {
    options: &'o TextOptions,
    out: String,
}

impl<'o> Page<'o> {
    fn new(options: &'o TextOptions) -> Self {
        Self {
            options,
            out: String::new(),
        }
    }

    fn blank(&mut self) {
        self.out.push('\n');
    }

    fn bold(&mut self, text: &str) {
        if self.options.bold {
            self.out.push_str(&format!("\x1b[1m{text}\x1b[0m\n"));
        } else {
            self.out.push_str(&format!("{text}\n"));
        }
    }

    fn headline(&mut self, text: &str) {
        let lines = wrapped(text, self.options.width, 0, 0);
        self.bold(&lines);
    }

    fn section(&mut self, name: &str) {
        self.blank();
        self.bold(name);
    }

    fn paragraph(&mut self, text: &str, indent: usize) {
        self.out.push_str(&" ".repeat(indent));
        self.out
            .push_str(&wrapped(text, self.options.width, indent, indent));
        self.blank();
    }

    fn item(&mut self, text: &str) {
        self.out.push_str(&" ".repeat(INDENT));
        self.out
            .push_str(&wrapped(text, self.options.width, INDENT, INDENT + INDENT));
        self.blank();
    }

    fn table(&mut self, table: &Table) {
        let lines = table.render(self.options.width, INDENT);
        self.out.push_str(&lines);
    }

    fn facts(&mut self, facts: &[Fact]) {
        let widest = facts.iter().map(|fact| fact.about.chars().count()).max();
        let start = INDENT + widest.unwrap_or_default() + INDENT;
        for fact in facts {
            let space = start - INDENT - fact.about.chars().count();
            self.out.push_str(&" ".repeat(INDENT));
            self.out.push_str(&fact.about);
            self.out.push_str(&" ".repeat(space));
            self.out
                .push_str(&wrapped(&fact.says, self.options.width, start, start));
            self.blank();
        }
    }

    fn comparison(&mut self, report: &Report) {
        let made = |split: &Split| split.outcome.ok();
        let outcomes: Vec<SplitOutcome> = report.comparison.iter().filter_map(made).collect();
        if !outcomes.is_empty() {
            let table = comparison_table(report, &outcomes);
            self.table(&table);
        }
        for split in &report.comparison {
            if let Some(remark) = remark(report, split) {
                self.item(&remark);
            }
        }
    }
}

fn comparison_table(report: &Report, outcomes: &[SplitOutcome]) -> Table {
    let (total_name, gain_name) = match report.aim {
        Aim::Maximise => ("return", "the plan brings"),
        Aim::Minimise => ("cost", "the plan saves"),
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
    let mut table = Table::new(&[
        ("split", Side::Left),
        ("uses", Side::Right),
        (total_name, Side::Right),
        (gain_name, Side::Right),
        ("", Side::Right),
    ]);
    for split in &report.comparison {
        let Ok(outcome) = &split.outcome else {
            continue;
        };
        let share = outcome.gain_share.map(figures::percent).unwrap_or_default();
        let gain = match report.aim {
            Aim::Maximise if outcome.gain >= 0.0 => {
                format!("{} more", figures::figure(outcome.gain, TABLE_DIGITS))
            }
            Aim::Maximise => format!("{} less", figures::figure(-outcome.gain, TABLE_DIGITS)),
            Aim::Minimise => figures::figure(outcome.gain, TABLE_DIGITS),
        };
        table.row(vec![
            split.kind.name().to_owned(),
            spends.cell(outcome.used),
            totals.cell(outcome.total),
            gain,
            share,
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

fn remark(report: &Report, split: &Split) -> Option<String> {
    let name = split.kind.name();
    let said = match split.outcome {
        Ok(outcome) if outcome.outside_bounds > 0 => {
            let count = super::wording::activities(outcome.outside_bounds);
            format!("{name} leaves {count} outside the bounds of this plan")
        }
        Ok(outcome) if !outcome.same_limit => format!("{name} does not use the same amount"),
        Ok(_) => return None,
        Err(NoSplit::CurrentUnknown) if split.kind == super::SplitKind::Proportional => {
            return None;
        }
        Err(NoSplit::CurrentUnknown) => "today's spends are not known".to_owned(),
        Err(NoSplit::CurrentIncomplete { missing }) => format!(
            "{name} cannot be valued: today's spend is not known for {}",
            super::wording::activities(missing)
        ),
        Err(NoSplit::CurrentZero) => format!("{name} cannot be made: nothing is spent today"),
        Err(NoSplit::OutOfReach) => {
            format!("{name} cannot meet the same limit within floors and caps")
        }
        Err(NoSplit::NoFiniteTotal) => {
            format!(
                "{name} has no finite {}",
                match report.aim {
                    Aim::Maximise => "return",
                    Aim::Minimise => "cost",
                }
            )
        }
    };
    let mut letters = said.chars();
    let first = letters.next()?.to_uppercase();
    Some(format!("{first}{}.", letters.as_str()))
}
