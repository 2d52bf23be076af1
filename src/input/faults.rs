//! Faults of the files: all of them, each with its place, what is wrong and the mend.

use std::collections::BTreeMap;
use std::fmt;

use annotate_snippets::{AnnotationKind, Group, Level, Renderer, Snippet};

use super::place::Place;

/// Faults of one kind that are kept with their place; more are only counted.
const KEPT_PER_KIND: usize = 20;

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
        let count = self.counts.entry(kind).or_default();
        *count += 1;
        if *count <= KEPT_PER_KIND {
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
        self.faults.extend(other.faults);
        for (kind, count) in other.counts {
            *self.counts.entry(kind).or_default() += count;
        }
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
                out.push_str(&format!("… and {more} more: {kind}\n"));
            }
        }
        let faults = if self.count() == 1 { "fault" } else { "faults" };
        out.push_str(&format!(
            "{} {faults}; nothing was computed\n",
            self.count()
        ));
        out
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
