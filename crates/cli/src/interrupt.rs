//! A wish to stop, from the terminal or a signal.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

/// Set once the user asks to stop; looked at between chunks of rows and between iterations, so that temporary files are cleaned up.
#[derive(Debug, Clone, Default)]
pub struct Interrupt(Arc<AtomicBool>);

impl Interrupt {
    /// Listens to interrupt and termination signals. Where no handler can be installed, a signal ends the program at once, which leaves
    /// no half-written result either, only a hidden temporary folder.
    #[must_use]
    pub fn listening() -> Self {
        let interrupt = Self::default();
        let flag = Arc::clone(&interrupt.0);
        let _ = ctrlc::set_handler(move || flag.store(true, Ordering::Relaxed));
        interrupt
    }

    /// Whether the user asked to stop.
    #[must_use]
    pub fn requested(&self) -> bool {
        self.0.load(Ordering::Relaxed)
    }
}
