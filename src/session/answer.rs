//! Answers.

use crate::proof::{Evidence, Outcome};
use crate::rewrite::Stopped;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::Duration;

/// What was found out about a question. There is no fourth.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Verdict {
    /// The two sides are equal in every model of the laws.
    Equal,
    /// They are not.
    NotEqual,
    /// Neither was shown.
    Undecided,
}

impl Verdict {
    /// As it is printed.
    pub fn text(self) -> &'static str {
        match self {
            Verdict::Equal => "equal",
            Verdict::NotEqual => "not equal",
            Verdict::Undecided => "undecided",
        }
    }
}

/// The rung of the ladder that settled a question.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum By {
    /// Both sides were known, with the same normal form.
    Table,
    /// The normal forms by the rules as they stood are the same.
    NormalForms,
    /// The rules are complete, and the normal forms differ.
    Complete,
    /// The sides differ in an algebra that was known.
    KnownAlgebra,
    /// The search for an algebra found one in which the sides differ.
    Algebra,
    /// The search for a proof found one.
    Proof,
}

impl By {
    /// As it is printed.
    pub fn text(self) -> &'static str {
        match self {
            By::Table => "table",
            By::NormalForms => "normal forms",
            By::Complete => "complete",
            By::KnownAlgebra => "known algebra",
            By::Algebra => "algebra",
            By::Proof => "proof",
        }
    }
}

/// How far a search got that settled nothing.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Frontier {
    /// Active rules.
    pub rules: usize,
    /// Pairs formed.
    pub pairs: u64,
    /// Pairs that still wait.
    pub waiting: usize,
    /// Orders that were tried.
    pub orders: usize,
    /// If algebras were searched: none with at most so many elements tells the sides apart.
    pub ruled_out: Option<u32>,
    /// Were some sizes given up because they need too much memory?
    pub given_up: bool,
    /// Why it ended; nothing if no pair was left.
    pub stopped: Option<Stopped>,
    /// What else there is to say about the end.
    pub remark: Option<String>,
    /// What to try next, as lines to type.
    pub next: Vec<String>,
}

/// The algebra in which the two sides of a question differ.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct FoundAlgebra {
    /// Its number, as in `A2`.
    pub number: u32,
    /// Are all algebras with fewer elements ruled out?
    pub smallest: bool,
}

/// A fault of this program: evidence that the checker rejected.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ProgramFault {
    /// Where in the evidence.
    pub place: String,
    /// What is wrong there.
    pub reason: String,
}

/// An answer to an equation.
#[derive(Clone, Debug)]
pub struct Answer {
    /// Its number in the session, from 1.
    pub number: u32,
    /// The question as it reads when printed, `s = t`.
    pub question: String,
    /// What was found out.
    pub verdict: Verdict,
    /// How it was settled.
    pub by: Option<By>,
    /// The values that were found for the unknowns, by name, printed; empty for other questions.
    pub values: Vec<(String, String)>,
    /// The evidence, accepted by the checker.
    pub evidence: Option<Evidence>,
    /// For how long it took, checking included.
    pub elapsed: Duration,
    /// For how long the check took.
    pub checking: Duration,
    /// How far the search got, if it settled nothing.
    pub frontier: Option<Frontier>,
    /// The normal forms of both sides where they differ, printed.
    pub normal: Option<[String; 2]>,
    /// The algebra, if one settled it; its tables are in the evidence.
    pub algebra: Option<FoundAlgebra>,
    /// Set when the evidence was rejected: then the verdict is undecided.
    pub fault: Option<(ProgramFault, Evidence)>,
    /// Have the laws changed since?
    pub outdated: bool,
    /// The laws that it was given under, as text.
    pub laws: Arc<str>,
}

impl Answer {
    /// Takes what the checker said of the evidence for a verdict; only what it accepted settles
    /// the question. Returns what stands in the way otherwise.
    pub(super) fn judged(
        &mut self,
        outcome: Outcome,
        evidence: Evidence,
        (verdict, by): (Verdict, By),
        stop: &AtomicBool,
    ) -> Option<String> {
        let remark = match outcome {
            Outcome::Accepted => {
                self.fault = None;
                self.verdict = verdict;
                self.by = Some(by);
                self.evidence = Some(evidence);
                return None;
            }
            Outcome::TooCostly if stop.load(Ordering::Relaxed) => {
                "evidence was found; checking it was interrupted"
            }
            Outcome::TooCostly => "evidence was found, but it is too costly to check",
            Outcome::Rejected { place, reason } => {
                self.fault = Some((ProgramFault { place, reason }, evidence));
                "the checker rejected the evidence: a fault of this program"
            }
        };
        Some(remark.to_owned())
    }

    /// A question that is not settled.
    pub(super) fn open(number: u32, question: String, laws: Arc<str>) -> Answer {
        Answer {
            number,
            question,
            verdict: Verdict::Undecided,
            by: None,
            values: Vec::new(),
            evidence: None,
            elapsed: Duration::ZERO,
            checking: Duration::ZERO,
            frontier: None,
            normal: None,
            algebra: None,
            fault: None,
            outdated: false,
            laws,
        }
    }
}

/// A term's normal form.
#[derive(Clone, Debug)]
pub struct NormalForm {
    /// The normal form, printed.
    pub text: String,
    /// The term, printed.
    pub term: String,
    /// How many steps lead there, as far as they were counted.
    pub steps: Option<usize>,
    /// For how long it took.
    pub elapsed: Duration,
    /// Are the rules complete, so that the normal form is the same for all equal terms?
    pub complete: bool,
    /// Set when rewriting was stopped; `text` is then the term itself.
    pub stopped: Option<Stopped>,
    /// Has the checker accepted the proof that the term equals it? Where rewriting took very many
    /// steps, none is written.
    pub checked: bool,
    /// Set when the checker rejected the proof; `text` is then the term itself.
    pub fault: Option<(ProgramFault, Evidence)>,
}

/// How a completion went.
#[derive(Clone, Debug)]
pub struct Completion {
    /// Is the rule set complete, and accepted as such by the checker?
    pub complete: bool,
    /// Are some equations not oriented, so that it is complete on ground terms?
    pub ordered: bool,
    /// Active rules.
    pub rules: usize,
    /// Of these, oriented.
    pub oriented: usize,
    /// Pairs formed by the engine that is shown.
    pub pairs: u64,
    /// Pairs that wait.
    pub waiting: usize,
    /// For how long it took, checking included.
    pub elapsed: Duration,
    /// The order, as a line to type.
    pub order: String,
    /// Why this order, as a sentence.
    pub why: String,
    /// How many orders were tried.
    pub orders: usize,
    /// Why it ended; nothing if no pair was left.
    pub stopped: Option<Stopped>,
    /// A sentence on what stands between this and a complete set, if anything does.
    pub remark: Option<String>,
    /// The rule set as the checker accepted it, if it is complete.
    pub evidence: Option<Evidence>,
    /// Set when the checker rejected the rule set.
    pub fault: Option<(ProgramFault, Evidence)>,
}
