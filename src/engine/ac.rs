//! Which symbols are associative and commutative.

use super::run::Engine;
use crate::rewrite::{AcLaws, RuleId, Use};
use crate::term::{Bank, Symbol, TermId};

/// What an equation says about one binary symbol.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Shape {
    Commutative(Symbol),
    /// Whether it is used backward to go from f(f(x, y), z) to f(x, f(y, z)).
    Associative(Symbol, bool),
    /// f(x, f(y, z)) = f(y, f(x, z)).
    Exchange(Symbol),
}

impl Engine {
    pub(super) fn knows_ac(&self) -> bool {
        !self.ac_symbols.is_empty()
    }

    /// Is this one of the three equations that make rewriting modulo the two laws work on ground
    /// terms: commutativity, associativity, and the exchange law?
    pub(super) fn defines_ac(&self, left: TermId, right: TermId) -> bool {
        shape(&self.system.bank, left, right).is_some()
    }

    /// Takes note of a rule that is commutativity or associativity.
    pub(super) fn notice_ac(&mut self, id: RuleId) {
        let rule = self.system.rule(id);
        let (symbol, place, by) = match shape(&self.system.bank, rule.left, rule.right) {
            Some(Shape::Commutative(f)) => (
                f,
                0,
                Use {
                    rule: id,
                    backward: false,
                },
            ),
            Some(Shape::Associative(f, backward)) => (f, 1, Use { rule: id, backward }),
            _ => return,
        };
        let known = self.ac_parts.entry(symbol).or_default();
        known[place] = known[place].or(Some(by));
        if let [Some(commutative), Some(associative)] = *known
            && !self.ac_symbols.contains(&symbol)
        {
            self.ac_symbols.push(symbol);
            self.system.set_ac(
                symbol,
                AcLaws {
                    associative,
                    commutative: commutative.rule,
                },
            );
        }
    }

    /// The symbols that are known to be associative and commutative.
    pub fn ac_symbols(&self) -> &[Symbol] {
        &self.ac_symbols
    }
}

fn shape(bank: &Bank, left: TermId, right: TermId) -> Option<Shape> {
    let (f, [x, y]) = binary(bank, left)?;
    let (g, [u, v]) = binary(bank, right)?;
    if f != g {
        return None;
    }
    let variable = |t| bank.as_variable(t).is_some();
    let inner = |t| binary(bank, t).filter(|(h, [a, b])| *h == f && variable(*a) && variable(*b));
    let different = |a, b, c| a != b && b != c && a != c;
    match (inner(x), inner(y), inner(u), inner(v)) {
        (None, None, None, None) => (variable(x) && variable(y) && x != y && (u, v) == (y, x))
            .then_some(Shape::Commutative(f)),
        (Some((_, [a, b])), None, None, Some((_, [c, d]))) => {
            let same = (a, b, y) == (u, c, d) && different(a, b, y);
            same.then_some(Shape::Associative(f, false))
        }
        (None, Some((_, [a, b])), Some((_, [c, d])), None) => {
            let same = (x, a, b) == (c, d, v) && different(x, a, b);
            same.then_some(Shape::Associative(f, true))
        }
        (None, Some((_, [a, b])), None, Some((_, [c, d]))) => {
            let same = (a, x, b) == (u, c, d) && different(x, a, b);
            (same && variable(x)).then_some(Shape::Exchange(f))
        }
        _ => None,
    }
}

fn binary(bank: &Bank, term: TermId) -> Option<(Symbol, [TermId; 2])> {
    let symbol = bank.as_symbol(term)?;
    match *bank.arguments(term) {
        [a, b] => Some((symbol, [a, b])),
        _ => None,
    }
}
