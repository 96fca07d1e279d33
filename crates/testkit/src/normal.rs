//! The standard normal distribution function.

use std::f64::consts::SQRT_2;

use libm::erfc;

/// Φ(z) = erfc(−z/√2)/2, with full relative accuracy in the lower tail.
pub(crate) fn standard_normal_cdf(z: f64) -> f64 {
    0.5 * erfc(-z / SQRT_2)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::tolerance;

    /// Abramowitz & Stegun 1964, Handbook of Mathematical Functions, table 26.1.
    #[test]
    fn distribution_function_agrees_with_the_handbook() {
        for (z, expected) in
            [(0.5, 0.691_462_461_274_013), (1.3, 0.903_199_515_414_390), (-2.4, 1.0 - 0.991_802_464_075_404)]
        {
            let found = standard_normal_cdf(z);
            assert!((found - expected).abs() < tolerance::HANDBOOK_DIGITS, "{found:.17} against {expected:.17} at {z}");
        }
    }
}
