//! The waiting pairs, as recipes.

use super::LawId;
use crate::rewrite::{RuleId, System, Use};
use rustc_hash::FxHashMap;
use std::cmp::Reverse;
use std::collections::BinaryHeap;

/// How to make a pair again: twelve bytes, with the batch it lies in.
///
/// Ordered by priority alone, smaller first.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Recipe {
    pub(super) priority: u32,
    /// The other rule; or the law.
    pub(super) partner: u32,
    /// The place in the outer rule's side, in preorder.
    pub(super) at: u16,
    pub(super) flags: u16,
}

/// The batch's rule is the inner one.
pub(super) const OUTER_IS_PARTNER: u16 = 1;
pub(super) const OUTER_BACKWARD: u16 = 2;
pub(super) const INNER_BACKWARD: u16 = 4;
/// The batch's rule itself, to be simplified.
pub(super) const WHOLE: u16 = 8;
/// A law.
pub(super) const LAW: u16 = 16;

/// A pair to be made.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum Choice {
    Law(LawId),
    Whole(RuleId),
    Overlap { outer: Use, at: u16, inner: Use },
}

/// What one new rule gave rise to, the best pair last.
#[derive(Clone, Debug)]
struct Batch {
    rule: RuleId,
    pairs: Vec<Recipe>,
}

/// A pair that was taken, so that it can be put back when its processing is interrupted.
#[derive(Clone, Copy, Debug)]
pub(super) struct Taken {
    batch: u32,
    recipe: Recipe,
}

impl Taken {
    pub(super) fn priority(&self) -> u32 {
        self.recipe.priority
    }
}

/// All waiting pairs.
///
/// Pairs lie in batches, one for each rule that was added; a heap has the best priority of each
/// batch. So a pair costs twelve bytes, the oldest pairs are found without a second queue, and the
/// batch of a retired rule is dropped at once.
#[derive(Clone, Debug, Default)]
pub(super) struct Waiting {
    batches: Vec<Batch>,
    best: BinaryHeap<Reverse<(u32, u32)>>,
    oldest: usize,
    count: usize,
    /// Where the overlaps of a rule are.
    batch_of: FxHashMap<RuleId, u32>,
}

impl Waiting {
    pub(super) fn len(&self) -> usize {
        self.count
    }

    pub(super) fn push_law(&mut self, law: LawId) {
        let recipe = Recipe {
            priority: 0,
            partner: law.0,
            at: 0,
            flags: LAW,
        };
        self.push(RuleId(u32::MAX), vec![recipe]);
    }

    pub(super) fn push_whole(&mut self, rule: RuleId, priority: u32) {
        let recipe = Recipe {
            priority,
            partner: rule.0,
            at: 0,
            flags: WHOLE,
        };
        self.push(rule, vec![recipe]);
    }

    /// Adds the overlaps of a new rule.
    pub(super) fn push_batch(&mut self, rule: RuleId, pairs: Vec<Recipe>) {
        self.batch_of.insert(rule, self.batches.len() as u32);
        self.push(rule, pairs);
    }

    fn push(&mut self, rule: RuleId, mut pairs: Vec<Recipe>) {
        pairs.sort_by_key(|pair| Reverse(pair.priority));
        pairs.shrink_to_fit();
        self.count += pairs.len();
        if let Some(last) = pairs.last() {
            self.best
                .push(Reverse((last.priority, self.batches.len() as u32)));
        }
        self.batches.push(Batch { rule, pairs });
    }

    /// Takes the pair with the best priority.
    pub(super) fn pop_best(&mut self) -> Option<Taken> {
        loop {
            let Reverse((priority, batch)) = self.best.pop()?;
            let pairs = &self.batches[batch as usize].pairs;
            match pairs.last() {
                None => {}
                Some(last) if last.priority != priority => {
                    self.best.push(Reverse((last.priority, batch)));
                }
                Some(_) => return Some(self.take(batch)),
            }
        }
    }

    /// Takes a law, if one waits; laws have the best priority.
    pub(super) fn pop_law(&mut self) -> Option<Taken> {
        let taken = self.pop_best()?;
        if taken.recipe.flags & LAW == 0 {
            self.put_back(taken);
            return None;
        }
        Some(taken)
    }

    /// Takes the best pair of the oldest batch.
    pub(super) fn pop_oldest(&mut self) -> Option<Taken> {
        while self.batches.get(self.oldest)?.pairs.is_empty() {
            self.oldest += 1;
        }
        Some(self.take(self.oldest as u32))
    }

    fn take(&mut self, batch: u32) -> Taken {
        let pairs = &mut self.batches[batch as usize].pairs;
        let recipe = pairs.pop().expect("the batch is not empty");
        self.count -= 1;
        if let Some(last) = pairs.last() {
            self.best.push(Reverse((last.priority, batch)));
        } else {
            *pairs = Vec::new();
        }
        Taken { batch, recipe }
    }

    /// Puts back what was taken.
    pub(super) fn put_back(&mut self, taken: Taken) {
        let batch = &mut self.batches[taken.batch as usize];
        batch.pairs.push(taken.recipe);
        self.best
            .push(Reverse((taken.recipe.priority, taken.batch)));
        self.oldest = self.oldest.min(taken.batch as usize);
        self.count += 1;
    }

    /// The overlaps of one rule are those of another from now on, which has the same left side.
    pub(super) fn hand_over(&mut self, from: RuleId, to: RuleId) {
        if let Some(batch) = self.batch_of.remove(&from) {
            self.batch_of.insert(to, batch);
        }
    }

    /// Drops all pairs of the batch of a rule that was retired. Returns how many.
    pub(super) fn drop_batch(&mut self, rule: RuleId) -> usize {
        let Some(batch) = self.batch_of.remove(&rule) else {
            return 0;
        };
        let dropped = std::mem::take(&mut self.batches[batch as usize].pairs).len();
        self.count -= dropped;
        dropped
    }

    /// The pair that a recipe stands for; nothing if one of its rules is retired.
    pub(super) fn choice(&self, system: &System, taken: Taken) -> Option<Choice> {
        let Recipe {
            partner, at, flags, ..
        } = taken.recipe;
        if flags & LAW != 0 {
            return Some(Choice::Law(LawId(partner)));
        }
        if flags & WHOLE != 0 {
            return Some(Choice::Whole(RuleId(partner)));
        }
        let own = system.current(self.batches[taken.batch as usize].rule)?;
        let partner = system.current(RuleId(partner))?;
        let (outer, inner) = if flags & OUTER_IS_PARTNER != 0 {
            (partner, own)
        } else {
            (own, partner)
        };
        Some(Choice::Overlap {
            outer: Use {
                rule: outer,
                backward: flags & OUTER_BACKWARD != 0,
            },
            at,
            inner: Use {
                rule: inner,
                backward: flags & INNER_BACKWARD != 0,
            },
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_recipe_takes_at_most_sixteen_bytes() {
        assert!(size_of::<Recipe>() <= 16);
    }

    #[test]
    fn best_and_oldest_come_in_turn_and_what_is_put_back_comes_again() {
        let pair = |priority| Recipe {
            priority,
            partner: 0,
            at: 0,
            flags: 0,
        };
        let mut waiting = Waiting::default();
        waiting.push_batch(RuleId(0), vec![pair(9), pair(5)]);
        waiting.push_batch(RuleId(1), vec![pair(7), pair(1)]);
        assert_eq!(waiting.pop_best().map(|t| t.recipe.priority), Some(1));
        let oldest = waiting.pop_oldest();
        assert_eq!(oldest.map(|t| t.recipe.priority), Some(5));
        waiting.put_back(oldest.unwrap());
        assert_eq!(waiting.len(), 3);
        let rest: Vec<u32> = std::iter::from_fn(|| waiting.pop_best())
            .map(|t| t.recipe.priority)
            .collect();
        assert_eq!(rest, [5, 7, 9]);
        waiting.push_batch(RuleId(2), vec![pair(3), pair(4)]);
        assert_eq!(waiting.drop_batch(RuleId(2)), 2);
        assert!(waiting.pop_best().is_none() && waiting.pop_oldest().is_none());
    }
}
