//! The output bins along one axis, and positions as fixed-point numbers on them.

use serde::Serialize;
use std::fmt;

/// Binary digits kept below one bin: a position is resolved to 2⁻⁴⁰ of a bin.
pub(super) const FRACTION_BITS: u32 = 40;

/// Bins on either side of the origin that fixed-point positions can reach.
const MOST_BINS: f64 = 4_194_304.0;

/// Equal bins along one axis: bin `i` spans `origin + i·width` to `origin + (i+1)·width`, `i` any integer.
///
/// On an axis with a period the bins repeat after a whole number of them, and `i` runs from 0 to that number less one.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct BinGrid {
    axis: usize,
    origin: f64,
    width: f64,
    n_bins_in_period: Option<u32>,
}

/// Why bins cannot be laid.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum BinGridError {
    /// The width is not a positive finite number, or the origin is not finite.
    NotFinite {
        /// The origin given.
        origin: f64,
        /// The width given.
        width: f64,
    },
    /// The period is not a whole number of bins.
    PeriodNotWhole {
        /// The period, in the axis' unit.
        period: f64,
        /// The width given.
        width: f64,
    },
}

impl fmt::Display for BinGridError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NotFinite { origin, width } => {
                write!(
                    f,
                    "bins need a finite origin and a positive finite width, found origin {origin} and width {width}"
                )
            }
            Self::PeriodNotWhole { period, width } => {
                write!(f, "the period {period} is not a whole number of bins of width {width}")
            }
        }
    }
}

impl std::error::Error for BinGridError {}

impl BinGrid {
    /// Bins of `width` along axis number `axis` (from 0), with an edge at `origin`; both in the axis' unit.
    ///
    /// # Errors
    /// A width that is not positive and finite, or a period that is not a whole number of bins within 1e-9 of the period.
    pub fn new(axis: usize, origin: f64, width: f64, period: Option<f64>) -> Result<Self, BinGridError> {
        if !(origin.is_finite() && width.is_finite() && width > 0.0) {
            return Err(BinGridError::NotFinite { origin, width });
        }
        let n_bins_in_period = match period {
            None => None,
            Some(period) => {
                let n_bins = (period / width).round();
                let whole = (n_bins * width - period).abs() <= 1e-9 * period;
                if !(whole && (1.0..=MOST_BINS).contains(&n_bins)) {
                    return Err(BinGridError::PeriodNotWhole { period, width });
                }
                #[expect(
                    clippy::cast_possible_truncation,
                    clippy::cast_sign_loss,
                    reason = "checked to lie in 1..=2^22"
                )]
                Some(n_bins as u32)
            }
        };
        Ok(Self { axis, origin, width, n_bins_in_period })
    }

    /// Number of the axis (from 0) that the bins divide.
    #[must_use]
    pub fn axis(&self) -> usize {
        self.axis
    }

    /// Width of a bin in the axis' unit.
    #[must_use]
    pub fn width(&self) -> f64 {
        self.width
    }

    /// Bins in one period; `None` on an axis without a period.
    #[must_use]
    pub fn n_bins_in_period(&self) -> Option<u32> {
        self.n_bins_in_period
    }

    /// Lower edge of bin `i` in the axis' unit.
    #[must_use]
    pub fn lower_edge(&self, i: i64) -> f64 {
        self.origin + i as f64 * self.width
    }

    /// Middle of bin `i` in the axis' unit.
    #[must_use]
    pub fn center(&self, i: i64) -> f64 {
        f64::midpoint(self.lower_edge(i), self.lower_edge(i + 1))
    }

    /// Number of the bin that holds `x`; `None` if `x` is not finite or lies more than four million bins from the origin.
    #[must_use]
    pub fn bin_of(&self, x: f64) -> Option<i64> {
        self.fixed_point(x).map(|fixed| fixed >> FRACTION_BITS)
    }

    /// The bins that the stretch from `from` to `to` touches: the first one, not wrapped, and how many, at least 1.
    ///
    /// An end that lies on an edge (within 1e-9 of a bin) does not touch the bin beyond it. `None` unless `from < to`, both in reach, and on
    /// an axis with a period no more than that apart.
    #[must_use]
    pub fn touched_by(&self, from: f64, to: f64) -> Option<(i64, u32)> {
        let start = ((from - self.origin) / self.width + 1e-9).floor();
        let end = ((to - self.origin) / self.width - 1e-9).ceil();
        let n_bins = (end - start).max(1.0);
        let most = self.n_bins_in_period.map_or(MOST_BINS, f64::from);
        if !(from < to && start.abs() <= MOST_BINS && n_bins <= most) {
            return None;
        }
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "both are at most 2^22, the count at least 1"
        )]
        Some((start as i64, n_bins as u32))
    }

    /// Position as a fixed-point number of bins from the origin, wrapped into the first period.
    ///
    /// Rounded to the nearest step, so that a decimal number on an edge falls into the bin above it although neither is exact in binary.
    pub(super) fn fixed_point(&self, x: f64) -> Option<i64> {
        let bins = (x - self.origin) / self.width;
        // Wrapped once before the conversion, so that far images stay in reach, and once after it, where rounding may reach the period.
        let period = self.n_bins_in_period.map(f64::from);
        let bins = period.map_or(bins, |period| bins.rem_euclid(period));
        if !(-MOST_BINS..=MOST_BINS).contains(&bins) {
            return None;
        }
        #[expect(clippy::cast_possible_truncation, reason = "|bins| <= 2^22, so the product stays within 2^62")]
        let fixed = (bins * (1_u64 << FRACTION_BITS) as f64).round() as i64;
        Some(self.n_bins_in_period.map_or(fixed, |n_bins| fixed.rem_euclid(i64::from(n_bins) << FRACTION_BITS)))
    }

    /// Mean of `count` fixed-point positions whose sum is `sum`, in the axis' unit.
    pub(crate) fn position_of(&self, sum: i128, count: u64) -> f64 {
        // Whole part and remainder apart, so that no digit is lost in the conversion of a large sum.
        let count_wide = i128::from(count);
        let whole = sum.div_euclid(count_wide);
        let rest = sum.rem_euclid(count_wide);
        #[expect(
            clippy::cast_precision_loss,
            reason = "the mean is below 2^62 and its low bits lie beyond the digits of a position"
        )]
        let fixed = whole as f64 + rest as f64 / count as f64;
        self.origin + self.width * (fixed / (1_u64 << FRACTION_BITS) as f64)
    }
}
