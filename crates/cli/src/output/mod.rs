//! What a run leaves behind: files that appear whole or not at all, and a summary on the screen.

mod covariance;
mod figure;
mod folder;
mod number;
mod pmf;
mod screen;
mod summary;
mod windows;

pub use covariance::{COVARIANCE, covariance_csv};
pub use figure::{FIGURE, profile_figure};
pub use folder::{OutputError, SUMMARY, Staging};
pub use pmf::{PMF, pmf_csv};
pub use screen::{check_text, solve_text};
pub use summary::Summary;
pub use windows::{WINDOWS, windows_csv};
