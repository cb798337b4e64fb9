//! Search by propositional satisfiability.
//!
//! For one vector of sizes, "this cell has that value" is a propositional variable, and the laws
//! become clauses ([`plan`] says how, [`encode`] writes them). The approach is that of MACE with
//! the refinements of Claessen & Sörensson (MODEL 2003: Paradox); what differs is that subterms
//! have tables of their own over the variables that occur in them, so that a law costs what its
//! largest subterm costs and not a power of the sizes for every symbol in it. The solver learns
//! from failures, which the direct search does not, and pays for it with memory.

mod encode;
mod least;
mod plan;
mod solve;

use super::equation::{Equation, Step};
use super::limits::{Limits, StopReason};
use super::search::grid::Grid;
use super::search::sizes::Sizes;
use super::search::{GivenUp, Outcome};
use super::signature::{Problem, Shape};
use super::tables::Counterexample;
use plan::Plan;
use solve::{Answer, Clauses};
use std::sync::Arc;

/// A search for a counterexample by a SAT solver, which can be stopped and continued.
///
/// It finds and rules out the same as [`Search`](super::Search), at different cost.
pub struct SatSearch {
    problem: Arc<Problem>,
    sizes: Sizes,
    /// The vectors of sizes that are being searched in turn, smallest first.
    open: Vec<Attempt>,
    ruled_out: Vec<Vec<u32>>,
    given_up: Vec<(Vec<u32>, GivenUp)>,
    round: u32,
}

/// One vector of sizes.
struct Attempt {
    sizes: Vec<u32>,
    /// The last round in which it had its turn.
    round: u32,
    /// The solver with what it has learned, unless its memory was needed.
    clauses: Option<Box<Clauses>>,
}

/// How one turn of one vector of sizes ended.
enum Turn {
    Found(Box<Counterexample>),
    None,
    TooLarge,
    Unsettled,
}

/// How many conflicts one turn may meet in the first round; each round allows twice as many.
const FIRST_CONFLICTS: u64 = 2000;

impl SatSearch {
    /// A search through all sizes up to this total over all sorts.
    pub fn new(problem: Arc<Problem>, largest_total: u32) -> Self {
        let sizes = Sizes::new(&problem, largest_total);
        SatSearch {
            problem,
            sizes,
            open: Vec::new(),
            ruled_out: Vec::new(),
            given_up: Vec::new(),
            round: 1,
        }
    }

    /// Has it been seen to help, beside the direct search, with problems like this one?
    ///
    /// That is so where there are several sorts or symbols of three arguments or more, and where
    /// a law says that a term whose arguments do not show a variable has the variable's value:
    /// in finite algebras something is one-to-one then, such as the pair of two orthogonal
    /// operations, which the direct search sees only as single cells.
    pub fn suits(problem: &Problem) -> bool {
        let wide = |(used, shape): (bool, &Shape)| used && shape.arguments.len() > 2;
        let mut symbols = problem.used().into_iter().zip(problem.signature.symbols());
        problem.signature.sorts() > 1
            || symbols.any(wide)
            || problem.laws.iter().any(recovers_a_variable)
    }

    /// Gives back the memory of the solvers; what has been ruled out stays known.
    pub fn release(&mut self) {
        for attempt in &mut self.open {
            attempt.clauses = None;
        }
    }

    /// The sizes at which there is no counterexample, in the order in which that was found out.
    pub fn ruled_out(&self) -> &[Vec<u32>] {
        &self.ruled_out
    }

    /// All sizes with at most this many elements over all sorts are ruled out.
    pub fn ruled_out_total(&self) -> u32 {
        let open = self.open.iter().map(|attempt| &attempt.sizes);
        let missed = open.chain(self.given_up.iter().map(|(sizes, _)| sizes));
        let missed = missed.map(|sizes| total(sizes));
        let least = missed.chain([self.sizes.next_total()]).min();
        least.unwrap_or(1).saturating_sub(1)
    }

    /// The sizes that were given up.
    pub fn given_up(&self) -> &[(Vec<u32>, GivenUp)] {
        &self.given_up
    }

    /// Searches until something is found, all sizes are done, or the limits end it.
    ///
    /// In each round the sizes that are still open, and some further ones, have a turn each, with
    /// a number of conflicts that grows with the rounds. The solvers of the open sizes are kept
    /// from turn to turn and from run to run, as long as all together stay within `limits.bytes`.
    pub fn run(&mut self, limits: &mut Limits) -> Outcome {
        loop {
            if let Err(reason) = limits.look() {
                return Outcome::Stopped(reason);
            }
            let Some(mut attempt) = self.next_attempt() else {
                return Outcome::Exhausted;
            };
            match self.turn(&mut attempt, limits) {
                Ok(Turn::Found(mut example)) => {
                    attempt.clauses = None;
                    self.put_back(attempt);
                    example.smallest = example.algebra.total() <= self.ruled_out_total() + 1;
                    return Outcome::Found(example);
                }
                Ok(Turn::None) => self.ruled_out.push(attempt.sizes),
                Ok(Turn::TooLarge) => self.given_up.push((attempt.sizes, GivenUp::Memory)),
                Ok(Turn::Unsettled) => {
                    attempt.round = self.round;
                    self.put_back(attempt);
                }
                Err(reason) => {
                    self.put_back(attempt);
                    return Outcome::Stopped(reason);
                }
            }
        }
    }

    /// The smallest sizes that have not had their turn in this round.
    fn next_attempt(&mut self) -> Option<Attempt> {
        loop {
            let due = |attempt: &Attempt| attempt.round < self.round;
            if let Some(place) = self.open.iter().position(due) {
                return Some(self.open.remove(place));
            }
            let reach = match self.open.first() {
                Some(first) => total(&first.sizes) + self.round,
                None => u32::MAX,
            };
            if self.sizes.next_total() <= reach
                && let Some(sizes) = self.sizes.next()
            {
                return Some(Attempt {
                    sizes,
                    round: 0,
                    clauses: None,
                });
            }
            if self.open.is_empty() {
                return None;
            }
            self.round += 1;
        }
    }

    /// Keeps the open sizes in order.
    fn put_back(&mut self, attempt: Attempt) {
        let key = |sizes: &[u32]| (total(sizes), sizes.to_vec());
        let own = key(&attempt.sizes);
        let place = self.open.partition_point(|other| key(&other.sizes) < own);
        self.open.insert(place, attempt);
    }

    fn turn(&mut self, attempt: &mut Attempt, limits: &mut Limits) -> Result<Turn, StopReason> {
        let problem = self.problem.clone();
        let Some(grid) = Grid::new(&problem, &attempt.sizes, limits.bytes) else {
            return Ok(Turn::TooLarge);
        };
        let Some(plan) = Plan::new(&grid, limits.bytes) else {
            return Ok(Turn::TooLarge);
        };
        let mut clauses = match attempt.clauses.take() {
            Some(clauses) => clauses,
            None => {
                self.make_room(plan.bytes, limits.bytes);
                Box::new(encode::encode(&grid, &plan, limits)?)
            }
        };
        if clauses.bytes() > limits.bytes {
            return Ok(Turn::TooLarge);
        }
        let doublings = (self.round - 1).min(40);
        let answer = clauses.solve(FIRST_CONFLICTS << doublings, limits);
        let turn = match answer {
            Ok(Answer::None) => return Ok(Turn::None),
            Ok(Answer::Model) => match solve::read(&grid, &plan, &clauses, limits) {
                Ok(Some(example)) => return Ok(Turn::Found(Box::new(example))),
                Ok(None) => {
                    debug_assert!(false, "a model of the clauses is no counterexample");
                    return Ok(Turn::TooLarge);
                }
                Err(reason) => Err(reason),
            },
            Ok(Answer::Unsettled) => Ok(Turn::Unsettled),
            Err(reason) => Err(reason),
        };
        attempt.clauses = Some(clauses);
        turn
    }

    /// Drops solvers, those of the largest sizes first, until so much memory is free.
    fn make_room(&mut self, needed: usize, bytes: usize) {
        let held = |attempt: &Attempt| attempt.clauses.as_ref().map_or(0, |held| held.bytes());
        let mut all: usize = self.open.iter().map(held).sum();
        for attempt in self.open.iter_mut().rev() {
            if all + needed <= bytes {
                return;
            }
            all -= held(attempt);
            attempt.clauses = None;
        }
    }
}

/// Is one side a variable that the other side contains, but not as an argument of its root?
fn recovers_a_variable(law: &Equation) -> bool {
    let (low, high) = (law.left().min(law.right()), law.left().max(law.right()));
    let variables = law.variables().len();
    if low >= variables || high < variables {
        return false;
    }
    let uses = |step: &Step| law.arguments(*step).contains(&(low as u32));
    let root = law.steps()[high - variables];
    !uses(&root) && law.steps().iter().any(uses)
}

fn total(sizes: &[u32]) -> u32 {
    sizes.iter().sum()
}
