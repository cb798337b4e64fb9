//! Direct search over the cells of the tables.
//!
//! Sizes are tried upward, by the number of elements of all sorts together. For one vector of
//! sizes, every cell of every table has a domain of values; the laws, under every assignment of
//! elements to their variables, and the claim, with its variables as fresh constants, cut the
//! domains; what is left open is decided cell by cell with backtracking. The general scheme is
//! that of finite model enumeration by cells (Zhang & Zhang, IJCAI 1995: SEM), with its least
//! number heuristic against symmetry. What differs is described in the parts.

pub(super) mod bijective;
mod decide;
pub(super) mod grid;
mod program;
mod propagate;
pub(super) mod sizes;
mod state;

use super::limits::{Limits, StopReason};
use super::signature::Problem;
use super::tables::Counterexample;
use decide::{Order, Run, Tree};
use grid::Grid;
use sizes::Sizes;
use std::sync::Arc;

/// Why sizes were given up, neither refuted nor ruled out.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum GivenUp {
    /// The tables and the instances of the laws need more memory than the limit allows.
    Memory,
}

impl std::fmt::Display for GivenUp {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            GivenUp::Memory => write!(f, "the instances of the laws need too much memory"),
        }
    }
}

/// How a search ended.
#[derive(Clone, Debug)]
pub enum Outcome {
    /// An algebra was found.
    Found(Box<Counterexample>),
    /// Every size up to the largest total that was asked for is ruled out or given up.
    Exhausted,
    /// The search was stopped; it can be continued.
    Stopped(StopReason),
}

/// A search for a counterexample, which can be stopped and continued.
pub struct Search {
    problem: Arc<Problem>,
    sizes: Sizes,
    /// The vectors of sizes that are being searched in turn, smallest first.
    open: Vec<Attempt>,
    ruled_out: Vec<Vec<u32>>,
    given_up: Vec<(Vec<u32>, GivenUp)>,
    round: u32,
    /// What has been found, while smaller sizes are still being looked at.
    best: Option<Best>,
}

struct Best {
    example: Box<Counterexample>,
    /// The round in which it was found.
    round: u32,
}

/// One vector of sizes.
struct Attempt {
    sizes: Vec<u32>,
    /// The last round in which it had its turn.
    round: u32,
    /// How often each cell's domain became empty, kept from one try to the next.
    failures: Vec<u32>,
}

/// How many failures one try may meet in the first round; each round allows three times as many.
const FIRST_FAILURES: u64 = 300;

/// How many elementary steps it may take, growing alike: a size with a great many instances of the
/// laws must not keep the search from the others.
const FIRST_STEPS: u64 = 3_000_000;

/// How many times more failures the weighted order may meet than the other: on lattices it is the
/// better one by far, on some problems with few failures the other is.
const WEIGHTED_SHARE: u64 = 8;

/// For how many rounds smaller sizes are looked at when something has been found.
const ROUNDS_FOR_SMALLER: u32 = 3;

impl Search {
    /// A search through all sizes up to this total over all sorts.
    pub fn new(problem: Arc<Problem>, largest_total: u32) -> Self {
        let sizes = Sizes::new(&problem, largest_total);
        Search {
            problem,
            sizes,
            open: Vec::new(),
            ruled_out: Vec::new(),
            given_up: Vec::new(),
            round: 1,
            best: None,
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
        let missed = missed.map(|sizes| sizes.iter().sum::<u32>());
        missed
            .chain([self.sizes.next_total()])
            .min()
            .unwrap_or(1)
            .saturating_sub(1)
    }

    /// The sizes that were given up.
    pub fn given_up(&self) -> &[(Vec<u32>, GivenUp)] {
        &self.given_up
    }

    /// Searches until something is found, all sizes are done, or the limits end it.
    ///
    /// In each round the sizes that are still open, and some further ones, are each tried with
    /// both cell orders, for a number of failures that grows with the rounds: a size that is hard
    /// to rule out does not keep the search from the next. When something is found, smaller sizes
    /// that are still open get a few rounds more.
    pub fn run(&mut self, limits: &mut Limits) -> Outcome {
        loop {
            if let Err(reason) = limits.look() {
                return self.stopped(reason);
            }
            let Some(mut attempt) = self.next_attempt() else {
                return match self.take_best() {
                    Some(found) => Outcome::Found(found),
                    None => Outcome::Exhausted,
                };
            };
            match attempt_once(&self.problem, &mut attempt, self.round, limits) {
                Ok(Run::Found(example)) => {
                    self.put_back(attempt);
                    let round = self.best.as_ref().map_or(self.round, |best| best.round);
                    self.best = Some(Best { example, round });
                }
                Ok(Run::None) => self.ruled_out.push(attempt.sizes),
                Ok(Run::TooLarge) => self.given_up.push((attempt.sizes, GivenUp::Memory)),
                Ok(Run::Unsettled) => {
                    attempt.round = self.round;
                    self.put_back(attempt);
                }
                Err(reason) => {
                    self.put_back(attempt);
                    return self.stopped(reason);
                }
            }
        }
    }

    fn stopped(&mut self, reason: StopReason) -> Outcome {
        match self.take_best() {
            Some(found) => Outcome::Found(found),
            None => Outcome::Stopped(reason),
        }
    }

    fn take_best(&mut self) -> Option<Box<Counterexample>> {
        let mut found = self.best.take()?.example;
        found.smallest = found.algebra.total() <= self.ruled_out_total() + 1;
        Some(found)
    }

    /// The smallest sizes that have not had their turn in this round; once something has been
    /// found, only smaller ones are of interest.
    fn next_attempt(&mut self) -> Option<Attempt> {
        let total = |sizes: &[u32]| sizes.iter().sum::<u32>();
        let below = match &self.best {
            Some(best) => best.example.algebra.total(),
            None => u32::MAX,
        };
        loop {
            let due =
                |attempt: &Attempt| attempt.round < self.round && total(&attempt.sizes) < below;
            if let Some(place) = self.open.iter().position(due) {
                return Some(self.open.remove(place));
            }
            let reach = match self.open.first() {
                Some(first) => total(&first.sizes) + 2 + self.round,
                None => u32::MAX,
            };
            let next = self.sizes.next_total();
            if next <= reach
                && next < below
                && let Some(sizes) = self.sizes.next()
            {
                return Some(Attempt {
                    sizes,
                    round: 0,
                    failures: Vec::new(),
                });
            }
            let more = |best: &Best| self.round < best.round + ROUNDS_FOR_SMALLER;
            if !self.best.as_ref().is_none_or(more)
                || !self
                    .open
                    .iter()
                    .any(|attempt| total(&attempt.sizes) < below)
            {
                return None;
            }
            self.round += 1;
        }
    }

    /// Keeps the open sizes in order.
    fn put_back(&mut self, attempt: Attempt) {
        let key = |sizes: &[u32]| (sizes.iter().sum::<u32>(), sizes.to_vec());
        let own = key(&attempt.sizes);
        let place = self.open.partition_point(|other| key(&other.sizes) < own);
        self.open.insert(place, attempt);
    }
}

/// Tries one vector of sizes with one cell order and then the other.
fn attempt_once(
    problem: &Problem,
    attempt: &mut Attempt,
    round: u32,
    limits: &mut Limits,
) -> Result<Run, StopReason> {
    let Some(grid) = Grid::new(problem, &attempt.sizes, limits.bytes) else {
        return Ok(Run::TooLarge);
    };
    attempt.failures.resize(grid.cells(), 0);
    let growth = 3u64.saturating_pow(round - 1);
    let mut tree = Tree::new(&grid, std::mem::take(&mut attempt.failures));
    limits.allow(Some(FIRST_STEPS.saturating_mul(growth)));
    let result = run_both(&mut tree, FIRST_FAILURES.saturating_mul(growth), limits);
    limits.allow(None);
    attempt.failures = tree.into_failures();
    match result {
        Err(StopReason::Steps) => Ok(Run::Unsettled),
        Err(StopReason::Memory) => Ok(Run::TooLarge),
        result => result,
    }
}

fn run_both(tree: &mut Tree<'_>, failures: u64, limits: &mut Limits) -> Result<Run, StopReason> {
    if !tree.begin(limits)? {
        return Ok(Run::None);
    }
    match tree.run(Order::SmallestDomain, failures / WEIGHTED_SHARE, limits)? {
        Run::Unsettled => {
            tree.restart();
            tree.run(Order::Weighted, failures, limits)
        }
        settled => Ok(settled),
    }
}
