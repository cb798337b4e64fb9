//! Verifying the claims.

use super::control::Control;
use super::{Answer, Session, SessionFault};
use crate::theory::Expected;
use std::time::Duration;

/// What became of one claim.
#[derive(Clone, Debug)]
pub struct ClaimResult {
    /// Its place in the list, from 1.
    pub number: usize,
    /// Its name, if it has one.
    pub name: Option<String>,
    /// The claim as text, with `=` or `!=`.
    pub text: String,
    /// What it expects.
    pub expected: Expected,
    /// The answer.
    pub answer: Answer,
}

impl ClaimResult {
    /// Is it as claimed (yes), otherwise (no), or not known (nothing)?
    pub fn is_as_claimed(&self) -> Option<bool> {
        todo!()
    }
}

impl Session {
    /// Verifies every claim, for at most so long each; `each` is told of every one as it is done.
    /// Ends early, without the rest, when stopped from outside.
    pub fn check(
        &mut self,
        within: Duration,
        control: &mut Control,
        each: &mut dyn FnMut(&ClaimResult),
    ) -> Result<Vec<ClaimResult>, SessionFault> {
        let _ = (within, control, each);
        todo!()
    }
}
