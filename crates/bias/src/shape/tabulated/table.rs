//! A table of energies, its interpolation, and what lies outside it.

use serde::Serialize;

use super::TableError;
use super::rows::{check_increasing, check_rows, ends_are_equal};
use super::segment::Segment;
use super::spline;
use crate::{Axis, BiasError};

/// A table counts as one full period long within this fraction of the period, so that an end printed to
/// six digits, such as 3.14159, still closes the circle.
const FULL_PERIOD_TOLERANCE: f64 = 1e-5;

/// How energies between the rows of a table are found.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Interpolation {
    /// Straight lines; the slope jumps at each row.
    Linear,
    /// A cubic spline: natural (no curvature at its ends), or periodic where the table closes on itself.
    Cubic,
}

impl Interpolation {
    /// The least number of rows it needs.
    #[must_use]
    pub const fn least_rows(self) -> usize {
        match self {
            Self::Linear => 2,
            Self::Cubic => 3,
        }
    }
}

/// The energy outside a table.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum OutsideRule {
    /// There is none: asking for it is an error.
    Error,
    /// That of the nearer end.
    Hold,
    /// The straight line that goes on from the nearer end with its slope.
    Extend,
}

/// A bias given as a table of energies over positions.
///
/// On an axis of period P the table covers one stretch of at most P, in any image. When it covers all of P
/// and its ends have the same energy it closes on itself; when they differ, the energy jumps there. When
/// it covers less, the [`OutsideRule`] holds in the gap, each half of which belongs to the nearer end.
///
/// The spline is that of C. de Boor, *A Practical Guide to Splines*, Springer 1978, chapter IV, through
/// its second derivatives at the rows. An energy costs one binary search over the rows.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Tabulated {
    positions: Vec<f64>,
    energies: Vec<f64>,
    interpolation: Interpolation,
    outside: OutsideRule,
    period: Option<f64>,
    /// Where the image of the axis that the table is evaluated in begins.
    #[serde(skip)]
    image_start: f64,
    #[serde(skip)]
    closed: bool,
    /// Second derivatives at the rows; 0 for straight lines.
    #[serde(skip)]
    curvatures: Vec<f64>,
}

impl Tabulated {
    /// A table of `energies` (kT) at `positions` (unit of `axis`, strictly increasing) along `axis`.
    ///
    /// Linear interpolation needs 2 rows or more, cubic 3. A last row that lies one period after the first
    /// within 1e-5 of it is moved to precisely there.
    ///
    /// # Errors
    /// [`BiasError::Table`] when the columns differ in length, there are too few rows, a number is not
    /// finite, the positions do not increase strictly, or they span more than the period of `axis`.
    ///
    /// ```
    /// use spandrel_bias::{Axis, Interpolation, OutsideRule, Tabulated, units::PositionUnit};
    /// let axis = Axis::new("depth", PositionUnit::Nanometer, None)?;
    /// let (positions, energies) = (vec![0.2, 0.5, 1.1], vec![3.0, 0.5, 2.5]);
    /// let table =
    ///     Tabulated::new(&axis, positions, energies, Interpolation::Cubic, OutsideRule::Hold)?;
    /// assert_eq!(table.range(), (0.2, 1.1));
    /// # Ok::<(), Box<dyn std::error::Error>>(())
    /// ```
    pub fn new(
        axis: &Axis,
        mut positions: Vec<f64>,
        mut energies: Vec<f64>,
        interpolation: Interpolation,
        outside: OutsideRule,
    ) -> Result<Self, BiasError> {
        check_rows(&positions, &energies, interpolation.least_rows())?;
        let last = positions.len() - 1;
        let mut image_start = positions[0];
        let mut closed = false;
        if let Some(period) = axis.period() {
            let span = positions[last] - positions[0];
            if (span - period).abs() <= FULL_PERIOD_TOLERANCE * period {
                positions[last] = positions[0] + period;
                check_increasing(&positions)?;
                closed = ends_are_equal(&energies);
                if closed {
                    energies[last] = energies[0];
                }
            } else if span > period {
                let axis = axis.name().to_owned();
                return Err(TableError::BeyondPeriod { axis, span, period }.into());
            } else {
                image_start = 0.5 * (positions[0] + positions[last]) - 0.5 * period;
            }
        }
        let curvatures = match interpolation {
            Interpolation::Linear => vec![0.0; positions.len()],
            Interpolation::Cubic if closed => spline::periodic(&positions, &energies),
            Interpolation::Cubic => spline::natural(&positions, &energies),
        };
        Ok(Self { positions, energies, interpolation, outside, period: axis.period(), image_start, closed, curvatures })
    }

    /// The positions of the rows, in the unit of the axis.
    #[must_use]
    pub fn positions(&self) -> &[f64] {
        &self.positions
    }

    /// The energies of the rows, in kT.
    #[must_use]
    pub fn energies(&self) -> &[f64] {
        &self.energies
    }

    /// How energies between the rows are found.
    #[must_use]
    pub const fn interpolation(&self) -> Interpolation {
        self.interpolation
    }

    /// What holds outside the table.
    #[must_use]
    pub const fn outside(&self) -> OutsideRule {
        self.outside
    }

    /// The first and the last position.
    #[must_use]
    pub fn range(&self) -> (f64, f64) {
        (self.positions[0], self.positions[self.positions.len() - 1])
    }

    /// Whether the table covers a whole period and closes on itself without a jump.
    #[must_use]
    pub const fn is_closed(&self) -> bool {
        self.closed
    }

    pub(in crate::shape) const fn period(&self) -> Option<f64> {
        self.period
    }

    /// Where the image of the axis that the table is evaluated in begins.
    pub(super) const fn image_start(&self) -> f64 {
        self.image_start
    }

    pub(super) fn n_segments(&self) -> usize {
        self.positions.len() - 1
    }

    pub(super) fn segment(&self, index: usize) -> Segment {
        Segment {
            start: self.positions[index],
            end: self.positions[index + 1],
            energies: [self.energies[index], self.energies[index + 1]],
            curvatures: [self.curvatures[index], self.curvatures[index + 1]],
        }
    }

    /// Between two rows the curvature is linear, so the largest is found at a row.
    pub(in crate::shape) fn largest_curvature(&self) -> f64 {
        self.curvatures.iter().fold(0.0, |largest, curvature| curvature.abs().max(largest))
    }

    pub(in crate::shape) fn breakpoints(&self) -> Vec<f64> {
        let (first, last) = self.range();
        // A table of a whole turn ends where it begins; the point where it jumps is added below.
        let has_ends = !self.closed && self.period.is_none_or(|period| last - first < period);
        let mut breakpoints = match (self.interpolation, self.outside) {
            (Interpolation::Linear, _) => self.positions.clone(),
            // Beyond its ends the table is flat, or not at all: a cell that straddles one would speak for samples outside.
            (Interpolation::Cubic, OutsideRule::Hold | OutsideRule::Error) if has_ends => vec![first, last],
            (Interpolation::Cubic, _) => Vec::new(),
        };
        if self.period.is_some() && !self.closed {
            breakpoints.push(self.image_start);
        }
        breakpoints
    }
}
