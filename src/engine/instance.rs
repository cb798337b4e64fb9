//! Pairs that are instances of what is kept.

use super::run::Engine;
use crate::rewrite::{Use, ac_equal};
use crate::term::{TermId, match_term};

impl Engine {
    /// Are the two terms, at some common place and equal around it, the sides of an instance of an
    /// active unoriented rule? (An instance of an oriented rule joins by rewriting.)
    pub(super) fn is_instance(&mut self, left: TermId, right: TermId) -> bool {
        if !self.has_unoriented() {
            return false;
        }
        let (mut s, mut t) = (left, right);
        loop {
            if self.is_instance_here(s, t) || self.is_instance_here(t, s) {
                return true;
            }
            let bank = &self.system.bank;
            if bank.head(s) != bank.head(t) {
                return false;
            }
            let mut different = bank
                .arguments(s)
                .iter()
                .zip(bank.arguments(t))
                .filter(|(a, b)| a != b);
            match (different.next(), different.next()) {
                (Some((&a, &b)), None) => (s, t) = (a, b),
                _ => return false,
            }
        }
    }

    fn is_instance_here(&mut self, s: TermId, t: TermId) -> bool {
        self.system
            .any_match(s, |system, Use { rule, backward }, substitution| {
                let rule = system.rule(rule);
                if rule.oriented {
                    return false;
                }
                let (_, to) = rule.sides(backward);
                match_term(&system.bank, to, t, &mut substitution.clone())
            })
    }

    /// Are the two terms equal modulo the associative and commutative symbols? Equations that are
    /// needed for that to be decided by rewriting are not counted.
    pub(super) fn joins_by_ac(&mut self, left: TermId, right: TermId) -> bool {
        if !self.knows_ac() || self.defines_ac(left, right) {
            return false;
        }
        let mark = self.system.bank.mark();
        let ac = &self.ac_symbols;
        let equal = ac_equal(&mut self.system.bank, |s| ac.contains(&s), left, right);
        self.system.bank.rollback(mark);
        if equal {
            self.counts.ac += 1;
        }
        equal
    }
}
