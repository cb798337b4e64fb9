//! The waiting pairs, as recipes.

use super::LawId;
use crate::rewrite::{RuleId, RuleState, System, Use};
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
/// Stands for an equal pair with another partner too, so that it outlives its own partner.
pub(super) const HEIR: u16 = 32;

/// With more waiting pairs than this, the worst ones are given up: 48 MiB.
const MOST_PAIRS: usize = 4 << 20;

/// A pair to be made.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum Choice {
    Law(LawId),
    Whole(RuleId),
    Overlap {
        outer: Use,
        at: u16,
        inner: Use,
        /// Does it stand for more than this overlap?
        heir: bool,
    },
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
    pub(super) fn priority(self) -> u32 {
        self.recipe.priority
    }
}

/// All waiting pairs.
///
/// Pairs lie in batches, one for each rule that was added; a heap has the best priority of each
/// batch. So a pair costs twelve bytes, the oldest pairs are found without a second queue, and the
/// batch of a retired rule is dropped at once.
#[derive(Clone, Debug)]
pub(super) struct Waiting {
    batches: Vec<Batch>,
    best: BinaryHeap<Reverse<(u32, u32)>>,
    oldest: usize,
    count: usize,
    /// Where the overlaps of a rule are.
    batch_of: FxHashMap<RuleId, u32>,
    /// With more pairs than this, the worst ones are given up.
    pub(super) most: usize,
    /// Are pairs kept when a rule that they come from is retired?
    pub(super) keeps_orphans: bool,
}

impl Default for Waiting {
    fn default() -> Self {
        Waiting {
            batches: Vec::new(),
            best: BinaryHeap::new(),
            oldest: 0,
            count: 0,
            batch_of: FxHashMap::default(),
            most: MOST_PAIRS,
            keeps_orphans: false,
        }
    }
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

    /// Puts back what was taken, with another priority.
    pub(super) fn put_back_as(&mut self, taken: Taken, priority: u32) {
        let pairs = &mut self.batches[taken.batch as usize].pairs;
        let place = pairs.partition_point(|pair| pair.priority >= priority);
        let recipe = Recipe {
            priority,
            ..taken.recipe
        };
        pairs.insert(place, recipe);
        let best = pairs[pairs.len() - 1].priority;
        self.best.push(Reverse((best, taken.batch)));
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
        if self.keeps_orphans {
            return 0;
        }
        let Some(batch) = self.batch_of.remove(&rule) else {
            return 0;
        };
        let dropped = std::mem::take(&mut self.batches[batch as usize].pairs).len();
        self.count -= dropped;
        dropped
    }

    /// If there are too many pairs, gives up the worst quarter of the overlaps. Returns how many.
    ///
    /// Laws and rules that wait to be simplified are kept. Costs a look at every pair, once in as
    /// many new pairs as it gives up.
    pub(super) fn trim(&mut self) -> usize {
        if self.count <= self.most {
            return 0;
        }
        let keep = self.most - self.most / 4;
        let mut priorities: Vec<u32> = Vec::with_capacity(self.count);
        for batch in &self.batches {
            priorities.extend(batch.pairs.iter().map(|pair| pair.priority));
        }
        let (better, bound, _) = priorities.select_nth_unstable(keep);
        let bound = *bound;
        // Of the pairs at the bound itself, so many are kept: those of the oldest batches.
        let mut room = keep - better.iter().filter(|priority| **priority < bound).count();
        let before = self.count;
        for batch in &mut self.batches {
            let kept = batch.pairs.len();
            batch.pairs.retain(|pair| {
                let is_overlap = pair.flags & (LAW | WHOLE) == 0;
                let at_bound = pair.priority == bound && room > 0;
                room -= usize::from(at_bound);
                !is_overlap || pair.priority < bound || at_bound
            });
            if batch.pairs.len() < kept {
                batch.pairs.shrink_to_fit();
            }
            self.count -= kept - batch.pairs.len();
        }
        before - self.count
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
        let own = self.batches[taken.batch as usize].rule;
        let own = self.standing(system, own, self.keeps_orphans)?;
        let heir = flags & HEIR != 0;
        let partner = self.standing(system, RuleId(partner), heir || self.keeps_orphans)?;
        let (outer, inner) = if flags & OUTER_IS_PARTNER != 0 {
            (partner, own)
        } else {
            (own, partner)
        };
        let is_retired = |id| system.current(id).is_none();
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
            heir: heir || is_retired(outer) || is_retired(inner),
        })
    }

    /// The rule that stands for this one now; what it was last if it is retired and that will do.
    fn standing(&self, system: &System, mut id: RuleId, retired_too: bool) -> Option<RuleId> {
        loop {
            match system.rule(id).state {
                RuleState::Active => return Some(id),
                RuleState::Retired => return retired_too.then_some(id),
                RuleState::Replaced(by) => id = by,
            }
        }
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
    #[test]
    fn the_worst_pairs_are_given_up_when_there_are_too_many() {
        let pair = |priority| Recipe {
            priority,
            partner: 0,
            at: 0,
            flags: 0,
        };
        let mut waiting = Waiting {
            most: 8,
            ..Waiting::default()
        };
        waiting.push_whole(RuleId(0), 100);
        waiting.push_batch(RuleId(0), vec![pair(1), pair(9), pair(5), pair(7)]);
        assert_eq!(waiting.trim(), 0);
        waiting.push_batch(RuleId(1), (0..4).map(|_| pair(7)).collect());
        // Six of nine stay, besides the rule that waits to be simplified.
        assert_eq!(waiting.trim(), 2);
        assert_eq!(waiting.len(), 7);
        let rest: Vec<u32> = std::iter::from_fn(|| waiting.pop_best())
            .map(|t| t.recipe.priority)
            .collect();
        assert_eq!(rest, [1, 5, 7, 7, 7, 7, 100]);
        assert_eq!(waiting.trim(), 0);
    }
}
