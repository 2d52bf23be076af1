//! From files to a [`Problem`](crate::model::Problem): tables that remember file, line and
//! column, and every fault at once.
//!
//! A cell is never guessed. What is written unusually but leaves no doubt is read and *said*
//! ([`Note`]); what could mean two things is refused with the mend ([`Fault`]). The quick look
//! over a table keeps only where a record begins; the exact place of a fault is found on a
//! second, slow look ([`place`]).

mod activities;
mod amount;
mod currency;
mod dialect;
mod digits;
mod encoding;
mod faults;
mod header;
mod misfits;
mod names;
mod notes;
mod parameters;
pub mod place;
mod plan;
mod plan_file;
mod points;
mod rows;
mod scale;
mod soundness;
mod table;

pub use amount::{Amount, AmountFault, parse_amount};
pub use faults::{Diagnostics, Fault};
pub use header::{ExtraColumn, ExtraKind};
pub use notes::{Note, NoteKind};
pub use plan::{Plan, PlanRequest, Source, read_plan};
