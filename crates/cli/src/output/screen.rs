//! The summary that a person reads in ten seconds.

use super::number::{count, decimals_of, readable, with_error};
use super::pmf::{unit_suffix, zero_in_words};
use super::summary::NOT_COVERED;
use crate::job::Job;
use crate::pipeline::{Analysis, Part, ReadWindow};
use spandrel_solver::findings::{Finding, Severity};
use std::collections::BTreeSet;
use std::fmt::Write as _;
use std::path::Path;

/// Findings of one code that are shown one by one; more are counted.
const SHOWN_OF_A_KIND: usize = 3;

/// After a solve whose files were written to `folder`.
#[must_use]
pub fn solve_text(
    job: &Job,
    read: &[ReadWindow],
    analysis: &Analysis,
    parts: &[Part],
    written: &[String],
    folder: &Path,
) -> String {
    let mut text = String::new();
    let axis = &job.axes[job.profile.bins.axis()];
    let _ = writeln!(text, "Profile along {}: {}", axis.name(), data_in_words(job, read, analysis));
    for part in parts {
        if parts.len() > 1 {
            let names: Vec<&str> = part.windows.iter().map(|&k| analysis.ensemble.windows[k].name.as_str()).collect();
            line(&mut text, "windows", &names.join(", "));
        }
        part_lines(&mut text, job, part);
    }
    data_lines(&mut text, analysis);
    text.push_str(&findings_text(&analysis.findings));
    let _ = writeln!(text, "Written to {}: {}", folder.display(), written.join(", "));
    let _ = writeln!(text, "These errors do not cover {}.", NOT_COVERED.join("; "));
    text
}

/// After a check.
#[must_use]
pub fn check_text(job: &Job, read: &[ReadWindow], analysis: &Analysis) -> String {
    let mut text = format!("Read {}\n", data_in_words(job, read, analysis));
    data_lines(&mut text, analysis);
    text.push_str(&findings_text(&analysis.findings));
    text
}

fn line(text: &mut String, label: &str, content: &str) {
    let _ = writeln!(text, "  {label:<13} {content}");
}

fn plural(n: usize, word: &str) -> String {
    if n == 1 { format!("1 {word}") } else { format!("{n} {word}s") }
}

fn data_in_words(job: &Job, read: &[ReadWindow], analysis: &Analysis) -> String {
    let runs: usize = read.iter().map(|window| window.replicas.len()).sum();
    let samples: u64 = analysis.ensemble.windows.iter().map(|window| window.n_samples).sum();
    format!(
        "{}, {}, {} samples, {} K",
        plural(analysis.ensemble.n_windows(), "window"),
        plural(runs, "run"),
        count(samples),
        readable(job.temperature.kelvin(), 6)
    )
}

fn part_lines(text: &mut String, job: &Job, part: &Part) {
    let axis = &job.axes[job.profile.bins.axis()];
    let unit = unit_suffix(axis.unit());
    let bins = &part.profile.bins;
    if let (Some(first), Some(last)) = (bins.first(), bins.last()) {
        let sampled = bins.iter().filter(|bin| bin.free_energy.is_some()).count();
        let (from, to) = (readable(first.lower, 8), readable(last.upper, 8));
        line(text, "range", &format!("{from} to {to}{unit}, {sampled} of {} sampled", plural(bins.len(), "bin")));
    }
    line(text, "zero", &zero_in_words(job, &part.profile));
    let energy = |reduced: f64| job.energy_unit.from_reduced(reduced, job.temperature);
    let place = |position: f64| format!("{} = {}{unit}", axis.name(), readable(position, 8));
    let with_errors = bins.iter().filter_map(|bin| Some((bin, bin.free_energy?, bin.uncertainty?)));
    if let Some((bin, f, error)) = with_errors.clone().reduce(|best, next| if next.1 > best.1 { next } else { best }) {
        let standard_error = energy(error.standard_error);
        let decimals = decimals_of(standard_error);
        let (low, high) = (energy(f - error.half_width_95), energy(f + error.half_width_95));
        line(
            text,
            "highest",
            &format!(
                "{} {} at {} (95 %: {low:.decimals$} to {high:.decimals$})",
                with_error(energy(f), standard_error),
                job.energy_unit,
                place(bin.center()),
            ),
        );
    }
    let largest =
        with_errors.reduce(|worst, next| if next.2.standard_error > worst.2.standard_error { next } else { worst });
    if let Some((bin, _, error)) = largest {
        let standard_error = readable(energy(error.standard_error), 2);
        line(text, "largest error", &format!("{standard_error} {} at {}", job.energy_unit, place(bin.center())));
    }
    line(
        text,
        "solved",
        &format!(
            "{}, {}, within {:.0e} kT of the maximum likelihood",
            part.solution.method.name(),
            plural(usize::try_from(part.solution.iterations).unwrap_or(usize::MAX), "iteration"),
            part.solution.certificate.newton_step
        ),
    );
}

fn data_lines(text: &mut String, analysis: &Analysis) {
    let windows = &analysis.ensemble.windows;
    if let Some(link) = analysis.links.weakest() {
        let (a, b) = (&windows[link.windows.0].name, &windows[link.windows.1].name);
        let samples = readable(link.linking_samples, 3);
        line(text, "weakest link", &format!("{a} and {b}, by {samples} effective samples"));
    }
    let known = windows.iter().filter(|window| window.inefficiency.is_some());
    if let Some(window) = known.min_by(|a, b| a.effective_samples.total_cmp(&b.effective_samples)) {
        let effective = readable(window.effective_samples, 3);
        let samples = count(window.n_samples);
        line(text, "least sampled", &format!("{}, {effective} effective samples of {samples}", window.name));
    }
}

/// The findings, worst first, each kind with what to do; of many alike the first few and a count.
fn findings_text(findings: &[Finding]) -> String {
    if findings.is_empty() {
        return "Findings: none\n".to_owned();
    }
    let mut kinds: Vec<(Severity, &'static str)> =
        findings.iter().map(|finding| (finding.severity(), finding.code())).collect();
    let counted: Vec<String> = [Severity::Error, Severity::Warning, Severity::Note]
        .iter()
        .map(|severity| (kinds.iter().filter(|(of, _)| of == severity).count(), severity.name()))
        .filter(|(n, _)| *n > 0)
        .map(|(n, name)| plural(n, name))
        .collect();
    let mut text = format!("Findings: {}\n", counted.join(", "));
    kinds.sort_by_key(|(severity, _)| std::cmp::Reverse(*severity));
    let mut seen = BTreeSet::new();
    kinds.retain(|(_, code)| seen.insert(*code));
    for (severity, code) in kinds {
        let alike: Vec<&Finding> = findings.iter().filter(|finding| finding.code() == code).collect();
        for finding in alike.iter().take(SHOWN_OF_A_KIND) {
            let _ = writeln!(text, "  {:<8}{code}: {}", severity.name(), finding.message());
        }
        if alike.len() > SHOWN_OF_A_KIND {
            let _ = writeln!(text, "          and {} more like it", alike.len() - SHOWN_OF_A_KIND);
        }
        if let Some(first) = alike.first() {
            let _ = writeln!(text, "          {}", first.advice());
        }
    }
    text
}
