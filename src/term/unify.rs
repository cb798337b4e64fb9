//! Syntactic unification of terms of two equations, variables kept apart without renaming.

use super::{Bank, Head, TermId, Variable};
use rustc_hash::FxHashMap;
use std::sync::Arc;

/// Which of the two equations a term belongs to.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Side {
    /// The first equation.
    Left = 0,
    /// The second equation.
    Right = 1,
}

/// A term read with the variables of one side.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Scoped {
    /// The term.
    pub term: TermId,
    /// Whose variables it has.
    pub side: Side,
}

impl Scoped {
    fn of(self, term: TermId) -> Scoped {
        Scoped { term, ..self }
    }
}

/// A most general unifier in triangular form (Robinson 1965; Baader & Nipkow 1998, section 4.6).
///
/// No term is built while unifying; [`Unifier::build`] numbers the variables that stay in the order
/// in which it meets them, over all terms that are built after one [`Unifier::reset`].
#[derive(Clone, Debug, Default)]
pub struct Unifier {
    bindings: Vec<Option<Scoped>>,
    bound: Vec<usize>,
    names: Vec<u32>,
    named: Vec<usize>,
    /// By slot, what the value of the variable weighs; `u32::MAX` for not known.
    weights: Vec<u32>,
    weighed: Vec<usize>,
    stack: Vec<(Scoped, Scoped)>,
    visited: Vec<Scoped>,
    /// By slot, what the value of the variable was built to.
    values: Vec<TermId>,
    valued: Vec<usize>,
    frames: Vec<Frame>,
    built: Vec<TermId>,
}

/// A term that is being built.
#[derive(Clone, Copy, Debug)]
struct Frame {
    term: Scoped,
    /// The next argument.
    next: u32,
    /// The variable whose value this is, if it is one's.
    slot: Option<usize>,
}

/// What [`Unifier::weight`] needs to know of terms as they stand.
pub trait Weights {
    /// What the term weighs.
    fn weight(&mut self, term: TermId) -> u32;
    /// The variables of the term, by number, with their occurrences; asked for only if the counts
    /// of the bank are wide.
    fn occurrences(&mut self, term: TermId) -> Arc<[(u32, u32)]>;
}

/// A chain of bindings longer than this is not weighed.
const MOST_BINDINGS: u32 = 64;

impl Unifier {
    /// Forgets all bindings. Must come before every unification.
    pub fn reset(&mut self) {
        for slot in self.bound.drain(..) {
            self.bindings[slot] = None;
        }
        for slot in self.valued.drain(..) {
            self.values[slot] = TermId::NONE;
        }
        for slot in self.weighed.drain(..) {
            self.weights[slot] = u32::MAX;
        }
        for slot in self.named.drain(..) {
            self.names[slot] = u32::MAX;
        }
    }

    /// Extends the bindings to unify two terms; false, with bindings of no use, if none do.
    pub fn unify(&mut self, bank: &Bank, left: Scoped, right: Scoped) -> bool {
        if bank.sort(left.term) != bank.sort(right.term) {
            return false;
        }
        self.stack.clear();
        self.stack.push((left, right));
        while let Some((a, b)) = self.stack.pop() {
            let (a, b) = (self.resolve(bank, a), self.resolve(bank, b));
            if a.term == b.term && (a.side == b.side || bank.is_ground(a.term)) {
                continue;
            }
            match (bank.head(a.term), bank.head(b.term)) {
                (Head::Variable(variable), _) => {
                    if !self.bind(bank, variable, a.side, b) {
                        return false;
                    }
                }
                (_, Head::Variable(variable)) => {
                    if !self.bind(bank, variable, b.side, a) {
                        return false;
                    }
                }
                (Head::Symbol(f), Head::Symbol(g)) => {
                    if f != g {
                        return false;
                    }
                    let pairs = bank.arguments(a.term).iter().zip(bank.arguments(b.term));
                    self.stack.extend(pairs.map(|(x, y)| (a.of(*x), b.of(*y))));
                }
            }
        }
        true
    }

    /// The term with the bindings put in. The value of each variable is built once; it must stay in
    /// the bank until [`Unifier::reset`].
    pub fn build(&mut self, bank: &mut Bank, term: Scoped) -> TermId {
        let mut memo = (bank.size(term.term) > 64).then(FxHashMap::<Scoped, TermId>::default);
        self.frames.clear();
        self.built.clear();
        self.step(bank, term, &memo);
        while let Some(top) = self.frames.last_mut() {
            let arguments = bank.arguments(top.term.term);
            let place = top.next as usize;
            if place < arguments.len() {
                top.next += 1;
                let argument = top.term.of(arguments[place]);
                self.step(bank, argument, &memo);
                continue;
            }
            let Frame { term, slot, .. } = *top;
            let symbol = bank
                .as_symbol(term.term)
                .expect("variables are never framed");
            let start = self.built.len() - place;
            let made = bank.apply(symbol, &self.built[start..]);
            self.built.truncate(start);
            self.built.push(made);
            if let Some(slot) = slot {
                self.keep(slot, made);
            } else if let Some(memo) = &mut memo {
                memo.insert(term, made);
            }
            self.frames.pop();
        }
        self.built.pop().expect("the root leaves one term")
    }

    fn keep(&mut self, slot: usize, made: TermId) {
        if slot >= self.values.len() {
            self.values.resize(slot + 1, TermId::NONE);
        }
        self.values[slot] = made;
        self.valued.push(slot);
    }

    /// What the term with the bindings put in weighs, without building it; nothing if bindings lead
    /// through too many variables. A variable weighs `variable`.
    ///
    /// Costs a visit per variable and binding; what a variable came to is kept until
    /// [`Unifier::reset`].
    pub fn weight(
        &mut self,
        bank: &Bank,
        term: Scoped,
        variable: u32,
        weights: &mut impl Weights,
    ) -> Option<u32> {
        self.weight_within(bank, term, variable, weights, MOST_BINDINGS)
    }

    fn weight_within(
        &mut self,
        bank: &Bank,
        term: Scoped,
        variable: u32,
        weights: &mut impl Weights,
        depth: u32,
    ) -> Option<u32> {
        let mut sum = weights.weight(term.term);
        let counts = bank.counts(term.term);
        if counts.is_wide() {
            for &(index, times) in &*weights.occurrences(term.term) {
                let more = self.more(bank, (index, term.side), variable, weights, depth)?;
                sum = sum.saturating_add(more.saturating_mul(times));
            }
        } else {
            for (index, times) in counts.occurring() {
                let more = self.more(bank, (index, term.side), variable, weights, depth)?;
                sum = sum.saturating_add(more.saturating_mul(times));
            }
        }
        Some(sum)
    }

    /// How much more a variable weighs with the bindings put in.
    fn more(
        &mut self,
        bank: &Bank,
        (index, side): (u32, Side),
        variable: u32,
        weights: &mut impl Weights,
        depth: u32,
    ) -> Option<u32> {
        let slot = 2 * index as usize + side as usize;
        let Some(Some(bound)) = self.bindings.get(slot).copied() else {
            return Some(0);
        };
        if slot >= self.weights.len() {
            self.weights.resize(slot + 1, u32::MAX);
        }
        if self.weights[slot] == u32::MAX {
            let depth = depth.checked_sub(1)?;
            let value = self.weight_within(bank, bound, variable, weights, depth)?;
            self.weights[slot] = value.min(u32::MAX - 1);
            self.weighed.push(slot);
        }
        Some(self.weights[slot].saturating_sub(variable))
    }

    /// Builds an argument at once, or frames it.
    fn step(&mut self, bank: &mut Bank, term: Scoped, memo: &Option<FxHashMap<Scoped, TermId>>) {
        let (term, last) = self.resolve_from(bank, term);
        if bank.is_ground(term.term) {
            self.built.push(term.term);
        } else if let Some(variable) = bank.as_variable(term.term) {
            let index = self.name(slot(variable, term.side));
            let made = bank.variable(Variable {
                index,
                sort: variable.sort,
            });
            self.built.push(made);
        } else if let Some(slot) = last {
            match self.values.get(slot).filter(|value| value.is_some()) {
                Some(&value) => self.built.push(value),
                None => self.frames.push(Frame {
                    term,
                    next: 0,
                    slot: last,
                }),
            }
        } else if let Some(&known) = memo.as_ref().and_then(|memo| memo.get(&term)) {
            self.built.push(known);
        } else {
            self.frames.push(Frame {
                term,
                next: 0,
                slot: None,
            });
        }
    }

    fn name(&mut self, slot: usize) -> u32 {
        if slot >= self.names.len() {
            self.names.resize(slot + 1, u32::MAX);
        }
        if self.names[slot] == u32::MAX {
            self.names[slot] = self.named.len() as u32;
            self.named.push(slot);
        }
        self.names[slot]
    }

    /// Follows variables to what they are bound to.
    fn resolve(&self, bank: &Bank, term: Scoped) -> Scoped {
        self.resolve_from(bank, term).0
    }

    /// The same, with the last variable on the way.
    fn resolve_from(&self, bank: &Bank, mut term: Scoped) -> (Scoped, Option<usize>) {
        let mut last = None;
        while let Some(variable) = bank.as_variable(term.term) {
            let slot = slot(variable, term.side);
            match self.bindings.get(slot) {
                Some(Some(next)) => (term, last) = (*next, Some(slot)),
                _ => break,
            }
        }
        (term, last)
    }

    fn bind(&mut self, bank: &Bank, variable: Variable, side: Side, to: Scoped) -> bool {
        let slot = slot(variable, side);
        if self.occurs(bank, slot, to) {
            return false;
        }
        if slot >= self.bindings.len() {
            self.bindings.resize(slot + 1, None);
        }
        self.bindings[slot] = Some(to);
        self.bound.push(slot);
        true
    }

    fn occurs(&mut self, bank: &Bank, wanted: usize, term: Scoped) -> bool {
        if bank.is_ground(term.term) {
            return false;
        }
        let mut seen = (bank.size(term.term) > 64).then(rustc_hash::FxHashSet::default);
        let mut visited = std::mem::take(&mut self.visited);
        visited.clear();
        visited.push(term);
        let mut found = false;
        while let Some(top) = visited.pop() {
            let top = self.resolve(bank, top);
            if let Some(variable) = bank.as_variable(top.term) {
                if slot(variable, top.side) == wanted {
                    found = true;
                    break;
                }
                continue;
            }
            if bank.is_ground(top.term) || seen.as_mut().is_some_and(|seen| !seen.insert(top)) {
                continue;
            }
            visited.extend(bank.arguments(top.term).iter().map(|a| top.of(*a)));
        }
        self.visited = visited;
        found
    }
}

fn slot(variable: Variable, side: Side) -> usize {
    2 * variable.index as usize + side as usize
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::term::{Sort, SymbolInfo};

    struct Sizes<'a>(&'a Bank);

    impl Weights for Sizes<'_> {
        fn weight(&mut self, term: TermId) -> u32 {
            self.0.size(term)
        }

        fn occurrences(&mut self, _: TermId) -> Arc<[(u32, u32)]> {
            unreachable!("no counts are wide")
        }
    }

    #[test]
    fn the_two_sides_have_their_own_variables() {
        let mut bank = Bank::default();
        let s = Sort(0);
        let f = bank.declare(SymbolInfo {
            arguments: Box::new([s, s]),
            result: s,
            weight: 1,
        });
        let x = bank.variable(Variable { index: 0, sort: s });
        let y = bank.variable(Variable { index: 1, sort: s });
        let fxy = bank.apply(f, &[x, y]);
        let fxx = bank.apply(f, &[x, x]);
        let left = Scoped {
            term: fxy,
            side: Side::Left,
        };
        let right = Scoped {
            term: x,
            side: Side::Right,
        };
        let mut unifier = Unifier::default();
        // x on the right is another x: f(x, y) = x' unifies, and so does f(x, x) with f(x', y').
        assert!(unifier.unify(&bank, left, right));
        let size = unifier.weight(&bank, right, 1, &mut Sizes(&bank));
        assert_eq!(size, Some(3));
        assert_eq!(unifier.build(&mut bank, right), fxy);
        unifier.reset();
        assert!(unifier.unify(
            &bank,
            Scoped {
                term: fxx,
                side: Side::Left
            },
            Scoped {
                term: fxy,
                side: Side::Right
            }
        ));
        assert_eq!(
            unifier.build(
                &mut bank,
                Scoped {
                    term: fxy,
                    side: Side::Right
                }
            ),
            fxx
        );
        // The occurs check: x against f(x, y) of the same side.
        unifier.reset();
        assert!(!unifier.unify(
            &bank,
            Scoped {
                term: x,
                side: Side::Left
            },
            left
        ));
    }
}
