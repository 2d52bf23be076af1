//! Faults of the files: all of them, each with its place, what is wrong and the mend.

use std::collections::BTreeMap;
use std::fmt;

use annotate_snippets::{AnnotationKind, Group, Level, Renderer, Snippet};

use super::place::Place;
use crate::numeric::figures::amount;

/// Faults of one kind that are kept with their place; more are only counted.
const KEPT_PER_KIND: usize = 20;

/// The place of a fault that lies in what was asked for.
pub(super) const COMMAND_LINE: &str = "the command line";

/// Columns of the page that faults are rendered for.
const PAGE_WIDTH: usize = 100;

/// One fault.
#[derive(Debug, Clone, PartialEq)]
pub struct Fault {
    /// What kind it is; faults of one kind are counted together.
    pub kind: &'static str,
    /// Where it stands.
    pub place: Place,
    /// What is wrong, in words.
    pub what: String,
    /// What would mend it, in words.
    pub mend: String,
}

/// All faults of a plan's files. There is at least one.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Diagnostics {
    faults: Vec<Fault>,
    counts: BTreeMap<&'static str, usize>,
}

impl Diagnostics {
    /// Adds a fault. The place is only asked for where the fault is kept.
    pub(super) fn add(
        &mut self,
        kind: &'static str,
        place: impl FnOnce() -> Place,
        what: impl Into<String>,
        mend: impl Into<String>,
    ) {
        self.count_one(kind);
        if self.keeps(kind) {
            self.faults.push(Fault {
                kind,
                place: place(),
                what: what.into(),
                mend: mend.into(),
            });
        }
    }

    /// Adds the faults of another file.
    pub(super) fn append(&mut self, other: Self) {
        for fault in other.faults {
            if self.keeps(fault.kind) {
                self.faults.push(fault);
            }
        }
        for (kind, count) in other.counts {
            *self.counts.entry(kind).or_default() += count;
        }
    }

    /// Adds the faults of a part of a table, whose places `locate` finds.
    pub(super) fn append_found(&mut self, found: FoundFaults, locate: impl Fn(Spot) -> Place) {
        for (kind, spot, what, mend) in found.kept {
            if self.keeps(kind) {
                self.faults.push(Fault {
                    kind,
                    place: locate(spot),
                    what,
                    mend,
                });
            }
        }
        for (kind, count) in found.counts {
            *self.counts.entry(kind).or_default() += count;
        }
    }

    /// Whether one more fault of this kind is kept. Words and places of others need not be made.
    pub(super) fn keeps(&self, kind: &str) -> bool {
        let kept = self.faults.iter().filter(|fault| fault.kind == kind);
        kept.count() < KEPT_PER_KIND
    }

    /// Counts a fault that is not kept.
    pub(super) fn count_one(&mut self, kind: &'static str) {
        *self.counts.entry(kind).or_default() += 1;
    }

    /// Whether there is a fault of this kind.
    pub(super) fn has(&self, kind: &str) -> bool {
        self.counts.contains_key(kind)
    }

    pub(super) fn is_empty(&self) -> bool {
        self.faults.is_empty()
    }

    /// The diagnostics of one fault.
    pub(super) fn of(
        kind: &'static str,
        place: Place,
        what: impl Into<String>,
        mend: impl Into<String>,
    ) -> Self {
        let mut all = Self::default();
        all.add(kind, || place, what, mend);
        all
    }

    /// Whether all faults lie in what was asked for, and none in a file.
    pub fn are_of_the_request(&self) -> bool {
        self.faults
            .iter()
            .all(|fault| fault.place.file == COMMAND_LINE)
    }

    /// How many faults there are, those that are not shown included.
    pub fn count(&self) -> usize {
        self.counts.values().sum()
    }

    /// The faults that are kept, by file and line.
    pub fn faults(&self) -> Vec<&Fault> {
        let mut faults: Vec<&Fault> = self.faults.iter().collect();
        faults.sort_by(|one, other| one.place.order().cmp(&other.place.order()));
        faults
    }

    /// The faults for a person: each with its line of the file and the cell underlined.
    pub fn render(&self, coloured: bool) -> String {
        let renderer = if coloured {
            Renderer::styled()
        } else {
            Renderer::plain()
        };
        let renderer = renderer.term_width(PAGE_WIDTH);
        let mut out = String::new();
        for fault in self.faults() {
            out.push_str(&renderer.render(&[fault.as_group()]));
            out.push_str("\n\n");
        }
        for (kind, &count) in &self.counts {
            if let Some(more) = count.checked_sub(KEPT_PER_KIND).filter(|&more| more > 0) {
                let more = amount(more as f64);
                out.push_str(&format!("and {more} more of the same kind: {kind}\n"));
            }
        }
        let faults = if self.count() == 1 { "fault" } else { "faults" };
        out.push_str(&format!(
            "{} {faults}; nothing was computed\n",
            amount(self.count() as f64)
        ));
        out
    }
}

/// Where a fault stands in a table before its place is looked for.
#[derive(Debug, Clone, Copy)]
pub(super) struct Spot {
    /// The byte where the record begins.
    pub start: usize,
    /// The column, from 0; `None` for the whole record.
    pub column: Option<usize>,
}

/// Faults of a part of a table, kept and counted like the others. A million of them must cost no
/// million looks for a line.
#[derive(Debug, Default)]
pub(super) struct FoundFaults {
    kept: Vec<(&'static str, Spot, String, String)>,
    counts: BTreeMap<&'static str, usize>,
}

impl FoundFaults {
    /// Adds a fault whose words, what is wrong and the mend, are only asked for where it is kept.
    pub(super) fn add(
        &mut self,
        kind: &'static str,
        spot: Spot,
        words: impl FnOnce() -> (String, String),
    ) {
        let count = self.counts.entry(kind).or_default();
        *count += 1;
        if *count <= KEPT_PER_KIND {
            let (what, mend) = words();
            self.kept.push((kind, spot, what, mend));
        }
    }

    pub(super) fn count(&self) -> usize {
        self.counts.values().sum()
    }
}

impl fmt::Display for Diagnostics {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.render(false))
    }
}

impl std::error::Error for Diagnostics {}

impl Fault {
    fn as_group(&self) -> Group<'_> {
        let title = Level::ERROR.primary_title(&self.what);
        let mend = Level::HELP.message(&self.mend);
        match &self.place.excerpt {
            Some(excerpt) => title
                .element(
                    Snippet::source(&excerpt.text)
                        .line_start(self.place.line.unwrap_or(1))
                        .path(&self.place.file)
                        .annotation(
                            AnnotationKind::Primary
                                .span(excerpt.cell.clone())
                                .label(self.place.column.as_deref().unwrap_or("here")),
                        ),
                )
                .element(mend),
            None => title
                .element(annotate_snippets::Origin::path(&self.place.file))
                .element(mend),
        }
    }
}
