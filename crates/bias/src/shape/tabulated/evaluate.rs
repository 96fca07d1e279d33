//! Energies and derivatives of a table at a position.

use super::segment::Segment;
use super::table::{OutsideRule, Tabulated};
use crate::axis::into_period;

/// Bringing a position into the table's own image of a periodic axis may move it by this fraction of the
/// period: a few units of rounding for positions up to a thousand periods away.
pub(super) const FOLDING_TOLERANCE: f64 = 1e-12;

impl Tabulated {
    /// Index of the segment that holds `position`, which must lie in the table.
    pub(super) fn segment_index(&self, position: f64) -> usize {
        let after = self.positions().partition_point(|&row| row <= position);
        after.clamp(1, self.n_segments()) - 1
    }

    /// `position` in the image of the axis that the table is evaluated in.
    fn folded(&self, position: f64) -> f64 {
        let Some(period) = self.period() else {
            return position;
        };
        let folded = into_period(position, self.image_start(), period);
        let (first, last) = self.range();
        let slack = FOLDING_TOLERANCE * period;
        if folded < first && folded >= first - slack {
            first
        } else if folded > last && folded <= last + slack {
            last
        } else {
            folded
        }
    }

    fn place(&self, position: f64) -> Place {
        let position = self.folded(position);
        let (first, last) = self.range();
        if first <= position && position <= last {
            Place::Inside(self.segment(self.segment_index(position)), position)
        } else if position < first {
            Place::Beyond(self.segment(0), first, position)
        } else if position > last {
            Place::Beyond(self.segment(self.n_segments() - 1), last, position)
        } else {
            Place::NotANumber
        }
    }

    pub(in crate::shape) fn energy(&self, position: f64) -> Option<f64> {
        match (self.place(position), self.outside()) {
            (Place::Inside(segment, position), _) => Some(segment.energy(position)),
            (_, OutsideRule::Error) => None,
            (Place::Beyond(segment, end, _), OutsideRule::Hold) => Some(segment.energy(end)),
            (Place::Beyond(segment, end, position), OutsideRule::Extend) => {
                Some(segment.energy(end) + segment.slope(end) * (position - end))
            }
            (Place::NotANumber, _) => Some(f64::NAN),
        }
    }

    pub(in crate::shape) fn slope(&self, position: f64) -> Option<f64> {
        match (self.place(position), self.outside()) {
            (Place::Inside(segment, position), _) => Some(segment.slope(position)),
            (_, OutsideRule::Error) => None,
            (Place::Beyond(..), OutsideRule::Hold) => Some(0.0),
            (Place::Beyond(segment, end, _), OutsideRule::Extend) => Some(segment.slope(end)),
            (Place::NotANumber, _) => Some(f64::NAN),
        }
    }

    pub(in crate::shape) fn curvature(&self, position: f64) -> Option<f64> {
        match (self.place(position), self.outside()) {
            (Place::Inside(segment, position), _) => Some(segment.curvature(position)),
            (_, OutsideRule::Error) => None,
            (Place::Beyond(..), OutsideRule::Hold | OutsideRule::Extend) => Some(0.0),
            (Place::NotANumber, _) => Some(f64::NAN),
        }
    }
}

/// Where a position lies with respect to a table.
enum Place {
    /// In this segment, at this position of the table's image.
    Inside(Segment, f64),
    /// Beyond the segment at an end, beyond this end, at this position of the table's image.
    Beyond(Segment, f64, f64),
    /// Nowhere: the position is not a number.
    NotANumber,
}
