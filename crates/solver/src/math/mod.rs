//! Arithmetic that everything else stands on.

mod ordered;

pub(crate) use ordered::{CHUNK, ordered_map};
