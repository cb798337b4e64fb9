//! Finite algebras: evaluation, a built-in pool, and search for one that refutes a claim.
//!
//! A [`Problem`] is a signature, laws and a claim, compiled from a [`Bank`](crate::term::Bank).
//! It is refuted by an [`Algebra`] in which every law holds and the sides of the claim differ for
//! some values of its variables, a [`Counterexample`]. Three sources, cheapest first: algebras
//! that are known already, [`Pool`] with small ones made by formula, and [`Search`] over the
//! cells of the tables, beside which [`SatSearch`] hands them to a propositional solver. This floor knows no names and no text, and nothing of proof search.
//!
//! Elements of a sort are numbered from 0; every sort has at least one.

mod affine;
mod equation;
mod evaluate;
mod known;
mod limits;
mod magmas;
mod pool;
mod ring;
mod sat;
mod search;
mod shrink;
mod signature;
mod tables;

pub use equation::Equation;
pub use evaluate::{Evaluator, Refutation};
pub use known::Known;
pub use limits::{Limits, StopReason};
pub use pool::{Pool, PoolOutcome};
pub use sat::SatSearch;
pub use search::{GivenUp, Outcome, Search};
pub use shrink::shrink;
pub use signature::{Problem, Shape, Signature};
pub use tables::{Algebra, AlgebraFault, Counterexample, Table};
