//! Names for the symbols and variables of a bank.

use crate::term::{Bank, Symbol, TermId, Variable};
use crate::theory::{Fixity, Signature};
use rustc_hash::FxHashMap;
use std::borrow::Cow;

/// How a symbol is called and written.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SymbolName<'n> {
    /// Its name, without quotes.
    pub name: Cow<'n, str>,
    /// How it is written.
    pub fixity: Fixity,
}

/// Names for symbols and variables.
pub trait Names {
    /// The name of a symbol.
    fn symbol(&self, symbol: Symbol) -> SymbolName<'_>;
    /// The name of a variable, without quotes.
    fn variable(&self, variable: Variable) -> Cow<'_, str>;
}

/// The names of a signature, for the equations of its theory. A symbol that the signature does not
/// have is called by its number.
#[derive(Clone, Copy)]
pub struct TheoryNames<'s>(pub &'s Signature);

impl Names for TheoryNames<'_> {
    fn symbol(&self, symbol: Symbol) -> SymbolName<'_> {
        match self.0.symbol(symbol) {
            Some(declaration) => SymbolName {
                name: Cow::Borrowed(&declaration.name),
                fixity: declaration.fixity,
            },
            None => SymbolName {
                name: Cow::Owned(format!("symbol {}", symbol.0)),
                fixity: Fixity::Plain,
            },
        }
    }

    fn variable(&self, variable: Variable) -> Cow<'_, str> {
        match self.0.variables().get(variable.index as usize) {
            Some(declaration) => Cow::Borrowed(&declaration.name),
            None => Cow::Owned(format!("variable {}", variable.index)),
        }
    }
}

/// Names for the variables of a rule, which are numbered without regard to the signature: by sort,
/// the declared variables first, then `x1`, `x2`, … as far as they are free.
pub struct RuleNames<'n> {
    base: &'n dyn Names,
    names: FxHashMap<Variable, String>,
}

impl<'n> RuleNames<'n> {
    /// Names for the variables of these terms, in the order of first occurrence. Symbols are called
    /// as `base` says.
    pub fn new(
        base: &'n dyn Names,
        signature: &Signature,
        bank: &Bank,
        terms: &[TermId],
    ) -> RuleNames<'n> {
        let mut names: FxHashMap<Variable, String> = FxHashMap::default();
        let mut next: FxHashMap<u16, usize> = FxHashMap::default();
        let mut fresh = 1;
        for variable in terms.iter().flat_map(|term| bank.variables(*term)) {
            if names.contains_key(&variable) {
                continue;
            }
            let from = next.entry(variable.sort.0).or_insert(0);
            let declared = signature.variables()[*from..]
                .iter()
                .position(|v| v.sort == variable.sort && !v.implicit);
            let name = match declared {
                Some(place) => {
                    let name = signature.variables()[*from + place].name.clone();
                    *from += place + 1;
                    name
                }
                None => {
                    *from = signature.variables().len();
                    signature.fresh_name(&mut fresh, |_| false)
                }
            };
            names.insert(variable, name);
        }
        RuleNames { base, names }
    }
}

impl Names for RuleNames<'_> {
    fn symbol(&self, symbol: Symbol) -> SymbolName<'_> {
        self.base.symbol(symbol)
    }

    fn variable(&self, variable: Variable) -> Cow<'_, str> {
        match self.names.get(&variable) {
            Some(name) => Cow::Borrowed(name),
            None => self.base.variable(variable),
        }
    }
}
