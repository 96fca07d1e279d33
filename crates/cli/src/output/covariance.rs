//! `covariance.csv`: how the errors of the bins hang together.

use super::number::field;
use crate::job::Job;
use crate::pipeline::Part;

/// Name of the file.
pub const COVARIANCE: &str = "covariance.csv";

/// Version of its columns.
const COVARIANCE_FORMAT: u32 = 1;

/// The covariance of all bins with an error, one row and one column a bin, in the job's energy unit squared; bins of different groups have
/// nothing in common, and their fields are empty.
///
/// # Errors
/// None in practice: the writer writes to memory.
pub fn covariance_csv(job: &Job, parts: &[Part]) -> Result<Vec<u8>, csv::Error> {
    let axis = &job.axes[job.profile.bins.axis()];
    let mut text = format!(
        "# {COVARIANCE}, format {COVARIANCE_FORMAT}, {} {}\n# covariance of the free energies of bins, as differences from the zero, in ({})^2; rows and columns: middle of the bin, {} in {}\n# the variance of a difference between two bins is the sum of their variances less twice their covariance\n",
        crate::PROGRAM,
        crate::VERSION,
        job.energy_unit,
        axis.name(),
        axis.unit(),
    )
    .into_bytes();
    let unit = job.energy_unit.from_reduced(1.0, job.temperature).powi(2);
    let positions: Vec<Vec<String>> = parts.iter().map(positions_of).collect();
    let mut writer = csv::Writer::from_writer(&mut text);
    let header = ["group".to_owned(), "position".to_owned()];
    writer.write_record(header.iter().chain(positions.iter().flatten()))?;
    let mut before = 0;
    let total: usize = positions.iter().map(Vec::len).sum();
    for ((number, part), own) in (1..).zip(parts).zip(&positions) {
        if let Some((_, covariance)) = &part.covariance {
            for (i, position) in own.iter().enumerate() {
                let mut row = vec![number.to_string(), position.clone()];
                row.extend((0..total).map(|column| {
                    let inside = column.checked_sub(before).filter(|j| *j < own.len());
                    field(inside.map(|j| covariance[(i, j)] * unit))
                }));
                writer.write_record(&row)?;
            }
        }
        before += own.len();
    }
    writer.flush()?;
    drop(writer);
    Ok(text)
}

fn positions_of(part: &Part) -> Vec<String> {
    let bins = part.covariance.iter().flat_map(|(bins, _)| bins);
    bins.map(|&bin| field(Some(part.profile.bins[bin].center()))).collect()
}
