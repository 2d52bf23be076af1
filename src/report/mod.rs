//! The findings of a plan as plain data, built once, and their renderings: text for people,
//! JSON and CSV for programmes.
//!
//! [`Report::build`] works out every number and sentence; a renderer lays out what it finds.

mod activities;
mod build;
mod comparison;
mod headline;
mod json;
mod layout;
mod no_plan;
mod price;
mod proof;
mod reasons;
mod rounding;
mod tables;
mod text;
mod understood;
mod wording;

pub use activities::{ActivityRow, ActivityRows, Reason, Why};
pub use build::{Findings, Input, Provenance, Report, Rest, Summary};
pub use comparison::{NoSplit, Split, SplitKind, SplitOutcome};
pub use json::render_json;
pub use layout::wrapped;
pub use no_plan::{NoPlan, render_no_plan_json};
pub use price::{ConstraintRow, Fact};
pub use rounding::Rounding;
pub use tables::{
    render_activities_table, render_allocation, render_certificate_table, render_comparison_table,
    render_constraints_table,
};
pub use text::{TextOptions, render_summary, render_text, render_understood};
pub use understood::{OtherColumn, ReadActivity, Reading, Understood};
pub use wording::{Units, activities};
