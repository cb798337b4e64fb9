//! Completing, normal forms, traces and proofs.

use super::control::{Control, Work};
use super::runner::Rewritten;
use super::sheet::Sheet;
use super::workers::Ended;
use super::{
    Answer, Completion, NormalForm, ProgramFault, ProofHead, ProofLine, ProofText, Session,
    SessionFault,
};
use crate::engine::Counts;
use crate::language::print_order;
use crate::proof::{self, Evidence};
use crate::rewrite::Stopped;
use crate::term::TermId;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

/// A trace of more numbers than this is not written down.
const LONGEST_TRACE: usize = 200_000;

impl Session {
    /// Saturates within a time, or without end until stopped from outside.
    ///
    /// A rule set is called complete only after the checker has accepted it.
    pub fn complete(
        &mut self,
        within: Option<Duration>,
        control: &mut Control,
    ) -> Result<Completion, SessionFault> {
        let begun = Instant::now();
        self.completed = true;
        self.workers.catch_up(&self.theory, self.lineage)?;
        let formed = self.workers.formed();
        let mut work = Work::new(control, "completing", within).formed_before(formed);
        let ended = self.workers.run(&self.theory, None, &mut work)?;
        let tried = self.workers.tried();
        let runner = self.workers.best().expect("there is an engine after a run");
        let engine = &runner.engine;
        let (stopped, remark) = match ended {
            Ended::Complete(_) | Ended::Met(_) => (None, None),
            Ended::Exhausted => (None, Some(given_up(engine.counts()))),
            Ended::Stopped(stopped) if engine.counts().trimmed > 0 => {
                (Some(stopped), Some(given_up(engine.counts())))
            }
            Ended::Stopped(stopped) => (Some(stopped), None),
        };
        let rules = engine.system.active();
        let oriented = engine
            .active_rules()
            .filter(|id| engine.system.rule(*id).oriented)
            .count();
        let mut completion = Completion {
            complete: false,
            ordered: oriented < rules,
            rules,
            oriented,
            pairs: engine.counts().formed,
            waiting: engine.waiting(),
            elapsed: Duration::ZERO,
            order: print_order(&self.theory.signature, &runner.setting),
            why: runner.why.to_owned(),
            orders: tried,
            stopped,
            remark,
            evidence: None,
            fault: None,
        };
        if let Ended::Complete(_) = ended {
            let set = runner.complete_set(None).map(Evidence::Complete);
            self.accept(set, &mut completion, &control.stop);
            self.distrusted = completion.fault.is_some();
            completion.remark = completion.remark.take().or(self.collapse());
        }
        completion.elapsed = begun.elapsed();
        Ok(completion)
    }

    /// The normal form of a term by the rules as they stand; it becomes `it`.
    ///
    /// When it is stopped, the text is that of the term itself.
    pub fn normal(
        &mut self,
        term: TermId,
        control: &mut Control,
    ) -> Result<NormalForm, SessionFault> {
        let begun = Instant::now();
        self.workers.catch_up(&self.theory, self.lineage)?;
        self.digest(control);
        let work = Work::new(control, "rewriting", None);
        let runner = self
            .workers
            .best()
            .expect("there is an engine after catching up");
        let asked = runner.ask(&self.theory, term, term);
        let rewritten = runner.normal_form(&asked, 0, &mut work.limits(None));
        let complete = runner.engine.is_complete() && !self.distrusted;
        let mut checked = false;
        let mut fault = None;
        let (mut found, mut steps, stopped) = match rewritten {
            Ok(Rewritten {
                normal,
                steps,
                proof,
                ..
            }) => {
                let back = runner.term_back(&mut self.theory, normal, &asked.variables);
                if let Some(proof) = proof {
                    let evidence = Evidence::Proof(proof);
                    match self.verify(&evidence, Some((term, back)), &control.stop) {
                        proof::Outcome::Accepted => checked = true,
                        proof::Outcome::TooCostly => {}
                        proof::Outcome::Rejected { place, reason } => {
                            fault = Some((ProgramFault { place, reason }, evidence));
                        }
                    }
                }
                (back, steps, None)
            }
            Err(stopped) => (term, None, Some(stopped)),
        };
        if fault.is_some() {
            (found, steps) = (term, None);
        }
        self.it = Some(found);
        Ok(NormalForm {
            checked,
            fault,
            text: self.term_text(found),
            term: self.term_text(term),
            steps,
            elapsed: begun.elapsed(),
            complete,
            stopped,
        })
    }

    /// Laws that were just stated become rules before they are used to rewrite, which takes no
    /// search: each is oriented and the others are simplified by it.
    pub(super) fn digest(&mut self, control: &mut Control) {
        let work = Work::new(control, "taking in the laws", Some(DIGEST));
        if let Some(runner) = self.workers.best() {
            runner.engine.digest(&mut work.limits(None));
        }
    }

    /// The chain from a term to its normal form, the term itself first.
    pub fn trace(
        &mut self,
        term: TermId,
        control: &mut Control,
    ) -> Result<Vec<ProofLine>, SessionFault> {
        self.workers.catch_up(&self.theory, self.lineage)?;
        self.digest(control);
        let work = Work::new(control, "rewriting", None);
        let runner = self
            .workers
            .best()
            .expect("there is an engine after catching up");
        let asked = runner.ask(&self.theory, term, term);
        let rewritten = runner.normal_form(&asked, LONGEST_TRACE, &mut work.limits(None));
        let chain = rewritten.map_err(SessionFault::Stopped)?.chain;
        let chain = chain.ok_or(SessionFault::Stopped(Stopped::Memory))?;
        let mut sheet = Sheet::new(&self.theory, &runner.naming, &chain.terms);
        Ok(sheet.chain(chain.claim.left, &chain.claim.steps))
    }

    /// The beginning of the proof of an answer, if it is `equal`: costs what is shown.
    pub fn proof_head(&self, answer: &Answer, most: usize) -> Option<ProofHead> {
        let Some(Evidence::Proof(proof)) = &answer.evidence else {
            return None;
        };
        let naming = super::naming::naming(&self.theory);
        let sheet = Sheet::new(&self.theory, &naming, &proof.terms);
        Some(sheet.number_lemmas(proof).head(proof, most))
    }

    /// The proof of an answer as text, if it is `equal`.
    pub fn proof_text(&self, answer: &Answer) -> Option<ProofText> {
        let Some(Evidence::Proof(proof)) = &answer.evidence else {
            return None;
        };
        let naming = super::naming::naming(&self.theory);
        let sheet = Sheet::new(&self.theory, &naming, &proof.terms);
        Some(sheet.number_lemmas(proof).proof(proof))
    }

    /// Says so if the rules make all terms of a sort equal.
    fn collapse(&self) -> Option<String> {
        let runner = self.workers.best_ref()?;
        let system = &runner.engine.system;
        let sort = runner.engine.active_rules().find_map(|id| {
            let rule = system.rule(id);
            let (left, right) = (rule.left, rule.right);
            let one = system.bank.as_variable(left)?;
            (system.bank.as_variable(right).is_some()).then_some(one.sort)
        })?;
        Some(if self.theory.signature.has_sorts() {
            let sort = self.theory.signature.sort_name(sort);
            format!("by these laws all terms of sort {sort} are equal to each other")
        } else {
            "by these laws all terms are equal to each other".to_owned()
        })
    }

    fn accept(
        &self,
        evidence: Option<Evidence>,
        completion: &mut Completion,
        stop: &Arc<AtomicBool>,
    ) {
        let Some(evidence) = evidence else {
            completion.remark = Some("the evidence could not be written down".to_owned());
            return;
        };
        match self.verify(&evidence, None, stop) {
            proof::Outcome::Accepted => {
                completion.complete = true;
                completion.evidence = Some(evidence);
            }
            proof::Outcome::TooCostly if stop.load(Ordering::Relaxed) => {
                completion.stopped = Some(Stopped::Interrupted);
                completion.remark =
                    Some("no pair is left; checking the rule set was interrupted".to_owned());
            }
            proof::Outcome::TooCostly => {
                completion.remark =
                    Some("no pair is left, but the rule set is too costly to check".to_owned());
            }
            proof::Outcome::Rejected { place, reason } => {
                completion.fault = Some((ProgramFault { place, reason }, evidence));
            }
        }
    }
}

/// Why the rules cannot be called complete although no pair is left, or will not be.
fn given_up(counts: Counts) -> String {
    let trimmed = counts.trimmed;
    if trimmed > 0 {
        format!(
            "so many pairs waited that the {trimmed} worst were given up, so completeness cannot be claimed"
        )
    } else {
        "some pairs were too large to keep, so completeness cannot be claimed".to_owned()
    }
}

const DIGEST: Duration = Duration::from_millis(200);
