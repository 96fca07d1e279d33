//! Potentials of mean force, in kT.

use std::f64::consts::TAU;
use std::fmt;
use std::sync::Arc;

/// A smooth function of one position, in kT.
#[derive(Clone)]
pub struct Potential(Arc<dyn Fn(f64) -> f64 + Send + Sync>);

impl Potential {
    /// Any function. It must be smooth on the scale of 1/4096 of the range that it is used on.
    pub fn new(energy: impl Fn(f64) -> f64 + Send + Sync + 'static) -> Self {
        Self(Arc::new(energy))
    }

    /// κ(x − a)²/2 with `force_constant` κ and `center` a.
    #[must_use]
    pub fn harmonic(center: f64, force_constant: f64) -> Self {
        Self::new(move |x| 0.5 * force_constant * (x - center).powi(2))
    }

    /// B((y² − 1)² + t·y), y = (x − `center`)/`half_distance`: a barrier of `barrier` B between minima near y = ±1, tilted by
    /// 2Bt from the left minimum to the right one.
    #[must_use]
    pub fn double_well(center: f64, half_distance: f64, barrier: f64, tilt: f64) -> Self {
        Self::new(move |x| {
            let y = (x - center) / half_distance;
            barrier * ((y * y - 1.0).powi(2) + tilt * y)
        })
    }

    /// `Σ A_n cos(2πnx/P − δ_n)` over `terms` `(n, A_n, δ_n)`, δ in radians, P = `period`.
    #[must_use]
    pub fn torsion(period: f64, terms: Vec<(u32, f64, f64)>) -> Self {
        Self::new(move |x| {
            let angle = TAU * x / period;
            terms.iter().map(|&(n, amplitude, phase)| amplitude * (f64::from(n) * angle - phase).cos()).sum()
        })
    }

    /// This potential plus `slope`·x.
    #[must_use]
    pub fn tilted(self, slope: f64) -> Self {
        Self::new(move |x| self.energy(x) + slope * x)
    }

    /// This potential plus A sin(2πx/λ − δ), with `amplitude` A, `wavelength` λ and `phase` δ in radians.
    #[must_use]
    pub fn rippled(self, amplitude: f64, wavelength: f64, phase: f64) -> Self {
        Self::new(move |x| self.energy(x) + amplitude * (TAU * x / wavelength - phase).sin())
    }

    /// Energy at `x`, kT.
    #[must_use]
    pub fn energy(&self, x: f64) -> f64 {
        (self.0)(x)
    }
}

impl fmt::Debug for Potential {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        out.write_str("Potential(..)")
    }
}
