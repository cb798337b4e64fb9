//! Symbols, hash-consed terms, substitutions, positions, syntactic matching and unification.
//!
//! Everything else stands on the [`Bank`]: equal terms have equal ids, so that comparing two terms,
//! or asking a memo about one, is an array look-up. This floor knows no names, no text and no rules.
//! Nothing here recurses on the depth of a term.

mod bank;
mod copy;
mod counts;
mod id;
mod matching;
mod position;
mod slots;
mod substitution;
mod unify;

pub use bank::{Bank, Head, Mark, SymbolInfo};
pub use copy::{Copier, fold, renumber};
pub use counts::VariableCounts;
pub use id::{Sort, Symbol, TermId, Variable};
pub use matching::match_term;
pub use position::{preorder, replace_at, subterm_at};
pub use substitution::{Substitution, instantiate};
pub use unify::{Scoped, Side, Unifier, Weights};
