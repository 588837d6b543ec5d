//! Who watches a search: may end it before everything was tried, and sees how far it is.
//!
//! A search that is not ended does not depend on its watch; one that is ended says so in its answer.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};
use std::time::{Duration, Instant};

/// One watch; its clones watch together.
#[derive(Clone, Debug, Default)]
pub struct Watch(Arc<Watched>);

#[derive(Debug, Default)]
struct Watched {
    deadline: Option<Instant>,
    ended: AtomicBool,
    done: AtomicUsize,
    of: AtomicUsize,
}

/// A search that was ended before it could answer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Stopped;

impl Watch {
    /// One that ends the search after some time, counted from now.
    pub fn for_at_most(time: Duration) -> Self {
        Self(Arc::new(Watched { deadline: Instant::now().checked_add(time), ..Watched::default() }))
    }

    /// Ends the search, from any thread.
    pub fn end(&self) {
        self.0.ended.store(true, Ordering::Relaxed);
    }

    /// Whether the search must end; once so, it stays so.
    pub fn is_due(&self) -> bool {
        if self.0.ended.load(Ordering::Relaxed) {
            return true;
        }
        let due = self.0.deadline.is_some_and(|deadline| Instant::now() >= deadline);
        if due {
            self.end();
        }
        due
    }

    /// What is done and out of how many, in steps of unlike length: areas searched, limits looked at.
    pub fn progress(&self) -> (usize, usize) {
        (self.0.done.load(Ordering::Relaxed), self.0.of.load(Ordering::Relaxed))
    }

    /// So many more steps are to be done.
    pub(super) fn expect(&self, steps: usize) {
        self.0.of.fetch_add(steps, Ordering::Relaxed);
    }

    /// One more step is done.
    pub(super) fn advance(&self) {
        self.0.done.fetch_add(1, Ordering::Relaxed);
    }
}
