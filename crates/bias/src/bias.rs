//! The bias of a window: a sum of terms.

use std::sync::Arc;

use serde::Serialize;

use crate::{Axis, BiasError, OutsideTable, Shape};

/// One summand of a bias: a shape along one axis.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Term {
    /// Index of the axis it acts on.
    pub axis: usize,
    /// Its energy along that axis.
    #[serde(flatten)]
    pub shape: Shape,
}

/// The bias of a window, b(x) = Σ over terms of the energy along the term's axis, in kT.
///
/// Without terms it is 0 everywhere, which is an unbiased window. A position is a slice with one value
/// an axis, each in the unit of its axis; it must be finite. Methods that take positions, corners or
/// results panic when a slice is shorter than [`n_axes`](Self::n_axes) asks for.
///
/// Only the terms are serialized, since all windows share their axes.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Bias {
    #[serde(skip)]
    axes: Arc<[Axis]>,
    terms: Vec<Term>,
}

impl Bias {
    /// The sum of `terms` over `axes`.
    ///
    /// # Errors
    /// [`BiasError`] when there is no axis, a term names an axis that does not exist, or a shape and the
    /// period of its axis (or the lack of one) do not go together.
    pub fn new(axes: Arc<[Axis]>, terms: Vec<Term>) -> Result<Self, BiasError> {
        if axes.is_empty() {
            return Err(BiasError::NoAxes);
        }
        for (index, term) in terms.iter().enumerate() {
            let axis = axes.get(term.axis).ok_or(BiasError::UnknownAxis {
                term: index,
                axis: term.axis,
                n_axes: axes.len(),
            })?;
            term.shape.check_axis(index, axis)?;
        }
        Ok(Self { axes, terms })
    }

    /// The axes.
    #[must_use]
    pub fn axes(&self) -> &Arc<[Axis]> {
        &self.axes
    }

    /// The terms.
    #[must_use]
    pub fn terms(&self) -> &[Term] {
        &self.terms
    }

    /// How many axes there are.
    #[must_use]
    pub fn n_axes(&self) -> usize {
        self.axes.len()
    }

    /// The energy at `position`, in kT.
    ///
    /// # Errors
    /// [`OutsideTable`] where a table with the rule [`OutsideRule::Error`](crate::OutsideRule::Error) has
    /// no energy.
    pub fn energy(&self, position: &[f64]) -> Result<f64, OutsideTable> {
        let mut sum = 0.0;
        for term in &self.terms {
            let along = position[term.axis];
            match term.shape.energy(&self.axes[term.axis], along) {
                Some(energy) => sum += energy,
                None => return Err(outside(term, along)),
            }
        }
        Ok(sum)
    }

    /// The gradient at `position` into `gradient`: one value an axis, in kT per axis unit.
    ///
    /// At a kink it is that of one of the two sides.
    ///
    /// # Errors
    /// [`OutsideTable`] where there is no energy; `gradient` is then not to be used.
    pub fn gradient(&self, position: &[f64], gradient: &mut [f64]) -> Result<(), OutsideTable> {
        gradient.fill(0.0);
        for term in &self.terms {
            let along = position[term.axis];
            match term.shape.slope(&self.axes[term.axis], along) {
                Some(slope) => gradient[term.axis] += slope,
                None => return Err(outside(term, along)),
            }
        }
        Ok(())
    }

    /// The matrix of second derivatives at `position` into `second_derivatives`: n × n values for n axes,
    /// row by row, each in kT over the units of its two axes.
    ///
    /// At a kink it is that of one of the two sides.
    ///
    /// # Errors
    /// [`OutsideTable`] where there is no energy; `second_derivatives` is then not to be used.
    pub fn second_derivatives(&self, position: &[f64], second_derivatives: &mut [f64]) -> Result<(), OutsideTable> {
        second_derivatives.fill(0.0);
        for term in &self.terms {
            let along = position[term.axis];
            match term.shape.curvature(&self.axes[term.axis], along) {
                Some(curvature) => second_derivatives[term.axis * (self.n_axes() + 1)] += curvature,
                None => return Err(outside(term, along)),
            }
        }
        Ok(())
    }

    /// The largest |∂²b/∂x²| along `axis` that any position can have, in kT per squared axis unit, with
    /// [breakpoints](Self::breakpoints) left out.
    ///
    /// For several terms on one axis it is the sum of their largest magnitudes, which the true value
    /// may fall short of.
    #[must_use]
    pub fn largest_curvature(&self, axis: usize) -> f64 {
        self.along(axis).map(|term| term.shape.largest_curvature()).sum()
    }

    /// The positions along `axis` where the bias or a derivative of it may jump, so that cells should not
    /// straddle them: bounds of one-sided and edges of flat-bottomed terms, knots of linearly interpolated
    /// tables, ends of tables beyond which the energy is held, and on an axis with a period the point
    /// opposite a center or a table.
    ///
    /// They stand in the order of the terms, in whatever period the terms were given in.
    #[must_use]
    pub fn breakpoints(&self, axis: usize) -> Vec<f64> {
        self.along(axis).flat_map(|term| term.shape.breakpoints(&self.axes[axis])).collect()
    }

    /// A lower bound of the energy over the box of all positions between `lower` and `upper`, in kT.
    ///
    /// It is the sum of the least energies of the single terms: the true minimum (lowered by a few units of
    /// rounding at most) when no two terms share an axis, and never above it. A corner may be infinite. On
    /// an axis with a period the two values may lie in any image, and a stretch of a period or more is the
    /// whole axis. Parts of the box outside a table that ends there are left out; when that is all of it,
    /// the least energy of the whole table counts.
    #[must_use]
    pub fn lower_bound(&self, lower: &[f64], upper: &[f64]) -> f64 {
        let minimum = |term: &Term| {
            let index = term.axis;
            term.shape.minimum(&self.axes[index], lower[index], upper[index])
        };
        self.terms.iter().map(minimum).sum()
    }

    /// The center of the first term along `axis` that has one, by which positions on an axis with a period
    /// can be unwrapped.
    #[must_use]
    pub fn reference_position(&self, axis: usize) -> Option<f64> {
        self.along(axis).find_map(|term| term.shape.center())
    }

    /// Whether there are positions at which [`energy`](Self::energy) may fail.
    #[must_use]
    pub fn has_limited_domain(&self) -> bool {
        self.terms.iter().any(|term| term.shape.limited_domain().is_some())
    }

    fn along(&self, axis: usize) -> impl Iterator<Item = &Term> {
        self.terms.iter().filter(move |term| term.axis == axis)
    }
}

#[cold]
fn outside(term: &Term, position: f64) -> OutsideTable {
    let (lower, upper) = term.shape.limited_domain().unwrap_or((f64::NEG_INFINITY, f64::INFINITY));
    OutsideTable { axis: term.axis, position, lower, upper }
}
