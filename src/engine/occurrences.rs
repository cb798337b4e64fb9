//! Where symbols occur in the sides that rules rewrite: partners for overlaps, and what a new rule
//! may reduce.

use crate::rewrite::{RuleId, System, Use};
use crate::term::{Sort, Symbol, TermId};

/// A subterm, no variable, of a side that a rule looks for.
#[derive(Clone, Copy, Debug)]
pub(super) struct Occurrence {
    pub(super) by: Use,
    /// The place in preorder.
    pub(super) at: u16,
    /// The subterm.
    pub(super) term: TermId,
}

/// Occurrences by the symbol at their root. Those of retired rules are dropped when they are met
/// often enough.
#[derive(Clone, Debug, Default)]
pub(super) struct Occurrences {
    by_symbol: Vec<Vec<Occurrence>>,
    /// Rules whose looked-for side is a bare variable.
    variables: Vec<(Sort, Use)>,
}

/// Places beyond this one are not indexed; a rule that has any makes the search incomplete.
pub(super) const MOST_PLACES: u32 = u16::MAX as u32;

impl Occurrences {
    /// Adds the subterms of the sides that a rule looks for.
    pub(super) fn add(&mut self, system: &System, rule: RuleId) {
        let both = !system.rule(rule).oriented;
        for backward in [false, true] {
            if backward && !both {
                break;
            }
            let by = Use { rule, backward };
            let (side, _) = system.rule(rule).sides(backward);
            if let Some(variable) = system.bank.as_variable(side) {
                self.variables.push((variable.sort, by));
                continue;
            }
            for (at, term) in subterms(system, side) {
                let symbol = system.bank.as_symbol(term).expect("no variable");
                self.of_mut(symbol).push(Occurrence { by, at, term });
            }
        }
    }

    /// The occurrences with this symbol at the root, among them some of retired rules.
    pub(super) fn of(&self, symbol: Symbol) -> &[Occurrence] {
        self.by_symbol.get(symbol.index()).map_or(&[], |list| list)
    }

    /// Every occurrence.
    pub(super) fn all(&self) -> impl Iterator<Item = &Occurrence> {
        self.by_symbol.iter().flatten()
    }

    /// Rules whose looked-for side is a bare variable of this sort.
    pub(super) fn variables(&self, sort: Sort) -> impl Iterator<Item = Use> + '_ {
        self.variables
            .iter()
            .filter(move |(of, _)| *of == sort)
            .map(|(_, by)| *by)
    }

    /// Drops the occurrences of retired rules with this symbol.
    pub(super) fn clean(&mut self, system: &System, symbol: Symbol) {
        let list = self.of_mut(symbol);
        let dead = |o: &&Occurrence| system.current(o.by.rule).is_none();
        if list.iter().filter(dead).count() * 2 > list.len() {
            list.retain(|o| system.current(o.by.rule).is_some());
        }
    }

    fn of_mut(&mut self, symbol: Symbol) -> &mut Vec<Occurrence> {
        if symbol.index() >= self.by_symbol.len() {
            self.by_symbol.resize(symbol.index() + 1, Vec::new());
        }
        &mut self.by_symbol[symbol.index()]
    }
}

/// The subterms of a side that are no variables, with their places in preorder.
pub(super) fn subterms(system: &System, side: TermId) -> Vec<(u16, TermId)> {
    let mut found = Vec::new();
    let mut stack = vec![side];
    let mut at = 0;
    while let Some(term) = stack.pop() {
        if at > MOST_PLACES {
            break;
        }
        if system.bank.as_symbol(term).is_some() {
            found.push((at as u16, term));
        }
        at += 1;
        stack.extend(system.bank.arguments(term).iter().rev());
    }
    found
}

/// The argument numbers that lead to a place in preorder.
pub(super) fn path(system: &System, side: TermId, at: u16) -> Vec<u32> {
    let mut path = Vec::new();
    let mut here = side;
    let mut left = u32::from(at);
    while left > 0 {
        left -= 1;
        for (step, &argument) in system.bank.arguments(here).iter().enumerate() {
            let size = system.bank.size(argument);
            if left < size {
                path.push(step as u32);
                here = argument;
                break;
            }
            left -= size;
        }
    }
    path
}
