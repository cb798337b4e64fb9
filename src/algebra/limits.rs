//! How long a search may take, and how it is stopped.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

/// Why a search came back without an answer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum StopReason {
    /// The stop flag was raised.
    Flag,
    /// The deadline has passed.
    Deadline,
    /// The steps that this part of the search may take are used up.
    Steps,
    /// This part of the search needs more memory than it may have.
    Memory,
}

/// The bounds of a search.
///
/// The flag and the clock are asked every few thousand elementary steps, that is, within about a
/// millisecond.
#[derive(Clone, Debug)]
pub struct Limits {
    /// Raised from outside to end the search.
    pub stop: Arc<AtomicBool>,
    /// When the search ends at the latest.
    pub deadline: Option<Instant>,
    /// How many bytes the search may use for one size. Sizes that need more are given up.
    pub bytes: usize,
    /// When the next rest is due; see [`Limits::share_from`].
    resting: Option<Instant>,
    steps: u64,
    next: u64,
    most: u64,
}

/// How long a search that shares its core works, and then rests, at a stretch.
const STRETCH: Duration = Duration::from_millis(15);

/// How many elementary steps (table look-ups and the like) pass between two looks at the clock.
const STRIDE: u64 = 1 << 14;

impl Limits {
    /// Limits with 512 MiB of memory.
    pub fn new(stop: Arc<AtomicBool>, deadline: Option<Instant>) -> Self {
        Limits {
            stop,
            deadline,
            bytes: 512 << 20,
            resting: None,
            steps: 0,
            next: 0,
            most: u64::MAX,
        }
    }

    /// No limit but the memory.
    pub fn none() -> Self {
        Self::new(Arc::new(AtomicBool::new(false)), None)
    }

    /// Counts steps, and tells when it is time to stop.
    #[inline]
    pub(super) fn spend(&mut self, steps: u64) -> Result<(), StopReason> {
        self.steps += steps;
        if self.steps < self.next {
            return Ok(());
        }
        self.next = self.steps + STRIDE;
        if self.steps > self.most {
            return Err(StopReason::Steps);
        }
        self.look()?;
        if let Some(due) = self.resting
            && Instant::now() >= due
        {
            std::thread::sleep(STRETCH);
            self.resting = Some(Instant::now() + STRETCH);
        }
        Ok(())
    }

    /// From this time on the search rests half of the time, so that others can use its core.
    pub fn share_from(&mut self, time: Instant) {
        self.resting = Some(time);
    }

    /// Lets what follows take so many steps, roughly; none: as many as it needs.
    pub(super) fn allow(&mut self, steps: Option<u64>) {
        self.most = steps.map_or(u64::MAX, |steps| self.steps.saturating_add(steps));
    }

    /// How many steps have been counted.
    pub fn steps(&self) -> u64 {
        self.steps
    }

    /// Looks at the flag and the clock.
    pub(super) fn look(&self) -> Result<(), StopReason> {
        if self.stop.load(Ordering::Relaxed) {
            return Err(StopReason::Flag);
        }
        match self.deadline {
            Some(deadline) if Instant::now() >= deadline => Err(StopReason::Deadline),
            _ => Ok(()),
        }
    }
}
