//! What there is: laws, rules, symbols, claims, and where rules come from.

use super::Session;
use crate::theory::{Expected, LawKind};

/// A law, for a list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct LawView {
    /// Its name.
    pub name: String,
    /// The equation (`s = t`; `s -> t` for a directed rule).
    pub text: String,
    /// Where it came from.
    pub kind: LawKind,
    /// The theory that brought it, if by `use`.
    pub from: Option<String>,
}

/// An active rule, for a list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct RuleView {
    /// Its number, as in `why 7` and in proofs (`rule 7`).
    pub number: u32,
    /// The rule: `s -> t`, or `s = t` if it is used both ways on decreasing instances.
    pub text: String,
    /// Is it oriented?
    pub oriented: bool,
    /// The law that it is, if it is one as it stands.
    pub law: Option<String>,
}

/// A symbol, for a list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SymbolView {
    /// The line that declares it, such as `infix * 40 left`.
    pub text: String,
    /// Its name.
    pub name: String,
    /// Is it known to be associative and commutative?
    pub ac: bool,
}

/// A claim, for a list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ClaimView {
    /// Its name.
    pub name: Option<String>,
    /// The claim, with `=` or `!=`.
    pub text: String,
    /// What it expects.
    pub expected: Expected,
}

/// The state of the session in numbers.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Status {
    /// The theory's name.
    pub name: String,
    /// Its file.
    pub path: Option<String>,
    /// Changed since it was saved?
    pub changed: bool,
    /// Sorts, symbols, laws, claims, answers.
    pub sorts: usize,
    /// Symbols.
    pub symbols: usize,
    /// Laws.
    pub laws: usize,
    /// Claims.
    pub claims: usize,
    /// Answers so far.
    pub answers: usize,
    /// The order as a line to type; `order auto` while none was chosen.
    pub order: String,
    /// Was the order stated by the user?
    pub order_stated: bool,
    /// Is the rule set complete?
    pub complete: bool,
    /// Active rules.
    pub rules: usize,
    /// Of these, oriented.
    pub oriented: usize,
    /// Waiting pairs.
    pub waiting: usize,
    /// Named counts of what the engine has done (pairs formed, chosen, redundant, …).
    pub counts: Vec<(&'static str, u64)>,
    /// Symbols known to be associative and commutative.
    pub ac: Vec<String>,
    /// Terms in the table's bank.
    pub terms: usize,
}

impl Session {
    /// The laws, in the order in which they were stated.
    pub fn laws(&self) -> Vec<LawView> {
        todo!()
    }

    /// The active rules, oldest first. Empty before anything was completed or asked.
    pub fn rules(&self) -> Vec<RuleView> {
        todo!()
    }

    /// The symbols, in the order of declaration.
    pub fn symbols(&self) -> Vec<SymbolView> {
        todo!()
    }

    /// The claims.
    pub fn claims(&self) -> Vec<ClaimView> {
        todo!()
    }

    /// The session in numbers.
    pub fn status(&self) -> Status {
        todo!()
    }

    /// Where a rule comes from, as proof text: its own chain last, the rules that it rests on
    /// before it. Nothing if there is no rule of this number.
    pub fn why(&mut self, number: u32) -> Option<super::ProofText> {
        let _ = number;
        todo!()
    }

    /// The numbers of all rules there ever were, and the names of laws, for completion.
    pub fn rule_count(&self) -> u32 {
        todo!()
    }
}
