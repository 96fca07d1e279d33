//! The bins of the profile and its zero.

use spandrel_solver::condense::BinGrid;
use spandrel_solver::profile::{ProfileRequest, Zero};

use super::axes::Axes;
use super::fitting_bins::{WHOLE, fitting_bins, is_whole};
use crate::job::mark::{Faulty, Mark, Optional, Typed};
use crate::job::model::ProfileSettings;
use crate::job::number::{readable, rough};
use crate::job::problem::{Problem, Problems};
use crate::job::typed::{TypedBins, TypedProfile, TypedZero};

/// Most bins of a profile: more than any plot or file of one can use.
const MOST_BINS: f64 = 1e6;

/// Checks `[profile]`.
pub(super) fn check(typed: &TypedProfile, axes: &Axes, problems: &mut Problems) -> Option<ProfileSettings> {
    let axis = match &typed.axis {
        Ok(Some(name)) => axes.find("profile.axis", name, problems),
        Err(Faulty) => None,
        Ok(None) => axes.only("profile.axis", typed.mark, problems),
    };
    let period = axes.get(axis?)?.period.ok()?;
    let bins = Bins { typed, mark: typed.mark, period };
    let range = bins.range(problems).ok()?;
    let width = bins.width(range, problems)?;
    let settings = bins.grid(axis?, range, width, problems)?;
    let zero = zero(typed.zero?, range, period, problems)?;
    Some(ProfileSettings { request: ProfileRequest { zero, ..settings.request }, ..settings })
}

/// A range whose ends are in the wrong order.
pub(super) fn not_above(path: &str, from: Typed<f64>, to: Typed<f64>) -> Problem {
    let (from_text, to_text) = (readable(from.value), readable(to.value));
    Problem::at(to.mark, format!("`{path}.to`: expected a number above `from`, {from_text}, found {to_text}"))
        .label(from.mark, "`from`")
}

struct Bins<'a> {
    typed: &'a TypedProfile,
    mark: Mark,
    period: Option<f64>,
}

impl Bins<'_> {
    /// The range of the output; none for the sampled range.
    fn range(&self, problems: &mut Problems) -> Optional<(f64, f64)> {
        let (from, to) = (self.typed.from?, self.typed.to?);
        match (from, to, self.period) {
            (Some(from), Some(to), _) => self.both_ends(from, to, problems).map(Some),
            (Some(from), None, Some(period)) => Ok(Some((from.value, from.value + period))),
            (None, Some(to), Some(period)) => Ok(Some((to.value - period, to.value))),
            (None, None, Some(period)) => {
                let from = self.typed.origin?.map_or(-0.5 * period, |origin| origin.value);
                Ok(Some((from, from + period)))
            }
            (Some(end), None, None) | (None, Some(end), None) => {
                let (here, missing) = if from.is_some() { ("from", "to") } else { ("to", "from") };
                problems.push(
                    Problem::at(
                        end.mark,
                        format!("`profile.{missing}`: expected both ends of the range or none, found only `{here}`"),
                    )
                    .help(format!("add `{missing}`, or leave `{here}` out for the sampled range")),
                );
                Err(Faulty)
            }
            (None, None, None) => Ok(None),
        }
    }

    fn both_ends(&self, from: Typed<f64>, to: Typed<f64>, problems: &mut Problems) -> Result<(f64, f64), Faulty> {
        let length = to.value - from.value;
        let allowed = self.period.map_or(f64::INFINITY, |period| period * (1.0 + WHOLE));
        if length > 0.0 && length <= allowed {
            return Ok((from.value, to.value));
        }
        problems.push(if length > 0.0 {
            Problem::at(
                to.mark,
                format!(
                    "`profile.to`: expected a range of at most the period, {}, found {}",
                    readable(self.period.unwrap_or_default()),
                    readable(length)
                ),
            )
            .label(from.mark, "`from`")
        } else {
            not_above("profile", from, to)
        });
        Err(Faulty)
    }

    fn width(&self, range: Option<(f64, f64)>, problems: &mut Problems) -> Option<f64> {
        let (width, mark) = match (self.typed.bins?, range) {
            (TypedBins::Width(width), _) => (width.value, width.mark),
            #[expect(clippy::cast_precision_loss, reason = "more than a million bins are refused below")]
            (TypedBins::Number(number), Some((from, to))) => ((to - from) / number.value as f64, number.mark),
            (TypedBins::Number(number), None) => {
                problems.push(
                    Problem::at(number.mark, "`profile.bins`: expected `from` and `to` beside it, found neither")
                        .help("add the range that is divided into bins, or give `bin_width` instead"),
                );
                return None;
            }
        };
        let Some((from, to)) = range else { return Some(width) };
        let few = (to - from) / width <= MOST_BINS;
        if !few {
            problems.push(
                Problem::at(
                    mark,
                    format!("`profile`: expected at most {MOST_BINS} bins, found {}", rough((to - from) / width)),
                )
                .help("widen the bins or narrow the range"),
            );
            return None;
        }
        let length = to - from;
        let whole = self.whole("range", length, length, width, mark, problems);
        // A part of a period can be a whole number of bins while the period is not.
        let closing = match self.period {
            Some(period) if whole => self.whole("period", period, length, width, mark, problems),
            _ => true,
        };
        (whole && closing).then_some(width)
    }

    /// Whether the `what` of this length is a whole number of bins.
    fn whole(&self, what: &str, length: f64, range: f64, width: f64, mark: Mark, problems: &mut Problems) -> bool {
        if is_whole(length, width) {
            return true;
        }
        let key = match self.typed.bins {
            Some(TypedBins::Number(_)) => "bins",
            Some(TypedBins::Width(_)) | None => "bin_width",
        };
        let mut problem = Problem::at(
            mark,
            format!(
                "`profile.{key}`: expected a whole number of bins in the {what} of {}, found {}",
                readable(length),
                rough(length / width)
            ),
        )
        .help(fitting_bins(range, self.period, width));
        if let (Ok(Some(from)), Ok(Some(to))) = (self.typed.from, self.typed.to) {
            problem = problem.label(from.mark, "").label(to.mark, "");
        }
        problems.push(problem);
        false
    }

    fn grid(
        &self,
        axis: usize,
        range: Option<(f64, f64)>,
        width: f64,
        problems: &mut Problems,
    ) -> Option<ProfileSettings> {
        let typed_origin = self.typed.origin.ok()?;
        // With a period the first bin shown is bin 0; a given origin only has to be an edge of these bins.
        let origin = match (typed_origin, range) {
            (_, Some((from, _))) if self.period.is_some() => from,
            (Some(origin), _) => origin.value,
            (None, Some((from, _))) => from,
            (None, None) => 0.0,
        };
        if let (Some(typed), Some((from, _))) = (typed_origin, range) {
            let steps = (from - typed.value) / width;
            let whole = (steps - steps.round()).abs() <= WHOLE * steps.abs().max(1.0);
            if !whole {
                problems.push(
                    Problem::at(
                        typed.mark,
                        format!(
                            "`profile.origin`: expected a whole number of bins from `from`, {}, found {}",
                            readable(from),
                            rough(steps)
                        ),
                    )
                    .help("leave it out; bins then begin at `from`"),
                );
                return None;
            }
        }
        let bins = match BinGrid::new(axis, origin, width, self.period) {
            Ok(bins) => bins,
            Err(error) => {
                problems.push(Problem::at(self.mark, format!("`profile`: {error}")));
                return None;
            }
        };
        let bin_at = |edge: f64| whole_bin((edge - origin) / width);
        let ends = range.map(|(from, to)| (bin_at(from), bin_at(to)));
        let (first_bin, last_bin) = match ends {
            None => (None, None),
            Some((Some(first), Some(beyond))) => (Some(first), Some(beyond - 1)),
            Some(_) => {
                problems.push(
                    Problem::at(
                        self.mark,
                        "`profile`: expected a range within four million bins of the origin, found one farther away",
                    )
                    .help("leave `origin` out; bins then begin at `from`"),
                );
                return None;
            }
        };
        let request = ProfileRequest { first_bin, last_bin, zero: Zero::Minimum };
        Some(ProfileSettings { bins, origin, request })
    }
}

/// A number of bins as a whole number; `None` beyond a few million.
fn whole_bin(steps: f64) -> Option<i64> {
    let rounded = steps.round();
    #[expect(clippy::cast_possible_truncation, reason = "checked to lie within a few million")]
    (rounded.abs() <= 4.0 * MOST_BINS).then_some(rounded as i64)
}

fn zero(typed: TypedZero, range: Option<(f64, f64)>, period: Option<f64>, problems: &mut Problems) -> Option<Zero> {
    let inside = |position: f64| match (range, period) {
        (None, _) => true,
        (Some((from, to)), None) => (from..=to).contains(&position),
        (Some((from, to)), Some(period)) => (position - from).rem_euclid(period) <= to - from,
    };
    let outside = |path: &str, position: Typed<f64>| {
        let (from, to) = range.unwrap_or_default();
        Problem::at(
            position.mark,
            format!(
                "`{path}`: expected a position in the range of the profile, {} to {}, found {}",
                readable(from),
                readable(to),
                readable(position.value)
            ),
        )
    };
    match typed {
        TypedZero::Minimum => Some(Zero::Minimum),
        TypedZero::Position(position) if inside(position.value) => Some(Zero::Position { position: position.value }),
        TypedZero::Position(position) => {
            problems.push(outside("profile.zero.position", position));
            None
        }
        TypedZero::Range { from, to } if to.value - from.value <= 0.0 => {
            problems.push(not_above("profile.zero", from, to));
            None
        }
        TypedZero::Range { from, to } => {
            for (path, end) in [("profile.zero.from", from), ("profile.zero.to", to)] {
                if !inside(end.value) {
                    problems.push(outside(path, end));
                    return None;
                }
            }
            Some(Zero::Range { from: from.value, to: to.value })
        }
    }
}
