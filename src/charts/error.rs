//! Why a picture could not be drawn.

/// A fault of the drawing library or of the image encoder. No plan causes one; a lack of memory
/// may.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("the picture could not be drawn: {0}")]
pub struct ChartError(pub(super) String);

impl ChartError {
    pub(super) fn of(fault: impl std::fmt::Display) -> Self {
        Self(fault.to_string())
    }
}
