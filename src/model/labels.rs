//! The words and units of a plan, for reports and pictures.

/// What the numbers of a plan are called. None of it changes an answer.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Labels {
    /// Name of the plan.
    pub title: Option<String>,
    /// Unit of spend, such as "EUR".
    pub money: Option<String>,
    /// Unit of the total, such as "homes protected".
    pub return_unit: Option<String>,
    /// Time that the plan covers, such as "2027".
    pub period: Option<String>,
}
