//! The systems of the study, by name.

use clap::ValueEnum;
use spandrel_testkit::{Case, SystemError, cases};

/// A system of known truth. Effective samples are N/g a window.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum System {
    /// 21 windows of 5000 independent samples.
    Independent,
    /// 15 windows of 70 effective samples, correlation time 200.
    #[value(name = "long-memory-70")]
    LongMemory70,
    /// The same with 35 effective samples.
    #[value(name = "long-memory-35")]
    LongMemory35,
    /// The same with 12 effective samples.
    #[value(name = "long-memory-12")]
    LongMemory12,
    /// The same with 5 effective samples: fewer than support an error.
    #[value(name = "long-memory-5")]
    LongMemory5,
    /// 21 windows of 5000 samples with correlation times of 2 and 100.
    TwoTimes,
    /// 25 windows, lengths uneven by a factor of 50, stiffnesses and correlation times mixed.
    Uneven,
    /// 24 windows around a torsion, correlation time 5.
    Periodic,
}

impl System {
    /// All systems, in the order of the table.
    pub const ALL: [Self; 8] = [
        Self::Independent,
        Self::LongMemory70,
        Self::LongMemory35,
        Self::LongMemory12,
        Self::LongMemory5,
        Self::TwoTimes,
        Self::Uneven,
        Self::Periodic,
    ];

    /// Name on the command line and in the tables.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Independent => "independent",
            Self::LongMemory70 => "long-memory-70",
            Self::LongMemory35 => "long-memory-35",
            Self::LongMemory12 => "long-memory-12",
            Self::LongMemory5 => "long-memory-5",
            Self::TwoTimes => "two-times",
            Self::Uneven => "uneven",
            Self::Periodic => "periodic",
        }
    }

    /// The system itself, with the bins of its profile.
    ///
    /// # Errors
    /// None in practice; the constructor is fallible.
    pub fn case(self) -> Result<Case, SystemError> {
        match self {
            Self::Independent => cases::independent(),
            Self::LongMemory70 => cases::long_memory(70),
            Self::LongMemory35 => cases::long_memory(35),
            Self::LongMemory12 => cases::long_memory(12),
            Self::LongMemory5 => cases::long_memory(5),
            Self::TwoTimes => cases::two_times(),
            Self::Uneven => cases::uneven(),
            Self::Periodic => cases::periodic(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_in_the_tables_are_those_of_the_command_line() {
        for system in System::ALL {
            assert_eq!(System::from_str(system.name(), false), Ok(system));
        }
        assert_eq!(System::ALL.len(), System::value_variants().len());
    }
}
