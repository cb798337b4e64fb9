//! Signatures with names, laws, definitions and claims: a theory as data.
//!
//! A [`Theory`] is what a theory file says, resolved to symbols and terms, together with the
//! document itself, line by line, so that saving writes back what was read. This floor does not
//! read or print text; the module `language` does.

mod document;
mod laws;
mod signature;
mod store;

pub use document::{Document, Line, LineId};
pub use laws::{
    Claim, Derived, Expected, Law, LawKind, Origin, Property, Record, RecordStep, Refused, Use,
};
pub use signature::{
    Fixity, Meaning, Side, Signature, SignatureFull, SymbolDeclaration, VariableDeclaration,
};
pub use store::Theory;
