//! Whether a series still drifts.

use super::autocorrelation::Transform;
use super::sequence::initial_sequence;
use statrs::distribution::{ContinuousCDF, StudentsT};

/// Two-sided probability that a series without a trend shows a slope as large as this one.
///
/// The slope b̂ of the least-squares line through n values has the variance 12 σ²∞/(n (n² − 1)) when their long-run variance is σ²∞. That
/// is taken from what is left over after subtracting the line, so that a drift does not hide behind the spread it makes itself:
/// σ²∞ = Var(rest) G (1 + 2 (2M + 1)/n), G and M of the initial monotone sequence (C. J. Geyer 1992), the last factor for the two parameters
/// that the line has taken out of the sum of M lags (U. Wolff 2004, Comput. Phys. Commun. 156, 143, for the one of a mean). Student's t
/// with n/G − 2 degrees of freedom, at least 1.
///
/// `None` for fewer than three values, values that are not finite, and a constant series.
pub(crate) fn trend_probability(values: &[f64], transform: &mut Transform) -> Option<f64> {
    let n = values.len() as f64;
    if values.len() < 3 {
        return None;
    }
    let mean = values.iter().sum::<f64>() / n;
    let middle = 0.5 * (n - 1.0);
    let times = || (0..values.len()).map(|i| i as f64 - middle);
    let spread_of_times = n * (n * n - 1.0) / 12.0;
    let slope = times().zip(values).map(|(t, x)| t * (x - mean)).sum::<f64>() / spread_of_times;
    let rest: Vec<f64> = times().zip(values).map(|(t, x)| x - mean - slope * t).collect();
    let Some(of_rest) = transform.autocorrelation(&rest) else {
        // Nothing is left over: a perfect line, which is a constant only when it is flat.
        return (slope.is_finite() && slope != 0.0).then_some(0.0);
    };
    let sum = initial_sequence(&of_rest.rho);
    let inefficiency = sum.inefficiency.max(1.0) * (1.0 + 2.0 * (2.0 * sum.lags as f64 + 1.0) / n);
    let deviations = slope.abs() / (of_rest.variance * inefficiency / spread_of_times).sqrt();
    let student = StudentsT::new(0.0, 1.0, (n / inefficiency - 2.0).max(1.0)).ok()?;
    Some(2.0 * student.sf(deviations))
}
