//! The table of rewrites, the index of rules, ordered rewriting, and canonical forms modulo
//! associativity and commutativity.
//!
//! A [`System`] has a bank, a reduction order, the rules and the table, and answers what the
//! normal form of a term is and by which steps it is reached. It decides nothing about which rules
//! there are: that is the engine's business.

mod asking;
mod canonical;
mod canonical_steps;
mod explain;
mod ground;
mod index;
mod neighbours;
mod normal;
mod rule;
mod system;
mod table;

pub use canonical::{AcLaws, ac_equal};
pub use explain::{Step, StepBy};
pub use ground::Joining;
pub use index::{Index, Matcher};
pub use normal::{Limits, Stopped};
pub use rule::{Rule, RuleId, RuleState, Use};
pub use system::System;
pub use table::{Reason, Table};
