//! From a checked job to results, stage by stage, each a plain value.
//!
//! ```text
//! Job -> ReadWindows (text to condensed runs) -> Analysis (ensemble, links, solutions, profiles) -> files, summary
//! ```

mod analysis;
mod notices;
mod reading;

pub use analysis::{Analysis, AnalysisError, BAND_PROBABILITY, Part, lay_out, solve_parts};
pub use reading::{ReadReplica, ReadWindow, ReadingError, ReadingProblem, read_windows};
