//! A standard error together with how far it can itself be trusted.

use serde::Serialize;
use statrs::distribution::{ContinuousCDF, StudentsT};

/// Whether the data support an error.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Support {
    /// The error can be quoted.
    Determined,
    /// The error rests on few batches: fewer than [`FEW_BATCHES`] of them, or [`FEW_DEGREES`] degrees of freedom.
    Provisional,
    /// The data support no error; none is given.
    NotDetermined,
}

/// Mean number of batches below which an error is provisional (some 20 effective samples a window).
pub const FEW_BATCHES: f64 = 7.0;
/// Degrees of freedom below which an error is provisional.
pub const FEW_DEGREES: f64 = 10.0;
/// Mean number of batches below which an error is not determined. Calibrated on replicate experiments with 12 and 5 effective samples a
/// window: a higher limit leaves those errors that came out too small.
pub const TOO_FEW_BATCHES: f64 = 3.0;
/// Degrees of freedom below which an error is not determined.
pub const TOO_FEW_DEGREES: f64 = 2.0;

/// Standard error of a quantity from independent parts, each a sum of squared deviations of batches.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Uncertainty {
    /// Standard error, in the quantity's unit; meaningless where `support` is not determined.
    pub standard_error: f64,
    /// Degrees of freedom (Welch–Satterthwaite), at least 1.
    pub degrees_of_freedom: f64,
    /// Half width of the 95 % interval: Student's t quantile times the standard error.
    pub half_width_95: f64,
    /// Whether the data support it.
    pub support: Support,
}

impl Uncertainty {
    /// From each replica's number of batches and its part of the variance; `supported` is false if any replica could give none.
    pub(super) fn from_parts(parts: impl Iterator<Item = (usize, f64)>, supported: bool) -> Self {
        let (mut variance, mut squares, mut weighted_batches) = (0.0, 0.0, 0.0);
        for (n_batches, part) in parts {
            variance += part;
            squares += part * part / (n_batches as f64 - 1.0);
            weighted_batches += part * n_batches as f64;
        }
        let degrees_of_freedom = if squares > 0.0 { (variance * variance / squares).max(1.0) } else { 1.0 };
        let mean_batches = if variance > 0.0 { weighted_batches / variance } else { 0.0 };
        Self::new(variance.sqrt(), degrees_of_freedom, mean_batches, supported)
    }

    /// From a standard error that rests on a mean number of batches; `supported` is false if some replica could give none.
    pub(crate) fn new(standard_error: f64, degrees_of_freedom: f64, mean_batches: f64, supported: bool) -> Self {
        let has_error = supported && standard_error.is_finite() && standard_error > 0.0;
        let support = if has_error && mean_batches >= FEW_BATCHES && degrees_of_freedom >= FEW_DEGREES {
            Support::Determined
        } else if has_error && mean_batches >= TOO_FEW_BATCHES && degrees_of_freedom >= TOO_FEW_DEGREES {
            Support::Provisional
        } else {
            Support::NotDetermined
        };
        Self {
            standard_error,
            degrees_of_freedom,
            half_width_95: quantile(0.975, degrees_of_freedom) * standard_error,
            support,
        }
    }
}

/// Quantile of Student's t; infinite if the degrees of freedom are not positive. `probability` is between 0 and 1.
pub(crate) fn quantile(probability: f64, degrees_of_freedom: f64) -> f64 {
    StudentsT::new(0.0, 1.0, degrees_of_freedom).map_or(f64::INFINITY, |t| t.inverse_cdf(probability))
}
