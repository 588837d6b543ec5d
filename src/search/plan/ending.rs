//! When a search is to end before it is done.

use std::sync::atomic::{AtomicBool, Ordering};

/// Asks from time to time whether to end; once told so, it stays so.
pub(super) struct Ending<'d> {
    due: &'d (dyn Fn() -> bool + Sync),
    told: AtomicBool,
}

impl<'d> Ending<'d> {
    pub(super) fn new(due: &'d (dyn Fn() -> bool + Sync)) -> Self {
        Self { due, told: AtomicBool::new(false) }
    }

    pub(super) fn is_due(&self) -> bool {
        if self.was_due() {
            return true;
        }
        let due = (self.due)();
        if due {
            self.told.store(true, Ordering::Relaxed);
        }
        due
    }

    /// Whether it was told to end, without asking again.
    pub(super) fn was_due(&self) -> bool {
        self.told.load(Ordering::Relaxed)
    }
}
