//! A bar on standard error while something takes long; only a terminal sees it.

use std::io::{IsTerminal, Write};
use std::time::{Duration, Instant};

/// Work that ends sooner shows nothing.
const PATIENCE: Duration = Duration::from_millis(400);

/// Cells of the bar.
const CELLS: usize = 30;

/// A bar for work of known length; it disappears when it is dropped.
pub(crate) struct Progress {
    what: &'static str,
    whole: usize,
    started: Instant,
    wanted: bool,
    shown: bool,
}

impl Progress {
    /// Nothing is shown yet, and nothing at all when `quiet` or away from a terminal.
    pub(crate) fn new(what: &'static str, whole: usize, quiet: bool) -> Self {
        let wanted = !quiet && std::io::stderr().is_terminal();
        Self { what, whole, started: Instant::now(), wanted, shown: false }
    }

    /// So much is done.
    pub(crate) fn at(&mut self, done: usize) {
        if !self.wanted || self.started.elapsed() < PATIENCE {
            return;
        }
        let filled = CELLS * done / self.whole.max(1);
        let bar: String = (0..CELLS).map(|cell| if cell < filled { '#' } else { '.' }).collect();
        // A terminal that is gone does not matter to the result.
        let _ = write!(std::io::stderr(), "\r{} [{bar}] {done} of {}", self.what, self.whole);
        self.shown = true;
    }
}

impl Drop for Progress {
    fn drop(&mut self) {
        if self.shown {
            let _ = write!(std::io::stderr(), "\r\x1b[2K");
        }
    }
}
