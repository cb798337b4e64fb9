//! The ladder: a question goes from the cheapest rung to the dearest.

use super::algebras;
use super::control::{Control, Work};
use super::runner::Compared;
use super::sheet::Sheet;
use super::subject::is_about;
use super::workers::Ended;
use super::{Answer, By, FoundAlgebra, Frontier, Session, SessionFault, Verdict};
use crate::algebra::Counterexample;
use crate::proof::{self, Evidence, WorkLimit};
use crate::rewrite::{Limits, Stopped};
use crate::term::TermId;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

/// How much checking one answer's evidence may take, reading it from a file included: what is
/// allowed to whoever checks the file.
pub(super) const CHECK_LIMIT: WorkLimit = WorkLimit::DEFAULT;

/// For how long rules are made before algebras are searched for as well.
const HEAD_START: Duration = Duration::from_millis(25);
/// For how long the search for an algebra has a core for itself: most that are found at all are
/// found by then.
pub(super) const ALGEBRAS_FIRST: Duration = Duration::from_secs(2);
/// A theory that has formed more pairs than this without being complete is not easy.
const EASY: u64 = 10_000;

/// What a rung has shown, before its evidence is checked.
enum Shown {
    Equal(By, Option<Evidence>),
    NotEqual(By, Option<Evidence>),
    Nothing(Option<Ended>),
}

impl Shown {
    fn is_something(&self) -> bool {
        !matches!(self, Shown::Nothing(None))
    }
}

/// How a question is to be settled.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Means {
    /// By a proof or an algebra, whichever comes first.
    All,
    /// By the rules and the search for a proof.
    Proof,
    /// By an algebra with at most so many elements.
    Algebra(u32),
}

/// How far the search for an algebra got.
#[derive(Clone, Copy, Debug, Default)]
struct Reach {
    ruled_out: u32,
    exhausted: bool,
    given_up: bool,
}

/// What the searches side by side came to.
#[derive(Default)]
struct Searched {
    ended: Option<Ended>,
    reach: Option<Reach>,
    found: Option<Box<Counterexample>>,
}

impl Session {
    /// Climbs the ladder with an equation between two terms of the theory. If neither the rules as
    /// they stand nor a known algebra settle it, a proof and an algebra are searched for side by
    /// side, for at most `budget`.
    ///
    /// The answer is kept; its evidence has been accepted by the checker.
    pub fn ask(
        &mut self,
        left: TermId,
        right: TermId,
        budget: Duration,
        control: &mut Control,
    ) -> Result<&Answer, SessionFault> {
        self.settle(left, right, Means::All, Some(budget), control)
    }

    /// Looks for a proof only.
    pub fn prove(
        &mut self,
        left: TermId,
        right: TermId,
        budget: Duration,
        control: &mut Control,
    ) -> Result<&Answer, SessionFault> {
        self.settle(left, right, Means::Proof, Some(budget), control)
    }

    /// Looks for a finite algebra only, with at most so many elements over all sorts, without end
    /// if there is no budget.
    pub fn separate(
        &mut self,
        left: TermId,
        right: TermId,
        most: u32,
        budget: Option<Duration>,
        control: &mut Control,
    ) -> Result<&Answer, SessionFault> {
        self.settle(left, right, Means::Algebra(most), budget, control)
    }

    fn settle(
        &mut self,
        left: TermId,
        right: TermId,
        means: Means,
        budget: Option<Duration>,
        control: &mut Control,
    ) -> Result<&Answer, SessionFault> {
        let begun = Instant::now();
        let question = (left, right);
        let mut answer = Answer::open(
            self.next_answer(),
            self.equation_text(left, "=", right),
            self.law_text.clone(),
        );
        self.algebras.catch_up(&self.theory, self.lineage);
        if !matches!(means, Means::Algebra(_)) {
            self.workers.catch_up(&self.theory, self.lineage)?;
        }
        let means = match means {
            Means::All if self.distrusted => Means::Algebra(algebras::LARGEST),
            means => means,
        };
        let (shown, mut reach) = self.climb(question, means, budget, &mut answer, control)?;
        let by_rules = matches!(shown, Shown::NotEqual(By::Complete, _));
        let mut remark = self.judge(shown, question, &mut answer, &control.stop);
        self.distrusted |= by_rules && answer.fault.is_some();
        if by_rules && answer.verdict == Verdict::Undecided && means == Means::All {
            // The rules are complete as far as the engine can tell, but the checker could not be
            // convinced; an algebra may still settle the question.
            let left = budget.map(|budget| budget.saturating_sub(begun.elapsed()));
            let means = Means::Algebra(algebras::LARGEST);
            let second = self.climb(question, means, left, &mut answer, control)?;
            reach = second.1;
            if let Shown::NotEqual(..) = second.0 {
                remark = self.judge(second.0, question, &mut answer, &control.stop);
            }
        }
        if answer.by == Some(By::Complete) && answer.verdict == Verdict::NotEqual {
            answer.normal = self.normal_texts(answer.evidence.as_ref());
        }
        if answer.verdict == Verdict::Undecided {
            answer.algebra = None;
            let interrupted = control.stop.load(Ordering::Relaxed);
            let frontier = self.frontier(question, means, budget, interrupted, reach, remark);
            answer.frontier = Some(frontier);
        }
        answer.elapsed = begun.elapsed();
        self.answers.push(answer);
        Ok(self.answers.last().expect("it was just pushed"))
    }

    fn climb(
        &mut self,
        question: (TermId, TermId),
        means: Means,
        budget: Option<Duration>,
        answer: &mut Answer,
        control: &mut Control,
    ) -> Result<(Shown, Option<Reach>), SessionFault> {
        let formed = self.workers.formed();
        let doing = match means {
            Means::Algebra(_) => "looking for an algebra",
            Means::Proof => "looking for a proof",
            Means::All => "looking for a proof or an algebra",
        };
        let mut work = Work::new(control, doing, budget).formed_before(formed);
        // The rules that there are cost nothing, even where only an algebra is asked for.
        let shown = self.by_rules(question.0, question.1, &mut work);
        if matches!(shown, Shown::Equal(..))
            || !matches!(means, Means::Algebra(_)) && shown.is_something()
        {
            return Ok((shown, None));
        }
        if means != Means::Proof
            && let Some(shown) = self.by_known_algebra(question, means, answer, &work)
        {
            return Ok((shown, None));
        }
        let Searched {
            ended,
            reach,
            found,
        } = self.search(question, means, &mut work)?;
        if let Some(found) = found {
            let kept = self.algebras.keep(&found, &answer.question);
            answer.algebra = Some(FoundAlgebra {
                number: kept.number,
                smallest: found.smallest,
            });
            let evidence = Evidence::Algebra(algebras::evidence(&self.theory, question, &found));
            return Ok((Shown::NotEqual(By::Algebra, Some(evidence)), reach));
        }
        let stop = work.stop();
        let shown = match ended {
            Some(ended) => self.by_search(question.0, question.1, ended, &stop),
            None => Shown::Nothing(None),
        };
        Ok((shown, reach))
    }

    /// A known algebra in which the sides differ.
    fn by_known_algebra(
        &mut self,
        question: (TermId, TermId),
        means: Means,
        answer: &mut Answer,
        work: &Work,
    ) -> Option<Shown> {
        let mut limits = work.algebra_limits(work.stop());
        let (kept, found) = self.algebras.refute(&self.theory, question, &mut limits)?;
        if let Means::Algebra(most) = means
            && found.algebra.total() > most
        {
            return None;
        }
        answer.algebra = Some(FoundAlgebra {
            number: kept.number,
            smallest: false,
        });
        let evidence = Evidence::Algebra(algebras::evidence(&self.theory, question, &found));
        Some(Shown::NotEqual(By::KnownAlgebra, Some(evidence)))
    }

    /// Searches for a proof on this thread and for an algebra on another; the first to succeed
    /// ends both.
    fn search(
        &mut self,
        question: (TermId, TermId),
        means: Means,
        work: &mut Work,
    ) -> Result<Searched, SessionFault> {
        let largest = match means {
            Means::Algebra(most) => most,
            _ => algebras::LARGEST,
        };
        let by_rules = |ended| Searched {
            ended: Some(ended),
            ..Searched::default()
        };
        if !matches!(means, Means::Algebra(_)) && self.workers.formed() < EASY {
            // What easy theories decide by their rules is not left to chance.
            let most = work.budget().map_or(HEAD_START, |budget| budget / 8);
            work.set_pause(Some(Instant::now() + HEAD_START.min(most)));
            let ended = self.workers.run(&self.theory, Some(question), work);
            work.set_pause(None);
            let ended = ended?;
            if let Ended::Met(_) | Ended::Complete(_) = ended {
                return Ok(by_rules(ended));
            }
        }
        if means == Means::Proof {
            let ended = self.workers.run(&self.theory, Some(question), work)?;
            return Ok(by_rules(ended));
        }
        let hunt = self.algebras.hunt(&self.theory, question, largest);
        let halt = Arc::new(AtomicBool::new(false));
        let caught_one = Arc::new(AtomicBool::new(false));
        let mut limits = work.algebra_limits(halt.clone());
        if means == Means::All {
            limits.share_from(Instant::now() + ALGEBRAS_FIRST);
        }
        let (ended, caught) = std::thread::scope(|scope| {
            let done = caught_one.clone();
            let hunter = scope.spawn(move || {
                let caught = hunt.run(largest, &mut limits);
                done.store(caught.found.is_some(), Ordering::Relaxed);
                caught
            });
            let mut ended = None;
            if means == Means::All {
                work.set_elsewhere(Some(caught_one.clone()));
                ended = Some(self.workers.run(&self.theory, Some(question), work));
                work.set_elsewhere(None);
            }
            let settled = matches!(ended, Some(Ok(Ended::Met(_) | Ended::Complete(_)) | Err(_)));
            while !settled && !hunter.is_finished() && !work.is_over() {
                work.tell_waiting();
                std::thread::sleep(Duration::from_millis(2));
            }
            halt.store(true, Ordering::Relaxed);
            (ended.transpose(), hunter.join())
        });
        // A search that panicked has found nothing; the next one begins anew.
        let Ok(mut caught) = caught else {
            return Ok(Searched {
                ended: ended?,
                ..Searched::default()
            });
        };
        let reach = Reach {
            ruled_out: caught.ruled_out,
            exhausted: caught.exhausted,
            given_up: caught.given_up,
        };
        let found = caught.found.take();
        self.algebras.return_from(caught);
        Ok(Searched {
            ended: ended?,
            reach: Some(reach),
            found,
        })
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
                Shown::Equal(by, proof.map(|proof| Evidence::Proof(*proof)))
            }
            Ok(Compared::Different(normal)) if runner.engine.is_complete() => {
                let set = runner.complete_set(Some((&asked, normal)));
                Shown::NotEqual(By::Complete, set.map(Evidence::Complete))
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
                Shown::Equal(by, proof.map(|proof| Evidence::Proof(*proof)))
            }
            Ok(Compared::Different(normal)) if by == By::Complete => {
                let set = runner.complete_set(Some((&asked, normal)));
                Shown::NotEqual(By::Complete, set.map(Evidence::Complete))
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
            Shown::NotEqual(by, evidence) => (Verdict::NotEqual, by, evidence),
            Shown::Nothing(Some(Ended::Exhausted)) => {
                let remark = "some pairs were too large to keep, so the rules are not complete";
                return Some(remark.to_owned());
            }
            Shown::Nothing(_) => return None,
        };
        let Some(evidence) = evidence else {
            return Some("the evidence would be too large to write down and check".to_owned());
        };
        let begun = Instant::now();
        let outcome = self.verify(&evidence, Some(question), stop);
        answer.checking += begun.elapsed();
        answer.judged(outcome, evidence, (verdict, by), stop)
    }

    /// Is the evidence about the theory and the question, and accepted by the checker?
    pub(super) fn verify(
        &self,
        evidence: &Evidence,
        question: Option<(TermId, TermId)>,
        stop: &Arc<AtomicBool>,
    ) -> proof::Outcome {
        match is_about(&self.theory, evidence, question) {
            Ok(()) => proof::check_as_written(evidence, CHECK_LIMIT, stop.clone()),
            Err(reason) => proof::Outcome::Rejected {
                place: "laws and claim".to_owned(),
                reason,
            },
        }
    }

    fn frontier(
        &self,
        (left, right): (TermId, TermId),
        means: Means,
        budget: Option<Duration>,
        interrupted: bool,
        reach: Option<Reach>,
        remark: Option<String>,
    ) -> Frontier {
        let best = self
            .workers
            .best_ref()
            .filter(|_| !matches!(means, Means::Algebra(_)));
        let (rules, waiting, complete) = best.map_or((0, 0, false), |runner| {
            let engine = &runner.engine;
            (
                engine.system.active(),
                engine.waiting(),
                engine.is_complete(),
            )
        });
        let over = complete || reach.is_some_and(|reach| reach.exhausted && best.is_none());
        let stopped = match (interrupted, over) {
            (true, _) => Some(Stopped::Interrupted),
            (false, true) => None,
            (false, false) => Some(Stopped::Time),
        };
        Frontier {
            rules,
            pairs: best.map_or(0, |_| self.workers.formed()),
            waiting,
            orders: best.map_or(0, |_| self.workers.tried()),
            ruled_out: reach.map(|reach| reach.ruled_out),
            given_up: reach.is_some_and(|reach| reach.given_up),
            stopped,
            remark,
            next: self.advice(
                self.equation_text(left, "=", right),
                means,
                budget,
                complete,
                reach,
            ),
        }
    }

    /// Lines that may get further.
    fn advice(
        &self,
        question: String,
        means: Means,
        budget: Option<Duration>,
        complete: bool,
        reach: Option<Reach>,
    ) -> Vec<String> {
        let longer = (budget.map_or(6, |budget| budget.as_secs()) * 10).max(60);
        let short = question.len() < 60;
        let mut next = Vec::new();
        if !complete && !matches!(means, Means::Algebra(_)) {
            next.push(format!("complete within {longer}s"));
        }
        if short && !complete && means != Means::Proof {
            next.push(format!("prove {question} within {longer}s"));
        }
        if short && let Some(Reach { ruled_out, .. }) = reach {
            let most = (ruled_out + 3).max(8);
            next.push(format!("separate {question}, at most {most}"));
        } else if short && means == Means::Proof {
            next.push(format!("separate {question}, at most 8"));
        }
        next
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
