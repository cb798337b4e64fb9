//! Deriving a rule again from its record.

use super::record::{Origin, Record, RecordStep};
use super::run::Engine;
use crate::rewrite::{RuleId, Use};
use crate::term::{
    Scoped, Side, Substitution, TermId, instantiate, match_term, renumber, replace_at, subterm_at,
};

/// Why a record does not derive the rule that it stands beside.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum ReplayError {
    /// It uses a rule that does not come before it.
    NoSuchRule(RuleId),
    /// It uses a law that does not exist.
    NoSuchLaw,
    /// There is nothing at this place.
    NoSuchPlace(Vec<u32>),
    /// The two rules do not overlap at the place.
    NoOverlap,
    /// The rule does not apply at the place.
    DoesNotApply(RecordStep),
    /// It derives another equation.
    Differs,
    /// It is said to be oriented, but does not decrease.
    NotOriented,
}

impl Engine {
    /// Adds a rule that was derived in another run, after deriving it again from its record.
    ///
    /// The rules that the record uses must have been added before. A retired rule is only kept for
    /// the derivations of others. On an error nothing has changed but the bank.
    pub fn replay(
        &mut self,
        sides: (TermId, TermId),
        oriented: bool,
        retired: bool,
        record: Record,
    ) -> Result<RuleId, ReplayError> {
        let (left, right) = self.derive(&record)?;
        let ([left, right], _) = renumber(&mut self.system.bank, [left, right]);
        let ([wanted_left, wanted_right], _) = renumber(&mut self.system.bank, sides.into());
        if (left, right) != (wanted_left, wanted_right) {
            return Err(ReplayError::Differs);
        }
        if oriented && !self.system.order.greater(&self.system.bank, left, right) {
            return Err(ReplayError::NotOriented);
        }
        let id = if retired {
            self.system.add_retired(left, right, oriented)
        } else {
            self.system.add(left, right, oriented)
        };
        self.records.push(record);
        if !retired {
            self.enter(id);
        }
        Ok(id)
    }

    /// The two sides that a record derives, their variables not yet numbered.
    pub fn derive(&mut self, record: &Record) -> Result<(TermId, TermId), ReplayError> {
        for rule in record.rules() {
            if rule.index() >= self.system.rules().len() {
                return Err(ReplayError::NoSuchRule(rule));
            }
        }
        let (mut left, mut right) = self.origin(&record.origin)?;
        for step in &record.left {
            left = self.apply_step(left, step)?;
        }
        for step in &record.right {
            right = self.apply_step(right, step)?;
        }
        Ok(if record.swapped {
            (right, left)
        } else {
            (left, right)
        })
    }

    /// The two sides that a derivation begins with.
    pub fn origin(&mut self, origin: &Origin) -> Result<(TermId, TermId), ReplayError> {
        match origin {
            Origin::Law(law) => self
                .laws
                .get(law.0 as usize)
                .copied()
                .ok_or(ReplayError::NoSuchLaw),
            Origin::Rule(rule) => Ok(self.system.rule(*rule).sides(false)),
            Origin::Overlap { outer, at, inner } => {
                let peak = self.peak(*outer, at, *inner)?;
                Ok((peak.left, peak.right))
            }
        }
    }

    /// An overlap with its peak.
    pub fn peak(&mut self, outer: Use, at: &[u32], inner: Use) -> Result<Peak, ReplayError> {
        let (side, outer_right) = self.system.rule(outer.rule).sides(outer.backward);
        let (inner_left, inner_right) = self.system.rule(inner.rule).sides(inner.backward);
        let bank = &mut self.system.bank;
        let here = subterm_at(bank, side, at).ok_or_else(|| ReplayError::NoSuchPlace(at.into()))?;
        let left_scope = |term| Scoped {
            term,
            side: Side::Left,
        };
        let right_scope = |term| Scoped {
            term,
            side: Side::Right,
        };
        self.unifier.reset();
        if !self
            .unifier
            .unify(bank, left_scope(here), right_scope(inner_left))
        {
            return Err(ReplayError::NoOverlap);
        }
        // In the order in which the loop builds them, so that the variables get the same numbers.
        let made = self.unifier.build(bank, right_scope(inner_right));
        let right = self.unifier.build(bank, left_scope(outer_right));
        let top = self.unifier.build(bank, left_scope(side));
        let left = replace_at(bank, top, at, made);
        Ok(Peak { top, left, right })
    }

    /// The term after one step.
    pub fn apply_step(&mut self, term: TermId, step: &RecordStep) -> Result<TermId, ReplayError> {
        let bank = &self.system.bank;
        let here = subterm_at(bank, term, &step.at)
            .ok_or_else(|| ReplayError::NoSuchPlace(step.at.clone()))?;
        let made = self
            .rewrite_by(here, step.by)
            .ok_or_else(|| ReplayError::DoesNotApply(step.clone()))?;
        Ok(replace_at(&mut self.system.bank, term, &step.at, made))
    }

    /// What a rule makes of a term that it matches. Variables that the rule leaves open become the
    /// theory's least ground term.
    pub fn rewrite_by(&mut self, term: TermId, by: Use) -> Option<TermId> {
        let (from, to) = self.system.rule(by.rule).sides(by.backward);
        let mut substitution = Substitution::default();
        if !match_term(&self.system.bank, from, term, &mut substitution) {
            return None;
        }
        for variable in self.system.bank.variables(to) {
            if !substitution.get(variable.index).is_some() {
                substitution.set(variable.index, self.system.theory_least(variable.sort)?);
            }
        }
        Some(instantiate(&mut self.system.bank, to, &substitution))
    }
}

/// A term that two rules rewrite, and what they make of it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Peak {
    /// The term.
    pub top: TermId,
    /// After the inner rule.
    pub left: TermId,
    /// After the outer rule.
    pub right: TermId,
}
