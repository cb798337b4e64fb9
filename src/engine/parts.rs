//! Which subterms the active rules have: what a new rule may reduce.

use crate::rewrite::{RuleId, System};
use crate::term::{Symbol, TermId};
use rustc_hash::{FxHashMap, FxHashSet};

/// The distinct subterms of the active rules, by the symbol at their root, with the rules that
/// have them. So a new rule is matched once with each subterm, however many rules have it.
///
/// Subterms of rules that are no longer active are dropped when they are met.
#[derive(Clone, Debug, Default)]
pub(super) struct Parts {
    by_symbol: Vec<Vec<TermId>>,
    owners: FxHashMap<TermId, Vec<RuleId>>,
    /// The rules that are not oriented, among them some that are no longer active.
    unoriented: Vec<RuleId>,
}

impl Parts {
    /// Adds the subterms of both sides of an active rule.
    pub(super) fn add(&mut self, system: &System, id: RuleId) {
        let rule = system.rule(id);
        if !rule.oriented {
            self.unoriented.push(id);
        }
        let mut seen = FxHashSet::default();
        let mut stack = vec![rule.left, rule.right];
        while let Some(term) = stack.pop() {
            let Some(symbol) = system.bank.as_symbol(term).filter(|_| seen.insert(term)) else {
                continue;
            };
            stack.extend(system.bank.arguments(term));
            let owners = self.owners.entry(term).or_default();
            if owners.is_empty() {
                if symbol.index() >= self.by_symbol.len() {
                    self.by_symbol.resize(symbol.index() + 1, Vec::new());
                }
                self.by_symbol[symbol.index()].push(term);
            }
            owners.push(id);
        }
    }

    /// The subterms with this symbol at the root, or all, for which the test holds, with the
    /// active rules that have them.
    pub(super) fn find(
        &mut self,
        system: &mut System,
        symbol: Option<Symbol>,
        mut test: impl FnMut(&mut System, TermId) -> bool,
    ) -> Vec<(TermId, Vec<RuleId>)> {
        let mut found = Vec::new();
        let all = 0..self.by_symbol.len();
        let symbols = symbol.map_or(all, |s| s.index()..s.index() + 1);
        for symbol in symbols {
            let Some(terms) = self.by_symbol.get_mut(symbol) else {
                continue;
            };
            let owners = &mut self.owners;
            terms.retain(|term| {
                if !test(system, *term) {
                    return true;
                }
                let Some(rules) = owners.get_mut(term) else {
                    return false;
                };
                rules.retain(|id| system.current(*id) == Some(*id));
                if rules.is_empty() {
                    owners.remove(term);
                    return false;
                }
                found.push((*term, rules.clone()));
                true
            });
        }
        found
    }

    /// The active rules that are not oriented.
    pub(super) fn unoriented(&mut self, system: &System) -> &[RuleId] {
        self.unoriented
            .retain(|id| system.current(*id) == Some(*id));
        &self.unoriented
    }
}
