//! Standard errors from the spread between replicates.

/// A number with its standard error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Estimate {
    /// The number.
    pub value: f64,
    /// Its standard error.
    pub standard_error: f64,
}

/// A statistic of sums over replicates, with its delete-one jackknife standard error (Efron & Stein 1981):
/// √((R − 1)/R Σ (θ₋ᵣ − θ̄)²), θ₋ᵣ the statistic without replicate r. `parts` holds each replicate's summands.
///
/// `None` if the statistic is not defined on all replicates, or on all but one.
///
/// ```
/// use spandrel_calibration::jackknife;
/// // For a mean the jackknife is the usual standard error: √(Σ (x − x̄)²/(n (n − 1))).
/// let mean = jackknife(&[[3.0, 1.0], [5.0, 1.0], [10.0, 1.0]], |[sum, n]| (*n > 0.0).then(|| sum / n)).unwrap();
/// assert!((mean.value - 6.0).abs() < 1e-14 && (mean.standard_error - (26.0_f64 / 6.0).sqrt()).abs() < 1e-14);
/// ```
#[must_use]
pub fn jackknife<const N: usize>(parts: &[[f64; N]], statistic: impl Fn(&[f64; N]) -> Option<f64>) -> Option<Estimate> {
    let mut totals = [0.0; N];
    for part in parts {
        for (total, own) in totals.iter_mut().zip(part) {
            *total += own;
        }
    }
    let value = statistic(&totals)?;
    let without: Vec<f64> = parts
        .iter()
        .map(|part| statistic(&std::array::from_fn(|i| totals[i] - part[i])))
        .collect::<Option<Vec<f64>>>()?;
    let n = without.len() as f64;
    let mean = without.iter().sum::<f64>() / n;
    let squares: f64 = without.iter().map(|theta| (theta - mean).powi(2)).sum();
    Some(Estimate { value, standard_error: ((n - 1.0) / n * squares).sqrt() })
}

/// first/second, where there is any of the second.
pub(crate) fn ratio(first: f64, second: f64) -> Option<f64> {
    (second > 0.0).then(|| first / second)
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;

    /// Delete-one values of (2, 4), (3, 4), (1, 2) are 4/6, 3/6 and 5/8: mean 43/72, squares by hand.
    #[test]
    fn a_ratio_agrees_with_arithmetic_by_hand() {
        let found = jackknife(&[[2.0, 4.0], [3.0, 4.0], [1.0, 2.0]], |[a, b]| ratio(*a, *b)).unwrap();
        let squares: f64 = [48.0, 36.0, 45.0].iter().map(|x: &f64| ((x - 43.0) / 72.0).powi(2)).sum();
        assert!((found.value - 0.6).abs() < 1e-15);
        assert!((found.standard_error - (2.0 / 3.0 * squares).sqrt()).abs() < 1e-15);
    }

    #[test]
    fn what_rests_on_a_single_replicate_has_no_error_and_is_not_given() {
        assert_eq!(jackknife(&[[2.0, 4.0], [0.0, 0.0]], |[a, b]| ratio(*a, *b)), None);
        assert_eq!(jackknife(&[], |[a, b]: &[f64; 2]| ratio(*a, *b)), None);
    }
}
