//! Evidence as text: its plain terms become terms of a bank of their own, for the printer.

use super::runner::symbol_of_name;
use crate::language::{Names, Printed, Printer, SymbolName, TheoryNames};
use crate::proof::{self, Node, TermIndex, Terms, Way};
use crate::term::{Bank, Symbol, TermId, Variable};
use crate::theory::{Signature, Theory};
use rustc_hash::FxHashMap;
use std::borrow::Cow;
use std::ops::Range;

/// One line of a chain of equalities: what the step before led to, and by what.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ProofLine {
    /// The term.
    pub text: String,
    /// Where in the text the subterm stands that the step has changed.
    pub changed: Option<Range<usize>>,
    /// The law or lemma; empty for the first line.
    pub by: String,
    /// Was it used from right to left?
    pub backward: bool,
    /// The place of the changed subterm, by argument numbers from 1.
    pub at: Vec<u32>,
}

/// A proved equation.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct LemmaText {
    /// What it is called.
    pub name: String,
    /// The equation.
    pub equation: String,
    /// Its chain.
    pub lines: Vec<ProofLine>,
}

/// A proof as text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ProofText {
    /// The lemmas, in the order of use.
    pub lemmas: Vec<LemmaText>,
    /// The chain of the claim.
    pub lines: Vec<ProofLine>,
}

/// Longer terms are cut in a line of a proof.
const LONGEST_LINE: usize = 4_000;

struct SheetNames<'t> {
    signature: &'t Signature,
    variables: Vec<String>,
}

impl Names for SheetNames<'_> {
    fn symbol(&self, symbol: Symbol) -> SymbolName<'_> {
        match TheoryNames(self.signature).symbol(symbol) {
            known if symbol.index() < self.signature.symbols().len() => known.name_only(),
            unknown => unknown.name_only(),
        }
    }

    fn variable(&self, variable: Variable) -> Cow<'_, str> {
        Cow::Borrowed(&self.variables[variable.index as usize])
    }
}
