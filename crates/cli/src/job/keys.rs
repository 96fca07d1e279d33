//! Every key of a job, in one place: what it takes, what it defaults to, what it means.
//!
//! Sections are read against this table: a key that does not stand here cannot be read at all, so that the table is complete.

use std::fmt;

/// A part of a job that has keys.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Section {
    /// The job itself.
    Top,
    /// `[system]`
    System,
    /// `[[axis]]`
    Axis,
    /// `[series]`
    Series,
    /// `time` of `[series]`
    Time,
    /// An entry of `columns` of `[series]`
    SeriesColumn,
    /// `discard` of `[series]` or of a window
    Discard,
    /// `[[window]]`
    Window,
    /// `[[window.bias]]` and `[[window_table.bias]]`
    Bias,
    /// A value of `[[window_table.bias]]` that is taken from a column
    TableValue,
    /// `[window_table]`
    WindowTable,
    /// `[exclude]`
    Exclude,
    /// An entry of `stretches` of `[exclude]`
    Stretch,
    /// `[profile]`
    Profile,
    /// `zero` of `[profile]`
    Zero,
    /// `[solver]`
    Solver,
    /// `[errors]`
    Errors,
    /// `[output]`
    Output,
}

impl Section {
    /// The section's path in front of its keys, empty for the job itself.
    #[must_use]
    pub const fn path(self) -> &'static str {
        match self {
            Self::Top => "",
            Self::System => "system",
            Self::Axis => "axis",
            Self::Series => "series",
            Self::Time => "series.time",
            Self::SeriesColumn => "series.columns",
            Self::Discard => "discard",
            Self::Window => "window",
            Self::Bias => "bias",
            Self::TableValue => "window_table.bias",
            Self::WindowTable => "window_table",
            Self::Exclude => "exclude",
            Self::Stretch => "exclude.stretches",
            Self::Profile => "profile",
            Self::Zero => "profile.zero",
            Self::Solver => "solver",
            Self::Errors => "errors",
            Self::Output => "output",
        }
    }

    /// The keys of the section, in the order of the reference.
    pub fn keys(self) -> impl Iterator<Item = &'static Key> {
        KEYS.iter().filter(move |key| key.section == self)
    }

    /// The key of this name.
    #[must_use]
    pub fn key(self, name: &str) -> Option<&'static Key> {
        self.keys().find(|key| key.name == name)
    }
}

impl fmt::Display for Section {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Top => formatter.write_str("a job"),
            Self::Axis | Self::Window => write!(formatter, "`[[{}]]`", self.path()),
            Self::Bias => formatter.write_str("a bias"),
            Self::System
            | Self::Series
            | Self::WindowTable
            | Self::Exclude
            | Self::Profile
            | Self::Solver
            | Self::Errors
            | Self::Output => {
                write!(formatter, "`[{}]`", self.path())
            }
            Self::Time | Self::SeriesColumn | Self::Discard | Self::TableValue | Self::Stretch | Self::Zero => {
                write!(formatter, "`{}`", self.path())
            }
        }
    }
}

/// One key of a job.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Key {
    /// The section that it stands in.
    pub section: Section,
    /// Its name.
    pub name: &'static str,
    /// What it takes: type, allowed values, unit.
    pub takes: &'static str,
    /// What holds without it, or `required`.
    pub default: &'static str,
    /// What it means.
    pub meaning: &'static str,
    /// One line of a job that uses it.
    pub example: &'static str,
}

const fn key(
    section: Section,
    name: &'static str,
    takes: &'static str,
    default: &'static str,
    meaning: &'static str,
    example: &'static str,
) -> Key {
    Key { section, name, takes, default, meaning, example }
}

/// Every key, section by section, in the order of the reference.
#[rustfmt::skip] // One line a key, like the table that it is.
pub const KEYS: &[Key] = &[
    key(Section::Top, "format", "the number 1", "required", "version of the job format", "format = 1"),
    key(Section::Top, "system", "a table", "required", "temperature and energy unit", "[system]"),
    key(Section::Top, "axis", "one or more tables `[[axis]]`", "required", "the reaction coordinates, one `[[axis]]` each", "[[axis]]"),
    key(Section::Top, "series", "a table", "required", "how the text files of the windows are read", "[series]"),
    key(Section::Top, "window", "tables `[[window]]`", "none", "the windows, one `[[window]]` each; at least one here or in `window_table`", "[[window]]"),
    key(Section::Top, "window_table", "a table", "none", "windows from a comma-separated table, one row each", "[window_table]"),
    key(Section::Top, "exclude", "a table", "nothing is left out", "what is left out", "[exclude]"),
    key(Section::Top, "profile", "a table", "required", "what the free-energy profile looks like", "[profile]"),
    key(Section::Top, "solver", "a table", "all defaults", "how the equations are solved", "[solver]"),
    key(Section::Top, "errors", "a table", "all defaults", "where the errors come from", "[errors]"),
    key(Section::Top, "output", "a table", "all defaults", "where the results go", "[output]"),
    key(Section::System, "temperature", "a number above 0, in kelvin", "required", "temperature of all windows", "temperature = 310.0"),
    key(Section::System, "energy_unit", "`kJ/mol`, `kcal/mol`, `kT` or `eV`", "required", "unit of the results, and of energies in the job that give none", r#"energy_unit = "kcal/mol""#),
    key(Section::Axis, "name", "text", "required", "name of the axis, unique", r#"name = "distance""#),
    key(Section::Axis, "unit", "`nm`, `angstrom`, `deg`, `rad` or `none`", "required", "unit of the axis in the job and the results", r#"unit = "nm""#),
    key(Section::Axis, "period", "a number above 0, in the axis' unit", "no period", "length after which positions repeat", "period = 360.0"),
    key(Section::Series, "separator", "`whitespace`, `comma` or `tab`", "`whitespace`", "what stands between two columns", r#"separator = "comma""#),
    key(Section::Series, "comments", "a list of texts", r##"`["#"]`"##, "what a comment line begins with", r##"comments = ["#", "@"]"##),
    key(Section::Series, "time", "a table", "times are not known", "where the time of a frame comes from", r#"time = { column = 1, unit = "ps" }"#),
    key(Section::Series, "columns", "a table with one entry for each axis", "required", "the column of each axis", "columns = { distance = 2 }"),
    key(Section::Series, "discard", "a table", "nothing", "what is left out at the start of every replica", "discard = { frames = 25 }"),
    key(Section::Series, "stride", "a whole number from 1", "1", "of the frames that remain, every so many are kept", "stride = 4"),
    key(Section::Time, "column", "a column number from 1, or a name of the header", "this or `interval`", "the column that holds the time", "column = 1"),
    key(Section::Time, "interval", "a number above 0", "this or `column`", "time between two frames", "interval = 0.25"),
    key(Section::Time, "unit", "`fs`, `ps`, `ns` or `us`", "required", "unit of `column` or `interval`", r#"unit = "ps""#),
    key(Section::SeriesColumn, "column", "a column number from 1, or a name of the header", "required", "the column that holds the axis", r#"column = "z""#),
    key(Section::SeriesColumn, "unit", "a unit of the axis' kind", "the axis' unit", "unit of the numbers in the files", r#"unit = "angstrom""#),
    key(Section::Discard, "time", "a number from 0", "one of the four", "frames earlier than this after the first frame are left out", "time = 150.0"),
    key(Section::Discard, "unit", "`fs`, `ps`, `ns` or `us`", "required with `time`", "unit of `time`", r#"unit = "ps""#),
    key(Section::Discard, "frames", "a whole number from 0", "one of the four", "this many frames are left out", "frames = 25"),
    key(Section::Discard, "fraction", "a number from 0, below 1", "one of the four", "this fraction of the frames is left out", "fraction = 0.15"),
    key(Section::Discard, "automatic", "`true` or `false`", "one of the four", "each replica loses what it shows itself not to have settled: the beginning without which it holds evidently more independent samples", "automatic = true"),
    key(Section::Window, "name", "text", "required", "name of the window, unique", r#"name = "z00""#),
    key(Section::Window, "files", "a list of paths or patterns", "this or `replicas`", "segments of one run, in the order of time; patterns are expanded in natural order", r#"files = ["z00.txt"]"#),
    key(Section::Window, "replicas", "a list of lists of paths or patterns", "this or `files`", "independent starts, each a list of segments", r#"replicas = [["z00a.txt"], ["z00b.txt"]]"#),
    key(Section::Window, "exclude", "`true` or `false`", "`false`", "leaves the window out", "exclude = true"),
    key(Section::Window, "temperature", "a number, in kelvin", "`temperature` of `[system]`", "must be the temperature of the system", "temperature = 310.0"),
    key(Section::Window, "discard", "a table", "`discard` of `[series]`", "what is left out at the start of every replica", "discard = { fraction = 0.15 }"),
    key(Section::Window, "stride", "a whole number from 1", "`stride` of `[series]`", "of the frames that remain, every so many are kept", "stride = 4"),
    key(Section::Window, "bias", "tables", "no bias", "the terms of the bias, one `[[window.bias]]` each; they add up", "bias = []"),
    key(Section::Bias, "kind", "`harmonic`, `periodic-harmonic`, `linear`, `one-sided`, `flat-bottomed`, `tabulated` or `none`", "required", "shape of the term", r#"kind = "harmonic""#),
    key(Section::Bias, "axis", "name of an axis", "the only axis", "the axis it acts on", r#"axis = "distance""#),
    key(Section::Bias, "center", "a number", "required", "harmonic, periodic-harmonic, flat-bottomed: the middle", "center = 1.7"),
    key(Section::Bias, "center_unit", "a unit of the axis' kind", "the axis' unit", "unit of `center`", r#"center_unit = "nm""#),
    key(Section::Bias, "force_constant", "a number above 0", "required", "harmonic, periodic-harmonic, one-sided, flat-bottomed: the strength", "force_constant = 850.0"),
    key(Section::Bias, "force_constant_unit", "an energy over a squared position, such as `kJ/mol/nm^2`", "`energy_unit` over the axis' unit squared", "unit of `force_constant`", r#"force_constant_unit = "kJ/mol/nm^2""#),
    key(Section::Bias, "convention", "`half` or `full`", "`half`", "whether the energy is half the force constant times the squared distance, or the whole", r#"convention = "full""#),
    key(Section::Bias, "slope", "a number", "required", "linear: energy per position, the force that pulls towards lower positions", "slope = -3.5"),
    key(Section::Bias, "slope_unit", "an energy over a position, such as `kJ/mol/nm`", "`energy_unit` over the axis' unit", "unit of `slope`", r#"slope_unit = "kJ/mol/nm""#),
    key(Section::Bias, "bound", "a number", "required", "one-sided: where the wall begins", "bound = 1.7"),
    key(Section::Bias, "bound_unit", "a unit of the axis' kind", "the axis' unit", "unit of `bound`", r#"bound_unit = "nm""#),
    key(Section::Bias, "side", "`above` or `below`", "required", "one-sided: the side of the bound on which the energy rises", r#"side = "above""#),
    key(Section::Bias, "half_width", "a number from 0", "required", "flat-bottomed: distance from the center at which the walls begin", "half_width = 0.3"),
    key(Section::Bias, "half_width_unit", "a unit of the axis' kind", "the axis' unit; required where `center_unit` is another", "unit of `half_width`", r#"half_width_unit = "nm""#),
    key(Section::Bias, "file", "a path", "required", "tabulated: file with the positions and energies", r#"file = "bias.txt""#),
    key(Section::Bias, "separator", "`whitespace`, `comma` or `tab`", "`separator` of `[series]`", "tabulated: what stands between two columns of the file", r#"separator = "tab""#),
    key(Section::Bias, "position_column", "a column number from 1, or a name of the header", "1", "tabulated: the column of the positions, which must increase", "position_column = 1"),
    key(Section::Bias, "energy_column", "a column number from 1, or a name of the header", "2", "tabulated: the column of the energies", "energy_column = 2"),
    key(Section::Bias, "position_unit", "a unit of the axis' kind", "the axis' unit", "tabulated: unit of the positions", r#"position_unit = "nm""#),
    key(Section::Bias, "energy_unit", "`kJ/mol`, `kcal/mol`, `kT` or `eV`", "`energy_unit` of `[system]`", "tabulated: unit of the energies", r#"energy_unit = "kJ/mol""#),
    key(Section::Bias, "interpolation", "`linear` or `cubic`", "`linear`", "tabulated: straight lines or a cubic spline between the rows", r#"interpolation = "cubic""#),
    key(Section::Bias, "outside", "`error`, `hold` or `extend`", "`error`", "tabulated: beyond the table, refuse, keep the last energy, or go on with the last slope", r#"outside = "hold""#),
    key(Section::TableValue, "column", "name of a column of the table of windows", "required", "takes the value of each window from its row", r#"column = "center""#),
    key(Section::WindowTable, "file", "a path", "required", "the table: comma-separated, with a header line; comment lines begin with `#`", r#"file = "windows.csv""#),
    key(Section::WindowTable, "name_column", "name of a column", "names of the files, else `w0`, `w1` and so on", "names of the windows", r#"name_column = "name""#),
    key(Section::WindowTable, "files_column", "name of a column", "required", "paths or patterns of the segments, several separated by `;`", r#"files_column = "file""#),
    key(Section::WindowTable, "replica_column", "name of a column", "every row is a window", "rows with the same name are replicas of one window, told apart by this column", r#"replica_column = "replica""#),
    key(Section::WindowTable, "folder", "a path", "the folder of the job", "folder in front of the paths in the table", r#"folder = "runs""#),
    key(Section::WindowTable, "bias", "tables", "no bias", r#"the bias of every row, one `[[window_table.bias]]` a term; any value may be `{ column = "name" }`"#, "bias = []"),
    key(Section::Exclude, "windows", "a list of names, with `*` for any text", "none", "windows to leave out", r#"windows = ["z07", "test*"]"#),
    key(Section::Exclude, "replicas", "a list of `name/number`, counted from 1", "none", "replicas to leave out", r#"replicas = ["z00/2"]"#),
    key(Section::Exclude, "stretches", "a list of tables", "none", "stretches of an axis; samples there are left out", "stretches = []"),
    key(Section::Stretch, "axis", "name of an axis", "the only axis", "the axis", r#"axis = "distance""#),
    key(Section::Stretch, "from", "a number, in the axis' unit", "required", "lower end", "from = 1.2"),
    key(Section::Stretch, "to", "a number above `from`", "required", "upper end", "to = 1.4"),
    key(Section::Profile, "axis", "name of an axis", "the only axis", "the axis of the profile", r#"axis = "distance""#),
    key(Section::Profile, "from", "a number, in the axis' unit", "the sampled range; with a period, `to` less the period, else `origin`, else half a period below 0", "lower end of the profile", "from = 0.3"),
    key(Section::Profile, "to", "a number above `from`", "the sampled range; with a period, `from` plus the period", "upper end of the profile", "to = 2.7"),
    key(Section::Profile, "bin_width", "a number above 0, in the axis' unit", "this or `bins`", "width of a bin", "bin_width = 0.05"),
    key(Section::Profile, "bins", "a whole number from 1", "this or `bin_width`", "number of bins; needs `from` and `to`, or a period", "bins = 60"),
    key(Section::Profile, "origin", "a number, in the axis' unit", "`from`, else 0; with a period, the lower end of the profile", "a position at which a bin begins", "origin = 0.3"),
    key(Section::Profile, "zero", "`minimum` or a table", "`minimum`", "where the free energy is zero", r#"zero = "minimum""#),
    key(Section::Zero, "position", "a number, in the axis' unit", "this, or `from` and `to`", "the bin that holds this position is zero", "position = 2.5"),
    key(Section::Zero, "from", "a number, in the axis' unit", "with `to`", "the mean over a range is zero: lower end", "from = 2.5"),
    key(Section::Zero, "to", "a number above `from`", "with `from`", "the mean over a range is zero: upper end", "to = 2.7"),
    key(Section::Solver, "method", "`newton`, `self-consistent`, `trust-region` or `l-bfgs`", "`newton`", "how the likelihood is maximized; all agree within the tolerance", r#"method = "trust-region""#),
    key(Section::Solver, "tolerance", "a number from 1e-13 to 1e-4, in kT", "1e-10", "largest Newton step that counts as converged", "tolerance = 1e-9"),
    key(Section::Solver, "max_iterations", "a whole number from 1", "chosen for the method", "most iterations", "max_iterations = 250"),
    key(Section::Solver, "allow_gaps", "`true` or `false`", "`false`", "solves groups of windows that do not overlap each with its own zero", "allow_gaps = true"),
    key(Section::Solver, "cells", "`auto` or `samples`", "`auto`", "fine cells where they pay, or one cell for each sample", r#"cells = "samples""#),
    key(Section::Solver, "cell_error", "a number from 1e-8 to 1e-2, in kT", "1e-5", "largest local error of a cell", "cell_error = 1e-6"),
    key(Section::Solver, "seed", "a whole number from 0", "1", "start of the random numbers; it is written into every result", "seed = 12"),
    key(Section::Errors, "method", "`influence` or `bootstrap`", "`influence`", "which errors are given: from the influence of each sample along each run, or from solving again on runs drawn anew in blocks of time", r#"method = "bootstrap""#),
    key(Section::Errors, "bootstrap_replicates", "a whole number from 20", "1000 with `method = \"bootstrap\"`, else no bootstrap", "replicates of the bootstrap; with the errors from influences it is made as a check, and a finding if the two disagree", "bootstrap_replicates = 500"),
    key(Section::Output, "folder", "a path", "name of the job with `-result`", "folder of the results, relative to the job", r#"folder = "result""#),
    key(Section::Output, "covariance", "`true` or `false`", "`false`", "writes the covariance of all bins to `covariance.csv`, for errors of any difference", "covariance = true"),
];
