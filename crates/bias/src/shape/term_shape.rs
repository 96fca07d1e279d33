//! One shape out of all, on one axis.

use serde::Serialize;

use super::{FlatBottomed, Harmonic, Linear, OneSidedHarmonic, OutsideRule, PeriodicHarmonic, Tabulated};
use crate::{Axis, BiasError};

/// The shape of a bias term. Each kind converts into this with `into()`.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(tag = "shape", rename_all = "snake_case")]
#[non_exhaustive]
pub enum Shape {
    /// ½ k (x − c)², on an axis without a period.
    Harmonic(Harmonic),
    /// ½ k d² about the nearest image of the center, on an axis with a period.
    PeriodicHarmonic(PeriodicHarmonic),
    /// A constant force, on an axis without a period.
    Linear(Linear),
    /// A harmonic wall on one side of a bound, on an axis without a period.
    OneSidedHarmonic(OneSidedHarmonic),
    /// No force near the center and harmonic walls beyond.
    FlatBottomed(FlatBottomed),
    /// An interpolated table of energies.
    Tabulated(Tabulated),
}

impl Shape {
    /// Whether the shape, as term number `term`, may act on `axis`.
    pub(crate) fn check_axis(&self, term: usize, axis: &Axis) -> Result<(), BiasError> {
        let not_allowed =
            |shape, advice| BiasError::PeriodNotAllowed { term, axis: axis.name().to_owned(), shape, advice };
        match (self, axis.period()) {
            (Self::Harmonic(_), Some(_)) => Err(not_allowed("a harmonic", "use a periodic harmonic")),
            (Self::Linear(_), Some(_)) => {
                Err(not_allowed("a constant force", "give the energy as a table if it closes on itself"))
            }
            (Self::OneSidedHarmonic(_), Some(_)) => Err(not_allowed(
                "a one-sided harmonic",
                "use a flat-bottomed harmonic, which has a wall on either side",
            )),
            (Self::PeriodicHarmonic(_), None) => Err(BiasError::PeriodNeeded { term, axis: axis.name().to_owned() }),
            (Self::FlatBottomed(shape), Some(period)) if shape.half_width() >= 0.5 * period => {
                Err(BiasError::FlatBottomTooWide {
                    term,
                    axis: axis.name().to_owned(),
                    half_width: shape.half_width(),
                    period,
                })
            }
            (Self::Tabulated(table), period) if table.period() != period => Err(BiasError::TableForAnotherAxis {
                term,
                axis: axis.name().to_owned(),
                prepared_for: table.period(),
                period,
            }),
            _ => Ok(()),
        }
    }

    /// The energy in kT; none where a table with the rule [`OutsideRule::Error`] has none.
    pub(crate) fn energy(&self, axis: &Axis, position: f64) -> Option<f64> {
        match self {
            Self::Harmonic(shape) => Some(shape.energy(position)),
            Self::PeriodicHarmonic(shape) => Some(shape.energy(axis, position)),
            Self::Linear(shape) => Some(shape.energy(position)),
            Self::OneSidedHarmonic(shape) => Some(shape.energy(position)),
            Self::FlatBottomed(shape) => Some(shape.energy(axis, position)),
            Self::Tabulated(shape) => shape.energy(position),
        }
    }

    /// The first derivative in kT per axis unit; none where there is no energy.
    pub(crate) fn slope(&self, axis: &Axis, position: f64) -> Option<f64> {
        match self {
            Self::Harmonic(shape) => Some(shape.slope(position)),
            Self::PeriodicHarmonic(shape) => Some(shape.slope(axis, position)),
            Self::Linear(shape) => Some(shape.slope()),
            Self::OneSidedHarmonic(shape) => Some(shape.slope(position)),
            Self::FlatBottomed(shape) => Some(shape.slope(axis, position)),
            Self::Tabulated(shape) => shape.slope(position),
        }
    }

    /// The second derivative in kT per squared axis unit; none where there is no energy.
    pub(crate) fn curvature(&self, axis: &Axis, position: f64) -> Option<f64> {
        match self {
            Self::Harmonic(shape) => Some(shape.force_constant()),
            Self::PeriodicHarmonic(shape) => Some(shape.force_constant()),
            Self::Linear(_) => Some(0.0),
            Self::OneSidedHarmonic(shape) => Some(shape.curvature(position)),
            Self::FlatBottomed(shape) => Some(shape.curvature(axis, position)),
            Self::Tabulated(shape) => shape.curvature(position),
        }
    }

    /// The largest magnitude of the second derivative, kinks apart.
    pub(crate) fn largest_curvature(&self) -> f64 {
        match self {
            Self::Harmonic(shape) => shape.force_constant(),
            Self::PeriodicHarmonic(shape) => shape.force_constant(),
            Self::Linear(_) => 0.0,
            Self::OneSidedHarmonic(shape) => shape.force_constant(),
            Self::FlatBottomed(shape) => shape.force_constant(),
            Self::Tabulated(shape) => shape.largest_curvature(),
        }
    }

    /// Where a derivative up to the second, or the energy itself, jumps.
    pub(crate) fn breakpoints(&self, axis: &Axis) -> Vec<f64> {
        match self {
            Self::Harmonic(_) | Self::Linear(_) => Vec::new(),
            Self::PeriodicHarmonic(shape) => antipode(axis, shape.center()).into_iter().collect(),
            Self::OneSidedHarmonic(shape) => vec![shape.bound()],
            Self::FlatBottomed(shape) => {
                let mut edges = vec![shape.center() - shape.half_width(), shape.center() + shape.half_width()];
                edges.extend(antipode(axis, shape.center()));
                edges
            }
            Self::Tabulated(shape) => shape.breakpoints(),
        }
    }

    /// The least energy between `lower` and `upper`, or slightly less.
    pub(crate) fn minimum(&self, axis: &Axis, lower: f64, upper: f64) -> f64 {
        match self {
            Self::Harmonic(shape) => shape.minimum(lower, upper),
            Self::PeriodicHarmonic(shape) => shape.minimum(axis, lower, upper),
            Self::Linear(shape) => shape.minimum(lower, upper),
            Self::OneSidedHarmonic(shape) => shape.minimum(lower, upper),
            Self::FlatBottomed(shape) => shape.minimum(axis, lower, upper),
            Self::Tabulated(shape) => shape.minimum(lower, upper),
        }
    }

    /// The center, for shapes that have one.
    pub(crate) fn center(&self) -> Option<f64> {
        match self {
            Self::Harmonic(shape) => Some(shape.center()),
            Self::PeriodicHarmonic(shape) => Some(shape.center()),
            Self::FlatBottomed(shape) => Some(shape.center()),
            Self::Linear(_) | Self::OneSidedHarmonic(_) | Self::Tabulated(_) => None,
        }
    }

    /// The stretch outside which there is no energy, for tables that have such a rule.
    pub(crate) fn limited_domain(&self) -> Option<(f64, f64)> {
        match self {
            Self::Tabulated(table) if table.outside() == OutsideRule::Error => Some(table.range()),
            _ => None,
        }
    }
}

fn antipode(axis: &Axis, center: f64) -> Option<f64> {
    axis.period().map(|period| center + 0.5 * period)
}

macro_rules! into_shape {
    ($($kind:ident),+) => {
        $(impl From<$kind> for Shape {
            fn from(shape: $kind) -> Self {
                Self::$kind(shape)
            }
        })+
    };
}

into_shape!(Harmonic, PeriodicHarmonic, Linear, OneSidedHarmonic, FlatBottomed, Tabulated);
