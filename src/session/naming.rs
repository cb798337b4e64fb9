//! What things are called in evidence.

use crate::proof::{TermIndex, Terms};
use crate::term::{Bank, Head, Sort, TermId, Variable, fold};
use crate::theory::Theory;
use rustc_hash::FxHashMap;

/// How symbols, variables, sorts and laws are called in evidence.
#[derive(Clone, Debug, Default)]
pub(super) struct Naming {
    /// By symbol of the theory.
    pub(super) symbols: Vec<String>,
    /// The variables of the theory, by number, with their sorts.
    pub(super) variables: Vec<(String, Sort)>,
    /// By sort.
    pub(super) sorts: Vec<String>,
    /// By law of the engine.
    pub(super) laws: Vec<String>,
    /// The laws that define a symbol are listed with the laws all the same: they are the theory's.
    pub(super) typed: bool,
    /// Names that variables of rules must not have.
    pub(super) reserved: Vec<String>,
    /// For each symbol the sorts of its arguments and, last, its result.
    pub(super) types: Vec<Vec<Sort>>,
}

impl Naming {
    /// The name of a variable of a rule: those of the theory that have its sort, then new ones.
    pub(super) fn rule_variable(&self, variable: Variable) -> String {
        let declared = self
            .variables
            .iter()
            .filter(|(name, sort)| *sort == variable.sort && !self.reserved.contains(name));
        if let Some((name, _)) = declared.clone().nth(variable.index as usize) {
            return name.clone();
        }
        let sort = if self.typed {
            self.sorts[usize::from(variable.sort.0)].as_str()
        } else {
            ""
        };
        let taken = |name: &String| {
            self.symbols.contains(name) || self.variables.iter().any(|(known, _)| known == name)
        };
        let mut name = format!("x{}{sort}", variable.index + 1);
        while taken(&name) {
            name.push('_');
        }
        name
    }
}

/// The names of a theory.
pub(super) fn naming(theory: &Theory) -> Naming {
    let signature = &theory.signature;
    let mut times: FxHashMap<&str, u32> = FxHashMap::default();
    for symbol in signature.symbols() {
        *times.entry(&symbol.name).or_default() += 1;
    }
    let symbols = signature.symbols().iter().map(|symbol| {
        if times[symbol.name.as_str()] > 1 {
            format!("{}/{}", symbol.name, symbol.arguments.len())
        } else {
            symbol.name.clone()
        }
    });
    let types = signature.symbols().iter().map(|symbol| {
        symbol
            .arguments
            .iter()
            .copied()
            .chain([symbol.result])
            .collect::<Vec<Sort>>()
    });
    Naming {
        symbols: symbols.collect(),
        variables: signature
            .variables()
            .iter()
            .map(|v| (v.name.clone(), v.sort))
            .collect(),
        sorts: signature.sorts().to_vec(),
        laws: theory.laws.iter().map(|law| law.name.clone()).collect(),
        typed: signature.has_sorts(),
        reserved: Vec::new(),
        types: types.collect(),
    }
}

/// The plain form of a term of the theory.
pub(super) fn plain_term(
    bank: &Bank,
    naming: &Naming,
    terms: &mut Terms,
    term: TermId,
) -> TermIndex {
    let mut known = FxHashMap::default();
    fold(bank, term, &mut known, |head, arguments| match head {
        Head::Variable(v) => terms.variable(&naming.variables[v.index as usize].0),
        Head::Symbol(symbol) => terms.apply(&naming.symbols[symbol.index()], arguments),
    })
}
