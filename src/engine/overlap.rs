//! Overlaps of a new rule with the active ones.

use super::arrows::{Arrow, Technique};
use super::judge::Overlapping;
use super::occurrences::{Occurrence, path, subterms};
use super::run::Engine;
use super::siblings::Siblings;
use super::strategy::{Lasting, Strategy};
use super::waiting::{HEIR, INNER_BACKWARD, OUTER_BACKWARD, OUTER_IS_PARTNER, Recipe};
use crate::rewrite::{Limits, RuleId, Stopped, Use};
use crate::term::{Scoped, Side, TermId};

/// The overlaps of one rule, in the making. Interrupted, it goes on where it was.
pub(super) struct Forming {
    rule: RuleId,
    candidates: Vec<Candidate>,
    next: usize,
    pairs: Vec<Recipe>,
    siblings: Siblings,
}

/// So many terms of overlaps are kept before they are forgotten: what fits into a cache.
const ROOM: usize = 20_000;

#[derive(Clone, Copy)]
struct Candidate {
    outer: Use,
    at: u16,
    /// The subterm at that place.
    place: TermId,
    inner: Use,
}

impl Engine {
    /// Lists where a new active rule may overlap with active rules, itself included.
    pub(super) fn start_forming(&mut self, rule: RuleId) {
        let mut candidates = Vec::new();
        let sides = if self.system.rule(rule).oriented {
            1
        } else {
            2
        };
        for backward in [false, true].into_iter().take(sides) {
            let own = Use { rule, backward };
            let (side, _) = self.system.rule(rule).sides(backward);
            self.as_inner(own, side, &mut candidates);
            self.as_outer(own, side, &mut candidates);
        }
        self.form_all(rule, candidates);
    }

    /// Lists where an active rule overlaps, as the inner one, with all active rules. Done for each
    /// rule, this lists every overlap.
    pub(super) fn start_forming_again(&mut self, rule: RuleId) {
        let mut candidates = Vec::new();
        let both = !self.system.rule(rule).oriented;
        for backward in [false, true].into_iter().take(1 + usize::from(both)) {
            let (side, _) = self.system.rule(rule).sides(backward);
            self.as_inner(Use { rule, backward }, side, &mut candidates);
        }
        self.form_all(rule, candidates);
    }

    fn form_all(&mut self, rule: RuleId, candidates: Vec<Candidate>) {
        self.forming = Some(Forming {
            rule,
            candidates,
            next: 0,
            pairs: Vec::new(),
            siblings: Siblings::default(),
        });
    }

    fn as_inner(&mut self, inner: Use, side: TermId, candidates: &mut Vec<Candidate>) {
        let system = &self.system;
        let mut offer = |Occurrence { by, at, term }: Occurrence| {
            if let Some(rule) = system.current(by.rule) {
                candidates.push(Candidate {
                    outer: Use { rule, ..by },
                    at,
                    place: term,
                    inner,
                });
            }
        };
        match system.bank.as_symbol(side) {
            Some(symbol) => {
                self.occurrences.clean(system, symbol);
                self.occurrences.of(symbol).iter().for_each(|o| offer(*o));
            }
            None => {
                let sort = system.bank.sort(side);
                let same = self
                    .occurrences
                    .all()
                    .filter(|o| system.bank.sort(o.term) == sort);
                same.for_each(|o| offer(*o));
            }
        }
    }

    /// The rule itself as inner rule was met by [`Engine::as_inner`] already.
    fn as_outer(&self, outer: Use, side: TermId, candidates: &mut Vec<Candidate>) {
        let system = &self.system;
        for (at, term) in subterms(system, side) {
            let mut offer = |by: Use| {
                if let Some(rule) = system.current(by.rule)
                    && rule != outer.rule
                {
                    candidates.push(Candidate {
                        outer,
                        at,
                        place: term,
                        inner: Use { rule, ..by },
                    });
                }
            };
            let symbol = system.bank.as_symbol(term).expect("no variable");
            // Root against root is symmetric, so that one of the two ways is enough.
            let roots = self
                .occurrences
                .of(symbol)
                .iter()
                .filter(|o| o.at == 0 && at != 0);
            roots.for_each(|o| offer(o.by));
            self.occurrences
                .variables(system.bank.sort(term))
                .for_each(offer);
        }
    }

    /// Makes, simplifies and weighs the overlaps that were listed; those that do not join wait.
    ///
    /// Overlaps with one rule have many subterms in common, so that what was built for one and its
    /// normal forms are kept for the next ones, as long as there is room.
    pub(super) fn continue_forming(&mut self, limits: &mut Limits) -> Result<(), Stopped> {
        let Some(mut forming) = self.forming.take() else {
            return Ok(());
        };
        let mut mark = self.system.mark();
        let mut outcome = Ok(());
        while let Some(&candidate) = forming.candidates.get(forming.next) {
            if let Err(stopped) = self.form(&mut forming, candidate, limits) {
                outcome = Err(stopped);
                break;
            }
            forming.next += 1;
            if self.system.bank.len() > mark.terms() + ROOM {
                self.system.rollback(mark);
                mark = self.system.mark();
                forming.siblings.forget();
            }
        }
        self.system.rollback(mark);
        forming.siblings.forget();
        if outcome.is_err() {
            self.forming = Some(forming);
        } else {
            self.waiting.push_batch(forming.rule, forming.pairs);
            self.counts.trimmed += self.waiting.trim() as u64;
        }
        outcome
    }

    /// Makes one overlap; its pair is added to the others unless it is deleted.
    fn form(
        &mut self,
        forming: &mut Forming,
        candidate: Candidate,
        limits: &mut Limits,
    ) -> Result<(), Stopped> {
        limits.poll(self.system.bank.len())?;
        let Candidate {
            outer,
            at,
            place,
            inner,
        } = candidate;
        if !self.unify(outer, at, place, inner) {
            return Ok(());
        }
        self.counts.formed += 1;
        let own_is_inner = inner.rule == forming.rule;
        let partner = if own_is_inner { outer.rule } else { inner.rule };
        let priority = match self.is_far(outer, place, inner) {
            Some(priority) => priority,
            None => {
                let Some(pair) = self.build(outer, at, inner) else {
                    return Ok(());
                };
                let overlap = Some(Overlapping { outer, inner });
                let Some((left, right)) = self.judge(Arrow::Formed, pair, overlap, limits)? else {
                    return Ok(());
                };
                if self.arrows.has(Arrow::Siblings, Technique::Instance)
                    && self.has_sibling(forming, partner, left, right)
                {
                    return Ok(());
                }
                self.weight_of(left, right)
            }
        };
        let flag = |on: bool, bit: u16| if on { bit } else { 0 };
        let flags = flag(own_is_inner && partner != forming.rule, OUTER_IS_PARTNER)
            | flag(outer.backward, OUTER_BACKWARD)
            | flag(inner.backward, INNER_BACKWARD);
        forming.pairs.push(Recipe {
            priority,
            partner: partner.0,
            at,
            flags,
        });
        Ok(())
    }

    /// Is there an equal pair of the same new rule already? If it comes from another partner, it
    /// has to be kept even when that partner is retired, since it stands for this one too.
    fn has_sibling(
        &mut self,
        forming: &mut Forming,
        partner: RuleId,
        left: TermId,
        right: TermId,
    ) -> bool {
        let (arrow, technique) = (Arrow::Siblings, Technique::Instance);
        let begun = self.tallies.begin(arrow, technique);
        let number = forming.pairs.len() as u32;
        let bank = &self.system.bank;
        let found = forming.siblings.find_or_keep(bank, left, right, number);
        if let Some(found) = found {
            let kept = &mut forming.pairs[found as usize];
            if kept.partner != partner.0 {
                kept.flags |= HEIR;
            }
        }
        self.tallies.end(arrow, technique, begun, found.is_some());
        found.is_some()
    }

    /// The priority of a pair with these sides.
    pub(super) fn weight_of(&mut self, left: TermId, right: TermId) -> u32 {
        let bank = &self.system.bank;
        let inside = self.weigher.strategy.inside;
        if let Some(equality) = self.equality.filter(|_| inside) {
            let whole = [left, right]
                .into_iter()
                .find(|side| bank.as_symbol(*side) == Some(equality));
            if let Some(&[s, t]) = whole.map(|whole| bank.arguments(whole)) {
                let scoped = |term| Scoped {
                    term,
                    side: Side::Left,
                };
                self.unifier.reset();
                return if self.unifier.unify(bank, scoped(s), scoped(t)) {
                    0
                } else {
                    self.weigher.priority(bank, s, t)
                };
            }
        }
        self.weigher.priority(bank, left, right)
    }

    /// The priority of the pair that was just unified, as it stands, if that is so bad that the
    /// pair will wait for long; then it is neither built nor simplified before it is chosen.
    fn is_far(&mut self, outer: Use, place: TermId, inner: Use) -> Option<u32> {
        let Strategy {
            eager, variable, ..
        } = self.weigher.strategy;
        if eager == 0 || self.horizon == 0 {
            return None;
        }
        let (side, outer_right) = self.system.rule(outer.rule).sides(outer.backward);
        let inside = self.weigher.strategy.inside && self.equality.is_some();
        if inside && self.system.bank.as_symbol(side) == self.equality {
            return None;
        }
        let (_, inner_right) = self.system.rule(inner.rule).sides(inner.backward);
        let Engine {
            unifier,
            weigher,
            system,
            ..
        } = self;
        let bank = &system.bank;
        let mut lasting = Lasting { weigher, bank };
        let mut weigh = |term, side| {
            let scoped = Scoped { term, side };
            unifier.weight(bank, scoped, variable, &mut lasting)
        };
        let whole = weigh(side, Side::Left)?;
        let redex = weigh(place, Side::Left)?;
        let made = weigh(inner_right, Side::Right)?;
        let right = weigh(outer_right, Side::Left)?;
        let left = whole.saturating_sub(redex).saturating_add(made);
        let priority = weigher.of_weights(left, right);
        (priority > self.horizon.saturating_mul(eager)).then_some(priority)
    }

    /// Unifies the inner rule's side with the place in the outer rule's side.
    pub(super) fn unifies(&mut self, outer: Use, at: u16, inner: Use) -> bool {
        let (side, _) = self.system.rule(outer.rule).sides(outer.backward);
        let mut here = side;
        for &step in &path(&self.system, side, at) {
            here = self.system.bank.arguments(here)[step as usize];
        }
        self.unify(outer, at, here, inner)
    }

    fn unify(&mut self, outer: Use, at: u16, here: TermId, inner: Use) -> bool {
        let (inner_side, _) = self.system.rule(inner.rule).sides(inner.backward);
        // A rule at its own root is trivial, unless it leaves variables open.
        if outer == inner && at == 0 && !self.system.rule(outer.rule).has_extra(outer.backward) {
            return false;
        }
        self.unifier.reset();
        let place = Scoped {
            term: here,
            side: Side::Left,
        };
        let looked_for = Scoped {
            term: inner_side,
            side: Side::Right,
        };
        self.unifier.unify(&self.system.bank, place, looked_for)
    }

    /// The critical pair of an overlap that unifies: what the inner rule makes of the peak, and
    /// what the outer rule makes of it. Nothing if one of them cannot decrease there.
    pub(super) fn build(&mut self, outer: Use, at: u16, inner: Use) -> Option<(TermId, TermId)> {
        let (side, outer_right) = self.system.rule(outer.rule).sides(outer.backward);
        let (inner_left, inner_right) = self.system.rule(inner.rule).sides(inner.backward);
        let outer_left = Scoped {
            term: side,
            side: Side::Left,
        };
        let outer_right = Scoped {
            term: outer_right,
            side: Side::Left,
        };
        let inner_left = Scoped {
            term: inner_left,
            side: Side::Right,
        };
        let inner_right = Scoped {
            term: inner_right,
            side: Side::Right,
        };
        let places = path(&self.system, side, at);
        let made = self.unifier.build(&mut self.system.bank, inner_right);
        if !self.system.rule(inner.rule).oriented {
            let from = self.unifier.build(&mut self.system.bank, inner_left);
            if made == from || self.system.order.greater(&self.system.bank, made, from) {
                return None;
            }
        }
        let right = self.unifier.build(&mut self.system.bank, outer_right);
        if !self.system.rule(outer.rule).oriented {
            let from = self.unifier.build(&mut self.system.bank, outer_left);
            if right == from || self.system.order.greater(&self.system.bank, right, from) {
                return None;
            }
        }
        Some((self.build_around(side, &places, made), right))
    }

    /// The outer rule's side under the unifier, with what the inner rule made at a place.
    fn build_around(&mut self, side: TermId, places: &[u32], made: TermId) -> TermId {
        let bank = &mut self.system.bank;
        let mut spine = Vec::with_capacity(places.len());
        let mut here = side;
        for &step in places {
            spine.push(here);
            here = bank.arguments(here)[step as usize];
        }
        let mut made = made;
        let mut arguments = Vec::new();
        for (&above, &step) in spine.iter().zip(places).rev() {
            arguments.clear();
            for place in 0..bank.arguments(above).len() {
                let term = bank.arguments(above)[place];
                arguments.push(if place == step as usize {
                    made
                } else {
                    self.unifier.build(
                        bank,
                        Scoped {
                            term,
                            side: Side::Left,
                        },
                    )
                });
            }
            let symbol = bank.as_symbol(above).expect("it has arguments");
            made = bank.apply(symbol, &arguments);
        }
        made
    }
}
