//! The solver, and reading off what it found.

use super::super::evaluate::Evaluator;
use super::super::limits::{Limits, StopReason};
use super::super::search::grid::Grid;
use super::super::tables::{Algebra, Counterexample};
use super::plan::Plan;
use batsat::{Callbacks, ClauseKind, Lit, Solver, SolverInterface, SolverOpts, Var, lbool};
use std::cell::Cell;

/// What a solver answers.
pub(super) enum Answer {
    Model,
    None,
    /// The conflicts that were allowed are used up.
    Unsettled,
}

/// Ends a run of the solver.
struct Watch {
    limits: Limits,
    /// How many conflicts there may still be.
    conflicts: u64,
    /// How often the solver has asked since the clock was looked at.
    asked: Cell<u32>,
    /// Once it is to stop it stops, whatever the clock says a moment later.
    ended: Cell<bool>,
}

/// The solver asks at every decision; most take less than a microsecond.
const LOOK_EVERY: u32 = 32;

impl Callbacks for Watch {
    fn on_new_clause(&mut self, _clause: &[Lit], kind: ClauseKind) {
        if kind == ClauseKind::Learnt {
            self.conflicts = self.conflicts.saturating_sub(1);
        }
    }

    fn stop(&self) -> bool {
        if self.ended.get() {
            return true;
        }
        let asked = self.asked.get() + 1;
        self.asked.set(asked % LOOK_EVERY);
        let late = asked == LOOK_EVERY && self.limits.look().is_err();
        self.ended.set(late || self.conflicts == 0);
        self.ended.get()
    }
}

/// A solver with its clauses. Literals are numbers, true or false.
pub(super) struct Clauses {
    solver: Solver<Watch>,
    literals: u32,
    bytes: usize,
    clause: Vec<Lit>,
}

impl Clauses {
    /// No clauses, on so many literals. `bytes` is a bound on what is going to be added.
    pub(super) fn new(literals: u32, bytes: usize) -> Self {
        let watch = Watch {
            limits: Limits::none(),
            conflicts: u64::MAX,
            asked: Cell::new(0),
            ended: Cell::new(false),
        };
        let mut clauses = Clauses {
            solver: Solver::new(SolverOpts::default(), watch),
            literals: 0,
            bytes,
            clause: Vec::new(),
        };
        for _ in 0..literals {
            clauses.fresh();
        }
        clauses
    }

    /// A literal of its own.
    pub(super) fn fresh(&mut self) -> u32 {
        let variable = self.solver.new_var_default();
        debug_assert_eq!(variable.idx(), self.literals, "numbers are given in order");
        self.literals += 1;
        variable.idx()
    }

    /// How much memory it needs: the bound on the clauses, and what was learned, which the solver
    /// itself keeps to a share of them that grows slowly.
    pub(super) fn bytes(&self) -> usize {
        self.bytes
    }

    /// Begins a clause, one without literals.
    pub(super) fn begin(&mut self) -> &mut Self {
        self.clause.clear();
        self
    }

    /// Adds a literal to the clause.
    pub(super) fn holds(&mut self, literal: u32) -> &mut Self {
        self.clause
            .push(Lit::new(Var::unsafe_from_idx(literal), true));
        self
    }

    /// Adds the opposite of a literal to the clause.
    pub(super) fn fails(&mut self, literal: u32) -> &mut Self {
        self.clause
            .push(Lit::new(Var::unsafe_from_idx(literal), false));
        self
    }

    /// Adds the opposites of literals.
    pub(super) fn all_fail(&mut self, literals: impl Iterator<Item = u32>) -> &mut Self {
        literals.for_each(|literal| {
            self.fails(literal);
        });
        self
    }

    /// Hands the clause to the solver.
    pub(super) fn end(&mut self, limits: &mut Limits) -> Result<(), StopReason> {
        limits.spend(8 + self.clause.len() as u64)?;
        if self.solver.is_ok() {
            // Whether there is a contradiction already is asked again when it is solved.
            let _ = self.solver.add_clause_reuse(&mut self.clause);
        }
        Ok(())
    }

    /// Lets the solver go on for so many conflicts.
    pub(super) fn solve(&mut self, conflicts: u64, limits: &Limits) -> Result<Answer, StopReason> {
        *self.solver.cb_mut() = Watch {
            limits: limits.clone(),
            conflicts,
            asked: Cell::new(LOOK_EVERY - 1),
            ended: Cell::new(false),
        };
        let answer = self.solver.solve_limited(&[]);
        if answer == lbool::TRUE {
            Ok(Answer::Model)
        } else if answer == lbool::FALSE {
            Ok(Answer::None)
        } else {
            limits.look().map(|()| Answer::Unsettled)
        }
    }

    /// Does the literal hold in the model that was found?
    fn is_true(&self, literal: u32) -> bool {
        self.solver.value_var(Var::unsafe_from_idx(literal)) == lbool::TRUE
    }
}

/// The counterexample that the model describes, checked by evaluation: none if it is no
/// counterexample, which would be a fault of the clauses or of the solver.
pub(super) fn read(
    grid: &Grid<'_>,
    plan: &Plan<'_>,
    clauses: &Clauses,
    limits: &mut Limits,
) -> Result<Option<Counterexample>, StopReason> {
    let problem = grid.problem;
    let mut tables = Vec::with_capacity(grid.blocks.len());
    for (block, &first) in grid.blocks.iter().zip(&plan.first) {
        let size = grid.sizes[block.result.0 as usize];
        let value = |cell: u32| {
            let of_cell = |value: &u32| clauses.is_true(first + cell * size + value);
            (0..size).find(of_cell).unwrap_or(0) as u8
        };
        let cells = 0..block.cells;
        tables.push(if block.used {
            cells.map(value).collect()
        } else {
            vec![0; block.cells as usize]
        });
    }
    let constants = tables.split_off(problem.signature.symbols().len());
    let assignment: Vec<u32> = constants.iter().map(|cell| u32::from(cell[0])).collect();
    let Ok(algebra) = Algebra::new(&problem.signature, grid.sizes.clone(), tables) else {
        return Ok(None);
    };
    let mut evaluator = Evaluator::default();
    for law in &problem.laws {
        if evaluator.refute_within(&algebra, law, limits)?.is_some() {
            return Ok(None);
        }
    }
    let values = algebra.evaluate(&problem.claim, &assignment);
    Ok((values[0] != values[1]).then_some(Counterexample {
        algebra,
        assignment,
        values,
        smallest: false,
    }))
}
