//! Progress on a terminal, for work that lasts.

use crate::messages::Messages;
use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};
use std::time::{Duration, Instant};

/// Work that ends sooner shows nothing.
const QUIET_TIME: Duration = Duration::from_millis(500);

/// One stretch of work. Drawn only on a terminal and only after half a second; never part of a result.
#[derive(Debug)]
pub struct Progress {
    bar: ProgressBar,
    started: Instant,
    shown: std::sync::atomic::AtomicBool,
    allowed: bool,
}

impl Progress {
    /// Work of `total` steps (bytes, say), described by `what`.
    #[must_use]
    pub fn bytes(messages: Messages, what: &'static str, total: u64) -> Self {
        let style = ProgressStyle::with_template("{msg} {bar:30} {bytes}/{total_bytes} {bytes_per_sec} {eta} left");
        Self::new(messages, what, Some(total), style.ok())
    }

    /// Work of `total` like steps, described by `what`.
    #[must_use]
    pub fn counted(messages: Messages, what: &'static str, total: u64) -> Self {
        let style = ProgressStyle::with_template("{msg} {bar:30} {pos}/{len} {per_sec} {eta} left");
        Self::new(messages, what, Some(total), style.ok())
    }

    /// Work whose length is not known beforehand; each step can say where it stands.
    #[must_use]
    pub fn open(messages: Messages, what: &'static str) -> Self {
        Self::new(messages, what, None, ProgressStyle::with_template("{msg} {spinner} {elapsed}").ok())
    }

    fn new(messages: Messages, what: &'static str, total: Option<u64>, style: Option<ProgressStyle>) -> Self {
        let bar = ProgressBar::with_draw_target(total, ProgressDrawTarget::hidden());
        if let Some(style) = style {
            bar.set_style(style);
        }
        bar.set_message(what);
        Self { bar, started: Instant::now(), shown: false.into(), allowed: messages.may_show_progress() }
    }

    /// So much more is done.
    pub fn advance(&self, steps: u64) {
        self.bar.inc(steps);
        self.show_if_it_lasts();
    }

    /// So much is done in all.
    pub fn reach(&self, step: u64) {
        self.bar.set_position(step);
        self.show_if_it_lasts();
    }

    /// Where the work stands.
    pub fn say(&self, text: String) {
        self.bar.set_message(text);
        self.show_if_it_lasts();
    }

    fn show_if_it_lasts(&self) {
        use std::sync::atomic::Ordering;
        if self.allowed && self.started.elapsed() > QUIET_TIME && !self.shown.swap(true, Ordering::Relaxed) {
            self.bar.set_draw_target(ProgressDrawTarget::stderr());
        }
    }
}

impl Drop for Progress {
    fn drop(&mut self) {
        self.bar.finish_and_clear();
    }
}
