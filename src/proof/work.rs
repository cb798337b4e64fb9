//! What a check costs and how it can end.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

/// How much a check may do, in units of about one visited node; a new term costs several.
///
/// The default keeps a check within about a gigabyte and within seconds to tens of seconds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct WorkLimit(pub u64);

impl WorkLimit {
    /// What a check may do where nothing else is said.
    pub const DEFAULT: WorkLimit = WorkLimit(200_000_000);
}

impl Default for WorkLimit {
    fn default() -> Self {
        WorkLimit::DEFAULT
    }
}

/// How a check ended.
#[derive(Clone, Debug, PartialEq, Eq)]
#[must_use]
pub enum Outcome {
    /// The evidence shows what it says it shows.
    Accepted,
    /// The evidence does not show it, or is not evidence at all.
    Rejected {
        /// Where in the file, such as `lemmas[3].steps[0].with.x`.
        place: String,
        /// What is wrong there.
        reason: String,
    },
    /// The work limit was reached: neither accepted nor rejected.
    TooCostly,
}

impl Outcome {
    /// Whether the evidence was accepted.
    pub fn is_accepted(&self) -> bool {
        matches!(self, Outcome::Accepted)
    }
}

/// Why a check stops before its end.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum Stop {
    Rejected { place: String, reason: String },
    TooCostly,
}

/// A rejection at `place`.
pub(super) fn rejected(place: impl Into<String>, reason: impl Into<String>) -> Stop {
    Stop::Rejected {
        place: place.into(),
        reason: reason.into(),
    }
}

impl From<Result<(), Stop>> for Outcome {
    fn from(result: Result<(), Stop>) -> Self {
        match result {
            Ok(()) => Outcome::Accepted,
            Err(Stop::Rejected { place, reason }) => Outcome::Rejected { place, reason },
            Err(Stop::TooCostly) => Outcome::TooCostly,
        }
    }
}

/// The work that is left of a limit.
#[derive(Debug)]
pub(super) struct Work {
    left: u64,
    /// Set from outside to stop.
    stop: Option<Arc<AtomicBool>>,
}

/// The flag is looked at once in 2¹² units of work, a few hundred a second at least.
const LOOK_EVERY: u32 = 12;

/// What a new term costs, so that the limit also bounds memory.
pub(super) const NEW_TERM: u64 = 20;

impl Work {
    pub(super) fn new(limit: WorkLimit) -> Self {
        Work {
            left: limit.0,
            stop: None,
        }
    }

    /// The same, until the flag is set.
    pub(super) fn until(limit: WorkLimit, stop: Arc<AtomicBool>) -> Self {
        Work {
            stop: Some(stop),
            ..Work::new(limit)
        }
    }

    /// Takes `units` from what is left, or stops the check.
    pub(super) fn spend(&mut self, units: u64) -> Result<(), Stop> {
        match self.left.checked_sub(units) {
            Some(left) => {
                let look = left >> LOOK_EVERY != self.left >> LOOK_EVERY;
                self.left = left;
                if look
                    && self
                        .stop
                        .as_ref()
                        .is_some_and(|s| s.load(Ordering::Relaxed))
                {
                    return Err(Stop::TooCostly);
                }
                Ok(())
            }
            None => {
                self.left = 0;
                Err(Stop::TooCostly)
            }
        }
    }
}
