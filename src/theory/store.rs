//! A theory.

use super::{
    Claim, Derived, Document, Law, LineId, Refused, Signature, SignatureFull, SymbolDeclaration,
};
use crate::order::OrderSetting;
use crate::term::{Bank, Symbol, SymbolInfo};
use rustc_hash::FxHashSet;

/// Everything that a theory file says.
///
/// All terms are in `bank`, in which every symbol and variable weighs 1 and whose symbols are those
/// of the signature, by the same numbers.
#[derive(Clone)]
pub struct Theory {
    /// Its name, if the file gives one.
    pub name: Option<String>,
    /// Where its text came from, for messages.
    pub source: String,
    /// The remarks to show when it is opened.
    pub notes: Vec<String>,
    /// What the names mean.
    pub signature: Signature,
    /// The terms of laws, claims and derived rules.
    pub bank: Bank,
    /// The laws in the order in which they were stated.
    pub laws: Vec<Law>,
    /// The claims in the order in which they were stated.
    pub claims: Vec<Claim>,
    /// The stated order; without one the program chooses.
    pub order: Option<OrderSetting>,
    /// The derived rules that the last `save` kept.
    pub derived: Vec<Derived>,
    /// Lines of derived rules that could not be read, with why: the file may have been changed by
    /// hand. The next `save` takes them out.
    pub refused: Vec<Refused>,
    /// The text.
    pub document: Document,
    /// The sources that `use` has brought in.
    pub used: Vec<String>,
    /// The line that names the theory.
    pub name_line: Option<LineId>,
    /// The line that sets the order.
    pub order_line: Option<LineId>,
    /// The names of laws and claims, for looking up.
    pub(crate) names: FxHashSet<String>,
    /// The number that the next law without a name gets; it only grows.
    pub next_law: u32,
}

impl Default for Theory {
    fn default() -> Self {
        Theory {
            name: None,
            source: String::new(),
            notes: Vec::new(),
            signature: Signature::default(),
            bank: Bank::new(1),
            laws: Vec::new(),
            claims: Vec::new(),
            order: None,
            derived: Vec::new(),
            refused: Vec::new(),
            document: Document::default(),
            used: Vec::new(),
            name_line: None,
            order_line: None,
            names: FxHashSet::default(),
            next_law: 1,
        }
    }
}

impl Theory {
    /// Adds a symbol to the signature and to the bank, by the same number in both.
    pub fn add_symbol(&mut self, declaration: SymbolDeclaration) -> Result<Symbol, SignatureFull> {
        let info = SymbolInfo {
            arguments: declaration.arguments.clone().into_boxed_slice(),
            result: declaration.result,
            weight: 1,
        };
        let symbol = self.signature.add_symbol(declaration)?;
        let same = self.bank.declare(info);
        debug_assert_eq!(symbol, same);
        Ok(symbol)
    }

    /// Is there a law or claim of this name?
    pub fn is_named(&self, name: &str) -> bool {
        self.names.contains(name)
    }

    /// Adds a law, whose name must be free.
    pub(crate) fn push_law(&mut self, law: Law) {
        self.names.insert(law.name.clone());
        self.laws.push(law);
    }

    /// Adds a claim, whose name, if it has one, must be free.
    pub(crate) fn push_claim(&mut self, claim: Claim) {
        self.names.extend(claim.name.clone());
        self.claims.push(claim);
    }

    /// The law of this name.
    pub fn law(&self, name: &str) -> Option<&Law> {
        self.laws.iter().find(|law| law.name == name)
    }

    /// The claim of this name.
    pub fn claim(&self, name: &str) -> Option<&Claim> {
        self.claims
            .iter()
            .find(|claim| claim.name.as_deref() == Some(name))
    }

    /// The derived rule of this number.
    pub fn derived(&self, number: u32) -> Option<&Derived> {
        self.derived.iter().find(|rule| rule.number == number)
    }
}
