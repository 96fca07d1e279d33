//! What is added to the potential in a window, in kT.

use crate::potential::Potential;

/// The bias of one window.
#[derive(Clone, Debug)]
pub enum Restraint {
    /// Nothing.
    None,
    /// k d²/2, d = x − c; the nearest image of the center in a periodic system.
    Harmonic {
        /// The center c.
        center: f64,
        /// The force constant k, kT per position squared, not negative.
        force_constant: f64,
    },
    /// s·x: a constant force −s.
    Linear {
        /// The slope s, kT per position.
        slope: f64,
    },
    /// Any smooth function. In a periodic system it must have the system's period.
    Custom(Potential),
}

impl Restraint {
    /// Energy at `x`, kT; `period` in the unit of x, if the system has one.
    #[must_use]
    pub fn energy(&self, x: f64, period: Option<f64>) -> f64 {
        match self {
            Self::None => 0.0,
            Self::Harmonic { center, force_constant } => {
                0.5 * force_constant * displacement(x, *center, period).powi(2)
            }
            Self::Linear { slope } => slope * x,
            Self::Custom(potential) => potential.energy(x),
        }
    }

    /// The same restraint with its center moved by `distance`: what a wrongly written center looks like. Kinds without a
    /// center are unchanged.
    #[must_use]
    pub fn shifted(&self, distance: f64) -> Self {
        match self {
            Self::Harmonic { center, force_constant } => {
                Self::Harmonic { center: center + distance, force_constant: *force_constant }
            }
            other => other.clone(),
        }
    }

    /// The same restraint with its force constant multiplied by `factor`. Kinds without a force constant are unchanged.
    #[must_use]
    pub fn stiffened(&self, factor: f64) -> Self {
        match self {
            Self::Harmonic { center, force_constant } => {
                Self::Harmonic { center: *center, force_constant: factor * force_constant }
            }
            other => other.clone(),
        }
    }

    pub(crate) fn center(&self) -> Option<f64> {
        match self {
            Self::Harmonic { center, .. } => Some(*center),
            _ => None,
        }
    }

    pub(crate) fn is_valid(&self) -> bool {
        match self {
            Self::None | Self::Custom(_) => true,
            Self::Harmonic { center, force_constant } => {
                center.is_finite() && (0.0..f64::INFINITY).contains(force_constant)
            }
            Self::Linear { slope } => slope.is_finite(),
        }
    }
}

/// x − center, or its nearest image in [−P/2, P/2].
fn displacement(x: f64, center: f64, period: Option<f64>) -> f64 {
    let distance = x - center;
    match period {
        Some(period) => distance - period * (distance / period).round(),
        None => distance,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::tolerance;

    #[test]
    fn nearest_image_is_used_in_a_periodic_system() {
        let restraint = Restraint::Harmonic { center: 170.0, force_constant: 0.02 };
        let expected = 0.5 * 0.02 * 25.0_f64.powi(2);
        assert!((restraint.energy(-165.0, Some(360.0)) / expected - 1.0).abs() < tolerance::ROUNDING_RELATIVE);
        let far = 0.5 * 0.02 * 335.0_f64.powi(2);
        assert!((restraint.energy(-165.0, None) / far - 1.0).abs() < tolerance::ROUNDING_RELATIVE);
    }

    #[test]
    fn not_a_number_and_negative_force_constants_are_refused() {
        for (center, force_constant, valid) in [
            (0.3, 7.0, true),
            (f64::NAN, 7.0, false),
            (0.3, -7.0, false),
            (0.3, f64::NAN, false),
            (0.3, f64::INFINITY, false),
        ] {
            assert_eq!(Restraint::Harmonic { center, force_constant }.is_valid(), valid);
        }
    }
}
