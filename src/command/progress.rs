//! How far long work is, on a terminal only.

use std::time::Duration;

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};

use crate::Progress;

/// A line on standard error while one plan is solved; it shows itself only when solving takes long enough to wonder.
pub struct Line(ProgressBar);

impl Line {
    /// A line for one plan.
    pub fn new() -> Self {
        let bar = ProgressBar::with_draw_target(None, ProgressDrawTarget::stderr());
        if let Ok(style) = ProgressStyle::with_template("  {elapsed:>4}  {msg}") {
            bar.set_style(style);
        }
        Self(bar)
    }

    /// Wipes the line.
    pub fn done(&self) {
        self.0.finish_and_clear();
    }
}

/// Shorter waits are not worth a flicker.
const PATIENCE: Duration = Duration::from_millis(400);

impl Progress for Line {
    fn step(&self, what: &str, done: u64, of: Option<u64>) -> bool {
        if self.0.elapsed() > PATIENCE && !self.0.is_hidden() {
            self.0.set_message(match of {
                Some(of) => format!("{what} {done} of {of}"),
                None => format!("{what} {done}"),
            });
            self.0.tick();
        }
        true
    }
}

/// A bar over many plans.
pub fn over_plans(number: usize) -> ProgressBar {
    let bar = ProgressBar::with_draw_target(Some(number as u64), ProgressDrawTarget::stderr());
    if let Ok(style) =
        ProgressStyle::with_template("  {bar:30} {pos} of {len} plans, {eta} to go  {wide_msg}")
    {
        bar.set_style(style);
    }
    bar
}

/// Long work inside one of many plans, told at the end of their bar.
pub struct Told<'a>(pub &'a ProgressBar);

impl Progress for Told<'_> {
    fn step(&self, what: &str, done: u64, _of: Option<u64>) -> bool {
        if !self.0.is_hidden() {
            self.0.set_message(format!("{what} {done}"));
        }
        true
    }
}
