//! Pairs that are connected below their peak.

use super::run::Engine;
use crate::rewrite::{Limits, Stopped, Use};
use crate::term::{Scoped, Side, TermId};
use rustc_hash::FxHashSet;
use std::collections::VecDeque;

/// So many terms of each side are looked at.
const MOST_TERMS: usize = 12;

impl Engine {
    /// Are the two normal forms of an overlap's pair connected by steps through terms that are all
    /// smaller than the peak? Then the pair is redundant (Bachmair & Dershowitz 1988, "Critical
    /// pair criteria for completion", section 3). Such steps may increase, which rewriting cannot
    /// see; from each term rewriting goes on.
    ///
    /// Must come before anything else is unified after the pair was made. Costs at most a few dozen
    /// normal forms.
    pub(super) fn is_connected(
        &mut self,
        peak: TermId,
        (left, right): (TermId, TermId),
        normal: (TermId, TermId),
        limits: &mut Limits,
    ) -> Result<bool, Stopped> {
        for side in [left, right] {
            if !self.system.order.greater(&self.system.bank, peak, side) {
                return Ok(false);
            }
        }
        let mut queue = VecDeque::from([(normal.0, 0), (normal.1, 1)]);
        let mut seen = [FxHashSet::default(), FxHashSet::default()];
        seen[0].insert(normal.0);
        seen[1].insert(normal.1);
        while let Some((term, side)) = queue.pop_front() {
            for next in self.system.neighbours(term, peak) {
                let next = self.system.normal_form(next, limits)?;
                if seen[1 - side].contains(&next) {
                    return Ok(true);
                }
                if seen[side].len() < MOST_TERMS && seen[side].insert(next) {
                    queue.push_back((next, side));
                }
            }
        }
        Ok(false)
    }

    /// The term that both rules of an overlap rewrite, while the unifier has it.
    pub(super) fn peak_of(&mut self, outer: Use) -> TermId {
        let (term, _) = self.system.rule(outer.rule).sides(outer.backward);
        let side = Side::Left;
        self.unifier
            .build(&mut self.system.bank, Scoped { term, side })
    }
}
