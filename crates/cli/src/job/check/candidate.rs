//! A window before its files and its bias are looked at, from either way of giving one.

use super::term_inputs::TermInputs;
use crate::job::mark::Typed;
use crate::job::typed::{BiasInput, TypedBias, TypedDiscard, TypedWindow};

/// A window of the job or of the table of windows.
#[derive(Debug)]
pub(super) struct Candidate {
    /// `None` where it is at fault.
    pub name: Option<Typed<String>>,
    /// The paths and patterns of each replica.
    pub replicas: Vec<Vec<Typed<String>>>,
    /// Whether the window itself asks to be left out.
    pub exclude: bool,
    /// Kelvin.
    pub temperature: Option<Typed<f64>>,
    /// What is left out at the start.
    pub discard: Option<TypedDiscard>,
    /// At least 1.
    pub stride: Option<Typed<u64>>,
    /// The terms of its bias.
    pub terms: Vec<TermInputs>,
}

impl Candidate {
    /// A window of the job itself.
    pub fn from_window(window: TypedWindow) -> Self {
        Self {
            name: window.name,
            replicas: window.files.replicas.into_iter().map(|replica| replica.value).collect(),
            exclude: window.exclude,
            temperature: window.temperature,
            discard: window.discard,
            stride: window.stride,
            terms: window.bias.iter().map(given_terms).collect(),
        }
    }
}

/// The terms of a bias all of whose values stand in the job.
fn given_terms(bias: &TypedBias) -> TermInputs {
    let inputs = bias.inputs.iter().map(|(key, key_mark, input)| {
        let scalar = match input {
            BiasInput::Given(scalar) => Some(scalar.clone()),
            BiasInput::Column(_) | BiasInput::Faulty => None,
        };
        (*key, *key_mark, scalar)
    });
    TermInputs { mark: bias.mark, inputs: inputs.collect(), misspelt: bias.misspelt.clone() }
}
