//! What was left out while reading, as findings.

use super::reading::{ReadReplica, ReadWindow};
use crate::job::Job;
use spandrel_ingest::Notice;
use spandrel_solver::findings::Finding;

/// Findings about the files of all windows, in the order of the job; repeated stretches of one file are one finding.
pub(super) fn findings_of_reading(job: &Job, windows: &[ReadWindow]) -> Vec<Finding> {
    let mut findings: Vec<Finding> = Vec::new();
    for (settings, window) in job.windows.iter().zip(windows) {
        for replica in &window.replicas {
            findings.extend(finding_of_start(&settings.name, replica));
            for segment in &replica.report.segments {
                let file = job.shown(&segment.path);
                for notice in &replica.report.notices {
                    if let Notice::UnfinishedLastLine { path, line, .. } = notice
                        && *path == segment.path
                    {
                        findings.push(Finding::CutLastLine {
                            window: settings.name.clone(),
                            file: file.clone(),
                            line: *line,
                        });
                    }
                }
                if segment.rows_repeated > 0 {
                    let first_line = replica.report.notices.iter().find_map(|notice| match notice {
                        Notice::RepeatedFrames { path, first_line, .. } if *path == segment.path => Some(*first_line),
                        _ => None,
                    });
                    findings.push(Finding::RepeatedFrames {
                        window: settings.name.clone(),
                        file,
                        line: first_line.unwrap_or(1),
                        frames: segment.rows_repeated,
                    });
                }
            }
        }
    }
    findings
}

/// A run that never settles, or whose beginning had not and was kept.
fn finding_of_start(window: &str, replica: &ReadReplica) -> Option<Finding> {
    let start = replica.start?;
    let window = window.to_owned();
    if !start.settles {
        return Some(Finding::NeverSettles { window });
    }
    (start.evident && replica.cut == 0).then(|| Finding::UnsettledStart {
        window,
        samples: start.samples_dropped,
        gain: start.effective_after / start.effective_before,
    })
}
