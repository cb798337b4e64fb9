//! Verifying the claims.

use super::control::Control;
use super::{Answer, Session, SessionFault, Verdict};
use crate::theory::Expected;
use std::sync::atomic::Ordering;
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
        match self.answer.verdict {
            Verdict::Equal => Some(self.expected == Expected::Equal),
            Verdict::NotEqual => Some(self.expected == Expected::NotEqual),
            Verdict::Undecided => None,
        }
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
        let mut results = Vec::new();
        for (place, claim) in self.theory.claims.clone().into_iter().enumerate() {
            if control.stop.load(Ordering::Relaxed) {
                break;
            }
            let answer = match self.find_of(&claim) {
                Some(find) => self.find(&find, within, control)?.clone(),
                None => self.ask(claim.left, claim.right, within, control)?.clone(),
            };
            let result = ClaimResult {
                number: place + 1,
                text: self.claim_text(&claim),
                name: claim.name,
                expected: claim.expected,
                answer,
            };
            each(&result);
            results.push(result);
        }
        Ok(results)
    }
}
