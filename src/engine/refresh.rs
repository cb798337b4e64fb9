//! Weighing waiting pairs again.

use super::arrows::{Arrow, Technique};
use super::run::Engine;
use super::waiting::{Choice, Taken};
use crate::rewrite::{Limits, Stopped};

/// After so many chosen pairs the best waiting ones are looked at again.
const EVERY: u64 = 512;
/// So many of them.
const BEST: usize = 128;

impl Engine {
    /// From time to time, the best of the waiting pairs are simplified by the rules as they are
    /// now: those that join are deleted, the others get the priority that they have now.
    ///
    /// Costs making and simplifying each of them once more.
    pub(super) fn refresh_waiting(&mut self, limits: &mut Limits) -> Result<(), Stopped> {
        if !self.arrows.has(Arrow::Waiting, Technique::Rewriting)
            || self.counts.chosen < self.refresh_at
        {
            return Ok(());
        }
        self.refresh_at = self.counts.chosen + EVERY;
        let mut taken: Vec<Taken> = (0..BEST).map_while(|_| self.waiting.pop_best()).collect();
        let mark = self.system.mark();
        let mut outcome = Ok(());
        while let Some(pair) = taken.pop() {
            match self.weigh_again(pair, limits) {
                Ok(Some(priority)) => self.waiting.put_back_as(pair, priority),
                Ok(None) => {}
                Err(stopped) => {
                    self.waiting.put_back_as(pair, pair.priority());
                    outcome = Err(stopped);
                    break;
                }
            }
        }
        for pair in taken {
            self.waiting.put_back_as(pair, pair.priority());
        }
        self.system.rollback(mark);
        outcome
    }

    /// The priority of a pair as it is now; nothing if it joins or is an orphan.
    fn weigh_again(&mut self, pair: Taken, limits: &mut Limits) -> Result<Option<u32>, Stopped> {
        match self.waiting.choice(&self.system, pair) {
            None => {
                self.count_orphans(1);
                Ok(None)
            }
            Some(choice @ Choice::Overlap { .. }) => {
                let Some(sides) = self.sides_of(&choice) else {
                    return Ok(None);
                };
                let judged = self.judge(Arrow::Waiting, sides, None, limits)?;
                Ok(judged.map(|(left, right)| self.weight_of(left, right)))
            }
            Some(Choice::Law(_) | Choice::Whole(_)) => Ok(Some(pair.priority())),
        }
    }
}
