//! The layout of the text files, and which frames are kept.

use std::num::NonZeroU64;

use spandrel_bias::units::TimeUnit;
use spandrel_ingest::{Discard, Layout, Selection, Separator, TimeSource};

use super::axes::Axes;
use crate::job::mark::{Faulty, Mark, Typed};
use crate::job::model::AxisColumn;
use crate::job::nearest::{list, nearest};
use crate::job::problem::{Problem, Problems};
use crate::job::typed::{TypedColumn, TypedDiscard, TypedSeries, TypedTime};

/// What `[series]` settles for all windows.
#[derive(Debug)]
pub(super) struct Series {
    /// How files are read.
    pub layout: Layout,
    /// The column of each axis; `None` where one is at fault.
    pub columns: Option<Vec<AxisColumn>>,
    /// Where times come from and their unit; `None` where they are not known.
    pub time: Option<TypedTime>,
    discard: Option<TypedDiscard>,
    stride: Option<Typed<u64>>,
}

impl Series {
    /// Checks `[series]`.
    pub fn check(typed: Option<TypedSeries>, axes: &Axes, problems: &mut Problems) -> Self {
        let Some(typed) = typed else {
            let layout = Layout::default();
            // As if times were at fault, so that nothing is said about them.
            return Self { layout, columns: None, time: Some(TypedTime::Faulty), discard: None, stride: None };
        };
        let mut layout = Layout {
            separator: typed.separator.map_or(Separator::default(), |typed| typed.value),
            comments: match &typed.comments {
                Some(comments) => comments.iter().map(|comment| comment.value.clone()).collect(),
                None => Layout::default().comments,
            },
            ..Layout::default()
        };
        layout.time = match &typed.time {
            Some(TypedTime::Column { column, .. }) => TimeSource::Column(column.value.clone()),
            Some(TypedTime::Interval { interval, .. }) => TimeSource::Interval(*interval),
            Some(TypedTime::Faulty) | None => TimeSource::Unknown,
        };
        let mut columns = None;
        if let Some(typed_columns) = &typed.columns {
            refuse_shared_columns(typed_columns, typed.time.as_ref(), problems);
            let found = match_columns(typed_columns, axes, typed.columns_mark, problems);
            columns = found.map(|found| {
                let (wanted, units) = found.into_iter().unzip();
                layout.columns = wanted;
                units
            });
        }
        let series = Self { layout, columns, time: typed.time, discard: typed.discard, stride: typed.stride };
        series.discard(series.discard, problems);
        series
    }

    /// Unit of the times.
    pub fn time_unit(&self) -> Option<TimeUnit> {
        match self.time {
            Some(TypedTime::Column { unit, .. } | TypedTime::Interval { unit, .. }) => Some(unit),
            Some(TypedTime::Faulty) | None => None,
        }
    }

    /// The frames that a window keeps: its own keys, else those of the series.
    pub fn selection(
        &self,
        discard: Option<TypedDiscard>,
        stride: Option<Typed<u64>>,
        problems: &mut Problems,
    ) -> Selection {
        let discard = match discard {
            Some(own) => self.discard(Some(own), problems),
            None => self.discard(self.discard, problems),
        };
        let stride = stride.or(self.stride).and_then(|stride| NonZeroU64::new(stride.value));
        Selection { discard, stride: stride.unwrap_or(NonZeroU64::MIN) }
    }

    /// Whether a window's replicas lose what they themselves show not to have settled.
    pub fn automatic_start(&self, discard: Option<TypedDiscard>) -> bool {
        matches!(discard.or(self.discard), Some(TypedDiscard::Automatic))
    }

    fn discard(&self, typed: Option<TypedDiscard>, problems: &mut Problems) -> Discard {
        match typed {
            None | Some(TypedDiscard::Automatic | TypedDiscard::Faulty) => Discard::Nothing,
            Some(TypedDiscard::Frames(frames)) => Discard::Frames(frames),
            Some(TypedDiscard::Fraction(fraction)) => Discard::Fraction(fraction),
            Some(TypedDiscard::Time { time, unit, mark }) => {
                if self.time.is_none() {
                    problems.push(
                        Problem::at(mark, "`discard.time`: expected known times of the frames, found no `time` in `[series]`").help(
                            "add `time = { column = 1, unit = \"ps\" }` or `time = { interval = 0.1, unit = \"ps\" }` to `[series]`, \
                             or discard `frames` or a `fraction`",
                        ),
                    );
                }
                Discard::Time(self.time_unit().map_or(time, |to| time * unit.factor_to(to)))
            }
        }
    }
}

/// The column of each axis in the order of the axes, with its unit.
fn match_columns(
    typed: &[TypedColumn],
    axes: &Axes,
    mark: Mark,
    problems: &mut Problems,
) -> Option<Vec<(spandrel_ingest::Column, AxisColumn)>> {
    let mut of_axis: Vec<Option<&TypedColumn>> = vec![None; axes.len()];
    for column in typed {
        if let Some(index) = axes.find("series.columns", &column.axis, problems)
            && let Some(place) = of_axis.get_mut(index)
        {
            *place = Some(column);
        }
    }
    let mut complete = Vec::new();
    for (index, column) in of_axis.iter().enumerate() {
        let Some(axis) = axes.get(index) else { continue };
        let Some(column) = column else {
            let name = axes.name(index);
            // A misspelt entry is reported already.
            if !name.is_empty() && nearest(name, typed.iter().map(|entry| entry.axis.value.as_str())).is_none() {
                problems.push(
                    Problem::at(
                        mark,
                        format!(
                            "`series.columns`: expected an entry for every axis, {}, found none for `{name}`",
                            list(axes.names())
                        ),
                    )
                    .label(axis.mark, "this axis")
                    .help(format!("add its column, as in `{name} = {{ column = 2 }}`")),
                );
            }
            continue;
        };
        let (Some(wanted), Some(axis_unit)) = (&column.column, axis.unit) else {
            continue;
        };
        let unit = match column.unit {
            Ok(None) => axis_unit,
            Ok(Some(unit)) => unit,
            Err(Faulty) => continue,
        };
        match unit.value.factor_to(axis_unit.value) {
            Ok(factor) => complete.push((wanted.value.clone(), AxisColumn { unit: unit.value, factor })),
            Err(_) => problems.push(super::units::other_kind("series.columns.unit", unit, axes.name(index), axis_unit)),
        }
    }
    (complete.len() == axes.len()).then_some(complete)
}

/// Two axes, or an axis and the time, cannot be the same column.
fn refuse_shared_columns(typed: &[TypedColumn], time: Option<&TypedTime>, problems: &mut Problems) {
    let mut used: Vec<(&str, &Typed<spandrel_ingest::Column>)> = Vec::new();
    if let Some(TypedTime::Column { column, .. }) = time {
        used.push(("the time", column));
    }
    for entry in typed {
        let Some(column) = &entry.column else { continue };
        match used.iter().find(|(_, other)| other.value == column.value) {
            Some((what, other)) => problems.push(
                Problem::at(
                    column.mark,
                    format!(
                        "`series.columns.{}`: expected a column of its own, found `{}` again",
                        entry.axis.value, column.value
                    ),
                )
                .label(other.mark, format!("already used for {what}")),
            ),
            None => used.push((entry.axis.value.as_str(), column)),
        }
    }
}
