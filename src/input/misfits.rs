//! Faults of the model, at the cells that they are about.

use super::activities::ActivitiesTable;
use super::faults::{Diagnostics, Spot};
use super::header::CURVE;
use crate::model::{Field, ModelError};

impl ActivitiesTable<'_> {
    /// Points at the cells that a fault of the model is about.
    pub(super) fn explain(&self, fault: &ModelError, faults: &mut Diagnostics) {
        let (i, column, kind, mend) = match fault {
            ModelError::Number {
                activity, field, ..
            } => (
                *activity,
                field.name(),
                "a number out of range",
                format!(
                    "write another number, or nothing: blank means {}",
                    meaning_of_blank(*field)
                ),
            ),
            ModelError::FloorAboveCap { activity, .. } => {
                let mend = "lower the floor or raise the cap".to_owned();
                (*activity, "floor", "a floor above its cap", mend)
            }
            ModelError::OutsideTable {
                activity,
                floor,
                first,
                last,
                ..
            } if floor < first => {
                let mend = format!(
                    "add a point for a spend of 0, or give it a floor of at least {first} (the \
                     points run from {first} to {last})"
                );
                (*activity, "floor", "bounds beyond the points", mend)
            }
            ModelError::OutsideTable { activity, last, .. } => {
                let mend = format!("lower the cap to {last}, or add points beyond it");
                (*activity, "cap", "bounds beyond the points", mend)
            }
            ModelError::Shape(shape) => (
                shape.activity,
                CURVE,
                "a curve of the wrong shape",
                shape.mend(),
            ),
            _ => return,
        };
        if !faults.keeps(kind) {
            faults.count_one(kind);
            return;
        }
        let what = match fault {
            ModelError::Shape(shape) => shape.reason(),
            other => other.to_string(),
        };
        let start = self.starts[i];
        let column = self.table.column(column);
        faults.add(
            kind,
            || self.table.place_of(Spot { start, column }),
            format!("{}: {what}", self.name_at(start)),
            mend,
        );
    }
}

/// What a field is where nothing is given.
fn meaning_of_blank(field: Field) -> &'static str {
    match field {
        Field::Base | Field::Floor => "0",
        Field::Cap => "no cap",
        Field::Weight => "1",
        Field::Current | Field::ObservedFrom | Field::ObservedTo => "not known",
    }
}
