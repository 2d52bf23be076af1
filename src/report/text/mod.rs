//! The report as plain text for a terminal or a file.

mod tables;
mod understood;
mod words;

pub use understood::render_understood;

use super::build::{Provenance, Report, Summary};
use super::comparison::{Split, SplitOutcome};
use super::layout::{Table, wrapped};
use super::price::Fact;
use tables::{activities_table, comparison_table};
use words::{caption, remark};

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
        page.item(extrapolation);
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
    if !report.is_proven() {
        page.item("These prices hold only if the plan is the best, which is not proven.");
    }
    page.facts(&report.price);

    page.section("Beside other splits");
    page.comparison(report);

    page.section("Proof");
    page.paragraph(&report.summary.certificate, INDENT);
    if options.proof || !report.is_proven() {
        page.blank();
        page.facts(&report.proof);
    }

    page.notes(report.notes);
    page.made_with(report.provenance);
    page.blank();
    page.paragraph(report.caution, 0);
    page.out
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

    fn notes(&mut self, notes: &[String]) {
        if !notes.is_empty() {
            self.section("Notes");
        }
        for note in notes {
            self.item(note);
        }
    }

    fn made_with(&mut self, provenance: &Provenance) {
        self.section("Made with");
        let command = format!("isomargin {}: {}", provenance.version, provenance.command);
        self.item(&command);
        for input in &provenance.inputs {
            self.item(&format!("{}, SHA-256", input.path));
            self.paragraph(&input.sha256, INDENT + INDENT);
        }
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
