//! Why a command did not end well, and with which exit code.

use std::fmt;
use std::io;

use ohmwright::recording::{ConvertError, RecordingError};

/// Exit codes: 1 the answer is no, 2 usage, sheet or file error, 3 there is no telling.
#[derive(Debug)]
pub(crate) enum Failure {
    /// The answer is no; what there was to say has been said.
    No(String),
    /// There is not enough to tell; what there was to say has been said.
    CannotTell,
    /// Usage, sheet or file error.
    Error(String),
    /// Nobody reads our output any more.
    BrokenPipe,
}

impl Failure {
    pub(crate) fn error(message: impl Into<String>) -> Self {
        Self::Error(message.into())
    }

    pub(crate) const fn is_broken_pipe(&self) -> bool {
        matches!(self, Self::BrokenPipe)
    }

    pub(crate) const fn code(&self) -> u8 {
        match self {
            Self::No(_) => 1,
            Self::CannotTell => 3,
            Self::Error(_) => 2,
            Self::BrokenPipe => 0,
        }
    }
}

impl fmt::Display for Failure {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::No(message) | Self::Error(message) => f.write_str(message),
            Self::CannotTell | Self::BrokenPipe => Ok(()),
        }
    }
}

impl From<RecordingError> for Failure {
    fn from(error: RecordingError) -> Self {
        if error.is_broken_pipe() { Self::BrokenPipe } else { Self::Error(error.to_string()) }
    }
}

impl From<ConvertError> for Failure {
    fn from(error: ConvertError) -> Self {
        if error.is_broken_pipe() { Self::BrokenPipe } else { Self::Error(error.to_string()) }
    }
}

impl From<io::Error> for Failure {
    fn from(error: io::Error) -> Self {
        if error.kind() == io::ErrorKind::BrokenPipe { Self::BrokenPipe } else { Self::Error(error.to_string()) }
    }
}
