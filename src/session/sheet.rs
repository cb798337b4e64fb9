//! Evidence as text.

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
