//! A search watched from the terminal: a time limit, ctrl-c, and a bar on stderr while it lasts.

use std::io::{self, IsTerminal};
use std::sync::mpsc::{self, RecvTimeoutError, Sender};
use std::thread::{self, JoinHandle};
use std::time::Duration;

use indicatif::{ProgressBar, ProgressStyle};

use crate::search::Watch;
use crate::units::Time;

use super::{Failure, quantity};

/// Exit code of a process that ctrl-c ends: 128 and the number of the signal.
const INTERRUPTED: i32 = 130;
/// How long a search lasts before the bar is shown.
const PATIENCE: Duration = Duration::from_millis(500);
/// How often the bar is drawn.
const TICK: Duration = Duration::from_millis(100);

/// The flag that ends a search by the clock.
#[derive(Debug, clap::Args)]
pub(super) struct Ending {
    /// End the search after this time, such as "30 s", with the best found until then and what is proven of the rest. Ctrl-c
    /// does the same at once; a second ctrl-c ends the program.
    #[arg(long, value_name = "TIME", allow_hyphen_values = true)]
    time_limit: Option<String>,
}

/// A watched search; the bar goes with it.
pub(super) struct Watched {
    pub(super) watch: Watch,
    bar: Option<(Sender<()>, JoinHandle<()>)>,
}

impl Ending {
    /// Begins to watch.
    pub(super) fn watch(&self) -> Result<Watched, Failure> {
        let limit = quantity("--time-limit", self.time_limit.as_ref(), Time::s)?;
        let watch = match limit {
            Some(limit) => Watch::for_at_most(Duration::try_from_secs_f64(limit.s()).unwrap_or(Duration::MAX)),
            None => Watch::default(),
        };
        let told = watch.clone();
        // Where no handler can be set, ctrl-c ends the program as it would without.
        let _ = ctrlc::set_handler(move || {
            if told.is_due() {
                std::process::exit(INTERRUPTED);
            }
            told.end();
        });
        let bar = io::stderr().is_terminal().then(|| bar(watch.clone()));
        Ok(Watched { watch, bar })
    }
}

/// Draws how far the search is, once it has lasted a while, until the sender is gone.
fn bar(watch: Watch) -> (Sender<()>, JoinHandle<()>) {
    let (sender, gone) = mpsc::channel();
    let draw = move || {
        if gone.recv_timeout(PATIENCE) != Err(RecvTimeoutError::Timeout) {
            return;
        }
        let bar = ProgressBar::new(0);
        if let Ok(style) = ProgressStyle::with_template("{wide_bar} {pos} of {len}, {elapsed}; ctrl-c ends the search")
        {
            bar.set_style(style);
        }
        while gone.recv_timeout(TICK) == Err(RecvTimeoutError::Timeout) {
            let (done, of) = watch.progress();
            bar.set_length(of as u64);
            bar.set_position(done as u64);
            bar.tick();
        }
        bar.finish_and_clear();
    };
    (sender, thread::spawn(draw))
}

impl Drop for Watched {
    fn drop(&mut self) {
        if let Some((sender, drawn)) = self.bar.take() {
            drop(sender);
            // A bar that failed takes nothing away from the result.
            let _ = drawn.join();
        }
    }
}
