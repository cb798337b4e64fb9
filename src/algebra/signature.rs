//! What a problem is about: sorts, the shapes of symbols, laws and a claim.

use super::Equation;
use crate::term::{Bank, Sort, Symbol, TermId};

/// The sorts of a symbol's arguments and of its result.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Shape {
    /// The sorts of the arguments.
    pub arguments: Box<[Sort]>,
    /// The sort of the result.
    pub result: Sort,
}

/// Sorts by number, and the shapes of the symbols by the numbers that they have in the bank.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Signature {
    sorts: usize,
    symbols: Vec<Shape>,
}

impl Signature {
    /// The symbols of a bank. `sorts` is the number of sorts; sorts that a symbol mentions are
    /// counted in any case, and there is at least one.
    pub fn new(bank: &Bank, sorts: usize) -> Self {
        let mut signature = Signature {
            sorts: sorts.max(1),
            symbols: Vec::new(),
        };
        for info in bank.symbols() {
            let shape = Shape {
                arguments: info.arguments.clone(),
                result: info.result,
            };
            for sort in shape.arguments.iter().chain([&shape.result]) {
                signature.sorts = signature.sorts.max(sort.0 as usize + 1);
            }
            signature.symbols.push(shape);
        }
        signature
    }

    /// How many sorts there are.
    pub fn sorts(&self) -> usize {
        self.sorts
    }

    /// The shapes of all symbols.
    pub fn symbols(&self) -> &[Shape] {
        &self.symbols
    }

    /// The shape of one symbol.
    pub fn shape(&self, symbol: Symbol) -> &Shape {
        &self.symbols[symbol.index()]
    }
}

/// Laws and a claim to refute.
#[derive(Clone, Debug)]
pub struct Problem {
    /// The symbols.
    pub signature: Signature,
    /// What must hold for all values of the variables.
    pub laws: Vec<Equation>,
    /// What must fail for some values of its variables.
    pub claim: Equation,
}

impl Problem {
    /// Compiles laws and claim, all terms of `bank`.
    pub fn new(
        bank: &Bank,
        sorts: usize,
        laws: impl IntoIterator<Item = (TermId, TermId)>,
        claim: (TermId, TermId),
    ) -> Self {
        let compile = |(left, right)| Equation::compile(bank, left, right);
        let mut signature = Signature::new(bank, sorts);
        let laws: Vec<Equation> = laws.into_iter().map(compile).collect();
        let claim = compile(claim);
        for equation in laws.iter().chain([&claim]) {
            for variable in equation.variables() {
                signature.sorts = signature.sorts.max(variable.sort.0 as usize + 1);
            }
        }
        Problem {
            signature,
            laws,
            claim,
        }
    }

    /// Which symbols occur in a law or in the claim; the others may mean anything.
    pub(super) fn used(&self) -> Vec<bool> {
        let mut used = vec![false; self.signature.symbols.len()];
        for equation in self.laws.iter().chain([&self.claim]) {
            for symbol in equation.symbols() {
                used[symbol.index()] = true;
            }
        }
        used
    }
}
