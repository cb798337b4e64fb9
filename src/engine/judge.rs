//! Deleting pairs, by the techniques that the table of arrows has for them.

use super::arrows::{Arrow, Technique};
use super::run::Engine;
use crate::rewrite::{Joining, Limits, Stopped, Use};
use crate::term::{Scoped, Side, TermId};

/// The two rules of an overlap, while the unifier still has it.
#[derive(Clone, Copy, Debug)]
pub(super) struct Overlapping {
    pub(super) outer: Use,
    pub(super) inner: Use,
}

impl Engine {
    /// The sides of a pair as far as the arrow simplifies them; nothing if some technique deletes
    /// the pair.
    ///
    /// Criteria that look at the peak need to know the overlap. Then this must come before
    /// anything else is unified.
    pub(super) fn judge(
        &mut self,
        arrow: Arrow,
        (left, right): (TermId, TermId),
        overlap: Option<Overlapping>,
        limits: &mut Limits,
    ) -> Result<Option<(TermId, TermId)>, Stopped> {
        let arrows = self.arrows;
        if left == right {
            return Ok(None);
        }
        // First, since it spares the rewriting of what it deletes.
        if arrows.has(arrow, Technique::Prime)
            && let Some(Overlapping { inner, .. }) = overlap
            && self.measured(arrow, Technique::Prime, |engine| {
                engine.is_composite(inner, limits)
            })?
        {
            self.counts.composite += 1;
            self.leaning += 1;
            return Ok(None);
        }
        let mut sides = (left, right);
        if arrows.has(arrow, Technique::Rewriting)
            && self.measured(arrow, Technique::Rewriting, |engine| {
                sides.0 = engine.system.normal_form(left, limits)?;
                sides.1 = engine.system.normal_form(right, limits)?;
                Ok(sides.0 == sides.1)
            })?
        {
            return Ok(None);
        }
        let (s, t) = sides;
        if arrows.has(arrow, Technique::Instance)
            && self.has_unoriented()
            && self.measured(arrow, Technique::Instance, |engine| {
                Ok(engine.is_instance(s, t))
            })?
        {
            return Ok(None);
        }
        if arrows.has(arrow, Technique::Ac)
            && self.knows_ac()
            && self.measured(arrow, Technique::Ac, |engine| Ok(engine.joins_by_ac(s, t)))?
        {
            return Ok(None);
        }
        if self.has_unoriented()
            && self.joins_on_ground(arrow, (left, right), sides, overlap, limits)?
        {
            return Ok(None);
        }
        Ok(Some(sides))
    }

    /// The costly criteria, for pairs that rewriting does not join because some rules are not
    /// oriented.
    fn joins_on_ground(
        &mut self,
        arrow: Arrow,
        pair: (TermId, TermId),
        sides: (TermId, TermId),
        overlap: Option<Overlapping>,
        limits: &mut Limits,
    ) -> Result<bool, Stopped> {
        let arrows = self.arrows;
        if arrows.has(arrow, Technique::Connected)
            && let Some(Overlapping { outer, .. }) = overlap
            && self.measured(arrow, Technique::Connected, |engine| {
                let peak = engine.peak_of(outer);
                engine.is_connected(peak, pair, sides, limits)
            })?
        {
            self.counts.connected += 1;
            self.leaning += 1;
            return Ok(true);
        }
        if arrows.has(arrow, Technique::Ground)
            && self.measured(arrow, Technique::Ground, |engine| {
                let joining = engine.system.ground_joins(sides.0, sides.1, limits)?;
                Ok(joining == Joining::Joined)
            })?
        {
            self.counts.ground_joined += 1;
            return Ok(true);
        }
        Ok(false)
    }

    /// Counts a use of a technique, and times some.
    #[inline]
    fn measured(
        &mut self,
        arrow: Arrow,
        technique: Technique,
        act: impl FnOnce(&mut Engine) -> Result<bool, Stopped>,
    ) -> Result<bool, Stopped> {
        let begun = self.tallies.begin(arrow, technique);
        let deleted = act(self)?;
        self.tallies.end(arrow, technique, begun, deleted);
        Ok(deleted)
    }

    /// Is the instance of the inner rule in the peak reducible at a proper subterm? Then the pair
    /// is redundant, because the overlaps of that third rule with the inner and with the outer one
    /// stand for it, whose inner redex is smaller (Kapur, Musser & Narendran 1988, "Only prime
    /// superpositions need be considered in the Knuth-Bendix completion procedure", theorem 5; as
    /// a case of the composite criterion in Bachmair & Dershowitz 1988, section 4). Steps of rules
    /// that are not oriented count only where they decrease, as all steps of the rewriter do, so
    /// that each ground instance is reducible at the same place.
    ///
    /// Must come before anything else is unified after the pair was made. Costs the normal forms
    /// of the arguments, most of whose subterms come up in the pair as well.
    fn is_composite(&mut self, inner: Use, limits: &mut Limits) -> Result<bool, Stopped> {
        let (side, _) = self.system.rule(inner.rule).sides(inner.backward);
        for place in 0..self.system.bank.arguments(side).len() {
            let argument = Scoped {
                term: self.system.bank.arguments(side)[place],
                side: Side::Right,
            };
            let built = self.unifier.build(&mut self.system.bank, argument);
            if self.system.normal_form(built, limits)? != built {
                return Ok(true);
            }
        }
        Ok(false)
    }
}
