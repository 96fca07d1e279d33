//! The windows: names, files, biases.

use std::collections::HashMap;

use super::bias::BiasContext;
use super::bias_tables::BiasTables;
use super::candidate::Candidate;
use super::exclude::Exclusion;
use super::files::Files;
use super::series::Series;
use crate::job::mark::{Mark, Typed};
use crate::job::model::JobWindow;
use crate::job::number::readable;
use crate::job::problem::{Problem, Problems};

/// Complains about names that several windows have.
pub(super) fn check_names(candidates: &[Candidate], problems: &mut Problems) {
    let mut first_marks: HashMap<&str, Mark> = HashMap::new();
    for name in candidates.iter().filter_map(|window| window.name.as_ref()) {
        if let Some(&first) = first_marks.get(name.value.as_str()) {
            problems.push(
                Problem::at(
                    name.mark,
                    format!("`window.name`: expected a name for one window only, found `{}` again", name.value),
                )
                .label(first, "first here")
                .help("give independent starts of one window as its `replicas`, other windows another name"),
            );
        } else {
            first_marks.insert(&name.value, name.mark);
        }
    }
}

/// What the windows are checked against.
pub(super) struct WindowChecks<'a> {
    /// The series' keys.
    pub series: &'a Series,
    /// What the terms share.
    pub bias: BiasContext<'a>,
    /// The temperature of the system as it was typed.
    pub temperature: Option<Typed<f64>>,
    /// What is left out.
    pub exclusion: &'a Exclusion,
}

impl WindowChecks<'_> {
    /// The windows that take part. What is left out need not be there.
    pub fn check(
        &self,
        candidates: &[Candidate],
        files: &mut Files<'_>,
        tables: &mut BiasTables<'_>,
        problems: &mut Problems,
    ) -> Vec<JobWindow> {
        let mut windows = Vec::new();
        for (index, window) in candidates.iter().enumerate() {
            if self.exclusion.window(index) {
                window.replicas.iter().for_each(|replica| files.set_aside(replica));
            } else {
                windows.extend(self.window(index, window, files, tables, problems));
            }
        }
        windows
    }

    fn window(
        &self,
        index: usize,
        window: &Candidate,
        files: &mut Files<'_>,
        tables: &mut BiasTables<'_>,
        problems: &mut Problems,
    ) -> Option<JobWindow> {
        if let (Some(own), Some(system)) = (window.temperature, self.temperature)
            && own.value.to_bits() != system.value.to_bits()
        {
            problems.push(
                Problem::at(
                    own.mark,
                    format!(
                        "`window.temperature`: expected the temperature of the system, {}, found {}",
                        readable(system.value),
                        readable(own.value)
                    ),
                )
                .label(system.mark, "the temperature of the system")
                .help("windows of one job have one temperature; solve windows of another temperature in a job of their own"),
            );
        }
        let mut replicas = Vec::new();
        let mut replica_numbers = Vec::new();
        for (replica, number) in window.replicas.iter().zip(1..) {
            if self.exclusion.replica(index, number) {
                files.set_aside(replica);
            } else {
                replicas.push(files.segments(replica, problems));
                replica_numbers.push(number);
            }
        }
        let selection = self.series.selection(window.discard, window.stride, problems);
        let checked = self.bias.bias(&window.terms, tables, problems);
        Some(JobWindow {
            name: window.name.as_ref()?.value.clone(),
            replicas,
            replica_numbers,
            bias: checked.bias?,
            selection,
            automatic_start: self.series.automatic_start(window.discard),
            terms: checked.terms,
        })
    }
}
