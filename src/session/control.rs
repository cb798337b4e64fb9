//! How work is bounded, interrupted and watched.

use crate::algebra;
use crate::engine::Engine;
use crate::rewrite::Limits;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

/// What is going on, for a line of progress.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Progress {
    /// What is being done, as the start of a line.
    pub doing: String,
    /// For how long.
    pub elapsed: Duration,
    /// For how long at most.
    pub budget: Option<Duration>,
    /// Active rules.
    pub rules: usize,
    /// Waiting pairs.
    pub waiting: usize,
    /// Pairs formed since the work began.
    pub formed: u64,
}

/// Who may stop the work and who is told about it.
pub struct Control<'a> {
    /// Set from outside to stop.
    pub stop: Arc<AtomicBool>,
    /// Called every few hundredths of a second.
    pub watch: &'a mut dyn FnMut(&Progress),
}

/// A piece of work under way.
pub(super) struct Work<'a, 'c> {
    control: &'a mut Control<'c>,
    doing: String,
    begun: Instant,
    budget: Option<Duration>,
    told: Instant,
    /// Pairs formed by the engines before the work began.
    formed_before: u64,
    /// Set when the answer was found by somebody else.
    elsewhere: Option<Arc<AtomicBool>>,
    /// When to pause although there is time left.
    pause: Option<Instant>,
}

const TELL_EVERY: Duration = Duration::from_millis(50);

impl<'a, 'c> Work<'a, 'c> {
    pub(super) fn new(
        control: &'a mut Control<'c>,
        doing: impl Into<String>,
        budget: Option<Duration>,
    ) -> Self {
        let begun = Instant::now();
        let doing = doing.into();
        Work {
            control,
            doing,
            begun,
            budget,
            told: begun,
            formed_before: 0,
            elsewhere: None,
            pause: None,
        }
    }

    pub(super) fn formed_before(mut self, formed: u64) -> Self {
        self.formed_before = formed;
        self
    }

    pub(super) fn budget(&self) -> Option<Duration> {
        self.budget
    }

    pub(super) fn elapsed(&self) -> Duration {
        self.begun.elapsed()
    }

    /// From now on the work also ends when this flag is set.
    pub(super) fn set_elsewhere(&mut self, flag: Option<Arc<AtomicBool>>) {
        self.elsewhere = flag;
    }

    /// The flag by which somebody else says that the answer was found.
    pub(super) fn elsewhere(&self) -> Option<Arc<AtomicBool>> {
        self.elsewhere.clone()
    }

    /// From now on the work also pauses at this time.
    pub(super) fn set_pause(&mut self, pause: Option<Instant>) {
        self.pause = pause;
    }

    /// Does the work pause before its time is used up?
    pub(super) fn pauses(&self) -> bool {
        self.pause.is_some()
    }

    /// Is the time used up, or is there no need to go on?
    pub(super) fn is_over(&self) -> bool {
        let set = |flag: &Arc<AtomicBool>| flag.load(Ordering::Relaxed);
        self.budget.is_some_and(|budget| self.elapsed() >= budget)
            || self.is_stopped()
            || self.elsewhere.as_ref().is_some_and(set)
            || self.pause.is_some_and(|pause| Instant::now() >= pause)
    }

    /// The flag that stops the work from outside.
    pub(super) fn stop(&self) -> Arc<AtomicBool> {
        self.control.stop.clone()
    }

    /// The bounds of a search for an algebra that this flag stops.
    pub(super) fn algebra_limits(&self, stop: Arc<AtomicBool>) -> algebra::Limits {
        algebra::Limits::new(stop, self.budget.map(|budget| self.begun + budget))
    }

    pub(super) fn is_stopped(&self) -> bool {
        self.control.stop.load(Ordering::Relaxed)
    }

    /// The bounds of the whole work, or of a slice of it.
    pub(super) fn limits(&self, slice: Option<Duration>) -> Limits {
        let mut limits = Limits::new(self.control.stop.clone());
        if let Some(budget) = self.budget {
            limits = limits.until(self.begun + budget);
        }
        limits.elsewhere = self.elsewhere.clone();
        if let Some(pause) = self.pause {
            limits = limits.until(pause);
        }
        if let Some(slice) = slice {
            limits = limits.until(Instant::now() + slice);
        }
        limits
    }

    /// Tells that there is nothing to count.
    pub(super) fn tell_waiting(&mut self) {
        let now = Instant::now();
        if now.duration_since(self.told) >= TELL_EVERY {
            self.told = now;
            (self.control.watch)(&Progress {
                doing: self.doing.clone(),
                elapsed: self.begun.elapsed(),
                budget: self.budget,
                rules: 0,
                waiting: 0,
                formed: 0,
            });
        }
    }

    /// Tells how far an engine is, if it is time to; `others` is what the other engines formed.
    pub(super) fn tell(&mut self, engine: &Engine, others: u64) {
        let now = Instant::now();
        if now.duration_since(self.told) < TELL_EVERY {
            return;
        }
        self.told = now;
        let formed = engine.counts().formed + others;
        (self.control.watch)(&Progress {
            doing: self.doing.clone(),
            elapsed: self.begun.elapsed(),
            budget: self.budget,
            rules: engine.system.active(),
            waiting: engine.waiting(),
            formed: formed.saturating_sub(self.formed_before),
        });
    }
}
