//! `[exclude]`.

use crate::job::keys::Section;
use crate::job::mark::{Mark, Typed};
use crate::job::problem::Problems;
use crate::job::scalar::Allowed;
use crate::job::table::Table;

/// `[exclude]`
#[derive(Debug, Default)]
pub(in crate::job) struct TypedExclude {
    /// Names, with `*` for any text.
    pub windows: Vec<Typed<String>>,
    /// `name/number`.
    pub replicas: Vec<Typed<String>>,
    /// Stretches of axes.
    pub stretches: Vec<TypedStretch>,
}

/// One stretch of an axis.
#[derive(Debug)]
pub(in crate::job) struct TypedStretch {
    /// The braces.
    pub mark: Mark,
    /// Name of the axis.
    pub axis: Option<Typed<String>>,
    /// Lower end.
    pub from: Option<Typed<f64>>,
    /// Upper end.
    pub to: Option<Typed<f64>>,
}

impl TypedExclude {
    /// Reads the section.
    pub fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let windows = table.take("windows");
        let replicas = table.take("replicas");
        let stretches = table.take("stretches").map(|field| field.tables(Section::Stretch, problems));
        let exclude = Self {
            windows: windows.and_then(|field| field.texts("a list of names", problems)).unwrap_or_default(),
            replicas: replicas
                .and_then(|field| field.texts("a list of texts such as `z00/2`", problems))
                .unwrap_or_default(),
            stretches: stretches.into_iter().flatten().map(|stretch| TypedStretch::read(stretch, problems)).collect(),
        };
        table.finish(problems);
        exclude
    }
}

impl TypedStretch {
    fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let axis = table.take("axis");
        let from = table.require("from", problems);
        let to = table.require("to", problems);
        let stretch = Self {
            mark: table.mark,
            axis: axis.and_then(|field| field.scalar(problems)?.text(problems)),
            from: from.and_then(|field| field.scalar(problems)?.number(Allowed::Finite, problems)),
            to: to.and_then(|field| field.scalar(problems)?.number(Allowed::Finite, problems)),
        };
        table.finish(problems);
        stretch
    }
}
