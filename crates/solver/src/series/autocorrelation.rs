//! Autocorrelation of a short series by a fast Fourier transform.

use realfft::RealFftPlanner;

/// Relative spread of block means that is taken for rounding: sums of up to 2³⁰ equal numbers differ by less in their order.
const CONSTANT_WITHIN: f64 = 1e-12;

/// Variance and autocorrelation of a series of B numbers, all lags at once.
#[derive(Debug, Clone, PartialEq)]
pub struct Autocorrelation {
    /// Variance γ₀ with the divisor B, in squared units of the series.
    pub variance: f64,
    /// ρₜ = Σᵢ (xᵢ − x̄)(xᵢ₊ₜ − x̄) / (B γ₀) for t = 0 .. B − 1: the biased normalization by 1/B, which is positive definite. ρ₀ = 1.
    pub rho: Vec<f64>,
}

impl Autocorrelation {
    /// Of `values` in the order of time. Cost B log B: the series is padded with zeros to twice its length, so that no lag wraps round.
    ///
    /// `None` if there are fewer than two values, one of them is not finite, or all are equal up to rounding (1e-12 relative).
    ///
    /// ```
    /// use spandrel_solver::series::Autocorrelation;
    /// let found = Autocorrelation::of(&[1.0, 2.0, 4.0]).unwrap();
    /// assert!((found.variance - 14.0 / 9.0).abs() < 1e-15);
    /// assert!((found.rho[2] + 10.0 / 21.0).abs() < 1e-15);
    /// ```
    #[must_use]
    pub fn of(values: &[f64]) -> Option<Self> {
        Transform::default().autocorrelation(values)
    }
}

/// Plans of the transforms, kept between calls on many series.
#[derive(Default)]
pub(crate) struct Transform {
    planner: RealFftPlanner<f64>,
}

impl Transform {
    /// [`Autocorrelation::of`].
    pub(crate) fn autocorrelation(&mut self, values: &[f64]) -> Option<Autocorrelation> {
        let n = values.len();
        if n < 2 {
            return None;
        }
        let mean = values.iter().sum::<f64>() / n as f64;
        let padded_length = (2 * n).next_power_of_two();
        let mut padded = vec![0.0; padded_length];
        for (centered, value) in padded.iter_mut().zip(values) {
            *centered = value - mean;
        }
        let spread: f64 = padded.iter().map(|x| x * x).sum();
        let scale = values.iter().fold(0.0_f64, |largest, x| largest.max(x.abs()));
        let deviation = (spread / n as f64).sqrt();
        let varies = deviation.is_finite() && deviation > CONSTANT_WITHIN * scale;
        if !varies {
            return None;
        }
        // Scaled to a spread of one, so that squares of very large or small units stay in range.
        for x in &mut padded {
            *x /= deviation;
        }
        let forward = self.planner.plan_fft_forward(padded_length);
        let mut spectrum = forward.make_output_vec();
        forward.process(&mut padded, &mut spectrum).ok()?;
        for line in &mut spectrum {
            *line = line.norm_sqr().into();
        }
        let backward = self.planner.plan_fft_inverse(padded_length);
        backward.process(&mut spectrum, &mut padded).ok()?;
        let at_zero = padded[0];
        padded.truncate(n);
        for x in &mut padded {
            *x /= at_zero;
        }
        Some(Autocorrelation { variance: spread / n as f64, rho: padded })
    }
}
