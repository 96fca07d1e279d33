//! The keys of one bias term, wherever their values came from.

use crate::job::keys::Section;
use crate::job::mark::{Faulty, Mark, Optional};
use crate::job::problem::{Problem, Problems};
use crate::job::scalar::Scalar;

/// The keys of one term with their values: typed in the job, or fetched from a row of the table of windows.
#[derive(Debug, Clone)]
pub(super) struct TermInputs {
    /// The term's header.
    pub mark: Mark,
    /// Key, place of the key, value; no value where it is at fault and reported.
    pub inputs: Vec<(&'static str, Mark, Option<Scalar>)>,
    /// Keys that were probably meant by keys that do not exist; that they are missing needs no second complaint.
    pub misspelt: Vec<&'static str>,
}

impl TermInputs {
    /// Takes a key that may be left out.
    pub fn take(&mut self, name: &str) -> Optional<Scalar> {
        match self.inputs.iter().position(|(key, ..)| *key == name) {
            Some(index) => self.inputs.remove(index).2.map(Some).ok_or(Faulty),
            None => Ok(None),
        }
    }

    /// Takes a key that a term of this kind needs.
    pub fn require(&mut self, name: &str, kind: &str, problems: &mut Problems) -> Option<Scalar> {
        match self.take(name) {
            Ok(Some(scalar)) => Some(scalar),
            Err(Faulty) => None,
            Ok(None) => {
                if !self.misspelt.contains(&name) {
                    problems.push(self.missing(name, kind));
                }
                None
            }
        }
    }

    /// A key that a term of this kind needs is not there.
    pub fn missing(&self, name: &str, kind: &str) -> Problem {
        let key = Section::Bias.key(name);
        let (takes, example) = key.map_or(("a value", ""), |key| (key.takes, key.example));
        Problem::at(self.mark, format!("`bias.{name}`: expected {takes}, found no such key"))
            .note(format!("a bias of the kind `{kind}` needs `{name}`"))
            .help(format!("add it, as in `{example}`"))
    }

    /// Complains about the keys that this kind does not use.
    pub fn finish(self, kind: &str, used: &[&str], problems: &mut Problems) {
        for (name, key_mark, _) in &self.inputs {
            let used: Vec<String> = used.iter().map(|name| format!("`{name}`")).collect();
            let problem = Problem::at(*key_mark, format!("`bias.{name}`: a bias of the kind `{kind}` has no such key"));
            problems.push(if used.is_empty() {
                problem.help("remove it, or give the bias its right kind")
            } else {
                problem.help(format!("its keys are {}", used.join(", ")))
            });
        }
    }
}
