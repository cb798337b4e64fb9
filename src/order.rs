//! Reduction orders and the choice of their parameters.
//!
//! An [`OrderSetting`] is what a user states or a search proposes; an [`Order`] is the same made
//! ready for a bank: checked, and with ranks and weights in arrays. This floor knows no rules and
//! no names. Nothing here recurses on the depth of a term, and no comparison costs more than
//! polynomially many steps in the number of distinct subterms.

mod assumption;
mod candidates;
mod kbo;
mod lpo;
mod resolved;
mod search;
mod setting;
mod shape;
mod weighing;

pub use assumption::VariableOrder;
pub use candidates::{Candidate, candidates, misdirected, search};
pub use resolved::{Comparison, Order, OrderProblem};
pub use setting::{OrderKind, OrderSetting};
pub use shape::Law;

#[cfg(test)]
mod tests;
