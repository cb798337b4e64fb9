//! Small algebras made by formula, tried before any search.

use super::affine::{Affine, Family, Forms, Plan};
use super::equation::Equation;
use super::evaluate::Evaluator;
use super::limits::{Limits, StopReason};
use super::magmas;
use super::ring::rings;
use super::shrink::shrink;
use super::signature::{Problem, Signature};
use super::tables::{Algebra, Counterexample};
use std::ops::ControlFlow;

/// How a look through the pool ended.
#[derive(Clone, Debug)]
pub enum PoolOutcome {
    /// One of its algebras refutes the claim.
    Refuted(Box<Counterexample>),
    /// None does.
    None,
    /// The look was stopped; it can be repeated.
    Stopped(StopReason),
}

/// The algebras of the pool in which given laws hold.
///
/// For one binary operation: all algebras of two and of three elements, up to renaming. For every
/// signature: operations ax + by + c over the integers modulo 2 to 5, then without c over those
/// modulo 6 to 11 and some further rings. Which of them obey the laws is found out when it is
/// first asked for, and kept for the claims to come.
pub struct Pool {
    /// The laws; the claim is that of the last question.
    problem: Problem,
    plan: Plan,
    /// Which symbols occur in a law or in a claim so far; the others mean nothing in what is kept.
    used: Vec<bool>,
    /// Is there only one symbol, and is it binary?
    binary: bool,
    kept: Vec<Model>,
    /// The number of the first family that has not been gone through.
    next: usize,
    /// Were there too many to keep? Then the later families are gone through every time.
    overflown: bool,
    evaluator: Evaluator,
    forms: Forms,
}

enum Model {
    /// All smaller ones have been tried before.
    Small(Algebra),
    Affine(Affine),
}

/// How many algebras are kept at most.
const MOST_KEPT: usize = 10_000;

/// How many elementary steps are spent on one ring at most: a few milliseconds. One binary
/// operation needs far less; with many symbols the pool is a guess, and search is better.
const MOST_STEPS: u64 = 500_000;

/// How many steps the test of one law in one small table may take. As sizes are then left out
/// upward from some size, what is found in a smaller table is still the smallest.
const LONGEST_TEST: u64 = 1_000_000;

/// Two families of small tables, then the rings.
const SMALL_FAMILIES: usize = 2;

impl Pool {
    /// The pool for these laws.
    pub fn new(signature: Signature, laws: Vec<Equation>) -> Self {
        let binary = match signature.symbols() {
            [only] => signature.sorts() == 1 && only.arguments.len() == 2,
            _ => false,
        };
        let plan = Plan::new(&signature, &laws);
        let problem = Problem {
            claim: laws.first().cloned().unwrap_or_else(Equation::trivial),
            signature,
            laws,
        };
        Pool {
            plan,
            used: problem.used(),
            problem,
            binary,
            kept: Vec::new(),
            next: 0,
            overflown: false,
            evaluator: Evaluator::default(),
            forms: Forms::default(),
        }
    }

    /// How many algebras are known to obey the laws so far.
    pub fn known(&self) -> usize {
        self.kept.len()
    }

    /// Looks for an algebra that refutes the claim, cheap ones first.
    ///
    /// What is found is cut down to the part that the claim speaks of. It is called smallest only
    /// where all smaller algebras have been tried.
    pub fn refute(&mut self, claim: &Equation, limits: &mut Limits) -> PoolOutcome {
        self.problem.claim.clone_from(claim);
        if claim.symbols().any(|symbol| !self.used[symbol.index()]) {
            for symbol in claim.symbols() {
                self.used[symbol.index()] = true;
            }
            self.kept.clear();
            self.next = 0;
            self.overflown = false;
        }
        match self.look(limits) {
            Ok(Some(found)) => PoolOutcome::Refuted(Box::new(shrink(&self.problem, &found))),
            Ok(None) => PoolOutcome::None,
            Err(reason) => PoolOutcome::Stopped(reason),
        }
    }

    fn look(&mut self, limits: &mut Limits) -> Result<Option<Counterexample>, StopReason> {
        for model in &self.kept {
            limits.spend(self.problem.claim.registers() as u64)?;
            let found = refute(
                model,
                &self.problem,
                &mut self.evaluator,
                &mut self.forms,
                limits,
            )?;
            if found.is_some() {
                return Ok(found);
            }
        }
        let mut family = self.next;
        while family < SMALL_FAMILIES + rings().len() {
            let before = self.kept.len();
            let overflown = self.overflown;
            let result = if family < SMALL_FAMILIES {
                self.small(family as u8 + 2, limits)
            } else {
                self.affine(family - SMALL_FAMILIES, limits)
            };
            if !matches!(result, Ok(None)) {
                // It will be gone through again from its beginning.
                self.kept.truncate(before);
                self.overflown = overflown;
                return result;
            }
            family += 1;
            if self.overflown {
                self.kept.truncate(before);
            } else {
                self.next = family;
            }
        }
        Ok(None)
    }

    /// All tables of this size.
    fn small(
        &mut self,
        size: u8,
        limits: &mut Limits,
    ) -> Result<Option<Counterexample>, StopReason> {
        if !self.binary {
            return Ok(None);
        }
        let problem = &self.problem;
        let mut registers = Vec::new();
        // Testing a table is not interrupted, so it must not take long.
        let long = |law: &Equation| {
            let assignments = u64::from(size).saturating_pow(law.variables().len() as u32);
            assignments.saturating_mul(law.registers() as u64) > LONGEST_TEST
        };
        if problem.laws.iter().any(long) {
            return Ok(None);
        }
        for table in magmas::all(size) {
            let cost: usize = problem.laws.iter().map(Equation::registers).sum();
            limits.spend(4 * cost as u64)?;
            let mut laws = problem.laws.iter();
            if !laws.all(|law| magmas::holds(table, size, law, &mut registers)) {
                continue;
            }
            let values = magmas::values(table, size);
            let algebra = Algebra::new(&problem.signature, vec![u32::from(size)], vec![values]);
            let Ok(algebra) = algebra else { continue };
            let model = Model::Small(algebra);
            let found = refute(
                &model,
                problem,
                &mut self.evaluator,
                &mut self.forms,
                limits,
            )?;
            if found.is_some() {
                return Ok(found);
            }
            self.kept.push(model);
        }
        Ok(None)
    }

    /// All affine maps over a ring.
    fn affine(
        &mut self,
        ring: usize,
        limits: &mut Limits,
    ) -> Result<Option<Counterexample>, StopReason> {
        let family = Family {
            ring,
            signature: &self.problem.signature,
            laws: &self.problem.laws,
            used: &self.used,
            plan: &self.plan,
            most: MOST_STEPS,
        };
        let mut found = None;
        let (kept, overflown) = (&mut self.kept, &mut self.overflown);
        let problem = &self.problem;
        let _ = family.each(&mut self.forms, limits, |affine, forms| {
            found = refute_affine(&affine, problem, forms);
            if found.is_some() {
                return ControlFlow::Break(());
            }
            if kept.len() < MOST_KEPT {
                kept.push(Model::Affine(affine));
            } else {
                *overflown = true;
            }
            ControlFlow::Continue(())
        })?;
        Ok(found)
    }
}

fn refute(
    model: &Model,
    problem: &Problem,
    evaluator: &mut Evaluator,
    forms: &mut Forms,
    limits: &mut Limits,
) -> Result<Option<Counterexample>, StopReason> {
    match model {
        Model::Small(algebra) => {
            let found = evaluator.refute_within(algebra, &problem.claim, limits)?;
            Ok(found.map(|found| Counterexample {
                algebra: algebra.clone(),
                assignment: found.assignment,
                values: found.values,
                smallest: true,
            }))
        }
        Model::Affine(affine) => Ok(refute_affine(affine, problem, forms)),
    }
}

fn refute_affine(affine: &Affine, problem: &Problem, forms: &mut Forms) -> Option<Counterexample> {
    let assignment = affine.refute(&problem.claim, forms)?;
    let algebra = affine.algebra(&problem.signature)?;
    let values = algebra.evaluate(&problem.claim, &assignment);
    // With one element of each sort everything is equal.
    let smallest = algebra.total() as usize == problem.signature.sorts() + 1;
    Some(Counterexample {
        algebra,
        assignment,
        values,
        smallest,
    })
}
