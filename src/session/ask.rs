//! The ladder: a question goes from the cheapest rung to the dearest.

use super::control::{Control, Work};
use super::runner::Compared;
use super::sheet::Sheet;
use super::subject::is_about;
use super::workers::Ended;
use super::{Answer, By, Frontier, ProgramFault, Session, SessionFault, Verdict};
use crate::proof::{self, Evidence, WorkLimit};
use crate::rewrite::{Limits, Stopped};
use crate::term::TermId;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

/// How much checking one answer's evidence may take; see [`WorkLimit`].
const CHECK_LIMIT: WorkLimit = WorkLimit(200_000_000);

/// What a rung has shown, before its evidence is checked.
enum Shown {
    Equal(By, Option<Evidence>),
    NotEqual(Option<Evidence>),
    Nothing(Option<Ended>),
}

impl Session {
    /// Climbs the ladder with an equation between two terms of the theory, searching for a proof
    /// for at most `budget` if the rules as they stand do not settle it.
    ///
    /// The answer is kept; its evidence has been accepted by the checker.
    pub fn ask(
        &mut self,
        left: TermId,
        right: TermId,
        budget: Duration,
        control: &mut Control,
    ) -> Result<&Answer, SessionFault> {
        let begun = Instant::now();
        self.workers.catch_up(&self.theory, self.lineage)?;
        let formed = self.workers.formed();
        let mut work =
            Work::new(control, "looking for a proof", Some(budget)).formed_before(formed);
        let mut shown = self.by_rules(left, right, &mut work);
        if let Shown::Nothing(None) = shown {
            let ended = self
                .workers
                .run(&self.theory, Some((left, right)), &mut work)?;
            shown = self.by_search(left, right, ended, &control.stop);
        }
        let number = self.next_answer();
        let question = self.equation_text(left, "=", right);
        let mut answer = Answer {
            number,
            question,
            verdict: Verdict::Undecided,
            by: None,
            evidence: None,
            elapsed: Duration::ZERO,
            checking: Duration::ZERO,
            frontier: None,
            normal: None,
            fault: None,
            outdated: false,
        };
        let check_begun = Instant::now();
        let remark = self.judge(shown, (left, right), &mut answer, &control.stop);
        answer.checking = check_begun.elapsed();
        let interrupted = control.stop.load(Ordering::Relaxed);
        if answer.verdict == Verdict::NotEqual {
            answer.normal = self.normal_texts(answer.evidence.as_ref());
        }
        if answer.verdict == Verdict::Undecided {
            answer.frontier = Some(self.frontier(left, right, budget, interrupted, remark));
        }
        answer.elapsed = begun.elapsed();
        self.answers.push(answer);
        Ok(self.answers.last().expect("it was just pushed"))
    }

    /// The rungs that need no search: normal forms by the rules as they stand.
    fn by_rules(&mut self, left: TermId, right: TermId, work: &mut Work) -> Shown {
        let Some(runner) = self.workers.best() else {
            return Shown::Nothing(None);
        };
        let asked = runner.ask(&self.theory, left, right);
        // Half of the time is left for the search, if rewriting does not end.
        let mut limits = work.limits(work.budget().map(|budget| budget / 2));
        match runner.compare(&asked, &mut limits) {
            Ok(Compared::Same { known, proof }) => {
                let by = if known { By::Table } else { By::NormalForms };
                Shown::Equal(by, proof.map(Evidence::Proof))
            }
            Ok(Compared::Different(normal)) if runner.engine.is_complete() => {
                let set = runner.complete_set(Some((&asked, normal)));
                Shown::NotEqual(set.map(Evidence::Complete))
            }
            _ => Shown::Nothing(None),
        }
    }

    fn by_search(
        &mut self,
        left: TermId,
        right: TermId,
        ended: Ended,
        stop: &Arc<AtomicBool>,
    ) -> Shown {
        let (place, by) = match ended {
            Ended::Met(place) => (place, By::Proof),
            Ended::Complete(place) => (place, By::Complete),
            _ => return Shown::Nothing(Some(ended)),
        };
        let runner = self.workers.get(place);
        let asked = runner.ask(&self.theory, left, right);
        // The rules are complete, or the terms have met already: this takes no search.
        let mut limits = Limits::new(stop.clone());
        match runner.compare(&asked, &mut limits) {
            Ok(Compared::Same { proof, .. }) => {
                let by = if by == By::Complete {
                    By::NormalForms
                } else {
                    by
                };
                Shown::Equal(by, proof.map(Evidence::Proof))
            }
            Ok(Compared::Different(normal)) if by == By::Complete => {
                let set = runner.complete_set(Some((&asked, normal)));
                Shown::NotEqual(set.map(Evidence::Complete))
            }
            _ => Shown::Nothing(Some(ended)),
        }
    }

    /// Has the evidence checked; only then the answer has a verdict. Returns what stands in the
    /// way otherwise.
    fn judge(
        &self,
        shown: Shown,
        question: (TermId, TermId),
        answer: &mut Answer,
        stop: &Arc<AtomicBool>,
    ) -> Option<String> {
        let (verdict, by, evidence) = match shown {
            Shown::Equal(by, evidence) => (Verdict::Equal, by, evidence),
            Shown::NotEqual(evidence) => (Verdict::NotEqual, By::Complete, evidence),
            Shown::Nothing(Some(Ended::Exhausted)) => {
                let remark = "some pairs were too large to keep, so the rules are not complete";
                return Some(remark.to_owned());
            }
            Shown::Nothing(_) => return None,
        };
        let Some(evidence) = evidence else {
            return Some("the evidence would be too large to write down and check".to_owned());
        };
        match self.verify(&evidence, Some(question), stop) {
            proof::Outcome::Accepted => {
                answer.verdict = verdict;
                answer.by = Some(by);
                answer.evidence = Some(evidence);
                None
            }
            proof::Outcome::TooCostly if stop.load(Ordering::Relaxed) => {
                Some("evidence was found; checking it was interrupted".to_owned())
            }
            proof::Outcome::TooCostly => {
                Some("evidence was found, but it is too costly to check".to_owned())
            }
            proof::Outcome::Rejected { place, reason } => {
                answer.fault = Some((ProgramFault { place, reason }, evidence));
                Some("the checker rejected the evidence: a fault of this program".to_owned())
            }
        }
    }

    /// Is the evidence about the theory and the question, and accepted by the checker?
    pub(super) fn verify(
        &self,
        evidence: &Evidence,
        question: Option<(TermId, TermId)>,
        stop: &Arc<AtomicBool>,
    ) -> proof::Outcome {
        match is_about(&self.theory, evidence, question) {
            Ok(()) => proof::check_until(evidence, CHECK_LIMIT, stop.clone()),
            Err(reason) => proof::Outcome::Rejected {
                place: "laws and claim".to_owned(),
                reason,
            },
        }
    }

    fn frontier(
        &self,
        left: TermId,
        right: TermId,
        budget: Duration,
        interrupted: bool,
        remark: Option<String>,
    ) -> Frontier {
        let best = self.workers.best_ref();
        let (rules, waiting, complete) = best.map_or((0, 0, false), |runner| {
            let engine = &runner.engine;
            (
                engine.system.active(),
                engine.waiting(),
                engine.is_complete(),
            )
        });
        let stopped = match (interrupted, complete) {
            (true, _) => Some(Stopped::Interrupted),
            (false, true) => None,
            (false, false) => Some(Stopped::Time),
        };
        let longer = (budget.as_secs() * 10).max(60);
        let mut next = Vec::new();
        if !complete {
            next.push(format!("complete within {longer}s"));
            let question = self.equation_text(left, "=", right);
            if question.len() < 60 {
                next.push(format!("prove {question} within {longer}s"));
            }
        }
        Frontier {
            rules,
            pairs: self.workers.formed(),
            waiting,
            orders: self.workers.tried(),
            stopped,
            remark,
            next,
        }
    }

    fn normal_texts(&self, evidence: Option<&Evidence>) -> Option<[String; 2]> {
        let Some(Evidence::Complete(set)) = evidence else {
            return None;
        };
        let naming = &self.workers.best_ref()?.naming;
        let mut sheet = Sheet::new(&self.theory, naming, &set.terms);
        Some(set.claim.as_ref()?.normal.map(|term| sheet.text(term)))
    }
}
