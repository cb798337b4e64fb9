//! Tests of the checkers. `made` has the evidence that they judge, written by hand.

mod chains;
mod completeness;
mod hostile;
mod made;
mod measure;
mod mutations;
mod orders;
mod soundness;
