//! `windows.csv`: one row a window.

use super::number::field;
use crate::job::Job;
use crate::pipeline::{Analysis, Part, ReadReplica, ReadWindow};
use spandrel_solver::influence::Support;

/// Name of the file.
pub const WINDOWS: &str = "windows.csv";

/// Version of its columns.
const WINDOWS_FORMAT: u32 = 1;

/// What is known of every window, in the order of the job.
///
/// # Errors
/// None in practice: the writer writes to memory.
pub fn windows_csv(job: &Job, read: &[ReadWindow], analysis: &Analysis, parts: &[Part]) -> Result<Vec<u8>, csv::Error> {
    let units: Vec<String> = job.axes.iter().map(|axis| format!("{} in {}", axis.name(), axis.unit())).collect();
    let mut text = format!(
        "# {WINDOWS}, format {WINDOWS_FORMAT}, {} {}\n# means and spreads (standard deviations): {}; free energies in kT, relative to the first window of the group\n",
        crate::PROGRAM,
        crate::VERSION,
        units.join(", "),
    )
    .into_bytes();
    let mut writer = csv::Writer::from_writer(&mut text);
    let mut columns: Vec<String> = [
        "window",
        "group",
        "runs",
        "frames_read",
        "frames_discarded",
        "samples_excluded",
        "samples_cut",
        "samples_kept",
        "statistical_inefficiency",
        "inefficiency_error",
        "inefficiency_by_window",
        "effective_samples",
        "reduced_free_energy",
        "standard_error",
        "status",
    ]
    .map(str::to_owned)
    .to_vec();
    for axis in job.axes.iter() {
        columns.push(format!("mean_{}", axis.name()));
        columns.push(format!("spread_{}", axis.name()));
    }
    writer.write_record(&columns)?;
    for (k, (window, read)) in analysis.ensemble.windows.iter().zip(read).enumerate() {
        let result = parts.iter().enumerate().find_map(|(number, part)| {
            let place = part.windows.binary_search(&k).ok()?;
            Some((number + 1, part.window_results[place]))
        });
        let error = result.and_then(|(_, result)| result.uncertainty);
        let status = match error.map(|error| error.support) {
            None => "zero",
            Some(Support::Determined) => "determined",
            Some(Support::Provisional) => "provisional",
            Some(Support::NotDetermined) => "not-determined",
        };
        let shown = error.filter(|error| error.support != Support::NotDetermined);
        let over_runs = |of_run: fn(&ReadReplica) -> u64| read.replicas.iter().map(of_run).sum::<u64>().to_string();
        let mut row = vec![
            window.name.clone(),
            result.map(|(group, _)| group.to_string()).unwrap_or_default(),
            read.replicas.len().to_string(),
            over_runs(|run| run.report.frames),
            over_runs(|run| run.report.discarded),
            over_runs(|run| run.excluded),
            over_runs(|run| run.cut),
            window.n_samples.to_string(),
            field(window.inefficiency.map(|g| g.value)),
            field(window.inefficiency.map(|g| g.standard_error)),
            field(window.inefficiency_by_window.map(|g| g.value)),
            field(window.inefficiency.map(|_| window.effective_samples)),
            field(result.map(|(_, result)| result.free_energy)),
            field(shown.map(|error| error.standard_error)),
            status.to_owned(),
        ];
        for (mean, spread) in window.mean.iter().zip(&window.spread) {
            row.push(field(Some(*mean)));
            row.push(field(Some(*spread)));
        }
        writer.write_record(&row)?;
    }
    writer.flush()?;
    drop(writer);
    Ok(text)
}
