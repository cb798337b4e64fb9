//! Questions with unknowns.

use super::algebras::{self, Hunt};
use super::ask::CHECK_LIMIT;
use super::control::{Control, Work};
use super::extension::Extension;
use super::naming::naming;
use super::runner::Compared;
use super::sheet::Sheet;
use super::shorten::shorten;
use super::subject::is_about_find;
use super::witness;
use super::workers::{Ended, Workers};
use super::{Answer, By, FoundAlgebra, Frontier, Session, SessionFault, Verdict};
use crate::algebra::Counterexample;
use crate::language::{Diagnostic, Find, parse_find, quote_symbol};
use crate::proof::{self, Evidence};
use crate::rewrite::{Limits, Stopped};
use crate::theory::Claim;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

/// What the two searches came to.
struct Found {
    /// The evidence, and what settled the question.
    evidence: Option<(By, Evidence)>,
    algebra: Option<FoundAlgebra>,
    ended: Ended,
    ruled_out: u32,
    given_up: bool,
    rules: usize,
    pairs: u64,
    waiting: usize,
    orders: usize,
    remark: Option<String>,
}

impl Session {
    /// Reads `x y: s = t` at `from`, and says where it ends.
    pub fn parse_find(&mut self, text: &str, from: usize) -> Result<(Find, usize), Diagnostic> {
        parse_find(&mut self.theory, "typed", text, from, self.it)
    }

    /// Looks for values of the unknowns for which the two sides are equal, with a proof, and for a
    /// finite algebra in which the sides differ for all values, side by side, for at most `budget`.
    ///
    /// The answer is kept: *equal* with the values, *not equal*, or *undecided*. Its evidence has
    /// been accepted by the checker.
    pub fn find(
        &mut self,
        find: &Find,
        budget: Duration,
        control: &mut Control,
    ) -> Result<&Answer, SessionFault> {
        let begun = Instant::now();
        let mut answer = Answer::open(
            self.next_answer(),
            self.find_text(find),
            self.law_text.clone(),
        );
        self.algebras.catch_up(&self.theory, self.lineage);
        let goal = Extension::new(&self.theory, (find.left, find.right), &find.unknowns);
        let mut remark = Some("there is no room for the symbols that the search needs".to_owned());
        let mut found = None;
        if let Ok(goal) = goal {
            let mut work = Work::new(control, "looking for values", Some(budget));
            let mut searched = self.look_for_values(find, &goal, &mut work)?;
            let evidence = searched.evidence.take();
            answer.algebra = searched.algebra.take();
            remark = searched.remark.take();
            if let Some((by, evidence)) = evidence {
                remark = self.judge_find(find, by, evidence, &mut answer, &control.stop);
            }
            found = Some(searched);
        }
        if answer.verdict == Verdict::Undecided {
            answer.algebra = None;
            let interrupted = control.stop.load(Ordering::Relaxed);
            answer.frontier = Some(self.frontier_of_find(find, budget, interrupted, found, remark));
        }
        answer.elapsed = begun.elapsed();
        self.answers.push(answer);
        Ok(self.answers.last().expect("it was just pushed"))
    }

    /// The question of a claim, if it has unknowns.
    pub(super) fn find_of(&self, claim: &Claim) -> Option<Find> {
        let (unknowns, left, right) = (claim.unknowns.clone(), claim.left, claim.right);
        (!unknowns.is_empty()).then_some(Find {
            unknowns,
            left,
            right,
        })
    }

    /// A question with unknowns as it is typed.
    pub(super) fn find_text(&self, find: &Find) -> String {
        let variables = self.theory.signature.variables();
        let names = find.unknowns.iter();
        let names = names.map(|unknown| quote_symbol(&variables[*unknown as usize].name));
        format!(
            "find {}: {}",
            names.collect::<Vec<_>>().join(" "),
            self.equation_text(find.left, "=", find.right)
        )
    }

    /// Searches for a proof on this thread and for an algebra on another; the first to succeed
    /// ends both.
    fn look_for_values(
        &mut self,
        find: &Find,
        goal: &Extension,
        work: &mut Work,
    ) -> Result<Found, SessionFault> {
        let mut workers = Workers::default();
        workers.set_arrows(self.workers.arrows());
        workers.catch_up(&goal.theory, 0)?;
        let hunt = Hunt::new(&goal.theory, goal.question);
        let halt = Arc::new(AtomicBool::new(false));
        let caught_one = Arc::new(AtomicBool::new(false));
        let mut limits = work.algebra_limits(halt.clone());
        limits.share_from(Instant::now() + super::ask::ALGEBRAS_FIRST);
        let (ended, caught) = std::thread::scope(|scope| {
            let done = caught_one.clone();
            let hunter = scope.spawn(move || {
                let caught = hunt.run(algebras::LARGEST, &mut limits);
                done.store(caught.found.is_some(), Ordering::Relaxed);
                caught
            });
            work.set_elsewhere(Some(caught_one.clone()));
            let ended = workers.run(&goal.theory, Some(goal.question), work);
            work.set_elsewhere(None);
            // Rules that are complete without an answer are no evidence; an algebra may be.
            let settled = matches!(ended, Ok(Ended::Met(_)) | Err(_));
            while !settled && !hunter.is_finished() && !work.is_over() {
                work.tell_waiting();
                std::thread::sleep(Duration::from_millis(2));
            }
            halt.store(true, Ordering::Relaxed);
            (ended, hunter.join())
        });
        let ended = ended?;
        let mut found = Found::new(ended, &workers);
        // A search that panicked has found nothing.
        if let Ok(mut caught) = caught {
            // An element of the sort of the verdict is none of the theory.
            found.ruled_out = caught.ruled_out.saturating_sub(2);
            found.given_up = caught.given_up;
            if let Some(example) = caught.found.take() {
                self.take_algebra(find, goal, &example, &mut found);
            }
        }
        if let Ended::Met(place) | Ended::Complete(place) = ended
            && found.evidence.is_none()
        {
            self.take_values(find, goal, &mut workers, place, &work.stop(), &mut found);
        }
        Ok(found)
    }

    /// The proof of an instance, from the engine in which true and false met.
    fn take_values(
        &self,
        find: &Find,
        goal: &Extension,
        workers: &mut Workers,
        place: usize,
        stop: &Arc<AtomicBool>,
        found: &mut Found,
    ) {
        let runner = workers.get(place);
        let asked = runner.ask(&goal.theory, goal.question.0, goal.question.1);
        let mut limits = Limits::new(stop.clone());
        let proof = match runner.compare(&asked, &mut limits) {
            Ok(Compared::Same { proof, .. }) => proof,
            Ok(Compared::Different(_)) => {
                let remark = "the rules are complete and give no values, so there are none; no \
                              finite algebra shows it";
                found.remark = Some(remark.to_owned());
                return;
            }
            Err(_) => return,
        };
        let proof =
            proof.and_then(|proof| witness::instance(&self.theory, goal, &find.unknowns, *proof));
        match proof {
            Some(proof) => {
                let evidence = Evidence::Proof(shorten(proof));
                found.evidence = Some((By::Proof, evidence));
            }
            None => {
                let remark = "there are values, but the proof would be too large to write down";
                found.remark = Some(remark.to_owned());
            }
        }
    }

    /// The part of an algebra that the theory knows, in which the sides differ for all values.
    fn take_algebra(
        &mut self,
        find: &Find,
        goal: &Extension,
        example: &Counterexample,
        found: &mut Found,
    ) {
        let question = (find.left, find.right);
        let Some(part) = algebras::part(&self.theory, question, &goal.fixed, example) else {
            return;
        };
        let kept = self.algebras.keep(&part, &self.find_text(find));
        found.algebra = Some(FoundAlgebra {
            number: kept.number,
            smallest: part.smallest,
        });
        let mut evidence = algebras::evidence(&self.theory, question, &part);
        let naming = naming(&self.theory);
        let names = find.unknowns.iter();
        let names = names.map(|unknown| naming.variables[*unknown as usize].0.as_str());
        let unknowns: Vec<_> = names.map(|name| evidence.terms.name(name)).collect();
        evidence
            .claim
            .with
            .retain(|(name, _)| !unknowns.contains(name));
        evidence.claim.unknowns = unknowns;
        evidence.claim.values = None;
        found.evidence = Some((By::Algebra, Evidence::Algebra(evidence)));
    }

    /// Has the evidence checked; only then the answer has a verdict. Returns what stands in the
    /// way otherwise.
    fn judge_find(
        &self,
        find: &Find,
        by: By,
        evidence: Evidence,
        answer: &mut Answer,
        stop: &Arc<AtomicBool>,
    ) -> Option<String> {
        let begun = Instant::now();
        let outcome = match is_about_find(&self.theory, &evidence, find) {
            Ok(()) => proof::check_as_written(&evidence, CHECK_LIMIT, stop.clone()),
            Err(reason) => proof::Outcome::Rejected {
                place: "laws and claim".to_owned(),
                reason,
            },
        };
        answer.checking = begun.elapsed();
        let verdict = match by {
            By::Proof => Verdict::Equal,
            _ => Verdict::NotEqual,
        };
        let remark = answer.judged(outcome, evidence, (verdict, by), stop);
        answer.values = match &answer.evidence {
            Some(evidence) => self.values(evidence),
            None => Vec::new(),
        };
        remark
    }

    /// The values of the unknowns as text.
    fn values(&self, evidence: &Evidence) -> Vec<(String, String)> {
        let Evidence::Proof(proof) = evidence else {
            return Vec::new();
        };
        let naming = naming(&self.theory);
        let mut sheet = Sheet::new(&self.theory, &naming, &proof.terms);
        let witness = proof.claim.witness.iter();
        let text = witness.map(|(name, value)| {
            let name = quote_symbol(proof.terms.text(*name));
            (name, sheet.text(*value))
        });
        text.collect()
    }

    fn frontier_of_find(
        &self,
        find: &Find,
        budget: Duration,
        interrupted: bool,
        found: Option<Found>,
        remark: Option<String>,
    ) -> Frontier {
        let longer = (budget.as_secs() * 10).max(60);
        let text = self.find_text(find);
        let ended = found.as_ref().map(|found| found.ended);
        let stopped = match ended {
            _ if interrupted => Some(Stopped::Interrupted),
            Some(Ended::Stopped(stopped)) => Some(stopped),
            Some(Ended::Met(_) | Ended::Exhausted) | None => None,
            Some(Ended::Complete(_)) => Some(Stopped::Time),
        };
        let count = |of: fn(&Found) -> usize| found.as_ref().map_or(0, of);
        Frontier {
            rules: count(|found| found.rules),
            pairs: found.as_ref().map_or(0, |found| found.pairs),
            waiting: count(|found| found.waiting),
            orders: count(|found| found.orders),
            ruled_out: found.as_ref().map(|found| found.ruled_out),
            given_up: found.as_ref().is_some_and(|found| found.given_up),
            stopped,
            remark,
            next: if text.len() < 80 {
                vec![format!("{text} within {longer}s")]
            } else {
                Vec::new()
            },
        }
    }
}

impl Found {
    fn new(ended: Ended, workers: &Workers) -> Found {
        let best = workers.best_ref().map(|runner| &runner.engine);
        Found {
            evidence: None,
            algebra: None,
            ended,
            ruled_out: 0,
            given_up: false,
            rules: best.map_or(0, |engine| engine.system.active()),
            pairs: workers.formed(),
            waiting: best.map_or(0, |engine| engine.waiting()),
            orders: workers.tried(),
            remark: None,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::session::Library;

    fn answered(question: &str) -> (Session, Find, Evidence) {
        let opened = Session::open("group", Library::default());
        let mut session = opened.unwrap_or_else(|fault| panic!("{fault:?}")).session;
        session.declare("variable w v").expect("new variables");
        let (find, _) = session.parse_find(question, 0).expect("a question");
        let mut control = Control {
            stop: Arc::default(),
            watch: &mut |_| (),
        };
        let answer = session.find(&find, Duration::from_secs(20), &mut control);
        let evidence = answer
            .expect("an order")
            .evidence
            .clone()
            .expect("evidence");
        assert_eq!(is_about_find(&session.theory, &evidence, &find), Ok(()));
        (session, find, evidence)
    }

    #[test]
    fn values_must_be_those_of_the_question() {
        let (mut session, find, evidence) = answered("w v: x * w = y * v");
        let Evidence::Proof(proof) = evidence else {
            panic!("a proof is the evidence");
        };
        let refused = |proof: &proof::Proof, find: &Find, session: &Session| {
            let evidence = Evidence::Proof(proof.clone());
            assert!(is_about_find(&session.theory, &evidence, find).is_err());
        };
        let mut other = proof.clone();
        other.claim.witness.pop();
        refused(&other, &find, &session);
        let mut other = proof.clone();
        other.claim.witness[0].1 = other.claim.left;
        refused(&other, &find, &session);
        let mut other = proof.clone();
        other.claim.witness[0].0 = other.terms.name("z");
        refused(&other, &find, &session);
        let mut other = proof.clone();
        let twice = other.claim.witness[0];
        other.claim.witness.push(twice);
        refused(&other, &find, &session);
        let mut other = proof.clone();
        std::mem::swap(&mut other.claim.left, &mut other.claim.right);
        refused(&other, &find, &session);
        // The same proof is none of another question.
        let (another, _) = session
            .parse_find("w v: w * w = y * v", 0)
            .expect("a question");
        refused(&proof, &another, &session);
        let (another, _) = session
            .parse_find("w: x * w = y * v", 0)
            .expect("a question");
        refused(&proof, &another, &session);
    }

    #[test]
    fn an_algebra_must_be_about_all_values_of_the_unknowns() {
        let (_, _, evidence) = answered("w: w * w = x");
        let (session, find, _) = answered("w: w * w = x");
        let Evidence::Algebra(algebra) = evidence else {
            panic!("an algebra is the evidence");
        };
        let mut other = algebra.clone();
        other.claim.unknowns.clear();
        let evidence = Evidence::Algebra(other);
        assert!(is_about_find(&session.theory, &evidence, &find).is_err());
        let mut other = algebra.clone();
        let x = other.terms.name("x");
        other.claim.unknowns.push(x);
        let evidence = Evidence::Algebra(other);
        assert!(is_about_find(&session.theory, &evidence, &find).is_err());
    }
}
