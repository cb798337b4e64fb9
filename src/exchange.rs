//! The trade's clause syntax: theories that come from elsewhere.
//!
//! A file holds statements `cnf(name, role, formula).` and `fof(name, role, formula).`, where each
//! formula is one equation, and `include('path').` for other files. Terms are `f(X, c)`, with
//! variables in capitals; `s != t` and `~ s = t` are negations; `![X]: …` and `?[X]: …` quantify.
//! The syntax is that of Sutcliffe, "The TPTP problem library and associated infrastructure",
//! Journal of Automated Reasoning 59, 2017; of it only unit equations are understood.
//!
//! What is read becomes the text of a theory in the language of this program, which the parser of
//! theories then reads, so that what was imported can be saved and opened again:
//!
//! - an equation that is no goal becomes a law, named as in the file;
//! - the conjecture becomes a claim, with its existential variables as unknowns; so does the opposite of an inequation, whatever its role,
//!   since the clauses contradict each other exactly if the laws imply it. With several
//!   inequations any one of the opposites would do, which no single claim says; they are refused.
//!
//! Names stay as they are where they can. Two laws of one name, or two functions of one name with
//! different numbers of arguments, are told apart by `_2`, `_3`, … behind the later ones; quotation
//! marks and control characters become `_`. A sign between two arguments becomes an infix operator
//! without a side, so that it always stands in brackets.
//!
//! Nothing recurses on the depth of a term, and the cost is linear in the length of the text.

mod build;
mod formula;
mod naming;
mod read;
mod token;

pub use read::{is_clauses, open};

#[cfg(test)]
mod tests;
