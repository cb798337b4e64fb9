//! Equable keeps equational laws and answers, with evidence, what follows from them.
//!
//! The modules are floors: each imports only from those above it in this list.

pub mod term;

pub mod order;
pub mod proof;

pub mod rewrite;

pub mod algebra;
pub mod engine;

pub mod language;
pub mod theory;

pub mod session;

pub mod exchange;

pub mod shell;
