//! The reference page of the job file, from the table of keys.

use std::fmt::Write as _;

use super::keys::{KEYS, Key, Section};

/// The parts of the page before the tables of keys.
const INTRODUCTION: &str = "\
# Keys of a job

This page is made from the table in `src/job/keys.rs`; a test keeps it fresh.

A job is a text file in TOML. Paths in it are relative to its folder. A key that does not stand here is refused, and all problems of a
job are reported at once. `config-examples` holds a commented job for each way of working.

";

/// What the tables of keys cannot say.
const NOTES: &str = "\
Upper and lower case are the same. Energies per position combine these: `kJ/mol/nm`, `kcal mol^-1 Å^-1`; a force constant is an energy
over a squared position: `kJ/mol/nm^2`, `kcal/mol/Å²`, `kJ mol-1 rad-2`. On an axis of the unit `none` they are written like an energy.
Kilojoules and kilocalories (of 4.184 J) are per mole; an electronvolt is per particle; `kT` is that of the job's temperature.

A unit that is left out is that of the axis, or made of `energy_unit` and that of the axis. There are two exceptions, where that could
change the answer unseen:

- On an axis in degrees or radians `force_constant_unit` and `slope_unit` must be given. Angles are often recorded in degrees while the
  force constant is per squared radian, and a wrong guess changes the bias by a factor of (180/π)² ≈ 3283.
- Beside a `center_unit` other than the axis' unit, `half_width_unit` must be given.

## Columns by name

Names are taken from the last comment before the first row that has one word for each column; without one, from a first line with one
name for each column, each beginning with a letter or an underscore. Any other text in place of numbers is refused.

## Frames, segments and replicas

- **Segments** continue one another: the time carries on from file to file. They are joined in the order given. Where a column holds
  the time, a frame that was written twice, as after a restart, is kept once. `files` lists the segments of a window's only run.
- **Replicas** are independent starts of one window under the same bias. `replicas` lists the segments of each. A file with times from
  the beginning again is a replica, not a segment.
- `discard` acts first, once on each replica's joined frames; `stride` then keeps the first remaining frame and every so many after it,
  across segments. Samples in excluded `stretches` are left out last.

";

/// Symbol and further spellings of every unit, in the order of the page.
#[rustfmt::skip] // One line a kind, like the table that it is.
const UNITS: &[(&str, &[&[&str]])] = &[
    ("length", &[&["nm", "nanometer", "nanometre"], &["angstrom", "Å", "A", "ångström"]]),
    ("angle", &[&["deg", "degree", "°"], &["rad", "radian"]]),
    ("pure number", &[&["none", "1", "unitless", "dimensionless"]]),
    ("energy", &[&["kJ/mol", "kJ mol^-1"], &["kcal/mol", "kcal mol^-1"], &["kT", "kBT", "k_BT", "RT"], &["eV", "electronvolt"]]),
    ("time", &[&["fs", "femtosecond"], &["ps", "picosecond"], &["ns", "nanosecond"], &["us", "µs", "microsecond"]]),
];

/// The reference page of the job file, in Markdown: units, how frames are chosen, and a table of keys for each section.
#[must_use]
pub fn reference() -> String {
    let mut page = INTRODUCTION.to_owned();
    page.push_str("## Units\n\n| measures | unit | also written |\n|---|---|---|\n");
    for (measures, units) in UNITS {
        for unit in *units {
            let spellings: Vec<String> = unit.iter().map(|spelling| format!("`{spelling}`")).collect();
            if let [symbol, others @ ..] = spellings.as_slice() {
                // Writing to a string cannot fail.
                let _ = writeln!(page, "| {measures} | {symbol} | {} |", others.join(", "));
            }
        }
    }
    page.push('\n');
    page.push_str(NOTES);
    for section in sections() {
        let _ = writeln!(page, "## {}\n\n{}", heading(section), TABLE_HEAD);
        for key in section.keys() {
            page.push_str(&row(key));
        }
        page.push('\n');
    }
    page.truncate(page.trim_end().len());
    page.push('\n');
    page
}

const TABLE_HEAD: &str = "| key | takes | default | meaning | example |\n|---|---|---|---|---|";

/// The sections in the order of their keys.
fn sections() -> Vec<Section> {
    let mut sections: Vec<Section> = KEYS.iter().map(|key| key.section).collect();
    sections.dedup();
    sections
}

fn heading(section: Section) -> &'static str {
    match section {
        Section::Top => "The job itself",
        Section::System => "`[system]`",
        Section::Axis => "`[[axis]]`",
        Section::Series => "`[series]`",
        Section::Time => "`time` of `[series]`",
        Section::SeriesColumn => "An entry of `columns` of `[series]`: a column number or name, or a table",
        Section::Discard => "`discard` of `[series]` or `[[window]]`",
        Section::Window => "`[[window]]`",
        Section::Bias => "`[[window.bias]]` and `[[window_table.bias]]`",
        Section::TableValue => "A value of `[[window_table.bias]]` that is taken from a column",
        Section::WindowTable => "`[window_table]`",
        Section::Exclude => "`[exclude]`",
        Section::Stretch => "An entry of `stretches` of `[exclude]`",
        Section::Profile => "`[profile]`",
        Section::Zero => "`zero` of `[profile]`",
        Section::Solver => "`[solver]`",
        Section::Errors => "`[errors]`",
        Section::Output => "`[output]`",
    }
}

fn row(key: &Key) -> String {
    let cells = [key.takes, key.default, key.meaning].map(|text| text.replace('|', "\\|"));
    let [takes, default, meaning] = &cells;
    format!("| `{}` | {takes} | {default} | {meaning} | `{}` |\n", key.name, key.example.replace('|', "\\|"))
}

#[cfg(test)]
mod tests {
    use std::fmt::Display;
    use std::str::FromStr;

    use spandrel_bias::units::{EnergyUnit, ForceConstantUnit, ForceUnit, PositionUnit, TimeUnit};

    use super::*;

    /// That each unit's spellings mean the same unit, and each of `all` has a line.
    fn check<U: FromStr + Display + PartialEq + Copy + std::fmt::Debug>(kinds: &[&str], all: &[U]) {
        let groups: Vec<_> =
            UNITS.iter().filter(|(kind, _)| kinds.contains(kind)).flat_map(|(_, units)| *units).collect();
        assert_eq!(groups.len(), all.len());
        for (spellings, unit) in groups.iter().zip(all) {
            for spelling in **spellings {
                assert_eq!(spelling.parse::<U>().ok(), Some(*unit), "{spelling}");
            }
        }
    }

    #[test]
    fn every_unit_and_no_other_spelling_is_listed() {
        check(&["length", "angle", "pure number"], &PositionUnit::ALL);
        check(&["energy"], &EnergyUnit::ALL);
        check(&["time"], &TimeUnit::ALL);
    }

    #[test]
    fn units_of_forces_and_force_constants_in_the_notes_are_read() {
        for force in ["kJ/mol/nm", "kcal mol^-1 Å^-1"] {
            assert!(NOTES.contains(force) && force.parse::<ForceUnit>().is_ok(), "{force}");
        }
        for constant in ["kJ/mol/nm^2", "kcal/mol/Å²", "kJ mol-1 rad-2"] {
            assert!(NOTES.contains(constant) && constant.parse::<ForceConstantUnit>().is_ok(), "{constant}");
        }
        assert!(((180.0 / std::f64::consts::PI).powi(2) - 3283.0).abs() < 0.5);
    }

    #[test]
    fn the_rows_of_a_table_have_five_cells_and_follow_its_head() {
        let page = reference();
        let tables: Vec<&str> = page.split(TABLE_HEAD).skip(1).collect();
        assert_eq!(tables.len(), sections().len());
        let mut rows = 0;
        for table in tables {
            let (table, _) = table.split_once("\n\n").unwrap_or((table, ""));
            for row in table.trim_start_matches('\n').lines() {
                assert_eq!(row.replace("\\|", "").matches('|').count(), 6, "{row}");
                rows += 1;
            }
        }
        assert_eq!(rows, KEYS.len());
    }

    #[test]
    fn the_keys_of_a_section_stand_together() {
        let mut sections = sections();
        let count = sections.len();
        sections.sort_by_key(|section| heading(*section));
        sections.dedup();
        assert_eq!(sections.len(), count);
    }
}
