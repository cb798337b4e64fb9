//! Deciding cells, backtracking, and reading off what was found.

use super::super::limits::{Limits, StopReason};
use super::super::tables::{Algebra, Counterexample};
use super::grid::{Block, Cell, Grid};
use super::propagate::{Examiner, Halt};
use super::state::{Conflict, OPEN, Point, State};

/// Which open cell is decided next. Each order settles problems that the other does not.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Order {
    /// One with the fewest values.
    SmallestDomain,
    /// One with the largest product of its failures so far and its watches, for each value.
    Weighted,
}

/// How one try at one vector of sizes ended.
#[derive(Debug)]
pub(super) enum Run {
    /// There is a counterexample of this size or smaller.
    Found(Box<Counterexample>),
    /// There is none of this size.
    None,
    /// The failures or steps that were allowed are used up.
    Unsettled,
    /// The size needs more memory than it may have.
    TooLarge,
}

/// A decision that is being tried.
struct Level {
    cell: Cell,
    /// The values that are struck from the cell when the decision has failed.
    refuted: u64,
    point: Point,
    /// How many elements had names before, and of which sort.
    named: (usize, u32),
}

/// The search tree for one vector of sizes.
///
/// The elements below `named[s]` of a sort s are those that decisions have used; the others are
/// interchangeable, so of these a decision tries one only (the least number heuristic, counting
/// decisions only: what propagation says about elements without a name it says about all of them
/// alike). Only cells whose arguments all have names are decided. When none of them is open, the
/// elements with names are closed under all operations: they are an algebra already, in which
/// the laws hold as far as they speak of them and the claim fails.
pub(super) struct Tree<'a> {
    grid: &'a Grid<'a>,
    state: State,
    examiner: Examiner,
    named: Vec<u32>,
    levels: Vec<Level>,
    /// The state after the first propagation.
    root: Point,
}

impl<'a> Tree<'a> {
    pub(super) fn new(grid: &'a Grid<'a>, failures: Vec<u32>) -> Self {
        let state = State::new(grid, failures);
        Tree {
            root: state.point(),
            state,
            examiner: Examiner::new(grid),
            named: vec![0; grid.sizes.len()],
            levels: Vec::new(),
            grid,
        }
    }

    pub(super) fn into_failures(self) -> Vec<u32> {
        self.state.failures
    }

    /// Propagates what holds without any decision. False if no algebra has these sizes.
    pub(super) fn begin(&mut self, limits: &mut Limits) -> Result<bool, StopReason> {
        let done = self
            .examiner
            .examine_all(self.grid, &mut self.state, limits);
        self.root = self.state.point();
        Ok(settled(done)?.is_ok())
    }

    /// Takes all decisions back, refuted ones too; failures are remembered.
    pub(super) fn restart(&mut self) {
        self.state.undo(self.root);
        self.levels.clear();
        self.named.fill(0);
    }

    /// Searches until the tree is exhausted or has failed this often.
    pub(super) fn run(
        &mut self,
        order: Order,
        failures: u64,
        limits: &mut Limits,
    ) -> Result<Run, StopReason> {
        let mut failed = 0;
        loop {
            let Some(cell) = self.choose(order) else {
                if self.name_more() {
                    continue;
                }
                return Ok(Run::Found(Box::new(self.found())));
            };
            limits.spend(self.grid.cells() as u64)?;
            let mut outcome = self.decide(cell, limits)?;
            while outcome.is_err() {
                failed += 1;
                let Some(level) = self.levels.pop() else {
                    return Ok(Run::None);
                };
                if failed > failures {
                    return Ok(Run::Unsettled);
                }
                outcome = self.refute(level, limits)?;
            }
        }
    }

    /// Gives a cell its least value, or the least without a name if no other is left.
    fn decide(
        &mut self,
        cell: Cell,
        limits: &mut Limits,
    ) -> Result<Result<(), Conflict>, StopReason> {
        let sort = self.sort(cell);
        let named = self.named[sort];
        let domain = self.state.domain[cell.index()];
        let value = domain.trailing_zeros();
        let fresh = value >= named;
        let refuted = if fresh { domain } else { 1 << value };
        self.levels.push(Level {
            cell,
            refuted,
            point: self.state.point(),
            named: (sort, named),
        });
        // The elements without a name are alike, so if the first of them is impossible, all are.
        if fresh && value > named {
            return Ok(Err(self.state.fail(cell)));
        }
        if fresh {
            self.named[sort] = named + 1;
        }
        if self.state.restrict(cell, 1 << value).is_err() {
            return Ok(Err(Conflict));
        }
        settled(self.examiner.propagate(self.grid, &mut self.state, limits))
    }

    /// Takes back a decision that failed and strikes what it refutes.
    fn refute(
        &mut self,
        level: Level,
        limits: &mut Limits,
    ) -> Result<Result<(), Conflict>, StopReason> {
        self.state.undo(level.point);
        self.named[level.named.0] = level.named.1;
        if self.state.restrict(level.cell, !level.refuted).is_err() {
            return Ok(Err(Conflict));
        }
        settled(self.examiner.propagate(self.grid, &mut self.state, limits))
    }

    fn block(&self, cell: Cell) -> (usize, &Block) {
        let blocks = &self.grid.blocks;
        // Blocks are never empty, so the bases rise strictly.
        let place = blocks.partition_point(|block| block.base <= cell.0) - 1;
        (place, &blocks[place])
    }

    fn sort(&self, cell: Cell) -> usize {
        self.block(cell).1.result.0 as usize
    }

    /// The open cell to decide, among those whose arguments have names.
    fn choose(&self, order: Order) -> Option<Cell> {
        let mut best = None;
        let mut best_score = f64::NEG_INFINITY;
        for block in self.grid.blocks.iter().filter(|block| block.used) {
            let named = self.named[block.result.0 as usize];
            each_inner(block, &self.named, |cell| {
                let place = cell.index();
                if self.state.value[place] != OPEN {
                    return;
                }
                let domain = self.state.domain[place];
                let known = domain & mask(named);
                let choices = known.count_ones() + u32::from(known != domain);
                let score = match order {
                    Order::SmallestDomain => {
                        let watchers = f64::from(self.state.watchers[place]);
                        -f64::from(choices) + watchers / (watchers + 1e6)
                    }
                    Order::Weighted => {
                        let failures = f64::from(self.state.failures[place]) + 1.0;
                        let watchers = f64::from(self.state.watchers[place]) + 1.0;
                        failures * watchers / f64::from(choices)
                    }
                };
                if score > best_score {
                    best_score = score;
                    best = Some(cell);
                }
            });
        }
        best
    }

    /// Where an element without a name is the value of a cell that counts, names it; gives a sort
    /// without any its first. Tells whether there was something to name.
    fn name_more(&mut self) -> bool {
        let mut least = self.named.clone();
        for block in &self.grid.blocks {
            let sort = block.result.0 as usize;
            each_inner(block, &self.named, |cell| {
                least[sort] = least[sort].max(u32::from(self.state.value[cell.index()]) + 1);
            });
        }
        if least == self.named {
            match least.iter().position(|&named| named == 0) {
                Some(sort) => least[sort] = 1,
                None => return false,
            }
        }
        // Names are not taken away again where nothing was decided: that only makes the search
        // distinguish more than it must.
        self.named = least;
        true
    }

    /// The algebra of the elements with names.
    fn found(&self) -> Counterexample {
        let signature = &self.grid.problem.signature;
        let value = |block: &Block| {
            let mut values = Vec::new();
            each_inner(block, &self.named, |cell| {
                values.push(self.state.value[cell.index()]);
            });
            values
        };
        let (symbols, variables) = self.grid.blocks.split_at(signature.symbols().len());
        let tables = symbols.iter().map(value).collect();
        let algebra = Algebra::new(signature, self.named.clone(), tables);
        let algebra = algebra.expect("cells hold elements with names, as name_more has made sure");
        let constant = |block: &Block| u32::from(self.state.value[block.base as usize]);
        let assignment: Vec<u32> = variables.iter().map(constant).collect();
        Counterexample {
            values: algebra.evaluate(&self.grid.problem.claim, &assignment),
            algebra,
            assignment,
            smallest: false,
        }
    }
}

/// Tells conflicts from being stopped.
fn settled(done: Result<(), Halt>) -> Result<Result<(), Conflict>, StopReason> {
    match done {
        Ok(()) => Ok(Ok(())),
        Err(Halt::Conflict) => Ok(Err(Conflict)),
        Err(Halt::Stopped(reason)) => Err(reason),
    }
}

fn mask(elements: u32) -> u64 {
    if elements >= 64 {
        u64::MAX
    } else {
        (1 << elements) - 1
    }
}

/// Calls `visit` with the cells whose arguments all have names, the last argument fastest.
fn each_inner(block: &Block, named: &[u32], mut visit: impl FnMut(Cell)) {
    let limit = |place: usize| named[block.arguments[place].0 as usize];
    match &*block.strides {
        [] => visit(Cell(block.base)),
        [_] => (0..limit(0)).for_each(|a| visit(Cell(block.base + a))),
        [stride, _] => {
            for a in 0..limit(0) {
                for b in 0..limit(1) {
                    visit(Cell(block.base + a * stride + b));
                }
            }
        }
        strides => each_of_many(block, strides, &limit, &mut visit),
    }
}

fn each_of_many(
    block: &Block,
    strides: &[u32],
    limit: &dyn Fn(usize) -> u32,
    visit: &mut dyn FnMut(Cell),
) {
    if (0..strides.len()).any(|place| limit(place) == 0) {
        return;
    }
    let mut values = vec![0; strides.len()];
    loop {
        let offset: u32 = values
            .iter()
            .zip(strides)
            .map(|(value, stride)| value * stride)
            .sum();
        visit(Cell(block.base + offset));
        let next = (0..values.len()).rev().find(|&place| {
            values[place] += 1;
            if values[place] == limit(place) {
                values[place] = 0;
            }
            values[place] != 0
        });
        if next.is_none() {
            return;
        }
    }
}
