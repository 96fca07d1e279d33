//! `[series]`, and the keys of it that a window may set for itself.

use spandrel_bias::units::{PositionUnit, TimeUnit};
use spandrel_ingest::{Column, Separator};

use crate::job::keys::Section;
use crate::job::mark::{Mark, Optional, Typed, optional};
use crate::job::problem::Problems;
use crate::job::scalar::Allowed;
use crate::job::table::{Field, Table};

/// The words for a separator.
pub(in crate::job) const SEPARATORS: [(&str, Separator); 3] =
    [("whitespace", Separator::Whitespace), ("comma", Separator::Comma), ("tab", Separator::Tab)];

/// `[series]`
#[derive(Debug)]
pub(in crate::job) struct TypedSeries {
    /// What stands between two columns.
    pub separator: Option<Typed<Separator>>,
    /// Prefixes of comment lines.
    pub comments: Option<Vec<Typed<String>>>,
    /// Where times come from.
    pub time: Option<TypedTime>,
    /// The place of `columns`.
    pub columns_mark: Mark,
    /// The columns by name of axis, in the order of the file; `None` where the key is missing or no table.
    pub columns: Option<Vec<TypedColumn>>,
    /// What is left out at the start.
    pub discard: Option<TypedDiscard>,
    /// At least 1.
    pub stride: Option<Typed<u64>>,
}

/// `time` of `[series]`
#[derive(Debug, Clone, PartialEq)]
pub(in crate::job) enum TypedTime {
    /// A column of the files.
    Column { column: Typed<Column>, unit: TimeUnit },
    /// A fixed interval between frames, above 0.
    Interval { interval: f64, unit: TimeUnit },
    /// At fault, and reported.
    Faulty,
}

/// One entry of `columns` of `[series]`
#[derive(Debug)]
pub(in crate::job) struct TypedColumn {
    /// Name of the axis.
    pub axis: Typed<String>,
    /// The column.
    pub column: Option<Typed<Column>>,
    /// Unit of the numbers in the files.
    pub unit: Optional<Typed<PositionUnit>>,
}

/// What is left out at the start of a replica.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(in crate::job) enum TypedDiscard {
    /// A time, at least 0.
    Time { time: f64, unit: TimeUnit, mark: Mark },
    /// A number of frames.
    Frames(u64),
    /// A fraction of the frames, at least 0 and below 1.
    Fraction(f64),
    /// What each replica itself shows not to have settled.
    Automatic,
    /// At fault, and reported.
    Faulty,
}

impl TypedSeries {
    /// Reads the section.
    pub fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let separator = table.take("separator");
        let comments = table.take("comments");
        let time = table.take("time");
        let columns = table.require("columns", problems);
        let series = Self {
            separator: separator.and_then(|field| field.scalar(problems)?.word(&SEPARATORS, problems)),
            comments: comments.and_then(|field| field.texts("a list of texts", problems)),
            time: time.map(|field| read_time(&field, problems).unwrap_or(TypedTime::Faulty)),
            columns_mark: columns.as_ref().map_or(table.mark, |field| field.mark),
            columns: columns.and_then(|field| read_columns(&field, problems)),
            discard: TypedDiscard::take(&mut table, problems),
            stride: take_stride(&mut table, problems),
        };
        table.finish(problems);
        series
    }
}

/// Takes `stride` of `[series]` or of a window.
pub(super) fn take_stride(table: &mut Table<'_>, problems: &mut Problems) -> Option<Typed<u64>> {
    table.take("stride")?.scalar(problems)?.whole(1, problems)
}

fn read_time(field: &Field<'_>, problems: &mut Problems) -> Option<TypedTime> {
    let mut table = field.table(Section::Time, problems)?;
    let which = table.exactly_one(&["column", "interval"], problems);
    let unit = table.require("unit", problems);
    let unit = unit.and_then(|field| field.scalar(problems)?.unit::<TimeUnit>(problems));
    let column = table.take("column");
    let column = column.and_then(|field| field.scalar(problems)?.column(problems));
    let interval = table.take("interval");
    let interval = interval.and_then(|field| field.scalar(problems)?.number(Allowed::Positive, problems));
    table.finish(problems);
    let unit = unit?.value;
    match which? {
        "column" => Some(TypedTime::Column { column: column?, unit }),
        _ => Some(TypedTime::Interval { interval: interval?.value, unit }),
    }
}

fn read_columns(field: &Field<'_>, problems: &mut Problems) -> Option<Vec<TypedColumn>> {
    let mut table = field.table(Section::SeriesColumn, problems)?;
    let mut columns = Vec::new();
    for (name, mark, field) in table.take_all() {
        let axis = Typed { value: name, mark };
        if !field.is_table() {
            let column = field.scalar(problems).and_then(|scalar| scalar.column(problems));
            columns.push(TypedColumn { axis, column, unit: Ok(None) });
            continue;
        }
        let Some(mut table) = field.table(Section::SeriesColumn, problems) else {
            continue;
        };
        let column = table.require("column", problems);
        let unit = table.take("unit");
        columns.push(TypedColumn {
            axis,
            column: column.and_then(|field| field.scalar(problems)?.column(problems)),
            unit: optional(unit, |field| field.scalar(problems)?.unit(problems)),
        });
        table.finish(problems);
    }
    Some(columns)
}

impl TypedDiscard {
    /// Takes `discard` of `[series]` or of a window.
    pub fn take(table: &mut Table<'_>, problems: &mut Problems) -> Option<Self> {
        let field = table.take("discard")?;
        Some(Self::read(&field, problems).unwrap_or(Self::Faulty))
    }

    fn read(field: &Field<'_>, problems: &mut Problems) -> Option<Self> {
        let mut table = field.table(Section::Discard, problems)?;
        let mark = table.mark;
        let which = table.exactly_one(&["time", "frames", "fraction", "automatic"], problems);
        let time = table.take("time");
        let unit = match which {
            Some("time") => table.require("unit", problems),
            // A unit beside frames or a fraction has no meaning and is left over for `finish`.
            Some(_) => None,
            None => table.take("unit"),
        };
        let unit = unit.and_then(|field| field.scalar(problems)?.unit::<TimeUnit>(problems));
        let time = time.and_then(|field| field.scalar(problems)?.number(Allowed::NotNegative, problems));
        let frames = table.take("frames");
        let frames = frames.and_then(|field| field.scalar(problems)?.whole(0, problems));
        let fraction = table.take("fraction");
        let fraction = fraction.and_then(|field| field.scalar(problems)?.number(Allowed::Fraction, problems));
        let automatic = table.take("automatic");
        let automatic = automatic.and_then(|field| field.scalar(problems)?.flag(problems));
        table.finish(problems);
        match which? {
            "automatic" => Some(if automatic?.value { Self::Automatic } else { Self::Frames(0) }),
            "time" => Some(Self::Time { time: time?.value, unit: unit?.value, mark }),
            "frames" => Some(Self::Frames(frames?.value)),
            _ => Some(Self::Fraction(fraction?.value)),
        }
    }
}
