//! Which frames of a joined series are kept.

use std::num::NonZeroU64;

use serde::Serialize;

use crate::error::IngestError;
use crate::readable_number::readable_number;

/// What is left out at the start of a joined series.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Discard {
    /// Nothing.
    #[default]
    Nothing,
    /// This many frames.
    Frames(u64),
    /// The frames whose time is less than this much after the first frame's time; finite, at least 0.
    /// A difference within rounding (four units in the last place) counts as equal, and the frame is kept.
    Time(f64),
    /// This fraction of all frames, rounded down; at least 0 and below 1. The files are then read twice.
    Fraction(f64),
}

/// Which frames of a joined series are kept. Frames that were written twice are gone before anything is counted here.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Selection {
    /// What is left out at the start.
    pub discard: Discard,
    /// Of what remains, the first frame and every `stride`-th after it are kept, counted over all segments.
    pub stride: NonZeroU64,
}

impl Default for Selection {
    /// Every frame.
    fn default() -> Self {
        Self { discard: Discard::Nothing, stride: NonZeroU64::MIN }
    }
}

impl Selection {
    /// Refuses a time that is not finite and at least 0, and a fraction outside 0 to 1 (1 itself is outside).
    ///
    /// # Errors
    /// [`IngestError::Setting`] with the setting at fault.
    pub fn check(&self) -> Result<(), IngestError> {
        let (allowed, expected, found) = match self.discard {
            Discard::Nothing | Discard::Frames(_) => return Ok(()),
            Discard::Time(time) => (time >= 0.0 && time.is_finite(), "a finite time of at least 0", time),
            Discard::Fraction(fraction) => {
                ((0.0..1.0).contains(&fraction), "a fraction of at least 0 and below 1", fraction)
            }
        };
        if allowed {
            Ok(())
        } else {
            Err(IngestError::Setting { setting: "discard", expected, found: readable_number(found) })
        }
    }
}
