//! Simplifying the active rules by a new one.

use super::arrows::{Arrow, Technique};
use super::parts::Parts;
use super::record::{Origin, Record};
use super::run::Engine;
use crate::rewrite::{Limits, RuleId, Stopped, System, Use};
use crate::term::{Bank, Substitution, TermId, instantiate, match_term};
use rustc_hash::FxHashSet;
use std::time::{Duration, Instant};

impl Engine {
    /// Retires the active rules that the new one makes redundant or whose left side it reduces;
    /// notes those whose right side it reduces.
    ///
    /// Only what the table of arrows has switched on is done.
    pub(super) fn reduce_others(&mut self, new: RuleId) {
        let mut retired = FxHashSet::default();
        let mut stale = FxHashSet::default();
        let sides = if self.system.rule(new).oriented { 1 } else { 2 };
        for backward in [false, true].into_iter().take(sides) {
            let by = Use {
                rule: new,
                backward,
            };
            let (pattern, _) = self.system.rule(new).sides(backward);
            for (id, in_left) in self.reducible(by, pattern) {
                if in_left {
                    retired.insert(id);
                } else {
                    stale.insert(id);
                }
            }
        }
        let mut retired: Vec<RuleId> = retired.into_iter().collect();
        retired.sort_unstable();
        for &id in &retired {
            self.retire(id);
            let priority = self.priority_of(id);
            self.waiting.push_whole(id, priority);
        }
        let mut stale: Vec<RuleId> = stale.into_iter().filter(|s| !retired.contains(s)).collect();
        stale.sort_unstable();
        self.stale.extend(stale);
        let rule = self.system.rule(new);
        let (left, right) = (rule.left, rule.right);
        let rewriting = self.arrows.has(Arrow::Active, Technique::Rewriting);
        if rewriting && rule.oriented && contains_instance(&self.system.bank, left, right) {
            self.stale.push(new);
        }
    }

    /// Takes a rule out of use, with its waiting overlaps.
    pub(super) fn retire(&mut self, id: RuleId) {
        self.unoriented -= usize::from(!self.system.rule(id).oriented);
        self.system.retire(id);
        let dropped = self.waiting.drop_batch(id);
        self.count_orphans(dropped);
        self.counts.retired += 1;
    }

    /// Pairs are gone because a rule that they come from is retired.
    pub(super) fn count_orphans(&mut self, count: usize) {
        self.counts.orphans += count as u64;
        let (arrow, technique) = (Arrow::Waiting, Technique::Orphans);
        self.tallies
            .count(arrow, technique, [count, count], Duration::ZERO);
    }

    /// The active rules, other than the new one, that it reduces, and whether in the side whose
    /// change makes the overlaps of the rule void.
    fn reducible(&mut self, by: Use, pattern: TermId) -> Vec<(RuleId, bool)> {
        let mut parts = std::mem::take(&mut self.parts);
        let mut found = Vec::new();
        if self.arrows.has(Arrow::Active, Technique::Rewriting) {
            let begun = Instant::now();
            self.rewritten_by(&mut parts, by, pattern, &mut found);
            let counts = [1, found.len()];
            self.tallies
                .count(Arrow::Active, Technique::Rewriting, counts, begun.elapsed());
        }
        if self.arrows.has(Arrow::Active, Technique::Instance) {
            let begun = Instant::now();
            let (rewritten, mut asked) = (found.len(), 0);
            for &id in parts.unoriented(&self.system) {
                let (left, right) = self.system.rule(id).sides(false);
                asked += 1;
                if id != by.rule && self.subsumes(by, left, right) {
                    found.push((id, true));
                }
            }
            let counts = [asked, found.len() - rewritten];
            self.tallies
                .count(Arrow::Active, Technique::Instance, counts, begun.elapsed());
        }
        self.parts = parts;
        found
    }

    fn rewritten_by(
        &mut self,
        parts: &mut Parts,
        by: Use,
        pattern: TermId,
        found: &mut Vec<(RuleId, bool)>,
    ) {
        let smallest = self.system.bank.size(pattern);
        let mut substitution = Substitution::default();
        let symbol = self.system.bank.as_symbol(pattern);
        let terms = parts.find(&mut self.system, symbol, |system, term| {
            if system.bank.size(term) < smallest {
                return false;
            }
            substitution.reset(0);
            match_term(&system.bank, pattern, term, &mut substitution)
                && decreases(system, by, term, &mut substitution)
        });
        for (term, owners) in terms {
            for id in owners.into_iter().filter(|id| *id != by.rule) {
                let rule = self.system.rule(id);
                let void = !rule.oriented || occurs(&self.system.bank, term, rule.left);
                found.push((id, void));
            }
        }
    }

    /// Is the equation an instance of the new one?
    fn subsumes(&self, by: Use, left: TermId, right: TermId) -> bool {
        let (from, to) = self.system.rule(by.rule).sides(by.backward);
        let bank = &self.system.bank;
        let mut substitution = Substitution::default();
        match_term(bank, from, left, &mut substitution)
            && match_term(bank, to, right, &mut substitution)
    }

    /// Brings the right sides that a newer rule reduces to normal form.
    pub(super) fn simplify_stale(&mut self, limits: &mut Limits) -> Result<(), Stopped> {
        while let Some(&id) = self.stale.last() {
            if self.system.current(id) == Some(id) {
                let right = self.system.rule(id).right;
                let normal = self.system.normal_form(right, limits)?;
                if normal != right
                    && let Some(steps) = self.steps(right, normal)
                {
                    let record = Record {
                        origin: Origin::Rule(id),
                        left: Vec::new(),
                        right: steps,
                        swapped: false,
                    };
                    let by = self.system.replace(id, normal);
                    self.parts.add(&self.system, by);
                    self.records.push(record);
                    self.waiting.hand_over(id, by);
                    self.counts.simplified += 1;
                    self.notice_ac(by);
                }
            }
            self.stale.pop();
        }
        Ok(())
    }
}

fn decreases(system: &mut System, by: Use, term: TermId, substitution: &mut Substitution) -> bool {
    let rule = system.rule(by.rule);
    if rule.oriented {
        return true;
    }
    let (_, to) = rule.sides(by.backward);
    if rule.has_extra(by.backward) {
        // Whether the open variables have a least value is the rewriter's business: a rule that is
        // retired without need comes back unchanged.
        return system.reduces_open(term, by);
    }
    let mark = system.bank.mark();
    let next = instantiate(&mut system.bank, to, substitution);
    let less = system.order.greater(&system.bank, term, next);
    system.bank.rollback(mark);
    less
}

/// Does the pattern match some subterm?
fn contains_instance(bank: &Bank, pattern: TermId, whole: TermId) -> bool {
    let mut seen = FxHashSet::default();
    let mut stack = vec![whole];
    let mut substitution = Substitution::default();
    while let Some(term) = stack.pop() {
        if bank.size(term) < bank.size(pattern) || !seen.insert(term) {
            continue;
        }
        substitution.reset(0);
        if match_term(bank, pattern, term, &mut substitution) {
            return true;
        }
        stack.extend(bank.arguments(term));
    }
    false
}

/// Is the first term a subterm of the second?
fn occurs(bank: &Bank, part: TermId, whole: TermId) -> bool {
    let mut seen = FxHashSet::default();
    let mut stack = vec![whole];
    while let Some(term) = stack.pop() {
        if term == part {
            return true;
        }
        if bank.size(term) > bank.size(part) && seen.insert(term) {
            stack.extend(bank.arguments(term));
        }
    }
    false
}
