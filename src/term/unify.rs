//! Syntactic unification of terms of two equations, variables kept apart without renaming.

use super::{Bank, Head, TermId, Variable};
use rustc_hash::FxHashMap;

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
    frames: Vec<(Scoped, u32)>,
    built: Vec<TermId>,
}

impl Unifier {
    /// Forgets all bindings. Must come before every unification.
    pub fn reset(&mut self) {
        for slot in self.bound.drain(..) {
            self.bindings[slot] = None;
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

    /// The term with the bindings put in.
    pub fn build(&mut self, bank: &mut Bank, term: Scoped) -> TermId {
        let mut memo = (bank.size(term.term) > 64).then(FxHashMap::<Scoped, TermId>::default);
        self.frames.clear();
        self.built.clear();
        self.step(bank, term, &memo);
        while let Some((top, next)) = self.frames.last_mut() {
            let (top, place) = (*top, *next as usize);
            let arguments = bank.arguments(top.term);
            if place < arguments.len() {
                *next += 1;
                let argument = top.of(arguments[place]);
                self.step(bank, argument, &memo);
                continue;
            }
            let symbol = bank
                .as_symbol(top.term)
                .expect("variables are never framed");
            let start = self.built.len() - place;
            let made = bank.apply(symbol, &self.built[start..]);
            self.built.truncate(start);
            self.built.push(made);
            if let Some(memo) = &mut memo {
                memo.insert(top, made);
            }
            self.frames.pop();
        }
        self.built.pop().expect("the root leaves one term")
    }

    /// What the term with the bindings put in weighs, without building it; nothing if it, or a
    /// term that it is made of, has too many variables. `weigh` weighs a term as it stands, in
    /// which a variable weighs `variable`.
    ///
    /// Costs a visit per variable and binding; what a variable came to is kept until
    /// [`Unifier::reset`].
    pub fn weight(
        &mut self,
        bank: &Bank,
        term: Scoped,
        variable: u32,
        weigh: &mut impl FnMut(TermId) -> u32,
    ) -> Option<u32> {
        let counts = bank.counts(term.term);
        if counts.is_wide() {
            return None;
        }
        let mut sum = weigh(term.term);
        // The recursion goes from variable to variable, of which there are at most thirty-two.
        for (index, times) in counts.occurring() {
            let slot = 2 * index as usize + term.side as usize;
            let Some(Some(bound)) = self.bindings.get(slot).copied() else {
                continue;
            };
            if slot >= self.weights.len() {
                self.weights.resize(slot + 1, u32::MAX);
            }
            if self.weights[slot] == u32::MAX {
                let value = self.weight(bank, bound, variable, weigh)?;
                self.weights[slot] = value.min(u32::MAX - 1);
                self.weighed.push(slot);
            }
            let more =
                (self.weights[slot] - variable.min(self.weights[slot])).saturating_mul(times);
            sum = sum.saturating_add(more);
        }
        Some(sum)
    }

    /// Builds an argument at once, or frames it.
    fn step(&mut self, bank: &mut Bank, term: Scoped, memo: &Option<FxHashMap<Scoped, TermId>>) {
        let term = self.resolve(bank, term);
        if bank.is_ground(term.term) {
            self.built.push(term.term);
        } else if let Some(variable) = bank.as_variable(term.term) {
            let index = self.name(slot(variable, term.side));
            let made = bank.variable(Variable {
                index,
                sort: variable.sort,
            });
            self.built.push(made);
        } else if let Some(&known) = memo.as_ref().and_then(|memo| memo.get(&term)) {
            self.built.push(known);
        } else {
            self.frames.push((term, 0));
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
    fn resolve(&self, bank: &Bank, mut term: Scoped) -> Scoped {
        while let Some(variable) = bank.as_variable(term.term) {
            match self.bindings.get(slot(variable, term.side)) {
                Some(Some(next)) => term = *next,
                _ => break,
            }
        }
        term
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
        let size = unifier.weight(&bank, right, 1, &mut |term| bank.size(term));
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
