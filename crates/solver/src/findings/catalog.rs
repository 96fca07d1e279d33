//! Grades of findings and where their thresholds come from.

use serde::Serialize;

/// How bad a finding is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Severity {
    /// Good to know; the profile stands.
    Note,
    /// Part of the profile may be wrong, or rests on little.
    Warning,
    /// The profile cannot be trusted as it is.
    Error,
}

impl Severity {
    /// Name in output files and on screen.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Note => "note",
            Self::Warning => "warning",
            Self::Error => "error",
        }
    }
}

/// Where a finding's threshold comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum ThresholdOrigin {
    /// Any occurrence counts.
    Occurrence,
    /// Calibrated on replicate experiments with known truth.
    Calibration,
    /// Follows from the definition of the quantity.
    Definition,
}
