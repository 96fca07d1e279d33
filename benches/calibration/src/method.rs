//! The ways to an error bar that the study scores.

use crate::experiment::Solved;
use spandrel_solver::profile::BinStatus;
use statrs::distribution::{ContinuousCDF, Normal, StudentsT};

/// Two-sided probabilities of the intervals, as upper quantiles.
const UPPER_68: f64 = 0.84;
const UPPER_95: f64 = 0.975;

/// A way to an error bar. A further one is a variant here and an arm in [`Method::error_bars`].
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Method {
    /// The errors of the profile: batch means of influences, Student's t.
    BatchMeans,
}

impl Method {
    /// All methods.
    pub const ALL: [Self; 1] = [Self::BatchMeans];

    /// Name in the tables.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::BatchMeans => "batch-means",
        }
    }

    /// Error bars of the scored bins of a solved replicate; `None` where the method prints none.
    #[must_use]
    pub fn error_bars(self, solved: &Solved, scored: &[usize]) -> Vec<Option<ErrorBar>> {
        match self {
            Self::BatchMeans => scored.iter().map(|&bin| of_profile(solved, bin)).collect(),
        }
    }
}

/// An error bar as it would be printed. Energies in kT.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ErrorBar {
    /// Standard error.
    pub standard_error: f64,
    /// Degrees of freedom; infinite where the quantiles are those of the normal distribution.
    pub degrees_of_freedom: f64,
    /// Half width of the 68 % interval.
    pub half_width_68: f64,
    /// Half width of the 95 % interval.
    pub half_width_95: f64,
    /// Whether it is printed without reserve; provisional otherwise.
    pub determined: bool,
}

impl ErrorBar {
    /// An error known exactly: normal quantiles.
    #[must_use]
    pub fn exact(standard_error: f64) -> Self {
        let normal = Normal::standard();
        Self {
            standard_error,
            degrees_of_freedom: f64::INFINITY,
            half_width_68: normal.inverse_cdf(UPPER_68) * standard_error,
            half_width_95: normal.inverse_cdf(UPPER_95) * standard_error,
            determined: true,
        }
    }

    /// The same with every width multiplied by `factor`.
    #[must_use]
    pub fn scaled(self, factor: f64) -> Self {
        Self {
            standard_error: factor * self.standard_error,
            half_width_68: factor * self.half_width_68,
            half_width_95: factor * self.half_width_95,
            ..self
        }
    }
}

fn of_profile(solved: &Solved, bin: usize) -> Option<ErrorBar> {
    let bin = solved.profile.bins.get(bin)?;
    let uncertainty = bin.uncertainty?;
    let quantile_68 = StudentsT::new(0.0, 1.0, uncertainty.degrees_of_freedom).ok()?.inverse_cdf(UPPER_68);
    Some(ErrorBar {
        standard_error: uncertainty.standard_error,
        degrees_of_freedom: uncertainty.degrees_of_freedom,
        half_width_68: quantile_68 * uncertainty.standard_error,
        half_width_95: uncertainty.half_width_95,
        determined: bin.status == BinStatus::Determined,
    })
}
