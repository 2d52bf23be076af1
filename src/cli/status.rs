//! How a command ends.

use std::io;
use std::path::{Path, PathBuf};
use std::process::ExitCode;

/// Exit status, as scripts see it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Status {
    /// Done, and proven where something was to prove.
    Done,
    /// Anything else, say a disk error.
    Other,
    /// The options contradict each other or the plan.
    WrongUsage,
    /// The files do not say what a plan needs.
    BadData,
    /// No plan can meet the limit.
    NoPlan,
    /// Solved, but the certificate does not hold.
    NotProven,
}

impl From<Status> for ExitCode {
    fn from(status: Status) -> Self {
        ExitCode::from(match status {
            Status::Done => 0,
            Status::Other => 1,
            Status::WrongUsage => 2,
            Status::BadData => 3,
            Status::NoPlan => 4,
            Status::NotProven => 5,
        })
    }
}

/// Why a command could not end as asked. The text is what people read on stderr.
#[derive(Debug, thiserror::Error)]
pub(super) enum Failure {
    /// The options do not fit together.
    #[error("error: {0}")]
    Usage(String),
    /// The options ask for what the plan cannot give; every fault is already worded.
    #[error("{0}")]
    Request(String),
    /// The files are at fault; every fault is already worded.
    #[error("{0}")]
    Data(String),
    /// No plan exists.
    #[error("{0}")]
    NoPlan(String),
    /// A file or folder could not be written.
    #[error("error: {} cannot be written: {source}", path.display())]
    Write {
        /// Which.
        path: PathBuf,
        /// What the system says.
        source: io::Error,
    },
    /// Stdout could not be written.
    #[error("error: the output cannot be written: {0}")]
    Stdout(io::Error),
}

impl Failure {
    pub(super) fn write(path: &Path, source: io::Error) -> Self {
        Self::Write {
            path: path.to_owned(),
            source,
        }
    }

    pub(super) fn status(&self) -> Status {
        match self {
            Failure::Usage(_) | Failure::Request(_) => Status::WrongUsage,
            Failure::Data(_) => Status::BadData,
            Failure::NoPlan(_) => Status::NoPlan,
            Failure::Write { .. } | Failure::Stdout(_) => Status::Other,
        }
    }
}
