//! `pmf.csv`: the profile, one row a bin.

use super::number::field;
use crate::job::Job;
use crate::pipeline::Part;
use spandrel_solver::profile::Profile;

/// Name of the file.
pub const PMF: &str = "pmf.csv";

/// Version of its columns.
const PMF_FORMAT: u32 = 1;

const COLUMNS: [&str; 15] = [
    "group",
    "position",
    "lower",
    "upper",
    "free_energy",
    "standard_error",
    "interval_lower",
    "interval_upper",
    "band_lower",
    "band_upper",
    "degrees_of_freedom",
    "status",
    "samples",
    "effective_samples",
    "windows",
];

/// The profiles of all parts, energies in the job's unit.
///
/// # Errors
/// None in practice: the writer writes to memory.
pub fn pmf_csv(job: &Job, parts: &[Part]) -> Result<Vec<u8>, csv::Error> {
    let axis = &job.axes[job.profile.bins.axis()];
    let mut text = format!(
        "# {PMF}, format {PMF_FORMAT}, {} {}\n# position, lower, upper: {} in {}; energies in {}, relative to the zero: {}\n# standard_error and interval (95 %) are those of the difference from the zero; the band (95 %) holds the whole curve at once; fields are empty where the data support no number\n",
        crate::PROGRAM,
        crate::VERSION,
        axis.name(),
        axis.unit(),
        job.energy_unit,
        parts.iter().map(|part| zero_in_words(job, &part.profile)).collect::<Vec<_>>().join("; "),
    )
    .into_bytes();
    let mut writer = csv::Writer::from_writer(&mut text);
    writer.write_record(COLUMNS)?;
    let energy = |reduced: f64| job.energy_unit.from_reduced(reduced, job.temperature);
    for (number, part) in (1..).zip(parts) {
        for (i, bin) in part.profile.bins.iter().enumerate() {
            let error = bin.uncertainty.as_ref();
            let band = part.band.as_ref().and_then(|band| band.half_widths[i]);
            let around = |half_width: Option<f64>, sign: f64| Some(energy(bin.free_energy? + sign * half_width?));
            let pointwise = error.map(|error| error.half_width_95);
            writer.write_record([
                number.to_string(),
                field(Some(bin.center())),
                field(Some(bin.lower)),
                field(Some(bin.upper)),
                field(bin.free_energy.map(energy)),
                field(error.map(|error| energy(error.standard_error))),
                field(around(pointwise, -1.0)),
                field(around(pointwise, 1.0)),
                field(around(band, -1.0)),
                field(around(band, 1.0)),
                field(error.map(|error| error.degrees_of_freedom)),
                bin.status.name().to_owned(),
                bin.n_samples.to_string(),
                field(Some(bin.effective_samples)),
                bin.n_windows.to_string(),
            ])?;
        }
    }
    writer.flush()?;
    drop(writer);
    Ok(text)
}

/// The zero of a profile, with its place.
pub(super) fn zero_in_words(job: &Job, profile: &Profile) -> String {
    use spandrel_solver::profile::Zero;
    let axis = &job.axes[job.profile.bins.axis()];
    let unit = unit_suffix(axis.unit());
    let place = |position: f64| format!("{} = {}{unit}", axis.name(), field(Some(position)));
    match profile.zero {
        Zero::Minimum => {
            format!("the lowest bin, {}", place(profile.zero_position.unwrap_or(f64::NAN)))
        }
        Zero::Position { .. } => format!("the bin at {}", place(profile.zero_position.unwrap_or(f64::NAN))),
        Zero::Range { from, to } => {
            format!("the mean density over {} to {}{unit}", place(from), field(Some(to)))
        }
    }
}

/// A unit behind a number: a blank and its symbol, nothing for an axis without a unit.
pub(super) fn unit_suffix(unit: spandrel_bias::units::PositionUnit) -> String {
    match unit {
        spandrel_bias::units::PositionUnit::None => String::new(),
        unit => format!(" {unit}"),
    }
}
