//! Proof objects and the independent checkers.
//!
//! An answer is printed only after a checker of this module has accepted its evidence. There are
//! three kinds of evidence: a chain of equalities ([`Proof`]), a finite algebra
//! ([`AlgebraEvidence`]) and a complete rule set ([`CompleteSet`]). All three live on the plain
//! terms of [`Terms`], have a form as JSON ([`from_json`], [`to_json`]) and are judged by
//! [`check`].
//!
//! Nothing here imports another module of the program and nothing here searches, so that a fault
//! in the engine cannot vouch for itself. Read in this order: `terms`, `evidence`, `check_chain`,
//! `check_algebra`, `check_order`, `check_rewrite`, `check_ac`, `check_join`, `check_complete`.
//!
//! Rejection is always safe, acceptance has to be right. Every loop whose length depends on the
//! evidence spends from a [`WorkLimit`]; when it is used up the evidence is too costly to check,
//! which is neither acceptance nor rejection.

mod check;
mod check_ac;
mod check_algebra;
mod check_chain;
mod check_complete;
mod check_join;
mod check_order;
mod check_rewrite;
mod evidence;
mod json;
mod measure;
mod signature;
mod terms;
mod values;
mod work;
mod write;

pub use check::{check, check_as_written, check_json, check_until, read_json};
pub use evidence::{
    AlgebraClaim, AlgebraEvidence, Claim, CompleteClaim, CompleteSet, Condition, Equation,
    Evidence, Lemma, OrderKind, Proof, Rule, StatedOrder, Step, Table, Types, Way,
};
pub use json::from_json;
pub use terms::{Name, Node, TermIndex, Terms};
pub use work::{Outcome, WorkLimit};
pub use write::to_json;

#[cfg(test)]
mod tests;
