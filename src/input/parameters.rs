//! Parameters of curves at fault, all of a row's at once.

use super::rows::{Part, Row};
use crate::curves::{CurveError, Family, Parameter, ParameterSet};

impl Part {
    /// Points at every parameter that is missing or not used, or at the one that `fault` is about.
    pub(super) fn explain(
        &mut self,
        row: &Row,
        name: &str,
        family: Family,
        given: &ParameterSet,
        fault: &CurveError,
        unread: bool,
    ) {
        let needed = family.parameters();
        for parameter in Parameter::ALL {
            let is_given = given.get(parameter).is_some();
            let is_needed = needed.contains(&parameter);
            let found = match (is_needed, is_given) {
                // A cell that could not be read has been reported, and is not missing.
                (true, false) if !unread => CurveError::Missing { family, parameter },
                (false, true) => CurveError::NotUsed { family, parameter },
                _ if fault.parameter() == Some(parameter)
                    && matches!(fault, CurveError::OutOfDomain { .. }) =>
                {
                    fault.clone()
                }
                _ => continue,
            };
            let column = row.table.column(parameter.name());
            let spot = row.spot(Some(column.unwrap_or(row.columns.curve)));
            self.faults.add("a parameter at fault", spot, || {
                let names: Vec<&str> = needed.iter().map(|needed| needed.name()).collect();
                let mend = match &found {
                    CurveError::Missing { parameter, .. } if column.is_none() => {
                        format!("add a column {parameter}")
                    }
                    CurveError::Missing { parameter, .. } => {
                        format!("fill in the column {parameter}")
                    }
                    CurveError::NotUsed { .. } if names.is_empty() => {
                        "leave the cell blank; a points curve is read from the points table"
                            .to_owned()
                    }
                    CurveError::NotUsed { .. } => {
                        let names = names.join(" and ");
                        format!("leave the cell blank; {family} has {names}")
                    }
                    CurveError::OutOfDomain { rule, .. } => format!("write a number {rule}"),
                    _ => "correct it".to_owned(),
                };
                (format!("{name}: {found}"), mend)
            });
        }
    }
}
