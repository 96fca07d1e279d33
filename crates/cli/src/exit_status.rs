//! What the program's exit code says.

use std::process::ExitCode;

/// Exit codes, the same in every version.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ExitStatus {
    /// 0: done; findings, if any, are in the output.
    Success,
    /// 2: the command line cannot be understood.
    Usage,
    /// 3: the job file, or a table it names, has problems. Nothing was read beyond it.
    Job,
    /// 4: a series cannot be read as the job says.
    Data,
    /// 5: the windows are not linked, so there is no single profile.
    NotLinked,
    /// 6: the solver stopped short of the tolerance.
    NotConverged,
    /// 7: the results cannot be written where the job says.
    Output,
    /// 8: the profile asked for cannot be drawn from the data, for example because its zero was not sampled.
    Profile,
    /// 130: interrupted from the terminal or by a signal; nothing was written.
    Interrupted,
}

impl ExitStatus {
    /// All of them, for reference pages and tests.
    pub const ALL: [Self; 9] = [
        Self::Success,
        Self::Usage,
        Self::Job,
        Self::Data,
        Self::NotLinked,
        Self::NotConverged,
        Self::Output,
        Self::Profile,
        Self::Interrupted,
    ];

    /// The number.
    #[must_use]
    pub fn code(self) -> u8 {
        match self {
            Self::Success => 0,
            Self::Usage => 2,
            Self::Job => 3,
            Self::Data => 4,
            Self::NotLinked => 5,
            Self::NotConverged => 6,
            Self::Output => 7,
            Self::Profile => 8,
            Self::Interrupted => 130,
        }
    }
}

impl From<ExitStatus> for ExitCode {
    fn from(status: ExitStatus) -> Self {
        Self::from(status.code())
    }
}
