//! The only place that prints. Results go to standard output, everything else to standard error.

use std::io::{self, IsTerminal, Write};

/// Where messages go, and whether any are wanted.
#[derive(Debug, Clone, Copy)]
pub struct Messages {
    quiet: bool,
}

impl Messages {
    /// Messages of one run; `quiet` leaves only errors.
    #[must_use]
    pub fn new(quiet: bool) -> Self {
        Self { quiet }
    }

    /// A summary that a person reads, on standard output.
    pub fn summary(self, text: &str) {
        if !self.quiet {
            // A closed pipe is the reader's choice.
            let _ = io::stdout().lock().write_all(text.as_bytes());
        }
    }

    /// An error, on standard error, also when quiet.
    #[expect(clippy::unused_self, reason = "every message goes through the one value that knows how to print")]
    pub fn error(self, text: &str) {
        let _ = writeln!(io::stderr().lock(), "{}", text.trim_end());
    }

    /// Whether progress may be drawn.
    #[must_use]
    pub fn may_show_progress(self) -> bool {
        !self.quiet && io::stderr().is_terminal()
    }
}
