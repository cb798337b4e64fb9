//! The saturation loop: unfailing completion (Bachmair, Dershowitz & Plaisted 1989) on a
//! rewriting system.
//!
//! An [`Engine`] is given laws and makes rules of them and of their consequences until the rules
//! are complete on ground terms, or until it is stopped; it can be run again at any time. Every
//! rule carries the record of its derivation. This floor knows no names and no text.

mod ac;
mod arrows;
mod connected;
mod instance;
mod judge;
mod occurrences;
mod overlap;
mod pair;
mod parts;
mod record;
mod reduce;
mod refresh;
mod replay;
mod run;
mod siblings;
mod strategy;
#[cfg(test)]
mod tests;
mod waiting;

pub use arrows::{Arrow, Arrows, Cell, Tallies, Tally, Technique};
pub use record::{LawId, Origin, Record, RecordStep};
pub use replay::{Peak, ReplayError};
pub use run::{Counts, Engine, Outcome, Question};
pub use strategy::Strategy;
