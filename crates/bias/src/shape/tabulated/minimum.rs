//! The least energy of a table over a stretch.

use super::evaluate::FOLDING_TOLERANCE;
use super::table::{OutsideRule, Tabulated};
use crate::axis::into_period;

/// Interpolating rounds differently from place to place; a bound is lowered by this fraction of the largest
/// energy at hand so as to stay a bound.
const INTERPOLATION_ROUNDING: f64 = 1e-13;

impl Tabulated {
    /// The least energy between `lower` and `upper`, or a little less; parts without an energy are left out,
    /// and when nothing is left it is the least energy of the whole table.
    pub(in crate::shape) fn minimum(&self, lower: f64, upper: f64) -> f64 {
        let least = match self.period() {
            None => self.least(lower, upper),
            Some(period) => self.least_folded(lower, upper, period),
        };
        let (first, last) = self.range();
        let least = if least == f64::INFINITY { self.least(first, last) } else { least };
        let scale = self.energies().iter().fold(least.abs(), |largest, energy| energy.abs().max(largest));
        least - INTERPOLATION_ROUNDING * scale
    }

    fn least_folded(&self, lower: f64, upper: f64, period: f64) -> f64 {
        let start = self.image_start();
        let end = start + period;
        let slack = FOLDING_TOLERANCE * period;
        let length = upper - lower + 2.0 * slack;
        if length >= period {
            return self.least(start, end);
        }
        let first = into_period(lower - slack, start, period);
        let last = first + length;
        if last <= end { self.least(first, last) } else { self.least(first, end).min(self.least(start, last - period)) }
    }

    /// The least energy between `lower` and `upper` in the table's own image; infinite when there is none.
    fn least(&self, lower: f64, upper: f64) -> f64 {
        let (first, last) = self.range();
        let mut least = f64::INFINITY;
        let (from, to) = (lower.max(first), upper.min(last));
        if from <= to {
            for index in self.segment_index(from)..=self.segment_index(to) {
                let segment = self.segment(index);
                let part = segment.minimum(from.max(segment.start), to.min(segment.end));
                least = least.min(part);
            }
        }
        let mut take = |end: f64, energy: f64, slope: f64, stretch: [f64; 2]| match self.outside() {
            OutsideRule::Error => {}
            OutsideRule::Hold => least = least.min(energy),
            OutsideRule::Extend if slope == 0.0 => least = least.min(energy),
            OutsideRule::Extend => {
                for position in stretch {
                    least = least.min(energy + slope * (position - end));
                }
            }
        };
        if lower < first {
            let segment = self.segment(0);
            let stretch = [lower, upper.min(first)];
            take(first, segment.energy(first), segment.slope(first), stretch);
        }
        if upper > last {
            let segment = self.segment(self.n_segments() - 1);
            let stretch = [lower.max(last), upper];
            take(last, segment.energy(last), segment.slope(last), stretch);
        }
        least
    }
}
