//! Running sums of a series at each level of pairwise merging.

use serde::Serialize;

/// Sums over one level: the values themselves (level 0), or means of 2, 4, 8… consecutive values (level 1, 2, 3…).
///
/// All sums are of differences from the cascade's reference, so that a small spread on a large offset keeps its digits.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LevelSums {
    /// Values seen at this level.
    pub count: u64,
    /// Σ y.
    pub sum: f64,
    /// Σ y².
    pub sum_of_squares: f64,
    /// Σ yₜ yₜ₊₁ over neighbors in time.
    pub sum_of_lag_products: f64,
    /// Smallest value, as a difference from the reference.
    pub minimum: f64,
    /// Largest value, as a difference from the reference.
    pub maximum: f64,
    pub(super) first: f64,
    pub(super) last: f64,
    /// The earlier half of a pair that waits for its partner.
    waiting: Option<f64>,
}

impl LevelSums {
    fn starting_with(y: f64) -> Self {
        Self {
            count: 1,
            sum: y,
            sum_of_squares: y * y,
            sum_of_lag_products: 0.0,
            minimum: y,
            maximum: y,
            first: y,
            last: y,
            waiting: Some(y),
        }
    }

    /// Takes one value in; returns the mean of a pair whenever one is complete.
    fn add(&mut self, y: f64) -> Option<f64> {
        self.count += 1;
        self.sum += y;
        self.sum_of_squares += y * y;
        self.sum_of_lag_products += self.last * y;
        self.minimum = if y < self.minimum { y } else { self.minimum };
        self.maximum = if y > self.maximum { y } else { self.maximum };
        self.last = y;
        let pair = self.waiting.take().map(|earlier| f64::midpoint(earlier, y));
        if pair.is_none() {
            self.waiting = Some(y);
        }
        pair
    }

    /// Variance of the values at this level with the divisor n, their number; 0 for a single value.
    #[must_use]
    pub fn population_variance(&self) -> f64 {
        self.centered_sum_of_squares() / self.count as f64
    }

    /// Σ (yₜ − ȳ)(yₜ₊₁ − ȳ).
    pub(super) fn centered_lag_products(&self) -> f64 {
        let mean = self.sum / self.count as f64;
        self.sum_of_lag_products - mean * (2.0 * self.sum - self.first - self.last)
            + (self.count - 1) as f64 * mean * mean
    }

    fn centered_sum_of_squares(&self) -> f64 {
        (self.sum_of_squares - self.sum * (self.sum / self.count as f64)).max(0.0)
    }
}

/// Running sums of a series at every level of pairwise merging: mean, variance, lag products and extremes, from which block
/// averages (Flyvbjerg & Petersen 1989) and correlation times follow without a second look at the series.
///
/// The memory is a few numbers a level, log₂ N levels.
///
/// ```
/// use spandrel_solver::series::Cascade;
/// let mut cascade = Cascade::default();
/// for value in [3.5, 4.5, 2.0, 6.0] {
///     cascade.push(value);
/// }
/// assert_eq!(cascade.mean(), Some(4.0));
/// assert_eq!(cascade.levels().len(), 3);
/// ```
#[derive(Debug, Clone, PartialEq, Default, Serialize)]
pub struct Cascade {
    pub(super) reference: f64,
    pub(super) levels: Vec<LevelSums>,
}

impl Cascade {
    /// Takes one value in, in the order of time.
    pub fn push(&mut self, value: f64) {
        if self.levels.is_empty() {
            self.reference = value;
        }
        self.push_difference(value - self.reference);
    }

    /// Takes one difference from the reference in.
    pub(super) fn push_difference(&mut self, difference: f64) {
        let mut carried = Some(difference);
        let mut level = 0;
        while let Some(y) = carried {
            carried = if let Some(sums) = self.levels.get_mut(level) {
                sums.add(y)
            } else {
                self.levels.push(LevelSums::starting_with(y));
                None
            };
            level += 1;
        }
    }

    /// The sums, level by level: level `j` is over means of 2^j consecutive values.
    #[must_use]
    pub fn levels(&self) -> &[LevelSums] {
        &self.levels
    }

    /// Values taken in.
    #[must_use]
    pub fn count(&self) -> u64 {
        self.levels.first().map_or(0, |level| level.count)
    }

    /// Mean of the series; `None` before the first value.
    #[must_use]
    pub fn mean(&self) -> Option<f64> {
        let level = self.levels.first()?;
        Some(self.reference + level.sum / level.count as f64)
    }

    /// Variance with the divisor N − 1; `None` for fewer than two values.
    #[must_use]
    pub fn variance(&self) -> Option<f64> {
        let level = self.levels.first()?;
        (level.count > 1).then(|| level.centered_sum_of_squares() / (level.count - 1) as f64)
    }

    /// Smallest value seen.
    #[must_use]
    pub fn minimum(&self) -> Option<f64> {
        self.levels.first().map(|level| self.reference + level.minimum)
    }

    /// Largest value seen.
    #[must_use]
    pub fn maximum(&self) -> Option<f64> {
        self.levels.first().map(|level| self.reference + level.maximum)
    }

    /// Lag-1 autocorrelation Σ(yₜ−ȳ)(yₜ₊₁−ȳ)/Σ(yₜ−ȳ)² at a level; `None` for fewer than two values or a constant series.
    #[must_use]
    pub fn lag_one_autocorrelation(&self, level: usize) -> Option<f64> {
        let sums = self.levels.get(level)?;
        let spread = sums.centered_sum_of_squares();
        if sums.count < 2 || spread <= 0.0 {
            return None;
        }
        Some(sums.centered_lag_products() / spread)
    }
}
