//! Autocorrelation by its definition, with no transform and no shortcut.

/// `ρ_t = Σ_{i<n−t} (x_i − x̄)(x_{i+t} − x̄) / Σ_i (x_i − x̄)²`, for t = 0..=`largest_lag` (at most n − 1): the usual biased
/// normalization by 1/n. Empty for an empty or constant series. Costs n × lags.
#[must_use]
pub fn autocorrelation(series: &[f64], largest_lag: usize) -> Vec<f64> {
    let n = series.len();
    let mean = series.iter().sum::<f64>() / n as f64;
    let centered: Vec<f64> = series.iter().map(|x| x - mean).collect();
    let product = |lag: usize| centered.iter().zip(&centered[lag..]).map(|(early, late)| early * late).sum::<f64>();
    if n == 0 || product(0) <= 0.0 {
        return Vec::new();
    }
    (0..=largest_lag.min(n - 1)).map(|lag| product(lag) / product(0)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::tolerance;

    /// Deviations −4/3, −1/3, 5/3: ρ_1 = −1/42, ρ_2 = −20/42.
    #[test]
    fn three_numbers_agree_with_arithmetic_by_hand() {
        let found = autocorrelation(&[1.0, 2.0, 4.0], 7);
        let expected = [1.0, -1.0 / 42.0, -20.0 / 42.0];
        assert_eq!(found.len(), expected.len());
        for (found, expected) in found.iter().zip(expected) {
            assert!((found / expected - 1.0).abs() < tolerance::ROUNDING_RELATIVE);
        }
    }

    #[test]
    fn empty_and_constant_series_have_no_autocorrelation() {
        assert!(autocorrelation(&[], 3).is_empty());
        assert!(autocorrelation(&[2.5; 9], 3).is_empty());
    }
}
