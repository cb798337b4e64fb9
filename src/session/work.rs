//! Completing, normal forms, traces and proofs.

use super::control::Control;
use super::{Answer, Completion, NormalForm, ProofLine, ProofText, Session, SessionFault};
use crate::term::TermId;
use std::time::Duration;

impl Session {
    /// Saturates within a time, or without end until stopped from outside.
    pub fn complete(
        &mut self,
        within: Option<Duration>,
        control: &mut Control,
    ) -> Result<Completion, SessionFault> {
        let _ = (within, control);
        todo!()
    }

    /// The normal form of a term by the rules as they stand; it becomes `it`.
    pub fn normal(
        &mut self,
        term: TermId,
        control: &mut Control,
    ) -> Result<NormalForm, SessionFault> {
        let _ = (term, control);
        todo!()
    }

    /// The chain from a term to its normal form, the term itself first.
    pub fn trace(
        &mut self,
        term: TermId,
        control: &mut Control,
    ) -> Result<Vec<ProofLine>, SessionFault> {
        let _ = (term, control);
        todo!()
    }

    /// The proof of an answer as text, if it is `equal`.
    pub fn proof_text(&self, answer: &Answer) -> Option<ProofText> {
        let _ = answer;
        todo!()
    }
}
