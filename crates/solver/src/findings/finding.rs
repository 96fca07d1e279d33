//! The findings, with their numbers inside.

use super::catalog::{Severity, ThresholdOrigin};
use crate::bootstrap::DISAGREEMENT;
use crate::profile::FEWEST_EFFECTIVE_SAMPLES;
use serde::Serialize;

/// A conclusion about the data. Windows by name, positions in the axis' unit.
#[derive(Debug, Clone, PartialEq)]
pub enum Finding {
    /// The last line of a file has no line end: a run was killed while it wrote. The line was left out.
    CutLastLine {
        /// Window of the file.
        window: String,
        /// The file, as the job names it.
        file: String,
        /// Number of the line, from 1.
        line: u64,
    },
    /// Frames that a continuation wrote again after a restart. The first copy was kept.
    RepeatedFrames {
        /// Window of the file.
        window: String,
        /// The file with the second copies, as the job names it.
        file: String,
        /// First of the repeated lines, from 1.
        line: u64,
        /// How many frames.
        frames: u64,
    },
    /// A window with few independent samples.
    FewEffectiveSamples {
        /// The window.
        window: String,
        /// Its effective samples.
        effective_samples: f64,
    },
    /// A window whose series supports no error at all: a constant coordinate, or a handful of samples.
    NoErrorSupport {
        /// The window.
        window: String,
        /// Its samples.
        samples: u64,
    },
    /// A run that drifts to its end.
    NeverSettles {
        /// The window.
        window: String,
    },
    /// The beginning of a run had not settled and was kept.
    UnsettledStart {
        /// The window.
        window: String,
        /// Samples at the beginning without which the run holds more independent ones.
        samples: u64,
        /// Effective samples without them over those with them.
        gain: f64,
    },
    /// Errors from resampling differ from those from influences.
    ErrorsDisagree {
        /// Bootstrap over influences, where they are farthest apart.
        ratio: f64,
        /// Where that is, in words.
        place: String,
    },
    /// Independent starts of the same windows differ by more than their own fluctuations in time explain.
    ReplicasDisagree {
        /// Standard error between replicas over that along them, for the worst bin.
        ratio: f64,
        /// Middle of that bin.
        position: f64,
    },
    /// Neighboring windows that no samples link.
    NotLinked {
        /// The window below the stretch.
        below: String,
        /// The window above it.
        above: String,
        /// Ends of the uncovered stretch; `None` where the two overlap, but by less than one independent sample.
        range: Option<(f64, f64)>,
        /// Whether the groups are solved apart, as the user asked.
        gaps_allowed: bool,
    },
    /// The link by which the whole profile hangs is thin.
    ThinLink {
        /// The linked windows.
        windows: (String, String),
        /// Effective linking samples.
        linking_samples: f64,
    },
    /// Neighboring bins of the profile that nothing visited.
    UnsampledBins {
        /// Lower end of the stretch.
        from: f64,
        /// Upper end of the stretch.
        to: f64,
        /// Bins in it.
        bins: usize,
    },
    /// The zero of the profile rests on so few samples that no difference from it has an error.
    ThinZero {
        /// Effective samples in it.
        effective_samples: f64,
    },
    /// Bins with a free energy whose error the data do not support.
    ErrorNotDetermined {
        /// How many.
        bins: usize,
        /// How many bins have a free energy.
        of: usize,
    },
}

/// Effective samples of a window below which its intervals are wider than the samples alone would say; see the batch rule.
pub const FEW_EFFECTIVE_SAMPLES: f64 = 20.0;
/// Linking samples below which a link is thin: its part of any error across it exceeds about 1/√20 kT.
pub const THIN_LINK: f64 = 20.0;

/// A finding as it is written to files.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct FindingRecord {
    /// Stable code.
    pub code: &'static str,
    /// How bad.
    pub severity: Severity,
    /// Windows concerned.
    pub windows: Vec<String>,
    /// The number that led to the finding.
    pub measured: Option<f64>,
    /// What it was held against.
    pub threshold: Option<f64>,
    /// Where the threshold comes from.
    pub threshold_origin: ThresholdOrigin,
    /// What was found.
    pub message: String,
    /// What to do.
    pub advice: &'static str,
}

/// A number of things, in words that fit it.
fn counted(n: u64, thing: &str) -> String {
    if n == 1 { format!("1 {thing}") } else { format!("{n} {thing}s") }
}

/// A position with six significant digits and no trailing zeros.
fn short(position: f64) -> String {
    let rounded: f64 = format!("{position:.5e}").parse().unwrap_or(position);
    format!("{rounded}")
}

impl Finding {
    /// Stable code, the same in every version.
    #[must_use]
    pub fn code(&self) -> &'static str {
        match self {
            Self::CutLastLine { .. } => "cut-last-line",
            Self::RepeatedFrames { .. } => "repeated-frames",
            Self::FewEffectiveSamples { .. } => "few-effective-samples",
            Self::NoErrorSupport { .. } => "no-error-support",
            Self::NeverSettles { .. } => "never-settles",
            Self::UnsettledStart { .. } => "unsettled-start",
            Self::ErrorsDisagree { .. } => "errors-disagree",
            Self::ReplicasDisagree { .. } => "replicas-disagree",
            Self::NotLinked { .. } => "not-linked",
            Self::ThinLink { .. } => "thin-link",
            Self::UnsampledBins { .. } => "unsampled-bins",
            Self::ThinZero { .. } => "thin-zero",
            Self::ErrorNotDetermined { .. } => "error-not-determined",
        }
    }

    /// How bad.
    #[must_use]
    pub fn severity(&self) -> Severity {
        match self {
            Self::CutLastLine { .. }
            | Self::RepeatedFrames { .. }
            // Up to one stationary run in twenty shows an evident gain by chance.
            | Self::UnsettledStart { .. }
            | Self::FewEffectiveSamples { .. } => Severity::Note,
            Self::NoErrorSupport { .. }
            | Self::NeverSettles { .. }
            | Self::ErrorsDisagree { .. }
            | Self::ReplicasDisagree { .. }
            | Self::ThinLink { .. }
            | Self::UnsampledBins { .. }
            | Self::ErrorNotDetermined { .. }
            | Self::NotLinked { gaps_allowed: true, .. }
            | Self::ThinZero { .. } => Severity::Warning,
            Self::NotLinked { gaps_allowed: false, .. } => Severity::Error,
        }
    }

    /// Names of the windows concerned.
    #[must_use]
    pub fn windows(&self) -> Vec<String> {
        match self {
            Self::CutLastLine { window, .. }
            | Self::RepeatedFrames { window, .. }
            | Self::FewEffectiveSamples { window, .. }
            | Self::NeverSettles { window }
            | Self::UnsettledStart { window, .. }
            | Self::NoErrorSupport { window, .. } => vec![window.clone()],
            Self::NotLinked { below, above, .. } => vec![below.clone(), above.clone()],
            Self::ThinLink { windows, .. } => vec![windows.0.clone(), windows.1.clone()],
            Self::ErrorsDisagree { .. }
            | Self::ReplicasDisagree { .. }
            | Self::UnsampledBins { .. }
            | Self::ThinZero { .. }
            | Self::ErrorNotDetermined { .. } => Vec::new(),
        }
    }

    /// Measured value, threshold and the latter's origin.
    fn measure(&self) -> (Option<f64>, Option<f64>, ThresholdOrigin) {
        match *self {
            Self::CutLastLine { .. } => (None, None, ThresholdOrigin::Occurrence),
            Self::RepeatedFrames { frames, .. } => (Some(frames as f64), None, ThresholdOrigin::Occurrence),
            Self::FewEffectiveSamples { effective_samples, .. } => {
                (Some(effective_samples), Some(FEW_EFFECTIVE_SAMPLES), ThresholdOrigin::Calibration)
            }
            Self::NoErrorSupport { samples, .. } => (Some(samples as f64), None, ThresholdOrigin::Definition),
            Self::NeverSettles { .. } => (None, None, ThresholdOrigin::Calibration),
            Self::UnsettledStart { gain, .. } => (Some(gain), None, ThresholdOrigin::Calibration),
            Self::ErrorsDisagree { ratio, .. } | Self::ReplicasDisagree { ratio, .. } => {
                (Some(ratio), Some(DISAGREEMENT), ThresholdOrigin::Calibration)
            }
            Self::NotLinked { .. } => (None, Some(crate::solve::LEAST_LINK), ThresholdOrigin::Definition),
            Self::ThinLink { linking_samples, .. } => {
                (Some(linking_samples), Some(THIN_LINK), ThresholdOrigin::Definition)
            }
            Self::ThinZero { effective_samples } => {
                (Some(effective_samples), Some(FEWEST_EFFECTIVE_SAMPLES), ThresholdOrigin::Definition)
            }
            Self::UnsampledBins { bins, .. } | Self::ErrorNotDetermined { bins, .. } => {
                (Some(bins as f64), None, ThresholdOrigin::Occurrence)
            }
        }
    }

    /// What was found, in words.
    #[must_use]
    pub fn message(&self) -> String {
        match self {
            Self::CutLastLine { file, line, .. } => {
                format!("{file}:{line}: the last line has no line end and was left out")
            }
            Self::RepeatedFrames { file, line, frames, .. } => {
                let frames = counted(*frames, "frame");
                format!("{file}:{line}: {frames} written before and left out here; the first copies were kept")
            }
            Self::FewEffectiveSamples { window, effective_samples } => {
                format!("window `{window}` holds only some {effective_samples:.0} independent samples")
            }
            Self::NoErrorSupport { window, samples } => {
                format!("the {samples} samples of window `{window}` support no error: too few, or all alike")
            }
            Self::NeverSettles { window } => format!("window `{window}` drifts to its end"),
            Self::UnsettledStart { window, samples, gain } => format!(
                "window `{window}` begins with {samples} samples that had not settled; without them it holds {gain:.1} times as many independent ones"
            ),
            Self::ErrorsDisagree { ratio, place } => {
                format!("resampling the runs gives {ratio:.2} times the standard error {place}")
            }
            Self::ReplicasDisagree { ratio, position } => format!(
                "replicas of the same windows differ by {ratio:.1} times what their own fluctuations explain, most of all at {}",
                short(*position)
            ),
            Self::NotLinked { below, above, range, .. } => {
                let where_to = match range {
                    Some((from, to)) => format!("the axis is not covered between {} and {}", short(*from), short(*to)),
                    None => "they overlap by less than one independent sample".to_owned(),
                };
                format!("no samples link window `{below}` with window `{above}`; {where_to}")
            }
            Self::ThinLink { windows: (a, b), linking_samples } => {
                format!("windows `{a}` and `{b}` hang together by {linking_samples:.1} effective samples")
            }
            Self::UnsampledBins { from, to, bins } => {
                format!("no sample lies between {} and {} ({})", short(*from), short(*to), counted(*bins as u64, "bin"))
            }
            Self::ThinZero { effective_samples } => format!(
                "the zero of the profile holds only some {effective_samples:.1} independent samples, so no bin has an error"
            ),
            Self::ErrorNotDetermined { bins, of } => {
                format!("{bins} of {of} bins have a free energy but no error that the data support")
            }
        }
    }

    /// What to do.
    #[must_use]
    pub fn advice(&self) -> &'static str {
        match self {
            Self::CutLastLine { .. } => {
                "nothing, if the run was stopped on purpose; otherwise finish the run and solve again"
            }
            Self::RepeatedFrames { .. } => {
                "nothing, if the run was restarted from a checkpoint; otherwise check that the files belong to one run"
            }
            Self::FewEffectiveSamples { .. } => "run the window longer; its errors are widened until then",
            Self::NoErrorSupport { .. } => {
                "check the column and the run, or exclude the window; while it takes part, no number has an error"
            }
            Self::NeverSettles { .. } => {
                "run the window longer, or start it from a better place; no error covers a drift that goes on"
            }
            Self::UnsettledStart { .. } => {
                "leave the beginning out: `discard = { automatic = true }`, or a time of your own"
            }
            Self::ErrorsDisagree { .. } => {
                "trust the larger error, and look at the windows that reach there: few samples, or two states seldom left"
            }
            Self::ReplicasDisagree { .. } => {
                "motions slower than the runs keep the starts apart: run longer, or restrain them; the quoted errors are too small"
            }
            Self::NotLinked { gaps_allowed: true, .. } => {
                "nothing, if the gap is meant; each group has a zero of its own, and nothing joins them"
            }
            Self::NotLinked { gaps_allowed: false, .. } => {
                "add a window between the two, or allow gaps: each group is then solved with a zero of its own"
            }
            Self::ThinLink { .. } => "add a window between the two, or run both longer",
            Self::UnsampledBins { .. } => "add a window there, or narrow the range of the profile",
            Self::ThinZero { .. } => "set `zero` to a place that was sampled well, or run the windows there longer",
            Self::ErrorNotDetermined { .. } => {
                "run the windows that reach there longer, widen the bins, or narrow the range of the profile"
            }
        }
    }

    /// The finding as it is written to files.
    #[must_use]
    pub fn record(&self) -> FindingRecord {
        let (measured, threshold, threshold_origin) = self.measure();
        FindingRecord {
            code: self.code(),
            severity: self.severity(),
            windows: self.windows(),
            measured,
            threshold,
            threshold_origin,
            message: self.message(),
            advice: self.advice(),
        }
    }
}
