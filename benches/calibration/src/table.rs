//! The scores as an aligned table.

use crate::jackknife::Estimate;
use crate::method::Method;
use crate::report::Report;
use crate::score::Score;
use std::fmt::Write as _;

const HEADER: [&str; 18] = [
    "system",
    "method",
    "printed %",
    "determined %",
    "95 %",
    "68 %",
    "95, determined",
    "oracle 95",
    "oracle 68",
    "95 - oracle",
    "all bins 95",
    "all bins 68",
    "z sd",
    "oracle z sd",
    "worst bin 95",
    "width",
    "rms, kT",
    "rms/oracle",
];

/// One line a system and method. Shares are in percent, numbers after ± are standard errors; `width` is the median of the 95 % half widths
/// over the exact ones. Lines on replicates without a profile follow, where there are any.
#[must_use]
pub fn table(reports: &[Report]) -> String {
    let mut rows = vec![HEADER.map(String::from)];
    for report in reports {
        rows.extend(report.methods.iter().map(|(method, score)| row(report, *method, score)));
    }
    let width = |column: usize| rows.iter().map(|row| row[column].chars().count()).max().unwrap_or(0);
    let widths: [usize; HEADER.len()] = std::array::from_fn(width);
    let mut text = String::new();
    for row in &rows {
        let mut line = String::new();
        for (column, (cell, width)) in row.iter().zip(widths).enumerate() {
            // Writing to a string cannot fail.
            let _ = if column < 2 { write!(line, "{cell:<width$}  ") } else { write!(line, "{cell:>width$}  ") };
        }
        text.push_str(line.trim_end());
        text.push('\n');
    }
    for report in reports {
        for (refusal, count) in &report.refused {
            let (system, all) = (report.system.name(), report.settings.n_replicates);
            let _ = writeln!(text, "{system}: {count} of {all} replicates without a profile, {}", refusal.name());
        }
    }
    text
}

fn row(report: &Report, method: Method, score: &Score) -> [String; HEADER.len()] {
    let worst = score.worst_bin.map(|worst| worst.coverage_95);
    [
        report.system.name().into(),
        method.name().into(),
        percent(score.printed),
        percent(score.determined),
        percent(score.coverage_95),
        percent(score.coverage_68),
        percent(score.determined_95),
        percent(score.oracle_95),
        percent(score.oracle_68),
        percent(score.excess_95),
        percent(report.oracle.coverage_95),
        percent(report.oracle.coverage_68),
        number(score.z_deviation, 2),
        number(score.oracle_z_deviation, 2),
        percent(worst),
        score.relative_width.map_or("-".into(), |(median, _)| format!("{median:.2}")),
        number(report.oracle.root_mean_square, 4),
        number(report.oracle.relative_root_mean_square, 3),
    ]
}

fn percent(share: Option<Estimate>) -> String {
    let hundredfold = |estimate: Estimate| Estimate {
        value: 100.0 * estimate.value,
        standard_error: 100.0 * estimate.standard_error,
    };
    number(share.map(hundredfold), 1)
}

fn number(estimate: Option<Estimate>, digits: usize) -> String {
    estimate
        .map_or("-".into(), |Estimate { value, standard_error }| format!("{value:.digits$}±{standard_error:.digits$}"))
}
