//! How long the blocks of a bootstrap should be.

use crate::series::Autocorrelation;

/// Autocorrelations below this many times √(log₁₀ n / n) pass for noise (c of Politis & White 2004).
const NOISE_LEVEL: f64 = 2.0;
/// Least number of consecutive lags that must pass for noise before the correlation counts as over (K of Politis & White 2004).
const FEWEST_QUIET_LAGS: f64 = 5.0;

/// The block length of least mean squared error for the variance of a mean by a block bootstrap with overlapping blocks, in values of the
/// series; not rounded, between 1 and the cap ⌈min(3√n, n/3)⌉.
///
/// b = (2 G²/D)^⅓ n^⅓ with G = Σ λ(t/M) |t| γₜ, D = (4/3) (Σ λ(t/M) γₜ)², the sums over |t| ≤ M, γₜ the autocovariance (normalized by 1/n) and
/// λ the flat-top window, 1 up to ½ and 2(1 − |x|) from there to 1. M is twice the smallest lag m after which max(5, ⌈√log₁₀ n⌉)
/// autocorrelations in a row stay below 2 √(log₁₀ n / n), and ⌈√n⌉ + max(5, ⌈√log₁₀ n⌉) at most (Politis & White 2004, with the correction of
/// Patton, Politis & White 2009, which leaves D as it is for blocks of one fixed length).
///
/// `None` if there are fewer than two values, one is not finite, or all are equal.
///
/// ```
/// use spandrel_solver::bootstrap::block_length;
/// let slow: Vec<f64> = (0..128).map(|i| (f64::from(i) * 0.11).sin()).collect();
/// assert!(block_length(&slow).unwrap() > 5.0);
/// ```
#[must_use]
pub fn block_length(values: &[f64]) -> Option<f64> {
    let rho = Autocorrelation::of(values)?.rho;
    let n = values.len() as f64;
    let log_n = n.log10();
    let quiet_lags = log_n.sqrt().ceil().max(FEWEST_QUIET_LAGS);
    let longest_lag = n.sqrt().ceil() + quiet_lags;
    let longest_block = (3.0 * n.sqrt()).min(n / 3.0).ceil().max(1.0);

    let noise = NOISE_LEVEL * (log_n / n).sqrt();
    let last_memory = last_lag_above(&rho, noise, quiet_lags) as f64;
    let reach = (2.0 * last_memory).min(longest_lag);
    let (mut spectrum, mut slope) = (1.0, 0.0);
    for (lag, rho) in rho.iter().enumerate().skip(1) {
        let lag = lag as f64;
        if lag >= reach {
            break;
        }
        let weight = 2.0 * (2.0 * (1.0 - lag / reach)).min(1.0);
        spectrum += weight * rho;
        slope += weight * lag * rho;
    }
    let variance_of_estimate = 4.0 / 3.0 * spectrum * spectrum;
    let length = (2.0 * slope * slope / variance_of_estimate * n).cbrt();
    // Weighted sums may cancel: no correlation at all is one value a block, correlation without a spectrum the longest blocks.
    Some(if slope == 0.0 { 1.0 } else { length.clamp(1.0, longest_block) })
}

/// The smallest lag m after which `quiet_lags` autocorrelations in a row are below `noise` in size; those past the end of the series are 0.
fn last_lag_above(rho: &[f64], noise: f64, quiet_lags: f64) -> usize {
    let mut last = 0;
    for (lag, rho) in rho.iter().enumerate().skip(1) {
        if (lag - last) as f64 > quiet_lags {
            break;
        }
        if rho.abs() >= noise {
            last = lag;
        }
    }
    last
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn correlation_is_over_after_five_quiet_lags() {
        let mut rho = vec![0.0; 40];
        rho[0] = 1.0;
        assert_eq!(last_lag_above(&rho, 0.2, 5.0), 0);
        rho[3] = -0.4;
        rho[8] = 0.3;
        assert_eq!(last_lag_above(&rho, 0.2, 5.0), 8);
        rho[8] = 0.0;
        rho[9] = 0.3;
        assert_eq!(last_lag_above(&rho, 0.2, 5.0), 3);
    }

    #[test]
    fn a_series_that_says_nothing_has_no_block_length() {
        for values in [&[][..], &[4.0], &[0.1; 60], &[1.0, f64::NAN, 2.0]] {
            assert_eq!(block_length(values), None, "{values:?}");
        }
    }

    #[test]
    fn blocks_stay_below_a_third_of_a_series_that_only_drifts() {
        for n in [2_u32, 3, 7, 64, 100] {
            let drift: Vec<f64> = (0..n).map(|i| 3.0 + 0.1 * f64::from(i)).collect();
            let length = block_length(&drift).unwrap_or(f64::NAN);
            assert!((1.0..=(f64::from(n) / 3.0).ceil().max(1.0)).contains(&length), "{n}: {length}");
        }
    }
}
