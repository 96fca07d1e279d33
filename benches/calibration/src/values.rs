//! The scores as CSV.

use crate::jackknife::Estimate;
use crate::report::Report;
use crate::score::Score;
use std::fs::{self, File};
use std::io;
use std::path::{Path, PathBuf};

/// A CSV file that is not there until it is whole.
#[derive(Debug)]
pub struct CsvFile {
    path: PathBuf,
    /// Where it is written before it takes its place.
    partial: PathBuf,
}

impl CsvFile {
    /// Makes sure that a file can be written beside `path`: a study is long, and its numbers should have a place to go.
    ///
    /// # Errors
    /// Those of the file system, with the path in the message.
    pub fn prepare(path: &Path) -> io::Result<Self> {
        let mut partial = path.to_path_buf().into_os_string();
        partial.push(".partial");
        let file = Self { path: path.to_path_buf(), partial: partial.into() };
        match File::create(&file.partial).and_then(|_| fs::remove_file(&file.partial)) {
            Ok(()) => Ok(file),
            Err(error) => Err(file.named(&error)),
        }
    }

    /// Writes one row a system and method, and puts the file in its place. Shares are between 0 and 1; each estimate is followed by its
    /// standard error; what cannot be given is empty.
    ///
    /// # Errors
    /// Those of the file system, with the path in the message.
    pub fn write(&self, reports: &[Report]) -> io::Result<()> {
        self.put(reports).map_err(|error| self.named(&error))
    }

    fn put(&self, reports: &[Report]) -> io::Result<()> {
        let mut writer = csv::Writer::from_path(&self.partial)?;
        for (number, (report, method, score)) in rows(reports).enumerate() {
            let columns = columns(report, method, score);
            if number == 0 {
                writer.write_record(columns.iter().map(|(name, _)| name))?;
            }
            writer.write_record(columns.iter().map(|(_, value)| value))?;
        }
        writer.flush()?;
        drop(writer);
        fs::rename(&self.partial, &self.path)
    }

    fn named(&self, error: &io::Error) -> io::Error {
        io::Error::new(error.kind(), format!("`{}`: {error}", self.path.display()))
    }
}

fn rows(reports: &[Report]) -> impl Iterator<Item = (&Report, &'static str, &Score)> {
    reports.iter().flat_map(|report| report.methods.iter().map(move |(method, score)| (report, method.name(), score)))
}

fn columns(report: &Report, method: &str, score: &Score) -> Vec<(String, String)> {
    let mut columns: Vec<(String, String)> = [
        ("system", report.system.name().to_string()),
        ("method", method.to_string()),
        ("weights", report.settings.weighting.name().to_string()),
        ("seed", report.settings.seed.to_string()),
        ("replicates", report.settings.n_replicates.to_string()),
        ("without_profile", report.refused.values().sum::<usize>().to_string()),
        ("scored_bins", report.n_scored.to_string()),
    ]
    .map(|(name, value)| (name.to_string(), value))
    .to_vec();
    let estimates = [
        ("printed", score.printed),
        ("determined", score.determined),
        ("coverage_95", score.coverage_95),
        ("coverage_68", score.coverage_68),
        ("determined_95", score.determined_95),
        ("oracle_95", score.oracle_95),
        ("oracle_68", score.oracle_68),
        ("excess_95", score.excess_95),
        ("excess_68", score.excess_68),
        ("all_bins_oracle_95", report.oracle.coverage_95),
        ("all_bins_oracle_68", report.oracle.coverage_68),
        ("z_mean", score.z_mean),
        ("z_deviation", score.z_deviation),
        ("oracle_z_deviation", score.oracle_z_deviation),
        ("relative_variance", score.relative_variance),
        ("joint_95", score.joint_95),
        ("worst_bin_95", score.worst_bin.map(|worst| worst.coverage_95)),
        ("rms_kt", report.oracle.root_mean_square),
        ("rms_over_oracle", report.oracle.relative_root_mean_square),
    ];
    for (name, estimate) in estimates {
        let Estimate { value, standard_error } =
            estimate.unwrap_or(Estimate { value: f64::NAN, standard_error: f64::NAN });
        columns.push((name.to_string(), text(value)));
        columns.push((format!("{name}_standard_error"), text(standard_error)));
    }
    let worst = score.worst_bin.and_then(|worst| report.centers.get(worst.place).copied());
    let plain = [
        ("worst_bin_center", worst),
        ("relative_width_median", score.relative_width.map(|(median, _)| median)),
        ("relative_width_quantile_90", score.relative_width.map(|(_, quantile)| quantile)),
        ("degrees_of_freedom_median", score.degrees_of_freedom.map(|(median, _)| median)),
        ("degrees_of_freedom_quantile_5", score.degrees_of_freedom.map(|(_, quantile)| quantile)),
        ("oracle_left_out", Some(report.oracle.left_out)),
    ];
    columns.extend(plain.map(|(name, value)| (name.to_string(), text(value.unwrap_or(f64::NAN)))));
    columns
}

/// Six significant digits; empty for what is not a number.
fn text(value: f64) -> String {
    if value.is_nan() { String::new() } else { format!("{value:.5e}") }
}
